//! The doorway: arguments from the shell, exit status back to it.

use clap::Parser;
use orbsieve::cli::terminal::{Messages, Page, Terminal};
use orbsieve::cli::{self, arguments::Arguments};
use std::io;
use std::process::ExitCode;

fn main() -> ExitCode {
    let arguments = Arguments::parse();
    let (mut out, mut errors) = (io::stdout(), io::stderr());
    let terminal = Terminal::of_process();
    let mut errors = Messages::new(arguments.color, &terminal, &mut errors);
    let mut page = Page::new(&arguments, &terminal, &mut out);
    match cli::run(&arguments, &mut page, &mut errors) {
        Ok(status) => status.into(),
        Err(error) => error.report(&mut errors),
    }
}
