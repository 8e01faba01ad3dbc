//! Level diagrams as SVG: one report document, or several side by side with lines between equal irreps.
//!
//! Here: what may be asked for, and the two doors, [`levels_svg`] and [`series_svg`]. Not here: chemistry (`labelling`, `report`),
//! files (`cli`).

pub mod axis;
pub mod column;
pub mod correlation;
pub mod figure;
pub mod ink;
pub mod kinship;
pub mod level;
pub mod notes;
pub mod packing;
pub mod palette;
pub mod spread;
pub mod symbol;
pub mod window;

use crate::report::document::Document;
pub use correlation::Count;
use thiserror::Error;

/// Width on paper; journals set figures in one column or across two (common practice: about 84 and 174 mm).
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Width {
    /// 84 mm.
    Single,
    /// 174 mm.
    Double,
}

impl Width {
    /// In millimetres.
    #[must_use]
    pub fn mm(self) -> f64 {
        match self {
            Self::Single => 84.0,
            Self::Double => 174.0,
        }
    }
}

/// Where the energy axis has its zero.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default)]
pub enum Zero {
    /// As the files have it.
    #[default]
    Absolute,
    /// The highest level with electrons of each file.
    Homo,
}

/// What is asked for.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Options {
    /// Lowest and highest energy shown, eV on the axis; by default the frontier without cores.
    pub range: Option<(f64, f64)>,
    /// By default one journal column for one column of levels or two of few levels, else two.
    pub width: Option<Width>,
    /// Allowed transitions of the document as arrows.
    pub transitions: bool,
    /// Zero of the axis.
    pub zero: Zero,
    /// Words over the files; by default their names.
    pub names: Vec<String>,
    /// How levels of several files are counted.
    pub count: Count,
    /// Of several ways in which one file's group lies in the next one's, this one, from 1; by default the coordinates decide.
    pub way: Option<usize>,
    /// Begins every id, so that several diagrams can stand in one page; letters, digits, `-`, `_`.
    pub id: String,
}

/// A diagram and what a person should know about it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Drawn {
    /// The SVG element, without an XML head, so that a page can hold it.
    pub svg: String,
    /// Why lines are missing, and the like; they stand in the diagram too.
    pub cautions: Vec<String>,
}

/// Why there is no diagram.
#[derive(Debug, Clone, PartialEq, Error)]
pub enum DiagramError {
    /// Nothing to place on an energy axis.
    #[error("{file}: no orbital has an energy, so there are no levels to draw")]
    NoLevels {
        /// The file.
        file: String,
    },
    /// Lowest energy not below the highest, or one that no orbital has.
    #[error("a range from {low} to {high} eV: expected the lower first, both within a million")]
    Range {
        /// Lowest asked for.
        low: f64,
        /// Highest asked for.
        high: f64,
    },
    /// A way down that there is not.
    #[error("there is no way {way} from {high} to {low}: there {}", if *ways == 1 { "is 1".to_owned() } else { format!("are {ways}") })]
    Way {
        /// Asked for.
        way: usize,
        /// The higher group.
        high: String,
        /// The lower group.
        low: String,
        /// How many there are.
        ways: usize,
    },
    /// Another number of names than files.
    #[error("{names} names for {files} files")]
    Names {
        /// Names given.
        names: usize,
        /// Files given.
        files: usize,
    },
}

/// The level diagram of one document.
///
/// # Errors
/// [`DiagramError`].
pub fn levels_svg(document: &Document, options: &Options) -> Result<String, DiagramError> {
    figure::draw(std::slice::from_ref(document), options).map(|drawn| drawn.svg)
}

/// Documents side by side, with lines between equal irreps.
///
/// # Errors
/// [`DiagramError`].
pub fn series_svg(documents: &[Document], options: &Options) -> Result<Drawn, DiagramError> {
    figure::draw(documents, options)
}
