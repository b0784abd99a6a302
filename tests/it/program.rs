//! The program run in a process of its own, and files for it.

use std::ffi::OsStr;
use std::fs;
use std::path::{Path, PathBuf};
use std::process::{Command, Stdio};

use serde_json::Value;

/// How a run ended.
#[derive(Debug)]
pub struct Run {
    pub code: Option<i32>,
    pub stdout: String,
    pub stderr: String,
}

/// Runs the program.
pub fn run<S: AsRef<OsStr>>(arguments: &[S]) -> Run {
    let out = program(arguments).output().expect("the program starts");
    Run {
        code: out.status.code(),
        stdout: String::from_utf8(out.stdout).expect("UTF-8"),
        stderr: String::from_utf8(out.stderr).expect("UTF-8"),
    }
}

/// The program with its arguments, nothing on its input.
pub fn program<S: AsRef<OsStr>>(arguments: &[S]) -> Command {
    let mut command = Command::new(env!("CARGO_BIN_EXE_roundstead"));
    command.args(arguments).stdin(Stdio::null());
    command
}

/// A directory of one test, empty at its start and gone at its end.
pub struct Dir(PathBuf);

impl Dir {
    pub fn new(test: &str) -> Dir {
        let path =
            Path::new(env!("CARGO_TARGET_TMPDIR")).join(format!("{test}-{}", std::process::id()));
        // Left over from a test that was killed, if at all.
        let _ = fs::remove_dir_all(&path);
        fs::create_dir_all(&path).expect("a directory");
        Dir(path)
    }

    pub fn path(&self, name: &str) -> String {
        let path = self.0.join(name);
        path.to_str().expect("UTF-8").to_owned()
    }

    pub fn file(&self, name: &str, content: impl AsRef<[u8]>) -> String {
        let path = self.path(name);
        fs::write(&path, content).expect("a file");
        path
    }
}

impl Drop for Dir {
    fn drop(&mut self) {
        // A directory that stays is no failure of the test.
        let _ = fs::remove_dir_all(&self.0);
    }
}

/// A site of one lot with properties of its own and other features and members beside.
pub fn site(ring: &str, properties: &str, more_features: &str, members: &str) -> String {
    format!(
        r#"{{"type":"FeatureCollection"{members},"features":[{{"type":"Feature","properties":{{"use":"lot"{properties}}},"geometry":{{"type":"Polygon","coordinates":[{ring}]}}}}{more_features}]}}"#
    )
}

/// A square of side 20.
pub const SQUARE: &str = "[[0,0],[20,0],[20,20],[0,20],[0,0]]";

/// The object that `place --json` printed.
#[track_caller]
pub fn object(run: &Run) -> Value {
    serde_json::from_str(&run.stdout).unwrap_or_else(|e| panic!("{e}: {run:?}"))
}

/// The rows of JSON lines.
#[track_caller]
pub fn rows(text: &str) -> Vec<Value> {
    let row = |line| serde_json::from_str(line).unwrap_or_else(|e| panic!("{e}: {line}"));
    text.lines().map(row).collect()
}
