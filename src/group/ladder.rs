//! From operations with their displacements to the groups that they form, each with its deviation.
//!
//! Not here: finding operations (`group::matching`), linear arrangements and atoms (`group::linear`).

use super::arrangement::Arrangement;
use super::elements::standard_operations;
use super::fit::{best_turn, intertwiner, made_exact, symmetrised};
use super::identify::standard_frames;
use super::matching::SiteOperation;
use super::multiplication::Multiplication;
use super::schoenflies::{GroupName, MAX_AXIS_ORDER};
use super::symmetry::Deviation;
use nalgebra::{Matrix3, Vector3};
use std::collections::{BTreeMap, BTreeSet};

/// Deviations up to this (bohr) are the noise of coordinates with six decimals in Å.
pub(super) const NOISE: f64 = 4e-6;

/// Order of the largest group with a name.
const MAX_ORDER: usize = 4 * MAX_AXIS_ORDER as usize;

/// A group on the sites: an exact representation, and the structure that it leaves exactly as it is.
#[derive(Debug, Clone)]
pub(super) struct FittedGroup {
    pub name: GroupName,
    /// In the order of the standard group, with exact matrices.
    pub operations: Vec<SiteOperation>,
    /// The symmetrised structure about the centroid.
    pub positions: Vec<Vector3<f64>>,
    pub deviation: Deviation,
}

impl FittedGroup {
    /// The order, with continuous groups above all finite ones.
    fn rank(&self) -> (bool, usize) {
        (self.name.is_continuous(), self.operations.len())
    }
}

/// The groups within the limit that operations (by ascending displacement) make, among them the trivial one.
pub(super) fn groups(arrangement: &Arrangement, operations: &[SiteOperation], limit: f64) -> Vec<FittedGroup> {
    /// Ways tried beside the one in the order of displacements.
    const DETOURS: usize = 8;
    let trivial = FittedGroup {
        name: GroupName::C1,
        operations: vec![SiteOperation::identity(arrangement.n_sites())],
        positions: arrangement.positions.clone(),
        deviation: Deviation::default(),
    };
    let identity = Closed::trivial(arrangement.n_sites());
    let mut builder = Builder { arrangement, limit, rungs: vec![trivial], tried: BTreeMap::new() };
    // What is exact goes in at one stroke: its subgroups are no news.
    let exact = operations.iter().take_while(|operation| operation.displacement <= NOISE);
    let exact = exact.fold(identity.clone(), |group, operation| {
        if group.holds(operation) { group } else { group.with(arrangement, operation, NOISE).unwrap_or(group) }
    });
    let start = if exact.elements.len() > 1 && builder.fits(&exact) { exact } else { identity.clone() };
    builder.climb(start, operations);
    // An operation of low displacement may bar the way to a larger group: start from those that are in no group so far.
    let mut detours = 0;
    for start in operations {
        if detours == DETOURS {
            break;
        }
        if builder.tried.keys().any(|group| group.contains(&start.key())) {
            continue;
        }
        detours += 1;
        if let Some(group) = builder.add(&identity, start) {
            builder.climb(group, operations);
        }
    }
    builder.rungs
}

/// Drops what is no larger than another of less or equal deviation, and what is hidden in noise below a larger group.
pub(super) fn thinned(mut rungs: Vec<FittedGroup>) -> Vec<FittedGroup> {
    rungs.sort_by(|a, b| a.deviation.max.total_cmp(&b.deviation.max).then(b.rank().cmp(&a.rank())));
    let mut ladder: Vec<FittedGroup> = Vec::new();
    for rung in rungs {
        match ladder.last() {
            Some(last) if last.rank() >= rung.rank() => {}
            _ => ladder.push(rung),
        }
    }
    let hidden = ladder.iter().filter(|rung| rung.deviation.max <= NOISE).count().saturating_sub(1);
    ladder.drain(..hidden);
    ladder
}

/// What tells the operations of a group on the sites apart.
type Members = BTreeSet<(bool, Vec<u32>)>;

