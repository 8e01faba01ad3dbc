//! The grammar of the Molden format and of XYZ files: bytes in, values with spans out.
//!
//! Opens no file, prints nothing, cannot panic; collects every mistake, not the first. What a number means is
//! the business of `model`.

pub mod atoms;
pub mod basis;
pub mod cores;
pub mod marks;
pub mod numbers;
pub mod orbitals;
pub mod sections;
pub mod vibrations;
pub mod write;
pub mod xyz;

use crate::diagnostic::{Diagnostic, Severity, Span};
use atoms::{LengthUnit, RawAtom};
use basis::RawShell;
use cores::RawCore;
use orbitals::Headers;
use sections::Section;

/// Findings in the order in which they are met.
#[derive(Debug, Clone, Default)]
pub struct Findings {
    kept: Vec<Diagnostic>,
    /// Errors, warnings met so far, kept or not.
    met: [usize; 2],
}

/// More findings of one severity than this help nobody; the rest is counted.
const KEPT_LIMIT: usize = 20;
/// Longest piece of the input that a message repeats.
const SHOWN: usize = 40;

impl Findings {
    /// Notes an error.
    pub fn error(&mut self, span: Span, message: impl Into<String>, help: impl Into<String>) {
        self.push(Severity::Error, span, message.into(), Some(help.into()));
    }

    /// Notes a warning.
    pub fn warning(&mut self, span: Span, message: impl Into<String>, help: impl Into<String>) {
        self.push(Severity::Warning, span, message.into(), Some(help.into()));
    }

    /// Notes that `what` was expected where `span` stands.
    pub fn expected(&mut self, bytes: &[u8], span: Span, what: &str) {
        let text = String::from_utf8_lossy(&bytes[span.start..span.end.min(span.start + SHOWN)]).into_owned();
        let found = if text.is_empty() { "nothing".to_owned() } else { format!("`{text}`") };
        let help = if text.contains(',') {
            Some("Molden files write a decimal point, not a comma".to_owned())
        } else if text.contains("**") {
            Some("a number was too wide for its field; ask the engine for another format".to_owned())
        } else if ["nan", "inf"].iter().any(|word| text.to_lowercase().contains(word)) && what.contains("number") {
            Some("only finite numbers have a meaning here; the calculation may have failed".to_owned())
        } else {
            None
        };
        self.push(Severity::Error, span, format!("expected {what}, found {found}"), help);
    }

    /// Notes a finding unless there are too many of its kind already.
    pub fn push(&mut self, severity: Severity, span: Span, message: String, help: Option<String>) {
        let met = &mut self.met[usize::from(severity == Severity::Warning)];
        *met += 1;
        if *met <= KEPT_LIMIT {
            self.kept.push(Diagnostic { severity, span, message, help });
        }
    }

    /// Takes over all findings of another collection.
    pub fn append(&mut self, other: Self) {
        let kept = |severity| other.kept.iter().filter(|finding| finding.severity == severity).count();
        let (errors, warnings) = (kept(Severity::Error), kept(Severity::Warning));
        self.met[0] += other.met[0] - errors;
        self.met[1] += other.met[1] - warnings;
        for finding in other.kept {
            self.push(finding.severity, finding.span, finding.message, finding.help);
        }
    }

    /// Whether any finding is an error.
    #[must_use]
    pub fn any_error(&self) -> bool {
        self.met[0] > 0
    }

    /// Whether there is nothing to tell.
    #[must_use]
    pub fn is_empty(&self) -> bool {
        self.met == [0, 0]
    }

    /// The findings in the order of the file; the last ones tell how many were not kept.
    #[must_use]
    pub fn into_sorted(mut self) -> Vec<Diagnostic> {
        self.kept.sort_by_key(|finding| (finding.span.start, finding.severity));
        let end = self.kept.last().map_or(0, |finding| finding.span.end);
        for (severity, word, met) in
            [(Severity::Error, "errors", self.met[0]), (Severity::Warning, "warnings", self.met[1])]
        {
            let shown = self.kept.iter().filter(|finding| finding.severity == severity).count();
            if met > shown {
                let message = format!("{} more {word} are not shown", met - shown);
                self.kept.push(Diagnostic { severity, span: end..end, message, help: None });
            }
        }
        self.kept
    }
}

/// A tag such as `[5D7F]`: pure (true) or Cartesian by degree.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Tag {
    /// Where it stands.
    pub span: Span,
    /// What the tag says outright.
    pub says: &'static [(usize, bool)],
    /// What it says of higher degrees that have no tag of their own.
    pub implies: &'static [(usize, bool)],
}

/// What a Molden file says, section by section.
#[derive(Debug, Clone, Default)]
pub struct RawMolden {
    /// The title's line.
    pub title: Option<Span>,
    /// Unit of the coordinates.
    pub unit: Option<LengthUnit>,
    /// `[Atoms]`.
    pub atoms: Vec<RawAtom>,
    /// Where `[Atoms]` stands.
    pub atoms_header: Option<Span>,
    /// `[GTO]`.
    pub shells: Vec<RawShell>,
    /// Pure or Cartesian.
    pub tags: Vec<Tag>,
    /// `[MO]`, to be gone through with [`RawMolden::headers`].
    pub orbitals: Option<Section>,
    /// Equals signs of the file, of which those in `[MO]` belong to keys.
    equals: Vec<usize>,
    /// `[CORE]`, `[PSEUDO]`, `[NVAL]`.
    pub cores: Vec<RawCore>,
    /// Where the first section on normal modes stands.
    pub modes_header: Option<Span>,
    /// `[FREQ]`.
    pub frequencies: Vec<f64>,
    /// `[INT]`.
    pub intensities: Vec<f64>,
    /// `[FR-COORD]`.
    pub mode_atoms: Vec<(Span, [f64; 3])>,
    /// `[FR-NORM-COORD]`.
    pub displacements: Vec<Vec<f64>>,
}

