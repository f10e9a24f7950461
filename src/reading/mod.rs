//! From (capture, session) to one Reading: what screen, command line and report all show.

mod advice;
mod analysis;
mod budget;
mod figures;
mod output;
mod request;
mod rows;

pub use analysis::{Analysis, ReadingError, Segment, analyse, analyse_curves, with_windows};
pub use figures::figures_of;
pub use output::{
    AdviceLine, BudgetItem, CaptureFacts, CourseFact, LedgerStep, Overruled, PaneFacts, PaneReading, Reading,
    ReadingState, ScaleFacts, SegmentFacts, SkirtPeak, Tone, Verdict, Warning,
};
pub use request::Request;

#[cfg(test)]
mod tests;
