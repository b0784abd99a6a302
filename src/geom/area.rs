//! Rings, polygons with holes, and areas of several parts, as they are once validated.
//!
//! A ring's corners are kept without repeating the first at the end. Outer rings run counter-clockwise and holes
//! clockwise, so the inside is always on the left. Whether that and simplicity hold is the business of
//! [`super::validate`]; the constructors here are for callers that know.

use super::{Bounds, Point, Segment, predicates};

/// A closed ring of at least three corners; segment i runs from corner i to the next.
#[derive(Clone, Debug, PartialEq)]
pub struct Ring {
    corners: Vec<Point>,
}

impl Ring {
    /// A ring from corners that are known to be distinct in sequence, the first not repeated.
    pub fn new(corners: Vec<Point>) -> Ring {
        debug_assert!(corners.len() >= 3, "a ring has at least three corners");
        Ring { corners }
    }

    pub fn corners(&self) -> &[Point] {
        &self.corners
    }

    pub fn len(&self) -> usize {
        self.corners.len()
    }

    /// Never true; there to go with [`Ring::len`].
    pub fn is_empty(&self) -> bool {
        self.corners.is_empty()
    }

    pub fn segment(&self, i: usize) -> Segment {
        let j = if i + 1 == self.corners.len() {
            0
        } else {
            i + 1
        };
        Segment::new(self.corners[i], self.corners[j])
    }

    pub fn segments(&self) -> impl ExactSizeIterator<Item = Segment> + '_ {
        (0..self.corners.len()).map(|i| self.segment(i))
    }

    /// Signed area, m²: positive when counter-clockwise. Summed about the first corner to keep digits.
    pub fn signed_area(&self) -> f64 {
        let o = self.corners[0];
        0.5 * self
            .segments()
            .map(|s| (s.a - o).cross(s.b - o))
            .sum::<f64>()
    }

    pub fn perimeter(&self) -> f64 {
        self.segments().map(Segment::length).sum()
    }

    pub fn bounds(&self) -> Bounds {
        Bounds::of(self.corners.iter().copied())
    }

    /// Whether the ring turns left or goes straight at every corner, exactly. For a simple ring: whether it is convex.
    pub fn is_convex(&self) -> bool {
        let n = self.corners.len();
        (0..n).all(|i| {
            predicates::orient(
                self.corners[i],
                self.corners[(i + 1) % n],
                self.corners[(i + 2) % n],
            ) >= 0.0
        })
    }
}

/// An outer ring and its holes.
#[derive(Clone, Debug, PartialEq)]
pub struct Polygon {
    pub outer: Ring,
    pub holes: Vec<Ring>,
}

impl Polygon {
    /// The outer ring, then the holes.
    pub fn rings(&self) -> impl Iterator<Item = &Ring> + '_ {
        std::iter::once(&self.outer).chain(&self.holes)
    }

    /// Area without the holes, m².
    pub fn area_m2(&self) -> f64 {
        self.rings().map(Ring::signed_area).sum()
    }
}

/// One or more polygons with disjoint insides.
#[derive(Clone, Debug, PartialEq)]
pub struct Area {
    pub parts: Vec<Polygon>,
}

impl Area {
    /// All rings: part by part, outer ring before holes.
    pub fn rings(&self) -> impl Iterator<Item = &Ring> + '_ {
        self.parts.iter().flat_map(Polygon::rings)
    }

    /// All segments, ring by ring in the order of [`Area::rings`].
    pub fn segments(&self) -> impl Iterator<Item = Segment> + '_ {
        self.rings().flat_map(Ring::segments)
    }

    pub fn n_segments(&self) -> usize {
        self.rings().map(Ring::len).sum()
    }

    pub fn area_m2(&self) -> f64 {
        self.parts.iter().map(Polygon::area_m2).sum()
    }

    pub fn bounds(&self) -> Bounds {
        self.parts
            .iter()
            .map(|p| p.outer.bounds())
            .fold(Bounds::EMPTY, Bounds::union)
    }

    /// Whether the area is one convex polygon without holes.
    pub fn is_convex(&self) -> bool {
        matches!(self.parts.as_slice(), [only] if only.holes.is_empty() && only.outer.is_convex())
    }

    /// Whether p lies inside: exact, by the parity of ray crossings. On the boundary either answer may come. Cost O(n).
    pub fn contains(&self, p: Point) -> bool {
        self.segments()
            .filter(|s| predicates::ray_crosses(s.a, s.b, p))
            .count()
            % 2
            == 1
    }
}
