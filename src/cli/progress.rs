//! A reader that counts its bytes, and the progress bar on a terminal.

use std::io::{self, IsTerminal, Read};
use std::sync::atomic::{AtomicU64, Ordering};
use std::time::Duration;

use indicatif::{ProgressBar, ProgressDrawTarget, ProgressStyle};

/// Redraws a second: enough to be seen moving.
const REDRAWS: u8 = 5;

/// Counts the bytes that are read.
pub struct Counted<'a, R> {
    pub reader: R,
    pub bytes_read: &'a AtomicU64,
}

impl<R: Read> Read for Counted<'_, R> {
    fn read(&mut self, buffer: &mut [u8]) -> io::Result<usize> {
        let n = self.reader.read(buffer)?;
        self.bytes_read.fetch_add(n as u64, Ordering::Relaxed);
        Ok(n)
    }
}

/// A bar over the bytes of a file, on stderr where that is a terminal and nowhere else.
pub fn bar(n_bytes: Option<u64>) -> ProgressBar {
    if !io::stderr().is_terminal() {
        return ProgressBar::hidden();
    }
    let bar = ProgressBar::with_draw_target(n_bytes, ProgressDrawTarget::stderr_with_hz(REDRAWS));
    let template = "{elapsed} [{wide_bar}] {percent} %, {msg}, {eta} to go";
    if let Ok(style) = ProgressStyle::with_template(template) {
        bar.set_style(style);
    }
    bar.enable_steady_tick(Duration::from_secs(1));
    bar
}
