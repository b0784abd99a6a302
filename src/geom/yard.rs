//! Yards in the parallel reading: what each setback keeps open, as setback lines are drawn.
//!
//! The yard of a segment with setback s is the rectangle of depth s on it, its far side run on past an end where that is
//! called for: at a reflex corner to where both neighbours' parallels meet, at an obtuse one (with the near side) by
//! s tan(angle - 90 degrees), in neither case by more than [`RUN_ON_LIMIT`] times the setback. Convention: the inside of a
//! ring lies on its left, so outer rings and holes are treated alike.

use super::{Point, Ring, Segment, Vec2, predicates::orient};

/// How many setbacks a yard may run on past the end of its segment. Twice: corners flatter than 153 degrees are the chords
/// of a curve or a survey's noise, and running on to the end there would sweep across the lot.
pub const RUN_ON_LIMIT: f64 = 2.0;
/// Cross product of two unit normals below which their parallels count as one line, with nowhere to meet. A thousandth of it
/// would be rounding; a thousand times as much still puts the meeting point far beyond [`RUN_ON_LIMIT`], unless the setbacks
/// differ by less than the same share, when it hardly runs on at all.
const PARALLEL: f64 = 1e-12;

/// One yard: a convex polygon of four corners, counter-clockwise, the segment's side first.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Yard {
    corners: [Point; 4],
}

impl Yard {
    pub fn corners(&self) -> &[Point; 4] {
        &self.corners
    }
}

/// How far the near and the far side go past one end, m.
#[derive(Clone, Copy)]
struct RunOn {
    near: f64,
    far: f64,
}

impl RunOn {
    const NONE: RunOn = RunOn {
        near: 0.0,
        far: 0.0,
    };
}

/// The yard of segment `i` of a ring whose segments have the setbacks that `setback_m` gives; `None` where it is 0.
///
/// Method: the module's rule. Precondition: a valid ring, setbacks finite and not negative. Cost O(1).
pub fn yard(ring: &Ring, setback_m: impl Fn(usize) -> f64, i: usize) -> Option<Yard> {
    let s = setback_m(i);
    if s <= 0.0 {
        return None;
    }
    let n = ring.len();
    let after = if i + 1 == n { 0 } else { i + 1 };
    let before = if i == 0 { n - 1 } else { i - 1 };
    let Segment { a, b } = ring.segment(i);
    let d = (b - a).unit()?;
    let inward = d.left();

    let next = ring.segment(after);
    let at_b = if orient(a, b, next.b) < 0.0 {
        let other = next.vector().unit()?.left();
        to_meeting(d, inward, s, other, setback_m(after))
    } else {
        past_obtuse(d, inward, s, next.vector().unit()?)
    };
    let last = ring.segment(before);
    let at_a = if orient(last.a, a, b) < 0.0 {
        let other = last.vector().unit()?.left();
        to_meeting(-d, inward, s, other, setback_m(before))
    } else {
        past_obtuse(-d, inward, s, -last.vector().unit()?)
    };
    let depth = inward * s;
    Some(Yard {
        corners: [
            a - d * at_a.near,
            b + d * at_b.near,
            b + d * at_b.far + depth,
            a - d * at_a.far + depth,
        ],
    })
}

/// At a reflex corner: the far side goes on to where it meets the neighbour's parallel, which has the inward normal
/// `other` and the setback `other_m`.
fn to_meeting(outward: Vec2, inward: Vec2, s: f64, other: Vec2, other_m: f64) -> RunOn {
    let det = inward.cross(other);
    if det.abs() < PARALLEL {
        return RunOn::NONE;
    }
    // The point p with inward . p = s and other . p = other_m, seen from the corner.
    let meeting = Vec2::new(
        s * other.y - other_m * inward.y,
        other_m * inward.x - s * other.x,
    ) * (1.0 / det);
    RunOn {
        near: 0.0,
        far: meeting.dot(outward).clamp(0.0, RUN_ON_LIMIT * s),
    }
}

/// At any other corner: both sides go on to the neighbour, which leaves the corner in direction `beyond`.
fn past_obtuse(outward: Vec2, inward: Vec2, s: f64, beyond: Vec2) -> RunOn {
    let (along, inw) = (beyond.dot(outward), beyond.dot(inward));
    if along <= 0.0 {
        return RunOn::NONE;
    }
    let limit = RUN_ON_LIMIT * s;
    let reach = if inw > 0.0 {
        (s * along / inw).min(limit)
    } else {
        limit
    };
    RunOn {
        near: reach,
        far: reach,
    }
}

/// Whether the yards of a convex ring keep open everything that lies behind a setback line, so that what is left is the
/// lot within all its setback lines.
///
/// True when at every corner the two setback lines meet no farther past it than either yard runs on. Why that is enough: let
/// p, in the lot and behind the line of segment i, be in no yard. Then it lies past an end of yard i, say the far one; so
/// it is past the meeting point too, hence also behind the next line, and not past that segment's near end; and being in
/// no yard, it is past its far end. Going on round, p is past the far end of every segment, so that its distance to
/// the corners shrinks all the way round and back to where it began, which cannot be. The other way, no yard of a
/// convex ring reaches across its own line.
///
/// Precondition: a convex ring, setbacks finite and not negative. False says nothing about what the yards keep open.
/// Cost O(n), without trigonometry.
pub fn yards_meet(ring: &Ring, setback_m: impl Fn(usize) -> f64) -> bool {
    let n = ring.len();
    let mut before = ring.segment(n - 1).vector();
    let mut s_before = setback_m(n - 1);
    for i in 0..n {
        let (after, s_after) = (ring.segment(i).vector(), setback_m(i));
        let reach = RUN_ON_LIMIT * before.cross(after);
        let along = before.dot(after);
        // With t the turn, one line meets the other (s cos t - s') / sin t past the corner. It cannot reach past a yard that
        // runs on in full, nor can it at all when both setbacks are the same.
        if along > reach && s_before != s_after {
            let lengths = (before.length2() * after.length2()).sqrt();
            let (s, t) = (s_before.max(s_after), s_before.min(s_after));
            if s * along - t * lengths > s * reach {
                return false;
            }
        }
        (before, s_before) = (after, s_after);
    }
    true
}
