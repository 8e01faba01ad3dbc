//! Subgroups up to conjugacy, descent in symmetry, and other settings of the axes.

use super::error::GroupError;
use super::point_group::{PointGroup, Setting, Subgroup};

impl PointGroup {
    /// All subgroups up to conjugacy, largest first, the group itself left out. For linear groups those that molecules have: C∞v, D2h, C2v …
    ///
    /// # Errors
    /// None for groups made by [`PointGroup::standard`].
    pub fn subgroups(&self) -> Result<Vec<Subgroup>, GroupError> {
        todo!()
    }

    /// What irrep `a` becomes in a subgroup: (irrep of the subgroup, multiplicity).
    ///
    /// # Errors
    /// [`GroupError::NotWhole`] when `subgroup` is not one of this group.
    pub fn subduce(&self, subgroup: &Subgroup, a: usize) -> Result<Vec<(usize, usize)>, GroupError> {
        let _ = (subgroup, a);
        todo!()
    }

    /// The largest abelian subgroup among D2h, C2v, C2h, D2, Cs, C2, Ci, C1, of operations that are diagonal in this frame.
    ///
    /// # Errors
    /// None for groups made by [`PointGroup::standard`].
    pub fn abelian_subgroup(&self) -> Result<Subgroup, GroupError> {
        todo!()
    }

    /// The other choices of axes that fit this group and change names of irreps.
    #[must_use]
    pub fn settings(&self) -> Vec<Setting> {
        todo!()
    }
}
