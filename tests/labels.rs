//! Labels of real files: every fixture's group and whole labels, engines against each other, and labels from outside.
//!
//! Not here: the groups' own tables (`published_groups`, `group_laws`), detection on built geometries (`detection`).
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use orbsieve::labelling::Labelled;
use orbsieve::model::Molecule;
use serde_json::Value;
use support::files::{labelled, reference, set_labels};

/// Fixture, point group. Every orbital must be pure and every set whole.
const GROUPS: &[(&str, &str)] = &[
    ("chfclbr_c1_sto3g", "C1"),
    ("hypochlorous_cs_631gs", "Cs"),
    ("dihaloethane_ci_sto3g", "Ci"),
    ("peroxide_c2_631gs", "C2"),
    ("trifluoroethane_c3_sto3g", "C3"),
    ("helium_pinwheel_c4", "C4"),
    ("helium_pinwheel_c6", "C6"),
    ("water_631gs", "C2v"),
    ("ammonia_631gs", "C3v"),
    ("clf5_c4v_sto3g", "C4v"),
    ("lithium_cp_c5v_sto3g", "C5v"),
    ("butadiene_c2h_631g", "C2h"),
    ("boric_acid_c3h_631g", "C3h"),
    ("helium_pinwheel_c4h", "C4h"),
    ("helium_pinwheel_c5h", "C5h"),
    ("helium_pinwheel_c6h", "C6h"),
    ("ethene_twisted_d2_631gs", "D2"),
    ("ethane_skew_d3_631g", "D3"),
    ("cobalt_en_d3_sto3g", "D3"),
    ("helium_d4", "D4"),
    ("ferrocene_turned_d5_sto3g", "D5"),
    ("helium_d6", "D6"),
    ("ethene_631gs", "D2h"),
    ("bf3_d3h_631gs", "D3h"),
    ("pf5_d3h_sto3g", "D3h"),
    ("ptcl4_d4h_ecp", "D4h"),
    ("xef4_d4h_ecp", "D4h"),
    ("cyclopentadienide_d5h_631g", "D5h"),
    ("ferrocene_d5h_sto3g", "D5h"),
    ("benzene_sto3g", "D6h"),
    ("helium_d7h", "D7h"),
    ("helium_d8h", "D8h"),
    ("allene_d2d_631g", "D2d"),
    ("ethane_staggered_d3d_631g", "D3d"),
    ("b10h10_d4d_sto3g", "D4d"),
    ("ferrocene_d5d_sto3g", "D5d"),
    ("helium_d6d", "D6d"),
    ("silicic_acid_s4_sto3g", "S4"),
    ("helium_s6", "S6"),
    ("helium_s8", "S8"),
    ("neopentane_t_sto3g", "T"),
    ("magnesium_aqua_th_sto3g", "Th"),
    ("methane_631gs", "Td"),
    ("permanganate_td_def2svp", "Td"),
    ("nickel_carbonyl_td_ecp", "Td"),
    ("helium_o", "O"),
    ("sf6_631gs", "Oh"),
    ("helium_i", "I"),
    ("helium_ih", "Ih"),
    ("b12h12_ih_sto3g", "Ih"),
    ("carbon_monoxide_631gs", "Cinfv"),
    ("hydrogen_cyanide_631gs", "Cinfv"),
    ("nitrogen_631gs", "Dinfh"),
    ("carbon_dioxide_631gs", "Dinfh"),
    ("ethyne_631gs", "Dinfh"),
    ("oxygen_triplet_631gs", "Dinfh"),
    ("neon_def2tzvp", "Kh"),
    ("zinc_ion_def2svp", "Kh"),
    ("xenon_ecp", "Kh"),
    ("nitrogen_atom_quartet", "Kh"),
    ("manganese_aqua_sextet_th_sto3g", "Th"),
    ("turned_ammonia", "C3v"),
    ("turned_methane", "Td"),
    ("noisy_benzene", "D6h"),
];

#[test]
fn every_fixture_gets_its_group_and_whole_labels() {
    for (file, group) in GROUPS {
        let (_, labelled) = labelled(file);
        assert_eq!(labelled.symmetry.group.name().to_string(), *group, "{file}");
        for spin in &labelled.spins {
            for (i, orbital) in spin.orbitals.iter().enumerate() {
                let sum: f64 = orbital.weights.iter().map(|entry| entry.1).sum();
                assert!((sum - 1.0).abs() < 1e-5, "{file}: weights of orbital {} sum to {sum}", i + 1);
                assert!(orbital.purity > 0.999_99, "{file}: orbital {} has purity {}", i + 1, orbital.purity);
            }
            for set in &spin.sets {
                assert!(set.complete, "{file}: set {} of {:?} is not whole", set.number, set.irrep);
            }
        }
    }
}

