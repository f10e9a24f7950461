//! Peaks over the floor, pane readings and what disturbs them. In bins and full scales; hertz and units come above.

mod advice;
pub mod families;
mod fit;
mod found;
mod kind;
mod lone;
mod model;
mod motion;
mod residue;
mod search;
mod state;
mod steadiness;
mod synthesis;
mod threshold;
mod track;

pub use advice::{Deciding, Known, WindowAdvice, advise, judge};
pub use fit::{JointFit, SteadyTone, UnitUncertainty, fit_jointly, unit_uncertainties};
pub use found::{FoundTone, NamedTone, Noise, Quest, Search};
pub use kind::{Decay, Grounds, Kind, kind_of};
pub use lone::{LoneReading, PaneView};
pub use motion::{CoursePoint, Motion, PARTS};
pub use search::{LEAST_CYCLES, search};
pub use state::{Disturbance, Lobes, State};
pub use steadiness::{ChangePoint, Steadiness, SteadyBlock, longest_steady, steadiness, suggest_steady};
pub use threshold::detection_threshold;
