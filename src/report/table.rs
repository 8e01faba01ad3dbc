//! A point group as a table: classes, characters, functions, products and descent, as data and as text.
//!
//! Not here: how any of it is worked out (`group`).

use super::text::{push_table, table, wrap};
use super::unicode::pretty;
use crate::group::{GroupError, GroupName, PointGroup, exact_character};
use comfy_table::CellAlignment;
use serde::Serialize;
use serde_json::{Map, Value, json};
use std::fmt::Write as _;

/// Products of more irreps than this fill pages: the text leaves them to JSON.
const PRODUCTS_IN_TEXT: usize = 10;
/// Columns of a text table before its classes go on below.
const COLUMNS_IN_TEXT: usize = 10;

/// Everything `table` tells.
#[derive(Debug, Clone, Serialize)]
pub struct TableDocument {
    /// Name and version of the layout.
    pub schema: &'static str,
    /// Name of the group.
    pub point_group: String,
    /// Number of operations, null for a continuous group.
    pub order: Option<usize>,
    /// Number of proper operations.
    pub rotational_symmetry_number: Option<usize>,
    /// Where the axes lie.
    pub axes_convention: String,
    /// In printed order.
    pub classes: Vec<ClassEntry>,
    /// In printed order.
    pub irreps: Vec<IrrepEntry>,
    /// Irrep by irrep: what their product holds.
    pub products: Map<String, Value>,
    /// Symmetric square of each irrep.
    pub symmetric_squares: Map<String, Value>,
    /// Antisymmetric square of each irrep.
    pub antisymmetric_squares: Map<String, Value>,
    /// Subgroups up to conjugation, largest first.
    pub descent: Vec<DescentEntry>,
    /// Labels that swap under another legal choice of axes.
    pub other_settings: Vec<super::document::SettingEntry>,
}

/// One class.
#[derive(Debug, Clone, Serialize)]
pub struct ClassEntry {
    /// Such as `2C3`.
    pub symbol: String,
    /// Number of operations, null in a continuous group.
    pub size: Option<usize>,
    /// Its operations by name.
    pub operations: Vec<String>,
}

/// One irrep.
#[derive(Debug, Clone, Serialize)]
pub struct IrrepEntry {
    /// ASCII Mulliken name.
    pub name: String,
    /// Number of partners.
    pub dimension: usize,
    /// Two complex-conjugate irreps taken together.
    pub conjugate_pair: bool,
    /// By class.
    pub characters: Vec<f64>,
    /// The same as whole numbers and cosines.
    pub exact: Vec<String>,
    /// Partners in standard order.
    pub partners: Vec<String>,
    /// Functions that belong to it: x y z, rotations, quadratic, cubic.
    pub functions: Vec<String>,
}

/// Descent to one subgroup.
#[derive(Debug, Clone, Serialize)]
pub struct DescentEntry {
    /// Name of the subgroup.
    pub subgroup: String,
    /// Which of the parent's axes it keeps.
    pub description: String,
    /// Irrep of the parent → irreps of the subgroup.
    pub irreps: Map<String, Value>,
}

/// `A1g + 2E` from multiplicities.
#[must_use]
pub fn sum(group: &PointGroup, terms: &[(usize, usize)]) -> String {
    let term = |&(irrep, n): &(usize, usize)| {
        let name = &group.irreps()[irrep].name;
        if n == 1 { name.to_string() } else { format!("{n}{name}") }
    };
    terms.iter().map(term).collect::<Vec<_>>().join(" + ")
}

