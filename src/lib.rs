//! Roundstead places the largest circular structure on an irregular lot, proves that no larger one fits, and says what
//! holds it back.
//!
//! The modules stand in the order in which they depend on each other, which is the order to read them in.

#![forbid(unsafe_code)]

#[cfg(test)]
mod seeded;

/// Lengths, areas and how they are typed and printed, rounded to the side that is asked for.
pub mod units;

/// Points, rings, polygons with holes, exact predicates, validation, yards, convex pieces and a spatial index. It knows
/// nothing of setbacks, rules or linear programs.
pub mod geom;

/// Linear programs: the three-column game that bounds a triangle, and a model layer for everything larger. It knows nothing
/// of geometry.
pub mod lp;

/// The site as a planner states it: lot, lot lines, keep-clear areas, building lines, structure, rules.
pub mod site;

/// From a site to limits and their rows: one convex feature each, with the distance it asks for.
pub mod limits;

/// The certified search for the largest circle, its verification, report and proof, and the checker of proofs.
pub mod placement;

/// Bytes in, bytes out: sites and lots in GeoJSON, WKT and CSV, the site plane, rows of a sweep.
pub mod io;

/// One structure placed on every lot of a file: streamed, on all cores, with memory flat in the number of lots.
pub mod sweep;

/// The command line: options, files, reports, exit codes. Nothing else opens a file.
pub mod cli;
