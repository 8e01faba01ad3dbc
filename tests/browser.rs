//! The HTML report in a real browser: no error, no breach of its policy, sorting and filters that do what they say, readable without
//! scripts, on a narrow window and in the dark.
//!
//! Needs Chromium (`chromium` of Debian). Without it the tests pass with a word, or fail when ORBSIEVE_BROWSER=required, as in `.ci/run`.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use base64::Engine as _;
use serde_json::Value;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};
use std::time::{Duration, Instant};

/// A page that takes longer than this hangs.
const PATIENCE: Duration = Duration::from_secs(180);

const BEFORE: &str = include_str!("browser/before.js");
const AFTER: &str = include_str!("browser/after.js");

/// The browser's program, if the machine has one.
fn browser() -> Option<PathBuf> {
    let path = std::env::var_os("PATH").unwrap_or_default();
    let found = std::env::split_paths(&path)
        .flat_map(|folder| ["chromium", "chromium-browser"].map(|name| folder.join(name)))
        .find(|program| program.is_file());
    let required = std::env::var("ORBSIEVE_BROWSER").is_ok_and(|value| value == "required");
    assert!(found.is_some() || !required, "ORBSIEVE_BROWSER=required, but there is no chromium on PATH");
    if found.is_none() {
        eprintln!("no chromium on PATH: the page was not opened");
    }
    found
}

