//! Levels as a diagram needs them: energy in eV, partners with their electrons by spin, taken from a report document.
//!
//! Here: which document entries make a column. Not here: which of them are shown (`diagram::window`), places on paper.

use crate::model::Spin;
use crate::report::document::{Document, SetEntry, Weight};
use crate::report::text::EV_PER_HARTREE;
use crate::report::unicode::pretty;

/// Largest energy that an axis takes, eV; cores of the heaviest elements lie at a tenth of it (from memory).
pub const LARGEST_EV: f64 = 1e6;
/// Occupations this near a whole number are that number: files print as few as four decimals.
const WHOLE: f64 = 1e-3;

/// Electrons of one spin in one partner.
#[derive(Debug, Clone, Copy, PartialEq, Default)]
pub struct Electrons {
    /// Spin up.
    pub up: f64,
    /// Spin down.
    pub down: f64,
}

impl Electrons {
    /// Of an occupation in an orbital for `spin`; `both` when the orbital holds two.
    ///
    /// One electron in an orbital for two is drawn up. Any other part of two is shared evenly: the file does not say how.
    fn of(occupation: f64, spin: Spin, both: bool) -> Self {
        let near = occupation.round();
        let occupation = if (occupation - near).abs() < WHOLE { near } else { occupation };
        match (both, spin) {
            (true, _) if (occupation - 1.0).abs() < WHOLE => Self { up: 1.0, down: 0.0 },
            (true, _) => Self { up: occupation / 2.0, down: occupation / 2.0 },
            (false, Spin::Alpha) => Self { up: occupation, down: 0.0 },
            (false, Spin::Beta) => Self { up: 0.0, down: occupation },
        }
    }

    /// Both spins.
    #[must_use]
    pub fn total(self) -> f64 {
        self.up + self.down
    }
}

/// One orbital of a level.
#[derive(Debug, Clone, PartialEq)]
pub struct Partner {
    /// From 1 within the spin, file order.
    pub index: usize,
    /// None where the file gives no occupation.
    pub electrons: Option<Electrons>,
}

/// One set of orbitals.
#[derive(Debug, Clone, PartialEq)]
pub struct Level {
    /// Number of the set in the document.
    pub set: usize,
    /// None for orbitals that mix irreps, or are turned among several at one energy.
    pub irrep: Option<String>,
    /// Irreps that the orbitals make together, and how often; empty when they mix irreps.
    pub content: Vec<(String, usize)>,
    /// Running number and symbol, `3e2g`; symbols of the content, `a1 + t2`; or `mixed`.
    pub label: String,
    /// Mean energy of the set.
    pub energy_ev: f64,
    /// Left to right.
    pub partners: Vec<Partner>,
    /// All partners of the irrep are there, at one energy; true without an irrep.
    pub complete: bool,
    /// What the pointer shows.
    pub story: String,
}

impl Level {
    /// Electrons of all partners; `None` when the file gives no occupation of one.
    #[must_use]
    pub fn electrons(&self) -> Option<f64> {
        self.partners.iter().map(|partner| partner.electrons.map(Electrons::total)).sum()
    }

    /// Some partner holds a part of an electron.
    #[must_use]
    pub fn has_fractions(&self) -> bool {
        let broken = |electrons: f64| (electrons - electrons.round()).abs() > WHOLE / 2.0;
        self.partners.iter().filter_map(|partner| partner.electrons).any(|e| broken(e.up) || broken(e.down))
    }
}

/// Levels of one file and one spin, lowest first.
#[derive(Debug, Clone, PartialEq)]
pub struct Column {
    /// Which document.
    pub file: usize,
    /// The spin drawn; `None` where an orbital holds both.
    pub spin: Option<Spin>,
    /// Lowest first.
    pub levels: Vec<Level>,
    /// Sets without an energy, or with one beyond [`LARGEST_EV`].
    pub without_energy: usize,
    /// Number of the highest full set.
    pub homo: Option<usize>,
    /// Number of the lowest empty set.
    pub lumo: Option<usize>,
}

impl Column {
    /// The level of this set.
    #[must_use]
    pub fn level(&self, set: Option<usize>) -> Option<&Level> {
        self.levels.iter().find(|level| Some(level.set) == set)
    }

    /// The highest energy at which there are electrons, else that of the highest full set.
    #[must_use]
    pub fn highest_occupied_ev(&self) -> Option<f64> {
        let filled = |level: &&Level| level.electrons().is_some_and(|electrons| electrons > 0.5);
        self.levels.iter().rev().find(filled).map(|level| level.energy_ev)
    }
}

/// Whether the file keeps alpha and beta orbitals apart.
#[must_use]
pub fn is_unrestricted(document: &Document) -> bool {
    document.orbitals.iter().flatten().any(|orbital| orbital.spin == Spin::Beta)
}

