//! Lengths as people type them: `12`, `3.5 m`, `12 ft`, `40' 6"`, `40' 6 1/2"`, `40 ft 6 in`.
//!
//! A number without a unit is in the unit the caller names. Foot and inch marks mean the site's own foot: the US survey
//! foot where that is the unit in hand, otherwise the international one; the word `ft` always means the latter. A comma
//! is refused with a question, since 1,234 is one number to some and another to others.

use super::LengthUnit;

/// Why a typed length was not taken.
#[derive(Clone, Debug, PartialEq, Eq, thiserror::Error)]
pub enum LengthError {
    #[error("type a length, such as 12 ft, 3.5 m or 40' 6\"")]
    Empty,
    #[error(
        "\"{0}\" has a comma: is it a decimal point or does it part thousands? Type 3.5 for three and a half, 1234 for one thousand two hundred thirty-four"
    )]
    Comma(String),
    #[error(
        "\"{text}\": \"{part}\" is not a number; type a length such as 12 ft, 3.5 m or 40' 6\""
    )]
    NotANumber { text: String, part: String },
    #[error("\"{text}\": the unit \"{unit}\" is not known; use m, cm, mm, ft, in or us-ft")]
    UnknownUnit { text: String, unit: String },
    #[error("\"{0}\": only feet and inches go together, feet first, such as 40' 6\"")]
    Mixed(String),
    #[error("\"{0}\" is below zero: a length is zero or more")]
    Negative(String),
    #[error("\"{0}\" is too large")]
    TooLarge(String),
}

/// The units a part of a typed length may have, as a multiple of a [`LengthUnit`].
#[derive(Clone, Copy, PartialEq)]
enum Part {
    Feet(LengthUnit),
    Inches(LengthUnit),
    Metric(f64),
}

/// Inches in a foot.
const INCHES: f64 = 12.0;

impl Part {
    fn to_m(self, amount: f64) -> f64 {
        match self {
            Part::Feet(foot) => foot.to_m(amount),
            Part::Inches(foot) => foot.to_m(amount / INCHES),
            Part::Metric(per_m) => amount / per_m,
        }
    }
}

/// Metres from a typed length; `default` is the unit of a number that has none.
///
/// # Errors
/// What is not a length, with what to type instead.
pub fn parse_length(text: &str, default: LengthUnit) -> Result<f64, LengthError> {
    let whole = || text.trim().to_owned();
    if text.trim().is_empty() {
        return Err(LengthError::Empty);
    }
    if text.contains(',') {
        return Err(LengthError::Comma(whole()));
    }
    let mut parts: Vec<(f64, Part)> = Vec::new();
    let mut rest = text.trim();
    if rest.starts_with(['-', '\u{2212}']) {
        return Err(LengthError::Negative(whole()));
    }
    while !rest.is_empty() {
        let (amount, after) = take_amount(rest).map_err(|part| LengthError::NotANumber {
            text: whole(),
            part: part.to_owned(),
        })?;
        let (unit, after) = take_unit(after);
        let part = part_of(unit, default).ok_or_else(|| LengthError::UnknownUnit {
            text: whole(),
            unit: unit.to_owned(),
        })?;
        parts.push((amount, part));
        // 40'-6" is how drawings write it.
        rest = after.trim_start().trim_start_matches('-').trim_start();
    }
    let fits_together = match parts.as_slice() {
        [_] => true,
        [(feet, Part::Feet(a)), (_, Part::Inches(b))] => a == b && feet.fract() == 0.0,
        _ => false,
    };
    if !fits_together {
        return Err(LengthError::Mixed(whole()));
    }
    let length_m: f64 = parts.iter().map(|&(amount, part)| part.to_m(amount)).sum();
    if length_m.is_finite() {
        Ok(length_m)
    } else {
        Err(LengthError::TooLarge(whole()))
    }
}

/// A number with an optional fraction after it (`6 1/2`), and what follows.
fn take_amount(text: &str) -> Result<(f64, &str), &str> {
    let (first, rest) = take_number(text);
    if let Some(after) = rest.strip_prefix('/') {
        let (under, rest) = take_number(after);
        return Ok((fraction(first, under).ok_or(text)?, rest));
    }
    let amount: f64 = first.parse().map_err(|_| text)?;
    let (over, after) = take_number(rest.trim_start());
    if let (false, Some(after)) = (over.is_empty(), after.strip_prefix('/')) {
        let (under, after) = take_number(after);
        return Ok((amount + fraction(over, under).ok_or(text)?, after));
    }
    Ok((amount, rest))
}

