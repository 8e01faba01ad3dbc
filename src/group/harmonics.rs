//! How real solid harmonics of any degree turn.
//!
//! Order of the functions of one degree l: 0, +1, −1, +2, −2, … (cosine type +m, sine type −m, no
//! alternating sign; m = ±1, 0 of l = 1 are x, y, z), that of pure shells in Molden files.

use nalgebra::{DMatrix, Matrix3};

/// The matrix of an operation on the functions of degree `l`; column j is the image of function j.
///
/// (R f)(r) = f(R⁻¹ r): for l = 1 this is the operation itself in the order z, x, y. Also for improper operations.
///
/// # Holds
/// `rotation(l, a * b)` is `rotation(l, a) * rotation(l, b)`; the matrix is orthogonal when `operation` is.
/// # Source
/// Recursion over l: J. Phys. Chem. 100, 6342 (1996), with the corrections of doi:10.1021/jp9833350.
#[must_use]
#[expect(
    clippy::cast_possible_wrap,
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "degrees are far below 2³¹"
)]
pub fn rotation(l: usize, operation: &Matrix3<f64>) -> DMatrix<f64> {
    let place = |m: i64| if m > 0 { 2 * m as usize - 1 } else { 2 * m.unsigned_abs() as usize };
    let axis = |m: i64| match m {
        -1 => 1,
        0 => 2,
        _ => 0,
    };
    let one = |i: i64, j: i64| operation[(axis(i), axis(j))];
    if l == 0 {
        return DMatrix::from_element(1, 1, 1.0);
    }
    let mut below = DMatrix::zeros(3, 3);
    for (i, j) in (-1..=1).flat_map(|i| (-1..=1).map(move |j| (i, j))) {
        below[(place(i), place(j))] = one(i, j);
    }
    for degree in 2..=l as i64 {
        let p = |i: i64, a: i64, b: i64| {
            let low = |a: i64, b: i64| below[(place(a), place(b))];
            if b == -degree {
                one(i, 1) * low(a, 1 - degree) + one(i, -1) * low(a, degree - 1)
            } else if b == degree {
                one(i, 1) * low(a, degree - 1) - one(i, -1) * low(a, 1 - degree)
            } else {
                one(i, 0) * low(a, b)
            }
        };
        let n = 2 * degree as usize + 1;
        let mut matrix = DMatrix::zeros(n, n);
        for m in -degree..=degree {
            for k in -degree..=degree {
                let below_top =
                    if k.abs() < degree { (degree + k) * (degree - k) } else { 2 * degree * (2 * degree - 1) };
                let (size, zero) = (m.abs(), m == 0);
                let root = |x: i64| (x as f64 / below_top as f64).sqrt();
                let mut sum = 0.0;
                if size < degree {
                    sum += root((degree + m) * (degree - m)) * p(0, m, k);
                }
                let v = match m {
                    0 => p(1, 1, k) + p(-1, -1, k),
                    1 => p(1, 0, k) * 2.0_f64.sqrt(),
                    -1 => p(-1, 0, k) * 2.0_f64.sqrt(),
                    m if m > 0 => p(1, m - 1, k) - p(-1, 1 - m, k),
                    m => p(1, m + 1, k) + p(-1, -m - 1, k),
                };
                let factor = if zero { -(0.5_f64.sqrt()) } else { 0.5 };
                sum += factor * root((degree + size - 1) * (degree + size)) * v;
                if !zero && size < degree - 1 {
                    let w = if m > 0 { p(1, m + 1, k) + p(-1, -m - 1, k) } else { p(1, m - 1, k) - p(-1, 1 - m, k) };
                    sum -= 0.5 * root((degree - size - 1) * (degree - size)) * w;
                }
                matrix[(place(m), place(k))] = sum;
            }
        }
        below = matrix;
    }
    below
}

#[cfg(test)]
mod tests {
    use super::*;
    use nalgebra::{DVector, Rotation3, Vector3};

    /// Real harmonics of degree l at a point of the unit sphere, by the recursion of normalised Legendre functions.
    fn values(l: usize, r: &Vector3<f64>) -> DVector<f64> {
        let mut values = DVector::zeros(2 * l + 1);
        // (x + iy)^m and the function with l = m.
        let (mut re, mut im, mut diagonal) = (1.0, 0.0, 1.0);
        for m in 0..=l {
            if m > 0 {
                (re, im) = (re * r.x - im * r.y, re * r.y + im * r.x);
                diagonal *= ((2 * m + 1) as f64 / (2 * m) as f64).sqrt();
            }
            let (mut below, mut here) = (0.0, diagonal);
            for degree in m + 1..=l {
                let (d, m) = (degree as f64, m as f64);
                let a = ((4.0 * d * d - 1.0) / (d * d - m * m)).sqrt();
                let b = (((d - 1.0).powi(2) - m * m) / (4.0 * (d - 1.0).powi(2) - 1.0)).sqrt();
                let b = if degree as f64 - 1.0 > m { b } else { 0.0 };
                (below, here) = (here, a * (r.z * here - b * below));
            }
            if m == 0 {
                values[0] = here;
            } else {
                values[2 * m - 1] = 2.0_f64.sqrt() * here * re;
                values[2 * m] = 2.0_f64.sqrt() * here * im;
            }
        }
        values
    }

    #[test]
    fn turned_functions_have_the_values_of_the_functions_at_turned_points() {
        let turn = Rotation3::from_euler_angles(0.4, -1.2, 2.1).into_inner();
        for operation in [turn, -turn, Matrix3::from_diagonal(&Vector3::new(1.0, -1.0, 1.0))] {
            for l in 0..=12 {
                let matrix = rotation(l, &operation);
                for r in [Vector3::new(0.3, -0.5, 0.8), Vector3::new(-0.9, 0.1, 0.2), Vector3::new(0.1, 0.7, -0.3)] {
                    let r = r.normalize();
                    // f_j(R⁻¹ r) = Σ_i D_ij f_i(r).
                    let difference = values(l, &(operation.transpose() * r)) - matrix.transpose() * values(l, &r);
                    assert!(difference.amax() < 1e-12, "l = {l}: {difference}");
                }
            }
        }
    }

    #[test]
    fn products_of_operations_are_products_of_matrices() {
        let a = Rotation3::from_euler_angles(1.0, 0.2, -0.7).into_inner();
        let b = -Rotation3::from_euler_angles(-0.3, 1.4, 0.5).into_inner();
        for l in [1, 2, 6, 20] {
            let difference = rotation(l, &(a * b)) - rotation(l, &a) * rotation(l, &b);
            assert!(difference.amax() < 1e-11, "l = {l}");
        }
    }
}
