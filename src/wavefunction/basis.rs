//! Basis functions in canonical form: every function normalised to one, canonical order and signs.
//!
//! Not here: how a file writes its coefficients (`wavefunction::convention`).

use super::cartesian::squared_norm;
use crate::model::{Atom, Shell};
use nalgebra::{Matrix3, Point3};

/// How a file's contraction coefficients are meant. The contraction is scaled to norm one in either case.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Primitives {
    /// They multiply normalised primitives.
    Normalised,
    /// They already contain the primitive's normalisation, that of x^l.
    Raw,
}

/// One contracted shell, its functions normalised to one.
#[derive(Debug, Clone, PartialEq)]
pub struct BasisShell {
    /// Atom that carries it.
    pub atom_idx: usize,
    /// Angular momentum.
    pub l: usize,
    /// Pure or Cartesian; s and p always count as Cartesian (p is x, y, z).
    pub pure: bool,
    /// Index of its first function.
    pub offset: usize,
    /// Centre in bohr.
    pub centre: Point3<f64>,
    /// Exponents in bohr⁻².
    pub exponents: Vec<f64>,
    /// Factor of x^l exp(−αr²), one a primitive, in the function x^l of norm one.
    pub factors: Vec<f64>,
}

impl BasisShell {
    /// Number of functions.
    #[must_use]
    pub fn n_functions(&self) -> usize {
        if self.pure { 2 * self.l + 1 } else { (self.l + 1) * (self.l + 2) / 2 }
    }

    /// Indices of its functions.
    #[must_use]
    pub fn range(&self) -> std::ops::Range<usize> {
        self.offset..self.offset + self.n_functions()
    }
}

/// All functions in file order.
#[derive(Debug, Clone, PartialEq)]
pub struct Basis {
    shells: Vec<BasisShell>,
    n_functions: usize,
}

impl Basis {
    /// Normalises every shell.
    #[must_use]
    pub fn new(atoms: &[Atom], shells: &[Shell], primitives: Primitives) -> Self {
        let mut offset = 0;
        let shells = shells
            .iter()
            .map(|shell| {
                let factors = factors(shell, primitives);
                let shell = BasisShell {
                    atom_idx: shell.atom_idx,
                    l: shell.l,
                    pure: shell.pure && shell.l > 1,
                    offset,
                    centre: atoms[shell.atom_idx].position,
                    exponents: shell.exponents.clone(),
                    factors,
                };
                offset += shell.n_functions();
                shell
            })
            .collect();
        Self { shells, n_functions: offset }
    }

    /// The shells in the order of their functions.
    #[must_use]
    pub fn shells(&self) -> &[BasisShell] {
        &self.shells
    }

    /// Number of functions.
    #[must_use]
    pub fn n_functions(&self) -> usize {
        self.n_functions
    }

    /// The same functions, unturned, on centres turned by `matrix` about `centre`.
    #[must_use]
    pub fn with_turned_centres(&self, matrix: &Matrix3<f64>, centre: &Point3<f64>) -> Self {
        let mut turned = self.clone();
        for shell in &mut turned.shells {
            shell.centre = centre + matrix * (shell.centre - centre);
        }
        turned
    }
}

/// ∫ x^2l exp(−pr²) over space, without the factor π^{3/2}.
fn self_overlap(l: usize, p: f64) -> f64 {
    squared_norm([l, 0, 0]) / (2.0 * p).powi(i32::try_from(l).unwrap_or(0)) / (p * p.sqrt())
}

fn factors(shell: &Shell, primitives: Primitives) -> Vec<f64> {
    let unit = std::f64::consts::PI.powf(-0.75);
    let mut factors: Vec<f64> = shell
        .exponents
        .iter()
        .zip(&shell.coefficients)
        .map(|(exponent, coefficient)| match primitives {
            Primitives::Normalised => coefficient * unit / self_overlap(shell.l, 2.0 * exponent).sqrt(),
            Primitives::Raw => *coefficient,
        })
        .collect();
    let mut norm = 0.0;
    for (a, f) in shell.exponents.iter().zip(&factors) {
        for (b, g) in shell.exponents.iter().zip(&factors) {
            norm += f * g * self_overlap(shell.l, a + b);
        }
    }
    let scale = unit / norm.sqrt();
    for factor in &mut factors {
        *factor *= scale;
    }
    factors
}
