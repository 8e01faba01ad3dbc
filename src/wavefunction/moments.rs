//! One-electron moments between orbitals: r, ∇, r × ∇ and products of two coordinates, about a given origin.
//!
//! Not here: what symmetry says of them (`selection`), the recursion itself (`wavefunction::overlap`).

use super::basis::{Basis, BasisShell};
use super::overlap::{Block, N, components, one_axis, primitive_pairs};
use super::product;
use nalgebra::Point3;
use ndarray::{Array2, ArrayView2, ArrayViewMut2, Axis, parallel::prelude::*, s};

/// Two degrees more than a shell's, for the second moments.
const W: usize = N + 2;
/// How many operators there are.
const N_OPERATORS: usize = 15;
/// Kets taken at a time, so that memory stays at 15 × n_functions × this.
const KETS: usize = 256;

/// ⟨i|O|j⟩ for all i and j, each n_bra × n_ket, in the axes of the file, atomic units.
#[derive(Debug, Clone, PartialEq)]
pub struct Moments {
    /// x, y, z from the origin.
    pub position: [Array2<f64>; 3],
    /// ∂/∂x, ∂/∂y, ∂/∂z.
    pub gradient: [Array2<f64>; 3],
    /// r × ∇ about the origin.
    pub angular: [Array2<f64>; 3],
    /// xx, yy, zz, xy, xz, yz from the origin.
    pub second: [Array2<f64>; 6],
}

/// Moments between two lists of orbitals given by rows of coefficients over the same basis.
///
/// # Shapes and units
/// `bra` is n_bra × n_functions, `ket` n_ket × n_functions. Bohr and its powers.
/// # Holds
/// For real functions r and its products are symmetric, ∇ and r × ∇ antisymmetric under exchange of bra and ket.
/// # Source
/// Moments and derivatives raise and lower the degree of the ket in the recursion of J. Chem. Phys. 84, 3963 (1986),
/// doi:10.1063/1.450106.
#[must_use]
pub fn moments(basis: &Basis, origin: &Point3<f64>, bra: ArrayView2<'_, f64>, ket: ArrayView2<'_, f64>) -> Moments {
    let mut all: Vec<Array2<f64>> = vec![Array2::zeros((bra.nrows(), ket.nrows())); N_OPERATORS];
    for start in (0..ket.nrows()).step_by(KETS) {
        let columns = start..(start + KETS).min(ket.nrows());
        let halves = half_transformed(basis, origin, ket.slice(s![columns.clone(), ..]));
        for (whole, half) in all.iter_mut().zip(&halves) {
            whole.slice_mut(s![.., columns.clone()]).assign(&product(bra, half.view()));
        }
    }
    let mut parts = all.into_iter();
    let mut next = || parts.next().unwrap_or_default();
    Moments {
        position: std::array::from_fn(|_| next()),
        gradient: std::array::from_fn(|_| next()),
        angular: std::array::from_fn(|_| next()),
        second: std::array::from_fn(|_| next()),
    }
}

/// ⟨μ|O|j⟩ of all functions μ: for each operator n_functions × n_ket.
fn half_transformed(basis: &Basis, origin: &Point3<f64>, ket: ArrayView2<'_, f64>) -> Vec<Array2<f64>> {
    let mut halves: Vec<Array2<f64>> = vec![Array2::zeros((basis.n_functions(), ket.nrows())); N_OPERATORS];
    // One row a function, so that sums run along memory.
    let columns = ket.t().as_standard_layout().into_owned();
    // One piece of every operator's matrix a shell: rows are written by one thread each.
    let mut pieces: Vec<Vec<ArrayViewMut2<'_, f64>>> = basis.shells().iter().map(|_| Vec::new()).collect();
    for half in &mut halves {
        let mut rest = half.view_mut();
        for (shell, pieces) in basis.shells().iter().zip(&mut pieces) {
            let (head, tail) = rest.split_at(Axis(0), shell.n_functions());
            pieces.push(head);
            rest = tail;
        }
    }
    pieces.into_par_iter().zip(basis.shells()).for_each(|(mut pieces, a)| {
        let mut blocks: [Block; N_OPERATORS] = Default::default();
        let mut strip = Array2::zeros((0, 0));
        for b in basis.shells() {
            if !fill(&mut blocks, a, b, origin) {
                continue;
            }
            if strip.dim() != (a.n_functions(), b.n_functions()) {
                strip = Array2::zeros((a.n_functions(), b.n_functions()));
            }
            for (block, piece) in blocks.iter_mut().zip(&mut pieces) {
                block.store(a, b, strip.view_mut());
                // By hand: a library's product costs more to call than these few rows take.
                for (strip_row, mut row) in strip.outer_iter().zip(piece.outer_iter_mut()) {
                    for (value, column) in strip_row.iter().zip(columns.slice(s![b.range(), ..]).outer_iter()) {
                        row.scaled_add(*value, &column);
                    }
                }
            }
        }
    });
    halves
}

