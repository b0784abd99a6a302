//! Climbing from a centre to the best one near it, and the disc round it that is thereby settled.
//!
//! Each row's condition is convex in the centre, so its tangent at the present centre lies below it: the linear program with
//! the tangents is an inner approximation, and its answer is never worse. Repeating it is Newton's method on the rows
//! that bind.

use super::index::{Least, RowIndex, freed_from_m};
use super::piece::{Triangle, Weighted};
use crate::geom::{Point, Vec2};
use crate::lp::game::{Game, GameRow};

/// Rounds of tangents. Straight features need one, curved ones four or five; beyond lie circles creeping along ties.
const MAX_ROUNDS: usize = 12;

/// A step is the last when it gains less than this, relative to the radius: ten times the rounding of a distance.
const LAST_GAIN: f64 = 1e-15 * 10.0;

/// What a step leaves between itself and the edge of a row without weight, m: such a row is kept or broken, and rounding
/// would break it. Far below the gap of 1e-9 m.
const MARGIN_M: f64 = 1e-11;

/// First reach of a step, in radii; long enough to cross a room, short enough that most steps stay in it.
const FIRST_REACH: f64 = 4.0;

/// Reach of a step that cannot leave the region: an equilateral triangle of this inradius, in radii, lies in the circle.
const SAFE_REACH: f64 = 0.499;

/// A centre in the region with the radius allowed there and the rows that carry it.
#[derive(Clone, Copy, Debug)]
pub(super) struct Spot {
    pub centre: Point,
    pub radius: f64,
    pub carrying: [Weighted; 3],
}

/// A disc in which no centre allows more than `radius`, by the rows that hold its own centre.
#[derive(Clone, Copy, Debug)]
pub(super) struct SettledDisc {
    pub centre: Point,
    pub reach: f64,
    pub radius: f64,
    pub rows: [u32; 3],
}

impl SettledDisc {
    /// Whether all of a triangle lies in the disc.
    pub fn holds(&self, t: &Triangle) -> bool {
        let reach2 = self.reach * self.reach;
        t.iter().all(|c| c.distance2(self.centre) < reach2)
    }
}

/// Climbs from `start`, which lies in the region and at which `least` holds; `size` is a radius that steps are measured by.
///
/// What comes back: a centre that allows at least as much as the start, with the rows whose tangents carry the last step.
/// Method: successive linear programs with tangents, rows found by the index; a step that leaves the region is taken again
/// with a reach that cannot.
/// Tolerance: ends when a step gains less than 1e-14 of the radius, or after 12 rounds.
pub(super) fn climb(
    index: &RowIndex,
    game: &mut Game,
    (start, least): (Point, Least),
    size: f64,
    likely: &[u32],
) -> Spot {
    let radius = if index.keeps(start) {
        least.radius
    } else {
        f64::NEG_INFINITY
    };
    let mut spot = Spot {
        centre: start,
        radius,
        carrying: [(least.row, 0.0); 3],
    };
    let mut here = least.row;
    let mut reach = FIRST_REACH;
    for _ in 0..MAX_ROUNDS {
        let scale = if spot.radius > 0.0 { spot.radius } else { size };
        let carrying = spot
            .carrying
            .iter()
            .filter(|(_, y)| *y > 0.0)
            .map(|&(row, _)| row);
        let known = std::iter::once(here)
            .chain(carrying)
            .chain(likely.iter().copied());
        let Some((step, there)) = step(index, game, spot.centre, known, reach * scale) else {
            break;
        };
        let gain = step.radius - spot.radius;
        let is_far = step.centre.distance(spot.centre) >= spot.radius;
        if is_far && !index.is_in_region(step.centre) || !index.keeps(step.centre) {
            if reach == SAFE_REACH {
                break;
            }
            reach = SAFE_REACH;
            continue;
        }
        spot.carrying = step.carrying;
        if gain > 0.0 {
            (spot.centre, spot.radius, here) = (step.centre, step.radius, there);
        }
        if gain <= LAST_GAIN * spot.radius {
            break;
        }
    }
    spot
}

