//! The report as one HTML file: data in, a string out.
//!
//! Reading order: `names` (irreps and operations set in type), `summary`, `figures`, `symmetry`, `tables`, `verdict`, `method`,
//! then `document`, which puts them together. Nothing is fetched, everything is readable with scripting off, and what a file says
//! of itself is escaped by the library. Not here: any number that the documents do not hold, files (`cli`).

mod document;
mod figures;
mod method;
mod names;
mod summary;
mod symmetry;
mod tables;
mod verdict;

pub use document::html;
pub use figures::SetPictures;

use crate::report::audit::AuditEntry;
use crate::report::document::Document;
use crate::report::table::TableDocument;

/// Everything the page shows.
#[derive(Debug, Clone, Copy)]
pub struct Report<'a> {
    /// That of `label`.
    pub document: &'a Document,
    /// That of `audit`; a reason where there is none.
    pub audit: Result<&'a AuditEntry, &'a str>,
    /// Characters of the group; None for an atom.
    pub table: Option<&'a TableDocument>,
    /// The molecule among its symmetry elements, SVG.
    pub elements: &'a str,
    /// Kinds of elements with their numbers, in the order of their line patterns.
    pub kinds: &'a [(String, usize)],
    /// The level diagram, SVG.
    pub levels: Option<&'a str>,
    /// Orbitals around the frontier, highest energy first.
    pub pictures: &'a [SetPictures],
    /// Which way the pictures look.
    pub view: &'a str,
}
