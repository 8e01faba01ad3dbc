//! `schema`: every JSON output of every verb fits its schema, and the schemas bite.
//!
//! Judge of validity: a general JSON Schema library. Judge of bite: outputs with a key taken away, a key too many or a value
//! of another type, at every place of the document, are refused.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use jsonschema::Validator;
use serde_json::{Value, json};
use std::process::Command;

fn run(arguments: &[&str]) -> Vec<u8> {
    let mut command = Command::new(env!("CARGO_BIN_EXE_orbsieve"));
    let output = command.args(arguments).current_dir(env!("CARGO_MANIFEST_DIR")).output().unwrap();
    assert!(matches!(output.status.code(), Some(0 | 1)), "{arguments:?}: {}", String::from_utf8_lossy(&output.stderr));
    output.stdout
}

fn printed(arguments: &str) -> Value {
    let words: Vec<&str> = arguments.split_whitespace().chain(["--format", "json"]).collect();
    serde_json::from_slice(&run(&words)).unwrap()
}

fn validator(name: &str) -> Validator {
    let schema: Value = serde_json::from_slice(&run(&["schema", name])).unwrap();
    assert_eq!(schema["$schema"], "https://json-schema.org/draft/2020-12/schema");
    assert!(jsonschema::meta::is_valid(&schema), "{name} is no schema");
    jsonschema::validator_for(&schema).unwrap()
}

fn errors(validator: &Validator, document: &Value) -> Vec<String> {
    validator.iter_errors(document).map(|error| format!("{} at {}", error, error.instance_path())).take(5).collect()
}

/// Schema, then runs whose outputs it describes.
const OUTPUTS: &[(&str, &[&str])] = &[
    (
        "label",
        &[
            "label tests/molecules/water_631gs.molden --window 3,3",
            "label tests/molecules/scenario/lantern-3.molden",
            "label tests/molecules/oxygen_triplet_631gs.molden",
            "label tests/molecules/carbon_dioxide_631gs.molden",
            "label tests/molecules/neon_def2tzvp.molden",
            "label tests/molecules/helium_pinwheel_c4.molden",
            "label tests/molecules/chfclbr_c1_sto3g.molden",
            "label tests/molecules/localised_methane_boys.molden",
            "label tests/molecules/permanganate_td_def2svp.molden",
            "label tests/molecules/manganese_aqua_sextet_th_sto3g.molden",
            "label tests/molecules/benzene_631g.molden --group D2h",
            "label tests/molecules/cobalt_ammine_d3d_sto3g.molden --frame Co,N",
            "label tests/molecules/noisy_benzene.molden",
        ],
    ),
    (
        "label-explain",
        &[
            "label tests/molecules/benzene_631g.molden --explain homo",
            "label tests/molecules/localised_methane_boys.molden --explain 3",
            "label tests/molecules/oxygen_triplet_631gs.molden --explain beta:lumo",
            "label tests/molecules/neon_def2tzvp.molden --explain 3",
        ],
    ),
    (
        "transition-explain",
        &[
            "label tests/molecules/benzene_with_modes_sto3g.molden --explain-transition homo lumo",
            "transitions tests/molecules/carbon_dioxide_631gs.molden --explain homo lumo",
            "transitions tests/molecules/mixed_ethene.molden --explain 7 9",
        ],
    ),
    (
        "geometry",
        &[
            "geometry tests/molecules/water_631gs.molden",
            "geometry tests/molecules/xyz/octahedron_shaken.xyz",
            "geometry tests/molecules/neon_def2tzvp.molden",
        ],
    ),
    (
        "transitions",
        &[
            "transitions tests/molecules/benzene_with_modes_sto3g.molden",
            "transitions tests/molecules/formaldehyde_631gs.molden",
            "transitions tests/molecules/oxygen_triplet_631gs.molden --window 2,2",
            "transitions tests/molecules/permanganate_td_def2svp.molden --max-ev 8",
        ],
    ),
    (
        "audit",
        &[
            "audit tests/molecules/broken_benzene_cation.molden",
            "audit tests/molecules/broken_h4_square.molden",
            "audit tests/molecules/localised_methane_boys.molden",
            "audit tests/molecules/oxygen_triplet_631gs.molden",
            "audit tests/molecules/benzene_631g.molden",
        ],
    ),
    (
        "modes",
        &[
            "modes tests/molecules/psi4_modes_benzene.molden",
            "modes tests/molecules/openmolcas_modes_ammonia.molden",
            "modes tests/molecules/xyz/octahedron_shaken.xyz",
            "modes tests/molecules/neon_def2tzvp.molden",
        ],
    ),
    (
        "states",
        &[
            "states Oh t2g^3,eg^1 --spin-orbit --transitions",
            "states Oh d^3",
            "states O --level 5/2,7/2 --term 4F",
            "states Dinfh pi_g^2 --to pi_g^1,sigma_u^1",
            "states Kh 4f^7",
            "states tests/molecules/oxygen_triplet_631gs.molden",
            "states tests/molecules/broken_benzene_cation.molden",
        ],
    ),
    ("table", &["table Oh", "table C3", "table Dinfh", "table C1", "table D2h", "table Kh", "table Ih"]),
    ("table-double", &["table O --double", "table D3 --double", "table Cinfv --double"]),
    ("table-transition", &["table Oh --transition t2g eg", "table C3v --transition e e"]),
];