fn orbsieve(arguments: &[&str]) -> String {
    let output = Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(arguments)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

fn page(molecule: &str) -> String {
    orbsieve(&["label", &format!("tests/molecules/{molecule}"), "--format", "html", "--pictures", "1,1"])
}

/// The number that the page's policy lets scripts run by.
fn nonce(page: &str) -> &str {
    let (_, rest) =
        page.split_once("script-src 'nonce-").or_else(|| page.split_once("script-src &#39;nonce-")).unwrap();
    rest.split(|sign: char| !sign.is_ascii_alphanumeric()).next().unwrap()
}

/// A copy of the page with the driver's scripts, first and last.
fn driven(page: &str) -> String {
    let nonce = nonce(page);
    let script = |text: &str| format!("<script nonce=\"{nonce}\">{{{text}}}</script>");
    // Both scripts share the list of failures, so the first is not put in braces.
    let before = format!("<script nonce=\"{nonce}\">{BEFORE}</script>");
    let page = page.replacen("<title>", &format!("{before}<title>"), 1);
    let at = page.rfind("</body>").unwrap();
    format!("{}{}{}", &page[..at], script(AFTER), &page[at..])
}

/// Opens a page and gives back its document as it stands at the end, and the log.
fn open(program: &Path, page: &str, more: &[&str]) -> (String, String) {
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("report.html");
    std::fs::write(&file, page).unwrap();
    let (out, log) = (folder.path().join("dom"), folder.path().join("log"));
    let mut child = Command::new(program)
        .args(["--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run"])
        .args(["--disable-background-networking", "--disable-component-update", "--disable-sync"])
        .args(["--enable-logging=stderr", "--virtual-time-budget=10000", "--dump-dom"])
        .arg(format!("--user-data-dir={}", folder.path().join("profile").display()))
        .args(more)
        .arg(format!("file://{}", file.display()))
        .stdin(Stdio::null())
        .stdout(std::fs::File::create(&out).unwrap())
        .stderr(std::fs::File::create(&log).unwrap())
        .spawn()
        .unwrap();
    let start = Instant::now();
    let status = loop {
        if let Some(status) = child.try_wait().unwrap() {
            break status;
        }
        if start.elapsed() > PATIENCE {
            let _ = child.kill();
            let _ = child.wait();
            panic!("the browser did not end: {}", std::fs::read_to_string(&log).unwrap_or_default());
        }
        std::thread::sleep(Duration::from_millis(50));
    };
    let read = |path: &Path| String::from_utf8_lossy(&std::fs::read(path).unwrap()).into_owned();
    assert!(status.success(), "{}", read(&log));
    (read(&out), read(&log))
}

/// What the driver saw.
fn findings(dom: &str) -> Value {
    let (_, rest) = dom.split_once("id=\"findings\">").expect("the driver ran to its end");
    let text = rest.split('<').next().unwrap();
    let bytes = base64::engine::general_purpose::STANDARD.decode(text.trim()).unwrap();
    serde_json::from_slice(&bytes).unwrap()
}

/// No failure inside, no line of the console in the log.
fn clean(seen: &Value, log: &str) {
    assert_eq!(seen["failures"], serde_json::json!([]));
    let lines: Vec<&str> = log.lines().filter(|line| line.contains("CONSOLE")).collect();
    assert!(lines.is_empty(), "{lines:#?}");
}

fn texts(value: &Value) -> Vec<String> {
    value.as_array().unwrap().iter().map(|text| text.as_str().unwrap().to_owned()).collect()
}

fn number(text: &str) -> f64 {
    text.replace('−', "-").parse().unwrap()
}

#[test]
fn the_page_sorts_filters_and_stays_silent() {
    let Some(program) = browser() else { return };
    let page = page("scenario/lantern-3.molden");
    let (dom, log) = open(&program, &driven(&page), &["--window-size=1280,900"]);
    let seen = findings(&dom);
    clean(&seen, &log);
    let document: Value =
        serde_json::from_str(&orbsieve(&["label", "tests/molecules/scenario/lantern-3.molden", "--format", "json"]))
            .unwrap();
    let sets = document["sets"].as_array().unwrap();
    assert_eq!(seen["rows"], sets.len());
    // Energies and electrons in order of their numbers, not of their text, both ways; other columns give up their mark.
    let mut energies: Vec<f64> =
        sets.iter().map(|set| set["energy_hartree"].as_f64().unwrap() * 27.211_386_245_988).collect();
    energies.sort_by(f64::total_cmp);
    for column in ["Energy", "Electrons", "Label", "Orbitals"] {
        let sorted = &seen["sort"][column];
        assert_eq!(sorted["focused"], true, "{column}: its button takes the focus");
        assert_eq!(sorted["marked"], 1);
        assert_eq!((&sorted["up"]["state"], &sorted["down"]["state"]), (&"ascending".into(), &"descending".into()));
        let (up, mut down) = (texts(&sorted["up"]["values"]), texts(&sorted["down"]["values"]));
        assert_eq!(up.len(), sets.len());
        if column == "Energy" {
            for (shown, energy) in up.iter().zip(&energies) {
                assert!((number(shown) - energy).abs() < 6e-4, "{shown} {energy}");
            }
        }
        if column == "Electrons" {
            assert!(up.windows(2).all(|pair| number(&pair[0]) <= number(&pair[1])), "{up:?}");
        }
        // Equal entries keep their order, so only the values are turned round.
        down.reverse();
        assert_eq!(up, down, "{column}");
    }
    let numbers = |text: &str| text.split(|sign: char| !sign.is_ascii_digit()).next().unwrap().parse::<u32>().unwrap();
    let labels = texts(&seen["sort"]["Label"]["up"]["values"]);
    assert!(
        labels.windows(2).all(|pair| numbers(&pair[0]) <= numbers(&pair[1])),
        "numbers in labels count: {labels:?}"
    );
    // Filters: every row shown has the word, the count says how many.
    let total = sets.len();
    for (words, expected) in [
        ("", total),
        ("t2g", sets.iter().filter(|set| set["irrep"] == "T2g").count()),
        ("LUMO", 1),
        ("no such thing", 0),
    ] {
        let found = &seen["filter"][words];
        let shown = texts(&found["shown"]);
        assert_eq!(shown.len(), expected, "{words}: {shown:?}");
        assert!(shown.iter().all(|row| row.to_lowercase().contains(&words.to_lowercase())));
        assert_eq!(found["count"], format!("{expected} of {total} sets"));
        assert_eq!(found["hidden"], total - expected);
    }
    let cobalt = texts(&seen["filter"]["co 3d"]["shown"]);
    assert!(
        !cobalt.is_empty() && cobalt.len() < total && cobalt.iter().all(|row| row.contains("Co") && row.contains("3d"))
    );
    assert_eq!(seen["named"], true, "the filter has a label");
    assert_eq!(seen["first"], "#main", "the first thing the keyboard reaches skips to the answer");
    assert_eq!(seen["targets"], serde_json::json!([]), "every link leads to a place in the page");
    assert_eq!(seen["ids"], serde_json::json!([]), "no id twice");
    let images = seen["images"].as_array().unwrap();
    assert_eq!(images.len(), 5, "the HOMO has three partners, the LUMO two");
    for image in images {
        assert!(image["width"] == 360 && !image["alt"].as_str().unwrap().is_empty(), "{image}");
    }
}

#[test]
fn the_page_fits_a_narrow_window_and_can_be_read_in_light_and_dark() {
    let Some(program) = browser() else { return };
    let page = page("benzene_631g.molden");
    // 4.5 to 1 is what "Web Content Accessibility Guidelines 2.2", W3C (2023), 1.4.3 asks of text.
    for (scheme, dark) in
        [("--blink-settings=preferredColorScheme=1", false), ("--blink-settings=preferredColorScheme=0", true)]
    {
        let (dom, log) = open(&program, &driven(&page), &["--window-size=500,900", scheme]);
        let seen = findings(&dom);
        clean(&seen, &log);
        assert_eq!(seen["overflow"], 0, "nothing sticks out at the right");
        let paper = seen["paper"].as_f64().unwrap();
        assert_eq!(paper < 0.2, dark, "paper {paper}");
        for contrast in seen["contrast"].as_array().unwrap() {
            assert!(contrast.as_f64().unwrap() >= 4.5, "{:?}", seen["contrast"]);
        }
    }
}

#[test]
fn an_unrestricted_file_and_an_atom_open_without_errors() {
    let Some(program) = browser() else { return };
    for molecule in ["oxygen_triplet_631gs.molden", "neon_def2tzvp.molden", "broken_h4_square.molden"] {
        let (dom, log) = open(&program, &driven(&page(molecule)), &["--window-size=1280,900"]);
        // The driver asks for columns and words that any file has, besides those of the complex.
        clean(&findings(&dom), &log);
    }
}
