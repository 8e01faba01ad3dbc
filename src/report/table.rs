//! A point group as a table: classes, characters, functions, products and descent, as data and as text.
//!
//! Not here: how any of it is worked out (`group`).

use super::text::{push_table, table};
use super::unicode::pretty;
use crate::group::{GroupError, GroupName, PointGroup, exact_character};
use comfy_table::CellAlignment;
use schemars::JsonSchema;
use serde::Serialize;
use serde_json::{Map, Value, json};
use std::collections::BTreeMap;
use std::fmt::Write as _;

/// Products of this many irreps are printed; of more the text leaves them to JSON.
const PRODUCTS_IN_TEXT: usize = 7;
/// Columns of a line.
const TEXT_WIDTH: usize = 100;
/// Columns of a text table before its classes go on below.
const COLUMNS_IN_TEXT: usize = 10;

/// Everything `table` tells.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct TableDocument {
    /// Name and version of the layout.
    #[schemars(extend("const" = super::document::SCHEMA))]
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
    #[schemars(with = "BTreeMap<String, BTreeMap<String, String>>")]
    pub products: Map<String, Value>,
    /// Symmetric square of each irrep.
    #[schemars(with = "BTreeMap<String, String>")]
    pub symmetric_squares: Map<String, Value>,
    /// Antisymmetric square of each irrep.
    #[schemars(with = "BTreeMap<String, String>")]
    pub antisymmetric_squares: Map<String, Value>,
    /// Subgroups up to conjugation, largest first.
    pub descent: Vec<DescentEntry>,
    /// Labels that swap under another legal choice of axes.
    pub other_settings: Vec<super::document::SettingEntry>,
}

/// One class.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ClassEntry {
    /// Such as `2C3`.
    pub symbol: String,
    /// Number of operations, null in a continuous group.
    pub size: Option<usize>,
    /// Its operations by name.
    pub operations: Vec<String>,
}

/// One irrep.
#[derive(Debug, Clone, Serialize, JsonSchema)]
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
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DescentEntry {
    /// Name of the subgroup.
    pub subgroup: String,
    /// Which of the parent's axes it keeps.
    pub description: String,
    /// Irrep of the parent → irreps of the subgroup.
    #[schemars(with = "BTreeMap<String, String>")]
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
    // A continuous group holds a class an angle, of which one stands for all.
    let printed = group.printed_classes();
    let irrep_name = |irrep: usize| group.irreps()[irrep].name.to_string();
    // In a continuous group some products reach irreps that are not kept; those are left out.
    let told = |terms: Result<Vec<(usize, usize)>, GroupError>| terms.ok().map(|terms| json!(sum(&group, &terms)));
    let per_irrep = |of: &dyn Fn(usize) -> Option<Value>| -> Map<String, Value> {
        (0..n).filter_map(|irrep| Some((irrep_name(irrep), of(irrep)?))).collect()
    };
    let products = per_irrep(&|a| {
        let row: Map<String, Value> =
            (0..n).filter_map(|b| Some((irrep_name(b), told(group.product(a, b))?))).collect();
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
        classes: printed
            .iter()
            .map(|&class| &group.classes()[class])
            .map(|class| ClassEntry {
                symbol: class.symbol.clone(),
                size: (!name.is_continuous()).then_some(class.members.len()),
                operations: class.members.iter().map(|&member| group.elements()[member].symbol.clone()).collect(),
            })
            .collect(),
        irreps: (0..n).map(|irrep| irrep_entry(&group, &printed, irrep)).collect(),
        products,
        symmetric_squares: per_irrep(&|a| told(group.symmetric_square(a))),
        antisymmetric_squares: per_irrep(&|a| told(group.antisymmetric_square(a))),
        descent,
        other_settings: group.settings().iter().map(|setting| setting_entry(&group, setting)).collect(),
    })
}

fn setting_entry(group: &PointGroup, setting: &crate::group::Setting) -> super::document::SettingEntry {
    let name = |irrep: usize| group.irreps()[irrep].name;
    let swaps: Vec<_> = setting.swaps.iter().map(|&(here, there)| (name(here), name(there))).collect();
    super::build::setting_entry(&setting.description, &swaps)
}

fn irrep_entry(group: &PointGroup, printed: &[usize], irrep: usize) -> IrrepEntry {
    let irrep = &group.irreps()[irrep];
    let characters: Vec<(usize, f64)> = printed.iter().map(|&class| (class, irrep.characters[class])).collect();
    let functions = &irrep.functions;
    IrrepEntry {
        name: irrep.name.to_string(),
        dimension: irrep.dimension,
        conjugate_pair: irrep.constituents > 1,
        characters: characters.iter().map(|entry| entry.1).collect(),
        exact: characters
            .iter()
            .map(|&(class, character)| exact_character(group, &group.classes()[class], irrep, character))
            .collect(),
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
    out.push_str(&products(document));
    let squares: Vec<String> = document
        .irreps
        .iter()
        .filter(|irrep| irrep.dimension > 1)
        .filter_map(|irrep| {
            let told = |map: &Map<String, Value>| map.get(&irrep.name).and_then(Value::as_str).map(pretty);
            let (symmetric, antisymmetric) =
                (told(&document.symmetric_squares)?, told(&document.antisymmetric_squares)?);
            Some(format!("{:<12} {symmetric}   {{{antisymmetric}}}", format!("{}²", pretty(&irrep.name))))
        })
        .collect();
    if !squares.is_empty() {
        let _ = writeln!(out, "\nSquares      symmetric; antisymmetric in braces\n{}", squares.join("\n"));
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
            for line in wrap_terms(&parts, TEXT_WIDTH) {
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

/// Products of all irreps but the totally symmetric one; with an inversion centre those of even ones alone, since
/// parity multiplies by itself.
fn products(document: &TableDocument) -> String {
    let even: Vec<&IrrepEntry> = document.irreps.iter().filter(|irrep| irrep.name.contains('g')).collect();
    let odd = document.irreps.iter().any(|irrep| irrep.name.ends_with('u') || irrep.name.contains("_u"));
    let listed: Vec<&IrrepEntry> = if odd { even } else { document.irreps.iter().collect() };
    let more = listed.len() > 1 + PRODUCTS_IN_TEXT;
    let listed: Vec<&IrrepEntry> = listed.into_iter().skip(1).take(PRODUCTS_IN_TEXT).collect();
    let mut out = String::new();
    if listed.is_empty() {
        return out;
    }
    let parity = if odd { "   g × g = u × u = g, g × u = u" } else { "" };
    let _ = writeln!(out, "\nProducts{parity}");
    let mut terms = Vec::new();
    for (at, a) in listed.iter().enumerate() {
        for b in &listed[at..] {
            let product = document.products.get(&a.name).and_then(|row| row.get(&b.name)).and_then(Value::as_str);
            if let Some(product) = product {
                terms.push(format!("{} × {} = {}", pretty(&a.name), pretty(&b.name), pretty(product)));
            }
        }
    }
    for line in wrap_terms(&terms, TEXT_WIDTH) {
        let _ = writeln!(out, "    {line}");
    }
    if more {
        out.push_str("    …   all of them are in the JSON output\n");
    }
    out
}

/// Puts whole terms on lines of at most `width` characters, three blanks apart.
fn wrap_terms(terms: &[String], width: usize) -> Vec<String> {
    let mut lines: Vec<String> = Vec::new();
    for term in terms {
        match lines.last_mut() {
            Some(line) if line.chars().count() + 3 + term.chars().count() <= width => {
                line.push_str("   ");
                line.push_str(term);
            }
            _ => lines.push(term.clone()),
        }
    }
    lines
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