fn take_number(text: &str) -> (&str, &str) {
    let end = text
        .find(|c: char| !c.is_ascii_digit() && c != '.')
        .unwrap_or(text.len());
    // A power of ten belongs to the number only where digits follow it.
    let tail = &text[end..];
    if end > 0 && tail.starts_with(['e', 'E']) {
        let digits = tail[1..].trim_start_matches(['+', '-']);
        let n = digits.bytes().take_while(u8::is_ascii_digit).count();
        if n > 0 {
            return text.split_at(text.len() - digits.len() + n);
        }
    }
    text.split_at(end)
}

fn fraction(over: &str, under: &str) -> Option<f64> {
    let (over, under): (u32, u32) = (over.parse().ok()?, under.parse().ok()?);
    (under > 0).then(|| f64::from(over) / f64::from(under))
}

/// The unit at the start of `text`, as it is typed, and what follows.
fn take_unit(text: &str) -> (&str, &str) {
    let text = text.trim_start();
    let end = text
        .find(|c: char| c.is_ascii_digit() || c.is_whitespace() || c == '.')
        .unwrap_or(text.len());
    let unit = &text[..end];
    // Marks and words stop at a dash that joins feet and inches; us-ft keeps its own.
    let end = if unit.to_ascii_lowercase().starts_with("us-") {
        end
    } else {
        unit.find('-').unwrap_or(end)
    };
    text.split_at(end)
}

fn part_of(unit: &str, default: LengthUnit) -> Option<Part> {
    let site_foot = match default {
        LengthUnit::UsSurveyFoot => LengthUnit::UsSurveyFoot,
        _ => LengthUnit::Foot,
    };
    Some(match unit.to_ascii_lowercase().as_str() {
        "" if default == LengthUnit::Metre => Part::Metric(1.0),
        "" => Part::Feet(default),
        "m" | "metre" | "metres" | "meter" | "meters" => Part::Metric(1.0),
        "cm" => Part::Metric(100.0),
        "mm" => Part::Metric(1000.0),
        "ft" | "foot" | "feet" => Part::Feet(LengthUnit::Foot),
        "us-ft" | "ftus" => Part::Feet(LengthUnit::UsSurveyFoot),
        "in" | "inch" | "inches" => Part::Inches(LengthUnit::Foot),
        "'" | "\u{2032}" | "\u{2019}" => Part::Feet(site_foot),
        "\"" | "\u{2033}" | "\u{201d}" | "''" => Part::Inches(site_foot),
        _ => return None,
    })
}

#[cfg(test)]
mod tests {
    use super::*;
    use LengthUnit::{Foot, Metre, UsSurveyFoot};

    #[test]
    fn reads_what_people_type() {
        #[track_caller]
        fn check(text: &str, default: LengthUnit, expected_m: f64) {
            let got = parse_length(text, default).unwrap_or_else(|e| panic!("{e}"));
            assert!(
                (got - expected_m).abs() <= 1e-15 * expected_m,
                "{text}: {got}, not {expected_m}"
            );
        }
        check("12", Metre, 12.0);
        check("12", Foot, 3.6576);
        check(" 3.5 m ", Foot, 3.5);
        check("3.5m", Foot, 3.5);
        check("1e2 m", Metre, 100.0);
        check("250 cm", Metre, 2.5);
        check("12 ft", Metre, 3.6576);
        check("12 ft", UsSurveyFoot, 3.6576);
        check("3937 us-ft", Metre, 1200.0);
        check("3937'", UsSurveyFoot, 1200.0);
        check("40' 6\"", Metre, 40.5 * 0.3048);
        check("40'6\"", Metre, 40.5 * 0.3048);
        check("40'-6\"", Metre, 40.5 * 0.3048);
        check("40\u{2032} 6\u{2033}", Metre, 40.5 * 0.3048);
        check("40 ft 6 in", Metre, 40.5 * 0.3048);
        check("40' 6 1/2\"", Metre, (40.0 + 6.5 / 12.0) * 0.3048);
        check("1/2 in", Metre, 0.0127);
        check("6\"", Metre, 0.1524);
        check("0", Metre, 0.0);
    }

    #[test]
    fn refuses_and_says_why() {
        #[track_caller]
        fn check(text: &str, words: &str) {
            let error = parse_length(text, Metre)
                .expect_err("a refusal")
                .to_string();
            assert!(error.contains(words), "{text}: {error}");
        }
        check("", "type a length");
        check("3,5 m", "comma");
        check("1,234", "comma");
        check("-3 m", "below zero");
        check("3 m 4 m", "go together");
        check("6\" 40'", "go together");
        check("40.5' 6\"", "go together");
        check("3 furlongs", "\"furlongs\" is not known");
        check("ft", "not a number");
        check("1.2.3 m", "not a number");
        check("NaN", "not a number");
        check("inf", "not a number");
        check("1/0 in", "not a number");
        check("1e400", "too large");
    }
}
