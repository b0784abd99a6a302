//! Triangles of a polygon with holes, by ear clipping, and the test that triangles cover a polygon exactly.
//!
//! Method: holes are first joined to the outer ring by bridges to corners they see ([`bridges`]); then a convex corner
//! whose triangle with its two neighbours holds no other corner is cut off, and so on (Meisters, Polygons have ears,
//! 1975; [`ears`]). Only reflex corners can lie in such a triangle, and they wait in a grid ([`reflex`]). Every decision is an exact
//! predicate, so that rounding never leads it astray; and since each triangle cut off is counter-clockwise and takes its
//! own boundary with it, what comes back is a cover of the polygon whatever the order was. Limit: about n^1.5 steps in
//! practice for n corners, n² at worst.

mod bridges;
mod ears;
mod reflex;

use super::{Point, Polygon, Ring, predicates::orient};
use bridges::Boundary;
use ears::clip_ears;

/// The corners of a polygon in one list, as the triangles number them: the outer ring's, then each hole's.
pub fn corners_of(polygon: &Polygon) -> Vec<Point> {
    let mut corners = Vec::with_capacity(polygon.rings().map(Ring::len).sum());
    for ring in polygon.rings() {
        corners.extend_from_slice(ring.corners());
    }
    corners
}

/// Triangles that cover the polygon, counter-clockwise, as indices into [`corners_of`].
///
/// Method: see the module. Holes that touch another ring at a point are joined there; where the point is in the midst of
/// a segment, a triangle without area beside it keeps the sum of the triangles' boundaries equal to the polygon's.
/// Precondition: a valid polygon whose inside is connected. Anything else, and a number of corners beyond `u32`, gives
/// `None` or still a cover, never a wrong answer. Cost: about n^1.5 for n corners, little more than n for few reflex ones.
///
/// ```
/// use roundstead::geom::{Point, Polygon, Ring, triangulate::triangulate};
/// let corners = [(0.0, 0.0), (4.0, 0.0), (4.0, 3.0), (0.0, 3.0)];
/// let outer = Ring::new(corners.map(|(x, y)| Point::new(x, y)).to_vec());
/// let triangles = triangulate(&Polygon { outer, holes: Vec::new() });
/// assert_eq!(triangles.map(|t| t.len()), Some(2));
/// ```
pub fn triangulate(polygon: &Polygon) -> Option<Vec<[u32; 3]>> {
    let mut boundary = Boundary::of(polygon)?;
    let mut triangles = Vec::with_capacity(boundary.len() + 2 * polygon.holes.len());
    if boundary.bridge_holes() && clip_ears(boundary, &mut triangles) {
        return Some(triangles);
    }
    if polygon.holes.is_empty() {
        return None;
    }
    // Rings that touch are rare, and looking for them is slow: only once the plain way has failed.
    triangles.clear();
    let mut boundary = Boundary::of(polygon)?;
    boundary.split_touched_segments(&mut triangles);
    let joined = boundary.join_touching_rings() && boundary.bridge_holes();
    (joined && clip_ears(boundary, &mut triangles)).then_some(triangles)
}

/// Whether the triangles cover the polygon exactly and without overlap.
///
/// Method: every triangle must be counter-clockwise or without area, decided exactly, and the sum of their boundaries,
/// taken as chains in which a side and its opposite cancel, must be the polygon's boundary. Then the number of triangles
/// over any point equals the polygon's winding number about it: 1 inside, 0 outside. Corners at the same place count as
/// one. Degenerate input: an index out of range is no cover. Cost O(n log n).
pub fn covers_exactly(polygon: &Polygon, triangles: &[[u32; 3]]) -> bool {
    let corners = corners_of(polygon);
    let place = first_at_same_place(&corners);
    let mut sides: Vec<(u32, u32, i32)> = Vec::with_capacity(3 * triangles.len() + corners.len());
    let mut add = |from: u32, to: u32, count: i32| match from.cmp(&to) {
        std::cmp::Ordering::Less => sides.push((from, to, count)),
        std::cmp::Ordering::Greater => sides.push((to, from, -count)),
        std::cmp::Ordering::Equal => {}
    };
    for triangle in triangles {
        let [Some(&a), Some(&b), Some(&c)] = triangle.map(|i| place.get(i as usize)) else {
            return false;
        };
        let [pa, pb, pc] = [a, b, c].map(|i| corners[i as usize]);
        if orient(pa, pb, pc) < 0.0 {
            return false;
        }
        add(a, b, 1);
        add(b, c, 1);
        add(c, a, 1);
    }
    let mut base = 0;
    for ring in polygon.rings() {
        let n = ring.len();
        for i in 0..n {
            add(place[base + i], place[base + (i + 1) % n], -1);
        }
        base += n;
    }
    sides.sort_unstable();
    sides
        .chunk_by(|s, t| (s.0, s.1) == (t.0, t.1))
        .all(|same| same.iter().map(|s| s.2).sum::<i32>() == 0)
}

