//! The site in GeoJSON: a lot with its setbacks, what must be kept clear, the structure and the rules.
//!
//! A bare Polygon or MultiPolygon or a single Feature is a lot. In a FeatureCollection every feature says what it is by
//! the property `use`:
//!
//! | `use` | geometry | properties |
//! | --- | --- | --- |
//! | `lot`, one | Polygon, MultiPolygon | `name`; `setback_m`: one figure for every lot line, those of holes too; or `setbacks_m`: one per segment of the outer ring in file order (of all outer rings, one after another), holes get 0; `roles`: one per segment likewise (front, side, rear, street-side, other), with the setbacks by role where no figures are given |
//! | `keep-clear` | any but a collection | `class`, `required_m`, `name`; on points `diameter_m` for a round thing. A MultiPoint or MultiLineString is several things of the same name |
//! | `building-line` | LineString | `kept`: left or right, `name` |
//! | `context` | any | passed over |
//!
//! Members beside `features`: `setbacks` {`front`: m, ..}; `structure` {`kind`, `height_m`, `rings`: [{`name`, `width_m`,
//! `share_of_diameter`, `inside`}]}; `rules` [{`from`: "shell", "centre" or {"ring": name}; `to`: "lot-lines",
//! "building-lines", "keep-clear", a role, a class, "line 4", or {"role": ..}, {"class": ..}, {"line": 4}; `fixed_m`,
//! `share_of_diameter`, `share_of_height`, `at_least_m`, `need_not_exceed_m`, `citation`}]; `yards`: parallel or rounded.
//!
//! What ends in `_m` is in metres whatever the unit of the coordinates. Features may carry foreign properties, except
//! those that end in `_m` or are a slip away from a name of ours; our own objects may carry none. Every bad value is
//! reported where it stands, all of them at once. Limits: one lot; a file is held in memory, about six times its size.

mod envelope;
mod lot;
mod members;
mod rules;
pub(super) mod setbacks;
mod things;

use crate::geom::Point;
use crate::io::plane::{Coordinates, Plane};
use crate::site::{Role, Site, YardReading};

/// How a site file is to be read, and what overrides it. Distances in metres.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct Options {
    pub coordinates: Coordinates,
    /// Instead of the file's `yards`.
    pub reading: Option<YardReading>,
    /// For every lot line, holes' included, instead of the file's figures.
    pub setback_m: Option<f64>,
    /// For lot lines with the role, instead of the file's figures and of `setback_m`.
    pub front_m: Option<f64>,
    pub side_m: Option<f64>,
    pub rear_m: Option<f64>,
}

impl Options {
    fn of_role(&self, role: Role) -> Option<f64> {
        match role {
            Role::Front => self.front_m,
            Role::Side => self.side_m,
            Role::Rear => self.rear_m,
            Role::StreetSide | Role::Other => None,
        }
    }
}

/// A site that was read.
#[derive(Clone, Debug)]
pub struct Imported {
    pub site: Site,
    pub plane: Plane,
    /// The lot's own name.
    pub name: Option<String>,
    /// Repairs that were made and what a planner should know; not errors.
    pub problems: Vec<String>,
}

/// Why there is no site; every problem is a sentence with its place.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum SiteJsonError {
    /// The file cannot be read, or its members are wrong.
    #[error("{}", .0.join("\n"))]
    BadInput(Vec<String>),
    /// All members are in order, but the lot's boundary makes no area.
    #[error("{}", .0.join("\n"))]
    InvalidLot(Vec<String>),
}

/// As many problems are reported; a file of a million bad features should not be a million lines, each searched for its
/// place.
const MAX_PROBLEMS: usize = 100;

/// Reads a site.
///
/// # Errors
/// Every bad member, or else every problem of the lot's boundary, up to a hundred.
pub fn read(bytes: &[u8], options: &Options) -> Result<Imported, SiteJsonError> {
    read_all(bytes, options).map_err(|mut error| {
        let (SiteJsonError::BadInput(problems) | SiteJsonError::InvalidLot(problems)) = &mut error;
        if problems.len() > MAX_PROBLEMS {
            problems.truncate(MAX_PROBLEMS);
            problems.push("there are more problems after these".to_owned());
        }
        error
    })
}

fn read_all(bytes: &[u8], options: &Options) -> Result<Imported, SiteJsonError> {
    let draft = envelope::open(bytes, options.coordinates).map_err(SiteJsonError::BadInput)?;
    let mut problems = Vec::new();
    let mut notes = Vec::new();

    // 1. What stands by itself.
    let structure = rules::structure(&draft.top, &mut problems);
    let by_role = setbacks::ByRole::read(draft.top.setbacks.as_ref(), &mut problems);
    let reading = rules::reading(&draft.top, &mut problems);
    let plan = lot::plan(&draft, &by_role, options, &mut problems, &mut notes);
    let Some(plan) = plan else {
        return Err(SiteJsonError::BadInput(problems));
    };

    // 2. The plane, which only the lot decides, and what is drawn in it.
    let plane = Plane::around(&plan.polygons, options.coordinates);
    let plane = plane.map_err(|e| match problems.as_slice() {
        [] => SiteJsonError::InvalidLot(vec![format!("{}: {e}", plan.place)]),
        _ => SiteJsonError::BadInput(std::mem::take(&mut problems)),
    })?;
    let keep_clear = things::keep_clear(&draft, &plane, &mut problems);
    let building_lines = things::building_lines(&draft, &plane, &mut problems);
    if !problems.is_empty() {
        // Rules are read for their own problems too, so that a planner sees all at once.
        rules::rules(&draft.top, &structure, &mut problems);
        return Err(SiteJsonError::BadInput(problems));
    }

    // 3. The lot, then the rules, which name its lines.
    let name = plan.name.clone();
    let lot = plan.into_lot(&plane, &mut notes)?;
    let rules = rules::rules(&draft.top, &structure, &mut problems);
    let site = Site {
        lot,
        keep_clear,
        building_lines,
        structure,
        rules,
        reading: options.reading.or(reading).unwrap_or_default(),
    };
    rules::check_targets(&site, &mut problems, &mut notes);
    things::note_missing_distances(&draft, &site, &mut notes);
    if problems.is_empty() {
        Ok(Imported {
            site,
            plane,
            name,
            problems: notes,
        })
    } else {
        Err(SiteJsonError::BadInput(problems))
    }
}

/// Things further than this from the lot's middle are refused, m: more than the earth's girth, so the coordinates are
/// wrong, and far below where squares of distances lose their digits.
const MAX_AWAY_M: f64 = 5e7;

/// Positions in the site plane, or a problem with its place.
fn site_points(
    input: &[Point],
    plane: &Plane,
    place: &str,
    problems: &mut Vec<String>,
) -> Option<Vec<Point>> {
    let mut points = Vec::with_capacity(input.len());
    for &p in input {
        match plane.to_site(p) {
            Ok(site) if site.x.abs() <= MAX_AWAY_M && site.y.abs() <= MAX_AWAY_M => {
                points.push(site);
            }
            Ok(_) => {
                problems.push(format!("{place}: {}, {} is too far from the lot", p.x, p.y));
                return None;
            }
            Err(e) => {
                problems.push(format!("{place}: {e}"));
                return None;
            }
        }
    }
    Some(points)
}

#[cfg(test)]
mod tests;
