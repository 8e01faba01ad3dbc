//! Plain sentences that the supporting information of a paper can take over, and what not to read into the labels.

use super::Report;
use super::names::name;
use super::summary::trimmed;
use super::tables::power_of_ten;
use crate::picture::orbital::ENCLOSED;
use maud::{Markup, html};

/// Method and conventions.
pub fn section(report: &Report<'_>) -> Markup {
    let document = report.document;
    let geometry = &document.geometry;
    html! {
        section #method {
            h2 { "Method and conventions" }
            p {
                "Orbitals were labelled with orbsieve " (env!("CARGO_PKG_VERSION")) " from a Molden-format file. The nuclei have the point group "
                (name(&geometry.nuclear_group)) " within a tolerance of " (trimmed(geometry.tolerance_angstrom)) " Å (largest displacement from the symmetric arrangement "
                (format!("{:.4}", geometry.deviation_max_angstrom)) " Å, root mean square " (format!("{:.4}", geometry.deviation_rms_angstrom)) " Å)"
                @if geometry.point_group != geometry.nuclear_group { "; labels are given in " (name(&geometry.point_group)) }
                ". Axes: " (geometry.axes_convention)
                ". Names of irreps follow the recommendations on symmetry notation of 1997 and the report on notation for the spectra of polyatomic molecules of 1955."
            }
            @if let Some(basis) = &document.basis {
                p {
                    "The basis has " (basis.functions) " functions in "
                    @for (at, (letter, count)) in basis.shells.iter().enumerate() { @if at > 0 { ", " } (count) " " (letter) }
                    " shells"
                    @match basis.pure { Some(true) => { " (pure)" }, Some(false) => { " (Cartesian)" }, None => { " (pure and Cartesian)" } }
                    ". Coefficients were read as " (basis.convention)
                    ", the convention under which the orbitals are orthonormal: largest |CᵀSC − 1| = " (power_of_ten(basis.orthonormality_residual, 1)) "."
                }
            }
            @if let Some(limits) = &document.thresholds {
                p {
                    "Each orbital was projected onto the irreps by the characters over all operations, "
                    i { "w" } sub { "Γ" } " = (" i { "d" } sub { "Γ" } "/|" i { "G" } "|) Σ" sub { i { "R" } } " χ" sub { "Γ" } "(" i { "R" } ")⟨ψ|" i { "R" } "ψ⟩, the overlap being that of the file’s own functions; "
                    "it is given an irrep when one weight reaches " (limits.purity) ". Orbitals within " (limits.degeneracy_hartree)
                    " hartree count as at one energy; partners of a set are found from ⟨ψ" sub { i { "i" } } "|" i { "R" } "ψ" sub { i { "j" } } "⟩ within " (limits.window_hartree)
                    " hartree. Labels number the sets of an irrep and spin in order of energy."
                }
            }
            @if !report.pictures.is_empty() {
                p {
                    "Orbital pictures: marching tetrahedra on a cubic grid ("
                    (steps(report)) " bohr between points), |ψ| chosen so that " (format!("{:.0}", 100.0 * ENCLOSED))
                    " % of the density is enclosed; " (report.view) "."
                }
            }
            h3 { "What not to read into this" }
            ul {
                li { "A label is not an intensity; oscillator strengths here are one-electron estimates at orbital gaps." }
                li { "Differences of orbital energies are neither band energies nor ligand-field parameters." }
                li { "One determinant is not a term: open shells have terms, which " code { "orbsieve states" } " lists." }
                li { "Names that depend on the choice of axes are given under the rules above; other legal choices stand beside." }
                li { "Löwdin shares depend on the basis: a description, not a measurement." }
            }
        }
    }
}

/// The finest and the coarsest grid used.
fn steps(report: &Report<'_>) -> String {
    let steps = || report.pictures.iter().flat_map(|set| &set.partners).map(|picture| picture.step_bohr);
    let (low, high) = (steps().fold(f64::INFINITY, f64::min), steps().fold(0.0, f64::max));
    if high - low < 0.005 { format!("{high:.2}") } else { format!("{low:.2} to {high:.2}") }
}
