//! The orientation in which a group's ideal operations fit a set of sites best, whether or not the sites have the group.
//!
//! Not here: groups that the sites have, exactly or nearly (`group::detect`), what becomes of sites that land nowhere.

use super::arrangement::Arrangement;
use super::detect::{DetectError, checked};
use super::error::GroupError;
use super::fit::nearest_orthogonal;
use super::operation::axis_angle;
use super::point_group::PointGroup;
use super::symmetry::Site;
use nalgebra::{Matrix3, Point3, Rotation3, Vector3};

/// A site farther than this (bohr) from all places of its like counts as if it were this far: it belongs to no fit.
const CAP: f64 = 1.5;
/// Directions of the sites looked at, at most.
const MAX_DIRECTIONS: usize = 32;
/// Sites near the centre by which orientations are sifted.
const SIFTING_SITES: usize = 12;
/// Orientations that are refined.
const REFINED: usize = 24;
/// Directions nearer than this (cosine; 3°) are one.
const SAME_DIRECTION: f64 = 0.9986;
/// Angles of a pair of sites and of a pair of axes may differ by this much, radians.
const ANGLE: f64 = 0.25;

/// A group laid over sites.
#[derive(Debug, Clone, PartialEq)]
pub struct ParentFit {
    /// Rows are x, y, z of the group's standard frame.
    pub axes: Matrix3<f64>,
    /// The centroid of the sites.
    pub centre: Point3<f64>,
    /// Root mean square distance of turned sites from the nearest of their kind, capped, bohr.
    pub misfit: f64,
}

/// Finds axes for `group` (finite) in which its operations carry the sites nearest to sites of their kind.
///
/// `operations` are those that the sites do have, about their centroid: the axes of the group found go along theirs where
/// that fits. Orientations come from pairs of directions (to sites, between sites of a kind, axes of operations) laid on
/// pairs of the group's axes, sifted by the sites near the centre, and refined on all.
///
/// # Holds
/// For sites that have the group the misfit is 0.
/// # Errors
/// [`DetectError`] for sites that cannot be searched.
pub fn fit_parent(sites: &[Site], group: &PointGroup, operations: &[Matrix3<f64>]) -> Result<ParentFit, DetectError> {
    let arrangement = checked(sites)?;
    if group.is_continuous() {
        let reason = "a group with infinitely many operations is laid over no sites that do not have it";
        let order = group.order();
        let refused = GroupError::NoPointGroup { order, reason, deviation: f64::INFINITY, limit: 0.0 };
        return Err(DetectError::Group(refused));
    }
    let elements: Vec<Matrix3<f64>> = group.elements().iter().map(|element| *element.operation.matrix()).collect();
    let fit = Fit { arrangement: &arrangement, elements: &elements };
    let axes = fit.best(operations);
    let all: Vec<usize> = (0..arrangement.n_sites()).collect();
    Ok(ParentFit { axes, centre: arrangement.centroid, misfit: fit.misfit(&axes, &all, &elements).sqrt() })
}

struct Fit<'a> {
    arrangement: &'a Arrangement,
    elements: &'a [Matrix3<f64>],
}

