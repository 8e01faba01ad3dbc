//! What symmetry says of one pair of irreps, as data and as text: `table GROUP --transition FROM TO`.
//!
//! Here: names instead of indices, states of the product with what opens each. Not here: molecules and numbers
//! (`report::transitions`), the rules themselves (`selection`).

use super::document::SCHEMA;
use super::text::{head, push_table, table};
use super::unicode::pretty;
use crate::group::{GroupError, IrrepName, PointGroup};
use crate::selection::rules::QUADRATIC;
use crate::selection::{Allowed, Operators};
use schemars::JsonSchema;
use serde::Serialize;
use std::fmt::Write as _;

/// Names of the three axes.
pub const AXES: [&str; 3] = ["x", "y", "z"];
/// Names of the three rotations.
pub const ROTATIONS: [&str; 3] = ["Rx", "Ry", "Rz"];

/// The document of `table GROUP --transition`.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct RuleDocument {
    /// Name and version of the layout.
    #[schemars(extend("const" = SCHEMA))]
    pub schema: &'static str,
    /// Name of the group.
    pub point_group: String,
    /// Irrep left.
    pub from: String,
    /// Irrep entered.
    pub to: String,
    /// What is allowed.
    #[serde(flatten)]
    pub rule: Rule,
}

/// What is allowed for a pair of irreps.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct Rule {
    /// Irreps of the product, one entry an occurrence.
    pub product: Vec<String>,
    /// x, y, z.
    pub electric_dipole: DipoleRule,
    /// Rx, Ry, Rz.
    pub magnetic_dipole: ComponentRule,
    /// Traceless products of two coordinates.
    pub electric_quadrupole: ComponentRule,
    /// Products of two coordinates.
    pub two_photon: ComponentRule,
    /// `g-u` (allowed), `g-g` or `u-u` (forbidden); null without a centre of inversion.
    pub laporte: Option<String>,
    /// The states of the product, reached from a totally symmetric ground state.
    pub states: Vec<StateRule>,
}

/// Electric dipole.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct DipoleRule {
    /// Any component.
    pub allowed: bool,
    /// Axes of the report's frame.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
}

/// Another operator.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct ComponentRule {
    /// Any component.
    pub allowed: bool,
    /// Which.
    pub components: Vec<&'static str>,
}

/// One irrep of a product, as the state of an excited configuration.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct StateRule {
    /// Orbital irrep, of the singlet and of the triplet alike.
    pub irrep: String,
    /// Directly, singlet from singlet.
    pub electric_dipole: DipoleRule,
    /// Vibrations that open it when it is forbidden.
    pub vibronic: Vec<HelperRule>,
    /// Irreps of the triplet's three sublevels: each mixes with singlets of the same irrep.
    pub triplet_sublevels: Vec<String>,
    /// Those sublevels that share the irrep of x, y or z, so that the triplet gains intensity from singlets.
    pub sublevels_with_dipole: Vec<SublevelRule>,
}

/// A vibration that opens a forbidden state, first order.
#[derive(Debug, Clone, PartialEq, Serialize, JsonSchema)]
pub struct HelperRule {
    /// Irrep of the vibration.
    pub irrep: String,
    /// Axes it gives.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
}

/// A sublevel reached through spin–orbit coupling.
#[derive(Debug, Clone, Serialize, JsonSchema)]
pub struct SublevelRule {
    /// Irrep of the sublevel and of the singlets it borrows from.
    pub irrep: String,
    /// Axes.
    #[schemars(inner(regex(pattern = "^[xyz]$")))]
    pub polarisation: Vec<&'static str>,
}

/// Names of the axes with these indices.
#[must_use]
pub fn axes(indices: &[usize]) -> Vec<&'static str> {
    indices.iter().map(|&axis| AXES[axis]).collect()
}

fn dipole(indices: &[usize]) -> DipoleRule {
    DipoleRule { allowed: !indices.is_empty(), polarisation: axes(indices) }
}

