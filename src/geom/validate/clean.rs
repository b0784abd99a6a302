//! One ring by itself: coordinates in range, closed, no repeated or needless corner, no spike, the right way round.

use super::super::{
    Point, Ring,
    predicates::{on_segment, orient},
};
use super::{Place, Problem, Repair, RingId, SegmentId};

/// Largest coordinate, m. National grids reach 1e7 m and the Earth is 4e7 m round; doubles are 1.5e-8 m apart here, and ten
/// times farther out the gap would come near the 1e-6 m to which the program is accountable.
pub const COORDINATE_MAX_M: f64 = 1e8;
/// Smallest coordinate that is not 0, m: products of the exact predicates stay far from underflow, which begins to cost
/// them digits near 1e-120. Nothing measured is that small.
pub const COORDINATE_MIN_M: f64 = 1e-100;

/// A ring that is fine by itself.
pub(super) struct CleanRing {
    pub id: RingId,
    pub ring: Ring,
    /// Where its first corner was in the input.
    pub first_corner: u32,
}

/// Cleans rings one after the other; `sources` grows with the segments kept.
pub(super) struct Cleaner<'a> {
    pub id: RingId,
    pub same: &'a dyn Fn(SegmentId, SegmentId) -> bool,
    pub problems: &'a mut Vec<Problem>,
    pub repairs: &'a mut Vec<Repair>,
    pub sources: &'a mut Vec<SegmentId>,
}

impl Cleaner<'_> {
    /// The ring as it may be used, and its sources appended; or its problems reported and nothing appended.
    pub(super) fn ring(&mut self, raw: &[Point]) -> Option<CleanRing> {
        if u32::try_from(raw.len()).is_err() {
            self.problems.push(Problem::TooLarge(self.id));
            return None;
        }
        let n_repairs = self.repairs.len();
        let first_source = self.sources.len();
        let ring = self.all_in_range(raw).then(|| self.distinct(raw)).flatten();
        let ring = ring.and_then(|corners| self.without_collinear(corners, first_source));
        match ring {
            Some(mut corners) => {
                let first_corner = self.sources[first_source].segment;
                self.turn_round(&mut corners, first_source);
                Some(CleanRing {
                    id: self.id,
                    ring: Ring::new(corners),
                    first_corner,
                })
            }
            None => {
                self.sources.truncate(first_source);
                self.repairs.truncate(n_repairs);
                None
            }
        }
    }

    fn place(&self, corner: usize, at: Point) -> Place {
        Place {
            ring: self.id,
            corner: corner as u32,
            at,
        }
    }

    fn source(&self, segment: usize) -> SegmentId {
        SegmentId {
            part: self.id.part,
            ring: self.id.ring,
            segment: segment as u32,
        }
    }

    fn all_in_range(&mut self, raw: &[Point]) -> bool {
        let fits = |x: f64| x == 0.0 || (COORDINATE_MIN_M..=COORDINATE_MAX_M).contains(&x.abs());
        if raw.iter().all(|p| fits(p.x) && fits(p.y)) {
            return true;
        }
        for (i, &p) in raw.iter().enumerate() {
            let place = self.place(i, p);
            if !p.is_finite() {
                self.problems.push(Problem::NotFinite(place));
            } else if !(fits(p.x) && fits(p.y)) {
                self.problems.push(Problem::OutOfRange(place));
            }
        }
        false
    }

    /// The corners without the closing one and without repetitions; of several at one place the last stays, since the
    /// segment that leaves it has length.
    fn distinct(&mut self, raw: &[Point]) -> Option<Vec<Point>> {
        let (closed, open) = match raw {
            [first, between @ .., last] if first == last => (true, 1 + between.len()),
            _ => (false, raw.len()),
        };
        let open = &raw[..open];
        let mut corners = Vec::with_capacity(open.len());
        for (i, &p) in open.iter().enumerate() {
            let after = if i + 1 == open.len() { 0 } else { i + 1 };
            if p == open[after] && open.len() > 1 {
                let repeated = self.place(if i + 1 < raw.len() { i + 1 } else { 0 }, p);
                self.repairs.push(Repair::RepeatedCorner(repeated));
            } else {
                corners.push(p);
                let source = self.source(i);
                self.sources.push(source);
            }
        }
        let distinct = match corners.as_slice() {
            [] => usize::from(!open.is_empty()),
            [a, rest @ ..] if rest.iter().all(|b| rest[0] == *b || a == b) => {
                1 + usize::from(!rest.is_empty())
            }
            _ => 3,
        };
        if distinct < 3 {
            self.problems.push(Problem::TooFewCorners {
                ring: self.id,
                distinct,
                first: raw.first().map(|&p| self.place(0, p)),
            });
            return None;
        }
        if let (false, Some(&last)) = (closed, raw.last()) {
            let last = self.place(raw.len() - 1, last);
            self.repairs.push(Repair::Closed(last));
        }
        Some(corners)
    }

    /// Drops corners on the straight line between their neighbours where `same` allows it, and reports spikes.
    fn without_collinear(
        &mut self,
        mut corners: Vec<Point>,
        first_source: usize,
    ) -> Option<Vec<Point>> {
        let n = corners.len();
        let mut kept = 0;
        let mut n_straight = 0;
        let n_problems = self.problems.len();
        let mut before = (corners[n - 1], self.sources[first_source + n - 1]);
        let start = corners[0];
        for i in 0..n {
            let (at, source) = (corners[i], self.sources[first_source + i]);
            let next = if i + 1 == n { start } else { corners[i + 1] };
            if orient(before.0, at, next) == 0.0 {
                n_straight += 1;
                let place = self.place(source.segment as usize, at);
                if !on_segment(before.0, next, at) {
                    self.problems.push(Problem::Spike(place));
                } else if (self.same)(before.1, source) {
                    self.repairs.push(Repair::CollinearCorner(place));
                    continue;
                }
            }
            corners[kept] = at;
            self.sources[first_source + kept] = source;
            kept += 1;
            before = (at, source);
        }
        if n_straight == n || kept < 3 {
            self.problems.truncate(n_problems);
            let first = self.place(0, start);
            self.problems.push(Problem::ZeroArea(first));
        }
        if self.problems.len() > n_problems {
            return None;
        }
        corners.truncate(kept);
        self.sources.truncate(first_source + kept);
        Some(corners)
    }

    /// Turns the ring round where the inside would be on its right. The first corner stays the first.
    fn turn_round(&mut self, corners: &mut [Point], first_source: usize) {
        if is_counter_clockwise(corners) == (self.id.ring == 0) {
            return;
        }
        corners[1..].reverse();
        self.sources[first_source..].reverse();
        self.repairs.push(Repair::Turned(self.id));
    }
}

/// Whether a simple ring runs counter-clockwise, decided exactly at its leftmost corner (the lowest of several), which is
/// convex.
fn is_counter_clockwise(corners: &[Point]) -> bool {
    let n = corners.len();
    let leftmost = (0..n)
        .min_by(|&i, &j| {
            let (p, q) = (corners[i], corners[j]);
            p.x.total_cmp(&q.x).then(p.y.total_cmp(&q.y))
        })
        .unwrap_or(0);
    let before = corners[(leftmost + n - 1) % n];
    let after = corners[(leftmost + 1) % n];
    orient(before, corners[leftmost], after) > 0.0
}