/// A set of operations closed under products, identity first.
#[derive(Clone)]
struct Closed {
    elements: Vec<SiteOperation>,
    /// Some of them, from which all others are made.
    generators: Vec<SiteOperation>,
    members: Members,
}

impl Closed {
    fn trivial(n_sites: usize) -> Self {
        let identity = SiteOperation::identity(n_sites);
        Self { members: [identity.key()].into(), elements: vec![identity], generators: Vec::new() }
    }

    fn holds(&self, operation: &SiteOperation) -> bool {
        self.members.contains(&operation.key())
    }

    /// With all products of one more operation; `None` when one displaces a site too far or there are too many.
    fn with(&self, arrangement: &Arrangement, operation: &SiteOperation, reach: f64) -> Option<Self> {
        let mut group = self.clone();
        group.generators.push(operation.clone());
        let (n_old, last) = (self.elements.len(), self.generators.len());
        let mut next = 0;
        while next < group.elements.len() {
            // What was closed before only has to be multiplied by what is new.
            let first = if next < n_old { last } else { 0 };
            for generator in &group.generators[first..] {
                let element = &group.elements[next];
                let key = (generator.proper == element.proper, generator.after(element));
                if group.members.contains(&key) {
                    continue;
                }
                let found = SiteOperation::fitted(arrangement, key.1.clone(), key.0)?;
                if found.displacement > reach || group.elements.len() >= MAX_ORDER {
                    return None;
                }
                group.members.insert(key);
                group.elements.push(found);
            }
            next += 1;
        }
        Some(group)
    }
}

struct Builder<'a> {
    arrangement: &'a Arrangement,
    limit: f64,
    rungs: Vec<FittedGroup>,
    /// Groups closed so far, and whether they are within the limit.
    tried: BTreeMap<Members, bool>,
}

impl Builder<'_> {
    /// Adds operations one by one as long as a group within the limit comes out.
    fn climb(&mut self, start: Closed, operations: &[SiteOperation]) {
        let mut group = start;
        for operation in operations {
            if !group.holds(operation)
                && let Some(larger) = self.add(&group, operation)
            {
                group = larger;
            }
        }
    }

    /// The group that `operation` makes with `group`, when it is one and within the limit.
    fn add(&mut self, group: &Closed, operation: &SiteOperation) -> Option<Closed> {
        let larger = group.with(self.arrangement, operation, 2.0 * self.limit)?;
        self.fits(&larger).then_some(larger)
    }

    /// Whether a group is within the limit; if so it is among the rungs.
    fn fits(&mut self, group: &Closed) -> bool {
        if let Some(&known) = self.tried.get(&group.members) {
            return known;
        }
        let rung = fitted_group(self.arrangement, &group.elements)
            .filter(|rung| rung.deviation.max <= self.limit && sites_stay_apart(self.arrangement, &rung.positions));
        self.tried.insert(group.members.clone(), rung.is_some());
        let fits = rung.is_some();
        self.rungs.extend(rung);
        fits
    }
}

/// An exact representation for a closed set of operations (identity first), and what it does to the structure.
fn fitted_group(arrangement: &Arrangement, elements: &[SiteOperation]) -> Option<FittedGroup> {
    let keys: Vec<(bool, Vec<u32>)> = elements.iter().map(SiteOperation::key).collect();
    let product = |a: &(bool, Vec<u32>), b: &(bool, Vec<u32>)| {
        (a.0 == b.0, b.1.iter().map(|&image| a.1[image as usize]).collect())
    };
    let table = Multiplication::of(&keys, product, |a, b| a == b).ok()?;
    let matrices = made_exact(elements.iter().map(|element| element.matrix).collect(), &table)?;
    let (name, frames) = standard_frames(&matrices).ok()?;
    let standard = standard_operations(name);
    let mut axes = *frames.first()?;
    // Bring the operations into the order of the standard group.
    let order: Vec<usize> = placed(&standard, &axes).iter().map(|sought| nearest(&matrices, sought)).collect();
    let ordered: Vec<Matrix3<f64>> = order.iter().map(|&at| matrices[at]).collect();
    axes = intertwiner(&axes, &ordered, &standard)?;
    let permutations: Vec<&[u32]> = order.iter().map(|&at| elements[at].permutation.as_slice()).collect();
    axes = best_axes(arrangement, &permutations, &standard, axes)?;
    let matrices = placed(&standard, &axes);
    let positions = symmetrised(arrangement, matrices.iter().zip(permutations.iter().copied()));
    let operations = matrices
        .into_iter()
        .zip(permutations)
        .map(|(matrix, permutation)| SiteOperation::measured(arrangement, permutation.to_vec(), matrix))
        .collect();
    let deviation = arrangement.deviation_from(&positions);
    Some(FittedGroup { name, operations, positions, deviation })
}

