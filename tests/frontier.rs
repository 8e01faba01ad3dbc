//! What is read off the labels: frontier, determinant, d block, windows, composition and warnings, on molecules whose
//! answers stand in textbooks.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use serde_json::Value;
use std::process::Command;

fn json(arguments: &[&str]) -> Value {
    let output = Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(arguments)
        .args(["--format", "json", "--quiet"])
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    serde_json::from_slice(&output.stdout).unwrap()
}

fn label_of(document: &Value, set: &Value) -> String {
    let number = usize::try_from(set.as_u64().unwrap()).unwrap();
    document["sets"][number - 1]["label"].as_str().unwrap().to_owned()
}

/// Ground terms of closed shells and of full sets of spin orbitals. Triplet oxygen: ³Σg⁻, the ground state of O2 (common
/// practice); the quartet nitrogen atom fills p once, ⁴S of odd parity.
#[test]
fn determinants_have_the_irrep_of_the_known_ground_term() {
    for (file, expected) in [
        ("water_631gs", "A1 (closed shell)"),
        ("benzene_sto3g", "A1g (closed shell)"),
        ("oxygen_triplet_631gs", "Sigma_g- (full sets of spin orbitals)"),
        ("cyclobutadiene_triplet_d4h_sto3g", "A2g (full sets of spin orbitals)"),
        ("intact_methyl_radical", "A2'' (full sets of spin orbitals)"),
    ] {
        let document = json(&["label", &format!("tests/molecules/{file}.molden")]);
        assert_eq!(document["frontier"]["determinant"], expected, "{file}");
    }
}

/// Strong-field d⁶ in an octahedron: t2g full, eg* empty (ligand-field theory, common practice). In the sandwich with
/// five-rings e2g and a1g are filled and e1g* is empty ("Photoelectron work on metallocenes", 1970s, from memory).
#[test]
fn d_blocks_are_those_of_ligand_field_theory() {
    let octahedral = json(&["label", "tests/molecules/scenario/lantern-3.molden"]);
    let levels = |document: &Value| -> Vec<(String, bool)> {
        document["d_block"][0]["levels"]
            .as_array()
            .unwrap()
            .iter()
            .map(|level| {
                let set = usize::try_from(level["set"].as_u64().unwrap()).unwrap();
                let filled = document["sets"][set - 1]["electrons"].as_f64().unwrap() > 0.5;
                let label = level["label"].as_str().unwrap();
                (label.trim_start_matches(|sign: char| sign.is_ascii_digit()).to_owned(), filled)
            })
            .collect()
    };
    assert_eq!(levels(&octahedral), [("t2g".to_owned(), true), ("eg".to_owned(), false)]);
    let gap = octahedral["d_block"][0]["levels"][1]["gap_to_previous_hartree"].as_f64().unwrap();
    let energy = |level: usize| octahedral["d_block"][0]["levels"][level]["energy_hartree"].as_f64().unwrap();
    assert!((gap - (energy(1) - energy(0))).abs() < 1e-12);
    let sandwich = json(&["label", "tests/molecules/scenario/bellows-5.molden"]);
    assert_eq!(levels(&sandwich), [("a1g".to_owned(), true), ("e2g".to_owned(), true), ("e1g".to_owned(), false)]);
}

/// The highest filled and lowest empty sets of molecules with known π orbitals.
#[test]
fn frontier_sets_are_the_known_ones() {
    for (file, spin, homo, lumo) in [
        ("benzene_sto3g", 0, "1e1g", "1e2u"),
        ("oxygen_triplet_631gs", 0, "1pi_g", "3sigma_u"),
        ("oxygen_triplet_631gs", 1, "1pi_u", "1pi_g"),
        ("formaldehyde_631gs", 0, "2b2", "2b1"),
    ] {
        let document = json(&["label", &format!("tests/molecules/{file}.molden")]);
        let frontier = &document["frontier"]["spins"][spin];
        assert_eq!(label_of(&document, &frontier["homo"]), homo, "{file}");
        assert_eq!(label_of(&document, &frontier["lumo"]), lumo, "{file}");
        let total: f64 = document["frontier"]["electrons_per_irrep"]
            .as_object()
            .unwrap()
            .values()
            .map(|electrons| electrons.as_f64().unwrap())
            .sum();
        assert!((total - document["source"]["electrons"].as_f64().unwrap()).abs() < 1e-9);
    }
}

