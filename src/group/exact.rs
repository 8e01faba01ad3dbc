//! Cosines of fractions of a full turn, exact where they are simple, and characters as text: `2cos72°`.

/// cos(2πk/n), with 0, ±1/2 and ±1 exact.
pub(super) fn cos_turn(k: i64, n: i64) -> f64 {
    let k = k.rem_euclid(n);
    // By symmetry into the first quarter, where 12k/n tells the simple ones.
    let k = k.min(n - k);
    if 4 * k > n {
        return -cos_turn(n - 2 * k, 2 * n);
    }
    if k == 0 {
        1.0
    } else if 4 * k == n {
        0.0
    } else if 6 * k == n {
        0.5
    } else {
        (std::f64::consts::TAU * k as f64 / n as f64).cos()
    }
}

/// sin(2πk/n), with 0, ±1/2 and ±1 exact.
pub(super) fn sin_turn(k: i64, n: i64) -> f64 {
    cos_turn(4 * k - n, 4 * n)
}
