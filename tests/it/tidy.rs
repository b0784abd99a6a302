//! What can be checked of the house's order: sizes and heads of files, the direction of modules, the place of each
//! dependency, paths and symbols in documents, words that have no place here.
//!
//! The rules are functions of texts in [`rules`]; here they meet the repository.

mod rules;

use std::fs;
use std::path::{Path, PathBuf};

use rules::{
    MODULES, arrows, dependencies, missing_paths, missing_symbols, placed, shape, unwanted,
};

/// Lines of DEVELOPERS.md.
const MOST_DEVELOPERS_LINES: usize = 200;

/// Where in src each dependency may be used: files, or folders ending in a slash.
const PLACES: [(&str, &[&str]); 16] = [
    ("anyhow", &["src/cli/"]),
    ("clap", &["src/cli/"]),
    ("csv", &["src/io/"]),
    // The plane's tests measure geodesics with it.
    ("geo", &["src/geom/buildable.rs", "src/io/plane/tests.rs"]),
    ("geojson", &["src/io/"]),
    ("good_lp", &["src/lp/model.rs"]),
    ("indicatif", &["src/cli/progress.rs"]),
    ("proj4rs", &["src/io/plane/"]),
    ("rayon", &["src/sweep/"]),
    ("robust", &["src/geom/predicates.rs"]),
    (
        "serde",
        &["src/io/", "src/cli/json.rs", "src/placement/proof.rs"],
    ),
    ("serde_json", &["src/io/", "src/sweep/", "src/cli/"]),
    ("sha2", &["src/placement/proof.rs"]),
    ("thiserror", &["src/"]),
    ("wkt", &["src/io/lots/wkt_text.rs"]),
    ("proptest", &["src/"]),
];

/// Folders and files with text of ours.
const OURS: [&str; 8] = [
    ".ci",
    "Cargo.toml",
    "DEVELOPERS.md",
    "README.md",
    "sample-sites",
    "src",
    "tests/benches",
    "tests/it",
];

fn root() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

/// The files in a folder and below, or the file itself, as paths from the root with their texts.
fn texts_in(start: &str) -> Vec<(String, String)> {
    let mut open: Vec<PathBuf> = vec![root().join(start)];
    let mut texts = Vec::new();
    while let Some(path) = open.pop() {
        if path.is_dir() {
            let entries = fs::read_dir(&path).expect("a folder of ours can be read");
            open.extend(entries.map(|entry| entry.expect("an entry").path()));
        } else if let Ok(text) = fs::read_to_string(&path) {
            let from_root = path.strip_prefix(root()).expect("it was found there");
            let name = from_root.to_str().expect("UTF-8").replace('\\', "/");
            texts.push((name, text));
        }
    }
    texts.sort();
    texts
}

fn rust_in(start: &str) -> Vec<(String, String)> {
    let mut files = texts_in(start);
    files.retain(|(name, _)| name.ends_with(".rs"));
    assert!(!files.is_empty(), "there is Rust in {start}");
    files
}

fn document(name: &str) -> String {
    fs::read_to_string(root().join(name)).unwrap_or_else(|e| panic!("{name}: {e}"))
}

#[track_caller]
fn none(complaints: impl IntoIterator<Item = String>) {
    let complaints: Vec<String> = complaints.into_iter().collect();
    assert!(complaints.is_empty(), "\n{}", complaints.join("\n"));
}

#[test]
fn files_are_short_and_say_what_they_hold() {
    let files = ["src", "tests/it", "tests/benches"].map(rust_in);
    none(
        files
            .iter()
            .flatten()
            .flat_map(|(name, text)| shape(name, text)),
    );
    let n = document("DEVELOPERS.md").lines().count();
    assert!(n < MOST_DEVELOPERS_LINES, "DEVELOPERS.md has {n} lines");
}

#[test]
fn modules_use_only_those_above_them() {
    none(
        rust_in("src")
            .iter()
            .flat_map(|(name, text)| arrows(name, text)),
    );
}

#[test]
fn modules_are_declared_in_their_order() {
    let text = document("src/lib.rs");
    let declared = text.lines().filter_map(|line| {
        let name = line.trim_start_matches("pub ").strip_prefix("mod ")?;
        name.strip_suffix(';')
    });
    assert_eq!(declared.collect::<Vec<_>>(), MODULES);
}

#[test]
fn dependencies_stay_in_their_places() {
    let files = rust_in("src");
    none(
        PLACES
            .iter()
            .flat_map(|(name, places)| placed(name, places, &files)),
    );
    for name in dependencies(&document("Cargo.toml"), "[dependencies]") {
        assert!(
            PLACES.iter().any(|(known, _)| *known == name),
            "{name} has no place in this test's table"
        );
    }
}

#[test]
fn dependencies_have_a_reason() {
    let (manifest, developers) = (document("Cargo.toml"), document("DEVELOPERS.md"));
    for heading in ["[dependencies]", "[dev-dependencies]"] {
        let names = dependencies(&manifest, heading);
        assert!(!names.is_empty(), "{heading} is in the manifest");
        for name in names {
            let line = format!("| `{name}` |");
            assert!(
                developers.lines().any(|l| l.starts_with(&line)),
                "DEVELOPERS.md has no line for {name}"
            );
        }
    }
}

#[test]
fn documents_name_what_is_there() {
    let source: String = rust_in("src").into_iter().map(|(_, text)| text).collect();
    for name in ["README.md", "DEVELOPERS.md"] {
        let text = document(name);
        none(missing_paths(&text, |path| root().join(path).exists()));
        none(missing_symbols(&text, &source));
    }
}

#[test]
fn words_without_a_place_here_are_absent() {
    let texts = OURS.iter().flat_map(|start| texts_in(start));
    none(texts.flat_map(|(name, text)| unwanted(&name, &text)));
}
