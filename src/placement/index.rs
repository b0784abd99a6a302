//! The search's index of rows: which row allows the least radius at a place.
//!
//! A tree of boxes over the rows in their order (see [`crate::geom::tree`]); half-planes, which have no box, are looked at
//! one by one. The tree also answers, over the boundary's segments, whether a place is in the region.

use std::borrow::Cow;
use std::ops::Range;

use crate::geom::tree::{Node, RunTree, Summary, ray_meets};
use crate::geom::{Bounds, Point, Segment, predicates};
use crate::limits::{Limits, LotRows, Row};

/// Plain rows up to this many are looked at one by one, without a tree. Lots of 7 to 16 segments took a tenth fewer
/// instructions so; with 160 here, lots of a hundred took a quarter more.
const FEW_SEGMENTS: usize = 24;

/// What the point of a linear program may miss an edge by, m; climbing mends it.
pub(super) const ROUNDED_OFF_M: f64 = 1e-9;

/// What a place may lack of the distance that frees a row and still count as freed, m: above rounding, and so little that the
/// radius changes by less than the gap across it.
const FREED_M: f64 = 1e-11;

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
    /// Rows with an edge that a centre is on one side of whatever the radius: those without weight, and those that a distance
    /// frees from theirs.
    edged: Vec<u32>,
    tree: Tree,
}

enum Tree {
    /// All rows are the boundary's segments, each asking for the radius alone, and few enough to look at one by one.
    Few,
    /// The same in any number.
    Plain(RunTree<()>),
    Weighted(RunTree<Weights>),
}

impl<'a> RowIndex<'a> {
    pub fn new(limits: &'a Limits) -> RowIndex<'a> {
        let n_scanned = match limits.lot_rows {
            LotRows::HalfPlanes => limits.region.n_lot_segments(),
            LotRows::Plain | LotRows::Features => 0,
        };
        let boundary = limits.region.boundary();
        let is_plain = limits.lot_rows == LotRows::Plain && limits.listed_rows().is_empty();
        let tree = if is_plain && boundary.len() <= FEW_SEGMENTS {
            Tree::Few
        } else if is_plain {
            let node = |i: usize| Node {
                bounds: Bounds::of([boundary[i].a, boundary[i].b]),
                summary: (),
            };
            Tree::Plain(RunTree::build(boundary.len(), node))
        } else {
            let node = |i: usize| {
                let row = limits.row(i + n_scanned);
                let summary = Weights {
                    s_max: row.s,
                    w_min: row.w,
                    w_max: row.w,
                };
                Node {
                    bounds: row.feature.bounds(),
                    summary,
                }
            };
            Tree::Weighted(RunTree::build(limits.n_rows() - n_scanned, node))
        };
        let first_listed = limits.n_rows() - limits.listed_rows().len();
        let listed = (first_listed as u32..).zip(limits.listed_rows());
        let has_edge = |row: &Row| row.w == 0.0 || freed_from_m(row).is_some();
        let edged = listed
            .filter(|(_, row)| has_edge(row))
            .map(|(i, _)| i)
            .collect();
        RowIndex {
            limits,
            n_scanned,
            edged,
            tree,
        }
    }

    pub fn row(&self, i: u32) -> Cow<'a, Row> {
        self.limits.row(i as usize)
    }

    /// What row `i` asks at a place, in the form of a row of the game: w r <= d. For a plain row d is the distance beyond s;
    /// with a second condition it is the radius allowed, w = 1.
    pub fn entry(&self, i: u32, c: Point) -> f64 {
        if let Tree::Few | Tree::Plain(_) = self.tree {
            return self.limits.region.boundary()[i as usize].distance(c);
        }
        let row = self.row(i);
        let distance = row.feature.distance(c);
        match row.otherwise {
            None => distance - row.s,
            Some(_) if freed_from_m(&row).is_some_and(|from_m| distance > from_m) => f64::INFINITY,
            Some(_) => row.radius_at(distance),
        }
    }

    /// Whether a place keeps all rows without weight, and is freed to the last digit where a row counts as freed.
    pub fn keeps(&self, c: Point) -> bool {
        self.edged.iter().all(|&i| {
            let row = self.row(i);
            let distance = row.feature.distance(c);
            let counts_as_freed = freed_from_m(&row).is_some_and(|from_m| distance > from_m);
            row.radius_at(distance) >= 0.0
                && (!counts_as_freed || row.radius_at(distance) == f64::INFINITY)
        })
    }

    /// The weight that goes with [`RowIndex::entry`].
    pub fn weight(&self, i: u32) -> f64 {
        if let Tree::Few | Tree::Plain(_) = self.tree {
            return 1.0;
        }
        let row = self.row(i);
        if row.otherwise.is_none() { row.w } else { 1.0 }
    }

    /// How fast [`RowIndex::entry`] can change with the place.
    pub fn steepness(&self, i: u32) -> f64 {
        let per = |w: f64| if w > 0.0 { 1.0 / w } else { 0.0 };
        let row = self.row(i);
        row.otherwise
            .as_ref()
            .map_or(1.0, |otherwise| per(row.w).max(per(otherwise.w)))
    }

