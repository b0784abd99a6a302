//! Relief: what a small reduction of one required distance would bring.
//!
//! At the best centre, multipliers y >= 0 on the rows that bind, with sum_i y_i = 1 and sum_i y_i grad g_i = 0, prove it best.
//! When each row's radius grows at the rate a_i, the best radius grows at the least of sum_i y_i a_i over all such y, and
//! where best centres tie, at the greatest of these over them. The multipliers need not be unique: in a square, relief of
//! one side gains nothing, though some y puts weight on it.

use crate::geom::{Point, yard};
use crate::limits::{Feature, Limit, Limits, Origin, Thing};
use crate::lp::model::{Compare, Model, ModelRow};
use crate::site::{Site, YardReading};

/// Rows whose radius is within this of the least one bind, m: above the rounding of a polished centre, below any spare that
/// would be told apart on paper.
const BINDS_M: f64 = 1e-8;

/// How far the weighted gradients may miss zero, for a centre that is best up to rounding; tried in this order.
const BALANCE: [f64; 3] = [1e-9, 1e-7, 1e-5];

/// Step of the one-sided difference by which a yard's corners are followed, m. They move linearly with the setback, and
/// the difference is extrapolated, so that the error is of the order of the step squared over the distance.
const STEP_M: f64 = 1e-4;

/// What relief of a limit brings at the centres given.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub(super) struct Gain {
    /// The limit's multiplier in a proof that the centre is best: sum of y over its rows.
    pub multiplier: f64,
    /// Growth of the diameter per metre of relief, one-sided.
    pub gain: f64,
}

/// The gains of all limits at one best centre, in the order of [`Limits::limits`].
///
/// What comes back: zero for a limit that does not bind, that asks for nothing, or whose relief moves no row that binds.
/// Method: a linear program for each limit that moves a binding row (module head).
/// Cost: O(rows) and a small linear program a limit that binds.
pub(super) fn gains(limits: &Limits, site: &Site, centre: Point) -> Vec<Gain> {
    let mut gains = vec![Gain::default(); limits.limits.len()];
    let binding = Binding::at(limits, centre);
    let Some((balance, y)) = BALANCE
        .into_iter()
        .find_map(|b| Some((b, binding.weights(b, None)?)))
    else {
        return gains;
    };
    for (&row, &y) in binding.rows.iter().zip(&y) {
        gains[limits.row(row).limit as usize].multiplier += y;
    }
    for (i, limit) in limits.limits.iter().enumerate() {
        let rates: Vec<f64> = binding
            .rows
            .iter()
            .map(|&row| rate(limits, site, (i, limit), row, centre))
            .collect();
        if rates.iter().any(|&rate| rate > 0.0)
            && let Some(y) = binding.weights(balance, Some(&rates))
        {
            let growth: f64 = y.iter().zip(&rates).map(|(y, rate)| y * rate).sum();
            gains[i].gain = 2.0 * growth.max(0.0);
        }
    }
    gains
}

/// The rows that bind at a centre and the gradients of their radii.
struct Binding {
    rows: Vec<usize>,
    gradients: Vec<[f64; 2]>,
}

impl Binding {
    fn at(limits: &Limits, centre: Point) -> Binding {
        let least = limits
            .rows()
            .map(|row| row.radius(centre))
            .fold(f64::INFINITY, f64::min);
        let rows: Vec<usize> = (0..limits.n_rows())
            .filter(|&i| limits.row(i).radius(centre) <= least + BINDS_M)
            .collect();
        let gradient = |&i: &usize| {
            let nearest = limits.row(i).feature.nearest(centre);
            let slope = limits.row(i).slope_at(nearest.distance);
            [slope * nearest.away.x, slope * nearest.away.y]
        };
        Binding {
            gradients: rows.iter().map(gradient).collect(),
            rows,
        }
    }

    /// Multipliers that balance the gradients within `balance`; with `rates`, those with the least growth.
    fn weights(&self, balance: f64, rates: Option<&[f64]>) -> Option<Vec<f64>> {
        let n = self.rows.len();
        let part = |k: usize| self.gradients.iter().map(|g| g[k]).collect::<Vec<f64>>();
        let row = |coefficients, compare, right| ModelRow {
            coefficients,
            compare,
            right,
        };
        let mut rows = vec![row(vec![1.0; n], Compare::Equal, 1.0)];
        for k in [0, 1] {
            rows.push(row(part(k), Compare::AtMost, balance));
            rows.push(row(part(k), Compare::AtLeast, -balance));
        }
        let objective = rates.map_or(vec![0.0; n], |rates| {
            rates.iter().map(|rate| -rate).collect()
        });
        Some(
            Model {
                objective,
                lower: vec![0.0; n],
                rows,
            }
            .maximise()
            .ok()?
            .x,
        )
    }
}

