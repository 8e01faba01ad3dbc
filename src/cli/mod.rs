//! The command line: arguments in, exit status out.
//!
//! Only this layer touches files, the terminal and threads.

pub mod arguments;
mod audit;
mod batch;
mod explain;
mod help;
mod input;
mod levels;
mod modes;
mod output;
mod page;
mod placing;
mod progress;
mod purify;
mod states;
pub mod terminal;
mod transitions;
mod verbs;

use crate::diagnostic::{self, Diagnostic};
use crate::labelling::LabelError;
use arguments::{Arguments, Common, Verb};
use std::io::{self, Write};
use std::path::PathBuf;
use std::process::ExitCode;
use thiserror::Error;

/// How a run ended.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Status {
    /// The result stands.
    Done = 0,
    /// `audit` found broken symmetry.
    Broken = 1,
    /// Wrong usage.
    Usage = 2,
    /// The input cannot be read or is inconsistent.
    BadInput = 3,
    /// The numbers fail their own check.
    NumbersFail = 4,
}

impl From<Status> for ExitCode {
    fn from(status: Status) -> Self {
        Self::from(status as u8)
    }
}

/// Why a run gave no result.
#[derive(Debug, Error)]
pub enum CliError {
    /// An input could not be read.
    #[error("cannot read {}: {source}", path.display())]
    Read {
        /// As given.
        path: PathBuf,
        /// What the system says.
        source: io::Error,
    },
    /// A result could not be written.
    #[error("cannot write {}: {source}", path.as_ref().map_or("standard output".into(), |path| path.display().to_string()))]
    Write {
        /// None for standard output.
        path: Option<PathBuf>,
        /// What the system says.
        source: io::Error,
    },
    /// The input says something wrong.
    #[error("{drawn}")]
    Input {
        /// All findings, drawn.
        drawn: String,
    },
    /// No labels could be found.
    #[error("{}: {source}", path.display())]
    Label {
        /// The file.
        path: PathBuf,
        /// The reason.
        source: LabelError,
    },
    /// The numbers do not allow what was asked for.
    #[error("{0}")]
    Refused(String),
    /// An argument that only its meaning shows to be wrong.
    #[error("{0}")]
    Usage(String),
}

impl CliError {
    fn status(&self) -> Status {
        match self {
            Self::Usage(_)
            | Self::Label {
                source: LabelError::Orientation { .. } | LabelError::SphericalFrame | LabelError::Continuous { .. },
                ..
            } => Status::Usage,
            Self::Refused(_) | Self::Label { source: LabelError::Convention(_), .. } => Status::NumbersFail,
            Self::Write { source, .. } if source.kind() == io::ErrorKind::BrokenPipe => Status::Done,
            Self::Read { .. } | Self::Write { .. } | Self::Input { .. } | Self::Label { .. } => Status::BadInput,
        }
    }

    /// Tells the person, except that a reader who has closed the pipe hears nothing.
    pub fn report(&self, errors: &mut dyn Write) -> ExitCode {
        let status = self.status();
        if status != Status::Done {
            // Nobody is left to tell when standard error itself fails.
            let _ = writeln!(errors, "orbsieve: {self}");
        }
        status.into()
    }
}

/// Runs one verb.
///
/// # Errors
/// [`CliError`], which knows its exit status.
pub fn run(arguments: &Arguments, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    match &arguments.verb {
        Verb::Label(label) => verbs::label(label, out, errors),
        Verb::Geometry(geometry) => verbs::geometry(geometry, out, errors),
        Verb::Table(table) => verbs::table(table, out),
        Verb::Modes(arguments) => modes::modes(arguments, out, errors),
        Verb::States(arguments) => states::states(arguments, out, errors),
        Verb::Audit(arguments) => audit::audit(arguments, out, errors),
        Verb::Purify(arguments) => purify::purify(arguments, out, errors),
        Verb::Batch(arguments) => batch::batch(arguments, out, errors),
        Verb::Levels(arguments) => levels::levels(arguments, out, errors),
        Verb::Transitions(arguments) => transitions::transitions(arguments, out, errors),
        Verb::Schema(arguments) => help::schema(arguments, out),
        Verb::Completions(arguments) => help::completions(arguments.shell, out),
        Verb::Manual(arguments) => help::manual(arguments.verb.as_deref(), out),
    }
}

/// Sets the number of threads; once a process.
fn use_threads(common: &Common) -> Result<(), CliError> {
    rayon::ThreadPoolBuilder::new()
        .num_threads(common.threads)
        .build_global()
        .map_err(|error| CliError::Usage(format!("cannot start {} threads: {error}", common.threads)))
}

/// Drawn findings, one after the other.
fn draw(findings: &[Diagnostic], name: &str, bytes: &[u8]) -> String {
    findings.iter().map(|finding| diagnostic::draw(finding, name, bytes)).collect::<Vec<_>>().join("\n")
}
