//! Cosines of fractions of a full turn, exact where they are simple, and characters as text: `2cos72°`.

use super::irrep_name::IrrepName;
use super::point_group::{Class, Irrep, PointGroup};

/// A character as text: a whole number, `√2`, `√3`, `2cos72°`, `-2cos(2π/7)`; decimals where it is none of these.
///
/// Angles are taken below 90°, so that the sign shows.
#[must_use]
pub fn exact_character(group: &PointGroup, class: &Class, irrep: &Irrep, character: f64) -> String {
    const CLOSE: f64 = 1e-9;
    if (character - character.round()).abs() < CLOSE {
        return format!("{}", character.round() + 0.0);
    }
    let sign = if character < 0.0 { "-" } else { "" };
    let size = character.abs();
    for (value, text) in [(2.0_f64.sqrt(), "√2"), (3.0_f64.sqrt(), "√3")] {
        if (size - value).abs() < CLOSE {
            return format!("{sign}{text}");
        }
    }
    let order = class.members.first().map_or(0, |&member| group.element_order(member));
    if size < 2.0 && order > 0 && !matches!(irrep.name, IrrepName::Atomic { .. }) {
        // Half turns more fold angles above 90° back, so multiples of 2π/(2·order).
        let n = 2 * order as u32;
        let part = (size / 2.0).acos() / std::f64::consts::TAU;
        let k = (part * f64::from(n)).round();
        if (part * f64::from(n) - k).abs() < CLOSE * f64::from(n) {
            let degrees = 360.0 * k / f64::from(n);
            if (degrees - degrees.round()).abs() < CLOSE {
                return format!("{sign}2cos{}°", degrees.round());
            }
            let (numerator, denominator) = lowest_terms(2 * k as u32, n);
            let over = if numerator == 1 { "π".to_owned() } else { format!("{numerator}π") };
            return format!("{sign}2cos({over}/{denominator})");
        }
    }
    format!("{character:.4}")
}

fn lowest_terms(numerator: u32, denominator: u32) -> (u32, u32) {
    let (mut a, mut b) = (denominator, numerator);
    while b > 0 {
        (a, b) = (b, a % b);
    }
    (numerator / a.max(1), denominator / a.max(1))
}

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
