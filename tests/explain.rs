//! `label --explain` and `--explain-transition`: the numbers of the reasoning against the labels, the tables and the laws.
//!
//! Judges: the labels of `label` (found without these sums), the characters and products of `table`, the multiplicities of
//! whole representations, Schur's lemma, and by hand the reduction of t2g × eg in Oh.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use serde_json::Value;
use std::process::Command;

fn run(arguments: &[&str]) -> (Option<i32>, Vec<u8>, String) {
    let mut command = Command::new(env!("CARGO_BIN_EXE_orbsieve"));
    let output = command.args(arguments).current_dir(env!("CARGO_MANIFEST_DIR")).output().unwrap();
    (output.status.code(), output.stdout, String::from_utf8(output.stderr).unwrap())
}

fn json(arguments: &[&str]) -> Value {
    let (status, stdout, errors) = run(&[arguments, &["--format", "json"]].concat());
    assert_eq!(status, Some(0), "{arguments:?}: {errors}");
    serde_json::from_slice(&stdout).unwrap()
}

fn file(name: &str) -> String {
    format!("tests/molecules/{name}.molden")
}

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(|value| value.as_f64().unwrap()).collect()
}

fn near(a: f64, b: f64, limit: f64) -> bool {
    (a - b).abs() <= limit
}

/// Fixture and whether its orbitals keep the symmetry; linear, cubic, icosahedral, real pairs, unrestricted, C1, an atom, mixed.
const FIXTURES: &[(&str, bool)] = &[
    ("benzene_631g", true),
    ("carbon_dioxide_631gs", true),
    ("scenario/lantern-3", true),
    ("b12h12_ih_sto3g", true),
    ("boric_acid_c3h_631g", true),
    ("helium_pinwheel_c4", true),
    ("magnesium_aqua_t_sto3g", true),
    ("oxygen_triplet_631gs", true),
    ("chfclbr_c1_sto3g", true),
    ("neon_def2tzvp", true),
    ("localised_methane_boys", false),
    ("mixed_ethene", false),
];

/// A few orbitals of a file: first, last, and those in between at even steps.
fn some_orbitals(document: &Value) -> Vec<&Value> {
    let orbitals = document["orbitals"].as_array().unwrap();
    let step = (orbitals.len() / 5).max(1);
    orbitals.iter().step_by(step).chain(orbitals.last()).collect()
}

#[test]
fn the_reasoning_agrees_with_the_labels() {
    for &(name, keeps) in FIXTURES {
        let labels = json(&["label", &file(name)]);
        for orbital in some_orbitals(&labels) {
            let asked = format!("{}:{}", orbital["spin"].as_str().unwrap(), orbital["index"]);
            let told = json(&["label", &file(name), "--explain", &asked]);
            let set = &labels["sets"][usize::try_from(orbital["set"].as_u64().unwrap()).unwrap() - 1];
            for key in ["set", "spin", "label", "irrep", "orbitals", "energy_hartree", "electrons", "complete"] {
                assert_eq!(told["set"][key], set[key], "{name} {asked}: {key}");
            }
            let here = told["orbitals"].as_array().unwrap().iter().find(|of| of["index"] == orbital["index"]).unwrap();
            for key in ["irrep", "component", "purity", "abelian_irrep", "energy_hartree", "occupation"] {
                assert_eq!(here[key], orbital[key], "{name} {asked}: {key}");
            }
            check_sums(&format!("{name} {asked}"), &told, keeps);
        }
    }
}

/// Σ weights = 1, n(Γ) d = Σ weights of Γ, whole multiplicities and table characters for pure complete sets, Schur's lemma.
fn check_sums(what: &str, told: &Value, keeps: bool) {
    let orbitals = told["orbitals"].as_array().unwrap();
    for orbital in orbitals {
        let total = |key: &str| -> f64 {
            orbital[key].as_array().unwrap().iter().map(|weight| weight["weight"].as_f64().unwrap()).sum()
        };
        assert!(near(total("weights"), 1.0, 1e-4), "{what}: weights sum to {}", total("weights"));
        if told["point_group"] != "Kh" {
            assert!(near(total("abelian_weights"), 1.0, 1e-4), "{what}: abelian weights");
        }
        if !orbital["partners"].as_array().unwrap().is_empty() {
            let largest = orbital["weights"][0]["weight"].as_f64().unwrap();
            assert!(near(total("partners"), largest, 1e-6), "{what}: partners sum to the weight of their irrep");
        }
    }
    for part in told["reduction"].as_array().unwrap() {
        let n = part["multiplicity"].as_f64().unwrap();
        let by_weights: f64 = orbitals
            .iter()
            .flat_map(|orbital| orbital["weights"].as_array().unwrap())
            .filter(|weight| weight["irrep"] == part["irrep"])
            .map(|weight| weight["weight"].as_f64().unwrap())
            .sum();
        let dimension = part["dimension"].as_f64().unwrap();
        assert!(near(n * dimension, by_weights, 2e-5), "{what}: {} {n} against {by_weights}", part["irrep"]);
        let terms = numbers(&part["terms"]);
        if !terms.is_empty() {
            let h = told["operations"].as_f64().unwrap() * part["constituents"].as_f64().unwrap();
            assert!(near(terms.iter().sum::<f64>() / h, n, 1e-9), "{what}: the sum of what is shown");
        }
        if keeps && told["set"]["complete"] == true {
            let wanted = if part["irrep"] == told["set"]["irrep"] { 1.0 } else { 0.0 };
            assert!(near(n, wanted, 1e-3), "{what}: {} occurs {n} times", part["irrep"]);
        }
    }
    if keeps && told["set"]["complete"] == true {
        for class in told["characters"].as_array().unwrap() {
            let (measured, table) = (class["measured"].as_f64().unwrap(), class["table"].as_f64().unwrap());
            assert!(near(measured, table, 2e-3), "{what}: {} {measured} against {table}", class["class"]);
        }
        let d = orbitals.len() as f64;
        // The rotations of an atom are a sample of 48, which gives the mean roughly.
        let limit = if told["point_group"] == "Kh" { 0.5 / d } else { 2e-3 };
        for row in told["connections"].as_array().unwrap() {
            for mean in numbers(row) {
                assert!(near(mean, 1.0 / d, limit), "{what}: mean of squares {mean}");
            }
        }
        if let Some(connection) = told["nearest_outside"]["connection"].as_f64() {
            assert!(connection < 1e-3, "{what}: joined with an orbital outside by {connection}");
        }
    }
}