/// Molecules that several engines computed in one basis: labels in order of energy must agree to the last orbital
/// that all files hold.
#[test]
fn engines_agree_on_one_molecule() {
    let families: &[&[&str]] = &[
        &["water_631gs", "nwchem_water_631gs_pure", "psi4_water_631gs_pure", "cp2k_water_631gs_pure"],
        &[
            "water_631gs_cart",
            "nwchem_water_631gs_cart",
            "nwchem_water_631gs_cart_raw",
            "psi4_water_631gs_cart",
            "psi3_water_631gs_cart",
            "openmolcas_water_631gs_cart",
        ],
        &["benzene_sto3g", "nwchem_benzene_sto3g_pure", "psi4_benzene_sto3g_pure", "openmolcas_benzene_sto3g_pure"],
        &["sf6_sto3g", "nwchem_sf6_sto3g_pure"],
        &["formaldehyde_631gs", "nwchem_formaldehyde_c1_pure", "cp2k_formaldehyde_631gs_pure"],
        &["openmolcas_water_ccpvdz_pure", "psi4_water_ccpvdz_pure", "nwchem_water_ccpvdz_pure_raw"],
        &["nwchem_ammonia_ccpvdz_pure", "bagel_ammonia_ccpvdz_pure"],
    ];
    for family in families {
        let all: Vec<Vec<String>> = family.iter().map(|file| set_labels(&labelled(file).1, 0)).collect();
        let shortest = all.iter().map(Vec::len).min().unwrap();
        // Near-degenerate high sets may change places between engines: compare those below the last few.
        let compared = shortest.min(all[0].len() * 2 / 3);
        for (file, labels) in family.iter().zip(&all) {
            assert_eq!(labels[..compared], all[0][..compared], "{file} against {}", family[0]);
        }
    }
}

/// Sign of a monomial under a diagonal operation, for the abelian label that it belongs to.
fn abelian_sign(group: &str, label: &str, signs: [f64; 3]) -> f64 {
    let [x, y, z] = signs;
    match (group, label) {
        (_, "A" | "A1" | "Ag" | "A'") => 1.0,
        ("D2h", "B1g") | ("C2v", "A2") => x * y,
        ("D2h", "B2g") | ("C2h", "Bg") => x * z,
        ("D2h", "B3g") => y * z,
        ("D2h", "Au") => x * y * z,
        ("D2h", "B1u") | ("D2", "B1") | ("C2h", "Au") | ("Cs", "A\"" | "A''") => z,
        ("D2h", "B2u") | ("D2" | "C2v", "B2") => y,
        ("D2h", "B3u") | ("D2", "B3") | ("C2v", "B1") | ("C2h", "Bu") | ("C2", "B") | ("Ci", "Au") => x,
        _ => panic!("{label} is no irrep of {group}"),
    }
}

/// Labels of a general-purpose library in its own abelian group and axes: for every operation of that group the
/// characters of orbitals at one energy must sum to the characters of the sets found here.
#[test]
fn labels_descend_to_those_of_a_reference_library() {
    let reference = reference("abelian");
    let mut compared = 0;
    for (file, entry) in reference.as_object().unwrap() {
        let (_, labelled) = labelled(file);
        let group = entry["labelled_in"].as_str().unwrap();
        if !["D2h", "D2", "C2v", "C2h", "Cs", "C2", "Ci", "C1"].contains(&group) {
            continue; // linear molecules and atoms, which the library labels in their own groups
        }
        let axes: Vec<Vec<f64>> = serde_json::from_value(entry["axes"].clone()).unwrap();
        let axes = nalgebra::Matrix3::from_fn(|row, column| axes[row][column]);
        let elements: Vec<(usize, [f64; 3])> = (0..labelled.symmetry.group.elements().len())
            .filter_map(|element| {
                let matrix = axes * labelled.symmetry.matrix(element) * axes.transpose();
                let diagonal = nalgebra::Matrix3::from_diagonal(&matrix.diagonal());
                ((matrix - diagonal).amax() < 1e-4).then(|| (element, std::array::from_fn(|i| matrix[(i, i)].round())))
            })
            .collect();
        for run in entry["runs"].as_array().unwrap() {
            let first = usize::try_from(run[0].as_u64().unwrap()).unwrap();
            let labels: Vec<&str> = run[1].as_array().unwrap().iter().map(|label| label.as_str().unwrap()).collect();
            let members = first..first + labels.len();
            let sets: std::collections::BTreeSet<usize> =
                members.clone().map(|i| labelled.spins[0].orbitals[i].set).collect();
            let sets: Vec<_> = sets.into_iter().map(|set| &labelled.spins[0].sets[set]).collect();
            if sets.iter().any(|set| set.orbitals.iter().any(|i| !members.contains(i))) {
                continue; // the library's run cuts a set that is whole here
            }
            for &(element, signs) in &elements {
                // Only operations of the library's group have a sign for its labels.
                if !belongs(group, signs) {
                    continue;
                }
                let theirs: f64 = labels.iter().map(|label| abelian_sign(group, label, signs)).sum();
                let class = labelled.symmetry.group.elements()[element].class_idx;
                let ours: f64 =
                    sets.iter().map(|set| labelled.symmetry.group.irreps()[set.irrep.unwrap()].characters[class]).sum();
                assert!((theirs - ours).abs() < 1e-6, "{file}, orbitals {members:?}, signs {signs:?}: {theirs} {ours}");
                compared += 1;
            }
        }
    }
    assert!(compared > 300, "only {compared} characters compared");
}

