//! Which levels of two columns belong together: the k-th of an irrep with the k-th of the same irrep.
//!
//! Here: pairs of sets. Not here: what irreps become in a subgroup (`diagram::kinship`), lines on paper (`diagram::figure`).

use super::level::Column;
use std::collections::BTreeMap;

/// From where levels of an irrep are counted.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Count {
    /// The lowest is the first.
    #[default]
    Lowest,
    /// The highest with electrons belong together, and so on down and up: for files with different cores.
    Frontier,
}

/// Two sets joined.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Link {
    /// Set of the left column.
    pub from: usize,
    /// Set of the right column.
    pub to: usize,
    /// Irrep that both share, a name of the group of lower order.
    pub irrep: String,
}

/// What each irrep of a column becomes in the group in which columns are compared, and how often.
pub type Parts = BTreeMap<String, Vec<(String, usize)>>;

/// Every irrep stays what it is.
#[must_use]
pub fn unchanged(column: &Column) -> Parts {
    let irreps = column.levels.iter().flat_map(|level| &level.content).map(|(irrep, _)| irrep.clone());
    irreps.map(|irrep| (irrep.clone(), vec![(irrep, 1)])).collect()
}

/// Pairs of sets, irrep by irrep, in order of energy.
///
/// # Holds
/// Both columns ascend in energy, and each irrep's links ascend in both: within an irrep no two lines cross.
#[must_use]
pub fn links(left: (&Column, &Parts), right: (&Column, &Parts), count: Count) -> Vec<Link> {
    let (left, right) = (ladders(left.0, left.1), ladders(right.0, right.1));
    let mut links = Vec::new();
    for (irrep, below) in &left {
        let Some(above) = right.get(irrep) else { continue };
        let filled = |rungs: &[(usize, bool)]| rungs.iter().rposition(|(_, filled)| *filled).map_or(0, |at| at + 1);
        // How many more of the left ones lie at or below the last with electrons.
        let (skip_left, skip_right) = match count {
            Count::Lowest => (0, 0),
            Count::Frontier => {
                let (a, b) = (filled(below), filled(above));
                (a.saturating_sub(b), b.saturating_sub(a))
            }
        };
        for (&(from, _), &(to, _)) in below.iter().skip(skip_left).zip(above.iter().skip(skip_right)) {
            links.push(Link { from, to, irrep: irrep.clone() });
        }
    }
    links
}

/// For each irrep the sets that hold it, lowest first, with whether there are electrons.
fn ladders(column: &Column, parts: &Parts) -> BTreeMap<String, Vec<(usize, bool)>> {
    let mut ladders: BTreeMap<String, Vec<(usize, bool)>> = BTreeMap::new();
    for level in &column.levels {
        let filled = level.electrons().is_some_and(|electrons| electrons > 0.5);
        let of_irrep = |(irrep, times): &(String, usize)| {
            parts.get(irrep).into_iter().flatten().map(|part| (part, *times)).collect::<Vec<_>>()
        };
        for ((irrep, times), each) in level.content.iter().flat_map(of_irrep) {
            ladders.entry(irrep.clone()).or_default().extend(std::iter::repeat_n((level.set, filled), times * each));
        }
    }
    ladders
}
