//! The structure, the distance rules and the reading of yards.

use serde_json::Value;

use super::envelope::Top;
use super::members::{Members, listed, quoted};
use crate::site::{Class, From, Kind, RingBand, Role, Rule, Site, Structure, To, YardReading};

const OF_STRUCTURE: [&str; 3] = ["kind", "height_m", "rings"];
const OF_RING: [&str; 4] = ["name", "width_m", "share_of_diameter", "inside"];
const OF_RULE: [&str; 8] = [
    "from",
    "to",
    "fixed_m",
    "share_of_diameter",
    "share_of_height",
    "at_least_m",
    "need_not_exceed_m",
    "citation",
];
/// Words for where a rule measures from, which no ring may have as its name.
const SHELL: &str = "shell";
const CENTRE: &str = "centre";

/// The top-level member `yards`.
pub fn reading(top: &Top, problems: &mut Vec<String>) -> Option<YardReading> {
    match top.yards.as_ref()?.as_str() {
        Some("parallel") => Some(YardReading::Parallel),
        Some("rounded") => Some(YardReading::Rounded),
        _ => {
            problems.push("yards: say parallel or rounded".to_owned());
            None
        }
    }
}

/// The top-level member `structure`; a plain circle where there is none.
pub fn structure(top: &Top, problems: &mut Vec<String>) -> Structure {
    let Some(value) = &top.structure else {
        return Structure::default();
    };
    let Some(mut members) = Members::of("structure", value, problems) else {
        return Structure::default();
    };
    members.refuse_unknown(&OF_STRUCTURE);
    let known = listed(Kind::ALL.map(Kind::name));
    let kind = members
        .word("kind", Kind::from_name, &known)
        .unwrap_or_default();
    let height_m = members.figure("height_m");
    let values = members.array("rings").unwrap_or_default();
    let mut rings: Vec<RingBand> = Vec::new();
    for (i, value) in values.iter().enumerate() {
        let place = format!("structure, ring {}", i + 1);
        if let Some(ring) = ring(&place, value, problems) {
            if rings.iter().any(|r| r.name == ring.name) {
                problems.push(format!(
                    "{place}: there is a ring {} already",
                    quoted(&ring.name)
                ));
            }
            rings.push(ring);
        }
    }
    Structure {
        kind,
        height_m,
        rings,
    }
}

fn ring(place: &str, value: &Value, problems: &mut Vec<String>) -> Option<RingBand> {
    let mut members = Members::of(place, value, problems)?;
    members.refuse_unknown(&OF_RING);
    let name = members.text("name");
    if members.get("name").is_none() {
        members.problem("name is missing: rules name a ring by it");
    }
    if let Some(name @ ("" | SHELL | CENTRE)) = name {
        members.problem(format_args!("{} is no name for a ring", quoted(name)));
    }
    if members.get("width_m").is_none() && members.get("share_of_diameter").is_none() {
        members.problem("the ring has no width: give width_m or share_of_diameter");
    }
    let width_m = members.figure("width_m").unwrap_or(0.0);
    let share = members.figure("share_of_diameter").unwrap_or(0.0);
    let inside = members.flag("inside").unwrap_or(false);
    RingBand::new(name?.to_owned(), width_m, share, inside)
        .map_err(|e| members.problem(e))
        .ok()
}

/// The top-level member `rules`.
pub fn rules(top: &Top, structure: &Structure, problems: &mut Vec<String>) -> Vec<Rule> {
    let Some(value) = &top.rules else {
        return Vec::new();
    };
    let Some(values) = value.as_array() else {
        problems.push("rules: this is not an array".to_owned());
        return Vec::new();
    };
    let rule = |(i, value)| rule(&rule_place(i), value, structure, problems);
    values.iter().enumerate().filter_map(rule).collect()
}

/// How the rule with this index is called in messages.
fn rule_place(i: usize) -> String {
    format!("rule {}", i + 1)
}

fn rule(
    place: &str,
    value: &Value,
    structure: &Structure,
    problems: &mut Vec<String>,
) -> Option<Rule> {
    let before = problems.len();
    let mut members = Members::of(place, value, problems)?;
    members.refuse_unknown(&OF_RULE);
    let from = from(&mut members, structure);
    let to = to(&mut members);
    if ![
        "fixed_m",
        "share_of_diameter",
        "share_of_height",
        "at_least_m",
    ]
    .iter()
    .any(|name| members.get(name).is_some())
    {
        members.problem("the rule asks for no distance: give fixed_m, a share or at_least_m");
    }
    let rule = Rule {
        from: from.unwrap_or_default(),
        to: to.clone().unwrap_or(To::LotLines),
        fixed_m: members.figure("fixed_m").unwrap_or(0.0),
        share_of_diameter: members.figure("share_of_diameter").unwrap_or(0.0),
        share_of_height: members.figure("share_of_height").unwrap_or(0.0),
        at_least_m: members.figure("at_least_m"),
        need_not_exceed_m: members.figure("need_not_exceed_m"),
        citation: members.text("citation").map(str::to_owned),
    };
    if problems.len() == before
        && let Err(e) = rule.check(place, structure)
    {
        problems.push(e.to_string());
    }
    to.map(|_| rule)
}

