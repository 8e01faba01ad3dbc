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
use std::collections::BTreeSet;

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

/// The groups within the limit that operations make, among them the trivial one.
pub(super) fn groups(arrangement: &Arrangement, operations: &[SiteOperation], limit: f64) -> Vec<FittedGroup> {
    /// Ways tried beside the one in the order of displacements.
    const DETOURS: usize = 8;
    let identity = vec![SiteOperation::identity(arrangement.n_sites())];
    let mut builder = Builder { arrangement, limit, rungs: Vec::new(), tried: BTreeSet::new() };
    builder.tried.insert(members(&identity));
    builder.climb(identity.clone(), operations);
    // An operation of low displacement may bar the way to a larger group: start from those that are in no group so far.
    for _ in 0..DETOURS {
        let next = operations.iter().find(|operation| {
            let key = (operation.proper, operation.permutation.clone());
            !builder.tried.iter().any(|group| group.contains(&key))
        });
        let Some(start) = next else { break };
        builder.tried.insert(members(std::slice::from_ref(start)));
        if let Some(group) = builder.add(&identity, start) {
            builder.climb(group, operations);
        }
    }
    let mut rungs = builder.rungs;
    rungs.extend(fitted_group(arrangement, identity));
    rungs
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

type Members = BTreeSet<(bool, Vec<u32>)>;

fn members(operations: &[SiteOperation]) -> Members {
    operations.iter().map(|operation| (operation.proper, operation.permutation.clone())).collect()
}

struct Builder<'a> {
    arrangement: &'a Arrangement,
    limit: f64,
    rungs: Vec<FittedGroup>,
    /// Groups closed so far, and operations that failed to give one.
    tried: BTreeSet<Members>,
}

impl Builder<'_> {
    /// Adds operations one by one as long as a group within the limit comes out.
    fn climb(&mut self, start: Vec<SiteOperation>, operations: &[SiteOperation]) {
        let mut group = start;
        let mut known = members(&group);
        for operation in operations {
            if known.contains(&(operation.proper, operation.permutation.clone())) {
                continue;
            }
            if let Some(larger) = self.add(&group, operation) {
                known = members(&larger);
                group = larger;
            }
        }
    }

    /// The group that `operation` makes with `group`, when it is one and within the limit.
    fn add(&mut self, group: &[SiteOperation], operation: &SiteOperation) -> Option<Vec<SiteOperation>> {
        let elements = closed(self.arrangement, group, operation, 2.0 * self.limit)?;
        if self.tried.insert(members(&elements)) {
            let rung = fitted_group(self.arrangement, elements.clone()).filter(|rung| self.within_limit(rung))?;
            self.rungs.push(rung);
        }
        Some(elements)
    }

    fn within_limit(&self, rung: &FittedGroup) -> bool {
        rung.deviation.max <= self.limit && sites_stay_apart(self.arrangement, &rung.positions)
    }
}

/// All products of a group and one more operation; `None` when one displaces a site too far or there are too many.
fn closed(
    arrangement: &Arrangement,
    group: &[SiteOperation],
    operation: &SiteOperation,
    reach: f64,
) -> Option<Vec<SiteOperation>> {
    let mut elements = group.to_vec();
    let mut known = members(group);
    let mut next = 0;
    // With h in the group so far, every element is a product of operations g and h: multiply from the left by both kinds.
    let generators: Vec<&SiteOperation> = group.iter().chain([operation]).collect();
    while next < elements.len() {
        // Elements of the old group times old generators stay inside.
        let fresh = if next < group.len() { &generators[group.len()..] } else { &generators[..] };
        for generator in fresh {
            let proper = generator.proper == elements[next].proper;
            let permutation = generator.after(&elements[next]);
            let key = (proper, permutation);
            if known.contains(&key) {
                continue;
            }
            let found = SiteOperation::fitted(arrangement, key.1.clone(), proper)?;
            if found.displacement > reach || elements.len() >= MAX_ORDER {
                return None;
            }
            known.insert(key);
            elements.push(found);
        }
        next += 1;
    }
    Some(elements)
}

/// An exact representation for a closed set of operations (identity first), and what it does to the structure.
fn fitted_group(arrangement: &Arrangement, elements: Vec<SiteOperation>) -> Option<FittedGroup> {
    let same = |a: &(bool, Vec<u32>), b: &(bool, Vec<u32>)| a == b;
    let keys: Vec<(bool, Vec<u32>)> =
        elements.iter().map(|element| (element.proper, element.permutation.clone())).collect();
    let product = |a: &(bool, Vec<u32>), b: &(bool, Vec<u32>)| {
        (a.0 == b.0, b.1.iter().map(|&image| a.1[image as usize]).collect())
    };
    let table = Multiplication::of(&keys, product, same).ok()?;
    let matrices = made_exact(elements.iter().map(|element| element.matrix).collect(), &table)?;
    let (name, frames) = standard_frames(&matrices).ok()?;
    let standard = standard_operations(name);
    let mut axes = *frames.first()?;
    // Bring the operations into the order of the standard group.
    let order: Vec<usize> = standard.iter().map(|s| nearest(&matrices, &(axes.transpose() * s * axes))).collect();
    let ordered: Vec<Matrix3<f64>> = order.iter().map(|&at| matrices[at]).collect();
    axes = intertwiner(&axes, &ordered, &standard)?;
    let mut slots: Vec<Option<SiteOperation>> = elements.into_iter().map(Some).collect();
    let mut operations = order.iter().map(|&at| slots.get_mut(at)?.take()).collect::<Option<Vec<_>>>()?;
    let positions = oriented(arrangement, &mut operations, &standard, axes)?;
    let deviation = arrangement.deviation_from(&positions);
    Some(FittedGroup { name, operations, positions, deviation })
}

/// Turns the axes until the symmetrised structure lies on the given one as well as it can, and sets the matrices.
fn oriented(
    arrangement: &Arrangement,
    operations: &mut [SiteOperation],
    standard: &[Matrix3<f64>],
    mut axes: Matrix3<f64>,
) -> Option<Vec<Vector3<f64>>> {
    const ROUNDS: usize = 20;
    for round in 0.. {
        for (operation, s) in operations.iter_mut().zip(standard) {
            operation.matrix = axes.transpose() * s * axes;
        }
        let pairs = operations.iter().map(|operation| (&operation.matrix, operation.permutation.as_slice()));
        let positions = symmetrised(arrangement, pairs);
        let turn = best_turn(positions.iter().zip(&arrangement.positions), true)?;
        if round == ROUNDS || (turn - Matrix3::identity()).amax() < 1e-12 {
            return Some(positions);
        }
        axes *= turn.transpose();
    }
    None
}

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
