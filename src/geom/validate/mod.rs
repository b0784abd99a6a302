//! Validation of what comes from outside, with every problem and its place, and the repairs that are safe.
//!
//! Each ring is first cleaned by itself ([`clean`]): closed, repeated and collinear corners dropped, turned the right way
//! round. Then all rings are looked at together ([`rings`]): where their segments meet ([`meetings`]), and what lies inside
//! what. Rules as in OGC Simple Feature Access (OGC 06-103r4, section 6.1.11), with three departures: collinear corners go,
//! orientation is repaired, and every ring that touches itself is refused. Decisions are exact; the coordinates of a crossing
//! are rounded.

mod clean;
mod meetings;
mod problem;
mod rings;
#[cfg(test)]
mod tests;

use super::{Area, Point, Polygon};
use clean::CleanRing;
pub use problem::{Place, Problem, Repair, RingId, SegmentId};
use rings::Segments;

/// One polygon as it was read: the outer ring first, then holes, each with or without its closing corner.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct RawPolygon {
    pub rings: Vec<Vec<Point>>,
}

/// An area that is safe to use, what was repaired on the way, and where its segments came from.
#[derive(Clone, Debug)]
pub struct Validated {
    pub area: Area,
    pub repairs: Vec<Repair>,
    /// For each segment in the order of [`Area::segments`]: which segment of the input it was (the first, where collinear
    /// ones were joined).
    pub sources: Vec<SegmentId>,
}

/// Checks polygons and makes an [`Area`] of them.
///
/// `same` says of two neighbouring segments on one line whether they may be joined, so that the corner between them goes.
/// Rings come back with their first kept corner first, also when turned round.
///
/// Method: see the module. Cost for n corners: n² up to about twenty, beyond about n log n for rings as surveyed, n² for
/// rings that fold over themselves everywhere, until the cap on counted meetings is reached.
///
/// # Errors
/// Every problem that was found, each with its place; of meetings between segments the first hundred.
pub fn validate(
    raw: &[RawPolygon],
    same: &dyn Fn(SegmentId, SegmentId) -> bool,
) -> Result<Validated, Vec<Problem>> {
    let mut problems = Vec::new();
    let mut repairs = Vec::new();
    let mut sources = Vec::with_capacity(raw.iter().flat_map(|p| &p.rings).map(Vec::len).sum());
    let mut clean: Vec<CleanRing> = Vec::with_capacity(raw.len());
    if raw.is_empty() {
        problems.push(Problem::Empty);
    }
    for (part, polygon) in raw.iter().enumerate() {
        if polygon.rings.is_empty() {
            problems.push(Problem::NoRings { part: part as u32 });
        }
        for (ring, corners) in polygon.rings.iter().enumerate() {
            let id = RingId {
                part: part as u32,
                ring: ring as u32,
            };
            let mut cleaner = clean::Cleaner {
                id,
                same,
                problems: &mut problems,
                repairs: &mut repairs,
                sources: &mut sources,
            };
            if let Some(ring) = cleaner.ring(corners) {
                clean.push(ring);
            }
        }
    }
    rings::judge(&Segments::of(&clean, &sources), &mut problems);
    if !problems.is_empty() {
        return Err(problems);
    }
    let mut parts: Vec<Polygon> = Vec::with_capacity(raw.len());
    for CleanRing { id, ring, .. } in clean {
        match parts.last_mut() {
            Some(part) if id.ring > 0 => part.holes.push(ring),
            _ => parts.push(Polygon {
                outer: ring,
                holes: Vec::new(),
            }),
        }
    }
    Ok(Validated {
        area: Area { parts },
        repairs,
        sources,
    })
}
