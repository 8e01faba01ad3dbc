//! Transitions for people: the answer, the table, why rule and number differ, helpers, cautions. At most 110 columns.
//!
//! Not here: any number that the document does not hold.

use super::document::Document;
use super::rule::listed;
use super::text::{EV_PER_HARTREE, geometry_head, head, push_table, table, title, wrap};
use super::transitions::{self, ModeReference, TransitionEntry};
use super::unicode::pretty;
use crate::model::Spin;
use comfy_table::CellAlignment;
use std::fmt::Write as _;

/// Columns of a line below the table.
const WIDTH: usize = 106;

/// Triplets of so many pairs are told; the rest is in the JSON output.
const TRIPLETS_OF: usize = 2;

/// The whole report of `transitions`.
#[must_use]
pub fn transitions_text(document: &Document) -> String {
    let entries = document.transitions.as_deref().unwrap_or_default();
    let mut out = title(document);
    out.push_str("\n\n");
    out.push_str(&answer(entries));
    out.push_str(&geometry_head(&document.geometry));
    out.push_str(&rows(entries));
    out.push_str(&remarks(entries));
    out.push_str(&vibronic(entries));
    out.push_str(&triplets(entries));
    out.push_str(&jahn_teller(document));
    out.push('\n');
    for caution in &document.cautions {
        head(&mut out, "Caution", caution);
    }
    out
}

fn electronvolts(entry: &TransitionEntry) -> String {
    entry.energy_hartree.map_or("—".to_owned(), |energy| format!("{:.3}", energy * EV_PER_HARTREE))
}

fn arrow(entry: &TransitionEntry) -> String {
    format!("{} → {}", pretty(&entry.from), pretty(&entry.to))
}

/// `T1g + T2g`, with multiplicities.
fn product(entry: &TransitionEntry) -> String {
    let mut terms: Vec<(&str, usize)> = Vec::new();
    for name in &entry.product {
        match terms.iter_mut().find(|(known, _)| known == name) {
            Some((_, n)) => *n += 1,
            None => terms.push((name, 1)),
        }
    }
    // Raised signs, as + also joins the terms.
    let raised = |name: &str| pretty(name).replace('+', "⁺").replace('-', "⁻");
    let term = |&(name, n): &(&str, usize)| if n == 1 { raised(name) } else { format!("{n}{}", raised(name)) };
    if terms.is_empty() { "—".to_owned() } else { terms.iter().map(term).collect::<Vec<_>>().join("+") }
}

/// `x,y`, `forbidden`, or `no rule`.
fn verdict(allowed: Option<bool>, components: &[&str]) -> String {
    match allowed {
        None => "no rule".to_owned(),
        Some(false) => "forbidden".to_owned(),
        Some(true) => components.join(","),
    }
}

/// `g → u yes`, `g → g no`.
fn laporte(parities: &str) -> String {
    let allowed = if matches!(parities, "g-u" | "u-g") { "yes" } else { "no" };
    format!("{} {allowed}", parities.replace('-', " → "))
}

fn answer(entries: &[TransitionEntry]) -> String {
    let mut out = String::new();
    let told = |entry: &TransitionEntry| {
        let f = entry.electric_dipole.oscillator_strength.map_or(String::new(), |f| format!(" · f ≈ {}", strength(f)));
        let dipole = match entry.electric_dipole.allowed {
            Some(true) => format!("allowed along {}", listed(&entry.electric_dipole.polarisation)),
            other => verdict(other, &[]),
        };
        format!("{} · {} eV · {} · {dipole}{f}", arrow(entry), electronvolts(entry), product(entry))
    };
    let strongest = entries.iter().position(|entry| entry.strongest);
    let first_allowed = entries.iter().position(|entry| entry.electric_dipole.allowed == Some(true));
    let named = [("Strongest", strongest), ("First allowed", first_allowed), ("Lowest gap", Some(0))];
    for (at, &(name, place)) in named.iter().enumerate() {
        let Some(entry) = place.and_then(|place| entries.get(place)) else { continue };
        if named[..at].iter().all(|(_, before)| *before != place) {
            head(&mut out, name, &told(entry));
        }
    }
    let allowed = entries.iter().filter(|entry| entry.electric_dipole.allowed == Some(true)).count();
    head(&mut out, "Pairs", &format!("{} listed, {allowed} allowed by electric dipole", entries.len()));
    if let Some(states) = entries.iter().find_map(|entry| entry.states.as_ref()) {
        let ground: Vec<String> = states.ground.iter().map(|term| term_symbol(term)).collect();
        let from =
            if states.ground_from == "closed shell" { "closed shell".to_owned() } else { pretty(&states.ground_from) };
        let rule = match (states.ground_from == "closed shell", states.ground_decided) {
            (true, _) => "",
            (_, true) => ", by highest spin",
            (_, false) => ", one of these: highest spin leaves several",
        };
        head(&mut out, "Ground", &format!("{} ({from}{rule})", ground.join(", ")));
    } else {
        head(
            &mut out,
            "Ground",
            "not established: an occupied set has no irrep, lacks partners or has no occupation; products are of two orbitals only",
        );
    }
    out
}

