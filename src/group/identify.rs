//! Which point group a set of operations is, and where its standard axes may lie.
//!
//! Not here: finding the operations from sites (`group::detect`), choosing among equal axes by atoms and bonds (`group::frame`).

use super::elements::standard_operations;
use super::error::GroupError;
use super::operation::{Operation, axis_angle};
use super::schoenflies::{GroupName, MAX_AXIS_ORDER};
use nalgebra::{Matrix3, Vector3};

/// Largest deviation of an entry from the ideal operation that still counts as that operation.
pub const LIMIT: f64 = 1e-3;

/// Axes nearer than this (1 − |cos|; about 0.8°) are one.
const PARALLEL: f64 = 1e-4;

/// The name of the group made of these operations, and the standard axes nearest to the given ones.
///
/// The rows of the matrix are x, y, z of the standard frame: `axes * r` are standard coordinates, and `axes * R * axesᵀ` of an
/// operation is one of [`super::PointGroup::standard`]'s, to within [`LIMIT`]. Only operations are needed, in any order.
///
/// # Errors
/// [`GroupError::NoPointGroup`] when the operations are no point group, with how far they are off.
pub fn identify(operations: &[Matrix3<f64>]) -> Result<(GroupName, Matrix3<f64>), GroupError> {
    let (name, frames) = standard_frames(operations)?;
    Ok((name, nearest_to_identity(&frames)))
}

/// The name of the group made of these operations, and every set of standard axes that the operations themselves allow.
///
/// Where the group leaves x free (Cn, Cnh, Sn, Cs), x is the projection of each coordinate axis in turn; C1 and Ci keep the given axes.
///
/// # Errors
/// As [`identify`].
pub fn standard_frames(operations: &[Matrix3<f64>]) -> Result<(GroupName, Vec<Matrix3<f64>>), GroupError> {
    let refused =
        |reason, deviation| GroupError::NoPointGroup { order: operations.len(), reason, deviation, limit: LIMIT };
    for matrix in operations {
        Operation::new(*matrix, LIMIT).map_err(|_| {
            refused("a matrix is not orthogonal", (matrix.transpose() * matrix - Matrix3::identity()).amax())
        })?;
    }
    let inventory = Inventory::of(operations);
    let name = inventory.name().filter(|name| name.order() == Some(operations.len()));
    let name = name.ok_or_else(|| refused("their axes and planes are those of no group", f64::INFINITY))?;
    let standard = standard_operations(name);
    let mut smallest = f64::INFINITY;
    let mut frames = inventory.candidate_frames(name);
    frames.retain(|axes| {
        let deviation = mismatch(operations, axes, &standard);
        smallest = smallest.min(deviation);
        deviation <= LIMIT
    });
    if frames.is_empty() { Err(refused("their products leave the set", smallest)) } else { Ok((name, frames)) }
}

/// The frame whose axes deviate least from the given ones; of equal ones that whose z has the largest sum of components, then the first.
pub(super) fn nearest_to_identity(frames: &[Matrix3<f64>]) -> Matrix3<f64> {
    let mut best = frames.first().copied().unwrap_or_else(Matrix3::identity);
    for frame in frames {
        if nearness(frame) > nearness(&best) {
            best = *frame;
        }
    }
    best
}

/// Larger for frames nearer to the given axes; whole numbers, so that rounding decides nothing.
#[expect(clippy::cast_possible_truncation, reason = "sums of three cosines")]
pub(super) fn nearness(frame: &Matrix3<f64>) -> [i64; 2] {
    [frame.trace(), frame.row(2).sum()].map(|sum| (sum * 1e6).round() as i64)
}

/// Largest distance of an operation, seen in `axes`, from the nearest standard one.
fn mismatch(operations: &[Matrix3<f64>], axes: &Matrix3<f64>, standard: &[Matrix3<f64>]) -> f64 {
    let mut taken = vec![false; standard.len()];
    operations.iter().fold(0.0_f64, |worst, operation| {
        let seen = axes * operation * axes.transpose();
        let nearest = standard.iter().zip(&mut taken).map(|(s, taken)| ((s - seen).amax(), taken));
        let Some((distance, taken)) = nearest.min_by(|a, b| a.0.total_cmp(&b.0)) else { return f64::INFINITY };
        // Two operations at one standard element would leave another without.
        if std::mem::replace(taken, true) { f64::INFINITY } else { worst.max(distance) }
    })
}

