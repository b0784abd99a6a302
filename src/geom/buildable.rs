//! What is left of an area once every keep-out is taken away, for drawing and for its size.
//!
//! Method: keep-outs become polygons, arcs by tangents to them, so that the polygon holds the true shape and lies within the
//! asked tolerance of it; then the crate `geo` takes them away from the area (its overlay engine, non-zero rule). Limit: the
//! engine works on a grid of about a billionth of the extent of all that is given, so corners are off by some 1e-6 m per
//! kilometre, to either side. Nothing that is proven rests on this; this is the one file that uses `geo`.

use std::f64::consts::{PI, TAU};

use geo::{BooleanOps, Coord, LineString, MultiPolygon, algorithm::bool_ops::FillRule};

use super::{Area, Bounds, Point, Polygon, Ring, Vec2};

/// How far a drawn arc may lie outside the true one, m, where nothing else is asked: below what a sheet or a stake can show.
pub const ARC_TOLERANCE_M: f64 = 1e-4;
/// Bits of area below this, m², are dropped: rounding leaves such slivers between keep-outs that share a line, and nothing can be
/// built on a square centimetre.
const SLIVER_M2: f64 = 1e-4;
/// Fewest tangents round a full circle, and the largest angle in one step with it.
const FEWEST_STEPS: f64 = 8.0;

/// A place where nothing may be.
#[derive(Clone, Debug, PartialEq)]
pub enum KeepOut {
    /// A convex polygon, counter-clockwise, such as a yard in the parallel reading.
    Convex(Vec<Point>),
    /// All within a distance of a convex feature: a point, a segment, or a convex polygon, counter-clockwise.
    Around {
        feature: Vec<Point>,
        distance_m: f64,
    },
}

/// The parts of the area outside every keep-out, largest first.
///
/// Method: see the module. Precondition: a valid area, `tolerance_m` above 0; [`ARC_TOLERANCE_M`] is the usual one, more
/// makes drawing faster. A keep-out without area takes nothing away. Parts may touch themselves at a point, which
/// validation would refuse. Cost about n log n for n corners of area and keep-outs with their arcs, more where many overlap.
pub fn remaining(area: &Area, keep_out: &[KeepOut], tolerance_m: f64) -> Vec<Polygon> {
    debug_assert!(tolerance_m > 0.0, "an arc has no exact polygon");
    let bounds = area.bounds();
    let taken: Vec<geo::Polygon> = keep_out
        .iter()
        .map(|k| outline(k, tolerance_m))
        .filter(|corners| corners.len() >= 3)
        .filter(|corners| Bounds::of(corners.iter().copied()).overlaps(bounds))
        .map(|corners| geo::Polygon::new(line_string(&corners), Vec::new()))
        .collect();
    let whole: Vec<geo::Polygon> = area.parts.iter().map(geo_polygon).collect();
    // The keep-outs overlap each other; the non-zero rule unites them since all run the same way round.
    let left = MultiPolygon::new(whole)
        .difference_with_fill_rule(&MultiPolygon::new(taken), FillRule::NonZero);
    let mut parts: Vec<Polygon> = left
        .iter()
        .filter_map(polygon)
        .filter(|p| p.area_m2() > SLIVER_M2)
        .collect();
    parts.sort_by(|p, q| q.area_m2().total_cmp(&p.area_m2()));
    parts
}

/// The corners of a convex polygon that holds the keep-out, counter-clockwise.
fn outline(keep_out: &KeepOut, tolerance_m: f64) -> Vec<Point> {
    match keep_out {
        KeepOut::Convex(corners) => corners.clone(),
        KeepOut::Around {
            feature,
            distance_m,
        } if *distance_m > 0.0 => around(feature, *distance_m, tolerance_m),
        KeepOut::Around { feature, .. } => feature.clone(),
    }
}

