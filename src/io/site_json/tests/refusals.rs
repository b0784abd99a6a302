//! Tests of where a bad site is refused.

use super::*;
use proptest::prelude::*;

#[track_caller]
fn refused(file: &Value, options: &Options, words: &str) {
    let error = read_json(file, options).expect_err("a refusal");
    assert!(matches!(error, SiteJsonError::BadInput(_)), "{error}");
    assert!(error.to_string().contains(words), "{error}\nlacks\n{words}");
}

#[test]
fn refuses_bad_setbacks_where_they_stand() {
    #[track_caller]
    fn check(properties: Value, others: Value, words: &str) {
        refused(&of_lot(properties, others), &METRES, words);
    }
    let no = || json!({});
    check(
        json!({"setback_m": -1}),
        no(),
        "feature 1: setback_m is -1: it must be a finite number, zero or more",
    );
    check(
        json!({"setback_m": "NaN", "name": "North"}),
        no(),
        "feature 1 (\"North\"): setback_m is \"NaN\", not a number",
    );
    check(
        json!({"setback_m": 1, "setbacks_m": [1, 1, 1, 1]}),
        no(),
        "both given",
    );
    check(
        json!({"setbacks_m": [1, 2, 3]}),
        no(),
        "setbacks_m has 3 entries, but the outer ring has 4 segments",
    );
    check(
        json!({"setbacks_m": [1, -2, 3, 4]}),
        no(),
        "setbacks_m, entry 2, is -2",
    );
    check(
        json!({"setbacks_m": 3}),
        no(),
        "setbacks_m is 3, not an array",
    );
    check(
        json!({"roles": ["front", "side"]}),
        no(),
        "roles has 2 entries, but the outer ring has 4",
    );
    check(
        json!({"roles": ["front", "side", "back", "side"]}),
        no(),
        "roles, entry 3, is \"back\"",
    );
    check(
        json!({"roles": ["front", "side", "rear", "side"]}),
        json!({"setbacks": {"front": 1}}),
        "no setback for the role side or rear",
    );
    check(
        no(),
        json!({"setbacks": {"front": 1}}),
        "the lot has no roles",
    );
    check(
        json!({"setback_m": 1}),
        json!({"setbacks": {"front": 1}}),
        "keep one of them",
    );
    check(
        no(),
        json!({"setbacks": {"frnt": 1}}),
        "setbacks: \"frnt\" is unknown: is front meant?",
    );
    check(
        no(),
        json!({"setbacks": {"front": -1}}),
        "setbacks: front is -1",
    );
    check(
        json!({"setbak_m": 1}),
        no(),
        "\"setbak_m\" is unknown: is setback_m meant?",
    );
    check(json!({"frontage_m": 40}), no(), "\"frontage_m\" is unknown");
    check(
        json!({"required_m": 40}),
        no(),
        "required_m does not go with a lot",
    );
    let front = Options {
        front_m: Some(3.0),
        ..METRES
    };
    refused(
        &of_lot(no(), no()),
        &front,
        "--front is given, but no segment has the role front",
    );
}