#[test]
fn characters_are_those_of_the_printed_table() {
    for (name, asked) in [("benzene_631g", "1e1g"), ("boric_acid_c3h_631g", "homo"), ("scenario/lantern-3", "2t2g")] {
        let told = json(&["label", &file(name), "--explain", asked]);
        let table = json(&["table", told["point_group"].as_str().unwrap()]);
        let irrep = table["irreps"].as_array().unwrap().iter().find(|of| of["name"] == told["set"]["irrep"]).unwrap();
        let classes = told["characters"].as_array().unwrap();
        for (at, class) in classes.iter().enumerate() {
            assert_eq!(class["class"], table["classes"][at]["symbol"]);
            assert_eq!(class["size"], table["classes"][at]["size"]);
            assert_eq!(class["table"], irrep["characters"][at]);
            assert_eq!(class["exact"], irrep["exact"][at]);
        }
        assert_eq!(classes.len(), table["classes"].as_array().unwrap().len());
    }
}

#[test]
fn a_mixed_orbital_is_shown_as_such() {
    // One localised bond alone is three quarters t2; all four together are a1 + t2 (common practice).
    let told = json(&["label", &file("localised_methane_boys"), "--explain", "3"]);
    assert_eq!(told["set"]["irrep"], Value::Null);
    let n = |irrep: &str| {
        let parts = told["reduction"].as_array().unwrap();
        parts.iter().find(|part| part["irrep"] == irrep).unwrap()["multiplicity"].as_f64().unwrap()
    };
    for (irrep, wanted) in [("A1", 1.0), ("T2", 1.0), ("E", 0.0), ("A2", 0.0), ("T1", 0.0)] {
        assert!(near(n(irrep), wanted, 1e-6), "{irrep}: {}", n(irrep));
    }
    let measured: Vec<f64> =
        told["characters"].as_array().unwrap().iter().map(|class| class["measured"].as_f64().unwrap()).collect();
    // Bonds that an operation leaves in place: E 4, C3 1, C2 0, S4 0, σd 2.
    for (measured, wanted) in measured.iter().zip([4.0, 1.0, 0.0, 0.0, 2.0]) {
        assert!(near(*measured, wanted, 1e-6));
    }
    assert!(near(told["orbitals"][0]["purity"].as_f64().unwrap(), 0.75, 1e-6));
}

#[test]
fn a_transition_is_reduced_as_by_hand() {
    let told = json(&["label", &file("scenario/lantern-3"), "--explain-transition", "homo", "lumo"]);
    let column = |key: &str| -> Vec<f64> {
        told["characters"].as_array().unwrap().iter().map(|class| class[key].as_f64().unwrap()).collect()
    };
    // Oh, classes E 8C3 6C4 3C2 6C2' i 8S6 6S4 3σh 6σd: T2g and Eg of any printed table (common practice), multiplied by hand.
    assert_eq!(column("from"), [3.0, 0.0, -1.0, -1.0, 1.0, 3.0, 0.0, -1.0, -1.0, 1.0]);
    assert_eq!(column("to"), [2.0, -1.0, 0.0, 2.0, 0.0, 2.0, -1.0, 0.0, 2.0, 0.0]);
    assert_eq!(column("product"), [6.0, 0.0, 0.0, -2.0, 0.0, 6.0, 0.0, 0.0, -2.0, 0.0]);
    for part in told["reduction"].as_array().unwrap() {
        let wanted = if part["irrep"] == "T1g" || part["irrep"] == "T2g" { 1.0 } else { 0.0 };
        assert!(near(part["multiplicity"].as_f64().unwrap(), wanted, 1e-12), "{}", part["irrep"]);
    }
    assert_eq!(told["transition"]["electric_dipole"]["allowed"], false);
}

