//! What `purify` has changed, as data and as text.
//!
//! Not here: the orbitals themselves, which go to their own file.

use super::audit::AuditEntry;
use super::document::Geometry;
use super::text::{geometry_head, head};
use crate::labelling::Labelled;
use crate::model::{ANGSTROM_PER_BOHR, Spin};
use crate::purify::Changes;
use schemars::JsonSchema;
use serde::Serialize;

/// The report of `purify`.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct PurifyDocument {
    /// Name and version of the layout.
    #[schemars(extend("const" = super::document::SCHEMA))]
    pub schema: &'static str,
    /// The file read.
    pub file: String,
    /// Where the new file went; null for standard output.
    pub output: Option<String>,
    /// Group and axes of the new orbitals.
    pub geometry: Geometry,
    /// Largest part of an orbital that is not in those which took its place: 1 − Σ⟨old|new⟩².
    pub overlap_loss_max: f64,
    /// The orbital that lost it, from 1.
    pub overlap_loss_orbital: usize,
    /// Its spin.
    pub overlap_loss_spin: Spin,
    /// Electrons of the old density outside the new one.
    pub density_change_electrons: f64,
    /// Sets whose partners are aligned to the standard components.
    pub aligned_sets: usize,
    /// Orbitals of degenerate irreps without partners beside them.
    pub loose_orbitals: usize,
    /// Smallest weight of one irrep over all new orbitals, as read again from the new file.
    pub purity_min: f64,
    /// Largest |CᵀSC − 1| of the new orbitals, as read again.
    pub orthonormality_residual: f64,
    /// How far nuclei were moved; null when they were left.
    pub nuclei_moved_max_angstrom: Option<f64>,
    /// Cautions that belong to the numbers.
    pub cautions: Vec<String>,
}

/// What is known when a file has been purified and read again.
#[derive(Debug)]
pub struct Outcome<'a> {
    /// The file read.
    pub file: &'a str,
    /// Where the new one goes.
    pub output: Option<String>,
    /// What changed.
    pub changes: Changes,
    /// Labels of the new file.
    pub again: &'a Labelled,
    /// Largest displacement of a nucleus, bohr.
    pub moved_bohr: Option<f64>,
    /// The group block of the new file.
    pub geometry: Geometry,
    /// Verdict on the old wavefunction, where it has occupations.
    pub verdict: Option<&'a AuditEntry>,
}

/// Orbitals that overlap by more are worth a caution.
const FINE: f64 = 1e-6;

/// The report as data.
#[must_use]
pub fn purify_document(outcome: Outcome<'_>) -> PurifyDocument {
    let labels = outcome.again.spins.iter().flat_map(|spin| &spin.orbitals);
    let changes = outcome.changes;
    let mut cautions = Vec::new();
    if let Some(verdict) = outcome.verdict.filter(|verdict| verdict.verdict == "broken") {
        cautions.push(format!(
            "the density was {}: the new orbitals belong to another wavefunction, {:.3} electrons away; energies are means",
            verdict.verdict, changes.density_electrons
        ));
    } else if outcome.verdict.is_some_and(|verdict| verdict.verdict == "mixed") {
        cautions
            .push("orbitals were mixed: energies are expectation values over the old ones, no eigenvalues".to_owned());
    }
    if outcome.moved_bohr.is_none() && changes.residual > FINE {
        cautions.push(format!(
            "the nuclei are up to {:.4} Å off, so orbitals of different irreps overlap by up to {:.0e}; --geometry moves the \
             nuclei and makes them orthonormal",
            outcome.again.symmetry.deviation.max * ANGSTROM_PER_BOHR,
            changes.residual
        ));
    }
    PurifyDocument {
        schema: super::document::SCHEMA,
        file: outcome.file.to_owned(),
        output: outcome.output,
        geometry: outcome.geometry,
        overlap_loss_max: changes.overlap_loss,
        overlap_loss_orbital: changes.overlap_loss_at.1 + 1,
        overlap_loss_spin: changes.overlap_loss_at.0,
        density_change_electrons: changes.density_electrons,
        aligned_sets: changes.aligned_sets,
        loose_orbitals: changes.loose,
        purity_min: labels.map(|label| label.purity).fold(1.0, f64::min),
        orthonormality_residual: outcome.again.settled.residual,
        nuclei_moved_max_angstrom: outcome.moved_bohr.map(|moved| moved * ANGSTROM_PER_BOHR),
        cautions,
    }
}

/// Losses below this are rounding, and differ from machine to machine.
const ROUNDING: f64 = 1e-9;

/// The report for people.
#[must_use]
pub fn purify_text(document: &PurifyDocument) -> String {
    let mut out = format!("{} → {}\n\n", document.file, document.output.as_deref().unwrap_or("standard output"));
    let spin = match document.overlap_loss_spin {
        Spin::Alpha => "alpha",
        Spin::Beta => "beta",
    };
    head(
        &mut out,
        "Changed",
        &format!(
            "{}; density by {} electrons",
            if document.overlap_loss_max < ROUNDING {
                format!("no orbital loses more than {ROUNDING:.0e} = 1 − Σ⟨old|new⟩²")
            } else {
                format!(
                    "largest loss of an orbital 1 − Σ⟨old|new⟩² = {:.1e} ({spin} {})",
                    document.overlap_loss_max, document.overlap_loss_orbital
                )
            },
            if document.density_change_electrons < ROUNDING {
                format!("less than {ROUNDING:.0e}")
            } else {
                format!("{:.1e}", document.density_change_electrons)
            }
        ),
    );
    head(
        &mut out,
        "Now",
        &format!(
            "lowest purity {:.9}; orthonormal to {}; {} sets with partners aligned to the standard components, {} \
             orbitals of degenerate irreps without partners to align",
            document.purity_min,
            if document.orthonormality_residual < ROUNDING {
                format!("{ROUNDING:.0e}")
            } else {
                format!("{:.0e}", document.orthonormality_residual)
            },
            document.aligned_sets,
            document.loose_orbitals
        ),
    );
    match document.nuclei_moved_max_angstrom {
        Some(moved) => head(&mut out, "Nuclei", &format!("moved onto their symmetric places, by {moved:.6} Å at most")),
        None => head(&mut out, "Nuclei", "left as they were (--geometry moves them onto their symmetric places)"),
    }
    out.push_str(&geometry_head(&document.geometry));
    for caution in &document.cautions {
        head(&mut out, "Caution", caution);
    }
    out
}
