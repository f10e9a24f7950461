//! From (capture, session) to one Reading: what screen, command line and report all show.

mod advice;
mod analysis;
mod budget;
mod families;
mod figures;
mod hands;
mod kind;
mod output;
mod parts;
mod request;
mod rows;
mod skirts;
mod smallest;
mod verdict;

pub use analysis::{Analysis, ReadingError, Segment, analyse, analyse_curves, with_windows};
pub use figures::figures_of;
pub use output::{
    AdviceLine, BudgetItem, CaptureFacts, CourseFact, Decision, DecisionKind, FundamentalFact, LedgerStep, Overruled,
    PaneFacts, PaneReading, Reading, ReadingState, ScaleFacts, SegmentFacts, SkirtPeak, Tone, Verdict, Warning,
};
pub use parts::{Skirts, residue_of, skirts_of};
pub use request::Request;
pub use smallest::SmallestTone;

#[cfg(test)]
mod tests;
