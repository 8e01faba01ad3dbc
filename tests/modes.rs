//! Normal modes of files from engines: kinds, irreps, sets, and the check against counting from the nuclei.

#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

mod support;

use nalgebra::{Rotation3, Vector3};
use orbsieve::group::Symmetry;
use orbsieve::labelling::placement::{self, Choice};
use orbsieve::model::{Molecule, Vibrations, masses};
use orbsieve::modes::assignment::{Weighting, atoms_of_modes, differences};
use orbsieve::modes::{Assignment, Kind, ModeThresholds, assign, motion};
use support::files::molecule;

/// A file with modes, placed on the coordinates of its displacements.
fn placed(mut molecule: Molecule) -> (Molecule, Symmetry) {
    let vibrations = molecule.vibrations.as_ref().unwrap();
    molecule.atoms = atoms_of_modes(&molecule.atoms, vibrations);
    molecule.shells.clear();
    molecule.orbital_sets.clear();
    let symmetry = placement::place(&molecule, 0.02, &Choice::default()).unwrap().symmetry;
    (molecule, symmetry)
}

fn assigned(molecule: &Molecule, symmetry: &Symmetry) -> Assignment {
    assign(&molecule.atoms, molecule.vibrations.as_ref().unwrap(), symmetry, &ModeThresholds::STANDARD)
}

/// Irreps of the vibrations, one entry a set, in order of the file.
fn irreps(assignment: &Assignment, symmetry: &Symmetry) -> Vec<String> {
    let name = |irrep: Option<usize>| irrep.map_or("?".to_owned(), |i| symmetry.group.irreps()[i].name.to_string());
    assignment.sets.iter().filter(|set| set.kind == Kind::Vibration).map(|set| name(set.irrep)).collect()
}

/// Orders from memory (common practice) where they are well known: water, ammonia, methane, CO2, SF6; benzene's lowest and highest.
const FILES: &[(&str, &str, &str)] = &[
    ("psi4_modes_water", "C2v", "A1 A1 B2"),
    ("bagel_modes_water", "C2v", "A1 A1 B2"),
    ("openmolcas_modes_water", "C2v", "A1 A1 B2"),
    ("psi4_modes_ammonia", "C3v", "A1 E A1 E"),
    ("openmolcas_modes_ammonia", "C3v", "A1 E A1 E"),
    ("psi4_modes_methane", "Td", "T2 E A1 T2"),
    ("psi4_modes_carbon_dioxide", "Dinfh", "Pi_u Sigma_g+ Sigma_u+"),
    ("psi4_modes_sulfur_hexafluoride", "Oh", "T2u T2g T1u Eg A1g T1u"),
    ("psi4_modes_benzene", "D6h", ""),
    ("benzene_with_modes_sto3g", "D6h", ""),
    // Bend out of plane, rock, scissors, C=O stretch, the two CH stretches.
    ("formaldehyde_with_modes_631gs", "C2v", "B1 B2 A1 A1 A1 B2"),
];

#[test]
fn modes_of_engines_have_the_irreps_that_the_nuclei_say() {
    for &(name, group, expected) in FILES {
        let (molecule, symmetry) = placed(molecule(name));
        assert_eq!(symmetry.group.name(), group.parse().unwrap(), "{name}");
        let found = assigned(&molecule, &symmetry);
        let counted = motion(&molecule.atoms, &symmetry).unwrap();
        assert_eq!(differences(&found, &counted, &symmetry.group), [], "{name}");
        let vibrations = || found.modes.iter().filter(|mode| mode.kind == Kind::Vibration);
        assert!(vibrations().all(|mode| mode.purity > 0.999 && mode.foreign < 0.02), "{name}");
        assert!(found.sets.iter().all(|set| set.kind != Kind::Vibration || set.complete), "{name}");
        assert!(found.residual < 1e-2, "{name}: {}", found.residual);
        if expected.is_empty() {
            let irreps = irreps(&found, &symmetry);
            assert_eq!((irreps[0].as_str(), irreps[irreps.len() - 1].as_str()), ("E2u", "A1g"), "{name}");
        } else {
            assert_eq!(irreps(&found, &symmetry).join(" "), expected, "{name}");
        }
    }
}

