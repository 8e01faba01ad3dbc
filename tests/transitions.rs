//! Moments between orbitals against a reference library, and the transitions of real molecules against published rules.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use orbsieve::labelling::Thresholds;
use orbsieve::model::{self, Molecule};
use orbsieve::wavefunction::{self, Moments};
use serde_json::Value;
use std::path::Path;

fn folder() -> std::path::PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/molecules")
}

fn molecule(name: &str) -> Molecule {
    let bytes = std::fs::read(folder().join(format!("{name}.molden"))).unwrap();
    model::read_molden(&bytes).unwrap().0
}

fn matrices(moments: &Moments) -> Vec<&ndarray::Array2<f64>> {
    moments.position.iter().chain(&moments.gradient).chain(&moments.angular).chain(&moments.second).collect()
}

/// Values by libcint, made by `tests/molecules/scripts/moments.py`: single pairs, and weighted sums over all pairs.
#[test]
fn moments_agree_with_a_reference_library() {
    let reference: Value =
        serde_json::from_slice(&std::fs::read(folder().join("reference/moments_sums.json")).unwrap()).unwrap();
    let reference = reference.as_object().unwrap();
    assert!(reference.len() >= 8);
    for (name, row) in reference {
        let mut molecule = molecule(name);
        let settled = wavefunction::settle(&mut molecule, Thresholds::STANDARD.orthonormality).unwrap();
        let origin = nalgebra::Point3::from_slice(&numbers(&row["origin_bohr"]));
        let orbitals = molecule.orbital_sets[0].coefficients.view();
        let moments = wavefunction::moments(&settled.basis, &origin, orbitals, orbitals);
        for pair in row["pairs"].as_array().unwrap() {
            let place = |key: &str| usize::try_from(pair[key].as_u64().unwrap()).unwrap();
            let (i, j) = (place("bra"), place("ket"));
            for (at, (ours, theirs)) in matrices(&moments).iter().zip(numbers(&pair["moments"])).enumerate() {
                let ours = ours[(i, j)];
                assert!(
                    (ours - theirs).abs() < 1e-8 * theirs.abs().max(1.0),
                    "{name} {at} ({i}, {j}): {ours} {theirs}"
                );
            }
        }
        for (at, (ours, theirs)) in matrices(&moments).iter().zip(numbers(&row["sums"])).enumerate() {
            let sum: f64 = ours.indexed_iter().map(|((i, j), value)| value * (i as f64 + 2.0 * j as f64).cos()).sum();
            let scale = ours.iter().map(|value| value.abs()).sum::<f64>();
            assert!((sum - theirs).abs() < 1e-9 * scale, "{name} {at}: {sum} {theirs}");
        }
    }
}

fn numbers(value: &Value) -> Vec<f64> {
    value.as_array().unwrap().iter().map(|number| number.as_f64().unwrap()).collect()
}