impl Fit<'_> {
    /// Mean square distance of turned sites from their like.
    fn misfit(&self, axes: &Matrix3<f64>, sites: &[usize], elements: &[Matrix3<f64>]) -> f64 {
        let turned: Vec<Matrix3<f64>> = elements.iter().map(|element| axes.transpose() * element * axes).collect();
        let arrangement = self.arrangement;
        let mut sum = 0.0;
        for &site in sites {
            let (kind, place) = (arrangement.kinds[site], arrangement.positions[site]);
            for matrix in &turned {
                let distance = arrangement.nearest(kind, &(matrix * place), CAP, None).map_or(CAP, |found| found.1);
                sum += distance * distance;
            }
        }
        sum / (sites.len().max(1) * turned.len().max(1)) as f64
    }

    fn best(&self, operations: &[Matrix3<f64>]) -> Matrix3<f64> {
        let all: Vec<usize> = (0..self.arrangement.n_sites()).collect();
        let mut inner = all.clone();
        inner.retain(|&site| self.arrangement.radii[site] > 0.3);
        inner.sort_by(|&a, &b| self.arrangement.radii[a].total_cmp(&self.arrangement.radii[b]));
        inner.truncate(SIFTING_SITES);
        // A few elements suffice to sift: every third, so that several axes are among them.
        let few: Vec<Matrix3<f64>> = self.elements.iter().skip(1).step_by(3).copied().collect();
        let mut sifted: Vec<(f64, Matrix3<f64>)> = self
            .orientations(&self.directions(operations, &inner))
            .into_iter()
            .map(|axes| (self.misfit(&axes, &inner, &few), axes))
            .collect();
        sifted.sort_by(|a, b| a.0.total_cmp(&b.0));
        sifted.truncate(REFINED);
        let refined = sifted.into_iter().map(|(_, axes)| self.refined(axes, &all));
        let best = refined.min_by(|a, b| ((a.0 * 1e9).round()).total_cmp(&((b.0 * 1e9).round())));
        best.map_or_else(Matrix3::identity, |(_, axes)| axes)
    }

    /// Axes of operations, then directions to sites and to the middles of sites of a kind, each line once.
    fn directions(&self, operations: &[Matrix3<f64>], inner: &[usize]) -> Vec<Vector3<f64>> {
        let mut found: Vec<Vector3<f64>> = Vec::new();
        let mut add = |direction: Vector3<f64>| {
            if let Some(unit) = direction.try_normalize(0.1)
                && found.len() < MAX_DIRECTIONS
                && !found.iter().any(|known| known.dot(&unit).abs() > SAME_DIRECTION)
            {
                found.push(unit);
            }
        };
        for axis in operations.iter().filter_map(axis_of) {
            add(axis);
        }
        let arrangement = self.arrangement;
        for &site in inner {
            add(arrangement.positions[site]);
        }
        for (at, &a) in inner.iter().enumerate() {
            for &b in inner[at + 1..].iter().filter(|&&b| arrangement.kinds[a] == arrangement.kinds[b]) {
                add(arrangement.positions[a] + arrangement.positions[b]);
                add(arrangement.positions[a].cross(&arrangement.positions[b]));
            }
        }
        for axis in [Vector3::x(), Vector3::y(), Vector3::z()] {
            add(axis);
        }
        found
    }

    /// Frames that lay two directions of the sites on two axes of the group with nearly their angle.
    fn orientations(&self, directions: &[Vector3<f64>]) -> Vec<Matrix3<f64>> {
        let mut axes: Vec<Vector3<f64>> = Vec::new();
        for axis in self.elements.iter().filter_map(axis_of) {
            if !axes.iter().any(|known| known.dot(&axis).abs() > SAME_DIRECTION) {
                axes.push(axis);
            }
        }
        // Groups of one axis or none leave the other direction free.
        for axis in [Vector3::z(), Vector3::x()] {
            if axes.len() < 2 && !axes.iter().any(|known| known.dot(&axis).abs() > SAME_DIRECTION) {
                axes.push(axis);
            }
        }
        // One axis of each kind: the group's own turns make the others.
        let mut leading: Vec<Vector3<f64>> = Vec::new();
        for axis in &axes {
            let known =
                |p: &Vector3<f64>| self.elements.iter().any(|element| (element * p).dot(axis).abs() > SAME_DIRECTION);
            if !leading.iter().any(known) {
                leading.push(*axis);
            }
        }
        let mut frames = Vec::new();
        for (at, u) in directions.iter().enumerate() {
            for (_, v) in directions.iter().enumerate().filter(|(other, _)| *other != at) {
                let angle = u.dot(v).abs().min(1.0).acos();
                for p in &leading {
                    for q in axes.iter().filter(|q| q.dot(p).abs() <= SAME_DIRECTION) {
                        if (p.dot(q).abs().min(1.0).acos() - angle).abs() > ANGLE {
                            continue;
                        }
                        // Lines have no direction: the sign that makes both angles acute or both obtuse.
                        let sign = if u.dot(v) * p.dot(q) < 0.0 { -1.0 } else { 1.0 };
                        frames.extend(laid([u, &(v * sign)], [p, q]));
                    }
                }
            }
        }
        frames
    }

    /// Turns the axes by small angles as long as the misfit falls.
    fn refined(&self, mut axes: Matrix3<f64>, sites: &[usize]) -> (f64, Matrix3<f64>) {
        let mut best = self.misfit(&axes, sites, self.elements);
        let mut step: f64 = 0.1;
        while step > 1e-7 {
            let mut moved = false;
            for axis in [Vector3::x_axis(), Vector3::y_axis(), Vector3::z_axis()] {
                for angle in [step, -step] {
                    let turned = Rotation3::from_axis_angle(&axis, angle).into_inner() * axes;
                    let misfit = self.misfit(&turned, sites, self.elements);
                    // Rounding is no progress.
                    if misfit < best * (1.0 - 1e-12) - 1e-30 {
                        (best, axes, moved) = (misfit, turned, true);
                    }
                }
            }
            if !moved {
                step *= 0.4;
            }
        }
        let exact = nearest_orthogonal(&axes, Some(true)).unwrap_or(axes);
        (best, exact)
    }
}

