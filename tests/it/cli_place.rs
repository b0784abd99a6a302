//! `roundstead place`: report, JSON object, options and exit codes.

use std::process::Stdio;

use serde_json::Value;

use crate::program::{Dir, SQUARE, object, program, run, site};

/// The L of two squares of side 10 in the corner of a third: 20 by 20, notch 10.
const ELL: &str = "[[0,0],[20,0],[20,10],[10,10],[10,20],[0,20],[0,0]]";
/// A lot that no search ends on at its first pieces.
const BENT: &str = "[[0,0],[20,1],[21,10],[10,11],[9,20],[-1,19],[0,0]]";
/// The trapezium of DESIGN.md, section 2: front 25, sides 2, rear 3 give 12.00 by parallels, 13.11 rounded.
const TRAPEZIUM: &str = "[[-6,0],[6,0],[30,40],[-30,40],[-6,0]]";

fn number(object: &Value, member: &str) -> f64 {
    object[member].as_f64().unwrap_or(f64::NAN)
}

#[track_caller]
fn check_near(got: f64, expected: f64, tolerance: f64) {
    assert!(
        (got - expected).abs() <= tolerance,
        "{got} is not {expected}"
    );
}

#[test]
fn the_report_says_it_all() {
    let dir = Dir::new("the_report_says_it_all");
    let well = r#",{"type":"Feature","properties":{"use":"keep-clear","class":"well","required_m":3,"name":"Old well"},"geometry":{"type":"Point","coordinates":[1,1]}}"#;
    let path = dir.file(
        "lot.geojson",
        site(SQUARE, r#","name":"Lot 9","setback_m":2"#, well, ""),
    );
    let end = run(&["place", &path, "--plane"]);
    assert_eq!((end.code, end.stderr.as_str()), (Some(0), ""));
    for words in [
        "Lot 9",
        "Planning aid only. Local zoning, codes and licensed practice decide",
        "Largest circle: 16.00 m diameter",
        "none over 16.000001 m fits",
        "x 10.000, y 10.000 m",
        "of a lot of 400.0 m² (0.040 ha)",
        "parallel to the lot lines",
        "setback from lot line 4",
        "required distance from well \"Old well\"",
        "binds",
        "Not checked: access, slopes, ground",
    ] {
        assert!(end.stdout.contains(words), "{words}\n{}", end.stdout);
    }
}

#[test]
fn the_object_has_its_members_in_order() {
    let dir = Dir::new("the_object_has_its_members_in_order");
    let path = dir.file("lot.geojson", site(ELL, r#","setback_m":1"#, "", ""));
    let end = run(&["place", &path, "--plane", "--json"]);
    assert_eq!(end.code, Some(0));
    let mut rest = end.stdout.as_str();
    for member in [
        "{\"status\":\"fits\"",
        "\"yards\":\"parallel\"",
        "\"diameter_m\":",
        "\"other_reading_diameter_m\":",
        "\"upper_m\":",
        "\"gap_m\":",
        "\"centre\":[",
        "\"centre_lonlat\":null",
        "\"area_m2\":300.0",
        "\"limits\":[{\"name\":\"setback from lot line 1\",\"required_m\":1.0,\"clearance_m\":",
        "\"spare_m\":",
        "\"binding\":",
        "\"relief_gain\":",
        "\"other_spots\":[",
        "\"slide\":null",
        "\"pieces\":",
        "\"solve_us\":",
        "\"problems\":[",
    ] {
        let at = rest
            .find(member)
            .unwrap_or_else(|| panic!("{member} in {rest}"));
        rest = &rest[at + member.len()..];
    }
    let object = object(&end);
    assert_eq!(object.as_object().map(|o| o.len()), Some(15));
    assert_eq!(object["limits"].as_array().map(Vec::len), Some(6));
    assert!(number(&object, "upper_m") >= number(&object, "diameter_m"));
    assert!(number(&object, "gap_m") <= 1e-9);
}

#[test]
fn degrees_are_brought_to_the_ground_and_back() {
    let dir = Dir::new("degrees_are_brought_to_the_ground_and_back");
    // A square of 0.001 degrees at the equator: 111.3195 m by 110.5743 m on WGS84, so the height decides.
    let ring = "[[10,-0.0005],[10.001,-0.0005],[10.001,0.0005],[10,0.0005],[10,-0.0005]]";
    let path = dir.file(
        "lot.geojson",
        format!(r#"{{"type":"Polygon","coordinates":[{ring}]}}"#),
    );
    let object = object(&run(&["place", &path, "--json"]));
    check_near(number(&object, "diameter_m"), 110.574_3, 1e-3);
    assert_eq!(object["centre"], object["centre_lonlat"]);
    check_near(object["centre"][1].as_f64().unwrap_or(f64::NAN), 0.0, 1e-8);
    // The circle slides east and west, and its ends are places of the file too.
    check_near(
        object["slide"]["from"][1].as_f64().unwrap_or(f64::NAN),
        0.0,
        1e-8,
    );
    let report = run(&["place", &path]).stdout;
    assert!(
        report.contains("The circle can slide about 0.74 m"),
        "{report}"
    );
    assert!(report.contains("1 part in 6,400"), "{report}");
}

#[test]
fn options_override_the_file() {
    let dir = Dir::new("options_override_the_file");
    let roles = r#","roles":["front","side","rear","side"]"#;
    let by_role = r#","setbacks":{"front":1,"side":1,"rear":1,"other":0}"#;
    let path = dir.file("lot.geojson", site(SQUARE, roles, "", by_role));
    let check = |options: &[&str], expected: f64| {
        let mut arguments = vec!["place", &path, "--plane", "--json"];
        arguments.extend(options);
        let end = run(&arguments);
        assert_eq!(end.code, Some(0), "{end:?}");
        check_near(number(&object(&end), "diameter_m"), expected, 1e-8);
    };
    check(&[], 18.0);
    check(&["--setback", "3"], 14.0);
    check(&["--front", "6"], 13.0);
    check(&["--rear", "4", "--front", "2m"], 14.0);
    check(&["--side", "2.5"], 15.0);
    check(&["--side", "2.5", "--setback", "4"], 12.0);
    check(&["--setback", "10 ft"], 20.0 - 2.0 * 3.048);
    // In feet the coordinates are feet too, and the file's setbacks stay metres.
    check(&["--unit", "ft"], 20.0 * 0.3048 - 2.0);
    check(
        &["--unit", "us-ft", "--setback", "1"],
        18.0 * 1200.0 / 3937.0,
    );
    let report = run(&["place", &path, "--plane", "--unit", "ft", "--setback", "1"]).stdout;
    assert!(report.contains("18.00 ft diameter"), "{report}");
}

#[test]
fn yards_are_read_as_asked() {
    let dir = Dir::new("yards_are_read_as_asked");
    let path = dir.file(
        "lot.geojson",
        site(TRAPEZIUM, r#","setbacks_m":[25,2,3,2]"#, "", ""),
    );
    let of = |reading: &str| {
        object(&run(&[
            "place", &path, "--plane", "--json", "--yards", reading,
        ]))
    };
    let (parallel, rounded) = (of("parallel"), of("rounded"));
    check_near(number(&parallel, "diameter_m"), 12.0, 0.005);
    check_near(number(&rounded, "diameter_m"), 13.11, 0.005);
    assert_eq!(parallel["yards"], "parallel");
    assert_eq!(rounded["yards"], "rounded");
    check_near(
        number(&parallel, "other_reading_diameter_m"),
        number(&rounded, "diameter_m"),
        1e-8,
    );
    check_near(
        number(&rounded, "other_reading_diameter_m"),
        number(&parallel, "diameter_m"),
        1e-8,
    );
}

/// The figures of every printed limit: required, clearance, spare.
fn printed_limits(report: &str) -> Vec<[f64; 3]> {
    let table = report
        .lines()
        .skip_while(|line| !line.starts_with("Limits"))
        .skip(2);
    let line = |line: &str| -> Option<[f64; 3]> {
        let words: Vec<&str> = line.split_whitespace().rev().collect();
        let from = usize::from(words.first() == Some(&"binds")) + 1;
        let figure = |k: usize| words.get(from + k)?.parse().ok();
        Some([figure(2)?, figure(1)?, figure(0)?])
    };
    table.map_while(line).collect()
}

#[test]
fn nothing_printed_is_better_than_what_was_found() {
    let dir = Dir::new("nothing_printed_is_better_than_what_was_found");
    let sites = [
        (ELL, r#","setback_m":0.777"#),
        (ELL, r#","setbacks_m":[1.0004,0,1,0.33333,2.00049,1]"#),
        ("[[0,0],[0.7,0.1],[0.5,0.6]]", r#","setback_m":0.01"#),
        (
            "[[0,0],[70000.3,0.1],[500.5,60000.6]]",
            r#","setback_m":100.001"#,
        ),
        (
            "[[0,0],[31.1,0.7],[40.3,22.9],[12.3,41.7],[-6.6,20.2]]",
            r#","setback_m":3"#,
        ),
    ];
    for (i, (ring, setbacks)) in sites.iter().enumerate() {
        let path = dir.file(&format!("{i}.geojson"), site(ring, setbacks, "", ""));
        for (unit, metres) in [("m", 1.0), ("ft", 0.3048), ("us-ft", 1200.0 / 3937.0)] {
            let options = [
                "place", &path, "--plane", "--yards", "rounded", "--unit", unit,
            ];
            let end = run(&options);
            assert_eq!(end.code, Some(0), "{end:?}");
            let exact = object(&run(&[&options[..], &["--json"]].concat()));
            let word_before = |text: &str, after: &str| -> f64 {
                let at = text.find(after).expect(after);
                let word = text[..at]
                    .split_whitespace()
                    .next_back()
                    .unwrap_or_default();
                word.parse().expect("a figure")
            };
            let headline = end
                .stdout
                .split("Largest circle: ")
                .nth(1)
                .expect("a headline");
            let unit_text = format!(" {unit} ");
            let printed = word_before(headline, &format!("{unit_text}diameter")) * metres;
            let upper = word_before(headline, &format!("{unit_text}fits")) * metres;
            assert!(
                printed <= number(&exact, "diameter_m") + 1e-9,
                "{}",
                end.stdout
            );
            assert!(
                printed >= number(&exact, "diameter_m") * 0.97,
                "{}",
                end.stdout
            );
            assert!(
                upper >= number(&exact, "upper_m") * (1.0 - 1e-15),
                "{}",
                end.stdout
            );
            let limits = printed_limits(&end.stdout);
            assert_eq!(limits.len(), exact["limits"].as_array().map_or(0, Vec::len));
            for [required, clearance, spare] in limits {
                assert!(clearance >= required && spare >= 0.0, "{}", end.stdout);
            }
            for limit in exact["limits"].as_array().into_iter().flatten() {
                let least = limit["required_m"].as_f64().unwrap_or(f64::NAN) / metres;
                let is_printed = |[required, ..]: &[f64; 3]| *required >= least - 1e-9;
                assert!(printed_limits(&end.stdout).iter().any(is_printed));
            }
        }
    }
}

#[test]
fn exit_codes_tell_how_it_came_out() {
    let dir = Dir::new("exit_codes_tell_how_it_came_out");
    let path = dir.file("lot.geojson", site(BENT, "", "", ""));
    let square = dir.file("square.geojson", site(SQUARE, "", "", ""));
    let check = |path: &str, options: &[&str], code: i32, status: &str, words: &str| {
        let mut arguments = vec!["place", path, "--plane"];
        arguments.extend(options);
        let end = run(&arguments);
        assert_eq!(end.code, Some(code), "{end:?}");
        assert!(end.stdout.contains(words), "{end:?}");
        arguments.push("--json");
        let end = run(&arguments);
        assert_eq!(end.code, Some(code));
        assert_eq!(object(&end)["status"], status);
    };
    check(&path, &[], 0, "fits", "Largest circle");
    check(&square, &["--setback", "11"], 4, "no-room", "No room");
    check(&path, &["--max-pieces", "1"], 5, "cap-hit", "cap of work");
    let capped = object(&run(&[
        "place",
        &path,
        "--plane",
        "--max-pieces",
        "1",
        "--json",
    ]));
    assert!(number(&capped, "diameter_m") > 0.0);
    assert!(number(&capped, "gap_m") > 1e-3);
}

#[test]
fn usage_is_refused_with_exit_code_2() {
    #[track_caller]
    fn check(options: &[&str], words: &str) {
        let end = run(options);
        assert_eq!((end.code, end.stdout.as_str()), (Some(2), ""), "{end:?}");
        assert!(end.stderr.contains(words), "{end:?}");
    }
    check(&["place"], "<SITE>");
    check(&["paint", "x"], "unrecognized subcommand");
    check(&["place", "x", "--setback"], "--setback");
    check(
        &["place", "x", "--setback", "-3"],
        "--setback: \"-3\" is below zero",
    );
    check(&["place", "x", "--setback", "NaN"], "--setback: \"NaN\": ");
    check(&["place", "x", "--front", "1,5"], "has a comma");
    check(&["place", "x", "--rear=1e400"], "--rear: \"1e400\"");
    check(&["place", "x", "--side", "3 furlongs"], "furlongs");
    check(&["place", "x", "--yards", "square"], "parallel, rounded");
    check(&["place", "x", "--unit", "yd"], "m, ft, us-ft");
    check(&["place", "x", "--max-pieces", "0"], "--max-pieces");
    check(&["sweep", "x", "--threads", "0"], "--threads");
    let end = run(&["place", "x", "--\u{1b}[31m\u{7}"]);
    assert_eq!(end.code, Some(2));
    assert!(!end.stderr.contains(['\u{1b}', '\u{7}']), "{end:?}");
}

#[test]
fn without_a_command_the_sample_is_placed() {
    let end = run::<&str>(&[]);
    assert_eq!((end.code, end.stderr.as_str()), (Some(0), ""));
    assert!(
        end.stdout
            .starts_with("This is a sample site. For your own: roundstead place SITE")
    );
    assert!(end.stdout.contains("Lot 14, Reedgate Lane"));
    assert!(end.stdout.contains("Largest tank: "));
}

#[test]
fn help_documents_files_and_objects() {
    #[track_caller]
    fn check(options: &[&str], words: &[&str]) {
        let end = run(options);
        assert_eq!((end.code, end.stderr.as_str()), (Some(0), ""));
        for words in words {
            assert!(end.stdout.contains(words), "{words}\n{}", end.stdout);
        }
    }
    check(
        &["--help"],
        &[
            "Planning aid only",
            "Exit codes: 0",
            "place",
            "check",
            "sweep",
        ],
    );
    check(
        &["place", "--help"],
        &[
            "setbacks_m",
            "need_not_exceed_m",
            "relief_gain",
            "centre_lonlat",
            "--proof",
        ],
    );
    check(
        &["sweep", "--help"],
        &[
            "RFC 8142",
            "wkt",
            "solve_us",
            "--json-lines",
            "--csv",
            "--threads",
        ],
    );
    check(&["check", "--help"], &["the proof holds"]);
    check(&["--version"], &[env!("CARGO_PKG_VERSION")]);
    // Every class that is read is documented, and so is every kind.
    let help = run(&["place", "--help"]).stdout;
    for class in roundstead::site::Class::ALL {
        assert!(help.contains(class.name()), "{}", class.name());
    }
    for kind in roundstead::site::Kind::ALL {
        assert!(help.contains(kind.name()), "{}", kind.name());
    }
}

#[test]
fn names_from_the_file_cannot_steer_a_terminal() {
    let dir = Dir::new("names_from_the_file_cannot_steer_a_terminal");
    let tree = r#",{"type":"Feature","properties":{"use":"keep-clear","class":"tree","required_m":1,"name":"red \u001b[31m\nfake"},"geometry":{"type":"Point","coordinates":[1,1]}}"#;
    let path = dir.file(
        "lot.geojson",
        site(SQUARE, r#","name":"bell \u0007""#, tree, ""),
    );
    let report = run(&["place", &path, "--plane"]).stdout;
    assert!(!report.contains(['\u{1b}', '\u{7}']), "{report}");
    assert!(report.contains("red \\u{1b}[31m\\nfake"), "{report}");
    assert!(report.contains("bell \\u{7}"), "{report}");
}

#[test]
fn a_closed_pipe_ends_quietly() {
    let dir = Dir::new("a_closed_pipe_ends_quietly");
    let path = dir.file("lot.geojson", site(SQUARE, "", "", ""));
    for arguments in [vec!["place", &path, "--plane"], vec!["--help"], vec![]] {
        let mut command = program(&arguments);
        let mut child = command
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("a start");
        drop(child.stdout.take());
        let end = child.wait_with_output().expect("an end");
        assert_eq!(
            (end.status.code(), end.stderr.as_slice()),
            (Some(0), &b""[..])
        );
    }
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_a_failure() {
    let dir = Dir::new("a_full_disk_is_a_failure");
    let path = dir.file("lot.geojson", site(SQUARE, "", "", ""));
    let full = std::fs::OpenOptions::new()
        .write(true)
        .open("/dev/full")
        .expect("a device");
    let end = program(&["place", &path, "--plane"])
        .stdout(full)
        .output()
        .expect("a run");
    let said = String::from_utf8_lossy(&end.stderr);
    assert_eq!(end.status.code(), Some(1));
    assert!(
        said.starts_with("error: the output cannot be written: "),
        "{said}"
    );
}
