//! Interval arithmetic with outward rounding.
//!
//! Every operation is done to nearest and widened by one step of the floating-point grid on each side, so that the exact
//! result of exact operands lies inside. Simple and a little wide; a checker has time.

use std::ops::{Add, Mul, Sub};

use crate::geom::Point;

/// All numbers from `lo` to `hi`.
#[derive(Clone, Copy, Debug, PartialEq)]
pub(super) struct Interval {
    pub lo: f64,
    pub hi: f64,
}

impl Interval {
    pub const fn exact(value: f64) -> Interval {
        Interval {
            lo: value,
            hi: value,
        }
    }

    fn outward(lo: f64, hi: f64) -> Interval {
        Interval {
            lo: lo.next_down(),
            hi: hi.next_up(),
        }
    }

    /// The square, never below zero.
    pub fn square(self) -> Interval {
        let (a, b) = (self.lo.abs(), self.hi.abs());
        let least = if self.lo <= 0.0 && self.hi >= 0.0 {
            0.0
        } else {
            a.min(b)
        };
        let greatest = a.max(b);
        let wide = Interval::outward(least * least, greatest * greatest);
        Interval {
            lo: wide.lo.max(0.0),
            hi: wide.hi,
        }
    }

    /// The root of what is not negative.
    pub fn sqrt(self) -> Interval {
        let wide = Interval::outward(self.lo.max(0.0).sqrt(), self.hi.max(0.0).sqrt());
        Interval {
            lo: wide.lo.max(0.0),
            hi: wide.hi,
        }
    }

    /// The quotient by what is positive throughout.
    pub fn over(self, by: Interval) -> Interval {
        debug_assert!(by.lo > 0.0, "the divisor is positive");
        let all = [
            self.lo / by.lo,
            self.lo / by.hi,
            self.hi / by.lo,
            self.hi / by.hi,
        ];
        Interval::outward(
            all.iter().copied().fold(f64::INFINITY, f64::min),
            all.into_iter().fold(f64::NEG_INFINITY, f64::max),
        )
    }

    pub fn min(self, other: Interval) -> Interval {
        Interval {
            lo: self.lo.min(other.lo),
            hi: self.hi.min(other.hi),
        }
    }

    pub fn max(self, other: Interval) -> Interval {
        Interval {
            lo: self.lo.max(other.lo),
            hi: self.hi.max(other.hi),
        }
    }
}

impl Add for Interval {
    type Output = Interval;
    fn add(self, other: Interval) -> Interval {
        Interval::outward(self.lo + other.lo, self.hi + other.hi)
    }
}

impl Sub for Interval {
    type Output = Interval;
    fn sub(self, other: Interval) -> Interval {
        Interval::outward(self.lo - other.hi, self.hi - other.lo)
    }
}

impl Mul for Interval {
    type Output = Interval;
    fn mul(self, other: Interval) -> Interval {
        let all = [
            self.lo * other.lo,
            self.lo * other.hi,
            self.hi * other.lo,
            self.hi * other.hi,
        ];
        Interval::outward(
            all.iter().copied().fold(f64::INFINITY, f64::min),
            all.into_iter().fold(f64::NEG_INFINITY, f64::max),
        )
    }
}

/// A vector of intervals.
#[derive(Clone, Copy, Debug)]
pub(super) struct Vector {
    pub x: Interval,
    pub y: Interval,
}

impl Vector {
    /// From a to b.
    pub fn between(a: Point, b: Point) -> Vector {
        let part = |a: f64, b: f64| Interval::exact(b) - Interval::exact(a);
        Vector {
            x: part(a.x, b.x),
            y: part(a.y, b.y),
        }
    }

    pub fn length(self) -> Interval {
        (self.x.square() + self.y.square()).sqrt()
    }

    pub fn cross(self, other: Vector) -> Interval {
        self.x * other.y - self.y * other.x
    }

    pub fn minus(self, other: Vector) -> Vector {
        Vector {
            x: self.x - other.x,
            y: self.y - other.y,
        }
    }

    pub fn scaled(self, by: Interval) -> Vector {
        Vector {
            x: self.x * by,
            y: self.y * by,
        }
    }

    pub fn negated(self) -> Vector {
        let minus = |i: Interval| Interval {
            lo: -i.hi,
            hi: -i.lo,
        };
        Vector {
            x: minus(self.x),
            y: minus(self.y),
        }
    }

    pub fn over(self, by: Interval) -> Vector {
        Vector {
            x: self.x.over(by),
            y: self.y.over(by),
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn results_hold_what_rounding_loses() {
        let tenth = Interval::exact(0.1);
        let sum = (0..10).fold(Interval::exact(0.0), |sum, _| sum + tenth);
        assert!(sum.lo < 1.0 && 1.0 < sum.hi && sum.hi - sum.lo < 1e-14);
        let third = Interval::exact(1.0).over(Interval::exact(3.0));
        assert!(third.lo < third.hi && (third * Interval::exact(3.0)).lo <= 1.0);
        let two = Interval::exact(2.0).sqrt().square();
        assert!(two.lo <= 2.0 && 2.0 <= two.hi);
    }

    #[test]
    fn signs_are_seen_to() {
        let i = Interval { lo: -2.0, hi: 3.0 };
        assert!(i.square().lo == 0.0 && i.square().hi >= 9.0);
        let product = i * Interval { lo: -5.0, hi: 1.0 };
        assert!(product.lo <= -15.0 && product.hi >= 10.0);
    }
}
