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

use std::borrow::Cow;

use crate::geom::Area;
use crate::site::{Site, SiteError};

/// Whether the lot's own rows are half-planes: they can be where the lot is convex and its setback lines meet at every
/// corner, which makes the whole problem linear in the lot lines.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum LotRows {
    HalfPlanes,
    /// Segments that ask for the radius alone, as they are where no lot line has a setback; kept as the boundary they are.
    Plain,
    /// Yards, or segments with their setback.
    Features,
}

/// The limits of a site, their rows, and the region a centre may lie in.
#[derive(Clone, Debug)]
pub struct Limits {
    pub limits: Vec<Limit>,
    /// All rows, but for those of the lot where they are plain.
    listed: Vec<Row>,
    n_plain: usize,
    /// The limit of each plain row; empty for a bare lot, which has no limits to name.
    plain_limits: Vec<u32>,
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

    /// The rows of a lot with nothing but its boundary, for a search that names no limits.
    ///
    /// # Errors
    /// As [`Limits::new`].
    pub fn of_bare_lot(lot: &Area) -> Result<Limits, SiteError> {
        build::bare_lot(lot)
    }

    pub fn n_rows(&self) -> usize {
        self.n_plain + self.listed.len()
    }

    /// Row `i`, which is below [`Limits::n_rows`].
    pub fn row(&self, i: usize) -> Cow<'_, Row> {
        let n_plain = self.n_plain;
        if i < n_plain {
            let feature = Feature::Segment(self.region.boundary()[i]);
            {
                let limit = self.plain_limits.get(i).copied().unwrap_or(0);
                Cow::Owned(Row::new(feature, 1.0, 0.0, limit))
            }
        } else {
            Cow::Borrowed(&self.listed[i - n_plain])
        }
    }

    /// All rows in their order.
    pub fn rows(&self) -> impl Iterator<Item = Cow<'_, Row>> {
        (0..self.n_rows()).map(|i| self.row(i))
    }

    /// The rows after the lot's plain ones.
    pub fn listed_rows(&self) -> &[Row] {
        &self.listed
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
