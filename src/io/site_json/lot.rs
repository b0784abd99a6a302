//! The lot with a role and a setback on each of its segments.

use super::envelope::{Draft, Numbered, Top};
use super::members::{Members, listed};
use super::{Options, SiteJsonError};
use crate::geom::validate::{RawPolygon, SegmentId, validate};
use crate::io::geometry;
use crate::io::plane::Plane;
use crate::site::lot::Boundary;
use crate::site::{Lot, Role};

const KNOWN: [&str; 5] = ["use", "name", "setback_m", "setbacks_m", "roles"];
/// Properties of other features, which on a lot would be passed over unseen.
const MISPLACED: [&str; 4] = ["required_m", "kept", "diameter_m", "setbacks"];

/// Setbacks by role as the file gives them, m.
#[derive(Default)]
pub struct ByRole {
    given: bool,
    of: Vec<(Role, f64)>,
}

impl ByRole {
    fn of_role(&self, role: Role) -> Option<f64> {
        self.of.iter().find(|(r, _)| *r == role).map(|(_, m)| *m)
    }
}

/// The lot as it will be: its polygons in input coordinates and what goes on each outer segment.
pub struct Plan {
    /// How the lot's feature is called in messages.
    pub place: String,
    pub name: Option<String>,
    pub polygons: Vec<RawPolygon>,
    /// For each polygon, where its outer segments begin in `outer`.
    bases: Vec<usize>,
    outer: Vec<Boundary>,
    holes: Boundary,
}

/// The top-level member `setbacks`.
pub fn setbacks_by_role(top: &Top, problems: &mut Vec<String>) -> ByRole {
    let Some(value) = &top.setbacks else {
        return ByRole::default();
    };
    let Some(mut members) = Members::of("setbacks", value, problems) else {
        return ByRole::default();
    };
    let names = Role::ALL.map(Role::name);
    members.refuse_unknown(&names);
    let of = Role::ALL
        .into_iter()
        .filter_map(|role| Some((role, members.figure(role.name())?)))
        .collect();
    ByRole { given: true, of }
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
    let (bases, n) = outer_segments(&polygons);
    let roles = roles(&mut members, n);
    let figures = figures(&mut members, n);
    let name = members.text("name").map(str::to_owned);
    let (outer, holes) = Sources {
        by_role,
        options,
        roles,
        figures,
    }
    .resolve(n, &mut members, notes);
    Some(Plan {
        place: feature.place.clone(),
        name,
        polygons,
        bases,
        outer,
        holes,
    })
}

fn polygons(feature: &Numbered) -> Result<Vec<RawPolygon>, String> {
    match &feature.feature.geometry {
        None => Err("the lot has no geometry".to_owned()),
        Some(geometry) => geometry::polygons(&geometry.value),
    }
}

/// Where each polygon's outer segments begin in one run over all of them, and how many there are.
fn outer_segments(polygons: &[RawPolygon]) -> (Vec<usize>, usize) {
    let mut n = 0;
    let bases = polygons.iter().map(|p| {
        let base = n;
        let ring = p.rings.first().map_or(&[][..], Vec::as_slice);
        let closed = ring.len() > 1 && ring.first() == ring.last();
        n += ring.len() - usize::from(closed);
        base
    });
    (bases.collect(), n)
}

fn roles(members: &mut Members, n: usize) -> Option<Vec<Role>> {
    let values = members.array("roles")?;
    let mut roles = Vec::with_capacity(values.len());
    for (i, value) in values.iter().enumerate() {
        let role = value.as_str().and_then(Role::from_name);
        if role.is_none() {
            let known = listed(Role::ALL.map(Role::name));
            members.problem(format_args!(
                "roles, entry {}, is {value}: say {known}",
                i + 1
            ));
        }
        roles.push(role.unwrap_or_default());
    }
    check_count(members, "roles", values.len(), n);
    Some(roles)
}

fn check_count(members: &mut Members, name: &str, given: usize, wanted: usize) {
    if given != wanted {
        members.problem(format_args!(
            "{name} has {given} entries, but the outer ring has {wanted} segments: give one for each, in file order"
        ));
    }
}

/// What the lot itself says of its setbacks.
enum Figures {
    None,
    One(f64),
    Each(Vec<f64>),
}

