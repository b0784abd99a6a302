//! Bad input of every kind: a clear error with the place, the documented exit code, no panic.

use std::fs::File;
use std::io::{BufWriter, Write};

use crate::program::{Dir, Run, SQUARE, object, run, site};

/// The size of the large file, bytes.
const LARGE: usize = 100_000_000;

#[track_caller]
fn check_refused(end: &Run, words: &[&str]) {
    assert_eq!(end.code, Some(3), "{end:?}");
    assert!(!end.stderr.contains("panicked"), "{end:?}");
    assert!(end.stderr.starts_with("error: "), "{end:?}");
    for words in words {
        assert!(end.stderr.contains(words), "{words}\n{}", end.stderr);
    }
}

/// Both commands refuse what is no file of lots at all.
#[track_caller]
fn check_both(path: &str, words: &[&str]) {
    for command in ["place", "sweep"] {
        let end = run(&[command, path, "--plane"]);
        check_refused(&end, words);
        assert_eq!(end.stdout, "");
    }
}

#[test]
fn files_that_are_none() {
    let dir = Dir::new("files_that_are_none");
    check_both(
        &dir.path("missing.geojson"),
        &["missing.geojson: ", "cannot be read"],
    );
    check_both(&dir.path(""), &["this is a directory"]);
    check_both(
        &dir.file("empty.geojson", ""),
        &["empty.geojson: ", "is empty"],
    );
    check_both(&dir.file("blank.geojson", " \n\t\n"), &["is empty"]);
    let end = run(&["place", &dir.file("esc\u{1b}[31m.geojson", ""), "--plane"]);
    check_refused(&end, &["esc\\u{1b}[31m.geojson: "]);
}

/// Permissions do not hold back everyone; a process's memory from its start does.
#[cfg(target_os = "linux")]
#[test]
fn files_that_cannot_be_read() {
    check_both("/proc/self/mem", &["/proc/self/mem: ", "cannot be read"]);
}