/// `4A2g` → `⁴A2g`.
fn term_symbol(term: &str) -> String {
    let digits = term.bytes().take_while(u8::is_ascii_digit).count();
    let raised = term[..digits].chars().map(|digit| match digit {
        '0' => '⁰',
        '1' => '¹',
        '2' => '²',
        '3' => '³',
        digit => char::from_u32('⁰' as u32 + digit as u32 - '0' as u32).unwrap_or(digit),
    });
    raised.chain(pretty(&term[digits..]).chars()).collect()
}

/// Small strengths in powers of ten, zero as such.
fn strength(value: f64) -> String {
    match value {
        v if v < 5e-7 => "0".to_owned(),
        v if v < 1e-3 => format!("{v:.0e}"),
        v => format!("{v:.3}"),
    }
}

fn rows(entries: &[TransitionEntry]) -> String {
    let two_spins = entries.iter().any(|entry| entry.spin == Spin::Beta);
    let centre = entries.iter().any(|entry| entry.laporte.is_some());
    let mut out = String::from("\nTransitions, lowest difference of orbital energies first\n");
    let mut rows = table();
    rows.set_header([
        "from → to",
        if two_spins { "spin" } else { "" },
        "eV",
        "product",
        "E dipole",
        "f (r)",
        "f (∇)",
        "M dipole",
        "two ph.",
        if centre { "Laporte" } else { "" },
        "",
    ]);
    let notes = notes(entries);
    for entry in entries {
        let strongest = entry.strongest.then(|| "strongest".to_owned());
        let numbers = entry.remarks.iter().filter_map(|remark| notes.iter().position(|note| *note == remark.as_str()));
        let mark: Vec<String> = strongest.into_iter().chain(numbers.map(|note| format!("[{}]", note + 1))).collect();
        let f = |value: Option<f64>| value.map_or("—".to_owned(), strength);
        let magnetic: Vec<&str> = entry.magnetic_dipole.components.iter().map(|name| &name[1..]).collect();
        rows.add_row([
            arrow(entry),
            match (two_spins, entry.spin) {
                (false, _) => String::new(),
                (true, Spin::Alpha) => "α".to_owned(),
                (true, Spin::Beta) => "β".to_owned(),
            },
            electronvolts(entry),
            product(entry),
            verdict(entry.electric_dipole.allowed, &entry.electric_dipole.polarisation),
            f(entry.electric_dipole.oscillator_strength),
            f(entry.electric_dipole.oscillator_strength_velocity),
            if magnetic.is_empty() { "—".to_owned() } else { magnetic.join(",") },
            if entry.two_photon.allowed == Some(true) { "yes" } else { "—" }.to_owned(),
            entry.laporte.as_deref().map_or(String::new(), laporte),
            mark.join(" "),
        ]);
    }
    for column in [2, 5, 6] {
        if let Some(column) = rows.column_mut(column) {
            column.set_cell_alignment(CellAlignment::Right);
        }
    }
    push_table(&mut out, &rows);
    out
}

fn paragraph(out: &mut String, first: &str, text: &str) {
    for (at, line) in wrap(text, WIDTH - 8).into_iter().enumerate() {
        let _ = writeln!(out, " {:<6} {line}", if at == 0 { first } else { "" });
    }
}

/// Different remarks in order of appearance.
fn notes(entries: &[TransitionEntry]) -> Vec<&str> {
    let mut notes: Vec<&str> = Vec::new();
    for remark in entries.iter().flat_map(|entry| &entry.remarks) {
        if !notes.contains(&remark.as_str()) {
            notes.push(remark);
        }
    }
    notes
}

fn remarks(entries: &[TransitionEntry]) -> String {
    let mut out = String::new();
    for (at, note) in notes(entries).into_iter().enumerate() {
        if at == 0 {
            out.push_str("\nWhere rule and number need a word\n");
        }
        paragraph(&mut out, &format!("[{}]", at + 1), note);
    }
    out
}

/// ` at 1178, 3064 cm⁻¹` where the file holds modes.
fn at_wavenumbers(modes: &[ModeReference]) -> String {
    let mut numbers: Vec<String> =
        modes.iter().filter_map(|mode| mode.wavenumber_per_cm).map(|number| format!("{number:.0}")).collect();
    // Partners share a wavenumber.
    numbers.dedup();
    if numbers.is_empty() { String::new() } else { format!(" at {} cm⁻¹", numbers.join(", ")) }
}

