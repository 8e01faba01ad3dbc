//! The report of `audit` for people: the verdict first, then the numbers.
//!
//! Not here: any number that the document does not hold.

use super::audit::{AuditEntry, PairEntry, RetentionEntry, SubgroupEntry};
use super::document::Document;
use super::text::{EV_PER_HARTREE, geometry_head, head, push_table, table, title};
use super::unicode::pretty;
use crate::model::Spin;
use comfy_table::CellAlignment;
use std::fmt::Write as _;

/// Mixed orbitals and operations shown when not all are asked for.
const SHOWN: usize = 12;

/// The whole report of `audit`.
#[must_use]
pub fn audit_text(document: &Document, all: bool) -> String {
    let mut out = title(document);
    out.push_str("\n\n");
    let Some(audit) = &document.audit else { return out };
    head(&mut out, "Verdict", &audit.summary);
    for (at, origin) in audit.origins.iter().enumerate() {
        head(&mut out, if at == 0 { "Likely from" } else { "" }, origin);
    }
    out.push_str(&geometry_head(&document.geometry));
    out.push_str(&densities(audit));
    out.push_str(&spin(audit));
    head(
        &mut out,
        "Limits",
        &format!(
            "an operation is kept up to {} electrons carried out of place (--carried); an orbital is of one irrep from \
             weight {} (--pure), at one energy within {} hartree (--degeneracy)",
            audit.limits.electrons_carried, audit.limits.pure, audit.limits.degeneracy_hartree
        ),
    );
    out.push_str(&retention(audit, all));
    out.push_str(&mixed(audit, all));
    if let Some(subgroup) = &audit.subgroup {
        out.push_str(&subgroup_text(document, subgroup, all));
    }
    for caution in &document.cautions {
        head(&mut out, "Caution", caution);
    }
    out
}

fn densities(audit: &AuditEntry) -> String {
    let mut out = String::new();
    let kept = &audit.kept_group;
    let names = [
        ("total", &kept.total_density),
        ("alpha", &kept.alpha_density),
        ("beta", &kept.beta_density),
        ("spin", &kept.spin_density),
    ];
    let spin_is_there = audit.retention.first().is_some_and(|row| row.spin.is_some());
    let parts: Vec<String> = names
        .iter()
        .filter(|(density, _)| *density != "spin" || spin_is_there)
        .map(|(density, name)| format!("{density} {}", pretty(name)))
        .collect();
    head(&mut out, "Kept", &parts.join(", "));
    if let Some(subgroup) = &audit.subgroup {
        head(&mut out, "", &format!("{} of all densities: {}", pretty(&subgroup.point_group), subgroup.placed));
    }
    if audit.operations_lost.is_empty() {
        return out;
    }
    let lost: Vec<String> = if document_is_linear(audit) {
        families(&audit.operations_lost)
    } else {
        audit.operations_lost.iter().map(|symbol| pretty(symbol)).collect()
    };
    let text = if lost.len() > 2 * SHOWN {
        format!("{}, … ({} of {})", lost[..2 * SHOWN].join(", "), lost.len(), audit.retention.len())
    } else {
        format!("{} ({} of {})", lost.join(", "), audit.operations_lost.len(), audit.retention.len())
    };
    head(&mut out, "Lost", &text);
    out
}

/// Operations of a linear group are a sample of infinitely many.
fn document_is_linear(audit: &AuditEntry) -> bool {
    audit.retention.iter().any(|row| row.operation == "C(phi)")
}

/// Symbols without their angles and running numbers, each once.
fn families(symbols: &[String]) -> Vec<String> {
    let mut found: Vec<String> = Vec::new();
    for symbol in symbols {
        let family = pretty(symbol.split('(').next().unwrap_or(symbol));
        let family = if symbol.contains("phi)") { format!("{family}(φ)") } else { family };
        if !found.contains(&family) {
            found.push(family);
        }
    }
    found
}

fn atoms(pair: &PairEntry) -> String {
    let side = |shares: &[super::audit::AtomShare]| {
        let parts: Vec<String> =
            shares.iter().take(4).map(|share| format!("{} {:.0} %", share.atom, 100.0 * share.share)).collect();
        if parts.is_empty() { "spread out".to_owned() } else { parts.join(", ") }
    };
    if pair.beta.is_empty() {
        side(&pair.alpha)
    } else {
        format!("alpha on {}; beta on {}", side(&pair.alpha), side(&pair.beta))
    }
}

fn spin(audit: &AuditEntry) -> String {
    let mut out = String::new();
    let ideal = audit.s_squared_ideal;
    match (audit.s_squared, audit.s_squared_contamination) {
        (Some(value), Some(contamination)) => {
            // +0 for values that round to −0.
            let text = format!("{value:.6}, ideal {ideal:.2}, contamination {:+.6}", contamination + 0.0);
            head(&mut out, "⟨S²⟩", &text.replace("-0.000000", "+0.000000"));
        }
        _ => head(
            &mut out,
            "⟨S²⟩",
            &format!("not known from these occupations; {ideal:.2} for the numbers of electrons"),
        ),
    }
    for (at, pair) in audit.magnetic_pairs.iter().enumerate() {
        let name = if at == 0 { "Magnetic" } else { "" };
        head(&mut out, name, &format!("pair with overlap {:.4}: {}", pair.overlap, atoms(pair)));
    }
    for (at, pair) in audit.unpaired.iter().enumerate() {
        head(&mut out, if at == 0 { "Unpaired" } else { "" }, &atoms(pair));
    }
    out
}

