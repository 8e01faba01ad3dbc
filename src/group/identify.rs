//! Which point group a set of operations is, and where its standard axes lie.

use super::error::GroupError;
use super::schoenflies::GroupName;
use nalgebra::Matrix3;

/// The name of the group made of these operations, and its standard axes as rows.
///
/// # Errors
/// [`GroupError::NoPointGroup`] when the operations are no point group.
pub fn identify(operations: &[Matrix3<f64>]) -> Result<(GroupName, Matrix3<f64>), GroupError> {
    let _ = operations;
    todo!()
}
