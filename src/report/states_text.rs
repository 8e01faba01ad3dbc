//! States for people: the ground term first, then all terms, then what was asked for beyond.
//!
//! Not here: any fact that the document does not hold.

use super::states::{
    ComponentEntry, ConfigurationEntry, CorrelationEntry, JahnTellerEntry, KindEntry, LevelEntry, ModeEntry,
    StatesDocument, TransitionEntry,
};
use super::text::{push_table, table, wrap};
use super::unicode::pretty;
use comfy_table::CellAlignment;
use std::fmt::Write as _;

/// Columns of a line of prose.
const WIDTH: usize = 100;
/// Columns of the words at the left of the head's lines.
const HEAD: usize = 13;
/// Obstacles that are printed; of more the number.
const OBSTACLES_IN_TEXT: usize = 6;
/// Transitions that are printed one by one; of more only those that something allows.
const TRANSITIONS_IN_TEXT: usize = 30;
/// Ways to fill the orbitals that are printed one by one; of more only the sum.
const FILLINGS_IN_TEXT: usize = 24;
const SUPERSCRIPTS: [char; 10] = ['⁰', '¹', '²', '³', '⁴', '⁵', '⁶', '⁷', '⁸', '⁹'];

/// What to show beyond terms.
#[derive(Debug, Clone, Copy, Default)]
pub struct StatesOptions {
    /// Components in the double group.
    pub spin_orbit: bool,
}

/// The document as text.
#[must_use]
pub fn text(document: &StatesDocument, options: StatesOptions) -> String {
    let mut out = String::new();
    let from = document.file.as_ref().map_or(String::new(), |file| format!("{file} · "));
    let _ = writeln!(out, "{from}{}", pretty(&document.point_group));
    if !document.obstacles.is_empty() {
        out.push_str("\nThe occupations are no configuration of whole sets, so no terms are given:\n");
        for obstacle in document.obstacles.iter().take(OBSTACLES_IN_TEXT) {
            push_wrapped(&mut out, "  · ", obstacle);
        }
        if document.obstacles.len() > OBSTACLES_IN_TEXT {
            let _ = writeln!(out, "  · and {} more", document.obstacles.len() - OBSTACLES_IN_TEXT);
        }
        let _ = writeln!(
            out,
            "A configuration can be typed instead: orbsieve states {} CONFIGURATION",
            document.point_group
        );
    }
    if let Some(configuration) = &document.configuration {
        out.push_str(&configuration_text(configuration, document, options));
    }
    if let Some(to) = &document.to {
        out.push_str("\nto\n");
        out.push_str(&configuration_text(to, document, options));
    }
    if !document.transitions.is_empty() {
        out.push_str(&transitions_text(&document.transitions));
    }
    if let Some(correlation) = &document.correlation {
        out.push_str(&correlation_text(correlation));
    }
    if !document.levels.is_empty() {
        out.push_str("\nLevels in the field\n");
        out.push_str(&level_lines(&document.levels));
    }
    out
}

/// Prose with a first mark, its further lines set under the first.
fn push_wrapped(out: &mut String, mark: &str, text: &str) {
    let indent = mark.chars().count();
    for (at, line) in wrap(text, WIDTH - indent).into_iter().enumerate() {
        let _ = writeln!(out, "{}{line}", if at == 0 { mark.to_owned() } else { " ".repeat(indent) });
    }
}

fn head(out: &mut String, name: &str, text: &str) {
    push_wrapped(out, &format!("{name:<HEAD$} "), text);
}

/// `3T1g` → `³T1g`.
fn term(symbol: &str) -> String {
    let digits = symbol.len() - symbol.trim_start_matches(|c: char| c.is_ascii_digit()).len();
    let raised: String = symbol[..digits].chars().map(raised).collect();
    format!("{raised}{}", irrep(&symbol[digits..]))
}

/// `Sigma_g-` → `Σg⁻`: the sign of Σ stands high.
fn irrep(name: &str) -> String {
    pretty(name).replace('+', "⁺").replace('-', "⁻")
}

fn raised(digit: char) -> char {
    digit.to_digit(10).and_then(|value| SUPERSCRIPTS.get(value as usize)).copied().unwrap_or(digit)
}

/// `t2g^3 eg^1` → `t2g³ eg¹`.
fn configuration(text: &str) -> String {
    let mut after = false;
    let raised_powers: String = text
        .chars()
        .filter_map(|c| match c {
            '^' => {
                after = true;
                None
            }
            c if after && c.is_ascii_digit() => Some(raised(c)),
            c => {
                after = false;
                Some(c)
            }
        })
        .collect();
    pretty(&raised_powers)
}

/// A whole number with thin groups only where it is long.
fn whole(value: f64) -> String {
    let digits = format!("{value:.0}");
    let mut grouped = String::new();
    for (at, digit) in digits.chars().enumerate() {
        if at > 0 && (digits.len() - at) % 3 == 0 && digits.len() > 4 {
            grouped.push(' ');
        }
        grouped.push(digit);
    }
    grouped
}

