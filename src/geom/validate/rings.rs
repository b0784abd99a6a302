//! Clean rings looked at together: where they meet, what lies inside what, and whether the inside hangs together.

use super::super::{
    Bounds, Point, Segment,
    predicates::{orient, ray_crosses, side},
};
use super::clean::CleanRing;
use super::meetings::near_pairs;
use super::{Place, Problem, RingId, SegmentId};
use std::cmp::Ordering;
use std::ops::Range;

/// How many meetings of segments are reported one by one; more would bury the rest.
const REPORTED: usize = 100;
/// How many are counted before the search ends: a scribble of n segments can have n² of them.
const COUNTED: usize = 10_000;

/// All segments of the clean rings, and which ring they are of.
pub(super) struct Segments<'a> {
    segments: Vec<Segment>,
    sources: &'a [SegmentId],
    rings: Vec<RingRun>,
}

/// One ring's stretch of the segments.
struct RingRun {
    id: RingId,
    first_corner: u32,
    range: Range<usize>,
    bounds: Bounds,
}

impl<'a> Segments<'a> {
    pub(super) fn of(rings: &[CleanRing], sources: &'a [SegmentId]) -> Segments<'a> {
        let mut segments = Vec::with_capacity(sources.len());
        let mut runs = Vec::with_capacity(rings.len());
        for CleanRing {
            id,
            ring,
            first_corner,
        } in rings
        {
            let start = segments.len();
            segments.extend(ring.segments());
            runs.push(RingRun {
                id: *id,
                first_corner: *first_corner,
                range: start..segments.len(),
                bounds: ring.bounds(),
            });
        }
        Segments {
            segments,
            sources,
            rings: runs,
        }
    }

    /// Index of the ring that a segment is of.
    fn ring_of(&self, segment: usize) -> usize {
        self.rings.partition_point(|ring| ring.range.end <= segment)
    }

    /// The neighbours of the ring's place `at`, which is on the segment and not its end.
    fn around(&self, segment: usize, at: Point) -> [Point; 3] {
        let s = self.segments[segment];
        if at != s.a {
            return [s.a, at, s.b];
        }
        let range = &self.rings[self.ring_of(segment)].range;
        let before = if segment == range.start {
            range.end - 1
        } else {
            segment - 1
        };
        [self.segments[before].a, at, s.b]
    }

    fn place(&self, ring: &RingRun) -> Place {
        Place {
            ring: ring.id,
            corner: ring.first_corner,
            at: self.segments[ring.range.start].a,
        }
    }

    /// Whether p lies inside a ring, exactly; p must not be on it.
    fn encloses(&self, ring: &RingRun, p: Point) -> bool {
        ring.bounds.contains(p)
            && self.segments[ring.range.clone()]
                .iter()
                .filter(|s| ray_crosses(s.a, s.b, p))
                .count()
                % 2
                == 1
    }
}

/// How two segments meet.
#[derive(Clone, Copy, PartialEq)]
enum Kind {
    Crossing,
    /// At an end of one of them.
    Touching,
    /// On more than a point.
    Along,
}

/// Two rings that touch at a point as they may.
struct Touch {
    rings: [usize; 2],
    at: Point,
}

/// Reports what is wrong with the rings together.
pub(super) fn judge(all: &Segments, problems: &mut Vec<Problem>) {
    let mut touches = Vec::new();
    let mut met: Vec<[usize; 2]> = Vec::new();
    let mut n_met = 0;
    near_pairs(&all.segments, &mut |i, j| {
        let Some((problem, rings)) = meeting(all, i, j, &mut touches) else {
            return true;
        };
        n_met += 1;
        if n_met <= REPORTED {
            problems.push(problem);
        }
        if rings[0] != rings[1] && met.last() != Some(&rings) {
            met.push(rings);
        }
        n_met < COUNTED
    });
    if n_met > REPORTED {
        problems.push(Problem::MoreMeetings {
            count: n_met - REPORTED,
            is_all: n_met < COUNTED,
        });
    }
    if all.rings.len() > 1 && n_met < COUNTED {
        met.extend(touches.iter().map(|touch| touch.rings));
        met.sort_unstable();
        judge_nesting(all, &met, problems);
        judge_touches(all, touches, problems);
    }
}

/// What is wrong where segments i < j meet, and their rings; touching as it may be goes to `touches`.
fn meeting(
    all: &Segments,
    i: usize,
    j: usize,
    touches: &mut Vec<Touch>,
) -> Option<(Problem, [usize; 2])> {
    let (s, t) = (all.segments[i], all.segments[j]);
    let rings = [all.ring_of(i), all.ring_of(j)];
    let range = &all.rings[rings[0]].range;
    // Neighbours in a ring share a corner and nothing else, since the ring has no spikes.
    if rings[0] == rings[1] && (j == i + 1 || (i == range.start && j + 1 == range.end)) {
        return None;
    }
    let (kind, at) = how_they_meet(s, t)?;
    // Of the segments that share a place, only those that start there or pass it report it.
    if kind == Kind::Touching && (at == s.b || at == t.b) {
        return None;
    }
    let (a, b) = (all.sources[i], all.sources[j]);
    let problem = match (rings[0] == rings[1], kind) {
        (true, Kind::Crossing) => Problem::SelfCrossing { a, b, at },
        (true, Kind::Touching) => Problem::SelfTouching { a, b, at },
        (true, Kind::Along) => Problem::SelfOverlap { a, b, at },
        (false, Kind::Crossing) => Problem::RingsCross { a, b, at },
        (false, Kind::Along) => Problem::RingsAlong { a, b, at },
        (false, Kind::Touching) => {
            if may_touch(all, i, j, at) {
                touches.push(Touch { rings, at });
                return None;
            }
            Problem::RingsCross { a, b, at }
        }
    };
    Some((problem, rings))
}

fn how_they_meet(s: Segment, t: Segment) -> Option<(Kind, Point)> {
    let at = s.meets(t)?;
    let on = |s: Segment, p: Point| side(s.a, s.b, p) == Ordering::Equal;
    if on(s, t.a) && on(s, t.b) {
        let key = |p: &Point, q: &Point| p.x.total_cmp(&q.x).then(p.y.total_cmp(&q.y));
        let ends = |s: Segment| {
            if key(&s.a, &s.b) == Ordering::Less {
                (s.a, s.b)
            } else {
                (s.b, s.a)
            }
        };
        let ((low, high), (other_low, other_high)) = (ends(s), ends(t));
        let from = std::cmp::max_by(low, other_low, key);
        let to = std::cmp::min_by(high, other_high, key);
        return Some(if from == to {
            (Kind::Touching, from)
        } else {
            (Kind::Along, from)
        });
    }
    let is_end = on(s, t.a) || on(s, t.b) || on(t, s.a) || on(t, s.b);
    let kind = if is_end {
        Kind::Touching
    } else {
        Kind::Crossing
    };
    Some((kind, at))
}

/// Whether two rings that touch at a place leave each other alone there: rings of one part each lie in the other's inside,
/// rings of two parts have no inside in common.
fn may_touch(all: &Segments, i: usize, j: usize, at: Point) -> bool {
    let (a, b) = (all.around(i, at), all.around(j, at));
    let same_part = all.sources[i].part == all.sources[j].part;
    [a[0], a[2]]
        .into_iter()
        .all(|p| opens_towards(b, p) == same_part)
        && [b[0], b[2]]
            .into_iter()
            .all(|p| opens_towards(a, p) == same_part)
}

/// Whether p, seen from the middle one of three corners in a row, lies strictly in the angle on their left.
fn opens_towards([before, at, after]: [Point; 3], p: Point) -> bool {
    let left_of_before = orient(before, at, p) > 0.0;
    let left_of_after = orient(at, after, p) > 0.0;
    if orient(before, at, after) > 0.0 {
        left_of_before && left_of_after
    } else {
        left_of_before || left_of_after
    }
}

/// Holes outside, holes in holes, parts in parts; `met` are the pairs of rings that meet and are settled by that, sorted.
fn judge_nesting(all: &Segments, met: &[[usize; 2]], problems: &mut Vec<Problem>) {
    let have_met = |i: usize, j: usize| met.binary_search(&[i.min(j), i.max(j)]).is_ok();
    let mut outer_idx = None;
    for (i, ring) in all.rings.iter().enumerate() {
        if ring.id.ring == 0 {
            outer_idx = Some(i);
            continue;
        }
        let place = all.place(ring);
        let outer = outer_idx.filter(|&o| all.rings[o].id.part == ring.id.part);
        if let Some(o) = outer
            && !have_met(o, i)
            && !all.encloses(&all.rings[o], place.at)
        {
            problems.push(Problem::HoleOutside(place));
        }
        for (j, other) in all.rings.iter().enumerate() {
            let is_hole_beside = j != i && other.id.part == ring.id.part && other.id.ring != 0;
            if is_hole_beside && !have_met(i, j) && all.encloses(other, place.at) {
                problems.push(Problem::HolesNested {
                    outer: other.id,
                    inner: place,
                });
            }
        }
    }
    judge_parts(all, met, problems);
}

/// Parts that lie inside others, where no ring of one meets a ring of the other.
fn judge_parts(all: &Segments, met: &[[usize; 2]], problems: &mut Vec<Problem>) {
    let part_of = |i: usize| all.rings[i].id.part;
    let mut met: Vec<[u32; 2]> = met.iter().map(|&[i, j]| [part_of(i), part_of(j)]).collect();
    met.sort_unstable();
    let mut parts = all
        .rings
        .chunk_by(|r, s| r.id.part == s.id.part)
        .filter(|rings| rings[0].id.ring == 0)
        .collect::<Vec<_>>();
    parts.sort_by(|p, q| p[0].bounds.min.x.total_cmp(&q[0].bounds.min.x));
    for (k, first) in parts.iter().enumerate() {
        let near = parts[k + 1..]
            .iter()
            .take_while(|other| other[0].bounds.min.x <= first[0].bounds.max.x)
            .filter(|other| other[0].bounds.overlaps(first[0].bounds));
        for second in near {
            let (p, q) = (first[0].id.part, second[0].id.part);
            if met.binary_search(&[p.min(q), p.max(q)]).is_ok() {
                continue;
            }
            for (holder, held) in [(first, second), (second, first)] {
                let inner = all.place(&held[0]);
                let n_round = holder.iter().filter(|r| all.encloses(r, inner.at)).count();
                if n_round % 2 == 1 {
                    problems.push(Problem::PartsOverlap {
                        part: holder[0].id.part,
                        inner,
                    });
                }
            }
        }
    }
}

/// Touching rings of one part must not enclose a bit of its inside: as a graph of rings and places they form no cycle.
fn judge_touches(all: &Segments, mut touches: Vec<Touch>, problems: &mut Vec<Problem>) {
    touches.retain(|t| all.rings[t.rings[0]].id.part == all.rings[t.rings[1]].id.part);
    touches.sort_by(|s, t| s.at.x.total_cmp(&t.at.x).then(s.at.y.total_cmp(&t.at.y)));
    let mut joined_to: Vec<usize> = (0..all.rings.len()).collect();
    let root = |joined_to: &[usize], mut ring: usize| {
        while joined_to[ring] != ring {
            ring = joined_to[ring];
        }
        ring
    };
    for same_place in touches.chunk_by(|s, t| s.at == t.at) {
        let mut here: Vec<usize> = same_place.iter().flat_map(|t| t.rings).collect();
        here.sort_unstable();
        here.dedup();
        // Parts that touch others at the same place are apart, each with its own rings.
        for rings in here.chunk_by(|&i, &j| all.rings[i].id.part == all.rings[j].id.part) {
            for &ring in &rings[1..] {
                let (a, b) = (root(&joined_to, rings[0]), root(&joined_to, ring));
                if a == b {
                    problems.push(Problem::InsideCutApart {
                        part: all.rings[ring].id.part,
                        at: same_place[0].at,
                    });
                }
                joined_to[a] = b;
            }
        }
    }
}
