//! Rows as Parquet: an open columnar format that data frames and query engines read as it is.
//!
//! Rows are gathered into groups of a fixed size, so memory does not grow with their number and the same rows
//! give the same bytes. Not here: what a row holds (`rows`).

use super::rows::{Cell, Column, Kind, Line, Rows, columns};
use parquet::basic::{LogicalType, Repetition, Type as Physical};
use parquet::data_type::{BoolType, ByteArray, ByteArrayType, DataType, DoubleType, Int64Type};
use parquet::errors::Result;
use parquet::file::properties::WriterProperties;
use parquet::file::writer::{SerializedFileWriter, SerializedRowGroupWriter};
use parquet::schema::types::Type;
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
        let columns = columns(rows);
        let fields = columns.iter().map(field).collect::<Result<Vec<_>>>()?;
        let name = match rows {
            Rows::Orbitals => "orbitals",
            Rows::Sets => "sets",
            Rows::Files => "files",
        };
        let schema = Type::group_type_builder(name).with_fields(fields).build()?;
        let writer = SerializedFileWriter::new(out, Arc::new(schema), Arc::new(WriterProperties::builder().build()))?;
        Ok(Self { rows, columns, writer, waiting: Vec::new() })
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
