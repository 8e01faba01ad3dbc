//! A grid that holds an orbital, and the surface value that encloses a stated share of its density.
//!
//! Here: how large and how fine the grid is. Not here: the surface itself (`picture::surface`).

use crate::group::Frame;
use crate::wavefunction::{Basis, values};
use nalgebra::{Point3, Vector3};
use ndarray::{Array2, ArrayView2};

/// Points of the fine grid at most.
const FINE_POINTS: f64 = 300_000.0;
/// Points of the coarse grid at most.
const COARSE_POINTS: f64 = 40_000.0;
/// No finer than this, bohr.
const FINEST: f64 = 0.05;
/// No coarser than this where the limit of points allows, bohr.
const FINE_STEP: f64 = 0.22;
/// The same of the coarse grid.
const COARSE_STEP: f64 = 0.5;
/// How far around the nuclei an orbital is looked for, bohr: beyond lie only functions of a continuum.
const MARGIN: f64 = 9.0;

/// Points of a cubic lattice in the standard frame: the last index runs fastest.
#[derive(Debug, Clone, PartialEq)]
pub struct Grid {
    /// First point, bohr.
    pub origin: Vector3<f64>,
    /// Distance of neighbours, bohr.
    pub step: f64,
    /// Points along x, y, z.
    pub counts: [usize; 3],
}

impl Grid {
    /// A lattice over the box from `low` to `high`, as fine as asked for and the number of points allows.
    #[must_use]
    pub fn over(low: Vector3<f64>, high: Vector3<f64>, step: f64, most: f64) -> Self {
        let sides = (high - low).map(|side| side.max(FINEST));
        // A lattice of n points a side has n − 1 steps: near enough for a limit.
        let step = step.max((sides.product() / most).cbrt()).max(FINEST).max(sides.max() / 400.0);
        Self { origin: low, step, counts: std::array::from_fn(|axis| steps(sides[axis] / step)) }
    }

    /// Place of a point by its indices.
    #[must_use]
    pub fn place(&self, indices: [usize; 3]) -> Vector3<f64> {
        self.origin + Vector3::from(indices.map(|index| index as f64)) * self.step
    }

    /// Number of points.
    #[must_use]
    pub fn n_points(&self) -> usize {
        self.counts.iter().product()
    }

    /// Position of a point in a list of all.
    #[must_use]
    pub fn at(&self, [i, j, k]: [usize; 3]) -> usize {
        (i * self.counts[1] + j) * self.counts[2] + k
    }

    /// Indices of all points in their order.
    pub fn indices(&self) -> impl Iterator<Item = [usize; 3]> {
        let [nx, ny, nz] = self.counts;
        (0..nx).flat_map(move |i| (0..ny).flat_map(move |j| (0..nz).map(move |k| [i, j, k])))
    }

    /// Values of orbitals at all points: n_orbitals × n_points.
    #[must_use]
    pub fn values(&self, basis: &Basis, rows: ArrayView2<'_, f64>, frame: &Frame) -> Array2<f64> {
        let back = frame.axes.transpose();
        let points: Vec<Point3<f64>> =
            self.indices().map(|indices| frame.centre + back * self.place(indices)).collect();
        values(basis, rows, &points)
    }
}

#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a positive number up to some hundreds")]
fn steps(steps: f64) -> usize {
    steps.ceil() as usize + 1
}

/// The value of |ψ| whose surface encloses a share of the density.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Level {
    /// |ψ| on the surface, bohr^(−3/2).
    pub value: f64,
    /// Share of ∫ψ² enclosed, by the sum over the grid.
    pub enclosed: f64,
    /// ∫ψ² by the sum over the grid; 1 for an orbital that the grid resolves and holds.
    pub on_grid: f64,
}

/// Finds the level that encloses `share` of an orbital of norm one.
///
/// Points are taken from the largest |ψ| down until their ψ² times the volume of a cell reach the share. Where the grid holds less, or
/// more because a core is too sharp for it, the share is of what the grid holds.
#[must_use]
pub fn level(values: &[f64], cell: f64, share: f64) -> Level {
    let mut density: Vec<f64> = values.iter().map(|value| value * value * cell).collect();
    density.sort_by(|a, b| b.total_cmp(a));
    let on_grid: f64 = density.iter().sum();
    let whole = if (on_grid - 1.0).abs() <= 0.1 { 1.0 } else { on_grid };
    let mut enclosed = 0.0;
    for part in density {
        enclosed += part;
        if enclosed >= share * whole {
            return Level { value: (part / cell).sqrt(), enclosed: enclosed / whole, on_grid };
        }
    }
    Level { value: 0.0, enclosed: 1.0, on_grid }
}

/// A fine grid around the surfaces of some orbitals, with their values on it.
///
/// A coarse grid finds where the surfaces lie, the fine one covers just that box.
#[must_use]
pub fn around(
    basis: &Basis,
    rows: ArrayView2<'_, f64>,
    frame: &Frame,
    places: &[Vector3<f64>],
    share: f64,
) -> (Grid, Array2<f64>) {
    let (low, high) = bounds(places.iter().copied());
    let margin = Vector3::repeat(MARGIN);
    let coarse = Grid::over(low - margin, high + margin, COARSE_STEP, COARSE_POINTS);
    let found = coarse.values(basis, rows, frame);
    let mut inside = Vec::new();
    for orbital in found.outer_iter() {
        let orbital = orbital.to_vec();
        let level = level(&orbital, coarse.step.powi(3), share);
        let reached = coarse.indices().zip(&orbital).filter(|(_, value)| value.abs() >= 0.7 * level.value);
        inside.extend(reached.map(|(indices, _)| coarse.place(indices)));
    }
    let (low, high) = if inside.is_empty() { (low, high) } else { bounds(inside.into_iter()) };
    let margin = Vector3::repeat(1.5 * coarse.step);
    let fine = Grid::over(low - margin, high + margin, FINE_STEP, FINE_POINTS);
    let values = fine.values(basis, rows, frame);
    (fine, values)
}

/// Opposite corners of the box around some places; the origin twice when there are none.
#[must_use]
pub fn bounds(places: impl Iterator<Item = Vector3<f64>>) -> (Vector3<f64>, Vector3<f64>) {
    places
        .fold(None, |bounds: Option<(Vector3<f64>, Vector3<f64>)>, place| {
            Some(bounds.map_or((place, place), |(low, high)| (low.inf(&place), high.sup(&place))))
        })
        .unwrap_or_default()
}
