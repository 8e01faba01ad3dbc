//! `states`: terms of a configuration that is typed, or read from a file's occupations.

use super::arguments::{Format, States, Table};
use super::verbs::{for_paper, json, molden, refuse};
use super::{CliError, Status, output, use_threads};
use crate::group::double_name::half;
use crate::group::irrep_name::Parity;
use crate::group::{DoubleGroup, GroupName, IrrepName, PointGroup};
use crate::labelling::configuration::{Obstacle, open_shells};
use crate::labelling::{self, Thresholds};
use crate::model::{ANGSTROM_PER_BOHR, Spin};
use crate::modes;
use crate::report::states::{Stage, StatesDocument};
use crate::report::states_text::{self, StatesOptions};
use crate::report::{double_table, sheets};
use crate::states::{Configuration, correlation};
use std::fmt::Display;
use std::io::Write;
use std::path::Path;

/// Letters of angular momentum in term symbols.
const TERM_LETTERS: &str = "SPDFGHIKLMNOQ";

pub fn states(arguments: &States, out: &mut dyn Write, errors: &mut dyn Write) -> Result<Status, CliError> {
    use_threads(&arguments.common)?;
    let alone = arguments.level.is_empty() && arguments.term.is_empty();
    let named = arguments.target.parse::<GroupName>();
    let document = match (&arguments.configuration, named) {
        (Some(text), name) => of_group(arguments, name.map_err(usage)?, Some(text))?,
        (None, Ok(name)) if !alone && !Path::new(&arguments.target).exists() => of_group(arguments, name, None)?,
        (None, Ok(name)) if !Path::new(&arguments.target).exists() => {
            return Err(CliError::Usage(format!(
                "a configuration is missing: expected `states {name} CONFIGURATION`, such as `states Oh \"t2g^3 eg^1\"`"
            )));
        }
        (None, _) => of_file(arguments, errors)?,
    };
    let printed = match arguments.common.format {
        Format::Text => states_text::text(&document, StatesOptions { spin_orbit: arguments.spin_orbit }).into_bytes(),
        Format::Json => json(&document)?,
        Format::Latex | Format::Md => {
            let sheets = sheets::states_sheets(&document);
            if sheets.is_empty() {
                return Err(CliError::Usage(
                    "states prints tables of the terms of a configuration: there is none here; text and json say why"
                        .to_owned(),
                ));
            }
            for_paper(arguments.common.format, &sheets)
        }
        other => return Err(refuse("states", "text, json, latex or md", other)),
    };
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}

/// `table --double`.
pub fn double_table(arguments: &Table, out: &mut dyn Write) -> Result<Status, CliError> {
    let name: GroupName = arguments.group.parse().map_err(usage)?;
    let document = double_table::build(&PointGroup::standard(name).map_err(usage)?).map_err(usage)?;
    let printed = match arguments.common.format {
        Format::Text => double_table::text(&document).into_bytes(),
        Format::Json => json(&document)?,
        other => return Err(refuse("table --double", "text or json", other)),
    };
    output::deliver(arguments.common.output.as_deref(), &printed, out)?;
    Ok(Status::Done)
}

fn usage(error: impl Display) -> CliError {
    CliError::Usage(error.to_string())
}

fn of_group(arguments: &States, name: GroupName, text: Option<&str>) -> Result<StatesDocument, CliError> {
    let group = PointGroup::standard(name).map_err(usage)?;
    let double = DoubleGroup::of(&group).map_err(usage)?;
    let stage = Stage { group: &group, double: &double, vibrations: None };
    let mut document = StatesDocument::new(&group, None);
    if let Some(text) = text {
        if begins_like_an_ion(&group, text) {
            let atom = PointGroup::standard(GroupName::K).map_err(usage)?;
            let (l, electrons) = ionic_shell(&atom, &group, text)?;
            let found = correlation(&atom, &group, &double, l, electrons).map_err(usage)?;
            document.correlation = Some(stage.correlation(&atom, &found));
        } else {
            let configuration = Configuration::parse(&group, text).map_err(usage)?;
            fill(&mut document, arguments, &stage, &configuration)?;
        }
    }
    levels(&mut document, arguments, &stage)?;
    Ok(document)
}

