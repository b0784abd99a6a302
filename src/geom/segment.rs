//! Straight segments: nearest point and distance.

use super::{Point, Vec2, predicates::side};
use std::cmp::Ordering;

/// Most segments that [`Segment::nearest_of`] looks at.
pub const MOST_IN_RUN: usize = 8;

/// The closed segment from `a` to `b`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Segment {
    pub a: Point,
    pub b: Point,
}

impl Segment {
    pub const fn new(a: Point, b: Point) -> Self {
        Segment { a, b }
    }

    pub fn vector(self) -> Vec2 {
        self.b - self.a
    }

    pub fn length(self) -> f64 {
        self.vector().length()
    }

    /// The point of the segment that is nearest to p; `a` where the segment has no length.
    pub fn nearest(self, p: Point) -> Point {
        let d = self.vector();
        let along = (p - self.a).dot(d);
        let length2 = d.length2();
        if along <= 0.0 || length2 == 0.0 {
            self.a
        } else if along >= length2 {
            self.b
        } else {
            self.a + d * (along / length2)
        }
    }

    /// Squared distance from p, m².
    pub fn distance2(self, p: Point) -> f64 {
        let (d, v) = (self.vector(), p - self.a);
        let along = v.dot(d);
        let length2 = d.length2();
        if along <= 0.0 || length2 == 0.0 {
            v.length2()
        } else if along >= length2 {
            p.distance2(self.b)
        } else {
            let across = d.cross(v);
            across * across / length2
        }
    }

    pub fn distance(self, p: Point) -> f64 {
        self.distance2(p).sqrt()
    }

    /// The nearest of a short run of segments, as squared distance and index; `None` of an empty run. One formula for all
    /// cases, so that it runs without a branch; the distances are those of [`Segment::distance2`] up to rounding.
    pub fn nearest_of(run: &[Segment], p: Point) -> Option<(f64, usize)> {
        let mut distances2 = [f64::INFINITY; MOST_IN_RUN];
        for (slot, s) in distances2.iter_mut().zip(run) {
            let (d, v) = (s.vector(), p - s.a);
            let t = v.dot(d) / d.length2();
            let t = if t > 0.0 { t } else { 0.0 };
            let t = if t < 1.0 { t } else { 1.0 };
            *slot = (v - d * t).length2();
        }
        let mut nearest = None;
        let mut best2 = f64::INFINITY;
        for (i, &distance2) in distances2[..run.len().min(MOST_IN_RUN)].iter().enumerate() {
            if distance2 < best2 {
                (best2, nearest) = (distance2, Some((distance2, i)));
            }
        }
        nearest
    }

    /// Where the two closed segments meet, exactly decided, the place itself rounded: `None` where they do not; for
    /// segments on one line, one of the shared points.
    pub fn meets(self, other: Segment) -> Option<Point> {
        let (a, b, c, d) = (self.a, self.b, other.a, other.b);
        let (sc, sd) = (side(a, b, c), side(a, b, d));
        let (sa, sb) = (side(c, d, a), side(c, d, b));
        if sc == Ordering::Equal && sd == Ordering::Equal {
            let holds = |s: Segment, p: Point| super::predicates::on_segment(s.a, s.b, p);
            return [c, d]
                .into_iter()
                .find(|&p| holds(self, p))
                .or_else(|| [a, b].into_iter().find(|&p| holds(other, p)));
        }
        if (sc == sd && sc != Ordering::Equal) || (sa == sb && sa != Ordering::Equal) {
            return None;
        }
        for (s, p) in [(sc, c), (sd, d), (sa, a), (sb, b)] {
            if s == Ordering::Equal {
                return Some(p);
            }
        }
        let (u, v) = (self.vector(), other.vector());
        let t = (c - a).cross(v) / u.cross(v);
        Some(a.lerp(b, t.clamp(0.0, 1.0)))
    }
}
