//! The ground term by Hund's rules, and how far they decide it.
//!
//! Not here: energies. The rules compare terms of one configuration; which configuration is lowest they do not say.

use super::configuration::Configuration;
use super::terms::{Term, angular_momentum};
use crate::group::{GroupName, IrrepName, PointGroup};

/// How sure the ground term is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Certainty {
    /// Every shell is full or empty: there is no other term.
    Closed,
    /// The configuration has one term.
    Only,
    /// One open shell, and the rules leave one term.
    Rules,
    /// The rules leave one term, but were found for one open shell, and there are several.
    SeveralShells,
    /// Highest spin leaves several terms.
    Undecided,
}

/// What Hund's rules leave.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Ground {
    /// Indices into the list of terms, one where the rules decide.
    pub terms: Vec<usize>,
    /// How sure that is.
    pub certainty: Certainty,
    /// For an atom with one open shell, 2J of the lowest level by the third rule.
    pub twice_j: Option<u16>,
}

/// Highest spin, then for atoms highest L, for linear molecules highest Λ; other groups have no second rule.
///
/// # Source
/// Hund's rules: common practice.
#[must_use]
pub fn ground(group: &PointGroup, configuration: &Configuration, terms: &[Term]) -> Ground {
    let highest = terms.iter().map(|term| term.multiplicity).max().unwrap_or(1);
    let orbital = |term: &Term| match group.irreps()[term.irrep].name {
        IrrepName::Atomic { l, .. } => l,
        IrrepName::Linear { m, .. } => m,
        IrrepName::Mulliken { .. } => 0,
    };
    let candidates = || (0..terms.len()).filter(|&at| terms[at].multiplicity == highest);
    let largest = candidates().map(|at| orbital(&terms[at])).max().unwrap_or(0);
    let left: Vec<usize> = candidates().filter(|&at| orbital(&terms[at]) == largest).collect();
    let open = configuration.shells().iter().filter(|shell| shell.is_open()).count();
    let alone = left.len() == 1 && left.iter().all(|&at| terms[at].count == 1);
    let certainty = match (open, alone) {
        (0, _) => Certainty::Closed,
        (_, true) if terms.len() == 1 => Certainty::Only,
        (_, false) => Certainty::Undecided,
        (1, true) => Certainty::Rules,
        (_, true) => Certainty::SeveralShells,
    };
    let twice_j = if group.name() == GroupName::K && certainty != Certainty::Undecided && open <= 1 {
        left.first().and_then(|&at| third_rule(group, configuration, &terms[at]))
    } else {
        None
    };
    Ground { terms: left, certainty, twice_j }
}

/// J = |L − S| up to the half-filled shell, L + S above.
fn third_rule(group: &PointGroup, configuration: &Configuration, term: &Term) -> Option<u16> {
    let (l, _) = angular_momentum(group, term)?;
    let (orbital, spin) = (2 * u16::from(l), term.twice_spin());
    let more = configuration.shells().iter().any(|shell| shell.is_open() && 2 * shell.electrons > shell.places);
    Some(if more { orbital + spin } else { orbital.abs_diff(spin) })
}