/// For each point the index of one at the same place, alike for all that are there.
fn first_at_same_place(points: &[Point]) -> Vec<u32> {
    let mut order: Vec<u32> = (0..points.len() as u32).collect();
    let key = |i: u32| points[i as usize];
    order.sort_unstable_by(|&i, &j| {
        let (p, q) = (key(i), key(j));
        // Adding 0 makes one zero of the two.
        (p.x + 0.0)
            .total_cmp(&(q.x + 0.0))
            .then((p.y + 0.0).total_cmp(&(q.y + 0.0)))
    });
    let mut place = vec![0; points.len()];
    for same in order.chunk_by(|&i, &j| key(i) == key(j)) {
        for &i in same {
            place[i as usize] = same[0];
        }
    }
    place
}

#[cfg(test)]
mod tests {
    use super::super::test_shapes::{self, Dice, any_polygon, plain, ring};
    use super::*;
    use proptest::prelude::*;

    /// The triangulation covers the polygon and has as many triangles as it must.
    #[track_caller]
    fn check(polygon: &Polygon) {
        let triangles = triangulate(polygon).unwrap_or_else(|| panic!("no triangles: {polygon:?}"));
        let corners = corners_of(polygon);
        assert!(covers_exactly(polygon, &triangles), "{polygon:?}");
        assert_eq!(triangles.len(), corners.len() + 2 * polygon.holes.len() - 2);
        let twice: f64 = triangles
            .iter()
            .map(|t| t.map(|i| corners[i as usize]))
            .map(|[a, b, c]| (b - a).cross(c - a))
            .sum();
        let area = polygon.area_m2();
        assert!(
            (0.5 * twice - area).abs() < 1e-9 * area + 1e-9,
            "{twice} {area}"
        );
    }

    fn square_with(holes: Vec<Ring>) -> Polygon {
        Polygon {
            outer: ring(&[(0.0, 0.0), (10.0, 0.0), (10.0, 10.0), (0.0, 10.0)]),
            holes,
        }
    }

    #[test]
    fn smallest_shapes() {
        check(&plain(ring(&[(0.0, 0.0), (4.0, 0.0), (0.0, 3.0)])));
        check(&square_with(Vec::new()));
        // Corners in the midst of straight sides, at the start of the ring too.
        check(&plain(ring(&[
            (1.0, 0.0),
            (2.0, 0.0),
            (4.0, 0.0),
            (0.0, 4.0),
            (0.0, 0.0),
        ])));
        check(&plain(ring(&[
            (0.0, 0.0),
            (2.0, 1.0),
            (4.0, 0.0),
            (2.0, 3.0),
        ])));
    }

