//! Cosines of fractions of a full turn, exact where they are simple, and characters as text: `2cos72°`.

use super::elements::LINEAR_AXIS_ORDER;
use super::irrep_name::{IrrepName, Parity};
use super::point_group::{Class, Irrep, PointGroup};
use super::symbols::multiple_of_phi;

/// Below this a difference is rounding.
const CLOSE: f64 = 1e-9;

/// A character as text: a whole number, `√2`, `√3`, `2cos72°`, `-2cos(2π/7)`; decimals where it is none of these.
///
/// Angles are taken below 90°, so that the sign shows. In continuous groups a function of φ: `2cos(3φ)`, `1+2cosφ`.
#[must_use]
pub fn exact_character(group: &PointGroup, class: &Class, irrep: &Irrep, character: f64) -> String {
    if let IrrepName::Atomic { parity, l } = irrep.name
        && class.symbol.contains("phi)")
    {
        let sign = parity == Parity::Odd && class.symbol.starts_with('i');
        return harmonic_text(l, sign);
    }
    if (character - character.round()).abs() < CLOSE {
        return format!("{}", character.round() + 0.0);
    }
    let Some(&member) = class.members.first() else { return format!("{character:.4}") };
    if let IrrepName::Linear { m, .. } = irrep.name {
        let multiple = multiple_of_phi(group.name(), group.elements()[member].operation.matrix());
        return linear_text(multiple, m, character);
    }
    let sign = if character < 0.0 { "-" } else { "" };
    let text = cosine_text(character.abs(), group.element_order(member));
    text.map_or_else(|| format!("{character:.4}"), |text| format!("{sign}{text}"))
}

/// 2cos(θ) of a positive number, θ a multiple of π/order below a right angle.
fn cosine_text(size: f64, order: usize) -> Option<String> {
    for (value, text) in [(2.0_f64.sqrt(), "√2"), (3.0_f64.sqrt(), "√3")] {
        if (size - value).abs() < CLOSE {
            return Some(text.to_owned());
        }
    }
    let n = u32::try_from(order).ok()?;
    let multiple = (size / 2.0).acos() / std::f64::consts::PI * f64::from(n);
    let k = (1..n).find(|&k| (multiple - f64::from(k)).abs() < CLOSE * f64::from(n))?;
    if 180 * k % n == 0 {
        return Some(format!("2cos{}°", 180 * k / n));
    }
    let common = greatest_common_divisor(k, n);
    let over = if k == common { "π".to_owned() } else { format!("{}π", k / common) };
    Some(format!("2cos({over}/{})", n / common))
}

/// ±2cos(mkφ) under a turn by kφ.
fn linear_text(multiple: Option<i32>, m: u8, character: f64) -> String {
    let Some(multiple) = multiple else { return format!("{character:.4}") };
    let factor = i64::from(multiple.unsigned_abs()) * i64::from(m);
    let value = 2.0 * cos_turn(factor, i64::from(LINEAR_AXIS_ORDER));
    let sign = if value * character < 0.0 { "-" } else { "" };
    if factor == 1 { format!("{sign}2cosφ") } else { format!("{sign}2cos{factor}φ") }
}

/// 1 + 2cosφ + … + 2cos(lφ), or its negative.
fn harmonic_text(l: u8, negative: bool) -> String {
    let text = match l {
        0 => "1".to_owned(),
        1 => "1+2cosφ".to_owned(),
        2 => "1+2cosφ+2cos2φ".to_owned(),
        l => format!("1+2cosφ+…+2cos{l}φ"),
    };
    match (negative, l) {
        (false, _) => text,
        (true, 0) => "-1".to_owned(),
        (true, _) => format!("-({text})"),
    }
}

/// Of two numbers of which one is not 0.
pub(super) fn greatest_common_divisor(mut a: u32, mut b: u32) -> u32 {
    while b > 0 {
        (a, b) = (b, a % b);
    }
    a
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

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    #[expect(clippy::float_cmp, reason = "these values are exact")]
    fn simple_cosines_are_exact() {
        assert_eq!([0, 1, 2, 3, 4, 5, 6].map(|k| cos_turn(k, 6)), [1.0, 0.5, -0.5, -1.0, -0.5, 0.5, 1.0]);
        assert_eq!([0, 1, 2, 3, -1].map(|k| sin_turn(k, 4)), [0.0, 1.0, 0.0, -1.0, -1.0]);
        for k in -40..40 {
            let angle = std::f64::consts::TAU * k as f64 / 17.0;
            assert!((cos_turn(k, 17) - angle.cos()).abs() < 1e-14 && (sin_turn(k, 17) - angle.sin()).abs() < 1e-14);
        }
    }

    #[test]
    fn characters_as_text() {
        for (name, irrep, expected) in [
            ("C5v", "E1", "2 2cos72° -2cos36° 0"),
            ("C7v", "E2", "2 -2cos(3π/7) -2cos(π/7) 2cos(2π/7) 0"),
            ("D6d", "E1", "2 √3 1 0 -1 -√3 -2 0 0"),
            ("I", "T1", "3 2cos36° -2cos72° 0 -1"),
            ("Dinfh", "Pi_g", "2 2cosφ 0 2 -2cosφ 0"),
            ("Dinfh", "Sigma_u-", "1 1 -1 -1 -1 1"),
            ("Kh", "P_u", "3 1+2cosφ -3 -(1+2cosφ)"),
        ] {
            let group = PointGroup::standard(name.parse().unwrap()).unwrap();
            let irrep = &group.irreps()[group.irrep_idx(&irrep.parse().unwrap()).unwrap()];
            let text = group
                .printed_classes()
                .into_iter()
                .map(|at| exact_character(&group, &group.classes()[at], irrep, irrep.characters[at]));
            assert_eq!(text.collect::<Vec<_>>().join(" "), expected, "{name}");
        }
    }
}
