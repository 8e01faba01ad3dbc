//! Which pairs of sets a person asks for: by label, by orbital number, by place at the frontier, by window and by energy.
//!
//! Not here: what symmetry says of a pair (`selection::rules`).

use crate::group::{IrrepName, PointGroup};
use crate::labelling::frontier::{Filling, filling};
use crate::labelling::{SetLabel, SpinLabels};
use std::fmt;
use std::str::FromStr;
use thiserror::Error;

/// Two sets of one spin; an electron may go from the first to the second.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub struct Pair {
    /// Index of the spin.
    pub spin_idx: usize,
    /// Index of the set it leaves.
    pub from: usize,
    /// Index of the set it enters.
    pub to: usize,
}

/// How a person names a set.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Selector {
    /// The set that holds this orbital, counted from 1 in file order.
    Orbital(usize),
    /// Running number and irrep: `3e2g`.
    Label(usize, IrrepName),
    /// `homo`, `homo-2`: so many sets with electrons below the highest.
    Occupied(usize),
    /// `lumo`, `lumo+1`: so many empty sets above the lowest.
    Empty(usize),
}

/// What to pair.
#[derive(Debug, Clone, PartialEq)]
pub struct Choice {
    /// Sets to leave; empty for those of the window.
    pub from: Vec<Selector>,
    /// Sets to enter; empty for those of the window.
    pub to: Vec<Selector>,
    /// Highest sets with electrons, and lowest sets with room, to take where none are named.
    pub window: (usize, usize),
    /// Largest difference of orbital energies, hartree.
    pub largest_gap: Option<f64>,
}

/// Why there is nothing to pair.
#[derive(Debug, Clone, PartialEq, Eq, Error)]
pub enum SelectError {
    /// No set is called so.
    #[error("no set of orbitals is called {selector}: {known}")]
    NoSuchSet {
        /// As given.
        selector: String,
        /// What there is.
        known: String,
    },
    /// The set named cannot lose or take an electron.
    #[error("{selector} is {state}: no electron can {verb} it")]
    WrongFilling {
        /// As given.
        selector: String,
        /// `empty` or `full`.
        state: &'static str,
        /// `leave` or `enter`.
        verb: &'static str,
    },
    /// The file gives no occupations, and no sets were named.
    #[error("the file gives no occupations: name the sets with --from and --to")]
    NoOccupations,
    /// A name that is none.
    #[error("`{0}` names no set: expected a label such as 3e2g, an orbital number, homo, homo-1, lumo or lumo+1")]
    NotASelector(String),
}

impl FromStr for Selector {
    type Err = SelectError;

    fn from_str(text: &str) -> Result<Self, SelectError> {
        let refused = || SelectError::NotASelector(text.chars().take(40).collect());
        let text = text.trim();
        let lower = text.to_lowercase().replace('−', "-");
        let steps = |rest: &str, sign: char| {
            if rest.is_empty() { Some(0) } else { rest.strip_prefix(sign)?.parse::<usize>().ok() }
        };
        if let Some(rest) = lower.strip_prefix("homo") {
            return steps(rest, '-').map(Self::Occupied).ok_or_else(refused);
        }
        if let Some(rest) = lower.strip_prefix("lumo") {
            return steps(rest, '+').map(Self::Empty).ok_or_else(refused);
        }
        let digits = text.bytes().take_while(u8::is_ascii_digit).count();
        let (number, name) = text.split_at(digits);
        let number: usize = number.parse().ok().filter(|number| *number > 0).ok_or_else(refused)?;
        if name.is_empty() {
            return Ok(Self::Orbital(number));
        }
        name.parse::<IrrepName>().map(|irrep| Self::Label(number, irrep)).map_err(|_| refused())
    }
}

impl fmt::Display for Selector {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        match self {
            Self::Orbital(number) => write!(f, "orbital {number}"),
            Self::Label(number, irrep) => write!(f, "{number}{}", irrep.symbol()),
            Self::Occupied(0) => f.write_str("homo"),
            Self::Occupied(steps) => write!(f, "homo-{steps}"),
            Self::Empty(0) => f.write_str("lumo"),
            Self::Empty(steps) => write!(f, "lumo+{steps}"),
        }
    }
}

/// Whether an electron can leave the set; true where occupations are missing.
fn can_leave(set: &SetLabel, capacity: f64) -> bool {
    filling(set, capacity) != Some(Filling::Empty)
}

/// Whether an electron can enter the set; true where occupations are missing.
fn can_enter(set: &SetLabel, capacity: f64) -> bool {
    filling(set, capacity) != Some(Filling::Full)
}

