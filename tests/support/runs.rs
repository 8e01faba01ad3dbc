//! A folder of generated runs for tests of `batch`: fixtures with titles of their own, moved in space, some packed,
//! some broken in ways that fail.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]
#![allow(dead_code, reason = "each test takes what it needs")]

use flate2::{Compression, write::GzEncoder};
use std::fs::File;
use std::io::{Read, Write};
use std::path::{Path, PathBuf};
use std::process::{Command, Output, Stdio};
use std::time::Duration;

/// Small molecules of several groups and engines.
const MOLECULES: [&str; 9] = [
    "water_631gs",
    "ammonia_631gs",
    "methane_631gs",
    "formaldehyde_631gs",
    "ethene_631gs",
    "oxygen_triplet_631gs",
    "carbon_dioxide_631gs",
    "benzene_sto3g",
    "sf6_sto3g",
];

pub struct Runs {
    scratch: tempfile::TempDir,
}

fn fixture(name: &str) -> String {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests").join(name);
    std::fs::read_to_string(&path).unwrap_or_else(|error| panic!("{}: {error}", path.display()))
}

/// The same molecule elsewhere under another title: orbitals do not change by that.
fn generated(i: usize, title: &str) -> String {
    let text = fixture(&format!("molecules/{}.molden", MOLECULES[i % MOLECULES.len()]));
    let mut atoms = false;
    let mut title_follows = false;
    let mut changed = String::with_capacity(text.len());
    for line in text.lines() {
        if line.trim_start().starts_with('[') {
            atoms = line.to_lowercase().contains("[atoms]");
            // A title stands in the second line, or in a section of its own.
            title_follows = ["[title]", "[molden format]"].iter().any(|head| line.to_lowercase().contains(head));
            changed.push_str(line);
        } else if atoms {
            let words: Vec<&str> = line.split_whitespace().collect();
            let x: f64 = words[3].parse().unwrap();
            let moved =
                format!("{} {} {} {:.12} {} {}", words[0], words[1], words[2], x + i as f64, words[4], words[5]);
            changed.push_str(&moved);
        } else if title_follows {
            changed.push_str(title);
            title_follows = false;
        } else {
            changed.push_str(line);
        }
        changed.push('\n');
    }
    changed
}

impl Runs {
    /// `n` files that can be labelled, every seventh packed, and two in `runs/` that cannot.
    pub fn new(n: usize) -> Self {
        let runs = Self { scratch: tempfile::tempdir().unwrap() };
        std::fs::create_dir(runs.path().join("runs")).unwrap();
        for i in 0..n {
            runs.write(i, &format!("run {i} of a series"));
        }
        for (from, to) in [
            ("molecules/psi3_water_631gs_broken.molden", "runs/cut-short.molden"),
            ("broken/many_mistakes.molden", "runs/run-0002-mistaken.molden"),
        ] {
            std::fs::write(runs.path().join(to), fixture(from)).unwrap();
        }
        runs
    }

    pub fn path(&self) -> &Path {
        self.scratch.path()
    }

    /// Writes run `i` with this title.
    pub fn write(&self, i: usize, title: &str) {
        let text = generated(i, title);
        let path = self.path().join(format!("runs/run-{i:04}.molden"));
        if i % 7 == 6 {
            let mut encoder = GzEncoder::new(Vec::new(), Compression::default());
            encoder.write_all(text.as_bytes()).unwrap();
            std::fs::write(path.with_extension("molden.gz"), encoder.finish().unwrap()).unwrap();
        } else {
            std::fs::write(path, text).unwrap();
        }
    }

    /// Names of the files, sorted.
    pub fn names(&self) -> Vec<String> {
        let entries = std::fs::read_dir(self.path().join("runs")).unwrap();
        let mut names: Vec<String> =
            entries.map(|entry| format!("runs/{}", entry.unwrap().file_name().to_str().unwrap())).collect();
        names.sort();
        names
    }

    /// Runs `batch` in the folder.
    pub fn batch(&self, arguments: &[&str]) -> Output {
        orbsieve(self.path(), &[&["batch"], arguments].concat()).output().unwrap()
    }

    /// Runs `batch` into a file and gives its bytes.
    pub fn to_file(&self, name: &str, arguments: &[&str]) -> Vec<u8> {
        let output = self.batch(&[arguments, &["--output", name]].concat());
        let path: PathBuf = self.path().join(name);
        std::fs::read(path).unwrap_or_else(|error| panic!("{error}: {}", String::from_utf8_lossy(&output.stderr)))
    }
}

pub fn orbsieve(folder: &Path, arguments: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_orbsieve"));
    command.args(arguments).current_dir(folder);
    command
}

/// Lines without their newline.
pub fn lines(bytes: &[u8]) -> Vec<&[u8]> {
    bytes.split(|byte| *byte == b'\n').filter(|line| !line.is_empty()).collect()
}

/// Counts the lines of a file that grows.
#[derive(Default)]
struct Growing {
    file: Option<File>,
    lines: usize,
}

impl Growing {
    fn lines(&mut self, path: &Path) -> usize {
        self.file = self.file.take().or_else(|| File::open(path).ok());
        let mut fresh = Vec::new();
        if let Some(file) = &mut self.file {
            file.read_to_end(&mut fresh).unwrap();
        }
        self.lines += fresh.split(|byte| *byte == b'\n').count() - 1;
        self.lines
    }
}

/// Kills a run (SIGKILL) once its journal holds `records`; how many it then holds, None when the run ended first.
pub fn killed_after(mut command: Command, journal: &Path, records: usize) -> Option<usize> {
    let mut child = command.stdout(Stdio::null()).stderr(Stdio::null()).spawn().unwrap();
    let mut growing = Growing::default();
    loop {
        if child.try_wait().unwrap().is_some() {
            return None;
        }
        if growing.lines(journal) >= records {
            child.kill().unwrap();
            child.wait().unwrap();
            return Some(growing.lines(journal));
        }
        std::thread::sleep(Duration::from_micros(300));
    }
}
