//! Operations that carry sites onto sites of their kind, nearly or exactly.
//!
//! An operation is known by the permutation of sites and the sign of its determinant; its matrix is the best fit to both. Two sites
//! not in line with the centroid have to land on like sites at like distances, which leaves few operations to try on all sites.
//! Not here: which of the operations form groups (`group::detect`).

use super::arrangement::Arrangement;
use super::fit::best_turn;
use nalgebra::Matrix3;
use std::collections::BTreeSet;

/// A permutation of sites with the orthogonal matrix that comes nearest to it.
#[derive(Debug, Clone, PartialEq)]
pub struct SiteOperation {
    /// Site i goes to `permutation[i]`.
    pub permutation: Vec<u32>,
    /// Whether the determinant is +1.
    pub proper: bool,
    /// About the centroid, in the coordinates of the sites.
    pub matrix: Matrix3<f64>,
    /// The largest distance of a turned site from the site it belongs to, bohr.
    pub displacement: f64,
}

impl SiteOperation {
    /// The best fit to a permutation.
    pub(super) fn fitted(arrangement: &Arrangement, permutation: Vec<u32>, proper: bool) -> Option<Self> {
        let positions = &arrangement.positions;
        let images = permutation.iter().map(|&image| &positions[image as usize]);
        let matrix = best_turn(positions.iter().zip(images), proper)?;
        Some(Self::measured(arrangement, permutation, matrix))
    }

    /// A permutation with the matrix that belongs to it.
    pub(super) fn measured(arrangement: &Arrangement, permutation: Vec<u32>, matrix: Matrix3<f64>) -> Self {
        let positions = &arrangement.positions;
        let images = permutation.iter().map(|&image| &positions[image as usize]);
        let displacement =
            positions.iter().zip(images).map(|(x, image)| (matrix * x - image).norm()).fold(0.0, f64::max);
        Self { proper: matrix.determinant() > 0.0, permutation, matrix, displacement }
    }

    /// Nothing moves.
    pub(super) fn identity(n_sites: usize) -> Self {
        Self {
            permutation: (0_u32..).take(n_sites).collect(),
            proper: true,
            matrix: Matrix3::identity(),
            displacement: 0.0,
        }
    }

    /// What tells it from other operations on the same sites.
    pub(super) fn key(&self) -> (bool, Vec<u32>) {
        (self.proper, self.permutation.clone())
    }

    /// The permutation of first `other`, then `self`.
    pub(super) fn after(&self, other: &Self) -> Vec<u32> {
        other.permutation.iter().map(|&image| self.permutation[image as usize]).collect()
    }
}

/// Operations found, and how far the search could go.
#[derive(Debug, Clone)]
pub(super) struct Search {
    /// By ascending displacement; the identity is among them.
    pub operations: Vec<SiteOperation>,
    /// Structures at most this far from symmetric were searched, bohr: below the limit asked for where too many sites look alike.
    pub limit: f64,
}

/// Pairs of images looked at, at most.
const MAX_PAIRS: usize = 20_000_000;
/// Operations tried on a handful of sites, at most.
const MAX_TRIALS: usize = 400_000;
/// Operations tried on all sites times number of sites, at most, before the search is narrowed …
const MAX_WORK: usize = 8_000_000;
/// … but at least so many operations, more than any group has.
const ENOUGH: usize = 300;
/// Below this limit (bohr) narrowing further is of no use.
const NARROWEST: f64 = 1e-6;

/// All operations whose group may have a deviation up to `limit`, or up to a lower one where there would be too many to try.
///
/// `None` when even exact matches are too many. Not for sites in a line.
pub(super) fn search(arrangement: &Arrangement, limit: f64) -> Option<Search> {
    let mut limit = limit;
    loop {
        if let Some(operations) = Trial::new(arrangement, limit).and_then(|trial| trial.operations()) {
            return Some(Search { operations, limit });
        }
        if limit < NARROWEST {
            return None;
        }
        limit /= 4.0;
    }
}

/// One search with a fixed limit.
struct Trial<'a> {
    arrangement: &'a Arrangement,
    /// An operation of a group with deviation d moves no site by more than 2d from its image.
    reach: f64,
    /// Two sites not in line with the centroid.
    pair: [usize; 2],
    /// Images allowed for each of the two.
    images: [Vec<usize>; 2],
}

