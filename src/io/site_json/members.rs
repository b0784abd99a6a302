//! Reading the members of an object, with every problem and its place.

use serde_json::{Map, Value};

use crate::io::visible;

/// Names ending so are distances in metres; a foreign one is taken for a slip.
const DISTANCE_ENDING: &str = "_m";
/// Names up to this long are a slip away at one edit, longer ones at two.
const SHORT_NAME: usize = 5;

/// A text in quotation marks, control characters made visible, cut where it is long.
pub fn quoted(text: &str) -> String {
    const SHOWN: usize = 60;
    let mut shown: String = text.chars().take(SHOWN).collect();
    if text.chars().nth(SHOWN).is_some() {
        shown.push('…');
    }
    format!("\"{}\"", visible(&shown))
}

/// A value in a message.
fn shown(value: &Value) -> String {
    match value {
        Value::String(text) => quoted(text),
        Value::Array(items) => format!("an array of {}", items.len()),
        Value::Object(_) => "an object".to_owned(),
        other => other.to_string(),
    }
}

/// The member of ours that a foreign name is a slip away from.
pub fn misspelt<'a>(name: &str, ours: &[&'a str]) -> Option<&'a str> {
    let near = |our: &&&str| {
        let allowed = if our.len() <= SHORT_NAME { 1 } else { 2 };
        edits(&name.to_lowercase(), our) <= allowed
    };
    ours.iter().find(near).copied()
}

/// How many letters must be put in, taken out or changed to make one name of the other (Levenshtein's distance).
fn edits(a: &str, b: &str) -> usize {
    let b: Vec<char> = b.chars().collect();
    let mut row: Vec<usize> = (0..=b.len()).collect();
    for (i, ca) in a.chars().enumerate() {
        let mut diagonal = i;
        let mut left = i + 1;
        for (cell, cb) in row.iter_mut().skip(1).zip(&b) {
            let above = *cell;
            left = (diagonal + usize::from(ca != *cb))
                .min(above + 1)
                .min(left + 1);
            diagonal = above;
            *cell = left;
        }
        if let Some(first) = row.first_mut() {
            *first = i + 1;
        }
    }
    row.last().copied().unwrap_or(0)
}

/// One object of the file while it is read.
pub struct Members<'a, 'p> {
    /// How the object is called in messages; empty where whoever shows them says it.
    pub place: String,
    map: Option<&'a Map<String, Value>>,
    problems: &'p mut Vec<String>,
}

impl<'a, 'p> Members<'a, 'p> {
    pub fn new(
        place: impl Into<String>,
        map: Option<&'a Map<String, Value>>,
        problems: &'p mut Vec<String>,
    ) -> Members<'a, 'p> {
        Members {
            place: place.into(),
            map,
            problems,
        }
    }

    /// The members of a value that must be an object.
    pub fn of(
        place: impl Into<String>,
        value: &'a Value,
        problems: &'p mut Vec<String>,
    ) -> Option<Members<'a, 'p>> {
        let mut members = Members::new(place, value.as_object(), problems);
        if members.map.is_none() {
            members.problem(format_args!("this is {}, not an object", shown(value)));
            return None;
        }
        Some(members)
    }

    pub fn problem(&mut self, what: impl std::fmt::Display) {
        self.problems.push(match self.place.as_str() {
            "" => what.to_string(),
            place => format!("{place}: {what}"),
        });
    }

