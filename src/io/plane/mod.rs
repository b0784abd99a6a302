//! The site plane: metres, x east and y north, near the origin; to it from input coordinates and back.
//!
//! **Longitude and latitude** (WGS84, degrees) go through a transverse Mercator (EPSG method 9807, series by Krüger to
//! the sixth order, crate `proj4rs`) with its central meridian and origin in the middle of the lot and scale 1 there.
//! Distances in the plane are then distances on the ellipsoid, times 1 + x²/(2 R²) for a place x metres east or west of
//! the middle, R about 6,370 km. The error of a distance is so at most
//!
//! | reach from the middle | of the distance | over 100 m |
//! | --- | --- | --- |
//! | 100 m | 1.3e-10 | 0.00002 mm |
//! | 1 km | 1.3e-8 | 0.002 mm |
//! | 5 km | 3.1e-7 | 0.03 mm |
//! | 50 km | 3.1e-5 | 3 mm |
//!
//! always to the large side, and a lot that reaches further than [`MAX_REACH_M`] is refused. Coordinates come with a
//! rounding noise of a few nanometres. **The ellipsoid is not the ground**: a height of h above it stretches the ground
//! by h / R, about 1 part in 6,400 per kilometre (16 mm over 100 m at 1,000 m), which is not corrected: distances on the
//! ground are that much longer than those in the plane.
//!
//! **Plane coordinates** are scaled to metres and moved by a whole number of units near the middle of the lot. The move
//! is made only where it is exact, so metres lose nothing.

use std::sync::LazyLock;

use proj4rs::{proj::Proj, transform::transform};

use crate::geom::validate::{Problem, RawPolygon};
use crate::geom::{Bounds, Point};
use crate::units::LengthUnit;

/// A lot may reach this far from its middle, m. The distance error is 3.1e-5 there, 3 mm over 100 m; ten times as far it
/// would be 0.3 m, more than a setback's tolerance. In practice this catches plane coordinates taken for degrees.
pub const MAX_REACH_M: f64 = 50_000.0;
/// Latitudes beyond this are refused, degrees: within 111 km of a pole the middle of a box of longitudes means nothing.
pub const MAX_LATITUDE_DEG: f64 = 89.0;
/// Metres per degree of latitude, roughly; used to say how large a lot is that was refused.
const DEGREE_M_APPROX: f64 = 111_000.0;

/// Decimals of degrees in messages: 1 mm.
const LON_LAT_DECIMALS: usize = 8;
/// Decimals of plane coordinates in messages: 1 mm in metres.
const PLANE_DECIMALS: usize = 3;

/// What the coordinates of a file are.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum Coordinates {
    /// Longitude and latitude in degrees, WGS84, in this order.
    #[default]
    LonLat,
    /// Plane coordinates, x and y, in this unit.
    Plane(LengthUnit),
}

/// Why coordinates have no place in a site plane.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum PlaneError {
    #[error("the coordinates {x}, {y} are not finite")]
    NotFinite { x: f64, y: f64 },
    #[error(
        "{x}, {y} is no longitude and latitude (-180 to 180, -90 to 90, in this order): for plane coordinates use --plane"
    )]
    OutOfRange { x: f64, y: f64 },
    #[error(
        "latitude {0} is within a degree of a pole, where longitudes crowd: bring the lot in plane coordinates"
    )]
    NearPole(f64),
    #[error(
        "taken as longitude and latitude the lot is about {km:.0} km across; at most {} km can be measured in one plane. For plane coordinates use --plane", 2.0 * MAX_REACH_M / 1000.0
    )]
    TooWide { km: f64 },
    #[error("there are no coordinates")]
    Empty,
}

/// The way between input coordinates and the site plane.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Plane {
    /// Transverse Mercator on WGS84 with this central meridian, and the northing of the origin's latitude from the
    /// equator.
    LonLat {
        longitude0_deg: f64,
        latitude0_deg: f64,
        northing0_m: f64,
    },
    /// Input coordinates in `unit`, the site's origin at `origin` in them.
    Given { unit: LengthUnit, origin: Point },
}

/// A place in the site plane and in input coordinates.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Snapped {
    /// In input coordinates; plane coordinates printed with all digits and read again give `site` to the bit.
    pub input: Point,
    /// In the site plane.
    pub site: Point,
}