/// Whether a diagonal operation belongs to an abelian group in its standard frame.
fn belongs(group: &str, signs: [f64; 3]) -> bool {
    let [x, y, z] = signs;
    let allowed: &[[f64; 3]] = match group {
        "D2h" => return true,
        "D2" => return x * y * z > 0.0,
        "C2v" => return z > 0.0,
        "C2h" => return (x - y).abs() < 0.5,
        "Cs" => &[[1.0, 1.0, 1.0], [1.0, 1.0, -1.0]],
        "C2" => &[[1.0, 1.0, 1.0], [-1.0, -1.0, 1.0]],
        "Ci" => &[[1.0, 1.0, 1.0], [-1.0, -1.0, -1.0]],
        _ => &[[1.0, 1.0, 1.0]],
    };
    allowed.contains(&signs)
}

/// Full-group labels that one engine prints itself (its own symmetry code, run with symmetry on).
#[test]
fn labels_agree_with_an_engine_that_knows_full_groups() {
    let mut compared = 0;
    for file in [
        "nwchem_water_631gs_pure",
        "nwchem_ammonia_ccpvdz_pure",
        "nwchem_benzene_sto3g_pure",
        "nwchem_ethene_631gs_pure",
        "nwchem_methane_631gs_pure",
        "nwchem_sf6_sto3g_pure",
        "nwchem_water_g_pure",
    ] {
        let (molecule, labelled) = labelled(file);
        let group = &labelled.symmetry.group;
        let theirs: Vec<String> = molecule.orbital_sets[0]
            .orbitals
            .iter()
            .map(|orbital| orbital.symmetry.as_deref().unwrap().trim().replace('"', "''"))
            .collect();
        let ours: Vec<String> = labelled.spins[0]
            .orbitals
            .iter()
            .map(|orbital| group.irreps()[orbital.irrep.unwrap()].name.to_string().to_lowercase())
            .collect();
        // The engine may have chosen another legal setting of the axes: one renaming for the whole file.
        let mut settings: Vec<Vec<(String, String)>> = vec![Vec::new()];
        settings.extend(labelled.symmetry.other_settings.iter().map(|setting| {
            setting
                .swaps
                .iter()
                .map(|(here, there)| (here.to_string().to_lowercase(), there.to_string().to_lowercase()))
                .collect()
        }));
        let agrees = settings.iter().any(|swaps| {
            ours.iter().zip(&theirs).all(|(ours, theirs)| {
                let renamed = swaps.iter().find(|swap| swap.0 == *ours).map_or(ours, |swap| &swap.1);
                renamed == theirs
            })
        });
        assert!(agrees, "{file}: {ours:?} against {theirs:?}");
        compared += ours.len();
    }
    assert!(compared > 100);
}

fn numbers(value: &Value) -> Vec<f64> {
    serde_json::from_value(value.clone()).unwrap()
}

/// A file whose blocks stop short is refused with the residuals, not labelled.
#[test]
fn broken_blocks_are_refused() {
    let bytes = support::files::bytes("psi3_water_631gs_broken");
    let (mut molecule, _) = orbsieve::model::read_molden(&bytes).unwrap();
    let error = orbsieve::labelling::label(&mut molecule, &orbsieve::labelling::Thresholds::STANDARD).unwrap_err();
    assert!(error.to_string().contains("no convention makes the orbitals orthonormal"), "{error}");
}

