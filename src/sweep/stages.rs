//! The stages of a handful of lots: parse all, validate all, place all.
//!
//! A lot that a stage fails or panics on ends there with its row; later stages pass it over. So one lot never stops the others.

use std::any::Any;
use std::cell::Cell;
use std::fmt::Write;
use std::panic::{AssertUnwindSafe, catch_unwind};
use std::sync::atomic::Ordering;
use std::time::Instant;

use serde_json::Value;

use super::{Plan, status};
use crate::geom::validate::{Problem, validate};
use crate::geom::{Area, Point};
use crate::io::lots::{LotProblem, LotRecord, LotText, Setbacks};
use crate::io::plane::{Plane, Snapped};
use crate::io::rows::Row;
use crate::limits::Limits;
use crate::placement::{Effort, PlaceError, Placement, Status, largest, largest_on_bare_lot};
use crate::site::lot::Boundary;
use crate::site::{Lot, Role, Site, SiteError};

/// As many problems of one lot are said in its row; `place` says them all.
const SHOWN_PROBLEMS: usize = 5;

/// A lot that is still on its way.
struct Ready {
    id: Value,
    plane: Plane,
    area: Area,
    /// For each segment, where the lot says its own.
    boundary: Option<Vec<Boundary>>,
}

/// A lot that goes no further, and why.
struct Ended {
    id: Value,
    status: &'static str,
    problem: String,
}

impl From<Ended> for Row {
    fn from(ended: Ended) -> Row {
        Row::bad(ended.id, ended.status, ended.problem)
    }
}

/// What a stage makes of a lot: something for the next stage, or its end.
type Staged<T> = Result<T, Ended>;

/// Places on all lots of a handful; one row for each, in order. When cancelled, rows end at the first lot not placed.
pub fn place_all(lots: &[Result<LotText, LotProblem>], plan: &Plan) -> Vec<Row> {
    let parsed: Vec<Staged<LotRecord>> = lots.iter().map(|lot| parsed(lot, plan)).collect();
    let ready: Vec<Staged<Ready>> = parsed
        .into_iter()
        .map(|lot| lot.and_then(|record| validated(record, plan)))
        .collect();
    let mut rows: Vec<Option<Row>> = Vec::with_capacity(ready.len());
    let mut open = Vec::with_capacity(ready.len());
    for (i, lot) in ready.into_iter().enumerate() {
        match lot {
            Err(ended) => rows.push(Some(ended.into())),
            Ok(lot) => {
                rows.push(None);
                open.push((lot.area.n_segments(), i, lot));
            }
        }
    }
    // Small lots first: a large one would push the code and data of its small neighbours out of the caches.
    open.sort_unstable_by_key(|&(n_segments, i, _)| (n_segments, i));
    for (_, i, lot) in open {
        if plan.cancel.load(Ordering::Relaxed) {
            break;
        }
        rows[i] = placed(lot, plan);
    }
    rows.into_iter().map_while(|row| row).collect()
}

fn bad(id: Value, problem: String) -> Ended {
    Ended {
        id,
        status: status::INVALID_LOT,
        problem,
    }
}

fn failed(id: Value, problem: String) -> Ended {
    Ended {
        id,
        status: status::FAILED,
        problem,
    }
}

/// Runs `work` on one lot; a panic in it is that lot's end.
fn guarded<T>(id: impl Fn() -> Value, work: impl FnOnce() -> T) -> Staged<T> {
    catch_unwind(AssertUnwindSafe(work)).map_err(|panic| {
        let said = said_in(panic.as_ref());
        failed(id(), format!("the program failed on this lot: {said}"))
    })
}

fn said_in(panic: &(dyn Any + Send)) -> &str {
    let text = panic.downcast_ref::<&str>().copied();
    text.or_else(|| panic.downcast_ref::<String>().map(String::as_str))
        .unwrap_or("no reason was given")
}

fn parsed(lot: &Result<LotText, LotProblem>, plan: &Plan) -> Staged<LotRecord> {
    let text = match lot {
        Ok(text) => text,
        Err(problem) => return Err(bad(problem.id.clone(), problem.to_string())),
    };
    let record = guarded(|| text.position.into(), || text.parse(&plan.options))?;
    let record = record.map_err(|problem| bad(problem.id.clone(), problem.to_string()))?;
    if let Some(setbacks) = &record.setbacks {
        count(setbacks, plan);
    }
    Ok(record)
}

fn count(setbacks: &Setbacks, plan: &Plan) {
    if setbacks.roles.is_some() {
        plan.seen.with_roles.fetch_add(1, Ordering::Relaxed);
    }
    if !setbacks.unset.is_empty() {
        plan.seen.with_unset_roles.fetch_add(1, Ordering::Relaxed);
    }
}

