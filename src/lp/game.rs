//! The three-column game: maximise r subject to w_i r <= l · d_i for every row i, l in the simplex of three weights.
//!
//! Dual simplex on fixed arrays. Rows are added one at a time, each solve starting from the last optimum, as a search by
//! column generation wants it. Any weights y >= 0 on the rows with sum_i y_i w_i = 1 bound the game by
//! max_k sum_i y_i d_i[k]; the bound reported is that figure, so it holds whatever rounding did to the pivots. Rows
//! with w = 0 speak of the point alone; when they leave no point, weights with sum_i y_i w_i = 0 and all columns
//! negative show it.

/// Most rows a game holds; a piece of a lot meets three to six.
pub const MAX_ROWS: usize = 12;

/// Pivots of one solve. Each one lowers the value except at ties, and few rows are there; met only by cycling.
const MAX_PIVOTS: usize = 64;

/// A constraint counts as broken from here on, relative to the size of the game's entries. Below rounding (1e-16) times the
/// few dozen operations of a pivot; at ten times this value bounds would be visibly looser than the gap asked for.
const BROKEN: f64 = 1e-14;

/// Smallest part of an entering constraint along a leaving one that a pivot may divide by.
const PIVOT: f64 = 1e-11;

/// How far below zero all columns must be to show that no point is left, relative to the entries: well clear of rounding.
const SHOWN: f64 = 1e-12;

/// One constraint p·x + q·y + e·r <= h in the plane coordinates (x, y) = (l_0, l_1) of the simplex.
#[derive(Clone, Copy, Debug, Default)]
struct Constraint {
    p: f64,
    q: f64,
    e: f64,
    h: f64,
}

impl Constraint {
    fn of(row: GameRow) -> Constraint {
        let [d0, d1, d2] = row.d;
        Constraint {
            p: d2 - d0,
            q: d2 - d1,
            e: row.w,
            h: d2,
        }
    }
}

/// The three sides of the simplex, which stand before the rows in every game: l_0 >= 0, l_1 >= 0, l_2 >= 0.
const SIDES: [Constraint; 3] = [
    Constraint {
        p: -1.0,
        q: 0.0,
        e: 0.0,
        h: 0.0,
    },
    Constraint {
        p: 0.0,
        q: -1.0,
        e: 0.0,
        h: 0.0,
    },
    Constraint {
        p: 1.0,
        q: 1.0,
        e: 0.0,
        h: 1.0,
    },
];

/// One row: w r <= l · d, with the caller's own number for it.
#[derive(Clone, Copy, Debug, Default, PartialEq)]
pub struct GameRow {
    pub d: [f64; 3],
    pub w: f64,
    pub tag: u32,
}

/// A game with its rows and the basis of its last optimum; used again and again, since a search plays thousands.
#[derive(Clone, Debug)]
pub struct Game {
    rows: [GameRow; MAX_ROWS],
    /// The sides of the simplex, then the rows in the plane of the simplex.
    constraints: [Constraint; 3 + MAX_ROWS],
    n_rows: usize,
    basis: [usize; 3],
    weights: [f64; 3],
    scale: f64,
    /// A row without weight that no point of the simplex keeps.
    unkept: Option<usize>,
}

/// The optimum of a game as it stands.
#[derive(Clone, Copy, Debug)]
pub struct Value {
    /// An upper bound of the value by the weights: max over the columns; minus infinity where no point is left.
    pub bound: f64,
    /// The optimal point of the simplex.
    pub point: [f64; 3],
    /// Tag and weight of the rows, weights at least 0 with sum_i y_i w_i = 1 (0 where no point is left); entries not in use
    /// have weight 0.
    pub weights: [(u32, f64); 3],
    /// The rows with positive weight, by their places in the game, as bits.
    pub carrying: u32,
}

impl Default for Game {
    fn default() -> Self {
        Game::new()
    }
}

impl Game {
    /// A game without rows; [`Game::start`] comes next.
    pub fn new() -> Game {
        let mut constraints = [Constraint::default(); 3 + MAX_ROWS];
        constraints[..3].copy_from_slice(&SIDES);
        let rows = [GameRow::default(); MAX_ROWS];
        Game {
            rows,
            constraints,
            n_rows: 0,
            basis: [0, 1, 2],
            weights: [0.0; 3],
            scale: 0.0,
            unkept: None,
        }
    }

