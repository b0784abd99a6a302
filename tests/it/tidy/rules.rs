//! The rules of the house as functions of texts: each gives back complaints, and is tried on small examples at the end.
//!
//! They read text, not syntax: comments are passed over line by line, and code is taken to be formatted by rustfmt.

/// No file is longer, in lines.
const MOST_LINES: usize = 500;
/// A module uses only modules before it. `seeded` serves tests alone.
pub const MODULES: [&str; 10] = [
    "seeded",
    "units",
    "geom",
    "lp",
    "site",
    "limits",
    "placement",
    "io",
    "sweep",
    "cli",
];

/// Parted here, so that this file does not hold them.
const NO_PLACE_HERE: [&str; 7] = [
    concat!("lec", "ture"),
    concat!("/t", "mp/"),
    concat!("/wo", "rk/"),
    concat!("TO", "DO"),
    concat!("FIX", "ME"),
    concat!("to", "do!"),
    concat!("db", "g!"),
];

/// A file that is too long or says nothing of itself at its head.
pub fn shape(name: &str, text: &str) -> Vec<String> {
    let n = text.lines().count();
    let mut complaints = Vec::new();
    if n > MOST_LINES {
        complaints.push(format!(
            "{name} has {n} lines, more than {MOST_LINES}: part it"
        ));
    }
    if !text.starts_with("//! ") {
        complaints.push(format!("{name} does not open with //!"));
    }
    complaints
}

/// The code of a line, without its comment.
fn code(line: &str) -> &str {
    match line.trim_start() {
        comment if comment.starts_with("//") => "",
        _ => line.split(" // ").next().unwrap_or(line),
    }
}

fn is_word(c: char) -> bool {
    c.is_alphanumeric() || c == '_'
}

fn first_word(text: &str) -> &str {
    text.split(|c| !is_word(c)).next().unwrap_or("")
}

/// The names that follow `crate::` in a text, those of a group too.
fn modules_used(text: &str) -> Vec<&str> {
    let mut used = Vec::new();
    for (at, _) in text.match_indices("crate::") {
        let rest = &text[at + "crate::".len()..];
        match rest.strip_prefix('{') {
            None => used.push(first_word(rest)),
            Some(group) => {
                let mut depth = 1;
                let mut starts = true;
                for (i, c) in group.char_indices() {
                    match c {
                        '{' => depth += 1,
                        '}' => depth -= 1,
                        ',' if depth == 1 => starts = true,
                        c if is_word(c) && depth == 1 && starts => {
                            used.push(first_word(&group[i..]));
                            starts = false;
                        }
                        _ => {}
                    }
                    if depth == 0 {
                        break;
                    }
                }
            }
        }
    }
    used
}

/// Uses of a module that stands later in the list, or of the crate's root by `super`.
pub fn arrows(name: &str, text: &str) -> Vec<String> {
    let path = name.trim_start_matches("src/").trim_end_matches(".rs");
    let steps: Vec<&str> = path.split('/').filter(|step| *step != "mod").collect();
    let place = |module: &str| MODULES.iter().position(|m| *m == module);
    let Some(own) = place(steps[0]) else {
        return match path {
            "lib" | "main" => Vec::new(),
            _ => vec![format!("{name} is in no module of the list")],
        };
    };
    let mut complaints = Vec::new();
    let all: String = text.lines().map(|l| code(l).to_owned() + "\n").collect();
    for module in modules_used(&all) {
        if place(module).is_none_or(|other| other > own) {
            complaints.push(format!(
                "{name} uses {module}, which {} must not know",
                MODULES[own]
            ));
        }
    }
    let mut depth = steps.len();
    for line in all.lines() {
        depth += usize::from(line.starts_with("mod ") && line.ends_with('{'));
        let supers = line.matches("super::").count();
        let in_a_row = (1..=supers)
            .rev()
            .find(|&n| line.contains(&"super::".repeat(n)));
        if in_a_row.is_some_and(|n| n >= depth) {
            complaints.push(format!("{name} leaves its module by super: {line}"));
        }
    }
    complaints
}

/// Whether code names a crate: as the head of a path.
fn names_crate(text: &str, name: &str) -> bool {
    let head = format!("{name}::");
    text.lines().map(code).any(|line| {
        line.match_indices(&head).any(|(at, _)| {
            let before = line[..at].chars().next_back();
            !before.is_some_and(|c| is_word(c) || c == ':')
        })
    })
}

