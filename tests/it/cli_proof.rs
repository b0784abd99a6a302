//! `--proof` and `roundstead check`.

use std::fs;

use serde_json::Value;

use crate::program::{Dir, Run, SQUARE, run, site};

const BENT: &str = "[[0,0],[20,0],[20,10],[10,11],[9,20],[0,20],[0,0]]";

#[track_caller]
fn check(end: &Run, code: i32, words: &str) {
    assert_eq!(end.code, Some(code), "{end:?}");
    assert!(
        end.stdout.contains(words) || end.stderr.contains(words),
        "{end:?}"
    );
}

#[test]
fn a_proof_is_checked_against_its_own_site_only() {
    let dir = Dir::new("a_proof_is_checked_against_its_own_site_only");
    let path = dir.file("lot.geojson", site(BENT, r#","setback_m":1"#, "", ""));
    let other = dir.file("other.geojson", site(SQUARE, r#","setback_m":1"#, "", ""));
    let proof = dir.path("proof.json");
    check(
        &run(&["place", &path, "--plane", "--proof", &proof]),
        0,
        "Largest circle",
    );
    check(
        &run(&["check", &proof, &path, "--plane"]),
        0,
        "The proof holds for the lines as drawn",
    );
    check(
        &run(&["check", &proof, &path, "--plane", "--unit", "ft"]),
        1,
        "does not hold",
    );
    check(
        &run(&["check", &proof, &path, "--plane", "--setback", "0.9"]),
        1,
        "another site",
    );
    check(
        &run(&["check", &proof, &other, "--plane"]),
        1,
        "another site",
    );
}

#[test]
fn options_go_with_the_proof() {
    let dir = Dir::new("options_go_with_the_proof");
    let path = dir.file("lot.geojson", site(BENT, "", "", ""));
    let proof = dir.path("proof.json");
    let options = ["--plane", "--setback", "2", "--yards", "rounded"];
    check(
        &run(&[&["place", &path, "--proof", &proof], &options[..]].concat()),
        0,
        "",
    );
    check(
        &run(&[&["check", &proof, &path], &options[..]].concat()),
        0,
        "The proof holds",
    );
    check(
        &run(&["check", &proof, &path, "--plane"]),
        1,
        "another site",
    );
}

#[test]
fn an_altered_proof_is_refused() {
    let dir = Dir::new("an_altered_proof_is_refused");
    let path = dir.file("lot.geojson", site(BENT, "", "", ""));
    let proof = dir.path("proof.json");
    check(&run(&["place", &path, "--plane", "--proof", &proof]), 0, "");
    let text = fs::read_to_string(&proof).expect("a proof");
    let mut value: Value = serde_json::from_str(&text).expect("JSON");
    let upper_m = value["upper_m"].as_f64().expect("a bound");
    value["upper_m"] = (upper_m - 1e-3).into();
    let altered = dir.file("altered.json", value.to_string());
    check(
        &run(&["check", &altered, &path, "--plane"]),
        1,
        "does not hold",
    );
    // What is no proof at all is bad input.
    let cut = dir.file("cut.json", &text[..text.len() / 2]);
    check(
        &run(&["check", &cut, &path, "--plane"]),
        3,
        "cut.json: this is no proof",
    );
    let nothing = dir.file("nothing.json", "");
    check(
        &run(&["check", &nothing, &path, "--plane"]),
        3,
        "this is no proof",
    );
    check(
        &run(&["check", &dir.path("none.json"), &path, "--plane"]),
        3,
        "cannot be read",
    );
}

#[test]
fn a_proof_never_takes_the_place_of_the_site() {
    let dir = Dir::new("a_proof_never_takes_the_place_of_the_site");
    let content = site(SQUARE, "", "", "");
    let path = dir.file("lot.geojson", &content);
    let other_name = dir.path("hard.geojson");
    fs::hard_link(&path, &other_name).expect("a link");
    for name in [&path, &other_name] {
        check(
            &run(&["place", &path, "--plane", "--proof", name]),
            2,
            "is the file that is read",
        );
    }
    assert_eq!(fs::read_to_string(&path).expect("the site"), content);
}

#[test]
fn a_proof_is_written_whole_or_not_at_all() {
    let dir = Dir::new("a_proof_is_written_whole_or_not_at_all");
    let path = dir.file("lot.geojson", site(SQUARE, "", "", ""));
    let nowhere = dir.path("no/such/place.json");
    check(
        &run(&["place", &path, "--plane", "--proof", &nowhere]),
        1,
        "cannot be written",
    );
    let directory = dir.path("");
    check(
        &run(&["place", &path, "--plane", "--proof", &directory]),
        1,
        "cannot be written",
    );
    // An older file is replaced, and nothing is left beside it.
    let proof = dir.file("proof.json", "old");
    check(&run(&["place", &path, "--plane", "--proof", &proof]), 0, "");
    check(
        &run(&["check", &proof, &path, "--plane"]),
        0,
        "The proof holds",
    );
    let names = fs::read_dir(&directory).expect("the directory").count();
    assert_eq!(names, 2);
}
