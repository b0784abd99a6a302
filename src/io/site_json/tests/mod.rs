//! Tests of reading a site: what a good file becomes.

mod refusals;

use super::*;
use crate::geom::Segment;
use crate::site::{Class, From, Kept, Shape, To};
use crate::units::LengthUnit;
use serde_json::{Value, json};

const METRES: Options = Options {
    coordinates: Coordinates::Plane(LengthUnit::Metre),
    reading: None,
    setback_m: None,
    front_m: None,
    side_m: None,
    rear_m: None,
};

/// Four corners, clockwise in the file, so that it is reversed on the way.
fn clockwise() -> Value {
    json!({"type": "Polygon", "coordinates": [[[0, 0], [0, 60], [80, 50], [80, 0], [0, 0]]]})
}

fn with_hole() -> Value {
    json!({"type": "Polygon", "coordinates": [
        [[0, 0], [80, 0], [80, 50], [0, 60], [0, 0]],
        [[10, 10], [10, 20], [20, 20], [20, 10], [10, 10]]
    ]})
}

fn feature(properties: Value, geometry: Value) -> Value {
    json!({"type": "Feature", "properties": properties, "geometry": geometry})
}

fn collection(features: Vec<Value>, others: Value) -> Value {
    let mut file = json!({"type": "FeatureCollection", "features": features});
    let others = others.as_object().cloned().unwrap_or_default();
    file.as_object_mut().expect("an object").extend(others);
    file
}

fn of_lot(properties: Value, others: Value) -> Value {
    let mut lot = json!({"use": "lot"});
    let properties = properties.as_object().cloned().unwrap_or_default();
    lot.as_object_mut().expect("an object").extend(properties);
    collection(vec![feature(lot, clockwise())], others)
}

fn read_json(file: &Value, options: &Options) -> Result<Imported, SiteJsonError> {
    read(file.to_string().as_bytes(), options)
}

#[track_caller]
fn good(file: &Value, options: &Options) -> Imported {
    read_json(file, options).unwrap_or_else(|e| panic!("{e}"))
}

/// Role and setback at the middle of a side, by where it lies in the file's coordinates.
#[track_caller]
fn at(imported: &Imported, x: f64, y: f64) -> (Role, f64) {
    let p = imported.plane.to_site(Point::new(x, y)).expect("in range");
    let lot = &imported.site.lot;
    let found = lot.area().segments().zip((0..).map(|i| lot.boundary(i)));
    let near = |(s, _): &(Segment, _)| s.distance(p) < 1e-9;
    let boundary = found.into_iter().find(near).expect("a segment there").1;
    (boundary.role, boundary.setback_m)
}

/// The middles of left, top, right, bottom of [`clockwise`], in file order.
const SIDES: [(f64, f64); 4] = [(0.0, 30.0), (40.0, 55.0), (80.0, 25.0), (40.0, 0.0)];

#[track_caller]
fn check_sides(file: &Value, options: &Options, expected: [(Role, f64); 4]) {
    let imported = good(file, options);
    let got = SIDES.map(|(x, y)| at(&imported, x, y));
    assert_eq!(got, expected);
}

#[test]
fn setbacks_stay_with_their_own_segments() {
    use Role::{Front, Other, Rear, Side};
    let plain = |m: f64| (Other, m);
    check_sides(&clockwise(), &METRES, [0.0; 4].map(plain));
    check_sides(
        &feature(json!({"setback_m": 2.5}), clockwise()),
        &METRES,
        [2.5; 4].map(plain),
    );
    let each = of_lot(json!({"setbacks_m": [1, 2, 3, 4.5]}), json!({}));
    check_sides(&each, &METRES, [1.0, 2.0, 3.0, 4.5].map(plain));

    let roles = json!({"roles": ["side", "rear", "other", "front"]});
    let by_role = of_lot(
        roles.clone(),
        json!({"setbacks": {"front": 6, "side": 2, "rear": 4}}),
    );
    let expected = [(Side, 2.0), (Rear, 4.0), (Other, 0.0), (Front, 6.0)];
    check_sides(&by_role, &METRES, expected);

    let front = Options {
        front_m: Some(9.0),
        ..METRES
    };
    check_sides(
        &by_role,
        &front,
        [(Side, 2.0), (Rear, 4.0), (Other, 0.0), (Front, 9.0)],
    );
    let all = Options {
        setback_m: Some(1.0),
        ..front
    };
    check_sides(
        &by_role,
        &all,
        [(Side, 1.0), (Rear, 1.0), (Other, 1.0), (Front, 9.0)],
    );
    check_sides(
        &of_lot(roles, json!({})),
        &all,
        [(Side, 1.0), (Rear, 1.0), (Other, 1.0), (Front, 9.0)],
    );
}