/// How fast a row's radius grows with relief of a limit, at a fixed centre.
fn rate(
    limits: &Limits,
    site: &Site,
    (index, limit): (usize, &Limit),
    row: usize,
    centre: Point,
) -> f64 {
    let site_row = limits.row(row);
    let asks = limit.measure.fixed_m > 0.0
        || limit.measure.share > 0.0
        || limit.measure.floor_m.is_some_and(|f| f > 0.0);
    let is_drawn =
        matches!(site_row.feature, Feature::Convex(_)) && row < limits.region.n_lot_segments();
    match limit.thing {
        _ if !asks => 0.0,
        Thing::LotLine(line) if limit.origin == Origin::Setback && is_drawn => {
            let slope = site_row.slope_at(site_row.feature.distance(centre));
            slope * yard_rate(site, line, row, centre)
        }
        _ if site_row.limit as usize == index => {
            site_row.slope_at(site_row.feature.distance(centre))
        }
        _ => 0.0,
    }
}

/// How fast the distance to the drawn yard of a segment grows as the setback of a lot line shrinks; yards run on to meet
/// their neighbours' lines, so that a line's relief moves the yards beside it too.
fn yard_rate(site: &Site, line: usize, segment: usize, centre: Point) -> f64 {
    let lot = &site.lot;
    let setback_m = lot.lines()[line].setback_m;
    let step_m = STEP_M.min(0.5 * setback_m);
    if step_m <= 0.0 || !touches(site, line, segment) {
        return 0.0;
    }
    let distance = |relief_m: f64| drawn_yard_distance(site, line, segment, centre, relief_m);
    let at = |step: f64| (distance(step) - distance(0.0)) / step;
    2.0 * at(0.5 * step_m) - at(step_m)
}

/// Whether a segment or one of its neighbours belongs to a lot line.
fn touches(site: &Site, line: usize, segment: usize) -> bool {
    let Some((base, n)) = ring_of(site, segment) else {
        return false;
    };
    let i = segment - base;
    let of = |i: usize| site.lot.line_of_segments()[base + i] as usize;
    [of((i + n - 1) % n), of(i), of((i + 1) % n)].contains(&line)
}

/// First segment and length of the ring that a segment belongs to.
fn ring_of(site: &Site, segment: usize) -> Option<(usize, usize)> {
    let mut base = 0;
    for ring in site.lot.area().rings() {
        if segment < base + ring.len() {
            return Some((base, ring.len()));
        }
        base += ring.len();
    }
    None
}

fn drawn_yard_distance(
    site: &Site,
    line: usize,
    segment: usize,
    centre: Point,
    relief_m: f64,
) -> f64 {
    let lot = &site.lot;
    let Some((base, _)) = ring_of(site, segment) else {
        return 0.0;
    };
    let setback_m = |i: usize| {
        let relief_m = if lot.line_of_segments()[base + i] as usize == line {
            relief_m
        } else {
            0.0
        };
        lot.boundary(base + i).setback_m - relief_m
    };
    let mut first = 0;
    for ring in lot.area().rings() {
        if first == base {
            let drawn = yard::yard(ring, setback_m, segment - base);
            let feature = drawn.map(|yard| Feature::Convex(yard.corners()[..].into()));
            return feature.map_or_else(
                || ring.segment(segment - base).distance(centre),
                |f| f.distance(centre),
            );
        }
        first += ring.len();
    }
    0.0
}

/// Distance from a centre to the yard of a lot line in the parallel reading, m; `None` where the line has no yard there.
pub(super) fn yard_distance_m(site: &Site, line: usize, centre: Point) -> Option<f64> {
    let lot_line = &site.lot.lines()[line];
    if site.reading != YardReading::Parallel || lot_line.setback_m <= 0.0 {
        return None;
    }
    let base: usize = site
        .lot
        .area()
        .rings()
        .take(lot_line.ring)
        .map(|r| r.len())
        .sum();
    let n = site.lot.area().rings().nth(lot_line.ring)?.len();
    let segments = (0..lot_line.len).map(|k| base + (lot_line.first + k) % n);
    Some(
        segments
            .map(|s| drawn_yard_distance(site, line, s, centre, 0.0))
            .fold(f64::INFINITY, f64::min),
    )
}