impl Plane {
    /// The plane for a lot given in input coordinates.
    ///
    /// # Errors
    /// For longitude and latitude: what is not finite, out of range, near a pole, or too wide. Plane coordinates are left
    /// to validation.
    pub fn around(lot: &[RawPolygon], coordinates: Coordinates) -> Result<Plane, PlaneError> {
        let corners = || {
            lot.iter()
                .flat_map(|p| &p.rings)
                .flat_map(|ring| ring.iter().copied())
        };
        match coordinates {
            Coordinates::LonLat => Plane::lon_lat(corners()),
            Coordinates::Plane(unit) => Ok(Plane::given(unit, corners())),
        }
    }

    fn lon_lat(corners: impl Iterator<Item = Point>) -> Result<Plane, PlaneError> {
        let mut bounds = Bounds::EMPTY;
        let mut near = None;
        for p in corners {
            check_degrees(p)?;
            if p.y.abs() > MAX_LATITUDE_DEG {
                return Err(PlaneError::NearPole(p.y));
            }
            // A lot across the 180th meridian hangs together once its longitudes are counted on.
            let x = counted_on(p.x, *near.get_or_insert(p.x));
            bounds = bounds.with(Point::new(x, p.y));
        }
        if bounds.is_empty() {
            return Err(PlaneError::Empty);
        }
        let middle = bounds.centre();
        let plane = Plane::lon_lat_at(middle);
        let width_m = bounds.width() * DEGREE_M_APPROX * middle.y.to_radians().cos();
        let across_m = width_m.max(bounds.height() * DEGREE_M_APPROX);
        if across_m > 2.0 * MAX_REACH_M {
            return Err(PlaneError::TooWide {
                km: across_m / 1000.0,
            });
        }
        Ok(plane)
    }

    /// The plane of longitude and latitude with its origin at `middle`, degrees.
    fn lon_lat_at(middle: Point) -> Plane {
        Plane::LonLat {
            longitude0_deg: middle.x,
            latitude0_deg: middle.y,
            northing0_m: from_degrees(0.0, middle.y).map_or(f64::NAN, |p| p.y),
        }
    }

    fn given(unit: LengthUnit, corners: impl Iterator<Item = Point>) -> Plane {
        let bounds = Bounds::of(corners.filter(|p| p.is_finite()));
        // Exact by Sterbenz's lemma: the difference of two numbers within a factor of two of each other has no rounding.
        let origin = |min: f64, max: f64| {
            let (middle, half) = (0.5 * (min + max), 0.5 * (max - min));
            let near = middle.abs() < 4.0 * half;
            if near || !middle.is_finite() {
                0.0
            } else {
                middle.round()
            }
        };
        let origin = if bounds.is_empty() {
            Point::ORIGIN
        } else {
            Point::new(
                origin(bounds.min.x, bounds.max.x),
                origin(bounds.min.y, bounds.max.y),
            )
        };
        Plane::Given { unit, origin }
    }

    /// The site point of input coordinates.
    ///
    /// # Errors
    /// For longitude and latitude: what is not finite or out of range. Plane coordinates never fail; what is not finite
    /// stays so.
    pub fn to_site(&self, input: Point) -> Result<Point, PlaneError> {
        match *self {
            Plane::LonLat {
                longitude0_deg,
                northing0_m,
                ..
            } => {
                check_degrees(input)?;
                let east_deg = counted_on(input.x, longitude0_deg) - longitude0_deg;
                let p = from_degrees(east_deg, input.y).ok_or(PlaneError::OutOfRange {
                    x: input.x,
                    y: input.y,
                })?;
                Ok(Point::new(p.x, p.y - northing0_m))
            }
            Plane::Given { unit, origin } => Ok(Point::new(
                unit.to_m(input.x - origin.x),
                unit.to_m(input.y - origin.y),
            )),
        }
    }

    /// Polygons in the site plane, corner for corner.
    ///
    /// # Errors
    /// As [`Plane::to_site`], at the first corner that fails.
    pub fn to_site_polygons(&self, input: &[RawPolygon]) -> Result<Vec<RawPolygon>, PlaneError> {
        let ring = |ring: &Vec<Point>| ring.iter().map(|&p| self.to_site(p)).collect();
        let polygon = |p: &RawPolygon| -> Result<RawPolygon, PlaneError> {
            let rings = p.rings.iter().map(ring).collect::<Result<_, _>>()?;
            Ok(RawPolygon { rings })
        };
        input.iter().map(polygon).collect()
    }

