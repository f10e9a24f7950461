//! The document: what a reviewer must get back. Saved as RON, changed by named commands, undoable.

mod command;
mod document;

pub use command::Command;
pub use document::{
    CaptureRef, DEFAULT_WINDOWS, FrequencyAxis, HandTone, NamedSegment, Note, Pane, PaneId, SegmentId, Session, Tuning,
    ViewAxes,
};
