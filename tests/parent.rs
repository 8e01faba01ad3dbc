//! Labels in parents, subgroups and frames of chosen atoms.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use approx::assert_abs_diff_eq;
use orbsieve::labelling::frame_atoms::atoms;
use orbsieve::labelling::placement::Choice;
use orbsieve::labelling::{Labelled, Thresholds, label_in};
use orbsieve::model::Molecule;
use orbsieve::wavefunction::Operations;
use support::files::{labelled, molecule, set_labels};

fn placed(name: &str, group: Option<&str>, frame: Option<&str>, thresholds: &Thresholds) -> (Molecule, Labelled) {
    let mut molecule = molecule(name);
    let choice = Choice {
        group: group.map(|group| group.parse().unwrap()),
        frame: frame.map(|text| atoms(&molecule, text).unwrap()),
        orientation: 0,
    };
    let labelled = label_in(&mut molecule, thresholds, &choice).unwrap_or_else(|error| panic!("{name}: {error}"));
    (molecule, labelled)
}

fn standard(name: &str, group: Option<&str>, frame: Option<&str>) -> (Molecule, Labelled) {
    placed(name, group, frame, &Thresholds::STANDARD)
}

fn group_name(labelled: &Labelled) -> String {
    labelled.symmetry.group.name().to_string()
}

/// Σ over irreps of ⟨i|P(Γ)|i⟩, which is 1 on every path.
fn weights_add_up(name: &str, labelled: &Labelled) {
    let group = &labelled.symmetry.group;
    for spin in &labelled.spins {
        for (i, row) in spin.expectations.outer_iter().enumerate() {
            let order = group.elements().len() as f64;
            let weights: Vec<f64> = group
                .irreps()
                .iter()
                .map(|irrep| {
                    let scale = irrep.dimension as f64 / irrep.constituents as f64 / order;
                    let terms =
                        group.elements().iter().zip(row).map(|(e, value)| irrep.characters[e.class_idx] * value);
                    scale * terms.sum::<f64>()
                })
                .collect();
            // What is listed adds up as well.
            let listed: f64 = spin.orbitals[i].weights.iter().map(|entry| entry.1).sum();
            let turned = matches!(labelled.operations, Operations::Turned(_));
            assert!(!turned || (listed - row[0]).abs() < 1e-9, "{name} {i}: {listed}");
            // The norm of the orbital is 1 to the digits of the file.
            assert_abs_diff_eq!(weights.iter().sum::<f64>(), row[0], epsilon = 1e-9);
            assert_abs_diff_eq!(row[0], 1.0, epsilon = 1e-8);
            // A permutation of nuclei that are a hair off is no unitary operation.
            assert!(weights.iter().all(|weight| *weight > -1e-3), "{name} {i}: {weights:?}");
        }
    }
}

/// The smallest purity in a set.
fn purity_of(labelled: &Labelled, spin: usize, label: &str) -> f64 {
    let at = set_labels(labelled, spin).iter().position(|other| other == label);
    let at = at.unwrap_or_else(|| panic!("no set {label} among {:?}", set_labels(labelled, spin)));
    let set = &labelled.spins[spin].sets[at];
    set.orbitals.iter().map(|&i| labelled.spins[spin].orbitals[i].purity).fold(1.0, f64::min)
}

#[test]
fn hexaammines_and_hexaaqua_ions_are_octahedral_by_their_frame() {
    for (name, frame, aside) in [
        ("cobalt_ammine_d3_sto3g", "Co,N", 18),
        ("cobalt_ammine_d3d_sto3g", "Co, shell 1 around Co", 18),
        ("magnesium_aqua_t_sto3g", "Mg,O", 12),
        ("magnesium_aqua_th_sto3g", "1-7", 12),
        ("manganese_aqua_sextet_th_sto3g", "Mn,O", 12),
    ] {
        let (_, labelled) = standard(name, None, Some(frame));
        assert_eq!(group_name(&labelled), "Oh", "{name}");
        assert_eq!(labelled.derivation.turned.len(), aside, "{name}");
        assert!(matches!(labelled.operations, Operations::Turned(_)), "{name}");
        weights_add_up(name, &labelled);
    }
    // The metal's d levels by the names of the textbooks.
    let (_, ammine) = standard("cobalt_ammine_d3_sto3g", None, Some("Co,N"));
    assert!(purity_of(&ammine, 0, "2t2g") > 0.99 && purity_of(&ammine, 0, "3eg") > 0.99);
    // Eg of Th and Oh share their functions, Tg becomes T2g.
    let (_, aqua) = standard("manganese_aqua_sextet_th_sto3g", None, Some("Mn,O"));
    let names = set_labels(&aqua, 0);
    assert!(
        names.iter().any(|name| name.ends_with("t2g")) && names.iter().any(|name| name.ends_with("eg")),
        "{names:?}"
    );
}

#[test]
fn a_tris_chelate_in_its_octahedral_parent() {
    let (_, labelled) = standard("cobalt_en_d3_sto3g", Some("Oh"), None);
    assert_eq!(group_name(&labelled), "Oh");
    weights_add_up("cobalt_en_d3_sto3g", &labelled);
    // The metal lands on itself; its t2g set is a1 + e of D3, highest of all with electrons.
    let weights = |orbital: usize, name: &str| {
        let group = &labelled.symmetry.group;
        let found = labelled.spins[0].orbitals[orbital].weights.iter();
        found.filter(|entry| group.irreps()[entry.0].name.to_string() == name).map(|entry| entry.1).sum::<f64>()
    };
    assert!(weights(60, "T2g") > 0.95, "{}", weights(60, "T2g"));
    assert!(weights(61, "T2g") > 0.75 && weights(62, "T2g") > 0.75);
    // C3 of the complex lies along a C3 of the parent, C2' along a C2': every operation of D3 is one of Oh.
    let (_, own) = super_labelled("cobalt_en_d3_sto3g");
    for element in 0..own.symmetry.group.elements().len() {
        let matrix = own.symmetry.matrix(element);
        let nearest = (0..48).map(|at| (labelled.symmetry.matrix(at) - matrix).amax()).fold(f64::INFINITY, f64::min);
        assert!(nearest < 1e-4, "{nearest}");
    }
}

