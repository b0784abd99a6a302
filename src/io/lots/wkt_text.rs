//! One lot from well-known text: POLYGON or MULTIPOLYGON in any case, heights left out, `SRID=..;` passed over.
//!
//! The crate `wkt` parses; before it, the text is checked for what it lets pass: nothing may follow the last bracket, and
//! only these two kinds reach it, since it goes down a nested collection without a limit.

use std::borrow::Cow;

use wkt::Wkt;
use wkt::types::Polygon;

use crate::geom::Point;
use crate::geom::validate::RawPolygon;
use crate::io::visible;

/// The polygons of a cell.
///
/// # Errors
/// A sentence that says what is wrong.
pub fn parse(cell: &[u8]) -> Result<Vec<RawPolygon>, String> {
    let text = std::str::from_utf8(cell)
        .map_err(|e| format!("the cell is not UTF-8 from byte {} on", e.valid_up_to()))?;
    let text = without_srid(text.trim());
    let word_end = text
        .find(|c: char| !c.is_ascii_alphabetic())
        .unwrap_or(text.len());
    let (word, body) = text.split_at(word_end);
    if !["POLYGON", "MULTIPOLYGON", "POLYGONZ", "MULTIPOLYGONZ"]
        .iter()
        .any(|known| word.eq_ignore_ascii_case(known))
    {
        return Err(match word {
            "" => "the cell holds no well-known text".to_owned(),
            _ => format!("the geometry is a {word}, not a POLYGON or MULTIPOLYGON"),
        });
    }
    let last = body.split_ascii_whitespace().next_back();
    if last.is_some_and(|word| word.eq_ignore_ascii_case("EMPTY")) {
        return Err(format!("the {word} is empty"));
    }
    check_brackets(body)?;
    let text = with_height_tag(text, word_end);
    let parts = match text.parse::<Wkt<f64>>() {
        Ok(Wkt::Polygon(p)) => vec![p],
        Ok(Wkt::MultiPolygon(m)) => m.into_inner().0,
        Ok(_) => return Err(format!("the {word} cannot be read")),
        Err(e) => return Err(format!("the {word} cannot be read: {e}")),
    };
    let with_rings = parts.iter().filter(|p| !p.rings().is_empty());
    let polygons: Vec<RawPolygon> = with_rings.map(raw).collect();
    if polygons.is_empty() {
        return Err(format!("the {word} is empty"));
    }
    match polygons
        .iter()
        .flat_map(|p| p.rings.iter().flatten())
        .find(|p| !p.is_finite())
    {
        Some(p) => Err(format!("the corner {}, {} is not finite", p.x, p.y)),
        None => Ok(polygons),
    }
}

fn without_srid(text: &str) -> &str {
    match text.split_once(';') {
        Some((srid, rest)) if srid.to_ascii_uppercase().starts_with("SRID=") => rest.trim_start(),
        _ => text,
    }
}

/// The outermost bracket must close with the last character and not before.
fn check_brackets(body: &str) -> Result<(), String> {
    let mut depth = 0usize;
    let last = body.len();
    for (i, b) in body.bytes().enumerate() {
        match b {
            b'(' => depth += 1,
            b')' if depth == 0 => return Err("a bracket is closed that was not opened".to_owned()),
            b')' => depth -= 1,
            _ => continue,
        }
        if depth == 0 && i + 1 < last {
            let rest: String = body
                .get(i + 1..)
                .unwrap_or_default()
                .chars()
                .take(20)
                .collect();
            return Err(format!("\"{}\" follows the last bracket", visible(&rest)));
        }
    }
    if depth > 0 {
        return Err("a bracket is left open: the text is cut off".to_owned());
    }
    Ok(())
}

/// The text with the tag Z that some writers leave out where corners have three numbers.
fn with_height_tag(text: &str, word_end: usize) -> Cow<'_, str> {
    let (word, body) = text.split_at(word_end);
    let untagged = body.trim_start().starts_with('(');
    let first = body
        .trim_start_matches(['(', ' '])
        .split([',', ')'])
        .next()
        .unwrap_or_default();
    if untagged && first.split_ascii_whitespace().count() == 3 {
        Cow::Owned(format!("{word} Z {body}"))
    } else {
        Cow::Borrowed(text)
    }
}

fn raw(polygon: &Polygon<f64>) -> RawPolygon {
    let ring = |ring: &wkt::types::LineString<f64>| {
        ring.coords().iter().map(|c| Point::new(c.x, c.y)).collect()
    };
    RawPolygon {
        rings: polygon.rings().iter().map(ring).collect(),
    }
}
