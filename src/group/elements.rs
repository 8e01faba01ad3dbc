//! The operations of every named group in its standard frame, in the order of printed tables.
//!
//! Not here: their products (`group::multiplication`), their symbols (`group::symbols`).

use super::exact::{cos_turn, sin_turn};
use super::multiplication;
use super::operation::axis_angle;
use super::schoenflies::GroupName;
use nalgebra::{Matrix3, Vector3};

/// Order of the rotation axis of the finite group that stands in for a linear one: keeps |m| ≤ 12 apart.
pub(super) const LINEAR_AXIS_ORDER: u32 = 26;

/// Two matrices of one group are the same element when no entry differs by more than this; those of different elements differ by 0.04 or more.
pub(super) const SAME: f64 = 1e-6;

/// Whether two matrices are the same element.
pub(super) fn same(a: &Matrix3<f64>, b: &Matrix3<f64>) -> bool {
    (a - b).amax() < SAME
}

/// All operations of the group, identity first; for linear groups those of the finite stand-in, for atoms those of Ih.
///
/// `name` must be valid ([`GroupName::validated`]).
pub(super) fn standard_operations(name: GroupName) -> Vec<Matrix3<f64>> {
    let inversion = -Matrix3::identity();
    match name {
        GroupName::C1 => vec![Matrix3::identity()],
        GroupName::Cs => vec![Matrix3::identity(), horizontal()],
        GroupName::Ci => vec![Matrix3::identity(), inversion],
        GroupName::Cn(n) => rotations(n),
        GroupName::Cnh(n) => with_products(rotations(n), &centre_or_plane(n)),
        GroupName::Cnv(n) => [rotations(n), across(n, 0, 1.0)].concat(),
        GroupName::Dn(n) => dihedral(n),
        GroupName::Dnh(n) => with_products(dihedral(n), &centre_or_plane(n)),
        GroupName::Dnd(n) if n % 2 == 1 => with_products(dihedral(n), &inversion),
        GroupName::Dnd(n) => [improper_rotations(2 * n), across(n, 0, -1.0), across(n, 1, 1.0)].concat(),
        GroupName::Sn(n) if n % 4 == 2 => with_products(rotations(n / 2), &inversion),
        GroupName::Sn(n) => improper_rotations(n),
        GroupName::T => tetrahedral_rotations(),
        GroupName::Th => with_products(tetrahedral_rotations(), &inversion),
        GroupName::Td => {
            let even = tetrahedral_rotations();
            let odd: Vec<_> = octahedral_rotations().into_iter().filter(|r| !even.iter().any(|e| same(e, r))).collect();
            even.into_iter().chain(odd.iter().map(|r| -r)).collect()
        }
        GroupName::O => octahedral_rotations(),
        GroupName::Oh => with_products(octahedral_rotations(), &inversion),
        GroupName::I => icosahedral_rotations(),
        GroupName::Ih | GroupName::K => with_products(icosahedral_rotations(), &inversion),
        GroupName::Cinfv => standard_operations(GroupName::Cnv(LINEAR_AXIS_ORDER)),
        GroupName::Dinfh => standard_operations(GroupName::Dnh(LINEAR_AXIS_ORDER)),
    }
}

/// Turn by k/n of a full turn about z.
pub(super) fn turn_z(k: u32, n: u32) -> Matrix3<f64> {
    let (c, s) = (cos_turn(i64::from(k), i64::from(n)), sin_turn(i64::from(k), i64::from(n)));
    Matrix3::new(c, -s, 0.0, s, c, 0.0, 0.0, 0.0, 1.0)
}

fn horizontal() -> Matrix3<f64> {
    Matrix3::from_diagonal(&Vector3::new(1.0, 1.0, -1.0))
}

/// The operation that doubles Cn and Dn: inversion where n is even (both are there then), else the plane across the axis.
fn centre_or_plane(n: u32) -> Matrix3<f64> {
    if n.is_multiple_of(2) { -Matrix3::identity() } else { horizontal() }
}

fn with_products(proper: Vec<Matrix3<f64>>, second: &Matrix3<f64>) -> Vec<Matrix3<f64>> {
    let more: Vec<_> = proper.iter().map(|r| second * r).collect();
    [proper, more].concat()
}

fn rotations(n: u32) -> Vec<Matrix3<f64>> {
    (0..n).map(|k| turn_z(k, n)).collect()
}

/// Powers of Sn about z, n even.
fn improper_rotations(n: u32) -> Vec<Matrix3<f64>> {
    (0..n).map(|k| if k % 2 == 0 { turn_z(k, n) } else { horizontal() * turn_z(k, n) }).collect()
}

/// Half turns about n axes across z (`on_z` −1) or planes through z (`on_z` 1) at (2j + shift)/(2n) of a half turn from x.
///
/// Both are the reflection of the xy plane in a line; for even n and no shift the lines of the first family (j even) come first.
fn across(n: u32, shift: u32, on_z: f64) -> Vec<Matrix3<f64>> {
    let steps: Vec<u32> = if n.is_multiple_of(2) && shift == 0 {
        (0..n).step_by(2).chain((1..n).step_by(2)).collect()
    } else {
        (0..n).collect()
    };
    steps
        .into_iter()
        .map(|j| {
            // A line at angle α reflects x to the angle 2α = 2π(2j + shift)/(2n).
            let (k, n) = (i64::from(2 * j + shift), i64::from(2 * n));
            let (c, s) = (cos_turn(k, n), sin_turn(k, n));
            Matrix3::new(c, s, 0.0, s, -c, 0.0, 0.0, 0.0, on_z)
        })
        .collect()
}

