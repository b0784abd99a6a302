//! Roundstead places the largest circular structure on an irregular lot, proves that no larger one fits, and says what
//! holds it back.

#![forbid(unsafe_code)]

pub mod units;

pub mod geom;

pub mod site;

pub mod io;
