//! The files in `demo-outputs/` are what the program prints today: each command of `demo-outputs/commands.txt` is run
//! and compared, words to the letter and numbers to 1e-6 (the last digits hang on the processor). With `ORBSIEVE_BLESS=1` the files are written anew; read the difference before committing.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use base64::Engine as _;
use std::fmt::Write as _;
use std::path::Path;
use std::process::Command;

/// A page without what hangs on every last digit: pictures become their sizes, and the number made from the page goes.
fn comparable(text: &str) -> String {
    const PICTURE: &str = "data:image/png;base64,";
    let mut parts = text.split(PICTURE);
    let mut out = parts.next().unwrap_or_default().to_owned();
    for part in parts {
        let (picture, rest) = part.split_once('"').unwrap();
        let bytes = base64::engine::general_purpose::STANDARD.decode(picture).expect("pictures can be decoded");
        let reader = png::Decoder::new(std::io::Cursor::new(bytes)).read_info().expect("pictures can be opened");
        write!(out, "{} by {}\"{rest}", reader.info().width, reader.info().height).unwrap();
    }
    let nonce = out.split_once("script-src 'nonce-").map(|(_, rest)| rest.chars().take(64).collect::<String>());
    nonce.map_or(out.clone(), |nonce| out.replace(&nonce, ""))
}

/// Line by line the same words; numbers may differ by 1e-6 of the larger of themselves and one.
fn same(kept: &str, printed: &str) -> bool {
    const WORD_ENDS: [char; 13] = [' ', ',', ';', ':', '(', ')', '[', ']', '{', '}', '"', '<', '>'];
    let word = |kept: &str, printed: &str| match (kept.parse::<f64>(), printed.parse::<f64>()) {
        (Ok(a), Ok(b)) => (a - b).abs() <= 1e-6 * a.abs().max(1.0),
        _ => kept == printed,
    };
    let line = |(kept, printed): (&str, &str)| {
        kept.split(WORD_ENDS).count() == printed.split(WORD_ENDS).count()
            && kept.split(WORD_ENDS).zip(printed.split(WORD_ENDS)).all(|(kept, printed)| word(kept, printed))
    };
    kept.lines().count() == printed.lines().count() && kept.lines().zip(printed.lines()).all(line)
}

#[test]
fn demo_outputs_are_what_the_program_prints() {
    let root = Path::new(env!("CARGO_MANIFEST_DIR"));
    let folder = root.join("demo-outputs");
    let commands = std::fs::read_to_string(folder.join("commands.txt")).unwrap();
    let bless = std::env::var_os("ORBSIEVE_BLESS").is_some();
    let mut stale = Vec::new();
    for line in commands.lines().map(str::trim).filter(|line| !line.is_empty() && !line.starts_with('#')) {
        let (name, arguments) = line.split_once(": ").expect("commands.txt has lines `file: arguments`");
        let output = Command::new(env!("CARGO_BIN_EXE_orbsieve"))
            .args(arguments.split_whitespace())
            .current_dir(root)
            .output()
            .unwrap();
        let mut printed = output.stdout;
        if !output.stderr.is_empty() {
            printed.extend_from_slice(b"--- standard error ---\n");
            printed.extend_from_slice(&output.stderr);
        }
        let status = output.status.code().expect("a demo ends by itself");
        if status != 0 {
            printed.extend_from_slice(format!("--- exit status {status} ---\n").as_bytes());
        }
        let path = folder.join(name);
        if bless {
            std::fs::write(&path, &printed).unwrap();
        } else if !same(
            &comparable(&std::fs::read_to_string(&path).unwrap_or_default()),
            &comparable(&String::from_utf8(printed).unwrap()),
        ) {
            stale.push(name.to_owned());
        }
    }
    assert!(stale.is_empty(), "stale: {stale:?}; run with ORBSIEVE_BLESS=1 and read the difference");
}
