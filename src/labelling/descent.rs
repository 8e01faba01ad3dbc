//! From a group on the nuclei down to a subgroup: its axes by the convention, what irreps become, labels of orbitals.
//!
//! Not here: which subgroup is wanted (`labelling::placement`, `audit`).

use super::{LabelError, weights};
use crate::group::{
    Detection, GroupError, GroupName, IrrepName, PointGroup, Rung, Site, SiteOperation, Subgroup, Symmetry,
    standard_frames,
};
use nalgebra::{Matrix3, Vector3};
use ndarray::{Array2, ArrayView2, Axis};

/// Turns of the stand-in for a linear group's axis.
const LINEAR_TURNS: u32 = 26;

/// A subgroup placed on the nuclei.
#[derive(Debug, Clone)]
pub struct Descent {
    /// The subgroup with its axes by the convention, on the same sites.
    pub symmetry: Symmetry,
    /// The same seen from the group above: embedding, axes in its frame, words.
    pub subgroup: Subgroup,
    /// Names of the irreps of the group above.
    pub parent_irreps: Vec<IrrepName>,
    /// For each irrep of the group above what it becomes: (irrep below, how often).
    pub correlation: Vec<Vec<(usize, usize)>>,
}

impl Descent {
    /// The subgroup made of these elements of `symmetry.group`.
    ///
    /// # Errors
    /// [`LabelError::Group`] when they are no group.
    pub fn to(
        symmetry: &Symmetry,
        members: &[usize],
        sites: &[Site],
        bonds: &[(usize, usize)],
    ) -> Result<Self, LabelError> {
        let group = &symmetry.group;
        let matrices: Vec<Matrix3<f64>> = members.iter().map(|&member| symmetry.matrix(member)).collect();
        let name = subgroup_name(group, members)?;
        let operations = members
            .iter()
            .zip(&matrices)
            .map(|(&member, matrix)| SiteOperation {
                permutation: symmetry.permutations[member]
                    .iter()
                    .map(|&image| u32::try_from(image).unwrap_or(u32::MAX))
                    .collect(),
                proper: matrix.determinant() > 0.0,
                matrix: *matrix,
                displacement: 0.0,
            })
            .collect();
        let positions = symmetrised(symmetry, sites);
        let rung = Rung { name, deviation: symmetry.deviation, operations, positions };
        let centre = symmetry.frame.centre;
        let placed = Detection { ladder: Vec::new(), centre, searched_bohr: 0.0 }.place(&rung, sites, Some(bonds))?;
        let axes = placed.frame.axes * symmetry.frame.axes.transpose();
        let subgroup = group.embed(placed.group.clone(), members, axes)?;
        let correlation =
            (0..group.irreps().len()).map(|irrep| group.subduce(&subgroup, irrep)).collect::<Result<_, _>>()?;
        let parent_irreps = group.irreps().iter().map(|irrep| irrep.name).collect();
        Ok(Self { symmetry: placed, subgroup, parent_irreps, correlation })
    }

    /// Weights of the subgroup's irreps from ⟨i|R|i⟩ over the group above: n_orbitals × n_irreps.
    #[must_use]
    pub fn weights(&self, expectations: ArrayView2<'_, f64>) -> Array2<f64> {
        expectations.select(Axis(1), &self.subgroup.embedding).dot(&weights::projection(&self.subgroup.group))
    }

    /// Irreps of the group above that functions up to angular momentum `l_max` can have; all of a finite group.
    pub fn parents_up_to(&self, l_max: usize) -> impl Iterator<Item = (usize, &IrrepName)> {
        self.parent_irreps.iter().enumerate().filter(move |(_, name)| match name {
            IrrepName::Linear { m, .. } => usize::from(*m) <= l_max,
            _ => true,
        })
    }

    /// `B2g + Eg`, as in printed tables.
    #[must_use]
    pub fn correlation_text(&self, irrep: usize) -> String {
        sum_of_irreps(&self.subgroup.group, &self.correlation[irrep])
    }
}

/// The point group that these elements make.
///
/// # Errors
/// [`GroupError`] when they are no group.
pub fn subgroup_name(group: &PointGroup, members: &[usize]) -> Result<GroupName, GroupError> {
    let operations: Vec<Matrix3<f64>> =
        members.iter().map(|&member| *group.elements()[member].operation.matrix()).collect();
    let (name, _) = standard_frames(&operations)?;
    let whole_axis = group.is_continuous() && name == GroupName::Cnv(LINEAR_TURNS);
    Ok(if whole_axis { GroupName::Cinfv } else { name })
}

/// `A1g + 2Eg`.
#[must_use]
pub fn sum_of_irreps(group: &PointGroup, sum: &[(usize, usize)]) -> String {
    let term = |&(irrep, count): &(usize, usize)| {
        let name = group.irreps()[irrep].name;
        if count == 1 { name.to_string() } else { format!("{count}{name}") }
    };
    sum.iter().map(term).collect::<Vec<_>>().join(" + ")
}

/// A site that an operation takes farther from its place than this (bohr) is truly turned, not permuted.
const PERMUTED: f64 = 1.0;

/// Where the sites lie on average over the group, about its centre; sites that it carries nowhere stay.
fn symmetrised(symmetry: &Symmetry, sites: &[Site]) -> Vec<Vector3<f64>> {
    let about = |site: usize| sites[site].position - symmetry.frame.centre;
    let order = symmetry.permutations.len() as f64;
    (0..sites.len())
        .map(|site| {
            let images: Vec<Vector3<f64>> = symmetry
                .permutations
                .iter()
                .enumerate()
                .map(|(element, permutation)| symmetry.matrix(element).tr_mul(&about(permutation[site])))
                .collect();
            let stays = images.iter().any(|image| (image - about(site)).norm() > PERMUTED);
            if stays { about(site) } else { images.iter().sum::<Vector3<f64>>() / order }
        })
        .collect()
}
