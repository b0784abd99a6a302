//! Rows: one convex feature each, with the distance it asks for as a function of the shell radius.
//!
//! A row asks dist(c, F) >= w r + s. Solved for r this is g(c) = (dist - s) / w, which grows with the distance and is convex
//! in c. A cap on the required distance, or an inner ring that a small structure does not have, offers a second condition
//! of which one is enough: g is then the greater of two linear functions of the distance and stays convex.

use super::Feature;
use crate::geom::Point;

/// A feature and what it asks for. `w` has no unit, `s` is in metres.
#[derive(Clone, Debug, PartialEq)]
pub struct Row {
    pub feature: Feature,
    pub w: f64,
    pub s: f64,
    /// A second condition of which one is enough.
    pub otherwise: Option<Box<Otherwise>>,
    /// Index of the limit this row belongs to.
    pub limit: u32,
}

/// Enough in place of a row's own condition: dist >= w r + s, or r <= `free_radius`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Otherwise {
    pub w: f64,
    pub s: f64,
    pub free_radius: f64,
}

impl Row {
    /// A row that asks for `w` times the radius and `s` metres, with no second condition.
    pub fn new(feature: Feature, w: f64, s: f64, limit: u32) -> Row {
        debug_assert!(w >= 0.0, "a row's weight is not negative");
        Row {
            feature,
            w,
            s,
            otherwise: None,
            limit,
        }
    }

    /// The greatest radius that a distance allows: plus infinity where the row allows any, negative where it allows none; a
    /// row without weight is the more negative the more is missing.
    pub fn radius_at(&self, distance: f64) -> f64 {
        let own = linear(distance, self.w, self.s);
        match &self.otherwise {
            None => own,
            Some(o) => own.max(linear(distance, o.w, o.s)).max(o.free_radius),
        }
    }

    /// g(c): the greatest radius the row allows at `c`.
    pub fn radius(&self, c: Point) -> f64 {
        self.radius_at(self.feature.distance(c))
    }

    /// The least distance at which the row allows the radius; `None` where it asks for none.
    pub fn distance_for(&self, radius: f64) -> Option<f64> {
        let own = self.w * radius + self.s;
        match &self.otherwise {
            None => Some(own),
            Some(o) if radius <= o.free_radius => None,
            Some(o) => Some(own.min(o.w * radius + o.s)),
        }
    }

    /// d(radius)/d(distance) at a distance: 1 / weight of the condition in force, 0 where the radius does not depend on it.
    pub fn slope_at(&self, distance: f64) -> f64 {
        let own = linear(distance, self.w, self.s);
        let by_own = if self.w > 0.0 { 1.0 / self.w } else { 0.0 };
        match &self.otherwise {
            None => by_own,
            Some(o) => {
                let other = linear(distance, o.w, o.s);
                if own >= other.max(o.free_radius) {
                    by_own
                } else if other >= o.free_radius && o.w > 0.0 {
                    1.0 / o.w
                } else {
                    0.0
                }
            }
        }
    }
}

/// Metres missing on a row without weight that count as one metre of radius missing: small, so that such a row, once broken,
/// comes before any other.
const MISSING_M: f64 = 1e-9;

fn linear(distance: f64, w: f64, s: f64) -> f64 {
    let beyond = distance - s;
    if w > 0.0 {
        beyond / w
    } else if beyond >= 0.0 {
        f64::INFINITY
    } else {
        beyond / MISSING_M
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn row(w: f64, s: f64, otherwise: Option<Otherwise>) -> Row {
        Row {
            otherwise: otherwise.map(Box::new),
            ..Row::new(Feature::Point(Point::ORIGIN), w, s, 0)
        }
    }

    #[track_caller]
    fn check(row: &Row, distance: f64, radius: f64, slope: f64) {
        assert_eq!(
            (row.radius_at(distance), row.slope_at(distance)),
            (radius, slope)
        );
    }

    #[test]
    fn a_plain_row_is_linear_in_the_distance() {
        check(&row(2.0, 1.0, None), 7.0, 3.0, 0.5);
    }

    #[test]
    fn an_exclusion_allows_all_or_nothing() {
        check(&row(0.0, 5.0, None), 5.0, f64::INFINITY, 0.0);
        check(&row(0.0, 5.0, None), 4.0, -1.0 / MISSING_M, 0.0);
    }

    #[test]
    fn a_cap_takes_over_where_it_asks_for_less() {
        // Half the diameter from the shell, need not exceed 4 m: w = 2, s = 0, or w = 1, s = 4; they meet at r = 4.
        let capped = row(
            2.0,
            0.0,
            Some(Otherwise {
                w: 1.0,
                s: 4.0,
                free_radius: f64::NEG_INFINITY,
            }),
        );
        check(&capped, 6.0, 3.0, 0.5);
        check(&capped, 10.0, 6.0, 1.0);
    }
}
