//! The certified search: pieces with bounds, the best bound first, bisected until none may hold a better centre.
//!
//! A piece is dropped when its bound is no better than what was found, when a settled disc holds it, or when it lies
//! outside the region. What is left at the end bounds every centre of the lot.

use std::cmp::Ordering;
use std::collections::BinaryHeap;
use std::sync::atomic::{AtomicBool, Ordering as Memory};

use super::climb::{SettledDisc, Spot, climb, settled_disc};
use super::index::{Least, RowIndex};
use super::piece::{Handed, Looked, Piece, Triangle, halves, longest_side2, look};
use super::record::{Leaf, Record};
use super::roots::{Cover, Roots};
use crate::geom::Point;
use crate::lp::game::Game;

/// What a search may use, and when it is content.
#[derive(Clone, Copy, Debug)]
pub struct Effort<'a> {
    /// Greatest gap between the diameter and its bound, m.
    pub gap_m: f64,
    /// Most pieces looked at.
    pub max_pieces: usize,
    /// Set from elsewhere to end the search early.
    pub cancel: Option<&'a AtomicBool>,
}

impl Default for Effort<'_> {
    /// A gap of 1e-9 m and two million pieces: some seconds, which no lot but a hostile one takes.
    fn default() -> Self {
        Effort {
            gap_m: 1e-9,
            max_pieces: 2_000_000,
            cancel: None,
        }
    }
}

/// How a search ended.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub(super) enum End {
    Done,
    Cap,
    Cancelled,
}

/// What a search found.
pub(super) struct Found {
    pub best: Option<Spot>,
    /// No centre of the region allows more, m.
    pub upper: f64,
    pub n_pieces: usize,
    pub end: End,
}

/// A share of the gap in which the search drops pieces, so that rounding of bounds has room in the rest. In radii: half of
/// the gap in diameter.
const DROP_SHARE: f64 = 0.5 * 0.8;

/// A point whose radius comes this near to its piece's bound, relative to it, needs no climbing: rounding.
const EXACT: f64 = 1e-14;

/// A half of a box is cut unseen while its longest side is more than this many radii of the best circle: bounds of such
/// pieces rarely drop them. 1.7 and 2.5 took a few in a hundred more instructions on lots with holes.
const HOPELESS: f64 = 2.1;

/// A piece that is to be cut is climbed from, though no better than the best, when it comes this near to it: its disc then
/// settles another room that is about as good.
const NEAR_TIE: f64 = 0.98;

/// Room for the pieces that a lot of a hundred corners keeps, taken at once.
const USUAL_PIECES: usize = 48;

/// Discs kept at the most: they are looked through one by one for every piece.
const MAX_DISCS: usize = 80;

/// Near ties that are climbed to at the most: discs are looked through one by one.
const MAX_CLIMBED: usize = 64;

/// Units in the last place that a bound may be off by: a distance takes about ten operations.
const UNITS_A_BOUND: u16 = 16;

/// Pieces between two looks at the cancel flag.
const CANCEL_EVERY: usize = 256;

/// A search in progress.
pub(super) struct Search<'a> {
    index: &'a RowIndex<'a>,
    effort: Effort<'a>,
    may_be_outside: bool,
    is_boxed: bool,
    game: Game,
    /// All pieces ever kept; the heap orders those still open.
    pieces: Vec<Piece>,
    heap: BinaryHeap<ByBound>,
    discs: Vec<SettledDisc>,
    best: Option<Spot>,
    /// Triples of rows whose common spot has been climbed to as a near tie.
    climbed: Vec<[u32; 3]>,
    dropped: f64,
    /// Most cuts above a piece.
    deepest: u16,
    /// How fast any bound used can change with the place, 1 for plain distances.
    steepest: f64,
    n_pieces: usize,
    record: Option<Record>,
}

/// A bound and the index of its piece, in the order of the heap: greatest bound first, ties in the order of looking.
struct ByBound(f64, u32);

impl PartialEq for ByBound {
    fn eq(&self, other: &Self) -> bool {
        self.cmp(other) == Ordering::Equal
    }
}
impl Eq for ByBound {}
impl PartialOrd for ByBound {
    fn partial_cmp(&self, other: &Self) -> Option<Ordering> {
        Some(self.cmp(other))
    }
}
impl Ord for ByBound {
    fn cmp(&self, other: &Self) -> Ordering {
        self.0.total_cmp(&other.0).then(other.1.cmp(&self.1))
    }
}

