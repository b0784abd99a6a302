//! Keep-clear areas, lines and points, and building lines.

use super::{SiteError, checked_distance};
use crate::geom::{Area, Point};

/// What a keep-clear thing is.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Class {
    Easement,
    BuriedUtility,
    OverheadLine,
    Well,
    SepticField,
    Wetland,
    Watercourse,
    Floodplain,
    SteepSlope,
    Building,
    Dwelling,
    Tank,
    RoadEdge,
    RoadCentreline,
    DistrictBoundary,
    Tree,
    Other,
}

impl Class {
    pub const ALL: [Class; 17] = [
        Class::Easement,
        Class::BuriedUtility,
        Class::OverheadLine,
        Class::Well,
        Class::SepticField,
        Class::Wetland,
        Class::Watercourse,
        Class::Floodplain,
        Class::SteepSlope,
        Class::Building,
        Class::Dwelling,
        Class::Tank,
        Class::RoadEdge,
        Class::RoadCentreline,
        Class::DistrictBoundary,
        Class::Tree,
        Class::Other,
    ];

    /// The name in files; on screen the hyphen is a space.
    pub fn name(self) -> &'static str {
        match self {
            Class::Easement => "easement",
            Class::BuriedUtility => "buried-utility",
            Class::OverheadLine => "overhead-line",
            Class::Well => "well",
            Class::SepticField => "septic-field",
            Class::Wetland => "wetland",
            Class::Watercourse => "watercourse",
            Class::Floodplain => "floodplain",
            Class::SteepSlope => "steep-slope",
            Class::Building => "building",
            Class::Dwelling => "dwelling",
            Class::Tank => "tank",
            Class::RoadEdge => "road-edge",
            Class::RoadCentreline => "road-centreline",
            Class::DistrictBoundary => "district-boundary",
            Class::Tree => "tree",
            Class::Other => "other",
        }
    }

    /// The name in a sentence.
    pub fn words(self) -> String {
        self.name().replace('-', " ")
    }

    pub fn from_name(name: &str) -> Option<Class> {
        Class::ALL.into_iter().find(|c| c.name() == name)
    }
}

/// The shape of a keep-clear thing in the site plane.
#[derive(Clone, Debug, PartialEq)]
pub enum Shape {
    /// Kept clear with its inside; holes are open ground.
    Area(Area),
    /// At least two corners.
    Line(Vec<Point>),
    Point(Point),
    /// A round thing, by its centre and radius in metres: a tank, a trunk.
    Disc(Point, f64),
}

/// Something to stay away from, on the lot or off it.
#[derive(Clone, Debug, PartialEq)]
pub struct KeepClear {
    pub name: Option<String>,
    pub class: Class,
    /// From the shell to the shape, m.
    pub required_m: f64,
    pub shape: Shape,
}

impl KeepClear {
    /// # Errors
    /// When the required distance is not a distance.
    pub fn new(
        name: Option<String>,
        class: Class,
        required_m: f64,
        shape: Shape,
    ) -> Result<KeepClear, SiteError> {
        let what = format!("required_m of the {}", class.words());
        Ok(KeepClear {
            required_m: checked_distance(what, required_m)?,
            name,
            class,
            shape,
        })
    }

    /// How it is called in a report: its own name, or its class.
    pub fn title(&self) -> String {
        match &self.name {
            Some(name) => format!("{} \"{name}\"", self.class.words()),
            None => self.class.words(),
        }
    }
}

/// The side of a building line, seen along its direction, on which the structure stays.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Kept {
    Left,
    Right,
}

/// A line from boundary to boundary that the structure must stay behind.
#[derive(Clone, Debug, PartialEq)]
pub struct BuildingLine {
    pub name: Option<String>,
    /// At least two corners; the ends lie on the lot's boundary or beyond it.
    pub corners: Vec<Point>,
    pub kept: Kept,
}