    /// Forgets all rows and starts with one of positive weight, solved.
    pub fn start(&mut self, first: GameRow) {
        debug_assert!(first.w > 0.0, "the first row bounds r");
        self.rows[0] = first;
        self.constraints[3] = Constraint::of(first);
        self.n_rows = 1;
        let d = first.d;
        let best = (0..3).fold(0, |best, k| if d[k] > d[best] { k } else { best });
        let others = [(best + 1) % 3, (best + 2) % 3];
        self.basis = [3, others[0], others[1]];
        self.weights = [1.0, d[best] - d[others[0]], d[best] - d[others[1]]].map(|y| y / first.w);
        self.scale = size(d);
        self.unkept = None;
    }

    pub fn rows(&self) -> &[GameRow] {
        &self.rows[..self.n_rows]
    }

    pub fn is_full(&self) -> bool {
        self.n_rows == MAX_ROWS
    }

    /// Whether a row with this tag is in the game.
    pub fn has(&self, tag: u32) -> bool {
        self.rows().iter().any(|row| row.tag == tag)
    }

    /// Adds a row; `false` when the game is full.
    pub fn push(&mut self, row: GameRow) -> bool {
        if self.is_full() {
            return false;
        }
        self.rows[self.n_rows] = row;
        self.constraints[3 + self.n_rows] = Constraint::of(row);
        self.scale = self.scale.max(size(row.d));
        if row.w == 0.0 && row.d.iter().all(|&d| d < -SHOWN * self.scale) {
            self.unkept = Some(self.n_rows);
        }
        self.n_rows += 1;
        true
    }

    /// What comes back: the optimum over the rows added so far.
    ///
    /// Method: dual simplex from the basis of the last solve, most broken constraint first.
    /// Preconditions: started; finite rows.
    /// Degenerate input: ties and equal rows give one of the optimal bases; a pivot too small to trust ends the solve early
    /// with a bound that still holds.
    /// Tolerance: a constraint is broken beyond 1e-14 of the largest entry.
    /// Cost: O(rows) a pivot, few pivots a row.
    ///
    /// ```
    /// use roundstead::lp::game::{Game, GameRow};
    /// let mut game = Game::new();
    /// game.start(GameRow { d: [0.0, 4.0, 0.0], w: 1.0, tag: 0 });
    /// game.push(GameRow { d: [2.0, 0.0, 2.0], w: 1.0, tag: 1 });
    /// assert!((game.solve().bound - 4.0 / 3.0).abs() < 1e-12);
    /// ```
    pub fn solve(&mut self) -> Value {
        if let Some(row) = self.unkept {
            let weights = self.tagged([(row, 1.0), (0, 0.0), (0, 0.0)]);
            return Value {
                bound: f64::NEG_INFINITY,
                point: [1.0 / 3.0; 3],
                weights,
                carrying: 1 << row,
            };
        }
        for _ in 0..MAX_PIVOTS {
            let inverse = self.inverse();
            let point = self.primal(&inverse);
            let Some(entering) = self.most_broken(point) else {
                return self.value(point);
            };
            if let Pivot::NoPointLeft(weights) = self.pivot(entering, &inverse) {
                return self
                    .no_point(entering, weights)
                    .unwrap_or_else(|| self.value(point));
            }
        }
        let inverse = self.inverse();
        self.value(self.primal(&inverse))
    }

    fn inverse(&self) -> [[f64; 3]; 3] {
        let [a, b, c] = self.basis.map(|i| self.constraints[i]);
        inverse_columns(a, b, c)
    }

    /// The point (l_0, l_1, r) where the three constraints of the basis hold with equality.
    fn primal(&self, inverse: &[[f64; 3]; 3]) -> [f64; 3] {
        let h = self.basis.map(|i| self.constraints[i].h);
        [0, 1, 2].map(|k| inverse[0][k] * h[0] + inverse[1][k] * h[1] + inverse[2][k] * h[2])
    }

    /// The constraint that is broken most, rows before sides; written without branches on the figures, which no processor
    /// could foresee.
    fn most_broken(&self, [x, y, r]: [f64; 3]) -> Option<usize> {
        let excess = |c: &Constraint| c.p * x + c.q * y + c.e * r - c.h;
        let (mut worst, mut found) = (BROKEN * self.scale, 0);
        for (i, c) in self.constraints[3..3 + self.n_rows].iter().enumerate() {
            let by = excess(c);
            let is_worse = by > worst;
            worst = if is_worse { by } else { worst };
            found = if is_worse { i + 3 } else { found };
        }
        if found == 0 {
            return (0..3).find(|&i| excess(&SIDES[i]) > BROKEN && !self.basis.contains(&i));
        }
        (!self.basis.contains(&found)).then_some(found)
    }

