//! Lengths and areas: units, parsing of what is typed, and printing that never flatters.
//!
//! Inside the program everything is in metres and square metres; this is where other units come in and go out. Factors are
//! exact: the foot is 0.3048 m and the US survey foot 1200/3937 m (NIST, U.S. Survey Foot: Revised Unit Conversion
//! Factors; 85 FR 62698). Survey feet were withdrawn at the end of 2022 and live on in older plane coordinates.

mod decimal;
mod parse;

pub use decimal::{Rounding, format_decimal, format_down, format_nearest, format_up};
pub use parse::{LengthError, parse_length};

/// The international foot in metres.
const FOOT_M: f64 = 0.3048;
/// A US survey foot is this many metres over [`SURVEY_FOOT_UNDER`].
const SURVEY_FOOT_OVER: f64 = 1200.0;
const SURVEY_FOOT_UNDER: f64 = 3937.0;
/// An acre in square feet of its own kind: 10 square chains.
const ACRE_FT2: f64 = 43_560.0;
const HECTARE_M2: f64 = 10_000.0;

/// A unit of length.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum LengthUnit {
    #[default]
    Metre,
    Foot,
    UsSurveyFoot,
}

impl LengthUnit {
    pub const ALL: [LengthUnit; 3] = [
        LengthUnit::Metre,
        LengthUnit::Foot,
        LengthUnit::UsSurveyFoot,
    ];

    /// The name in files, options and on screen.
    pub fn name(self) -> &'static str {
        match self {
            LengthUnit::Metre => "m",
            LengthUnit::Foot => "ft",
            LengthUnit::UsSurveyFoot => "us-ft",
        }
    }

    pub fn from_name(name: &str) -> Option<LengthUnit> {
        LengthUnit::ALL.into_iter().find(|u| u.name() == name)
    }

    /// Metres from a length in this unit. Never falls where `length` grows.
    pub fn to_m(self, length: f64) -> f64 {
        match self {
            LengthUnit::Metre => length,
            LengthUnit::Foot => length * FOOT_M,
            LengthUnit::UsSurveyFoot => length * SURVEY_FOOT_OVER / SURVEY_FOOT_UNDER,
        }
    }

    /// A length in this unit from metres.
    pub fn from_m(self, length_m: f64) -> f64 {
        match self {
            LengthUnit::Metre => length_m,
            LengthUnit::Foot => length_m / FOOT_M,
            LengthUnit::UsSurveyFoot => length_m * SURVEY_FOOT_UNDER / SURVEY_FOOT_OVER,
        }
    }

    /// A length in metres as a decimal number in this unit, without the unit's name. Rounded down, the text read back in
    /// this unit is at most `length_m`; rounded up, at least.
    pub fn format(self, length_m: f64, decimals: usize, rounding: Rounding) -> String {
        let read = |length| self.to_m(length);
        format_decimal(self.from_m(length_m), decimals, rounding, length_m, &read)
    }
}

/// A unit of area.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, Hash)]
pub enum AreaUnit {
    #[default]
    SquareMetre,
    Hectare,
    SquareFoot,
    Acre,
    UsSurveySquareFoot,
    UsSurveyAcre,
}

impl AreaUnit {
    pub const ALL: [AreaUnit; 6] = [
        AreaUnit::SquareMetre,
        AreaUnit::Hectare,
        AreaUnit::SquareFoot,
        AreaUnit::Acre,
        AreaUnit::UsSurveySquareFoot,
        AreaUnit::UsSurveyAcre,
    ];

