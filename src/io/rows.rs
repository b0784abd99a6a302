//! The rows a sweep writes: one per lot, as JSON lines or as a table in CSV.
//!
//! Numbers are written so that they are read again to the bit. A text cell that a spreadsheet would run as a formula
//! is defused with an apostrophe before it; numbers are left as they are.

use std::borrow::Cow;
use std::io::{self, Write};

use serde::Serialize;
use serde_json::Value;

/// What a sweep says of one lot. The order of the fields is that of the members and columns.
#[derive(Clone, Debug, PartialEq, Serialize)]
pub struct Row {
    /// The lot's own id, a string or a number, or its position in the file.
    pub id: Value,
    /// A stable word, such as `fits`.
    pub status: &'static str,
    pub diameter_m: Option<f64>,
    /// Proven: no larger diameter fits.
    pub upper_m: Option<f64>,
    /// In the coordinates of the input.
    pub centre: Option<[f64; 2]>,
    /// From the validated polygon in memory to the verified placement, microseconds.
    pub solve_us: Option<f64>,
    /// What is wrong with a bad lot.
    #[serde(skip_serializing_if = "Option::is_none")]
    pub problem: Option<String>,
}

impl Row {
    /// The row of a lot that could not be placed on.
    pub fn bad(id: Value, status: &'static str, problem: String) -> Row {
        Row {
            id,
            status,
            diameter_m: None,
            upper_m: None,
            centre: None,
            solve_us: None,
            problem: Some(problem),
        }
    }
}

/// Writes rows as JSON lines: one object a line, `null` for what a row lacks, `problem` only where there is one.
pub struct JsonLines<W> {
    out: W,
}

impl<W: Write> JsonLines<W> {
    /// `out` should be buffered.
    pub fn new(out: W) -> JsonLines<W> {
        JsonLines { out }
    }

    /// # Errors
    /// When writing fails.
    pub fn write(&mut self, row: &Row) -> io::Result<()> {
        serde_json::to_writer(&mut self.out, row).map_err(io::Error::from)?;
        self.out.write_all(b"\n")
    }

    /// Flushes and gives the writer back.
    ///
    /// # Errors
    /// When writing fails.
    pub fn finish(mut self) -> io::Result<W> {
        self.out.flush()?;
        Ok(self.out)
    }
}

/// The columns of the table.
const HEADING: [&str; 8] = [
    "id",
    "status",
    "diameter_m",
    "upper_m",
    "centre_x",
    "centre_y",
    "solve_us",
    "problem",
];

/// Writes rows as CSV under a heading; what a row lacks is an empty cell.
pub struct CsvRows<W: Write> {
    out: csv::Writer<W>,
}

impl<W: Write> CsvRows<W> {
    /// Writes the heading.
    ///
    /// # Errors
    /// When writing fails.
    pub fn new(out: W) -> io::Result<CsvRows<W>> {
        let mut out = csv::Writer::from_writer(out);
        out.write_record(HEADING).map_err(io_error)?;
        Ok(CsvRows { out })
    }

    /// # Errors
    /// When writing fails.
    pub fn write(&mut self, row: &Row) -> io::Result<()> {
        let id = match &row.id {
            Value::String(text) => defused(text),
            other => Cow::Owned(other.to_string()),
        };
        let cells = (
            id,
            defused(row.status),
            row.diameter_m,
            row.upper_m,
            row.centre.map(|[x, _]| x),
            row.centre.map(|[_, y]| y),
            row.solve_us,
            defused(row.problem.as_deref().unwrap_or_default()),
        );
        self.out.serialize(cells).map_err(io_error)
    }

    /// Flushes and gives the writer back.
    ///
    /// # Errors
    /// When writing fails.
    pub fn finish(self) -> io::Result<W> {
        self.out
            .into_inner()
            .map_err(csv::IntoInnerError::into_error)
    }
}

/// The error below, so that its kind (a closed pipe) can be told.
fn io_error(e: csv::Error) -> io::Error {
    if !e.is_io_error() {
        return io::Error::other(e);
    }
    match e.into_kind() {
        csv::ErrorKind::Io(e) => e,
        other => io::Error::other(format!("{other:?}")),
    }
}

/// First characters that make a cell a formula in some spreadsheet, their full-width forms among them.
const FORMULA_STARTS: [char; 11] = [
    '=', '+', '-', '@', '\t', '\r', '\n', '\u{ff1d}', '\u{ff0b}', '\u{ff0d}', '\u{ff20}',
];