fn figures(members: &mut Members, n: usize) -> Figures {
    let one = members.get("setback_m").is_some();
    if one && members.get("setbacks_m").is_some() {
        members.problem("setback_m and setbacks_m are both given: keep one of them");
    }
    if one {
        return Figures::One(members.figure("setback_m").unwrap_or(0.0));
    }
    let Some(values) = members.array("setbacks_m") else {
        return Figures::None;
    };
    check_count(members, "setbacks_m", values.len(), n);
    let mut each = Vec::with_capacity(values.len());
    for (i, value) in values.iter().enumerate() {
        let name = format!("setbacks_m, entry {},", i + 1);
        each.push(members.figure_of(&name, value).unwrap_or(0.0));
    }
    Figures::Each(each)
}

/// Everything that can decide a setback.
struct Sources<'a> {
    by_role: &'a ByRole,
    options: &'a Options,
    roles: Option<Vec<Role>>,
    figures: Figures,
}

impl Sources<'_> {
    /// What goes on each of the `n` outer segments, and on those of holes.
    fn resolve(
        self,
        n: usize,
        members: &mut Members,
        notes: &mut Vec<String>,
    ) -> (Vec<Boundary>, Boundary) {
        self.check(members, notes);
        let mut missing: Vec<Role> = Vec::new();
        let mut boundary = |role: Role, segment: Option<usize>| {
            let options = self.options.of_role(role).or(self.options.setback_m);
            let setback_m = options.or_else(|| self.in_file(role, segment));
            if setback_m.is_none() && !missing.contains(&role) {
                missing.push(role);
            }
            let setback_m = setback_m.unwrap_or(0.0);
            Boundary { role, setback_m }
        };
        let role_at = |i: usize| self.roles.as_ref().and_then(|r| r.get(i).copied());
        let outer = (0..n).map(|i| boundary(role_at(i).unwrap_or_default(), Some(i)));
        let outer = outer.collect();
        let holes = boundary(Role::Other, None);
        if !missing.is_empty() {
            let names = listed(missing.iter().map(|r| r.name()));
            members.problem(format_args!(
                "there is no setback for the role {names}: add it to setbacks, or give --setback"
            ));
        }
        (outer, holes)
    }

    /// The setback of an outer segment (by its index) or of a hole's (`None`) as the file has it.
    fn in_file(&self, role: Role, segment: Option<usize>) -> Option<f64> {
        match &self.figures {
            Figures::One(figure) => Some(*figure),
            Figures::Each(each) => Some(segment.and_then(|i| each.get(i).copied()).unwrap_or(0.0)),
            Figures::None if self.roles.is_none() => Some(0.0),
            Figures::None => {
                let other = (role == Role::Other).then_some(0.0);
                self.by_role.of_role(role).or(other)
            }
        }
    }

    /// Sources that contradict each other, or that nothing uses.
    fn check(&self, members: &mut Members, notes: &mut Vec<String>) {
        let with_figures = !matches!(self.figures, Figures::None);
        if self.by_role.given && with_figures {
            members.problem(
                "the lot has its own figures and the file has setbacks by role: keep one of them",
            );
        } else if self.by_role.given && self.roles.is_none() {
            members.problem("the file has setbacks by role, but the lot has no roles: add them, one per segment of the outer ring");
        }
        let overrides = [Role::Front, Role::Side, Role::Rear];
        for role in overrides {
            let used = self.roles.as_ref().is_some_and(|r| r.contains(&role));
            if self.options.of_role(role).is_some() && !used {
                let role = role.name();
                members.problem(format_args!(
                    "--{role} is given, but no segment has the role {role}: add it to roles"
                ));
            }
        }
        if !with_figures && self.roles.is_none() && self.options.setback_m.is_none() {
            notes.push(format!(
                "{}: no setback is given, so every lot line has 0",
                members.place
            ));
        }
    }
}

impl Plan {
    /// The validated lot; repairs go to the notes.
    pub fn into_lot(self, plane: &Plane, notes: &mut Vec<String>) -> Result<Lot, SiteJsonError> {
        let invalid = |e: String| SiteJsonError::InvalidLot(vec![format!("{}: {e}", self.place)]);
        let polygons = plane.to_site_polygons(&self.polygons);
        let polygons = polygons.map_err(|e| invalid(e.to_string()))?;
        let boundary_of = |id: SegmentId| {
            let base = self.bases.get(id.part as usize).copied().unwrap_or(0);
            match id.ring {
                0 => self.outer.get(base + id.segment as usize).copied(),
                _ => Some(self.holes),
            }
            .unwrap_or_default()
        };
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
