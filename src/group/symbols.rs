//! Symbols of operations and classes: `C3^2`, `S6^5`, `3sigma_v`, `2C2''`, and their printed form.
//!
//! Not here: which operations there are (`group::elements`).

use super::elements::{LINEAR_AXIS_ORDER, SAME, directed_axis};
use super::exact::greatest_common_divisor;
use super::schoenflies::GroupName;
use nalgebra::{Matrix3, Vector3};

/// An operation's symbol without a running number, and the power in it.
struct Stem {
    text: String,
    power: u32,
}

/// Symbols of all operations (running numbers where several would be alike) and of all classes (with the number of operations).
pub(super) fn symbols(
    name: GroupName,
    operations: &[Matrix3<f64>],
    classes: &[Vec<usize>],
) -> (Vec<String>, Vec<String>) {
    let first_plane = Matrix3::from_diagonal(&Vector3::new(1.0, -1.0, 1.0));
    let first_half_turn = Matrix3::from_diagonal(&Vector3::new(1.0, -1.0, -1.0));
    let mut stems: Vec<Stem> = operations.iter().map(|_| Stem { text: String::new(), power: 1 }).collect();
    for class in classes {
        let holds = |matrix: &Matrix3<f64>| class.iter().any(|&member| (operations[member] - matrix).amax() < SAME);
        let family = Family { first: holds(&first_plane) || holds(&first_half_turn) };
        for &member in class {
            stems[member] = stem(name, &operations[member], &family);
        }
    }
    let numbered = stems.iter().enumerate().map(|(at, stem)| {
        let alike = |stems: &[Stem]| stems.iter().filter(|other| other.text == stem.text).count();
        if alike(&stems) == 1 { stem.text.clone() } else { format!("{}({})", stem.text, alike(&stems[..=at])) }
    });
    let of_classes = classes.iter().map(|class| {
        let lowest = class.iter().map(|&member| &stems[member]).min_by_key(|stem| stem.power);
        let text = lowest.map_or("", |stem| stem.text.as_str());
        match class.len() {
            1 => text.to_owned(),
            _ if name.is_continuous() && !text.contains('(') => format!("inf{text}"),
            n => format!("{n}{text}"),
        }
    });
    (numbered.collect(), of_classes.collect())
}

/// Where a class of half turns or planes stands among its like.
struct Family {
    /// It holds the half turn about x or the xz plane.
    first: bool,
}

fn stem(name: GroupName, operation: &Matrix3<f64>, family: &Family) -> Stem {
    let proper = operation.determinant() > 0.0;
    if let Some(stem) = turn_of_linear_group(name, operation, proper) {
        return stem;
    }
    let rotation = if proper { *operation } else { -operation };
    let axis = directed_axis(&rotation);
    let (numerator, denominator) = fraction_of_turn(&rotation, &axis);
    // −C(α) = σ C(α + π): as an improper rotation it turns by half a turn more.
    let (numerator, denominator) =
        if proper { (numerator, denominator) } else { reduced(2 * numerator + denominator, 2 * denominator) };
    let plain = |text: &str| Stem { text: text.to_owned(), power: 1 };
    match (proper, denominator) {
        (true, 1) => plain("E"),
        (false, 2) => plain("i"),
        (true, 2) => plain(&half_turn(name, &axis, family)),
        (false, 1) => plain(&plane(name, &axis, family)),
        (true, n) => power("C", n, numerator),
        // An odd number of reflections must come with the turn: S3^2 would be a rotation, so it is S3^5.
        (false, n) if numerator % 2 == 0 => power("S", n, numerator + n),
        (false, n) => power("S", n, numerator),
    }
}

/// Turns about the axis of a linear molecule: `C(phi)`, `C(-2phi)`, `S(phi)`; `None` for special angles and all other operations.
fn turn_of_linear_group(name: GroupName, operation: &Matrix3<f64>, proper: bool) -> Option<Stem> {
    let multiple = multiple_of_phi(name, operation)?;
    let letter = if proper { 'C' } else { 'S' };
    let sign = if multiple < 0 { "-" } else { "" };
    let text = match multiple.unsigned_abs() {
        1 => format!("{letter}({sign}phi)"),
        n => format!("{letter}({sign}{n}phi)"),
    };
    Some(Stem { text, power: 2 * multiple.unsigned_abs() + u32::from(multiple < 0) })
}

/// k of a turn (proper or improper) by kφ about the axis of a linear group, φ being the smallest turn of the finite stand-in.
///
/// `None` for other groups, other operations, and turns by 0 and π.
pub(super) fn multiple_of_phi(name: GroupName, operation: &Matrix3<f64>) -> Option<i32> {
    let linear = matches!(name, GroupName::Cinfv | GroupName::Dinfh);
    let turns = operation[(0, 0)] * operation[(1, 1)] - operation[(0, 1)] * operation[(1, 0)] > 0.0;
    if !linear || !turns || operation[(0, 1)].abs() < SAME {
        return None;
    }
    let part = operation[(1, 0)].atan2(operation[(0, 0)]) / std::f64::consts::TAU;
    #[expect(clippy::cast_possible_truncation, reason = "at most half the order of the axis")]
    let multiple = (part * f64::from(LINEAR_AXIS_ORDER)).round() as i32;
    Some(multiple)
}

