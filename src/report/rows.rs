//! Records as tidy tables: one row an orbital, a set or a file, the same columns in CSV and Parquet.
//!
//! Here: the columns with their kinds, what rows take from a line of JSON Lines, rows as CSV. A file that failed
//! is one row with its error. Not here: Parquet's pages (`parquet`).

use serde::Deserialize;

/// What one row stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Rows {
    /// An orbital.
    Orbitals,
    /// A degenerate set.
    Sets,
    /// A file.
    Files,
}

/// What a column holds; every column may be empty.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Kind {
    /// UTF-8.
    Text,
    /// A whole number.
    Whole,
    /// A real number.
    Real,
    /// True or false.
    Flag,
}

/// One value of a row.
#[derive(Debug, Clone, PartialEq)]
pub enum Cell {
    /// Nothing is known.
    Absent,
    /// UTF-8.
    Text(String),
    /// A whole number.
    Whole(i64),
    /// A real number.
    Real(f64),
    /// True or false.
    Flag(bool),
}

use Kind::{Flag, Real, Text, Whole};

/// Name and kind of a column.
pub type Column = (&'static str, Kind);

/// Columns that every table begins with.
const HEAD: [Column; 4] = [("file", Text), ("hash", Text), ("exit_status", Whole), ("point_group", Text)];

const ORBITALS: [Column; 13] = [
    ("spin", Text),
    ("orbital", Whole),
    ("energy_hartree", Real),
    ("occupation", Real),
    ("irrep", Text),
    ("label", Text),
    ("component", Text),
    ("purity", Real),
    ("abelian_irrep", Text),
    ("set", Whole),
    ("degeneracy", Whole),
    ("complete", Flag),
    ("error", Text),
];

const SETS: [Column; 12] = [
    ("set", Whole),
    ("spin", Text),
    ("label", Text),
    ("irrep", Text),
    ("degeneracy", Whole),
    ("energy_hartree", Real),
    ("electrons", Real),
    ("purity", Real),
    ("complete", Flag),
    ("orbitals", Text),
    ("character", Text),
    ("error", Text),
];

const FILES: [Column; 26] = [
    ("title", Text),
    ("formula", Text),
    ("atoms", Whole),
    ("electrons", Real),
    ("charge", Real),
    ("nuclear_group", Text),
    ("deviation_max_angstrom", Real),
    ("functions", Whole),
    ("orthonormality_residual", Real),
    ("orbitals", Whole),
    ("sets", Whole),
    ("incomplete_sets", Whole),
    ("purity_lowest", Real),
    ("determinant", Text),
    ("alpha_homo", Text),
    ("alpha_homo_energy_hartree", Real),
    ("alpha_lumo", Text),
    ("alpha_lumo_energy_hartree", Real),
    ("alpha_gap_hartree", Real),
    ("beta_homo", Text),
    ("beta_homo_energy_hartree", Real),
    ("beta_lumo", Text),
    ("beta_lumo_energy_hartree", Real),
    ("beta_gap_hartree", Real),
    ("diagnostics", Whole),
    ("error", Text),
];

/// What rows take from a line of JSON Lines; other keys are passed over.
#[derive(Debug, Clone, Deserialize)]
pub struct Line {
    file: String,
    hash: Option<String>,
    exit_status: i64,
    #[serde(default)]
    diagnostics: Vec<serde::de::IgnoredAny>,
    error: Option<String>,
    source: Option<Source>,
    geometry: Option<Geometry>,
    basis: Option<Basis>,
    #[serde(default)]
    orbitals: Vec<Orbital>,
    #[serde(default)]
    sets: Vec<Level>,
    frontier: Option<Frontier>,
}

#[derive(Debug, Clone, Deserialize)]
struct Source {
    title: String,
    formula: String,
    atoms: i64,
    electrons: Option<f64>,
    charge: Option<f64>,
}

#[derive(Debug, Clone, Deserialize)]
struct Geometry {
    point_group: String,
    nuclear_group: String,
    deviation_max_angstrom: f64,
}

#[derive(Debug, Clone, Deserialize)]
struct Basis {
    functions: i64,
    orthonormality_residual: f64,
}

#[derive(Debug, Clone, Deserialize)]
struct Orbital {
    index: i64,
    spin: String,
    energy_hartree: Option<f64>,
    occupation: Option<f64>,
    irrep: Option<String>,
    label: Option<String>,
    component: Option<String>,
    purity: f64,
    abelian_irrep: Option<String>,
    set: usize,
}

#[derive(Debug, Clone, Deserialize)]
struct Part {
    atoms: String,
    shell: String,
    share: f64,
}

#[derive(Debug, Clone, Deserialize)]
struct Level {
    set: i64,
    spin: String,
    irrep: Option<String>,
    label: Option<String>,
    orbitals: Vec<i64>,
    degeneracy: i64,
    energy_hartree: Option<f64>,
    electrons: Option<f64>,
    complete: bool,
    purity: f64,
    character: Vec<Part>,
}

#[derive(Debug, Clone, Deserialize)]
struct Frontier {
    spins: Vec<SpinFrontier>,
    determinant: String,
}

#[derive(Debug, Clone, Deserialize)]
struct SpinFrontier {
    spin: String,
    homo: Option<usize>,
    lumo: Option<usize>,
    gap_hartree: Option<f64>,
}

fn text(value: Option<&str>) -> Cell {
    value.map_or(Cell::Absent, |value| Cell::Text(value.to_owned()))
}

fn real(value: Option<f64>) -> Cell {
    value.map_or(Cell::Absent, Cell::Real)
}

fn count(value: usize) -> Cell {
    i64::try_from(value).map_or(Cell::Absent, Cell::Whole)
}

/// Columns of a table, in order.
#[must_use]
pub fn columns(rows: Rows) -> Vec<Column> {
    let own: &[Column] = match rows {
        Rows::Orbitals => &ORBITALS,
        Rows::Sets => &SETS,
        Rows::Files => &FILES,
    };
    HEAD.iter().chain(own).copied().collect()
}

impl Line {
    /// The rows of this record: cells in the order of [`columns`].
    #[must_use]
    pub fn rows(&self, rows: Rows) -> Vec<Vec<Cell>> {
        let body: Vec<Vec<Cell>> = match rows {
            Rows::Files => return vec![self.row(self.of_file())],
            Rows::Orbitals => self.orbitals.iter().map(|orbital| self.of_orbital(orbital)).collect(),
            Rows::Sets => self.sets.iter().map(of_set).collect(),
        };
        if body.is_empty() {
            return vec![self.row(vec![Cell::Absent; columns(rows).len() - HEAD.len() - 1])];
        }
        body.into_iter().map(|cells| self.row(cells)).collect()
    }

    /// Head, cells, error.
    fn row(&self, cells: Vec<Cell>) -> Vec<Cell> {
        let group = self.geometry.as_ref().map(|geometry| geometry.point_group.as_str());
        let mut row =
            vec![text(Some(&self.file)), text(self.hash.as_deref()), Cell::Whole(self.exit_status), text(group)];
        row.extend(cells);
        // The whole reason may be a table of its own; it stands in the JSON record.
        row.push(text(self.error.as_deref().and_then(|error| error.lines().next())));
        row
    }

    fn set(&self, number: usize) -> Option<&Level> {
        self.sets.get(number.checked_sub(1)?)
    }

    fn of_orbital(&self, orbital: &Orbital) -> Vec<Cell> {
        let set = self.set(orbital.set);
        vec![
            text(Some(&orbital.spin)),
            Cell::Whole(orbital.index),
            real(orbital.energy_hartree),
            real(orbital.occupation),
            text(orbital.irrep.as_deref()),
            text(orbital.label.as_deref()),
            text(orbital.component.as_deref()),
            Cell::Real(orbital.purity),
            text(orbital.abelian_irrep.as_deref()),
            count(orbital.set),
            set.map_or(Cell::Absent, |set| Cell::Whole(set.degeneracy)),
            set.map_or(Cell::Absent, |set| Cell::Flag(set.complete)),
        ]
    }

    fn of_file(&self) -> Vec<Cell> {
        let (source, geometry, basis) = (self.source.as_ref(), self.geometry.as_ref(), self.basis.as_ref());
        let known = |n: usize| if self.error.is_none() { count(n) } else { Cell::Absent };
        let lowest = self.orbitals.iter().map(|orbital| orbital.purity).reduce(f64::min);
        let mut cells = vec![
            text(source.map(|source| source.title.as_str())),
            text(source.map(|source| source.formula.as_str())),
            source.map_or(Cell::Absent, |source| Cell::Whole(source.atoms)),
            real(source.and_then(|source| source.electrons)),
            real(source.and_then(|source| source.charge)),
            text(geometry.map(|geometry| geometry.nuclear_group.as_str())),
            real(geometry.map(|geometry| geometry.deviation_max_angstrom)),
            basis.map_or(Cell::Absent, |basis| Cell::Whole(basis.functions)),
            real(basis.map(|basis| basis.orthonormality_residual)),
            known(self.orbitals.len()),
            known(self.sets.len()),
            known(self.sets.iter().filter(|set| !set.complete).count()),
            real(lowest),
            text(self.frontier.as_ref().map(|frontier| frontier.determinant.as_str())),
        ];
        for spin in ["alpha", "beta"] {
            let frontier = self.frontier.as_ref().and_then(|all| all.spins.iter().find(|entry| entry.spin == spin));
            let of = |number: Option<usize>| number.and_then(|number| self.set(number));
            let (homo, lumo) = (of(frontier.and_then(|it| it.homo)), of(frontier.and_then(|it| it.lumo)));
            for set in [homo, lumo] {
                cells.push(text(set.and_then(|set| set.label.as_deref())));
                cells.push(real(set.and_then(|set| set.energy_hartree)));
            }
            cells.push(real(frontier.and_then(|frontier| frontier.gap_hartree)));
        }
        cells.push(count(self.diagnostics.len()));
        cells
    }
}

fn of_set(set: &Level) -> Vec<Cell> {
    let orbitals: Vec<String> = set.orbitals.iter().map(ToString::to_string).collect();
    let character: Vec<String> =
        set.character.iter().map(|share| format!("{} {} {:.4}", share.atoms, share.shell, share.share)).collect();
    vec![
        Cell::Whole(set.set),
        text(Some(&set.spin)),
        text(set.label.as_deref()),
        text(set.irrep.as_deref()),
        Cell::Whole(set.degeneracy),
        real(set.energy_hartree),
        real(set.electrons),
        Cell::Real(set.purity),
        Cell::Flag(set.complete),
        Cell::Text(orbitals.join(" ")),
        Cell::Text(character.join("; ")),
    ]
}

impl std::fmt::Display for Cell {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        match self {
            Self::Absent => Ok(()),
            Self::Text(value) => f.write_str(value),
            Self::Whole(value) => value.fmt(f),
            // The shortest digits that give the number back, as in JSON.
            Self::Real(value) => write!(f, "{value:?}"),
            Self::Flag(value) => value.fmt(f),
        }
    }
}

