//! Verification of a placement by plain geometry: every row, every boundary segment, one after another.
//!
//! Shares the definition of the rows with the search and nothing else: no index, no linear program.

use crate::geom::{Point, Segment};
use crate::limits::Limits;

/// Why a placement does not hold.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum VerifyError {
    #[error(
        "the centre ({x:.6}, {y:.6}) lies outside the lot or behind a building line; the placement is withheld"
    )]
    Outside { x: f64, y: f64 },
    #[error(
        "the boundary allows a radius of {allowed} m where {claimed} m was claimed; the placement is withheld"
    )]
    LeavesRegion { allowed: f64, claimed: f64 },
    #[error(
        "limit {limit} allows a radius of {allowed} m where {claimed} m was claimed; the placement is withheld"
    )]
    Broken {
        limit: u32,
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
    let nearest2 = |segments: &[Segment]| {
        segments
            .iter()
            .map(|s| s.distance2(centre))
            .fold(f64::INFINITY, f64::min)
    };
    // The shell stays in the region whatever the rows ask; for plain rows that is all they ask.
    let mut least = nearest2(limits.region.boundary()).sqrt().min(claimed);
    let mut tightest = None;
    for (i, row) in limits.listed_rows().iter().enumerate() {
        let allowed = row.radius(centre);
        if allowed < least {
            (least, tightest) = (allowed, Some(i));
        }
    }
    let scale = centre.x.abs().max(centre.y.abs()).max(claimed);
    if least >= claimed - ROUNDING * scale {
        return Ok(least);
    }
    let (allowed, limit) = (least, tightest.map(|i| limits.listed_rows()[i].limit + 1));
    Err(match limit {
        None => VerifyError::LeavesRegion { allowed, claimed },
        Some(limit) => VerifyError::Broken {
            limit,
            allowed,
            claimed,
        },
    })
}
