//! Verdicts on real files: against numerical integration of the densities, against the engines' ⟨S²⟩, and by hand.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use approx::assert_abs_diff_eq;
use nalgebra::{Matrix3, Point3};
use orbsieve::audit::density::{Electrons, Occupied};
use orbsieve::audit::verdict::{Degeneracy, Origin, Verdict};
use orbsieve::audit::{Audit, Limits, audit};
use orbsieve::labelling::{Labelled, Thresholds};
use orbsieve::model::Molecule;
use orbsieve::wavefunction::{Operations, Turned};
use serde_json::Value;
use support::files::{labelled, reference};

fn audited(name: &str) -> (Molecule, Labelled, Audit) {
    let (molecule, labelled) = labelled(name);
    let (labelled, found) = audit(&molecule, labelled, &Thresholds::STANDARD, &Limits::STANDARD).unwrap();
    (molecule, labelled, found)
}

/// File, verdict, group that all densities keep.
const VERDICTS: &[(&str, Verdict, &str)] = &[
    ("water_631gs", Verdict::Intact, "C2v"),
    ("nitrogen_atom_quartet", Verdict::Intact, "Kh"),
    ("psi4_amidogen_uhf_pure", Verdict::Intact, "C2v"),
    ("intact_methyl_radical", Verdict::Rotated, "D3h"),
    ("oxygen_triplet_631gs", Verdict::Rotated, "Dinfh"),
    ("cyclobutadiene_triplet_d4h_sto3g", Verdict::Rotated, "D4h"),
    ("manganese_aqua_sextet_th_sto3g", Verdict::Rotated, "Th"),
    ("turned_ammonia", Verdict::Rotated, "C3v"),
    ("turned_methane", Verdict::Rotated, "Td"),
    ("noisy_benzene", Verdict::Rotated, "D6h"),
    ("mixed_ethene", Verdict::Mixed, "D2h"),
    ("localised_methane_boys", Verdict::Mixed, "Td"),
    ("localised_ethene_pipek", Verdict::Mixed, "D2h"),
    ("sf6_shaken_sto3g", Verdict::Mixed, "Oh"),
    // Spins on opposite atoms, alternating round a ring.
    ("broken_h2_stretched", Verdict::Broken, "Cinfv"),
    ("broken_h4_square", Verdict::Broken, "D2h"),
    ("broken_helium_dimer_cation", Verdict::Broken, "Cinfv"),
    // One real component of e or t: the axis of that component stays.
    ("broken_benzene_cation", Verdict::Broken, "D2h"),
    ("broken_methane_cation", Verdict::Broken, "D2d"),
    ("broken_chromium_fluoride_d1", Verdict::Broken, "D3d"),
    ("broken_nitric_oxide", Verdict::Broken, "C2v"),
    ("broken_boron_atom", Verdict::Broken, "Dinfh"),
    ("broken_ethene_by_hand", Verdict::Broken, "C2v"),
    ("broken_ferrocene_restricted", Verdict::Broken, "Ci"),
];

#[test]
fn verdicts() {
    for &(name, verdict, kept) in VERDICTS {
        let (_, labelled, found) = audited(name);
        assert_eq!(found.verdict(), verdict, "{name}");
        assert_eq!(found.kept_by_all().name.to_string(), kept, "{name}");
        let broken = verdict == Verdict::Broken;
        // What is left of an atom's full group has its own labels already.
        assert_eq!(found.descent.is_some(), broken && found.lost_sphere.is_none(), "{name}");
        if let Some(descent) = &found.descent {
            assert_eq!(descent.subgroup.group.name().to_string(), kept, "{name}");
            // Orbitals of a broken solution are pure in what it keeps, but for those at one energy.
            let weights = descent.weights(labelled.spins[0].expectations.view());
            for row in weights.outer_iter() {
                assert_abs_diff_eq!(row.sum(), 1.0, epsilon = 1e-8);
            }
        }
    }
}

#[test]
fn origins() {
    let shell = |name: &str| {
        let (_, labelled, found) = audited(name);
        let origins = found.origins(&labelled);
        let shells = origins.iter().filter_map(|origin| match origin {
            Origin::OpenShell(shell) => Some((shell.name.symbol(), shell.electrons, shell.degeneracy)),
            _ => None,
        });
        (shells.collect::<Vec<_>>(), origins)
    };
    for (name, irrep, electrons, degeneracy) in [
        ("broken_benzene_cation", "e1g", 3, Degeneracy::JahnTeller),
        ("broken_methane_cation", "t2", 5, Degeneracy::JahnTeller),
        ("broken_chromium_fluoride_d1", "t2g", 1, Degeneracy::JahnTeller),
        ("broken_nitric_oxide", "pi", 1, Degeneracy::RennerTeller),
        ("broken_h4_square", "eu", 2, Degeneracy::Undecided),
        ("broken_boron_atom", "p_u", 1, Degeneracy::Atom),
    ] {
        assert_eq!(shell(name).0, [(irrep.to_owned(), electrons, degeneracy)], "{name}");
    }
    for name in ["broken_h2_stretched", "broken_h4_square"] {
        let (_, _, found) = audited(name);
        assert!(shell(name).1.contains(&Origin::SpinPolarisation), "{name}");
        // Every operation lost by alpha exchanges the spins.
        assert_eq!(found.swaps, found.kept.alpha.lost, "{name}");
        assert!(found.kept.total.is_whole());
    }
    assert_eq!(shell("broken_helium_dimer_cation").1, [Origin::Density]);
    assert_eq!(shell("broken_ferrocene_restricted").1, [Origin::Density]);
    assert_eq!(shell("mixed_ethene").1, [Origin::Orbitals]);
}