fn configuration_text(entry: &ConfigurationEntry, document: &StatesDocument, options: StatesOptions) -> String {
    let mut out = String::new();
    let shells = if entry.shells.is_empty() { "closed shells".to_owned() } else { configuration(&entry.text) };
    let kinds = entry.terms.len();
    let count: usize = entry.terms.iter().map(|kind| kind.count).sum();
    out.push('\n');
    head(
        &mut out,
        "Configuration",
        &format!(
            "{shells} · {} electron{} · {} microstate{} · {count} term{} of {kinds} kind{}",
            entry.electrons,
            plural(entry.electrons as usize),
            whole(entry.microstates),
            if entry.microstates > 1.5 { "s" } else { "" },
            plural(count),
            plural(kinds)
        ),
    );
    let ground: Vec<String> = entry.ground.terms.iter().map(|symbol| term(symbol)).collect();
    let level = entry.ground.j.as_ref().map_or(String::new(), |j| format!(", lowest level J = {j}"));
    let named = if ground.len() > 1 { format!("one of {}", ground.join(", ")) } else { ground.join("") };
    head(&mut out, "Ground term", &format!("{named}{level}: {}", entry.ground.caution));
    let ground = entry.terms.iter().filter(|kind| entry.ground.terms.contains(&kind.term));
    for (kind, verdict) in ground.filter_map(|kind| Some((kind, jahn_teller(&kind.jahn_teller)?))) {
        head(&mut out, "Jahn–Teller", &format!("{}: {verdict}", term(&kind.term)));
    }
    out.push('\n');
    let file = document.file.is_some();
    let mut rows = table();
    let mut header = vec!["Term", "", "States"];
    if options.spin_orbit {
        header.push("Spin–orbit components");
        header.push("Split");
    }
    rows.set_header(header);
    for kind in &entry.terms {
        let times = if kind.count == 1 { String::new() } else { format!("{} ×", kind.count) };
        let mut row = vec![term(&kind.term), times, whole(kind.states as f64)];
        if options.spin_orbit {
            row.push(kind.spin_orbit.as_ref().map_or("beyond what is kept".to_owned(), |parts| component_sum(parts)));
            row.push(split(kind.first_order_splitting, kind.multiplicity).to_owned());
        }
        rows.add_row(row);
    }
    for column in 1..3 {
        if let Some(column) = rows.column_mut(column) {
            column.set_cell_alignment(CellAlignment::Right);
        }
    }
    push_table(&mut out, &rows);
    if options.spin_orbit {
        out.push_str(&level_stability(entry, file));
    }
    out
}

fn plural(count: usize) -> &'static str {
    if count == 1 { "" } else { "s" }
}

fn split(first_order: bool, multiplicity: u16) -> &'static str {
    match (multiplicity, first_order) {
        (1, _) => "no spin",
        (_, true) => "first order",
        (_, false) => "second order",
    }
}

/// What the Jahn–Teller theorem says of the spin–orbit levels of the ground terms, where it says more than stability.
fn level_stability(entry: &ConfigurationEntry, file: bool) -> String {
    let mut out = String::new();
    let mut told: Vec<&str> = Vec::new();
    let ground = entry.terms.iter().filter(|kind| entry.ground.terms.contains(&kind.term));
    for component in ground.flat_map(|kind| kind.spin_orbit.iter().flatten()) {
        if component.jahn_teller.verdict == "active" && !told.contains(&component.irrep.as_str()) {
            if told.is_empty() {
                out.push('\n');
            }
            told.push(&component.irrep);
            let verdict = jahn_teller(&component.jahn_teller).unwrap_or_default();
            let of = if file { "in this molecule " } else { "" };
            push_wrapped(&mut out, "", &format!("Level {}: {of}{verdict}", component_name(component)));
        }
    }
    out
}

/// In words; nothing for what is stable or an atom.
fn jahn_teller(entry: &JahnTellerEntry) -> Option<String> {
    match entry.verdict {
        "linear" => Some(
            "degenerate, but linear: no vibration splits it in first order; bending does in second (Renner–Teller)"
                .to_owned(),
        ),
        "active" => {
            let mode = |mode: &ModeEntry| match mode.in_molecule {
                None => pretty(&mode.irrep.to_lowercase()),
                Some(count) => format!("{} ({count} here)", pretty(&mode.irrep.to_lowercase())),
            };
            let modes: Vec<String> = entry.modes.iter().map(mode).collect();
            let none = !entry.modes.is_empty() && entry.modes.iter().all(|mode| mode.in_molecule == Some(0));
            let rest = if none { "; the molecule has none of them" } else { "" };
            Some(format!("degenerate; vibrations that split it in first order: {}{rest}", modes.join(", ")))
        }
        _ => None,
    }
}

