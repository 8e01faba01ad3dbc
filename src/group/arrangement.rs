//! Sites about their centroid, and which site lies at a given place.
//!
//! Not here: operations that carry sites onto each other (`group::matching`).

use super::symmetry::{Deviation, Site};
use nalgebra::{Matrix3, Point3, SymmetricEigen, Vector3};

/// Sites of several kinds about their centroid, sorted into cells for look-up.
#[derive(Debug, Clone)]
pub(super) struct Arrangement {
    pub kinds: Vec<u32>,
    /// Relative to the centroid, bohr.
    pub positions: Vec<Vector3<f64>>,
    /// Distance from the centroid, bohr.
    pub radii: Vec<f64>,
    pub centroid: Point3<f64>,
    cells: Cells,
}

impl Arrangement {
    /// `sites` are not empty and finite.
    pub fn of(sites: &[Site]) -> Self {
        let n = sites.len() as f64;
        let sum: Vector3<f64> = sites.iter().map(|site| site.position.coords / n).sum();
        let positions: Vec<_> = sites.iter().map(|site| site.position.coords - sum).collect();
        let radii = positions.iter().map(Vector3::norm).collect();
        let kinds = sites.iter().map(|site| site.kind).collect();
        let cells = Cells::of(&positions);
        Self { kinds, positions, radii, centroid: sum.into(), cells }
    }

    pub fn n_sites(&self) -> usize {
        self.positions.len()
    }

    /// Distance from the centroid to the outermost site.
    pub fn extent(&self) -> f64 {
        self.radii.iter().copied().fold(0.0, f64::max)
    }

    /// The site of this kind nearest to `place`, and its distance, when that is at most `radius`; `but` is passed over.
    pub fn nearest(&self, kind: u32, place: &Vector3<f64>, radius: f64, but: Option<usize>) -> Option<(usize, f64)> {
        let mut best: Option<(usize, f64)> = None;
        let mut limit = radius * radius;
        self.cells.visit(place, radius, |at| {
            if self.kinds[at] == kind && but != Some(at) {
                let square = (self.positions[at] - place).norm_squared();
                if square < limit || (square <= limit && best.is_none()) {
                    limit = square;
                    best = Some((at, square));
                }
            }
        });
        best.map(|(at, square)| (at, square.sqrt()))
    }

    /// Pairs of sites of any kind not much farther apart than their nearest neighbours: bonds as far as places alone tell.
    ///
    /// The factor joins C–C (2.9 bohr) where each carbon has a hydrogen at 2.05, and not the hydrogens of one carbon (3.4).
    pub fn neighbours(&self) -> Vec<(usize, usize)> {
        /// Nearer sites are one place, a ghost on an atom.
        const APART: f64 = 0.5;
        const FACTOR: f64 = 1.45;
        let farthest = 2.0 * self.extent();
        let nearest: Vec<f64> = self.positions.iter().map(|x| self.distance_to_nearest(x, APART, farthest)).collect();
        let mut pairs = Vec::new();
        for (a, x) in self.positions.iter().enumerate() {
            self.cells.visit(x, FACTOR * nearest[a], |b| {
                let distance = (self.positions[b] - x).norm();
                // The site with the longer reach sees the other; of two that see each other the first counts.
                let sees_back = distance <= FACTOR * nearest[b];
                if distance > APART && distance <= FACTOR * nearest[a] && (a < b || !sees_back) {
                    pairs.push((a.min(b), a.max(b)));
                }
            });
        }
        pairs.sort_unstable();
        pairs
    }

    /// Distance to the nearest site farther away than `apart`; 0 when there is none.
    fn distance_to_nearest(&self, place: &Vector3<f64>, apart: f64, farthest: f64) -> f64 {
        let mut radius = 2.5;
        loop {
            let mut best = f64::INFINITY;
            self.cells.visit(place, radius, |at| {
                let distance = (self.positions[at] - place).norm();
                if distance > apart {
                    best = best.min(distance);
                }
            });
            if best <= radius {
                return best;
            }
            if radius > farthest {
                return if best.is_finite() { best } else { 0.0 };
            }
            radius *= 2.0;
        }
    }

    /// Unit vector along the line through the centroid that fits the sites best.
    pub fn best_line(&self) -> Vector3<f64> {
        let moments: Matrix3<f64> = self.positions.iter().map(|x| x * x.transpose()).sum();
        let eigen = SymmetricEigen::new(moments);
        eigen.eigenvectors.column(eigen.eigenvalues.imax()).into()
    }

    /// How far the sites lie from other places, one for each.
    pub fn deviation_from(&self, places: &[Vector3<f64>]) -> Deviation {
        let squares = self.positions.iter().zip(places).map(|(x, place)| (x - place).norm_squared());
        let (max, sum) = squares.fold((0.0_f64, 0.0), |(max, sum), square| (max.max(square), sum + square));
        Deviation { max: max.sqrt(), rms: (sum / self.n_sites() as f64).sqrt() }
    }
}

/// Looks up the site of a kind that is nearest to a place.
#[derive(Debug, Clone)]
pub struct NearestSites(Arrangement);

impl NearestSites {
    /// `sites` are finite, as those of a group that was found.
    #[must_use]
    pub fn of(sites: &[Site]) -> Self {
        Self(Arrangement::of(sites))
    }

    /// Index and distance (bohr) of the nearest site of this kind; the first and infinity when there is none.
    #[must_use]
    pub fn of_kind(&self, kind: u32, place: &Point3<f64>) -> (usize, f64) {
        let place = place - self.0.centroid;
        // Beyond this sphere there is no site.
        let farthest = place.norm() + self.0.extent() + 1.0;
        let mut radius = 0.5;
        loop {
            if let Some(found) = self.0.nearest(kind, &place, radius, None) {
                return found;
            }
            if radius > farthest {
                return (0, f64::INFINITY);
            }
            radius *= 4.0;
        }
    }
}

