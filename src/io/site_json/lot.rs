//! The lot with a role and a setback on each of its segments.

use super::envelope::{Draft, Numbered};
use super::members::{Members, listed};
use super::setbacks::{ByRole, Setbacks};
use super::{Options, SiteJsonError};
use crate::geom::validate::{RawPolygon, validate};
use crate::io::geometry;
use crate::io::plane::Plane;
use crate::site::{Lot, Role};

const KNOWN: [&str; 5] = ["use", "name", "setback_m", "setbacks_m", "roles"];
/// Properties of other features, which on a lot would be passed over unseen.
const MISPLACED: [&str; 4] = ["required_m", "kept", "diameter_m", "setbacks"];

/// The lot as it will be: its polygons in input coordinates and what goes on each segment.
pub struct Plan {
    /// How the lot's feature is called in messages.
    pub place: String,
    pub name: Option<String>,
    pub polygons: Vec<RawPolygon>,
    setbacks: Setbacks,
}

/// The one feature that is the lot, read; `None` with a problem where there is none to go on with.
pub fn plan(
    draft: &Draft,
    by_role: &ByRole,
    options: &Options,
    problems: &mut Vec<String>,
    notes: &mut Vec<String>,
) -> Option<Plan> {
    let mut lots = draft.features.iter().filter(|f| f.kind_of_use == "lot");
    let Some(feature) = lots.next() else {
        problems.push("there is no lot: give one feature the property use \"lot\"".to_owned());
        return None;
    };
    for other in lots {
        problems.push(format!(
            "{}: a second lot beside {}; a lot in several parts is one MultiPolygon, many lots are for sweep",
            other.place, feature.place
        ));
    }
    let mut members = Members::new(&feature.place, feature.properties(), problems);
    members.refuse_lookalikes(&KNOWN, &MISPLACED, "a lot");
    let polygons = polygons(feature).map_err(|e| members.problem(e)).ok()?;
    let name = members.text("name").map(str::to_owned);
    let setbacks = Setbacks::read(&mut members, &polygons, by_role, options);
    check_complete(&setbacks, options, &mut members, notes);
    Some(Plan {
        place: feature.place.clone(),
        name,
        polygons,
        setbacks,
    })
}

/// What a lot by itself must say; in a sweep, options and figures are for many lots.
fn check_complete(
    setbacks: &Setbacks,
    options: &Options,
    members: &mut Members,
    notes: &mut Vec<String>,
) {
    for role in [Role::Front, Role::Side, Role::Rear] {
        let used = setbacks.roles.as_ref().is_some_and(|r| r.contains(&role));
        if options.of_role(role).is_some() && !used {
            let role = role.name();
            members.problem(format_args!(
                "--{role} is given, but no segment has the role {role}: add it to roles"
            ));
        }
    }
    if setbacks.is_silent {
        notes.push(format!(
            "{}: no setback is given, so every lot line has 0",
            members.place
        ));
    }
    if !setbacks.unset.is_empty() {
        let names = listed(setbacks.unset.iter().map(|r| r.name()));
        members.problem(format_args!(
            "there is no setback for the role {names}: add it to setbacks, or give --setback"
        ));
    }
}

fn polygons(feature: &Numbered) -> Result<Vec<RawPolygon>, String> {
    match &feature.feature.geometry {
        None => Err("the lot has no geometry".to_owned()),
        Some(geometry) => geometry::polygons(&geometry.value),
    }
}

impl Plan {
    /// The validated lot; repairs go to the notes.
    pub fn into_lot(self, plane: &Plane, notes: &mut Vec<String>) -> Result<Lot, SiteJsonError> {
        let invalid = |e: String| SiteJsonError::InvalidLot(vec![format!("{}: {e}", self.place)]);
        let polygons = plane.to_site_polygons(&self.polygons);
        let polygons = polygons.map_err(|e| invalid(e.to_string()))?;
        let boundary_of = |id| self.setbacks.at(id);
        let same = |a, b| boundary_of(a) == boundary_of(b);
        let validated = validate(&polygons, &same).map_err(|problems| {
            let sentence = |p| format!("{}: {}", self.place, plane.say(p));
            SiteJsonError::InvalidLot(problems.iter().map(sentence).collect())
        })?;
        let repairs = validated.repairs.iter();
        notes.extend(repairs.map(|r| format!("{}: {r}", self.place)));
        let boundary = validated.sources.iter().map(|&id| boundary_of(id));
        Lot::new(validated.area, boundary.collect()).map_err(|e| invalid(e.to_string()))
    }
}
