//! Files and the site plane: bytes in, bytes out.
//!
//! Readers take bytes or anything that reads, writers anything that writes; nothing here opens a file, starts a thread or
//! solves. What is bad is refused where it stands: feature or row number, its own id, the member and its value.

mod collection;
mod geometry;
pub mod lots;
pub mod plane;
pub mod rows;
pub mod site_json;

/// A text from a file for a message, its control characters made visible.
fn visible(text: &str) -> String {
    let mut shown = String::with_capacity(text.len());
    for c in text.chars() {
        if c.is_control() {
            shown.extend(c.escape_default());
        } else {
            shown.push(c);
        }
    }
    shown
}
