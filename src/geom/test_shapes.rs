//! Random polygons for tests, from a seed: star-shaped, staircase, spiral, comb, sliver, and with holes.
//!
//! Every shape is simple by construction before it is turned and moved; the moves used keep it so, since no two of its
//! parts come nearer to each other than some 1e-9 m.

use std::f64::consts::TAU;

use super::{Point, Polygon, Ring, Vec2};

/// A small generator of random numbers (SplitMix64: Steele, Lea & Flood, Fast Splittable Pseudorandom Number
/// Generators, 2014).
pub struct Dice(pub u64);

impl Dice {
    pub fn next_u64(&mut self) -> u64 {
        self.0 = self.0.wrapping_add(0x9E37_79B9_7F4A_7C15);
        let mut z = self.0;
        z = (z ^ (z >> 30)).wrapping_mul(0xBF58_476D_1CE4_E5B9);
        z = (z ^ (z >> 27)).wrapping_mul(0x94D0_49BB_1331_11EB);
        z ^ (z >> 31)
    }

    pub fn uniform(&mut self, from: f64, to: f64) -> f64 {
        let share = (self.next_u64() >> 11) as f64 / (1u64 << 53) as f64;
        from + share * (to - from)
    }

    /// From `from` to below `to`.
    pub fn below(&mut self, from: usize, to: usize) -> usize {
        from + (self.next_u64() % (to - from) as u64) as usize
    }

    pub fn point_in(&mut self, bounds: super::Bounds) -> Point {
        Point::new(
            self.uniform(bounds.min.x, bounds.max.x),
            self.uniform(bounds.min.y, bounds.max.y),
        )
    }
}

pub fn ring(corners: &[(f64, f64)]) -> Ring {
    Ring::new(corners.iter().map(|&(x, y)| Point::new(x, y)).collect())
}

/// A polygon without holes.
pub fn plain(outer: Ring) -> Polygon {
    Polygon {
        outer,
        holes: Vec::new(),
    }
}

/// One of all the kinds, turned and moved.
pub fn any_polygon(dice: &mut Dice) -> Polygon {
    let n = dice.below(3, 60);
    let made = match dice.below(0, 6) {
        0 => plain(star(dice, n, Point::ORIGIN, 5.0, 100.0)),
        1 => plain(staircase(dice, n)),
        2 => plain(spiral(n + 8)),
        3 => plain(comb(dice, n)),
        4 => plain(sliver(dice, n)),
        _ => with_holes(dice, n),
    };
    let (angle, by) = (
        dice.uniform(0.0, TAU),
        Vec2::new(dice.uniform(-5e3, 5e3), dice.uniform(-5e3, 5e3)),
    );
    // Every other one stays on its axes, where corners are exactly collinear and ties are exact.
    if dice.below(0, 2) == 0 {
        made
    } else {
        moved(&made, angle, by)
    }
}

pub fn moved(polygon: &Polygon, angle: f64, by: Vec2) -> Polygon {
    let (sin, cos) = angle.sin_cos();
    let place = |p: &Point| Point::new(cos * p.x - sin * p.y, sin * p.x + cos * p.y) + by;
    let ring = |r: &Ring| Ring::new(r.corners().iter().map(place).collect());
    Polygon {
        outer: ring(&polygon.outer),
        holes: polygon.holes.iter().map(ring).collect(),
    }
}

pub fn reversed(ring: &Ring) -> Ring {
    Ring::new(ring.corners().iter().rev().copied().collect())
}

/// Corners at growing angles about a centre, each less than half a turn on.
pub fn star(dice: &mut Dice, n: usize, centre: Point, inner: f64, outer: f64) -> Ring {
    let corner = |k: usize| {
        let angle = TAU * (k as f64 + dice.uniform(0.0, 0.4)) / n as f64;
        let radius = dice.uniform(inner, outer);
        centre + Vec2::new(angle.cos(), angle.sin()) * radius
    };
    Ring::new((0..n).map(corner).collect())
}

/// Columns of whole width and height side by side; neighbours of one height leave collinear corners.
pub fn staircase(dice: &mut Dice, n: usize) -> Ring {
    let mut corners = vec![Point::new(0.0, 0.0), Point::new(n as f64, 0.0)];
    for column in (0..n).rev() {
        let height = dice.below(1, 6) as f64;
        for x in [column + 1, column] {
            let corner = Point::new(x as f64, height);
            if corners.last() != Some(&corner) {
                corners.push(corner);
            }
        }
    }
    Ring::new(corners)
}

/// A band of even width winding outwards, n corners on each side.
pub fn spiral(n: usize) -> Ring {
    let side = |k: usize, width: f64| {
        let angle = 0.2 * k as f64;
        Point::ORIGIN + Vec2::new(angle.cos(), angle.sin()) * (10.0 + 5.0 * angle / TAU + width)
    };
    Ring::new(
        (0..n)
            .map(|k| side(k, 2.0))
            .chain((0..n).rev().map(|k| side(k, -2.0)))
            .collect(),
    )
}

/// Teeth of random length on a bar, hair's breadths apart.
pub fn comb(dice: &mut Dice, n: usize) -> Ring {
    let mut corners = vec![Point::new(0.0, -1.0), Point::new(n as f64, -1.0)];
    for tooth in (0..n).rev() {
        let (x, gap) = (tooth as f64, 10f64.powi(-(dice.below(1, 7) as i32)));
        corners.push(Point::new(x + 1.0, 0.0));
        corners.push(Point::new(x + 1.0 - gap, dice.uniform(1.0, 50.0)));
        corners.push(Point::new(x + 0.5, dice.uniform(50.0, 60.0)));
        corners.push(Point::new(x + gap, dice.uniform(1.0, 50.0)));
    }
    corners.push(Point::new(0.0, 0.0));
    Ring::new(corners)
}

/// Two nearly straight sides a little apart.
pub fn sliver(dice: &mut Dice, n: usize) -> Ring {
    let wobble = 10f64.powi(-(dice.below(1, 9) as i32));
    let height = 3.0 * wobble;
    let mut side = |y: f64| -> Vec<Point> {
        let at = |k| Point::new(k as f64, y + dice.uniform(-wobble, wobble));
        (0..n).map(at).collect()
    };
    let (low, top) = (side(0.0), side(height));
    Ring::new(low.into_iter().chain(top.into_iter().rev()).collect())
}

/// A star with small stars cut out, no two in one square of a grid.
pub fn with_holes(dice: &mut Dice, n: usize) -> Polygon {
    let outer = star(dice, n.max(8), Point::ORIGIN, 80.0, 150.0);
    let mut holes = Vec::new();
    for row in -3..=3 {
        for column in -3..=3 {
            if dice.below(0, 3) == 0 {
                let centre = Point::new(14.0 * f64::from(column), 14.0 * f64::from(row));
                let corners = dice.below(3, 12);
                holes.push(reversed(&star(dice, corners, centre, 1.0, 6.9)));
            }
        }
    }
    Polygon { outer, holes }
}
