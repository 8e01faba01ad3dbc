//! The document for people: the answer first, then the evidence. At most 120 columns.
//!
//! Not here: any number that the document does not hold.

use super::document::{DLevelEntry, Document, Geometry, SetEntry, ShareEntry, Source, SpinFrontier};
use super::placement::placement_lines;
use super::unicode::pretty;
use crate::group::IrrepName;
use crate::model::Spin;
use comfy_table::{CellAlignment, Table, presets};
use std::fmt::Write as _;
use std::ops::Range;

/// Hartree in electronvolts. CODATA 2018.
pub const EV_PER_HARTREE: f64 = 27.211_386_245_988;
/// Hartree in wavenumbers, cm⁻¹. CODATA 2018.
pub const WAVENUMBER_PER_HARTREE: f64 = 219_474.631_363_20;

/// Columns of the label at the left of the head's lines.
const HEAD_WIDTH: usize = 13;
/// Columns of a line of prose.
const PROSE_WIDTH: usize = 100;
/// Sets shown below and above the frontier when not all are asked for.
const SHOWN_BELOW: usize = 24;
const SHOWN_ABOVE: usize = 12;
/// A set is worth a remark below this purity.
const PURE_ENOUGH: f64 = 0.99;

/// What to show.
#[derive(Debug, Clone, Copy, Default)]
pub struct TextOptions {
    /// Every set, not only those around the frontier.
    pub all: bool,
}

/// One line of the head: a name, then text wrapped beside it.
pub(super) fn head(out: &mut String, name: &str, text: &str) {
    for (line_idx, line) in wrap(text, PROSE_WIDTH - HEAD_WIDTH).into_iter().enumerate() {
        let _ = writeln!(out, "{:<HEAD_WIDTH$} {line}", if line_idx == 0 { name } else { "" });
    }
}

/// Breaks text at blanks so that no line is longer than `width` characters.
pub(super) fn wrap(text: &str, width: usize) -> Vec<String> {
    let mut lines = vec![String::new()];
    for word in text.split_whitespace() {
        let line = lines.last_mut().expect("a line is always there");
        if !line.is_empty() && line.chars().count() + 1 + word.chars().count() > width {
            lines.push(word.to_owned());
        } else {
            if !line.is_empty() {
                line.push(' ');
            }
            line.push_str(word);
        }
    }
    lines
}

/// A sentence with the irreps in it set as people print them.
fn pretty_irreps(text: &str) -> String {
    let word = |word: &str| if word.parse::<IrrepName>().is_ok() { pretty(word) } else { word.to_owned() };
    text.split(' ').map(word).collect::<Vec<_>>().join(" ")
}

/// A number of electrons without needless decimals.
pub(super) fn count(value: f64) -> String {
    if (value - value.round()).abs() < 1e-6 { format!("{value:.0}") } else { format!("{value:.3}") }
}

pub(super) fn title(document: &Document) -> String {
    source_line(&document.source)
}

/// File, formula, title, atoms, electrons and charge.
pub(super) fn source_line(source: &Source) -> String {
    let mut parts = vec![source.file.clone(), source.formula.clone()];
    if !source.title.is_empty() {
        parts.push(format!("“{}”", source.title));
    }
    parts.push(format!("{} atom{}", source.atoms, if source.atoms == 1 { "" } else { "s" }));
    if let Some(electrons) = source.electrons {
        parts.push(format!("{} electrons", count(electrons)));
    }
    if let Some(charge) = source.charge.filter(|charge| charge.abs() > 1e-6) {
        parts.push(format!("charge {}{}", if charge > 0.0 { "+" } else { "−" }, count(charge.abs())));
    }
    parts.join(" · ")
}

