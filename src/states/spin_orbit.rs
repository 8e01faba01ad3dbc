//! What spin–orbit coupling makes of terms and levels: irreps of the double group.
//!
//! Not here: the double group itself (`group::double`), energies.

use super::error::StatesError;
use super::terms::Term;
use crate::group::double_name::half;
use crate::group::irrep_name::{IrrepName, Parity};
use crate::group::products::Decomposition;
use crate::group::{DoubleGroup, DoubleName, PointGroup};

/// The components of one term: irreps of the double group with multiplicities.
///
/// # Holds
/// Their dimensions add to (2S + 1) × the dimension of the term's irrep.
/// # Errors
/// [`StatesError::BeyondTable`] where J or Ω leaves what is kept of a continuous group.
pub fn components(group: &PointGroup, double: &DoubleGroup, term: &Term) -> Result<Decomposition, StatesError> {
    let orbital = match group.irreps()[term.irrep].name {
        IrrepName::Atomic { l, .. } => Some((2 * u16::from(l), "J")),
        IrrepName::Linear { m, .. } => Some((2 * u16::from(m), "Ω")),
        IrrepName::Mulliken { .. } => None,
    };
    if let Some((twice, quantity)) = orbital {
        check_reach(double, twice + term.twice_spin(), quantity, || term.symbol(group))?;
    }
    let spin = double.spin_characters(term.twice_spin(), Parity::Even);
    let orbital = &double.irreps()[term.irrep].characters;
    Ok(double.decompose(&orbital.iter().zip(&spin).map(|(x, y)| x * y).collect::<Vec<_>>())?)
}

/// How the 2J + 1 states of a free ion split; whole J = L serves for terms without spin.
///
/// `parity` is that of the states under inversion of the ion: even for any number of d or of an even number of f electrons.
///
/// # Errors
/// [`StatesError::BeyondTable`] as [`components`].
pub fn level_in_field(double: &DoubleGroup, twice_j: u16, parity: Parity) -> Result<Decomposition, StatesError> {
    check_reach(double, twice_j, "J", || format!("J = {}", half(twice_j)))?;
    Ok(double.decompose(&double.spin_characters(twice_j, parity))?)
}

fn check_reach(
    double: &DoubleGroup,
    twice: u16,
    quantity: &'static str,
    what: impl Fn() -> String,
) -> Result<(), StatesError> {
    let Some(highest) = double.highest_twice_j() else { return Ok(()) };
    // Whole numbers are kept as far as the orbital irreps are, half a unit less for linear molecules.
    let kept = double.irreps()[..double.n_single()].iter().filter_map(|irrep| match irrep.name {
        DoubleName::Single(IrrepName::Atomic { l, .. }) => Some(2 * u16::from(l)),
        DoubleName::Single(IrrepName::Linear { m, .. }) => Some(2 * u16::from(m)),
        _ => None,
    });
    let limit = if twice.is_multiple_of(2) { kept.max().unwrap_or(0) } else { highest };
    if twice <= limit {
        return Ok(());
    }
    Err(StatesError::BeyondTable { configuration: what(), quantity, reach: half(twice), limit: half(limit) })
}

/// Whether the term splits in first order of spin–orbit coupling: it has spin, and a rotation lies in the antisymmetric square of its irrep.
///
/// Without that the orbital angular momentum is quenched and components part in second order only.
///
/// # Errors
/// As [`PointGroup::antisymmetric_square`].
pub fn splits_in_first_order(group: &PointGroup, term: &Term) -> Result<bool, StatesError> {
    if term.multiplicity == 1 || group.irreps()[term.irrep].dimension == 1 {
        return Ok(false);
    }
    if group.is_continuous() {
        // Λ and L above zero carry angular momentum; their squares may leave the table.
        return Ok(true);
    }
    let rotations = group.rotation_irreps();
    let square = group.antisymmetric_square(term.irrep)?;
    Ok(square.iter().any(|(irrep, _)| rotations.iter().any(|(rotation, _)| rotation == irrep)))
}
