//! Pieces: triangles of the region with a bound on the radius at every centre in them.
//!
//! Over a triangle each row's condition lies below the linear interpolation of its values at the corners, so the
//! three-column game of those values bounds the radius. The rows that matter are found by column generation: the row that
//! allows least at the game's present point comes in next.

use super::index::{Least, RowIndex};
use crate::geom::Point;
use crate::lp::game::{Game, GameRow, Value};

/// Rows a piece hands to its halves: enough to start them, few enough to copy.
pub(super) const N_HANDED: usize = 3;

/// A triangle, counter-clockwise or flat.
pub(super) type Triangle = [Point; 3];

/// A row of the site and its weight in a bound.
pub(super) type Weighted = (u32, f64);

/// A piece as the search keeps it.
#[derive(Clone, Copy, Debug)]
pub(super) struct Piece {
    pub corners: Triangle,
    /// No centre in the piece allows a greater radius, m.
    pub bound: f64,
    pub weights: [Weighted; 3],
    pub handed: Handed,
    /// Cuts above it.
    pub depth: u16,
    /// Its place in the proof's tree, when one is kept.
    pub node: u32,
}

/// A few rows with what they ask at the piece's corners, the first of them with positive weight.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Handed {
    rows: [u32; N_HANDED],
    at_corners: [[f64; 3]; N_HANDED],
    n: u8,
}

impl Handed {
    /// Rows at the corners of a triangle, for a root; the first has positive weight.
    pub fn new(
        index: &RowIndex,
        rows: impl IntoIterator<Item = u32>,
        corners: &Triangle,
    ) -> Handed {
        let mut handed = Handed::default();
        for row in rows {
            handed.push(row, corners.map(|c| index.entry(row, c)));
        }
        handed
    }

    pub fn rows(&self) -> &[u32] {
        &self.rows[..self.n as usize]
    }

    /// Adds a row of a game, which is known to be new and to find room.
    fn take(&mut self, row: &GameRow) {
        let n = self.n as usize;
        (self.rows[n], self.at_corners[n]) = (row.tag, row.d);
        self.n += 1;
    }

    /// Adds a row that is not there yet, while there is room.
    fn push(&mut self, row: u32, at_corners: [f64; 3]) {
        let n = self.n as usize;
        if n < N_HANDED && !self.rows().contains(&row) && at_corners.iter().all(|v| v.is_finite()) {
            (self.rows[n], self.at_corners[n]) = (row, at_corners);
            self.n += 1;
        }
    }

    /// What the halves of a piece are handed, cut at the middle `m` of the side from corner `k`.
    fn halves(&self, index: &RowIndex, k: usize, m: Point) -> [Handed; 2] {
        let mut halves = [*self; 2];
        let mut n = 0;
        for (&row, v) in self.rows().iter().zip(&self.at_corners) {
            let (a, b, c) = (v[k], v[(k + 1) % 3], v[(k + 2) % 3]);
            let at_m = index.entry(row, m);
            // A row that allows any radius at the middle bounds nothing here; the next one takes its place.
            let kept = if at_m.is_finite() { 1 } else { 0 };
            (halves[0].rows[n], halves[0].at_corners[n]) = (row, [a, at_m, c]);
            (halves[1].rows[n], halves[1].at_corners[n]) = (row, [at_m, b, c]);
            n += kept;
        }
        halves.map(|half| Handed { n: n as u8, ..half })
    }
}

/// What looking at a triangle brought.
pub(super) struct Looked {
    pub bound: f64,
    pub weights: [Weighted; 3],
    pub handed: Handed,
    /// The game's last point and what is allowed there.
    pub point: Point,
    pub least: Least,
}

