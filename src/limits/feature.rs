//! Convex features: what a row keeps its distance from.
//!
//! The distance to each is a convex function of the place. It is signed: inside a half-plane, disc or polygon it is the depth
//! below zero. That changes nothing where a circle may lie, keeps the function convex, and shows at once that nothing
//! lies between two yards that abut.

use crate::geom::{Bounds, Point, Segment, Vec2};

/// A closed convex set of the site plane.
#[derive(Clone, Debug, PartialEq)]
pub enum Feature {
    /// All points p with normal · p <= offset; the normal has length 1 and points to the open side.
    HalfPlane {
        normal: Vec2,
        offset: f64,
    },
    Segment(Segment),
    Point(Point),
    Disc {
        centre: Point,
        radius: f64,
    },
    /// A convex polygon with its inside, counter-clockwise.
    Convex(Box<[Point]>),
}

/// The nearest of a feature, seen from a place outside it.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Nearest {
    /// In metres; negative inside.
    pub distance: f64,
    /// Unit vector from the nearest point to the place, from inside towards the nearest side: the gradient of the distance.
    /// Zero at a point.
    pub away: Vec2,
    /// How far the nearest point's bulge may be relied on: the distance, or infinite for a half-plane, along whose
    /// border the distance stays linear.
    pub reach: f64,
}

impl Feature {
    /// The half-plane right of the segment's line: what lies outside a counter-clockwise convex ring.
    pub fn right_of(segment: Segment) -> Option<Feature> {
        let normal = segment.vector().left().unit()?;
        Some(Feature::HalfPlane {
            normal,
            offset: normal.dot(segment.a.to_vec2()),
        })
    }

    /// Distance from `c`, m; negative inside.
    pub fn distance(&self, c: Point) -> f64 {
        match self {
            Feature::Segment(s) => s.distance(c),
            Feature::HalfPlane { normal, offset } => normal.dot(c.to_vec2()) - offset,
            Feature::Point(p) => c.distance(*p),
            Feature::Disc { centre, radius } => c.distance(*centre) - radius,
            Feature::Convex(corners) => match convex_side(corners, c) {
                ConvexSide::Outside(q) => c.distance(q),
                ConvexSide::Inside { depth, .. } => -depth,
            },
        }
    }

    /// Distance, direction and reach from `c`.
    pub fn nearest(&self, c: Point) -> Nearest {
        let from = |q: Point| {
            let distance = c.distance(q);
            Nearest {
                distance,
                away: (c - q).unit().unwrap_or_default(),
                reach: distance,
            }
        };
        match self {
            Feature::Segment(s) => from(s.nearest(c)),
            Feature::HalfPlane { normal, .. } => Nearest {
                distance: self.distance(c),
                away: *normal,
                reach: f64::INFINITY,
            },
            Feature::Point(p) => from(*p),
            Feature::Disc { centre, radius } => {
                let whole = from(*centre);
                Nearest {
                    distance: whole.distance - radius,
                    reach: (whole.distance - radius).max(0.0),
                    ..whole
                }
            }
            Feature::Convex(corners) => match convex_side(corners, c) {
                ConvexSide::Outside(q) => from(q),
                ConvexSide::Inside { depth, outward } => Nearest {
                    distance: -depth,
                    away: outward,
                    reach: 0.0,
                },
            },
        }
    }

    /// The box of the feature; a half-plane has none that is finite.
    pub fn bounds(&self) -> Bounds {
        match self {
            Feature::Segment(s) => Bounds::of([s.a, s.b]),
            Feature::HalfPlane { .. } => Bounds {
                min: Point::new(f64::NEG_INFINITY, f64::NEG_INFINITY),
                max: Point::new(f64::INFINITY, f64::INFINITY),
            },
            Feature::Point(p) => Bounds::of([*p]),
            Feature::Disc { centre, radius } => {
                let r = Vec2::new(*radius, *radius);
                Bounds::of([*centre - r, *centre + r])
            }
            Feature::Convex(corners) => Bounds::of(corners.iter().copied()),
        }
    }
}

/// Where a place lies to a convex polygon.
enum ConvexSide {
    /// The nearest point of the polygon.
    Outside(Point),
    /// Depth below the nearest side, m, and the direction out through it.
    Inside { depth: f64, outward: Vec2 },
}

/// Where `c` lies to a counter-clockwise convex polygon.
fn convex_side(corners: &[Point], c: Point) -> ConvexSide {
    let mut outside = None;
    let mut best2 = f64::INFINITY;
    let (mut depth, mut outward) = (f64::INFINITY, Vec2::ZERO);
    for (i, &a) in corners.iter().enumerate() {
        let s = Segment::new(a, corners[if i + 1 == corners.len() { 0 } else { i + 1 }]);
        let across = s.vector().cross(c - a);
        if across < 0.0 {
            let q = s.nearest(c);
            let d2 = c.distance2(q);
            if d2 < best2 {
                (best2, outside) = (d2, Some(q));
            }
        } else if let Some(along) = s.vector().unit()
            && across < depth * s.length()
        {
            (depth, outward) = (across / s.length(), -along.left());
        }
    }
    outside.map_or(ConvexSide::Inside { depth, outward }, ConvexSide::Outside)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(feature: Feature, c: (f64, f64), distance: f64, away: (f64, f64)) {
        let c = Point::new(c.0, c.1);
        let found = feature.nearest(c);
        assert!(
            (feature.distance(c) - distance).abs() < 1e-12,
            "{feature:?} from {c:?}: {}",
            feature.distance(c)
        );
        assert!((found.distance - distance).abs() < 1e-12);
        assert!(
            (found.away - Vec2::new(away.0, away.1)).length() < 1e-12,
            "{feature:?} from {c:?}: {:?}",
            found.away
        );
    }

    #[test]
    fn distances_and_directions() {
        let p = Point::new;
        let square: Box<[Point]> = [p(0.0, 0.0), p(2.0, 0.0), p(2.0, 2.0), p(0.0, 2.0)].into();
        check(Feature::Convex(square.clone()), (5.0, 1.0), 3.0, (1.0, 0.0));
        check(Feature::Convex(square.clone()), (5.0, 6.0), 5.0, (0.6, 0.8));
        check(Feature::Convex(square), (1.0, 1.9), -0.1, (0.0, 1.0));
        check(
            Feature::Disc {
                centre: p(0.0, 0.0),
                radius: 2.0,
            },
            (3.0, 4.0),
            3.0,
            (0.6, 0.8),
        );
        check(
            Feature::Disc {
                centre: p(0.0, 0.0),
                radius: 2.0,
            },
            (0.0, 1.0),
            -1.0,
            (0.0, 1.0),
        );
        check(Feature::Point(p(1.0, 0.0)), (1.0, -2.0), 2.0, (0.0, -1.0));
        check(
            Feature::Segment(Segment::new(p(0.0, 0.0), p(4.0, 0.0))),
            (3.0, 2.0),
            2.0,
            (0.0, 1.0),
        );
        check(
            Feature::Segment(Segment::new(p(0.0, 0.0), p(4.0, 0.0))),
            (7.0, -4.0),
            5.0,
            (0.6, -0.8),
        );
    }

    #[test]
    fn the_half_plane_of_a_ring_side_lies_outside_and_is_signed() {
        let side = Segment::new(Point::new(0.0, 0.0), Point::new(4.0, 0.0));
        let feature = Feature::right_of(side).expect("the side has a length");
        check(feature.clone(), (9.0, 3.0), 3.0, (0.0, 1.0));
        check(feature, (9.0, -3.0), -3.0, (0.0, 1.0));
    }
}