/// Values with seven decimals, integrated on a grid over turned densities: tests/molecules/scripts/reference_values.py.
#[test]
fn retention_agrees_with_integrated_densities() {
    const EPSILON: f64 = 2e-5;
    let reference = reference("retention");
    for (name, entry) in reference.as_object().unwrap() {
        let (molecule, labelled, found) = audited(name);
        let centre: Vec<f64> = entry["centre_bohr"].as_array().unwrap().iter().map(|x| x.as_f64().unwrap()).collect();
        let open = entry["open_shell"].as_bool().unwrap();
        let electrons = Electrons::of(&molecule, &labelled).unwrap();
        let mut worst: f64 = 0.0;
        let mut matched = 0;
        for row in entry["operations"].as_array().unwrap() {
            let matrix = Matrix3::from_fn(|i, j| row["matrix"][i][j].as_f64().unwrap());
            let value = |key: &str| row.get(key).and_then(Value::as_f64);
            let aa = value("aa").unwrap();
            let expected =
                if open { [aa, value("ba").unwrap(), value("ab").unwrap(), value("bb").unwrap()] } else { [aa; 4] };
            // The turned path knows nothing of atoms.
            let turned = Turned::new(
                labelled.settled.basis.clone(),
                labelled.settled.overlap.clone(),
                Point3::new(centre[0], centre[1], centre[2]),
                vec![(matrix, vec![None; molecule.atoms.len()])],
            );
            let here = products(&Operations::Turned(turned), 0, &electrons);
            for (value, expected) in here.iter().zip(expected) {
                assert_abs_diff_eq!(*value, expected, epsilon = EPSILON);
            }
            // The permuting path knows the operation by its matrix.
            let group = &labelled.symmetry.group;
            let at = (0..group.elements().len()).find(|&at| (labelled.symmetry.matrix(at) - matrix).amax() < 1e-4);
            if let Some(at) = at {
                matched += 1;
                let here = found.densities.products[at];
                for (value, expected) in [here.aa, here.ab, here.ba, here.bb].iter().zip(expected) {
                    assert_abs_diff_eq!(*value, expected, epsilon = EPSILON);
                }
            }
            let whole = entry["operations"][0]["aa"].as_f64().unwrap();
            worst = worst.max(whole - expected[0]);
        }
        assert!(matched > 0, "{name}: no operation matched");
        // What is integrated makes the same verdict.
        let broken = found.verdict() == Verdict::Broken;
        assert_eq!(broken, worst > Limits::STANDARD.carried || beta_lost(entry, open), "{name}: {worst}");
    }
}

fn beta_lost(entry: &Value, open: bool) -> bool {
    let rows = entry["operations"].as_array().unwrap();
    let whole = |row: &Value| row["bb"].as_f64().unwrap();
    open && rows.iter().any(|row| whole(&rows[0]) - whole(row) > Limits::STANDARD.carried)
}

fn products(operations: &Operations, element: usize, electrons: &Electrons) -> [f64; 4] {
    let of = |bra: &Occupied, ket: &Occupied| -> f64 {
        let elements = operations.elements(element, bra.rows(), ket.rows());
        elements.indexed_iter().map(|((i, j), v)| v * v * bra.occupations[i] * ket.occupations[j]).sum()
    };
    let (alpha, beta) = (&electrons.alpha, &electrons.beta);
    let scale = if electrons.alpha.is_determinant() { 1.0 } else { 0.25 };
    [of(alpha, alpha), of(beta, alpha), of(alpha, beta), of(beta, beta)].map(|value| value / scale)
}

