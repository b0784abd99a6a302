//! Validation of what comes from outside, with every problem and its place, and the repairs that are safe.

use super::{Area, Point};

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

/// A segment of the input: from corner `segment` of ring `ring` (0 outer) of polygon `part`, all from 0, in file order.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SegmentId {
    pub part: u32,
    pub ring: u32,
    pub segment: u32,
}

/// A safe repair that was made.
#[derive(Clone, Debug, PartialEq)]
pub struct Repair {}

/// Something that makes the input no area, with its place.
#[derive(Clone, Debug, PartialEq)]
pub struct Problem {}

/// Checks polygons and makes an [`Area`] of them.
///
/// # Errors
/// Every problem that was found, each with its place.
pub fn validate(
    _raw: &[RawPolygon],
    _same: &dyn Fn(SegmentId, SegmentId) -> bool,
) -> Result<Validated, Vec<Problem>> {
    let _ = Point::ORIGIN;
    Err(Vec::new())
}