/// The fixture whose engine wrote three digits is read, with its residual told.
#[test]
fn three_digits_are_enough_to_label() {
    let (_, labelled) = labelled("cp2k_water_631gs_default_digits");
    assert!(labelled.settled.residual > 1e-4 && labelled.settled.residual < 5e-3);
    assert_eq!(set_labels(&labelled, 0)[..5], ["1a1", "2a1", "1b2", "3a1", "1b1"]);
}

/// Labels survive everything that has no meaning: place and orientation, order of atoms, signs, turned partners.
#[test]
fn labels_do_not_depend_on_what_has_no_meaning() {
    for file in [
        "water_631gs_cart",
        "benzene_sto3g",
        "methane_631gs",
        "allene_d2d_631g",
        "ferrocene_d5d_sto3g",
        "ptcl4_d4h_ecp",
        "carbon_dioxide_631gs",
    ] {
        let (_, plain) = labelled(file);
        for seed in 0..4 {
            let mut molecule: Molecule = support::files::disturbed(file, seed);
            let again: Labelled =
                orbsieve::labelling::label(&mut molecule, &orbsieve::labelling::Thresholds::STANDARD).unwrap();
            assert_eq!(again.symmetry.group.name(), plain.symmetry.group.name(), "{file} {seed}");
            assert_eq!(set_labels(&again, 0), set_labels(&plain, 0), "{file} {seed}");
            assert!(again.spins[0].sets.iter().all(|set| set.complete), "{file} {seed}");
        }
    }
}

/// The group of every fixture by a plain search over images of nuclei, written beside the fixtures.
#[test]
fn groups_agree_with_a_plain_search() {
    let groups = reference("groups");
    let groups = groups.as_object().unwrap();
    assert!(groups.len() > 150);
    for (file, entry) in groups {
        let molecule = support::files::molecule(file.trim_end_matches(".molden"));
        // Tighter than by default: one fixture is shaken on purpose by less than 0.01 Å.
        let choice = orbsieve::labelling::placement::Choice::default();
        let symmetry = orbsieve::labelling::placement::place(&molecule, 1e-3, &choice).unwrap().symmetry;
        let expected = entry["group"].as_str().unwrap();
        let expected: orbsieve::group::GroupName = expected.parse().unwrap_or_else(|_| panic!("{file}: {expected}"));
        assert_eq!(symmetry.group.name(), expected, "{file}");
    }
}

/// Traces of every set of equal energy under one operation of each class, by a reference library's integrals and a
/// plain search for operations: they must be the characters of the irreps found here. No name is involved.
#[test]
fn characters_agree_with_traces_of_a_reference_library() {
    let mut compared = 0;
    for (file, entry) in reference("characters").as_object().unwrap() {
        let (_, labelled) = labelled(file.trim_end_matches(".molden"));
        let group = &labelled.symmetry.group;
        let operations: Vec<Vec<Vec<f64>>> = serde_json::from_value(entry["operations"].clone()).unwrap();
        for set in entry["sets"].as_array().unwrap() {
            let first = usize::try_from(set[0].as_u64().unwrap()).unwrap();
            let size = usize::try_from(set[1].as_u64().unwrap()).unwrap();
            let sets: std::collections::BTreeSet<usize> =
                (first..first + size).map(|i| labelled.spins[0].orbitals[i].set).collect();
            let sets: Vec<_> = sets.into_iter().map(|set| &labelled.spins[0].sets[set]).collect();
            if sets.iter().map(|set| set.orbitals.len()).sum::<usize>() != size {
                continue; // their run of equal energies cuts a set that is whole here
            }
            for (operation, trace) in operations.iter().zip(numbers(&set[2])) {
                let theirs = nalgebra::Matrix3::from_fn(|row, column| operation[row][column]);
                let Some(element) = (0..group.elements().len())
                    .find(|&element| (labelled.symmetry.matrix(element) - theirs).amax() < 1e-4)
                else {
                    panic!("{file}: an operation of the plain search is none of the group")
                };
                let class = group.elements()[element].class_idx;
                let ours: f64 = sets.iter().map(|set| group.irreps()[set.irrep.unwrap()].characters[class]).sum();
                assert!((ours - trace).abs() < 2e-3, "{file} set at {first}: {ours} against {trace}");
                compared += 1;
            }
        }
    }
    assert!(compared > 3000, "only {compared} characters compared");
}
