//! The lots of a file, one at a time, for sweeping.
//!
//! Three kinds of file, told apart by how they begin: a GeoJSON FeatureCollection (or a single Feature, Polygon or
//! MultiPolygon), a GeoJSON text sequence (RFC 8142), and a table in CSV with a column `wkt` and perhaps `id`, parted by
//! commas, semicolons or tabs. Reading comes in two steps, so that the costly one can be done elsewhere: [`Lots`] hands
//! out the text of each lot in file order, and [`LotText::parse`] makes coordinates of it, in those of the file. A bad lot
//! is a [`LotProblem`] with its position, and the next one follows; only where the file itself cannot be taken apart any
//! further does the reading end, with a problem that says so.
//!
//! A lot may say its own setbacks: in GeoJSON by the properties `setback_m`, `setbacks_m` and `roles`, in a table by the
//! column `setback_m`. Where it does not, its record carries none and costs nothing.
//!
//! Memory is one lot. Cost per ten-corner lot, one machine, release: about 1 µs for the text, 2.5 µs to parse.

mod features;
mod geojson_text;
mod table;
mod wkt_text;

use std::io::{self, BufRead, Chain, Cursor, Read};
use std::sync::Arc;

use serde_json::{Map, Value};

use super::collection::SplitError;
use super::site_json::Options;
use super::site_json::setbacks::ByRole;
pub use super::site_json::setbacks::Setbacks;
use crate::geom::validate::RawPolygon;
use features::Features;

/// How much of a file is looked at to tell what it is, bytes: a table's whole heading should be in it.
const HEAD_BYTES: u64 = 1 << 16;
/// ASCII record separator, which begins every text of a GeoJSON text sequence (RFC 8142, section 2).
const RECORD_SEPARATOR: u8 = 0x1e;

/// Why a file of lots cannot be begun.
#[derive(Debug, thiserror::Error)]
pub enum LotsError {
    #[error("{name} cannot be read: {source}")]
    Io { name: String, source: io::Error },
    #[error("{0} is empty")]
    Empty(String),
    #[error(
        "{0} is neither GeoJSON nor a table with a column wkt: its heading must name that column"
    )]
    Unknown(String),
    #[error("{name}: {problem}")]
    Heading { name: String, problem: String },
    /// Of the setbacks by role beside the features.
    #[error("{}", .0.join("; "))]
    Setbacks(Vec<String>),
}

/// As many problems of one lot's setbacks are said.
const SHOWN_PROBLEMS: usize = 5;

/// What a lot's text is written in.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
enum Format {
    GeoJson,
    Wkt,
}

/// The text of one lot, as it stands in the file.
#[derive(Clone, Debug)]
pub struct LotText {
    /// From 1, over the features or rows of the file.
    pub position: u64,
    /// "feature" or "row".
    noun: &'static str,
    /// From its own column; a feature has its id in the text.
    id: Option<String>,
    format: Format,
    text: Vec<u8>,
    /// What a row says of its setbacks; a feature says it in the text.
    own: Map<String, Value>,
    /// From beside the features.
    by_role: Option<Arc<ByRole>>,
}

/// One lot in the coordinates of its file, not yet validated.
#[derive(Clone, Debug, PartialEq)]
pub struct LotRecord {
    /// From 1, over the features or rows of the file.
    pub position: u64,
    /// The file's own id, a string or a number; its position where it has none.
    pub id: Value,
    pub polygons: Vec<RawPolygon>,
    /// Where the lot or its file says anything of them; otherwise options alone count.
    pub setbacks: Option<Setbacks>,
}

/// What is wrong with one lot, or with the file from there on.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
#[error("{noun} {position}: {problem}")]
pub struct LotProblem {
    pub position: u64,
    /// The lot's own id as far as it could be read; its position otherwise.
    pub id: Value,
    noun: &'static str,
    /// A sentence without the position.
    pub problem: String,
    /// Nothing after this can be read.
    pub ends_file: bool,
}