/// The lines about the point group, shared by every verb that reads nuclei.
#[must_use]
pub fn geometry_head(geometry: &Geometry) -> String {
    let mut out = String::new();
    let order = geometry.order.map_or("continuous".to_owned(), |order| format!("order {order}"));
    let some_turned = geometry.placement.as_ref().is_some_and(|placement| placement.truly_turned.is_some());
    let who = if some_turned { "atoms that land" } else { "nuclei" };
    head(
        &mut out,
        "Point group",
        &format!(
            "{}  ({order}; {who} within {:.4} Å of it, rms {:.4} Å; tolerance {} Å)",
            pretty(&geometry.point_group),
            geometry.deviation_max_angstrom,
            geometry.deviation_rms_angstrom,
            format!("{:.6}", geometry.tolerance_angstrom).trim_end_matches('0').trim_end_matches('.')
        ),
    );
    if let Some(placement) = &geometry.placement {
        placement_lines(&mut out, placement, &geometry.point_group, &geometry.nuclear_group);
    }
    head(&mut out, "Axes", &geometry.axes_convention);
    for setting in &geometry.other_settings {
        let swaps: Vec<String> = setting
            .swaps
            .iter()
            .map(|(here, there)| format!("{} → {}", pretty(here), pretty(there.as_str().unwrap_or_default())))
            .collect();
        head(&mut out, "", &format!("other choice: {}: {}", setting.description, swaps.join(", ")));
    }
    if geometry.ladder.len() > 1 {
        let rungs: Vec<String> = geometry
            .ladder
            .iter()
            .map(|rung| format!("{} at {:.4} Å", pretty(&rung.point_group), rung.deviation_max_angstrom))
            .collect();
        head(&mut out, "Ladder", &rungs.join(", "));
    }
    for warning in &geometry.warnings {
        head(&mut out, "Warning", warning);
    }
    out
}

/// The whole report of `geometry`.
#[must_use]
pub fn geometry_text(document: &Document) -> String {
    format!("{}\n\n{}", title(document), geometry_head(&document.geometry))
}

/// The whole report of `label`.
#[must_use]
pub fn label_text(document: &Document, options: TextOptions) -> String {
    let mut out = title(document);
    out.push_str("\n\n");
    let sets = document.sets.as_deref().unwrap_or_default();
    out.push_str(&answer(document, sets));
    out.push_str(&geometry_head(&document.geometry));
    out.push_str(&checks(document, sets));
    let frontier = document.frontier.as_ref().map(|frontier| frontier.spins.as_slice()).unwrap_or_default();
    for spin in [Spin::Alpha, Spin::Beta] {
        let of_spin: Vec<&SetEntry> = sets.iter().filter(|set| set.spin == spin).collect();
        if of_spin.is_empty() {
            continue;
        }
        let name = match (frontier.len() > 1, spin) {
            (false, _) => "Sets",
            (true, Spin::Alpha) => "Alpha sets",
            (true, Spin::Beta) => "Beta sets",
        };
        let geometry = &document.geometry;
        let abelian = geometry.abelian_subgroup.as_ref().map(|abelian| abelian.point_group.as_str());
        let abelian = abelian.filter(|name| *name != geometry.point_group && *name != "C1");
        let frontier = frontier.iter().find(|entry| entry.spin == spin);
        out.push_str(&set_table(name, &of_spin, frontier, abelian, options));
    }
    out.push_str(&d_block(document));
    out.push_str(&active_window(document));
    out.push_str(&super::transitions_text::frontier_text(document.transitions.as_deref().unwrap_or_default()));
    if !document.cautions.is_empty() {
        out.push('\n');
        for caution in &document.cautions {
            head(&mut out, "Caution", caution);
        }
    }
    out
}

/// HOMO, LUMO, gap, irrep of the determinant.
fn answer(document: &Document, sets: &[SetEntry]) -> String {
    let mut out = String::new();
    let Some(frontier) = &document.frontier else { return out };
    let describe = |number: usize| {
        let set = &sets[number - 1];
        let label = set.label.as_deref().map_or_else(|| format!("set {number} (no irrep)"), pretty);
        let energy = set.energy_hartree.map_or(String::new(), |energy| format!("  {:.3} eV", energy * EV_PER_HARTREE));
        let electrons =
            set.electrons.filter(|n| *n > 0.0).map_or(String::new(), |n| format!("  {} electrons", count(n)));
        format!("{label}{energy}{electrons}{}", if set.complete { "" } else { "  (set incomplete)" })
    };
    for spin in &frontier.spins {
        let suffix = match (frontier.spins.len() > 1, spin.spin) {
            (false, _) => "",
            (true, Spin::Alpha) => " α",
            (true, Spin::Beta) => " β",
        };
        if let Some(homo) = spin.homo {
            head(&mut out, &format!("HOMO{suffix}"), &describe(homo));
        }
        for &somo in &spin.somo {
            head(&mut out, &format!("SOMO{suffix}"), &describe(somo));
        }
        if let Some(lumo) = spin.lumo {
            head(&mut out, &format!("LUMO{suffix}"), &describe(lumo));
        }
        if let Some(gap) = spin.gap_hartree {
            let word = if gap < 0.0 { "; an empty set lies below a filled one" } else { "" };
            head(
                &mut out,
                &format!("Gap{suffix}"),
                &format!("{:.3} eV between HOMO and LUMO (of orbitals, not a band energy){word}", gap * EV_PER_HARTREE),
            );
        }
    }
    if frontier.spins.iter().any(|spin| spin.homo.is_some() || !spin.somo.is_empty()) {
        head(&mut out, "Determinant", &pretty_irreps(&frontier.determinant));
        let totals: Vec<String> = frontier
            .electrons_per_irrep
            .iter()
            .map(|(irrep, n)| format!("{} {}", pretty(irrep), count(n.as_f64().unwrap_or(0.0))))
            .collect();
        head(&mut out, "Electrons", &totals.join(", "));
    }
    out
}

