//! What an atom's name and number mean: element, ghost, core electrons.
//!
//! Not here: the table of elements (`elements`), shells and orbitals (`molden`).

use super::{Atom, elements};
use crate::grammar::atoms::RawAtom;
use crate::grammar::cores::{CoreCount, CoreOwner};
use crate::grammar::{Findings, RawMolden};
use nalgebra::Point3;
use std::collections::BTreeMap;

/// An atomic-number column may name no more than this.
const CHARGE_LIMIT: f64 = 200.0;

/// Finds atoms by the running number that other sections use.
pub struct AtomsByNumber {
    /// Sorted; empty when the number column is missing or repeats itself, and the order in `[Atoms]` counts.
    numbers: Vec<(usize, usize)>,
    n_atoms: usize,
}

impl AtomsByNumber {
    /// Looks at the number column.
    pub fn new(atoms: &[RawAtom]) -> Self {
        let column = atoms.iter().enumerate().map(|(at, atom)| Some((atom.number?, at))).collect::<Option<Vec<_>>>();
        let mut numbers = column.unwrap_or_default();
        numbers.sort_unstable();
        if numbers.windows(2).any(|pair| pair[0].0 == pair[1].0) {
            numbers.clear();
        }
        Self { numbers, n_atoms: atoms.len() }
    }

    /// Place in `[Atoms]`, counted from 0.
    pub fn place(&self, number: usize) -> Option<usize> {
        if self.numbers.is_empty() {
            return number.checked_sub(1).filter(|&at| at < self.n_atoms);
        }
        let found = self.numbers.binary_search_by_key(&number, |entry| entry.0).ok()?;
        Some(self.numbers[found].1)
    }
}

/// Core electrons as `[CORE]`, `[PSEUDO]` and `[NVAL]` give them; they win over the atomic-number column.
pub fn set_cores(
    bytes: &[u8],
    raw: &RawMolden,
    by_number: &AtomsByNumber,
    atoms: &mut [Atom],
    findings: &mut Findings,
) {
    let mut of_element: BTreeMap<u8, Vec<usize>> = BTreeMap::new();
    for (at, atom) in atoms.iter().enumerate().filter(|(_, atom)| !atom.ghost) {
        of_element.entry(atom.element).or_default().push(at);
    }
    let mut by_symbol: BTreeMap<u8, u32> = BTreeMap::new();
    let mut by_atom: BTreeMap<usize, u32> = BTreeMap::new();
    for core in &raw.cores {
        let (element, atom) = match &core.owner {
            CoreOwner::Atom(number) => match by_number.place(*number) {
                Some(at) if at < atoms.len() => (atoms[at].element, Some(at)),
                _ => (0, None),
            },
            CoreOwner::Symbol(name) => (elements::atomic_number(&String::from_utf8_lossy(&bytes[name.clone()])), None),
        };
        let electrons = match core.count {
            CoreCount::InCore(electrons) => Some(electrons).filter(|&electrons| electrons <= u32::from(element)),
            CoreCount::Left(left) => u32::from(element).checked_sub(left),
        };
        let known = element > 0 && of_element.contains_key(&element);
        match (known.then_some(electrons).flatten(), atom) {
            (Some(electrons), Some(at)) => {
                by_atom.insert(at, electrons);
            }
            (Some(electrons), None) => {
                by_symbol.insert(element, electrons);
            }
            (None, _) => findings.warning(
                core.line.clone(),
                "these core electrons fit no atom of [Atoms] and are passed over",
                "expected an atom's number or symbol, and no more electrons than the element has",
            ),
        }
    }
    for (element, electrons) in by_symbol {
        for &at in of_element.get(&element).into_iter().flatten() {
            atoms[at].core_electrons = electrons;
        }
    }
    for (at, electrons) in by_atom {
        atoms[at].core_electrons = electrons;
    }
}

/// An atom known by its name alone, position in bohr; a ghost where the name means no element.
#[must_use]
pub fn named_atom(name: &str, position: [f64; 3]) -> Atom {
    let element = elements::atomic_number(name);
    Atom {
        name: name.to_owned(),
        element,
        charge: f64::from(element),
        ghost: element == 0,
        core_electrons: 0,
        position: Point3::from(position),
    }
}

/// The name wins over the number, which may be an effective charge; a ghost is named so or has charge 0.
#[expect(
    clippy::cast_possible_truncation,
    clippy::cast_sign_loss,
    reason = "both numbers are whole and lie between 0 and 118 where they are cast"
)]
pub fn mean_atom(name: &str, raw: &RawAtom, scale: f64, bytes: &[u8], findings: &mut Findings) -> Atom {
    let lower = name.to_lowercase();
    let ghost_word = ["ghost", "gh", "bq"]
        .iter()
        .find(|word| lower.starts_with(**word))
        .filter(|_| elements::atomic_number(name) == 0);
    let inner: &str = ghost_word.map_or(name, |word| name[word.len()..].trim_start_matches(['(', '-', '_', ':']));
    let mut element = elements::atomic_number(inner);
    // Without the column the name alone says what the atom is.
    let charge = raw.charge.unwrap_or(f64::from(element));
    if !(0.0..=CHARGE_LIMIT).contains(&charge) {
        findings.expected(bytes, raw.line.clone(), "an atomic number from 0 up in the third column");
    }
    let ghost =
        ghost_word.is_some() || raw.charge == Some(0.0) || (element == 0 && lower.starts_with('x') && charge == 0.0);
    if element == 0 && !ghost {
        // No element by name: the number decides, where it is one.
        if charge.fract() == 0.0 && (1.0..=118.0).contains(&charge) {
            element = charge as u8;
            findings.warning(
                raw.name.clone(),
                format!("`{name}` names no element; the atomic number {charge} is used"),
                "name atoms by their symbols",
            );
        } else {
            findings.expected(bytes, raw.name.clone(), "the symbol of an element");
        }
    }
    let below = f64::from(element) - charge;
    if !ghost && element > 0 && below < 0.0 {
        findings.error(
            raw.line.clone(),
            format!("{} has atomic number {element}, found {charge}", elements::symbol(element)),
            "name and atomic number of an atom must agree, unless the number is an effective charge below it",
        );
    }
    if !ghost && below > 0.0 && (below.fract() != 0.0 || !elements::is_core_size(element, below)) {
        // Names of force fields: CA may be an alpha carbon. A wrong element is worse than a refusal.
        findings.error(
            raw.line.clone(),
            format!(
                "`{name}` reads as {}, but {charge} is neither its atomic number nor what a core leaves",
                elements::symbol(element)
            ),
            "write the symbol of the element alone, in the first column",
        );
    }
    let core_electrons = if ghost || below <= 0.0 { 0 } else { below as u32 };
    Atom {
        name: name.to_owned(),
        element,
        charge,
        ghost,
        core_electrons,
        position: Point3::from(raw.position.map(|x| x * scale)),
    }
}
