//! Sites in a line, or nearly so, and sites all at one place: the continuous groups.
//!
//! Operations are those of the finite group that stands in for a continuous one (`PointGroup::standard`).

use super::arrangement::Arrangement;
use super::elements::standard_operations;
use super::ladder::FittedGroup;
use super::matching::SiteOperation;
use super::schoenflies::GroupName;
use nalgebra::{Matrix3, Vector3};

/// The linear groups within the limit by growing deviation; empty when the sites are too far from a line.
///
/// Only what keeps the operations of the groups found without the line: with `turned_round`, both ends are alike.
pub(super) fn linear_groups(arrangement: &Arrangement, limit: f64, turned_round: bool) -> Vec<FittedGroup> {
    let line = arrangement.best_line();
    if distance_from_line(&arrangement.positions, &line) > limit {
        return Vec::new();
    }
    let heights: Vec<f64> = arrangement.positions.iter().map(|x| x.dot(&line)).collect();
    let unchanged: Vec<u32> = (0_u32..).take(arrangement.n_sites()).collect();
    let polar = fitted(arrangement, GroupName::Cinfv, &line, &heights, &unchanged);
    let mut groups: Vec<FittedGroup> = if turned_round { Vec::new() } else { vec![polar] };
    if let Some(reversed) = reversed(arrangement, &heights) {
        let even: Vec<f64> =
            heights.iter().zip(&reversed).map(|(height, &image)| 0.5 * (height - heights[image as usize])).collect();
        let centred = fitted(arrangement, GroupName::Dinfh, &line, &even, &reversed);
        groups.extend((centred.deviation.max <= limit).then_some(centred));
    }
    groups
}

/// Largest distance of a site from the line through the centroid along `line`.
pub(super) fn distance_from_line(positions: &[Vector3<f64>], line: &Vector3<f64>) -> f64 {
    positions.iter().map(|x| x.cross(line).norm()).fold(0.0, f64::max)
}

/// All sites at one place: the group of an atom.
pub(super) fn atom(arrangement: &Arrangement) -> FittedGroup {
    let unchanged: Vec<u32> = (0_u32..).take(arrangement.n_sites()).collect();
    let operations = standard_operations(GroupName::K)
        .into_iter()
        .map(|matrix| SiteOperation::measured(arrangement, unchanged.clone(), matrix))
        .collect();
    let positions = vec![Vector3::zeros(); arrangement.n_sites()];
    let deviation = arrangement.deviation_from(&positions);
    FittedGroup { name: GroupName::K, operations, positions, deviation }
}

/// The permutation that exchanges the ends: the sites of one kind in reverse order of height.
fn reversed(arrangement: &Arrangement, heights: &[f64]) -> Option<Vec<u32>> {
    let mut upward: Vec<usize> = (0..heights.len()).collect();
    upward.sort_by(|&a, &b| {
        arrangement.kinds[a].cmp(&arrangement.kinds[b]).then(heights[a].total_cmp(&heights[b])).then(a.cmp(&b))
    });
    let mut permutation = vec![0; heights.len()];
    for kind in upward.chunk_by(|&a, &b| arrangement.kinds[a] == arrangement.kinds[b]) {
        for (&site, &image) in kind.iter().zip(kind.iter().rev()) {
            permutation[site] = u32::try_from(image).ok()?;
        }
    }
    Some(permutation)
}

fn fitted(
    arrangement: &Arrangement,
    name: GroupName,
    line: &Vector3<f64>,
    heights: &[f64],
    reversed: &[u32],
) -> FittedGroup {
    let positions: Vec<Vector3<f64>> = heights.iter().map(|height| line * *height).collect();
    let deviation = arrangement.deviation_from(&positions);
    let axes = axes_along(line);
    let operations = standard_operations(name)
        .into_iter()
        .map(|s| {
            let unchanged = || (0_u32..).take(heights.len()).collect();
            let permutation = if s[(2, 2)] > 0.0 { unchanged() } else { reversed.to_vec() };
            SiteOperation::measured(arrangement, permutation, axes.transpose() * s * axes)
        })
        .collect();
    FittedGroup { name, operations, positions, deviation }
}

/// Right-handed axes with z along `z`; x is the file axis that lies most across, made perpendicular.
pub(super) fn axes_along(z: &Vector3<f64>) -> Matrix3<f64> {
    let across = Vector3::ith_axis(z.iamin()).into_inner();
    let x = (across - z * z.dot(&across)).normalize();
    Matrix3::from_rows(&[x.transpose(), z.cross(&x).transpose(), z.transpose()])
}
