//! The command line as a person meets it: exit status, outputs and errors of each verb, files whole or not at all.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use flate2::{Compression, write::GzEncoder};
use std::io::Write;
use std::path::Path;
use std::process::{Command, Output, Stdio};

const WATER: &str = "tests/molecules/water_631gs.molden";
/// Half of the orbitals' blocks stop short: no convention fits.
const CUT_SHORT: &str = "tests/molecules/psi3_water_631gs_broken.molden";

fn orbsieve(arguments: &[&str]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_orbsieve"));
    command.args(arguments).current_dir(env!("CARGO_MANIFEST_DIR"));
    command
}

fn run(arguments: &[&str]) -> Output {
    orbsieve(arguments).output().unwrap()
}

fn run_with_input(arguments: &[&str], input: &[u8]) -> Output {
    let mut child =
        orbsieve(arguments).stdin(Stdio::piped()).stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
    let mut stdin = child.stdin.take().unwrap();
    let input = input.to_vec();
    let writer = std::thread::spawn(move || {
        let _ = stdin.write_all(&input);
    });
    let output = child.wait_with_output().unwrap();
    writer.join().unwrap();
    output
}

fn text(bytes: &[u8]) -> String {
    String::from_utf8(bytes.to_vec()).unwrap()
}

#[test]
fn statuses_tell_what_went_wrong() {
    let scratch = tempfile::tempdir().unwrap();
    let empty = scratch.path().join("empty.molden");
    std::fs::write(&empty, b"").unwrap();
    let cases: &[(&[&str], i32, &str)] = &[
        (&["label", WATER], 0, ""),
        (&["geometry", WATER], 0, ""),
        (&["table", "D5d"], 0, ""),
        (&["label"], 2, "FILE"),
        (&["label", WATER, "--tolerance", "0"], 2, "expected a number above zero"),
        (&["label", WATER, "--purity", "0.3"], 2, "two irreps could both claim"),
        (&["label", WATER, "--window", "4"], 2, "two whole numbers"),
        (&["table", "Q7"], 2, "Q7"),
        (&["table", "Oh", "--format", "csv"], 2, "not csv"),
        (&["geometry", WATER, "--format", "csv"], 2, "csv"),
        (&["label", "tests/molecules/nowhere.molden"], 3, "cannot read tests/molecules/nowhere.molden"),
        (&["label", empty.to_str().unwrap()], 3, "no section"),
        (&["label", "tests/broken/coefficient_decimal_comma.molden"], 3, "decimal point"),
        (&["label", CUT_SHORT], 4, "no convention makes the orbitals orthonormal"),
    ];
    for (arguments, status, message) in cases {
        let output = run(arguments);
        assert_eq!(output.status.code(), Some(*status), "{arguments:?}: {}", text(&output.stderr));
        assert!(text(&output.stderr).contains(message), "{arguments:?}: {}", text(&output.stderr));
        assert_eq!(output.stdout.is_empty(), *status != 0, "{arguments:?}");
    }
}

#[test]
fn an_output_file_is_whole_or_absent() {
    let scratch = tempfile::tempdir().unwrap();
    let target = scratch.path().join("labels.json");
    let name = target.to_str().unwrap();
    assert!(run(&["label", WATER, "--format", "json", "--output", name]).status.success());
    let written = std::fs::read(&target).unwrap();
    assert_eq!(written, run(&["label", WATER, "--format", "json"]).stdout);
    // A failure leaves the file that was there, and nothing beside it.
    assert_eq!(run(&["label", CUT_SHORT, "--output", name]).status.code(), Some(4));
    assert_eq!(std::fs::read(&target).unwrap(), written);
    assert_eq!(std::fs::read_dir(scratch.path()).unwrap().count(), 1);
    let nowhere = scratch.path().join("no/such/folder.json");
    assert_eq!(run(&["label", WATER, "--output", nowhere.to_str().unwrap()]).status.code(), Some(3));
}

#[test]
fn gzip_and_standard_input_are_read_as_files_are() {
    let plain = std::fs::read(Path::new(env!("CARGO_MANIFEST_DIR")).join(WATER)).unwrap();
    let mut encoder = GzEncoder::new(Vec::new(), Compression::default());
    encoder.write_all(&plain).unwrap();
    let packed = encoder.finish().unwrap();
    let direct = text(&run(&["label", WATER]).stdout).replace(WATER, "-");
    for input in [&plain, &packed] {
        let output = run_with_input(&["label", "-"], input);
        assert!(text(&output.stdout) == direct, "{}", text(&output.stderr));
    }
}

#[test]
fn a_gzip_bomb_is_refused() {
    let mut encoder = GzEncoder::new(Vec::new(), Compression::best());
    encoder.write_all(&vec![b' '; 64 << 20]).unwrap();
    let output = run_with_input(&["label", "-"], &encoder.finish().unwrap());
    assert_eq!(output.status.code(), Some(3));
    assert!(text(&output.stderr).contains("times its size"), "{}", text(&output.stderr));
}

