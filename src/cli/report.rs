//! The readable report of a placement. Nothing in it is better than what was found ([`super::printed`]).

use std::f64::consts::PI;
use std::fmt::Write;
use std::path::Path;

use super::failure::visible;
use super::outcome::Outcome;
use super::printed::{Printed, Printer};
use crate::geom::Point;
use crate::io::plane::Plane;
use crate::placement::Status;
use crate::site::YardReading;
use crate::units::{AreaUnit, LengthUnit, Rounding, format_down};

/// Stands over every result.
pub const CAUTION: &str = "Planning aid only. Local zoning, codes and licensed practice decide: have setbacks, \
    easements, ground and\nstructure confirmed before anything is built.";

/// As many limits are listed; a lot of thousands of lines would push the rest off the screen.
const SHOWN_LIMITS: usize = 40;
/// As many notes are listed.
const SHOWN_NOTES: usize = 20;

/// The bound has so many more decimals than lengths: it is nearly always that good, and two roundings a centimetre apart
/// would hide it.
const BOUND_EXTRA: usize = 4;

/// Decimals of areas in squares of the unit, and in hectares or acres.
const AREA_DECIMALS: usize = 1;
const LAND_DECIMALS: usize = 3;
/// Decimals of a relief gain, metres per metre.
const GAIN_DECIMALS: usize = 2;

/// The report of an outcome in a unit of length.
pub fn text(outcome: &Outcome, file: &Path, unit: LengthUnit) -> String {
    Reporter {
        outcome,
        unit,
        printer: Printer {
            site: &outcome.imported.site,
            limits: &outcome.limits,
            plane: outcome.plane(),
            unit,
        },
    }
    .text(file)
}

struct Reporter<'a> {
    outcome: &'a Outcome,
    unit: LengthUnit,
    printer: Printer<'a>,
}