/// The turn that takes directions u, v nearest to p, q.
fn laid(from: [&Vector3<f64>; 2], onto: [&Vector3<f64>; 2]) -> Option<Matrix3<f64>> {
    let corner = |[a, b]: [&Vector3<f64>; 2]| {
        let (sum, difference) = ((a + b).try_normalize(1e-6)?, (a - b).try_normalize(1e-6)?);
        Some(Matrix3::from_columns(&[sum, difference, sum.cross(&difference)]))
    };
    Some(corner(onto)? * corner(from)?.transpose())
}

/// The axis of a turn, or of the turn that is left of an improper operation; None for E and i.
fn axis_of(operation: &Matrix3<f64>) -> Option<Vector3<f64>> {
    let proper = operation.determinant() > 0.0;
    let (axis, angle) = axis_angle(&if proper { *operation } else { -operation });
    (angle > 1e-3).then(|| axis.into_inner())
}

#[cfg(test)]
mod tests {
    use super::*;

    fn octahedron(turn: &Rotation3<f64>, stretch: f64) -> Vec<Site> {
        let arms =
            [Vector3::x(), -Vector3::x(), Vector3::y(), -Vector3::y(), Vector3::z() * stretch, -Vector3::z() * stretch];
        let centre = Point3::new(1.0, 2.0, 3.0);
        let mut sites = vec![Site { kind: 0, position: centre }];
        sites.extend(arms.iter().map(|arm| Site { kind: 1, position: centre + turn * (arm * 3.7) }));
        sites
    }

    #[test]
    fn a_stretched_octahedron_lies_along_the_axes_of_oh() {
        let turn = Rotation3::from_euler_angles(0.4, -1.0, 2.2);
        let group = PointGroup::standard("Oh".parse().expect("a name")).expect("a group");
        for stretch in [1.0, 1.04, 1.2] {
            let fit = fit_parent(&octahedron(&turn, stretch), &group, &[]).expect("a fit");
            // Every arm along an axis.
            let seen = fit.axes * turn.into_inner();
            assert!(seen.iter().all(|c| c.abs() < 1e-4 || (c.abs() - 1.0).abs() < 1e-4), "{stretch}: {seen}");
            assert!(stretch > 1.0 || fit.misfit < 1e-5, "{}", fit.misfit);
        }
    }
}
