//! A sweep of ten-corner lots on one core, from the bytes of a table in memory to the bytes of the rows: reading,
//! validating, placing, verifying and writing.

use std::f64::consts::TAU;
use std::fmt::Write;
use std::sync::atomic::{AtomicBool, AtomicU64};

use criterion::{Criterion, Throughput, criterion_group, criterion_main};
use roundstead::io::lots::Lots;
use roundstead::io::plane::Coordinates;
use roundstead::io::rows::JsonLines;
use roundstead::io::site_json::Options;
use roundstead::sweep::{Feed, MAX_PIECES, Plan, Seen, Tally, run};
use roundstead::units::LengthUnit;

#[path = "../it/seeded.rs"]
mod seeded;
use seeded::Seeded;

/// Enough to outgrow the caches, few enough for a bench.
const N_LOTS: u64 = 4000;

/// An irregular lot of ten corners, somewhere, its ring in either sense as files have it.
fn lot(seeded: &mut Seeded) -> Vec<[f64; 2]> {
    let (x, y) = (seeded.between(-5e3, 5e3), seeded.between(-5e3, 5e3));
    let mut corner = |i| {
        let angle = (f64::from(i) + seeded.between(0.0, 0.8)) / 10.0 * TAU;
        let radius = seeded.between(15.0, 60.0);
        [x + radius * angle.cos(), y + radius * angle.sin()]
    };
    let mut ring: Vec<_> = (0..10).map(&mut corner).collect();
    if seeded.below(2) == 0 {
        ring.reverse();
    }
    ring
}

/// A table with the columns id and wkt, coordinates to the nanometre.
fn table() -> String {
    let mut seeded = Seeded::new(1);
    let mut text = "id,wkt\n".to_owned();
    for id in 0..N_LOTS {
        let mut ring = lot(&mut seeded);
        ring.push(ring[0]);
        let corners: Vec<String> = ring.iter().map(|[x, y]| format!("{x:.9} {y:.9}")).collect();
        let corners = corners.join(", ");
        writeln!(text, "{id},\"POLYGON (({corners}))\"").expect("a text takes all");
    }
    text
}

fn swept(table: &str, setback_m: f64) -> (Tally, Vec<u8>) {
    let cancel = AtomicBool::new(false);
    let options = Options {
        coordinates: Coordinates::Plane(LengthUnit::Metre),
        setback_m: Some(setback_m),
        ..Options::default()
    };
    let seen = Seen::default();
    let plan = Plan {
        options,
        max_pieces: MAX_PIECES,
        cancel: &cancel,
        seen: &seen,
    };
    let feed = Feed {
        lots: Lots::open(table.as_bytes(), "the table").expect("it has a heading"),
        bytes_read: &AtomicU64::new(0),
    };
    let mut out = JsonLines::new(Vec::new());
    let mut sink = |rows: &[_]| rows.iter().try_for_each(|row| out.write(row));
    let tally = run(feed, &plan, 1, &mut sink).expect("a list takes all rows");
    (tally, out.finish().expect("a list takes all rows"))
}

fn sweep(c: &mut Criterion) {
    let table = table();
    let mut group = c.benchmark_group("sweep");
    group.throughput(Throughput::Elements(N_LOTS));
    for (name, setback_m) in [("bare-lots", 0.0), ("setback-of-3-m", 3.0)] {
        assert_eq!(swept(&table, setback_m).0.lots, N_LOTS);
        group.bench_function(name, |b| b.iter(|| swept(&table, setback_m)));
    }
    group.finish();
}

criterion_group!(benches, sweep);
criterion_main!(benches);
