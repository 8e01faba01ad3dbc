//! The words of a diagram: what is left out, what marks mean, what numbers are not; arrows and gaps that go with them.
//!
//! Not here: where the lines stand (`diagram::figure`).

use super::column::{Arrow, LANE, LEADER, Sketch};
use super::symbol::{self, words};
use super::window::left_out;
use super::{Count, Options};
use crate::report::document::{Document, Source};
use crate::report::text::EV_PER_HARTREE;
use crate::report::transitions::TransitionEntry;
use crate::report::unicode::pretty;

/// Gives a column of a lone document its gap and the transitions asked for.
pub fn decorate(sketch: &mut Sketch<'_>, documents: &[Document], options: &Options) {
    let [document] = documents else { return };
    let place = |set: Option<usize>| set.and_then(|set| sketch.find(set)).map(|shown| shown.place);
    sketch.gap = place(sketch.column.homo).zip(place(sketch.column.lumo));
    if options.transitions {
        let here =
            |entry: &&TransitionEntry| sketch.find(entry.from_set).is_some() && sketch.find(entry.to_set).is_some();
        sketch.arrows = allowed(document).filter(here).map(arrow).collect();
    }
}

/// Room that labels, the gap and transitions of a lone document's column take beside its bars, about.
#[must_use]
pub fn beside(documents: &[Document], options: &Options) -> f64 {
    let arrows = |document: &Document| {
        let spin = |entry: &&TransitionEntry| entry.spin == crate::model::Spin::Alpha;
        allowed(document).filter(spin).count()
    };
    let lanes = if options.transitions { documents.first().map_or(0, arrows) } else { 0 };
    LEADER + 34.0 + LANE * (lanes + 1) as f64
}

fn allowed(document: &Document) -> impl Iterator<Item = &TransitionEntry> {
    document.transitions.iter().flatten().filter(|entry| entry.electric_dipole.allowed == Some(true))
}

fn arrow(entry: &TransitionEntry) -> Arrow {
    let polarisation = entry.electric_dipole.polarisation.join(",");
    let energy = entry.energy_hartree.map_or(String::new(), |energy| format!("{:.3} eV, ", energy * EV_PER_HARTREE));
    let story = format!(
        "{} → {}: {energy}allowed along {polarisation}; one-electron estimate of the strength {}",
        pretty(&entry.from),
        pretty(&entry.to),
        entry.electric_dipole.oscillator_strength.map_or("unknown".to_owned(), |f| format!("{f:.3}")),
    );
    Arrow { from: entry.from_set, to: entry.to_set, polarisation, story }
}

