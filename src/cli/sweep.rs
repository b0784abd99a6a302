//! `roundstead sweep`: the lots of a file, rows to JSON lines and CSV.
//!
//! Rows are written straight to their files as they come, so that what a sweep of hours has done is there when it is
//! stopped; a file that ends early simply has fewer rows.

use std::fs::File;
use std::io::{self, BufReader, BufWriter, Write};
use std::path::Path;
use std::sync::atomic::{AtomicBool, AtomicU64, Ordering};
use std::thread::available_parallelism;

use super::args::Sweep;
use super::failure::Failure;
use super::progress::{Counted, bar};
use super::{Exit, files};
use crate::io::lots::Lots;
use crate::io::rows::{CsvRows, JsonLines, Row};
use crate::io::site_json;
use crate::sweep::{Feed, MAX_PIECES, Plan, Seen, SweepError, Tally, run as run_sweep};

/// Bytes read from a file at a time.
const READ_BYTES: usize = 1 << 18;
/// Bytes gathered for a file: a hundred rows, so that a sweep that is stopped loses no more.
const WRITE_BYTES: usize = 1 << 14;

/// Sweeps the file.
pub fn run(options: &Sweep) -> Result<Exit, Failure> {
    let cancel = AtomicBool::new(false);
    let seen = Seen::default();
    let plan = plan(options, &cancel, &seen)?;
    let bad = |problem: String| Failure::input(&options.lots, vec![problem]);
    let cannot = |e: io::Error| bad(format!("the file cannot be read: {e}"));
    let file = File::open(&options.lots).map_err(cannot)?;
    let data = file.metadata().map_err(cannot)?;
    if data.is_dir() {
        return Err(bad("this is a directory, not a file".to_owned()));
    }
    let bytes_read = AtomicU64::new(0);
    let counted = Counted {
        reader: file,
        bytes_read: &bytes_read,
    };
    let reader = BufReader::with_capacity(READ_BYTES, counted);
    let lots = Lots::open(reader, "the file").map_err(|e| bad(e.to_string()))?;
    let mut writer = Writer::open(options)?;

    let bar = bar(data.is_file().then_some(data.len()));
    let mut n_lots = 0;
    let feed = Feed {
        lots,
        bytes_read: &bytes_read,
    };
    let end = run_sweep(feed, &plan, n_threads(options), &mut |rows| {
        writer.write(rows)?;
        n_lots += rows.len();
        bar.set_position(bytes_read.load(Ordering::Relaxed));
        bar.set_message(format!("{n_lots} lots"));
        Ok(())
    });
    bar.finish_and_clear();
    let tally = match finish(end, writer)? {
        Some(tally) => tally,
        // Whoever read has had enough.
        None => return Ok(Exit::Done),
    };
    let mut said = summary(&tally);
    for note in notes(&plan.options, &seen) {
        said += &format!("\nnote: {note}");
    }
    // Where stderr is closed there is nobody to tell.
    let _ = writeln!(io::stderr(), "{said}");
    match tally.broken_off {
        Some(problem) => Err(Failure::input(&options.lots, vec![problem.to_string()])),
        None => Ok(Exit::Done),
    }
}

fn plan<'a>(options: &Sweep, cancel: &'a AtomicBool, seen: &'a Seen) -> Result<Plan<'a>, Failure> {
    let max_pieces = options.max_pieces.map(usize::try_from);
    Ok(Plan {
        options: options.reading.site_options()?,
        max_pieces: max_pieces.map_or(MAX_PIECES, |n| n.unwrap_or(usize::MAX)),
        cancel,
        seen,
    })
}

fn n_threads(options: &Sweep) -> usize {
    let asked = options.threads.and_then(|n| usize::try_from(n).ok());
    asked.unwrap_or_else(|| available_parallelism().map_or(1, usize::from))
}

