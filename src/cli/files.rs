//! Reading sites, and writing files so that no input is lost: whole or not at all for a proof, straight away for rows.

use std::fs::{self, File, Metadata, OpenOptions};
use std::io::{self, BufWriter, Read, Write};
use std::path::{Path, PathBuf};

use anyhow::anyhow;

use super::failure::Failure;

/// The largest site or proof read, bytes. It is held in memory, a site about six times.
const MAX_FILE_BYTES: u64 = 1 << 30;

/// A whole file.
///
/// # Errors
/// One that cannot be read, is a directory, or is larger than a gigabyte.
pub fn read(path: &Path) -> Result<Vec<u8>, Failure> {
    let bad = |problem: String| Failure::input(path, vec![problem]);
    let cannot = |e: io::Error| bad(format!("the file cannot be read: {e}"));
    let file = File::open(path).map_err(cannot)?;
    let size = file.metadata().map_err(cannot)?;
    if size.is_dir() {
        return Err(bad("this is a directory, not a file".to_owned()));
    }
    let mut bytes = Vec::new();
    let n = file.take(MAX_FILE_BYTES + 1).read_to_end(&mut bytes);
    if n.map_err(cannot)? as u64 > MAX_FILE_BYTES {
        return Err(bad(
            "the file is larger than a gigabyte: a site is one lot and what is round it, many lots are for sweep"
                .to_owned(),
        ));
    }
    Ok(bytes)
}

/// Refuses an output that is an input, by whatever name.
///
/// # Errors
/// A failure of usage, with both names.
pub fn refuse_input(input: &Path, output: &Path) -> Result<(), Failure> {
    if is_same_file(input, output) {
        return Err(Failure::usage(format!(
            "{} is the file that is read: name another file to write",
            output.display()
        )));
    }
    Ok(())
}

/// Whether two names lead to one regular file. Terminals and the like may be named twice.
fn is_same_file(a: &Path, b: &Path) -> bool {
    let (Ok(a_data), Ok(b_data)) = (fs::metadata(a), fs::metadata(b)) else {
        return false;
    };
    let is_same_path = || matches!((a.canonicalize(), b.canonicalize()), (Ok(a), Ok(b)) if a == b);
    a_data.is_file() && b_data.is_file() && (is_same_node(&a_data, &b_data) || is_same_path())
}

#[cfg(unix)]
fn is_same_node(a: &Metadata, b: &Metadata) -> bool {
    use std::os::unix::fs::MetadataExt;
    (a.dev(), a.ino()) == (b.dev(), b.ino())
}

/// Elsewhere hard links are not told apart from copies.
#[cfg(not(unix))]
fn is_same_node(_: &Metadata, _: &Metadata) -> bool {
    false
}

/// Outputs opened for writing from the start. Nothing is cut off before all of them are known to be apart from each other
/// and from the input.
///
/// # Errors
/// An output that is the input or another output, or that cannot be written.
pub fn create_apart(input: &Path, outputs: &[&Path]) -> Result<Vec<File>, Failure> {
    let mut files = Vec::new();
    for (i, output) in outputs.iter().enumerate() {
        let cannot = |e| Failure::writing(&output.display().to_string(), e);
        refuse_input(input, output)?;
        let opened = OpenOptions::new()
            .write(true)
            .create(true)
            .truncate(false)
            .open(output);
        files.push(opened.map_err(cannot)?);
        if let Some(other) = outputs
            .iter()
            .take(i)
            .find(|other| is_same_file(other, output))
        {
            return Err(Failure::usage(format!(
                "{} and {} are one file: name two",
                other.display(),
                output.display()
            )));
        }
    }
    for (file, output) in files.iter().zip(outputs) {
        let cannot = |e| Failure::writing(&output.display().to_string(), e);
        if file.metadata().map_err(cannot)?.is_file() {
            file.set_len(0).map_err(cannot)?;
        }
    }
    Ok(files)
}

/// Writes a file whole or not at all: beside it, to the disk, then in its place. What is no regular file, such as a
/// terminal, is written straight away.
///
/// # Errors
/// When it cannot be written; an older file of the name is then as it was.
pub fn write_whole(
    path: &Path,
    content: impl FnOnce(&mut dyn Write) -> io::Result<()>,
) -> Result<(), Failure> {
    let cannot = |e| Failure::writing(&path.display().to_string(), e);
    match fs::metadata(path) {
        Ok(data) if data.is_dir() => Err(cannot(io::ErrorKind::IsADirectory.into())),
        Ok(data) if !data.is_file() => {
            let file = OpenOptions::new().write(true).open(path).map_err(cannot)?;
            write_to(file, content).map(drop).map_err(cannot)
        }
        _ => write_beside(path, content).map_err(cannot),
    }
}

fn write_beside(
    path: &Path,
    content: impl FnOnce(&mut dyn Write) -> io::Result<()>,
) -> io::Result<()> {
    // A link stays a link: what it leads to is replaced.
    let target = path.canonicalize().unwrap_or_else(|_| path.to_owned());
    let beside = beside(&target)?;
    let written = File::create_new(&beside)
        .and_then(|file| write_to(file, content))
        .and_then(|file| file.sync_all())
        .and_then(|()| fs::rename(&beside, &target));
    if written.is_err() {
        // It may never have been there; the error that counts is the one above.
        let _ = fs::remove_file(&beside);
    }
    written
}

fn beside(target: &Path) -> io::Result<PathBuf> {
    let no_name = || io::Error::other(anyhow!("it has no file name"));
    let mut name = target.file_name().ok_or_else(no_name)?.to_owned();
    name.push(format!(".{}.part", std::process::id()));
    Ok(target.with_file_name(name))
}

fn write_to(
    file: File,
    content: impl FnOnce(&mut dyn Write) -> io::Result<()>,
) -> io::Result<File> {
    let mut out = BufWriter::new(file);
    content(&mut out)?;
    out.into_inner().map_err(io::IntoInnerError::into_error)
}