    /// Brings `entering` into the basis for the constraint whose weight runs out first.
    fn pivot(&mut self, entering: usize, inverse: &[[f64; 3]; 3]) -> Pivot {
        let n = self.constraints[entering];
        let parts = inverse.map(|col| n.p * col[0] + n.q * col[1] + n.e * col[2]);
        let size = parts[0].abs().max(parts[1].abs()).max(parts[2].abs());
        let mut leaving = None;
        let mut step = f64::INFINITY;
        for (m, (weight, part)) in self.weights.iter().zip(parts).enumerate() {
            if part > PIVOT * size && weight / part < step {
                (step, leaving) = (weight / part, Some(m));
            }
        }
        let Some(leaving) = leaving else {
            return Pivot::NoPointLeft(parts.map(|part| (-part).max(0.0)));
        };
        for (weight, part) in self.weights.iter_mut().zip(parts) {
            *weight = (*weight - step * part).max(0.0);
        }
        self.basis[leaving] = entering;
        self.weights[leaving] = step;
        Pivot::Made
    }

    /// The value at the basis, with the bound of its weights.
    fn value(&self, [x, y, _]: [f64; 3]) -> Value {
        let mut weights = [0, 1, 2].map(|m| self.row_weight(self.basis[m], self.weights[m]));
        let sum: f64 = weights.iter().map(|&(row, y)| y * self.rows[row].w).sum();
        weights.iter_mut().for_each(|(_, y)| *y /= sum);
        let (x, y) = (x.clamp(0.0, 1.0), y.clamp(0.0, 1.0));
        let rest = (1.0 - x - y).max(0.0);
        let total = x + y + rest;
        let point = [x / total, y / total, rest / total];
        let bound = self.greatest_column(&weights);
        Value {
            bound,
            point,
            weights: self.tagged(weights),
            carrying: bits(&weights),
        }
    }

    /// The proof that no point is left, where the weights of the basis beside the entering row give one.
    fn no_point(&self, entering: usize, basis_weights: [f64; 3]) -> Option<Value> {
        let entering = entering.checked_sub(3)?;
        let mut weights = [(entering, 1.0), (0, 0.0), (0, 0.0)];
        let others = (0..3).map(|m| self.row_weight(self.basis[m], basis_weights[m]));
        let weightless = others.filter(|&(row, y)| y > 0.0 && self.rows[row].w == 0.0);
        weights[1..]
            .iter_mut()
            .zip(weightless)
            .for_each(|(slot, other)| *slot = other);
        let is_shown =
            self.rows[entering].w == 0.0 && self.greatest_column(&weights) < -SHOWN * self.scale;
        let (bound, point) = (f64::NEG_INFINITY, [1.0 / 3.0; 3]);
        is_shown.then(|| Value {
            bound,
            point,
            weights: self.tagged(weights),
            carrying: bits(&weights),
        })
    }

    fn row_weight(&self, constraint: usize, weight: f64) -> (usize, f64) {
        if constraint >= 3 {
            (constraint - 3, weight)
        } else {
            (0, 0.0)
        }
    }

    fn tagged(&self, weights: [(usize, f64); 3]) -> [(u32, f64); 3] {
        weights.map(|(row, y)| (self.rows[row].tag, y))
    }

    /// max_k sum_i y_i d_i[k].
    fn greatest_column(&self, weights: &[(usize, f64); 3]) -> f64 {
        let column = |k: usize| {
            weights
                .iter()
                .map(|&(row, y)| y * self.rows[row].d[k])
                .sum::<f64>()
        };
        column(0).max(column(1)).max(column(2))
    }
}

/// What became of a pivot.
enum Pivot {
    Made,
    /// No weight of the basis can make way: the weights beside the entering constraint that may show it.
    NoPointLeft([f64; 3]),
}

/// The rows with positive weight as bits.
fn bits(weights: &[(usize, f64); 3]) -> u32 {
    weights
        .iter()
        .map(|&(row, y)| u32::from(y > 0.0) << row)
        .fold(0, |bits, bit| bits | bit)
}

fn size(row: [f64; 3]) -> f64 {
    row[0].abs().max(row[1].abs()).max(row[2].abs())
}

