//! Files and the site plane: bytes in, bytes out.
//!
//! Readers take bytes or anything that reads, writers anything that writes; nothing here opens a file, starts a thread or
//! solves. What is bad is refused where it stands: feature or row number, its own id, the member and its value.

mod collection;
mod geometry;
pub mod lots;
pub mod plane;
pub mod rows;
