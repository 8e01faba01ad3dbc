//! The modes of a file: translations, rotations and vibrations told apart, each with its irrep.
//!
//! How the displacements are weighted is not in the file. It does not matter to irreps: masses are equal on nuclei that
//! operations carry onto each other, so weighting commutes with every operation. It matters to what is a translation or a
//! rotation, and there the modes' own orthogonality tells: normal modes are orthogonal once mass-weighted.
//! Not here: counting from nuclei alone (`modes::motion`).

use super::motion::Motion;
use crate::group::{GroupName, PointGroup, Symmetry};
use crate::model::{Atom, Vibrations, masses};
use nalgebra::{DVector, Matrix3, Vector3};

/// What a mode is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, PartialOrd, Ord)]
pub enum Kind {
    /// The molecule moves as a whole.
    Translation,
    /// The molecule turns as a whole.
    Rotation,
    /// The rest.
    Vibration,
}

/// How the displacements of a file are meant.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Weighting {
    /// Displacements of nuclei.
    Cartesian,
    /// Displacements times √m.
    MassWeighted,
}

/// One mode.
#[derive(Debug, Clone, PartialEq)]
pub struct ModeLabel {
    /// Translation, rotation or vibration.
    pub kind: Kind,
    /// Share of it that is not of its kind: for a vibration what it has of translations and rotations, 0 to 1.
    pub foreign: f64,
    /// None where no irrep reaches the purity asked for, or the file lists no displacements.
    pub irrep: Option<usize>,
    /// Largest weight of one irrep.
    pub purity: f64,
    /// Index into the sets.
    pub set: usize,
}

/// Modes that the operations turn into each other.
#[derive(Debug, Clone, PartialEq)]
pub struct ModeSet {
    /// Of all members.
    pub kind: Kind,
    /// Irrep shared by all members.
    pub irrep: Option<usize>,
    /// Indices of modes from 0.
    pub modes: Vec<usize>,
    /// As many as the irrep has partners.
    pub complete: bool,
}

/// All modes of a file.
#[derive(Debug, Clone, PartialEq)]
pub struct Assignment {
    /// In file order.
    pub modes: Vec<ModeLabel>,
    /// In file order of their first member.
    pub sets: Vec<ModeSet>,
    /// How displacements were read.
    pub weighting: Weighting,
    /// Largest |cosine| between two modes under that reading, mass-weighted.
    pub residual: f64,
}

/// Limits of an assignment.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ModeThresholds {
    /// Smallest weight that gives a mode its irrep.
    pub purity: f64,
    /// Partners of one set lie within this, cm⁻¹.
    pub degeneracy_per_cm: f64,
}

impl ModeThresholds {
    /// Purity 0.90; 5 cm⁻¹, as looser optimisations split sets by a few.
    pub const STANDARD: Self = Self { purity: 0.90, degeneracy_per_cm: 5.0 };
}

/// Two modes of one irrep are partners when their mean ⟨i|R|j⟩² reaches this fraction of 1/d.
const LINK: f64 = 0.3;
/// A mode with more than this share of translation or rotation is one.
const HALF: f64 = 0.5;

/// Gives every mode its kind and irrep; `atoms` are those of the displacements.
#[must_use]
pub fn assign(atoms: &[Atom], vibrations: &Vibrations, symmetry: &Symmetry, thresholds: &ModeThresholds) -> Assignment {
    let written: Vec<DVector<f64>> =
        vibrations.modes.iter().map(|mode| DVector::from_column_slice(&mode.displacements)).collect();
    let roots: Vec<f64> = atoms.iter().map(|atom| masses::mass(atom.element).unwrap_or(0.0).sqrt()).collect();
    let rigid = Rigid::new(atoms, &roots);
    let read_as = |weighting: Weighting| {
        let vectors: Vec<DVector<f64>> = written.iter().map(|vector| weighted(vector, &roots, weighting)).collect();
        let residual = largest_cosine(&vectors);
        (residual + mixing(&vectors, &rigid), weighting, residual, vectors)
    };
    let (cartesian, mass_weighted) = (read_as(Weighting::Cartesian), read_as(Weighting::MassWeighted));
    let (_, weighting, residual, vectors) = if mass_weighted.0 < cartesian.0 { mass_weighted } else { cartesian };
    let turned = Turned::new(symmetry);
    let mut modes: Vec<ModeLabel> =
        vectors.iter().map(|vector| label(vector, &turned, &rigid, &symmetry.group, thresholds.purity)).collect();
    let sets = join(&mut modes, &vectors, &turned, vibrations, &symmetry.group, thresholds);
    Assignment { modes, sets, weighting, residual }
}

