//! What a person types after `batch`.

use super::super::arguments::{Placing, fraction, positive};
use crate::report::rows::Rows;
use clap::{Args, ValueEnum};
use std::path::PathBuf;

/// `batch`.
#[derive(Debug, Args)]
#[expect(clippy::struct_excessive_bools, reason = "each is a flag that a person types")]
pub struct Batch {
    /// Molden-format files, plain or gzip; patterns such as 'runs/**/*.molden'; of a folder, the files with `.molden`
    /// in their name
    pub paths: Vec<PathBuf>,
    /// Take more names from this list, one a line, `-` for standard input; blank lines and lines with # are passed over
    #[arg(long, value_name = "LIST")]
    pub files_from: Option<PathBuf>,
    /// Form of the result
    #[arg(long, value_enum, default_value_t = BatchFormat::Json)]
    pub format: BatchFormat,
    /// What a row of csv or parquet stands for [default: sets in csv, orbitals in parquet]
    #[arg(long, value_enum)]
    pub rows: Option<BatchRows>,
    /// Write the result to this file, whole or not at all; until then finished records are kept in FILE.part
    #[arg(long, value_name = "FILE")]
    pub output: Option<PathBuf>,
    /// Take over what FILE and FILE.part already hold of unchanged files, and label the rest
    #[arg(long, requires = "output")]
    pub resume: bool,
    /// Only the I-th of N equal parts of the list, I from 1
    #[arg(long, value_name = "I/N", value_parser = shard)]
    pub shard: Option<(usize, usize)>,
    /// PATHS are results in JSON Lines: join them in the order given, in any --format
    #[arg(long, conflicts_with_all = ["resume", "shard"])]
    pub merge: bool,
    /// Distance a nucleus may lie from its symmetric place, Å
    #[arg(long, value_name = "Å", default_value_t = 0.01, value_parser = positive)]
    pub tolerance: f64,
    /// Energies this near count as one, hartree
    #[arg(long, value_name = "HARTREE", default_value_t = 1e-3, value_parser = positive)]
    pub degeneracy: f64,
    /// Smallest weight of one irrep that gives an orbital its label
    #[arg(long, value_name = "WEIGHT", default_value_t = 0.90, value_parser = fraction)]
    pub purity: f64,
    /// Compute what orbitals are made of even for large bases
    #[arg(long)]
    pub character: bool,
    /// Which group
    #[command(flatten)]
    pub placing: Placing,
    /// Files labelled at a time; 0 for one a core
    #[arg(long, value_name = "N", default_value_t = 0)]
    pub threads: usize,
    /// No summary and no progress on standard error
    #[arg(long)]
    pub quiet: bool,
}

/// Forms of the result.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum BatchFormat {
    /// JSON Lines: the document of `label`, one a line
    Json,
    /// Comma-separated rows with a header
    Csv,
    /// The same rows by column; needs a build with `--features parquet`
    Parquet,
}

/// What a row stands for.
#[derive(Debug, Clone, Copy, PartialEq, Eq, ValueEnum)]
pub enum BatchRows {
    /// One orbital
    Orbitals,
    /// One degenerate set
    Sets,
    /// One file
    Files,
}

impl Batch {
    /// What a row stands for, asked for or usual.
    pub(super) fn rows(&self) -> Rows {
        match (self.rows, self.format) {
            (Some(BatchRows::Orbitals), _) | (None, BatchFormat::Parquet) => Rows::Orbitals,
            (Some(BatchRows::Sets) | None, _) => Rows::Sets,
            (Some(BatchRows::Files), _) => Rows::Files,
        }
    }
}

fn shard(text: &str) -> Result<(usize, usize), String> {
    let parsed = text.split_once('/').and_then(|(i, n)| Some((i.trim().parse().ok()?, n.trim().parse().ok()?)));
    match parsed {
        Some((i, n)) if (1..=n).contains(&i) => Ok((i, n)),
        _ => Err("expected a part and how many there are, such as 2/4".to_owned()),
    }
}
