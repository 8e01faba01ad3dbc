//! Overlap of contracted Gaussians on any centres.
//!
//! Also the parts that other one-electron integrals share (`wavefunction::moments`): pairs of primitives, tables of one
//! direction, and the way from Cartesian components to functions. Not here: normalisation (`wavefunction::basis`).

use super::basis::{Basis, BasisShell};
use super::cartesian::{self, L_MAX, Powers};
use ndarray::{Array2, ArrayViewMut2, Axis, parallel::prelude::*, s};
use std::sync::LazyLock;

/// Degrees in one direction, 0 to [`L_MAX`].
pub(super) const N: usize = L_MAX + 1;
/// Primitive pairs whose Gaussian factor is below e^−SCREEN are left out: 9e-17, less than rounding leaves.
const SCREEN: f64 = 37.0;

/// ⟨μ|ν⟩ of all functions of one basis: n_functions × n_functions, symmetric, unit diagonal.
///
/// # Source
/// Recurrence: "Efficient recursive computation of molecular integrals over Cartesian Gaussian functions",
/// J. Chem. Phys. 84, 3963 (1986), doi:10.1063/1.450106.
#[must_use]
pub fn overlap(basis: &Basis) -> Array2<f64> {
    let mut matrix = rectangle(basis, basis, true);
    mirror(&mut matrix);
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
    let widest = |basis: &Basis| -> Vec<f64> {
        basis.shells().iter().map(|shell| shell.exponents.iter().copied().fold(f64::INFINITY, f64::min)).collect()
    };
    let (bra_widest, ket_widest) = (widest(bra), widest(ket));
    rows.into_par_iter().zip(bra.shells()).enumerate().for_each_init(
        Block::default,
        |block, (a_idx, (mut rows, a))| {
            let from = if upper { a_idx } else { 0 };
            for (b, beta) in ket.shells().iter().zip(&ket_widest).skip(from) {
                let alpha = bra_widest[a_idx];
                let near = alpha * beta / (alpha + beta) * (b.centre - a.centre).norm_squared() <= SCREEN;
                if near && block.fill(a, b) {
                    block.store(a, b, rows.slice_mut(s![.., b.range()]));
                }
            }
        },
    );
    matrix
}

/// Rows and columns of a square that are mirrored at a time: two tiles stay in the nearest cache.
const TILE: usize = 32;

