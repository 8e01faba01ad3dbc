//! The answer first: frontier, gap, group, verdict; then what to know before trusting it.

use super::Report;
use super::figures::{set_name, spin_sign};
use super::names::name;
use super::tables::{electrons, electronvolts, power_of_ten};
use crate::report::document::{Document, SetEntry};
use crate::report::unicode::pretty;
use maud::{Markup, html};

/// One line that says which file this is.
pub fn source(document: &Document) -> Markup {
    let source = &document.source;
    html! {
        p.source {
            @if !source.title.is_empty() { "“" (source.title) "” · " }
            (source.atoms) " atom" @if source.atoms != 1 { "s" }
            @if let Some(count) = source.electrons { " · " (electrons(count)) " electrons" }
            @if let Some(charge) = source.charge.filter(|charge| charge.abs() > 1e-6) {
                " · charge " (if charge > 0.0 { "+" } else { "−" }) (electrons(charge.abs()))
            }
            " · " code { (source.file) }
        }
    }
}

/// The answer as a list of terms.
pub fn answer(report: &Report<'_>) -> Markup {
    let document = report.document;
    let geometry = &document.geometry;
    let sets = document.sets.as_deref().unwrap_or_default();
    let set = |number: usize| sets.iter().find(|set| set.set == number);
    html! {
        section #answer {
            h2 { "Answer" }
            dl.answer {
                div {
                    dt { "Point group" }
                    dd {
                        strong { (name(&geometry.point_group)) }
                        span.aside {
                            @if let Some(order) = geometry.order { "order " (order) "; " }
                            "nuclei within " (format!("{:.4}", geometry.deviation_max_angstrom)) " Å of it, tolerance "
                            (trimmed(geometry.tolerance_angstrom)) " Å"
                        }
                    }
                }
                @if let Some(frontier) = &document.frontier {
                    @for spin in &frontier.spins {
                        @let sign = spin_sign(document, spin.spin);
                        @if let Some(set) = spin.homo.and_then(set) { (frontier_set("HOMO", sign, set)) }
                        @for set in spin.somo.iter().filter_map(|&number| set(number)) { (frontier_set("SOMO", sign, set)) }
                        @if let Some(set) = spin.lumo.and_then(set) { (frontier_set("LUMO", sign, set)) }
                        @if let Some(gap) = spin.gap_hartree {
                            div {
                                dt { "Gap" (sign) }
                                dd { strong { (electronvolts(gap)) " eV" } span.aside { "of orbitals: not a band energy" } }
                            }
                        }
                    }
                    @if frontier.spins.iter().any(|spin| spin.homo.is_some() || !spin.somo.is_empty()) {
                        div { dt { "Determinant" } dd { strong { (determinant(&frontier.determinant)) } } }
                    }
                }
                @if let Ok(audit) = report.audit {
                    div {
                        dt { "Symmetry of the wavefunction" }
                        dd {
                            a href="#audit" { strong.verdict.(audit.verdict) { (audit.verdict) } }
                            span.aside { (meaning(audit.verdict)) }
                        }
                    }
                }
                @if let Some(basis) = &document.basis {
                    div {
                        dt { "Check" }
                        dd {
                            span { "orthonormal to " (power_of_ten(basis.orthonormality_residual, 0)) }
                            span.aside { "lowest purity " (format!("{:.6}", sets.iter().map(|set| set.purity).fold(1.0, f64::min))) " over " (sets.len()) " sets" }
                        }
                    }
                }
            }
        }
    }
}

fn frontier_set(role: &str, sign: &str, set: &SetEntry) -> Markup {
    html! {
        div {
            dt { (role) (sign) }
            dd {
                a href=(format!("#set-{}", set.set)) { strong { (set_name(set)) } }
                span.aside {
                    @if let Some(energy) = set.energy_hartree { (electronvolts(energy)) " eV" }
                    @if let Some(count) = set.electrons.filter(|count| *count > 0.0) { ", " (electrons(count)) " e⁻" }
                    @if !set.complete { ", set incomplete" }
                }
            }
        }
    }
}

/// A leading irrep is set in type, the words after it stay.
fn determinant(text: &str) -> Markup {
    let (first, rest) = text.split_once(' ').unwrap_or((text, ""));
    html! {
        @if first.parse::<crate::group::IrrepName>().is_ok() { (name(first)) " " (rest) } @else { (text) }
    }
}

/// What a verdict means, in a line.
fn meaning(verdict: &str) -> &'static str {
    match verdict {
        "intact" => "every orbital belongs to one irrep",
        "rotated" => "partners are turned freely, which loses nothing",
        "mixed" => "densities are whole, some orbitals mix irreps",
        _ => "a density has lost operations of the nuclei",
    }
}

/// A length without trailing zeros.
pub fn trimmed(value: f64) -> String {
    format!("{value:.6}").trim_end_matches('0').trim_end_matches('.').to_owned()
}

/// Warnings about the group, cautions about the numbers, and other names that are as right.
pub fn warnings(document: &Document) -> Markup {
    let geometry = &document.geometry;
    html! {
        @if !geometry.warnings.is_empty() || !document.cautions.is_empty() {
            section #warnings aria-label="Warnings" {
                ul.warnings {
                    @for warning in &geometry.warnings { li { strong { "Warning: " } (warning) } }
                    @for caution in &document.cautions { li { strong { "Caution: " } (caution) } }
                }
            }
        }
    }
}

/// The names that change under another legal choice of axes.
pub fn settings(document: &Document) -> Markup {
    html! {
        @for setting in &document.geometry.other_settings {
            p.note {
                "Another legal choice of axes (" (setting.description) ") swaps "
                @for (at, (here, there)) in setting.swaps.iter().enumerate() {
                    @if at > 0 { ", " }
                    (name(here)) " → " (name(there.as_str().unwrap_or_default()))
                }
                "."
            }
        }
        @if document.geometry.ladder.len() > 1 {
            p.note {
                "Groups near the nuclei: "
                @for (at, rung) in document.geometry.ladder.iter().enumerate() {
                    @if at > 0 { ", " }
                    (name(&rung.point_group)) " at " (format!("{:.4}", rung.deviation_max_angstrom)) " Å"
                }
                "."
            }
        }
        @if let Some(placement) = &document.geometry.placement {
            p.note {
                "Labels are in " (pretty(&document.geometry.point_group)) "; "
                @if let Some(frame) = &placement.frame { (frame) " alone define the symmetry" } @else { "the nuclei have " (pretty(&placement.found)) }
                @if let Some(turned) = &placement.truly_turned {
                    "; functions on " (turned) " are truly turned in space, as operations miss like atoms by up to "
                    (format!("{:.3}", placement.missed_by_max_angstrom)) " Å"
                }
                "."
            }
        }
    }
}
