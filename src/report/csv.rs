//! The document as comma-separated rows: one a set.
//!
//! Not here: one row an orbital; the JSON output has those.

use super::document::Document;
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