#[test]
fn refuses_bad_things_where_they_stand() {
    #[track_caller]
    fn check(properties: Value, geometry: Value, words: &str) {
        let lot = feature(json!({"use": "lot", "setback_m": 1}), clockwise());
        refused(
            &collection(vec![lot, feature(properties, geometry)], json!({})),
            &METRES,
            words,
        );
    }
    let point = || json!({"type": "Point", "coordinates": [1, 2]});
    let line = || json!({"type": "LineString", "coordinates": [[0, 0], [5, 5]]});
    let keep = |more: Value| {
        let mut keep = json!({"use": "keep-clear", "class": "well", "required_m": 3});
        keep.as_object_mut()
            .expect("an object")
            .extend(more.as_object().cloned().unwrap_or_default());
        keep
    };
    check(json!({}), point(), "feature 2: use is missing");
    check(
        json!({"use": "well"}),
        point(),
        "feature 2: use is \"well\": say lot, keep-clear",
    );
    check(json!({"use": 5}), point(), "use is 5, not a text");
    check(
        json!({"use": "lot"}),
        clockwise(),
        "feature 2: a second lot beside feature 1",
    );
    check(
        keep(json!({"class": "wel"})),
        point(),
        "feature 2: class is \"wel\": say easement",
    );
    check(keep(json!({"class": null})), point(), "class is missing");
    check(
        keep(json!({"required_m": -0.5})),
        point(),
        "required_m is -0.5",
    );
    check(
        keep(json!({"requiredm": 1})),
        point(),
        "is required_m meant?",
    );
    check(
        keep(json!({"setback_m": 1})),
        point(),
        "setback_m does not go with a keep-clear area",
    );
    check(
        keep(json!({"diameter_m": 3})),
        line(),
        "diameter_m goes with a Point",
    );
    check(keep(json!({})), Value::Null, "no geometry");
    check(
        keep(json!({})),
        json!({"type": "LineString", "coordinates": [[1, 1], [1, 1]]}),
        "fewer than two distinct corners",
    );
    check(
        keep(json!({})),
        json!({"type": "Point", "coordinates": [1]}),
        "feature 2",
    );
    check(
        keep(json!({})),
        json!({"type": "MultiPoint", "coordinates": []}),
        "empty",
    );
    check(
        keep(json!({})),
        json!({"type": "GeometryCollection", "geometries": []}),
        "own feature",
    );
    check(
        keep(json!({})),
        json!({"type": "Point", "coordinates": [1e300, 2]}),
        "too far from the lot",
    );
    check(json!({"use": "building-line"}), line(), "kept is missing");
    check(
        json!({"use": "building-line", "kept": "north"}),
        line(),
        "kept is \"north\": say left or right",
    );
    check(
        json!({"use": "building-line", "kept": "left"}),
        point(),
        "the geometry is Point",
    );
}

#[test]
fn refuses_bad_structures_and_rules_where_they_stand() {
    #[track_caller]
    fn check(others: Value, words: &str) {
        refused(&of_lot(json!({"setback_m": 1}), others), &METRES, words);
    }
    #[track_caller]
    fn check_rule(rule: Value, words: &str) {
        let structure = json!({"rings": [{"name": "lane", "width_m": 3}]});
        check(json!({"structure": structure, "rules": [rule]}), words);
    }
    check(
        json!({"structure": 5}),
        "structure: this is 5, not an object",
    );
    check(
        json!({"structure": {"kind": "barn"}}),
        "structure: kind is \"barn\": say circle",
    );
    check(json!({"structure": {"hight_m": 5}}), "is height_m meant?");
    check(json!({"structure": {"height_m": -5}}), "height_m is -5");
    check(
        json!({"structure": {"rings": [{"width_m": 3}]}}),
        "structure, ring 1: name is missing",
    );
    check(
        json!({"structure": {"rings": [{"name": "a"}]}}),
        "the ring has no width",
    );
    check(
        json!({"structure": {"rings": [{"name": "shell", "width_m": 1}]}}),
        "no name for a ring",
    );
    check(
        json!({"structure": {"rings": [{"name": "a", "width_m": 1}, {"name": "a", "width_m": 2}]}}),
        "ring 2: there is a ring \"a\" already",
    );
    check(
        json!({"structure": {"rings": [{"name": "a", "share_of_diameter": 0.5, "inside": true}]}}),
        "under half",
    );
    check(json!({"structre": {}}), "is structure meant?");
    check(json!({"yards": "round"}), "yards: say parallel or rounded");
    check(json!({"rules": {}}), "rules: this is not an array");
    check_rule(
        json!({"to": "lot-lines", "fixed_m": -1}),
        "rule 1: fixed_m is -1",
    );
    check_rule(
        json!({"to": "lot-lines"}),
        "rule 1: the rule asks for no distance",
    );
    check_rule(json!({"fixed_m": 1}), "rule 1: to is missing");
    check_rule(
        json!({"to": "moon", "fixed_m": 1}),
        "rule 1: to is \"moon\"",
    );
    check_rule(json!({"to": "other", "fixed_m": 1}), "a role and a class");
    check_rule(
        json!({"to": "line 9", "fixed_m": 1}),
        "rule 1: to is line 9, but the lot has 4 lot lines",
    );
    check_rule(
        json!({"to": "line 0", "fixed_m": 1}),
        "rule 1: to is \"line 0\"",
    );
    check_rule(
        json!({"to": {"line": 1.5}, "fixed_m": 1}),
        "to cannot be read",
    );
    check_rule(
        json!({"to": "well", "fixed_m": 1, "fixed": 1}),
        "\"fixed\" is unknown: is fixed_m meant?",
    );
    check_rule(
        json!({"from": "apron", "to": "well", "fixed_m": 1}),
        "from is \"apron\": say shell, centre or a ring: lane",
    );
    check_rule(
        json!({"to": "well", "at_least_m": 5, "need_not_exceed_m": 4}),
        "rule 1 need not exceed 4 m but is at least 5 m",
    );
    check_rule(json!({"to": "well", "share_of_height": 1}), "no height");
    check_rule(
        json!({"to": "well", "share_of_diameter": "half"}),
        "share_of_diameter is \"half\", not a number",
    );
}