fn number(value: Option<f64>) -> String {
    value.map_or_else(|| "—".to_owned(), |value| format!("{value:.6}"))
}

/// The worst operations, or all.
fn retention(audit: &AuditEntry, all: bool) -> String {
    let mut rows: Vec<&RetentionEntry> = audit.retention.iter().collect();
    let worst = |row: &RetentionEntry| {
        [Some(row.total), Some(row.alpha), row.beta, row.spin].into_iter().flatten().fold(1.0, f64::min)
    };
    let mut out = String::new();
    if !all {
        rows.sort_by(|a, b| (worst(a) * 1e9).round().total_cmp(&(worst(b) * 1e9).round()));
        rows.truncate(SHOWN);
    }
    let more = audit.retention.len() - rows.len();
    let hidden = if more > 0 {
        format!(", the {SHOWN} worst of {} (--all shows every one)", audit.retention.len())
    } else {
        String::new()
    };
    let _ = writeln!(out, "\nWhat operations keep of the densities{hidden}");
    let mut printed = table();
    printed.set_header(["", "total", "alpha", "beta", "spin", "alpha→beta"]);
    for row in rows {
        printed.add_row([
            pretty(&row.operation),
            format!("{:.6}", row.total),
            format!("{:.6}", row.alpha),
            number(row.beta),
            number(row.spin),
            number(row.alpha_to_beta),
        ]);
    }
    for column in 1..6 {
        if let Some(column) = printed.column_mut(column) {
            column.set_cell_alignment(CellAlignment::Right);
        }
    }
    push_table(&mut out, &printed);
    out
}

fn spin_word(spin: Spin) -> &'static str {
    match spin {
        Spin::Alpha => "alpha",
        Spin::Beta => "beta",
    }
}

fn mixed(audit: &AuditEntry, all: bool) -> String {
    let mut out = String::new();
    if audit.mixed_orbitals.is_empty() {
        return out;
    }
    let n = audit.mixed_orbitals.len();
    let shown = if all { n } else { n.min(SHOWN) };
    let hidden = if shown < n { format!(", the {shown} worst of {n} (--all shows every one)") } else { String::new() };
    let _ = writeln!(out, "\nOrbitals of several irreps{hidden}");
    let mut printed = table();
    printed.set_header(["orbital", "spin", "eV", "", "weights", ""]);
    for entry in &audit.mixed_orbitals[..shown] {
        let weights: Vec<String> = entry
            .weights
            .iter()
            .filter(|weight| weight.weight >= 5e-4)
            .take(5)
            .map(|weight| format!("{} {:.3}", pretty(&weight.irrep), weight.weight))
            .collect();
        printed.add_row([
            entry.index.to_string(),
            spin_word(entry.spin).to_owned(),
            entry.energy_hartree.map_or(String::new(), |energy| format!("{:.3}", energy * EV_PER_HARTREE)),
            if entry.occupied { "filled" } else { "empty" }.to_owned(),
            weights.join(", "),
            match (entry.localised, entry.at_one_energy) {
                (true, _) => "localised",
                (false, true) => "at one energy: harmless",
                (false, false) => "",
            }
            .to_owned(),
        ]);
    }
    push_table(&mut out, &printed);
    out
}

fn subgroup_text(document: &Document, subgroup: &SubgroupEntry, all: bool) -> String {
    let mut out = String::new();
    let _ = writeln!(
        out,
        "\nLabels in {} and in {}",
        pretty(&document.geometry.point_group),
        pretty(&subgroup.point_group)
    );
    head(&mut out, "Axes", &subgroup.axes_convention);
    let parts: Vec<String> = subgroup
        .correlation
        .iter()
        .map(|(above, below)| format!("{} → {}", pretty(above), pretty(below.as_str().unwrap_or_default())))
        .collect();
    head(&mut out, "Correlation", &parts.join(", "));
    let orbitals = document.orbitals.as_deref().unwrap_or_default();
    let mut printed = table();
    printed.set_header(["orbital", "spin", "eV", "e⁻", "above", "here", "purity"]);
    for (label, orbital) in subgroup.orbitals.iter().zip(orbitals) {
        if !all && orbital.occupation.unwrap_or(0.0) <= 1e-8 {
            continue;
        }
        printed.add_row([
            label.index.to_string(),
            spin_word(label.spin).to_owned(),
            orbital.energy_hartree.map_or(String::new(), |energy| format!("{:.3}", energy * EV_PER_HARTREE)),
            orbital.occupation.map_or(String::new(), |n| format!("{n:.0}")),
            pretty(&label.parent),
            pretty(&label.irrep),
            format!("{:.4}", label.purity),
        ]);
    }
    push_table(&mut out, &printed);
    if !all {
        out.push_str("orbitals with electrons; --all shows every one\n");
    }
    out
}
