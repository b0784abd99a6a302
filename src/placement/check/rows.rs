//! Rows as the checker sees them: upper bounds of what they ask at a place.

use std::borrow::Cow;

use super::interval::{Interval, Vector};
use crate::geom::{Point, Segment, predicates};
use crate::limits::{Feature, Limits, LotRows, Otherwise, Row};

/// The rows with the width of the slivers that bisection may miss.
pub(super) struct Rows<'a> {
    limits: &'a Limits,
    sliver_m: f64,
}

/// The direction and distance from a row's nearest point, as intervals; `distance` is infinite for a half-plane, which stays
/// as it is along its border.
pub(super) struct Held {
    pub away: Vector,
    pub distance: Interval,
    /// Upper bound of the radius the row allows.
    pub radius: f64,
}

impl<'a> Rows<'a> {
    /// The rows, for triangles cut from `roots` at most `depth` times.
    pub fn new(limits: &'a Limits, roots: &[[Point; 3]], depth: u32) -> Rows<'a> {
        let size = roots
            .iter()
            .flatten()
            .map(|c| c.x.abs().max(c.y.abs()))
            .fold(0.0, f64::max);
        // A midpoint is off its side by at most a unit in the last place, and a place may be missed once a level.
        Rows {
            limits,
            sliver_m: size * f64::EPSILON * f64::from(depth),
        }
    }

    pub fn sliver_m(&self) -> f64 {
        self.sliver_m
    }

    fn row(&self, i: u32) -> Result<Cow<'a, Row>, String> {
        let is_known = (i as usize) < self.limits.n_rows();
        is_known
            .then(|| self.limits.row(i as usize))
            .ok_or_else(|| format!("there is no row {i}"))
    }

    /// Whether weights on rows bound the radius over a triangle by `upper`.
    ///
    /// For weights y >= 0 with positive w = sum of y_i w_i, no centre in the triangle allows more than the greatest over the
    /// corners of (sum of y_i d_i) / w; where w is zero and all sums are negative, it allows none at all.
    pub fn bounds(&self, t: &[Point; 3], weights: &[(u32, f64)], upper: f64) -> Result<(), String> {
        let mut columns = [Interval::exact(0.0); 3];
        let mut w = Interval::exact(0.0);
        let mut is_weightless = true;
        for &(i, y) in weights {
            if !y.is_finite() || y < 0.0 {
                return Err(format!(
                    "the weight {y} of row {i} is negative or no figure"
                ));
            }
            let row = self.row(i)?;
            let y = Interval::exact(y);
            is_weightless &= weight_of(&row) == 0.0;
            w = w + y * Interval::exact(weight_of(&row));
            for (column, &c) in columns.iter_mut().zip(t) {
                let asked =
                    self.asked(i, &row, c) + Interval::exact(self.sliver_m * lipschitz_of(&row));
                if !asked.hi.is_finite() {
                    return Err(format!("row {i} allows any radius at a corner"));
                }
                *column = *column + y * asked;
            }
        }
        let greatest = columns[0].hi.max(columns[1].hi).max(columns[2].hi);
        if is_weightless && !weights.is_empty() && greatest < 0.0 {
            return Ok(());
        }
        if w.lo <= 0.0 {
            return Err("its weights bound nothing".into());
        }
        let bound = Interval::exact(greatest).over(w).hi;
        if bound <= upper {
            Ok(())
        } else {
            Err(format!(
                "its rows bound the radius by {bound} m, not by {upper} m"
            ))
        }
    }

    /// What a row asks at a place, d in w r <= d; for a row with a second condition the radius it allows.
    fn asked(&self, i: u32, row: &Row, c: Point) -> Interval {
        let distance = self.distance(i, row, c);
        match row.otherwise.as_deref() {
            None => distance - Interval::exact(row.s),
            Some(otherwise) => radius_with(row, otherwise, distance),
        }
    }

    /// An interval whose upper end is above the signed distance.
    fn distance(&self, i: u32, row: &Row, c: Point) -> Interval {
        match &row.feature {
            Feature::HalfPlane { .. } => self.beyond_line(i, c),
            Feature::Segment(s) => distance_to(*s, c),
            Feature::Point(p) => Vector::between(*p, c).length(),
            Feature::Disc { centre, radius } => {
                Vector::between(*centre, c).length() - Interval::exact(*radius)
            }
            Feature::Convex(corners) => {
                let sides = || {
                    (0..corners.len())
                        .map(|k| Segment::new(corners[k], corners[(k + 1) % corners.len()]))
                };
                let outside = || sides().filter(|s| predicates::orient(s.a, s.b, c) < 0.0);
                let nearest = outside().map(|s| distance_to(s, c)).reduce(Interval::min);
                // Inside, the depth is the least distance from the lines of the sides; a side without length has none.
                let depths = sides()
                    .filter(|s| s.a != s.b)
                    .map(|s| left_of(s, c))
                    .reduce(Interval::min);
                let inside = depths.map(|depth| Interval {
                    lo: -depth.hi,
                    hi: -depth.lo,
                });
                nearest.or(inside).unwrap_or(Interval::exact(f64::INFINITY))
            }
        }
    }

