//! Batches of lots through the cores and out again in order.

use std::sync::atomic::{AtomicU64, Ordering};
use std::sync::mpsc::{Receiver, SyncSender, sync_channel};
use std::{io, thread};

use rayon::ThreadPool;
use rayon::prelude::*;

use super::{Plan, place_all, status};
use crate::io::lots::{LotProblem, LotText};
use crate::io::rows::Row;

/// Most lots in a batch: enough handfuls for any number of cores, few enough to write before they leave the cache.
const BATCH_LOTS: usize = 4096;
/// A batch is full once so much of the file went into it, bytes; a single larger lot is a batch of its own.
const BATCH_BYTES: u64 = 8 << 20;
/// Lots taken by a core at once, and placed in the order of their size, so that the code for small ones stays warm.
const HANDFUL: usize = 1024;
/// Batches that wait between two of reading, placing and writing.
const WAITING: usize = 2;

/// Lots to sweep and how much of their file was read so far.
pub struct Feed<'a, L> {
    pub lots: L,
    /// Counted up by whoever reads the file.
    pub bytes_read: &'a AtomicU64,
}

type Batch = Vec<Result<LotText, LotProblem>>;

/// How many lots came out how.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Tally {
    pub lots: u64,
    pub fits: u64,
    pub no_room: u64,
    pub invalid: u64,
    pub cap_hit: u64,
    pub failed: u64,
    /// Why the file could not be read to its end, if so; its row is among those of invalid lots.
    pub broken_off: Option<LotProblem>,
}

