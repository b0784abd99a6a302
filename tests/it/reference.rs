//! The published and derived cases of tests/data/geometry.json: closed forms, cases from the unit tests of GEOS and JTS and
//! from the documentation of Shapely, PostGIS and SciPy. Each entry of that file carries its own source and status; a
//! failure names both.

use crate::support::{area, areas, diameter, keep_clear, lot_with_setbacks, place, with_reading};
use roundstead::geom::validate::{RawPolygon, validate};
use roundstead::geom::{Area, Point};
use roundstead::lp::model::{HalfPlane, chebyshev};
use roundstead::placement::Status;
use roundstead::site::{Lot, Shape, Site, YardReading};
use serde_json::Value;

fn cases(kind: &str) -> Vec<Value> {
    let text = include_str!("../data/geometry.json");
    let all: Value = serde_json::from_str(text).expect("the file is JSON");
    all[kind]
        .as_array()
        .unwrap_or_else(|| panic!("{kind} is a list"))
        .clone()
}

fn figure(value: &Value) -> f64 {
    value
        .as_f64()
        .unwrap_or_else(|| panic!("{value} is a figure"))
}

fn ring(value: &Value) -> Vec<[f64; 2]> {
    let pair = |p: &Value| [figure(&p[0]), figure(&p[1])];
    value
        .as_array()
        .expect("a ring is a list")
        .iter()
        .map(pair)
        .collect()
}

fn polygon(value: &Value) -> Area {
    let holes = value["holes"].as_array().expect("holes are a list");
    let rings: Vec<_> = std::iter::once(ring(&value["exterior"]))
        .chain(holes.iter().map(ring))
        .collect();
    area(&rings)
}

/// A name for messages: id and source.
fn name(case: &Value) -> String {
    format!("{} [{}]", case["id"], case["source"])
}

/// Rings of a WKT polygon or multipolygon, part by part. Figures may be Inf or NaN.
fn wkt(text: &str) -> Vec<Vec<Vec<[f64; 2]>>> {
    let body = &text[text.find('(').expect("a WKT text has brackets")..];
    let body = if text.trim_start().to_uppercase().starts_with("MULTI") {
        body.to_owned()
    } else {
        format!("({body})")
    };
    let inner = body
        .trim()
        .strip_prefix('(')
        .and_then(|b| b.strip_suffix(')'))
        .expect("brackets close");
    let part = |p: &str| {
        let rings = p
            .trim_matches(|c: char| "(), ".contains(c))
            .split("),")
            .map(|r| r.trim_matches(|c: char| "() ".contains(c)));
        let pair = |p: &str| {
            let mut figures = p
                .split_whitespace()
                .map(|f| f.parse::<f64>().expect("a figure"));
            [figures.next().expect("x"), figures.next().expect("y")]
        };
        rings.map(|r| r.split(',').map(pair).collect()).collect()
    };
    inner.split(")),").map(part).collect()
}

fn raw(parts: &[Vec<Vec<[f64; 2]>>]) -> Vec<RawPolygon> {
    let ring = |r: &Vec<[f64; 2]>| r.iter().map(|&[x, y]| Point::new(x, y)).collect();
    parts
        .iter()
        .map(|rings| RawPolygon {
            rings: rings.iter().map(ring).collect(),
        })
        .collect()
}

#[track_caller]
fn check_diameter(name: &str, found: f64, expected: f64, relative: f64) {
    let off = (found - expected).abs();
    assert!(
        off <= relative * expected,
        "{name}: {found} m where {expected} m is expected, off by {off:e}"
    );
}

#[test]
fn closed_forms_hold_to_one_in_a_thousand_million() {
    let cases = cases("closed_form");
    assert_eq!(cases.len(), 27);
    for case in cases {
        let mut site = Site::of_lot(Lot::plain(polygon(&case["polygon"])));
        let points = case["point_obstacles"]
            .as_array()
            .cloned()
            .unwrap_or_default();
        let discs = case["disc_obstacles"]
            .as_array()
            .cloned()
            .unwrap_or_default();
        let at = |p: &Value| Point::new(figure(&p[0]), figure(&p[1]));
        site.keep_clear
            .extend(points.iter().map(|p| keep_clear(Shape::Point(at(p)), 0.0)));
        site.keep_clear.extend(
            discs
                .iter()
                .map(|d| keep_clear(Shape::Disc(at(&d["centre"]), figure(&d["radius"])), 0.0)),
        );
        let placement = place(&site);
        let circle = placement
            .circle
            .unwrap_or_else(|| panic!("{}: nothing found", name(&case)));
        check_diameter(
            &name(&case),
            circle.diameter_m,
            figure(&case["expected_diameter"]),
            1e-9,
        );
        assert!(
            placement.upper_m >= figure(&case["expected_diameter"]),
            "{}: bound below the truth",
            name(&case)
        );
        assert!(
            placement.upper_m - circle.diameter_m <= 1e-9,
            "{}",
            name(&case)
        );
        if case["unique_centre"] == Value::Bool(true) {
            let off = circle.centre.distance(at(&case["expected_centre"]));
            assert!(off < 1e-6, "{}: centre off by {off:e}", name(&case));
        }
    }
}

