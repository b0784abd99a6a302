//! The largest circle on one lot of each family: from the validated area in memory to the verified placement, proven to
//! 1e-9 m.

mod families;

use criterion::{BatchSize, Criterion, criterion_group, criterion_main};
use roundstead::geom::Area;
use roundstead::limits::Limits;
use roundstead::placement::{Effort, Placement, Status, largest};
use roundstead::site::{Lot, Site};

/// Which lot of each family; any number would do.
const SEED: u64 = 7;

fn place(area: Area) -> Placement {
    let site = Site::of_lot(Lot::plain(area));
    let limits = Limits::new(&site).expect("the lot stands alone");
    largest(&limits, &site, Effort::default(), &|p| p).expect("the placement verifies")
}

fn families(c: &mut Criterion) {
    let mut group = c.benchmark_group("place");
    for (name, area) in families::one_of_each(SEED) {
        assert_eq!(place(area.clone()).status, Status::Fits, "{name}");
        group.bench_function(name, |b| {
            b.iter_batched(|| area.clone(), place, BatchSize::LargeInput)
        });
    }
    group.finish();
}

criterion_group!(benches, families);
criterion_main!(benches);
