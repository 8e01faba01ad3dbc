//! Rows as Parquet: an open columnar format that data frames and query engines read as it is.
//!
//! Rows are gathered into groups of a fixed size, so memory does not grow with their number and the same rows
//! give the same bytes. Here too: which files a table holds. Not here: what a row holds (`rows`).

use super::rows::{Cell, Column, Kind, Line, Rows, columns};
use parquet::basic::{LogicalType, Repetition, Type as Physical};
use parquet::data_type::{BoolType, ByteArray, ByteArrayType, DataType, DoubleType, Int64Type};
use parquet::errors::{ParquetError, Result};
use parquet::file::properties::WriterProperties;
use parquet::file::reader::{FileReader, SerializedFileReader};
use parquet::file::writer::{SerializedFileWriter, SerializedRowGroupWriter};
use parquet::record::RowAccessor;
use parquet::schema::types::Type;
use std::fs::File;
use std::io::Write;
use std::sync::Arc;

/// Rows of one group.
const GROUP: usize = 1 << 16;

/// Writes rows as they come; [`Table::finish`] closes the file.
pub struct Table<W: Write + Send> {
    rows: Rows,
    columns: Vec<Column>,
    writer: SerializedFileWriter<W>,
    waiting: Vec<Vec<Cell>>,
}

impl<W: Write + Send> Table<W> {
    /// A table without rows.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn new(rows: Rows, out: W) -> Result<Self> {
        let properties = Arc::new(WriterProperties::builder().build());
        let writer = SerializedFileWriter::new(out, Arc::new(schema(rows)?), properties)?;
        Ok(Self { rows, columns: columns(rows), writer, waiting: Vec::new() })
    }

    /// Adds the rows of one record.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn add(&mut self, line: &Line) -> Result<()> {
        for row in line.rows(self.rows) {
            self.waiting.push(row);
            if self.waiting.len() == GROUP {
                self.write_group()?;
            }
        }
        Ok(())
    }

    /// Writes what waits and the footer.
    ///
    /// # Errors
    /// Whatever the writer reports.
    pub fn finish(mut self) -> Result<()> {
        if !self.waiting.is_empty() {
            self.write_group()?;
        }
        self.writer.close()?;
        Ok(())
    }

    fn write_group(&mut self) -> Result<()> {
        let rows = std::mem::take(&mut self.waiting);
        let mut group = self.writer.next_row_group()?;
        for (at, (_, kind)) in self.columns.iter().enumerate() {
            let cells = rows.iter().filter_map(|row| row.get(at));
            match kind {
                Kind::Text => write_column::<ByteArrayType, _>(&mut group, cells, |cell| match cell {
                    Cell::Text(value) => Some(ByteArray::from(value.as_str())),
                    _ => None,
                }),
                Kind::Whole => write_column::<Int64Type, _>(&mut group, cells, |cell| match cell {
                    Cell::Whole(value) => Some(*value),
                    _ => None,
                }),
                Kind::Real => write_column::<DoubleType, _>(&mut group, cells, |cell| match cell {
                    Cell::Real(value) => Some(*value),
                    _ => None,
                }),
                Kind::Flag => write_column::<BoolType, _>(&mut group, cells, |cell| match cell {
                    Cell::Flag(value) => Some(*value),
                    _ => None,
                }),
            }?;
        }
        group.close()?;
        Ok(())
    }
}

/// What the rows of one file say of it.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RowHead {
    /// As given.
    pub file: String,
    /// None where the file could not be read.
    pub hash: Option<String>,
    /// That of `label`.
    pub exit_status: u8,
    /// Where there are labels.
    pub point_group: Option<String>,
    /// Why there are none.
    pub error: Option<String>,
}

/// The files that a table holds, in order, each once.
///
/// # Errors
/// When the file is no Parquet, or a table with other columns.
pub fn heads(file: File, rows: Rows) -> Result<Vec<RowHead>> {
    let reader = SerializedFileReader::new(file)?;
    let schema = schema(rows)?;
    let descriptor = reader.metadata().file_metadata().schema_descr();
    if *descriptor.root_schema() != schema {
        return Err(ParquetError::General("another table".to_owned()));
    }
    let wanted = ["file", "hash", "exit_status", "point_group", "error"];
    let fields = schema.get_fields().iter().filter(|field| wanted.contains(&field.name())).cloned().collect();
    let projection = Type::group_type_builder(schema.name()).with_fields(fields).build()?;
    let mut heads: Vec<RowHead> = Vec::new();
    for row in reader.get_row_iter(Some(projection))? {
        let row = row?;
        let text = |at: usize| row.get_string(at).ok().cloned();
        let file = row.get_string(0)?;
        if heads.last().is_none_or(|head| head.file != *file) {
            heads.push(RowHead {
                file: file.clone(),
                hash: text(1),
                exit_status: u8::try_from(row.get_long(2)?).unwrap_or(u8::MAX),
                point_group: text(3),
                error: text(4),
            });
        }
    }
    Ok(heads)
}

fn schema(rows: Rows) -> Result<Type> {
    let fields = columns(rows).iter().map(field).collect::<Result<Vec<_>>>()?;
    let name = match rows {
        Rows::Orbitals => "orbitals",
        Rows::Sets => "sets",
        Rows::Files => "files",
    };
    Type::group_type_builder(name).with_fields(fields).build()
}

fn field((name, kind): &Column) -> Result<Arc<Type>> {
    let (physical, logical) = match kind {
        Kind::Text => (Physical::BYTE_ARRAY, Some(LogicalType::String)),
        Kind::Whole => (Physical::INT64, None),
        Kind::Real => (Physical::DOUBLE, None),
        Kind::Flag => (Physical::BOOLEAN, None),
    };
    Type::primitive_type_builder(name, physical)
        .with_repetition(Repetition::OPTIONAL)
        .with_logical_type(logical)
        .build()
        .map(Arc::new)
}

/// One column of a group: which cells are there, and their values.
fn write_column<'a, T: DataType, W: Write + Send>(
    group: &mut SerializedRowGroupWriter<'_, W>,
    cells: impl Iterator<Item = &'a Cell>,
    value: impl Fn(&Cell) -> Option<T::T>,
) -> Result<()> {
    let cells: Vec<Option<T::T>> = cells.map(value).collect();
    let present: Vec<i16> = cells.iter().map(|cell| i16::from(cell.is_some())).collect();
    let values: Vec<T::T> = cells.into_iter().flatten().collect();
    if let Some(mut column) = group.next_column()? {
        column.typed::<T>().write_batch(&values, Some(&present), None)?;
        column.close()?;
    }
    Ok(())
}