    /// The input coordinates of a site point, rounded to f64. [`Plane::snap`] also gives the site point these name.
    pub fn from_site(&self, site: Point) -> Point {
        match *self {
            Plane::LonLat {
                longitude0_deg,
                northing0_m,
                ..
            } => {
                let p = to_degrees(Point::new(site.x, site.y + northing0_m));
                Point::new(wrapped(p.x + longitude0_deg), p.y)
            }
            Plane::Given { unit, origin } => Point::new(
                unit.from_m(site.x) + origin.x,
                unit.from_m(site.y) + origin.y,
            ),
        }
    }

    /// What to verify and what to print for a place. Plane coordinates: the nearest point that they name exactly, so that
    /// what is read again is what was verified; it moves by half a unit in their last place. Longitudes and latitudes: the
    /// place itself, since their last digit (2e-9 m) is finer than the projection's own bound.
    pub fn snap(&self, site: Point) -> Snapped {
        let input = self.from_site(site);
        match self {
            Plane::LonLat { .. } => Snapped { input, site },
            Plane::Given { .. } => Snapped {
                input,
                site: self.to_site(input).unwrap_or(site),
            },
        }
    }

    /// A problem of validation as a sentence, with its place in input coordinates where those of the site differ.
    pub fn say(&self, problem: &Problem) -> String {
        let moved = match *self {
            Plane::LonLat { .. } => true,
            Plane::Given { unit, origin } => unit != LengthUnit::Metre || origin != Point::ORIGIN,
        };
        let decimals = match self {
            Plane::LonLat { .. } => LON_LAT_DECIMALS,
            Plane::Given { .. } => PLANE_DECIMALS,
        };
        match problem.at().map(|at| self.from_site(at)) {
            Some(Point { x, y }) if moved && x.is_finite() && y.is_finite() => {
                format!("{problem} In the file's coordinates: {x:.decimals$}, {y:.decimals$}.")
            }
            _ => problem.to_string(),
        }
    }

    /// Longitude and latitude of a site point in degrees; `None` where the input is plane.
    pub fn lon_lat_of(&self, site: Point) -> Option<Point> {
        matches!(self, Plane::LonLat { .. }).then(|| self.from_site(site))
    }
}

fn check_degrees(p: Point) -> Result<(), PlaneError> {
    let Point { x, y } = p;
    if !p.is_finite() {
        Err(PlaneError::NotFinite { x, y })
    } else if x.abs() > 180.0 || y.abs() > 90.0 {
        Err(PlaneError::OutOfRange { x, y })
    } else {
        Ok(())
    }
}

/// The longitude within half a turn of `near_deg`, exact where nothing has to be added.
fn counted_on(longitude_deg: f64, near_deg: f64) -> f64 {
    if longitude_deg - near_deg > 180.0 {
        longitude_deg - 360.0
    } else if longitude_deg - near_deg < -180.0 {
        longitude_deg + 360.0
    } else {
        longitude_deg
    }
}

/// The longitude in -180 to 180.
fn wrapped(longitude_deg: f64) -> f64 {
    counted_on(longitude_deg, 0.0)
}

/// One projection serves every lot: the central meridian is taken off the longitude before, the origin's northing after.
static TRANSVERSE_MERCATOR: LazyLock<Proj> = LazyLock::new(|| {
    Proj::from_proj_string("+proj=tmerc +lat_0=0 +lon_0=0 +k=1 +x_0=0 +y_0=0 +ellps=WGS84")
        .expect("the definition is well formed")
});
static DEGREES: LazyLock<Proj> = LazyLock::new(|| {
    Proj::from_proj_string("+proj=longlat +ellps=WGS84").expect("the definition is well formed")
});

/// Easting from the central meridian and northing from the equator, m.
fn from_degrees(east_deg: f64, latitude_deg: f64) -> Option<Point> {
    let mut p = (east_deg.to_radians(), latitude_deg.to_radians(), 0.0);
    transform(&DEGREES, &TRANSVERSE_MERCATOR, &mut p).ok()?;
    let p = Point::new(p.0, p.1);
    p.is_finite().then_some(p)
}

/// Longitude from the central meridian and latitude in degrees; NaN where there is none.
fn to_degrees(p: Point) -> Point {
    let mut p = (p.x, p.y, 0.0);
    match transform(&TRANSVERSE_MERCATOR, &DEGREES, &mut p) {
        Ok(()) => Point::new(p.0.to_degrees(), p.1.to_degrees()),
        Err(_) => Point::new(f64::NAN, f64::NAN),
    }
}

#[cfg(test)]
mod tests;