impl Reporter<'_> {
    fn text(&self, file: &Path) -> String {
        let placement = &self.outcome.placement;
        let circle = placement.circle.as_ref();
        let printed = circle.and_then(|c| {
            let centre = self.outcome.input_of(c.centre);
            self.printer.circle(centre, c.diameter_m)
        });
        let mut sections = vec![self.head(file), self.headline(printed.as_ref())];
        if let Some(printed) = &printed {
            sections.push(self.limits(printed));
            sections.extend(self.other_spots());
        }
        sections.extend(self.notes());
        sections.push(self.not_checked());
        sections.join("\n")
    }

    fn head(&self, file: &Path) -> String {
        let file = visible(&file.display().to_string());
        let title = match &self.outcome.imported.name {
            Some(name) => format!("{} ({file})", visible(name)),
            None => file,
        };
        format!("{title}\n{CAUTION}\n")
    }

    /// A length in the unit with its name.
    fn length(&self, length_m: f64, decimals: usize, rounding: Rounding) -> String {
        let figure = self.unit.format(length_m, decimals, rounding);
        format!("{figure} {}", self.unit.name())
    }

    fn headline(&self, printed: Option<&Printed>) -> String {
        let decimals = printed.map_or(2, |p| p.decimals);
        let upper_m = self.outcome.placement.upper_m;
        let upper = self.length(upper_m, decimals + BOUND_EXTRA, Rounding::Up);
        let kind = self.outcome.imported.site.structure.kind.name();
        let n_pieces = self.outcome.placement.n_pieces;
        let unit = self.unit.name();
        let diameter = printed.map(|p| format!("{} {unit}", p.diameter));
        let mut text = match (self.outcome.placement.status, diameter) {
            (Status::Fits, Some(diameter)) => format!(
                "Largest {kind}: {diameter} diameter\n  Proven for the lines as drawn: none over {upper} fits.\n"
            ),
            (Status::Fits, None) => format!(
                "Largest {kind}: smaller than can be printed; proven for the lines as drawn: none over {upper} fits.\n"
            ),
            (Status::NoRoom, _) => format!(
                "No room: no {kind} clears every limit.\n  Proven for the lines as drawn: none over {upper} fits.\n"
            ),
            (_, Some(diameter)) => format!(
                "Largest {kind} found: {diameter} diameter\n  The search ended at its cap of work, {n_pieces} pieces: one up to {upper} may fit, none over that.\n"
            ),
            (_, None) => format!(
                "No {kind} found, and not proven that none fits: the search ended at its cap of work, {n_pieces} pieces; none over {upper} fits.\n"
            ),
        };
        if let Some(printed) = printed {
            text += &self.details(printed);
        }
        text + &self.yards(decimals)
    }

    fn details(&self, printed: &Printed) -> String {
        let [x, y] = &printed.centre;
        let centre = self.place(x, y);
        let covered_m2 = 0.25 * PI * printed.diameter_m * printed.diameter_m;
        let square = AreaUnit::square(self.unit);
        let land = AreaUnit::land(self.unit);
        let lot_m2 = self.outcome.imported.site.lot.area().area_m2();
        let mut text = format!(
            "  Centre: {centre}\n  Area: {} {} of a lot of {} {} ({} {})\n",
            square.format(covered_m2, AREA_DECIMALS, Rounding::Up),
            square.name(),
            square.format(lot_m2, AREA_DECIMALS, Rounding::Down),
            square.name(),
            land.format(lot_m2, LAND_DECIMALS, Rounding::Down),
            land.name(),
        );
        if let Some([from, to]) = self.outcome.placement.circle.and_then(|c| c.slide) {
            let how_far = self.length(from.distance(to), printed.decimals, Rounding::Down);
            // Writing to a text cannot fail.
            let _ = writeln!(
                text,
                "  The circle can slide about {how_far} and stay as large: from {} to {}.",
                self.rough_place(from),
                self.rough_place(to)
            );
        }
        text
    }

    fn place(&self, x: &str, y: &str) -> String {
        match self.outcome.plane() {
            Plane::LonLat { .. } => format!("longitude {x}, latitude {y}"),
            Plane::Given { unit, .. } => format!("x {x}, y {y} {}", unit.name()),
        }
    }

    /// A place to a millimetre or so, for looking rather than building.
    fn rough_place(&self, site: Point) -> String {
        let Point { x, y } = self.outcome.input_of(site);
        let decimals = match self.outcome.plane() {
            Plane::LonLat { .. } => 8,
            Plane::Given { .. } => 3,
        };
        self.place(&format!("{x:.decimals$}"), &format!("{y:.decimals$}"))
    }

    fn yards(&self, decimals: usize) -> String {
        let (this, other) = match self.outcome.imported.site.reading {
            YardReading::Parallel => (
                "by setback lines parallel to the lot lines",
                "Rounded (distance to the nearest point of a lot line)",
            ),
            YardReading::Rounded => (
                "rounded (distance to the nearest point of a lot line)",
                "By setback lines parallel to the lot lines",
            ),
        };
        let gives = match self.outcome.report.other_reading_diameter_m {
            Some(m) => format!(
                "they would give {}",
                self.length(m, decimals, Rounding::Down)
            ),
            None => "they would leave no room".to_owned(),
        };
        format!("  Yards are read {this}. {other}, {gives}.\n")
    }

    fn limits(&self, printed: &Printed) -> String {
        let reports = &self.outcome.report.limits;
        let site = &self.outcome.imported.site;
        let unit = self.unit.name();
        let mut order: Vec<usize> = (0..printed.limits.len()).collect();
        let spare_m = |i: &usize| printed.limits.get(*i).map_or(f64::INFINITY, |l| l.spare_m);
        order.sort_by(|a, b| spare_m(a).total_cmp(&spare_m(b)));
        let heading = [
            "Limits, tightest first",
            "required",
            "clearance",
            "spare",
            "relief gain",
            "",
        ];
        let units = ["", unit, unit, unit, &format!("{unit} per {unit}"), ""];
        let mut rows = vec![heading.map(str::to_owned), units.map(str::to_owned)];
        for &i in order.iter().take(SHOWN_LIMITS) {
            let (Some(limit), Some(line)) =
                (self.outcome.limits.limits.get(i), printed.limits.get(i))
            else {
                continue;
            };
            let found = reports.iter().find(|r| r.limit == i);
            let is_binding = found.is_some_and(|r| r.is_binding);
            let gain = found.filter(|r| r.is_binding).map_or_else(
                || "-".to_owned(),
                |r| format_down(r.relief_gain, GAIN_DECIMALS),
            );
            rows.push([
                format!("  {}", visible(&limit.title(site))),
                line.required.clone(),
                line.clearance.clone(),
                line.spare.clone(),
                gain,
                if is_binding { "binds" } else { "" }.to_owned(),
            ]);
        }
        let mut text = table(&rows);
        if let Some(more @ 1..) = order.len().checked_sub(SHOWN_LIMITS) {
            let _ = writeln!(text, "  and {more} more with more spare; --json lists all");
        }
        if self.outcome.imported.site.reading == YardReading::Parallel {
            text += "The spare of a setback is measured to its yard. ";
        }
        text + "Relief gain: growth of the diameter per reduction of the required distance.\n"
    }

    fn other_spots(&self) -> Option<String> {
        let spots = &self.outcome.report.other_spots;
        if spots.is_empty() {
            return None;
        }
        let mut text = "Other spots, found but not proven to be the next best\n".to_owned();
        for spot in spots {
            let centre = self.outcome.input_of(spot.centre);
            if let Some(printed) = self.printer.circle(centre, spot.diameter_m) {
                let [x, y] = &printed.centre;
                let (unit, place) = (self.unit.name(), self.place(x, y));
                let _ = writeln!(text, "  {} {unit} at {place}", printed.diameter);
            }
        }
        Some(text)
    }

    fn notes(&self) -> Option<String> {
        let notes = &self.outcome.imported.problems;
        if notes.is_empty() {
            return None;
        }
        let mut text = "Notes\n".to_owned();
        for note in notes.iter().take(SHOWN_NOTES) {
            let _ = writeln!(text, "  {}", visible(note));
        }
        if let Some(more @ 1..) = notes.len().checked_sub(SHOWN_NOTES) {
            let _ = writeln!(text, "  and {more} more; --json lists all");
        }
        Some(text)
    }

    fn not_checked(&self) -> String {
        let mut text =
            "Not checked: access, slopes, ground, and how well the lines were surveyed.\n"
                .to_owned();
        if matches!(self.outcome.plane(), Plane::LonLat { .. }) {
            text += "Distances are those on the WGS84 ellipsoid; on ground 1,000 m above it they are longer by 1 part in 6,400.\n";
        }
        text
    }
}

/// Columns side by side, the first to the left, figures to the right, a last one of words.
fn table(rows: &[[String; 6]]) -> String {
    let width = |k: usize| {
        let cells = rows.iter().filter_map(|row| row.get(k));
        cells.map(|cell| cell.chars().count()).max().unwrap_or(0)
    };
    let widths: [usize; 6] = std::array::from_fn(width);
    let mut text = String::new();
    for row in rows {
        let mut line = String::new();
        for (k, (cell, width)) in row.iter().zip(widths).enumerate() {
            let _ = match k {
                0 => write!(line, "{cell:<width$}"),
                5 => write!(line, "  {cell}"),
                _ => write!(line, "  {cell:>width$}"),
            };
        }
        text.push_str(line.trim_end());
        text.push('\n');
    }
    text
}