#[test]
fn results_do_not_depend_on_threads() {
    for file in ["tests/molecules/ferrocene_d5d_sto3g.molden", "tests/molecules/neon_def2tzvp.molden"] {
        let one = run(&["label", file, "--format", "json", "--threads", "1"]).stdout;
        assert!(!one.is_empty());
        for threads in ["2", "3"] {
            let other = run(&["label", file, "--format", "json", "--threads", threads]).stdout;
            let differ = other.iter().zip(&one).position(|(a, b)| a != b);
            assert!(other == one, "{file} with {threads} threads differs at byte {differ:?}");
        }
    }
}

#[test]
fn a_reader_that_leaves_early_hears_no_complaint() {
    let mut child =
        orbsieve(&["table", "D30h", "--format", "json"]).stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
    drop(child.stdout.take());
    let output = child.wait_with_output().unwrap();
    assert_eq!(output.status.code(), Some(0), "{}", text(&output.stderr));
    assert!(output.stderr.is_empty(), "{}", text(&output.stderr));
}

#[test]
fn labels_are_written_into_the_file_and_nothing_else_changes() {
    let scratch = tempfile::tempdir().unwrap();
    let target = scratch.path().join("labelled.molden");
    assert!(run(&["label", WATER, "--write-labels", target.to_str().unwrap()]).status.success());
    let before = std::fs::read_to_string(Path::new(env!("CARGO_MANIFEST_DIR")).join(WATER)).unwrap();
    let after = std::fs::read_to_string(&target).unwrap();
    assert_eq!(before.lines().count(), after.lines().count());
    let mut labels = Vec::new();
    for (old, new) in before.lines().zip(after.lines()) {
        if old.contains("Sym=") {
            labels.push(new.split('=').nth(1).unwrap().trim().to_owned());
        } else {
            assert_eq!(old, new);
        }
    }
    assert_eq!(labels[..7], ["1a1", "2a1", "1b2", "3a1", "1b1", "4a1", "2b2"]);
    // The labelled file reads to the same labels.
    let again = run(&["label", target.to_str().unwrap(), "--format", "csv"]).stdout;
    let first = run(&["label", WATER, "--format", "csv"]).stdout;
    let without_name = |bytes: &[u8]| -> Vec<String> {
        text(bytes).lines().map(|line| line.split_once(',').unwrap().1.to_owned()).collect()
    };
    assert_eq!(without_name(&again), without_name(&first));
}

#[test]
fn the_json_document_keeps_the_promised_keys() {
    let output = run(&["label", "tests/molecules/scenario/bellows-5.molden", "--format", "json"]);
    let document: serde_json::Value = serde_json::from_slice(&output.stdout).unwrap();
    assert_eq!(document["schema"], "orbsieve/1");
    for (part, keys) in [
        ("source", &["file", "title", "atoms", "electrons"][..]),
        (
            "geometry",
            &[
                "point_group",
                "order",
                "nuclear_group",
                "rotational_symmetry_number",
                "tolerance_angstrom",
                "deviation_max_angstrom",
                "deviation_rms_angstrom",
                "centre_bohr",
                "axes",
                "axes_convention",
                "other_settings",
                "ladder",
                "warnings",
            ],
        ),
        ("basis", &["functions", "shells", "pure", "convention", "orthonormality_residual"]),
    ] {
        for key in keys {
            assert!(document[part].get(key).is_some(), "{part}.{key}");
        }
    }
    let orbital = &document["orbitals"][46];
    for key in [
        "index",
        "spin",
        "energy_hartree",
        "occupation",
        "irrep",
        "label",
        "component",
        "purity",
        "abelian_irrep",
        "weights",
        "set",
        "character",
    ] {
        assert!(orbital.get(key).is_some(), "orbitals[].{key}");
    }
    let set = &document["sets"][0];
    for key in ["set", "spin", "irrep", "label", "orbitals", "degeneracy", "energy_hartree", "electrons", "complete"] {
        assert!(set.get(key).is_some(), "sets[].{key}");
    }
    assert_eq!(document["geometry"]["point_group"], "D5d");
    assert_eq!(document["geometry"]["rotational_symmetry_number"], 10);
    // Axes are orthonormal rows, right-handed.
    let axes: Vec<Vec<f64>> = serde_json::from_value(document["geometry"]["axes"].clone()).unwrap();
    let matrix = nalgebra::Matrix3::from_fn(|row, column| axes[row][column]);
    assert!((matrix * matrix.transpose() - nalgebra::Matrix3::identity()).amax() < 1e-9);
    assert!((matrix.determinant() - 1.0).abs() < 1e-9);
}
