//! The region a centre may lie in: inside the lot, on the kept side of every building line.

use crate::geom::{Area, Bounds, Point, Polygon, Ring, Segment, predicates};
use crate::site::{BuildingLine, Kept, SiteError};

/// The lot without what lies behind its building lines. Its boundary is the lot's segments in the order of
/// [`Area::segments`], then the building lines' pieces inside the lot.
#[derive(Clone, Debug)]
pub struct Region {
    boundary: Vec<Segment>,
    n_lot_segments: usize,
    bounds: Bounds,
    /// For each segment after the lot's own, the index of its building line.
    line_of: Vec<usize>,
    /// For each building line the ring of the lot that it cuts off.
    cut_off: Vec<Ring>,
}

impl Region {
    /// # Errors
    /// A building line that does not run from boundary to boundary through one part of the lot.
    pub fn new(lot: &Area, lines: &[BuildingLine]) -> Result<Region, SiteError> {
        let mut boundary: Vec<Segment> = Vec::with_capacity(lot.n_segments());
        lot.rings()
            .for_each(|ring| boundary.extend(ring.segments()));
        let n_lot_segments = boundary.len();
        let (mut line_of, mut cut_off) = (Vec::new(), Vec::new());
        for (i, line) in lines.iter().enumerate() {
            let cut = Cut::find(lot, line)?;
            boundary.extend(cut.inside.windows(2).map(|w| Segment::new(w[0], w[1])));
            line_of.resize(boundary.len() - n_lot_segments, i);
            cut_off.push(cut.cut_off(line.kept)?);
        }
        let bounds = boundary.iter().fold(Bounds::EMPTY, |b, s| b.with(s.a));
        Ok(Region {
            bounds,
            boundary,
            n_lot_segments,
            line_of,
            cut_off,
        })
    }

    /// All segments that bound the region.
    pub fn boundary(&self) -> &[Segment] {
        &self.boundary
    }

    /// The box of the boundary.
    pub fn bounds(&self) -> Bounds {
        self.bounds
    }

    /// How many of them are the lot's own; they come first.
    pub fn n_lot_segments(&self) -> usize {
        self.n_lot_segments
    }

    /// The building lines' pieces inside the lot, each with the index of its line, in the order of the boundary.
    pub fn building_line_pieces(&self) -> impl Iterator<Item = (usize, Segment)> + '_ {
        self.line_of
            .iter()
            .copied()
            .zip(self.boundary[self.n_lot_segments..].iter().copied())
    }

    /// Whether building lines cut the lot.
    pub fn is_cut(&self) -> bool {
        !self.cut_off.is_empty()
    }

    /// Whether p lies in no cut-off part; p is known to be inside the lot. Exact; cost O(corners of the cut-off rings).
    pub fn keeps(&self, p: Point) -> bool {
        !self.cut_off.iter().any(|ring| is_inside(ring, p))
    }

    /// Whether p lies in the region: exact, by the parity of ray crossings. Cost O(n).
    pub fn contains(&self, p: Point) -> bool {
        let crosses = |s: &&Segment| predicates::ray_crosses(s.a, s.b, p);
        self.boundary[..self.n_lot_segments]
            .iter()
            .filter(crosses)
            .count()
            % 2
            == 1
            && self.keeps(p)
    }
}

fn is_inside(ring: &Ring, p: Point) -> bool {
    ring.segments()
        .filter(|s| predicates::ray_crosses(s.a, s.b, p))
        .count()
        % 2
        == 1
}

/// A building line cut to the lot, and where it meets the ring.
struct Cut<'a> {
    ring: &'a Ring,
    /// The line's corners inside the lot, from boundary to boundary.
    inside: Vec<Point>,
    /// Segments of the ring on which the first and the last of them lie.
    at: [usize; 2],
}

/// A meeting of the line with the ring: how far along the line (piece + fraction), ring segment, place.
#[derive(Clone, Copy)]
struct Meeting {
    along: f64,
    segment: usize,
    place: Point,
}