/// Whether text names a shell of a free ion, `d^3` or `4f7`, rather than orbitals of this group (`delta`, `f1u`).
fn begins_like_an_ion(group: &PointGroup, text: &str) -> bool {
    let shell = text.trim_start_matches(|c: char| c.is_ascii_digit() || c.is_whitespace() || c == '(');
    let mut characters = shell.chars();
    let letter = characters.next();
    let alone = characters.next().is_none_or(|next| !next.is_alphabetic() && next != '_');
    group.name() != GroupName::K && alone && matches!(letter, Some('s' | 'p' | 'd' | 'f'))
}

/// l and n of one shell of a free ion.
fn ionic_shell(atom: &PointGroup, group: &PointGroup, text: &str) -> Result<(u8, u32), CliError> {
    let configuration = Configuration::parse(atom, text).map_err(usage)?;
    // F is an older letter for T: f2 might mean one electron in t2.
    if !text.contains('^')
        && let Ok(other) = Configuration::parse(group, text)
    {
        return Err(CliError::Usage(format!(
            "`{text}` can be read as the free ion's {configuration} or as {other}: write one of them"
        )));
    }
    match configuration.shells() {
        [shell] => match shell.name {
            IrrepName::Atomic { l, .. } => Ok((l, shell.electrons)),
            _ => Err(CliError::Usage(format!("`{text}` is no shell of a free ion"))),
        },
        _ => Err(CliError::Usage(format!(
            "{configuration} are several shells of a free ion: expected one, such as d^3, to bring it into {}",
            group.name()
        ))),
    }
}

/// Terms, and rules where they are asked for.
fn fill(
    document: &mut StatesDocument,
    arguments: &States,
    stage: &Stage<'_>,
    configuration: &Configuration,
) -> Result<(), CliError> {
    document.configuration = Some(stage.configuration(configuration).map_err(usage)?);
    if let Some(text) = &arguments.to {
        let to = Configuration::parse(stage.group, text).map_err(usage)?;
        document.to = Some(stage.configuration(&to).map_err(usage)?);
        document.transitions = stage.transitions(configuration, Some(&to)).map_err(usage)?;
    } else if arguments.transitions {
        document.transitions = stage.transitions(configuration, None).map_err(usage)?;
    }
    Ok(())
}

fn levels(document: &mut StatesDocument, arguments: &States, stage: &Stage<'_>) -> Result<(), CliError> {
    for text in &arguments.level {
        let (twice_j, parity) = level(text)?;
        document.levels.push(stage.level(format!("J = {}", half(twice_j)), twice_j, parity).map_err(usage)?);
    }
    for text in &arguments.term {
        let (symbol, l, parity) = free_term(text)?;
        document.levels.push(stage.level(symbol, 2 * l, parity).map_err(usage)?);
    }
    Ok(())
}

/// `u` or `o` at the end means odd, `g` or nothing even.
fn with_parity(text: &str) -> (&str, Parity) {
    let trimmed = text.trim();
    match trimmed.strip_suffix(['u', 'o', '°']) {
        Some(stem) => (stem.trim_end_matches('_'), Parity::Odd),
        None => (trimmed.strip_suffix('g').map_or(trimmed, |stem| stem.trim_end_matches('_')), Parity::Even),
    }
}

fn level(text: &str) -> Result<(u16, Parity), CliError> {
    let (stem, parity) = with_parity(text);
    let twice = match stem.split_once('/') {
        Some((numerator, "2")) => numerator.parse::<u16>().ok(),
        Some(_) => None,
        None => stem.parse::<u16>().ok().and_then(|j| j.checked_mul(2)),
    };
    match twice {
        Some(twice) if twice <= HIGHEST_LEVEL => Ok((twice, parity)),
        _ => Err(CliError::Usage(format!(
            "`{text}` is no level: expected J up to {} such as 7/2 or 4, with u at its end for odd states",
            HIGHEST_LEVEL / 2
        ))),
    }
}

/// Twice the highest J that may be asked for.
const HIGHEST_LEVEL: u16 = 100;

/// `4F`, `3P`, `2F_u`: the symbol, L and parity.
fn free_term(text: &str) -> Result<(String, u16, Parity), CliError> {
    let (stem, parity) = with_parity(text);
    let letter = stem.trim_start_matches(|c: char| c.is_ascii_digit());
    let multiplicity = &stem[..stem.len() - letter.len()];
    let l = TERM_LETTERS.find(letter).filter(|_| letter.len() == 1).and_then(|l| u16::try_from(l).ok());
    match l {
        Some(l) if !multiplicity.is_empty() && multiplicity.len() < 3 => {
            Ok((format!("{multiplicity}{letter}"), l, parity))
        }
        _ => Err(CliError::Usage(format!(
            "`{text}` is no term of a free ion: expected a multiplicity and a letter of {TERM_LETTERS}, such as 4F, with u at its end for odd terms"
        ))),
    }
}