/// The pairs asked for, lowest difference of orbital energies first.
///
/// # Errors
/// [`SelectError`] when a name fits no set of any spin, or none that can lose or take an electron.
pub fn choose(spins: &[SpinLabels], group: &PointGroup, choice: &Choice) -> Result<Vec<Pair>, SelectError> {
    let capacity = if spins.len() > 1 { 1.0 } else { 2.0 };
    let known = spins.iter().flat_map(|spin| &spin.sets).all(|set| filling(set, capacity).is_some());
    if !known && (choice.from.is_empty() || choice.to.is_empty()) {
        return Err(SelectError::NoOccupations);
    }
    let from = End { spins, group, capacity, leaves: true }.sets(&choice.from, choice.window.0)?;
    let to = End { spins, group, capacity, leaves: false }.sets(&choice.to, choice.window.1)?;
    let mut pairs: Vec<Pair> = Vec::new();
    for (spin_idx, (from, to)) in from.iter().zip(&to).enumerate() {
        for &from in from {
            pairs.extend(to.iter().filter(|&&to| to != from).map(|&to| Pair { spin_idx, from, to }));
        }
    }
    pairs.retain(|pair| match (gap(spins, *pair), choice.largest_gap) {
        (Some(gap), Some(largest)) => gap <= largest,
        (None, Some(_)) => false,
        (_, None) => true,
    });
    // Equal gaps keep the order of the sets, so that rounding does not shuffle them.
    let key = |pair: &Pair| gap(spins, *pair).map_or(f64::INFINITY, |gap| (gap * 1e6).round());
    pairs.sort_by(|a, b| key(a).total_cmp(&key(b)).then((a.spin_idx, a.from, a.to).cmp(&(b.spin_idx, b.from, b.to))));
    Ok(pairs)
}

/// Difference of the sets' mean energies, hartree, where the file gives energies.
#[must_use]
pub fn gap(spins: &[SpinLabels], pair: Pair) -> Option<f64> {
    let sets = &spins[pair.spin_idx].sets;
    Some(sets[pair.to].energy? - sets[pair.from].energy?)
}

/// One end of the pairs.
struct End<'a> {
    spins: &'a [SpinLabels],
    group: &'a PointGroup,
    capacity: f64,
    leaves: bool,
}

impl End<'_> {
    fn fits(&self, set: &SetLabel) -> bool {
        if self.leaves { can_leave(set, self.capacity) } else { can_enter(set, self.capacity) }
    }

    /// Sets of each spin, by name or those nearest the frontier.
    fn sets(&self, selectors: &[Selector], window: usize) -> Result<Vec<Vec<usize>>, SelectError> {
        if selectors.is_empty() {
            let nearest = |spin: &SpinLabels| -> Vec<usize> {
                let fitting: Vec<usize> = (0..spin.sets.len()).filter(|&set| self.fits(&spin.sets[set])).collect();
                let skipped = if self.leaves { fitting.len().saturating_sub(window) } else { 0 };
                fitting.into_iter().skip(skipped).take(window).collect()
            };
            return Ok(self.spins.iter().map(nearest).collect());
        }
        let mut chosen = vec![Vec::new(); self.spins.len()];
        for selector in selectors {
            let mut exists = false;
            let mut fitting = false;
            for (spin, chosen) in self.spins.iter().zip(&mut chosen) {
                for set in named(spin, self.group, self.capacity, selector) {
                    exists = true;
                    if self.fits(&spin.sets[set]) {
                        fitting = true;
                        chosen.push(set);
                    }
                }
            }
            if !exists {
                return Err(SelectError::NoSuchSet {
                    selector: selector.to_string(),
                    known: known(self.spins, self.group, selector),
                });
            }
            if !fitting {
                let (state, verb) = if self.leaves { ("empty", "leave") } else { ("full", "enter") };
                return Err(SelectError::WrongFilling { selector: selector.to_string(), state, verb });
            }
        }
        for sets in &mut chosen {
            sets.sort_unstable();
            sets.dedup();
        }
        Ok(chosen)
    }
}

/// Sets of one spin that a selector means.
pub(super) fn named(spin: &SpinLabels, group: &PointGroup, capacity: f64, selector: &Selector) -> Vec<usize> {
    let numbered = |wanted: &dyn Fn(&SetLabel) -> bool| -> Vec<usize> {
        (0..spin.sets.len()).filter(|&set| wanted(&spin.sets[set])).collect()
    };
    match *selector {
        Selector::Orbital(number) => numbered(&|set| set.orbitals.contains(&(number - 1))),
        Selector::Label(number, name) => {
            numbered(&|set| set.number == number && set.irrep.is_some_and(|irrep| group.irreps()[irrep].name == name))
        }
        Selector::Occupied(steps) => {
            let occupied = numbered(&|set| filling(set, capacity).is_some_and(|f| f != Filling::Empty));
            occupied.into_iter().rev().nth(steps).into_iter().collect()
        }
        Selector::Empty(steps) => {
            let empty = numbered(&|set| filling(set, capacity) == Some(Filling::Empty));
            empty.into_iter().nth(steps).into_iter().collect()
        }
    }
}

/// What a person may have meant.
pub(super) fn known(spins: &[SpinLabels], group: &PointGroup, selector: &Selector) -> String {
    match *selector {
        Selector::Orbital(_) => {
            let n = spins.iter().map(|spin| spin.orbitals.len()).max().unwrap_or(0);
            format!("orbitals count from 1 to {n}")
        }
        Selector::Label(_, name) => {
            let of_irrep = |set: &&SetLabel| set.irrep.is_some_and(|irrep| group.irreps()[irrep].name == name);
            let n = spins.iter().map(|spin| spin.sets.iter().filter(of_irrep).count()).max().unwrap_or(0);
            if n == 1 {
                "one set has that irrep, number 1".to_owned()
            } else if n > 0 {
                format!("{n} sets have that irrep, numbered from 1")
            } else {
                let names: Vec<String> = group.irreps().iter().map(|irrep| irrep.name.symbol()).collect();
                format!("no orbital has that irrep; the group has {}", names.join(", "))
            }
        }
        Selector::Occupied(_) | Selector::Empty(_) => "so many sets are not in the file".to_owned(),
    }
}