fn dihedral(n: u32) -> Vec<Matrix3<f64>> {
    let mut half_turns = across(n, 0, -1.0);
    if n == 2 {
        // Printed tables of D2 and D2h have z, y, x.
        half_turns.reverse();
    }
    [rotations(n), half_turns].concat()
}

fn tetrahedral_rotations() -> Vec<Matrix3<f64>> {
    let cycle = Matrix3::new(0.0, 0.0, 1.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0);
    in_printed_order(&closure(&[turn_z(1, 2), cycle]), |fold, power| match (fold, power) {
        (3, power) => power,
        _ => 3,
    })
}

fn octahedral_rotations() -> Vec<Matrix3<f64>> {
    let cycle = Matrix3::new(0.0, 0.0, 1.0, 1.0, 0.0, 0.0, 0.0, 1.0, 0.0);
    in_printed_order(&closure(&[turn_z(1, 4), cycle]), |fold, power| match (fold, power) {
        (3, _) => 1,
        (4, 1 | 3) => 2,
        (4, _) => 3,
        _ => 4,
    })
}

fn icosahedral_rotations() -> Vec<Matrix3<f64>> {
    let vertex = nalgebra::Unit::new_normalize(Vector3::new(2.0, 0.0, 1.0));
    let about_vertex = nalgebra::Rotation3::from_axis_angle(&vertex, std::f64::consts::TAU / 5.0).into_inner();
    in_printed_order(&closure(&[turn_z(1, 5), about_vertex]), |fold, power| match (fold, power) {
        (5, 1 | 4) => 1,
        (5, _) => 2,
        (3, _) => 3,
        _ => 4,
    })
}

/// All products of generators, at most 60.
fn closure(generators: &[Matrix3<f64>]) -> Vec<Matrix3<f64>> {
    multiplication::closure(Matrix3::identity(), generators, |a, b| a * b, same, 60)
        .expect("rotations of polyhedra are at most 60")
}

/// Sorts rotations by the rank of (order of the axis, power), then power, then axis: from z down, from x round.
fn in_printed_order(rotations: &[Matrix3<f64>], rank: impl Fn(u32, u32) -> u32) -> Vec<Matrix3<f64>> {
    let axes: Vec<Vector3<f64>> = rotations.iter().map(directed_axis).collect();
    let fold = |axis: &Vector3<f64>| axes.iter().skip(1).filter(|other| (*other - axis).amax() < SAME).count() + 1;
    let mut keyed: Vec<_> = rotations
        .iter()
        .zip(&axes)
        .enumerate()
        .map(|(at, (rotation, axis))| {
            if at == 0 {
                return ((0, 0, [0, 0, 0]), *rotation);
            }
            let fold = u32::try_from(fold(axis)).unwrap_or(u32::MAX);
            let power = power_about(rotation, axis, fold);
            // Whole numbers sort the same on every machine; the angle round z counts from x.
            let azimuth = axis.y.atan2(axis.x).rem_euclid(std::f64::consts::TAU - 1e-6);
            let place = [-axis.z, azimuth, axis.norm()].map(rounded);
            ((rank(fold, power), power, place), *rotation)
        })
        .collect();
    keyed.sort_by_key(|(key, _)| *key);
    keyed.into_iter().map(|(_, rotation)| rotation).collect()
}

#[expect(clippy::cast_possible_truncation, reason = "at most 10⁴")]
fn rounded(x: f64) -> i64 {
    (x * 1e4).round() as i64
}

/// k of a turn by 2πk/fold about `axis`.
#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a number from 0 to fold")]
pub(super) fn power_about(rotation: &Matrix3<f64>, axis: &Vector3<f64>, fold: u32) -> u32 {
    let (found, angle) = axis_angle(rotation);
    let angle = if found.dot(axis) < 0.0 { std::f64::consts::TAU - angle } else { angle };
    (angle / std::f64::consts::TAU * f64::from(fold)).round() as u32 % fold
}

/// The axis of a rotation with a direction that does not depend on the sense of the turn.
///
/// Body diagonals point to (1, 1, 1) and the corners that T carries it to, so that all C3 of T turn alike; others point to
/// positive z, y, x, whichever is first not zero.
pub(super) fn directed_axis(rotation: &Matrix3<f64>) -> Vector3<f64> {
    let axis = axis_angle(rotation).0.into_inner();
    let product = axis.x * axis.y * axis.z;
    let diagonal = (axis.abs().max() - axis.abs().min()) < SAME;
    let leading =
        if diagonal { product } else { [axis.z, axis.y, axis.x].into_iter().find(|c| c.abs() > SAME).unwrap_or(1.0) };
    if leading < 0.0 { -axis } else { axis }
}