    #[test]
    fn holes_that_touch() {
        let triangle = |x: f64, y: f64| ring(&[(x, y), (x + 1.0, y + 2.0), (x + 2.0, y + 1.0)]);
        // A corner of the hole on a corner, and on the midst of a side, of the outer ring.
        check_touching(&square_with(vec![triangle(0.0, 0.0)]), 1);
        check_touching(
            &square_with(vec![ring(&[(5.0, 0.0), (4.0, 2.0), (6.0, 2.0)])]),
            2,
        );
        check_touching(
            &square_with(vec![ring(&[(0.0, 5.0), (1.0, 6.0), (1.0, 4.0)])]),
            2,
        );
        // A chain of holes, one from the corner on, the next from its tips; and three at one place.
        let chain = vec![
            triangle(0.0, 0.0),
            ring(&[(2.0, 1.0), (3.0, 3.0), (4.0, 1.0)]),
            ring(&[(3.0, 3.0), (2.0, 5.0), (5.0, 5.0)]),
        ];
        check_touching(&square_with(chain), 3);
        let fan = vec![
            ring(&[(5.0, 5.0), (6.0, 4.0), (4.0, 4.0)]),
            ring(&[(5.0, 5.0), (6.0, 6.0), (6.0, 5.0)]),
            ring(&[(5.0, 5.0), (4.0, 5.0), (4.0, 6.0)]),
        ];
        check_touching(&square_with(fan), 3);
        // A corner of the outer ring on a side of the hole.
        let notched = Polygon {
            outer: ring(&[(0.0, 0.0), (9.0, 0.0), (9.0, 9.0), (5.0, 5.0), (0.0, 9.0)]),
            holes: vec![ring(&[(4.0, 5.0), (6.0, 5.0), (5.0, 3.0)])],
        };
        check_touching(&notched, 2);
    }

    /// As `check`, without the count, which splitting and joining change; `least` just says that it was no trifle.
    #[track_caller]
    fn check_touching(polygon: &Polygon, least: usize) {
        let triangles = triangulate(polygon).expect("the inside is connected");
        assert!(covers_exactly(polygon, &triangles));
        assert!(triangles.len() > least + 3);
    }

    #[test]
    fn hopeless_input_ends() {
        let bow_tie = plain(ring(&[(0.0, 0.0), (2.0, 2.0), (2.0, 0.0), (0.0, 2.0)]));
        assert_eq!(triangulate(&bow_tie), None);
        let clockwise = plain(ring(&[(0.0, 0.0), (0.0, 2.0), (2.0, 2.0), (2.0, 0.0)]));
        assert_eq!(triangulate(&clockwise), None);
        let flat = plain(ring(&[(0.0, 0.0), (1.0, 0.0), (2.0, 0.0)]));
        assert_eq!(triangulate(&flat), None);
        let outside = ring(&[(20.0, 20.0), (20.0, 22.0), (22.0, 22.0)]);
        assert_eq!(triangulate(&square_with(vec![outside])), None);
        let across = ring(&[(5.0, 0.0), (0.0, 5.0), (5.0, 10.0), (10.0, 5.0)]);
        assert_eq!(triangulate(&square_with(vec![across])), None);
    }

    #[test]
    fn only_exact_covers_pass() {
        let square = square_with(Vec::new());
        let passes = |triangles: &[[u32; 3]]| covers_exactly(&square, triangles);
        assert!(passes(&[[0, 1, 2], [0, 2, 3]]));
        assert!(passes(&[[1, 2, 3], [3, 0, 1]]));
        assert!(!passes(&[[0, 1, 2]]), "a gap");
        assert!(!passes(&[[0, 1, 2], [0, 2, 3], [0, 1, 2]]), "an overlap");
        assert!(!passes(&[[0, 1, 2], [0, 3, 2]]), "a clockwise one");
        assert!(!passes(&[[0, 1, 2], [0, 2, 4]]), "no such corner");
        assert!(!passes(&[[0, 1, 2], [1, 2, 3]]), "crossing ones");
    }

    #[test]
    fn large_rings() {
        let mut dice = Dice(5);
        check(&plain(test_shapes::spiral(1000)));
        check(&plain(test_shapes::star(
            &mut dice,
            2000,
            Point::ORIGIN,
            50.0,
            100.0,
        )));
        check(&plain(test_shapes::comb(&mut dice, 300)));
    }

    proptest! {
        #![proptest_config(crate::seeded::config())]

        #[test]
        fn random_polygons_are_covered(seed: u64) {
            check(&any_polygon(&mut Dice(seed)));
        }
    }
}