#[test]
fn published_circles_are_met_to_one_in_a_million() {
    let mut n_refined = 0;
    for case in cases("published_mic") {
        let Some(text) = case["wkt"].as_str() else {
            continue;
        };
        let Ok(valid) = validate(&raw(&wkt(text)), &|_, _| true) else {
            // A lot without area is refused with the place; its published radius is 0.
            let problems = validate(&raw(&wkt(text)), &|_, _| true).expect_err("refused just now");
            assert_eq!(
                figure(&case["expected_radius"]),
                0.0,
                "{}: refused: {problems:?}",
                name(&case)
            );
            assert!(
                problems.iter().any(|p| p.to_string().contains("corner")),
                "{problems:?} names a place"
            );
            continue;
        };
        let found = diameter(&Site::of_lot(Lot::plain(valid.area)));
        let published = 2.0 * figure(&case["expected_radius"]);
        let tolerance = case["search_tolerance"].as_f64().unwrap_or(0.05).max(1e-3);
        assert!(
            found >= published - 4.0 * tolerance,
            "{}: {found} below the published {published}",
            name(&case)
        );
        match case["refined_here"]["radius"].as_f64() {
            Some(radius) => {
                n_refined += 1;
                check_diameter(&name(&case), found, 2.0 * radius, 1e-6);
            }
            None => check_diameter(&name(&case), found, published, 1e-6),
        }
    }
    assert!(n_refined >= 24, "{n_refined} cases carry a refined radius");
}

/// A point buffered by 100 with 20 segments a quadrant: an 80-gon with the apothem 100 cos(pi/80). Source: entry geos_mic_3,
/// libgeos/geos, tests/unit/algorithm/construct/MaximumInscribedCircleTest.cpp, test<3>.
#[test]
fn the_buffered_point_has_its_apothem() {
    let corner = |i: i32| {
        let angle = f64::from(i) / 80.0 * std::f64::consts::TAU;
        [100.0 + 100.0 * angle.cos(), 100.0 + 100.0 * angle.sin()]
    };
    let lot = area(&[(0..80).map(corner).collect()]);
    let expected = 200.0 * (std::f64::consts::PI / 80.0).cos();
    check_diameter(
        "geos_mic_3",
        diameter(&Site::of_lot(Lot::plain(lot))),
        expected,
        1e-9,
    );
}

#[test]
fn edge_cases_end_with_an_honest_answer() {
    for case in cases("published_mic_edge_cases") {
        let texts = match &case["wkt"] {
            Value::Array(texts) => texts
                .iter()
                .filter_map(Value::as_str)
                .map(str::to_owned)
                .collect(),
            text => vec![text.as_str().expect("WKT is text").to_owned()],
        };
        for text in texts {
            let parts = wkt(&text);
            match validate(&raw(&parts), &|_, _| true) {
                Err(problems) => assert!(!problems.is_empty(), "{}", name(&case)),
                Ok(valid) => {
                    let site = Site::of_lot(Lot::plain(valid.area));
                    let placement = place(&site);
                    assert_ne!(placement.status, Status::CapHit, "{}", name(&case));
                    // The pass rule of the source: the centre is within 2 tolerances of the boundary, or, where more room
                    // was found than that, our circle fits, which its verification has shown.
                    let room = placement.circle.map_or(0.0, |c| c.diameter_m);
                    assert!(
                        room.is_finite() && room <= placement.upper_m,
                        "{}",
                        name(&case)
                    );
                }
            }
        }
    }
}