fn validated(record: LotRecord, plan: &Plan) -> Staged<Ready> {
    let id = record.id.clone();
    let ready = guarded(|| id.clone(), || ready(record, plan))?;
    ready.map_err(|problem| bad(id, problem))
}

fn ready(record: LotRecord, plan: &Plan) -> Result<Ready, String> {
    let polygons = record.polygons;
    let coordinates = plan.options.coordinates;
    let plane = Plane::around(&polygons, coordinates).map_err(|e| e.to_string())?;
    let in_site = plane.to_site_polygons(&polygons);
    let in_site = in_site.map_err(|e| e.to_string())?;
    let valid = match &record.setbacks {
        None => validate(&in_site, &|_, _| true),
        Some(setbacks) => validate(&in_site, &|a, b| setbacks.at(a) == setbacks.at(b)),
    };
    let valid = valid.map_err(|p| sentences(&p, &plane))?;
    let boundary = record.setbacks.map(|setbacks| {
        let segments = valid.sources.iter();
        segments.map(|&id| setbacks.at(id)).collect()
    });
    Ok(Ready {
        id: record.id,
        plane,
        area: valid.area,
        boundary,
    })
}

fn sentences(problems: &[Problem], plane: &Plane) -> String {
    let shown = problems.iter().take(SHOWN_PROBLEMS);
    let mut text = shown.map(|p| plane.say(p)).collect::<Vec<_>>().join(" ");
    if let Some(more @ 1..) = problems.len().checked_sub(SHOWN_PROBLEMS) {
        // Writing to a text cannot fail.
        let _ = write!(text, " And {more} more.");
    }
    text
}

/// The row of a valid lot; `None` when the sweep was cancelled meanwhile.
fn placed(lot: Ready, plan: &Plan) -> Option<Row> {
    let Ready {
        id,
        plane,
        area,
        boundary,
    } = lot;
    let snapped: Cell<Option<Snapped>> = Cell::new(None);
    let snap = |p: Point| {
        let s = plane.snap(p);
        snapped.set(Some(s));
        s.site
    };
    let begun = Instant::now();
    let placement = guarded(|| id.clone(), || largest_on((area, boundary), plan, &snap));
    let solve_us = begun.elapsed().as_nanos() as f64 / 1000.0;
    match placement {
        Err(ended) => Some(ended.into()),
        Ok(Err(e)) => Some(failed(id, e.to_string()).into()),
        Ok(Ok(placement)) => row((id, &plane), &placement, snapped.get(), solve_us),
    }
}

/// From the validated area to the verified placement: what `solve_us` measures.
fn largest_on(
    lot: (Area, Option<Vec<Boundary>>),
    plan: &Plan,
    snap: &dyn Fn(Point) -> Point,
) -> Result<Placement, PlaceError> {
    let effort = Effort {
        max_pieces: plan.max_pieces,
        cancel: Some(plan.cancel),
        ..Effort::default()
    };
    let is_bare = lot.1.is_none() && plan.options.setback_m.unwrap_or(0.0) == 0.0;
    if is_bare {
        return largest_on_bare_lot(&lot.0, effort, snap);
    }
    let site = Site {
        reading: plan.options.reading.unwrap_or_default(),
        ..Site::of_lot(lot_of(lot, plan.options.setback_m)?)
    };
    largest(&Limits::new(&site)?, &site, effort, snap)
}

fn lot_of(
    (area, boundary): (Area, Option<Vec<Boundary>>),
    setback_m: Option<f64>,
) -> Result<Lot, SiteError> {
    let boundary = match (boundary, setback_m) {
        (Some(boundary), _) => boundary,
        (None, setback_m) => {
            let (role, setback_m) = (Role::Other, setback_m.unwrap_or(0.0));
            vec![Boundary { role, setback_m }; area.n_segments()]
        }
    };
    Lot::new(area, boundary)
}