impl<'a> Cut<'a> {
    fn find(lot: &'a Area, line: &BuildingLine) -> Result<Cut<'a>, SiteError> {
        let mut found: Option<(&Polygon, Vec<Meeting>)> = None;
        for part in &lot.parts {
            let meetings = meetings(&part.outer, &line.corners);
            if meetings.is_empty() {
                continue;
            }
            if found.is_some() {
                return Err(refuse(
                    "crosses more than one part of the lot",
                    meetings[0].place,
                ));
            }
            found = Some((part, meetings));
        }
        let first = line.corners.first().copied().unwrap_or_default();
        let Some((part, meetings)) = found else {
            return Err(refuse("does not meet the lot's boundary", first));
        };
        let [from, to] = meetings[..] else {
            let place = meetings.get(2).unwrap_or(&meetings[0]).place;
            return Err(refuse(
                "does not cross the lot's outer boundary exactly twice",
                place,
            ));
        };
        let inside = between(&line.corners, from, to);
        for w in inside.windows(2) {
            let piece = Segment::new(w[0], w[1]);
            if let Some(place) = part
                .holes
                .iter()
                .flat_map(Ring::segments)
                .find_map(|s| s.meets(piece))
            {
                return Err(refuse("crosses a hole of the lot", place));
            }
        }
        let middle = inside[0].midpoint(inside[1]);
        if !is_inside(&part.outer, middle) {
            return Err(refuse("runs outside the lot", middle));
        }
        Ok(Cut {
            ring: &part.outer,
            inside,
            at: [from.segment, to.segment],
        })
    }

    /// The ring on the side that is not kept. The lot's ring runs counter-clockwise, so from the line's end along the ring
    /// to its start is what lies on the left of the line.
    fn cut_off(&self, kept: Kept) -> Result<Ring, SiteError> {
        let (mut corners, from, to) = match kept {
            Kept::Right => (self.inside.clone(), self.at[1], self.at[0]),
            Kept::Left => (
                self.inside.iter().rev().copied().collect(),
                self.at[0],
                self.at[1],
            ),
        };
        let n = self.ring.len();
        let (start, end) = (corners[corners.len() - 1], corners[0]);
        let ahead = |p: Point| (p - self.ring.segment(from).a).length2();
        let wraps = from == to && ahead(end) < ahead(start);
        let n_between = if from == to && !wraps {
            0
        } else if from == to {
            n
        } else {
            (to + n - from) % n
        };
        corners.extend((1..=n_between).map(|k| self.ring.corners()[(from + k) % n]));
        corners.dedup();
        if corners.len() < 3 {
            return Err(refuse("runs along the lot's boundary", start));
        }
        Ok(Ring::new(corners))
    }
}

/// Where the line meets the ring, in the order along the line; a meeting at a corner of either counts once.
fn meetings(ring: &Ring, corners: &[Point]) -> Vec<Meeting> {
    let mut found: Vec<Meeting> = Vec::new();
    for (piece, w) in corners.windows(2).enumerate() {
        let line = Segment::new(w[0], w[1]);
        for (segment, s) in ring.segments().enumerate() {
            if let Some(place) = line.meets(s) {
                let along = piece as f64 + (place - line.a).length() / line.length();
                found.push(Meeting {
                    along,
                    segment,
                    place,
                });
            }
        }
    }
    found.sort_by(|a, b| a.along.total_cmp(&b.along).then(a.segment.cmp(&b.segment)));
    found.dedup_by(|b, a| a.place == b.place);
    found
}

/// The line's corners from one meeting to the other, both included.
fn between(corners: &[Point], from: Meeting, to: Meeting) -> Vec<Point> {
    let mut inside = vec![from.place];
    let strictly = |i: &usize| (*i as f64) > from.along && (*i as f64) < to.along;
    inside.extend((0..corners.len()).filter(strictly).map(|i| corners[i]));
    inside.push(to.place);
    inside.dedup();
    inside
}

fn refuse(problem: &'static str, place: Point) -> SiteError {
    SiteError::BuildingLine {
        problem,
        x: place.x,
        y: place.y,
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn rectangle(w: f64, h: f64) -> Area {
        let p = Point::new;
        let outer = Ring::new(vec![p(0.0, 0.0), p(w, 0.0), p(w, h), p(0.0, h)]);
        Area {
            parts: vec![Polygon {
                outer,
                holes: Vec::new(),
            }],
        }
    }

    fn line(corners: &[(f64, f64)], kept: Kept) -> BuildingLine {
        BuildingLine {
            name: None,
            corners: corners.iter().map(|&(x, y)| Point::new(x, y)).collect(),
            kept,
        }
    }

    #[track_caller]
    fn check(corners: &[(f64, f64)], kept: Kept, inside: (f64, f64), outside: (f64, f64)) {
        let region = Region::new(&rectangle(10.0, 6.0), &[line(corners, kept)])
            .expect("the line crosses the lot");
        assert!(
            region.contains(Point::new(inside.0, inside.1)),
            "{inside:?} is kept"
        );
        assert!(
            !region.contains(Point::new(outside.0, outside.1)),
            "{outside:?} is cut off"
        );
    }

    #[test]
    fn the_kept_side_is_seen_along_the_line() {
        let across = [(-1.0, 2.0), (11.0, 2.0)];
        check(&across, Kept::Left, (5.0, 4.0), (5.0, 1.0));
        check(&across, Kept::Right, (5.0, 1.0), (5.0, 4.0));
    }

    #[test]
    fn lines_may_bend_end_on_the_boundary_or_cut_a_corner() {
        let bent = [(0.0, 2.0), (5.0, 4.0), (10.0, 2.0)];
        check(&bent, Kept::Left, (5.0, 5.0), (5.0, 3.0));
        check(&bent, Kept::Right, (5.0, 3.0), (5.0, 5.0));
        let corner = [(3.0, -1.0), (-1.0, 3.0)];
        check(&corner, Kept::Right, (5.0, 3.0), (0.5, 0.5));
        check(&corner, Kept::Left, (0.5, 0.5), (5.0, 3.0));
        let notch = [(3.0, 0.0), (3.0, 2.0), (6.0, 2.0), (6.0, 0.0)];
        check(&notch, Kept::Left, (1.0, 1.0), (4.0, 1.0));
        check(&notch, Kept::Right, (4.0, 1.0), (1.0, 1.0));
    }

    #[test]
    fn a_line_that_does_not_cross_is_refused_with_the_place() {
        for corners in [
            vec![(1.0, 1.0), (5.0, 1.0)],
            vec![(-1.0, 1.0), (5.0, 1.0)],
            vec![(20.0, 0.0), (21.0, 5.0)],
        ] {
            let refused = Region::new(&rectangle(10.0, 6.0), &[line(&corners, Kept::Left)]);
            assert!(
                matches!(refused, Err(SiteError::BuildingLine { .. })),
                "{corners:?} gave {refused:?}"
            );
        }
    }
}
