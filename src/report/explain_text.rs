//! The reasoning behind a label or a transition as a chemist would write it by hand.
//!
//! Not here: any number that the documents do not hold.

use super::explain::{CharacterEntry, ExplainDocument, ExplainedOrbital, ReductionEntry};
use super::explain_pair::{ExplainTransitionDocument, OperatorComponent, ProductCharacter};
use super::text::{EV_PER_HARTREE, head, push_table, source_line, table};
use super::unicode::pretty;
use crate::group::symbols;
use crate::labelling::composition::ranges;
use comfy_table::CellAlignment;
use std::fmt::Write as _;

/// Classes beside each other before the table goes on below.
const CLASSES_IN_LINE: usize = 8;
/// Of groups with more irreps only those that occur are written out.
const IRREPS_WRITTEN_OUT: usize = 12;
/// A multiplicity below this is none.
const NONE: f64 = 5e-4;

/// A number as short as it is exact: whole, or with four decimals.
fn number(value: f64) -> String {
    if (value - value.round()).abs() < 5e-5 { format!("{}", value.round() + 0.0) } else { format!("{value:.4}") }
}

/// Four decimals, zero without a sign.
fn four(value: f64) -> String {
    let text = format!("{value:.4}");
    if text == "-0.0000" { text[1..].to_owned() } else { text }
}

/// Deviations below this are rounding, whose last digits hang on the processor.
const ROUNDING: f64 = 1e-8;

fn small(value: f64) -> String {
    if value < ROUNDING { "<1e-8".to_owned() } else { format!("{value:.0e}") }
}

fn percent(value: f64) -> String {
    format!("{:.2} %", 100.0 * value)
}

fn column_heads<'a>(classes: impl Iterator<Item = (&'a str, Option<f64>)>) -> Vec<String> {
    let name = |(symbol, angle): (&str, Option<f64>)| match angle {
        Some(angle) => format!("{} {angle:.1}°", symbols::pretty(symbol)),
        None => symbols::pretty(symbol),
    };
    classes.map(name).collect()
}

/// Rows of numbers under classes, a few classes at a time; `last` are columns after the last class.
fn class_table(out: &mut String, heads: &[String], rows: &[(String, Vec<String>)], last: &[(&str, Vec<String>)]) {
    let starts: Vec<usize> = (0..heads.len()).step_by(CLASSES_IN_LINE).collect();
    for &start in &starts {
        let end = (start + CLASSES_IN_LINE).min(heads.len());
        let ends_here = end == heads.len();
        let mut printed = table();
        let tail = if ends_here { last } else { &[] };
        let header = heads[start..end].iter().cloned().chain(tail.iter().map(|(name, _)| (*name).to_owned()));
        printed.set_header([String::new()].into_iter().chain(header));
        for (at, (name, cells)) in rows.iter().enumerate() {
            let cells = cells[start..end].iter().cloned();
            let tail = tail.iter().map(|(_, values)| values[at].clone());
            printed.add_row([name.clone()].into_iter().chain(cells).chain(tail));
        }
        for column in 1..=end - start + tail.len() {
            if let Some(column) = printed.column_mut(column) {
                column.set_cell_alignment(CellAlignment::Right);
            }
        }
        push_table(out, &printed);
        if !ends_here {
            out.push('\n');
        }
    }
}

/// Whether a multiplicity is worth its line.
fn written_out(entry: &ReductionEntry, all: &[ReductionEntry]) -> bool {
    all.len() <= IRREPS_WRITTEN_OUT || entry.multiplicity.abs() >= NONE
}