impl RawMolden {
    /// The headers of `[MO]`, one orbital after the other.
    #[must_use]
    pub fn headers<'a>(&'a self, bytes: &'a [u8]) -> Option<Headers<'a>> {
        self.orbitals.as_ref().map(|section| Headers::new(bytes, section, &self.equals))
    }
}

/// Sections that carry nothing for this program.
const SILENT: [&str; 15] = [
    "N_ATOMS",
    "CHARGE",
    "CELL",
    "MOLPRO VARIABLES",
    "PROGRAM",
    "GEOCONV",
    "GEOMETRIES",
    "SCFCONV",
    "FORCES",
    "N_GEO",
    "N_FREQ",
    "NATOM",
    "RMASS",
    "FR-MASS",
    "OPERATORS",
];

/// Degree, and whether it is pure.
type Kinds = &'static [(usize, bool)];

/// What a tag says and what it implies; None when the name is no tag.
fn tag(name: &str) -> Option<(Kinds, Kinds)> {
    Some(match name {
        "5D" => (&[(2, true)], &[(3, true)]),
        "5D7F" => (&[(2, true), (3, true)], &[]),
        "5D10F" => (&[(2, true), (3, false)], &[]),
        "7F" => (&[(3, true)], &[]),
        "6D" => (&[(2, false)], &[]),
        "6D7F" => (&[(2, false), (3, true)], &[]),
        "6D10F" => (&[(2, false), (3, false)], &[]),
        "10F" => (&[(3, false)], &[]),
        "9G" => (&[(4, true)], &[(5, true), (6, true)]),
        "15G" => (&[(4, false)], &[]),
        "11H" => (&[(5, true)], &[]),
        "21H" => (&[(5, false)], &[]),
        "13I" => (&[(6, true)], &[]),
        "28I" => (&[(6, false)], &[]),
        _ => return None,
    })
}

/// Reads a whole Molden file but for `[MO]`, of which only the place is kept; `passed` is told each stretch of the
/// input that was looked through.
#[must_use]
pub fn read(bytes: &[u8], passed: &dyn Fn(Span)) -> (RawMolden, Findings) {
    let marks = marks::marks(bytes, passed);
    let mut raw = RawMolden { equals: marks.equals, ..RawMolden::default() };
    let mut findings = Findings::default();
    let sections = sections::sections(bytes, &marks.brackets);
    if sections.is_empty() {
        findings.error(
            0..bytes.len().min(SHOWN),
            "expected a Molden file: there is no section such as [Atoms] in it",
            "the file may be another format, or empty",
        );
        return (raw, findings);
    }
    let mut known: Vec<(&str, Span)> = Vec::new();
    for section in &sections {
        let name = section.name.as_str();
        let once = ["ATOMS", "GTO", "MO", "FREQ", "INT", "FR-COORD", "FR-NORM-COORD"];
        if once.contains(&name) {
            if known.iter().any(|(other, _)| *other == name) {
                findings.error(
                    section.header.clone(),
                    format!("[{name}] stands a second time"),
                    "two files may have been put together; give each its own",
                );
                continue;
            }
            known.push((name, section.header.clone()));
        }
        read_section(bytes, section, &mut raw, &mut findings);
    }
    (raw, findings)
}

fn read_section(bytes: &[u8], section: &Section, raw: &mut RawMolden, findings: &mut Findings) {
    let name = section.name.as_str();
    if matches!(name, "FREQ" | "FR-COORD" | "FR-NORM-COORD") && raw.modes_header.is_none() {
        raw.modes_header = Some(section.header.clone());
    }
    match name {
        "MOLDEN FORMAT" | "TITLE" => {
            // The title may also stand without its section, right below the first line.
            let line = numbers::lines(bytes, section.body.clone())
                .map(|line| numbers::words(bytes, line))
                .find(|words| !words.is_empty())
                .map(|words| atoms::trimmed(&words));
            raw.title = line.or(raw.title.take());
        }
        "ATOMS" => {
            raw.unit = Some(atoms::length_unit(bytes, section, findings));
            raw.atoms = atoms::atoms(bytes, section, findings);
            raw.atoms_header = Some(section.header.clone());
        }
        "GTO" => raw.shells = basis::shells(bytes, section, findings),
        "STO" => findings.error(
            section.header.clone(),
            "[STO] holds Slater functions, which are not read: their overlaps between centres have no closed form here",
            "expand them in Gaussians, or ask the engine for a file with [GTO]",
        ),
        "MO" => raw.orbitals = Some(section.clone()),
        "CORE" | "PSEUDO" | "NVAL" => raw.cores.extend(cores::cores(bytes, section, findings)),
        "FREQ" => raw.frequencies = vibrations::column(bytes, section, findings),
        "INT" => raw.intensities = vibrations::column(bytes, section, findings),
        "FR-COORD" => raw.mode_atoms = vibrations::coordinates(bytes, section, findings),
        "FR-NORM-COORD" => raw.displacements = vibrations::displacements(bytes, section, findings),
        name if SILENT.contains(&name) => {}
        name => match tag(name) {
            Some((says, implies)) => raw.tags.push(Tag { span: section.header.clone(), says, implies }),
            None => findings.warning(
                section.header.clone(),
                format!("section [{name}] is not known and is passed over"),
                "nothing of it is needed for labels",
            ),
        },
    }
}