/// A box around all sites, cut into about as many cubes as there are sites.
#[derive(Debug, Clone)]
struct Cells {
    corner: Vector3<f64>,
    edge: f64,
    counts: [usize; 3],
    /// For each cube where its sites begin in `sites`; one entry more than there are cubes.
    starts: Vec<usize>,
    sites: Vec<usize>,
}

impl Cells {
    fn of(positions: &[Vector3<f64>]) -> Self {
        let corner = positions.iter().fold(Vector3::repeat(f64::INFINITY), |low, x| low.inf(x));
        let size = positions.iter().fold(Vector3::repeat(f64::NEG_INFINITY), |high, x| high.sup(x)) - corner;
        // Long and flat arrangements have less than a cube of their size; the edge grows until the number of cubes is right.
        let mut edge = (size.max() / (positions.len() as f64).cbrt()).max(1e-3);
        let mut counts = numbers_of_cubes(&size, edge);
        while edge > 2e-3 && counts.iter().product::<usize>() * 2 < positions.len() {
            edge /= 1.5;
            counts = numbers_of_cubes(&size, edge);
        }
        let mut cells =
            Self { corner, edge, counts, starts: vec![0; counts.iter().product::<usize>() + 1], sites: Vec::new() };
        let homes: Vec<usize> = positions.iter().map(|x| cells.index(cells.cube(x))).collect();
        for &home in &homes {
            cells.starts[home + 1] += 1;
        }
        for at in 1..cells.starts.len() {
            cells.starts[at] += cells.starts[at - 1];
        }
        let mut next = cells.starts.clone();
        cells.sites = vec![0; positions.len()];
        for (site, &home) in homes.iter().enumerate() {
            cells.sites[next[home]] = site;
            next[home] += 1;
        }
        cells
    }

    /// The cube of a place, the nearest one for places outside.
    fn cube(&self, place: &Vector3<f64>) -> [usize; 3] {
        let scaled = (place - self.corner) / self.edge;
        #[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "clamped; a NaN becomes 0")]
        [0, 1, 2].map(|k| (scaled[k].max(0.0) as usize).min(self.counts[k] - 1))
    }

    fn index(&self, [i, j, k]: [usize; 3]) -> usize {
        (i * self.counts[1] + j) * self.counts[2] + k
    }

    /// Calls `see` with all sites of the cubes that a sphere touches.
    fn visit(&self, place: &Vector3<f64>, radius: f64, mut see: impl FnMut(usize)) {
        let low = self.cube(&place.add_scalar(-radius));
        let high = self.cube(&place.add_scalar(radius));
        for i in low[0]..=high[0] {
            for j in low[1]..=high[1] {
                let (first, last) = (self.index([i, j, low[2]]), self.index([i, j, high[2]]));
                self.sites[self.starts[first]..self.starts[last + 1]].iter().for_each(|&site| see(site));
            }
        }
    }
}

#[expect(clippy::cast_possible_truncation, clippy::cast_sign_loss, reason = "a few times the number of sites at most")]
fn numbers_of_cubes(size: &Vector3<f64>, edge: f64) -> [usize; 3] {
    [0, 1, 2].map(|k| (size[k] / edge) as usize + 1)
}

#[cfg(test)]
mod tests {
    use super::*;

    /// Places without order, in a box much longer than wide.
    fn sites(n: u32) -> Vec<Site> {
        let place = |k: f64| Point3::new(40.0 * (1.3 * k).sin(), 7.0 * (2.9 * k * k).cos(), 3.0 * (0.7 * k).sin());
        (0..n).map(|k| Site { kind: k % 3, position: place(f64::from(k)) }).collect()
    }

    #[test]
    fn cells_find_what_a_search_through_all_finds() {
        for n in [1, 2, 7, 200] {
            let arrangement = Arrangement::of(&sites(n));
            for k in 0..300_u32 {
                let k = f64::from(k);
                let place = Vector3::new(50.0 * k.cos(), 10.0 * (1.7 * k).sin(), 5.0 * (0.3 * k).cos());
                let radius = 0.2 + 0.05 * k;
                let all = arrangement.positions.iter().zip(&arrangement.kinds).enumerate();
                let best = all
                    .filter(|(_, (_, kind))| **kind == 1)
                    .map(|(at, (x, _))| (at, (x - place).norm()))
                    .filter(|(_, distance)| *distance <= radius)
                    .min_by(|a, b| a.1.total_cmp(&b.1));
                let found = arrangement.nearest(1, &place, radius, None);
                assert_eq!(found.map(|(at, _)| at), best.map(|(at, _)| at), "{n} sites, place {k}");
            }
        }
    }

    #[test]
    fn neighbours_are_pairs_that_either_reaches() {
        let arrangement = Arrangement::of(&sites(150));
        let positions = &arrangement.positions;
        let apart = |a: usize, b: usize| (positions[a] - positions[b]).norm();
        let reach = |a: usize| {
            let others = (0..150).map(|b| apart(a, b)).filter(|distance| *distance > 0.5);
            1.45 * others.fold(f64::INFINITY, f64::min)
        };
        let mut expected = Vec::new();
        for a in 0..150 {
            for b in a + 1..150 {
                if apart(a, b) > 0.5 && apart(a, b) <= reach(a).max(reach(b)) {
                    expected.push((a, b));
                }
            }
        }
        assert_eq!(arrangement.neighbours(), expected);
    }
}
