//! What can go wrong with groups, names and characters, each with the number measured and its limit.

use thiserror::Error;

/// An error of the group layer.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum GroupError {
    /// A group name in no known spelling.
    #[error(
        "unknown point group `{found}`: expected a Schoenflies name such as C2v, D3h, D5d, S4, Td, Oh, Ih, Cinfv, Dinfh or Kh"
    )]
    UnknownGroupName {
        /// The beginning of what was found.
        found: String,
    },
    /// An axis order outside what is supported.
    #[error("axis order {n}: expected {expected}")]
    AxisOrder {
        /// The order asked for.
        n: u32,
        /// What is supported.
        expected: &'static str,
    },
    /// An irrep name in no known spelling.
    #[error(
        "unknown irrep `{found}`: expected a Mulliken name such as A1g, B2u, E', A2'', T1u, Hg, or Sigma_g+, Pi_u, or P_u"
    )]
    UnknownIrrepName {
        /// The beginning of what was found.
        found: String,
    },
    /// A right name, but not one of this group.
    #[error("{group} has no irrep {irrep}: expected one of {expected}")]
    NoSuchIrrep {
        /// Name of the group.
        group: String,
        /// The irrep asked for.
        irrep: String,
        /// The irreps there are.
        expected: String,
    },
    /// The product of two elements is no element.
    #[error("the {order} elements are no group: the product of elements {a} and {b} is not among them")]
    NotClosed {
        /// Number of elements.
        order: usize,
        /// Index of the left factor.
        a: usize,
        /// Index of the right factor.
        b: usize,
    },
    /// Generators that give more elements than allowed.
    #[error("generators give more than {limit} elements")]
    TooManyElements {
        /// The limit asked for.
        limit: usize,
    },
    /// Characters that miss a law of characters.
    #[error("characters miss {law} by {deviation:e}, limit {limit:e}")]
    Characters {
        /// The law.
        law: &'static str,
        /// By how much.
        deviation: f64,
        /// The limit.
        limit: f64,
    },
    /// A number of characters other than the number of classes.
    #[error("{found} characters for {expected} classes")]
    ClassCount {
        /// Characters given.
        found: usize,
        /// Classes of the group.
        expected: usize,
    },
    /// A representation that is no whole sum of irreps.
    #[error("{irrep} would occur {multiplicity} times, {deviation:e} from a whole number, limit {limit:e}")]
    NotWhole {
        /// The irrep.
        irrep: String,
        /// The multiplicity found.
        multiplicity: f64,
        /// Distance from the nearest whole number that is not negative.
        deviation: f64,
        /// The limit.
        limit: f64,
    },
    /// A representation whose irreps of the table do not add up.
    #[error("irreps of {group} make up {found} of {expected} dimensions; the rest is beyond the irreps kept")]
    Incomplete {
        /// Name of the group.
        group: String,
        /// Sum of dimensions found.
        found: f64,
        /// Dimension of the representation.
        expected: f64,
    },
    /// A product that leaves the irreps kept for a continuous group.
    #[error("{a} times {b} reaches {reach}; irreps of this continuous group are kept up to {limit}")]
    BeyondTable {
        /// One factor.
        a: String,
        /// The other.
        b: String,
        /// Highest |m| or l of the product.
        reach: u32,
        /// Highest |m| or l kept.
        limit: u32,
    },
    /// A set of operations that fits no point group.
    #[error("{order} operations fit no point group: {reason}, deviation {deviation:e}, limit {limit:e}")]
    NoPointGroup {
        /// Number of operations.
        order: usize,
        /// What does not fit.
        reason: &'static str,
        /// By how much.
        deviation: f64,
        /// The limit.
        limit: f64,
    },
}
