//! The verdict of the audit with the numbers behind it.

use super::Report;
use super::names::name;
use super::tables::{electronvolts, power_of_ten};
use crate::report::audit::{AuditEntry, MixedEntry};
use maud::{Markup, html};

/// The section; a reason where there is no verdict.
pub fn section(report: &Report<'_>) -> Markup {
    html! {
        section #audit {
            h2 { "Does the wavefunction keep the symmetry of its nuclei?" }
            @match report.audit {
                Ok(audit) => (verdict(audit)),
                Err(reason) => p { "No verdict: " (reason) },
            }
        }
    }
}

fn verdict(audit: &AuditEntry) -> Markup {
    let kept = &audit.kept_group;
    let spin = audit.retention.first().is_some_and(|row| row.spin.is_some());
    html! {
        p { strong.verdict.(audit.verdict) { (audit.verdict) } (audit.summary.strip_prefix(audit.verdict).unwrap_or(&audit.summary)) }
        @for origin in &audit.origins { p { strong { "Likely from " } (origin) } }
        table {
            thead { tr { th scope="col" { "Density" } th scope="col" { "Keeps" } } }
            tbody {
                tr { th scope="row" { "total" } td { (name(&kept.total_density)) } }
                tr { th scope="row" { "alpha" } td { (name(&kept.alpha_density)) } }
                tr { th scope="row" { "beta" } td { (name(&kept.beta_density)) } }
                @if spin { tr { th scope="row" { "spin" } td { (name(&kept.spin_density)) } } }
            }
        }
        p.note {
            "The worst operation carries " (power_of_ten(audit.electrons_carried_max, 1)) " electrons out of place (at least; limit "
            (audit.limits.electrons_carried) "). "
            @if let Some(value) = audit.s_squared {
                "⟨S²⟩ = " (format!("{value:.4}")) ", ideal " (format!("{:.4}", audit.s_squared_ideal)) ". "
            }
            @if audit.swaps_spin { "Some operations lost exchange the alpha and the beta density. " }
            @if audit.turned_partners > 0 { (audit.turned_partners) " orbitals of degenerate irreps are turned among their partners. " }
        }
        @if !audit.mixed_orbitals.is_empty() { (mixed(&audit.mixed_orbitals)) }
    }
}

fn mixed(entries: &[MixedEntry]) -> Markup {
    html! {
        h3 { "Orbitals of several irreps" }
        div.scroll tabindex="0" role="region" aria-label="Orbitals of several irreps" {
            table.long data-name="orbitals" {
                thead { tr {
                    th.number scope="col" data-sort="number" { "Orbital" }
                    th scope="col" data-sort="text" { "Spin" }
                    th.number scope="col" data-sort="number" { "Energy / eV" }
                    th scope="col" data-sort="text" { "Electrons" }
                    th scope="col" data-sort="text" { "Weights" }
                    th scope="col" data-sort="text" { "Kind" }
                } }
                tbody {
                    @for entry in entries {
                        tr {
                            td.number data-value=(entry.index) { (entry.index) }
                            td { (format!("{:?}", entry.spin).to_lowercase()) }
                            td.number data-value=(entry.energy_hartree.map_or(String::new(), |energy| energy.to_string())) { (entry.energy_hartree.map_or("—".to_owned(), electronvolts)) }
                            td { (if entry.occupied { "yes" } else { "no" }) }
                            td {
                                @for (at, weight) in entry.weights.iter().take(4).enumerate() {
                                    @if at > 0 { ", " }
                                    (name(&weight.irrep)) " " (format!("{:.4}", weight.weight))
                                }
                            }
                            td { (if entry.at_one_energy { "at one energy: loses nothing" } else if entry.localised { "localised" } else { "mixed" }) }
                        }
                    }
                }
            }
        }
    }
}
