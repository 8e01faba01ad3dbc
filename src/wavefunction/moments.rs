//! One-electron integrals beside the overlap: position, gradient, turning about an origin, second moments.
//!
//! Not here: the recursion and the passage to pure functions (`wavefunction::overlap`), what the integrals mean for
//! transitions.

use super::basis::{Basis, BasisShell};
use super::overlap::{AxisTable, Block, SCREEN, components, one_axis};
use nalgebra::Point3;
use ndarray::{Array3, Axis, parallel::prelude::*, s};

/// A real operator; r counts from the origin given to [`moments`].
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Operator {
    /// x, y, z, bohr.
    Position,
    /// ∂/∂x, ∂/∂y, ∂/∂z on the ket, bohr⁻¹.
    Gradient,
    /// (r × ∇) on the ket, components x, y, z: angular momentum is −iħ times this.
    Turn,
    /// xx, xy, xz, yy, yz, zz, bohr².
    SecondMoments,
}

/// What acts in one direction.
#[derive(Clone, Copy)]
enum Factor {
    One,
    Coordinate,
    Square,
    Derivative,
}

use Factor::{Coordinate, Derivative, One, Square};

/// Components as sums of products of what acts along x, y and z.
const POSITION: &[&[(f64, [Factor; 3])]] =
    &[&[(1.0, [Coordinate, One, One])], &[(1.0, [One, Coordinate, One])], &[(1.0, [One, One, Coordinate])]];
const GRADIENT: &[&[(f64, [Factor; 3])]] =
    &[&[(1.0, [Derivative, One, One])], &[(1.0, [One, Derivative, One])], &[(1.0, [One, One, Derivative])]];
const TURN: &[&[(f64, [Factor; 3])]] = &[
    &[(1.0, [One, Coordinate, Derivative]), (-1.0, [One, Derivative, Coordinate])],
    &[(1.0, [Derivative, One, Coordinate]), (-1.0, [Coordinate, One, Derivative])],
    &[(1.0, [Coordinate, Derivative, One]), (-1.0, [Derivative, Coordinate, One])],
];
const SECOND_MOMENTS: &[&[(f64, [Factor; 3])]] = &[
    &[(1.0, [Square, One, One])],
    &[(1.0, [Coordinate, Coordinate, One])],
    &[(1.0, [Coordinate, One, Coordinate])],
    &[(1.0, [One, Square, One])],
    &[(1.0, [One, Coordinate, Coordinate])],
    &[(1.0, [One, One, Square])],
];

impl Operator {
    fn terms(self) -> &'static [&'static [(f64, [Factor; 3])]] {
        match self {
            Self::Position => POSITION,
            Self::Gradient => GRADIENT,
            Self::Turn => TURN,
            Self::SecondMoments => SECOND_MOMENTS,
        }
    }
}

/// ⟨μ|O|ν⟩ of all functions: n_components × n_functions × n_functions.
///
/// # Holds
/// Position and second moments are symmetric in μ, ν; gradient and turn are antisymmetric.
/// # Source
/// Recurrence as for the overlap, the ket raised or lowered by the operator: J. Chem. Phys. 84, 3963 (1986),
/// doi:10.1063/1.450106.
#[must_use]
pub fn moments(basis: &Basis, operator: Operator, origin: &Point3<f64>) -> Array3<f64> {
    let terms = operator.terms();
    let n = basis.n_functions();
    // Function by component by function, so that each thread owns whole rows.
    let mut integrals = Array3::zeros((n, terms.len(), n));
    let mut rows = Vec::with_capacity(basis.shells().len());
    let mut rest = integrals.view_mut();
    for shell in basis.shells() {
        let (head, tail) = rest.split_at(Axis(0), shell.n_functions());
        rows.push(head);
        rest = tail;
    }
    rows.into_par_iter().zip(basis.shells()).for_each(|(mut rows, a)| {
        let mut blocks = vec![Block::default(); terms.len()];
        for b in basis.shells() {
            if fill(&mut blocks, a, b, terms, origin) {
                for (component, block) in blocks.iter_mut().enumerate() {
                    block.store(a, b, rows.slice_mut(s![.., component, b.range()]));
                }
            }
        }
    });
    integrals.permuted_axes([1, 0, 2])
}

/// Sums over pairs of primitives, one block a component; false when all are negligible.
fn fill(
    blocks: &mut [Block],
    a: &BasisShell,
    b: &BasisShell,
    terms: &[&[(f64, [Factor; 3])]],
    origin: &Point3<f64>,
) -> bool {
    for block in &mut *blocks {
        block.clear(a, b);
    }
    let (bras, kets) = (components(a.l), components(b.l));
    let (apart, from_origin) = (b.centre - a.centre, b.centre - origin);
    let mut any = false;
    for (alpha, f) in a.exponents.iter().zip(&a.factors) {
        for (beta, g) in b.exponents.iter().zip(&b.factors) {
            let p = alpha + beta;
            let gaussian = alpha * beta / p * apart.norm_squared();
            if gaussian > SCREEN {
                continue;
            }
            any = true;
            let scale = f * g * (-gaussian).exp() * (std::f64::consts::PI / p).powf(1.5);
            let axes: [[AxisTable; 4]; 3] = std::array::from_fn(|axis| {
                let (from_a, from_b) = (beta / p * apart[axis], -alpha / p * apart[axis]);
                let overlap = one_axis(a.l, b.l + 2, from_a, from_b, 0.5 / p);
                [One, Coordinate, Square, Derivative]
                    .map(|factor| acted(factor, &overlap, a.l, b.l, *beta, from_origin[axis]))
            });
            for (block, terms) in blocks.iter_mut().zip(terms) {
                for &(sign, [x, y, z]) in *terms {
                    let tables = [&axes[0][x as usize], &axes[1][y as usize], &axes[2][z as usize]];
                    block.add(bras, kets, sign * scale, tables);
                }
            }
        }
    }
    any
}

/// The table of one direction with the operator between: x − O is (x − B) + (B − O), the derivative of
/// (x − B)^j exp(−β(x − B)²) is j (x − B)^{j−1} − 2β (x − B)^{j+1} times the same Gaussian.
fn acted(factor: Factor, overlap: &AxisTable, la: usize, lb: usize, beta: f64, shift: f64) -> AxisTable {
    let mut table = *overlap;
    for (row, source) in table.iter_mut().zip(overlap).take(la + 1) {
        for j in 0..=lb {
            row[j] = match factor {
                One => source[j],
                Coordinate => source[j + 1] + shift * source[j],
                Square => source[j + 2] + shift * (2.0 * source[j + 1] + shift * source[j]),
                Derivative => {
                    let below = if j > 0 { j as f64 * source[j - 1] } else { 0.0 };
                    below - 2.0 * beta * source[j + 1]
                }
            };
        }
    }
    table
}