fn power(letter: &str, n: u32, power: u32) -> Stem {
    let text = if power == 1 { format!("{letter}{n}") } else { format!("{letter}{n}^{power}") };
    Stem { text, power }
}

fn half_turn(name: GroupName, axis: &Vector3<f64>, family: &Family) -> String {
    let along_z = axis.z > 1.0 - SAME;
    let text = match name {
        GroupName::Dn(2) | GroupName::Dnh(2) => return format!("C2({})", coordinate(axis)),
        // Half turns about the four-fold axes are C4².
        GroupName::O | GroupName::Oh if along_coordinate(axis) => "C2",
        GroupName::O | GroupName::Oh => "C2'",
        _ if along_z => "C2",
        GroupName::Dn(n) | GroupName::Dnh(n) if n % 2 == 0 && !family.first => "C2''",
        GroupName::Dn(n) | GroupName::Dnh(n) if n % 2 == 0 => "C2'",
        GroupName::Dinfh => "C2'",
        GroupName::Dnd(n) if n % 2 == 0 => "C2'",
        _ => "C2",
    };
    text.to_owned()
}

fn plane(name: GroupName, normal: &Vector3<f64>, family: &Family) -> String {
    let horizontal = normal.z > 1.0 - SAME;
    let text = match name {
        GroupName::Dnh(2) => {
            let across = match coordinate(normal) {
                'z' => "xy",
                'y' => "xz",
                _ => "yz",
            };
            return format!("sigma({across})");
        }
        GroupName::Cnv(2) if family.first => "sigma_v(xz)",
        GroupName::Cnv(2) => "sigma_v'(yz)",
        GroupName::Ih | GroupName::I | GroupName::K => "sigma",
        GroupName::Th => "sigma_h",
        GroupName::Oh if along_coordinate(normal) => "sigma_h",
        GroupName::Td | GroupName::Oh => "sigma_d",
        _ if horizontal => "sigma_h",
        GroupName::Dnd(_) => "sigma_d",
        GroupName::Cinfv | GroupName::Dinfh => "sigma_v",
        GroupName::Cnv(n) | GroupName::Dnh(n) if n % 2 == 1 => "sigma_v",
        _ if family.first => "sigma_v",
        _ => "sigma_d",
    };
    text.to_owned()
}

fn along_coordinate(axis: &Vector3<f64>) -> bool {
    axis.iter().filter(|component| component.abs() > SAME).count() == 1
}

fn coordinate(axis: &Vector3<f64>) -> char {
    ['x', 'y', 'z']
        .into_iter()
        .zip(axis.iter())
        .find(|(_, component)| component.abs() > 0.5)
        .map_or('z', |(name, _)| name)
}

/// The turn about `axis` as a reduced fraction of a full one, denominators to 128.
fn fraction_of_turn(rotation: &Matrix3<f64>, axis: &Vector3<f64>) -> (u32, u32) {
    let (found, angle) = super::operation::axis_angle(rotation);
    let angle = if found.dot(axis) < 0.0 { std::f64::consts::TAU - angle } else { angle };
    let part = angle / std::f64::consts::TAU;
    let whole = |n: &u32| {
        let multiple = part * f64::from(*n);
        (multiple - multiple.round()).abs() < 1e-6 * f64::from(*n)
    };
    let denominator = (1..=128).find(whole).unwrap_or(1);
    #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "between 0 and the denominator")]
    let numerator = (part * f64::from(denominator)).round() as u32;
    reduced(numerator, denominator)
}

/// A fraction of a turn in lowest terms, between 0 and 1.
fn reduced(numerator: u32, denominator: u32) -> (u32, u32) {
    let numerator = numerator % denominator;
    let common = greatest_common_divisor(numerator, denominator);
    (numerator / common, denominator / common)
}

/// An ASCII symbol of an operation or a class with subscripts, superscripts, primes and σ: `2S₁₀³`, `3σv`, `3C₂″`.
#[must_use]
pub fn pretty(symbol: &str) -> String {
    let text =
        symbol.replace("sigma", "σ").replace("phi", "φ").replace("inf", "∞").replace("''", "″").replace('\'', "′");
    let mut printed = String::new();
    // Digits in front count operations; those after a letter are the order of the axis, those after ^ the power.
    let (mut zero, mut inside) = ('0', 0);
    for c in text.chars() {
        match c {
            '_' => {}
            '^' => zero = '⁰',
            '0'..='9' if inside > 0 => printed.push(c),
            '0'..='9' => printed.push(digit(c, zero)),
            _ => {
                inside += i32::from(c == '(') - i32::from(c == ')');
                zero = if matches!(c, 'C' | 'S') { '₀' } else { '0' };
                printed.push(c);
            }
        }
    }
    printed
}

fn digit(c: char, zero: char) -> char {
    const SUPERSCRIPTS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];
    let value = c.to_digit(10).unwrap_or(0);
    match zero {
        '⁰' => SUPERSCRIPTS[value as usize % 10],
        zero => char::from_u32(zero as u32 + value).unwrap_or(c),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn printed_symbols() {
        for (ascii, printed) in [
            ("2S10^3", "2S₁₀³"),
            ("3sigma_v", "3σv"),
            ("3C2''", "3C₂″"),
            ("12C5^2", "12C₅²"),
            ("C2'(1)", "C₂′(1)"),
            ("E", "E"),
        ] {
            assert_eq!(pretty(ascii), printed);
        }
    }
}
