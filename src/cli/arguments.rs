//! What a person types, as types.

use crate::audit::Limits;
use crate::report::schema;
use crate::selection::{Selector, SetName};
use clap::builder::PossibleValuesParser;
use clap::{Args, Parser, Subcommand, ValueEnum};
use std::path::PathBuf;

/// Point group, irreps and symmetry verdicts for computed orbitals.
#[derive(Debug, Parser)]
#[command(name = "orbsieve", version, about, max_term_width = 100)]
pub struct Arguments {
    /// Styles on the terminal; `NO_COLOR` and `CLICOLOR_FORCE` count when this is auto
    #[arg(long, global = true, value_enum, value_name = "WHEN", default_value_t = Color::Auto)]
    pub color: Color,
    /// What to do.
    #[command(subcommand)]
    pub verb: Verb,
}

/// When text for people has styles.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum Color {
    /// On a terminal
    Auto,
    /// Also in pipes
    Always,
    /// Not even on a terminal
    Never,
}

/// The verbs.
#[derive(Debug, Subcommand)]
pub enum Verb {
    /// Point group, irrep, partner, purity and degenerate set of every orbital
    Label(Label),
    /// Point group only, with the ladder of near-symmetries; also reads plain XYZ
    Geometry(Geometry),
    /// Operations, classes, characters, functions, products and descent of a point group
    Table(Table),
    /// Terms of an electron configuration, spin–orbit components, rules between states, Jahn–Teller modes
    States(States),
    /// Does the wavefunction keep the symmetry of its nuclei? A verdict; exit status 1 when it is broken
    Audit(Audit),
    /// Write symmetry-adapted orbitals: projected, orthonormal, partners aligned, in the file's own dialect
    Purify(Purify),
    /// Selection rules between sets of orbitals, with computed moments and the vibrations that help
    Transitions(Transitions),
    /// Irreps of normal modes, infrared and Raman activity; without modes, how the vibrations fall into irreps
    Modes(Modes),
    /// Label many files: one record each, in parallel, resumable, in shards
    Batch(super::batch::Batch),
    /// Level diagrams side by side, with lines between equal irreps, as SVG
    Levels(Levels),
    /// JSON Schema of the JSON outputs: of one verb, or of all in one document
    Schema(Schema),
    /// Script that completes verbs, options and values in a shell
    Completions(Completions),
    /// Manual page in roff, of the program or of one verb
    Manual(Manual),
}

impl Verb {
    /// Whether standard output gets text for people (and not data, a file in its own format or a script).
    #[must_use]
    pub fn prints_text(&self) -> bool {
        let common = match self {
            Self::Label(Label { common, .. })
            | Self::Geometry(Geometry { common, .. })
            | Self::Table(Table { common, .. })
            | Self::States(States { common, .. })
            | Self::Audit(Audit { common, .. })
            | Self::Transitions(Transitions { common, .. })
            | Self::Modes(Modes { common, .. }) => common,
            // Without a file the orbitals themselves go there.
            Self::Purify(Purify { common, .. }) if common.output.is_some() => common,
            Self::Purify(_)
            | Self::Batch(_)
            | Self::Levels(_)
            | Self::Schema(_)
            | Self::Completions(_)
            | Self::Manual(_) => return false,
        };
        common.format == Format::Text
    }
}

/// Options of every verb.
#[derive(Debug, Args)]
pub struct Common {
    /// Printed form of the result
    #[arg(long, value_enum, default_value_t = Format::Text)]
    pub format: Format,
    /// Write the result to this file, whole or not at all
    #[arg(long, value_name = "FILE")]
    pub output: Option<PathBuf>,
    /// Threads to use; 0 for one a core
    #[arg(long, value_name = "N", default_value_t = 0)]
    pub threads: usize,
    /// No warnings and no progress on standard error
    #[arg(long)]
    pub quiet: bool,
}

/// Printed forms.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum Format {
    /// For people
    Text,
    /// For programs; energies in hartree
    Json,
    /// One row a set; energies in hartree
    Csv,
    /// Tables for papers, energies in eV
    Latex,
    /// The same in Markdown
    Md,
    /// `label`: a page for the browser with pictures, all in one file
    Html,
    /// A level diagram; energies in eV
    Svg,
}