/// Orthonormality, purity and completeness in one or two lines.
fn checks(document: &Document, sets: &[SetEntry]) -> String {
    let mut out = String::new();
    if let Some(basis) = &document.basis {
        head(
            &mut out,
            "Orbitals",
            &format!(
                "orthonormal to {:.0e} over {} functions; read as: {}",
                basis.orthonormality_residual, basis.functions, basis.convention
            ),
        );
    }
    let lowest = sets.iter().map(|set| set.purity).fold(1.0, f64::min);
    let unlabelled = sets.iter().filter(|set| set.irrep.is_none()).count();
    let incomplete = sets.iter().filter(|set| set.irrep.is_some() && !set.complete).count();
    let mut text = format!("lowest purity {lowest:.6} over {} sets", sets.len());
    if unlabelled > 0 {
        let _ = write!(text, "; {unlabelled} without an irrep");
    }
    if incomplete > 0 {
        let _ = write!(text, "; {incomplete} incomplete");
    }
    head(&mut out, "Labels", &text);
    out
}

pub(super) fn table() -> Table {
    let mut table = Table::new();
    table.load_style(presets::NOTHING);
    table
}

/// Lines of a table without blanks at their ends.
pub(super) fn push_table(out: &mut String, table: &Table) {
    for line in table.lines() {
        let _ = writeln!(out, "{}", line.trim_end());
    }
}

pub(super) fn made_of(shares: &[ShareEntry]) -> String {
    let parts: Vec<String> = shares
        .iter()
        .filter(|share| share.share >= 0.05)
        .take(3)
        .map(|share| format!("{:.0} % {} {}", 100.0 * share.share, share.atoms, share.shell))
        .collect();
    parts.join(", ")
}

/// The sets of one spin that are listed: those around the frontier, or all.
pub(super) fn shown(sets: &[&SetEntry], frontier: Option<&SpinFrontier>, options: TextOptions) -> Range<usize> {
    let place = |number: Option<usize>| number.and_then(|number| sets.iter().position(|set| set.set == number));
    let homo = place(frontier.and_then(|frontier| frontier.homo.or(frontier.somo.last().copied())));
    match homo {
        _ if options.all || sets.len() <= SHOWN_BELOW + SHOWN_ABOVE => 0..sets.len(),
        None => 0..SHOWN_BELOW + SHOWN_ABOVE,
        Some(homo) => (homo + 1).saturating_sub(SHOWN_BELOW)..(homo + 1 + SHOWN_ABOVE).min(sets.len()),
    }
}