/// Works out the table of the group called `name`.
///
/// # Errors
/// [`GroupError`] for a name that is none, or an axis order beyond the supported one.
pub fn build(name: &str) -> Result<TableDocument, GroupError> {
    let name: GroupName = name.parse()?;
    let group = PointGroup::standard(name)?;
    let n = group.irreps().len();
    let irrep_name = |irrep: usize| group.irreps()[irrep].name.to_string();
    // In a continuous group some products reach irreps that are not kept; those are left out.
    let told = |terms: Result<Vec<(usize, usize)>, GroupError>| terms.ok().map(|terms| json!(sum(&group, &terms)));
    let per_irrep = |of: &dyn Fn(usize) -> Option<Value>| -> Map<String, Value> {
        (0..n).filter_map(|irrep| Some((irrep_name(irrep), of(irrep)?))).collect()
    };
    let products = per_irrep(&|a| {
        let row: Map<String, Value> = (0..n).filter_map(|b| Some((irrep_name(b), told(group.product(a, b))?))).collect();
        Some(Value::Object(row))
    });
    let mut descent = Vec::new();
    for subgroup in group.subgroups()? {
        let onto = |irrep: usize| -> Option<Value> {
            Some(json!(sum(&subgroup.group, &group.subduce(&subgroup, irrep).ok()?)))
        };
        descent.push(DescentEntry {
            subgroup: subgroup.group.name().to_string(),
            description: subgroup.description.clone(),
            irreps: per_irrep(&onto),
        });
    }
    Ok(TableDocument {
        schema: super::document::SCHEMA,
        point_group: name.to_string(),
        order: name.order(),
        rotational_symmetry_number: name.rotational_symmetry_number(),
        axes_convention: axes_convention(name).to_owned(),
        classes: group
            .classes()
            .iter()
            .map(|class| ClassEntry {
                symbol: class.symbol.clone(),
                size: (!name.is_continuous()).then_some(class.members.len()),
                operations: class.members.iter().map(|&member| group.elements()[member].symbol.clone()).collect(),
            })
            .collect(),
        irreps: (0..n).map(|irrep| irrep_entry(&group, irrep)).collect(),
        products,
        symmetric_squares: per_irrep(&|a| told(group.symmetric_square(a))),
        antisymmetric_squares: per_irrep(&|a| told(group.antisymmetric_square(a))),
        descent,
        other_settings: group.settings().iter().map(|setting| super::build::setting_entry(&group, &setting.description, &setting.swaps)).collect(),
    })
}

fn irrep_entry(group: &PointGroup, irrep: usize) -> IrrepEntry {
    let irrep = &group.irreps()[irrep];
    let functions = &irrep.functions;
    IrrepEntry {
        name: irrep.name.to_string(),
        dimension: irrep.dimension,
        conjugate_pair: irrep.constituents > 1,
        characters: irrep.characters.clone(),
        exact: irrep.characters.iter().zip(group.classes()).map(|(&character, class)| exact_character(group, class, irrep, character)).collect(),
        partners: irrep.partners.clone(),
        functions: [&functions.linear, &functions.rotations, &functions.quadratic, &functions.cubic]
            .into_iter()
            .flatten()
            .cloned()
            .collect(),
    }
}

/// Where the axes of a standard frame lie, by family.
fn axes_convention(name: GroupName) -> &'static str {
    match name {
        GroupName::C1 | GroupName::Ci => "any",
        GroupName::Cs => "z across the mirror plane",
        GroupName::Cn(_) | GroupName::Cnh(_) | GroupName::Sn(_) => "z along the principal axis; x free",
        GroupName::Cnv(2) => "z along C2; B1 is symmetric under sigma(xz), B2 under sigma(yz)",
        GroupName::Cnv(_) => "z along the principal axis; sigma_v is the xz plane",
        GroupName::Dn(2) | GroupName::Dnh(2) => "x, y, z along the three C2 axes",
        GroupName::Dn(_) | GroupName::Dnh(_) | GroupName::Dnd(_) => "z along the principal axis; C2' along x",
        GroupName::T | GroupName::Th => "x, y, z along the C2 axes",
        GroupName::Td => "x, y, z along the S4 axes",
        GroupName::O | GroupName::Oh => "x, y, z along the C4 axes",
        GroupName::I | GroupName::Ih => "z along a C5 axis; a C2 along y",
        GroupName::Cinfv | GroupName::Dinfh => "z along the molecule; x free",
        GroupName::K => "free",
    }
}

