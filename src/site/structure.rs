//! The structure to place: its kind, height and rings.

use super::{SiteError, checked_distance, checked_share};

/// What is placed.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum Kind {
    #[default]
    Circle,
    Tank,
    Silo,
    Digester,
    Roundabout,
    Mast,
}

impl Kind {
    pub const ALL: [Kind; 6] = [
        Kind::Circle,
        Kind::Tank,
        Kind::Silo,
        Kind::Digester,
        Kind::Roundabout,
        Kind::Mast,
    ];

    /// The name in files and on screen.
    pub fn name(self) -> &'static str {
        match self {
            Kind::Circle => "circle",
            Kind::Tank => "tank",
            Kind::Silo => "silo",
            Kind::Digester => "digester",
            Kind::Roundabout => "roundabout",
            Kind::Mast => "mast",
        }
    }

    pub fn from_name(name: &str) -> Option<Kind> {
        Kind::ALL.into_iter().find(|k| k.name() == name)
    }
}

/// A band round the shell or inside it. Its far edge lies `width_m` + `share_of_diameter` × diameter from the shell.
#[derive(Clone, Debug, PartialEq)]
pub struct RingBand {
    pub name: String,
    pub width_m: f64,
    pub share_of_diameter: f64,
    /// Inside the shell instead of round it.
    pub inside: bool,
}

impl RingBand {
    /// # Errors
    /// When a figure is negative or not finite, or an inner ring takes half the diameter or more.
    pub fn new(
        name: String,
        width_m: f64,
        share_of_diameter: f64,
        inside: bool,
    ) -> Result<RingBand, SiteError> {
        let width_m = checked_distance(format!("width_m of the ring \"{name}\""), width_m)?;
        let what = format!("share_of_diameter of the ring \"{name}\"");
        let share_of_diameter = checked_share(what.clone(), share_of_diameter)?;
        if inside && share_of_diameter >= 0.5 {
            return Err(SiteError::BadShare {
                what: what + " inside the shell (it must stay under half)",
                value: share_of_diameter,
            });
        }
        Ok(RingBand {
            name,
            width_m,
            share_of_diameter,
            inside,
        })
    }
}

/// The structure: kind, height and rings. Its diameter is what is looked for.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Structure {
    pub kind: Kind,
    pub height_m: Option<f64>,
    pub rings: Vec<RingBand>,
}