#[test]
fn both_verbs_tell_the_same_and_agree_with_the_list() {
    let pairs = [
        ("benzene_with_modes_sto3g", "homo", "lumo"),
        ("carbon_dioxide_631gs", "homo", "lumo"),
        ("formaldehyde_631gs", "2b2", "2b1"),
        ("boric_acid_c3h_631g", "homo", "lumo"),
        ("oxygen_triplet_631gs", "beta:homo", "beta:lumo"),
        ("neon_def2tzvp", "homo", "lumo"),
    ];
    for (name, from, to) in pairs {
        let told = json(&["transitions", &file(name), "--explain", from, to]);
        assert_eq!(told, json(&["label", &file(name), "--explain-transition", from, to]), "{name}");
        let plain = |text: &str| text.trim_start_matches("beta:").to_owned();
        let listed = json(&["transitions", &file(name), "--from", &plain(from), "--to", &plain(to)]);
        let listed = listed["transitions"].as_array().unwrap();
        let entry = listed.iter().find(|entry| entry["spin"] == told["transition"]["spin"]).unwrap();
        for key in [
            "from",
            "to",
            "product",
            "electric_dipole",
            "magnetic_dipole",
            "electric_quadrupole",
            "laporte",
            "vibronic",
        ] {
            assert_eq!(told["transition"][key], entry[key], "{name}: {key}");
        }
        // Multiplicities are whole, count the dimension of the product, and are those of the product listed.
        let mut dimension = 0.0;
        for part in told["reduction"].as_array().unwrap() {
            let n = part["multiplicity"].as_f64().unwrap();
            assert!(near(n, n.round(), 1e-9), "{name}: {n}");
            dimension += n * part["dimension"].as_f64().unwrap();
            let times = entry["product"].as_array().unwrap().iter().filter(|irrep| **irrep == part["irrep"]).count();
            assert!(near(n, times as f64, 1e-9), "{name}: {}", part["irrep"]);
        }
        if let Some(identity) = told["characters"].as_array().unwrap().first() {
            assert!(near(dimension, identity["product"].as_f64().unwrap(), 1e-9), "{name}");
        }
        // Where the rule forbids, the moment is zero; sums over components are the strengths listed.
        let mut sums = [0.0; 2];
        for component in told["operators"].as_array().unwrap() {
            let strength = component["strength_au"].as_f64().unwrap();
            assert!(component["allowed"] == true || strength < 1e-7, "{name}: {component}");
            let held = component["irreps"]
                .as_array()
                .unwrap()
                .iter()
                .any(|irrep| entry["product"].as_array().unwrap().contains(irrep));
            assert_eq!(component["allowed"], held, "{name}: {component}");
            match component["operator"].as_str().unwrap() {
                "electric dipole" => sums[0] += strength,
                "magnetic dipole" => sums[1] += strength,
                _ => {}
            }
        }
        for (sum, operator) in sums.iter().zip(["electric_dipole", "magnetic_dipole"]) {
            assert!(near(*sum, entry[operator]["strength_au"].as_f64().unwrap(), 1e-9), "{name}: {operator}");
        }
    }
}

#[test]
fn what_names_no_set_is_refused() {
    let water = file("water_631gs");
    let refused: &[(&[&str], &str)] = &[
        (&["label", &water, "--explain", "9b2"], "no set of orbitals is called 9b2"),
        (&["label", &water, "--explain", "beta:2"], "one set of orbitals for both spins"),
        (&["label", &water, "--explain", "gamma:2"], "names no set"),
        (&["label", &water, "--explain", "homo+1"], "names no set"),
        (&["label", &water, "--explain", "999"], "orbitals count from 1 to"),
        (&["label", &water, "--explain-transition", "homo", "homo"], "no two sets of one spin"),
        (&["label", &water, "--explain", "homo", "--format", "csv"], "not csv"),
        (&["label", &water, "--explain", "homo", "--all"], "cannot be used"),
    ];
    for (arguments, message) in refused {
        let (status, stdout, errors) = run(arguments);
        assert_eq!(status, Some(2), "{arguments:?}: {errors}");
        assert!(stdout.is_empty() && errors.contains(message), "{arguments:?}: {errors}");
    }
}

#[test]
fn an_unrestricted_file_takes_the_spin_in_front() {
    let oxygen = file("oxygen_triplet_631gs");
    let alpha = json(&["label", &oxygen, "--explain", "homo"]);
    let beta = json(&["label", &oxygen, "--explain", "beta:homo"]);
    assert_eq!((alpha["set"]["spin"].as_str(), beta["set"]["spin"].as_str()), (Some("alpha"), Some("beta")));
    assert_eq!(alpha["set"]["label"], "1pi_g");
    assert_eq!(beta["set"]["label"], "1pi_u");
}
