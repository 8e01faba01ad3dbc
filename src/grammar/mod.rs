//! The grammar of the Molden format and of XYZ files: bytes in, values with spans out.
//!
//! Opens no file, prints nothing, cannot panic; collects every mistake, not the first. What a number means is
//! the business of `model`.

pub mod atoms;
pub mod basis;
pub mod numbers;
pub mod orbitals;
pub mod sections;
pub mod vibrations;
pub mod xyz;

use crate::diagnostic::{Diagnostic, Severity, Span};
use atoms::{LengthUnit, RawAtom};
use basis::RawShell;
use orbitals::RawOrbital;
use sections::Section;

/// Findings in the order in which they are met.
#[derive(Debug, Clone, Default)]
pub struct Findings(pub Vec<Diagnostic>);

/// More errors than this help nobody; the rest is counted.
const ERROR_LIMIT: usize = 20;
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
        } else {
            None
        };
        self.push(Severity::Error, span, format!("expected {what}, found {found}"), help);
    }

    /// Notes a finding unless there are too many of its kind already.
    pub fn push(&mut self, severity: Severity, span: Span, message: String, help: Option<String>) {
        let errors = self.0.iter().filter(|finding| finding.severity == severity).count();
        if errors < ERROR_LIMIT {
            self.0.push(Diagnostic { severity, span, message, help });
        }
    }

    /// Whether any finding is an error.
    #[must_use]
    pub fn any_error(&self) -> bool {
        self.0.iter().any(|finding| finding.severity == Severity::Error)
    }
}

/// A tag such as `[5D7F]`: for each degree from d up whether it says pure.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Tag {
    /// Where it stands.
    pub span: Span,
    /// (degree, pure).
    pub says: Vec<(usize, bool)>,
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
    /// `[MO]`.
    pub orbitals: Vec<RawOrbital>,
    /// Where `[MO]` stands.
    pub orbitals_header: Option<Span>,
    /// `[CORE]`: atom number or element, core electrons.
    pub cores: Vec<(Span, usize)>,
    /// `[FREQ]`.
    pub frequencies: Vec<f64>,
    /// `[INT]`.
    pub intensities: Vec<f64>,
    /// `[FR-COORD]`.
    pub mode_atoms: Vec<(Span, [f64; 3])>,
    /// `[FR-NORM-COORD]`.
    pub displacements: Vec<Vec<f64>>,
}

/// Sections that carry nothing for this program.
const SILENT: [&str; 17] = [
    "N_ATOMS",
    "CHARGE",
    "NVAL",
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
    "PSEUDO",
    "FR-MASS",
    "OPERATORS",
];

/// What a tag says, None when the name is no tag.
fn tag(name: &str) -> Option<Vec<(usize, bool)>> {
    Some(match name {
        "5D" | "5D7F" => vec![(2, true), (3, true)],
        "5D10F" => vec![(2, true), (3, false)],
        "7F" => vec![(3, true)],
        "6D7F" => vec![(2, false), (3, true)],
        "6D" => vec![(2, false)],
        "6D10F" => vec![(2, false), (3, false)],
        "10F" => vec![(3, false)],
        "9G" => vec![(4, true), (5, true), (6, true)],
        "15G" => vec![(4, false)],
        "11H" => vec![(5, true)],
        "21H" => vec![(5, false)],
        "13I" => vec![(6, true)],
        "28I" => vec![(6, false)],
        _ => return None,
    })
}

/// Reads a whole Molden file but for the coefficients, of which only the places are kept.
#[must_use]
pub fn read(bytes: &[u8]) -> (RawMolden, Findings) {
    let mut raw = RawMolden::default();
    let mut findings = Findings::default();
    let sections = sections::sections(bytes);
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
        "MO" => {
            raw.orbitals = orbitals::orbitals(bytes, section, findings);
            raw.orbitals_header = Some(section.header.clone());
        }
        "CORE" => raw.cores = atoms::cores(bytes, section),
        "FREQ" => raw.frequencies = vibrations::column(bytes, section, findings),
        "INT" => raw.intensities = vibrations::column(bytes, section, findings),
        "FR-COORD" => raw.mode_atoms = vibrations::coordinates(bytes, section, findings),
        "FR-NORM-COORD" => raw.displacements = vibrations::displacements(bytes, section, findings),
        name if SILENT.contains(&name) => {}
        name => match tag(name) {
            Some(says) => raw.tags.push(Tag { span: section.header.clone(), says }),
            None => findings.warning(
                section.header.clone(),
                format!("section [{name}] is not known and is passed over"),
                "nothing of it is needed for labels",
            ),
        },
    }
}
