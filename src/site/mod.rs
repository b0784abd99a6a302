//! The site as a planner states it: the lot and its lines, what must be kept clear, building lines, the structure and the
//! distance rules.
//!
//! Distances are in metres on the ground, coordinates in the site plane. Whatever comes from outside is checked where it
//! enters; the constructors here refuse what no site can hold. Nothing here solves anything.

pub mod keep_clear;
pub mod lot;
pub mod rule;
pub mod structure;

pub use keep_clear::{BuildingLine, Class, KeepClear, Kept, Shape};
pub use lot::{Lot, LotLine, Role};
pub use rule::{From, Rule, To};
pub use structure::{Kind, RingBand, Structure};

/// How a yard is read: setback lines drawn parallel to the lot lines, or the distance to the nearest point of them.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq)]
pub enum YardReading {
    #[default]
    Parallel,
    Rounded,
}

/// Everything a placement depends on.
#[derive(Clone, Debug, PartialEq)]
pub struct Site {
    pub lot: Lot,
    pub keep_clear: Vec<KeepClear>,
    pub building_lines: Vec<BuildingLine>,
    pub structure: Structure,
    pub rules: Vec<Rule>,
    pub reading: YardReading,
}

impl Site {
    /// A lot alone, with nothing beside it and a plain circle to place.
    pub fn of_lot(lot: Lot) -> Site {
        Site {
            lot,
            keep_clear: Vec::new(),
            building_lines: Vec::new(),
            structure: Structure::default(),
            rules: Vec::new(),
            reading: YardReading::default(),
        }
    }
}

/// What no site can hold, said so that it can be put right.
#[derive(Clone, Debug, PartialEq, thiserror::Error)]
pub enum SiteError {
    #[error("{what} is {value}: a distance must be a finite number, zero or more")]
    BadDistance { what: String, value: f64 },
    #[error("{what} is {value}: a share must be a finite number, zero or more")]
    BadShare { what: String, value: f64 },
    #[error(
        "{what} need not exceed {cap} m but is at least {floor} m: raise the first or lower the second"
    )]
    CapBelowFloor { what: String, floor: f64, cap: f64 },
    #[error("{what} names the ring \"{ring}\", which the structure does not have")]
    UnknownRing { what: String, ring: String },
    #[error(
        "{given} setbacks for {wanted} segments of the outer ring: give one for each, in file order"
    )]
    SetbackCount { given: usize, wanted: usize },
    #[error("the {what} cannot be cut into convex pieces: draw its outline with fewer needles")]
    NoPieces { what: String },
    #[error("{what} uses a share of the height, but the structure has no height: add height_m")]
    NoHeight { what: String },
    #[error(
        "the building line {problem} at x {x:.3} m, y {y:.3} m of the site plane: draw it from boundary to boundary"
    )]
    BuildingLine {
        problem: &'static str,
        x: f64,
        y: f64,
    },
}

/// `value` when it is a distance: finite, zero or more, metres.
pub fn checked_distance(what: impl Into<String>, value: f64) -> Result<f64, SiteError> {
    if value.is_finite() && value >= 0.0 {
        Ok(value)
    } else {
        Err(SiteError::BadDistance {
            what: what.into(),
            value,
        })
    }
}

/// `value` when it is a share: finite, zero or more, no unit.
pub fn checked_share(what: impl Into<String>, value: f64) -> Result<f64, SiteError> {
    if value.is_finite() && value >= 0.0 {
        Ok(value)
    } else {
        Err(SiteError::BadShare {
            what: what.into(),
            value,
        })
    }
}