/// All notes under the diagram.
#[must_use]
pub fn notes(documents: &[Document], sketches: &[Sketch<'_>], options: &Options, energies: (f64, f64)) -> Vec<String> {
    let mut notes: Vec<String> = Vec::new();
    for sketch in sketches {
        let column = sketch.column;
        let (below, above) = left_out(column, energies);
        let counts = [(below, "lower"), (above, "higher")].into_iter().filter(|(n, _)| *n > 0);
        let counts: Vec<String> = counts.map(|(n, which)| format!("{n} {which}")).collect();
        let levels = if below + above == 1 { "level" } else { "levels" };
        let mut parts = Vec::new();
        parts.extend((!counts.is_empty()).then(|| format!("{} {levels} not shown", counts.join(" and "))));
        parts.extend((column.without_energy > 0).then(|| format!("{} without a usable energy", column.without_energy)));
        let text = parts.join(", ");
        if text.is_empty() {
            continue;
        }
        let spin = column
            .spin
            .map_or(String::new(), |spin| if spin == crate::model::Spin::Alpha { "α".into() } else { "β".into() });
        let name = if documents.len() > 1 {
            options.names.get(column.file).cloned().unwrap_or_else(|| short_name(&documents[column.file].source.file))
        } else {
            String::new()
        };
        let head = [name, spin].into_iter().filter(|part| !part.is_empty()).collect::<Vec<_>>().join(" ");
        notes.push(if head.is_empty() { format!("{text}.") } else { format!("{head}: {text}.") });
    }
    let levels = || sketches.iter().flat_map(|sketch| &sketch.shown);
    if sketches.iter().any(|sketch| sketch.gap_ev().is_some() && (sketch.gap.is_some() || documents.len() > 1)) {
        notes.push("Gap: LUMO − HOMO, a difference of orbital energies, not a band or excitation energy.".into());
    }
    if levels().any(|shown| !shown.level.complete) {
        notes.push("* Not all partners of the irrep are there at one energy.".into());
    }
    if levels().any(|shown| shown.level.irrep.is_none() && !shown.level.content.is_empty()) {
        notes.push(
            "Labels with +: orbitals turned among themselves at one energy; they make these irreps together.".into(),
        );
    }
    if levels().any(|shown| shown.level.content.is_empty()) {
        notes.push("Dashed bars: orbitals that mix irreps, so without a label.".into());
    }
    if levels().any(|shown| shown.level.has_fractions()) {
        notes.push(
            "Dashed arrows: parts of an electron, the sum stands beside the label; where an orbital holds both spins, parts are \
             shared evenly."
                .into(),
        );
    }
    if levels().any(|shown| shown.level.electrons().is_none()) {
        notes.push("No arrows where the file gives no occupation.".into());
    }
    if options.transitions {
        notes.extend(transition_notes(documents, sketches));
    }
    if documents.len() > 1 {
        let from = match options.count {
            Count::Lowest => "the lowest",
            Count::Frontier => "the highest with electrons, down and up",
        };
        notes.push(format!(
            "Lines join the k-th level of an irrep in one column with the k-th in the next, counted from {from}."
        ));
    }
    notes
}

/// Of two files of one substance and charge: what to do when one of them leaves out cores that the other has.
#[must_use]
pub fn cores((a, b): (&Source, &Source), count: Count) -> Option<String> {
    let electrons = a.electrons.zip(b.electrons).filter(|(a, b)| (a - b).abs() > 1.0);
    let charges = a.charge.zip(b.charge).filter(|(a, b)| (a - b).abs() < 0.5);
    (a.formula == b.formula && electrons.is_some() && charges.is_some() && count == Count::Lowest).then(|| {
        "Neighbouring files leave out different cores, so the k-th levels are not the same ones: --count frontier counts from the \
         highest with electrons."
            .to_owned()
    })
}

fn transition_notes(documents: &[Document], sketches: &[Sketch<'_>]) -> Vec<String> {
    let [document] = documents else { return Vec::new() };
    if document.transitions.is_none() {
        return vec!["Transitions were not computed: the basis is large; see the verb transitions.".into()];
    }
    let drawn: usize = sketches.iter().map(|sketch| sketch.arrows.len()).sum();
    let outside = allowed(document).count() - drawn;
    let mut notes = Vec::new();
    notes.push(match drawn {
        0 => "No transition between the frontier levels shown is allowed for an electric dipole.".to_owned(),
        _ => "Grey arrows: transitions of the frontier allowed for an electric dipole, with their polarisation; a label is not an \
              intensity."
            .to_owned(),
    });
    if outside > 0 {
        notes.push(format!("{outside} more between levels not shown."));
    }
    notes
}

/// Lines no wider than `width`.
#[must_use]
pub fn wrap(text: &str, size: f64, width: f64) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for word in text.split_whitespace() {
        let longer = lines.last().map(|line| format!("{line} {word}"));
        match longer.filter(|line| symbol::width(&words(line), size) <= width) {
            Some(line) => {
                lines.pop();
                lines.push(line);
            }
            None => lines.push(shorten(word, size, width)),
        }
    }
    lines
}

/// Cut with an ellipsis where it is too wide.
#[must_use]
pub fn shorten(text: &str, size: f64, width: f64) -> String {
    if symbol::width(&words(text), size) <= width {
        return text.to_owned();
    }
    let mut short = String::new();
    for c in text.chars() {
        if symbol::width(&words(&format!("{short}{c}…")), size) > width {
            break;
        }
        short.push(c);
    }
    format!("{short}…")
}

/// `lantern-3` of `tests/lantern-3.molden.gz`.
#[must_use]
pub fn short_name(file: &str) -> String {
    let name = file.rsplit('/').next().unwrap_or(file);
    let name = name.strip_suffix(".gz").unwrap_or(name);
    name.strip_suffix(".molden").unwrap_or(name).to_owned()
}
