//! `roundstead sweep`: kinds of files, order, bad lots, outputs.

use std::fs;
use std::io::{BufRead, BufReader};
use std::process::Stdio;

use serde_json::Value;

use crate::program::{Dir, Run, program, rows, run};

fn square(side: f64) -> String {
    format!("POLYGON((0 0,{side} 0,{side} {side},0 {side},0 0))")
}

fn feature(side: f64, members: &str) -> String {
    format!(
        r#"{{"type":"Feature",{members}"geometry":{{"type":"Polygon","coordinates":[[[0,0],[{side},0],[{side},{side}],[0,{side}],[0,0]]]}}}}"#
    )
}

/// Id, status and rounded diameter of every row.
fn brief(rows: &[Value]) -> Vec<String> {
    let row = |row: &Value| {
        let diameter = row["diameter_m"].as_f64().map(|d| format!(" {d:.3}"));
        let status = row["status"].as_str().unwrap_or("?");
        format!("{} {status}{}", row["id"], diameter.unwrap_or_default())
    };
    rows.iter().map(row).collect()
}

#[track_caller]
fn check_done(end: &Run) {
    assert_eq!(end.code, Some(0), "{end:?}");
}

#[test]
fn every_kind_of_file_is_swept() {
    let dir = Dir::new("every_kind_of_file_is_swept");
    let check = |name: &str, content: &str, expected: &[&str]| {
        let path = dir.file(name, content);
        let end = run(&["sweep", &path, "--plane"]);
        check_done(&end);
        assert_eq!(brief(&rows(&end.stdout)), expected);
    };
    let table = format!("id,wkt\na,\"{}\"\nb,\"{}\"\n", square(10.0), square(5.0));
    check("a.csv", &table, &["\"a\" fits 10.000", "\"b\" fits 5.000"]);
    let (one, two) = (feature(10.0, r#""id":7,"#), feature(5.0, ""));
    let collection = format!(r#"{{"type":"FeatureCollection","features":[{one},{two}]}}"#);
    check("a.geojson", &collection, &["7 fits 10.000", "2 fits 5.000"]);
    let sequence = format!("\u{1e}{one}\n\u{1e}{two}\n");
    check("a.geojsons", &sequence, &["7 fits 10.000", "2 fits 5.000"]);
    check("one.geojson", &two, &["1 fits 5.000"]);
}

#[test]
fn rows_keep_the_order_and_bad_lots_stop_nothing() {
    let dir = Dir::new("rows_keep_the_order_and_bad_lots_stop_nothing");
    let mut table = "id;wkt\n".to_owned();
    for i in 1..=2000 {
        let wkt = match i % 50 {
            7 => "POLYGON((0 0,10 10,10 0,0 10,0 0))".to_owned(),
            8 => "POLYGON((0 0,nan 0,1 1,0 0))".to_owned(),
            9 => "POLYGON((0 0,1e400 0,1 1,0 0))".to_owned(),
            10 => "LINESTRING(0 0,1 1)".to_owned(),
            11 => "POLYGON((0 0,10".to_owned(),
            12 => String::new(),
            _ => square(f64::from(i)),
        };
        table += &format!("lot {i};{wkt}\n");
    }
    let path = dir.file("lots.csv", table);
    let mut seen = Vec::new();
    for threads in ["1", "2"] {
        let (lines, csv) = (dir.path("out.jsonl"), dir.path("out.csv"));
        let end = run(&[
            "sweep",
            &path,
            "--plane",
            "--threads",
            threads,
            "--json-lines",
            &lines,
            "--csv",
            &csv,
        ]);
        check_done(&end);
        assert_eq!(end.stdout, "");
        assert_eq!(end.stderr, "2000 lots: 1760 with a circle, 240 bad\n");
        let rows = rows(&fs::read_to_string(&lines).expect("rows"));
        assert_eq!(rows.len(), 2000);
        for (i, row) in (1..).zip(&rows) {
            assert_eq!(row["id"], format!("lot {i}"));
            let is_bad = (7..=12).contains(&(i % 50));
            assert_eq!(row["status"], if is_bad { "invalid-lot" } else { "fits" });
            assert_eq!(row["problem"].is_string(), is_bad);
            if !is_bad {
                let diameter_m = row["diameter_m"].as_f64().unwrap_or(f64::NAN);
                assert!((diameter_m - f64::from(i)).abs() < 1e-8);
                assert!(row["upper_m"].as_f64() >= row["diameter_m"].as_f64());
                assert!(row["solve_us"].as_f64() > Some(0.0));
            }
        }
        let table = fs::read_to_string(&csv).expect("a table");
        assert_eq!(table.lines().count(), 2001);
        assert!(table.starts_with(
            "id,status,diameter_m,upper_m,centre_x,centre_y,solve_us,problem\nlot 1,fits,"
        ));
        seen.push(brief(&rows));
    }
    assert_eq!(seen.first(), seen.last());
}

#[test]
fn options_apply_to_every_lot() {
    let dir = Dir::new("options_apply_to_every_lot");
    let path = dir.file(
        "lots.csv",
        format!("wkt\n\"{}\"\n\"{}\"\n", square(10.0), square(5.0)),
    );
    let check = |options: &[&str], expected: &[&str]| {
        let end = run(&[&["sweep", &path], options].concat());
        check_done(&end);
        assert_eq!(brief(&rows(&end.stdout)), expected);
    };
    check(
        &["--plane", "--setback", "3"],
        &["1 fits 4.000", "2 no-room"],
    );
    check(
        &["--plane", "--unit", "ft"],
        &["1 fits 3.048", "2 fits 1.524"],
    );
    check(
        &["--plane", "--unit", "ft", "--setback", "1 m"],
        &["1 fits 1.048", "2 no-room"],
    );
    check(
        &["--plane", "--yards", "rounded", "--setback", "1"],
        &["1 fits 8.000", "2 fits 3.000"],
    );
    let bent = "POLYGON((0 0,20 1,21 10,10 11,9 20,-1 19,0 0))";
    let path = dir.file("bent.csv", format!("wkt\n\"{bent}\"\n"));
    let end = run(&["sweep", &path, "--plane", "--max-pieces", "1"]);
    check_done(&end);
    assert_eq!(rows(&end.stdout)[0]["status"], "cap-hit");
}

#[test]
fn degrees_come_back_as_degrees() {
    let dir = Dir::new("degrees_come_back_as_degrees");
    let lot = "POLYGON((10 50,10.001 50,10.001 50.001,10 50.001,10 50))";
    let path = dir.file(
        "lots.csv",
        format!("wkt\n\"{lot}\"\n\"{}\"\n", square(1000.0)),
    );
    let end = run(&["sweep", &path]);
    check_done(&end);
    let rows = rows(&end.stdout);
    let centre = |k: usize| rows[0]["centre"][k].as_f64().unwrap_or(f64::NAN);
    assert!((centre(0) - 10.0005).abs() < 1e-6 && (50.0..50.001).contains(&centre(1)));
    assert_eq!(rows[1]["status"], "invalid-lot");
    assert!(rows[1]["problem"].to_string().contains("--plane"));
}

#[test]
fn cells_a_spreadsheet_would_run_are_defused() {
    let dir = Dir::new("cells_a_spreadsheet_would_run_are_defused");
    let path = dir.file(
        "lots.csv",
        format!("id,wkt\n=1+1,\"{}\"\n@x,nothing\n", square(10.0)),
    );
    let csv = dir.path("out.csv");
    check_done(&run(&["sweep", &path, "--plane", "--csv", &csv]));
    let table = fs::read_to_string(&csv).expect("a table");
    let lines: Vec<&str> = table.lines().collect();
    assert!(lines[1].starts_with("'=1+1,fits,"), "{table}");
    assert!(lines[2].starts_with("'@x,invalid-lot,"), "{table}");
}

#[test]
fn outputs_are_apart_from_the_input_and_each_other() {
    let dir = Dir::new("outputs_are_apart_from_the_input_and_each_other");
    let content = format!("wkt\n\"{}\"\n", square(10.0));
    let path = dir.file("lots.csv", &content);
    let hard = dir.path("hard.csv");
    fs::hard_link(&path, &hard).expect("a link");
    let winding = format!(
        "{}/../{}",
        dir.path(""),
        path.rsplit('/').nth(1).unwrap_or_default()
    ) + "/lots.csv";
    let check = |options: &[&str], words: &str| {
        let end = run(&[&["sweep", &path, "--plane"], options].concat());
        assert_eq!((end.code, end.stdout.as_str()), (Some(2), ""), "{end:?}");
        assert!(end.stderr.contains(words), "{end:?}");
        assert_eq!(fs::read_to_string(&path).expect("the input"), content);
    };
    for name in [&path, &hard, &winding] {
        check(&["--csv", name], "is the file that is read");
        check(&["--json-lines", name], "is the file that is read");
    }
    let out = dir.file("out", "older rows");
    check(&["--csv", &out, "--json-lines", &out], "are one file");
    assert_eq!(fs::read_to_string(&out).expect("older rows"), "older rows");
    let new = dir.path("new");
    check(&["--csv", &new, "--json-lines", &new], "are one file");
    // What cannot be written is no usage error.
    let end = run(&[
        "sweep",
        &path,
        "--plane",
        "--csv",
        &dir.path("no/such/place.csv"),
    ]);
    assert_eq!(end.code, Some(1), "{end:?}");
    assert!(
        end.stderr.contains("place.csv cannot be written"),
        "{end:?}"
    );
}

#[test]
fn a_file_that_breaks_off_leaves_its_rows_and_exit_code_3() {
    let dir = Dir::new("a_file_that_breaks_off_leaves_its_rows_and_exit_code_3");
    let text = format!(
        r#"{{"type":"FeatureCollection","features":[{},{{"type":"Feat"#,
        feature(10.0, "")
    );
    let path = dir.file("cut.geojson", text);
    for threads in ["1", "2"] {
        let end = run(&["sweep", &path, "--plane", "--threads", threads]);
        assert_eq!(end.code, Some(3), "{end:?}");
        assert_eq!(
            brief(&rows(&end.stdout)),
            ["1 fits 10.000", "2 invalid-lot"]
        );
        assert!(end.stderr.contains("error: "), "{end:?}");
        assert!(
            end.stderr
                .contains("cut.geojson: feature 2: the file ends at byte"),
            "{end:?}"
        );
    }
}

#[test]
fn files_of_no_kind_are_refused() {
    let dir = Dir::new("files_of_no_kind_are_refused");
    let check = |content: &str, words: &str| {
        let end = run(&["sweep", &dir.file("lots", content), "--plane"]);
        assert_eq!((end.code, end.stdout.as_str()), (Some(3), ""), "{end:?}");
        assert!(end.stderr.contains(words), "{end:?}");
    };
    check("id,shape\n1,x\n", "column wkt");
    check("\u{feff}\n", "empty");
    // Nothing stands in the way of the sweep, but one lot nests too deep.
    let (open, close) = ("[".repeat(10_000), "]".repeat(10_000));
    let deep = format!(
        r#"{{"features":[{{"type":"Feature","geometry":{{"type":"Polygon","coordinates":{open}{close}}}}},{}]}}"#,
        feature(10.0, "")
    );
    let end = run(&["sweep", &dir.file("deep", deep), "--plane"]);
    check_done(&end);
    assert_eq!(
        brief(&rows(&end.stdout)),
        ["1 invalid-lot", "2 fits 10.000"]
    );
}

#[test]
fn a_reader_that_has_had_enough_ends_the_sweep_quietly() {
    let dir = Dir::new("a_reader_that_has_had_enough_ends_the_sweep_quietly");
    let table: String = std::iter::once("wkt\n".to_owned())
        .chain((1..20_000).map(|i| format!("\"{}\"\n", square(f64::from(i)))))
        .collect();
    let path = dir.file("lots.csv", table);
    for threads in ["1", "2"] {
        let mut command = program(&["sweep", &path, "--plane", "--threads", threads]);
        let mut child = command
            .stdout(Stdio::piped())
            .stderr(Stdio::piped())
            .spawn()
            .expect("a start");
        let mut line = String::new();
        let mut reader = BufReader::new(child.stdout.take().expect("a pipe"));
        reader.read_line(&mut line).expect("a row");
        drop(reader);
        let end = child.wait_with_output().expect("an end");
        assert!(line.starts_with("{\"id\":1,\"status\":\"fits\""), "{line}");
        assert_eq!(
            (end.status.code(), end.stderr.as_slice()),
            (Some(0), &b""[..])
        );
    }
}

#[test]
fn marks_line_ends_and_open_quotations_of_a_table() {
    let dir = Dir::new("marks_line_ends_and_open_quotations_of_a_table");
    let lot = square(10.0);
    let text = format!("\u{feff}id,wkt\r\na,\"{lot}\"\r\n\r\n\"b\r\n\",\"{lot}\"");
    let end = run(&["sweep", &dir.file("lots.csv", text), "--plane"]);
    check_done(&end);
    assert_eq!(
        brief(&rows(&end.stdout)),
        [r#""a" fits 10.000"#, r#""b\r\n" fits 10.000"#]
    );
    // All after the mark is one row.
    let text = format!("id;wkt\na;{lot}\nb;\"{lot}\nc;{lot}\n");
    let end = run(&["sweep", &dir.file("open.csv", text), "--plane"]);
    assert_eq!(end.code, Some(3), "{end:?}");
    assert_eq!(
        brief(&rows(&end.stdout)),
        [r#""a" fits 10.000"#, "2 invalid-lot"]
    );
    assert!(
        end.stderr
            .contains("row that begins in line 3: a quotation mark is opened"),
        "{end:?}"
    );
    let long = format!("id;wkt\na;{lot}\n\"{}", "x\n".repeat(65 << 20));
    let end = run(&["sweep", &dir.file("long.csv", long), "--plane"]);
    assert_eq!(end.code, Some(3), "{end:?}");
    assert!(end.stderr.contains("longer than 128 MB"), "{end:?}");
}

#[cfg(target_os = "linux")]
#[test]
fn rows_that_cannot_be_written_are_an_error() {
    let dir = Dir::new("rows_that_cannot_be_written_are_an_error");
    let path = dir.file("lots.csv", format!("wkt\n\"{}\"\n", square(10.0)));
    for option in ["--csv", "--json-lines"] {
        let end = run(&["sweep", &path, "--plane", option, "/dev/full"]);
        assert_eq!(end.code, Some(1), "{end:?}");
        assert!(end.stderr.contains("cannot be written"), "{end:?}");
    }
}
