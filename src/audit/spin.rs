//! ⟨S²⟩ of a determinant and its corresponding orbitals.
//!
//! Not here: which operations exchange the spins (`audit::density`).

use super::density::{Electrons, Occupied, Shells};
use crate::wavefunction::{Basis, product};
use faer::Mat;
use ndarray::{Array1, Array2};

/// An alpha and a beta orbital that correspond, or an alpha orbital without a partner.
#[derive(Debug, Clone, PartialEq)]
pub struct Pair {
    /// Overlap of the two; 0 without a partner.
    pub overlap: f64,
    /// Share of the alpha orbital on each atom, by gross population.
    pub alpha: Vec<f64>,
    /// The same of the beta orbital; empty without a partner.
    pub beta: Vec<f64>,
}

/// What the spins say.
#[derive(Debug, Clone, PartialEq)]
pub struct SpinReport {
    /// (Nα − Nβ)/2.
    pub projection: f64,
    /// ⟨S²⟩; None where fractional occupations leave it open.
    pub s_squared: Option<f64>,
    /// S(S + 1) for the spin that the numbers of electrons ask for.
    pub ideal: f64,
    /// Overlaps of corresponding orbitals, largest first; one a beta electron.
    pub overlaps: Vec<f64>,
    /// Pairs with an overlap below the limit, smallest last.
    pub magnetic: Vec<Pair>,
    /// Alpha orbitals without a partner.
    pub unpaired: Vec<Pair>,
}

impl SpinReport {
    /// ⟨S²⟩ and corresponding orbitals; pairs count as magnetic below `limit`.
    ///
    /// # Source
    /// ⟨S²⟩ of a determinant: "Quantum theory of many-particle systems. III", Phys. Rev. 97, 1509 (1955); corresponding
    /// orbitals by singular values of the overlap: Proc. R. Soc. A 263, 483 (1961) (both from memory).
    #[must_use]
    pub fn of(electrons: &Electrons, basis: &Basis, n_atoms: usize, limit: f64) -> Self {
        let (alpha, beta) = (&electrons.alpha, &electrons.beta);
        let projection = 0.5 * (alpha.electrons() - beta.electrons());
        let spin = projection.abs();
        let ideal = spin * (spin + 1.0);
        let mut report = Self {
            projection,
            s_squared: None,
            ideal,
            overlaps: Vec::new(),
            magnetic: Vec::new(),
            unpaired: Vec::new(),
        };
        // A closed shell has 2 in each orbital, 1 of each spin.
        if electrons.shells == Shells::Fractional || !alpha.is_determinant() || !beta.is_determinant() {
            return report;
        }
        // The spin with more electrons first; a file may call it beta.
        let (major, minor) = if projection < 0.0 { (beta, alpha) } else { (alpha, beta) };
        let overlap = product(minor.products.view(), major.coefficients.t());
        let squares: f64 = overlap.iter().map(|value| value * value).sum();
        report.s_squared = Some(spin * spin + 0.5 * electrons.count() - squares);
        let Some((left, values, right)) = singular(&overlap) else { return report };
        let shares = |spin: &Occupied, vectors: &Array2<f64>, k: usize| {
            let weights = vectors.column(k);
            let coefficients = weights.dot(&spin.coefficients);
            let products = weights.dot(&spin.products);
            by_atom(basis, n_atoms, &coefficients, &products)
        };
        for (k, &value) in values.iter().enumerate().filter(|(_, value)| **value < limit) {
            let (first, second) = (shares(major, &right, k), shares(minor, &left, k));
            let (alpha, beta) = if projection < 0.0 { (second, first) } else { (first, second) };
            report.magnetic.push(Pair { overlap: value, alpha, beta });
        }
        report.unpaired = (values.len()..right.ncols())
            .map(|k| Pair { overlap: 0.0, alpha: shares(major, &right, k), beta: Vec::new() })
            .collect();
        report.overlaps = values;
        report
    }

    /// ⟨S²⟩ less the ideal value.
    #[must_use]
    pub fn contamination(&self) -> Option<f64> {
        self.s_squared.map(|value| value - self.ideal)
    }
}

/// Left vectors, singular values from large to small, right vectors (all of them).
fn singular(matrix: &Array2<f64>) -> Option<(Array2<f64>, Vec<f64>, Array2<f64>)> {
    let (rows, columns) = matrix.dim();
    if rows == 0 || columns == 0 {
        return Some((Array2::eye(rows), Vec::new(), Array2::eye(columns)));
    }
    let svd = Mat::from_fn(rows, columns, |i, j| matrix[(i, j)]).svd().ok()?;
    let (u, s, v) = (svd.U(), svd.S(), svd.V());
    let left = Array2::from_shape_fn((rows, rows), |(i, j)| u[(i, j)]);
    let right = Array2::from_shape_fn((columns, columns), |(i, j)| v[(i, j)]);
    Some((left, (0..rows.min(columns)).map(|k| s[k].min(1.0)).collect(), right))
}

/// Gross population of one orbital on every atom.
fn by_atom(basis: &Basis, n_atoms: usize, coefficients: &Array1<f64>, products: &Array1<f64>) -> Vec<f64> {
    let mut shares = vec![0.0; n_atoms];
    for shell in basis.shells() {
        for function in shell.range() {
            shares[shell.atom_idx] += coefficients[function] * products[function];
        }
    }
    shares
}
