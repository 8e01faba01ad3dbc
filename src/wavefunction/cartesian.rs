//! Monomials of a Cartesian shell, pure functions over them, and how both turn.
//!
//! Order of the monomials: the published one to degree 4, lexicographic above. Pure functions: 0, +1, −1, +2, −2, …
//! Every function counts as normalised to one when multiplied with the same Gaussian.
//! Not here: radial parts, centres (`wavefunction::basis`).

use crate::group::harmonics;
use nalgebra::{DMatrix, Matrix3};
use std::sync::LazyLock;

/// Highest angular momentum of a shell.
pub const L_MAX: usize = 6;

/// Powers of x, y, z.
pub type Powers = [usize; 3];

/// n!! with (−1)!! = 1.
fn double_factorial(n: usize) -> f64 {
    (1..=n).rev().step_by(2).map(|k| k as f64).product()
}

/// (2a − 1)!!(2b − 1)!!(2c − 1)!!, the squared norm of a monomial up to a factor of its degree.
#[must_use]
pub fn squared_norm(powers: Powers) -> f64 {
    powers.iter().map(|&power| double_factorial((2 * power).saturating_sub(1))).product()
}

/// Monomials of degree `l` in lexicographic order: x² xy xz y² yz z².
#[must_use]
pub fn lexicographic(l: usize) -> Vec<Powers> {
    (0..=l).rev().flat_map(|a| (0..=l - a).rev().map(move |b| [a, b, l - a - b])).collect()
}

/// Monomials of degree `l` in the order of Molden files: published to degree 4, lexicographic above.
#[must_use]
pub fn monomials(l: usize) -> Vec<Powers> {
    const D: [Powers; 6] = [[2, 0, 0], [0, 2, 0], [0, 0, 2], [1, 1, 0], [1, 0, 1], [0, 1, 1]];
    const F: [Powers; 10] =
        [[3, 0, 0], [0, 3, 0], [0, 0, 3], [1, 2, 0], [2, 1, 0], [2, 0, 1], [1, 0, 2], [0, 1, 2], [0, 2, 1], [1, 1, 1]];
    const G: [Powers; 15] = [
        [4, 0, 0],
        [0, 4, 0],
        [0, 0, 4],
        [3, 1, 0],
        [3, 0, 1],
        [1, 3, 0],
        [0, 3, 1],
        [1, 0, 3],
        [0, 1, 3],
        [2, 2, 0],
        [2, 0, 2],
        [0, 2, 2],
        [2, 1, 1],
        [1, 2, 1],
        [1, 1, 2],
    ];
    match l {
        2 => D.to_vec(),
        3 => F.to_vec(),
        4 => G.to_vec(),
        _ => lexicographic(l),
    }
}

/// Overlap of unit-normalised monomials of one degree under one Gaussian.
fn overlap(a: Powers, b: Powers) -> f64 {
    let sums: Powers = std::array::from_fn(|axis| a[axis] + b[axis]);
    if sums.iter().any(|sum| sum % 2 == 1) {
        return 0.0;
    }
    squared_norm(sums.map(|sum| sum / 2)) / (squared_norm(a) * squared_norm(b)).sqrt()
}

/// A polynomial of one degree: a coefficient for each exponent of x and y.
type Polynomial = Vec<Vec<f64>>;