/// The mass-weighted unit vector of a mode; zero where the file lists none.
fn weighted(vector: &DVector<f64>, roots: &[f64], weighting: Weighting) -> DVector<f64> {
    if vector.len() != 3 * roots.len() {
        return DVector::zeros(3 * roots.len());
    }
    let scaled = match weighting {
        Weighting::Cartesian => DVector::from_fn(vector.len(), |i, _| vector[i] * roots[i / 3]),
        Weighting::MassWeighted => vector.clone(),
    };
    scaled.try_normalize(1e-300).unwrap_or_else(|| DVector::zeros(3 * roots.len()))
}

/// Over the first modes only: so many tell the readings apart, and all pairs of a large molecule would take long.
fn largest_cosine(vectors: &[DVector<f64>]) -> f64 {
    const ENOUGH: usize = 300;
    let vectors = &vectors[..vectors.len().min(ENOUGH)];
    let mut largest: f64 = 0.0;
    for (at, a) in vectors.iter().enumerate() {
        for b in &vectors[..at] {
            largest = largest.max(a.dot(b).abs());
        }
    }
    largest
}

/// The worst mixture of rigid motion and vibration in one mode: 0 when each is wholly one of them, ½ at most.
fn mixing(vectors: &[DVector<f64>], rigid: &Rigid) -> f64 {
    let share = |vector: &DVector<f64>| rigid.shares(vector).iter().sum::<f64>();
    vectors.iter().map(share).map(|share| share.min(1.0 - share)).fold(0.0, f64::max)
}

/// Mass-weighted translations and rotations, orthonormal.
struct Rigid {
    translations: Vec<DVector<f64>>,
    rotations: Vec<DVector<f64>>,
}

impl Rigid {
    fn new(atoms: &[Atom], roots: &[f64]) -> Self {
        let total: f64 = roots.iter().map(|root| root * root).sum();
        let centre =
            atoms.iter().zip(roots).map(|(atom, root)| atom.position.coords * *root * *root).sum::<Vector3<f64>>()
                / total.max(f64::MIN_POSITIVE);
        let spread = |of: &dyn Fn(usize) -> Vector3<f64>| {
            let parts: Vec<Vector3<f64>> = (0..atoms.len()).map(|atom| of(atom) * roots[atom]).collect();
            DVector::from_fn(3 * atoms.len(), |i, _| parts[i / 3][i % 3])
        };
        let axes = [Vector3::x(), Vector3::y(), Vector3::z()];
        let mut translations = Vec::new();
        let mut rotations = Vec::new();
        for axis in axes {
            translations.extend(spread(&|_| axis).try_normalize(1e-9));
        }
        for axis in axes {
            let mut turn = spread(&|atom| axis.cross(&(atoms[atom].position.coords - centre)));
            let size = turn.norm();
            // Twice, so that rounding does not stay.
            for known in [&translations, &rotations, &translations, &rotations] {
                for other in known {
                    let overlap = other.dot(&turn);
                    turn.axpy(-overlap, other, 1.0);
                }
            }
            // About the line of a linear molecule nothing is left.
            rotations.extend((turn.norm() > 1e-2 * size.max(1e-6)).then(|| turn.normalize()));
        }
        Self { translations, rotations }
    }

    /// Shares of translation and rotation in a unit vector.
    fn shares(&self, vector: &DVector<f64>) -> [f64; 2] {
        [&self.translations, &self.rotations]
            .map(|space| space.iter().map(|axis| axis.dot(vector).powi(2)).sum::<f64>())
    }
}

/// Displacement fields under the operations: each nucleus' displacement is turned and carried to the image.
struct Turned<'a> {
    permutations: &'a [Vec<usize>],
    matrices: Vec<Matrix3<f64>>,
}

impl<'a> Turned<'a> {
    fn new(symmetry: &'a Symmetry) -> Self {
        let n = symmetry.group.elements().len();
        Self {
            permutations: &symmetry.permutations,
            matrices: (0..n).map(|element| symmetry.matrix(element)).collect(),
        }
    }

    /// ⟨bra|R|ket⟩ for every operation.
    fn elements(&self, bra: &DVector<f64>, ket: &DVector<f64>) -> impl Iterator<Item = f64> {
        self.permutations.iter().zip(&self.matrices).map(move |(permutation, matrix)| {
            let of_atom = |(atom, &to): (usize, &usize)| {
                bra.fixed_rows::<3>(3 * to).dot(&(matrix * ket.fixed_rows::<3>(3 * atom)))
            };
            permutation.iter().enumerate().map(of_atom).sum()
        })
    }
}