fn super_labelled(name: &str) -> (Molecule, Labelled) {
    labelled(name)
}

#[test]
fn a_parent_the_molecule_has_gives_the_same_weights_on_both_paths() {
    // Truly turned functions of an exactly symmetric molecule are permuted ones.
    for name in ["sf6_sto3g", "ammonia_631gs", "benzene_sto3g", "water_g"] {
        let (_, permuted) = labelled(name);
        let symmetry = &permuted.symmetry;
        let n_atoms = symmetry.permutations[0].len();
        let elements =
            (0..symmetry.group.elements().len()).map(|at| (symmetry.matrix(at), vec![None; n_atoms])).collect();
        let turned = orbsieve::wavefunction::Turned::new(
            permuted.settled.basis.clone(),
            permuted.settled.overlap.clone(),
            symmetry.frame.centre,
            elements,
        );
        let (molecule, _) = labelled(name);
        let rows = orbsieve::wavefunction::Rows {
            coefficients: molecule.orbital_sets[0].coefficients.view(),
            products: permuted.settled.products[0].view(),
        };
        let here = Operations::Turned(turned).expectations(rows);
        for (a, b) in here.iter().zip(&permuted.spins[0].expectations) {
            assert_abs_diff_eq!(*a, *b, epsilon = 2e-6);
        }
    }
}

#[test]
fn a_stretched_octahedron_in_its_parent() {
    let name = "sf6_stretched_d4h_sto3g";
    let (_, strict) = standard(name, Some("Oh"), None);
    assert_eq!(group_name(&strict), "Oh");
    assert_eq!(strict.derivation.turned, [1, 2, 3, 4, 5, 6]);
    weights_add_up(name, &strict);
    // Within a larger tolerance all atoms are permuted, and cores are pure again.
    let wide = Thresholds { tolerance_bohr: 0.2, ..Thresholds::STANDARD };
    let (_, permuted) = placed(name, Some("Oh"), None, &wide);
    assert!(permuted.derivation.turned.is_empty());
    assert!(purity_of(&permuted, 0, "4a1g") > purity_of(&strict, 0, "4a1g"));
    weights_add_up(name, &permuted);
}

#[test]
fn subgroups_with_their_correlation() {
    for (name, group, from, becomes) in [
        ("benzene_sto3g", "D2h", "E1g", "B1g + B2g"),
        ("sf6_sto3g", "D4h", "T2g", "B2g + Eg"),
        ("sf6_sto3g", "D3d", "T2g", "A1g + Eg"),
        ("methane_631gs", "C3v", "T2", "A1 + E"),
        ("methane_631gs", "D2d", "T2", "B2 + E"),
        ("carbon_dioxide_631gs", "D2h", "Pi_u", "B2u + B3u"),
    ] {
        let (_, labelled) = standard(name, Some(group), None);
        assert_eq!(group_name(&labelled), group, "{name}");
        weights_add_up(name, &labelled);
        let descent = labelled.derivation.descent.as_ref().unwrap();
        let at = descent.parent_irreps.iter().position(|irrep| irrep.to_string() == from).unwrap();
        assert_eq!(descent.correlation_text(at), becomes, "{name} {group}");
        assert!(!labelled.derivation.orientations.is_empty());
    }
}

#[test]
fn orientations_are_listed_and_can_be_chosen() {
    let (_, first) = standard("benzene_sto3g", Some("C2v"), None);
    assert_eq!(first.derivation.orientations.len(), 3);
    let mut again = molecule("benzene_sto3g");
    let choice = |orientation| Choice { group: Some("C2v".parse().unwrap()), frame: None, orientation };
    let second = label_in(&mut again, &Thresholds::STANDARD, &choice(1)).unwrap();
    assert!((first.symmetry.frame.axes.row(2) - second.symmetry.frame.axes.row(2)).amax() > 0.1);
    let refused = label_in(&mut molecule("benzene_sto3g"), &Thresholds::STANDARD, &choice(3));
    assert!(refused.unwrap_err().to_string().contains("3 orientations"));
}

#[test]
fn an_atom_has_every_group() {
    let (_, labelled) = standard("zinc_ion_def2svp", Some("Oh"), None);
    assert_eq!(group_name(&labelled), "Oh");
    weights_add_up("zinc_ion_def2svp", &labelled);
    // The d functions, turned at will by the engine, hold each irrep of the axis once.
    let (_, axial) = standard("zinc_ion_def2svp", Some("Dinfh"), None);
    assert_eq!(group_name(&axial), "Dinfh");
    weights_add_up("zinc_ion_def2svp", &axial);
    let continuous = Choice { group: Some("Dinfh".parse().unwrap()), ..Choice::default() };
    let refused = label_in(&mut molecule("water_631gs"), &Thresholds::STANDARD, &continuous);
    assert!(refused.unwrap_err().to_string().contains("infinitely many"));
    let refused = label_in(
        &mut molecule("cobalt_ammine_d3_sto3g"),
        &Thresholds::STANDARD,
        &Choice { frame: Some(vec![0]), ..Choice::default() },
    );
    assert!(refused.unwrap_err().to_string().contains("one place"));
}
