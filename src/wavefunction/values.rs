//! Values of orbitals at points of space.
//!
//! Here: rows over canonical functions → numbers at points, with functions passed over where they have died out.
//! Not here: which points a picture needs (`picture::grid`), norms and overlaps (`wavefunction::overlap`).

use super::basis::{Basis, BasisShell};
use super::cartesian::{Powers, monomials, pure_over_monomials, squared_norm};
use nalgebra::{Point3, Vector3};
use ndarray::{Array2, ArrayView2, Axis, parallel::prelude::*};
use rayon::prelude::ParallelSlice;

/// What a shell left out of a value may at most have added to it, bohr^(−3/2).
const FLOOR: f64 = 1e-7;

/// Points taken together: a shell too far from all of them is passed over at once.
const BLOCK: usize = 64;

/// A shell with the orbitals' coefficients over its plain monomials.
struct Spread<'a> {
    shell: &'a BasisShell,
    powers: Vec<Powers>,
    /// One row an orbital, one column a monomial.
    coefficients: Array2<f64>,
    /// Beyond this distance from the centre it adds less than [`FLOOR`] to any orbital, bohr.
    extent: f64,
}

impl<'a> Spread<'a> {
    fn new(shell: &'a BasisShell, rows: ArrayView2<'_, f64>) -> Self {
        let powers = monomials(shell.l);
        let own = rows.slice(ndarray::s![.., shell.range()]);
        let mut coefficients = Array2::zeros((rows.nrows(), powers.len()));
        for (column, &power) in powers.iter().enumerate() {
            // The radial factors belong to x^l; other monomials are larger when normalised.
            let norm = (squared_norm([shell.l, 0, 0]) / squared_norm(power)).sqrt();
            for (row, orbital) in own.outer_iter().enumerate() {
                coefficients[(row, column)] = norm
                    * if shell.pure {
                        let pure = pure_over_monomials(shell.l);
                        orbital.iter().enumerate().map(|(k, c)| c * pure[(column, k)]).sum()
                    } else {
                        orbital[column]
                    };
            }
        }
        let largest =
            coefficients.outer_iter().map(|orbital| orbital.iter().map(|c: &f64| c.abs()).sum()).fold(0.0, f64::max);
        Self { shell, powers, coefficients, extent: extent(shell, largest) }
    }

    /// Adds the shell's part at `r` from its centre to the values of all orbitals.
    fn add(&self, r: Vector3<f64>, values: &mut [f64]) {
        let squared = r.norm_squared();
        if squared > self.extent * self.extent {
            return;
        }
        let radial = radial(self.shell, squared);
        let power = |x: f64, n: usize| (0..n).fold(1.0, |product, _| product * x);
        for (powers, column) in self.powers.iter().zip(self.coefficients.columns()) {
            let monomial = radial * power(r.x, powers[0]) * power(r.y, powers[1]) * power(r.z, powers[2]);
            for (value, coefficient) in values.iter_mut().zip(column) {
                *value += monomial * coefficient;
            }
        }
    }
}

/// Σ f exp(−αr²).
fn radial(shell: &BasisShell, squared: f64) -> f64 {
    shell.exponents.iter().zip(&shell.factors).map(|(exponent, factor)| factor * (-exponent * squared).exp()).sum()
}

/// The distance beyond which `largest`·r^l·Σ|f|exp(−αr²) stays below [`FLOOR`].
fn extent(shell: &BasisShell, largest: f64) -> f64 {
    let power = i32::try_from(shell.l).unwrap_or(0);
    let bound = |r: f64| {
        let primitives = shell.exponents.iter().zip(&shell.factors);
        largest * r.powi(power) * primitives.map(|(exponent, f)| f.abs() * (-exponent * r * r).exp()).sum::<f64>()
    };
    let softest = shell.exponents.iter().copied().fold(f64::INFINITY, f64::min);
    // r^l exp(−αr²) falls from √(l/2α) on, for every primitive from where the softest does.
    let (mut inside, mut outside) = ((shell.l as f64 / (2.0 * softest)).sqrt(), 0.0);
    if bound(inside.max(1e-3)) < FLOOR {
        return inside;
    }
    for step in 0..64 {
        outside = inside + 2.0_f64.powi(step - 2) / softest.sqrt();
        if bound(outside) < FLOOR {
            break;
        }
    }
    for _ in 0..24 {
        let middle = f64::midpoint(inside, outside);
        if bound(middle) < FLOOR {
            outside = middle;
        } else {
            inside = middle;
        }
    }
    outside
}

/// Values of orbitals at points.
///
/// # Shapes and units
/// `rows` is n_orbitals × n_functions over the canonical functions of `basis`; `points` in bohr, in the axes of the
/// file. The result is n_orbitals × n_points, in bohr^(−3/2). Neighbours in `points` should be neighbours in space:
/// functions are passed over for runs of points.
/// # Holds
/// ∫ψ² over space is CᵀSC; an orbital turned by R has at r the value that it had at R⁻¹r. Each function left out would have added less
/// than 1e-7. The result does not depend on the number of threads.
#[must_use]
pub fn values(basis: &Basis, rows: ArrayView2<'_, f64>, points: &[Point3<f64>]) -> Array2<f64> {
    let shells: Vec<Spread<'_>> = basis.shells().iter().map(|shell| Spread::new(shell, rows)).collect();
    let n_orbitals = rows.nrows();
    let mut by_point = Array2::zeros((points.len(), n_orbitals));
    by_point.axis_chunks_iter_mut(Axis(0), BLOCK).into_par_iter().zip(points.par_chunks(BLOCK)).for_each(
        |(mut block, points)| {
            let first = points[0];
            let reach = points.iter().map(|point| (point - first).norm()).fold(0.0, f64::max);
            for shell in &shells {
                if (first - shell.shell.centre).norm() > shell.extent + reach {
                    continue;
                }
                for (mut values, point) in block.outer_iter_mut().zip(points) {
                    if let Some(values) = values.as_slice_mut() {
                        shell.add(point - shell.shell.centre, values);
                    }
                }
            }
        },
    );
    by_point.t().as_standard_layout().into_owned()
}