/// Uses of a dependency out of its place, or a place without use.
pub fn placed(dependency: &str, places: &[&str], files: &[(String, String)]) -> Vec<String> {
    let users = files
        .iter()
        .filter(|(_, text)| names_crate(text, dependency));
    let users: Vec<&str> = users.map(|(name, _)| name.as_str()).collect();
    let holds = |place: &str, name: &str| match place.ends_with('/') {
        true => name.starts_with(place),
        false => name == place,
    };
    let stray = users
        .iter()
        .filter(|name| !places.iter().any(|place| holds(place, name)))
        .map(|name| format!("{name} uses {dependency}, whose place is {places:?}"));
    let idle = places
        .iter()
        .filter(|place| !users.iter().any(|name| holds(place, name)))
        .map(|place| format!("nothing in {place} uses {dependency}"));
    stray.chain(idle).collect()
}

/// The names under a heading of a manifest, as Rust spells them.
pub fn dependencies(manifest: &str, heading: &str) -> Vec<String> {
    let lines = manifest.lines().skip_while(|line| *line != heading).skip(1);
    let entries = lines.take_while(|line| !line.starts_with('['));
    entries
        .filter_map(|line| line.split_once(" = "))
        .map(|(name, _)| name.replace('-', "_"))
        .collect()
}

/// What a document sets in code: the words between backticks and those of fenced blocks.
fn coded(text: &str) -> Vec<&str> {
    let mut words = Vec::new();
    for (i, block) in text.split("```").enumerate() {
        if i % 2 == 1 {
            words.extend(block.split_whitespace());
        } else {
            let spans = block.split('`').skip(1).step_by(2);
            words.extend(spans.flat_map(str::split_whitespace));
        }
    }
    words
}

/// Whether a word of a document is a path of this repository: what is built, and other people's files, are not.
fn is_path(word: &str) -> bool {
    let known = ["src/", "tests/", "sample-sites/", "assets/", ".ci/"];
    let ends = [".rs", ".md", ".toml", ".lock", ".geojson"];
    !word.contains("::")
        && (known.iter().any(|start| word.starts_with(start))
            || ends.iter().any(|end| word.ends_with(end)))
}

/// The targets of links within the repository.
fn links(text: &str) -> Vec<&str> {
    text.split("](")
        .skip(1)
        .filter_map(|rest| rest.split(')').next())
        .filter(|target| !target.contains("://") && !target.starts_with('#'))
        .collect()
}

/// Paths a document names that are not there.
pub fn missing_paths(text: &str, exists: impl Fn(&str) -> bool) -> Vec<String> {
    let named = coded(text)
        .into_iter()
        .map(|word| word.trim_matches(|c| matches!(c, ',' | ';' | '(' | ')' | '"' | '\'')))
        .filter(|word| is_path(word));
    named
        .chain(links(text))
        .filter(|path| !exists(path))
        .map(|path| format!("names {path}, which is not there"))
        .collect()
}

/// Symbols with a path (`module::Symbol`) that no code holds.
pub fn missing_symbols(text: &str, source: &str) -> Vec<String> {
    let symbols = coded(text).into_iter().filter(|word| word.contains("::"));
    let last = |word: &str| -> String {
        let name = word.rsplit("::").next().unwrap_or("");
        first_word(name).to_owned()
    };
    symbols
        .filter(|word| !source.split(|c| !is_word(c)).any(|name| name == last(word)))
        .map(|word| format!("names {word}, which no code holds"))
        .collect()
}