fn label(
    vector: &DVector<f64>,
    turned: &Turned<'_>,
    rigid: &Rigid,
    group: &PointGroup,
    purity_limit: f64,
) -> ModeLabel {
    let [translation, rotation] = rigid.shares(vector);
    let (kind, own) = if translation > HALF {
        (Kind::Translation, translation)
    } else if rotation > HALF {
        (Kind::Rotation, rotation)
    } else {
        (Kind::Vibration, 1.0 - translation - rotation)
    };
    let foreign = (1.0 - own).max(0.0);
    // The elements held of all rotations are too few to project with; an atom only moves as a whole.
    if vector.norm() < HALF || group.name() == GroupName::K {
        return ModeLabel { kind, foreign, irrep: None, purity: 0.0, set: 0 };
    }
    let expectations: Vec<f64> = turned.elements(vector, vector).collect();
    let weight = |irrep: usize| -> f64 {
        group.projector_coefficients(irrep).iter().zip(&expectations).map(|(a, b)| a * b).sum()
    };
    let (best, purity) = (0..group.irreps().len())
        .map(|irrep| (irrep, weight(irrep)))
        .fold((0, 0.0), |best, here| if here.1 > best.1 { here } else { best });
    ModeLabel { kind, foreign, irrep: (purity >= purity_limit).then_some(best), purity, set: 0 }
}

/// Joins partners: of one kind and irrep, near in wavenumber, and connected by the operations.
fn join(
    modes: &mut [ModeLabel],
    vectors: &[DVector<f64>],
    turned: &Turned<'_>,
    vibrations: &Vibrations,
    group: &PointGroup,
    thresholds: &ModeThresholds,
) -> Vec<ModeSet> {
    let mut sets: Vec<ModeSet> = Vec::new();
    for at in 0..modes.len() {
        let (kind, irrep) = (modes[at].kind, modes[at].irrep);
        let dimension = irrep.map_or(1, |irrep| group.irreps()[irrep].dimension);
        let near = |other: usize| {
            let wavenumber = |mode: usize| vibrations.modes[mode].wavenumber.unwrap_or(0.0);
            // Rigid motions have no wavenumber to compare.
            kind != Kind::Vibration || (wavenumber(at) - wavenumber(other)).abs() <= thresholds.degeneracy_per_cm
        };
        let linked = |other: usize| {
            let squares = turned.elements(&vectors[other], &vectors[at]).map(|value| value * value);
            squares.sum::<f64>() / turned.matrices.len() as f64 >= LINK / dimension as f64
        };
        let home = sets.iter().position(|set| {
            dimension > 1
                && (set.kind, set.irrep) == (kind, irrep)
                && set.modes.len() < dimension
                && set.modes.iter().all(|&other| near(other))
                && set.modes.iter().any(|&other| linked(other))
        });
        modes[at].set = home.unwrap_or(sets.len());
        match home {
            Some(set) => sets[set].modes.push(at),
            None => sets.push(ModeSet { kind, irrep, modes: vec![at], complete: false }),
        }
    }
    for set in &mut sets {
        set.complete = set.irrep.is_some_and(|irrep| set.modes.len() == group.irreps()[irrep].dimension);
    }
    sets
}

/// How often each irrep occurs among the vibrations of a file and among those counted from the nuclei: (irrep, file, nuclei), only
/// where the two differ.
#[must_use]
pub fn differences(assignment: &Assignment, motion: &Motion, group: &PointGroup) -> Vec<(usize, f64, usize)> {
    (0..group.irreps().len())
        .map(|irrep| {
            let modes = assignment
                .modes
                .iter()
                .filter(|mode| mode.kind == Kind::Vibration && mode.irrep == Some(irrep))
                .count();
            (irrep, modes as f64 / group.irreps()[irrep].dimension as f64, motion.n_vibrations(irrep))
        })
        .filter(|&(_, file, nuclei)| (file - nuclei as f64).abs() > 1e-9)
        .collect()
}

/// The atoms that the displacements belong to: those of `[Atoms]` at the places of `[FR-COORD]`, or the latter alone.
#[must_use]
pub fn atoms_of_modes(atoms: &[Atom], vibrations: &Vibrations) -> Vec<Atom> {
    let alike = atoms.len() == vibrations.atoms.len()
        && atoms
            .iter()
            .zip(&vibrations.atoms)
            .all(|(atom, (name, _))| atom.element == crate::model::elements::atomic_number(name));
    if vibrations.atoms.is_empty() {
        atoms.to_vec()
    } else if alike {
        let moved =
            |(atom, (_, place)): (&Atom, &(String, nalgebra::Point3<f64>))| Atom { position: *place, ..atom.clone() };
        atoms.iter().zip(&vibrations.atoms).map(moved).collect()
    } else {
        vibrations.atoms.iter().map(|(name, place)| crate::model::named_atom(name, (*place).into())).collect()
    }
}
