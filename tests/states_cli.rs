//! `states` and `table --double` as a person meets them: spellings, refusals, files with open shells, JSON.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use serde_json::Value;
use std::process::{Command, Output};

fn run(arguments: &[&str]) -> Output {
    Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(arguments)
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap()
}

fn text(arguments: &[&str]) -> String {
    let output = run(arguments);
    assert!(output.status.success(), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap()
}

fn json(arguments: &[&str]) -> Value {
    serde_json::from_str(&text(&[arguments, &["--format", "json"]].concat())).unwrap()
}

/// Exit status and what is told on standard error.
fn refused(arguments: &[&str]) -> (i32, String) {
    let output = run(arguments);
    assert!(output.stdout.is_empty(), "{arguments:?} prints a result");
    (output.status.code().unwrap(), String::from_utf8(output.stderr).unwrap())
}

#[test]
fn spellings_of_one_configuration_are_one() {
    let first = text(&["states", "Oh", "t2g^3 eg^1"]);
    for spelling in ["t2g3eg1", "t2g3 eg", "T2g³ Eg¹", "(t2g)^3(eg)^1", "t2g**3, eg", "t_2g^{3} e_g", "F2g^3 eg"] {
        assert_eq!(text(&["states", "oh", spelling]), first, "{spelling}");
    }
    assert_eq!(text(&["states", "D∞h", "πg²"]), text(&["states", "Dinfh", "pi_g^2"]));
    assert_eq!(text(&["states", "D3h", "e″1 a2″2"]), text(&["states", "D3h", "e''^1 a2''^2"]));
}

#[test]
fn what_cannot_be_read_is_refused_with_what_is_expected() {
    for (arguments, expected) in [
        (&["states", "Oh", "t2^3"][..], "Oh has a1g, a2g, eg, t1g, t2g, a1u, a2u, eu, t1u, t2u"),
        (&["states", "Oh", "t2g^7"], "t2g holds at most 6 electrons, not 7"),
        (&["states", "Oh", "t2g^1 t2g^1"], "`1t2g^1 2t2g^1`"),
        (&["states", "Oh", " "], "an empty configuration"),
        (&["states", "Td", "d^11"], "d holds at most 10 electrons, not 11"),
        (&["states", "Td", "f2"], "can be read as the free ion's f^2 or as t2^1"),
        (&["states", "Td", "d2 s1"], "several shells of a free ion"),
        (&["states", "D26", "e12"], "can be read as e12^1 or as e1^2"),
        (&["states", "Oh"], "a configuration is missing"),
        (&["states", "Xh", "a1"], "unknown point group `Xh`"),
        (&["states", "O", "--level", "5/3"], "`5/3` is no level"),
        (&["states", "O", "--term", "4Z"], "`4Z` is no term"),
        (&["states", "Ih", "1hu^5 2hu^5 3hu^5 4hu^5 5hu^5"], "microstates, more than"),
        (&["states", "Oh", "t2g^1", "--format", "csv"], "states prints text, json, latex or md, not csv"),
    ] {
        let (status, told) = refused(arguments);
        assert_eq!(status, 2, "{arguments:?}: {told}");
        assert!(told.contains(expected), "{arguments:?}: {told}");
    }
    let (status, _) = refused(&["states", "no such file.molden"]);
    assert_eq!(status, 3);
}

#[test]
fn terms_and_components_stand_in_json() {
    let document = json(&["states", "Oh", "t2g^5", "--to", "t2g^4 eg^1"]);
    let configuration = &document["configuration"];
    assert_eq!(configuration["ground"]["terms"][0], "2T2g");
    assert_eq!(configuration["ground"]["certainty"], "only");
    let term = &configuration["terms"][0];
    assert_eq!((&term["states"], &term["first_order_splitting"]), (&Value::from(6), &Value::from(true)));
    let components: Vec<&str> =
        term["spin_orbit"].as_array().unwrap().iter().map(|part| part["gamma"].as_str().unwrap()).collect();
    assert_eq!(components, ["Gamma7g", "Gamma8g"]);
    assert_eq!(term["jahn_teller"]["modes"][1]["irrep"], "T2g");
    assert_eq!(term["jahn_teller"]["modes"][1]["in_molecule"], Value::Null);
    // d–d: no electric dipole at all, magnetic dipoles where T1g allows.
    let transitions = document["transitions"].as_array().unwrap();
    assert!(transitions.iter().all(|rule| rule["electric_dipole"]["allowed"] == false));
    assert!(transitions.iter().any(|rule| rule["magnetic_dipole"]["allowed"] == true));
    // A free ion's shell.
    let document = json(&["states", "Td", "d7"]);
    assert_eq!(document["correlation"]["lists_agree"], true);
    assert_eq!(document["correlation"]["microstates"], 120.0);
    // Levels: Ce(III) in a cube, Γ7 + Γ8.
    let document = json(&["states", "O", "--level", "5/2", "--term", "2F"]);
    assert_eq!(document["levels"][0]["components"][1]["gamma"], "Gamma8");
    assert_eq!(document["levels"][1]["components"].as_array().unwrap().len(), 3);
}

#[test]
fn open_shells_of_files_are_configurations() {
    // file, group, configuration, ground term, J
    for (file, group, configuration, ground, j) in [
        ("oxygen_triplet_631gs", "Dinfh", "1pi_g^2", "3Sigma_g-", Value::Null),
        ("cyclobutadiene_triplet_d4h_sto3g", "D4h", "1eg^2", "3A2g", Value::Null),
        ("psi4_amidogen_uhf_pure", "C2v", "1b1^1", "2B1", Value::Null),
        ("nitrogen_atom_quartet", "Kh", "1p^3", "4S_u", Value::from("3/2")),
        ("manganese_aqua_sextet_th_sto3g", "Th", "3tg^3 4eg^2", "6Ag", Value::Null),
        ("water_631gs", "C2v", "", "1A1", Value::Null),
    ] {
        let path = format!("tests/molecules/{file}.molden");
        let document = json(&["states", &path, "--quiet"]);
        assert_eq!(document["point_group"], group, "{file}");
        assert_eq!(document["configuration"]["text"], configuration, "{file}");
        assert_eq!(document["configuration"]["ground"]["terms"][0], ground, "{file}");
        assert_eq!(document["configuration"]["ground"]["j"], j, "{file}");
        assert!(document["obstacles"].as_array().unwrap().is_empty());
    }
}

#[test]
fn modes_of_the_molecule_stand_beside_those_that_the_group_allows() {
    // Hexaaquamanganese(II), Th: characters of 3N by hand 57 (E), 0 (C3), −3 (C2), −3 (i), 0 (S6), 9 (σh) give
    // 3 Ag + Au + 3 Eg + Eu + 5 Tg + 8 Tu; a ⁴Tg term is split by eg and tg.
    let document = json(&["states", "tests/molecules/manganese_aqua_sextet_th_sto3g.molden", "--quiet"]);
    let terms = document["configuration"]["terms"].as_array().unwrap();
    let term = terms.iter().find(|term| term["term"] == "4Tg").unwrap();
    let modes: Vec<(&str, u64)> = term["jahn_teller"]["modes"]
        .as_array()
        .unwrap()
        .iter()
        .map(|mode| (mode["irrep"].as_str().unwrap(), mode["in_molecule"].as_u64().unwrap()))
        .collect();
    assert_eq!(modes, [("Eg", 3), ("Tg", 5)]);
}

#[test]
fn broken_open_shells_are_explained() {
    for (file, reason) in [
        ("broken_chromium_fluoride_d1", ": 1 of the 3 partners of 1t2g"),
        ("broken_nitric_oxide", ": 1 of the 2 partners of 2pi"),
        ("broken_h2_stretched", "belongs to no irrep"),
        ("xtb_amidogen", "further than 0.02 from a whole number"),
    ] {
        let path = format!("tests/molecules/{file}.molden");
        let document = json(&["states", &path, "--quiet"]);
        assert_eq!(document["configuration"], Value::Null, "{file}");
        let obstacles = document["obstacles"].as_array().unwrap();
        assert!(obstacles.iter().any(|obstacle| obstacle.as_str().unwrap().contains(reason)), "{file}: {obstacles:?}");
        assert!(text(&["states", &path, "--quiet"]).contains("A configuration can be typed instead"));
    }
}

#[test]
fn double_groups_as_tables() {
    let document = json(&["table", "O", "--double"]);
    assert_eq!(document["order"], 48);
    let spinors: Vec<(&str, &str)> = document["irreps"]
        .as_array()
        .unwrap()
        .iter()
        .filter(|irrep| irrep["double_valued"] == true)
        .map(|irrep| (irrep["name"].as_str().unwrap(), irrep["gamma"].as_str().unwrap()))
        .collect();
    assert_eq!(spinors, [("E1/2", "Gamma6"), ("E5/2", "Gamma7"), ("F3/2", "Gamma8")]);
    assert_eq!(document["products"]["Gamma"], Value::Null);
    assert_eq!(document["products"]["T1"]["F3/2"], "E1/2 + E5/2 + 2 F3/2");
    for group in ["C1", "S4", "Ih", "Dinfh", "Kh", "D17d"] {
        assert!(text(&["table", group, "--double"]).contains("J = 15/2"), "{group}");
    }
}