impl<'a> Trial<'a> {
    fn new(arrangement: &'a Arrangement, limit: f64) -> Option<Self> {
        let reach = 2.0 * limit;
        let shells = Shells::of(arrangement);
        let positions = &arrangement.positions;
        // Few images are cheap, long levers are accurate.
        let first = shells.rarest(arrangement, reach, |at| arrangement.radii[at])?;
        let direction = positions[first] / arrangement.radii[first];
        let second = shells.rarest(arrangement, reach, |at| positions[at].cross(&direction).norm())?;
        let images = [first, second].map(|at| shells.around(arrangement, at, reach).to_vec());
        (images[0].len().saturating_mul(images[1].len()) <= MAX_PAIRS).then_some(Self {
            arrangement,
            reach,
            pair: [first, second],
            images,
        })
    }

    /// `None` when there are too many to try.
    fn operations(&self) -> Option<Vec<SiteOperation>> {
        let pairs = self.pairs()?;
        let n_sites = self.arrangement.n_sites();
        let probes = self.probes(2 * pairs.len() * n_sites > 200_000);
        let mut seen: BTreeSet<(bool, Vec<u32>)> = BTreeSet::new();
        let mut operations = Vec::new();
        let mut work = 0;
        for pair in pairs {
            for proper in [true, false] {
                let Some(rough) = self.turn_onto(pair, proper) else { continue };
                if !self.passes(&rough, &probes) {
                    continue;
                }
                work += n_sites;
                if work > MAX_WORK.max(ENOUGH * n_sites) {
                    return None;
                }
                let Some(found) = self.refined(rough, proper) else { continue };
                if found.displacement <= self.reach && seen.insert((proper, found.permutation.clone())) {
                    operations.push(found);
                }
            }
        }
        operations.sort_by(|a, b| a.displacement.total_cmp(&b.displacement));
        Some(operations)
    }

    /// Images of the pair with nearly its distance.
    fn pairs(&self) -> Option<Vec<[usize; 2]>> {
        let positions = &self.arrangement.positions;
        let [first, second] = self.pair;
        let distance = (positions[first] - positions[second]).norm();
        let mut pairs = Vec::new();
        for &a in &self.images[0] {
            for &b in &self.images[1] {
                if ((positions[a] - positions[b]).norm() - distance).abs() <= 2.0 * self.reach {
                    pairs.push([a, b]);
                }
            }
            if pairs.len() > MAX_TRIALS {
                return None;
            }
        }
        Some(pairs)
    }

    /// The turn that takes the first site to the direction of its image and the plane of the two into that of their images.
    fn turn_onto(&self, images: [usize; 2], proper: bool) -> Option<Matrix3<f64>> {
        let from = self.corner(self.pair)?;
        let mut onto = self.corner(images)?;
        if !proper {
            onto.column_mut(2).neg_mut();
        }
        Some(onto * from.transpose())
    }

    /// Columns: along the first site, across it towards the second, and perpendicular to both.
    fn corner(&self, [first, second]: [usize; 2]) -> Option<Matrix3<f64>> {
        let a = self.arrangement.positions[first].try_normalize(1e-9)?;
        let b = self.arrangement.positions[second];
        let across = (b - a * a.dot(&b)).try_normalize(1e-9)?;
        Some(Matrix3::from_columns(&[a, across, a.cross(&across)]))
    }

    /// Some sites far apart from each other, with the distance within which each has to find its like.
    fn probes(&self, strict: bool) -> Vec<(usize, f64)> {
        const COUNT: usize = 24;
        let arrangement = self.arrangement;
        let positions = &arrangement.positions;
        let mut apart: Vec<f64> = arrangement.radii.clone();
        let mut probes = Vec::new();
        for _ in 0..COUNT.min(positions.len()) {
            let Some(next) = (0..positions.len()).max_by(|&a, &b| apart[a].total_cmp(&apart[b])) else { break };
            for (distance, x) in apart.iter_mut().zip(positions) {
                *distance = distance.min((x - positions[next]).norm());
            }
            // Half way to the next of its kind a match means nothing.
            let wide = 2.0 * self.reach;
            let neighbour = arrangement.nearest(arrangement.kinds[next], &positions[next], 2.0 * wide, Some(next));
            let half = neighbour.map_or(wide, |(_, distance)| 0.5 * distance);
            probes.push((next, if strict { half.min(wide) } else { wide }));
        }
        probes
    }