/// The text with an apostrophe before it where a spreadsheet would run it. A text that is a plain number stays.
fn defused(text: &str) -> Cow<'_, str> {
    if text.starts_with(FORMULA_STARTS) && text.parse::<f64>().is_err() {
        Cow::Owned(format!("'{text}"))
    } else {
        Cow::Borrowed(text)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn fits(id: Value) -> Row {
        Row {
            id,
            status: "fits",
            diameter_m: Some(0.1 + 0.2),
            upper_m: Some(1e-7),
            centre: Some([457_550.789_123_456_7, -5_549_991.418]),
            solve_us: Some(8.25),
            problem: None,
        }
    }

    fn json(row: &Row) -> String {
        let mut lines = JsonLines::new(Vec::new());
        lines.write(row).expect("memory takes it");
        String::from_utf8(lines.finish().expect("memory takes it")).expect("UTF-8")
    }

    fn csv_line(row: &Row) -> String {
        let mut rows = CsvRows::new(Vec::new()).expect("memory takes it");
        rows.write(row).expect("memory takes it");
        let text = String::from_utf8(rows.finish().expect("memory takes it")).expect("UTF-8");
        let (heading, line) = text.split_once('\n').expect("a heading");
        assert_eq!(
            heading,
            "id,status,diameter_m,upper_m,centre_x,centre_y,solve_us,problem"
        );
        line.to_owned()
    }

    #[test]
    fn rows_keep_every_bit() {
        let row = fits(7.into());
        let back: Value = serde_json::from_str(&json(&row)).expect("JSON");
        assert_eq!(back["diameter_m"].as_f64(), row.diameter_m);
        assert_eq!(back["centre"][0].as_f64(), row.centre.map(|c| c[0]));
        assert!(back.get("problem").is_none());
        let line = csv_line(&row);
        let cells: Vec<f64> = line
            .trim()
            .split(',')
            .filter_map(|c| c.parse().ok())
            .collect();
        assert_eq!(
            cells,
            [
                7.0,
                0.1 + 0.2,
                1e-7,
                457_550.789_123_456_7,
                -5_549_991.418,
                8.25
            ]
        );
    }

    #[test]
    fn bad_lots_have_a_problem_and_no_figures() {
        let row = Row::bad(
            "a\"b".into(),
            "invalid-lot",
            "crosses itself, twice".to_owned(),
        );
        assert_eq!(
            json(&row),
            "{\"id\":\"a\\\"b\",\"status\":\"invalid-lot\",\"diameter_m\":null,\"upper_m\":null,\"centre\":null,\
             \"solve_us\":null,\"problem\":\"crosses itself, twice\"}\n"
        );
        assert_eq!(
            csv_line(&row),
            "\"a\"\"b\",invalid-lot,,,,,,\"crosses itself, twice\"\n"
        );
    }

    #[test]
    fn a_closed_pipe_keeps_its_kind() {
        struct Closed;
        impl Write for Closed {
            fn write(&mut self, _: &[u8]) -> io::Result<usize> {
                Err(io::ErrorKind::BrokenPipe.into())
            }
            fn flush(&mut self) -> io::Result<()> {
                Ok(())
            }
        }
        let kind = |e: io::Error| e.kind();
        let pipe = Some(io::ErrorKind::BrokenPipe);
        let lines = JsonLines::new(Closed).write(&fits(1.into()));
        assert_eq!(lines.err().map(kind), pipe);
        let rows = CsvRows::new(Closed).and_then(|rows| rows.finish());
        assert_eq!(rows.err().map(kind), pipe);
        let mut rows = CsvRows::new(Closed).expect("the heading is buffered");
        let many = (0..10_000).find_map(|i| rows.write(&fits(i.into())).err());
        assert_eq!(many.map(kind), pipe);
    }

    #[test]
    fn cells_that_a_spreadsheet_would_run_are_defused() {
        #[track_caller]
        fn check(id: &str, expected: &str) {
            let line = csv_line(&Row::bad(id.into(), "bad", String::new()));
            assert_eq!(line, format!("{expected},bad,,,,,,\n"));
        }
        check("=1+1", "'=1+1");
        check("+cmd|' /C calc'!A0", "'+cmd|' /C calc'!A0");
        check("-2+3", "'-2+3");
        check("@SUM(1)", "'@SUM(1)");
        check("\t=1", "'\t=1");
        check("\r=1", "\"'\r=1\"");
        check("\u{ff1d}1", "'\u{ff1d}1");
        check("-17.5", "-17.5");
        check("12-34", "12-34");
    }
}