fn reduction_table(out: &mut String, heads: &[String], reduction: &[ReductionEntry], order: usize, product: &str) {
    let has_terms = reduction.iter().all(|entry| !entry.terms.is_empty());
    if has_terms {
        let _ = writeln!(out, "\nReduction: n(Γ) = 1/{order} Σ {product}, in the table {product} class by class");
    } else {
        // Of a continuous group the classes are without number, of an atom the operations a sample.
        out.push_str("\nReduction\n");
    }
    let shown: Vec<&ReductionEntry> = reduction.iter().filter(|entry| written_out(entry, reduction)).collect();
    let name = |entry: &&ReductionEntry| {
        let star = if entry.constituents > 1 { "*" } else { "" };
        format!("{}{star}", pretty(&entry.irrep))
    };
    let n: Vec<String> = shown.iter().map(|entry| number(entry.multiplicity)).collect();
    if has_terms {
        let rows: Vec<(String, Vec<String>)> =
            shown.iter().map(|entry| (name(entry), entry.terms.iter().map(|&term| number(term)).collect())).collect();
        let sums = shown.iter().map(|entry| number(entry.terms.iter().sum())).collect();
        class_table(out, heads, &rows, &[("Σ", sums), ("n(Γ)", n)]);
    } else {
        let rows: Vec<(String, Vec<String>)> = shown.iter().zip(n).map(|(entry, n)| (name(entry), vec![n])).collect();
        class_table(out, &["n(Γ)".to_owned()], &rows, &[]);
    }
    if shown.iter().any(|entry| entry.constituents > 1) {
        out.push_str(" *  a real pair of complex-conjugate irreps: Σ χ_Γ² is 2h, so n(Γ) = Σ/2h\n");
    }
    if shown.len() < reduction.len() {
        let _ = writeln!(out, " n(Γ) of the other {} irreps is below {NONE}", reduction.len() - shown.len());
    }
}

/// The explanation of one set.
#[must_use]
pub fn explain_text(document: &ExplainDocument) -> String {
    let mut out = format!("{}\n\n", source_line(&document.source));
    let set = &document.set;
    let label = set.label.as_deref().map_or_else(|| format!("set {} (no irrep)", set.set), pretty);
    let from_zero: Vec<usize> = set.orbitals.iter().map(|orbital| orbital - 1).collect();
    let energy = set.energy_hartree.map_or(String::new(), |energy| format!(" at {:.3} eV", energy * EV_PER_HARTREE));
    let electrons = set.electrons.map_or(String::new(), |n| format!(", {} electrons", number(n)));
    let spin = format!("{:?}", set.spin).to_lowercase();
    let plural = if set.orbitals.len() == 1 { "" } else { "s" };
    head(&mut out, "Set", &format!("{label}: {spin} orbital{plural} {}{energy}{electrons}", ranges(&from_zero)));
    head(&mut out, "Asked for", &document.asked);
    let group = pretty(&document.point_group);
    head(&mut out, "Point group", &format!("{group}, {} operations summed over", document.operations));
    for (at, conclusion) in document.conclusions.iter().enumerate() {
        head(&mut out, if at == 0 { "Conclusion" } else { "" }, conclusion);
    }
    if !document.characters.is_empty() {
        characters(&mut out, document);
    }
    let heads = column_heads(document.characters.iter().map(|entry| (entry.class.as_str(), entry.angle_degrees)));
    reduction_table(&mut out, &heads, &document.reduction, document.operations, "g χ χ_Γ");
    projection(&mut out, document);
    connections(&mut out, document);
    out
}

fn characters(out: &mut String, document: &ExplainDocument) {
    let sample = if document.characters.iter().any(|entry| entry.angle_degrees.is_some()) {
        "; a class of turns at the angle given"
    } else {
        ""
    };
    let _ = writeln!(out, "\nCharacters: χ(R) = Σ ⟨i|R|i⟩ over the set, mean over each class{sample}");
    let row = |of: &dyn Fn(&CharacterEntry) -> String| document.characters.iter().map(of).collect::<Vec<_>>();
    let mut rows = vec![
        ("χ measured".to_owned(), row(&|entry| four(entry.measured))),
        ("± in the class".to_owned(), row(&|entry| small(entry.spread))),
    ];
    if let Some(irrep) = &document.set.irrep {
        let exact = row(&|entry| entry.exact.clone().unwrap_or_default());
        rows.push((format!("{} of the table", pretty(irrep)), exact));
        // Cosines are worth their value beside.
        if document.characters.iter().any(|entry| entry.exact.as_ref().is_some_and(|exact| exact.contains("cos"))) {
            rows.push(("= ".to_owned(), row(&|entry| entry.table.map_or(String::new(), number))));
        }
    }
    let heads = column_heads(document.characters.iter().map(|entry| (entry.class.as_str(), entry.angle_degrees)));
    class_table(out, &heads, &rows, &[]);
}

