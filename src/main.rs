//! The doorway: arguments from the shell, exit status back to it.

use clap::Parser;
use orbsieve::cli::{self, arguments::Arguments};
use std::io;
use std::process::ExitCode;

fn main() -> ExitCode {
    let arguments = Arguments::parse();
    let mut errors = io::stderr().lock();
    match cli::run(&arguments, &mut io::stdout().lock(), &mut errors) {
        Ok(status) => status.into(),
        Err(error) => error.report(&mut errors),
    }
}