#[test]
fn spin_agrees_with_the_engines() {
    for (name, entry) in reference("spin").as_object().unwrap() {
        let (_, _, found) = audited(name);
        assert_abs_diff_eq!(found.spin.s_squared.unwrap(), entry["s_squared"].as_f64().unwrap(), epsilon = 1e-6);
    }
    for (name, entry) in reference("spin_squared").as_object().unwrap() {
        let (_, _, found) = audited(name);
        assert_abs_diff_eq!(found.spin.s_squared.unwrap(), entry["s_squared"].as_f64().unwrap(), epsilon = 1e-6);
        let overlaps = entry["paired_overlaps"].as_array().unwrap();
        assert_eq!(overlaps.len(), found.spin.overlaps.len(), "{name}");
        for (here, there) in found.spin.overlaps.iter().zip(overlaps) {
            assert_abs_diff_eq!(*here, there.as_f64().unwrap(), epsilon = 1e-6);
        }
        let alpha = entry["alpha"].as_f64().unwrap();
        let beta = entry["beta"].as_f64().unwrap();
        let spin = 0.5 * (alpha - beta);
        assert_abs_diff_eq!(found.spin.ideal, spin * (spin + 1.0), epsilon = 1e-12);
    }
}

#[test]
fn closed_shells_have_no_spin() {
    let (_, _, found) = audited("benzene_sto3g");
    assert_abs_diff_eq!(found.spin.s_squared.unwrap(), 0.0, epsilon = 1e-7);
    assert!(found.densities.retention.iter().all(|row| row.spin.is_none()));
    assert!(found.spin.magnetic.is_empty() && found.swaps.is_empty());
}

#[test]
fn magnetic_pairs_sit_on_opposite_atoms() {
    let (_, _, found) = audited("broken_h2_stretched");
    let [pair] = found.spin.magnetic.as_slice() else { panic!("one pair") };
    // Overlap² = 1 − ⟨S²⟩ for two electrons.
    assert_abs_diff_eq!(pair.overlap.powi(2), 1.0 - found.spin.s_squared.unwrap(), epsilon = 1e-9);
    let largest = |shares: &[f64]| (0..shares.len()).max_by(|&a, &b| shares[a].total_cmp(&shares[b])).unwrap();
    assert_ne!(largest(&pair.alpha), largest(&pair.beta));
}

#[test]
fn exit_status_and_document_follow_the_contract() {
    let run = |name: &str, more: &[&str]| {
        let output = std::process::Command::new(env!("CARGO_BIN_EXE_orbsieve"))
            .args(["audit", "--quiet", "--format", "json"])
            .args(more)
            .arg(support::files::path(name))
            .output()
            .unwrap();
        let document: Value = serde_json::from_slice(&output.stdout).unwrap_or(Value::Null);
        (output.status.code().unwrap(), document)
    };
    for (name, more, status, verdict) in [
        ("water_631gs", vec![], 0, "intact"),
        ("turned_ammonia", vec!["--strict"], 0, "rotated"),
        ("mixed_ethene", vec![], 0, "mixed"),
        ("mixed_ethene", vec!["--strict"], 1, "mixed"),
        ("broken_h4_square", vec![], 1, "broken"),
        // Limits are options: what a larger one lets pass is no longer broken.
        ("broken_helium_dimer_cation", vec!["--carried", "2"], 0, "mixed"),
        ("mixed_ethene", vec!["--pure", "0.8", "--strict"], 0, "intact"),
    ] {
        let (code, document) = run(name, &more);
        assert_eq!((code, document["audit"]["verdict"].as_str().unwrap()), (status, verdict), "{name} {more:?}");
        assert_eq!(document["schema"], "orbsieve/1");
        for key in ["kept_group", "swaps_spin", "s_squared", "s_squared_ideal", "retention", "mixed_orbitals", "limits"]
        {
            assert!(!document["audit"][key].is_null(), "{name}: {key}");
        }
        let identity = &document["audit"]["retention"][0];
        assert_eq!(identity["operation"], "E");
        for density in ["total", "alpha", "beta"] {
            assert_abs_diff_eq!(identity[density].as_f64().unwrap(), 1.0, epsilon = 1e-12);
        }
    }
    let (_, document) = run("broken_h4_square", &[]);
    assert_eq!(document["audit"]["swaps_spin"], true);
    assert_eq!(document["audit"]["kept_group"]["total_density"], "D4h");
    assert_eq!(document["audit"]["kept_group"]["alpha_density"], "D2h");
}

#[test]
fn without_occupations_there_is_no_verdict() {
    let text = String::from_utf8(support::files::bytes("water_sto3g")).unwrap();
    let without = text.lines().filter(|line| !line.contains("Occup")).collect::<Vec<_>>().join("\n");
    let folder = tempfile::tempdir().unwrap();
    let file = folder.path().join("bare.molden");
    std::fs::write(&file, without).unwrap();
    let output = std::process::Command::new(env!("CARGO_BIN_EXE_orbsieve")).arg("audit").arg(&file).output().unwrap();
    assert_eq!(output.status.code(), Some(3));
    assert!(String::from_utf8_lossy(&output.stderr).contains("how many electrons"));
}
