//! The placement as it is printed: rounded, and still true.
//!
//! The centre is rounded first. The diameter is then what plain geometry allows there, which is at most what was found and
//! the gap it was found to, rounded down, and stepped down in its last digit until every printed clearance is at least its printed required distance, where required rounds up, clearance
//! and spare down. Where the usual decimals do not allow that (a lot of millimetres, a fall zone touched to the last bit)
//! more are printed.

use crate::geom::Point;
use crate::io::plane::Plane;
use crate::limits::{Limit, Limits, Origin};
use crate::placement::verified_radius;
use crate::site::{Site, YardReading};
use crate::units::{LengthUnit, Rounding};

/// Decimals of lengths, tried in turn: centimetres first; nine are the proven gap in metres.
const DECIMALS: [usize; 5] = [2, 3, 4, 6, 9];
/// The diameter is printed with at least this many units of its last digit, so that rounding takes less than 1 %.
const LEAST_UNITS: f64 = 100.0;
/// Centres are printed to a tenth of the last digit of lengths in plane coordinates, and to degrees of about that size
/// (1e-8 degrees of latitude are 1.1 mm).
const PLANE_EXTRA: usize = 1;
const DEGREES_EXTRA: usize = 6;
/// Lengths are known to this, m: it is the gap of the proof. What lies so near to a printable figure is that figure, so
/// that a lot of 20 ft with setbacks of 1 ft has 18.00 ft and not 17.99, though f64 has no 0.3048. Ten times as much could
/// be seen in nine decimals.
const KNOWN_TO_M: f64 = 1e-9;
/// Steps down before more decimals are tried. A rounded figure in each of two columns costs two or three.
const MAX_STEPS: i32 = 30;

/// A circle as printed, with the limits it was checked against.
pub struct Printed {
    /// Decimals of lengths.
    pub decimals: usize,
    /// In input coordinates.
    pub centre: [String; 2],
    pub diameter: String,
    pub diameter_m: f64,
    /// In the order of [`Limits::limits`].
    pub limits: Vec<PrintedLimit>,
}

/// The figures of a limit as printed.
pub struct PrintedLimit {
    pub required: String,
    pub clearance: String,
    pub spare: String,
    pub spare_m: f64,
}

/// A limit's distances at a centre, which no diameter changes, m.
struct Distances {
    to_thing_m: f64,
    /// By the rows, which ask for no share of the diameter where this is used: to the yard, in the parallel reading.
    to_rows_m: f64,
    is_drawn_yard: bool,
}

/// Rounds circles of one site.
pub struct Printer<'a> {
    pub site: &'a Site,
    pub limits: &'a Limits,
    pub plane: &'a Plane,
    pub unit: LengthUnit,
}

