//! What a terminal gets and what a pipe gets: styles, ASCII, width, progress; completions and manual pages.
//!
//! Judge: taking the styles out must give the bytes of the pipe; a pseudo-terminal of `script` (util-linux), a shell's own
//! parser and a roff formatter where they are installed.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use std::process::{Command, Output};

const WATER: &str = "tests/molecules/water_631gs.molden";
const VARIABLES: [&str; 8] = ["NO_COLOR", "CLICOLOR", "CLICOLOR_FORCE", "LC_ALL", "LC_CTYPE", "LANG", "COLUMNS", "CI"];

fn run(arguments: &[&str], variables: &[(&str, &str)]) -> Output {
    let mut command = Command::new(env!("CARGO_BIN_EXE_orbsieve"));
    for name in VARIABLES {
        command.env_remove(name);
    }
    command.envs(variables.iter().copied()).args(arguments).current_dir(env!("CARGO_MANIFEST_DIR"));
    command.output().unwrap()
}

fn plain(bytes: &[u8]) -> String {
    anstream::adapter::strip_str(std::str::from_utf8(bytes).unwrap()).to_string()
}

fn is_there(program: &str) -> bool {
    Command::new(program).arg("--version").output().is_ok_and(|output| output.status.success())
}

/// Standard output and standard error of a run on a pseudo-terminal of 90 columns, with carriage returns taken out.
fn on_terminal(arguments: &str, variables: &[(&str, &str)]) -> Option<String> {
    shell_on_terminal(&format!("{} {arguments}", env!("CARGO_BIN_EXE_orbsieve")), variables)
}

fn shell_on_terminal(line: &str, variables: &[(&str, &str)]) -> Option<String> {
    if !is_there("script") {
        return None;
    }
    let log = tempfile::NamedTempFile::new().unwrap();
    let line = format!("stty cols 90 rows 40; {line}");
    let mut command = Command::new("script");
    for name in VARIABLES {
        command.env_remove(name);
    }
    command.env("TERM", "xterm").envs(variables.iter().copied());
    command.args(["--quiet", "--return", "--command", &line]).arg(log.path()).current_dir(env!("CARGO_MANIFEST_DIR"));
    let output = command.stdin(std::process::Stdio::null()).output().unwrap();
    Some(String::from_utf8(output.stdout).unwrap().replace('\r', ""))
}

#[test]
fn styles_can_be_forced_and_forbidden_and_never_change_a_word() {
    let runs: &[&[&str]] = &[
        &["label", "tests/molecules/scenario/lantern-3.molden"],
        &["label", "tests/molecules/oxygen_triplet_631gs.molden"],
        &["geometry", "tests/molecules/xyz/octahedron_shaken.xyz"],
        &["transitions", "tests/molecules/formaldehyde_631gs.molden"],
        &["audit", "tests/molecules/broken_h4_square.molden"],
        &["modes", "tests/molecules/psi4_modes_benzene.molden"],
        &["states", "Oh", "t2g^3 eg^1"],
        &["table", "D5d"],
        &["table", "O", "--double"],
        &["table", "Oh", "--transition", "t2g", "eg"],
    ];
    for arguments in runs {
        let piped = run(arguments, &[]).stdout;
        assert!(!piped.contains(&0x1b), "{arguments:?} has styles in a pipe");
        for (options, variables) in [(&["--color", "always"][..], &[][..]), (&[], &[("CLICOLOR_FORCE", "1")])] {
            let styled = run(&[*arguments, options].concat(), variables).stdout;
            assert!(styled.contains(&0x1b), "{arguments:?} {options:?} {variables:?} has no styles");
            assert_eq!(plain(&styled), String::from_utf8(piped.clone()).unwrap(), "{arguments:?}");
        }
        let never = run(&[*arguments, &["--color", "never"]].concat(), &[("CLICOLOR_FORCE", "1")]).stdout;
        assert_eq!(never, piped);
    }
}

#[test]
fn data_and_files_have_no_styles() {
    let scratch = tempfile::tempdir().unwrap();
    let target = scratch.path().join("report.txt");
    let name = target.to_str().unwrap();
    for options in [&["--format", "json"][..], &["--format", "csv"]] {
        let output = run(&[&["label", WATER, "--color", "always"], options].concat(), &[]);
        assert!(!output.stdout.contains(&0x1b), "{options:?}");
    }
    assert!(run(&["label", WATER, "--color", "always", "--output", name], &[]).status.success());
    assert_eq!(std::fs::read(&target).unwrap(), run(&["label", WATER], &[]).stdout);
    // Orbitals on standard output are a file too.
    let orbitals = run(&["purify", WATER, "--color", "always"], &[]);
    assert!(!orbitals.stdout.contains(&0x1b));
}

#[test]
fn findings_are_styled_where_standard_error_shows_styles() {
    let arguments = ["label", "tests/broken/coefficient_decimal_comma.molden"];
    let piped = run(&arguments, &[]).stderr;
    let styled = run(&[&arguments[..], &["--color", "always"]].concat(), &[]).stderr;
    assert!(!piped.contains(&0x1b) && styled.contains(&0x1b));
    assert_eq!(plain(&styled), String::from_utf8(piped).unwrap());
}

