//! Rows of a CSV table with a column `wkt`, and perhaps `id` and `setback_m`.
//!
//! A quotation mark left open makes one row of the rest of the file, so the length of a row has a bound, and a last row
//! that ends inside quotation marks ends the file with a problem.

use std::io::{self, Read};

use csv::{ByteRecord, Reader, ReaderBuilder};
use serde_json::{Map, Number, Value};

use crate::io::collection::MAX_TEXT_BYTES;
use crate::io::site_json::setbacks::refuse_columns;

/// What may part the cells of a table.
const DELIMITERS: [u8; 3] = [b',', b';', b'\t'];
/// The one thing a row can say of its setbacks.
const SETBACK: &str = "setback_m";

/// A table begun: its heading is read.
pub struct Table<R> {
    reader: Reader<Metered<R>>,
    row: ByteRecord,
    wkt: Option<usize>,
    id: Option<usize>,
    setback: Option<usize>,
}

/// The cells of a row that matter.
pub struct Row {
    pub id: Option<String>,
    pub wkt: Option<Vec<u8>>,
    /// Its setback, if it says one.
    pub own: Map<String, Value>,
}

/// The delimiter with which the first line of `head` has a cell `wkt`.
pub fn delimiter(head: &[u8]) -> Option<u8> {
    let line = head.split(|b| matches!(b, b'\n' | b'\r')).next()?;
    DELIMITERS
        .into_iter()
        .find(|d| line.split(|b| b == d).any(|cell| names(cell, "wkt")))
}

fn names(cell: &[u8], name: &str) -> bool {
    let cell = cell.trim_ascii();
    let cell = cell.strip_prefix(b"\"").unwrap_or(cell);
    let cell = cell.strip_suffix(b"\"").unwrap_or(cell);
    cell.trim_ascii().eq_ignore_ascii_case(name.as_bytes())
}

impl<R: Read> Table<R> {
    /// # Errors
    /// When the heading cannot be read, names a column twice, or has one that seems meant for `setback_m`.
    pub fn open(reader: R, delimiter: u8) -> Result<Table<R>, String> {
        let mut reader = ReaderBuilder::new()
            .flexible(true)
            .delimiter(delimiter)
            .from_reader(Metered::new(reader));
        let heading = reader.byte_headers();
        let heading = heading.map_err(|e| format!("the heading cannot be read: {e}"))?;
        let column = |name| {
            let mut columns = heading.iter().enumerate();
            let mut columns = columns
                .by_ref()
                .filter(|(_, cell)| names(cell, name))
                .map(|(i, _)| i);
            match (columns.next(), columns.next()) {
                (_, Some(_)) => Err(format!("the heading has two columns {name}: keep one")),
                (first, None) => Ok(first),
            }
        };
        let (wkt, id, setback) = (column("wkt")?, column("id")?, column(SETBACK)?);
        let cells = heading.iter().map(String::from_utf8_lossy);
        refuse_columns(cells.filter(|cell| !names(cell.as_bytes(), SETBACK)))?;
        Ok(Table {
            reader,
            row: ByteRecord::new(),
            wkt,
            id,
            setback,
        })
    }

    /// The next row, blank lines passed over. An error means that reading failed; what comes after it is not to be asked
    /// for.
    pub fn next_row(&mut self) -> Option<Result<Row, String>> {
        self.reader.get_mut().left = MAX_TEXT_BYTES;
        match self.reader.read_byte_record(&mut self.row) {
            Ok(false) => None,
            Err(e) => Some(Err(self.place(e))),
            Ok(true) if self.is_left_open() => Some(Err(
                self.place("a quotation mark is opened and not closed before the file ends")
            )),
            Ok(true) => Some(Ok(self.cells())),
        }
    }

    fn cells(&self) -> Row {
        let cell = |column: Option<usize>| column.and_then(|i| self.row.get(i));
        let id = cell(self.id).filter(|id| !id.is_empty());
        let mut own = Map::new();
        if let Some(setback) = cell(self.setback).map(<[u8]>::trim_ascii)
            && !setback.is_empty()
        {
            own.insert(SETBACK.to_owned(), figure(setback));
        }
        Row {
            id: id.map(|id| String::from_utf8_lossy(id).into_owned()),
            wkt: cell(self.wkt).map(<[u8]>::to_vec),
            own,
        }
    }

    fn place(&self, problem: impl std::fmt::Display) -> String {
        let line = self.row.position().map_or(0, csv::Position::line);
        format!("in the row that begins in line {line}: {problem}")
    }

    /// Whether the row read last goes over several lines to the end of the file with a quotation mark left over. Marks
    /// inside cells without quotation marks may be odd in number, but then a row ends with its line.
    fn is_left_open(&self) -> bool {
        let metered = self.reader.get_ref();
        metered.is_at_end && metered.has_odd_marks && self.row.as_slice().contains(&b'\n')
    }
}

/// The figure of a cell; a text where it is none, which is then refused as one.
fn figure(cell: &[u8]) -> Value {
    let text = String::from_utf8_lossy(cell);
    let number = text.parse().ok().and_then(Number::from_f64);
    number.map_or_else(|| Value::String(text.into_owned()), Value::Number)
}

/// A reader with a bound on what may be read for one row.
struct Metered<R> {
    reader: R,
    /// Bytes the row may still take; the buffer of the table reads ahead by less than it matters.
    left: usize,
    /// Whether the quotation marks so far are odd in number.
    has_odd_marks: bool,
    is_at_end: bool,
}

impl<R> Metered<R> {
    fn new(reader: R) -> Metered<R> {
        Metered {
            reader,
            left: MAX_TEXT_BYTES,
            has_odd_marks: false,
            is_at_end: false,
        }
    }
}

impl<R: Read> Read for Metered<R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        if self.left == 0 {
            return Err(io::Error::other(format!(
                "it is longer than {} MB: a quotation mark may be left open",
                MAX_TEXT_BYTES >> 20
            )));
        }
        let n = self.reader.read(buffer)?;
        let read = buffer.get(..n).unwrap_or_default();
        let is_odd = |odd, b: &u8| odd ^ u8::from(*b == b'"');
        self.has_odd_marks ^= read.iter().fold(0, is_odd) == 1;
        self.left = self.left.saturating_sub(n);
        self.is_at_end = n == 0 && !buffer.is_empty();
        Ok(n)
    }
}