#[test]
fn setback_cases_hold_in_their_reading() {
    let cases = cases("setback_cases");
    assert_eq!(cases.len(), 4);
    for case in cases {
        let area = polygon(&case["polygon"]);
        if let Some(setbacks) = case["setbacks_by_edge_from_vertex_i"].as_array() {
            let setbacks: Vec<f64> = setbacks.iter().map(figure).collect();
            let site = Site::of_lot(lot_with_setbacks(area, &setbacks));
            check_diameter(
                &name(&case),
                diameter(&site),
                figure(&case["expected_diameter"]),
                1e-9,
            );
        } else {
            let setbacks = vec![figure(&case["setback"]); area.n_segments()];
            let site = Site::of_lot(lot_with_setbacks(area, &setbacks));
            let by_parallels = 2.0 * figure(&case["expected_radius_parallel_line_rule"]);
            let rounded = 2.0 * figure(&case["expected_radius_distance_rule"]);
            check_diameter(&name(&case), diameter(&site), by_parallels, 1e-9);
            check_diameter(
                &name(&case),
                diameter(&with_reading(&site, YardReading::Rounded)),
                rounded,
                1e-9,
            );
        }
    }
}

/// The two readings of one lot: 12.00 m by parallels, 13.11 m rounded. Source: derived here from the construction of
/// a yard (half-planes against distances to segments).
#[test]
fn readings_differ_where_setbacks_differ_at_an_obtuse_corner() {
    let lot = area(&[vec![[-6.0, 0.0], [6.0, 0.0], [30.0, 40.0], [-30.0, 40.0]]]);
    let site = Site::of_lot(lot_with_setbacks(lot, &[25.0, 2.0, 3.0, 2.0]));
    assert!((diameter(&site) - 12.0).abs() < 5e-3);
    assert!((diameter(&with_reading(&site, YardReading::Rounded)) - 13.11).abs() < 5e-3);
}

#[test]
fn the_chebyshev_centre_of_scipys_documentation_is_found_by_both_programs() {
    for case in cases("chebyshev_lp") {
        let half_plane = |row: &Value| {
            // a x + b y + c <= 0, normal pointing in, of length 1.
            let [a, b, c] = [0, 1, 2].map(|k| figure(&row[k]));
            let length = a.hypot(b);
            HalfPlane {
                nx: -a / length,
                ny: -b / length,
                w: 1.0,
                b: c / length,
            }
        };
        let rows = case["halfspaces_Ax_plus_b_le_0"]
            .as_array()
            .expect("half-planes are a list");
        let half_planes: Vec<_> = rows.iter().map(half_plane).collect();
        let [x, y, r] = chebyshev(&half_planes).expect("the program has an optimum");
        let expected = figure(&case["expected_radius"]);
        check_diameter(&name(&case), 2.0 * r, 2.0 * expected, 1e-9);
        let centre = &case["expected_centre"];
        assert!((x - figure(&centre[0])).abs() < 1e-9 && (y - figure(&centre[1])).abs() < 1e-9);
        let lot = area(&[ring(&case["vertices"])]);
        check_diameter(
            &name(&case),
            diameter(&Site::of_lot(Lot::plain(lot))),
            2.0 * expected,
            1e-9,
        );
    }
}

/// 407 cadastral plots (momepy 0.11.0, BSD-3-Clause; see the head of the data file) with a radius that is attained and an
/// upper bound for each.
#[test]
fn real_plots_meet_their_reference() {
    let plots: Value =
        serde_json::from_str(include_str!("../data/bubenec_plots_utm33n.geojson")).expect("JSON");
    let reference: Value = serde_json::from_str(include_str!(
        "../data/bubenec_plots_utm33n_mic_reference.json"
    ))
    .expect("JSON");
    let features = plots["features"].as_array().expect("features are a list");
    let rows = reference["rows"].as_array().expect("rows are a list");
    assert_eq!((features.len(), rows.len()), (407, 407));
    for (feature, row) in features.iter().zip(rows) {
        assert_eq!(feature["properties"]["id"], row["id"]);
        let rings: Vec<_> = feature["geometry"]["coordinates"]
            .as_array()
            .expect("rings")
            .iter()
            .map(ring)
            .collect();
        let origin = rings[0][0];
        let near = |r: &Vec<[f64; 2]>| {
            r.iter()
                .map(|p| [p[0] - origin[0], p[1] - origin[1]])
                .collect()
        };
        let lot = areas(&[rings.iter().map(near).collect()]);
        let placement = place(&Site::of_lot(Lot::plain(lot)));
        let radius = placement.circle.map_or(0.0, |c| 0.5 * c.diameter_m);
        let (least, most) = (
            figure(&row["mic_radius"]) - 1e-6,
            figure(&row["upper_bound"]) + 1e-6,
        );
        assert!(
            (least..=most).contains(&radius),
            "plot {}: {radius} is not in {least}..{most}",
            row["id"]
        );
        assert!(
            placement.upper_m - 2.0 * radius <= 1e-9,
            "plot {}: gap",
            row["id"]
        );
    }
}
