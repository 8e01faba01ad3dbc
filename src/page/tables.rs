//! The long tables: sets, orbitals, transitions, metal d. Plain tables; the script adds sorting and filters.
//!
//! A number that is sorted by stands in `data-value` in full.

use super::figures::{role, set_name, spin_sign};
use super::names::{function, name, sum};
use crate::report::document::{Document, SetEntry, ShareEntry};
use crate::report::text::{EV_PER_HARTREE, WAVENUMBER_PER_HARTREE};
use crate::report::transitions::TransitionEntry;
use crate::report::unicode::pretty;
use maud::{Markup, html};

/// Shares below this are left to the JSON document.
const SHARE_SHOWN: f64 = 0.05;

/// An energy in eV with three decimals.
pub fn electronvolts(hartree: f64) -> String {
    format!("{:.3}", hartree * EV_PER_HARTREE).replace('-', "−")
}

/// A number of electrons without needless decimals.
pub fn electrons(value: f64) -> String {
    if (value - value.round()).abs() < 1e-6 { format!("{value:.0}") } else { format!("{value:.3}") }
}

/// Below this a number is rounding and nothing else.
const ROUNDING: f64 = 1e-10;

/// A small number as a factor and a power of ten.
pub fn power_of_ten(value: f64, decimals: usize) -> Markup {
    if value.abs() < ROUNDING {
        return html! { "less than 10" sup { "−10" } };
    }
    let text = format!("{value:.decimals$e}");
    let (factor, power) = text.split_once('e').unwrap_or((&text, "0"));
    html! { @if power == "0" { (factor) } @else { (factor) " × 10" sup { (power.replace('-', "−")) } } }
}

/// A cell with a number to sort by.
fn number(value: Option<f64>, text: impl Fn(f64) -> String) -> Markup {
    html! { @if let Some(value) = value { td.number data-value=(value) { (text(value)) } } @else { td.number { "—" } } }
}

fn made_of(shares: &[ShareEntry]) -> String {
    let listed = shares.iter().filter(|share| share.share >= SHARE_SHOWN).take(3);
    listed
        .map(|share| format!("{:.0} % {} {}", 100.0 * share.share, share.atoms, share.shell))
        .collect::<Vec<_>>()
        .join(", ")
}

fn spin(document: &Document, spin: crate::model::Spin) -> &'static str {
    spin_sign(document, spin).trim()
}

fn unrestricted(document: &Document) -> bool {
    document.sets.iter().flatten().any(|set| set.spin == crate::model::Spin::Beta)
}

/// What is unusual about a set.
fn remark(set: &SetEntry) -> String {
    let mut parts = Vec::new();
    match (&set.content, &set.irrep) {
        (Some(content), _) => parts.push(format!("{} turned among themselves", pretty(content))),
        (None, None) => parts.push("no irrep reaches the purity limit".to_owned()),
        (None, Some(_)) if set.orbitals.len() < set.degeneracy => {
            parts.push(format!("{} of {} partners at one energy", set.orbitals.len(), set.degeneracy));
        }
        (None, Some(_)) if !set.complete => parts.push("incomplete".to_owned()),
        _ => {}
    }
    if !set.accidental_with.is_empty() {
        parts.push("accidental degeneracy".to_owned());
    }
    parts.join("; ")
}