fn components(indices: &[usize], names: &[&'static str]) -> ComponentRule {
    ComponentRule { allowed: !indices.is_empty(), components: indices.iter().map(|&at| names[at]).collect() }
}

/// Names of irreps, each as often as it occurs.
#[must_use]
pub fn names(group: &PointGroup, terms: &[(usize, usize)]) -> Vec<String> {
    terms.iter().flat_map(|&(irrep, n)| std::iter::repeat_n(group.irreps()[irrep].name.to_string(), n)).collect()
}

/// Names instead of indices, and what opens each state of the product.
#[must_use]
pub fn rule(group: &PointGroup, operators: &Operators, from: usize, to: usize, allowed: &Allowed) -> Rule {
    let letter = |irrep: usize| if operators.is_even(irrep) { "g" } else { "u" };
    Rule {
        product: names(group, &allowed.product),
        electric_dipole: dipole(&allowed.electric_dipole),
        magnetic_dipole: components(&allowed.magnetic_dipole, &ROTATIONS),
        electric_quadrupole: components(&allowed.quadrupole, &QUADRATIC),
        two_photon: components(&allowed.two_photon, &QUADRATIC),
        laporte: allowed.parity_changes.map(|_| format!("{}-{}", letter(from), letter(to))),
        states: allowed.product.iter().map(|&(irrep, _)| state(group, operators, irrep)).collect(),
    }
}

/// What is known of one state by its irrep alone.
#[must_use]
pub fn state(group: &PointGroup, operators: &Operators, irrep: usize) -> StateRule {
    let name = |irrep: usize| group.irreps()[irrep].name.to_string();
    let direct = operators.polarisation(irrep);
    let helpers = if direct.is_empty() { operators.helpers(group, irrep) } else { Vec::new() };
    let sublevels = operators.triplet_sublevels(group, irrep).unwrap_or_default();
    StateRule {
        irrep: name(irrep),
        electric_dipole: dipole(&direct),
        vibronic: helpers
            .into_iter()
            .map(|helper| HelperRule { irrep: name(helper.irrep), polarisation: axes(&helper.polarisation) })
            .collect(),
        sublevels_with_dipole: sublevels
            .iter()
            .map(|&(irrep, _)| SublevelRule { irrep: name(irrep), polarisation: axes(&operators.polarisation(irrep)) })
            .filter(|sublevel| !sublevel.polarisation.is_empty())
            .collect(),
        triplet_sublevels: names(group, &sublevels),
    }
}

/// Works out the rule between two irreps, named in any usual spelling, of the group called `name`.
///
/// # Errors
/// [`GroupError`] for a name that is none, an irrep that the group has not, or a product beyond the irreps kept.
pub fn build(name: &str, from: &str, to: &str) -> Result<RuleDocument, GroupError> {
    let group = PointGroup::standard(name.parse()?)?;
    let operators = Operators::new(&group);
    let irrep = |text: &str| group.irrep_idx(&text.parse::<IrrepName>()?);
    let (from, to) = (irrep(from)?, irrep(to)?);
    let allowed = operators.between(&group, from, to)?;
    Ok(RuleDocument {
        schema: SCHEMA,
        point_group: group.name().to_string(),
        from: group.irreps()[from].name.symbol(),
        to: group.irreps()[to].name.symbol(),
        rule: rule(&group, &operators, from, to, &allowed),
    })
}

/// `x, y`, or `—` where there is nothing.
#[must_use]
pub fn listed(names: &[&str]) -> String {
    if names.is_empty() { "—".to_owned() } else { names.join(", ") }
}

fn verdict(allowed: bool, components: &[&str]) -> String {
    if allowed { format!("allowed: {}", listed(components)) } else { "forbidden".to_owned() }
}

/// What Laporte's rule says, in words.
#[must_use]
fn laporte(parities: &str) -> String {
    let allowed = matches!(parities, "g-u" | "u-g");
    format!("{} {}", parities.replace('-', " → "), if allowed { "allowed" } else { "forbidden" })
}

/// The rule for people.
#[must_use]
pub fn text(document: &RuleDocument) -> String {
    let rule = &document.rule;
    let product: Vec<String> = rule.product.iter().map(|name| pretty(name)).collect();
    let mut out =
        format!("{}   {} → {}\n\n", pretty(&document.point_group), pretty(&document.from), pretty(&document.to));
    head(&mut out, "Product", &product.join(" + "));
    head(&mut out, "E dipole", &verdict(rule.electric_dipole.allowed, &rule.electric_dipole.polarisation));
    head(&mut out, "M dipole", &verdict(rule.magnetic_dipole.allowed, &rule.magnetic_dipole.components));
    head(&mut out, "E quadrupole", &verdict(rule.electric_quadrupole.allowed, &rule.electric_quadrupole.components));
    head(&mut out, "Two photons", &verdict(rule.two_photon.allowed, &rule.two_photon.components));
    if let Some(parities) = &rule.laporte {
        head(&mut out, "Laporte", &laporte(parities));
    }
    out.push_str("\nStates of the configuration, from a totally symmetric ground state\n");
    let mut rows = table();
    rows.set_header(["state", "E dipole", "opened by vibrations (polarisation)", "triplet sublevels"]);
    for state in &rule.states {
        let helpers: Vec<String> = state
            .vibronic
            .iter()
            .map(|helper| format!("{} ({})", pretty(&helper.irrep), helper.polarisation.join(",")))
            .collect();
        let sublevels: Vec<String> = state.triplet_sublevels.iter().map(|name| pretty(name)).collect();
        rows.add_row([
            pretty(&state.irrep),
            listed(&state.electric_dipole.polarisation),
            if helpers.is_empty() { "—".to_owned() } else { helpers.join(" ") },
            sublevels.join(" + "),
        ]);
    }
    push_table(&mut out, &rows);
    let _ = writeln!(
        out,
        "\nThe rules say which integrals vanish by symmetry, not how strong a band is. Spin is kept: singlet ↔ triplet\n\
         only through spin–orbit coupling, each sublevel with singlets of its own irrep."
    );
    out
}
