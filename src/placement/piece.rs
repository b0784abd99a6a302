//! Pieces: triangles of the region with a bound on the radius at every centre in them.
//!
//! Over a triangle each row's condition lies below the linear interpolation of its values at the corners, so the
//! three-column game of those values bounds the radius. The rows that matter are found by column generation: the row that
//! allows least at the game's present point comes in next.

use super::index::{Least, RowIndex, game_entry, game_weight};
use crate::geom::Point;
use crate::lp::game::{Game, GameRow, MAX_ROWS};

/// Rows a piece hands to its halves: enough to start them, few enough to copy.
pub(super) const N_HANDED: usize = 6;

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
    /// Its place in the proof's tree, when one is kept.
    pub node: u32,
}

/// A few row indices, the first of a row with positive weight.
#[derive(Clone, Copy, Debug, Default)]
pub(super) struct Handed {
    rows: [u32; N_HANDED],
    n: u8,
}

impl Handed {
    pub fn of(rows: impl IntoIterator<Item = u32>) -> Handed {
        let mut handed = Handed::default();
        for row in rows {
            if (handed.n as usize) < N_HANDED && !handed.as_slice().contains(&row) {
                handed.rows[handed.n as usize] = row;
                handed.n += 1;
            }
        }
        handed
    }

    pub fn as_slice(&self) -> &[u32] {
        &self.rows[..self.n as usize]
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
/// Preconditions: `handed` names at least one row, the first with positive weight.
/// Cost: three distances a row and one query of the index a round; three to six rows.
pub(super) fn look(index: &RowIndex, corners: &Triangle, handed: &Handed, enough: f64) -> Looked {
    let mut rows = [0u32; MAX_ROWS];
    let mut handed = handed.as_slice().iter();
    rows[0] = handed.next().copied().unwrap_or(0);
    let mut game = Game::new(row_of(index, rows[0], corners).unwrap_or(GameRow {
        d: [f64::MAX; 3],
        w: 1.0,
    }));
    for &row in handed {
        if let Some(entry) = row_of(index, row, corners) {
            rows[game.n_rows()] = row;
            game.push(entry);
        }
    }
    loop {
        let value = game.solve();
        let point = point_of(corners, value.point);
        let weights = value.weights.map(|(i, y)| (rows[i], y));
        let done = |least| Looked {
            bound: value.bound,
            weights,
            handed: hand_on(index, &weights, &rows[..game.n_rows()]),
            point,
            least,
        };
        let unknown = Least {
            row: rows[0],
            radius: f64::NEG_INFINITY,
        };
        if value.bound <= enough {
            return done(unknown);
        }
        let least = index.least(point);
        if rows[..game.n_rows()].contains(&least.row) {
            return done(least);
        }
        let n = game.n_rows();
        match row_of(index, least.row, corners) {
            Some(entry) if n < MAX_ROWS => {
                rows[n] = least.row;
                game.push(entry);
            }
            _ => return done(least),
        }
    }
}

/// The row of the game that a row of the site makes over a triangle; `None` where it allows any radius at a corner.
fn row_of(index: &RowIndex, row: u32, corners: &Triangle) -> Option<GameRow> {
    let row = index.row(row);
    let d = corners.map(|c| game_entry(row, c));
    d.iter().all(|v| v.is_finite()).then(|| GameRow {
        d,
        w: game_weight(row),
    })
}

/// The rows a half starts with: those that carry the bound, a weighty one first, then the newest others.
fn hand_on(index: &RowIndex, weights: &[Weighted; 3], rows: &[u32]) -> Handed {
    let carrying = || {
        weights
            .iter()
            .filter(|(_, y)| *y > 0.0)
            .map(|&(row, _)| row)
    };
    let has_weight = |row: &u32| game_weight(index.row(*row)) > 0.0;
    let first = carrying().find(has_weight).unwrap_or(rows[0]);
    Handed::of(
        std::iter::once(first)
            .chain(carrying())
            .chain(rows.iter().rev().copied()),
    )
}

fn point_of(corners: &Triangle, l: [f64; 3]) -> Point {
    let at =
        |f: fn(Point) -> f64| l[0] * f(corners[0]) + l[1] * f(corners[1]) + l[2] * f(corners[2]);
    Point::new(at(|c| c.x), at(|c| c.y))
}

/// The two halves of a triangle, cut from the middle of its longest side to the corner opposite.
pub(super) fn halves(t: &Triangle) -> [Triangle; 2] {
    let side2 = |k: usize| t[k].distance2(t[(k + 1) % 3]);
    let k = (0..3).fold(0, |k, j| if side2(j) > side2(k) { j } else { k });
    let [a, b, c] = [t[k], t[(k + 1) % 3], t[(k + 2) % 3]];
    let m = a.midpoint(b);
    [[a, m, c], [m, b, c]]
}

/// The longest side of a triangle, squared, m².
pub(super) fn longest_side2(t: &Triangle) -> f64 {
    (0..3)
        .map(|k| t[k].distance2(t[(k + 1) % 3]))
        .fold(0.0, f64::max)
}
