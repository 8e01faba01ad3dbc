//! A double group as a table: classes, irreps in both notations, products, splitting of half-integer J, as data and as text.
//!
//! Not here: how any of it is worked out (`group::double`).

use super::document::SCHEMA;
use super::states::{LevelEntry, Stage};
use super::states_text::level_lines;
use super::text::{push_table, table};
use super::unicode::pretty;
use crate::group::double_name::half;
use crate::group::irrep_name::Parity;
use crate::group::products::Decomposition;
use crate::group::{DoubleGroup, GroupError, PointGroup};
use crate::states::StatesError;
use comfy_table::CellAlignment;
use schemars::JsonSchema;
use serde::Serialize;
use std::collections::BTreeMap;
use std::fmt::Write as _;

/// Levels are listed up to this 2J.
const HIGHEST_TWICE_J_SHOWN: u16 = 15;
/// Columns of a text table before its classes go on below.
const COLUMNS_IN_TEXT: usize = 8;

/// The irreps of a group as `table --double` tells them: classes, then every double-valued irrep with its two names.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DoubleTableDocument {
    /// Name and version of the layout.
    #[schemars(extend("const" = SCHEMA))]
    pub schema: &'static str,
    /// Name of the group.
    pub point_group: String,
    /// Number of elements of the double group, null for a continuous group.
    pub order: Option<usize>,
    /// Symbols of the classes; R is the turn by 360°.
    pub classes: Vec<DoubleClassEntry>,
    /// Single-valued irreps, then double-valued ones.
    pub irreps: Vec<DoubleIrrepEntry>,
    /// Products of each irrep with the double-valued ones.
    #[schemars(with = "BTreeMap<String, BTreeMap<String, String>>")]
    pub products: serde_json::Map<String, serde_json::Value>,
    /// Splitting of J = 1/2 to 15/2, states even under inversion of the ion.
    pub levels: Vec<LevelEntry>,
}

/// A class of a double group.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DoubleClassEntry {
    /// Such as `3C2+3RC2`.
    pub symbol: String,
    /// Number of elements, null in a continuous group.
    pub size: Option<usize>,
}

/// An irrep of a double group.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DoubleIrrepEntry {
    /// `E1/2g`.
    pub name: String,
    /// `Gamma6g`.
    pub gamma: Option<String>,
    /// Of a conjugate pair both.
    pub dimension: usize,
    /// Belongs to half-integer spin.
    pub double_valued: bool,
    /// Two complex conjugates taken together.
    pub conjugate_pair: bool,
    /// How many copies make one Kramers level; null for single-valued irreps.
    pub copies_in_kramers_level: Option<usize>,
    /// By class.
    pub characters: Vec<f64>,
}

/// Works out the double group's table.
///
/// # Errors
/// [`StatesError`] for an axis order beyond the supported one.
pub fn build(group: &PointGroup) -> Result<DoubleTableDocument, StatesError> {
    let double = DoubleGroup::of(group)?;
    let stage = Stage { group, double: &double, vibrations: None };
    let printed = double.printed_classes(group);
    let classes = printed.iter().map(|&class| &double.classes()[class]).map(|class| DoubleClassEntry {
        symbol: class.symbol.clone(),
        size: (!group.is_continuous()).then_some(class.size),
    });
    let irreps = double.irreps().iter().map(|irrep| DoubleIrrepEntry {
        name: irrep.name.to_string(),
        gamma: irrep.name.gamma(),
        dimension: irrep.dimension,
        double_valued: irrep.kramers.is_some(),
        conjugate_pair: irrep.constituents > 1,
        copies_in_kramers_level: irrep.kramers.map(|_| irrep.copies_in_level()),
        characters: printed.iter().map(|&class| irrep.characters[class]).collect(),
    });
    let mut levels = Vec::new();
    for twice_j in (1..=HIGHEST_TWICE_J_SHOWN).step_by(2) {
        levels.push(stage.level(format!("J = {}", half(twice_j)), twice_j, Parity::Even)?);
    }
    Ok(DoubleTableDocument {
        schema: SCHEMA,
        point_group: group.name().to_string(),
        order: group.name().order().map(|order| 2 * order),
        classes: classes.collect(),
        irreps: irreps.collect(),
        products: products(&double),
        levels,
    })
}

