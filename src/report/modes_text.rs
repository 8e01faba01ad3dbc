//! Modes for people: the decomposition, the table of modes, cautions. At most 110 columns.
//!
//! Not here: any number that the document does not hold.

use super::modes::{ActivityEntry, ModeSetEntry, ModesDocument};
use super::text::{geometry_head, head, push_table, source_line, table};
use super::unicode::pretty;
use crate::labelling::composition::ranges;
use comfy_table::CellAlignment;
use serde_json::{Map, Value};

/// The whole report of `modes`.
#[must_use]
pub fn modes_text(document: &ModesDocument) -> String {
    let mut out = source_line(&document.source);
    out.push_str("\n\n");
    let counts = &document.decomposition;
    head(&mut out, "Vibrations", &format!("{} = {}", counts.n_vibrations, sum(&counts.vibrations)));
    if let (Some(stretches), Some(bends)) = (&counts.stretches, &counts.bends) {
        head(&mut out, "Stretches", &sum(stretches));
        head(&mut out, "Others", &format!("{} (bends, torsions, out of plane)", sum(bends)));
    }
    head(&mut out, "Infrared", &active(&counts.activity, |entry| entry.infrared, true));
    head(&mut out, "Raman", &active(&counts.activity, |entry| entry.raman, false));
    let silent = active(&counts.activity, |entry| !entry.infrared && !entry.raman, false);
    if silent != "none" {
        head(&mut out, "Silent", &silent);
    }
    head(
        &mut out,
        "Rigid",
        &format!("translations {}; rotations {}", sum(&counts.translations), sum(&counts.rotations)),
    );
    agreement(&mut out, document);
    out.push_str(&geometry_head(&document.geometry));
    if document.sets.is_empty() {
        out.push_str("\nThe file holds no modes: the counts above come from the nuclei alone.\n");
    } else {
        out.push_str(&rows(&document.sets));
    }
    out.push('\n');
    for caution in &document.cautions {
        head(&mut out, "Caution", caution);
    }
    out
}

/// `2A1 + B2` from counts.
fn sum(counts: &Map<String, Value>) -> String {
    let term = |(irrep, n): (&String, &Value)| match n.as_u64() {
        Some(1) => pretty(irrep),
        _ => format!("{n}{}", pretty(irrep)),
    };
    if counts.is_empty() { "none".to_owned() } else { counts.iter().map(term).collect::<Vec<_>>().join(" + ") }
}

fn active(activity: &[ActivityEntry], wanted: fn(&ActivityEntry) -> bool, polarised: bool) -> String {
    let terms: Vec<String> = activity
        .iter()
        .filter(|entry| wanted(entry))
        .map(|entry| {
            let n = if entry.n == 1 { String::new() } else { entry.n.to_string() };
            let axes = if polarised { format!(" ({})", entry.polarisation.join(",")) } else { String::new() };
            format!("{n}{}{axes}", pretty(&entry.irrep))
        })
        .collect();
    if terms.is_empty() { "none".to_owned() } else { terms.join(" + ") }
}

fn agreement(out: &mut String, document: &ModesDocument) {
    if let Some(agrees) = document.agrees {
        let differing: Vec<String> = document
            .differences
            .iter()
            .map(|entry| {
                format!(
                    "{}: {} in the file, {} from the nuclei",
                    pretty(&entry.irrep),
                    entry.in_file,
                    entry.from_nuclei
                )
            })
            .collect();
        let text = match (agrees, differing.is_empty()) {
            (true, _) => "the file's modes have these irreps, each as often as the nuclei say".to_owned(),
            (false, false) => format!("file and nuclei differ: {}", differing.join("; ")),
            (false, true) => "some modes have no irrep".to_owned(),
        };
        head(out, "Check", &text);
    }
    if let Some(reading) = &document.displacements {
        let residual = document.orthogonality_residual.unwrap_or(0.0);
        head(
            out,
            "Read as",
            &format!("{reading} (largest cosine of two modes {residual:.0e}; standard atomic weights)"),
        );
    }
}

fn rows(sets: &[ModeSetEntry]) -> String {
    let mut out = String::from("\nModes\n");
    let intensities = sets.iter().any(|set| set.intensity.is_some());
    let mut rows = table();
    rows.set_header([
        "modes",
        "cm⁻¹",
        "irrep",
        "purity",
        "IR",
        "Raman",
        if intensities { "intensity" } else { "" },
        "",
    ]);
    for set in sets {
        let indices: Vec<usize> = set.modes.iter().map(|mode| mode.mode - 1).collect();
        let numbers: Vec<f64> = set.modes.iter().filter_map(|mode| mode.wavenumber_per_cm).collect();
        let mean = numbers.iter().sum::<f64>() / numbers.len().max(1) as f64;
        let vibration = set.kind == "vibration";
        let yes = |allowed: Option<bool>| match allowed {
            Some(true) => "yes",
            Some(false) => "—",
            None => "?",
        };
        let mut remarks = set.remarks.clone();
        if !vibration {
            remarks.insert(0, set.kind.to_owned());
        }
        rows.add_row([
            ranges(&indices),
            if numbers.is_empty() {
                String::new()
            } else if mean < 0.0 && vibration {
                format!("{:.1}i", -mean)
            } else {
                format!("{mean:.1}")
            },
            set.irrep.as_deref().map_or("—".to_owned(), pretty),
            format!("{:.4}", set.purity),
            match (vibration, set.infrared) {
                (false, _) => String::new(),
                (true, Some(true)) => set.polarisation.join(","),
                (true, other) => yes(other).to_owned(),
            },
            if vibration { yes(set.raman).to_owned() } else { String::new() },
            set.intensity.map_or(String::new(), |intensity| format!("{intensity:.2}")),
            remarks.join("; "),
        ]);
    }
    for column in [1, 3, 6] {
        if let Some(column) = rows.column_mut(column) {
            column.set_cell_alignment(CellAlignment::Right);
        }
    }
    push_table(&mut out, &rows);
    out
}
