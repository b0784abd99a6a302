//! The search's index of rows: which row allows the least radius at a place.
//!
//! A tree of boxes over the rows in their order (see [`crate::geom::tree`]); half-planes, which have no box, are looked at
//! one by one. The tree also answers, over the boundary's segments, whether a place is in the region.

use crate::geom::tree::{Node, RunTree, Summary, ray_meets};
use crate::geom::{Point, Segment, predicates};
use crate::limits::{Feature, Limits, LotRows, Row};

/// The extremes of w and s over rows: a bound on what any of them allows at a distance.
#[derive(Clone, Copy, Debug)]
struct Weights {
    s_max: f64,
    w_min: f64,
    w_max: f64,
}

impl Summary for Weights {
    const NONE: Weights = Weights {
        s_max: f64::NEG_INFINITY,
        w_min: f64::INFINITY,
        w_max: 0.0,
    };

    fn join(self, other: Weights) -> Weights {
        Weights {
            s_max: self.s_max.max(other.s_max),
            w_min: self.w_min.min(other.w_min),
            w_max: self.w_max.max(other.w_max),
        }
    }
}

/// A row and the radius it allows at the place asked about.
#[derive(Clone, Copy, Debug)]
pub(super) struct Least {
    pub row: u32,
    pub radius: f64,
}

/// The index, borrowing the limits it speaks of.
pub(super) struct RowIndex<'a> {
    limits: &'a Limits,
    /// Rows before this one are half-planes and looked at one by one.
    n_scanned: usize,
    /// The rows where each is a boundary segment that asks for the radius alone.
    plain: Option<&'a [Segment]>,
    tree: RunTree<Weights>,
}

impl<'a> RowIndex<'a> {
    pub fn new(limits: &'a Limits) -> RowIndex<'a> {
        let n_scanned = match limits.lot_rows {
            LotRows::HalfPlanes => limits.region.n_lot_segments(),
            LotRows::Features => 0,
        };
        let rows = &limits.rows[n_scanned..];
        let boundary = limits.region.boundary();
        let is_plain =
            |row: &Row| row.w == 1.0 && row.s == 0.0 && matches!(row.feature, Feature::Segment(_));
        let plain = (rows.len() == boundary.len() && rows.iter().all(is_plain)).then_some(boundary);
        let node = |row: &Row| Node {
            bounds: row.feature.bounds(),
            summary: Weights {
                s_max: row.s,
                w_min: row.w,
                w_max: row.w,
            },
        };
        RowIndex {
            limits,
            n_scanned,
            plain,
            tree: RunTree::build(rows.len(), |i| node(&rows[i])),
        }
    }

    pub fn row(&self, i: u32) -> &'a Row {
        &self.limits.rows[i as usize]
    }

    pub fn limits(&self) -> &'a Limits {
        self.limits
    }

    /// The row that allows the least radius at `c`; `likely` rows are tried first. Cost about O(log n) for rows in ring
    /// order.
    pub fn least(&self, c: Point, likely: impl Iterator<Item = u32>) -> Least {
        match self.plain {
            Some(boundary) => self.least_plain(boundary, c, likely),
            None => self.least_weighted(c, likely),
        }
    }

    /// The nearest boundary segment, by squared distances.
    fn least_plain(
        &self,
        boundary: &[Segment],
        c: Point,
        likely: impl Iterator<Item = u32>,
    ) -> Least {
        let mut found = 0;
        let mut best2 = f64::INFINITY;
        let mut visit = |i: usize, best2: &mut f64| {
            let distance2 = boundary[i].distance2(c);
            if distance2 < *best2 {
                (*best2, found) = (distance2, i);
            }
        };
        likely.for_each(|i| visit(i as usize, &mut best2));
        self.tree
            .nearest(&mut best2, |node| node.bounds.distance2(c), visit);
        Least {
            row: found as u32,
            radius: best2.sqrt(),
        }
    }

    fn least_weighted(&self, c: Point, likely: impl Iterator<Item = u32>) -> Least {
        let rows = &self.limits.rows;
        let mut found = 0;
        let mut best = f64::INFINITY;
        let mut visit = |i: usize, best: &mut f64| {
            let radius = rows[i].radius(c);
            if radius < *best {
                (*best, found) = (radius, i);
            }
        };
        likely.for_each(|i| visit(i as usize, &mut best));
        (0..self.n_scanned).for_each(|i| visit(i, &mut best));
        let lower = |node: &Node<Weights>| {
            let beyond = node.bounds.distance2(c).sqrt() - node.summary.s_max;
            let w = if beyond >= 0.0 {
                node.summary.w_max
            } else {
                node.summary.w_min
            };
            if w > 0.0 {
                beyond / w
            } else {
                f64::INFINITY.copysign(beyond)
            }
        };
        self.tree
            .nearest(&mut best, lower, |i, best| visit(i + self.n_scanned, best));
        Least {
            row: found as u32,
            radius: best,
        }
    }

    /// Whether `p` lies in the region, as [`crate::limits::Region::contains`] has it.
    pub fn is_in_region(&self, p: Point) -> bool {
        let region = &self.limits.region;
        if self.n_scanned > 0 {
            return region.contains(p);
        }
        let boundary = &region.boundary()[..region.n_lot_segments()];
        let mut is_inside = false;
        self.tree.each(
            |b| ray_meets(b, p),
            |i| {
                if let Some(s) = boundary.get(i) {
                    is_inside ^= predicates::ray_crosses(s.a, s.b, p);
                }
            },
        );
        is_inside && region.keeps(p)
    }

    /// Distance from `p` to the region's boundary, m; looks no further than `within`.
    pub fn boundary_distance(&self, p: Point, within: f64) -> f64 {
        let boundary = self.limits.region.boundary();
        let mut best = within;
        boundary[..self.n_scanned]
            .iter()
            .for_each(|s| best = best.min(s.distance(p)));
        self.tree.nearest(
            &mut best,
            |node| node.bounds.distance2(p).sqrt(),
            |i, best| {
                if let Some(s) = boundary.get(i + self.n_scanned) {
                    *best = best.min(s.distance(p));
                }
            },
        );
        best
    }
}

/// What a row asks at a place, in the form of a row of the game: w r <= d. For a plain row d is the distance beyond s; with
/// a second condition it is the radius allowed, w = 1.
pub(super) fn game_entry(row: &Row, c: Point) -> f64 {
    match row.otherwise {
        None => row.feature.distance(c) - row.s,
        Some(_) => row.radius(c),
    }
}

/// The weight that goes with [`game_entry`].
pub(super) fn game_weight(row: &Row) -> f64 {
    if row.otherwise.is_none() { row.w } else { 1.0 }
}

/// How fast [`game_entry`] can change with the place.
pub(super) fn steepness(row: &Row) -> f64 {
    let per = |w: f64| if w > 0.0 { 1.0 / w } else { 0.0 };
    row.otherwise
        .as_ref()
        .map_or(1.0, |otherwise| per(row.w).max(per(otherwise.w)))
}
