//! Keep-clear areas, lines and points, and building lines.

use geojson::{GeometryValue, Position};

use super::envelope::{Draft, Numbered};
use super::members::{Members, listed};
use super::site_points;
use crate::geom::Point;
use crate::geom::validate::validate;
use crate::io::geometry;
use crate::io::plane::Plane;
use crate::site::{BuildingLine, Class, KeepClear, Kept, Shape, Site, To};

const KEEP_CLEAR: [&str; 5] = ["use", "class", "required_m", "name", "diameter_m"];
const BUILDING_LINE: [&str; 3] = ["use", "kept", "name"];
/// Properties of a lot, which anywhere else would be passed over unseen.
const OF_LOTS: [&str; 4] = ["setback_m", "setbacks_m", "roles", "setbacks"];

/// Everything that is to be kept clear, each thing of a Multi-geometry by itself.
pub fn keep_clear(draft: &Draft, plane: &Plane, problems: &mut Vec<String>) -> Vec<KeepClear> {
    let features = draft.features.iter();
    features
        .filter(|f| f.kind_of_use == "keep-clear")
        .flat_map(|f| keep_clear_of(f, plane, problems))
        .collect()
}

fn keep_clear_of(feature: &Numbered, plane: &Plane, problems: &mut Vec<String>) -> Vec<KeepClear> {
    let mut members = Members::new(&feature.place, feature.properties(), problems);
    members.refuse_lookalikes(&KEEP_CLEAR, &OF_LOTS, "a keep-clear area");
    members.refuse_lookalikes(&KEEP_CLEAR, &["kept"], "a keep-clear area");
    if members.get("class").is_none() {
        let known = listed(Class::ALL.map(Class::name));
        members.problem(format_args!("class is missing: say {known}"));
    }
    let known = listed(Class::ALL.map(Class::name));
    let class = members.word("class", Class::from_name, &known);
    let required_m = members.figure("required_m").unwrap_or(0.0);
    let name = members.text("name").map(str::to_owned);
    let diameter_m = members.figure("diameter_m");
    let shapes = shapes(feature, diameter_m, plane, problems);
    let mut things = Vec::new();
    for shape in shapes {
        match KeepClear::new(
            name.clone(),
            class.unwrap_or(Class::Other),
            required_m,
            shape,
        ) {
            Ok(thing) => things.push(thing),
            Err(e) => problems.push(format!("{}: {e}", feature.place)),
        }
    }
    things
}

fn shapes(
    feature: &Numbered,
    diameter_m: Option<f64>,
    plane: &Plane,
    problems: &mut Vec<String>,
) -> Vec<Shape> {
    let place = feature.place.as_str();
    let Some(geometry) = &feature.feature.geometry else {
        problems.push(format!("{place}: the feature has no geometry"));
        return Vec::new();
    };
    let is_point = matches!(
        geometry.value,
        GeometryValue::Point { .. } | GeometryValue::MultiPoint { .. }
    );
    if diameter_m.is_some() && !is_point {
        problems.push(format!(
            "{place}: diameter_m goes with a Point, not with a {}",
            geometry.value.type_name()
        ));
    }
    let round = |p: Point| match diameter_m {
        Some(diameter_m) if diameter_m > 0.0 => Shape::Disc(p, 0.5 * diameter_m),
        _ => Shape::Point(p),
    };
    match &geometry.value {
        GeometryValue::Point { coordinates } => {
            let points = positions(std::slice::from_ref(coordinates), plane, place, problems);
            points.into_iter().flatten().map(round).collect()
        }
        GeometryValue::MultiPoint { coordinates } => {
            let points = positions(coordinates, plane, place, problems);
            points.into_iter().flatten().map(round).collect()
        }
        GeometryValue::LineString { coordinates } => {
            let line = line(coordinates, plane, place, problems);
            line.map(Shape::Line).into_iter().collect()
        }
        GeometryValue::MultiLineString { coordinates } => {
            let mut shapes = Vec::new();
            for (i, run) in coordinates.iter().enumerate() {
                let place = format!("{place}, line {}", i + 1);
                shapes.extend(line(run, plane, &place, problems).map(Shape::Line));
            }
            shapes
        }
        GeometryValue::Polygon { .. } | GeometryValue::MultiPolygon { .. } => {
            area(&geometry.value, plane, place, problems)
                .into_iter()
                .collect()
        }
        GeometryValue::GeometryCollection { .. } => {
            problems.push(format!(
                "{place}: the geometry is a GeometryCollection: give each thing its own feature"
            ));
            Vec::new()
        }
    }
}