/// One row a set, highest energy first as in a level diagram.
pub fn sets(document: &Document) -> Markup {
    let sets = document.sets.as_deref().unwrap_or_default();
    let geometry = &document.geometry;
    let abelian = geometry.abelian_subgroup.as_ref().map(|abelian| abelian.point_group.as_str());
    let abelian = abelian.filter(|group| *group != geometry.point_group && *group != "C1");
    let (spins, remarks) = (unrestricted(document), sets.iter().any(|set| !remark(set).is_empty()));
    html! {
        section #sets {
            h2 { "Sets of orbitals" }
            p.note { "A set is a level: orbitals that the operations turn into each other at one energy. Highest first." }
            div.scroll tabindex="0" role="region" aria-label="Sets of orbitals" {
                table.long data-name="sets" {
                    thead { tr {
                        th scope="col" data-sort="text" { "Label" }
                        @if spins { th scope="col" data-sort="text" { "Spin" } }
                        th scope="col" data-sort="text" { "Frontier" }
                        th.number scope="col" data-sort="number" { "Energy / eV" }
                        th.number scope="col" data-sort="number" { "Electrons" }
                        th.number scope="col" data-sort="number" { "Degeneracy" }
                        th.number scope="col" data-sort="number" { "Purity" }
                        th scope="col" data-sort="number" { "Orbitals" }
                        @if let Some(abelian) = abelian { th scope="col" data-sort="text" { "In " (name(abelian)) } }
                        th scope="col" data-sort="text" { "Made of" }
                        @if remarks { th scope="col" data-sort="text" { "Remarks" } }
                    } }
                    tbody {
                        @for set in sets.iter().rev() {
                            tr #(format!("set-{}", set.set)) .frontier[!role(document, set).is_empty()] {
                                th scope="row" { (set_name(set)) }
                                @if spins { td { (spin(document, set.spin)) } }
                                td { (role(document, set)) }
                                (number(set.energy_hartree, electronvolts))
                                (number(set.electrons, electrons))
                                (number(Some(set.degeneracy as f64), |n| format!("{n}")))
                                (number(Some(set.purity), |purity| format!("{purity:.4}")))
                                td data-value=(set.orbitals.first().copied().unwrap_or(0)) { (indices(&set.orbitals)) }
                                @if abelian.is_some() { td { @if let Some(irreps) = &set.abelian_irreps { (sum(irreps)) } } }
                                td { (made_of(&set.character)) }
                                @if remarks { td { (remark(set)) } }
                            }
                        }
                    }
                }
            }
        }
    }
}

/// `52–54`.
pub fn indices(orbitals: &[usize]) -> String {
    let from_zero: Vec<usize> = orbitals.iter().map(|orbital| orbital - 1).collect();
    crate::labelling::composition::ranges(&from_zero).replace('-', "–")
}

/// One row an orbital, in file order; closed at first, as it is long.
pub fn orbitals(document: &Document) -> Markup {
    let entries = document.orbitals.as_deref().unwrap_or_default();
    let spins = unrestricted(document);
    html! {
        section #table-orbitals {
            h2 { "All orbitals" }
            details {
                summary { (entries.len()) " orbitals in the order of the file, with weights of irreps" }
                div.scroll tabindex="0" role="region" aria-label="All orbitals" {
                    table.long data-name="orbitals" {
                        thead { tr {
                            th.number scope="col" data-sort="number" { "Orbital" }
                            @if spins { th scope="col" data-sort="text" { "Spin" } }
                            th scope="col" data-sort="text" { "Label" }
                            th scope="col" data-sort="text" { "Partner" }
                            th.number scope="col" data-sort="number" { "Energy / eV" }
                            th.number scope="col" data-sort="number" { "Occupation" }
                            th.number scope="col" data-sort="number" { "Purity" }
                            th scope="col" data-sort="text" { "Weights" }
                        } }
                        tbody {
                            @for entry in entries {
                                tr {
                                    (number(Some(entry.index as f64), |n| format!("{n}")))
                                    @if spins { td { (spin(document, entry.spin)) } }
                                    td { @if let Some(label) = &entry.label { (name(label)) } @else { "—" } }
                                    td { @if let Some(component) = &entry.component { (function(component)) } }
                                    (number(entry.energy_hartree, electronvolts))
                                    (number(entry.occupation, electrons))
                                    (number(Some(entry.purity), |purity| format!("{purity:.6}")))
                                    td {
                                        @for (at, weight) in entry.weights.iter().filter(|weight| weight.weight >= 1e-4).take(4).enumerate() {
                                            @if at > 0 { ", " }
                                            (name(&weight.irrep)) " " (format!("{:.4}", weight.weight))
                                        }
                                    }
                                }
                            }
                        }
                    }
                }
            }
        }
    }
}