/// The column of `document` for one spin, or for both together.
///
/// A restricted document gives, for one spin, its orbitals with the electrons of that spin alone.
#[must_use]
pub fn column(document: &Document, file: usize, spin: Option<Spin>) -> Column {
    let unrestricted = is_unrestricted(document);
    let source = if unrestricted { spin.unwrap_or(Spin::Alpha) } else { Spin::Alpha };
    let mut without_energy = 0;
    let mut levels: Vec<Level> = Vec::new();
    for set in document.sets.iter().flatten().filter(|set| set.spin == source) {
        let energy = set.energy_hartree.map(|energy| energy * EV_PER_HARTREE);
        match energy.filter(|energy| energy.abs() <= LARGEST_EV) {
            Some(energy) => {
                levels.push(level(document, set, energy, spin.filter(|_| !unrestricted), unrestricted));
            }
            None => without_energy += 1,
        }
    }
    levels.sort_by(|a, b| a.energy_ev.total_cmp(&b.energy_ev).then(a.set.cmp(&b.set)));
    let frontier = document.frontier.iter().flat_map(|frontier| &frontier.spins).find(|entry| entry.spin == source);
    Column {
        file,
        spin,
        levels,
        without_energy,
        homo: frontier.and_then(|frontier| frontier.homo),
        lumo: frontier.and_then(|frontier| frontier.lumo),
    }
}

/// `only` leaves the electrons of that spin of an orbital for both.
fn level(document: &Document, set: &SetEntry, energy_ev: f64, only: Option<Spin>, unrestricted: bool) -> Level {
    let orbitals = document.orbitals.iter().flatten();
    let of_set = || orbitals.clone().filter(|orbital| orbital.set == set.set);
    let partners: Vec<Partner> = of_set()
        .map(|orbital| {
            let electrons = orbital.occupation.filter(|occupation| occupation.is_finite()).map(|occupation| {
                let electrons = Electrons::of(occupation.max(0.0), orbital.spin, !unrestricted);
                match only {
                    Some(Spin::Alpha) => Electrons { down: 0.0, ..electrons },
                    Some(Spin::Beta) => Electrons { up: 0.0, ..electrons },
                    None => electrons,
                }
            });
            Partner { index: orbital.index, electrons }
        })
        .collect();
    let content = match (&set.irrep, &set.content) {
        (Some(irrep), _) => vec![(irrep.clone(), 1)],
        (None, Some(sum)) => sum.split(" + ").map(term).collect(),
        (None, None) => Vec::new(),
    };
    let turned = || set.content.as_ref().map_or_else(|| "mixed".to_owned(), |sum| sum.to_lowercase());
    let label = set.label.clone().unwrap_or_else(turned);
    let numbers: Vec<String> = partners.iter().map(|partner| partner.index.to_string()).collect();
    let weights = of_set().next().map(|orbital| orbital.weights.as_slice()).unwrap_or_default();
    let mut story = vec![
        format!("{}: {energy_ev:.3} eV", name_in_words(set, weights)),
        format!("orbital{} {}", plural(numbers.len()), numbers.join(", ")),
    ];
    story.extend(set.electrons.map(|electrons| format!("{} e⁻", electrons_text(electrons))));
    let shares = set.character.iter().take(3);
    let shares: Vec<String> =
        shares.map(|part| format!("{:.0} % {} {}", part.share * 100.0, part.atoms, part.shell)).collect();
    if !shares.is_empty() {
        story.push(shares.join(", "));
    }
    let complete = set.complete || set.irrep.is_none();
    if !complete {
        story.push("not all partners are here".to_owned());
    }
    let story = story.join("; ");
    Level { set: set.set, irrep: set.irrep.clone(), content, label, energy_ev, partners, complete, story }
}

/// The label, or what stands in its place and why.
fn name_in_words(set: &SetEntry, weights: &[Weight]) -> String {
    match (&set.label, &set.content) {
        (Some(label), _) => pretty(label),
        (None, Some(sum)) => format!("{}, turned among themselves", pretty(sum)),
        (None, None) => {
            let parts = weights.iter().take(3);
            let parts: Vec<String> =
                parts.map(|part| format!("{:.0} % {}", part.weight * 100.0, pretty(&part.irrep))).collect();
            format!("no single irrep ({})", parts.join(", "))
        }
    }
}

/// `2B1` → B1, twice.
fn term(text: &str) -> (String, usize) {
    let irrep = text.trim_start_matches(|c: char| c.is_ascii_digit());
    let times = text[..text.len() - irrep.len()].parse().unwrap_or(1);
    (irrep.to_owned(), times)
}

/// Whole numbers plainly, others to three decimals.
#[must_use]
pub fn electrons_text(electrons: f64) -> String {
    let near = electrons.round();
    if (electrons - near).abs() < WHOLE { format!("{near:.0}") } else { format!("{electrons:.3}") }
}

fn plural(n: usize) -> &'static str {
    if n == 1 { "" } else { "s" }
}
