//! Exact predicates: the one place where the side of a line is decided.
//!
//! Method: adaptive precision arithmetic (Shewchuk, Adaptive Precision Floating-Point Arithmetic and Fast Robust
//! Geometric Predicates, 1997) from the crate `robust`. The sign is exact for all finite coordinates that neither overflow
//! nor underflow when multiplied; validation keeps coordinates far from both.

use std::cmp::Ordering;

use super::Point;

/// Twice the signed area of the triangle a, b, c: positive when it turns left. Only the sign is exact.
pub fn orient(a: Point, b: Point, c: Point) -> f64 {
    let [a, b, c] = [a, b, c].map(|p| robust::Coord { x: p.x, y: p.y });
    robust::orient2d(a, b, c)
}

/// `Greater` where c lies left of the line from a to b, `Less` right of it, `Equal` on it.
pub fn side(a: Point, b: Point, c: Point) -> Ordering {
    orient(a, b, c).partial_cmp(&0.0).unwrap_or(Ordering::Equal)
}

/// Whether p lies on the closed segment from a to b, exactly.
pub fn on_segment(a: Point, b: Point, p: Point) -> bool {
    let between = |a: f64, b: f64, p: f64| a.min(b) <= p && p <= a.max(b);
    between(a.x, b.x, p.x) && between(a.y, b.y, p.y) && side(a, b, p) == Ordering::Equal
}

/// Whether the horizontal ray from p towards +x crosses the segment from a to b, each segment counted with its lower
/// end and without its upper one, so that the crossings of a closed ring with a ray through a corner come out even or odd
/// as they should. A point on the segment gives either answer.
pub fn ray_crosses(a: Point, b: Point, p: Point) -> bool {
    if (a.y > p.y) == (b.y > p.y) {
        return false;
    }
    let (lower, upper) = if a.y < b.y { (a, b) } else { (b, a) };
    side(lower, upper, p) == Ordering::Greater
}