/// Real solid harmonics of degree `l` as columns over unit-normalised monomials: n_monomials × (2l + 1).
///
/// # Holds
/// Columns are orthonormal in the overlap of the monomials.
/// # Source
/// r^l P_l^m(cos θ) cos mφ as z-polynomials times Re (x + iy)^m; the same functions as in Int. J. Quantum
/// Chem. 54, 83 (1995), doi:10.1002/qua.560540202, but normalised by the overlap itself.
fn solid_harmonics(l: usize) -> DMatrix<f64> {
    let list = monomials(l);
    let mut columns = DMatrix::zeros(list.len(), 2 * l + 1);
    for m in 0..=l {
        // Π(z, r²) of degree l − m from r^{l-m} d^m P_l(cos θ)/d(cos θ)^m, by its power series in z² and r².
        let mut real: Polynomial = vec![vec![0.0; l + 1]; l + 1];
        let mut imaginary = real.clone();
        for k in 0..=(l - m) / 2 {
            let z_power = l - m - 2 * k;
            let sign = if k % 2 == 0 { 1.0 } else { -1.0 };
            // (−1)^k C(l, k) C(2l − 2k, l) (l − 2k)!/(l − 2k − m)!, all exact in double precision for l ≤ 6.
            let weight = sign * binomial(l, k) * binomial(2 * l - 2 * k, l) * factorial(l - 2 * k) / factorial(z_power);
            // r^{2k} = (x² + y² + z²)^k, (x + iy)^m by the binomial theorem.
            for a in 0..=k {
                for b in 0..=k - a {
                    let spread = factorial(k) / (factorial(a) * factorial(b) * factorial(k - a - b));
                    for t in 0..=m {
                        let (x, y) = (m - t + 2 * a, t + 2 * b);
                        let term = weight * spread * binomial(m, t) * if t % 4 < 2 { 1.0 } else { -1.0 };
                        let part = if t % 2 == 0 { &mut real } else { &mut imaginary };
                        part[x][y] += term;
                    }
                }
            }
        }
        let parts: &[(usize, &Polynomial)] =
            if m == 0 { &[(0, &real)] } else { &[(2 * m - 1, &real), (2 * m, &imaginary)] };
        for &(column, polynomial) in parts {
            for (row, &powers) in list.iter().enumerate() {
                columns[(row, column)] = polynomial[powers[0]][powers[1]] * squared_norm(powers).sqrt();
            }
        }
    }
    let metric = DMatrix::from_fn(list.len(), list.len(), |i, j| overlap(list[i], list[j]));
    for mut column in columns.column_iter_mut() {
        let norm = (column.transpose() * &metric * &column)[(0, 0)].sqrt();
        column /= norm;
    }
    columns
}

fn factorial(n: usize) -> f64 {
    (1..=n).map(|k| k as f64).product()
}

fn binomial(n: usize, k: usize) -> f64 {
    factorial(n) / (factorial(k) * factorial(n - k))
}

static SOLID_HARMONICS: LazyLock<Vec<DMatrix<f64>>> = LazyLock::new(|| (0..=L_MAX).map(solid_harmonics).collect());

/// Pure functions of degree `l` ≤ [`L_MAX`] as columns over unit-normalised monomials in file order.
#[must_use]
pub fn pure_over_monomials(l: usize) -> &'static DMatrix<f64> {
    &SOLID_HARMONICS[l]
}

/// The matrix of an operation on unit-normalised monomials of degree `l`; column j is the image of monomial j.
///
/// (Rf)(r) = f(R⁻¹r), so each factor x_a becomes Σ_b R_ba x_b: the product of these sums, expanded.
#[must_use]
pub fn monomial_rotation(l: usize, operation: &Matrix3<f64>) -> DMatrix<f64> {
    let list = monomials(l);
    let mut matrix = DMatrix::zeros(list.len(), list.len());
    for (column, &powers) in list.iter().enumerate() {
        let mut polynomial: Polynomial = vec![vec![0.0; l + 1]; l + 1];
        polynomial[0][0] = 1.0;
        let mut degree = 0;
        for (axis, &power) in powers.iter().enumerate() {
            for _ in 0..power {
                let mut next: Polynomial = vec![vec![0.0; l + 1]; l + 1];
                for a in 0..=degree {
                    for b in 0..=degree - a {
                        let value = polynomial[a][b];
                        next[a + 1][b] += value * operation[(0, axis)];
                        next[a][b + 1] += value * operation[(1, axis)];
                        next[a][b] += value * operation[(2, axis)];
                    }
                }
                polynomial = next;
                degree += 1;
            }
        }
        for (row, &image) in list.iter().enumerate() {
            matrix[(row, column)] =
                polynomial[image[0]][image[1]] * (squared_norm(image) / squared_norm(powers)).sqrt();
        }
    }
    matrix
}

/// The matrix of an operation on a shell of unit-normalised functions in canonical order.
#[must_use]
pub fn shell_rotation(l: usize, pure: bool, operation: &Matrix3<f64>) -> DMatrix<f64> {
    if pure { harmonics::rotation(l, operation) } else { monomial_rotation(l, operation) }
}

