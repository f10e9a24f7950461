//! The document: what a reviewer must get back. Saved as RON, changed by named commands, undoable.
//!
//! [`save`] and [`load`] keep it in a `*.session.ron` file together with the [`Figures`] it read as, so that a later
//! recheck can list those that moved. [`Recovery`] keeps what is not saved yet safe from a crash.

mod check;
mod command;
mod decisions;
mod document;
mod error;
mod figures;
mod file;
mod history;
mod locate;
mod recent;
mod recovery;
#[cfg(test)]
mod tests;

pub use command::{Command, MAX_DECISIONS, MAX_PANES, MAX_SEGMENTS, MAX_TONES};
pub use decisions::{Overrule, Refusal, SAME_TONE_LINES, Verdict};
pub use document::{
    CaptureRef, DEFAULT_WINDOWS, FrequencyAxis, HandTone, NamedSegment, Note, Pane, PaneId, SegmentId, Session, Tuning,
    ViewAxes,
};
pub use error::{DocumentError, SessionError};
pub use figures::{Figure, Figures, Moved, PaneFigures, ToneFigures};
pub use file::{EXTENSION, FORMAT, Loaded, has_extension, load, save, with_extension};
pub use history::History;
pub use locate::{CaptureState, Found, SessionCapture, capture_state, find_capture, open_capture};
pub use recent::{MAX_RECENT, RecentFile, forget_recent, list_recent, note_recent, recent_file};
pub use recovery::{Recovered, Recovery, discard, find_recoveries, recovery_dir, start_recovery, write_recovery};