/// One spin's sets; `abelian` names the subgroup whose labels stand beside, where it is another group.
fn set_table(
    name: &str,
    sets: &[&SetEntry],
    frontier: Option<&SpinFrontier>,
    abelian: Option<&str>,
    options: TextOptions,
) -> String {
    let shown = shown(sets, frontier, options);
    let mut out = String::new();
    let hidden = if shown.len() < sets.len() {
        format!(", {} to {} of {} (--all shows every one)", shown.start + 1, shown.end, sets.len())
    } else {
        String::new()
    };
    let _ = writeln!(out, "\n{name}{hidden}");
    let mut rows = table();
    let in_subgroup = abelian.map(|abelian| format!("in {}", pretty(abelian))).unwrap_or_default();
    rows.set_header(["label", "", "eV", "e⁻", "purity", "orbitals", &in_subgroup, "made of", ""]);
    for set in &sets[shown] {
        let mark = match frontier {
            Some(frontier) if frontier.homo == Some(set.set) => "HOMO",
            Some(frontier) if frontier.lumo == Some(set.set) => "LUMO",
            Some(frontier) if frontier.somo.contains(&set.set) => "SOMO",
            _ => "",
        };
        let orbitals: Vec<usize> = set.orbitals.iter().map(|orbital| orbital - 1).collect();
        rows.add_row([
            set.label.as_deref().map_or_else(|| "—".to_owned(), pretty),
            mark.to_owned(),
            set.energy_hartree.map_or(String::new(), |energy| format!("{:.3}", energy * EV_PER_HARTREE)),
            set.electrons.map_or(String::new(), count),
            format!("{:.4}", set.purity),
            crate::labelling::composition::ranges(&orbitals),
            abelian.and(set.abelian_irreps.as_ref()).map_or(String::new(), |irreps| irreps.replace(" + ", "+")),
            made_of(&set.character),
            remark(set),
        ]);
    }
    for column in [2, 3, 4] {
        if let Some(column) = rows.column_mut(column) {
            column.set_cell_alignment(CellAlignment::Right);
        }
    }
    push_table(&mut out, &rows);
    out
}

/// What is unusual about a set.
pub(super) fn remark(set: &SetEntry) -> String {
    let mut parts = Vec::new();
    if let Some(content) = &set.content {
        parts.push(format!("{} turned among themselves", pretty(content)));
    } else if set.irrep.is_none() {
        parts.push("no irrep reaches the purity limit".to_owned());
    } else if !set.complete && set.orbitals.len() < set.degeneracy {
        parts.push(format!("{} of {} partners at one energy", set.orbitals.len(), set.degeneracy));
    }
    if set.irrep.is_some() && set.purity < PURE_ENOUGH {
        parts.push("impure".to_owned());
    }
    if !set.accidental_with.is_empty() {
        parts.push("accidental degeneracy".to_owned());
    }
    parts.join("; ")
}

fn d_block(document: &Document) -> String {
    let mut out = String::new();
    for block in &document.d_block {
        let _ = writeln!(
            out,
            "\nMetal d of {} (gaps are of orbitals: no ligand-field parameter, no band energy)",
            block.metals
        );
        let mut rows = table();
        rows.set_header(["label", "spin", "eV", "metal d", "above the one before"]);
        for level in &block.levels {
            rows.add_row([
                level.label.as_deref().map_or_else(|| format!("set {}", level.set), pretty),
                format!("{:?}", level.spin).to_lowercase(),
                level.energy_hartree.map_or(String::new(), |energy| format!("{:.3}", energy * EV_PER_HARTREE)),
                format!("{:.0} %", 100.0 * level.d_share),
                gap(level),
            ]);
        }
        push_table(&mut out, &rows);
    }
    out
}

fn gap(level: &DLevelEntry) -> String {
    level.gap_to_previous_hartree.map_or(String::new(), |gap| {
        format!("{:.3} eV = {:.0} cm⁻¹", gap * EV_PER_HARTREE, gap * WAVENUMBER_PER_HARTREE)
    })
}

fn active_window(document: &Document) -> String {
    let mut out = String::new();
    if document.active_window.is_empty() {
        return out;
    }
    out.push_str("\nWindow around the frontier\n");
    let join = |numbers: &[usize]| numbers.iter().map(ToString::to_string).collect::<Vec<_>>().join(" ");
    let mut rows = table();
    rows.set_header(["label", "spin", "orbitals from 1", "from 0", "within irrep, from 1", ""]);
    for entry in &document.active_window {
        rows.add_row([
            entry.label.as_deref().map_or_else(|| format!("set {}", entry.set), pretty),
            format!("{:?}", entry.spin).to_lowercase(),
            join(&entry.orbitals),
            join(&entry.orbitals_from_zero),
            join(&entry.within_irrep),
            if entry.cut { "the window cuts this set: widen it" } else { "" }.to_owned(),
        ]);
    }
    push_table(&mut out, &rows);
    out
}