/// Tangents to the arcs of radius `distance_m` about the corners, each arc from the one side's outward normal to the next's.
fn around(feature: &[Point], distance_m: f64, tolerance_m: f64) -> Vec<Point> {
    let n = feature.len();
    // Two tangents a step apart meet at distance / cos(step / 2).
    let half_step = (distance_m / (distance_m + tolerance_m)).acos();
    let step = (2.0 * half_step).min(TAU / FEWEST_STEPS);
    let mut corners = Vec::new();
    for (i, &at) in feature.iter().enumerate() {
        let (before, after) = (feature[(i + n - 1) % n], feature[(i + 1) % n]);
        let (start, turn) = match (outward(before, at), outward(at, after)) {
            (Some(from), Some(_)) if n == 2 => (from.y.atan2(from.x), PI),
            (Some(from), Some(to)) => {
                let turn = from.cross(to).atan2(from.dot(to));
                (from.y.atan2(from.x), turn.max(0.0))
            }
            _ => (0.0, TAU),
        };
        let n_steps = (turn / step).ceil().max(1.0);
        let step = turn / n_steps;
        let reach = distance_m / (0.5 * step).cos();
        corners.extend((0..n_steps as usize).map(|k| {
            let (sin, cos) = (start + (k as f64 + 0.5) * step).sin_cos();
            at + Vec2::new(cos, sin) * reach
        }));
    }
    corners
}

/// The normal on the right of the way from a to b; `None` when they are at one place.
fn outward(a: Point, b: Point) -> Option<Vec2> {
    (b - a).unit().map(|d| -d.left())
}

fn geo_polygon(polygon: &Polygon) -> geo::Polygon {
    geo::Polygon::new(
        line_string(polygon.outer.corners()),
        polygon
            .holes
            .iter()
            .map(|hole| line_string(hole.corners()))
            .collect(),
    )
}

fn line_string(corners: &[Point]) -> LineString {
    let coords = corners.iter().map(|p| Coord { x: p.x, y: p.y }).collect();
    LineString::new(coords)
}

/// `None` when the outer ring has collapsed.
fn polygon(from: &geo::Polygon) -> Option<Polygon> {
    Some(Polygon {
        outer: ring(from.exterior(), true)?,
        holes: from
            .interiors()
            .iter()
            .filter_map(|hole| ring(hole, false))
            .collect(),
    })
}

fn ring(line: &LineString, is_outer: bool) -> Option<Ring> {
    let mut corners: Vec<Point> = line.coords().map(|c| Point::new(c.x, c.y)).collect();
    corners.dedup();
    if corners.first() == corners.last() {
        corners.pop();
    }
    if corners.len() < 3 {
        return None;
    }
    let ring = Ring::new(corners);
    if (ring.signed_area() > 0.0) == is_outer {
        return Some(ring);
    }
    Some(Ring::new(ring.corners().iter().rev().copied().collect()))
}

#[cfg(test)]
mod tests {
    use super::super::test_shapes::{plain, ring};
    use super::super::yard::yard;
    use super::*;

    fn yards(ring: &Ring, setbacks_m: &[f64]) -> Vec<KeepOut> {
        (0..ring.len())
            .filter_map(|i| yard(ring, |k| setbacks_m[k], i))
            .map(|yard| KeepOut::Convex(yard.corners().to_vec()))
            .collect()
    }

    fn rounded(ring: &Ring, distance_m: f64) -> Vec<KeepOut> {
        let around = |s: super::super::Segment| KeepOut::Around {
            feature: vec![s.a, s.b],
            distance_m,
        };
        ring.segments().map(around).collect()
    }

    fn area_left_m2(outer: &Ring, keep_out: &[KeepOut]) -> f64 {
        let area = Area {
            parts: vec![plain(outer.clone())],
        };
        let left = remaining(&area, keep_out, ARC_TOLERANCE_M);
        left.iter().map(Polygon::area_m2).sum()
    }

    #[track_caller]
    fn check(got: f64, expected: f64, tolerance: f64) {
        assert!(
            (got - expected).abs() <= tolerance,
            "{got} is not {expected}"
        );
    }