#[test]
fn a_window_that_cuts_a_set_says_so() {
    let cuts = |window: &str| -> Vec<(String, bool)> {
        let document = json(&["label", "tests/molecules/benzene_sto3g.molden", "--window", window]);
        let entries = document["active_window"].as_array().unwrap().clone();
        entries
            .iter()
            .map(|entry| (entry["label"].as_str().unwrap().to_owned(), entry["cut"].as_bool().unwrap()))
            .collect()
    };
    let entry = |label: &str, cut: bool| (label.to_owned(), cut);
    assert_eq!(cuts("2,2"), [entry("1e1g", false), entry("1e2u", false)]);
    assert_eq!(cuts("1,3"), [entry("1e1g", true), entry("1e2u", false), entry("1b2g", false)]);
    // π space of benzene: a2u e1g | e2u b2g, orbitals of the file 17 20 21 22 23 24, in their irreps 1, 1 2, 1 2, 1.
    let document = json(&["label", "tests/molecules/benzene_sto3g.molden", "--window", "2,3"]);
    assert_eq!(document["active_window"][1]["orbitals"], serde_json::json!([22, 23]));
    assert_eq!(document["active_window"][1]["orbitals_from_zero"], serde_json::json!([21, 22]));
    assert_eq!(document["active_window"][1]["within_irrep"], serde_json::json!([1, 2]));
}

#[test]
fn shares_sum_to_one_and_name_what_is_there() {
    let document = json(&["label", "tests/molecules/ptcl4_d4h_ecp.molden"]);
    for orbital in document["orbitals"].as_array().unwrap() {
        let shares = orbital["character"].as_array().unwrap();
        let sum: f64 = shares.iter().map(|share| share["share"].as_f64().unwrap()).sum();
        // Shares below one per cent are not listed.
        assert!(sum > 0.9 && sum < 1.0 + 1e-9, "{sum}");
    }
}

/// A group just beyond the tolerance, and one that uses most of it.
#[test]
fn geometry_warns_at_the_edge_of_the_tolerance() {
    let file = "tests/molecules/xyz/octahedron_shaken.xyz";
    let document = json(&["geometry", file]);
    assert_eq!(document["geometry"]["point_group"], "Oh");
    assert_eq!(document["geometry"]["warnings"], serde_json::json!([]));
    let deviation = document["geometry"]["deviation_max_angstrom"].as_f64().unwrap();
    let warned = |tolerance: f64, word: &str| {
        let document = json(&["geometry", file, "--tolerance", &format!("{tolerance:.8}")]);
        let warnings = document["geometry"]["warnings"].as_array().unwrap().clone();
        warnings.iter().any(|warning| warning.as_str().unwrap().contains(word))
    };
    assert!(warned(1.2 * deviation, "of the tolerance"));
    assert!(!warned(3.0 * deviation, "of the tolerance"));
    assert!(warned(0.9 * deviation, "just beyond the tolerance"));
    assert!(!warned(0.2 * deviation, "have Oh"));
}

/// Valence-only files: cores that the basis cannot hold are no charge of the molecule, and the report says so.
#[test]
fn a_basis_without_cores_is_noticed() {
    for (file, charge, noticed) in [
        ("xtb_water", 0.0, true),
        ("xtb_benzene", 0.0, true),
        ("xtb_sulfur_hexafluoride", 0.0, true),
        ("water_sto3g", 0.0, false),
        ("zinc_ion_def2svp", 2.0, false),
        ("ptcl4_d4h_ecp", -2.0, false),
        ("nickel_carbonyl_td_ecp", 0.0, false),
        ("xenon_ecp", 0.0, false),
        ("permanganate_td_def2svp", -1.0, false),
        ("lithium_cp_c5v_sto3g", 0.0, false),
    ] {
        let document = json(&["label", &format!("tests/molecules/{file}.molden")]);
        assert!((document["source"]["charge"].as_f64().unwrap() - charge).abs() < 1e-6, "{file}");
        assert_eq!(document["cautions"].to_string().contains("valence electrons only"), noticed, "{file}");
    }
}
