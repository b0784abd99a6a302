//! What can be wrong with polygons and what can be repaired, each with its place, as sentences.
//!
//! Parts, rings, segments and corners are numbered from 0 here, in file order, and from 1 in the sentences.

use std::fmt;

use thiserror::Error;

use super::super::Point;
use super::clean::{COORDINATE_MAX_M, COORDINATE_MIN_M};

/// A ring of the input: ring `ring` (0 outer) of polygon `part`, both from 0, in file order.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct RingId {
    pub part: u32,
    pub ring: u32,
}

/// A segment of the input: from corner `segment` of ring `ring` (0 outer) of polygon `part`, all from 0, in file order.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash)]
pub struct SegmentId {
    pub part: u32,
    pub ring: u32,
    pub segment: u32,
}

impl SegmentId {
    pub fn ring_id(self) -> RingId {
        RingId {
            part: self.part,
            ring: self.ring,
        }
    }
}

/// A corner of the input, from 0 in file order, and its coordinates as given.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Place {
    pub ring: RingId,
    pub corner: u32,
    pub at: Point,
}

impl fmt::Display for RingId {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        match self.ring {
            0 => write!(f, "the outer ring of part {}", self.part + 1),
            hole => write!(f, "hole {hole} of part {}", self.part + 1),
        }
    }
}

impl fmt::Display for SegmentId {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        write!(f, "segment {} of {}", self.segment + 1, self.ring_id())
    }
}

impl fmt::Display for Place {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        write!(
            f,
            "corner {} of {}, at {}",
            self.corner + 1,
            self.ring,
            Xy(self.at)
        )
    }
}

/// Coordinates to the millimetre.
struct Xy(Point);

impl fmt::Display for Xy {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        write!(f, "({:.3}, {:.3})", self.0.x, self.0.y)
    }
}

fn out_of_range(place: &Place) -> String {
    format!(
        "A coordinate is larger than {COORDINATE_MAX_M:e} m, or not 0 and smaller than {COORDINATE_MIN_M:e} m: {place}."
    )
}

/// A safe repair that was made.
#[derive(Clone, Debug, PartialEq)]
pub enum Repair {
    /// The ring did not end where it began; the last corner is given.
    Closed(Place),
    /// The corner was at the same place as the one before.
    RepeatedCorner(Place),
    /// The corner was on the straight line between its neighbours.
    CollinearCorner(Place),
    /// An outer ring ran clockwise or a hole counter-clockwise.
    Turned(RingId),
}

impl fmt::Display for Repair {
    fn fmt(&self, f: &mut fmt::Formatter) -> fmt::Result {
        match self {
            Repair::Closed(place) => write!(f, "Closed {}, after {place}.", place.ring),
            Repair::RepeatedCorner(place) => {
                write!(f, "Left out {place}: it repeats the one before.")
            }
            Repair::CollinearCorner(place) => write!(
                f,
                "Left out {place}: it is on the straight line between its neighbours."
            ),
            Repair::Turned(ring) => write!(f, "Turned {ring} the other way round."),
        }
    }
}

/// Something that makes the input no area, with its place.
#[derive(Clone, Debug, Error, PartialEq)]
pub enum Problem {
    #[error("There is no polygon.")]
    Empty,
    #[error("Part {} has no ring.", part + 1)]
    NoRings { part: u32 },
    #[error("Part {} has more corners than can be numbered.", .0.part + 1)]
    TooLarge(RingId),
    #[error("A coordinate is not a finite number: {0}.")]
    NotFinite(Place),
    #[error("{}", out_of_range(.0))]
    OutOfRange(Place),
    #[error("There are only {distinct} different corners in {ring}; an area needs three.")]
    TooFewCorners {
        ring: RingId,
        distinct: usize,
        /// The first corner, where there is one.
        first: Option<Place>,
    },
    #[error("All corners are on one straight line, so there is no area: {0}.")]
    ZeroArea(Place),
    #[error("The boundary turns back on itself: {0}.")]
    Spike(Place),
    #[error("The boundary crosses itself at {}: {a} and {b}.", Xy(*.at))]
    SelfCrossing {
        a: SegmentId,
        b: SegmentId,
        at: Point,
    },
    #[error("The boundary touches itself at {}: {a} and {b}.", Xy(*.at))]
    SelfTouching {
        a: SegmentId,
        b: SegmentId,
        at: Point,
    },
    #[error("The boundary runs along itself from {}: {a} and {b}.", Xy(*.at))]
    SelfOverlap {
        a: SegmentId,
        b: SegmentId,
        at: Point,
    },
    #[error("Two rings run into each other at {}: {a} and {b}.", Xy(*.at))]
    RingsCross {
        a: SegmentId,
        b: SegmentId,
        at: Point,
    },
    #[error("Two rings share a line from {}: {a} and {b}.", Xy(*.at))]
    RingsAlong {
        a: SegmentId,
        b: SegmentId,
        at: Point,
    },
    #[error("Rings that touch cut the inside of part {} apart at {}.", part + 1, Xy(*.at))]
    InsideCutApart { part: u32, at: Point },
    #[error("A hole lies outside the outer ring: {0}.")]
    HoleOutside(Place),
    #[error("A hole lies inside {outer}: {inner}.")]
    HolesNested { outer: RingId, inner: Place },
    #[error("Part {} overlaps part {}: {inner}, lies inside it.", inner.ring.part + 1, part + 1)]
    PartsOverlap { part: u32, inner: Place },
    #[error("The boundary meets itself at {}{count} more places.", if *.is_all { "" } else { "no fewer than " })]
    MoreMeetings { count: usize, is_all: bool },
}

impl Problem {
    /// Where to look, when it is at one place.
    pub fn at(&self) -> Option<Point> {
        match self {
            Problem::Empty
            | Problem::NoRings { .. }
            | Problem::TooLarge(_)
            | Problem::MoreMeetings { .. } => None,
            Problem::TooFewCorners { first, .. } => first.map(|place| place.at),
            Problem::NotFinite(place)
            | Problem::OutOfRange(place)
            | Problem::ZeroArea(place)
            | Problem::Spike(place)
            | Problem::HoleOutside(place) => Some(place.at),
            Problem::HolesNested { inner, .. } | Problem::PartsOverlap { inner, .. } => {
                Some(inner.at)
            }
            Problem::SelfCrossing { at, .. }
            | Problem::SelfTouching { at, .. }
            | Problem::SelfOverlap { at, .. }
            | Problem::RingsCross { at, .. }
            | Problem::RingsAlong { at, .. }
            | Problem::InsideCutApart { at, .. } => Some(*at),
        }
    }
}
