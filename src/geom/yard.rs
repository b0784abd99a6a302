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
            let (more, less) = (s_before.max(s_after), s_before.min(s_after));
            if more * along - less * lengths > more * reach {
                return false;
            }
        }
        (before, s_before) = (after, s_after);
    }
    true
}

#[cfg(test)]
mod tests {
    use super::super::test_shapes::{Dice, reversed, ring};
    use super::super::{Area, Polygon};
    use super::*;

    #[track_caller]
    fn check(ring: &Ring, setbacks_m: &[f64], i: usize, expected: [(f64, f64); 4]) {
        let yard = yard(ring, |k| setbacks_m[k], i).expect("the setback is positive");
        for (got, want) in yard.corners().iter().zip(expected) {
            let want = Point::new(want.0, want.1);
            assert!(got.distance(want) < 1e-12, "{yard:?} is not {expected:?}");
        }
    }

    /// An L: reflex at (10, 10), where segments 2 and 3 meet.
    fn l_shape() -> Ring {
        ring(&[
            (0.0, 0.0),
            (20.0, 0.0),
            (20.0, 10.0),
            (10.0, 10.0),
            (10.0, 20.0),
            (0.0, 20.0),
        ])
    }

    #[test]
    fn square_corners_end_at_the_segment() {
        let setbacks = [3.0, 1.0, 1.0, 1.0, 1.0, 1.0];
        check(
            &l_shape(),
            &setbacks,
            0,
            [(0.0, 0.0), (20.0, 0.0), (20.0, 3.0), (0.0, 3.0)],
        );
        assert_eq!(yard(&l_shape(), |_| 0.0, 0), None);
    }

    #[test]
    fn reflex_corners_run_on_to_the_meeting_point() {
        let s = [1.0, 1.0, 1.0, 2.0, 1.0, 1.0];
        check(
            &l_shape(),
            &s,
            2,
            [(20.0, 10.0), (10.0, 10.0), (8.0, 9.0), (20.0, 9.0)],
        );
        check(
            &l_shape(),
            &s,
            3,
            [(10.0, 10.0), (10.0, 20.0), (8.0, 20.0), (8.0, 9.0)],
        );
        // Never farther than twice the setback.
        let s = [1.0, 1.0, 1.0, 5.0, 1.0, 1.0];
        check(
            &l_shape(),
            &s,
            2,
            [(20.0, 10.0), (10.0, 10.0), (8.0, 9.0), (20.0, 9.0)],
        );
    }

    #[test]
    fn obtuse_corners_run_on_to_the_neighbour() {
        // 135 degrees at (10, 0): both sides go on by the setback.
        let house = ring(&[(0.0, 0.0), (10.0, 0.0), (20.0, 10.0), (0.0, 20.0)]);
        check(
            &house,
            &[3.0; 4],
            0,
            [(0.0, 0.0), (13.0, 0.0), (13.0, 3.0), (0.0, 3.0)],
        );
        // A corner in the midst of a straight line: twice the setback.
        let bent = ring(&[(0.0, 0.0), (10.0, 0.0), (30.0, 0.0), (0.0, 20.0)]);
        check(
            &bent,
            &[3.0; 4],
            0,
            [(0.0, 0.0), (16.0, 0.0), (16.0, 3.0), (0.0, 3.0)],
        );
        check(
            &bent,
            &[3.0; 4],
            1,
            [(4.0, 0.0), (30.0, 0.0), (30.0, 3.0), (4.0, 3.0)],
        );
    }

    #[test]
    fn holes_have_their_yards_outside() {
        let hole = reversed(&ring(&[(0.0, 0.0), (4.0, 0.0), (4.0, 4.0), (0.0, 4.0)]));
        // Segment 0 runs from (0, 4) to (4, 4); every corner of a hole is reflex.
        check(
            &hole,
            &[1.0; 4],
            0,
            [(0.0, 4.0), (4.0, 4.0), (5.0, 5.0), (-1.0, 5.0)],
        );
    }

    #[test]
    fn yards_that_meet_leave_the_lot_within_all_setback_lines() {
        let mut dice = Dice(7);
        let (mut met, mut apart) = (0, 0);
        for _ in 0..600 {
            let lot = convex_ring(&mut dice);
            let largest = 10f64.powf(dice.uniform(-1.0, 1.5));
            let same = dice.uniform(0.0, largest);
            let setbacks: Vec<f64> = (0..lot.len())
                .map(|_| match dice.below(0, 3) {
                    0 => same,
                    1 => 0.0,
                    _ => dice.uniform(0.0, largest),
                })
                .collect();
            let complete = is_complete(&lot, &setbacks, &mut dice);
            if yards_meet(&lot, |i| setbacks[i]) {
                met += 1;
                assert!(complete, "{lot:?} {setbacks:?}");
            } else if !complete {
                apart += 1;
            }
        }
        assert!(met > 100 && apart > 20, "both happen: {met} {apart}");
    }

    /// Whether, at sampled points of the lot, being behind some setback line and being in some yard is the same.
    fn is_complete(lot: &Ring, setbacks: &[f64], dice: &mut Dice) -> bool {
        const NEAR_M: f64 = 1e-9;
        let yards: Vec<Yard> = (0..lot.len())
            .filter_map(|i| yard(lot, |k| setbacks[k], i))
            .collect();
        let area = Area {
            parts: vec![Polygon {
                outer: lot.clone(),
                holes: Vec::new(),
            }],
        };
        (0..400).all(|_| {
            let p = dice.point_in(lot.bounds());
            let depths = lot.segments().zip(setbacks).map(|(s, setback)| {
                s.vector().unit().expect("has length").cross(p - s.a) - setback
            });
            let spare = depths.fold(f64::INFINITY, f64::min);
            let in_yard = yards.iter().any(|y| {
                let c = y.corners();
                (0..4).all(|k| orient(c[k], c[(k + 1) % 4], p) >= 0.0)
            });
            !area.contains(p) || spare.abs() < NEAR_M || in_yard == (spare < 0.0)
        })
    }

    /// Corners on an ellipse at random angles, some very near each other, some flat.
    fn convex_ring(dice: &mut Dice) -> Ring {
        let n = dice.below(3, 12);
        let mut angles: Vec<f64> = (0..n)
            .map(|_| dice.uniform(0.0, std::f64::consts::TAU))
            .collect();
        let near = angles[0] + 10f64.powf(dice.uniform(-4.0, -0.5));
        angles.push(near);
        angles.sort_by(f64::total_cmp);
        let (a, b) = (dice.uniform(5.0, 100.0), dice.uniform(5.0, 100.0));
        Ring::new(
            angles
                .iter()
                .map(|t| Point::new(a * t.cos(), b * t.sin()))
                .collect(),
        )
    }

    #[test]
    fn equal_setbacks_always_meet() {
        let straight = ring(&[(0.0, 0.0), (10.0, 0.0), (30.0, 0.0), (0.0, 20.0)]);
        assert!(yards_meet(&straight, |_| 0.1));
        assert!(yards_meet(&straight, |_| 0.0));
        assert!(!yards_meet(&straight, |i| [1.0, 2.0, 0.0, 0.0][i]));
    }
}
