//! How real solid harmonics of any degree turn.
//!
//! Order of the functions of one degree l: 0, +1, −1, +2, −2, … (cosine type +m, sine type −m, no
//! alternating sign; m = ±1, 0 of l = 1 are x, y, z), that of pure shells in Molden files.

use nalgebra::{DMatrix, Matrix3};

/// The matrix of an operation on the functions of degree `l`; column j is the image of function j.
///
/// # Source
/// Recursion over l: J. Phys. Chem. 100, 6342 (1996), with the corrections of doi:10.1021/jp9833350.
#[must_use]
#[expect(clippy::cast_possible_wrap, clippy::cast_sign_loss, reason = "degrees are below 100")]
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