impl Printer<'_> {
    /// The circle with this centre (input coordinates) and diameter as it can be printed; `None` where no rounding holds.
    pub fn circle(&self, centre: Point, diameter_m: f64) -> Option<Printed> {
        let fits = |decimals: &&usize| {
            let unit = 10f64.powi(-(**decimals as i32));
            self.unit.from_m(diameter_m) >= LEAST_UNITS * unit
        };
        let mut tried = DECIMALS.iter().filter(fits);
        tried.find_map(|&decimals| self.with_decimals(centre, diameter_m, decimals))
    }

    fn with_decimals(&self, centre: Point, diameter_m: f64, decimals: usize) -> Option<Printed> {
        let (texts, at, allowed_m) = self.rounded_centre(centre, decimals)?;
        let distances = self.distances(at);
        let from_m = self.unit.from_m(allowed_m.min(diameter_m + KNOWN_TO_M));
        let step = 10f64.powi(-(decimals as i32));
        (0..MAX_STEPS).find_map(|k| {
            let lowered_m = self.unit.to_m(from_m - f64::from(k) * step);
            let diameter = self.down(lowered_m, decimals);
            let diameter_m = self.unit.to_m(diameter.parse().ok()?);
            let rows = self.limits.limits.iter().zip(&distances);
            let limits = rows.map(|(limit, d)| self.limit(limit, d, diameter_m, decimals));
            let limits = limits.collect::<Option<Vec<_>>>()?;
            (diameter_m > 0.0).then(|| Printed {
                decimals,
                centre: texts.clone(),
                diameter,
                diameter_m,
                limits,
            })
        })
    }

    /// The best of the nine printable centres round `centre`: its texts, its site point, and the diameter allowed there.
    fn rounded_centre(&self, centre: Point, decimals: usize) -> Option<([String; 2], Point, f64)> {
        let decimals = decimals
            + match self.plane {
                Plane::LonLat { .. } => DEGREES_EXTRA,
                Plane::Given { .. } => PLANE_EXTRA,
            };
        let step = 10f64.powi(-(decimals as i32));
        let near = |v: f64| [0.0, -step, step].map(|d| format!("{:.decimals$}", v + d));
        let (xs, ys) = (near(centre.x), near(centre.y));
        let mut best: Option<([String; 2], Point, f64)> = None;
        for x in &xs {
            for y in &ys {
                let input = Point::new(x.parse().ok()?, y.parse().ok()?);
                let Ok(at) = self.plane.to_site(input) else {
                    continue;
                };
                let allowed_m = self.allowed_diameter_m(at);
                if best
                    .as_ref()
                    .is_none_or(|(_, _, best_m)| allowed_m > *best_m)
                {
                    best = Some(([x.clone(), y.clone()], at, allowed_m));
                }
            }
        }
        best.filter(|(_, _, allowed_m)| *allowed_m > 0.0)
    }

    /// What plain geometry allows at a centre, m; nothing outside the region.
    fn allowed_diameter_m(&self, at: Point) -> f64 {
        let by_rows = self.limits.rows().map(|row| row.radius(at));
        let by_boundary = self.limits.region.boundary().iter().map(|s| s.distance(at));
        let least = by_rows.chain(by_boundary).fold(f64::INFINITY, f64::min);
        verified_radius(self.limits, at, least).map_or(0.0, |radius_m| 2.0 * radius_m)
    }

    fn distances(&self, at: Point) -> Vec<Distances> {
        let mut to_rows_m = vec![f64::INFINITY; self.limits.limits.len()];
        for row in self.limits.rows() {
            if let Some(least) = to_rows_m.get_mut(row.limit as usize) {
                *least = least.min(row.feature.distance(at) - row.s);
            }
        }
        let is_parallel = self.site.reading == YardReading::Parallel;
        let limits = self.limits.limits.iter().zip(to_rows_m);
        limits
            .map(|(limit, to_rows_m)| Distances {
                to_thing_m: limit.thing.distance_m(self.site, at),
                to_rows_m,
                is_drawn_yard: is_parallel
                    && limit.origin == Origin::Setback
                    && limit.measure.fixed_m > 0.0,
            })
            .collect()
    }

    /// A limit's printed figures, if they hold for the diameter.
    fn limit(
        &self,
        limit: &Limit,
        distances: &Distances,
        diameter_m: f64,
        decimals: usize,
    ) -> Option<PrintedLimit> {
        let start_m = limit.measure.start_radius_m(diameter_m);
        let required_m = limit.measure.required_m(diameter_m);
        let clearance_m = distances.to_thing_m - start_m.unwrap_or(0.0);
        let spare_m = if distances.is_drawn_yard {
            distances.to_rows_m - 0.5 * diameter_m
        } else {
            clearance_m - required_m
        };
        let required = self
            .unit
            .format(required_m - KNOWN_TO_M, decimals, Rounding::Up);
        let clearance = self.down(clearance_m, decimals);
        let spare = self.down(spare_m, decimals);
        let figure = |text: &str| text.parse::<f64>().ok();
        // A yard by parallels may end before the lot line does; then the distance to the line itself says nothing.
        let says_nothing = distances.is_drawn_yard && clearance_m < required_m;
        let is_void = start_m.is_none();
        let is_clear = says_nothing || figure(&clearance)? >= figure(&required)?;
        let holds = is_clear && figure(&spare)? >= 0.0;
        (holds || is_void).then_some(PrintedLimit {
            required,
            clearance,
            spare,
            spare_m,
        })
    }

    /// Rounded down to decimals of the unit.
    fn down(&self, length_m: f64, decimals: usize) -> String {
        self.unit
            .format(length_m + KNOWN_TO_M, decimals, Rounding::Down)
    }
}
