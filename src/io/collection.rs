//! A GeoJSON object taken apart while it streams by: its features one at a time, and everything else.
//!
//! Method: only brackets and strings are looked at. The elements of the top-level member `features` are handed out as
//! text, so that a bad feature is that feature's problem; all other members are gathered as the **envelope**, an object
//! of its own. Memory is one feature and the envelope, each at most [`MAX_TEXT_BYTES`]. An object without `features` ends
//! up in the envelope whole.

use std::io::{self, BufRead};

/// The longest feature taken, bytes: about 5 million corners. A file with a bracket or quote left open would otherwise be
/// read into memory whole.
pub const MAX_TEXT_BYTES: usize = 128 << 20;

/// Why a file cannot be taken apart any further.
#[derive(Debug, thiserror::Error)]
pub enum SplitError {
    #[error("cannot read on at byte {byte}: {source}")]
    Io { byte: u64, source: io::Error },
    #[error(
        "the file ends at byte {byte}, before the {inside} that began at byte {from} is closed"
    )]
    Truncated {
        byte: u64,
        from: u64,
        inside: &'static str,
    },
    #[error("at byte {byte}: {wanted} is expected, not {found}")]
    Unexpected {
        byte: u64,
        wanted: &'static str,
        found: String,
    },
    #[error("the text that begins at byte {from} is longer than {} MB: a bracket or a quotation mark may be left open", MAX_TEXT_BYTES >> 20)]
    TooLong { from: u64 },
}

#[derive(Clone, Copy, PartialEq)]
enum Stage {
    Start,
    /// Between the elements of `features`; the flag says whether one was read already.
    Features(bool),
    Done,
}

/// The features of a GeoJSON object, streamed.
pub struct Collection<R> {
    bytes: Bytes<R>,
    stage: Stage,
    envelope: Vec<u8>,
    has_features: bool,
    feature_from: u64,
}

impl<R: BufRead> Collection<R> {
    /// The object that `reader` begins with, a byte-order mark already taken off.
    pub fn new(reader: R) -> Collection<R> {
        Collection {
            bytes: Bytes {
                reader,
                position: 0,
            },
            stage: Stage::Start,
            envelope: Vec::new(),
            has_features: false,
            feature_from: 0,
        }
    }

    /// Puts the text of the next feature into `text`; false when there is none left. After an error nothing more comes.
    ///
    /// # Errors
    /// Where the brackets do not work out, or reading fails.
    pub fn next_feature(&mut self, text: &mut Vec<u8>) -> Result<bool, SplitError> {
        let stage = std::mem::replace(&mut self.stage, Stage::Done);
        text.clear();
        let at_feature = match stage {
            Stage::Start => {
                self.bytes.expect(b'{', "an object {")?;
                self.envelope.push(b'{');
                self.members(true)?
            }
            Stage::Features(between) => self.go_on(between)?,
            Stage::Done => false,
        };
        if at_feature {
            self.feature_from = self.bytes.take_value(text, "feature")?;
            self.stage = Stage::Features(true);
        }
        Ok(at_feature)
    }

    /// All members but `features`, as the text of an object; whole once [`Collection::next_feature`] has said false.
    pub fn envelope(&self) -> &[u8] {
        &self.envelope
    }

    /// Where the feature handed out last begins, bytes from the start.
    pub fn feature_from(&self) -> u64 {
        self.feature_from
    }

    /// Whether the object has a member `features`.
    pub fn has_features(&self) -> bool {
        self.has_features
    }

    /// From after the opening bracket or a comma between members: gathers members until the first feature (true) or the
    /// end (false).
    fn members(&mut self, first: bool) -> Result<bool, SplitError> {
        let mut first = first;
        loop {
            if self.bytes.peek_solid()? == Some(b'}') {
                return self.end();
            }
            if !first {
                self.bytes.expect(b',', "a comma or }")?;
                self.bytes.peek_solid()?;
            }
            first = false;
            let before = self.envelope.len();
            if before > 1 {
                self.envelope.push(b',');
            }
            let at = self.envelope.len();
            self.bytes.take_key(&mut self.envelope)?;
            let is_features = self.envelope.get(at..) == Some(b"\"features\"".as_slice());
            self.bytes.expect(b':', "a colon")?;
            if is_features && self.bytes.peek_solid()? == Some(b'[') {
                if self.has_features {
                    return Err(self.bytes.unexpected("only one member \"features\""));
                }
                self.envelope.truncate(before);
                self.bytes.bump(1);
                self.has_features = true;
                return self.go_on(false);
            }
            self.envelope.push(b':');
            self.bytes.take_value(&mut self.envelope, "member")?;
        }
    }