/// The best centre by the tangents at `from`, within a triangle of inradius `reach_m` about it, and the row that allows
/// least there; `known` rows are in from the start.
fn step(
    index: &RowIndex,
    game: &mut Game,
    from: Point,
    mut known: impl Iterator<Item = u32>,
    reach_m: f64,
) -> Option<(Spot, u32)> {
    let domain = [(0.0, 2.0), (-3f64.sqrt(), -1.0), (3f64.sqrt(), -1.0)]
        .map(|(x, y)| Vec2::new(x, y) * reach_m);
    let tangent = |row: u32| tangent(index, row, from, &domain);
    // Adds a row that is not in the game yet, while there is room; says whether it did.
    let add = |game: &mut Game, row: u32| {
        !game.has(row) && tangent(row).is_some_and(|row| game.push(row))
    };
    game.start(known.by_ref().filter_map(tangent).find(|row| row.w > 0.0)?);
    for row in known {
        add(game, row);
    }
    loop {
        let value = game.solve();
        let offset = [0, 1, 2].map(|k| domain[k] * value.point[k]);
        let centre = from + offset[0] + offset[1] + offset[2];
        let least = index.least(centre, game.rows().iter().map(|row| row.tag));
        if least.radius >= value.bound || !add(game, least.row) {
            return Some((
                Spot {
                    centre,
                    radius: least.radius,
                    carrying: value.weights,
                },
                least.row,
            ));
        }
    }
}

/// The tangent of a row at `centre` over the triangle `domain` about it; `None` where it has none.
fn tangent(index: &RowIndex, tag: u32, centre: Point, domain: &[Vec2; 3]) -> Option<GameRow> {
    let row = index.row(tag);
    let nearest = row.feature.nearest(centre);
    let (value, slope) = match row.otherwise.as_deref() {
        None if row.w == 0.0 => (nearest.distance - row.s - MARGIN_M, 1.0),
        // Freed by its second condition: it stays so.
        Some(otherwise) if freed_from_m(&row).is_some_and(|from_m| nearest.distance > from_m) => {
            let d = domain.map(|v| nearest.distance - otherwise.s - MARGIN_M + nearest.away.dot(v));
            return Some(GameRow { d, w: 0.0, tag });
        }
        None => (nearest.distance - row.s, 1.0),
        Some(_) => (
            row.radius_at(nearest.distance),
            row.slope_at(nearest.distance),
        ),
    };
    let d = domain.map(|v| value + slope * nearest.away.dot(v));
    d.iter().all(|v| v.is_finite()).then(|| GameRow {
        d,
        w: index.weight(tag),
        tag,
    })
}

/// The disc that the rows at a spot settle, where three of them hold it from all sides.
///
/// Method: with active rows' nearest points q_i at distances d_i in directions u_i, and k the distance of the origin from
/// the border of the hull of the u_i, no centre within 2 k min d_i allows more than the greatest of the rows' radii at
/// the spot: for any v some u_i · v <= -k |v|, and |c + v - q_i| <= d_i + u_i · v + |v|² / (2 d_i).
/// A row without weight settles nothing here.
pub(super) fn settled_disc(index: &RowIndex, spot: &Spot) -> Option<SettledDisc> {
    let rows = spot.carrying.map(|(row, _)| row);
    if spot
        .carrying
        .iter()
        .any(|&(row, y)| y <= 0.0 || index.row(row).w <= 0.0)
    {
        return None;
    }
    let nearest = rows.map(|row| index.row(row).feature.nearest(spot.centre));
    let k = hull_margin(nearest.map(|n| n.away))?;
    let least = nearest
        .iter()
        .map(|n| n.reach)
        .fold(f64::INFINITY, f64::min);
    let radius = (0..3)
        .map(|i| index.row(rows[i]).radius_at(nearest[i].distance))
        .fold(f64::NEG_INFINITY, f64::max);
    // One part in 1e9 off: far above rounding, far below what would matter to a search.
    let reach = 2.0 * k * least * (1.0 - 1e-9);
    (k > 0.0 && reach > 0.0).then_some(SettledDisc {
        centre: spot.centre,
        reach,
        radius,
        rows,
    })
}

/// Distance of the origin from the border of the triangle of three unit vectors, `None` where it lies outside.
fn hull_margin(u: [Vec2; 3]) -> Option<f64> {
    let turn = (u[1] - u[0]).cross(u[2] - u[0]).signum();
    let margin = |k: usize| {
        let side = u[(k + 1) % 3] - u[k];
        turn * side.cross(-u[k]) / side.length()
    };
    let least = margin(0).min(margin(1)).min(margin(2));
    (least > 0.0).then_some(least)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_hull_margin_of_three_even_directions_is_one_half() {
        let at = |deg: f64| Vec2::new(deg.to_radians().cos(), deg.to_radians().sin());
        let margin = hull_margin([at(90.0), at(210.0), at(330.0)]);
        assert!((margin.expect("the origin lies inside") - 0.5).abs() < 1e-12);
        assert!(
            (hull_margin([at(90.0), at(330.0), at(210.0)]).expect("either order") - 0.5).abs()
                < 1e-12
        );
        assert_eq!(
            hull_margin([at(0.0), at(60.0), at(120.0)]),
            None,
            "all on one side"
        );
    }
}
