//! What ends a command early: sentences for stderr and the exit code.

use std::fmt::Write as _;
use std::io::{self, Write as _};
use std::path::Path;

use super::Exit;

/// Why a command ended early.
#[derive(Debug)]
pub struct Failure {
    exit: Exit,
    /// The file the problems are in, where there is one.
    file: Option<String>,
    /// One line each.
    problems: Vec<String>,
}

impl Failure {
    /// Options that do not hold.
    pub fn usage(problem: String) -> Failure {
        Failure::alone(Exit::Usage, problem)
    }

    /// Everything that is wrong with a file that was read.
    pub fn input(file: &Path, problems: Vec<String>) -> Failure {
        Failure {
            exit: Exit::BadInput,
            file: Some(file.display().to_string()),
            problems,
        }
    }

    /// A file or stream that could not be written.
    pub fn writing(what: &str, e: io::Error) -> Failure {
        Failure::other(&anyhow::Error::new(e).context(format!("{what} cannot be written")))
    }

    /// Anything else, with what caused it.
    pub fn other(error: &anyhow::Error) -> Failure {
        Failure::alone(Exit::Other, format!("{error:#}"))
    }

    fn alone(exit: Exit, problem: String) -> Failure {
        Failure {
            exit,
            file: None,
            problems: vec![problem],
        }
    }

    /// Writes the problems to stderr, one line each.
    pub fn show(&self) -> Exit {
        let mut text = String::new();
        for problem in &self.problems {
            let place = self
                .file
                .as_ref()
                .map(|file| format!("{}: ", visible(file)));
            // Writing to a text cannot fail.
            let _ = writeln!(
                text,
                "error: {}{}",
                place.unwrap_or_default(),
                visible(problem)
            );
        }
        // Where stderr is closed there is nobody to tell.
        let _ = io::stderr().write_all(text.as_bytes());
        self.exit
    }
}

/// The text with its control characters made visible, and those that turn the direction of writing.
pub fn visible(text: &str) -> String {
    let mut shown = String::with_capacity(text.len());
    for c in text.chars() {
        let turns = matches!(c, '\u{200e}' | '\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2066}'..='\u{2069}');
        if c.is_control() || turns {
            shown.extend(c.escape_default());
        } else {
            shown.push(c);
        }
    }
    shown
}

/// The same for a text whose line ends are its own.
pub fn visible_lines(text: &str) -> String {
    text.split_inclusive('\n')
        .map(|line| match line.strip_suffix('\n') {
            Some(line) => visible(line) + "\n",
            None => visible(line),
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn control_characters_are_seen_and_not_obeyed() {
        assert_eq!(
            visible("a\u{1b}[31mb\n\u{202e}é"),
            "a\\u{1b}[31mb\\n\\u{202e}é"
        );
        assert_eq!(visible_lines("a\u{7}\nb\n"), "a\\u{7}\nb\n");
    }
}