/// What axes and planes a set of operations has.
struct Inventory {
    /// Rotation axes and their order.
    axes: Vec<(Vector3<f64>, usize)>,
    /// Normals of mirror planes.
    planes: Vec<Vector3<f64>>,
    /// Axes of improper rotations that are neither inversion nor reflection.
    improper: Vec<Vector3<f64>>,
    inversion: bool,
}

impl Inventory {
    fn of(operations: &[Matrix3<f64>]) -> Self {
        // Half the smallest angle that a supported group can turn by.
        let small = std::f64::consts::TAU / f64::from(2 * MAX_AXIS_ORDER) / 2.0;
        let mut found = Self { axes: Vec::new(), planes: Vec::new(), improper: Vec::new(), inversion: false };
        for matrix in operations {
            let proper = matrix.determinant() > 0.0;
            let (axis, angle) = axis_angle(&if proper { *matrix } else { -matrix });
            let axis = axis.into_inner();
            match (proper, angle) {
                (true, angle) if angle < small => {}
                (true, _) => match found.axes.iter_mut().find(|(known, _)| parallel(known, &axis)) {
                    Some((_, order)) => *order += 1,
                    None => found.axes.push((axis, 2)),
                },
                (false, angle) if angle < small => found.inversion = true,
                (false, angle) if angle > std::f64::consts::PI - small => found.planes.push(axis),
                (false, _) if found.improper.iter().any(|known| parallel(known, &axis)) => {}
                (false, _) => found.improper.push(axis),
            }
        }
        found
    }

    fn name(&self) -> Option<GroupName> {
        let order = self.axes.iter().map(|(_, order)| *order).max().unwrap_or(1);
        let improper = self.inversion || !self.planes.is_empty() || !self.improper.is_empty();
        if order > 2 && self.axes.iter().filter(|(_, n)| *n > 2).count() > 1 {
            return Some(match (order, self.inversion, improper) {
                (5, true, _) => GroupName::Ih,
                (5, false, false) => GroupName::I,
                (4, true, _) => GroupName::Oh,
                (4, false, false) => GroupName::O,
                (3, true, _) => GroupName::Th,
                (3, false, true) => GroupName::Td,
                (3, false, false) => GroupName::T,
                _ => return None,
            });
        }
        let n = u32::try_from(order).ok()?;
        let Some(principal) = self.principal() else {
            return Some(match (self.inversion, self.planes.len()) {
                (true, _) => GroupName::Ci,
                (false, 0) => GroupName::C1,
                (false, _) => GroupName::Cs,
            });
        };
        let dihedral = self.axes.len() > 1;
        let horizontal = self.planes.iter().any(|normal| parallel(normal, &principal));
        let name = match (dihedral, horizontal, !self.planes.is_empty(), improper) {
            (true, true, _, _) => GroupName::Dnh(n),
            (true, false, true, _) => GroupName::Dnd(n),
            (true, false, false, _) => GroupName::Dn(n),
            (false, true, _, _) => GroupName::Cnh(n),
            (false, false, true, _) => GroupName::Cnv(n),
            (false, false, false, true) => GroupName::Sn(n.checked_mul(2)?),
            (false, false, false, false) => GroupName::Cn(n),
        };
        name.validated().ok()
    }

    /// The axis of highest order; among three half-turn axes the one that is also improper (D2d).
    fn principal(&self) -> Option<Vector3<f64>> {
        let highest = self.axes.iter().map(|(_, order)| *order).max()?;
        let mut candidates = self.axes.iter().filter(|(_, order)| *order == highest).map(|(axis, _)| *axis);
        let first = candidates.clone().next();
        candidates.find(|axis| self.improper.iter().any(|other| parallel(axis, other))).or(first)
    }

