//! Placement: the largest circle that clears every limit, with a proof that no larger one fits.
//!
//! The certified search ([`search`]) covers the lot with triangles ([`roots`]), bounds each by a little linear program
//! ([`piece`]), climbs from what it meets ([`climb`]) and ends when no piece can hold a better centre. What leaves this
//! module has passed [`verify`], which shares no code with the search.

pub mod check;
mod climb;
mod index;
mod piece;
mod proof;
mod record;
mod relief;
mod report;
mod roots;
mod search;
mod slide;
mod spots;
mod verify;

pub use check::{CheckError, Checked, check};
pub use proof::{
    PROOF_VERSION, Proof, ProofCover, ProofDisc, ProofPiece, ProvenCircle, prove, site_hash,
};
pub use report::{BINDING_SPARE_M, LimitReport, Report, report};
pub use search::Effort;
pub use verify::{VerifyError, verified_radius};

use crate::geom::{Area, Point};
use crate::limits::Limits;
use crate::site::{Site, SiteError};
use index::RowIndex;
use search::{End, Found, Search};

/// How a placement came out.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Status {
    Fits,
    NoRoom,
    /// Work ended at the cap; the best found and the bound stand.
    CapHit,
    Cancelled,
}

/// A centre and diameter, and how large any other could be.
#[derive(Clone, Debug, PartialEq)]
pub struct Placement {
    pub status: Status,
    /// The circle found, verified; `None` where there is none.
    pub circle: Option<Circle>,
    /// No centre allows a greater diameter than this, m.
    pub upper_m: f64,
    /// Pieces looked at.
    pub n_pieces: usize,
}

/// A verified circle.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Circle {
    pub centre: Point,
    pub diameter_m: f64,
    /// How far the centre can go with nothing lost, where the best centre is not unique; `centre` is its middle.
    pub slide: Option<[Point; 2]>,
}

/// Why there is no placement to speak of.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum PlaceError {
    #[error(transparent)]
    Site(#[from] SiteError),
    #[error(transparent)]
    Verify(#[from] VerifyError),
}

/// The largest circle of a site, with the site's limits as its rows have it.
///
/// What comes back: a verified circle, and a bound on the diameter of every other; their difference is at most
/// `effort.gap_m` unless the cap was hit or the coordinates' own rounding is larger.
/// Method: branch and bound over triangles, each bounded by a linear program on the rows that matter (module head).
/// Convention: site plane, metres. `snap` moves a centre to one that can be written down; it is applied before the circle
/// is verified.
/// Degenerate input: where no centre clears all limits the status says so, with the bound.
/// Tolerance: `effort`. Cost: about O(n log n) for n rows, more where there are many near ties.
///
/// # Errors
/// A site that has no limits to speak of, or a circle that did not pass verification.
pub fn largest(
    limits: &Limits,
    site: &Site,
    effort: Effort,
    snap: &dyn Fn(Point) -> Point,
) -> Result<Placement, PlaceError> {
    largest_within(limits, site.lot.area(), effort, snap)
}

/// The largest circle of a lot with nothing but its boundary: as [`largest`], without lot lines or limits that a report
/// would name.
///
/// # Errors
/// A circle that did not pass verification.
pub fn largest_on_bare_lot(
    lot: &Area,
    effort: Effort,
    snap: &dyn Fn(Point) -> Point,
) -> Result<Placement, PlaceError> {
    largest_within(&Limits::of_bare_lot(lot)?, lot, effort, snap)
}

fn largest_within(
    limits: &Limits,
    lot: &Area,
    effort: Effort,
    snap: &dyn Fn(Point) -> Point,
) -> Result<Placement, PlaceError> {
    let index = RowIndex::new(limits);
    let (found, _) = Search::new(&index, effort, None).run(&roots::roots(lot, limits));
    finished(&found, &index, snap)
}

/// Turns what a search found into a verified placement.
fn finished(
    found: &Found,
    index: &RowIndex,
    snap: &dyn Fn(Point) -> Point,
) -> Result<Placement, PlaceError> {
    let limits = index.limits();
    let upper_m = 2.0 * found.upper;
    let circle = found.best.map(|spot| {
        let slide = slide::slide(index, &spot);
        let wished = slide.map_or(spot.centre, |[from, to]| from.midpoint(to));
        // Moving a centre on the edge of a row without weight may break it; the spot itself keeps it.
        let centre = [snap(wished), wished]
            .into_iter()
            .find(|&c| index.keeps(c))
            .unwrap_or(spot.centre);
        let claimed = index
            .least(centre, std::iter::empty())
            .radius
            .min(spot.radius);
        let radius = verified_radius(limits, centre, claimed)?;
        Ok::<_, PlaceError>(Circle {
            centre,
            diameter_m: 2.0 * radius,
            slide,
        })
    });
    let status = match found.end {
        End::Cancelled => Status::Cancelled,
        End::Cap => Status::CapHit,
        End::Done if circle.is_some() => Status::Fits,
        End::Done => Status::NoRoom,
    };
    Ok(Placement {
        status,
        circle: circle.transpose()?,
        upper_m,
        n_pieces: found.n_pieces,
    })
}
