//! `label --explain`, `label --explain-transition` and `transitions --explain`: the reasoning instead of the report.

use super::arguments::{Common, Format};
use super::verbs::{json, refuse};
use super::{CliError, Status, output};
use crate::labelling::{Labelled, Thresholds};
use crate::model::Molecule;
use crate::report::explain::explain;
use crate::report::explain_pair::{explain_pair, name_of, pair_of};
use crate::report::explain_text::{explain_text, explain_transition_text};
use crate::selection::{SetName, set_name};
use serde::Serialize;
use std::io::Write;

/// What the reasoning is drawn from.
pub struct Ground<'a> {
    /// The file as given.
    pub name: &'a str,
    /// Its molecule, coefficients canonical.
    pub molecule: &'a Molecule,
    /// Its labels.
    pub labelled: &'a Labelled,
    /// Options of every verb.
    pub common: &'a Common,
}

impl Ground<'_> {
    fn find(&self, name: &SetName) -> Result<set_name::FoundSet, CliError> {
        set_name::find(&self.labelled.spins, &self.labelled.symmetry.group, name)
            .map_err(|error| CliError::Usage(format!("{}: {error}", self.name)))
    }

    /// Why one set has its label.
    pub fn set(&self, asked: &SetName, thresholds: &Thresholds, out: &mut dyn Write) -> Result<Status, CliError> {
        let found = self.find(asked)?;
        let document = explain(self.name, &asked.to_string(), self.molecule, self.labelled, thresholds, found);
        self.deliver(&document, || explain_text(&document), out)
    }

    /// Why the transition between two sets is allowed or not.
    pub fn transition(&self, from: &SetName, to: &SetName, out: &mut dyn Write) -> Result<Status, CliError> {
        let (from, to) = (self.find(from)?, self.find(to)?);
        let document = pair_of(from, to)
            .and_then(|pair| explain_pair(self.name, self.molecule, self.labelled, pair))
            .ok_or_else(|| {
            let (from, to) = (name_of(self.labelled, from), name_of(self.labelled, to));
            CliError::Usage(format!("{}: {from} and {to} are no two sets of one spin", self.name))
        })?;
        self.deliver(&document, || explain_transition_text(&document), out)
    }

    fn deliver(
        &self,
        document: &impl Serialize,
        text: impl FnOnce() -> String,
        out: &mut dyn Write,
    ) -> Result<Status, CliError> {
        let printed = match self.common.format {
            Format::Text => text().into_bytes(),
            Format::Json => json(document)?,
            other => return Err(refuse("an explanation", "text or json", other)),
        };
        output::deliver(self.common.output.as_deref(), &printed, out)?;
        Ok(Status::Done)
    }
}
