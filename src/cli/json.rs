//! The JSON object of `place --json`. Its members, their order and their meaning are documented in [`super::help`]; figures
//! are unrounded.

use serde::Serialize;

use super::args::reading_name;
use super::outcome::Outcome;
use crate::geom::Point;
use crate::placement::Status;
use crate::site::YardReading;

#[derive(Serialize)]
pub struct Object {
    status: &'static str,
    yards: &'static str,
    diameter_m: Option<f64>,
    other_reading_diameter_m: Option<f64>,
    upper_m: Option<f64>,
    gap_m: Option<f64>,
    centre: Option<[f64; 2]>,
    centre_lonlat: Option<[f64; 2]>,
    area_m2: Option<f64>,
    limits: Vec<LimitObject>,
    other_spots: Vec<SpotObject>,
    slide: Option<SlideObject>,
    pieces: usize,
    solve_us: Option<f64>,
    problems: Vec<String>,
}

#[derive(Serialize)]
struct LimitObject {
    name: String,
    required_m: f64,
    clearance_m: f64,
    spare_m: f64,
    binding: bool,
    relief_gain: f64,
}

#[derive(Serialize)]
struct SpotObject {
    centre: [f64; 2],
    diameter_m: f64,
}

#[derive(Serialize)]
struct SlideObject {
    from: [f64; 2],
    to: [f64; 2],
}

fn pair(p: Point) -> [f64; 2] {
    [p.x, p.y]
}

impl Object {
    pub fn of(outcome: &Outcome) -> Object {
        let site = &outcome.imported.site;
        let placement = &outcome.placement;
        let circle = placement.circle;
        let input = |p: Point| pair(outcome.input_of(p));
        let centre = circle.map(|c| c.centre);
        let is_lon_lat = centre.and_then(|c| outcome.plane().lon_lat_of(c)).is_some();
        let slide = circle.and_then(|c| c.slide);
        Object {
            status: status_name(placement.status),
            yards: reading_name(site.reading),
            diameter_m: circle.map(|c| c.diameter_m),
            other_reading_diameter_m: outcome.report.other_reading_diameter_m,
            upper_m: Some(placement.upper_m),
            gap_m: circle.map(|c| (placement.upper_m - c.diameter_m).max(0.0)),
            centre: centre.map(input),
            centre_lonlat: centre.filter(|_| is_lon_lat).map(input),
            area_m2: Some(site.lot.area().area_m2()),
            limits: limit_objects(outcome),
            other_spots: outcome
                .report
                .other_spots
                .iter()
                .map(|spot| SpotObject {
                    centre: input(spot.centre),
                    diameter_m: spot.diameter_m,
                })
                .collect(),
            slide: slide.map(|[from, to]| SlideObject {
                from: input(from),
                to: input(to),
            }),
            pieces: placement.n_pieces,
            solve_us: Some(outcome.solve_us),
            problems: outcome.imported.problems.clone(),
        }
    }

    /// The object of a file whose lot makes no area.
    pub fn of_invalid_lot(reading: YardReading, problems: Vec<String>) -> Object {
        Object {
            status: "invalid-lot",
            yards: reading_name(reading),
            diameter_m: None,
            other_reading_diameter_m: None,
            upper_m: None,
            gap_m: None,
            centre: None,
            centre_lonlat: None,
            area_m2: None,
            limits: Vec::new(),
            other_spots: Vec::new(),
            slide: None,
            pieces: 0,
            solve_us: None,
            problems,
        }
    }

    /// One line.
    ///
    /// # Errors
    /// None that is known: every member has a place in JSON.
    pub fn line(&self) -> Result<String, serde_json::Error> {
        serde_json::to_string(self).map(|text| text + "\n")
    }
}

fn limit_objects(outcome: &Outcome) -> Vec<LimitObject> {
    let of = |r: &crate::placement::LimitReport| {
        let limit = outcome.limits.limits.get(r.limit)?;
        Some(LimitObject {
            name: limit.title(&outcome.imported.site),
            required_m: r.required_m,
            clearance_m: r.clearance_m,
            spare_m: r.spare_m,
            binding: r.is_binding,
            relief_gain: r.relief_gain,
        })
    };
    outcome.report.limits.iter().filter_map(of).collect()
}

fn status_name(status: Status) -> &'static str {
    match status {
        Status::Fits => "fits",
        Status::NoRoom => "no-room",
        Status::CapHit => "cap-hit",
        Status::Cancelled => "cancelled",
    }
}
