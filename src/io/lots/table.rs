//! Rows of a CSV table with a column `wkt`. A row is held whole, so a quotation mark left open makes one of the rest of the
//! file: the reader has no bound of its own.

use std::io::Read;

use csv::{ByteRecord, Reader, ReaderBuilder};

/// What may part the cells of a table.
const DELIMITERS: [u8; 3] = [b',', b';', b'\t'];

/// A table begun: its heading is read.
pub struct Table<R> {
    reader: Reader<R>,
    row: ByteRecord,
    wkt: Option<usize>,
    id: Option<usize>,
}

/// The cells of a row that matter.
pub struct Row {
    pub id: Option<String>,
    pub wkt: Option<Vec<u8>>,
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
    /// When the heading cannot be read.
    pub fn open(reader: R, delimiter: u8) -> Result<Table<R>, csv::Error> {
        let mut reader = ReaderBuilder::new()
            .flexible(true)
            .delimiter(delimiter)
            .from_reader(reader);
        let heading = reader.byte_headers()?;
        let column = |name| heading.iter().position(|cell| names(cell, name));
        let (wkt, id) = (column("wkt"), column("id"));
        Ok(Table {
            reader,
            row: ByteRecord::new(),
            wkt,
            id,
        })
    }

    /// The next row, blank lines passed over. An error means that reading failed; what comes after it is not to be asked
    /// for.
    pub fn next_row(&mut self) -> Option<Result<Row, csv::Error>> {
        match self.reader.read_byte_record(&mut self.row) {
            Ok(false) => None,
            Err(e) => Some(Err(e)),
            Ok(true) => {
                let cell = |column: Option<usize>| column.and_then(|i| self.row.get(i));
                let id = cell(self.id).filter(|id| !id.is_empty());
                Some(Ok(Row {
                    id: id.map(|id| String::from_utf8_lossy(id).into_owned()),
                    wkt: cell(self.wkt).map(<[u8]>::to_vec),
                }))
            }
        }
    }
}