    fn passes(&self, turn: &Matrix3<f64>, probes: &[(usize, f64)]) -> bool {
        let arrangement = self.arrangement;
        probes.iter().all(|&(at, radius)| {
            let place = turn * arrangement.positions[at];
            arrangement.nearest(arrangement.kinds[at], &place, radius, None).is_some()
        })
    }

    /// Turns by turns finds the nearest sites and the best fit to them, until neither changes.
    fn refined(&self, rough: Matrix3<f64>, proper: bool) -> Option<SiteOperation> {
        const ROUNDS: usize = 8;
        let arrangement = self.arrangement;
        let mut turn = rough;
        let mut permutation = Vec::new();
        for _ in 0..ROUNDS {
            let next = self.nearest_sites(&turn)?;
            if next == permutation {
                break;
            }
            permutation = next;
            let images = permutation.iter().map(|&image: &u32| &arrangement.positions[image as usize]);
            turn = best_turn(arrangement.positions.iter().zip(images), proper)?;
        }
        let mut taken = vec![false; arrangement.n_sites()];
        let one_to_one = permutation.iter().all(|&image| !std::mem::replace(&mut taken[image as usize], true));
        if one_to_one { SiteOperation::fitted(arrangement, permutation, proper) } else { None }
    }

    fn nearest_sites(&self, turn: &Matrix3<f64>) -> Option<Vec<u32>> {
        let arrangement = self.arrangement;
        let sites = arrangement.positions.iter().zip(&arrangement.kinds);
        sites
            .map(|(x, &kind)| {
                let (at, _) = arrangement.nearest(kind, &(turn * x), 2.0 * self.reach, None)?;
                u32::try_from(at).ok()
            })
            .collect()
    }
}

/// Sites sorted by kind and distance from the centroid.
struct Shells {
    sites: Vec<usize>,
    /// For each site its place in `sites`.
    places: Vec<usize>,
}

impl Shells {
    fn of(arrangement: &Arrangement) -> Self {
        let mut sites: Vec<usize> = (0..arrangement.n_sites()).collect();
        let key = |at: usize| (arrangement.kinds[at], arrangement.radii[at]);
        sites.sort_by(|&a, &b| key(a).0.cmp(&key(b).0).then(key(a).1.total_cmp(&key(b).1)));
        let mut places = vec![0; sites.len()];
        for (place, &site) in sites.iter().enumerate() {
            places[site] = place;
        }
        Self { sites, places }
    }

    /// Sites of the kind of site `at` whose distance from the centroid differs by no more than `reach`.
    fn around(&self, arrangement: &Arrangement, at: usize, reach: f64) -> &[usize] {
        let (kind, radius) = (arrangement.kinds[at], arrangement.radii[at]);
        let order = |&site: &usize, radius: f64| (arrangement.kinds[site], arrangement.radii[site]) < (kind, radius);
        let place = self.places[at];
        let low = self.sites[..place].partition_point(|site| order(site, radius - reach));
        let beyond = |site: &usize| arrangement.kinds[*site] == kind && arrangement.radii[*site] <= radius + reach;
        let high = place + self.sites[place..].partition_point(beyond);
        &self.sites[low..high]
    }

    /// The site with the fewest like it for the length of its lever; of equal ones the first in the order of shells.
    fn rarest(&self, arrangement: &Arrangement, reach: f64, lever: impl Fn(usize) -> f64) -> Option<usize> {
        let cost = |at: usize| {
            let lever = lever(at);
            if lever > 0.0 { self.around(arrangement, at, reach).len() as f64 / (lever * lever) } else { f64::INFINITY }
        };
        let costs = self.sites.iter().map(|&at| (cost(at), at));
        costs.min_by(|a, b| a.0.total_cmp(&b.0)).filter(|(cost, _)| cost.is_finite()).map(|(_, at)| at)
    }
}