    /// Inside `features`: to the next element (true), or through the rest of the object (false).
    fn go_on(&mut self, between: bool) -> Result<bool, SplitError> {
        match self.bytes.peek_solid()? {
            Some(b']') => {
                self.bytes.bump(1);
                self.members(false)
            }
            Some(b',') if between => {
                self.bytes.bump(1);
                Ok(true)
            }
            _ if between => Err(self.bytes.unexpected("a comma or ] after a feature")),
            _ => Ok(true),
        }
    }

    fn end(&mut self) -> Result<bool, SplitError> {
        self.bytes.bump(1);
        self.envelope.push(b'}');
        match self.bytes.peek_solid()? {
            None => Ok(false),
            Some(_) => Err(self.bytes.unexpected("the end of the file")),
        }
    }
}

/// A reader that knows its position.
struct Bytes<R> {
    reader: R,
    position: u64,
}

impl<R: BufRead> Bytes<R> {
    fn chunk(&mut self) -> Result<&[u8], SplitError> {
        let byte = self.position;
        loop {
            // Asked twice, since the borrow of a chunk cannot be both tried and given away.
            match self.reader.fill_buf() {
                Ok(_) => break,
                Err(e) if e.kind() == io::ErrorKind::Interrupted => {}
                Err(source) => return Err(SplitError::Io { byte, source }),
            }
        }
        self.reader
            .fill_buf()
            .map_err(|source| SplitError::Io { byte, source })
    }

    fn bump(&mut self, n: usize) {
        self.reader.consume(n);
        self.position += n as u64;
    }

    /// The next byte that is not white space, left in place.
    fn peek_solid(&mut self) -> Result<Option<u8>, SplitError> {
        loop {
            let chunk = self.chunk()?;
            if chunk.is_empty() {
                return Ok(None);
            }
            let blank = chunk.iter().take_while(|b| is_blank(**b)).count();
            let solid = chunk.get(blank).copied();
            self.bump(blank);
            if solid.is_some() {
                return Ok(solid);
            }
        }
    }

    fn expect(&mut self, byte: u8, wanted: &'static str) -> Result<(), SplitError> {
        if self.peek_solid()? == Some(byte) {
            self.bump(1);
            Ok(())
        } else {
            Err(self.unexpected(wanted))
        }
    }

    fn unexpected(&mut self, wanted: &'static str) -> SplitError {
        let found = match self.peek_solid() {
            Err(e) => return e,
            Ok(None) => "the end of the file".to_owned(),
            Ok(Some(b)) => format!("\"{}\"", b.escape_ascii()),
        };
        SplitError::Unexpected {
            byte: self.position,
            wanted,
            found,
        }
    }

    fn take_key(&mut self, out: &mut Vec<u8>) -> Result<(), SplitError> {
        if self.peek_solid()? == Some(b'"') {
            self.take_value(out, "member name")?;
            Ok(())
        } else {
            Err(self.unexpected("a member name in quotation marks"))
        }
    }

    /// Appends the next JSON value to `out`, its brackets balanced and nothing else about it known; where it began.
    fn take_value(&mut self, out: &mut Vec<u8>, inside: &'static str) -> Result<u64, SplitError> {
        let first = self.peek_solid()?;
        let from = self.position;
        let (before, nested) = (out.len(), matches!(first, Some(b'{' | b'[' | b'"')));
        let mut scan = Scan::default();
        loop {
            let chunk = self.chunk()?;
            if chunk.is_empty() {
                let byte = self.position;
                return Err(SplitError::Truncated { byte, from, inside });
            }
            let (n, closed) = if nested {
                scan.run(chunk)
            } else {
                let n = chunk.iter().take_while(|b| !ends_scalar(**b)).count();
                (n, n < chunk.len())
            };
            out.extend_from_slice(chunk.get(..n).unwrap_or(chunk));
            self.bump(n);
            if out.len() > MAX_TEXT_BYTES {
                return Err(SplitError::TooLong { from });
            }
            if closed && out.len() == before {
                return Err(self.unexpected("a value"));
            }
            if closed {
                return Ok(from);
            }
        }
    }
}

