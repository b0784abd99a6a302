//! Settled discs, recomputed.
//!
//! With rows held at the centre c by points q_i at distances d_i in directions u_i, and k the distance of the origin from
//! the border of the hull of the u_i: for any v some u_i · v <= -k |v|, and |c + v - q_i| <= d_i + u_i · v + |v|² / (2 d_i),
//! so that inside 2 k min d_i no centre is farther from all three than c is.

use super::super::proof::ProofDisc;
use super::interval::{Interval, Vector};
use super::rows::{Held, Rows};
use crate::geom::Point;

/// A disc whose rows were found to settle it.
pub(super) struct Disc {
    centre: Point,
    /// A lower bound of 2 k min d_i, m.
    reach: f64,
}

impl Disc {
    /// The disc of a proof, when its rows hold and settle it below `upper`.
    pub fn of(disc: &ProofDisc, rows: &Rows, upper: f64) -> Result<Disc, String> {
        let centre = Point::new(disc.centre[0], disc.centre[1]);
        if !centre.is_finite() {
            return Err("its centre is no place".into());
        }
        let [a, b, c] = disc.rows.map(|row| rows.held(row, centre));
        let held = [a?, b?, c?];
        let k = margin(&held).ok_or("its rows do not hold the centre from all sides")?;
        let nearest = held
            .iter()
            .map(|h| h.distance.lo)
            .fold(f64::INFINITY, f64::min);
        let radius = held
            .iter()
            .map(|h| h.radius)
            .fold(f64::NEG_INFINITY, f64::max)
            + rows.sliver_m();
        if radius > upper {
            return Err(format!(
                "its rows allow {radius} m at the centre, not {upper} m"
            ));
        }
        let reach = (2.0 * k * nearest).next_down().next_down();
        Ok(Disc { centre, reach })
    }

    /// Whether a place lies inside, for certain.
    pub fn holds(&self, p: Point) -> bool {
        Vector::between(self.centre, p).length().hi < self.reach
    }
}

/// A lower bound of the distance of the origin from the border of the hull of the directions, where it lies inside.
fn margin(held: &[Held; 3]) -> Option<f64> {
    let u = [&held[0].away, &held[1].away, &held[2].away];
    let least = |sign: f64| {
        let side = |k: usize| {
            let side = u[(k + 1) % 3].minus(*u[k]);
            let turned = side.cross(u[k].negated()) * Interval::exact(sign);
            let length = side.length();
            if length.lo > 0.0 {
                turned.over(length).lo
            } else {
                f64::NEG_INFINITY
            }
        };
        side(0).min(side(1)).min(side(2))
    };
    let margin = least(1.0).max(least(-1.0));
    (margin > 0.0).then_some(margin)
}
