//! The point group: its elements drawn on the molecule, its character table.

use super::Report;
use super::names::{function, name};
use super::summary::settings;
use crate::picture::elements::dashes;
use crate::report::table::TableDocument;
use maud::{Markup, PreEscaped, html};

/// Drawing and legend beside each other, the table below.
pub fn section(report: &Report<'_>) -> Markup {
    let geometry = &report.document.geometry;
    html! {
        section #symmetry {
            h2 { "Point group " (name(&geometry.point_group)) }
            div.beside {
                figure.drawing {
                    (PreEscaped(report.elements))
                    figcaption { "The molecule with its symmetry elements; " (report.view) ". Signs at the ends of axes are those of crystallography." }
                }
                div {
                    @if !report.kinds.is_empty() {
                        table.legend {
                            caption { "Symmetry elements" }
                            tbody { @for (kind, (names, count)) in report.kinds.iter().enumerate() { (legend(kind, names, *count)) } }
                        }
                    }
                    p { strong { "Axes. " } (geometry.axes_convention) "." }
                    (settings(report.document))
                }
            }
            @if let Some(table) = report.table { (characters(table)) }
        }
    }
}

fn legend(kind: usize, names: &str, count: usize) -> Markup {
    let plane = names.starts_with("sigma");
    html! {
        tr {
            td.swatch {
                @if names == "i" {
                    svg width="44" height="14" viewBox="0 0 44 14" aria-hidden="true" { circle.centre cx="22" cy="7" r="4.5" {} }
                } @else {
                    svg.(if plane { "plane" } else { "axis" }) width="44" height="14" viewBox="0 0 44 14" aria-hidden="true" {
                        line x1="2" y1="7" x2="42" y2="7" stroke-dasharray=(dashes(kind)) {}
                    }
                }
            }
            td.number { (count) " ×" }
            td {
                @for (at, symbol) in names.split(", ").enumerate() { @if at > 0 { ", " } (name(symbol)) }
            }
            td.aside { @if names == "i" { "centre of inversion" } @else if plane { "mirror plane" } @else { "axis" } }
        }
    }
}

/// Classes across, irreps down, functions at the right.
fn characters(table: &TableDocument) -> Markup {
    let pairs = table.irreps.iter().any(|irrep| irrep.conjugate_pair);
    html! {
        h3 { "Character table" }
        div.scroll tabindex="0" role="region" aria-label="Character table" {
            table.characters {
                thead { tr {
                    th scope="col" { (name(&table.point_group)) }
                    @for class in &table.classes { th.number scope="col" { (name(&class.symbol)) } }
                    th scope="col" { "Functions" }
                } }
                tbody {
                    @for irrep in &table.irreps {
                        tr {
                            th scope="row" { (name(&irrep.name)) @if irrep.conjugate_pair { "*" } }
                            @for character in &irrep.exact { td.number { (character.replace('-', "−")) } }
                            td { @for (at, one) in irrep.functions.iter().enumerate() { @if at > 0 { ", " } (function(one)) } }
                        }
                    }
                }
            }
        }
        @if pairs { p.note { "* Two complex-conjugate irreps taken together as one real representation; its partners cannot be told apart by any operation." } }
        p.note { "Axes of the table: " (table.axes_convention) "." }
    }
}