#[test]
fn rigid_motions_are_told_apart() {
    for (name, translations, rotations) in
        [("bagel_modes_water", 3, 3), ("openmolcas_modes_water", 3, 3), ("openmolcas_modes_ammonia", 3, 3)]
    {
        let (molecule, symmetry) = placed(molecule(name));
        let found = assigned(&molecule, &symmetry);
        let count = |kind: Kind| found.modes.iter().filter(|mode| mode.kind == kind).count();
        assert_eq!((count(Kind::Translation), count(Kind::Rotation)), (translations, rotations), "{name}");
    }
}

fn changed(molecule: &Molecule, change: impl Fn(usize, Vector3<f64>) -> Vector3<f64>) -> Vibrations {
    let mut vibrations = molecule.vibrations.clone().unwrap();
    for mode in &mut vibrations.modes {
        for (atom, part) in mode.displacements.chunks_exact_mut(3).enumerate() {
            let moved = change(atom, Vector3::new(part[0], part[1], part[2]));
            part.copy_from_slice(moved.as_slice());
        }
    }
    vibrations
}

/// The same modes times √m: read as what they are, with the same irreps.
#[test]
fn weighting_does_not_change_irreps() {
    for &(name, _, _) in FILES {
        let (mut molecule, symmetry) = placed(molecule(name));
        let plain = assigned(&molecule, &symmetry);
        assert_eq!(plain.weighting, Weighting::Cartesian, "{name}");
        molecule.vibrations =
            Some(changed(&molecule, |atom, part| part * masses::mass(molecule.atoms[atom].element).unwrap().sqrt()));
        let weighted = assigned(&molecule, &symmetry);
        assert_eq!(weighted.weighting, Weighting::MassWeighted, "{name}");
        for (a, b) in plain.modes.iter().zip(&weighted.modes) {
            assert_eq!((a.kind, a.irrep, a.set), (b.kind, b.irrep, b.set), "{name}");
            assert!((a.purity - b.purity).abs() < 1e-9, "{name}");
        }
    }
}

#[test]
fn turning_the_molecule_does_not_change_irreps() {
    let turn = Rotation3::from_euler_angles(0.7, -1.2, 2.9);
    for &(name, _, _) in FILES {
        let (mut molecule, symmetry) = placed(molecule(name));
        let before = irreps(&assigned(&molecule, &symmetry), &symmetry);
        molecule.vibrations = Some(changed(&molecule, |_, part| turn * part));
        for atom in &mut molecule.atoms {
            atom.position = turn * atom.position + Vector3::new(1.0, -2.0, 0.5);
        }
        let symmetry = placement::place(&molecule, 0.02, &Choice::default()).unwrap().symmetry;
        assert_eq!(irreps(&assigned(&molecule, &symmetry), &symmetry), before, "{name}");
    }
}

/// A deuterium on one hydrogen mixes the two stretches of water: no irrep is claimed, and the nuclei's count is not met.
#[test]
fn mixed_and_missing_modes_are_noticed() {
    let (mut water, symmetry) = placed(molecule("psi4_modes_water"));
    let vibrations = water.vibrations.as_mut().unwrap();
    let (a, b) = (vibrations.modes[1].displacements.clone(), vibrations.modes[2].displacements.clone());
    for (at, (a, b)) in a.iter().zip(&b).enumerate() {
        vibrations.modes[1].displacements[at] = a + b;
        vibrations.modes[2].displacements[at] = a - b;
    }
    let found = assigned(&water, &symmetry);
    assert_eq!(irreps(&found, &symmetry), ["A1", "?", "?"]);
    let (mut ammonia, symmetry) = placed(molecule("psi4_modes_ammonia"));
    ammonia.vibrations.as_mut().unwrap().modes.remove(1);
    let found = assigned(&ammonia, &symmetry);
    let counted = motion(&ammonia.atoms, &symmetry).unwrap();
    let e = symmetry.group.irrep_idx(&"E".parse().unwrap()).unwrap();
    assert_eq!(differences(&found, &counted, &symmetry.group), [(e, 1.5, 2)]);
    assert!(found.sets.iter().any(|set| set.irrep == Some(e) && !set.complete));
}