fn is_blank(b: u8) -> bool {
    matches!(b, b' ' | b'\t' | b'\n' | b'\r')
}

fn ends_scalar(b: u8) -> bool {
    is_blank(b) || matches!(b, b',' | b']' | b'}' | b'{' | b'[' | b':' | b'"')
}

/// Where a walk through a value stands between two chunks.
#[derive(Default)]
struct Scan {
    depth: usize,
    in_string: bool,
    escaped: bool,
}

impl Scan {
    /// Walks on; how many bytes belong to the value, and whether it is closed with them.
    fn run(&mut self, chunk: &[u8]) -> (usize, bool) {
        for (i, &b) in chunk.iter().enumerate() {
            if self.in_string {
                if self.escaped {
                    self.escaped = false;
                } else if b == b'\\' {
                    self.escaped = true;
                } else if b == b'"' {
                    self.in_string = false;
                }
            } else {
                match b {
                    b'"' => self.in_string = true,
                    b'{' | b'[' => self.depth += 1,
                    b'}' | b']' => self.depth = self.depth.saturating_sub(1),
                    _ => continue,
                }
            }
            if self.depth == 0 && !self.in_string {
                return (i + 1, true);
            }
        }
        (chunk.len(), false)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use std::io::BufReader;

    /// The features and the envelope, or the error, read through a buffer of `size` bytes.
    fn split(text: &str, size: usize) -> (Vec<String>, Result<String, String>) {
        let mut collection = Collection::new(BufReader::with_capacity(size, text.as_bytes()));
        let (mut features, mut buf) = (Vec::new(), Vec::new());
        loop {
            match collection.next_feature(&mut buf) {
                Ok(true) => features.push(String::from_utf8_lossy(&buf).into_owned()),
                Ok(false) => break,
                Err(e) => return (features, Err(e.to_string())),
            }
        }
        let envelope = String::from_utf8_lossy(collection.envelope()).into_owned();
        (features, Ok(envelope))
    }

    #[test]
    fn takes_collections_apart() {
        #[track_caller]
        fn check(text: &str, features: &[&str], envelope: &str) {
            for size in [1, 2, 7, 1000] {
                let (got, rest) = split(text, size);
                assert_eq!(got, features);
                assert_eq!(rest.as_deref(), Ok(envelope));
            }
        }
        check("{}", &[], "{}");
        check(r#" {"features": [] } "#, &[], "{}");
        check(
            r#"{"type":"FeatureCollection", "features":[{"a":"}]\"{"} , 5,null], "b" : [1,{}]}"#,
            &[r#"{"a":"}]\"{"}"#, "5", "null"],
            r#"{"type":"FeatureCollection","b":[1,{}]}"#,
        );
        check(
            r#"{"type":"Polygon","coordinates":[[[1,2]]]}"#,
            &[],
            r#"{"type":"Polygon","coordinates":[[[1,2]]]}"#,
        );
        check(r#"{"features":7}"#, &[], r#"{"features":7}"#);
    }

    #[test]
    fn says_where_the_brackets_fail() {
        #[track_caller]
        fn check(text: &str, n_features: usize, words: &str) {
            for size in [1, 1000] {
                let (features, rest) = split(text, size);
                let error = rest.expect_err("a refusal");
                assert_eq!(features.len(), n_features, "{error}");
                assert!(error.contains(words), "{error}");
            }
        }
        check(
            "",
            0,
            "at byte 0: an object { is expected, not the end of the file",
        );
        check("[1]", 0, "not \"[\"");
        check(
            r#"{"features":[{"a":1},{"b""#,
            1,
            "the feature that began at byte 21",
        );
        check(
            r#"{"features":[{"a":1} {"b":1}]}"#,
            1,
            "at byte 21: a comma or ]",
        );
        check(r#"{"features":[{"a":1}"#, 1, "not the end of the file");
        check(r#"{"features":[{"a":1},]}"#, 1, "a value is expected");
        check(r#"{"features":[],"features":[]}"#, 0, "only one member");
        check(r#"{"features":[]} x"#, 0, "the end of the file is expected");
        check(r#"{"features":[]"#, 0, "a comma or }");
        check(r#"{features:[]}"#, 0, "quotation marks");
    }
}