fn projection(out: &mut String, document: &ExplainDocument) {
    let limit = document.thresholds.purity;
    let _ = writeln!(
        out,
        "\nProjection of each orbital: w(Γ) = d/h Σ χ_Γ(R) ⟨i|R|i⟩ over operations; an irrep from {limit:.2} on"
    );
    let listed = |weights: &[super::document::Weight]| {
        let parts = weights.iter().filter(|weight| weight.weight >= 1e-4).take(4);
        parts
            .map(|weight| format!("{} {}", percent(weight.weight), pretty(&weight.irrep)))
            .collect::<Vec<_>>()
            .join(", ")
    };
    let mut rows = table();
    rows.set_header(["orbital", "eV", "weights", "partners", "component", "abelian"]);
    for orbital in &document.orbitals {
        let partners: Vec<String> =
            orbital.partners.iter().map(|partner| format!("{} {}", partner.partner, percent(partner.weight))).collect();
        rows.add_row([
            orbital.index.to_string(),
            orbital.energy_hartree.map_or(String::new(), |energy| format!("{:.3}", energy * EV_PER_HARTREE)),
            listed(&orbital.weights),
            if partners.is_empty() { "—".to_owned() } else { partners.join(", ") },
            orbital.component.clone().unwrap_or_else(|| "—".to_owned()),
            listed(&orbital.abelian_weights),
        ]);
    }
    push_table(out, &rows);
    let mut reasons: Vec<(&str, Vec<usize>)> = Vec::new();
    for ExplainedOrbital { index, component_reason, .. } in &document.orbitals {
        match reasons.iter_mut().find(|(reason, _)| reason == component_reason) {
            Some((_, of)) => of.push(index - 1),
            None => reasons.push((component_reason, vec![index - 1])),
        }
    }
    for (reason, of) in reasons {
        let _ = writeln!(out, " component of {}: {reason}", ranges(&of));
    }
}

fn connections(out: &mut String, document: &ExplainDocument) {
    let expected = match document.connection_of_partners {
        Some(expected) if document.set.orbitals.len() > 1 => {
            format!("; of partners 1/d = {}", number(expected))
        }
        _ => String::new(),
    };
    let sampled = if document.point_group == "Kh" { ", a sample of rotations that gives it roughly" } else { "" };
    let _ = writeln!(out, "\nDegeneracy: mean of ⟨i|R|j⟩² over the operations{sampled}{expected}");
    let mut rows = table();
    let indices: Vec<String> = document.set.orbitals.iter().map(ToString::to_string).collect();
    rows.set_header([String::new()].into_iter().chain(indices.iter().cloned()));
    for (index, row) in indices.iter().zip(&document.connections) {
        rows.add_row([index.clone()].into_iter().chain(row.iter().map(|value| format!("{value:.4}"))));
    }
    push_table(out, &rows);
    if let Some(outside) = &document.nearest_outside {
        let label = outside.label.as_deref().map_or(String::new(), |label| format!(" ({})", pretty(label)));
        let _ = writeln!(
            out,
            " nearest outside: orbital {}{label}, {:+.4} eV away, joined by {}",
            outside.index,
            outside.distance_hartree * EV_PER_HARTREE,
            small(outside.connection)
        );
    }
}

/// The explanation of one transition.
#[must_use]
pub fn explain_transition_text(document: &ExplainTransitionDocument) -> String {
    let transition = &document.transition;
    let mut out = format!("{}\n\n", source_line(&document.source));
    let gap = transition
        .energy_hartree
        .map_or(String::new(), |energy| format!(", orbital gap {:.3} eV", energy * EV_PER_HARTREE));
    let spin = format!("{:?}", transition.spin).to_lowercase();
    head(&mut out, "Transition", &format!("{} → {} ({spin}){gap}", pretty(&transition.from), pretty(&transition.to)));
    head(&mut out, "Point group", &pretty(&document.point_group));
    verdict(&mut out, document);
    for remark in &transition.remarks {
        head(&mut out, "Remark", remark);
    }
    if let Some((from, to)) = document.from_irrep.as_ref().zip(document.to_irrep.as_ref()) {
        product(&mut out, document, &pretty(from), &pretty(to));
    }
    operators(&mut out, &document.operators);
    vibrations(&mut out, document);
    out.push('\n');
    for caution in &document.cautions {
        head(&mut out, "Caution", caution);
    }
    out
}

