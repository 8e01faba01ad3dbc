//! JSON Schema of every JSON output, derived from the types that are printed.
//!
//! Here: which type belongs to which verb, and which parts of the common document a verb fills. Not here: a schema by
//! hand; descriptions are the doc comments of the types, units stand in the keys.

use super::document::{Document, SCHEMA};
use super::double_table::DoubleTableDocument;
use super::explain::ExplainDocument;
use super::explain_pair::ExplainTransitionDocument;
use super::modes::ModesDocument;
use super::purify::PurifyDocument;
use super::record::Record;
use super::rule::RuleDocument;
use super::states::StatesDocument;
use super::table::TableDocument;
use schemars::generate::SchemaSettings;
use schemars::transform::{RecursiveTransform, Transform};
use schemars::{JsonSchema, Schema};
use serde_json::{Value, json};
use std::collections::BTreeSet;

/// One JSON output.
struct Output {
    /// Verb, or verb and option, as asked for: `label`, `table-double`.
    name: &'static str,
    /// What it is.
    title: &'static str,
    /// Of its type.
    of_type: fn() -> Schema,
    /// Parts that are always there although the type leaves them open.
    always: &'static [&'static str],
    /// Parts of the common document that are never there.
    never: &'static [&'static str],
    /// The definition that these parts belong to, where it is not the whole.
    within: Option<&'static str>,
}

/// Parts of the common document that `label` always fills, and those that it never does.
const LABEL_ALWAYS: &[&str] = &["basis", "orbitals", "sets", "frontier", "thresholds"];
const LABEL_NEVER: &[&str] = &["audit", "jahn_teller"];

/// Every JSON output, in the order of the README.
const OUTPUTS: &[Output] = &[
    Output {
        name: "label",
        title: "orbsieve label",
        of_type: derived::<Document>,
        always: LABEL_ALWAYS,
        never: LABEL_NEVER,
        within: None,
    },
    Output::whole("label-explain", "orbsieve label --explain", derived::<ExplainDocument>),
    Output::whole(
        "transition-explain",
        "orbsieve label --explain-transition, orbsieve transitions --explain",
        derived::<ExplainTransitionDocument>,
    ),
    Output {
        name: "geometry",
        title: "orbsieve geometry",
        of_type: derived::<Document>,
        always: &[],
        never: &[
            "basis",
            "orbitals",
            "sets",
            "frontier",
            "d_block",
            "active_window",
            "transitions",
            "jahn_teller",
            "audit",
            "thresholds",
        ],
        within: None,
    },
    Output {
        name: "transitions",
        title: "orbsieve transitions",
        of_type: derived::<Document>,
        always: &["basis", "sets", "frontier", "transitions", "thresholds"],
        never: &["orbitals", "active_window", "audit"],
        within: None,
    },
    Output {
        name: "audit",
        title: "orbsieve audit",
        of_type: derived::<Document>,
        always: &["basis", "orbitals", "sets", "frontier", "audit", "thresholds"],
        never: &["active_window", "transitions", "jahn_teller"],
        within: None,
    },
    Output::whole("purify", "orbsieve purify (its report)", derived::<PurifyDocument>),
    Output::whole("modes", "orbsieve modes", derived::<ModesDocument>),
    Output::whole("states", "orbsieve states", derived::<StatesDocument>),
    Output::whole("table", "orbsieve table", derived::<TableDocument>),
    Output::whole("table-double", "orbsieve table --double", derived::<DoubleTableDocument>),
    Output::whole("table-transition", "orbsieve table --transition", derived::<RuleDocument>),
    Output {
        name: "batch",
        title: "orbsieve batch (one line)",
        of_type: derived::<Record>,
        always: LABEL_ALWAYS,
        never: LABEL_NEVER,
        within: Some("LabelledRecord"),
    },
];

impl Output {
    const fn whole(name: &'static str, title: &'static str, of_type: fn() -> Schema) -> Self {
        Self { name, title, of_type, always: &[], never: &[], within: None }
    }

    fn schema(&self) -> Schema {
        let mut schema = (self.of_type)();
        schema.insert("title".to_owned(), json!(self.title));
        schema.insert("$id".to_owned(), json!(id(self.name)));
        let whole = schema.ensure_object();
        let parts = match self.within {
            None => Some(whole),
            Some(name) => whole.get_mut("$defs").and_then(|all| all.get_mut(name)).and_then(Value::as_object_mut),
        };
        if let Some(parts) = parts {
            if let Some(Value::Object(properties)) = parts.get_mut("properties") {
                properties.retain(|key, _| !self.never.contains(&key.as_str()));
            }
            if let Some(Value::Array(required)) = parts.get_mut("required") {
                required.extend(self.always.iter().map(|&part| json!(part)));
            }
        }
        RecursiveTransform(close).transform(&mut schema);
        prune(&mut schema);
        schema
    }
}

fn id(name: &str) -> String {
    format!("urn:{}:{name}", SCHEMA.replace('/', ":"))
}

/// The schema of what serde prints of a type: a key that is always printed is required, even where it may be null.
fn derived<T: JsonSchema>() -> Schema {
    SchemaSettings::draft2020_12().for_serialize().into_generator().into_root_schema_for::<T>()
}

/// No keys but those described. Maps from names to values stay open, as their keys are data.
fn close(schema: &mut Schema) {
    if schema.get("properties").is_some() && schema.get("additionalProperties").is_none() {
        schema.insert("additionalProperties".to_owned(), Value::Bool(false));
    }
}

/// Drops definitions that nothing refers to any more.
fn prune(schema: &mut Schema) {
    let definitions = schema.get("$defs").cloned().unwrap_or(Value::Null);
    let mut used = BTreeSet::new();
    let mut open: Vec<String> = schema
        .as_object()
        .into_iter()
        .flatten()
        .filter(|(key, _)| *key != "$defs")
        .flat_map(|(_, value)| references(value))
        .collect();
    while let Some(name) = open.pop() {
        if used.insert(name.clone()) {
            open.extend(definitions.get(&name).map(references).unwrap_or_default());
        }
    }
    if let Some(Value::Object(definitions)) = schema.get_mut("$defs") {
        definitions.retain(|name, _| used.contains(name));
    }
}

/// Names of the definitions that a schema refers to.
fn references(value: &Value) -> Vec<String> {
    match value {
        Value::Object(map) => {
            let own = map.get("$ref").and_then(Value::as_str).and_then(|target| target.strip_prefix("#/$defs/"));
            own.map(str::to_owned).into_iter().chain(map.values().flat_map(references)).collect()
        }
        Value::Array(items) => items.iter().flat_map(references).collect(),
        _ => Vec::new(),
    }
}

/// What a schema can be asked for.
#[must_use]
pub fn names() -> Vec<&'static str> {
    OUTPUTS.iter().map(|output| output.name).collect()
}

/// The schema of one output; None for a name that is not among [`names`].
#[must_use]
pub fn of(name: &str) -> Option<Value> {
    OUTPUTS.iter().find(|output| output.name == name).map(|output| output.schema().to_value())
}

/// One document that holds every schema under its own identifier; any output fits one of them.
#[must_use]
pub fn all() -> Value {
    let choices: Vec<Value> = OUTPUTS.iter().map(|output| json!({"$ref": id(output.name)})).collect();
    let resources: serde_json::Map<String, Value> =
        OUTPUTS.iter().map(|output| (output.name.to_owned(), output.schema().to_value())).collect();
    json!({
        "$schema": "https://json-schema.org/draft/2020-12/schema",
        "$id": id("all"),
        "title": "every JSON output of orbsieve",
        "anyOf": choices,
        "$defs": resources,
    })
}