/// Bounds a triangle by column generation.
///
/// What comes back: a bound valid for every centre in the triangle, its weights, and the game's last point with the row that
/// allows least there.
/// Method: as in the module's head; stops when the bound is at most `enough`, when the least row at the point is in the
/// game already, or when the game is full.
/// Preconditions: `handed` speaks of the same corners and its first row, if it has one, has positive weight.
/// Cost: three distances for a new row and one query of the index a round; three to six rows.
pub(super) fn look(
    index: &RowIndex,
    game: &mut Game,
    corners: &Triangle,
    handed: &Handed,
    enough: f64,
) -> Looked {
    // A row of the lot bounds every piece; it stands in where no row handed on does.
    let of_lot = handed
        .rows()
        .is_empty()
        .then(|| Handed::new(index, [0], corners));
    let handed = of_lot.as_ref().unwrap_or(handed);
    if let Some((bound, weights)) = single_row_bound(index, handed, enough) {
        let least = Least {
            row: handed.rows[0],
            radius: f64::NEG_INFINITY,
        };
        return Looked {
            bound,
            weights,
            handed: *handed,
            point: corners[0],
            least,
        };
    }
    let game_row = |tag: u32, d: [f64; 3]| GameRow {
        d,
        w: index.weight(tag),
        tag,
    };
    game.start(game_row(handed.rows[0], handed.at_corners[0]));
    for (&row, &d) in handed.rows().iter().zip(&handed.at_corners).skip(1) {
        game.push(game_row(row, d));
    }
    loop {
        let value = game.solve();
        let point = point_of(corners, value.point);
        let mut least = Least {
            row: handed.rows[0],
            radius: f64::NEG_INFINITY,
        };
        if value.bound > enough {
            least = index.least(point, game.rows().iter().map(|row| row.tag));
            if index.weight(least.row) == 0.0 && game.has(least.row) {
                // The point keeps the row's interpolation and, being convex, breaks the row itself: what else binds there?
                least = index.least_edgeless(point);
            }
            // A row that allows any radius at a corner bounds nothing here; the next one without an edge may.
            let is_added = add(index, game, corners, least.row);
            if is_added
                || !game.has(least.row)
                    && add(index, game, corners, index.least_edgeless(point).row)
            {
                continue;
            }
        }
        return Looked {
            bound: value.bound,
            weights: value.weights,
            handed: hand_on(game, &value),
            point,
            least,
        };
    }
}

/// Adds a row that is new to the game and allows no infinite radius at a corner, while there is room; whether it did.
fn add(index: &RowIndex, game: &mut Game, corners: &Triangle, row: u32) -> bool {
    if game.has(row) {
        return false;
    }
    let d = corners.map(|c| index.entry(row, c));
    d.iter().all(|v| v.is_finite())
        && game.push(GameRow {
            d,
            w: index.weight(row),
            tag: row,
        })
}

/// The bound of one row alone, where it is enough: half the pieces dropped need no more.
fn single_row_bound(
    index: &RowIndex,
    handed: &Handed,
    enough: f64,
) -> Option<(f64, [Weighted; 3])> {
    for (&row, d) in handed.rows().iter().zip(&handed.at_corners) {
        let w = index.weight(row);
        let greatest = d[0].max(d[1]).max(d[2]);
        if w > 0.0 && greatest <= enough * w {
            return Some((greatest / w, [(row, 1.0 / w), (row, 0.0), (row, 0.0)]));
        }
    }
    None
}

/// The rows a half starts with: those that carry the bound, a weighty one first, then the newest others.
fn hand_on(game: &Game, value: &Value) -> Handed {
    let rows = game.rows();
    let weighty = (0..)
        .zip(rows)
        .fold(0u32, |bits, (i, row)| bits | u32::from(row.w > 0.0) << i);
    // The game's first row has weight, so there always is one.
    let carrying_weighty = value.carrying & weighty;
    let first = if carrying_weighty == 0 {
        0
    } else {
        carrying_weighty.trailing_zeros()
    };
    let mut handed = Handed::default();
    handed.take(&rows[first as usize]);
    let mut carrying = value.carrying & !(1 << first);
    while carrying != 0 {
        handed.take(&rows[carrying.trailing_zeros() as usize]);
        carrying &= carrying - 1;
    }
    let mut others = ((1 << rows.len()) - 1) & !value.carrying & !(1 << first);
    while others != 0 && (handed.n as usize) < N_HANDED {
        let newest = others.ilog2();
        handed.take(&rows[newest as usize]);
        others ^= 1 << newest;
    }
    handed
}

fn point_of(corners: &Triangle, l: [f64; 3]) -> Point {
    let at =
        |f: fn(Point) -> f64| l[0] * f(corners[0]) + l[1] * f(corners[1]) + l[2] * f(corners[2]);
    Point::new(at(|c| c.x), at(|c| c.y))
}

/// The two halves of a piece with what they are handed, cut from the middle of its longest side to the corner opposite.
pub(super) fn halves(index: &RowIndex, t: &Triangle, handed: &Handed) -> [(Triangle, Handed); 2] {
    let side2 = |k: usize| t[k].distance2(t[(k + 1) % 3]);
    let k = (0..3).fold(0, |k, j| if side2(j) > side2(k) { j } else { k });
    let [a, b, c] = [t[k], t[(k + 1) % 3], t[(k + 2) % 3]];
    let m = a.midpoint(b);
    let [first, second] = handed.halves(index, k, m);
    [([a, m, c], first), ([m, b, c], second)]
}

/// The longest side of a triangle, squared, m².
pub(super) fn longest_side2(t: &Triangle) -> f64 {
    (0..3)
        .map(|k| t[k].distance2(t[(k + 1) % 3]))
        .fold(0.0, f64::max)
}