    pub fn limits(&self) -> &'a Limits {
        self.limits
    }

    /// The row that allows the least radius at `c`; `likely` rows are tried first. A row without weight counts as kept where
    /// rounding alone breaks it, since the points of linear programs lie on its edge: see [`RowIndex::keeps`]. Cost about O(log n) for rows in ring
    /// order.
    pub fn least(&self, c: Point, likely: impl Iterator<Item = u32>) -> Least {
        match &self.tree {
            Tree::Few => {
                let (distance2, i) = Segment::nearest_of(self.limits.region.boundary(), c);
                Least {
                    row: i as u32,
                    radius: distance2.sqrt(),
                }
            }
            Tree::Plain(tree) => self.least_plain(tree, c, likely),
            Tree::Weighted(tree) => self.least_weighted(tree, c, likely, false),
        }
    }

    /// The row that allows the least radius at `c`, of those without an edge.
    pub fn least_edgeless(&self, c: Point) -> Least {
        match &self.tree {
            Tree::Weighted(tree) => self.least_weighted(tree, c, std::iter::empty(), true),
            Tree::Few | Tree::Plain(_) => self.least(c, std::iter::empty()),
        }
    }

    /// The nearest boundary segment, by squared distances.
    fn least_plain(
        &self,
        tree: &RunTree<()>,
        c: Point,
        likely: impl Iterator<Item = u32>,
    ) -> Least {
        let boundary = self.limits.region.boundary();
        let mut found = 0;
        let mut best2 = f64::INFINITY;
        let mut visit = |i: usize, best2: &mut f64| {
            let distance2 = boundary[i].distance2(c);
            if distance2 < *best2 {
                (*best2, found) = (distance2, i);
            }
        };
        likely.for_each(|i| visit(i as usize, &mut best2));
        tree.nearest(
            &mut best2,
            |node| node.bounds.distance2(c),
            |run, best2| {
                let (distance2, i) = Segment::nearest_of(&boundary[run.clone()], c);
                if distance2 < *best2 {
                    (*best2, found) = (distance2, run.start + i);
                }
            },
        );
        Least {
            row: found as u32,
            radius: best2.sqrt(),
        }
    }

    fn least_weighted(
        &self,
        tree: &RunTree<Weights>,
        c: Point,
        likely: impl Iterator<Item = u32>,
        edgeless_only: bool,
    ) -> Least {
        let mut found = 0;
        let mut best = f64::INFINITY;
        let mut visit = |i: usize, best: &mut f64| {
            let row = self.limits.row(i);
            let distance = row.feature.distance(c);
            let radius = match freed_from_m(&row) {
                Some(from_m) if distance > from_m => f64::INFINITY,
                _ => row.radius_at(distance),
            };
            let freed_from_m = freed_from_m(&row);
            let has_edge = row.w == 0.0 || freed_from_m.is_some();
            let is_rounded_off =
                || row.w == 0.0 && radius < 0.0 && distance > row.s - ROUNDED_OFF_M;
            if has_edge && (edgeless_only || is_rounded_off()) {
                return;
            }
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
        tree.nearest(&mut best, lower, |run, best| {
            run.for_each(|i| visit(i + self.n_scanned, best))
        });
        Least {
            row: found as u32,
            radius: best,
        }
    }

    /// Whether `p` lies in the region, as [`crate::limits::Region::contains`] has it.
    pub fn is_in_region(&self, p: Point) -> bool {
        let region = &self.limits.region;
        if self.n_scanned > 0 || matches!(self.tree, Tree::Few) {
            return region.contains(p);
        }
        let boundary = &region.boundary()[..region.n_lot_segments()];
        let mut is_inside = false;
        let cross = |i: usize| {
            if let Some(s) = boundary.get(i) {
                is_inside ^= predicates::ray_crosses(s.a, s.b, p);
            }
        };
        match &self.tree {
            Tree::Few => {}
            Tree::Plain(tree) => tree.each(|b| ray_meets(b, p), cross),
            Tree::Weighted(tree) => tree.each(|b| ray_meets(b, p), cross),
        }
        is_inside && region.keeps(p)
    }

    /// Distance from `p` to the region's boundary, m; looks no further than `within`.
    pub fn boundary_distance(&self, p: Point, within: f64) -> f64 {
        let boundary = self.limits.region.boundary();
        let mut best = within;
        boundary[..self.n_scanned]
            .iter()
            .for_each(|s| best = best.min(s.distance(p)));
        let visit = |run: Range<usize>, best: &mut f64| {
            for s in run.filter_map(|i| boundary.get(i + self.n_scanned)) {
                *best = best.min(s.distance(p));
            }
        };
        match &self.tree {
            Tree::Few => best = best.min(Segment::nearest_of(boundary, p).0.sqrt()),
            Tree::Plain(tree) => {
                tree.nearest(&mut best, |node| node.bounds.distance2(p).sqrt(), visit)
            }
            Tree::Weighted(tree) => {
                tree.nearest(&mut best, |node| node.bounds.distance2(p).sqrt(), visit)
            }
        }
        best
    }
}

/// From which distance on a row's second condition counts as freeing it from its weight, m; `None` where none does.
pub(super) fn freed_from_m(row: &Row) -> Option<f64> {
    let otherwise = row
        .otherwise
        .as_deref()
        .filter(|otherwise| otherwise.w == 0.0)?;
    Some(otherwise.s - FREED_M)
}