impl<'a> Search<'a> {
    pub fn new(index: &'a RowIndex<'a>, effort: Effort<'a>, record: Option<Record>) -> Search<'a> {
        Search {
            index,
            effort,
            may_be_outside: false,
            is_boxed: false,
            game: Game::new(),
            pieces: Vec::new(),
            heap: BinaryHeap::new(),
            discs: Vec::new(),
            best: None,
            climbed: Vec::new(),
            dropped: 0.0,
            deepest: 0,
            steepest: 1.0,
            n_pieces: 0,
            record,
        }
    }

    /// Runs to the end.
    pub fn run(mut self, roots: &Roots) -> (Found, Option<Record>) {
        self.is_boxed = roots.cover == Cover::Box;
        self.may_be_outside = self.is_boxed || self.index.limits().region.is_cut();
        self.start(roots);
        let mut end = End::Done;
        while let Some(ByBound(_, i)) = self.heap.pop() {
            let piece = self.pieces[i as usize];
            if piece.bound <= self.enough() {
                self.drop_bounded(&piece);
                continue;
            }
            if let Some(early) = self.must_end() {
                self.drop_bounded(&piece);
                end = early;
                break;
            }
            self.cut(&piece);
        }
        for ByBound(_, i) in std::mem::take(&mut self.heap) {
            let piece = self.pieces[i as usize];
            self.drop_bounded(&piece);
        }
        let upper = self.best_radius().max(self.dropped) + self.sliver(roots);
        (
            Found {
                best: self.best,
                upper,
                n_pieces: self.n_pieces,
                end,
            },
            self.record,
        )
    }

    /// What a radius can change across the slivers that rounded midpoints leave between pieces, and by the rounding of the
    /// distances a bound is made of; a few units in the last place a cut.
    fn sliver(&self, roots: &Roots) -> f64 {
        let size = roots
            .triangles
            .iter()
            .flatten()
            .map(|c| c.x.abs().max(c.y.abs()))
            .fold(0.0, f64::max);
        size * f64::EPSILON * f64::from(self.deepest + UNITS_A_BOUND) * self.steepest
    }

    /// Takes in the roots, the largest first, so that the first spots climbed to are good ones.
    fn start(&mut self, roots: &Roots) {
        let sides = (0..)
            .zip(&roots.triangles)
            .map(|(i, t)| (longest_side2(t), i));
        let mut order: Vec<(f64, u32)> = sides.collect();
        order.sort_unstable_by(|a, b| b.0.total_cmp(&a.0).then(a.1.cmp(&b.1)));
        let on_boundary = matches!(roots.cover, Cover::Triangles(_));
        for (side2, i) in order {
            let t = roots.triangles[i as usize];
            // Every centre lies within side / √3 of a corner, and corners on the boundary allow nothing.
            if on_boundary && (side2 / 3.0).sqrt() <= self.best_radius() {
                self.note(i, Leaf::NearCorners);
                continue;
            }
            let seeds = roots
                .seeds
                .get(i as usize)
                .copied()
                .filter(|seeds| self.index.weight(seeds[0]) > 0.0);
            let seeds = seeds.unwrap_or_else(|| [self.weighty_row(centroid(&t)); 3]);
            let handed = Handed::new(self.index, seeds, &t);
            let weights = seeds.map(|row| (row, 0.0));
            self.take(Piece {
                corners: t,
                bound: f64::INFINITY,
                weights,
                handed,
                depth: 0,
                node: i,
            });
        }
    }

    /// Looks at a piece that comes with what is known of the one it was cut from: takes what it offers, drops it or keeps it
    /// for bisection.
    fn take(&mut self, mut piece: Piece) {
        self.n_pieces += 1;
        if let Some(i) = self.discs.iter().position(|d| d.holds(&piece.corners)) {
            self.note(piece.node, Leaf::Settled(i as u32));
            return;
        }
        if self.is_hopelessly_large(&piece) {
            self.keep(piece);
            return;
        }
        let enough = self.enough();
        let looked = look(
            self.index,
            &mut self.game,
            &piece.corners,
            &piece.handed,
            enough,
        );
        let is_outside = looked.least.radius > self.best_radius() && !self.offer(&looked);
        if looked.bound < piece.bound {
            (piece.bound, piece.weights) = (looked.bound, looked.weights);
        }
        piece.handed = looked.handed;
        if piece.bound <= self.enough() {
            self.drop_bounded(&piece);
        } else if is_outside && self.clears_boundary(&piece.corners, looked.point) {
            self.note(piece.node, Leaf::Outside);
        } else {
            if !is_outside {
                self.settle_near_tie(&looked);
            }
            self.keep(piece);
        }
    }

    fn keep(&mut self, piece: Piece) {
        if self.pieces.is_empty() {
            self.pieces.reserve(USUAL_PIECES);
            self.heap.reserve(USUAL_PIECES);
        }
        self.heap
            .push(ByBound(piece.bound, self.pieces.len() as u32));
        self.pieces.push(piece);
    }

    /// Cuts a piece in two and takes the halves.
    fn cut(&mut self, piece: &Piece) {
        let nodes = self.record.as_mut().map_or([0; 2], |r| r.split(piece.node));
        let depth = piece.depth + 1;
        self.deepest = self.deepest.max(depth);
        for ((corners, handed), node) in halves(self.index, &piece.corners, &piece.handed)
            .into_iter()
            .zip(nodes)
        {
            self.take(Piece {
                corners,
                handed,
                depth,
                node,
                ..*piece
            });
        }
    }

    /// Whether a piece of the box is so large beside the best circle that no bound would drop it.
    fn is_hopelessly_large(&self, piece: &Piece) -> bool {
        let is_cut_off = self.is_boxed && piece.depth > 0 && self.best.is_some();
        is_cut_off && longest_side2(&piece.corners) > (HOPELESS * self.best_radius()).powi(2)
    }

    /// Settles the room round a piece's point when it is nearly as good as the best, and held by three rows that have not
    /// been climbed from yet.
    fn settle_near_tie(&mut self, looked: &Looked) {
        let best = self.best_radius();
        if !(NEAR_TIE * best..=best).contains(&looked.least.radius)
            || self.climbed.len() >= MAX_CLIMBED
        {
            return;
        }
        let mut rows = looked.weights.map(|(row, _)| row);
        rows.sort_unstable();
        let there = Spot {
            centre: looked.point,
            radius: looked.least.radius,
            carrying: looked.weights,
        };
        let is_held = |search: &Self| settled_disc(search.index, &there).is_some();
        if self.climbed.contains(&rows) || !is_held(self) || !self.is_in_region(looked.point) {
            return;
        }
        self.climbed.push(rows);
        let spot = self.climb_from(looked);
        if spot.radius > best {
            self.best = Some(spot);
        }
        self.settle(&spot);
    }

    /// Climbs from a piece's point if it lies in the region; `false` if it does not.
    fn offer(&mut self, looked: &Looked) -> bool {
        if !self.is_in_region(looked.point) {
            return false;
        }
        let spot = self.climb_from(looked);
        if spot.radius > self.best_radius() {
            self.best = Some(spot);
            self.settle(&spot);
        }
        true
    }

    /// Whether a piece's point lies in the region; pieces of the lot's own triangles do.
    fn is_in_region(&self, p: Point) -> bool {
        !self.may_be_outside || self.index.is_in_region(p)
    }

    /// The best spot near a piece's point: the point itself where it comes up to the piece's bound.
    fn climb_from(&mut self, looked: &Looked) -> Spot {
        let Least { radius, .. } = looked.least;
        if looked.bound - radius <= EXACT * radius && self.index.keeps(looked.point) {
            return Spot {
                centre: looked.point,
                radius,
                carrying: looked.weights,
            };
        }
        climb(
            self.index,
            &mut self.game,
            (looked.point, looked.least),
            looked.bound,
            looked.handed.rows(),
        )
    }

    /// Adds the disc that a spot settles, if it settles one and there is room for more.
    fn settle(&mut self, spot: &Spot) {
        if self.discs.len() >= MAX_DISCS {
            return;
        }
        let Some(disc) = settled_disc(self.index, spot).filter(|d| d.radius <= self.enough())
        else {
            return;
        };
        if let Some(record) = &mut self.record {
            record.disc(&disc);
        }
        self.discs.push(disc);
    }

    /// Whether no boundary comes as near to `p` as the triangle's farthest corner, so that the triangle lies on p's side.
    fn clears_boundary(&self, corners: &Triangle, p: Point) -> bool {
        let farthest = corners
            .iter()
            .map(|c| c.distance2(p))
            .fold(0.0, f64::max)
            .sqrt();
        // Distances round by parts in 1e16; one in 1e12 keeps the claim on the safe side.
        let needed = farthest * (1.0 + 1e-12);
        self.index.boundary_distance(p, 2.0 * needed) > needed
    }

    /// The radius a piece must promise to be worth more work.
    fn enough(&self) -> f64 {
        self.best_radius() + DROP_SHARE * self.effort.gap_m
    }

    fn must_end(&self) -> Option<End> {
        if self.n_pieces >= self.effort.max_pieces {
            return Some(End::Cap);
        }
        let is_cancelled = || {
            self.effort
                .cancel
                .is_some_and(|flag| flag.load(Memory::Relaxed))
        };
        (self.n_pieces % CANCEL_EVERY < 2 && is_cancelled()).then_some(End::Cancelled)
    }

    fn drop_bounded(&mut self, piece: &Piece) {
        self.dropped = self.dropped.max(piece.bound);
        let steepness = |&(row, weight): &(u32, f64)| weight * self.index.steepness(row);
        self.steepest = self.steepest.max(piece.weights.iter().map(steepness).sum());
        self.note(piece.node, Leaf::Bounded(piece.weights));
    }

    fn best_radius(&self) -> f64 {
        self.best.map_or(0.0, |best| best.radius)
    }

    fn note(&mut self, node: u32, leaf: Leaf) {
        if let Some(record) = &mut self.record {
            record.leaf(node, leaf);
        }
    }

    /// The row that allows least at a place, or a boundary row where that one has no weight.
    fn weighty_row(&self, c: Point) -> u32 {
        let Least { row, .. } = self.index.least(c, std::iter::empty());
        if self.index.weight(row) > 0.0 { row } else { 0 }
    }
}

fn centroid(t: &Triangle) -> Point {
    Point::new(
        (t[0].x + t[1].x + t[2].x) / 3.0,
        (t[0].y + t[1].y + t[2].y) / 3.0,
    )
}
