//! The setbacks and roles of a lot's segments, from the lot's own members, the setbacks by role beside it, and options.
//!
//! Of a segment the first that is there counts: the option for its role, the option for every line, the lot's own
//! figure, the setback of its role. Segments of holes have the role other. Each figure keeps to the segment it was given
//! for, whatever validation repairs. Used for the one lot of a site and for each lot of a sweep.

use serde_json::{Map, Value};

use super::Options;
use super::members::{Members, listed, misspelt, quoted};
use crate::geom::validate::{RawPolygon, SegmentId};
use crate::site::Role;
use crate::site::lot::Boundary;

/// Members of a lot that say something of its setbacks.
pub const OF_SETBACKS: [&str; 3] = ["setback_m", "setbacks_m", "roles"];
/// Whether a member is one of [`OF_SETBACKS`], or a slip away from one. Quick on names that are far from them.
pub fn is_near(name: &str) -> bool {
    may_be_slip(name) && (OF_SETBACKS.contains(&name) || misspelt(name, &OF_SETBACKS).is_some())
}

/// Refuses the columns of a table that seem meant for `setback_m`, or for what a table cannot say.
///
/// # Errors
/// The first such column.
pub fn refuse_columns(names: impl Iterator<Item = impl AsRef<str>>) -> Result<(), String> {
    for name in names {
        let name = name.as_ref().trim();
        if name == "setbacks_m" || name == "roles" {
            return Err(format!(
                "a table has no column {name}: setbacks by segment or by role are for GeoJSON"
            ));
        }
        if is_near(name) && misspelt(name, &["setback_m"]).is_some() {
            return Err(format!(
                "the column {} is unknown: is setback_m meant?",
                quoted(name)
            ));
        }
    }
    Ok(())
}

/// The letters of the long names and of the short one, as bits.
const LONG_LETTERS: u32 = letters(b"setback_m");
const SHORT_LETTERS: u32 = letters(b"roles");

const fn letters(name: &[u8]) -> u32 {
    let (mut all, mut i) = (0, 0);
    while i < name.len() {
        all |= 1 << (name[i].to_ascii_lowercase() & 31);
        i += 1;
    }
    all
}

/// Whether a name is so long, and lacks so few letters of ours, that two edits of a long name or one of the short could
/// make it: lengths and letters are far quicker to tell than edits.
fn may_be_slip(name: &str) -> bool {
    let here = letters(name.as_bytes());
    match name.len() {
        _ if !name.is_ascii() => true,
        4..=6 => (SHORT_LETTERS & !here).count_ones() <= 1,
        7..=12 => (LONG_LETTERS & !here).count_ones() <= 2,
        _ => false,
    }
}

/// Setbacks by role as a file gives them, m.
#[derive(Clone, Debug, Default)]
pub struct ByRole {
    given: bool,
    of: Vec<(Role, f64)>,
}