impl LotText {
    /// The lot's id, coordinates and setbacks; `options` go before what it says itself.
    ///
    /// # Errors
    /// What is not a polygon or cannot be read, or wrong setbacks.
    pub fn parse(&self, options: &Options) -> Result<LotRecord, LotProblem> {
        let (id, content) = match self.format {
            Format::GeoJson => geojson_text::parse(&self.text),
            Format::Wkt => (None, self.parse_row()),
        };
        let own_id = self.id.clone().map(Value::String);
        let id = own_id.or(id).unwrap_or_else(|| self.position.into());
        let with_setbacks = |content: Content| {
            let setbacks = self.setbacks(&content, options)?;
            Ok((content.polygons, setbacks))
        };
        match content.and_then(with_setbacks) {
            Ok((polygons, setbacks)) => Ok(LotRecord {
                position: self.position,
                id,
                polygons,
                setbacks,
            }),
            Err(problem) => Err(LotProblem {
                position: self.position,
                id,
                noun: self.noun,
                problem,
                ends_file: false,
            }),
        }
    }

    fn parse_row(&self) -> Result<Content, String> {
        Ok(Content {
            polygons: wkt_text::parse(&self.text)?,
            own: self.own.clone(),
            by_role: None,
        })
    }

    fn setbacks(&self, content: &Content, options: &Options) -> Result<Option<Setbacks>, String> {
        let by_role = content.by_role.as_ref().or(self.by_role.as_deref());
        if content.own.is_empty() && by_role.is_none() {
            return Ok(None);
        }
        let none = ByRole::default();
        let by_role = by_role.unwrap_or(&none);
        Setbacks::of_swept_lot(&content.own, &content.polygons, by_role, options)
            .map(Some)
            .map_err(|problems| briefly(&problems))
    }
}

/// What the text of a lot holds.
struct Content {
    polygons: Vec<RawPolygon>,
    /// Its members about setbacks.
    own: Map<String, Value>,
    /// Beside a feature that stands alone.
    by_role: Option<ByRole>,
}

/// The first few problems in one line.
fn briefly(problems: &[String]) -> String {
    let shown = problems.get(..SHOWN_PROBLEMS).unwrap_or(problems);
    match problems.len() - shown.len() {
        0 => shown.join("; "),
        more => format!("{}; and {more} more", shown.join("; ")),
    }
}

/// The lots of a file in its order.
pub struct Lots<R> {
    source: Source<R>,
    position: u64,
}

type Whole<R> = Chain<Cursor<Vec<u8>>, R>;

enum Source<R> {
    Features(Box<Features<Whole<R>>>),
    /// With the bytes read so far.
    Sequence(Whole<R>, u64),
    Table(Box<table::Table<Whole<R>>>),
    Done,
}

impl<R: BufRead> Lots<R> {
    /// Begins a file; `name` is for messages.
    ///
    /// # Errors
    /// A file that is empty, is of no known kind, or cannot be read.
    pub fn open(mut reader: R, name: &str) -> Result<Lots<R>, LotsError> {
        let io_error = |source| LotsError::Io {
            name: name.to_owned(),
            source,
        };
        let mut head = Vec::new();
        let mut start = reader.by_ref().take(HEAD_BYTES);
        start.read_to_end(&mut head).map_err(io_error)?;
        if head.starts_with(b"\xef\xbb\xbf") {
            head.drain(..3);
        }
        let begins = head.iter().copied().find(|b| !b.is_ascii_whitespace());
        let delimiter = table::delimiter(&head);
        let whole = Cursor::new(head).chain(reader);
        let source = match (begins, delimiter) {
            (None, _) => return Err(LotsError::Empty(name.to_owned())),
            (Some(b'{' | b'['), _) => {
                let features = Features::open(whole).map_err(LotsError::Setbacks)?;
                Source::Features(Box::new(features))
            }
            (Some(RECORD_SEPARATOR), _) => Source::Sequence(whole, 0),
            (Some(_), Some(delimiter)) => {
                let table = table::Table::open(whole, delimiter);
                let table = table.map_err(|problem| LotsError::Heading {
                    name: name.to_owned(),
                    problem,
                })?;
                Source::Table(Box::new(table))
            }
            (Some(_), None) => return Err(LotsError::Unknown(name.to_owned())),
        };
        Ok(Lots {
            source,
            position: 0,
        })
    }