impl Format {
    /// As it is typed.
    #[must_use]
    pub fn name(self) -> String {
        self.to_possible_value().map_or_else(String::new, |value| value.get_name().to_owned())
    }
}

/// Which group the labels are in.
#[derive(Debug, Args)]
pub struct Placing {
    /// Label in this point group, a parent or a subgroup of that of the nuclei
    #[arg(long, value_name = "SCHOENFLIES")]
    pub group: Option<String>,
    /// Only these atoms define the symmetry: elements, numbers, ranges, `shell 1 around Fe`, such as "Co,N"
    #[arg(long, value_name = "ATOMS")]
    pub frame: Option<String>,
    /// Of several orientations of a subgroup, take this one
    #[arg(long, value_name = "N", default_value_t = 1)]
    pub orientation: usize,
}

/// `label`.
#[derive(Debug, Args)]
pub struct Label {
    /// Molden-format file, plain or gzip; `-` for standard input
    pub file: PathBuf,
    /// Distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// Energies this near count as one, hartree
    #[arg(long, value_name = "HARTREE", default_value_t = 1e-3, value_parser = positive)]
    pub degeneracy: f64,
    /// Smallest weight of one irrep that gives an orbital its label
    #[arg(long, value_name = "WEIGHT", default_value_t = 0.90, value_parser = fraction)]
    pub purity: f64,
    /// List the sets of the K highest occupied and L lowest empty orbitals, with their indices
    #[arg(long, value_name = "K,L", value_parser = window)]
    pub window: Option<(usize, usize)>,
    /// Show every set, not only those around the frontier
    #[arg(long)]
    pub all: bool,
    /// Compute what orbitals are made of even for large bases
    #[arg(long)]
    pub character: bool,
    /// With --format html: draw the orbitals of the K highest sets with electrons and the L lowest empty ones
    #[arg(long, value_name = "K,L", value_parser = window, default_value = "2,2")]
    pub pictures: (usize, usize),
    /// Only show how one set comes by its label: an orbital number, a label (3e2g), homo, lumo+1; beta:7 of an unrestricted file
    #[arg(long, value_name = "ORBITAL", conflicts_with_all = ["window", "all", "write_labels"])]
    pub explain: Option<SetName>,
    /// Only show why the transition between two sets is allowed or not
    #[arg(long, num_args = 2, value_names = ["A", "B"], conflicts_with_all = ["explain", "window", "all", "write_labels"])]
    pub explain_transition: Option<Vec<SetName>>,
    /// Write the input again to this file with its `Sym=` lines filled, everything else untouched
    #[arg(long, value_name = "FILE")]
    pub write_labels: Option<PathBuf>,
    /// How the level diagram of `--format svg` is drawn
    #[command(flatten)]
    pub drawing: Drawing,
    /// With --format svg: allowed electric-dipole transitions of the frontier as arrows with their polarisation
    #[arg(long)]
    pub transitions: bool,
    /// Which group
    #[command(flatten)]
    pub placing: Placing,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// How a level diagram is drawn.
#[derive(Debug, Args)]
pub struct Drawing {
    /// Energies that a level diagram shows, eV; by default the frontier without cores
    #[arg(long, value_name = "LOW,HIGH", value_parser = energy_range, allow_hyphen_values = true)]
    pub range: Option<(f64, f64)>,
    /// Width of a level diagram: one journal column (84 mm) or two (174 mm)
    #[arg(long, value_enum)]
    pub width: Option<PaperWidth>,
}

impl Drawing {
    /// Some option was given.
    #[must_use]
    pub fn is_asked(&self) -> bool {
        self.range.is_some() || self.width.is_some()
    }
}

/// Widths of figures in journals.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum PaperWidth {
    /// 84 mm
    Single,
    /// 174 mm
    Double,
}

