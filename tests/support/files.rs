//! Fixtures by name, labelled, and copies of them changed in ways that mean nothing.
#![allow(clippy::unwrap_used, reason = "a test may stop at once")]

use ndarray::{Array2, s};
use orbsieve::labelling::{Labelled, Thresholds, label};
use orbsieve::model::{Atom, Molecule, Shell, read_molden};
use orbsieve::report::build::set_label;
use orbsieve::wavefunction::Turning;
use std::path::{Path, PathBuf};

pub fn path(name: &str) -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/molecules").join(format!("{name}.molden"))
}

pub fn bytes(name: &str) -> Vec<u8> {
    std::fs::read(path(name)).unwrap_or_else(|error| panic!("{name}: {error}"))
}

pub fn molecule(name: &str) -> Molecule {
    match read_molden(&bytes(name)) {
        Ok((molecule, _)) => molecule,
        Err(findings) => panic!("{name}: {findings:?}"),
    }
}

pub fn labelled(name: &str) -> (Molecule, Labelled) {
    let mut molecule = molecule(name);
    let labelled = label(&mut molecule, &Thresholds::STANDARD).unwrap_or_else(|error| panic!("{name}: {error}"));
    (molecule, labelled)
}

/// Labels of all sets of one spin in order of energy.
pub fn set_labels(labelled: &Labelled, spin: usize) -> Vec<String> {
    let group = &labelled.symmetry.group;
    labelled.spins[spin].sets.iter().map(|set| set_label(group, set).unwrap_or_else(|| "?".to_owned())).collect()
}

pub fn reference(name: &str) -> serde_json::Value {
    let path = Path::new(env!("CARGO_MANIFEST_DIR")).join("tests/molecules/reference").join(format!("{name}.json"));
    serde_json::from_slice(&std::fs::read(path).unwrap()).unwrap()
}

/// A small fixed sequence of numbers in [0, 1).
pub struct Sequence(u64);

impl Sequence {
    pub fn new(seed: u64) -> Self {
        Self(seed.wrapping_mul(0x9E37_79B9_7F4A_7C15) | 1)
    }

    /// A whole number from 0 to n − 1.
    pub fn below(&mut self, n: usize) -> usize {
        let _ = self.next();
        usize::try_from((self.0 >> 33) % n as u64).unwrap()
    }

    pub fn next(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }
}

/// The molecule turned, shifted, its atoms in another order, orbitals of one energy mixed and signs changed.
///
/// The functions stay those of the file's axes, so coefficients are turned shell by shell.
pub fn disturbed(name: &str, seed: u64) -> Molecule {
    let (mut molecule, labelled) = labelled(name);
    let mut random = Sequence::new(seed);
    let matrix = nalgebra::Rotation3::from_euler_angles(6.0 * random.next(), 3.0 * random.next(), 6.0 * random.next())
        .into_inner()
        * if seed.is_multiple_of(2) { 1.0 } else { -1.0 };
    let shift = nalgebra::Vector3::new(random.next(), random.next(), random.next()) * 5.0;
    let identity: Vec<usize> = (0..molecule.atoms.len()).collect();
    let turning = Turning::by_permutation(&labelled.settled.basis, &identity, &matrix).unwrap();
    // Another order of atoms; shells follow their atoms.
    let mut order = identity;
    for i in (1..order.len()).rev() {
        order.swap(i, random.below(i + 1));
    }
    let shells = labelled.settled.basis.shells();
    let mut shell_order: Vec<usize> = (0..shells.len()).collect();
    shell_order.sort_by_key(|&shell| order.iter().position(|&atom| atom == shells[shell].atom_idx));
    for set in &mut molecule.orbital_sets {
        let mut turned = Array2::zeros(set.coefficients.dim());
        for (row, image) in set.coefficients.outer_iter().zip(turned.outer_iter_mut()) {
            turning.apply(row, image);
        }
        let mut reordered = Array2::zeros(turned.dim());
        let mut at = 0;
        for &shell in &shell_order {
            let range = shells[shell].range();
            let n = range.len();
            reordered.slice_mut(s![.., at..at + n]).assign(&turned.slice(s![.., range]));
            at += n;
        }
        let energies: Vec<f64> = set.orbitals.iter().map(|orbital| orbital.energy.unwrap()).collect();
        for i in 1..energies.len() {
            let (angle, sign) = (6.3 * random.next(), if random.next() < 0.5 { -1.0 } else { 1.0 });
            // Only true partners: accidental neighbours lie farther apart than the SCF's noise.
            if (energies[i] - energies[i - 1]).abs() < 1e-8 {
                let (a, b) = (reordered.row(i - 1).to_owned(), reordered.row(i).to_owned());
                reordered.row_mut(i - 1).assign(&(&a * angle.cos() + &b * angle.sin()));
                reordered.row_mut(i).assign(&(&b * angle.cos() - &a * angle.sin()));
            }
            reordered.row_mut(i).mapv_inplace(|value| sign * value);
        }
        set.coefficients = reordered;
    }
    let atoms: Vec<Atom> = order
        .iter()
        .map(|&atom| {
            let mut moved = molecule.atoms[atom].clone();
            moved.position = nalgebra::Point3::from(matrix * moved.position.coords + shift);
            moved
        })
        .collect();
    let moved_shells: Vec<Shell> = shell_order
        .iter()
        .map(|&shell| {
            let mut moved = molecule.shells[shell].clone();
            moved.atom_idx = order.iter().position(|&atom| atom == moved.atom_idx).unwrap();
            moved
        })
        .collect();
    molecule.atoms = atoms;
    molecule.shells = moved_shells;
    molecule
}
