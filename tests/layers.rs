//! The order of the layers, held by reading the sources: no file uses a later layer, every file says what it holds.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use std::fs;
use std::path::{Path, PathBuf};

/// Lowest first; each may use those before it.
const LAYERS: [&str; 16] = [
    "diagnostic",
    "grammar",
    "model",
    "group",
    "states",
    "wavefunction",
    "labelling",
    "audit",
    "purify",
    "selection",
    "modes",
    "report",
    "diagram",
    "picture",
    "page",
    "cli",
];

/// `group` and `states` stand on their own: they know no file and no molecule.
const STRANGERS: [(&str, &str); 7] = [
    ("group", "grammar"),
    ("group", "model"),
    ("group", "diagnostic"),
    ("grammar", "model"),
    ("states", "grammar"),
    ("states", "model"),
    ("states", "diagnostic"),
];

fn sources_of(layer: &str) -> Vec<(PathBuf, String)> {
    let root = Path::new(env!("CARGO_MANIFEST_DIR")).join("src");
    let mut found = Vec::new();
    let single = root.join(layer).with_extension("rs");
    if single.is_file() {
        found.push(single);
    }
    let mut folders = vec![root.join(layer)];
    while let Some(folder) = folders.pop() {
        for entry in fs::read_dir(folder).into_iter().flatten().flatten() {
            let path = entry.path();
            if path.is_dir() {
                folders.push(path);
            } else if path.extension().is_some_and(|extension| extension == "rs") {
                found.push(path);
            }
        }
    }
    found.into_iter().map(|path| (path.clone(), fs::read_to_string(path).unwrap())).collect()
}

#[test]
fn no_layer_uses_a_later_one() {
    for (at, layer) in LAYERS.iter().enumerate() {
        let sources = sources_of(layer);
        assert!(!sources.is_empty(), "no sources of {layer}");
        for (path, text) in sources {
            for later in &LAYERS[at + 1..] {
                assert!(!text.contains(&format!("crate::{later}")), "{} uses {later}", path.display());
            }
            for (_, stranger) in STRANGERS.iter().filter(|(here, _)| here == layer) {
                assert!(!text.contains(&format!("crate::{stranger}")), "{} uses {stranger}", path.display());
            }
        }
    }
}

#[test]
fn every_file_opens_with_what_lives_there_and_stays_readable() {
    for layer in LAYERS {
        for (path, text) in sources_of(layer) {
            assert!(text.starts_with("//! "), "{} has no head", path.display());
            let lines = text.lines().count();
            assert!(lines <= 600, "{} has {lines} lines: split it along a noun", path.display());
        }
    }
}

#[test]
fn only_the_command_line_prints() {
    for layer in LAYERS {
        for (path, text) in sources_of(layer) {
            for word in ["println!", "process::exit"] {
                assert!(!text.contains(word), "{} uses {word}", path.display());
            }
        }
    }
}