/// `levels`.
#[derive(Debug, Args)]
pub struct Levels {
    /// Molden-format files, plain or gzip, in the order of the columns; `-` once for standard input
    #[arg(required = true)]
    pub files: Vec<PathBuf>,
    /// Words over the columns instead of file names, parted by commas
    #[arg(long, value_name = "NAMES", value_delimiter = ',')]
    pub names: Vec<String>,
    /// Zero of the energy axis: as the files have it, or the highest level with electrons of each file
    #[arg(long, value_enum, default_value_t = Zero::Absolute)]
    pub zero: Zero,
    /// Levels of an irrep are counted from the lowest, or from the highest with electrons (for files with different cores)
    #[arg(long, value_enum, default_value_t = CountFrom::Lowest)]
    pub count: CountFrom,
    /// Of several ways in which a subgroup lies in a group of the next file, take this one; by default the coordinates decide, where
    /// both files are in one frame
    #[arg(long, value_name = "N")]
    pub way: Option<usize>,
    /// Distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// How it is drawn
    #[command(flatten)]
    pub drawing: Drawing,
    /// Which group
    #[command(flatten)]
    pub placing: Placing,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// Zero of an energy axis.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum Zero {
    /// As the files have it
    Absolute,
    /// The highest level with electrons
    Homo,
}

/// Where counting begins.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum CountFrom {
    /// The lowest level of an irrep is its first
    Lowest,
    /// The highest with electrons of one file belongs to that of the next
    Frontier,
}