    /// Closed form: geometry.json, rect_100x80_std_setbacks.
    #[test]
    fn rectangle_with_four_setbacks() {
        let lot = ring(&[(0.0, 0.0), (100.0, 0.0), (100.0, 80.0), (0.0, 80.0)]);
        check(
            area_left_m2(&lot, &yards(&lot, &[25.0, 10.0, 20.0, 10.0])),
            2800.0,
            1e-4,
        );
    }

    /// Geometry.json, L_reflex_rounded_vs_mitred; its areas by hand: 18 x 8 + 8 x 10, and what the quarter circle at the
    /// reflex corner leaves of its square.
    #[test]
    fn l_in_both_readings() {
        let lot = ring(&[
            (0.0, 0.0),
            (20.0, 0.0),
            (20.0, 10.0),
            (10.0, 10.0),
            (10.0, 20.0),
            (0.0, 20.0),
        ]);
        check(area_left_m2(&lot, &yards(&lot, &[1.0; 6])), 224.0, 1e-6);
        let exact = 224.0 + 1.0 - PI / 4.0;
        let left = area_left_m2(&lot, &rounded(&lot, 1.0));
        check(left, exact, ARC_TOLERANCE_M * PI / 2.0);
        assert!(left < exact, "an arc is rounded to the safe side");
    }

    #[test]
    fn arcs_lie_outside_within_the_tolerance() {
        let features: [&[(f64, f64)]; 3] = [
            &[(3.0, 4.0)],
            &[(0.0, 0.0), (5.0, 1.0)],
            &[(0.0, 0.0), (4.0, 0.0), (0.0, 3.0)],
        ];
        for feature in features {
            let feature: Vec<Point> = feature.iter().map(|&(x, y)| Point::new(x, y)).collect();
            for distance_m in [0.01, 2.0, 300.0] {
                let corners = around(&feature, distance_m, ARC_TOLERANCE_M);
                let polygon = Ring::new(corners);
                assert!(polygon.signed_area() > 0.0);
                let distance = |p: Point| {
                    let n = feature.len();
                    let sides = (0..n)
                        .map(|i| super::super::Segment::new(feature[i], feature[(i + 1) % n]));
                    sides.map(|s| s.distance(p)).fold(f64::INFINITY, f64::min)
                };
                for side in polygon.segments() {
                    assert!(distance(side.a) <= distance_m + ARC_TOLERANCE_M + 1e-9);
                    assert!(distance(side.a.midpoint(side.b)) >= distance_m - 1e-9);
                }
            }
        }
    }

    #[test]
    fn pieces_and_holes() {
        let lot = ring(&[(0.0, 0.0), (10.0, 0.0), (10.0, 4.0), (0.0, 4.0)]);
        let area = Area {
            parts: vec![plain(lot)],
        };
        let across = KeepOut::Convex(
            ring(&[(6.0, -1.0), (7.0, -1.0), (7.0, 5.0), (6.0, 5.0)])
                .corners()
                .to_vec(),
        );
        let well = KeepOut::Around {
            feature: vec![Point::new(3.0, 2.0)],
            distance_m: 1.0,
        };
        let nothing = KeepOut::Around {
            feature: vec![Point::new(9.0, 2.0)],
            distance_m: 0.0,
        };
        let left = remaining(&area, &[across, well, nothing], ARC_TOLERANCE_M);
        assert_eq!(left.len(), 2);
        check(left[0].area_m2(), 24.0 - PI, 1e-3);
        check(left[1].area_m2(), 12.0, 1e-6);
        assert_eq!((left[0].holes.len(), left[1].holes.len()), (1, 0));
        let all = KeepOut::Around {
            feature: vec![Point::ORIGIN],
            distance_m: 20.0,
        };
        assert_eq!(remaining(&area, &[all], ARC_TOLERANCE_M), []);
        assert_eq!(remaining(&area, &[], ARC_TOLERANCE_M).len(), 1);
    }
}
