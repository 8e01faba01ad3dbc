//! What the program says of itself: `schema`, `completions`, `manual`.

use super::arguments::{Arguments, Schema};
use super::verbs::json;
use super::{CliError, Status, output};
use crate::report::schema as schemas;
use clap::CommandFactory;
use clap_complete::Shell;
use std::io::Write;

pub fn schema(arguments: &Schema, out: &mut dyn Write) -> Result<Status, CliError> {
    let one = arguments.output_of.as_deref().and_then(schemas::of);
    let printed = json(&one.unwrap_or_else(schemas::all))?;
    output::deliver(arguments.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}

pub fn completions(shell: Shell, out: &mut dyn Write) -> Result<Status, CliError> {
    let mut script = Vec::new();
    clap_complete::generate(shell, &mut Arguments::command(), "orbsieve", &mut script);
    output::deliver(None, &script, out)?;
    Ok(Status::Done)
}

pub fn manual(verb: Option<&str>, out: &mut dyn Write) -> Result<Status, CliError> {
    let mut program = Arguments::command();
    // Settles what verbs take over from the program, such as --color.
    program.build();
    let command = match verb {
        None => program,
        Some(verb) => {
            let of_verb = program.find_subcommand(verb).cloned();
            of_verb.ok_or_else(|| CliError::Usage(format!("`{verb}` is no verb")))?
        }
    };
    let mut page = Vec::new();
    clap_mangen::Man::new(command).render(&mut page).map_err(|source| CliError::Write { path: None, source })?;
    output::deliver(None, &page, out)?;
    Ok(Status::Done)
}
