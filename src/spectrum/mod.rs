//! One transform of the segment, many panes; their curves, scales and floor.

mod spectra;

pub use spectra::{Curve, Spectra};