fn row(
    lot: (Value, &Plane),
    placement: &Placement,
    snapped: Option<Snapped>,
    solve_us: f64,
) -> Option<Row> {
    let (id, plane) = lot;
    let status = match placement.status {
        Status::Fits => status::FITS,
        Status::NoRoom => status::NO_ROOM,
        Status::CapHit => status::CAP_HIT,
        Status::Cancelled => return None,
    };
    let centre = placement.circle.map(|circle| match snapped {
        // What was snapped last is what was verified; its input coordinates give it back to the bit.
        Some(s) if s.site == circle.centre => s.input,
        _ => plane.from_site(circle.centre),
    });
    Some(Row {
        id,
        status,
        diameter_m: placement.circle.map(|circle| circle.diameter_m),
        upper_m: Some(placement.upper_m),
        centre: centre.map(|p| [p.x, p.y]),
        solve_us: Some(solve_us),
        problem: None,
    })
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

    fn plan<'a>(cancel: &'a AtomicBool, seen: &'a Seen) -> Plan<'a> {
        Plan {
            options: Options {
                coordinates: Coordinates::Plane(LengthUnit::Metre),
                ..Options::default()
            },
            max_pieces: super::super::MAX_PIECES,
            cancel,
            seen,
        }
    }

    fn with_setback(plan: Plan<'_>, setback_m: f64) -> Plan<'_> {
        let options = Options {
            setback_m: Some(setback_m),
            ..plan.options
        };
        Plan { options, ..plan }
    }

    fn rows(table: &str, plan: &Plan) -> Vec<Row> {
        let lots: Vec<_> = Lots::open(table.as_bytes(), "lots")
            .expect("a table")
            .collect();
        place_all(&lots, plan)
    }

    const TABLE: &str = "id;wkt\n\
        square;POLYGON((0 0,10 0,10 10,0 10,0 0))\n\
        bow;POLYGON((0 0,10 10,10 0,0 10,0 0))\n\
        text;nothing\n\
        ell;POLYGON((0 0,20 0,20 10,10 10,10 20,0 20,0 0))\n";

    #[test]
    fn every_lot_has_a_row_in_order() {
        let cancel = AtomicBool::new(false);
        let seen = Seen::default();
        let rows = rows(TABLE, &plan(&cancel, &seen));
        let brief: Vec<_> = rows.iter().map(|r| (r.id.as_str(), r.status)).collect();
        assert_eq!(
            brief,
            [
                (Some("square"), status::FITS),
                (Some("bow"), status::INVALID_LOT),
                (Some("text"), status::INVALID_LOT),
                (Some("ell"), status::FITS),
            ]
        );
        let problem = |i: usize| rows[i].problem.clone().unwrap_or_default();
        assert!(
            problem(1).contains("crosses itself at (5.000, 5.000)"),
            "{}",
            problem(1)
        );
        assert!(problem(2).starts_with("row 3: "), "{}", problem(2));
        let [x, y] = rows[0].centre.expect("a circle");
        assert!((x - 5.0).abs() < 1e-9 && (y - 5.0).abs() < 1e-9, "{x}, {y}");
        // Circle into the corner of an L of two squares of side 10: 2 × 10 × (2 - √2).
        let diameter_m = rows[3].diameter_m.expect("a circle");
        assert!((diameter_m - 20.0 * (2.0 - 2f64.sqrt())).abs() < 1e-8);
    }

    #[test]
    fn setbacks_apply_to_every_lot_line() {
        let cancel = AtomicBool::new(false);
        let seen = Seen::default();
        let plan = with_setback(plan(&cancel, &seen), 2.0);
        let rows = rows(TABLE, &plan);
        let diameter_m = rows[0].diameter_m.expect("a circle");
        assert!((diameter_m - 6.0).abs() < 1e-9, "{diameter_m}");
        let rows = self::rows(TABLE, &with_setback(plan, 6.0));
        assert_eq!((rows[0].status, rows[0].diameter_m), ("no-room", None));
    }

    #[test]
    fn a_cap_is_reported_with_what_was_found() {
        let cancel = AtomicBool::new(false);
        let seen = Seen::default();
        let plan = Plan {
            max_pieces: 1,
            ..plan(&cancel, &seen)
        };
        let bent = "wkt\n\"POLYGON((0 0,20 1,21 10,10 11,9 20,-1 19,0 0))\"\n";
        let row = &rows(bent, &plan)[0];
        assert_eq!(row.status, status::CAP_HIT);
        assert!(row.upper_m > row.diameter_m);
    }

    #[test]
    fn a_cancelled_sweep_ends_at_the_first_lot_not_placed() {
        let cancel = AtomicBool::new(true);
        let seen = Seen::default();
        assert_eq!(rows(TABLE, &plan(&cancel, &seen)).len(), 0);
    }

    #[test]
    fn a_panic_is_the_row_of_its_lot() {
        let row = guarded(|| "a".into(), || -> () { panic!("no {}", "luck") });
        let Err(ended) = row else { panic!("no end") };
        assert_eq!(ended.problem, "the program failed on this lot: no luck");
        assert_eq!(ended.status, status::FAILED);
    }
}