    /// The member, absent where it is null.
    pub fn get(&self, name: &str) -> Option<&'a Value> {
        self.map?.get(name).filter(|v| !v.is_null())
    }

    /// A distance or share: a finite number, zero or more.
    pub fn figure(&mut self, name: &str) -> Option<f64> {
        let value = self.get(name)?;
        self.figure_of(name, value)
    }

    /// As [`Members::figure`], of a value called `name` in messages.
    pub fn figure_of(&mut self, name: &str, value: &Value) -> Option<f64> {
        match value.as_f64() {
            Some(v) if v.is_finite() && v >= 0.0 => Some(v),
            Some(v) => {
                self.problem(format_args!(
                    "{name} is {v}: it must be a finite number, zero or more"
                ));
                None
            }
            None => {
                self.problem(format_args!("{name} is {}, not a number", shown(value)));
                None
            }
        }
    }

    pub fn text(&mut self, name: &str) -> Option<&'a str> {
        let value = self.get(name)?;
        let text = value.as_str();
        if text.is_none() {
            self.problem(format_args!("{name} is {}, not a text", shown(value)));
        }
        text
    }

    pub fn flag(&mut self, name: &str) -> Option<bool> {
        let value = self.get(name)?;
        let flag = value.as_bool();
        if flag.is_none() {
            self.problem(format_args!(
                "{name} is {}, not true or false",
                shown(value)
            ));
        }
        flag
    }

    pub fn array(&mut self, name: &str) -> Option<&'a [Value]> {
        let value = self.get(name)?;
        let array = value.as_array();
        if array.is_none() {
            self.problem(format_args!("{name} is {}, not an array", shown(value)));
        }
        array.map(Vec::as_slice)
    }

    /// A text that `from_name` knows; `known` is what is said of a text it does not.
    pub fn word<T>(
        &mut self,
        name: &str,
        from_name: impl Fn(&str) -> Option<T>,
        known: &str,
    ) -> Option<T> {
        let text = self.text(name)?;
        let word = from_name(text);
        if word.is_none() {
            self.problem(format_args!("{name} is {}: say {known}", quoted(text)));
        }
        word
    }

    /// Refuses every member that is not in `known`; for objects that are wholly ours.
    pub fn refuse_unknown(&mut self, known: &[&str]) {
        let Some(map) = self.map else { return };
        for name in map.keys().filter(|name| !known.contains(&name.as_str())) {
            self.problem(match misspelt(name, known) {
                Some(ours) => format!("{} is unknown: is {ours} meant?", quoted(name)),
                None => format!(
                    "{} is unknown: known are {}",
                    quoted(name),
                    known.join(", ")
                ),
            });
        }
    }

    /// Refuses members that are not in `known` but look as if they were meant to be ours: `ours` in another place, a slip
    /// away from one of `known`, or ending in `_m`.
    pub fn refuse_lookalikes(&mut self, known: &[&str], ours: &[&str], what: &str) {
        let Some(map) = self.map else { return };
        for name in map.keys().filter(|name| !known.contains(&name.as_str())) {
            if ours.contains(&name.as_str()) {
                self.problem(format_args!("{name} does not go with {what}"));
            } else if let Some(near) = misspelt(name, known) {
                self.problem(format_args!(
                    "{} is unknown: is {near} meant?",
                    quoted(name)
                ));
            } else if name.ends_with(DISTANCE_ENDING) {
                self.problem(format_args!(
                    "{} is unknown: properties that end in _m are distances of ours; rename it if it is something else",
                    quoted(name)
                ));
            }
        }
    }
}

/// Names in a sentence.
pub fn listed<'a>(names: impl IntoIterator<Item = &'a str>) -> String {
    let names: Vec<&str> = names.into_iter().collect();
    match names.as_slice() {
        [] => String::new(),
        [only] => (*only).to_owned(),
        [most @ .., last] => format!("{} or {last}", most.join(", ")),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn slips_are_told_from_other_words() {
        #[track_caller]
        fn check(name: &str, expected: Option<&str>) {
            assert_eq!(misspelt(name, &["setback_m", "roles", "kept"]), expected);
        }
        check("setback_m", Some("setback_m"));
        check("set_back_m", Some("setback_m"));
        check("Setback_m", Some("setback_m"));
        check("setbak_n", Some("setback_m"));
        check("role", Some("roles"));
        check("keep", None);
        check("zoning", None);
        check("depth", None);
    }
}