/// Turns the axes until the symmetrised structure lies on the given one as well as it can.
fn best_axes(
    arrangement: &Arrangement,
    permutations: &[&[u32]],
    standard: &[Matrix3<f64>],
    mut axes: Matrix3<f64>,
) -> Option<Matrix3<f64>> {
    const ROUNDS: usize = 20;
    for _ in 0..ROUNDS {
        let matrices = placed(standard, &axes);
        let positions = symmetrised(arrangement, matrices.iter().zip(permutations.iter().copied()));
        let turn = best_turn(positions.iter().zip(&arrangement.positions), true)?;
        if (turn - Matrix3::identity()).amax() < 1e-12 {
            break;
        }
        axes *= turn.transpose();
    }
    Some(axes)
}

/// Standard operations as matrices in the axes of the sites.
fn placed(standard: &[Matrix3<f64>], axes: &Matrix3<f64>) -> Vec<Matrix3<f64>> {
    standard.iter().map(|s| axes.transpose() * s * axes).collect()
}

/// The index of the matrix that differs least from `sought`.
pub(super) fn nearest(matrices: &[Matrix3<f64>], sought: &Matrix3<f64>) -> usize {
    let distances = matrices.iter().map(|matrix| (matrix - sought).amax()).enumerate();
    distances.min_by(|a, b| a.1.total_cmp(&b.1)).map_or(0, |(at, _)| at)
}

/// Whether no two sites of one kind have fallen together.
fn sites_stay_apart(arrangement: &Arrangement, positions: &[Vector3<f64>]) -> bool {
    const LEFT: f64 = 0.25;
    positions.iter().enumerate().all(|(at, x)| {
        // Only sites nearer than this can meet within twice the deviation.
        let close = 4.0 * (x - arrangement.positions[at]).norm();
        let neighbour = arrangement.nearest(arrangement.kinds[at], &arrangement.positions[at], close, Some(at));
        neighbour.is_none_or(|(other, distance)| (x - positions[other]).norm() > LEFT * distance)
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::group::elements::same;

    /// The nearest representation to disturbed matrices of a group is a representation, and near.
    #[test]
    fn disturbed_matrices_become_an_exact_group() {
        for name in ["C3", "D2d", "D5h", "Td", "Ih", "S8"] {
            let exact = standard_operations(name.parse().unwrap());
            let table = Multiplication::of(&exact, |a, b| a * b, same).unwrap();
            let disturbed = exact.iter().zip(1_u32..).map(|(matrix, k)| {
                let k = f64::from(k);
                nalgebra::Rotation3::from_euler_angles(0.05 * k.sin(), 0.04 * (2.0 * k).cos(), 0.05 * (3.0 * k).sin())
                    .into_inner()
                    * matrix
            });
            let made = made_exact(disturbed.collect(), &table).unwrap();
            for a in 0..table.order() {
                assert!((made[a] - exact[a]).amax() < 0.2, "{name}: stays near");
                for b in 0..table.order() {
                    let error = (made[a] * made[b] - made[table.product(a, b)]).amax();
                    assert!(error < 1e-12, "{name}: product off by {error:e}");
                }
            }
        }
    }
}