/// `geometry`.
#[derive(Debug, Args)]
pub struct Geometry {
    /// Molden-format or XYZ file, plain or gzip; `-` for standard input
    pub file: PathBuf,
    /// Distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// `table`.
#[derive(Debug, Args)]
pub struct Table {
    /// Point group, such as D5d, Oh, C12v, Dinfh
    pub group: String,
    /// The double group instead: irreps of half-integer spin in both notations, splitting of J levels
    #[arg(long)]
    pub double: bool,
    /// Only the selection rules between two irreps, such as --transition t2g eg
    #[arg(long, num_args = 2, value_names = ["FROM", "TO"])]
    pub transition: Option<Vec<String>>,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// `states`.
#[derive(Debug, Args)]
pub struct States {
    /// Point group, such as Oh, Dinfh or Kh (an atom); or a Molden-format file, `-` for standard input
    #[arg(value_name = "GROUP|FILE")]
    pub target: String,
    /// Electron configuration: orbital symbols with numbers of electrons, such as "t2g^3 eg^1" or "4f^7"; a free ion's shell such as
    /// d^3 is brought from free ion to strong field. Without one the target's occupations are read
    pub configuration: Option<String>,
    /// Show the spin–orbit components of every term
    #[arg(long)]
    pub spin_orbit: bool,
    /// Show which transitions between the terms are allowed
    #[arg(long)]
    pub transitions: bool,
    /// Show which transitions to the terms of this configuration are allowed
    #[arg(long, value_name = "CONFIGURATION")]
    pub to: Option<String>,
    /// How levels of these J split, such as 5/2,7/2; u at the end for odd states
    #[arg(long, value_name = "J,…", value_delimiter = ',')]
    pub level: Vec<String>,
    /// How terms of a free ion split, such as 4F,4P; u at the end for odd terms
    #[arg(long, value_name = "TERM,…", value_delimiter = ',')]
    pub term: Vec<String>,
    /// Of a file: distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// Of a file: energies this near count as one, hartree
    #[arg(long, value_name = "HARTREE", default_value_t = 1e-3, value_parser = positive)]
    pub degeneracy: f64,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// `audit`.
#[derive(Debug, Args)]
pub struct Audit {
    /// Molden-format file, plain or gzip; `-` for standard input
    pub file: PathBuf,
    /// Distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// An operation counts as kept when it carries no more electrons than this out of place
    #[arg(long, value_name = "ELECTRONS", default_value_t = Limits::STANDARD.carried, value_parser = positive)]
    pub carried: f64,
    /// Smallest weight of one irrep in an orbital that belongs to it
    #[arg(long, value_name = "WEIGHT", default_value_t = Limits::STANDARD.pure, value_parser = fraction)]
    pub pure: f64,
    /// Corresponding orbitals that overlap less than this are a magnetic pair
    #[arg(long, value_name = "OVERLAP", default_value_t = Limits::STANDARD.magnetic, value_parser = fraction)]
    pub magnetic: f64,
    /// Energies this near count as one, hartree
    #[arg(long, value_name = "HARTREE", default_value_t = 1e-3, value_parser = positive)]
    pub degeneracy: f64,
    /// Exit status 1 for mixed orbitals too
    #[arg(long)]
    pub strict: bool,
    /// Show every operation and orbital
    #[arg(long)]
    pub all: bool,
    /// Which group
    #[command(flatten)]
    pub placing: Placing,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// `purify`. Its `--output` takes the new file; the report goes to standard output, or beside without `--output`.
#[derive(Debug, Args)]
pub struct Purify {
    /// Molden-format file, plain or gzip; `-` for standard input
    pub file: PathBuf,
    /// Move the nuclei onto their symmetric places too
    #[arg(long)]
    pub geometry: bool,
    /// Distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// Which group
    #[command(flatten)]
    pub placing: Placing,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// `transitions`.
#[derive(Debug, Args)]
pub struct Transitions {
    /// Molden-format file, plain or gzip; `-` for standard input
    pub file: PathBuf,
    /// Sets to leave: labels (3e2g), orbital numbers, homo, homo-1; by default those of the window
    #[arg(long, value_name = "SETS", value_delimiter = ',')]
    pub from: Vec<Selector>,
    /// Sets to enter: labels, orbital numbers, lumo, lumo+1
    #[arg(long, value_name = "SETS", value_delimiter = ',')]
    pub to: Vec<Selector>,
    /// Pair the K highest sets with electrons and the L lowest with room
    #[arg(long, value_name = "K,L", value_parser = window, default_value = "4,4")]
    pub window: (usize, usize),
    /// Only show why the transition between two sets is allowed or not
    #[arg(long, num_args = 2, value_names = ["A", "B"], conflicts_with_all = ["from", "to", "max_ev", "allowed_only"])]
    pub explain: Option<Vec<SetName>>,
    /// Leave out pairs farther apart than this in orbital energy, eV
    #[arg(long, value_name = "EV", value_parser = positive)]
    pub max_ev: Option<f64>,
    /// Only pairs that an electric dipole connects
    #[arg(long)]
    pub allowed_only: bool,
    /// Distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// Which group
    #[command(flatten)]
    pub placing: Placing,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// `modes`.
#[derive(Debug, Args)]
pub struct Modes {
    /// Molden-format or XYZ file, plain or gzip; `-` for standard input
    pub file: PathBuf,
    /// Distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// What every verb takes
    #[command(flatten)]
    pub common: Common,
}

/// `schema`.
#[derive(Debug, Args)]
pub struct Schema {
    /// Whose output; without it every schema in one document
    #[arg(value_name = "VERB", value_parser = PossibleValuesParser::new(schema::names()))]
    pub output_of: Option<String>,
    /// Write the schema to this file, whole or not at all
    #[arg(long, value_name = "FILE")]
    pub output: Option<PathBuf>,
}

/// `completions`.
#[derive(Debug, Args)]
pub struct Completions {
    /// The shell
    pub shell: clap_complete::Shell,
}

/// `manual`.
#[derive(Debug, Args)]
pub struct Manual {
    /// A verb; without it the program as a whole
    pub verb: Option<String>,
}

pub(super) fn positive(text: &str) -> Result<f64, String> {
    match text.parse::<f64>() {
        Ok(value) if value > 0.0 && value.is_finite() => Ok(value),
        _ => Err("expected a number above zero".to_owned()),
    }
}

fn energy_range(text: &str) -> Result<(f64, f64), String> {
    let number = |text: &str| text.trim().parse::<f64>().ok().filter(|value| value.is_finite());
    let parsed = text.split_once(',').and_then(|(low, high)| Some((number(low)?, number(high)?)));
    match parsed {
        Some((low, high)) if low < high => Ok((low, high)),
        _ => Err("expected two energies in eV, the lower first, such as -15,5".to_owned()),
    }
}

pub(super) fn fraction(text: &str) -> Result<f64, String> {
    match text.parse::<f64>() {
        Ok(value) if value > 0.5 && value <= 1.0 => Ok(value),
        _ => Err("expected a number above 0.5 and up to 1: below, two irreps could both claim the orbital".to_owned()),
    }
}

fn window(text: &str) -> Result<(usize, usize), String> {
    let parsed = text.split_once(',').and_then(|(k, l)| Some((k.trim().parse().ok()?, l.trim().parse().ok()?)));
    parsed.ok_or_else(|| "expected two whole numbers, such as 6,4".to_owned())
}
