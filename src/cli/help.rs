//! What the program says of itself: `schema`.

use super::arguments::Schema;
use super::verbs::json;
use super::{CliError, Status, output};
use crate::report::schema as schemas;
use std::io::Write;

pub fn schema(arguments: &Schema, out: &mut dyn Write) -> Result<Status, CliError> {
    let one = arguments.output_of.as_deref().and_then(schemas::of);
    let printed = json(&one.unwrap_or_else(schemas::all))?;
    output::deliver(arguments.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}