/// The table for people: characters and functions, then products, squares and descent.
#[must_use]
pub fn text(document: &TableDocument) -> String {
    let mut out = String::new();
    let order = document.order.map_or("continuous group".to_owned(), |order| format!("order {order}"));
    let _ = writeln!(
        out,
        "{}   {order}, {} classes, {} irreps\nAxes: {}\n",
        pretty(&document.point_group),
        document.classes.len(),
        document.irreps.len(),
        document.axes_convention
    );
    out.push_str(&characters(document));
    if document.irreps.iter().any(|irrep| irrep.conjugate_pair) {
        out.push_str("\n*  two complex-conjugate irreps taken together as one real representation\n");
    }
    if document.irreps.len() <= PRODUCTS_IN_TEXT {
        out.push_str("\nProducts\n");
        let mut rows = table();
        let names: Vec<String> = document.irreps.iter().map(|irrep| pretty(&irrep.name)).collect();
        rows.set_header(std::iter::once(String::new()).chain(names.iter().cloned()));
        for (a, irrep) in document.irreps.iter().enumerate() {
            let row = document.products.get(&irrep.name);
            let cell = |b: usize| {
                let product = row.and_then(|row| row.get(&document.irreps[b].name)).and_then(Value::as_str);
                if b < a { String::new() } else { product.map_or("…".to_owned(), pretty) }
            };
            rows.add_row(std::iter::once(names[a].clone()).chain((0..document.irreps.len()).map(cell)));
        }
        push_table(&mut out, &rows);
    } else {
        out.push_str("\nProducts of so many irreps are in the JSON output.\n");
    }
    let degenerate: Vec<&IrrepEntry> = document.irreps.iter().filter(|irrep| irrep.dimension > 1).collect();
    if !degenerate.is_empty() {
        out.push_str("\nSquares      symmetric; antisymmetric in braces\n");
        let told = |map: &Map<String, Value>, name: &str| map.get(name).and_then(Value::as_str).map_or("…".to_owned(), pretty);
        for irrep in degenerate {
            let _ = writeln!(
                out,
                "{:<12} {}   {{{}}}",
                format!("{}²", pretty(&irrep.name)),
                told(&document.symmetric_squares, &irrep.name),
                told(&document.antisymmetric_squares, &irrep.name)
            );
        }
    }
    if !document.descent.is_empty() {
        out.push_str("\nDescent\n");
        for entry in &document.descent {
            let _ = writeln!(out, "{}  ({})", pretty(&entry.subgroup), entry.description);
            let parts: Vec<String> = entry
                .irreps
                .iter()
                .map(|(irrep, onto)| format!("{} → {}", pretty(irrep), pretty(onto.as_str().unwrap_or_default())))
                .collect();
            for line in wrap(&parts.join(",  "), 96) {
                let _ = writeln!(out, "    {line}");
            }
        }
    }
    for setting in &document.other_settings {
        let swaps: Vec<String> = setting
            .swaps
            .iter()
            .map(|(here, there)| format!("{} → {}", pretty(here), pretty(there.as_str().unwrap_or_default())))
            .collect();
        let _ = writeln!(out, "\nOther choice of axes, {}: {}", setting.description, swaps.join(", "));
    }
    out
}

/// Characters and functions; a wide table goes on below with the next classes.
fn characters(document: &TableDocument) -> String {
    let mut out = String::new();
    let starts: Vec<usize> = (0..document.classes.len()).step_by(COLUMNS_IN_TEXT).collect();
    for &start in &starts {
        let end = (start + COLUMNS_IN_TEXT).min(document.classes.len());
        let last = end == document.classes.len();
        let mut rows = table();
        let head = document.classes[start..end].iter().map(|class| pretty(&class.symbol));
        rows.set_header(std::iter::once(pretty(&document.point_group)).chain(head).chain([String::new()]));
        for irrep in &document.irreps {
            let star = if irrep.conjugate_pair { "*" } else { "" };
            let functions = if last { irrep.functions.join("  ") } else { String::new() };
            rows.add_row(
                std::iter::once(format!("{}{star}", pretty(&irrep.name)))
                    .chain(irrep.exact[start..end].iter().cloned())
                    .chain([functions]),
            );
        }
        for column in 1..=end - start {
            if let Some(column) = rows.column_mut(column) {
                column.set_cell_alignment(CellAlignment::Right);
            }
        }
        push_table(&mut out, &rows);
        if !last {
            out.push('\n');
        }
    }
    out
}
