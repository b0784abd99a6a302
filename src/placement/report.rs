//! What there is to say of a placement: every limit's clearance and spare, what relief would bring, other spots, and what
//! the other reading of a yard would give.

use super::index::RowIndex;
use super::relief::{Gain, gains, yard_distance_m};
use super::spots::other_spots;
use super::{Circle, Effort, PlaceError, Placement, largest};
use crate::geom::Point;
use crate::limits::{Limit, Limits, Origin, Thing};
use crate::site::{Site, YardReading};

/// A limit binds when it has no more spare than this, m.
pub const BINDING_SPARE_M: f64 = 1e-6;

/// Diameters of best spots that differ by less tie, m.
const TIE_M: f64 = 1e-8;

/// Places looked at along a slide when relief is weighed: the binding lot lines may change along it.
const SLIDE_PLACES: usize = 9;

/// One limit at the placement.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct LimitReport {
    /// Index in [`Limits::limits`].
    pub limit: usize,
    pub required_m: f64,
    /// From the circle the rule names to the thing itself.
    pub clearance_m: f64,
    /// Clearance beyond the required distance; for a yard drawn by parallels, from the shell to the yard.
    pub spare_m: f64,
    pub is_binding: bool,
    /// Its multiplier in a proof that the centre is best.
    pub multiplier: f64,
    /// Metres of diameter per metre of relief, one-sided; 0 where nothing is required.
    pub relief_gain: f64,
}

/// Everything to say of a placement beside the circle.
#[derive(Clone, Debug, PartialEq)]
pub struct Report {
    /// In the order of [`Limits::limits`].
    pub limits: Vec<LimitReport>,
    /// The next best distinct spots, largest first.
    pub other_spots: Vec<Circle>,
    /// The largest diameter in the other reading of a yard; `None` where there is no room in it.
    pub other_reading_diameter_m: Option<f64>,
}

/// The report of a placement that came from the same limits and site.
///
/// Method: plain geometry for clearances; small linear programs for relief; climbs from places all over the lot for the other
/// spots, which are verified but not proven to be the next best.
/// Cost: a second search for the other reading, O(rows) beside it.
///
/// # Errors
/// As [`largest`].
pub fn report(
    limits: &Limits,
    site: &Site,
    placement: &Placement,
    effort: Effort,
    snap: &dyn Fn(Point) -> Point,
) -> Result<Report, PlaceError> {
    let index = RowIndex::new(limits);
    let spots = match &placement.circle {
        Some(circle) => other_spots(&index, site, circle, snap),
        None => Vec::new(),
    };
    let limit_reports = match &placement.circle {
        Some(circle) => limit_reports(limits, site, circle, &spots),
        None => Vec::new(),
    };
    let other = Site {
        reading: match site.reading {
            YardReading::Parallel => YardReading::Rounded,
            YardReading::Rounded => YardReading::Parallel,
        },
        ..site.clone()
    };
    let other_placement = largest(&Limits::new(&other)?, &other, effort, snap)?;
    let other_reading_diameter_m = other_placement.circle.map(|circle| circle.diameter_m);
    Ok(Report {
        limits: limit_reports,
        other_spots: spots,
        other_reading_diameter_m,
    })
}

fn limit_reports(
    limits: &Limits,
    site: &Site,
    circle: &Circle,
    spots: &[Circle],
) -> Vec<LimitReport> {
    let here = gains(limits, site, circle.centre);
    let mut best = here.clone();
    for centre in tied_centres(circle, spots) {
        let there = gains(limits, site, centre);
        best.iter_mut()
            .zip(there)
            .for_each(|(best, there)| best.gain = best.gain.max(there.gain));
    }
    let all = limits.limits.iter().enumerate().zip(here.iter().zip(best));
    all.map(|((i, limit), (here, best))| {
        limit_report(
            site,
            circle,
            (i, limit),
            Gain {
                gain: best.gain,
                ..*here
            },
        )
    })
    .collect()
}

/// Best centres beside the circle's own: along its slide, and at spots as large.
fn tied_centres(circle: &Circle, spots: &[Circle]) -> Vec<Point> {
    let mut centres = Vec::new();
    if let Some([from, to]) = circle.slide {
        let last = (SLIDE_PLACES - 1) as f64;
        centres.extend((0..SLIDE_PLACES).map(|k| from.lerp(to, k as f64 / last)));
    }
    centres.extend(
        spots
            .iter()
            .filter(|s| s.diameter_m >= circle.diameter_m - TIE_M)
            .map(|s| s.centre),
    );
    centres
}

fn limit_report(
    site: &Site,
    circle: &Circle,
    (index, limit): (usize, &Limit),
    gain: Gain,
) -> LimitReport {
    let required_m = limit.measure.required_m(circle.diameter_m);
    let start_m = limit.measure.start_radius_m(circle.diameter_m);
    let clearance_m = limit.thing.distance_m(site, circle.centre) - start_m.unwrap_or(0.0);
    let to_yard_m = match (limit.origin, limit.thing) {
        (Origin::Setback, Thing::LotLine(line)) => yard_distance_m(site, line, circle.centre),
        _ => None,
    };
    let spare_m = to_yard_m.map_or(clearance_m - required_m, |distance_m| {
        distance_m - 0.5 * circle.diameter_m
    });
    LimitReport {
        limit: index,
        required_m,
        clearance_m,
        spare_m,
        is_binding: start_m.is_some() && spare_m < BINDING_SPARE_M,
        multiplier: gain.multiplier,
        relief_gain: gain.gain,
    }
}
