//! From a site to limits and their rows.
//!
//! A limit is one rule applied to one thing of the site: the setback of a lot line, the required distance of a keep-clear
//! area, a building line, a distance rule and one thing it names. Its rows are what a search and a check see. The order of
//! rows is fixed by the site alone: first one row for each segment of the lot's boundary, in the order of
//! [`crate::geom::Area::segments`], then one for each piece of the building lines in the lot, then all the others.

mod build;
mod feature;
mod limit;
mod region;
mod row;

pub use feature::{Feature, Nearest};
pub use limit::{Limit, Measure, Origin, Thing};
pub use region::Region;
pub use row::{Otherwise, Row};

use crate::site::{Site, SiteError};

/// Whether the lot's own rows are half-planes: they can be where the lot is convex and its setback lines meet at every
/// corner, which makes the whole problem linear in the lot lines.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LotRows {
    HalfPlanes,
    Features,
}

/// The limits of a site, their rows, and the region a centre may lie in.
#[derive(Clone, Debug)]
pub struct Limits {
    pub limits: Vec<Limit>,
    pub rows: Vec<Row>,
    pub region: Region,
    pub lot_rows: LotRows,
}

impl Limits {
    /// The limits of a site, in the order lot lines, keep-clear areas, building lines, rules.
    ///
    /// # Errors
    /// A rule whose figures or names do not hold, a building line that does not cross the lot, a keep-clear area that
    /// cannot be cut into convex pieces.
    pub fn new(site: &Site) -> Result<Limits, SiteError> {
        Limits::with_lot_rows(site, build::suitable_lot_rows(site))
    }

    /// The same with the form of the lot's rows given: for comparing two sites that differ in one distance only, or for a
    /// check by plain features.
    ///
    /// # Errors
    /// As [`Limits::new`].
    pub fn with_lot_rows(site: &Site, lot_rows: LotRows) -> Result<Limits, SiteError> {
        build::limits(site, lot_rows)
    }
}