/// Copies what is above the diagonal to below it.
fn mirror(matrix: &mut Array2<f64>) {
    let n = matrix.nrows();
    for start in (0..n).step_by(TILE) {
        let end = n.min(start + TILE);
        for i in start..end {
            for j in start..i {
                matrix[(i, j)] = matrix[(j, i)];
            }
        }
        let (above, mut below) = matrix.view_mut().split_at(Axis(0), end);
        let above = above.slice(s![start.., end..]);
        below
            .axis_chunks_iter_mut(Axis(0), TILE)
            .into_par_iter()
            .zip(above.axis_chunks_iter(Axis(1), TILE))
            .for_each(|(mut rows, columns)| rows.slice_mut(s![.., start..end]).assign(&columns.t()));
    }
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
            let area = std::f64::consts::PI / p;
            (gaussian <= SCREEN).then(|| PrimitivePair {
                scale: f * g * (-gaussian).exp() * area * area.sqrt(),
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
        let mut tables = [[[0.0; N]; N]; 3];
        for pair in primitive_pairs(a, b) {
            any = true;
            if a.l + b.l == 0 {
                self.values[0] += pair.scale;
                continue;
            }
            for (axis, table) in tables.iter_mut().enumerate() {
                fill_axis(table, a.l, b.l, pair.from_a[axis], pair.from_b[axis], pair.half);
            }
            let [x, y, z] = &tables;
            for (row, &[ax, ay, az]) in self.values.chunks_exact_mut(kets.len()).zip(bras) {
                let (x, y, z) = (&x[ax], &y[ay], &z[az]);
                for (value, &[bx, by, bz]) in row.iter_mut().zip(kets) {
                    *value += pair.scale * x[bx] * y[by] * z[bz];
                }
            }
        }
        any
    }

    /// Normalises the components, makes pure functions where the shells are pure, writes the block.
    pub(super) fn store(&mut self, a: &BasisShell, b: &BasisShell, mut target: ArrayViewMut2<'_, f64>) {
        let (n_kets, n_columns) = (components(b.l).len(), b.n_functions());
        // Kets to functions first, then bras.
        let half = if b.l < 2 {
            &self.values
        } else {
            let functions = functions(b.l, b.pure);
            self.half.clear();
            for components in self.values.chunks_exact(n_kets) {
                self.half.extend(functions.chunks_exact(n_kets).map(|function| dot(function, components)));
            }
            &self.half
        };
        if a.l < 2 {
            for (mut row, values) in target.outer_iter_mut().zip(half.chunks_exact(n_columns)) {
                row.iter_mut().zip(values).for_each(|(target, value)| *target = *value);
            }
            return;
        }
        let n_bras = components(a.l).len();
        for (mut row, function) in target.outer_iter_mut().zip(functions(a.l, a.pure).chunks_exact(n_bras)) {
            for (column, target) in row.iter_mut().enumerate() {
                let values = half.iter().skip(column).step_by(n_columns);
                *target = function.iter().zip(values).map(|(factor, value)| factor * value).sum();
            }
        }
    }
}

fn dot(a: &[f64], b: &[f64]) -> f64 {
    a.iter().zip(b).map(|(a, b)| a * b).sum()
}

/// As [`fill_axis`], in a new table.
pub(super) fn one_axis<const W: usize>(la: usize, lb: usize, from_a: f64, from_b: f64, half: f64) -> [[f64; W]; N] {
    let mut table = [[0.0; W]; N];
    fill_axis(&mut table, la, lb, from_a, from_b, half);
    table
}

/// ∫ (x − A)^i (x − B)^j exp(−p(x − P)²) over √(π/p), for i ≤ `la`, j ≤ `lb`.
///
/// `W` is above `lb`.
#[inline]
fn fill_axis<const W: usize>(table: &mut [[f64; W]; N], la: usize, lb: usize, from_a: f64, from_b: f64, half: f64) {
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
}

static COMPONENTS: LazyLock<Vec<Vec<Powers>>> = LazyLock::new(|| (0..=L_MAX).map(cartesian::monomials).collect());
/// By 2l + (1 when pure): every function over the monomials of x^l's constant, function by function.
static FUNCTIONS: LazyLock<Vec<Vec<f64>>> = LazyLock::new(|| {
    let of = |l: usize, pure: bool| -> Vec<f64> {
        let scales = scales(l);
        let n = scales.len();
        if pure {
            let columns = cartesian::pure_over_monomials(l).column_iter();
            columns
                .flat_map(|column| column.iter().zip(&scales).map(|(c, scale)| c * scale).collect::<Vec<_>>())
                .collect()
        } else {
            (0..n * n).map(|at| if at / n == at % n { scales[at % n] } else { 0.0 }).collect()
        }
    };
    (0..=L_MAX).flat_map(|l| [of(l, false), of(l, true)]).collect()
});

pub(super) fn components(l: usize) -> &'static [Powers] {
    &COMPONENTS[l]
}

fn functions(l: usize, pure: bool) -> &'static [f64] {
    &FUNCTIONS[2 * l + usize::from(pure)]
}

/// What brings each monomial from the constant of x^l to norm one.
fn scales(l: usize) -> Vec<f64> {
    let top = cartesian::squared_norm([l, 0, 0]);
    cartesian::monomials(l).into_iter().map(|powers| (top / cartesian::squared_norm(powers)).sqrt()).collect()
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