#[test]
fn hole_lines_get_the_one_figure_and_none_of_a_list() {
    let lot = |properties| collection(vec![feature(properties, with_hole())], json!({}));
    let one = good(&lot(json!({"use": "lot", "setback_m": 3})), &METRES);
    assert_eq!(at(&one, 15.0, 10.0), (Role::Other, 3.0));
    let list = good(
        &lot(json!({"use": "lot", "setbacks_m": [3, 3, 3, 3]})),
        &METRES,
    );
    assert_eq!(at(&list, 15.0, 10.0), (Role::Other, 0.0));
    let all = Options {
        setback_m: Some(2.0),
        ..METRES
    };
    let overridden = good(
        &lot(json!({"use": "lot", "setbacks_m": [3, 3, 3, 3]})),
        &all,
    );
    assert_eq!(at(&overridden, 15.0, 10.0), (Role::Other, 2.0));
}

#[test]
fn parts_of_a_lot_share_one_list() {
    let parts = json!({"type": "MultiPolygon", "coordinates": [
        [[[0, 0], [10, 0], [0, 10]]],
        [[[20, 0], [30, 0], [30, 10], [20, 0]]]
    ]});
    let file = feature(json!({"setbacks_m": [1, 2, 3, 4, 5, 6]}), parts);
    let imported = good(&file, &METRES);
    let middles = [
        (5.0, 0.0),
        (5.0, 5.0),
        (0.0, 5.0),
        (25.0, 0.0),
        (30.0, 5.0),
        (25.0, 5.0),
    ];
    let got = middles.map(|(x, y)| at(&imported, x, y).1);
    assert_eq!(got, [1.0, 2.0, 3.0, 4.0, 5.0, 6.0]);
}

#[test]
fn reads_everything_beside_the_lot() {
    let keep = |class: &str, geometry| {
        feature(
            json!({"use": "keep-clear", "class": class, "required_m": 3, "name": "K"}),
            geometry,
        )
    };
    let square = json!([[[20, 20], [24, 20], [24, 24], [20, 24], [20, 20]]]);
    let features = vec![
        feature(
            json!({"use": "lot", "setback_m": 1, "name": "Lot 9", "zone": "A", "class": "farm"}),
            clockwise(),
        ),
        keep(
            "well",
            json!({"type": "MultiPoint", "coordinates": [[1, 2], [3, 4, 9]]}),
        ),
        keep(
            "easement",
            json!({"type": "LineString", "coordinates": [[0, 5], [0, 5], [80, 5]]}),
        ),
        keep(
            "building",
            json!({"type": "Polygon", "coordinates": square}),
        ),
        feature(
            json!({"use": "keep-clear", "class": "tank", "required_m": 2, "diameter_m": 8}),
            json!({"type": "Point", "coordinates": [60, 40]}),
        ),
        feature(
            json!({"use": "building-line", "kept": "left"}),
            json!({"type": "LineString", "coordinates": [[0, 10], [80, 10]]}),
        ),
        feature(json!({"use": "context"}), Value::Null),
    ];
    let others = json!({
        "yards": "rounded",
        "structure": {"kind": "digester", "height_m": 12, "rings": [
            {"name": "lane", "width_m": 4}, {"name": "core", "share_of_diameter": 0.2, "inside": true}]},
        "rules": [
            {"from": "lane", "to": "lot-lines", "fixed_m": 1},
            {"from": {"ring": "core"}, "to": "line 2", "at_least_m": 1},
            {"from": "centre", "to": "well", "share_of_height": 1.1, "citation": "4.2(b)"},
            {"to": {"class": "other"}, "share_of_diameter": 0.5, "at_least_m": 3, "need_not_exceed_m": 9},
            {"to": "building-lines", "fixed_m": 0.5},
            {"to": {"line": 1}, "fixed_m": 2}
        ]
    });
    let imported = good(&collection(features, others), &METRES);
    let site = &imported.site;
    assert_eq!(imported.name.as_deref(), Some("Lot 9"));
    assert_eq!(site.reading, YardReading::Rounded);
    let shapes: Vec<_> = site
        .keep_clear
        .iter()
        .map(|k| (k.class, &k.shape))
        .collect();
    assert_eq!(shapes.len(), 5);
    assert!(matches!(shapes[1], (Class::Well, Shape::Point(_))));
    assert!(matches!(shapes[2], (Class::Easement, Shape::Line(line)) if line.len() == 2));
    assert!(matches!(shapes[3], (Class::Building, Shape::Area(_))));
    assert!(matches!(shapes[4], (Class::Tank, Shape::Disc(_, radius)) if *radius == 4.0));
    assert_eq!(site.building_lines[0].kept, Kept::Left);
    let rules: Vec<_> = site
        .rules
        .iter()
        .map(|r| (r.from.clone(), r.to.clone()))
        .collect();
    assert_eq!(rules[0], (From::Ring(0), To::LotLines));
    assert_eq!(rules[1], (From::Ring(1), To::Line(2)));
    assert_eq!(rules[2], (From::Centre, To::Class(Class::Well)));
    assert_eq!(rules[3], (From::Shell, To::Class(Class::Other)));
    assert_eq!(site.rules[3].need_not_exceed_m, Some(9.0));
    assert_eq!(site.rules[2].citation.as_deref(), Some("4.2(b)"));
    let notes = imported.problems.join("\n");
    assert!(
        notes.contains("rule 4 applies to nothing: nothing has the class other"),
        "{notes}"
    );

    let parallel = Options {
        reading: Some(YardReading::Parallel),
        ..METRES
    };
    let file = collection(
        vec![feature(json!({"use": "lot"}), clockwise())],
        json!({"yards": "rounded"}),
    );
    assert_eq!(good(&file, &parallel).site.reading, YardReading::Parallel);
}

