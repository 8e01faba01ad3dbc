//! The densities of a wavefunction, and how much of each every operation keeps.
//!
//! Here: which orbitals hold which electrons, overlaps of densities with their turned copies.
//! Not here: which operations count as kept (`audit::kept`).

use super::AuditError;
use crate::labelling::Labelled;
use crate::model::{Molecule, OrbitalSet};
use crate::wavefunction::{Operations, Rows};
use ndarray::{Array1, Array2, ArrayView1, Axis};
use rayon::prelude::*;

/// Electrons below this are none.
const EMPTY: f64 = 1e-8;
/// Occupations this near to a whole number are whole.
const WHOLE: f64 = 1e-4;

/// The orbitals of one spin that hold electrons.
#[derive(Debug, Clone)]
pub struct Occupied {
    /// Index of their set in the molecule.
    pub set_idx: usize,
    /// Indices within the set.
    pub orbitals: Vec<usize>,
    /// Electrons of this spin in each.
    pub occupations: Array1<f64>,
    /// n_occupied × n_functions.
    pub coefficients: Array2<f64>,
    /// Rows of S·C, the same shape.
    pub products: Array2<f64>,
}

impl Occupied {
    fn new(labelled: &Labelled, molecule: &Molecule, set_idx: usize, occupations: &[f64]) -> Self {
        let orbitals: Vec<usize> = (0..occupations.len()).filter(|&i| occupations[i] > EMPTY).collect();
        Self {
            set_idx,
            occupations: orbitals.iter().map(|&i| occupations[i]).collect(),
            coefficients: molecule.orbital_sets[set_idx].coefficients.select(Axis(0), &orbitals),
            products: labelled.settled.products[set_idx].select(Axis(0), &orbitals),
            orbitals,
        }
    }

    /// Coefficients and products.
    #[must_use]
    pub fn rows(&self) -> Rows<'_> {
        Rows { coefficients: self.coefficients.view(), products: self.products.view() }
    }

    /// Σ n.
    #[must_use]
    pub fn electrons(&self) -> f64 {
        self.occupations.sum()
    }

    /// Whether every orbital holds one electron.
    #[must_use]
    pub fn is_determinant(&self) -> bool {
        self.occupations.iter().all(|n| (n - 1.0).abs() <= WHOLE)
    }
}

/// How the spins share the orbitals of the file.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Shells {
    /// One set of orbitals, two electrons each.
    Closed,
    /// One set, some orbitals with one electron: taken as of parallel spins.
    RestrictedOpen,
    /// One set with fractions of electrons: each spin is given half, spin says nothing.
    Fractional,
    /// Orbitals of each spin.
    Unrestricted,
}

/// Electrons of each spin.
#[derive(Debug, Clone)]
pub struct Electrons {
    /// How the spins share the orbitals.
    pub shells: Shells,
    /// Alpha.
    pub alpha: Occupied,
    /// Beta.
    pub beta: Occupied,
}

fn occupations(set: &OrbitalSet) -> Option<Vec<f64>> {
    set.orbitals.iter().map(|orbital| orbital.occupation).collect()
}

impl Electrons {
    /// Reads the occupations.
    ///
    /// # Errors
    /// [`AuditError`] when the file gives none, or gives negative or impossible ones.
    pub fn of(molecule: &Molecule, labelled: &Labelled) -> Result<Self, AuditError> {
        let given: Vec<Vec<f64>> =
            molecule.orbital_sets.iter().map(occupations).collect::<Option<_>>().ok_or(AuditError::NoOccupations)?;
        let limit = if given.len() > 1 { 1.0 } else { 2.0 };
        if given.iter().flatten().sum::<f64>() <= EMPTY {
            return Err(AuditError::NoOccupations);
        }
        for (set, occupations) in molecule.orbital_sets.iter().zip(&given) {
            if let Some(orbital) = occupations.iter().position(|n| !(-WHOLE..=limit + 1e-2).contains(n)) {
                let occupation = occupations[orbital];
                return Err(AuditError::Occupation { orbital: orbital + 1, spin: set.spin, occupation, limit });
            }
        }
        let occupied = |set_idx: usize, occupations: &[f64]| Occupied::new(labelled, molecule, set_idx, occupations);
        if let [alpha, beta] = given.as_slice() {
            let (alpha, beta) = (occupied(0, alpha), occupied(1, beta));
            return Ok(Self { shells: Shells::Unrestricted, alpha, beta });
        }
        let all = &given[0];
        let whole = all.iter().all(|n| (n - n.round()).abs() <= WHOLE);
        let single = all.iter().any(|n| (n - 1.0).abs() <= WHOLE);
        let shells = match (whole, single) {
            (false, _) => Shells::Fractional,
            (true, true) => Shells::RestrictedOpen,
            (true, false) => Shells::Closed,
        };
        let share = |of: fn(f64) -> f64| occupied(0, &all.iter().map(|&n| of(n)).collect::<Vec<_>>());
        let (alpha, beta) = if shells == Shells::RestrictedOpen {
            (share(|n| n.min(1.0)), share(|n| (n - 1.0).max(0.0)))
        } else {
            (share(|n| 0.5 * n), share(|n| 0.5 * n))
        };
        Ok(Self { shells, alpha, beta })
    }

