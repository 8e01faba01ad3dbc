//! Symmetry-adapted orbitals: pure when read again, unchanged by a second run, nearest to those given.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use orbsieve::labelling::{Labelled, Thresholds, label};
use orbsieve::model::{Molecule, read_molden};
use serde_json::Value;
use std::path::{Path, PathBuf};
use std::process::Command;
use support::files::{labelled, path, reference, set_labels};

/// Runs the program; the report and the new file.
fn purified(file: &Path, more: &[&str], folder: &Path) -> (Value, PathBuf) {
    let target = folder.join(format!("pure-{}", file.file_name().unwrap().to_string_lossy()));
    let output = Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(["purify", "--quiet", "--format", "json", "--output"])
        .arg(&target)
        .args(more)
        .arg(file)
        .output()
        .unwrap();
    assert!(output.status.success(), "{}: {}", file.display(), String::from_utf8_lossy(&output.stderr));
    (serde_json::from_slice(&output.stdout).unwrap(), target)
}

fn again(file: &Path) -> (Molecule, Labelled) {
    let (mut molecule, _) = read_molden(&std::fs::read(file).unwrap()).unwrap();
    let labelled = label(&mut molecule, &Thresholds::STANDARD).unwrap();
    (molecule, labelled)
}

fn lowest_purity(labelled: &Labelled) -> f64 {
    labelled.spins.iter().flat_map(|spin| &spin.orbitals).map(|label| label.purity).fold(1.0, f64::min)
}

/// Every family of groups, every dialect, open shells; all of exactly symmetric nuclei.
const FILES: &[&str] = &[
    "water_631gs_cart",
    "turned_ammonia",
    "turned_methane",
    "noisy_benzene",
    "sf6_sto3g",
    "b12h12_ih_sto3g",
    "trifluoroethane_c3_sto3g",
    "silicic_acid_s4_sto3g",
    "magnesium_aqua_t_sto3g",
    "carbon_dioxide_631gs",
    "oxygen_triplet_631gs",
    "intact_methyl_radical",
    "cyclobutadiene_triplet_d4h_sto3g",
    "cobalt_en_d3_sto3g",
    "mixed_ethene",
    "localised_methane_boys",
    "localised_ethene_pipek",
    "nwchem_methane_631gs_pure",
    "nwchem_formaldehyde_c1_cart_raw",
    "openmolcas_ammonia_631gs_cart",
    "psi4_water_h_cart",
    "psi3_ammonia_631gs_cart",
    "bagel_ammonia_ccpvdz_pure",
    "cp2k_ethene_631gs_pure",
    "xtb_benzene",
    "dialect_water_h_raw_flipped",
];

#[test]
fn what_is_written_is_pure_and_a_second_run_changes_nothing() {
    let folder = tempfile::tempdir().unwrap();
    for name in FILES {
        let (report, file) = purified(&path(name), &[], folder.path());
        let (molecule, labels) = again(&file);
        let purity = lowest_purity(&labels);
        assert!((purity - 1.0).abs() < 1e-8, "{name}: purity {purity}");
        assert!((report["purity_min"].as_f64().unwrap() - purity).abs() < 1e-12, "{name}");
        let (_, before) = labelled(name);
        // Digits cut off in the file remain as far as they are symmetric.
        let residual = labels.settled.residual;
        assert!(residual < 1e-8_f64.max(1.5 * before.settled.residual), "{name}: {residual:e}");
        // Degenerate sets: every partner by name, in order.
        let group = &labels.symmetry.group;
        for spin in &labels.spins {
            for set in spin.sets.iter().filter(|set| set.orbitals.len() > 1) {
                let irrep = set.irrep.unwrap();
                if group.irreps()[irrep].constituents == 1 {
                    let partners: Vec<_> = set.orbitals.iter().map(|&i| spin.orbitals[i].partner).collect();
                    let expected: Vec<_> = (0..set.orbitals.len()).map(Some).collect();
                    assert_eq!(partners, expected, "{name}");
                }
            }
        }
        let (second, file) = purified(&file, &[], folder.path());
        let (twice, _) = again(&file);
        for (a, b) in molecule.orbital_sets.iter().zip(&twice.orbital_sets) {
            let change = (&a.coefficients - &b.coefficients).iter().fold(0.0_f64, |worst, x| worst.max(x.abs()));
            assert!(change < 1e-8, "{name}: a second run changes a coefficient by {change:e}");
        }
        assert!(second["overlap_loss_max"].as_f64().unwrap() < 1e-12, "{name}");
    }
}

#[test]
fn labels_stay_and_the_density_hardly_changes() {
    let folder = tempfile::tempdir().unwrap();
    for name in ["turned_methane", "noisy_benzene", "sf6_sto3g", "oxygen_triplet_631gs", "nwchem_methane_631gs_pure"] {
        let (report, file) = purified(&path(name), &[], folder.path());
        let (_, before) = labelled(name);
        let (_, after) = again(&file);
        for spin in 0..before.spins.len() {
            assert_eq!(set_labels(&before, spin), set_labels(&after, spin), "{name}");
        }
        assert!(report["density_change_electrons"].as_f64().unwrap() < 1e-8, "{name}");
        assert!(report["overlap_loss_max"].as_f64().unwrap() < 1e-8, "{name}");
    }
}

