//! Axis-parallel boxes.

use super::Point;

/// The box from `min` to `max`, both included. [`Bounds::EMPTY`] holds no point and is the unit of [`Bounds::union`].
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Bounds {
    pub min: Point,
    pub max: Point,
}

impl Bounds {
    pub const EMPTY: Bounds = Bounds {
        min: Point::new(f64::INFINITY, f64::INFINITY),
        max: Point::new(f64::NEG_INFINITY, f64::NEG_INFINITY),
    };

    pub fn of(points: impl IntoIterator<Item = Point>) -> Bounds {
        points.into_iter().fold(Bounds::EMPTY, Bounds::with)
    }

    /// The smallest box that holds `self` and `p`.
    pub fn with(self, p: Point) -> Bounds {
        Bounds {
            min: Point::new(lesser(self.min.x, p.x), lesser(self.min.y, p.y)),
            max: Point::new(greater(self.max.x, p.x), greater(self.max.y, p.y)),
        }
    }

    pub fn union(self, other: Bounds) -> Bounds {
        Bounds {
            min: Point::new(
                lesser(self.min.x, other.min.x),
                lesser(self.min.y, other.min.y),
            ),
            max: Point::new(
                greater(self.max.x, other.max.x),
                greater(self.max.y, other.max.y),
            ),
        }
    }

    pub fn is_empty(self) -> bool {
        self.min.x > self.max.x
    }

    pub fn contains(self, p: Point) -> bool {
        self.min.x <= p.x && p.x <= self.max.x && self.min.y <= p.y && p.y <= self.max.y
    }

    pub fn overlaps(self, other: Bounds) -> bool {
        self.min.x <= other.max.x
            && other.min.x <= self.max.x
            && self.min.y <= other.max.y
            && other.min.y <= self.max.y
    }

    /// Squared distance from `p` to the box, m²; 0 inside.
    pub fn distance2(self, p: Point) -> f64 {
        let dx = greater(greater(self.min.x - p.x, p.x - self.max.x), 0.0);
        let dy = greater(greater(self.min.y - p.y, p.y - self.max.y), 0.0);
        dx * dx + dy * dy
    }

    pub fn width(self) -> f64 {
        self.max.x - self.min.x
    }

    pub fn height(self) -> f64 {
        self.max.y - self.min.y
    }

    /// The longer of the two sides, m.
    pub fn extent(self) -> f64 {
        self.width().max(self.height())
    }

    /// The box in two triangles, counter-clockwise.
    pub fn halves(self) -> [[Point; 3]; 2] {
        let (ne, sw) = (self.max, self.min);
        let (nw, se) = (Point::new(sw.x, ne.y), Point::new(ne.x, sw.y));
        [[sw, se, ne], [sw, ne, nw]]
    }

    /// A triangle with room round the box, counter-clockwise: legs of three times the box's sides from a quarter of a side
    /// outside it, so that rounding never leaves a corner of the box outside.
    pub fn triangle_round(self) -> [Point; 3] {
        let (w, h) = (self.width(), self.height());
        let corner = Point::new(self.min.x - 0.25 * w, self.min.y - 0.25 * h);
        [
            corner,
            Point::new(corner.x + 3.0 * w, corner.y),
            Point::new(corner.x, corner.y + 3.0 * h),
        ]
    }

    pub fn centre(self) -> Point {
        self.min.midpoint(self.max)
    }
}

/// One instruction each, where `f64::min` and `f64::max` take several to see to NaN; coordinates are finite.
fn lesser(a: f64, b: f64) -> f64 {
    if a < b { a } else { b }
}

fn greater(a: f64, b: f64) -> f64 {
    if a > b { a } else { b }
}
