//! Convex pieces of an area.
//!
//! Method: the area is cut into triangles, and diagonals whose removal leaves both their ends convex are taken out one
//! after the other (Hertel & Mehlhorn, Fast triangulation of simple polygons, 1983): at most four times as many pieces as
//! the best cut without new corners has. Decisions are exact. Limit: the order of removal is that of the triangles, so the
//! pieces are not chosen for their shape.

use std::collections::HashMap;

use super::triangulate::{corners_of, triangulate};
use super::{
    Area, Point, Polygon,
    predicates::{on_segment, orient},
};

/// Convex polygons that together are the area, without overlap, as their corners counter-clockwise.
///
/// A convex part without holes comes back as it is. Precondition: a valid area; `None` when a part cannot be cut into
/// triangles, as may be when it is not valid. Corners in the midst of a straight side may stay. Cost: that of the
/// triangles, and O(n) for n corners.
pub fn convex_pieces(area: &Area) -> Option<Vec<Vec<Point>>> {
    let mut pieces = Vec::new();
    for part in &area.parts {
        if part.holes.is_empty() && part.outer.is_convex() {
            pieces.push(part.outer.corners().to_vec());
        } else {
            pieces.extend(pieces_of(part)?);
        }
    }
    Some(pieces)
}

fn pieces_of(part: &Polygon) -> Option<Vec<Vec<Point>>> {
    let corners = corners_of(part);
    let mut mesh = Mesh::of(&triangulate(part)?, corners);
    for side in 0..mesh.sides.len() as u32 {
        mesh.take_out(side);
    }
    Some(mesh.pieces())
}

/// A directed side of a piece.
struct Side {
    from: u32,
    /// The same side seen from the piece across it, none on the boundary.
    twin: Option<u32>,
    prev: u32,
    next: u32,
    is_gone: bool,
}

/// Pieces as rings of sides with the piece on their left; triangle k is sides 3k to 3k + 2.
struct Mesh {
    corners: Vec<Point>,
    sides: Vec<Side>,
}

impl Mesh {
    fn of(triangles: &[[u32; 3]], corners: Vec<Point>) -> Mesh {
        let mut sides = Vec::with_capacity(3 * triangles.len());
        let mut waiting: HashMap<(u32, u32), u32> = HashMap::with_capacity(sides.capacity());
        for triangle in triangles {
            let first = sides.len() as u32;
            for k in 0..3 {
                let (from, to) = (triangle[k], triangle[(k + 1) % 3]);
                let this = first + k as u32;
                let twin = waiting.remove(&(to, from));
                match twin {
                    Some(other) => {
                        let other: &mut Side = &mut sides[other as usize];
                        other.twin = Some(this);
                    }
                    None => {
                        waiting.insert((from, to), this);
                    }
                }
                sides.push(Side {
                    from,
                    twin,
                    prev: first + (k as u32 + 2) % 3,
                    next: first + (k as u32 + 1) % 3,
                    is_gone: false,
                });
            }
        }
        Mesh { corners, sides }
    }

    fn side(&self, side: u32) -> &Side {
        &self.sides[side as usize]
    }

    fn at(&self, side: u32) -> Point {
        self.corners[self.side(side).from as usize]
    }

    /// Whether a corner with `before` leading to it and `after` leaving it would be convex.
    fn is_convex(&self, before: u32, after: u32) -> bool {
        let (a, b) = (self.at(before), self.at(after));
        let c = self.at(self.side(after).next);
        let turn = orient(a, b, c);
        // Straight on is convex, straight back is not.
        turn > 0.0 || (turn == 0.0 && on_segment(a, c, b))
    }

    /// Joins the pieces on both sides of a diagonal when that leaves its ends convex.
    fn take_out(&mut self, this: u32) {
        let side = self.side(this);
        let Some(twin) = side.twin.filter(|_| !side.is_gone) else {
            return;
        };
        let (before, after) = (side.prev, side.next);
        let (before_twin, after_twin) = (self.side(twin).prev, self.side(twin).next);
        let is_tip = before == after_twin || before_twin == after;
        if is_tip || !self.is_convex(before, after_twin) || !self.is_convex(before_twin, after) {
            return;
        }
        self.link(before, after_twin);
        self.link(before_twin, after);
        for gone in [this, twin] {
            self.sides[gone as usize].is_gone = true;
        }
    }