/// Keys that an output leaves out where they have nothing to say.
const MAY_BE_ABSENT: [&str; 10] = [
    "content",
    "accidental_with",
    "d_block",
    "active_window",
    "jahn_teller",
    "triplets",
    "modes",
    "placement",
    "transitions",
    "basis",
];

/// Keys whose value is a map from names to values.
const MAPS: [&str; 14] = [
    "swaps",
    "shells",
    "electrons_per_irrep",
    "correlation",
    "translations",
    "rotations",
    "vibrations",
    "stretches",
    "bends",
    "products",
    "symmetric_squares",
    "antisymmetric_squares",
    "irreps",
    "",
];

/// Pointers of all values, of arrays only the first element and the last.
fn places(value: &Value, at: &str, found: &mut Vec<String>) {
    found.push(at.to_owned());
    match value {
        Value::Object(map) => {
            for (key, inner) in map {
                places(inner, &format!("{at}/{}", key.replace('~', "~0").replace('/', "~1")), found);
            }
        }
        Value::Array(items) => {
            for (index, inner) in items.iter().enumerate().filter(|(index, _)| *index == 0 || *index + 1 == items.len())
            {
                places(inner, &format!("{at}/{index}"), found);
            }
        }
        _ => {}
    }
}

fn of_another_type(value: &Value) -> Value {
    match value {
        Value::String(_) => json!(17),
        Value::Null | Value::Number(_) => json!({"surprise": true}),
        Value::Bool(_) | Value::Array(_) | Value::Object(_) => json!("surprise"),
    }
}

/// Every document with one fault that a closed and typed schema must see.
fn faulty(document: &Value) -> Vec<(String, Value)> {
    let mut found = Vec::new();
    places(document, "", &mut found);
    let mut faulty = Vec::new();
    for place in found {
        let value = document.pointer(&place).unwrap();
        let mut changed = document.clone();
        *changed.pointer_mut(&place).unwrap() = of_another_type(value);
        faulty.push((format!("{place} of another type"), changed));
        let Value::Object(map) = value else { continue };
        let key = place.rsplit('/').next().unwrap();
        // Maps from irreps to irreps have names of irreps as their keys one level up.
        let is_map = |key: &str| !place.is_empty() && MAPS.contains(&key);
        let parent = place.rsplit('/').nth(1).unwrap_or_default();
        if is_map(key) || (parent == "products" && is_map(parent)) {
            continue;
        }
        let mut changed = document.clone();
        changed.pointer_mut(&place).unwrap()["surplus"] = json!(1);
        faulty.push((format!("{place} with a key too many"), changed));
        for key in map.keys().filter(|key| !MAY_BE_ABSENT.contains(&key.as_str())) {
            let mut changed = document.clone();
            changed.pointer_mut(&place).unwrap().as_object_mut().unwrap().remove(key);
            faulty.push((format!("{place} without {key}"), changed));
        }
    }
    faulty
}