/// Names of the columns as one line of CSV.
#[must_use]
pub fn csv_header(rows: Rows) -> Vec<u8> {
    csv_lines(std::iter::once(columns(rows).iter().map(|column| column.0.to_owned()).collect()))
}

/// The rows of one record as lines of CSV.
#[must_use]
pub fn csv_rows(line: &Line, rows: Rows) -> Vec<u8> {
    csv_lines(line.rows(rows).iter().map(|row| row.iter().map(ToString::to_string).collect()))
}

fn csv_lines(records: impl Iterator<Item = Vec<String>>) -> Vec<u8> {
    let mut writer = csv::Writer::from_writer(Vec::new());
    for record in records {
        writer.write_record(record).expect("memory takes any record, and all have the same length");
    }
    writer.into_inner().expect("memory can be flushed")
}

#[cfg(test)]
#[allow(clippy::unwrap_used, reason = "a test may stop at once")]
mod tests {
    use super::*;

    #[test]
    fn every_cell_stands_under_a_column_of_its_kind() {
        let share = r#"{"atoms":"O","shell":"2p","share":0.9}"#;
        let set = format!(
            r#"{{"set":1,"spin":"alpha","irrep":"B1","label":"1b1","orbitals":[1],"degeneracy":1,"energy_hartree":-0.5,
            "electrons":2.0,"complete":true,"purity":1.0,"character":[{share}]}}"#
        );
        let text = format!(
            r#"{{"file":"a","hash":"b","exit_status":0,"diagnostics":[],"schema":"x",
            "source":{{"file":"a","title":"t","formula":"H2O","atoms":3,"electrons":10.0,"charge":0.0}},
            "geometry":{{"point_group":"C2v","nuclear_group":"C2v","deviation_max_angstrom":0.0}},
            "basis":{{"functions":7,"orthonormality_residual":0.0}},
            "orbitals":[{{"index":1,"spin":"alpha","energy_hartree":-0.5,"occupation":2.0,"irrep":"B1","label":"1b1",
            "component":"x","purity":1.0,"abelian_irrep":"B1","set":1}}],
            "sets":[{set}],
            "frontier":{{"determinant":"A1","spins":[{{"spin":"alpha","homo":1,"lumo":1,"gap_hartree":0.1}},
            {{"spin":"beta","homo":1,"lumo":1,"gap_hartree":0.1}}]}}}}"#
        );
        let whole: Line = serde_json::from_str(&text).unwrap();
        let failed: Line =
            serde_json::from_str(r#"{"file":"a","hash":null,"exit_status":3,"diagnostics":[],"error":"e"}"#).unwrap();
        for rows in [Rows::Orbitals, Rows::Sets, Rows::Files] {
            for line in [&whole, &failed] {
                let table = line.rows(rows);
                assert_eq!(table.len(), 1);
                assert_eq!(table[0].len(), columns(rows).len());
                for (cell, (name, kind)) in table[0].iter().zip(columns(rows)) {
                    let fits = match cell {
                        Cell::Absent => line.error.is_some() || name == "error",
                        Cell::Text(_) => kind == Text,
                        Cell::Whole(_) => kind == Whole,
                        Cell::Real(_) => kind == Real,
                        Cell::Flag(_) => kind == Flag,
                    };
                    assert!(fits, "{name} of {rows:?} holds {cell:?}");
                }
            }
        }
    }
}