#[test]
fn a_terminal_gets_styles_within_its_width() {
    let Some(shown) = on_terminal(&format!("label {WATER}"), &[("LANG", "C.UTF-8")]) else { return };
    assert!(shown.contains("\u{1b}["), "{shown}");
    assert!(shown.contains("e⁻"));
    let words = |text: &str| text.split_whitespace().map(str::to_owned).collect::<Vec<_>>();
    let piped = String::from_utf8(run(&["label", WATER], &[]).stdout).unwrap();
    assert_eq!(words(&plain(shown.as_bytes())), words(&piped));
    assert!(piped.lines().any(|line| line.chars().count() > 90), "a wide line is what this is about");
    for line in plain(shown.as_bytes()).lines() {
        assert!(line.chars().count() <= 90, "{line}");
    }
    let without = on_terminal(&format!("label {WATER}"), &[("LANG", "C.UTF-8"), ("NO_COLOR", "1")]).unwrap();
    assert!(!without.contains('\u{1b}'));
}

#[test]
fn a_terminal_without_unicode_gets_ascii() {
    let Some(shown) = on_terminal(&format!("label {WATER}"), &[("LC_ALL", "C")]) else { return };
    assert!(shown.is_ascii(), "{shown}");
    assert!(shown.contains("e^-"));
    let piped = run(&["label", WATER], &[("LC_ALL", "C")]).stdout;
    assert_eq!(piped, run(&["label", WATER], &[]).stdout);
}

#[test]
fn short_runs_and_quiet_ones_show_no_progress() {
    let Some(shown) = on_terminal(&format!("label {WATER} --format csv"), &[]) else { return };
    let piped = String::from_utf8(run(&["label", WATER, "--format", "csv"], &[]).stdout).unwrap();
    assert_eq!(shown, piped);
}

#[test]
fn a_long_run_says_what_it_does_and_leaves_no_trace() {
    // A slow pipe is what surely lasts longer than half a second.
    let slow = |options: &str| {
        let line =
            format!("(sleep 1.5; cat {WATER}) | {} label - --format csv {options}", env!("CARGO_BIN_EXE_orbsieve"));
        shell_on_terminal(&line, &[])
    };
    let Some(shown) = slow("") else { return };
    assert!(shown.contains("reading"), "{shown:?}");
    // The last thing before the result clears the line.
    let (progress, result) = shown.rsplit_once("\u{1b}[2K").unwrap();
    assert!(progress.contains("reading"));
    let direct = String::from_utf8(run(&["label", WATER, "--format", "csv"], &[]).stdout).unwrap();
    assert_eq!(result.replace("\n-,", &format!("\n{WATER},")), direct);
    let quiet = slow("--quiet").unwrap();
    assert!(!quiet.contains('\u{1b}') && !quiet.contains("reading"), "{quiet:?}");
}

#[test]
fn completions_parse_in_their_shells() {
    for shell in ["bash", "zsh", "fish", "elvish", "powershell"] {
        let output = run(&["completions", shell], &[]);
        assert!(output.status.success(), "{shell}");
        let script = String::from_utf8(output.stdout).unwrap();
        for word in ["label", "transitions", "tolerance"] {
            assert!(script.contains(word), "{shell}: {word}");
        }
    }
    if is_there("bash") {
        let scratch = tempfile::tempdir().unwrap();
        let path = scratch.path().join("orbsieve.bash");
        std::fs::write(&path, run(&["completions", "bash"], &[]).stdout).unwrap();
        assert!(Command::new("bash").arg("-n").arg(&path).status().unwrap().success());
        // What the shell would offer after `orbsieve la`.
        let asked = format!(
            "source {}; COMP_WORDS=(orbsieve la); COMP_CWORD=1; _orbsieve orbsieve la orbsieve; echo ${{COMPREPLY[@]}}",
            path.display()
        );
        let offered = Command::new("bash").arg("-c").arg(asked).output().unwrap();
        assert_eq!(String::from_utf8(offered.stdout).unwrap().trim(), "label");
    }
    assert_eq!(run(&["completions", "abacus"], &[]).status.code(), Some(2));
}

#[test]
fn manual_pages_render() {
    let pages = [&["manual"][..], &["manual", "label"], &["manual", "states"]];
    for arguments in pages {
        let output = run(arguments, &[]);
        assert!(output.status.success());
        let page = String::from_utf8(output.stdout).unwrap();
        assert!(page.contains(".TH orbsieve"), "{page}");
        if !is_there("groff") {
            continue;
        }
        let scratch = tempfile::NamedTempFile::new().unwrap();
        std::fs::write(scratch.path(), &page).unwrap();
        let set = Command::new("groff")
            .args(["-man", "-Tutf8", "-ww", "-Kutf8", "-P-cbou"])
            .arg(scratch.path())
            .output()
            .unwrap();
        assert!(set.status.success());
        assert!(set.stderr.is_empty(), "{}", String::from_utf8_lossy(&set.stderr));
        let text = plain(&set.stdout);
        let wanted: &[&str] = if arguments.len() == 1 { &["NAME", "audit", "--color"] } else { &["NAME", "--format"] };
        for word in wanted {
            assert!(text.contains(word), "{arguments:?}: {word}\n{text}");
        }
    }
    assert_eq!(run(&["manual", "poetry"], &[]).status.code(), Some(2));
}