    /// Right-handed frames with z and x along the elements that the standard frame wants there; some may not fit.
    fn candidate_frames(&self, name: GroupName) -> Vec<Matrix3<f64>> {
        let of_order = |n: usize| self.axes.iter().filter(move |(_, order)| *order == n).map(|(axis, _)| *axis);
        let principal = || self.principal().into_iter().collect::<Vec<_>>();
        let coordinate = || Matrix3::<f64>::identity().column_iter().map(Into::into).collect::<Vec<Vector3<f64>>>();
        let half_turns = || of_order(2).collect::<Vec<_>>();
        let (z, x): (Vec<Vector3<f64>>, Vec<Vector3<f64>>) = match name {
            GroupName::C1 | GroupName::Ci => return vec![Matrix3::identity()],
            GroupName::Cs => (self.planes.clone(), coordinate()),
            GroupName::Cn(_) | GroupName::Cnh(_) | GroupName::Sn(_) => (principal(), coordinate()),
            GroupName::Cnv(_) => {
                let z = principal();
                let x = z.iter().flat_map(|z| self.planes.iter().map(move |normal| normal.cross(z))).collect();
                (z, x)
            }
            GroupName::Dn(2) | GroupName::Dnh(2) | GroupName::T | GroupName::Td | GroupName::Th => {
                (half_turns(), half_turns())
            }
            GroupName::Dn(_) | GroupName::Dnh(_) | GroupName::Dnd(_) => (principal(), half_turns()),
            GroupName::O | GroupName::Oh => (of_order(4).collect(), of_order(4).collect()),
            GroupName::I | GroupName::Ih => (of_order(5).collect(), of_order(5).collect()),
            // Never the name of a set of operations.
            GroupName::Cinfv | GroupName::Dinfh | GroupName::K => return Vec::new(),
        };
        let icosahedral = matches!(name, GroupName::I | GroupName::Ih);
        let mut frames = Vec::new();
        for z in z.iter().flat_map(|z| [*z, -z]) {
            for x in x.iter().flat_map(|x| [*x, -x]) {
                // The second five-fold axis of the icosahedron lies above the xy plane, other axes in it.
                let across = x - z * x.dot(&z);
                if across.norm() > 0.1 && (!icosahedral || x.dot(&z) > 0.0) {
                    let (z, x) = (z.normalize(), across.normalize());
                    frames.push(Matrix3::from_rows(&[x.transpose(), z.cross(&x).transpose(), z.transpose()]));
                }
            }
        }
        frames
    }
}

fn parallel(a: &Vector3<f64>, b: &Vector3<f64>) -> bool {
    1.0 - a.dot(b).abs() < PARALLEL
}

#[cfg(test)]
mod tests {
    use super::*;
    use nalgebra::Rotation3;

    fn every_name() -> Vec<GroupName> {
        use GroupName::{C1, Ci, Cn, Cnh, Cnv, Cs, Dn, Dnd, Dnh, I, Ih, O, Oh, Sn, T, Td, Th};
        let mut names = vec![C1, Cs, Ci, T, Td, Th, O, Oh, I, Ih];
        for n in (2..=30).chain([63, 64]) {
            names.extend([Cn(n), Cnv(n), Cnh(n), Dn(n), Dnh(n), Dnd(n), Sn(2 * n)]);
        }
        names
    }

    #[test]
    fn every_group_is_found_again_in_any_orientation() {
        let turn = Rotation3::from_euler_angles(0.3, -1.1, 2.5).into_inner();
        for name in every_name() {
            let mut operations: Vec<_> =
                standard_operations(name).iter().map(|r| turn * r * turn.transpose()).collect();
            assert_eq!(name.order(), Some(operations.len()), "{name}");
            operations.reverse();
            let (found, axes) = identify(&operations).unwrap_or_else(|error| panic!("{name}: {error}"));
            assert_eq!(found, name);
            assert!((axes.determinant() - 1.0).abs() < 1e-9, "{name}: right-handed");
        }
    }

    #[test]
    fn standard_axes_are_kept_as_they_are() {
        for name in every_name() {
            let (_, axes) = identify(&standard_operations(name)).unwrap();
            assert!((axes - Matrix3::identity()).amax() < 1e-9, "{name}: {axes}");
        }
    }

    #[test]
    fn a_set_that_is_no_group_is_refused() {
        let mut operations = standard_operations(GroupName::Oh);
        operations.pop();
        assert!(identify(&operations).is_err());
        assert!(identify(&[]).is_err());
        assert!(identify(&[Matrix3::identity(), Matrix3::from_element(f64::NAN)]).is_err());
        let skew = Rotation3::from_euler_angles(0.0, 0.0, 0.3).into_inner();
        assert!(identify(&[Matrix3::identity(), skew, skew.transpose()]).is_err());
    }
}
