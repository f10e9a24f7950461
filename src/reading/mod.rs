//! From (capture, session) to one Reading: what screen, command line and report all show.

mod analysis;
mod output;
mod request;

pub use analysis::{Analysis, ReadingError, analyse, analyse_curves};
pub use output::{
    AdviceLine, BudgetItem, CaptureFacts, LedgerStep, Overruled, PaneFacts, PaneReading, Reading, ReadingState,
    ScaleFacts, SegmentFacts, SkirtPeak, Tone, Verdict, Warning,
};
pub use request::Request;