/// One direction of a pair of primitives: overlaps degree by degree, from which the other integrals follow.
struct Direction {
    overlap: [[f64; W]; N],
    /// The ket's centre less the origin.
    from_origin: f64,
    /// Exponent of the ket.
    beta: f64,
}

impl Direction {
    /// Overlap, moment, second moment and derivative of the ket for degrees i and j.
    fn integrals(&self, i: usize, j: usize) -> [f64; 4] {
        let (row, o) = (&self.overlap[i], self.from_origin);
        // x − O = (x − B) + (B − O).
        let moment = row[j + 1] + o * row[j];
        let second = row[j + 2] + o * (2.0 * row[j + 1] + o * row[j]);
        let lowered = if j > 0 { j as f64 * row[j - 1] } else { 0.0 };
        [row[j], moment, second, lowered - 2.0 * self.beta * row[j + 1]]
    }
}

/// Sums all operators over pairs of primitives; false when every pair is negligible.
fn fill(blocks: &mut [Block; N_OPERATORS], a: &BasisShell, b: &BasisShell, origin: &Point3<f64>) -> bool {
    let (bras, kets) = (components(a.l), components(b.l));
    let from_origin = b.centre - origin;
    let mut any = false;
    for pair in primitive_pairs(a, b) {
        if !any {
            for block in blocks.iter_mut() {
                block.clear(a, b);
            }
            any = true;
        }
        let directions: [Direction; 3] = std::array::from_fn(|axis| Direction {
            overlap: one_axis::<W>(a.l, b.l + 2, pair.from_a[axis], pair.from_b[axis], pair.half),
            from_origin: from_origin[axis],
            beta: pair.beta,
        });
        let mut at = 0;
        for bra in bras {
            for ket in kets {
                let values = one_pair(&directions, bra, ket);
                for (block, value) in blocks.iter_mut().zip(values) {
                    block.values[at] += pair.scale * value;
                }
                at += 1;
            }
        }
    }
    any
}

/// All operators between two monomials, in the order of [`Moments`].
fn one_pair(directions: &[Direction; 3], bra: &[usize; 3], ket: &[usize; 3]) -> [f64; N_OPERATORS] {
    let [x, y, z] = std::array::from_fn(|axis| directions[axis].integrals(bra[axis], ket[axis]));
    let part = |which: usize| [x[which], y[which], z[which]];
    let (overlap, moment, second, derivative) = (part(0), part(1), part(2), part(3));
    let others = |k: usize| overlap[(k + 1) % 3] * overlap[(k + 2) % 3];
    let mut values = [0.0; N_OPERATORS];
    for k in 0..3 {
        let (next, last) = ((k + 1) % 3, (k + 2) % 3);
        values[k] = moment[k] * others(k);
        values[3 + k] = derivative[k] * others(k);
        values[6 + k] = overlap[k] * (moment[next] * derivative[last] - moment[last] * derivative[next]);
        values[9 + k] = second[k] * others(k);
    }
    values[12] = moment[0] * moment[1] * overlap[2];
    values[13] = moment[0] * overlap[1] * moment[2];
    values[14] = overlap[0] * moment[1] * moment[2];
    values
}