#[test]
fn every_problem_is_said_at_once() {
    let file = of_lot(
        json!({"setback_m": -1}),
        json!({"yards": 1, "rules": [{"to": "x", "fixed_m": -3}]}),
    );
    let Err(SiteJsonError::BadInput(problems)) = read_json(&file, &METRES) else {
        panic!("a refusal");
    };
    assert_eq!(problems.len(), 4, "{problems:#?}");
}

#[test]
fn many_bad_features_are_soon_given_up() {
    let nulls = vec!["null"; 50_000].join(",");
    let text = format!("{{\"type\":\"FeatureCollection\",\"features\":[{nulls}]}}");
    let Err(SiteJsonError::BadInput(problems)) = read(text.as_bytes(), &METRES) else {
        panic!("a refusal");
    };
    assert_eq!(problems.len(), MAX_PROBLEMS + 1);
}

#[test]
fn refuses_files_that_are_no_site() {
    #[track_caller]
    fn check(text: &str, words: &str) {
        let error = read(text.as_bytes(), &METRES).expect_err("a refusal");
        assert!(error.to_string().contains(words), "{error}\nlacks\n{words}");
    }
    check("", "the file is empty");
    check("\u{feff}  \n", "the file is empty");
    check("not json", "line 1, column 2: expected ident");
    check(
        "{\"type\":\"Polygon\",\n \"coordinates\":[[[0,0],[1,",
        "line 2, column ",
    );
    check(
        "{\"type\":\"Polygon\",\"coordinates\":[[[0,0],[NaN,1],[2,2]]]}",
        "expected value",
    );
    check(
        "{\"type\":\"Polygon\",\"coordinates\":[[[0,0],[1e400,1],[2,2]]]}",
        "number out of range",
    );
    check(
        "{\"type\":\"FeatureCollection\",\n\"features\":[\n {\"type\":\"Feature\",\"properties\":{\"use\":\"lot\",\"setback_m\":1e400},\"geometry\":null}]}",
        "feature 1: line 3, column 62: number out of range",
    );
    check(
        "{\"type\":\"Point\",\"coordinates\":[0,0]}",
        "the type is \"Point\"",
    );
    check("{\"type\":\"FeatureCollection\"}", "no array of features");
    check(
        "{\"type\":\"FeatureCollection\",\"features\":[]}",
        "there is no lot",
    );
    check(
        "{\"type\":\"Fea\\u0007ture\"}",
        "the type is \"Fea\\u{7}ture\"",
    );
    check(
        "{\"type\":\"Feature\",\"setback_m\":3,\"geometry\":null,\"properties\":{}}",
        "setback_m stands beside properties",
    );
    check("{\"features\":[]}", "has the type \"FeatureCollection\"");
    check(
        "{\"type\":\"FeatureCollection\",\"features\":[{\"type\":\"Polygon\"}]}",
        "feature 1: line 1",
    );
    check("[1,2]", "an object { is expected");
    let deep = format!(
        "{{\"type\":\"FeatureCollection\",\"features\":[],\"rules\":{}{}}}",
        "[".repeat(100_000),
        "]".repeat(100_000)
    );
    check(&deep, "recursion limit");
    check(
        "{\"type\":\"Feature\",\"geometry\":null,\"properties\":{\"use\":\"lot\"}}",
        "the lot has no geometry",
    );
}