    /// The lots parsed, for callers that do both steps in one place.
    pub fn records(self, options: Options) -> impl Iterator<Item = Result<LotRecord, LotProblem>> {
        self.map(move |text| text.and_then(|text| text.parse(&options)))
    }

    fn feature(&self, text: Vec<u8>, by_role: Option<Arc<ByRole>>) -> LotText {
        LotText {
            position: self.position,
            noun: "feature",
            id: None,
            format: Format::GeoJson,
            text,
            own: Map::new(),
            by_role,
        }
    }

    fn ending(&mut self, noun: &'static str, problem: String) -> LotProblem {
        self.source = Source::Done;
        LotProblem {
            position: self.position,
            id: self.position.into(),
            noun,
            problem: format!("{problem}; nothing after this could be read"),
            ends_file: true,
        }
    }

    fn next_feature(&mut self) -> Option<Result<LotText, LotProblem>> {
        let Source::Features(features) = &mut self.source else {
            return None;
        };
        let by_role = features.by_role();
        let text = features.next_text().transpose()?;
        self.position += 1;
        Some(match text {
            Ok(text) => Ok(self.feature(text, by_role)),
            Err(e) => Err(self.ending("feature", e.to_string())),
        })
    }

    fn next_text_of_sequence(&mut self) -> Option<Result<LotText, LotProblem>> {
        loop {
            let Source::Sequence(whole, byte) = &mut self.source else {
                return None;
            };
            let mut text = Vec::new();
            match read_record(whole, byte, &mut text) {
                Ok(false) => return None,
                Ok(true) => {}
                Err(e) => {
                    self.position += 1;
                    return Some(Err(self.ending("feature", e.to_string())));
                }
            }
            // Several separators in a row are one (RFC 7464, section 2.1).
            if !text.iter().all(u8::is_ascii_whitespace) {
                self.position += 1;
                return Some(Ok(self.feature(text, None)));
            }
        }
    }

    fn next_row(&mut self) -> Option<Result<LotText, LotProblem>> {
        let Source::Table(table) = &mut self.source else {
            return None;
        };
        let row = table.next_row()?;
        self.position += 1;
        let position = self.position;
        Some(match row {
            Ok(row) => match row.wkt {
                Some(text) => Ok(LotText {
                    position,
                    noun: "row",
                    id: row.id,
                    format: Format::Wkt,
                    text,
                    own: row.own,
                    by_role: None,
                }),
                None => Err(LotProblem {
                    position,
                    id: row.id.map_or(position.into(), Value::String),
                    noun: "row",
                    problem: "the row has no cell in the column wkt".to_owned(),
                    ends_file: false,
                }),
            },
            Err(problem) => Err(self.ending("row", problem)),
        })
    }
}

impl<R: BufRead> Iterator for Lots<R> {
    type Item = Result<LotText, LotProblem>;

    fn next(&mut self) -> Option<Self::Item> {
        match self.source {
            Source::Features(_) => self.next_feature(),
            Source::Sequence(..) => self.next_text_of_sequence(),
            Source::Table(_) => self.next_row(),
            Source::Done => None,
        }
    }
}

/// The text up to the next record separator, which is taken off; false at the end of the file. `byte` counts on.
fn read_record(
    reader: &mut impl BufRead,
    byte: &mut u64,
    text: &mut Vec<u8>,
) -> Result<bool, SplitError> {
    let limit = super::collection::MAX_TEXT_BYTES as u64;
    let from = *byte;
    let n = reader.take(limit).read_until(RECORD_SEPARATOR, text);
    let n = n.map_err(|source| SplitError::Io { byte: from, source })? as u64;
    if n == limit {
        return Err(SplitError::TooLong { from });
    }
    *byte += n;
    if text.last() == Some(&RECORD_SEPARATOR) {
        text.pop();
    }
    Ok(n > 0)
}

#[cfg(test)]
mod tests;
