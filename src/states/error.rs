//! What can go wrong with configurations and terms, each with the number measured and its limit.

use crate::group::GroupError;
use thiserror::Error;

/// An error of the states layer.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum StatesError {
    /// Text that is no configuration in this group.
    #[error(
        "cannot read `{rest}` in the configuration `{text}`: expected an orbital symbol of {group} with a number of electrons, such as `{example}`; {group} has {expected}"
    )]
    Syntax {
        /// The whole text, its beginning.
        text: String,
        /// From where on it is not understood.
        rest: String,
        /// Name of the group.
        group: String,
        /// A configuration in this group.
        example: String,
        /// The symbols there are.
        expected: String,
    },
    /// Text with several readings.
    #[error("`{text}` can be read as {readings}: write carets, as in `{example}`")]
    Ambiguous {
        /// The text.
        text: String,
        /// The readings, joined by "or as".
        readings: String,
        /// The first reading with carets.
        example: String,
    },
    /// One symbol twice without running numbers.
    #[error("{symbol} occurs twice: for two different shells number them, as in `1{symbol}^1 2{symbol}^1`")]
    Repeated {
        /// The symbol.
        symbol: String,
    },
    /// No shell at all.
    #[error("an empty configuration: expected shells of {group}, such as `{example}`")]
    Empty {
        /// Name of the group.
        group: String,
        /// A configuration in this group.
        example: String,
    },
    /// More electrons than places.
    #[error("{shell} holds at most {limit} electrons, not {found}")]
    Overfull {
        /// The shell.
        shell: String,
        /// Electrons asked for.
        found: u32,
        /// Places.
        limit: u32,
    },
    /// More microstates than characters in double precision can keep apart.
    #[error("{configuration} has {found:e} microstates, more than the {limit:e} that can be counted exactly")]
    TooManyMicrostates {
        /// The configuration.
        configuration: String,
        /// Microstates.
        found: f64,
        /// The limit.
        limit: f64,
    },
    /// A configuration that reaches terms beyond the irreps kept for a continuous group.
    #[error("{configuration} reaches {quantity} = {reach}; terms of this continuous group are kept up to {limit}")]
    BeyondTable {
        /// The configuration or term.
        configuration: String,
        /// L, Λ, J or Ω.
        quantity: &'static str,
        /// The highest value it reaches.
        reach: String,
        /// The highest value kept.
        limit: String,
    },
    /// From the layer below.
    #[error(transparent)]
    Group(#[from] GroupError),
}