#[test]
fn members_in_metres_stay_so_in_feet() {
    let feet = Options {
        coordinates: Coordinates::Plane(LengthUnit::Foot),
        ..METRES
    };
    let imported = good(&of_lot(json!({"setback_m": 3}), json!({})), &feet);
    assert_eq!(at(&imported, 0.0, 30.0).1, 3.0);
    let bounds = imported.site.lot.area().bounds();
    assert!((bounds.width() - 80.0 * 0.3048).abs() < 1e-12, "{bounds:?}");
}

#[test]
fn repairs_are_told_and_figures_stay_with_their_segments() {
    // Clockwise, unclosed, a corner repeated, and one in the middle of the bottom: once between equal figures, once not.
    let ring = json!([[0, 0], [0, 60], [0, 60], [80, 50], [80, 0], [40, 0]]);
    let lot = json!({"type": "Polygon", "coordinates": [ring]});
    let figures = |bottom: [f64; 2]| json!({"setbacks_m": [1, 99, 2, 3, bottom[0], bottom[1]]});
    let same = good(&feature(figures([4.0, 4.0]), lot.clone()), &METRES);
    assert_eq!(same.site.lot.area().n_segments(), 4);
    assert_eq!(SIDES.map(|(x, y)| at(&same, x, y).1), [1.0, 2.0, 3.0, 4.0]);
    assert_eq!(same.problems.len(), 4, "{:#?}", same.problems);
    let apart = good(&feature(figures([4.0, 5.0]), lot), &METRES);
    assert_eq!(apart.site.lot.area().n_segments(), 5);
    assert_eq!(at(&apart, 60.0, 0.0).1, 4.0);
    assert_eq!(at(&apart, 20.0, 0.0).1, 5.0);
}

#[test]
fn every_sample_site_is_a_real_job() {
    let folder = concat!(env!("CARGO_MANIFEST_DIR"), "/sample-sites");
    let entries = std::fs::read_dir(folder).expect("the folder is part of the project");
    let mut paths: Vec<_> = entries.map(|e| e.expect("an entry").path()).collect();
    paths.sort();
    assert!(paths.len() >= 4, "{paths:?}");
    for path in paths {
        let bytes = std::fs::read(&path).expect("a file");
        let imported =
            read(&bytes, &Options::default()).unwrap_or_else(|e| panic!("{}: {e}", path.display()));
        assert_eq!(
            imported.problems,
            Vec::<String>::new(),
            "{}",
            path.display()
        );
        let site = &imported.site;
        let lines = site.lot.lines();
        assert!(
            lines.iter().all(|l| l.setback_m > 0.0),
            "{}",
            path.display()
        );
        assert!(
            lines.iter().any(|l| l.role == Role::Front),
            "{}",
            path.display()
        );
        assert!(
            site.keep_clear.len() >= 3 && !site.rules.is_empty(),
            "{}",
            path.display()
        );
        let area_m2 = site.lot.area().area_m2();
        assert!(
            (3_000.0..15_000.0).contains(&area_m2),
            "{}: {area_m2} m²",
            path.display()
        );
    }
}
