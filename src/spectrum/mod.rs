//! One transform of the segment, many panes; their curves and their floor.
//!
//! Everything here is in the samples' own normalised scale: a tone of peak amplitude A stands at |Y| = A·S1/2.

mod buffers;
mod dense;
mod floor;
mod outside;
mod panes;
mod spectra;
mod transform;

pub use dense::{Dense, MOMENTS};
pub use floor::Floor;
pub use outside::{Stretch, joined};
pub use panes::{cosine_pane_powers, sampled_pane_power};
pub use spectra::{Curve, LEAST_DB, Spectra};
pub use transform::{Transform, transform, transform_padded, weighted_line};
