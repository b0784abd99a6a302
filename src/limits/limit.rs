//! Limits: one rule applied to one thing, measured and said in words.

use crate::geom::{Area, Point, Segment};
use crate::site::{From, KeepClear, Lot, Rule, Shape, Site, Structure, To};

/// The thing of the site a limit keeps away from; indices into the site's lists.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Thing {
    LotLine(usize),
    KeepClear(usize),
    BuildingLine(usize),
}

/// What asks for the distance.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Origin {
    Setback,
    RequiredDistance,
    BuildingLine,
    /// Index into the site's rules.
    Rule(usize),
}

/// Where a distance starts and how much of it is required, as functions of the shell radius r and diameter D = 2 r.
///
/// The start is the circle of radius `start_share` r + `start_m` about the centre; required is `fixed_m` + `share` D, at
/// least `floor_m`, at most `cap_m`. Metres.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Measure {
    pub start_share: f64,
    pub start_m: f64,
    pub fixed_m: f64,
    pub share: f64,
    pub floor_m: Option<f64>,
    pub cap_m: Option<f64>,
}

/// One rule applied to one thing.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Limit {
    pub thing: Thing,
    pub origin: Origin,
    pub measure: Measure,
}

impl Measure {
    /// A fixed distance from the shell.
    pub fn from_shell(fixed_m: f64) -> Measure {
        Measure {
            start_share: 1.0,
            start_m: 0.0,
            fixed_m,
            share: 0.0,
            floor_m: None,
            cap_m: None,
        }
    }

    /// The measure of a rule that has passed its check.
    pub fn of_rule(rule: &Rule, structure: &Structure) -> Measure {
        let (start_share, start_m) = match rule.from {
            From::Shell => (1.0, 0.0),
            From::Centre => (0.0, 0.0),
            From::Ring(i) => {
                let ring = &structure.rings[i];
                let sign = if ring.inside { -1.0 } else { 1.0 };
                (
                    1.0 + sign * 2.0 * ring.share_of_diameter,
                    sign * ring.width_m,
                )
            }
        };
        let by_height = rule.share_of_height * structure.height_m.unwrap_or(0.0);
        Measure {
            start_share,
            start_m,
            fixed_m: rule.fixed_m + by_height,
            share: rule.share_of_diameter,
            floor_m: rule.at_least_m,
            cap_m: rule.need_not_exceed_m,
        }
    }

    /// Required distance for a diameter, m.
    pub fn required_m(&self, diameter_m: f64) -> f64 {
        let asked = (self.fixed_m + self.share * diameter_m).max(self.floor_m.unwrap_or(0.0));
        self.cap_m.map_or(asked, |cap| asked.min(cap))
    }

    /// Radius of the circle the distance is measured from, m; `None` where an inner ring is left no radius.
    pub fn start_radius_m(&self, diameter_m: f64) -> Option<f64> {
        let radius = self.start_share * 0.5 * diameter_m + self.start_m;
        (self.start_m >= 0.0 || radius > 0.0).then_some(radius)
    }

    /// Whether the distance is fixed and measured from the shell: a setback in its plain form.
    pub fn is_fixed_from_shell(&self) -> bool {
        *self == Measure::from_shell(self.fixed_m)
    }
}

impl Thing {
    /// Distance from a place to the thing itself, m; 0 inside a keep-clear area.
    pub fn distance_m(self, site: &Site, c: Point) -> f64 {
        match self {
            Thing::LotLine(i) => nearest_of(site.lot.segments_of(&site.lot.lines()[i]), c),
            Thing::BuildingLine(i) => nearest_of(pieces(&site.building_lines[i].corners), c),
            Thing::KeepClear(i) => shape_distance_m(&site.keep_clear[i].shape, c),
        }
    }

    /// In words: "lot line 4", "well \"north well\"".
    pub fn title(self, site: &Site) -> String {
        match self {
            Thing::LotLine(i) => format!("lot line {}", site.lot.lines()[i].number),
            Thing::KeepClear(i) => site.keep_clear[i].title(),
            Thing::BuildingLine(i) => match &site.building_lines[i].name {
                Some(name) => format!("building line \"{name}\""),
                None => format!("building line {}", i + 1),
            },
        }
    }
}

fn pieces(corners: &[Point]) -> impl Iterator<Item = Segment> + '_ {
    corners.windows(2).map(|w| Segment::new(w[0], w[1]))
}

fn nearest_of(segments: impl Iterator<Item = Segment>, c: Point) -> f64 {
    segments
        .map(|s| s.distance(c))
        .fold(f64::INFINITY, f64::min)
}

fn shape_distance_m(shape: &Shape, c: Point) -> f64 {
    match shape {
        Shape::Area(area) => {
            let area: &Area = area;
            if area.contains(c) {
                0.0
            } else {
                nearest_of(area.segments(), c)
            }
        }
        Shape::Line(corners) => nearest_of(pieces(corners), c),
        Shape::Point(p) => c.distance(*p),
        Shape::Disc(centre, radius) => (c.distance(*centre) - radius).max(0.0),
    }
}

impl Limit {
    /// What asks for the distance, in words, without figures: "side setback", "required distance", "rule 2".
    pub fn rule_title(&self, site: &Site) -> String {
        match (self.origin, self.thing) {
            (Origin::Setback, Thing::LotLine(i)) => match site.lot.lines()[i].role {
                crate::site::Role::Other => "setback".to_owned(),
                role => format!("{} setback", role.name()),
            },
            (Origin::Rule(i), _) => match &site.rules[i].citation {
                Some(citation) => format!("rule {} ({citation})", i + 1),
                None => format!("rule {}", i + 1),
            },
            (Origin::BuildingLine, _) => "kept side".to_owned(),
            (Origin::Setback | Origin::RequiredDistance, _) => "required distance".to_owned(),
        }
    }

    /// The name in reports: what asks, and of what. "side setback from lot line 4".
    pub fn title(&self, site: &Site) -> String {
        format!("{} from {}", self.rule_title(site), self.thing.title(site))
    }

    /// The whole limit with its figure, formatted by `length`: "side setback 3.00 m from lot line 4".
    pub fn sentence(&self, site: &Site, diameter_m: f64, length: impl Fn(f64) -> String) -> String {
        let required = length(self.measure.required_m(diameter_m));
        format!(
            "{} {required} from {}",
            self.rule_title(site),
            self.thing.title(site)
        )
    }
}

/// The things a rule names, in the site's order.
pub(super) fn things_of(
    to: &To,
    lot: &Lot,
    keep_clear: &[KeepClear],
    n_building_lines: usize,
) -> Vec<Thing> {
    let lines = |wanted: &dyn Fn(&crate::site::LotLine) -> bool| {
        let kept = lot.lines().iter().enumerate().filter(|(_, l)| wanted(l));
        kept.map(|(i, _)| Thing::LotLine(i)).collect()
    };
    let clear = |wanted: &dyn Fn(&KeepClear) -> bool| {
        let kept = keep_clear.iter().enumerate().filter(|(_, k)| wanted(k));
        kept.map(|(i, _)| Thing::KeepClear(i)).collect()
    };
    match to {
        To::LotLines => lines(&|_| true),
        To::Role(role) => lines(&|l| l.role == *role),
        To::Line(number) => lines(&|l| l.number == *number),
        To::KeepClear => clear(&|_| true),
        To::Class(class) => clear(&|k| k.class == *class),
        To::BuildingLines => (0..n_building_lines).map(Thing::BuildingLine).collect(),
    }
}