impl ByRole {
    /// The top-level member `setbacks`.
    pub fn read(value: Option<&Value>, problems: &mut Vec<String>) -> ByRole {
        let Some(mut members) = value.and_then(|v| Members::of("setbacks", v, problems)) else {
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

    fn of_role(&self, role: Role) -> Option<f64> {
        self.of.iter().find(|(r, _)| *r == role).map(|(_, m)| *m)
    }
}

/// What goes on each segment of a lot as it was read.
#[derive(Clone, Debug, PartialEq)]
pub struct Setbacks {
    /// For each polygon, where its outer segments begin in `outer`.
    bases: Vec<usize>,
    outer: Vec<Boundary>,
    holes: Boundary,
    /// As the lot gives them, one per outer segment.
    pub roles: Option<Vec<Role>>,
    /// Roles that nothing gives a setback; their segments have 0.
    pub unset: Vec<Role>,
    /// Neither the lot nor an option says anything.
    pub is_silent: bool,
}

impl Setbacks {
    /// The setbacks of a lot from its members; wrong ones are among the problems of `members`.
    pub fn read(
        members: &mut Members,
        polygons: &[RawPolygon],
        by_role: &ByRole,
        options: &Options,
    ) -> Setbacks {
        let (bases, n) = outer_segments(polygons);
        let roles = roles(members, n);
        let figures = figures(members, n);
        let sources = Sources {
            by_role,
            options,
            roles,
            figures,
        };
        sources.check(members);
        let is_silent = matches!(sources.figures, Figures::None)
            && sources.roles.is_none()
            && options.setback_m.is_none();
        let (outer, holes, unset) = sources.resolve(n);
        Setbacks {
            bases,
            outer,
            holes,
            roles: sources.roles,
            unset,
            is_silent,
        }
    }

    /// As [`Setbacks::read`], from the members of a lot of a sweep.
    ///
    /// # Errors
    /// Every wrong member, and those a slip away from one of ours; without the lot's place.
    pub fn of_swept_lot(
        own: &Map<String, Value>,
        polygons: &[RawPolygon],
        by_role: &ByRole,
        options: &Options,
    ) -> Result<Setbacks, Vec<String>> {
        let mut problems = Vec::new();
        let mut members = Members::new("", Some(own), &mut problems);
        members.refuse_lookalikes(&OF_SETBACKS, &["setbacks"], "a lot");
        let setbacks = Setbacks::read(&mut members, polygons, by_role, options);
        if problems.is_empty() {
            Ok(setbacks)
        } else {
            Err(problems)
        }
    }

    /// What goes on a segment of the polygons that were read.
    pub fn at(&self, id: SegmentId) -> Boundary {
        let base = self.bases.get(id.part as usize).copied().unwrap_or(0);
        match id.ring {
            0 => self.outer.get(base + id.segment as usize).copied(),
            _ => Some(self.holes),
        }
        .unwrap_or_default()
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
    /// What goes on each of the `n` outer segments and on those of holes, and the roles without a setback.
    fn resolve(&self, n: usize) -> (Vec<Boundary>, Boundary, Vec<Role>) {
        let mut unset: Vec<Role> = Vec::new();
        let mut boundary = |role: Role, segment: Option<usize>| {
            let options = self.options.of_role(role).or(self.options.setback_m);
            let setback_m = options.or_else(|| self.in_file(role, segment));
            if setback_m.is_none() && !unset.contains(&role) {
                unset.push(role);
            }
            let setback_m = setback_m.unwrap_or(0.0);
            Boundary { role, setback_m }
        };
        let role_at = |i: usize| self.roles.as_ref().and_then(|r| r.get(i).copied());
        let outer = (0..n).map(|i| boundary(role_at(i).unwrap_or_default(), Some(i)));
        let outer = outer.collect();
        let holes = boundary(Role::Other, None);
        (outer, holes, unset)
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

    /// Sources that contradict each other.
    fn check(&self, members: &mut Members) {
        let with_figures = !matches!(self.figures, Figures::None);
        if self.by_role.given && with_figures {
            members.problem(
                "the lot has its own figures and the file has setbacks by role: keep one of them",
            );
        } else if self.by_role.given && self.roles.is_none() {
            members.problem("the file has setbacks by role, but the lot has no roles: add them, one per segment of the outer ring");
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_quick_test_lets_every_slip_through() {
        for ours in OF_SETBACKS {
            assert!(is_near(ours));
            let (n, edits) = (ours.len(), if ours.len() > 5 { 2 } else { 1 });
            for i in 0..n {
                let without = format!("{}{}", &ours[..i], &ours[i + 1..]);
                let changed = format!("{}é{}", &ours[..i], &ours[i + 1..]);
                let shortened = &without[..without.len() + 1 - edits];
                for slip in [without.as_str(), &changed, shortened, &ours.to_uppercase()] {
                    assert!(misspelt(slip, &OF_SETBACKS).is_some(), "{slip}");
                    assert!(is_near(slip), "{slip}");
                }
            }
        }
        for other in ["area_m", "zoning", "owner", "shape_length", "use", "id"] {
            assert!(!is_near(other), "{other}");
        }
    }
}