fn from(members: &mut Members, structure: &Structure) -> Option<From> {
    let value = members.get("from")?;
    let name = match value {
        Value::String(text) if text == SHELL => return Some(From::Shell),
        Value::String(text) if text == CENTRE => return Some(From::Centre),
        Value::String(name) => Some(name.as_str()),
        Value::Object(map) if map.len() == 1 => map.get("ring").and_then(Value::as_str),
        _ => None,
    };
    let Some(name) = name else {
        members.problem("from: say \"shell\", \"centre\" or {\"ring\": its name}");
        return None;
    };
    let ring = structure.rings.iter().position(|r| r.name == name);
    if ring.is_none() {
        let rings = listed(structure.rings.iter().map(|r| r.name.as_str()));
        members.problem(match rings.as_str() {
            "" => format!(
                "from is {}: say shell or centre; the structure has no rings",
                quoted(name)
            ),
            _ => format!(
                "from is {}: say shell, centre or a ring: {rings}",
                quoted(name)
            ),
        });
    }
    ring.map(From::Ring)
}

const TO_HELP: &str = "say lot-lines, building-lines, keep-clear, a role, a class, \"line 4\", or {\"role\": ..}, {\"class\": ..} or {\"line\": 4}";

fn to(members: &mut Members) -> Option<To> {
    let Some(value) = members.get("to") else {
        members.problem(format_args!("to is missing: {TO_HELP}"));
        return None;
    };
    let to = match value {
        Value::String(text) => to_of_text(text),
        Value::Object(map) if map.len() == 1 => {
            let text = |name: &str| map.get(name).and_then(Value::as_str);
            let line = map.get("line").and_then(Value::as_u64);
            None.or_else(|| Some(To::Role(Role::from_name(text("role")?)?)))
                .or_else(|| Some(To::Class(Class::from_name(text("class")?)?)))
                .or_else(|| Some(To::Line(u32::try_from(line?).ok().filter(|n| *n > 0)?)))
        }
        _ => None,
    };
    if to.is_none() {
        members.problem(match value.as_str() {
            Some("other") => "to is \"other\", which is a role and a class: say {\"role\": \"other\"} or {\"class\": \"other\"}".to_owned(),
            Some(text) => format!("to is {}: {TO_HELP}", quoted(text)),
            None => format!("to cannot be read: {TO_HELP}"),
        });
    }
    to
}

fn to_of_text(text: &str) -> Option<To> {
    match text {
        "lot-lines" => return Some(To::LotLines),
        "keep-clear" => return Some(To::KeepClear),
        "building-lines" => return Some(To::BuildingLines),
        "other" => return None,
        _ => {}
    }
    if let Some(number) = text.strip_prefix("line ") {
        let number = number.parse().ok().filter(|n| *n > 0);
        return number.map(To::Line);
    }
    let role = Role::from_name(text).map(To::Role);
    role.or_else(|| Class::from_name(text).map(To::Class))
}

/// Refuses rules for lot lines that do not exist, and notes rules that apply to nothing.
pub fn check_targets(site: &Site, problems: &mut Vec<String>, notes: &mut Vec<String>) {
    let lines = site.lot.lines();
    for (i, rule) in site.rules.iter().enumerate() {
        let place = rule_place(i);
        let (met, what) = match rule.to {
            To::LotLines => (true, String::new()),
            To::Line(number) => {
                if !lines.iter().any(|l| l.number == number) {
                    problems.push(format!(
                        "{place}: to is line {number}, but the lot has {} lot lines",
                        lines.len()
                    ));
                }
                continue;
            }
            To::Role(role) => (
                lines.iter().any(|l| l.role == role),
                format!("no lot line has the role {}", role.name()),
            ),
            To::KeepClear => (
                !site.keep_clear.is_empty(),
                "nothing is to be kept clear".to_owned(),
            ),
            To::Class(class) => (
                site.keep_clear.iter().any(|k| k.class == class),
                format!("nothing has the class {}", class.name()),
            ),
            To::BuildingLines => (
                !site.building_lines.is_empty(),
                "there is no building line".to_owned(),
            ),
        };
        if !met {
            notes.push(format!("{place} applies to nothing: {what}"));
        }
    }
}