fn of_file(arguments: &States, errors: &mut dyn Write) -> Result<StatesDocument, CliError> {
    let path = Path::new(&arguments.target);
    let (_, mut molecule) = molden(path, &arguments.common, errors)?;
    let thresholds = Thresholds {
        tolerance_bohr: arguments.tolerance / ANGSTROM_PER_BOHR,
        degeneracy_hartree: arguments.degeneracy,
        ..Thresholds::STANDARD
    };
    let failed = |source| CliError::Label { path: path.to_owned(), source };
    let labelled = labelling::label(&mut molecule, &thresholds).map_err(failed)?;
    let group = &labelled.symmetry.group;
    let double = DoubleGroup::of(group).map_err(|source| failed(source.into()))?;
    let vibrations =
        modes::motion(&molecule.atoms, &labelled.symmetry).map_err(|source| failed(source.into()))?.vibrations;
    let stage = Stage { group, double: &double, vibrations: Some(&vibrations) };
    let mut document = StatesDocument::new(group, Some(path.display().to_string()));
    match open_shells(group, &labelled.spins) {
        Ok(shells) => {
            let shells: Vec<(usize, Option<u32>, u32)> =
                shells.iter().map(|shell| (shell.irrep, Some(shell.number), shell.electrons)).collect();
            let configuration = Configuration::new(group, &shells).map_err(usage)?;
            fill(&mut document, arguments, &stage, &configuration)?;
        }
        Err(obstacles) => {
            // What lacks partners says more than what is merely spread.
            let (lacking, spread): (Vec<_>, Vec<_>) = obstacles.iter().partition(|obstacle| lacks_partners(obstacle));
            document.obstacles =
                lacking.into_iter().chain(spread).map(|obstacle| obstacle_in_words(group, obstacle)).collect();
        }
    }
    levels(&mut document, arguments, &stage)?;
    Ok(document)
}

fn obstacle_in_words(group: &PointGroup, obstacle: &Obstacle) -> String {
    let set = |irrep: usize, number: usize| format!("{number}{}", group.irreps()[irrep].name.symbol());
    match obstacle {
        Obstacle::NoOccupations => "the file gives no occupations".to_owned(),
        Obstacle::Unlabelled { spin, orbitals } => {
            let holds = if orbitals.len() == 1 { "holds electrons and belongs" } else { "hold electrons and belong" };
            format!("{} {holds} to no irrep: the symmetry is broken", orbital_numbers(*spin, orbitals))
        }
        Obstacle::Incomplete { spin, irrep, number, orbitals, wanted, .. } if orbitals.len() < *wanted => format!(
            "{}: {} of the {wanted} partners of {}; the others are filled differently, missing or at another energy",
            orbital_numbers(*spin, orbitals),
            orbitals.len(),
            set(*irrep, *number)
        ),
        Obstacle::Incomplete { spin, irrep, number, orbitals, spread_hartree, .. } => format!(
            "{}: the partners of {}, which do not keep together; their energies are spread over {spread_hartree:.4} hartree",
            orbital_numbers(*spin, orbitals),
            set(*irrep, *number)
        ),
        Obstacle::Fractional { irrep, number, electrons, limit } => {
            format!("{} holds {electrons:.3} electrons, further than {limit} from a whole number", set(*irrep, *number))
        }
    }
}

fn lacks_partners(obstacle: &Obstacle) -> bool {
    !matches!(obstacle, Obstacle::Incomplete { orbitals, wanted, .. } if orbitals.len() >= *wanted)
}

fn orbital_numbers(spin: Spin, orbitals: &[usize]) -> String {
    let numbers: Vec<String> = orbitals.iter().map(|orbital| (orbital + 1).to_string()).collect();
    let plural = if numbers.len() == 1 { "" } else { "s" };
    let spin = if spin == Spin::Alpha { "alpha" } else { "beta" };
    format!("{spin} orbital{plural} {}", numbers.join(", "))
}
