//! Recording files: readers, overview, what is wrong with them. Captures are only ever read.

mod open;

pub use open::{Capture, CaptureError, open};
