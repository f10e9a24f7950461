//! Recording files: readers, overview, what is wrong with them. Captures are only ever read.
//!
//! A reader is one file here and one line in the registry of `open.rs`: it tells by the first bytes whether a file is
//! its own, and opens it as a [`crate::signal::Source`].

mod damage;
mod error;
mod foreign;
mod open;
mod overview;
mod riff;
mod wav;

pub use damage::{Damage, segment_doubts};
pub use error::{CaptureError, plainly};
pub use open::{Capture, Stamp, open};
pub use overview::{Overview, raw_columns};