#[test]
fn mixed_orbitals_come_apart_within_their_density() {
    let folder = tempfile::tempdir().unwrap();
    for name in ["mixed_ethene", "localised_methane_boys", "localised_ethene_pipek"] {
        let (report, _) = purified(&path(name), &[], folder.path());
        assert!(report["density_change_electrons"].as_f64().unwrap() < 1e-7, "{name}");
    }
    // Boys orbitals of methane are a1 + t2.
    let (_, file) = purified(&path("localised_methane_boys"), &[], folder.path());
    let (_, labels) = again(&file);
    let mut names = set_labels(&labels, 0)[..3].to_vec();
    names.sort();
    assert_eq!(names, ["1a1", "1t2", "2a1"]);
}

#[test]
fn everything_else_in_the_file_stays() {
    let folder = tempfile::tempdir().unwrap();
    for name in ["turned_ammonia", "xtb_benzene", "nwchem_methane_631gs_pure"] {
        let bytes = std::fs::read(path(name)).unwrap();
        let text = String::from_utf8_lossy(&bytes).into_owned();
        let (_, file) = purified(&path(name), &[], folder.path());
        let new = String::from_utf8_lossy(&std::fs::read(&file).unwrap()).into_owned();
        let head = |text: &str| text.split("[MO]").next().unwrap().to_owned();
        assert_eq!(head(&text), head(&new), "{name}");
        assert!(new.contains(" Sym= 1a1"), "{name}");
    }
}

#[test]
fn nuclei_move_onto_their_places_when_asked() {
    let folder = tempfile::tempdir().unwrap();
    let name = "sf6_shaken_sto3g";
    let (report, file) = purified(&path(name), &["--geometry"], folder.path());
    let moved = report["nuclei_moved_max_angstrom"].as_f64().unwrap();
    assert!(moved > 1e-3 && moved < 0.004, "{moved}");
    let (_, labels) = again(&file);
    assert_eq!(labels.detection.ladder[0].name.to_string(), "Oh");
    assert!(labels.symmetry.deviation.max < 1e-10, "{}", labels.symmetry.deviation.max);
    assert!((lowest_purity(&labels) - 1.0).abs() < 1e-8);
    assert!(labels.settled.residual < 1e-8, "{:e}", labels.settled.residual);
    // Without, orbitals are pure all the same, and orthonormal as far as the nuclei allow.
    let (_, file) = purified(&path(name), &[], folder.path());
    let (_, labels) = again(&file);
    assert!((lowest_purity(&labels) - 1.0).abs() < 1e-8, "{}", lowest_purity(&labels));
}

#[test]
fn what_cannot_be_done_is_refused() {
    let folder = tempfile::tempdir().unwrap();
    for (name, more, words) in [
        ("neon_def2tzvp", vec![], "infinitely many"),
        ("cobalt_ammine_d3_sto3g", vec!["--frame", "Co,N"], "land on no like atom"),
    ] {
        let target = folder.path().join("nothing.molden");
        let output = Command::new(env!("CARGO_BIN_EXE_orbsieve"))
            .args(["purify", "--output"])
            .arg(&target)
            .args(more)
            .arg(path(name))
            .output()
            .unwrap();
        assert_eq!(output.status.code(), Some(4), "{name}");
        assert!(String::from_utf8_lossy(&output.stderr).contains(words), "{name}");
        assert!(!target.exists(), "{name}");
    }
}

#[test]
fn broken_densities_are_adapted_as_far_as_they_go() {
    let folder = tempfile::tempdir().unwrap();
    for name in ["broken_ethene_by_hand", "broken_methane_cation", "broken_benzene_cation", "broken_h4_square"] {
        let (report, file) = purified(&path(name), &[], folder.path());
        let (_, labels) = again(&file);
        assert!((lowest_purity(&labels) - 1.0).abs() < 1e-8, "{name}: {}", lowest_purity(&labels));
        assert!(!report["cautions"].as_array().unwrap().is_empty(), "{name}");
    }
}

/// What a reference library finds in purified files: tests/molecules/scripts/check_purified.py.
#[test]
fn a_reference_library_finds_orthonormal_orbitals_of_the_same_density() {
    let folder = tempfile::tempdir().unwrap();
    for (name, entry) in reference("purified").as_object().unwrap() {
        let theirs = entry["deviation"].as_f64().unwrap();
        assert!(theirs < 1e-8, "{name}: {theirs:e}");
        for spin in entry["overlap_with_old"].as_array().unwrap() {
            let (orbitals, kept) = (spin[0].as_f64().unwrap(), spin[1].as_f64().unwrap());
            assert!((orbitals - kept).abs() < 1e-7, "{name}: {kept} of {orbitals}");
        }
        // The files that they read are those written today: the same residual to its rounding.
        let (report, _) = purified(&path(name), &[], folder.path());
        let ours = report["orthonormality_residual"].as_f64().unwrap();
        assert!((ours - theirs).abs() < 1e-10, "{name}: {ours:e}, {theirs:e}");
    }
}

#[test]
fn sets_come_apart_in_a_subgroup_without_loss() {
    let folder = tempfile::tempdir().unwrap();
    for (name, group) in
        [("sf6_sto3g", "D4h"), ("benzene_sto3g", "D2h"), ("turned_methane", "C2v"), ("oxygen_triplet_631gs", "D2h")]
    {
        let (report, _) = purified(&path(name), &["--group", group], folder.path());
        assert!((report["purity_min"].as_f64().unwrap() - 1.0).abs() < 1e-8, "{name}");
        assert!(report["overlap_loss_max"].as_f64().unwrap() < 1e-8, "{name}: {}", report["overlap_loss_max"]);
        assert!(report["density_change_electrons"].as_f64().unwrap() < 1e-8, "{name}");
    }
}
