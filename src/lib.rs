//! Roundstead places the largest circular structure on an irregular lot, proves that no larger one fits, and says what
//! holds it back.

#![forbid(unsafe_code)]

pub mod units;

pub mod geom;

pub mod lp;

pub mod site;

pub mod limits;

pub mod placement;

pub mod io;

pub mod sweep;

pub mod cli;
