//! Overlap of contracted Gaussians on any centres.
//!
//! Also the parts that other one-electron integrals share (`wavefunction::moments`): pairs of primitives, tables of one
//! direction, and the way from Cartesian components to functions. Not here: normalisation (`wavefunction::basis`).

use super::basis::{Basis, BasisShell};
use super::cartesian::{self, L_MAX, Powers};
use ndarray::{Array2, Axis, parallel::prelude::*, s};

/// Degrees in one direction, 0 to [`L_MAX`].
pub(super) const N: usize = L_MAX + 1;
/// Primitive pairs whose Gaussian factor is below e^−SCREEN are left out: 2e-18.
const SCREEN: f64 = 41.0;

/// ⟨μ|ν⟩ of all functions of one basis: n_functions × n_functions, symmetric, unit diagonal.
///
/// # Source
/// Recurrence: "Efficient recursive computation of molecular integrals over Cartesian Gaussian functions",
/// J. Chem. Phys. 84, 3963 (1986), doi:10.1063/1.450106.
#[must_use]
pub fn overlap(basis: &Basis) -> Array2<f64> {
    let mut matrix = rectangle(basis, basis, true);
    for i in 0..basis.n_functions() {
        for j in 0..i {
            matrix[(i, j)] = matrix[(j, i)];
        }
    }
    matrix
}

/// ⟨μ|ν⟩ of two bases, which may sit on different centres: n_bra × n_ket.
///
/// # Holds
/// `overlap_between(b, a)` is the transpose of `overlap_between(a, b)`.
#[must_use]
pub fn overlap_between(bra: &Basis, ket: &Basis) -> Array2<f64> {
    rectangle(bra, ket, false)
}

/// All blocks, or only those on and above the diagonal.
fn rectangle(bra: &Basis, ket: &Basis, upper: bool) -> Array2<f64> {
    let mut matrix = Array2::zeros((bra.n_functions(), ket.n_functions()));
    let mut rows = Vec::with_capacity(bra.shells().len());
    let mut rest = matrix.view_mut();
    for shell in bra.shells() {
        let (head, tail) = rest.split_at(Axis(0), shell.n_functions());
        rows.push(head);
        rest = tail;
    }
    rows.into_par_iter().zip(bra.shells()).enumerate().for_each(|(a_idx, (mut rows, a))| {
        let mut block = Block::default();
        for b in &ket.shells()[if upper { a_idx } else { 0 }..] {
            if block.fill(a, b) {
                block.store(a, b, rows.slice_mut(s![.., b.range()]));
            }
        }
    });
    matrix
}

/// A product of two primitives that is not negligible.
pub(super) struct PrimitivePair {
    /// Both factors, the Gaussian of the distance and (π/p)^{3/2}.
    pub(super) scale: f64,
    /// Exponent of the second.
    pub(super) beta: f64,
    /// 1/2p.
    pub(super) half: f64,
    /// From the first centre to the centre of the product.
    pub(super) from_a: [f64; 3],
    /// From the second.
    pub(super) from_b: [f64; 3],
}

/// All pairs of primitives of two shells whose Gaussian factor counts.
pub(super) fn primitive_pairs<'a>(a: &'a BasisShell, b: &'a BasisShell) -> impl Iterator<Item = PrimitivePair> + 'a {
    let apart = b.centre - a.centre;
    let distance_squared = apart.norm_squared();
    let first = a.exponents.iter().zip(&a.factors);
    first
        .flat_map(move |(alpha, f)| b.exponents.iter().zip(&b.factors).map(move |(beta, g)| (alpha, f, beta, g)))
        .filter_map(move |(alpha, f, beta, g)| {
            let p = alpha + beta;
            let gaussian = alpha * beta / p * distance_squared;
            (gaussian <= SCREEN).then(|| PrimitivePair {
                scale: f * g * (-gaussian).exp() * (std::f64::consts::PI / p).powf(1.5),
                beta: *beta,
                half: 0.5 / p,
                from_a: std::array::from_fn(|axis| beta / p * apart[axis]),
                from_b: std::array::from_fn(|axis| -alpha / p * apart[axis]),
            })
        })
}

/// Integrals of one pair of shells over Cartesian components.
#[derive(Default)]
pub(super) struct Block {
    /// Rows of the first shell's components, one entry a component of the second.
    pub(super) values: Vec<f64>,
    half: Vec<f64>,
}

