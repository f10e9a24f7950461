//! Peaks over the floor, pane readings and what disturbs them. In bins and full scales; hertz and units come above.

mod advice;
pub mod families;
mod fit;
mod lone;
mod motion;
mod search;
mod state;
mod steadiness;
mod synthesis;
mod threshold;

pub use advice::{Deciding, WindowAdvice, advise, judge};
pub use fit::{JointFit, SteadyTone, UnitUncertainty, fit_jointly};
pub use lone::{LoneReading, PaneView};
pub use motion::{CoursePoint, Motion};
pub use search::{FoundTone, LEAST_CYCLES, NamedTone, Noise, Quest, Search, search};
pub use state::{Disturbance, Lobes, State};
pub use steadiness::suggest_steady;
pub use threshold::detection_threshold;
