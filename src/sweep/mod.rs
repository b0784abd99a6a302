//! Many lots: one structure placed on every lot of a file, streamed, on several cores, with memory flat in their number.
//!
//! Lots come as an iterator of texts and leave as rows in the same order; files are the callers' business. A **batch** of
//! lots is bounded in number and bytes; at most a handful of batches are alive at once, whatever the file holds. Within
//! a batch a core takes a **handful** of lots and does one stage after the other for all of them ([`stages`]): so the code
//! and branch history of the search stay warm from lot to lot. With one thread everything runs in the caller's; with
//! more, a reader fills batches while the cores place and the caller writes.
//!
//! A lot that is bad, that has no room, that hits the cap or that the program fails on is a row like any other.

mod run;
mod stages;

pub use run::{Feed, SweepError, Tally, run};
pub use stages::place_all;

use std::sync::atomic::{AtomicBool, AtomicU64};

use crate::io::site_json::Options;

/// Most pieces looked at for one lot. A tenth of what a single placement may use: about a quarter of a second, so that ten
/// hostile lots hold up a county by seconds, while ordinary lots end within a few hundred pieces.
pub const MAX_PIECES: usize = 200_000;

/// What is placed on every lot of a sweep.
#[derive(Clone, Copy, Debug)]
pub struct Plan<'a> {
    /// How lots are read, and which setbacks go before their own.
    pub options: Options,
    /// Most pieces looked at for one lot.
    pub max_pieces: usize,
    /// Set from elsewhere to end the sweep early; lots not yet placed then have no row.
    pub cancel: &'a AtomicBool,
    pub seen: &'a Seen,
}

/// What was seen of the lots' own setbacks, counted while they are read.
#[derive(Debug, Default)]
pub struct Seen {
    /// Lots with roles.
    pub with_roles: AtomicU64,
    /// Of those, lots with a role that nothing gives a setback, taken as 0.
    pub with_unset_roles: AtomicU64,
}

/// The words a row's status can be.
pub mod status {
    pub const FITS: &str = "fits";
    pub const NO_ROOM: &str = "no-room";
    pub const INVALID_LOT: &str = "invalid-lot";
    pub const CAP_HIT: &str = "cap-hit";
    /// The program could not vouch for a placement; the problem says why.
    pub const FAILED: &str = "failed";
}
