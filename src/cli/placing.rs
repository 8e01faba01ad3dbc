//! The options that choose a group: `--group`, `--frame`, `--orientation`.

use super::CliError;
use super::arguments::Placing;
use crate::labelling::frame_atoms;
use crate::labelling::placement::Choice;
use crate::model::Molecule;

/// What the options mean for this molecule.
pub fn choice(placing: &Placing, molecule: &Molecule) -> Result<Choice, CliError> {
    let usage = |error: &dyn std::fmt::Display| CliError::Usage(error.to_string());
    let group = placing.group.as_deref().map(str::parse).transpose().map_err(|error| usage(&error))?;
    let frame = placing.frame.as_deref().map(|text| frame_atoms::atoms(molecule, text));
    let frame = frame.transpose().map_err(|error| usage(&error))?;
    Ok(Choice { group, frame, orientation: placing.orientation.saturating_sub(1) })
}
