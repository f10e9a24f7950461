//! The joint fit of all tones of a segment.

mod joint;
mod normal;
mod sums;

pub use joint::{JointFit, UnitUncertainty, fit_jointly, unit_uncertainties};
pub use normal::SteadyTone;
