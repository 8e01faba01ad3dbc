//! Every bad file of `tests/broken/` with the exact findings that stand beside it.
//!
//! A new case is a new pair of files, no code: `name.molden` (or `.xyz`) and `name.txt`.

#![expect(clippy::unwrap_used, reason = "a test fails by panicking")]

use orbsieve::{diagnostic, model};
use std::fs;
use std::path::{Path, PathBuf};

fn files_ending_in(extensions: &[&str]) -> Vec<PathBuf> {
    let folder = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/broken");
    let mut files: Vec<PathBuf> = fs::read_dir(folder)
        .unwrap()
        .map(|entry| entry.unwrap().path())
        .filter(|path| extensions.iter().any(|wanted| path.extension().is_some_and(|extension| extension == *wanted)))
        .collect();
    files.sort();
    files
}

/// All findings of one file as they are drawn; the first line says whether the file is refused.
fn findings(path: &Path) -> String {
    let bytes = fs::read(path).unwrap();
    let name = path.file_name().unwrap().to_string_lossy();
    let result = if path.extension().is_some_and(|extension| extension == "xyz") {
        model::read_xyz(&bytes)
    } else {
        model::read_molden(&bytes)
    };
    let (verdict, found) = match result {
        Ok((_, warnings)) => ("read, with warnings", warnings),
        Err(findings) => ("refused", findings),
    };
    let drawn: Vec<String> = found.iter().map(|finding| diagnostic::draw(finding, &name, &bytes)).collect();
    format!("{verdict}\n{}\n", drawn.join("\n"))
}

#[test]
fn every_mistake_has_its_message() {
    let files = files_ending_in(&["molden", "xyz"]);
    assert!(files.len() >= 25, "only {} broken files", files.len());
    assert_eq!(files.len(), files_ending_in(&["txt"]).len(), "each bad file has one text beside it");
    let mut wrong = Vec::new();
    let mut seen = std::collections::BTreeMap::new();
    for path in files {
        let found = findings(&path);
        let beside = path.with_extension("txt");
        if fs::read_to_string(&beside).unwrap_or_default() != found {
            wrong.push(format!("{}\n{found}", beside.display()));
        }
        let messages: String =
            found.lines().filter(|line| line.contains(path.extension().unwrap().to_str().unwrap())).collect();
        assert!(!messages.is_empty(), "{} shows no mistake", path.display());
        if let Some(other) = seen.insert(found.replace(&*path.file_name().unwrap().to_string_lossy(), ""), path.clone())
        {
            panic!("{} and {} show the same", path.display(), other.display());
        }
    }
    assert!(wrong.is_empty(), "not as written beside:\n{}", wrong.join("\n"));
}
