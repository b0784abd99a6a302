//! Decimal text of a number with a fixed count of decimals and a stated direction of rounding.
//!
//! Method: print to the nearest, read the text back, and move the last digit by one where it lies on the wrong side.
//! "Read back" means as f64, so 0.3 prints as 0.3 in either direction although no f64 is exactly three tenths.

/// Which side of the number its printed text may lie on.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Rounding {
    /// The text read back is at most the number.
    Down,
    /// The text read back is at least the number.
    Up,
    /// The nearest, either side.
    Nearest,
}

/// The number in decimals; read back it is at most `value`.
pub fn format_down(value: f64, decimals: usize) -> String {
    format_decimal(value, decimals, Rounding::Down, value, &|v| v)
}

/// The number in decimals; read back it is at least `value`.
pub fn format_up(value: f64, decimals: usize) -> String {
    format_decimal(value, decimals, Rounding::Up, value, &|v| v)
}

/// The number in decimals, to the nearest.
pub fn format_nearest(value: f64, decimals: usize) -> String {
    format_decimal(value, decimals, Rounding::Nearest, value, &|v| v)
}

/// The number `shown` in decimals, so rounded that `read` of the printed number lies on the named side of `value`.
///
/// `read` takes the printed number back to the scale of `value`, such as feet to metres; it must not fall where its
/// argument grows, and `shown` must be within one printed step of what it would call equal. Zero has no sign in the
/// text. What is not finite is printed as Rust prints it.
pub fn format_decimal(
    shown: f64,
    decimals: usize,
    rounding: Rounding,
    value: f64,
    read: &dyn Fn(f64) -> f64,
) -> String {
    let mut text = without_negative_zero(format!("{shown:.decimals$}"));
    if !shown.is_finite() {
        return text;
    }
    let wrong = |text: &str| {
        let back = read(text.parse().unwrap_or(f64::NAN));
        match rounding {
            Rounding::Down => back > value,
            Rounding::Up => back < value,
            Rounding::Nearest => false,
        }
    };
    // Nearest is off by half a step at most, so the first move nearly always ends it; a second one is needed where
    // `shown` itself was rounded across.
    for _ in 0..2 {
        if !wrong(&text) {
            break;
        }
        text = moved_by_one(&text, rounding == Rounding::Up);
    }
    text
}

fn without_negative_zero(text: String) -> String {
    match text.strip_prefix('-') {
        Some(rest) if rest.bytes().all(|b| matches!(b, b'0' | b'.')) => rest.to_owned(),
        _ => text,
    }
}

/// The decimal text one unit of its last digit higher or lower, same count of decimals.
fn moved_by_one(text: &str, up: bool) -> String {
    let (negative, digits) = match text.strip_prefix('-') {
        Some(rest) => (true, rest),
        None => (false, text),
    };
    let is_zero = digits.bytes().all(|b| matches!(b, b'0' | b'.'));
    let grow = is_zero || (negative != up);
    let negative = if is_zero { !up } else { negative };
    let mut bytes = digits.as_bytes().to_vec();
    let mut carried = false;
    for b in bytes.iter_mut().rev().filter(|b| b.is_ascii_digit()) {
        (*b, carried) = match (*b, grow) {
            (b'9', true) => (b'0', true),
            (b'0', false) => (b'9', true),
            (d, true) => (d + 1, false),
            (d, false) => (d - 1, false),
        };
        if !carried {
            break;
        }
    }
    let mut moved: String = if carried {
        "1".to_owned()
    } else {
        String::new()
    };
    moved.extend(bytes.into_iter().map(char::from));
    // A lost leading digit leaves a zero behind: 10 becomes 09.
    let first = moved
        .bytes()
        .take_while(|&b| b == b'0')
        .count()
        .min(moved.find('.').unwrap_or(moved.len()) - 1);
    let moved = moved.split_off(first);
    without_negative_zero(if negative { format!("-{moved}") } else { moved })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn rounds_in_the_direction_that_is_asked() {
        #[track_caller]
        fn check(value: f64, decimals: usize, down: &str, nearest: &str, up: &str) {
            assert_eq!(format_down(value, decimals), down);
            assert_eq!(format_nearest(value, decimals), nearest);
            assert_eq!(format_up(value, decimals), up);
        }
        check(12.346, 2, "12.34", "12.35", "12.35");
        check(12.344, 2, "12.34", "12.34", "12.35");
        check(9.996, 2, "9.99", "10.00", "10.00");
        check(99.99, 1, "99.9", "100.0", "100.0");
        check(0.3, 1, "0.3", "0.3", "0.3");
        check(0.004, 2, "0.00", "0.00", "0.01");
        check(-0.004, 2, "-0.01", "0.00", "0.00");
        check(-12.346, 2, "-12.35", "-12.35", "-12.34");
        check(-9.996, 2, "-10.00", "-10.00", "-9.99");
        check(-0.996, 0, "-1", "-1", "0");
        check(7.0, 0, "7", "7", "7");
        check(9.5, 0, "9", "10", "10");
        check(-0.0, 1, "0.0", "0.0", "0.0");
        check(f64::INFINITY, 2, "inf", "inf", "inf");
    }
}