    /// The signed distance from the line of the lot's segment `i`, whose outside the half-plane is.
    fn beyond_line(&self, i: u32, c: Point) -> Interval {
        debug_assert!(
            self.limits.lot_rows == LotRows::HalfPlanes,
            "half-planes come from the lot's segments"
        );
        left_of(self.limits.region.boundary()[i as usize], c)
    }

    /// Direction, distance and radius of a row at a place, for a settled disc; refused for rows without weight.
    pub fn held(&self, i: u32, c: Point) -> Result<Held, String> {
        let row = self.row(i)?;
        if row.w <= 0.0 {
            return Err(format!("row {i} has no weight"));
        }
        let (away, distance) = self
            .nearest_of(i, &row, c)
            .ok_or_else(|| format!("row {i} touches the centre"))?;
        let radius = match row.otherwise.as_deref() {
            None => {
                (distance - Interval::exact(row.s))
                    .over(Interval::exact(row.w))
                    .hi
            }
            Some(otherwise) => radius_with(&row, otherwise, distance).hi,
        };
        let is_straight = matches!(row.feature, Feature::HalfPlane { .. });
        Ok(Held {
            away,
            distance: if is_straight {
                Interval::exact(f64::INFINITY)
            } else {
                distance
            },
            radius,
        })
    }

    /// Direction and distance from a point of the feature that is nearest up to rounding.
    fn nearest_of(&self, i: u32, row: &Row, c: Point) -> Option<(Vector, Interval)> {
        let from = match &row.feature {
            Feature::HalfPlane { .. } => {
                let s = self.limits.region.boundary()[i as usize];
                let along = Vector::between(s.a, s.b);
                let left = Vector {
                    x: along.negated().y,
                    y: along.x,
                };
                return Some((left.over(along.length()), self.beyond_line(i, c)));
            }
            Feature::Point(p) => Vector::between(*p, c),
            Feature::Segment(s) => from_segment(*s, c),
            Feature::Disc { centre, radius } => {
                let whole = Vector::between(*centre, c);
                let length = whole.length();
                let rest = length - Interval::exact(*radius);
                return (rest.lo > 0.0).then(|| (whole.over(length), rest));
            }
            Feature::Convex(corners) => {
                if self.distance(i, row, c).hi <= 0.0 {
                    return None;
                }
                let sides = (0..corners.len())
                    .map(|k| Segment::new(corners[k], corners[(k + 1) % corners.len()]));
                let nearest = sides.min_by(|a, b| a.distance2(c).total_cmp(&b.distance2(c)))?;
                from_segment(nearest, c)
            }
        };
        let length = from.length();
        (length.lo > 0.0).then(|| (from.over(length), length))
    }
}

/// The weight that goes with what a row asks.
fn weight_of(row: &Row) -> f64 {
    if row.otherwise.is_none() { row.w } else { 1.0 }
}

/// How fast what a row asks can change with the place.
fn lipschitz_of(row: &Row) -> f64 {
    let per = |w: f64| if w > 0.0 { 1.0 / w } else { f64::INFINITY };
    row.otherwise
        .as_deref()
        .map_or(1.0, |otherwise| per(row.w).max(per(otherwise.w)))
}

fn radius_with(row: &Row, otherwise: &Otherwise, distance: Interval) -> Interval {
    let by = |w: f64, s: f64| {
        let beyond = distance - Interval::exact(s);
        match w {
            w if w > 0.0 => beyond.over(Interval::exact(w)),
            _ if beyond.hi >= 0.0 => Interval::exact(f64::INFINITY),
            _ => Interval::exact(f64::NEG_INFINITY),
        }
    };
    by(row.w, row.s)
        .max(by(otherwise.w, otherwise.s))
        .max(Interval::exact(otherwise.free_radius))
}

/// The signed distance from the segment's line, positive on its left.
fn left_of(s: Segment, c: Point) -> Interval {
    let along = Vector::between(s.a, s.b);
    along.cross(Vector::between(s.a, c)).over(along.length())
}

/// The distance from a point of the segment: above the least.
fn distance_to(s: Segment, c: Point) -> Interval {
    from_segment(s, c).length()
}

/// From a + t (b - a) to c, for the t in [0, 1] that is nearest up to rounding: an exact point of the segment.
fn from_segment(s: Segment, c: Point) -> Vector {
    let d = s.vector();
    let t = ((c - s.a).dot(d) / d.length2()).clamp(0.0, 1.0);
    let t = if t.is_finite() { t } else { 0.0 };
    Vector::between(s.a, c).minus(Vector::between(s.a, s.b).scaled(Interval::exact(t)))
}
