//! What a stretch of samples is: the trait through which everything reads, spans of samples, and their arithmetic.
//!
//! Samples are `f64` on the normalised scale of their file (integer full scale 2^(b-1) is 1.0; float files pass
//! unchanged and may exceed 1.0). Nothing here knows what a file is.

mod pyramid;
mod removal;
mod source;
mod watch;

pub use pyramid::{Extent, Pyramid};
pub use removal::{Removal, Removed, remove};
pub use source::{RATES_HZ, SignalError, Source, Span, Stored, read_channel};
pub use watch::{Cancelled, Watch};
