//! Which vibrations take a degenerate state out of its symmetry in first order.
//!
//! Not here: which vibrations a molecule has, how far it moves.

use super::error::StatesError;
use crate::group::products::Decomposition;
use crate::group::{DoubleGroup, GroupName, IrrepName, PointGroup};

/// What the Jahn–Teller theorem says of a state.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum JahnTeller {
    /// Not degenerate: nothing to split.
    Stable,
    /// Irreps of the vibrations that split it in first order.
    Active(Decomposition),
    /// Degenerate in a linear molecule: no vibration splits it in first order; bending does in second (Renner–Teller).
    Linear,
    /// An atom has no vibrations.
    Atom,
}

/// For a state without spin–orbit coupling: the non-totally-symmetric irreps in the symmetric square of its irrep.
///
/// # Errors
/// As [`PointGroup::symmetric_square`].
/// # Source
/// Stability of Polyatomic Molecules in Degenerate Electronic States I, Proc. R. Soc. A 161, 220 (1937), from memory.
pub fn of_irrep(group: &PointGroup, irrep: usize) -> Result<JahnTeller, StatesError> {
    match group.irreps()[irrep].name {
        IrrepName::Atomic { .. } => Ok(JahnTeller::Atom),
        _ if group.irreps()[irrep].dimension == 1 => Ok(JahnTeller::Stable),
        IrrepName::Linear { .. } => Ok(JahnTeller::Linear),
        IrrepName::Mulliken { .. } => Ok(without_symmetric(group.symmetric_square(irrep)?, group.totally_symmetric())),
    }
}

/// For a level with spin–orbit coupling, by irrep of the double group: half-integer spin takes the antisymmetric square.
///
/// The square of a Kramers doublet is totally symmetric, so no vibration splits it.
///
/// # Errors
/// As [`DoubleGroup::antisymmetric_square`].
/// # Source
/// Stability of Polyatomic Molecules in Degenerate Electronic States II, Proc. R. Soc. A 164, 117 (1938), from memory.
pub fn of_level(group: &PointGroup, double: &DoubleGroup, irrep: usize) -> Result<JahnTeller, StatesError> {
    if irrep < double.n_single() {
        return of_irrep(group, irrep);
    }
    if group.name() == GroupName::K {
        return Ok(JahnTeller::Atom);
    }
    // In a linear molecule every one is a Kramers doublet, and its square may leave the table.
    if group.is_continuous() {
        return Ok(JahnTeller::Stable);
    }
    Ok(without_symmetric(double.antisymmetric_square(irrep)?, group.totally_symmetric()))
}

fn without_symmetric(square: Decomposition, symmetric: usize) -> JahnTeller {
    let active: Decomposition = square.into_iter().filter(|(irrep, _)| *irrep != symmetric).collect();
    if active.is_empty() { JahnTeller::Stable } else { JahnTeller::Active(active) }
}
