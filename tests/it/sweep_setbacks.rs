//! Setbacks of swept lots: from options and from the lots themselves, and the same as when placed alone.

use std::fmt::Write;

use serde_json::Value;

use crate::program::{Dir, Run, object, rows, run};

/// Anticlockwise from the lower left, 20 wide and 30 high.
const RECT: &str = "[[0,0],[20,0],[20,30],[0,30],[0,0]]";
/// The same the other way round, with a corner on its lower side and one given twice; segments: left, top, right, lower
/// right, lower left, none.
const REPAIRED: &str = "[[0,0],[0,30],[20,30],[20,0],[12,0],[12,0],[0,0]]";

fn feature(ring: &str, properties: &str) -> String {
    format!(
        r#"{{"type":"Feature","properties":{{{properties}}},"geometry":{{"type":"Polygon","coordinates":[{ring}]}}}}"#
    )
}

fn collection(members: &str, features: &[String]) -> String {
    let features = features.join(",");
    format!(r#"{{"type":"FeatureCollection"{members},"features":[{features}]}}"#)
}

fn sweep(dir: &Dir, content: &str, options: &[&str]) -> Run {
    let path = dir.file("lots", content);
    run(&[&["sweep", &path, "--plane"], options].concat())
}

/// Diameters to a millimetre, or the status and the problem.
fn brief(rows: &[Value]) -> Vec<String> {
    let row = |row: &Value| match row["diameter_m"].as_f64() {
        Some(diameter_m) => format!("{diameter_m:.3}"),
        None => {
            let text = |name: &str| row[name].as_str().unwrap_or_default().to_owned();
            format!("{} {}", text("status"), text("problem"))
        }
    };
    rows.iter().map(row).collect()
}

#[track_caller]
fn check(dir: &Dir, content: &str, options: &[&str], expected: &[&str]) {
    let end = sweep(dir, content, options);
    assert_eq!(end.code, Some(0), "{end:?}");
    let got = brief(&rows(&end.stdout));
    assert_eq!(got.len(), expected.len(), "{got:#?}");
    for (got, expected) in got.iter().zip(expected) {
        assert!(got.contains(expected), "{got}\nis not\n{expected}");
    }
}

const ROLES: &str = r#""roles":["front","side","rear","side"]"#;

/// Features with setbacks of every kind, and the diameters: of 20 less the two sides.
fn lots() -> (Vec<String>, [&'static str; 6]) {
    let lots = vec![
        feature(RECT, ""),
        feature(RECT, r#""setback_m":3"#),
        feature(RECT, r#""setbacks_m":[9,1,9,2]"#),
        feature(REPAIRED, r#""setbacks_m":[4,1,2.5,1,0,7]"#),
        feature(REPAIRED, r#""setbacks_m":[1,10,1,10,10,7]"#),
        feature(RECT, ROLES),
    ];
    let expected = ["20.000", "14.000", "12.000", "13.500", "10.000", "20.000"];
    (lots, expected)
}

#[test]
fn lots_say_their_own_setbacks_in_every_kind_of_file() {
    let dir = Dir::new("lots_say_their_own_setbacks_in_every_kind_of_file");
    let (lots, expected) = lots();
    check(&dir, &collection("", &lots), &[], &expected);
    let sequence: String = lots.iter().map(|lot| format!("\u{1e}{lot}\n")).collect();
    check(&dir, &sequence, &[], &expected);
    let table = "setback_m;WKT\r\n\
        ;POLYGON((0 0,20 0,20 30,0 30,0 0))\r\n\
        3;POLYGON((0 0,20 0,20 30,0 30,0 0))\r\n\
        x;POLYGON((0 0,20 0,20 30,0 30,0 0))\r\n\
        -1;POLYGON((0 0,20 0,20 30,0 30,0 0))\r\n\
        nan;POLYGON((0 0,20 0,20 30,0 30,0 0))\r\n\
        1e400;POLYGON((0 0,20 0,20 30,0 30,0 0))\r\n\
        \" 2.5 \";POLYGON((0 0,20 0,20 30,0 30,0 0))\r\n";
    let expected = [
        "20.000",
        "14.000",
        "invalid-lot row 3: setback_m is \"x\", not a number",
        "invalid-lot row 4: setback_m is -1: it must be a finite number, zero or more",
        "invalid-lot row 5: setback_m is \"nan\", not a number",
        "invalid-lot row 6: setback_m is \"1e400\", not a number",
        "15.000",
    ];
    check(&dir, table, &[], &expected);
    // With the option the figures give way, but wrong ones are still wrong.
    let problems = expected.map(|text| if text.ends_with("00") { "16.000" } else { text });
    check(&dir, table, &["--setback", "2"], &problems);
}

#[test]
fn options_go_before_what_lots_say() {
    let dir = Dir::new("options_go_before_what_lots_say");
    let (lots, _) = lots();
    let text = collection("", &lots);
    check(&dir, &text, &["--setback", "2"], &["16.000"; 6]);
    let by_role = ["20.000", "14.000", "12.000", "13.500", "10.000", "15.000"];
    check(&dir, &text, &["--side", "2.5"], &by_role);
    let both = ["16.000", "16.000", "16.000", "16.000", "16.000", "10.000"];
    check(&dir, &text, &["--side", "5", "--setback", "2"], &both);
    let by_role = r#","setbacks":{"side":4,"front":1,"rear":1}"#;
    let text = collection(by_role, &[feature(RECT, ROLES)]);
    check(&dir, &text, &[], &["12.000"]);
    check(&dir, &text, &["--side", "5"], &["10.000"]);
    // A feature that stands alone has the setbacks beside it.
    let alone = feature(RECT, ROLES).replacen('{', r#"{"setbacks":{"side":4},"#, 1);
    check(&dir, &alone, &[], &["12.000"]);
}

#[test]
fn what_holds_for_the_whole_sweep_is_noted_at_its_end() {
    let dir = Dir::new("what_holds_for_the_whole_sweep_is_noted_at_its_end");
    let check = |properties: &str, options: &[&str], note: &str| {
        let end = sweep(&dir, &collection("", &[feature(RECT, properties)]), options);
        assert_eq!(end.code, Some(0), "{end:?}");
        let expected = format!("1 lot: 1 with a circle\n{note}");
        assert_eq!(end.stderr, expected);
    };
    check("", &[], "");
    check(
        "",
        &["--front", "3", "--rear", "2"],
        "note: no lot that could be read has roles, so --front, --rear changed nothing\n",
    );
    check(
        ROLES,
        &["--front", "3"],
        "note: 1 lot has roles without a setback, which were taken as 0: give --setback, or setbacks in the file\n",
    );
    check(ROLES, &["--front", "3", "--setback", "1"], "");
}

#[test]
fn wrong_members_are_the_row_of_their_lot() {
    let dir = Dir::new("wrong_members_are_the_row_of_their_lot");
    let (mut features, mut expected) = (Vec::new(), Vec::new());
    for (properties, problem) in [
        (r#""setback_m":-1"#, "setback_m is -1: it must be"),
        (r#""setback_m":"3""#, "setback_m is \"3\", not a number"),
        (r#""setback_m":1,"setbacks_m":[1]"#, "keep one of them"),
        (
            r#""setbacks_m":[1,2,3]"#,
            "setbacks_m has 3 entries, but the outer ring has 4",
        ),
        (
            r#""setbacks_m":[1,2,null,4]"#,
            "setbacks_m, entry 3, is null",
        ),
        (
            r#""roles":["front","side","back","side"]"#,
            "roles, entry 3, is \"back\": say front",
        ),
        (r#""roles":"front""#, "roles is \"front\", not an array"),
        (
            r#""set_back_m":3"#,
            "\"set_back_m\" is unknown: is setback_m meant?",
        ),
        (r#""Setback_m":3"#, "is setback_m meant?"),
        (
            r#""setbacks":{"front":3}"#,
            "setbacks does not go with a lot",
        ),
        (r#""area_m":3,"owner":"x""#, "20.000"),
    ] {
        features.push(feature(RECT, properties));
        expected.push(problem);
    }
    features.push(feature(RECT, "").replacen('{', r#"{"setback_m":3,"#, 1));
    expected.push("setback_m stands beside properties");
    check(&dir, &collection("", &features), &[], &expected);
    let lot = feature(RECT, "");
    check(
        &dir,
        &collection(r#","setbacks":{"front":1}"#, &[lot]),
        &[],
        &["feature 1: the file has setbacks by role, but the lot has no roles"],
    );
}

#[test]
fn wrong_or_late_setbacks_by_role_end_the_file() {
    let dir = Dir::new("wrong_or_late_setbacks_by_role_end_the_file");
    let check = |content: &str, n_rows: usize, words: &str| {
        let end = sweep(&dir, content, &[]);
        assert_eq!(end.code, Some(3), "{end:?}");
        assert_eq!(rows(&end.stdout).len(), n_rows, "{end:?}");
        assert!(end.stderr.contains(words), "{end:?}");
    };
    let lot = [feature(RECT, ROLES)];
    let bad = collection(r#","setbacks":{"front":-1,"sied":2}"#, &lot);
    check(&bad, 0, "setbacks: front is -1");
    check(&bad, 0, "\"sied\" is unknown");
    let broken = collection(r#","setbacks":[nonsense]"#, &lot);
    check(&broken, 0, "the members beside the features cannot be read");
    let late = format!(
        r#"{{"type":"FeatureCollection","features":[{}],"setbacks":{{"front":1}}}}"#,
        lot[0]
    );
    check(&late, 2, "setbacks stands after the features");
    for column in ["setback", "Setbacks_m", "roles"] {
        let table = format!("{column},wkt\n");
        check(&table, 0, "column");
    }
    check("setback_m,wkt,SETBACK_M\n", 0, "two columns setback_m");
}

/// The lots with holes and parts, turned and cut, each with properties; placed one by one they are the same.
#[test]
fn a_lot_has_the_same_diameter_swept_and_placed() {
    let dir = Dir::new("a_lot_has_the_same_diameter_swept_and_placed");
    let by_role = r#","setbacks":{"front":4,"side":1.25,"rear":2,"street-side":3}"#;
    let bent = "[[0,0],[31,2],[40,33],[22,21],[9,37],[-5,18],[0,0]]";
    let with_hole = format!("{RECT},[[8,10],[8,14],[12,14],[12,10],[8,10]]");
    let roles = r#""roles":["front","side","rear","rear","other","street-side"]"#;
    let cases = [
        ("", bent, r#""setback_m":1.5"#),
        ("", bent, r#""setbacks_m":[3,0,1,2.5,0.25,1]"#),
        ("", &with_hole, r#""setback_m":0.75"#),
        ("", &with_hole, r#""setbacks_m":[1,0,2,3]"#),
        ("", REPAIRED, r#""setbacks_m":[1,2,3,4,0,7]"#),
        (by_role, bent, roles),
        ("", bent, ""),
    ];
    for (members, rings, properties) in cases {
        let text = collection(members, &[feature(rings, properties)]);
        let mut site = String::new();
        let lot = text.replace(r#""properties":{"#, r#""properties":{"use":"lot","#);
        write!(site, "{}", lot.replace(",}", "}")).expect("a text");
        let site = dir.file("site", site);
        for options in [&[][..], &["--yards", "rounded"], &["--setback", "1"]] {
            let swept = sweep(&dir, &text, options);
            let placed = run(&[&["place", &site, "--plane", "--json"], options].concat());
            let diameter_m = |row: &Value| row["diameter_m"].as_f64().unwrap_or(f64::NAN);
            let (a, b) = (
                diameter_m(&rows(&swept.stdout)[0]),
                diameter_m(&object(&placed)),
            );
            assert!(
                (a - b).abs() <= 1e-9,
                "{properties} {options:?}: {a} {b}\n{swept:?}"
            );
        }
    }
}