impl Block {
    /// Room for one pair of shells, all zero.
    pub(super) fn clear(&mut self, a: &BasisShell, b: &BasisShell) {
        self.values.clear();
        self.values.resize(components(a.l).len() * components(b.l).len(), 0.0);
    }

    /// Overlaps summed over pairs of primitives; false when all are negligible.
    fn fill(&mut self, a: &BasisShell, b: &BasisShell) -> bool {
        let (bras, kets) = (components(a.l), components(b.l));
        self.clear(a, b);
        let mut any = false;
        for pair in primitive_pairs(a, b) {
            any = true;
            let tables: [[[f64; N]; N]; 3] =
                std::array::from_fn(|axis| one_axis(a.l, b.l, pair.from_a[axis], pair.from_b[axis], pair.half));
            let mut at = 0;
            for &[ax, ay, az] in bras {
                for &[bx, by, bz] in kets {
                    self.values[at] += pair.scale * tables[0][ax][bx] * tables[1][ay][by] * tables[2][az][bz];
                    at += 1;
                }
            }
        }
        any
    }

    /// Normalises the components, makes pure functions where the shells are pure, writes the block.
    pub(super) fn store(&mut self, a: &BasisShell, b: &BasisShell, mut target: ndarray::ArrayViewMut2<'_, f64>) {
        let (bras, kets) = (components(a.l), components(b.l));
        let (left, right) = (scales(a.l), scales(b.l));
        for (row, scale) in left.iter().enumerate() {
            for (column, other) in right.iter().enumerate() {
                self.values[row * kets.len() + column] *= scale * other;
            }
        }
        // Columns first: kets to functions, then bras.
        let n_columns = b.n_functions();
        self.half.clear();
        self.half.resize(bras.len() * n_columns, 0.0);
        for row in 0..bras.len() {
            let source = &self.values[row * kets.len()..(row + 1) * kets.len()];
            let image = &mut self.half[row * n_columns..(row + 1) * n_columns];
            if b.pure {
                let pure = cartesian::pure_over_monomials(b.l);
                for (column, value) in image.iter_mut().enumerate() {
                    *value = pure.column(column).iter().zip(source).map(|(factor, value)| factor * value).sum();
                }
            } else {
                image.copy_from_slice(source);
            }
        }
        for row in 0..a.n_functions() {
            for column in 0..n_columns {
                target[(row, column)] = if a.pure {
                    let pure = cartesian::pure_over_monomials(a.l);
                    (0..bras.len()).map(|k| pure[(k, row)] * self.half[k * n_columns + column]).sum()
                } else {
                    self.half[row * n_columns + column]
                };
            }
        }
    }
}

/// ∫ (x − A)^i (x − B)^j exp(−p(x − P)²) over √(π/p), for i ≤ `la`, j ≤ `lb`.
///
/// `W` is above `lb`.
pub(super) fn one_axis<const W: usize>(la: usize, lb: usize, from_a: f64, from_b: f64, half: f64) -> [[f64; W]; N] {
    let mut table = [[0.0; W]; N];
    table[0][0] = 1.0;
    for j in 0..lb {
        let below = if j > 0 { table[0][j - 1] } else { 0.0 };
        table[0][j + 1] = from_b * table[0][j] + half * j as f64 * below;
    }
    for i in 0..la {
        for j in 0..=lb {
            let below = if i > 0 { i as f64 * table[i - 1][j] } else { 0.0 };
            let across = if j > 0 { j as f64 * table[i][j - 1] } else { 0.0 };
            table[i + 1][j] = from_a * table[i][j] + half * (below + across);
        }
    }
    table
}

static COMPONENTS: std::sync::LazyLock<Vec<Vec<Powers>>> =
    std::sync::LazyLock::new(|| (0..=L_MAX).map(cartesian::monomials).collect());
static SCALES: std::sync::LazyLock<Vec<Vec<f64>>> = std::sync::LazyLock::new(|| {
    let of = |l: usize| {
        let top = cartesian::squared_norm([l, 0, 0]);
        cartesian::monomials(l).into_iter().map(|powers| (top / cartesian::squared_norm(powers)).sqrt()).collect()
    };
    (0..=L_MAX).map(of).collect()
});

