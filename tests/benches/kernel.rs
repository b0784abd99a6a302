//! The three-column game on random rows, as a search meets it: rows come in one at a time, each solve from the last optimum.

use std::hint::black_box;

use criterion::{Criterion, Throughput, criterion_group, criterion_main};
use roundstead::lp::game::{Game, GameRow};

#[path = "../it/seeded.rs"]
mod seeded;
use seeded::Seeded;

/// Games in one turn of the bench, so that no branch predictor learns them by heart.
const N_GAMES: usize = 500;
/// Rows of a game: a piece of a lot meets three to six.
const N_ROWS: [usize; 3] = [3, 4, 6];

fn rows(seeded: &mut Seeded, n: usize) -> Vec<GameRow> {
    let mut row = |tag| GameRow {
        d: [0; 3].map(|_| seeded.between(0.0, 50.0)),
        w: [1.0, 1.5, 2.0][seeded.below(3)],
        tag,
    };
    (0..n as u32).map(&mut row).collect()
}

/// The sum of the bounds, for nothing to be optimised away.
fn play(game: &mut Game, games: &[Vec<GameRow>]) -> f64 {
    let value = |rows: &Vec<GameRow>| {
        game.start(rows[0]);
        let mut bound = game.solve().bound;
        for &row in &rows[1..] {
            game.push(row);
            bound = game.solve().bound;
        }
        bound
    };
    games.iter().map(value).sum()
}

fn kernel(c: &mut Criterion) {
    let mut group = c.benchmark_group("kernel");
    group.throughput(Throughput::Elements(N_GAMES as u64));
    for n in N_ROWS {
        let mut seeded = Seeded::new(n as u64);
        let games: Vec<Vec<GameRow>> = (0..N_GAMES).map(|_| rows(&mut seeded, n)).collect();
        let mut game = Game::new();
        group.bench_function(format!("{n}-rows"), |b| {
            b.iter(|| play(&mut game, black_box(&games)))
        });
    }
    group.finish();
}

criterion_group!(benches, kernel);
criterion_main!(benches);