/// One line a forbidden state: what opens it does not depend on the pair.
fn vibronic(entries: &[TransitionEntry]) -> String {
    let mut out = String::new();
    let mut told: Vec<&str> = Vec::new();
    for entry in entries {
        for state in &entry.product {
            let helpers: Vec<String> = entry
                .vibronic
                .iter()
                .filter(|helper| helper.state == *state)
                .map(|helper| {
                    let n = helper.modes_in_molecule;
                    let plural = if n == 1 { "mode" } else { "modes" };
                    let axes = helper.polarisation.join(",");
                    format!("{} ({axes}; {n} {plural}{})", pretty(&helper.irrep), at_wavenumbers(&helper.modes))
                })
                .collect();
            if told.contains(&state.as_str()) {
                continue;
            }
            if helpers.is_empty() {
                continue;
            }
            if told.is_empty() {
                out.push_str("\nForbidden states and the vibrations that open them, first order (axes they give; modes in the molecule)\n");
            }
            told.push(state);
            paragraph(&mut out, &pretty(state), &helpers.join("  "));
        }
    }
    out
}

fn triplets(entries: &[TransitionEntry]) -> String {
    let mut out = String::new();
    let mut told: Vec<&str> = Vec::new();
    for triplet in entries.iter().take(TRIPLETS_OF).flat_map(|entry| &entry.triplets) {
        if told.contains(&triplet.irrep.as_str()) {
            continue;
        }
        if told.is_empty() {
            out.push_str("\nTriplets of the lowest pairs: sublevels, each mixing by spin–orbit coupling with singlets of its own irrep\n");
        }
        told.push(&triplet.irrep);
        let sublevels: Vec<String> = triplet
            .sublevels
            .iter()
            .map(|sublevel| {
                let axes = sublevel.polarisation.join(",");
                let gains = if axes.is_empty() { String::new() } else { format!(", gains {axes}") };
                let met = sublevel.meets.first().map_or(", none listed".to_owned(), |first| {
                    let more = sublevel.meets.len() - 1;
                    let rest = if more > 0 { format!(" and {more} more") } else { String::new() };
                    format!(", meets {}{rest}", pretty(first))
                });
                format!("{}{gains}{met};", pretty(&sublevel.irrep))
            })
            .collect();
        let text = sublevels.join(" ");
        paragraph(&mut out, &format!("³{}", pretty(&triplet.irrep)), text.trim_end_matches(';'));
    }
    out
}

fn jahn_teller(document: &Document) -> String {
    let mut out = String::new();
    if !document.jahn_teller.is_empty() {
        out.push_str("\nJahn–Teller: vibrations that split a part-filled degenerate set\n");
    }
    for entry in &document.jahn_teller {
        let active: Vec<String> = entry
            .vibrations
            .iter()
            .map(|vibration| {
                let n = vibration.modes_in_molecule;
                let plural = if n == 1 { "mode" } else { "modes" };
                format!("{} ({n} {plural}{})", pretty(&vibration.irrep), at_wavenumbers(&vibration.modes))
            })
            .collect();
        let text = if entry.second_order_only {
            "none in first order; bending acts in second order (Renner–Teller)".to_owned()
        } else if active.is_empty() {
            "none that the molecule has".to_owned()
        } else {
            active.join("  ")
        };
        let own = entry.configuration == transitions::OWN;
        let label = if own { term_symbol(&entry.label) } else { pretty(&entry.label) };
        paragraph(&mut out, &label, &format!("({}) {text}", entry.configuration));
    }
    out
}

/// The few lines of `label`: frontier pairs only.
#[must_use]
pub fn frontier_text(entries: &[TransitionEntry]) -> String {
    let mut out = String::new();
    if entries.is_empty() {
        return out;
    }
    out.push_str(
        "\nFrontier transitions (orbital gaps, no band energies; f a one-electron estimate; more with `transitions`)\n",
    );
    let two_spins = entries.iter().any(|entry| entry.spin == Spin::Beta);
    let mut rows = table();
    rows.set_header(["from → to", if two_spins { "spin" } else { "" }, "eV", "product", "E dipole", "f", ""]);
    for entry in entries {
        let spin = match (two_spins, entry.spin) {
            (false, _) => "",
            (true, Spin::Alpha) => "α",
            (true, Spin::Beta) => "β",
        };
        rows.add_row([
            arrow(entry),
            spin.to_owned(),
            electronvolts(entry),
            product(entry),
            verdict(entry.electric_dipole.allowed, &entry.electric_dipole.polarisation),
            entry.electric_dipole.oscillator_strength.map_or("—".to_owned(), strength),
            if entry.remarks.is_empty() { "" } else { "rule and number differ or need a word: see `transitions`" }
                .to_owned(),
        ]);
    }
    for column in [2, 5] {
        if let Some(column) = rows.column_mut(column) {
            column.set_cell_alignment(CellAlignment::Right);
        }
    }
    push_table(&mut out, &rows);
    out
}