#[test]
fn every_output_fits_its_schema() {
    let all = validator_of_all();
    for (name, runs) in OUTPUTS {
        let validator = validator(name);
        for arguments in *runs {
            let document = printed(arguments);
            assert!(validator.is_valid(&document), "{arguments}: {:#?}", errors(&validator, &document));
            assert!(all.is_valid(&document), "{arguments} fits no schema of all");
        }
    }
}

fn validator_of_all() -> Validator {
    let schema: Value = serde_json::from_slice(&run(&["schema"])).unwrap();
    assert!(jsonschema::meta::is_valid(&schema));
    jsonschema::validator_for(&schema).unwrap()
}

#[test]
fn the_report_of_purify_fits_its_schema() {
    let scratch = tempfile::tempdir().unwrap();
    let target = scratch.path().join("pure.molden");
    let validator = validator("purify");
    for file in ["ammonia_631gs", "noisy_benzene", "oxygen_triplet_631gs"] {
        let document = printed(&format!("purify tests/molecules/{file}.molden --output {}", target.display()));
        assert!(validator.is_valid(&document), "{file}: {:#?}", errors(&validator, &document));
        for (fault, changed) in faulty(&document) {
            assert!(!validator.is_valid(&changed), "{file}: {fault} passes");
        }
    }
}

#[test]
fn every_line_of_batch_fits_its_schema() {
    let output = Command::new(env!("CARGO_BIN_EXE_orbsieve"))
        .args(["batch", "tests/molecules/water_631gs.molden", "tests/broken/no-such-file.molden", "Cargo.toml"])
        .current_dir(env!("CARGO_MANIFEST_DIR"))
        .output()
        .unwrap();
    assert_eq!(output.status.code(), Some(3));
    let validator = validator("batch");
    let lines: Vec<Value> =
        output.stdout.split(|&byte| byte == b'\n').filter_map(|line| serde_json::from_slice(line).ok()).collect();
    assert_eq!(lines.len(), 3);
    assert!(lines[0].get("orbitals").is_some() && lines[1].get("error").is_some() && lines[2].get("error").is_some());
    for line in &lines {
        assert!(validator.is_valid(line), "{:?}", errors(&validator, line));
        for (what, faulty) in faulty(line) {
            assert!(!validator.is_valid(&faulty), "{what} is not refused");
        }
    }
}

#[test]
fn schemas_refuse_what_is_not_so() {
    let all = validator_of_all();
    for (name, runs) in OUTPUTS {
        let validator = validator(name);
        for arguments in runs.iter().take(2) {
            for (fault, changed) in faulty(&printed(arguments)) {
                assert!(!validator.is_valid(&changed), "{arguments}: {fault} passes");
                // What lacks a part may be the output of another verb.
                let may_be_another = fault.contains("without");
                assert!(may_be_another || !all.is_valid(&changed), "{arguments}: {fault} passes all");
            }
        }
    }
}

#[test]
fn every_description_is_there() {
    fn described(schema: &Value, at: &str) {
        for (key, property) in schema["properties"].as_object().into_iter().flatten() {
            let text = property["description"].as_str().unwrap_or_default();
            assert!(!text.is_empty(), "{at}/{key} has no description");
            assert!(!text.contains("[`"), "{at}/{key} points into the source: {text}");
        }
    }
    for (name, _) in OUTPUTS.iter().chain(&[("purify", &[][..])]) {
        let schema: Value = serde_json::from_slice(&run(&["schema", name])).unwrap();
        described(&schema, name);
        for (definition, inner) in schema["$defs"].as_object().into_iter().flatten() {
            described(inner, &format!("{name}/{definition}"));
        }
    }
}

#[test]
fn an_unknown_output_is_a_usage_error() {
    let mut command = Command::new(env!("CARGO_BIN_EXE_orbsieve"));
    let output = command.args(["schema", "poetry"]).output().unwrap();
    assert_eq!(output.status.code(), Some(2));
}