/// Why a sweep could not go on.
#[derive(Debug, thiserror::Error)]
pub enum SweepError {
    #[error("the threads cannot be started: {0}")]
    Threads(#[from] rayon::ThreadPoolBuildError),
    /// From the caller's own `sink`.
    #[error(transparent)]
    Write(#[from] io::Error),
}

/// Sweeps all lots; rows go to `sink` batch by batch in the order of the lots.
///
/// Memory: at most seven batches at once. Cost: linear in the lots; one slow lot holds up its batch.
///
/// # Errors
/// When threads cannot be started, or when `sink` fails; then nothing more is placed.
pub fn run<L>(
    feed: Feed<L>,
    plan: &Plan,
    n_threads: usize,
    sink: &mut dyn FnMut(&[Row]) -> io::Result<()>,
) -> Result<Tally, SweepError>
where
    L: Iterator<Item = Result<LotText, LotProblem>> + Send,
{
    let mut tally = Tally::default();
    if n_threads <= 1 {
        in_sequence(feed, plan, &mut tally, sink)?;
    } else {
        let pool = rayon::ThreadPoolBuilder::new()
            .num_threads(n_threads)
            .build()?;
        side_by_side(feed, plan, &pool, &mut tally, sink)?;
    }
    Ok(tally)
}

fn in_sequence<L>(
    mut feed: Feed<L>,
    plan: &Plan,
    tally: &mut Tally,
    sink: &mut dyn FnMut(&[Row]) -> io::Result<()>,
) -> io::Result<()>
where
    L: Iterator<Item = Result<LotText, LotProblem>>,
{
    while let Some(batch) = next_batch(&mut feed, HANDFUL) {
        let rows = place_all(&batch, plan);
        let is_cut_short = rows.len() < batch.len();
        tally.add(&rows, batch);
        sink(&rows)?;
        if is_cut_short {
            break;
        }
    }
    Ok(())
}

fn side_by_side<L>(
    feed: Feed<L>,
    plan: &Plan,
    pool: &ThreadPool,
    tally: &mut Tally,
    sink: &mut dyn FnMut(&[Row]) -> io::Result<()>,
) -> io::Result<()>
where
    L: Iterator<Item = Result<LotText, LotProblem>> + Send,
{
    let (read, to_place) = sync_channel(WAITING);
    let (placed, to_write) = sync_channel(WAITING);
    thread::scope(|scope| {
        scope.spawn(move || fill(feed, &read));
        scope.spawn(move || place(&to_place, plan, pool, &placed));
        for (rows, batch) in &to_write {
            tally.add(&rows, batch);
            if let Err(e) = sink(&rows) {
                // The placing thread ends at its next batch, the reading one when that is gone.
                plan.cancel.store(true, Ordering::Relaxed);
                return Err(e);
            }
        }
        Ok(())
    })
}

fn fill<L>(mut feed: Feed<L>, read: &SyncSender<Batch>)
where
    L: Iterator<Item = Result<LotText, LotProblem>>,
{
    while let Some(batch) = next_batch(&mut feed, BATCH_LOTS) {
        if read.send(batch).is_err() {
            return;
        }
    }
}

fn place(
    to_place: &Receiver<Batch>,
    plan: &Plan,
    pool: &ThreadPool,
    placed: &SyncSender<(Vec<Row>, Batch)>,
) {
    for batch in to_place {
        let handfuls: Vec<Vec<Row>> = pool.install(|| {
            batch
                .par_chunks(HANDFUL)
                .map(|h| place_all(h, plan))
                .collect()
        });
        let full = handfuls
            .iter()
            .zip(batch.chunks(HANDFUL))
            .take_while(|(rows, lots)| rows.len() == lots.len())
            .count();
        // After a handful that was cut short, later ones would leave a hole in the order.
        let rows: Vec<Row> = handfuls.into_iter().take(full + 1).flatten().collect();
        let is_cut_short = rows.len() < batch.len();
        if placed.send((rows, batch)).is_err() || is_cut_short {
            return;
        }
    }
}

/// The next lots, at most `max_lots`; `None` after the last.
fn next_batch<L>(feed: &mut Feed<L>, max_lots: usize) -> Option<Batch>
where
    L: Iterator<Item = Result<LotText, LotProblem>>,
{
    let begun = feed.bytes_read.load(Ordering::Relaxed);
    let mut batch = Vec::new();
    for lot in feed.lots.by_ref() {
        batch.push(lot);
        let bytes = feed.bytes_read.load(Ordering::Relaxed) - begun;
        if batch.len() >= max_lots || bytes >= BATCH_BYTES {
            break;
        }
    }
    (!batch.is_empty()).then_some(batch)
}

impl Tally {
    fn add(&mut self, rows: &[Row], batch: Batch) {
        self.lots += rows.len() as u64;
        for row in rows {
            let count = match row.status {
                status::FITS => &mut self.fits,
                status::NO_ROOM => &mut self.no_room,
                status::CAP_HIT => &mut self.cap_hit,
                status::FAILED => &mut self.failed,
                _ => &mut self.invalid,
            };
            *count += 1;
        }
        let last = batch.into_iter().next_back().and_then(Result::err);
        self.broken_off = last.filter(|problem| problem.ends_file);
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::io::lots::Lots;
    use crate::io::plane::Coordinates;
    use crate::io::site_json::Options;
    use crate::sweep::Seen;
    use crate::units::LengthUnit;
    use std::sync::atomic::AtomicBool;

    /// Squares of side 1, 2, 3, .. with every seventh lot no lot at all.
    fn table(n: usize) -> String {
        let mut table = "wkt\n".to_owned();
        for i in 1..=n {
            table += &match i % 7 {
                0 => "\"POINT(1 1)\"\n".to_owned(),
                _ => format!("\"POLYGON((0 0,{i} 0,{i} {i},0 {i},0 0))\"\n"),
            };
        }
        table
    }

    fn sweep(
        table: &str,
        n_threads: usize,
        sink: &mut dyn FnMut(&[Row]) -> io::Result<()>,
    ) -> Result<Tally, SweepError> {
        let cancel = AtomicBool::new(false);
        let bytes_read = AtomicU64::new(0);
        let seen = Seen::default();
        let plan = Plan {
            options: Options {
                coordinates: Coordinates::Plane(LengthUnit::Metre),
                ..Options::default()
            },
            max_pieces: super::super::MAX_PIECES,
            cancel: &cancel,
            seen: &seen,
        };
        let lots = Lots::open(table.as_bytes(), "lots").expect("a table");
        let feed = Feed {
            lots,
            bytes_read: &bytes_read,
        };
        run(feed, &plan, n_threads, sink)
    }

    #[test]
    fn rows_come_in_input_order_on_any_number_of_threads() {
        let n = 2 * BATCH_LOTS + 5;
        let table = table(n);
        for n_threads in [1, 3] {
            let mut rows = Vec::new();
            let tally = sweep(&table, n_threads, &mut |batch| {
                rows.extend_from_slice(batch);
                Ok(())
            })
            .expect("a sweep");
            assert_eq!((tally.lots, rows.len()), (n as u64, n));
            assert_eq!(tally.invalid, n as u64 / 7);
            assert_eq!(tally.fits + tally.invalid, n as u64);
            for (i, row) in (1u64..).zip(&rows) {
                assert_eq!(row.id, i);
                let diameter_m = (i % 7 != 0).then_some(i as f64);
                assert_eq!(row.diameter_m.map(f64::round), diameter_m);
            }
        }
    }

    #[test]
    fn ends_when_rows_cannot_be_written() {
        let table = table(3 * BATCH_LOTS);
        for n_threads in [1, 2] {
            let mut n_calls = 0;
            let end = sweep(&table, n_threads, &mut |_| {
                n_calls += 1;
                Err(io::ErrorKind::BrokenPipe.into())
            });
            assert!(matches!(end, Err(SweepError::Write(_))));
            assert_eq!(n_calls, 1);
        }
    }
}