pub fn unwanted(name: &str, text: &str) -> Vec<String> {
    let lower = text.to_lowercase();
    NO_PLACE_HERE
        .iter()
        .filter(|word| text.contains(**word) || lower.contains(**word))
        .map(|word| format!("{name} holds {word}"))
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[track_caller]
    fn check(complaints: Vec<String>, expected: usize) {
        assert_eq!(complaints.len(), expected, "{complaints:?}");
    }

    #[test]
    fn shape_sees_length_and_head() {
        check(shape("a.rs", "//! A.\nfn a() {}\n"), 0);
        check(shape("a.rs", "fn a() {}\n"), 1);
        check(shape("a.rs", &"//! A.\n".repeat(MOST_LINES)), 0);
        check(shape("a.rs", &"//! A.\n".repeat(MOST_LINES + 1)), 1);
    }

    #[test]
    fn arrows_sees_what_points_down() {
        check(arrows("src/site/lot.rs", "use crate::geom::Area;"), 0);
        check(arrows("src/site/lot.rs", "use crate::io::Lots;"), 1);
        check(
            arrows("src/site/lot.rs", "use crate::{geom::{Area, io}, units};"),
            0,
        );
        check(
            arrows(
                "src/site/lot.rs",
                "use crate::{\n    geom::Area,\n    cli,\n};",
            ),
            1,
        );
        check(
            arrows("src/site/lot.rs", "fn a() -> crate::limits::Row {}"),
            1,
        );
        check(
            arrows(
                "src/site/lot.rs",
                "/// See [`crate::limits::Row`].\na(); // crate::io",
            ),
            0,
        );
        check(arrows("src/nowhere.rs", ""), 1);
        check(arrows("src/lib.rs", "pub use crate::cli::run;"), 0);
    }

    #[test]
    fn arrows_sees_how_far_super_goes() {
        check(arrows("src/site/mod.rs", "use super::geom;"), 1);
        check(arrows("src/site/lot.rs", "use super::Site;"), 0);
        check(arrows("src/site/lot.rs", "use super::super::geom;"), 1);
        check(
            arrows(
                "src/site/lot.rs",
                "mod tests {\n    use super::super::Site;\n}",
            ),
            0,
        );
        check(
            arrows(
                "src/site/lot.rs",
                "mod tests {\n    use super::super::super::geom;\n}",
            ),
            1,
        );
        check(arrows("src/geom/a/b.rs", "use super::super::Ring;"), 0);
    }

    #[test]
    fn names_crate_sees_heads_of_paths_alone() {
        assert!(names_crate("use csv::Reader;", "csv"));
        assert!(names_crate("    let a: csv::Error = b;", "csv"));
        assert!(!names_crate("//! as csv::Reader", "csv"));
        assert!(!names_crate("use geojson::Value;", "geo"));
        assert!(!names_crate("use my_geo::Value; crate::geo::b()", "geo"));
    }

    #[test]
    fn placed_sees_strays_and_idle_places() {
        let file = |name: &str, text: &str| (name.to_owned(), text.to_owned());
        let files = [
            file("src/a.rs", "use csv::Reader;"),
            file("src/io/b.rs", "use csv::Writer;"),
        ];
        check(placed("csv", &["src/"], &files), 0);
        check(placed("csv", &["src/a.rs", "src/io/"], &files), 0);
        check(placed("csv", &["src/io/"], &files), 1);
        check(placed("csv", &["src/", "src/cli/"], &files), 1);
    }

    #[test]
    fn dependencies_reads_one_heading() {
        let manifest = "[a]\nx = 1\n[dependencies]\ngood-lp = \"1\"\nwkt = { version = \"0\" }\n\n[b]\ny = 2\n";
        assert_eq!(dependencies(manifest, "[dependencies]"), ["good_lp", "wkt"]);
    }

    #[test]
    fn missing_paths_sees_code_fences_and_links() {
        let there = |path: &str| path == "src/a.rs";
        check(
            missing_paths("`src/a.rs`, [a](src/a.rs), src/b.rs, `1/8`", there),
            0,
        );
        check(missing_paths("`src/b.rs`", there), 1);
        check(
            missing_paths("[b](docs/b.md) [c](https://c.org/c.md)", there),
            1,
        );
        check(
            missing_paths("```\nrun sample-sites/b.geojson\n```", there),
            1,
        );
        check(missing_paths("`a::b.rs` and `target/release/a`", there), 0);
    }

    #[test]
    fn missing_symbols_sees_the_last_name() {
        check(missing_symbols("`geom::Area`", "pub struct Area;"), 0);
        check(missing_symbols("`geom::Are`", "pub struct Area;"), 1);
        check(
            missing_symbols("`lp::game()` and `Area`", "fn game() {}"),
            0,
        );
    }

    #[test]
    fn unwanted_sees_words_in_any_case() {
        for word in NO_PLACE_HERE {
            check(unwanted("a.rs", &format!("a {word} b")), 1);
        }
        check(unwanted("a.rs", concat!("Lec", "ture")), 1);
        check(unwanted("a.rs", "a method to do it; temporary work"), 0);
    }
}