/// The columns of the inverse of the 3 × 3 matrix whose rows are the left sides of a, b and c.
fn inverse_columns(a: Constraint, b: Constraint, c: Constraint) -> [[f64; 3]; 3] {
    let cross = |u: Constraint, v: Constraint| {
        [
            u.q * v.e - u.e * v.q,
            u.e * v.p - u.p * v.e,
            u.p * v.q - u.q * v.p,
        ]
    };
    let (bc, ca, ab) = (cross(b, c), cross(c, a), cross(a, b));
    let scale = 1.0 / (a.p * bc[0] + a.q * bc[1] + a.e * bc[2]);
    [bc, ca, ab].map(|column| column.map(|v| v * scale))
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The greatest value on a fine grid of the simplex: never above the true one.
    fn on_grid(rows: &[GameRow]) -> f64 {
        let n = 60;
        let points = (0..=n).flat_map(|i| {
            (0..=n - i).map(move |j| [i, j, n - i - j].map(|k| f64::from(k) / f64::from(n)))
        });
        points
            .map(|l| at(rows, l))
            .fold(f64::NEG_INFINITY, f64::max)
    }

    fn at(rows: &[GameRow], l: [f64; 3]) -> f64 {
        let slack = |row: &GameRow| (0..3).map(|k| l[k] * row.d[k]).sum::<f64>();
        let limit = |row: &GameRow| match row.w {
            0.0 if slack(row) < -1e-12 => f64::NEG_INFINITY,
            0.0 => f64::INFINITY,
            w => slack(row) / w,
        };
        rows.iter().map(limit).fold(f64::INFINITY, f64::min)
    }

    fn game(rows: &[GameRow]) -> Game {
        let mut game = Game::new();
        game.start(rows[0]);
        rows[1..].iter().for_each(|&row| assert!(game.push(row)));
        game
    }

    fn rows(rows: &[([f64; 3], f64)]) -> Vec<GameRow> {
        (0..)
            .zip(rows)
            .map(|(tag, &(d, w))| GameRow { d, w, tag })
            .collect()
    }

    #[track_caller]
    fn check(given: &[([f64; 3], f64)], expected: f64) {
        let rows = rows(given);
        let found = game(&rows).solve();
        assert!(
            (found.bound - expected).abs() < 1e-9,
            "bound {} is not {expected}",
            found.bound
        );
        assert!(
            (at(&rows, found.point) - expected).abs() < 1e-9,
            "the point {:?} does not reach it",
            found.point
        );
        assert!(on_grid(&rows) <= found.bound + 1e-12);
    }

    #[test]
    fn one_row_takes_its_greatest_entry() {
        check(&[([1.0, 5.0, 2.0], 2.0)], 2.5);
    }

    #[test]
    fn two_rows_balance() {
        check(&[([0.0, 4.0, 0.0], 1.0), ([2.0, 0.0, 2.0], 1.0)], 4.0 / 3.0);
    }

    #[test]
    fn three_rows_of_a_triangle_meet_at_the_incentre() {
        // Distances of the corners of a 3-4-5 triangle from the opposite sides: 3, 4 and 2.4; inradius 1.
        check(
            &[
                ([3.0, 0.0, 0.0], 1.0),
                ([0.0, 4.0, 0.0], 1.0),
                ([0.0, 0.0, 2.4], 1.0),
            ],
            1.0,
        );
    }

    #[test]
    fn equal_and_dominated_rows_change_nothing() {
        let [a, b, c] = [
            ([3.0, 0.0, 0.0], 1.0),
            ([0.0, 4.0, 0.0], 1.0),
            ([0.0, 0.0, 2.4], 1.0),
        ];
        check(&[a, a, b, ([9.0, 9.0, 9.0], 1.0), c, c], 1.0);
    }

    #[test]
    fn a_row_without_weight_confines_the_point() {
        // r <= l_1 · 4, and the point must keep l_1 <= 1/4: value 1.
        check(&[([0.0, 4.0, 0.0], 1.0), ([1.0, -3.0, 1.0], 0.0)], 1.0);
    }

    #[test]
    fn rows_that_leave_no_point_are_shown_by_their_weights() {
        let rows = rows(&[
            ([0.0, 4.0, 0.0], 1.0),
            ([2.0, -3.0, -3.0], 0.0),
            ([-4.0, 1.0, -2.0], 0.0),
        ]);
        let found = game(&rows).solve();
        assert_eq!(found.bound, f64::NEG_INFINITY);
        let row = |tag: u32| rows[tag as usize];
        let column = |k: usize| {
            found
                .weights
                .iter()
                .map(|&(tag, y)| y * row(tag).d[k])
                .sum::<f64>()
        };
        assert!(
            found
                .weights
                .iter()
                .all(|&(tag, y)| y == 0.0 || row(tag).w == 0.0)
        );
        assert!((0..3).all(|k| column(k) < 0.0), "{:?}", found.weights);
    }

    #[test]
    fn a_full_game_refuses_further_rows() {
        let row = GameRow {
            d: [1.0; 3],
            w: 1.0,
            tag: 0,
        };
        let mut game = game(&[row]);
        let accepted = (1..2 * MAX_ROWS).filter(|_| game.push(row)).count();
        assert_eq!((accepted, game.rows().len()), (MAX_ROWS - 1, MAX_ROWS));
    }
}