/// Writes what is left; `None` when nobody reads it any more.
fn finish(end: Result<Tally, SweepError>, writer: Writer) -> Result<Option<Tally>, Failure> {
    let tally = match end {
        Ok(tally) => tally,
        Err(SweepError::Write(e)) if e.kind() == io::ErrorKind::BrokenPipe => return Ok(None),
        Err(SweepError::Write(e)) => return Err(Failure::writing("a row", e)),
        Err(e) => return Err(Failure::other(&e.into())),
    };
    match writer.finish() {
        Err(e) if e.kind() == io::ErrorKind::BrokenPipe => Ok(None),
        Err(e) => Err(Failure::writing("the last rows", e)),
        Ok(()) => Ok(Some(tally)),
    }
}

/// What a planner should know of the setbacks of the whole sweep.
fn notes(options: &site_json::Options, seen: &Seen) -> Vec<String> {
    let mut notes = Vec::new();
    let by_role = [
        ("--front", options.front_m),
        ("--side", options.side_m),
        ("--rear", options.rear_m),
    ];
    let given = by_role.iter().filter(|(_, setback_m)| setback_m.is_some());
    let given: Vec<&str> = given.map(|(option, _)| *option).collect();
    if !given.is_empty() && seen.with_roles.load(Ordering::Relaxed) == 0 {
        notes.push(format!(
            "no lot that could be read has roles, so {} changed nothing",
            given.join(", ")
        ));
    }
    let n_unset = seen.with_unset_roles.load(Ordering::Relaxed);
    if n_unset > 0 {
        let lots = if n_unset == 1 { "lot has" } else { "lots have" };
        notes.push(format!(
            "{n_unset} {lots} roles without a setback, which were taken as 0: give --setback, or setbacks in the file"
        ));
    }
    notes
}

fn summary(tally: &Tally) -> String {
    let lots = if tally.lots == 1 { "lot" } else { "lots" };
    let mut text = format!("{} {lots}: {} with a circle", tally.lots, tally.fits);
    for (n, what) in [
        (tally.no_room, "without room"),
        (tally.invalid, "bad"),
        (tally.cap_hit, "at the cap of work"),
        (tally.failed, "failed"),
    ] {
        if n > 0 {
            text += &format!(", {n} {what}");
        }
    }
    text
}

/// The outputs that were asked for.
struct Writer {
    json_lines: Option<JsonLines<Output>>,
    csv: Option<CsvRows<Output>>,
}

type Output = BufWriter<Box<dyn Write>>;

impl Writer {
    fn open(options: &Sweep) -> Result<Writer, Failure> {
        let asked: Vec<&Path> = [&options.json_lines, &options.csv]
            .into_iter()
            .flatten()
            .map(AsRef::as_ref)
            .collect();
        let mut files = files::create_apart(&options.lots, &asked)?.into_iter();
        let buffered = |out| BufWriter::with_capacity(WRITE_BYTES, out);
        let mut next = || {
            files
                .next()
                .map(|file| buffered(Box::new(file) as Box<dyn Write>))
        };
        let to_file = options.json_lines.as_ref().and_then(|_| next());
        let csv = options.csv.as_ref().and_then(|_| next()).map(CsvRows::new);
        let to_stdout = || asked.is_empty().then(|| buffered(Box::new(io::stdout())));
        Ok(Writer {
            json_lines: to_file.or_else(to_stdout).map(JsonLines::new),
            csv: csv
                .transpose()
                .map_err(|e| Failure::writing("the heading", e))?,
        })
    }

    fn write(&mut self, rows: &[Row]) -> io::Result<()> {
        for row in rows {
            if let Some(out) = &mut self.json_lines {
                out.write(row)?;
            }
            if let Some(out) = &mut self.csv {
                out.write(row)?;
            }
        }
        Ok(())
    }

    fn finish(self) -> io::Result<()> {
        if let Some(out) = self.json_lines {
            out.finish()?;
        }
        if let Some(out) = self.csv {
            // The table's own buffer goes to ours, and that to the file.
            out.finish()?.flush()?;
        }
        Ok(())
    }
}