    fn link(&mut self, from: u32, to: u32) {
        self.sides[from as usize].next = to;
        self.sides[to as usize].prev = from;
    }

    /// The corners of each piece that has any area.
    fn pieces(&self) -> Vec<Vec<Point>> {
        let mut seen = vec![false; self.sides.len()];
        let mut pieces = Vec::new();
        for start in 0..self.sides.len() as u32 {
            if seen[start as usize] || self.side(start).is_gone {
                continue;
            }
            let mut piece = Vec::new();
            let mut side = start;
            while !std::mem::replace(&mut seen[side as usize], true) {
                piece.push(self.at(side));
                side = self.side(side).next;
            }
            let first = piece[0];
            if piece.windows(2).any(|w| orient(first, w[0], w[1]) != 0.0) {
                pieces.push(piece);
            }
        }
        pieces
    }
}

#[cfg(test)]
mod tests {
    use super::super::Ring;
    use super::super::test_shapes::{Dice, any_polygon, plain, ring};
    use super::*;
    use proptest::prelude::*;

    fn area(parts: Vec<Polygon>) -> Area {
        Area { parts }
    }

    #[track_caller]
    fn check(area: &Area, at_most: usize) {
        let pieces = convex_pieces(area).expect("it is valid");
        assert!(pieces.len() <= at_most, "{} pieces", pieces.len());
        let rings: Vec<Ring> = pieces.into_iter().map(Ring::new).collect();
        for ring in &rings {
            assert!(ring.is_convex() && ring.signed_area() > 0.0, "{ring:?}");
        }
        let sum: f64 = rings.iter().map(Ring::signed_area).sum();
        assert!((sum - area.area_m2()).abs() < 1e-9 * sum + 1e-9);
    }

    #[test]
    fn convex_parts_stay_whole() {
        let square = ring(&[(0.0, 0.0), (2.0, 0.0), (4.0, 0.0), (4.0, 4.0), (0.0, 4.0)]);
        let pieces = convex_pieces(&area(vec![plain(square.clone())]));
        assert_eq!(pieces, Some(vec![square.corners().to_vec()]));
    }

    #[test]
    fn few_pieces() {
        let l = ring(&[
            (0.0, 0.0),
            (20.0, 0.0),
            (20.0, 10.0),
            (10.0, 10.0),
            (10.0, 20.0),
            (0.0, 20.0),
        ]);
        check(&area(vec![plain(l)]), 2);
        let with_hole = Polygon {
            outer: ring(&[(0.0, 0.0), (10.0, 0.0), (10.0, 10.0), (0.0, 10.0)]),
            holes: vec![ring(&[(4.0, 4.0), (4.0, 6.0), (6.0, 6.0), (6.0, 4.0)])],
        };
        // The best is four.
        check(&area(vec![with_hole]), 6);
        let touching = Polygon {
            outer: ring(&[(0.0, 0.0), (10.0, 0.0), (10.0, 10.0), (0.0, 10.0)]),
            holes: vec![ring(&[(5.0, 0.0), (4.0, 2.0), (6.0, 2.0)])],
        };
        check(&area(vec![touching]), 6);
    }

    proptest! {
        #![proptest_config(crate::seeded::config())]

        #[test]
        fn pieces_are_convex_and_hold_what_the_area_holds(seed: u64) {
            let mut dice = Dice(seed);
            let area = area(vec![any_polygon(&mut dice)]);
            check(&area, area.n_segments() + 2 * area.rings().count());
            let pieces = convex_pieces(&area).expect("it is valid");
            for _ in 0..20 {
                let p = dice.point_in(area.bounds());
                let holding = pieces.iter().filter(|c| {
                    (0..c.len()).all(|k| orient(c[k], c[(k + 1) % c.len()], p) > 0.0)
                });
                prop_assert_eq!(holding.count(), usize::from(area.contains(p)));
            }
        }
    }
}