/// `E1/2g (Γ6g)`, `J = 5/2`, `Σ+ (Ω = 0+)`.
fn component_name(component: &ComponentEntry) -> String {
    let name = irrep(&component.irrep);
    match (&component.gamma, &component.quantum_number) {
        (Some(gamma), _) => format!("{name} ({})", pretty(gamma)),
        (None, Some(_))
            if component.irrep.contains('_') && !component.irrep.starts_with(|c: char| c.is_alphabetic()) =>
        {
            format!("J = {name}")
        }
        (None, Some(number)) => format!("{name} ({number})"),
        (None, None) => name,
    }
}

/// All components of a term in one line.
#[must_use]
pub fn component_sum(components: &[ComponentEntry]) -> String {
    let part = |component: &ComponentEntry| {
        let name = component_name(component);
        if component.count == 1 { name } else { format!("{} {name}", component.count) }
    };
    components.iter().map(part).collect::<Vec<_>>().join(" + ")
}

/// Levels, one a line.
#[must_use]
pub fn level_lines(levels: &[LevelEntry]) -> String {
    let mut rows = table();
    for level in levels {
        let name = if level.level.starts_with('J') { level.level.clone() } else { term(&level.level) };
        let odd = if level.parity == "odd" { " odd" } else { "" };
        rows.add_row([format!("{name}{odd}"), component_sum(&level.components)]);
    }
    let mut out = String::new();
    push_table(&mut out, &rows);
    out
}

fn transitions_text(transitions: &[TransitionEntry]) -> String {
    let mut out = String::from("\nTransitions\n");
    let mut rows = table();
    rows.set_header([
        "From",
        "To",
        "Spin",
        "Electric dipole",
        "Magnetic dipole",
        "Quadrupole",
        "Electric dipole by spin–orbit coupling",
    ]);
    let open = |rule: &&TransitionEntry| {
        rule.electric_dipole.allowed
            || rule.magnetic_dipole.allowed
            || rule.electric_quadrupole.allowed
            || rule.spin_orbit.allowed
    };
    let all = transitions.len() <= TRANSITIONS_IN_TEXT;
    for rule in transitions.iter().filter(|rule| all || open(rule)) {
        let cell = |allowed: bool, components: &[String]| {
            if allowed { components.join(", ") } else { "–".to_owned() }
        };
        let borrowed = &rule.spin_orbit;
        let through = match (rule.electric_dipole.allowed, borrowed.allowed) {
            (true, _) | (false, false) => "–".to_owned(),
            (false, true) => {
                let order = ["", "first", "second", "third"].get(usize::from(borrowed.order)).unwrap_or(&"higher");
                format!("{} ({order} order)", borrowed.components.join(", "))
            }
        };
        rows.add_row([
            term(&rule.from),
            term(&rule.to),
            if rule.spin_allowed { "allowed" } else { "forbidden" }.to_owned(),
            cell(rule.electric_dipole.allowed, &rule.electric_dipole.components),
            cell(rule.magnetic_dipole.allowed, &rule.magnetic_dipole.components),
            if rule.electric_quadrupole.allowed { "allowed" } else { "–" }.to_owned(),
            through,
        ]);
    }
    push_table(&mut out, &rows);
    let closed = transitions.len() - transitions.iter().filter(open).count();
    if !all && closed > 0 {
        let _ = writeln!(out, "{closed} more pairs: nothing allowed");
    }
    out
}

fn kinds(list: &[KindEntry]) -> String {
    let kind = |kind: &KindEntry| {
        if kind.count == 1 { term(&kind.term) } else { format!("{} {}", kind.count, term(&kind.term)) }
    };
    list.iter().map(kind).collect::<Vec<_>>().join(" + ")
}

fn correlation_text(correlation: &CorrelationEntry) -> String {
    let mut out = String::new();
    out.push('\n');
    head(
        &mut out,
        "Free ion",
        &format!(
            "{} · {} microstates · orbitals in the field {}",
            configuration(&correlation.free_ion),
            whole(correlation.microstates),
            pretty(&correlation.orbitals)
        ),
    );
    out.push_str("\nWeak field: terms of the free ion and what they become\n");
    let mut rows = table();
    for free in &correlation.weak_field {
        let times = if free.count == 1 { String::new() } else { format!("{} ×", free.count) };
        rows.add_row([times, term(&free.term), "→".to_owned(), kinds(&free.becomes)]);
    }
    push_table(&mut out, &rows);
    out.push_str("\nStrong field: ways to fill the orbitals and their terms\n");
    if correlation.strong_field.len() <= FILLINGS_IN_TEXT {
        for filling in &correlation.strong_field {
            push_wrapped(&mut out, &format!("{:<16} ", configuration(&filling.configuration)), &kinds(&filling.terms));
        }
    } else {
        let _ = writeln!(out, "{} ways; all of them are in the JSON output", correlation.strong_field.len());
    }
    out.push('\n');
    let agree = if correlation.lists_agree { "both lists count" } else { "the lists DISAGREE; the weak field counts" };
    head(&mut out, "Together", &format!("{agree} {}", kinds(&correlation.terms)));
    out
}