    /// Number of both spins.
    #[must_use]
    pub fn count(&self) -> f64 {
        self.alpha.electrons() + self.beta.electrons()
    }
}

/// Σ nᵢnⱼ⟨i|R|j⟩² between the densities of the two spins: the scalar product of one with the other turned by R.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Products {
    /// Alpha with alpha turned.
    pub aa: f64,
    /// Beta with alpha turned.
    pub ab: f64,
    /// Alpha with beta turned.
    pub ba: f64,
    /// Beta with beta turned.
    pub bb: f64,
}

impl Products {
    /// Both spins together.
    #[must_use]
    pub fn total(self) -> f64 {
        self.aa + self.ab + self.ba + self.bb
    }

    /// Alpha less beta.
    #[must_use]
    pub fn spin(self) -> f64 {
        self.aa - self.ab - self.ba + self.bb
    }
}

/// What one operation keeps of each density: 1 for all of it.
///
/// # Source
/// The scalar product of one-particle density operators, Tr(D·RDR⁻¹)/Tr(D·D) (common practice). That of the spin density
/// D(α) − D(β) runs from 1 to −1, which means reversed.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Retention {
    /// Of the density of both spins.
    pub total: f64,
    /// Of the alpha density.
    pub alpha: f64,
    /// Of the beta density; None without beta electrons.
    pub beta: Option<f64>,
    /// Of the spin density; None where there is none.
    pub spin: Option<f64>,
    /// Of the beta density by alpha turned; None without beta electrons.
    pub alpha_to_beta: Option<f64>,
}

/// A spin density whose square is below this is none.
const NO_SPIN: f64 = 1e-8;

impl Retention {
    fn new(here: Products, identity: Products) -> Self {
        let ratio = |value: f64, whole: f64, floor: f64| (whole > floor).then(|| value / whole);
        Self {
            total: ratio(here.total(), identity.total(), 0.0).unwrap_or(1.0),
            alpha: ratio(here.aa, identity.aa, EMPTY).unwrap_or(1.0),
            beta: ratio(here.bb, identity.bb, EMPTY),
            spin: ratio(here.spin(), identity.spin(), NO_SPIN),
            alpha_to_beta: ratio(here.ab, (identity.aa * identity.bb).sqrt(), EMPTY),
        }
    }
}

/// All operations on all densities, in the order of the group's elements.
#[derive(Debug, Clone)]
pub struct Densities {
    /// Scalar products.
    pub products: Vec<Products>,
    /// The same as fractions of what the identity gives.
    pub retention: Vec<Retention>,
}

/// Takes the scalar products for every operation.
///
/// Costs n_occupied² × n_functions an operation.
#[must_use]
pub fn densities(electrons: &Electrons, labelled: &Labelled) -> Densities {
    let (alpha, beta) = (&electrons.alpha, &electrons.beta);
    let same = electrons.shells == Shells::Closed || electrons.shells == Shells::Fractional;
    let product = |element: usize, bra: &Occupied, ket: &Occupied| {
        let elements = labelled.operations.elements(element, bra.rows(), ket.rows());
        weighted(&elements, bra.occupations.view(), ket.occupations.view())
    };
    let of = |element: usize| {
        let aa = product(element, alpha, alpha);
        if same {
            return Products { aa, ab: aa, ba: aa, bb: aa };
        }
        let (ab, ba) = (product(element, beta, alpha), product(element, alpha, beta));
        Products { aa, ab, ba, bb: product(element, beta, beta) }
    };
    let elements = 0..labelled.operations.count();
    let products: Vec<Products> = match labelled.operations {
        Operations::Permuting(_) => elements.into_par_iter().map(of).collect(),
        // Each holds a matrix of all functions: one at a time, which runs on all cores itself.
        Operations::Turned(_) => elements.map(of).collect(),
    };
    let identity = products[0];
    let retention = products.iter().map(|&here| Retention::new(here, identity)).collect();
    Densities { products, retention }
}

fn weighted(elements: &Array2<f64>, bras: ArrayView1<'_, f64>, kets: ArrayView1<'_, f64>) -> f64 {
    let rows = elements.outer_iter().zip(bras);
    rows.map(|(row, bra)| bra * row.iter().zip(kets).map(|(value, ket)| value * value * ket).sum::<f64>()).sum()
}
