//! The circle of a proof, by plain geometry: in the region, and clear of every row.

use super::super::proof::ProvenCircle;
use super::super::verified_radius;
use crate::geom::Point;
use crate::limits::Limits;

/// Whether the circle fits.
pub(super) fn check(claimed: &ProvenCircle, limits: &Limits) -> Result<(), String> {
    let centre = Point::new(claimed.centre[0], claimed.centre[1]);
    let radius = 0.5 * claimed.diameter_m;
    if !centre.is_finite() || !radius.is_finite() || radius <= 0.0 {
        return Err("its centre or diameter is no figure".into());
    }
    let allowed = verified_radius(limits, centre, radius).map_err(|error| error.to_string())?;
    if allowed < radius {
        return Err(format!(
            "plain geometry allows a radius of {allowed} m, not {radius} m"
        ));
    }
    Ok(())
}
