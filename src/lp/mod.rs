//! Linear programs: a kernel for the three-column game, and a model layer over good_lp for everything larger.
//!
//! Nothing here knows of geometry.

pub mod game;
pub mod model;
