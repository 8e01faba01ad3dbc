//! Axes that the nuclei leave free, turned to the density.
//!
//! The planes of a linear molecule are all alike to its nuclei; a filled real component of π picks one of them. An atom
//! has no axis at all; its density may. Not here: the groups themselves.

use super::density::{Electrons, Occupied};
use super::{AuditError, Limits};
use crate::group::{GroupName, PointGroup};
use crate::labelling::{LabelError, Labelled, Thresholds, relabelled};
use crate::model::Molecule;
use crate::wavefunction::{Turning, moments, product};
use nalgebra::{Matrix3, Rotation3, SymmetricEigen, Vector3};

/// Planes tried before the best one is refined: more than twice the highest harmonic of s to i functions.
const PLANES: usize = 64;
/// Steps of the refinement; each shrinks the interval by the golden section.
const STEPS: usize = 60;

/// The same labels with x of a linear group in the plane that the density keeps best, where it does not keep all.
///
/// # Errors
/// [`AuditError::Label`] when the operations cannot be set up anew.
pub fn adapted(
    molecule: &Molecule,
    labelled: Labelled,
    electrons: &Electrons,
    thresholds: &Thresholds,
    limits: &Limits,
) -> Result<Labelled, AuditError> {
    if !matches!(labelled.symmetry.group.name(), GroupName::Cinfv | GroupName::Dinfh) {
        return Ok(labelled);
    }
    let lost = |angle: f64| lost_by_plane(&labelled, electrons, molecule.atoms.len(), angle);
    let step = std::f64::consts::PI / PLANES as f64;
    let tried: Vec<f64> = (0..PLANES).map(|k| lost(k as f64 * step)).collect();
    let (worst, best) = (0..PLANES).fold((0, 0), |(worst, best), k| {
        (if tried[k] > tried[worst] { k } else { worst }, if tried[k] < tried[best] { k } else { best })
    });
    if tried[worst] <= limits.carried {
        return Ok(labelled);
    }
    let angle = minimum(best as f64 * step - step, best as f64 * step + step, lost);
    let turn = Rotation3::from_axis_angle(&Vector3::z_axis(), -angle).into_inner();
    let mut symmetry = labelled.symmetry.clone();
    symmetry.frame.axes = turn * symmetry.frame.axes;
    "z: along the molecule; x: in the plane that the density keeps best".clone_into(&mut symmetry.frame.convention);
    Ok(relabelled(molecule, labelled, symmetry, thresholds)?)
}

/// The same orbitals of an atom in D∞h about the axis in which its density differs most from round.
///
/// # Errors
/// [`AuditError::Label`] when the operations cannot be set up anew.
pub fn about_an_axis(
    molecule: &Molecule,
    labelled: Labelled,
    electrons: &Electrons,
    thresholds: &Thresholds,
) -> Result<Labelled, AuditError> {
    let basis = &labelled.settled.basis;
    let centre = labelled.symmetry.frame.centre;
    let mut second = Matrix3::zeros();
    for spin in [&electrons.alpha, &electrons.beta] {
        let rows = spin.coefficients.view();
        let moments = moments(basis, &centre, rows, rows).second;
        let mean = |at: usize| -> f64 { moments[at].diag().iter().zip(&spin.occupations).map(|(m, n)| m * n).sum() };
        let [xx, yy, zz, xy, xz, yz] = [0, 1, 2, 3, 4, 5].map(mean);
        second += Matrix3::new(xx, xy, xz, xy, yy, yz, xz, yz, zz);
    }
    let eigen = SymmetricEigen::new(second);
    let mut order = [0, 1, 2];
    order.sort_by(|&a, &b| eigen.eigenvalues[a].total_cmp(&eigen.eigenvalues[b]));
    let [low, middle, high] = order.map(|at| eigen.eigenvalues[at]);
    // The axis is the direction that stands apart from the two others.
    let (z, x) = if high - middle > middle - low { (order[2], order[0]) } else { (order[0], order[2]) };
    let (z, x): (Vector3<f64>, Vector3<f64>) =
        (eigen.eigenvectors.column(z).into(), eigen.eigenvectors.column(x).into());
    let group = PointGroup::standard(GroupName::Dinfh).map_err(LabelError::Group)?;
    let mut symmetry = labelled.symmetry.clone();
    symmetry.frame.axes = Matrix3::from_rows(&[x.transpose(), z.cross(&x).transpose(), z.transpose()]);
    "z: where the density of the atom stands apart".clone_into(&mut symmetry.frame.convention);
    symmetry.permutations = vec![(0..molecule.atoms.len()).collect(); group.elements().len()];
    symmetry.rotational_symmetry_number = 2;
    symmetry.other_settings = Vec::new();
    symmetry.group = group;
    Ok(relabelled(molecule, labelled, symmetry, thresholds)?)
}

/// Electrons of both spins that the plane at `angle` from x about z carries out of place.
fn lost_by_plane(labelled: &Labelled, electrons: &Electrons, n_atoms: usize, angle: f64) -> f64 {
    let (sin, cos) = (2.0 * angle).sin_cos();
    let plane = Matrix3::new(cos, sin, 0.0, sin, -cos, 0.0, 0.0, 0.0, 1.0);
    let axes = &labelled.symmetry.frame.axes;
    let in_place: Vec<usize> = (0..n_atoms).collect();
    let Ok(turning) = Turning::by_permutation(&labelled.settled.basis, &in_place, &(axes.transpose() * plane * axes))
    else {
        return 0.0;
    };
    [&electrons.alpha, &electrons.beta].into_iter().map(|spin| lost_by(&turning, spin)).sum()
}

fn lost_by(turning: &Turning, spin: &Occupied) -> f64 {
    let mut images = spin.coefficients.clone();
    for (row, image) in spin.coefficients.outer_iter().zip(images.outer_iter_mut()) {
        turning.apply(row, image);
    }
    let elements = product(spin.products.view(), images.t());
    let kept: f64 =
        elements.indexed_iter().map(|((i, j), value)| value * value * spin.occupations[i] * spin.occupations[j]).sum();
    spin.occupations.iter().map(|n| n * n).sum::<f64>() - kept
}

/// Where a function with one minimum between the ends is least, by golden sections.
fn minimum(mut low: f64, mut high: f64, value: impl Fn(f64) -> f64) -> f64 {
    let ratio = 0.5 * (5.0_f64.sqrt() - 1.0);
    let (mut a, mut b) = (high - ratio * (high - low), low + ratio * (high - low));
    let (mut at_a, mut at_b) = (value(a), value(b));
    for _ in 0..STEPS {
        if at_a < at_b {
            (high, b, at_b) = (b, a, at_a);
            a = high - ratio * (high - low);
            at_a = value(a);
        } else {
            (low, a, at_a) = (a, b, at_b);
            b = low + ratio * (high - low);
            at_b = value(b);
        }
    }
    0.5 * (low + high)
}