/// Pairs of sets with rules and strengths; nothing where none were computed.
pub fn transitions(document: &Document) -> Markup {
    let entries = document.transitions.as_deref().unwrap_or_default();
    let spins = unrestricted(document);
    html! {
        @if !entries.is_empty() {
            section #transitions {
                h2 { "Transitions between sets at the frontier" }
                p.note {
                    "A label is not an intensity: symmetry says which integrals vanish, not how large the others are. "
                    "ΔE is a difference of orbital energies, no band energy; " i { "f" }
                    " is a one-electron estimate from it, in length form (r) and velocity form (∇). Where the two differ much, trust neither."
                }
                div.scroll tabindex="0" role="region" aria-label="Transitions" {
                    table.long data-name="transitions" {
                        thead { tr {
                            th scope="col" data-sort="text" { "From" }
                            th scope="col" data-sort="text" { "To" }
                            @if spins { th scope="col" data-sort="text" { "Spin" } }
                            th.number scope="col" data-sort="number" { "ΔE / eV" }
                            th scope="col" data-sort="text" { "Product" }
                            th scope="col" data-sort="text" { "E dipole" }
                            th.number scope="col" data-sort="number" { i { "f" } " (r)" }
                            th.number scope="col" data-sort="number" { i { "f" } " (∇)" }
                            th scope="col" data-sort="text" { "M dipole" }
                            th scope="col" data-sort="text" { "Two-photon" }
                            th scope="col" data-sort="text" { "Opened by" }
                        } }
                        tbody { @for entry in entries { (transition(document, entry, spins)) } }
                    }
                }
                @for entry in entries.iter().filter(|entry| !entry.remarks.is_empty()) {
                    p.note { (name(&entry.from)) " → " (name(&entry.to)) ": " (entry.remarks.join("; ")) }
                }
            }
        }
    }
}

fn transition(document: &Document, entry: &TransitionEntry, spins: bool) -> Markup {
    let dipole = &entry.electric_dipole;
    let strength = |f: f64| if f < 5e-7 { "0".to_owned() } else { format!("{f:.4}") };
    html! {
        tr .frontier[entry.strongest] {
            td { (name(&entry.from)) }
            td { (name(&entry.to)) }
            @if spins { td { (spin(document, entry.spin)) } }
            (number(entry.energy_hartree, electronvolts))
            td { (sum(&entry.product.join(" + "))) }
            td { (rule(dipole.allowed, &dipole.polarisation)) }
            (number(dipole.oscillator_strength, strength))
            (number(dipole.oscillator_strength_velocity, strength))
            td { (rule(entry.magnetic_dipole.allowed, &entry.magnetic_dipole.components)) }
            td { (rule(entry.two_photon.allowed, &entry.two_photon.components)) }
            td {
                @let mut helpers = Vec::new();
                @for helper in entry.vibronic.iter().filter(|helper| helper.modes_in_molecule > 0) {
                    @if !helpers.contains(&helper.irrep.as_str()) {
                        @if !helpers.is_empty() { ", " }
                        (name(&helper.irrep))
                        ({ helpers.push(helper.irrep.as_str()); "" })
                    }
                }
            }
        }
    }
}

/// Components where allowed, else a word.
fn rule(allowed: Option<bool>, components: &[&str]) -> Markup {
    match allowed {
        None => html! { "no rule" },
        Some(false) => html! { span.forbidden { "forbidden" } },
        Some(true) => {
            html! { @for (at, component) in components.iter().enumerate() { @if at > 0 { ", " } (function(component)) } }
        }
    }
}

/// Sets with most metal d.
pub fn d_block(document: &Document) -> Markup {
    html! {
        @if !document.d_block.is_empty() {
            section #metal-d {
                h2 { "Metal d" }
                @for block in &document.d_block {
                    p.note { "d of " (block.metals) ". Gaps are of orbitals: no ligand-field parameter, no band energy." }
                    table {
                        thead { tr {
                            th scope="col" { "Label" } th scope="col" { "Spin" } th.number scope="col" { "Energy / eV" }
                            th.number scope="col" { "Metal d" } th.number scope="col" { "Above the one before" }
                        } }
                        tbody {
                            @for level in &block.levels {
                                tr {
                                    th scope="row" { @if let Some(label) = &level.label { (name(label)) } @else { "set " (level.set) } }
                                    td { (format!("{:?}", level.spin).to_lowercase()) }
                                    (number(level.energy_hartree, electronvolts))
                                    td.number { (format!("{:.0} %", 100.0 * level.d_share)) }
                                    (number(level.gap_to_previous_hartree, |gap| format!("{} eV = {:.0} cm⁻¹", electronvolts(gap), gap * WAVENUMBER_PER_HARTREE)))
                                }
                            }
                        }
                    }
                }
            }
        }
    }
}