pub(super) fn components(l: usize) -> &'static [Powers] {
    &COMPONENTS[l]
}

/// What brings each monomial from the constant of x^l to norm one.
fn scales(l: usize) -> &'static [f64] {
    &SCALES[l]
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::model::{Atom, Shell};
    use crate::wavefunction::basis::Primitives;
    use approx::assert_relative_eq;
    use nalgebra::Point3;

    fn atom(x: f64, y: f64, z: f64) -> Atom {
        let position = Point3::new(x, y, z);
        Atom { name: "H".into(), element: 1, charge: 1.0, ghost: false, core_electrons: 0, position }
    }

    fn shell(atom_idx: usize, l: usize, pure: bool, exponents: &[f64]) -> Shell {
        let coefficients = exponents.iter().enumerate().map(|(k, _)| 0.7 - 0.4 * k as f64).collect();
        Shell { atom_idx, l, pure, exponents: exponents.to_vec(), coefficients }
    }

    #[test]
    fn two_s_functions_overlap_by_the_closed_formula() {
        let (a, b): (f64, f64) = (0.8, 1.7);
        let basis = Basis::new(
            &[atom(0.0, 0.0, 0.0), atom(0.3, -0.4, 1.2)],
            &[shell(0, 0, false, &[a]), shell(1, 0, false, &[b])],
            Primitives::Normalised,
        );
        let expected = (2.0 * (a * b).sqrt() / (a + b)).powf(1.5) * (-a * b / (a + b) * 1.69_f64).exp();
        assert_relative_eq!(overlap(&basis)[(0, 1)], expected, epsilon = 1e-14);
    }

    /// Sum over a cubic grid: exact to rounding for smooth functions that vanish at its edge.
    #[test]
    fn high_shells_agree_with_summation_on_a_grid() {
        let atoms = [atom(0.2, -0.3, 0.1), atom(-0.5, 0.4, 0.6)];
        for (la, lb, pure) in [(6, 5, true), (4, 6, false), (3, 2, true)] {
            let shells = [shell(0, la, pure, &[0.9, 0.5]), shell(1, lb, pure, &[0.7])];
            let basis = Basis::new(&atoms, &shells, Primitives::Normalised);
            let matrix = overlap(&basis);
            let (step, reach) = (0.25_f64, 32_i32);
            let mut sums = Array2::<f64>::zeros(matrix.dim());
            for (i, j, k) in (-reach..=reach)
                .flat_map(|i| (-reach..=reach).flat_map(move |j| (-reach..=reach).map(move |k| (i, j, k))))
            {
                let point = Point3::new(f64::from(i), f64::from(j), f64::from(k)) * step;
                let values = values_at(&basis, point);
                for mu in [0, 3, 7, basis.n_functions() - 2] {
                    for nu in [1, 4, basis.n_functions() - 1] {
                        sums[(mu, nu)] += values[mu] * values[nu] * step.powi(3);
                    }
                }
            }
            for mu in [0, 3, 7, basis.n_functions() - 2] {
                for nu in [1, 4, basis.n_functions() - 1] {
                    assert_relative_eq!(sums[(mu, nu)], matrix[(mu, nu)], epsilon = 1e-9);
                }
            }
        }
    }

    fn values_at(basis: &Basis, point: Point3<f64>) -> Vec<f64> {
        let mut values = Vec::new();
        for shell in basis.shells() {
            let r = point - shell.centre;
            let radial: f64 = shell
                .exponents
                .iter()
                .zip(&shell.factors)
                .map(|(exponent, factor)| factor * (-exponent * r.norm_squared()).exp())
                .sum();
            let monomials: Vec<f64> = components(shell.l)
                .iter()
                .zip(scales(shell.l))
                .map(|(powers, scale)| {
                    let power = |axis: usize| r[axis].powi(i32::try_from(powers[axis]).unwrap());
                    scale * power(0) * power(1) * power(2)
                })
                .collect();
            if shell.pure {
                let pure = cartesian::pure_over_monomials(shell.l);
                for column in pure.column_iter() {
                    values.push(radial * column.iter().zip(&monomials).map(|(c, v)| c * v).sum::<f64>());
                }
            } else {
                values.extend(monomials.iter().map(|value| radial * value));
            }
        }
        values
    }
}