#[test]
fn tells_a_bad_boundary_from_bad_members() {
    #[track_caller]
    fn check(file: &Value, options: &Options) {
        let error = read_json(file, options).expect_err("a refusal");
        assert!(matches!(error, SiteJsonError::InvalidLot(_)), "{error}");
    }
    let two = json!({"type": "Polygon", "coordinates": [[[0, 0], [1, 1], [0, 0]]]});
    check(&two, &METRES);
    check(&clockwise(), &Options::default());
    let bow_tie =
        json!({"type": "Polygon", "coordinates": [[[1000, 0], [1010, 10], [1010, 0], [1000, 10]]]});
    check(&bow_tie, &METRES);
    let error = read_json(&bow_tie, &METRES).expect_err("a refusal");
    let words = "In the file's coordinates: 1005.000, 5.000.";
    assert!(error.to_string().contains(words), "{error}");
    let far = json!({"type": "Polygon", "coordinates": [[[10, 95], [11, 95], [11, 96]]]});
    check(&far, &Options::default());
}

#[test]
fn a_byte_order_mark_and_a_foreign_crs_are_seen() {
    let text = format!("\u{feff}{}", of_lot(json!({"setback_m": 1}), json!({})));
    assert!(read(text.as_bytes(), &METRES).is_ok());
    let crs =
        json!({"crs": {"type": "name", "properties": {"name": "urn:ogc:def:crs:EPSG::32633"}}});
    let file = of_lot(json!({"setback_m": 1}), crs);
    refused(&file, &Options::default(), "use --plane");
    assert!(read_json(&file, &METRES).is_ok());
}

/// A sample site, in longitude and latitude.
fn sample() -> Vec<u8> {
    include_bytes!("../../../../sample-sites/01-l-lot-well.geojson").to_vec()
}

#[test]
fn a_file_cut_off_anywhere_is_refused() {
    let bytes = sample();
    let whole = bytes.trim_ascii_end().len();
    for end in 0..whole {
        let cut = bytes.get(..end).unwrap_or_default();
        let error = read(cut, &Options::default()).expect_err("a refusal");
        assert!(
            matches!(error, SiteJsonError::BadInput(_)),
            "at {end}: {error}"
        );
    }
}

proptest! {
    #![proptest_config(crate::seeded::config())]

    /// Bytes changed at random: read or refused, and never a message with a control character in it.
    #[test]
    fn damaged_files_are_read_or_refused(
        changes in proptest::collection::vec((any::<prop::sample::Index>(), any::<u8>()), 1..6),
    ) {
        let mut bytes = sample();
        for (at, byte) in changes {
            let at = at.index(bytes.len());
            bytes[at] = byte;
        }
        if let Err(e) = read(&bytes, &Options::default()) {
            prop_assert!(!e.to_string().contains(|c: char| c.is_control() && c != '\n'), "{e:?}");
        }
    }
}