fn positions(
    positions: &[Position],
    plane: &Plane,
    place: &str,
    problems: &mut Vec<String>,
) -> Option<Vec<Point>> {
    if positions.is_empty() {
        problems.push(format!("{place}: the geometry is empty"));
        return None;
    }
    match geometry::points(positions) {
        Ok(points) => site_points(&points, plane, place, problems),
        Err(e) => {
            problems.push(format!("{place}: {e}"));
            None
        }
    }
}

/// A line with repeated corners left out.
fn line(
    run: &[Position],
    plane: &Plane,
    place: &str,
    problems: &mut Vec<String>,
) -> Option<Vec<Point>> {
    let mut corners = positions(run, plane, place, problems)?;
    corners.dedup();
    if corners.len() < 2 {
        problems.push(format!(
            "{place}: the line has fewer than two distinct corners"
        ));
        return None;
    }
    Some(corners)
}

fn area(
    geometry: &GeometryValue,
    plane: &Plane,
    place: &str,
    problems: &mut Vec<String>,
) -> Option<Shape> {
    let at = |e: &dyn std::fmt::Display| format!("{place}: {e}");
    let polygons = geometry::polygons(geometry).map_err(|e| at(&e));
    let polygons = polygons.and_then(|input| plane.to_site_polygons(&input).map_err(|e| at(&e)));
    match polygons {
        Err(e) => {
            problems.push(e);
            None
        }
        Ok(polygons) => match validate(&polygons, &|_, _| true) {
            Ok(validated) => Some(Shape::Area(validated.area)),
            Err(found) => {
                problems.extend(found.iter().map(|p| at(&plane.say(p))));
                None
            }
        },
    }
}

/// The lines that the structure must stay behind.
pub fn building_lines(
    draft: &Draft,
    plane: &Plane,
    problems: &mut Vec<String>,
) -> Vec<BuildingLine> {
    let features = draft.features.iter();
    features
        .filter(|f| f.kind_of_use == "building-line")
        .filter_map(|f| building_line_of(f, plane, problems))
        .collect()
}

fn building_line_of(
    feature: &Numbered,
    plane: &Plane,
    problems: &mut Vec<String>,
) -> Option<BuildingLine> {
    let mut members = Members::new(&feature.place, feature.properties(), problems);
    members.refuse_lookalikes(&BUILDING_LINE, &OF_LOTS, "a building line");
    if members.get("kept").is_none() {
        members.problem("kept is missing: say left or right, seen along the line");
    }
    let side = |text: &str| match text {
        "left" => Some(Kept::Left),
        "right" => Some(Kept::Right),
        _ => None,
    };
    let kept = members.word("kept", side, "left or right, seen along the line");
    let name = members.text("name").map(str::to_owned);
    let geometry = feature.feature.geometry.as_ref().map(|g| &g.value);
    let Some(GeometryValue::LineString { coordinates }) = geometry else {
        let found = geometry.map_or("missing", GeometryValue::type_name);
        members.problem(format_args!(
            "a building line is a LineString; the geometry is {found}"
        ));
        return None;
    };
    let corners = line(coordinates, plane, &feature.place, problems)?;
    Some(BuildingLine {
        name,
        corners,
        kept: kept?,
    })
}

/// Notes things that ask for no distance, neither their own nor a rule's.
pub fn note_missing_distances(draft: &Draft, site: &Site, notes: &mut Vec<String>) {
    for feature in draft
        .features
        .iter()
        .filter(|f| f.kind_of_use == "keep-clear")
    {
        let class = feature.feature.property("class").and_then(|c| c.as_str());
        let class = class.and_then(Class::from_name);
        let by_rule = site.rules.iter().any(|rule| match rule.to {
            To::KeepClear => true,
            To::Class(c) => Some(c) == class,
            _ => false,
        });
        let own = feature.feature.property("required_m");
        if own.is_none_or(serde_json::Value::is_null) && !by_rule {
            notes.push(format!(
                "{}: no required_m and no rule for it, so the structure may touch it",
                feature.place
            ));
        }
    }
}