/// The projector onto angular momentum `l` among the functions of a shell of degree `degree`.
///
/// A Cartesian shell holds l = degree, degree − 2, …; the projector is a polynomial in
/// L² = degree(degree + 1) − r²∇², whose matrix over monomials is exact.
#[must_use]
pub fn angular_projector(degree: usize, pure: bool, l: usize) -> DMatrix<f64> {
    if pure {
        let n = 2 * degree + 1;
        return if l == degree { DMatrix::identity(n, n) } else { DMatrix::zeros(n, n) };
    }
    let list = monomials(degree);
    let n = list.len();
    let mut squared = DMatrix::identity(n, n) * (degree * (degree + 1)) as f64;
    for (column, &powers) in list.iter().enumerate() {
        for lowered in 0..3 {
            if powers[lowered] < 2 {
                continue;
            }
            for raised in 0..3 {
                let mut image = powers;
                image[lowered] -= 2;
                image[raised] += 2;
                if let Some(row) = list.iter().position(|other| *other == image) {
                    let scale = (squared_norm(image) / squared_norm(powers)).sqrt();
                    squared[(row, column)] -= (powers[lowered] * (powers[lowered] - 1)) as f64 * scale;
                }
            }
        }
    }
    let eigenvalue = |l: usize| (l * (l + 1)) as f64;
    let mut projector = DMatrix::identity(n, n);
    for other in (degree % 2..=degree).step_by(2).filter(|other| *other != l) {
        let shifted = &squared - DMatrix::identity(n, n) * eigenvalue(other);
        projector = shifted * projector / (eigenvalue(l) - eigenvalue(other));
    }
    projector
}

#[cfg(test)]
mod tests {
    use super::*;
    use approx::assert_relative_eq;
    use nalgebra::Rotation3;

    fn metric(l: usize) -> DMatrix<f64> {
        let list = monomials(l);
        DMatrix::from_fn(list.len(), list.len(), |i, j| overlap(list[i], list[j]))
    }

    #[test]
    fn pure_functions_are_orthonormal_and_turn_as_harmonics_do() {
        // Two paths: expanding monomials, and the recursion over harmonics.
        let operation = -Rotation3::from_euler_angles(0.3, -1.1, 2.0).into_inner();
        for l in 0..=L_MAX {
            let pure = pure_over_monomials(l);
            if l > 1 {
                let gram = pure.transpose() * metric(l) * pure;
                assert_relative_eq!(gram, DMatrix::identity(2 * l + 1, 2 * l + 1), epsilon = 1e-13);
                let first = monomial_rotation(l, &operation) * pure;
                assert_relative_eq!(first, pure * harmonics::rotation(l, &operation), epsilon = 1e-12);
            }
        }
    }

    #[test]
    fn d_functions_are_the_ones_of_every_table() {
        // z² − (x² + y²)/2, xz, yz, (x² − y²)√3/2, xy, with xy of norm one: over unit-normalised monomials xx yy zz xy xz yz.
        let root = 0.75_f64.sqrt();
        let expected = [
            [-0.5, -0.5, 1.0, 0.0, 0.0, 0.0],
            [0.0, 0.0, 0.0, 0.0, 1.0, 0.0],
            [0.0, 0.0, 0.0, 0.0, 0.0, 1.0],
            [root, -root, 0.0, 0.0, 0.0, 0.0],
            [0.0, 0.0, 0.0, 1.0, 0.0, 0.0],
        ];
        for (column, expected) in expected.iter().enumerate() {
            for (row, value) in expected.iter().enumerate() {
                assert_relative_eq!(pure_over_monomials(2)[(row, column)], value, epsilon = 1e-14);
            }
        }
    }

    #[test]
    fn projectors_of_a_cartesian_shell_are_complete_and_commute_with_turning() {
        let operation = Rotation3::from_euler_angles(1.3, 0.4, -0.7).into_inner();
        for degree in 0..=L_MAX {
            let n = monomials(degree).len();
            let mut sum = DMatrix::zeros(n, n);
            for l in (degree % 2..=degree).step_by(2) {
                let projector = angular_projector(degree, false, l);
                assert_relative_eq!(&projector * &projector, projector, epsilon = 1e-9);
                assert_relative_eq!(projector.trace(), (2 * l + 1) as f64, epsilon = 1e-10);
                let turn = monomial_rotation(degree, &operation);
                assert_relative_eq!(&turn * &projector, &projector * &turn, epsilon = 1e-10);
                sum += projector;
            }
            assert_relative_eq!(sum, DMatrix::identity(n, n), epsilon = 1e-10);
        }
    }
}
