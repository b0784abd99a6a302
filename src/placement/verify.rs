//! Verification of a placement by plain geometry: every row, every boundary segment, one after another.
//!
//! Shares the definition of the rows with the search and nothing else: no index, no linear program.

use crate::geom::Point;
use crate::limits::{Limits, LotRows};

/// Why a placement does not hold.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum VerifyError {
    #[error(
        "the centre ({x:.6}, {y:.6}) lies outside the lot or behind a building line; the placement is withheld"
    )]
    Outside { x: f64, y: f64 },
    #[error(
        "row {row} allows a radius of {allowed} m where {claimed} m was claimed; the placement is withheld"
    )]
    Broken {
        row: usize,
        allowed: f64,
        claimed: f64,
    },
}

/// What a claimed radius may exceed a recomputed one by, relative to the coordinates: rounding of a distance in two orders
/// of operations. The smaller of the two is what counts.
const ROUNDING: f64 = 1e-13;

/// The greatest radius that plain geometry allows at `centre`, where `claimed` was found.
///
/// What comes back: the least over all rows and all boundary segments, at most `claimed`.
/// Method: brute force; the side by exact predicates.
/// Units: metres. Cost: O(rows + boundary segments).
///
/// # Errors
/// When the centre is not in the region, or a row allows less than was claimed by more than rounding.
pub fn verified_radius(limits: &Limits, centre: Point, claimed: f64) -> Result<f64, VerifyError> {
    if !limits.region.contains(centre) {
        return Err(VerifyError::Outside {
            x: centre.x,
            y: centre.y,
        });
    }
    let mut least = claimed;
    let mut tightest = 0;
    for (i, row) in limits.rows.iter().enumerate() {
        let allowed = row.radius(centre);
        if allowed < least {
            (least, tightest) = (allowed, i);
        }
    }
    // The shell stays in the region whatever the rows ask; rows that are segments or yards have said so already.
    let boundary = limits.region.boundary();
    let unsaid = if limits.lot_rows == LotRows::HalfPlanes {
        boundary.len()
    } else {
        0
    };
    for (i, segment) in boundary[..unsaid].iter().enumerate() {
        let allowed = segment.distance(centre);
        if allowed < least {
            (least, tightest) = (allowed, i);
        }
    }
    let scale = centre.x.abs().max(centre.y.abs()).max(claimed);
    if least < claimed - ROUNDING * scale {
        return Err(VerifyError::Broken {
            row: tightest,
            allowed: least,
            claimed,
        });
    }
    Ok(least)
}