#[test]
fn text_that_is_no_geojson() {
    let dir = Dir::new("text_that_is_no_geojson");
    let mut n = 0;
    let mut check = |text: &[u8], words: &[&str]| {
        n += 1;
        let path = dir.file(&format!("{n}.geojson"), text);
        check_refused(&run(&["place", &path, "--plane"]), words);
    };
    let whole = site(SQUARE, "", "", "");
    check(&whole.as_bytes()[..whole.len() - 10], &["line 1, column"]);
    check(b"{\n\"type\": oops}", &["line 2, column"]);
    check(b"\xff\xfe\x00", &["1.geojson"].map(|_| "line 1"));
    check(br#"{"type":"Point","coordinates":[1,2]}"#, &["Point"]);
    check(
        br#"{"type":"FeatureCollection","features":[]}"#,
        &["no lot"],
    );
    check(
        "[".repeat(1_000_000).as_bytes(),
        &["line 1, column 1000000"],
    );
    let (open, close) = ("[".repeat(100_000), "]".repeat(100_000));
    let deep = format!(r#"{{"type":"Polygon","coordinates":{open}{close}}}"#);
    check(deep.as_bytes(), &["line 1, column"]);
}

#[test]
fn numbers_that_are_none() {
    let dir = Dir::new("numbers_that_are_none");
    let mut n = 0;
    let mut check = |number: &str, words: &str| {
        n += 1;
        let ring = SQUARE.replacen("20", number, 1);
        let path = dir.file(&format!("{n}.geojson"), site(&ring, "", "", ""));
        check_refused(&run(&["place", &path, "--plane"]), &[words]);
    };
    check("NaN", "line 1");
    check("Infinity", "line 1");
    check("1e400", "line 1");
    check("null", "line 1");
    check("\"20\"", "line 1");
}

#[test]
fn members_that_are_bad() {
    let dir = Dir::new("members_that_are_bad");
    let well = |members: &str| {
        format!(
            r#",{{"type":"Feature","properties":{{"use":"keep-clear"{members}}},"geometry":{{"type":"Point","coordinates":[3,3]}}}}"#
        )
    };
    let mut n = 0;
    let mut check = |properties: &str, more: &str, top: &str, words: &[&str]| {
        n += 1;
        let path = dir.file(&format!("{n}.geojson"), site(SQUARE, properties, more, top));
        check_refused(&run(&["place", &path, "--plane"]), words);
    };
    check(
        r#","setback_m":-1"#,
        "",
        "",
        &["feature 1", "setback_m", "-1"],
    );
    check(r#","setback_m":1e400"#, "", "", &["line 1"]);
    check(
        r#","setbacks_m":[1,2,3]"#,
        "",
        "",
        &["feature 1", "3 entries", "4 segments"],
    );
    check(
        r#","roles":["front","side","back","side"]"#,
        "",
        "",
        &["entry 3", "back"],
    );
    check(
        "",
        &well(r#","class":"volcano""#),
        "",
        &["feature 2", "volcano"],
    );
    check(
        "",
        &well(r#","class":"well","required_m":-2"#),
        "",
        &["feature 2", "required_m"],
    );
    check(
        "",
        &well(r#","class":"well","requierd_m":2"#),
        "",
        &["requierd_m"],
    );
    let rules = r#","rules":[{"to":"lot-lines","at_least_m":5,"need_not_exceed_m":3}]"#;
    check("", "", rules, &["rule 1", "need not exceed"]);
    check(
        "",
        "",
        r#","yards":"square""#,
        &["yards: say parallel or rounded"],
    );
    check("", "", r#","structure":{"kind":"castle"}"#, &["castle"]);
    // All problems are reported, not the first alone.
    let both = well(r#","class":"volcano""#);
    check(r#","setback_m":-1"#, &both, "", &["feature 1", "feature 2"]);
}

#[test]
fn lots_that_make_no_area() {
    let dir = Dir::new("lots_that_make_no_area");
    let mut n = 0;
    let mut check = |rings: &str, words: &str| {
        n += 1;
        let path = dir.file(&format!("{n}.geojson"), site(rings, "", "", ""));
        let end = run(&["place", &path, "--plane", "--json"]);
        check_refused(&end, &["feature 1: ", words]);
        let object = object(&end);
        assert_eq!(object["status"], "invalid-lot");
        assert!(object["diameter_m"].is_null() && object["centre"].is_null());
        let problems = object["problems"].to_string();
        assert!(problems.contains(words), "{problems}");
        let plain = run(&["place", &path, "--plane"]);
        assert_eq!((plain.code, plain.stdout.as_str()), (Some(3), ""));
    };
    check(
        "[[0,0],[10,10],[10,0],[0,10],[0,0]]",
        "crosses itself at (5.000, 5.000)",
    );
    check("[[0,0],[10,0],[0,0]]", "2 different corners");
    check("[[0,0],[10,0],[20,0],[0,0]]", "straight line");
    check(
        "[[0,0],[10,0],[20,0],[10,0],[10,10],[0,0]]",
        "turns back on itself",
    );
    check("[[0,0],[1e30,0],[0,1e30],[0,0]]", "larger than");
    check(
        &format!("{SQUARE},[[30,30],[31,30],[30,31],[30,30]]"),
        "hole lies outside",
    );
    check(
        &format!("{SQUARE},[[10,10],[30,10],[10,15],[10,10]]"),
        "run into each other",
    );
    check(
        &format!("{SQUARE},[[5,0],[8,0],[8,5],[5,0]]"),
        "share a line",
    );
}

#[test]
fn a_lot_that_is_no_place_on_earth() {
    let dir = Dir::new("a_lot_that_is_no_place_on_earth");
    let path = dir.file("lot.geojson", site("[[0,0],[200,0],[200,200]]", "", "", ""));
    let end = run(&["place", &path, "--json"]);
    check_refused(&end, &["longitude and latitude", "--plane"]);
    assert_eq!(object(&end)["status"], "invalid-lot");
}

#[test]
fn a_file_of_a_hundred_megabytes() {
    let dir = Dir::new("a_file_of_a_hundred_megabytes");
    let path = dir.path("large.geojson");
    let mut out = BufWriter::new(File::create(&path).expect("a file"));
    let mut put = |bytes: &[u8]| out.write_all(bytes).expect("room on the disk");
    put(br#"{"type":"FeatureCollection","note":""#);
    let filler = [b'x'; 1 << 16];
    (0..LARGE / filler.len() + 1).for_each(|_| put(&filler));
    // Cut off in the middle of a feature.
    put(br#"","features":[{"type":"Feature","geom"#);
    out.into_inner().expect("room on the disk");
    check_refused(
        &run(&["place", &path, "--plane"]),
        &["large.geojson: line 1, column"],
    );
    let end = run(&["sweep", &path, "--plane"]);
    assert_eq!(end.code, Some(3), "{end:?}");
    let words = "large.geojson: feature 1: the file ends at byte 100008009, before the feature";
    assert!(end.stderr.contains(words), "{end:?}");
}