    /// The name on screen.
    pub fn name(self) -> &'static str {
        match self {
            AreaUnit::SquareMetre => "m²",
            AreaUnit::Hectare => "ha",
            AreaUnit::SquareFoot => "ft²",
            AreaUnit::Acre => "acre",
            AreaUnit::UsSurveySquareFoot => "us-ft²",
            AreaUnit::UsSurveyAcre => "us-acre",
        }
    }

    /// The unit that goes with lengths in `unit`.
    pub fn square(unit: LengthUnit) -> AreaUnit {
        match unit {
            LengthUnit::Metre => AreaUnit::SquareMetre,
            LengthUnit::Foot => AreaUnit::SquareFoot,
            LengthUnit::UsSurveyFoot => AreaUnit::UsSurveySquareFoot,
        }
    }

    /// The unit for land that goes with lengths in `unit`.
    pub fn land(unit: LengthUnit) -> AreaUnit {
        match unit {
            LengthUnit::Metre => AreaUnit::Hectare,
            LengthUnit::Foot => AreaUnit::Acre,
            LengthUnit::UsSurveyFoot => AreaUnit::UsSurveyAcre,
        }
    }

    /// The length whose square this unit counts, and how many of those squares it is.
    fn squares(self) -> (LengthUnit, f64) {
        match self {
            AreaUnit::SquareMetre => (LengthUnit::Metre, 1.0),
            AreaUnit::Hectare => (LengthUnit::Metre, HECTARE_M2),
            AreaUnit::SquareFoot => (LengthUnit::Foot, 1.0),
            AreaUnit::Acre => (LengthUnit::Foot, ACRE_FT2),
            AreaUnit::UsSurveySquareFoot => (LengthUnit::UsSurveyFoot, 1.0),
            AreaUnit::UsSurveyAcre => (LengthUnit::UsSurveyFoot, ACRE_FT2),
        }
    }

    /// Square metres from an area in this unit. Never falls where `area` grows.
    pub fn to_m2(self, area: f64) -> f64 {
        let (side, count) = self.squares();
        side.to_m(side.to_m(area * count))
    }

    /// An area in this unit from square metres.
    pub fn from_m2(self, area_m2: f64) -> f64 {
        let (side, count) = self.squares();
        side.from_m(side.from_m(area_m2)) / count
    }

    /// An area in square metres as a decimal number in this unit, rounded as [`LengthUnit::format`] does.
    pub fn format(self, area_m2: f64, decimals: usize, rounding: Rounding) -> String {
        let read = |area| self.to_m2(area);
        format_decimal(self.from_m2(area_m2), decimals, rounding, area_m2, &read)
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use proptest::prelude::*;

    #[track_caller]
    fn check(got: f64, expected: f64) {
        let error = (got / expected - 1.0).abs();
        assert!(error < 1e-15, "{got} is not {expected}");
    }

    /// Values from NIST, U.S. Survey Foot: Revised Unit Conversion Factors.
    #[test]
    fn factors_are_those_of_nist() {
        check(LengthUnit::Foot.to_m(1.0), 0.3048);
        check(LengthUnit::UsSurveyFoot.to_m(3937.0), 1200.0);
        check(LengthUnit::UsSurveyFoot.to_m(1.0), 0.304_800_609_601_219_2);
        check(AreaUnit::Acre.to_m2(1.0), 4_046.856_422_4);
        check(AreaUnit::UsSurveyAcre.to_m2(1.0), 4_046.872_609_874_252);
        check(AreaUnit::Hectare.to_m2(1.0), 10_000.0);
        check(
            AreaUnit::Acre.from_m2(AreaUnit::Hectare.to_m2(1.0)),
            2.471_053_814_671_653_6,
        );
    }

    #[test]
    fn names_are_read_back() {
        for unit in LengthUnit::ALL {
            assert_eq!(LengthUnit::from_name(unit.name()), Some(unit));
        }
        assert_eq!(LengthUnit::from_name("feet"), None);
    }

    #[track_caller]
    fn check_length(length_m: f64, decimals: usize, unit: LengthUnit) {
        let back = |r| unit.to_m(unit.format(length_m, decimals, r).parse::<f64>().unwrap());
        let step_m = unit.to_m(1.0) * 10f64.powi(-(decimals as i32)) * (1.0 + 1e-6);
        let (down, up) = (back(Rounding::Down), back(Rounding::Up));
        // Never to the flattering side, and no farther than a step and the rounding of the length in two units.
        let rounding_m = 4.0 * f64::EPSILON * length_m.abs();
        assert!(down <= length_m && length_m - down <= step_m + rounding_m);
        assert!(up >= length_m && up - length_m <= step_m + rounding_m);
        assert!((back(Rounding::Nearest) - length_m).abs() <= 0.5 * step_m + rounding_m);
    }

    /// Found by the property below: the rounding between two units shows where a step is as small.
    #[test]
    fn a_printed_length_of_many_digits_never_flatters() {
        check_length(7_442_709.261_976_429, 7, LengthUnit::UsSurveyFoot);
    }

    proptest! {
        #![proptest_config(crate::seeded::config())]

        #[test]
        fn printed_lengths_never_flatter(
            length_m in -1e7..1e7f64, decimals in 0..8usize, unit in 0..3usize,
        ) {
            check_length(length_m, decimals, LengthUnit::ALL[unit]);
        }

        /// The hard case: lengths that are round in the unit, up to the last bit.
        #[test]
        fn round_lengths_are_kept_or_cross_by_one_step(ticks in 0..2_000_000i64, unit in 0..3usize, nudge in -1..2i32) {
            let unit = LengthUnit::ALL[unit];
            let exact_m = unit.to_m(ticks as f64 / 1000.0);
            let length_m = match nudge { -1 => exact_m.next_down(), 1 => exact_m.next_up(), _ => exact_m };
            let down = unit.to_m(unit.format(length_m, 3, Rounding::Down).parse::<f64>().unwrap());
            let up = unit.to_m(unit.format(length_m, 3, Rounding::Up).parse::<f64>().unwrap());
            prop_assert!(down <= length_m && length_m <= up);
            if nudge == 0 {
                prop_assert_eq!(down, exact_m);
                prop_assert_eq!(up, exact_m);
            }
        }

        #[test]
        fn printed_areas_never_flatter(area_m2 in 0.0..1e9f64, decimals in 0..6usize, unit in 0..6usize) {
            let unit = AreaUnit::ALL[unit];
            let back = |r| unit.to_m2(unit.format(area_m2, decimals, r).parse::<f64>().unwrap());
            prop_assert!(back(Rounding::Down) <= area_m2);
            prop_assert!(back(Rounding::Up) >= area_m2);
        }
    }
}
