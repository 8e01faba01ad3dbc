//! The verb `audit`: label, judge, deliver, and say the verdict by the exit status.

use super::arguments::{Audit, Format};
use super::placing::choice;
use super::progress::Progress;
use super::verbs::{json, molden, refuse};
use super::{CliError, Status, output, use_threads};
use crate::audit::verdict::Verdict;
use crate::audit::{self, AuditError, Limits};
use crate::labelling::{self, Thresholds};
use crate::model::ANGSTROM_PER_BOHR;
use crate::report::audit::audit_document;
use crate::report::audit_text::audit_text;
use std::io::Write;

pub fn audit(arguments: &Audit, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    let path = &arguments.file;
    let (_, mut molecule) = molden(path, &arguments.common, errors)?;
    let thresholds = Thresholds {
        tolerance_bohr: arguments.tolerance / ANGSTROM_PER_BOHR,
        degeneracy_hartree: arguments.degeneracy,
        ..Thresholds::STANDARD
    };
    let limits = Limits {
        carried: arguments.carried,
        pure: arguments.pure,
        magnetic: arguments.magnetic,
        degeneracy_hartree: arguments.degeneracy,
    };
    let placed = choice(&arguments.placing, &molecule)?;
    let progress = Progress::start(&arguments.common, "labels");
    let labelled = labelling::label_watched(&mut molecule, &thresholds, &placed, &progress.watch())
        .map_err(|source| CliError::Label { path: path.clone(), source })?;
    progress.stage("what the densities keep");
    let (labelled, found) = audit::audit(&molecule, labelled, &thresholds, &limits).map_err(|error| match error {
        AuditError::Label(source) => CliError::Label { path: path.clone(), source },
        other => CliError::Input { drawn: format!("{}: {other}", path.display()) },
    })?;
    drop(progress);
    let document = audit_document(&path.display().to_string(), &molecule, &labelled, &found, &thresholds);
    let printed = match arguments.common.format {
        Format::Text => audit_text(&document, arguments.all).into_bytes(),
        Format::Json => json(&document)?,
        other => return Err(refuse("audit", "text or json", other)),
    };
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(match found.verdict() {
        Verdict::Broken => Status::Broken,
        Verdict::Mixed if arguments.strict => Status::Broken,
        Verdict::Mixed | Verdict::Rotated | Verdict::Intact => Status::Done,
    })
}
