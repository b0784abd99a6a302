//! How far the circle can slide where the best centre is not unique.
//!
//! Two rows that face each other hold the circle and leave it one direction free. Along it every other row's distance is a
//! convex function, so Newton's method from the spot comes up to the first place where the row binds without passing it.

use super::climb::Spot;
use super::index::RowIndex;
use crate::geom::{Point, Vec2};
use crate::limits::Row;

/// Two rows count as facing each other while the sum of their unit directions is shorter than this; at ten times the value
/// a slide of 100 m would cost the circle 1e-9 m.
const FACING: f64 = 1e-12;

/// What a row may lack along a slide, m: far below the gap of 1e-9 m, above rounding.
const SLACK_M: f64 = 1e-11;

/// A slide shorter than this is none, m.
const LEAST_SLIDE_M: f64 = 1e-6;

/// Newton steps for one row; straight features need one, round ones a handful.
const MAX_STEPS: usize = 40;

/// The two ends of the slide of a spot, or `None` where it is held.
///
/// Units: metres. Cost: O(rows), one or two distances each.
pub(super) fn slide(index: &RowIndex, spot: &Spot) -> Option<[Point; 2]> {
    let along = free_direction(index, spot)?;
    let far = index
        .limits()
        .region
        .boundary()
        .iter()
        .map(|s| s.a.distance(spot.centre))
        .fold(0.0, f64::max);
    let end = |direction: Vec2| {
        let mut reach = far;
        for row in index.limits().rows() {
            reach = first_bind(&row, spot, direction, reach);
        }
        spot.centre + direction * reach
    };
    let ends = [end(-along), end(along)];
    (ends[0].distance(ends[1]) > LEAST_SLIDE_M).then_some(ends)
}

/// The direction along the two rows that hold the spot between them, when there are two and they face each other.
pub(super) fn free_direction(index: &RowIndex, spot: &Spot) -> Option<Vec2> {
    let mut carrying = spot.carrying.iter().filter(|(_, y)| *y > 1e-9);
    let (Some(a), Some(b), None) = (carrying.next(), carrying.next(), carrying.next()) else {
        return None;
    };
    let away = |row: u32| index.row(row).feature.nearest(spot.centre).away;
    let (u, v) = (away(a.0), away(b.0));
    ((u + v).length() < FACING).then(|| u.left())
}

/// How far from the spot along `direction` the row lets a circle of the spot's radius go, at most `reach`.
fn first_bind(row: &Row, spot: &Spot, direction: Vec2, reach: f64) -> f64 {
    let Some(needed) = row.distance_for(spot.radius) else {
        return reach;
    };
    let mut t = 0.0;
    for _ in 0..MAX_STEPS {
        let nearest = row.feature.nearest(spot.centre + direction * t);
        let slack = nearest.distance - needed + SLACK_M;
        let closing = -nearest.away.dot(direction);
        if closing <= 0.0 {
            return reach;
        }
        if slack <= 0.0 {
            return t;
        }
        t += slack / closing;
        if t >= reach {
            return reach;
        }
        if slack < SLACK_M {
            break;
        }
    }
    t
}
