//! Documents as comma-separated rows: one a set, a transition or a mode.
//!
//! Not here: one row an orbital; the JSON output has those.

use super::document::Document;
use super::modes::ModesDocument;
use std::io::Write;

/// Writes a header and one row a set, energies in hartree.
///
/// # Errors
/// Whatever the writer reports.
pub fn write_sets(document: &Document, out: &mut dyn Write) -> csv::Result<()> {
    let mut rows = csv::Writer::from_writer(out);
    rows.write_record([
        "file",
        "point_group",
        "set",
        "spin",
        "label",
        "irrep",
        "degeneracy",
        "energy_hartree",
        "electrons",
        "purity",
        "complete",
        "orbitals",
        "character",
    ])?;
    let number = |value: Option<f64>| value.map(|value| value.to_string()).unwrap_or_default();
    for set in document.sets.iter().flatten() {
        let orbitals: Vec<String> = set.orbitals.iter().map(ToString::to_string).collect();
        let character: Vec<String> =
            set.character.iter().map(|share| format!("{} {} {:.4}", share.atoms, share.shell, share.share)).collect();
        rows.write_record([
            document.source.file.clone(),
            document.geometry.point_group.clone(),
            set.set.to_string(),
            format!("{:?}", set.spin).to_lowercase(),
            set.label.clone().unwrap_or_default(),
            set.irrep.clone().unwrap_or_default(),
            set.degeneracy.to_string(),
            number(set.energy_hartree),
            number(set.electrons),
            set.purity.to_string(),
            set.complete.to_string(),
            orbitals.join(" "),
            character.join("; "),
        ])?;
    }
    rows.flush()?;
    Ok(())
}

fn text(value: Option<impl ToString>) -> String {
    value.map(|value| value.to_string()).unwrap_or_default()
}

/// Writes a header and one row a transition, energies in hartree, strengths in atomic units.
///
/// # Errors
/// Whatever the writer reports.
pub fn write_transitions(document: &Document, out: &mut dyn Write) -> csv::Result<()> {
    let mut rows = csv::Writer::from_writer(out);
    rows.write_record([
        "file",
        "point_group",
        "from",
        "to",
        "spin",
        "energy_hartree",
        "product",
        "electric_dipole",
        "polarisation",
        "strength_au",
        "oscillator_strength",
        "oscillator_strength_velocity",
        "magnetic_dipole",
        "two_photon",
        "laporte",
        "strongest",
        "remarks",
    ])?;
    for entry in document.transitions.iter().flatten() {
        let dipole = &entry.electric_dipole;
        rows.write_record([
            document.source.file.clone(),
            document.geometry.point_group.clone(),
            entry.from.clone(),
            entry.to.clone(),
            format!("{:?}", entry.spin).to_lowercase(),
            text(entry.energy_hartree),
            entry.product.join(" "),
            text(dipole.allowed),
            dipole.polarisation.join(" "),
            dipole.strength_au.to_string(),
            text(dipole.oscillator_strength),
            text(dipole.oscillator_strength_velocity),
            entry.magnetic_dipole.components.join(" "),
            entry.two_photon.components.join(" "),
            text(entry.laporte.as_ref()),
            entry.strongest.to_string(),
            entry.remarks.join("; "),
        ])?;
    }
    rows.flush()?;
    Ok(())
}

/// Writes a header and one row a mode, wavenumbers in cm⁻¹.
///
/// # Errors
/// Whatever the writer reports.
pub fn write_modes(document: &ModesDocument, out: &mut dyn Write) -> csv::Result<()> {
    let mut rows = csv::Writer::from_writer(out);
    rows.write_record([
        "file",
        "point_group",
        "mode",
        "wavenumber_per_cm",
        "kind",
        "irrep",
        "set",
        "purity",
        "infrared",
        "polarisation",
        "raman",
        "remarks",
    ])?;
    for (set_idx, set) in document.sets.iter().enumerate() {
        for mode in &set.modes {
            rows.write_record([
                document.source.file.clone(),
                document.geometry.point_group.clone(),
                mode.mode.to_string(),
                text(mode.wavenumber_per_cm),
                set.kind.to_owned(),
                set.irrep.clone().unwrap_or_default(),
                (set_idx + 1).to_string(),
                set.purity.to_string(),
                text(set.infrared),
                set.polarisation.join(" "),
                text(set.raman),
                set.remarks.join("; "),
            ])?;
        }
    }
    rows.flush()?;
    Ok(())
}