fn verdict(out: &mut String, document: &ExplainTransitionDocument) {
    let transition = &document.transition;
    let dipole = &transition.electric_dipole;
    let text = match dipole.allowed {
        None => "no rule: a set has no irrep, or the product leaves the irreps kept".to_owned(),
        Some(true) => format!("allowed along {}: the product holds their irreps", dipole.polarisation.join(", ")),
        Some(false) => "forbidden: the product holds none of the irreps of x, y, z".to_owned(),
    };
    head(out, "E dipole", &text);
    if let Some(laporte) = &transition.laporte {
        let allowed = if matches!(laporte.as_str(), "g-u" | "u-g") { "allowed" } else { "forbidden" };
        head(out, "Laporte", &format!("{} {allowed}", laporte.replace('-', " → ")));
    }
    if let Some(strength) = dipole.oscillator_strength {
        let velocity = dipole.oscillator_strength_velocity.map_or(String::new(), |f| format!(", {f:.3} (∇)"));
        head(out, "f", &format!("{strength:.3} (r){velocity}: one-electron estimate at the orbital gap"));
    }
}

fn product(out: &mut String, document: &ExplainTransitionDocument, from: &str, to: &str) {
    let heads = column_heads(document.characters.iter().map(|entry| (entry.class.as_str(), None)));
    if !document.characters.is_empty() {
        let _ = writeln!(out, "\nProduct of the characters, class by class");
        let row = |of: &dyn Fn(&ProductCharacter) -> f64| {
            document.characters.iter().map(|entry| number(of(entry))).collect::<Vec<_>>()
        };
        let rows = [
            (from.to_owned(), row(&|entry| entry.from)),
            (to.to_owned(), row(&|entry| entry.to)),
            (format!("{from} × {to}"), row(&|entry| entry.product)),
        ];
        class_table(out, &heads, &rows, &[]);
    }
    reduction_table(out, &heads, &document.reduction, document.operations, "g χ_A χ_B χ_Γ");
    let parts: Vec<String> = document.transition.product.iter().map(|name| pretty(name)).collect();
    let _ = writeln!(out, " {from} × {to} = {}", parts.join(" + "));
}

fn operators(out: &mut String, operators: &[OperatorComponent]) {
    out.push_str("\nOperators: allowed where the product holds an irrep of the component; beside it the sum of squared moments\n");
    let mut rows = table();
    rows.set_header(["operator", "component", "irreps", "rule", "Σ|⟨i|O|j⟩|² au"]);
    for entry in operators {
        let irreps: Vec<String> = entry.irreps.iter().map(|name| pretty(name)).collect();
        let rule = match entry.allowed {
            Some(true) => "allowed",
            Some(false) => "forbidden",
            None => "no rule",
        };
        rows.add_row([
            entry.operator.to_owned(),
            entry.component.to_owned(),
            irreps.join(" + "),
            rule.to_owned(),
            format!("{:.6}", entry.strength_au),
        ]);
    }
    if let Some(column) = rows.column_mut(4) {
        column.set_cell_alignment(CellAlignment::Right);
    }
    push_table(out, &rows);
}

fn vibrations(out: &mut String, document: &ExplainTransitionDocument) {
    let vibronic = &document.transition.vibronic;
    if vibronic.is_empty() {
        return;
    }
    out.push_str("\nVibrations that open its forbidden states, first order\n");
    let mut rows = table();
    rows.set_header(["state", "vibration", "gives", "modes in the molecule", "of the file, cm⁻¹"]);
    for entry in vibronic {
        let modes: Vec<String> = entry
            .modes
            .iter()
            .map(|mode| mode.wavenumber_per_cm.map_or_else(|| format!("mode {}", mode.mode), |n| format!("{n:.0}")))
            .collect();
        rows.add_row([
            pretty(&entry.state),
            pretty(&entry.irrep),
            entry.polarisation.join(", "),
            entry.modes_in_molecule.to_string(),
            modes.join(", "),
        ]);
    }
    push_table(out, &rows);
}