/// Products with double-valued irreps; those beyond what is kept of a continuous group are left out.
fn products(double: &DoubleGroup) -> serde_json::Map<String, serde_json::Value> {
    let irreps = double.irreps();
    let told = |product: Result<Decomposition, GroupError>| {
        let product = product.ok()?;
        let names = product.iter().map(|&(irrep, count)| {
            if count == 1 { irreps[irrep].name.to_string() } else { format!("{count} {}", irreps[irrep].name) }
        });
        Some(serde_json::Value::String(names.collect::<Vec<_>>().join(" + ")))
    };
    (0..irreps.len())
        .map(|a| {
            let row: serde_json::Map<_, _> = (double.n_single()..irreps.len())
                .filter_map(|b| Some((irreps[b].name.to_string(), told(double.product(a, b))?)))
                .collect();
            (irreps[a].name.to_string(), serde_json::Value::Object(row))
        })
        .collect()
}

/// The double group for people.
#[must_use]
pub fn text(document: &DoubleTableDocument) -> String {
    let mut out = String::new();
    let order = document.order.map_or("continuous group".to_owned(), |order| format!("{order} elements"));
    let _ = writeln!(
        out,
        "Double group of {}   {order}, {} classes, {} irreps; R is the turn by 360°\n",
        pretty(&document.point_group),
        document.classes.len(),
        document.irreps.len()
    );
    let starts: Vec<usize> = (0..document.classes.len()).step_by(COLUMNS_IN_TEXT).collect();
    for &start in &starts {
        let end = (start + COLUMNS_IN_TEXT).min(document.classes.len());
        let mut rows = table();
        let head = document.classes[start..end].iter().map(|class| crate::group::symbols::pretty(&class.symbol));
        rows.set_header([String::new(), String::new()].into_iter().chain(head));
        for irrep in &document.irreps {
            let star = if irrep.conjugate_pair { "*" } else { "" };
            let names = [format!("{}{star}", pretty(&irrep.name)), pretty(irrep.gamma.as_deref().unwrap_or_default())];
            let characters = irrep.characters[start..end].iter().map(|&character| number(character));
            rows.add_row(names.into_iter().chain(characters));
        }
        for column in 2..2 + end - start {
            if let Some(column) = rows.column_mut(column) {
                column.set_cell_alignment(CellAlignment::Right);
            }
        }
        push_table(&mut out, &rows);
        out.push('\n');
    }
    if document.irreps.iter().any(|irrep| irrep.conjugate_pair) {
        out.push_str(
            "*  two complex-conjugate irreps taken together; of half-integer spin they make one Kramers level\n",
        );
    }
    let twice: Vec<String> = document
        .irreps
        .iter()
        .filter(|irrep| irrep.copies_in_kramers_level == Some(2))
        .map(|irrep| pretty(&irrep.name))
        .collect();
    if !twice.is_empty() {
        let _ = writeln!(out, "Time reversal joins two of {} to one Kramers level", twice.join(", "));
    }
    out.push_str("\nLevels of half-integer J\n");
    out.push_str(&level_lines(&document.levels));
    out
}

/// A character as a whole number, or with the root that it is, or with four decimals.
fn number(character: f64) -> String {
    let sign = if character < 0.0 { "-" } else { "" };
    for (value, text) in [(2.0_f64.sqrt(), "√2"), (3.0_f64.sqrt(), "√3")] {
        if (character.abs() - value).abs() < 1e-9 {
            return format!("{sign}{text}");
        }
    }
    if (character - character.round()).abs() < 1e-9 {
        return format!("{}", character.round() + 0.0);
    }
    format!("{character:.4}")
}
