//! Undo: snapshots of the document, one a step; a drag or a spin is one step.

use super::{Command, PaneId, SegmentId, Session};

/// Steps kept. A document is a few kilobytes.
const MAX_STEPS: usize = 200;

/// The steps taken and those taken back.
#[derive(Debug, Clone, Default)]
pub struct History {
    past: Vec<Step>,
    future: Vec<Step>,
    /// What the newest step goes on doing, until it is closed.
    open: Option<Gesture>,
}

#[derive(Debug, Clone)]
struct Step {
    name: &'static str,
    /// The document on the other side of the step.
    other: Session,
}

/// A change that comes in many small ones: a dragged edge, a spun parameter, a typed text.
#[derive(Debug, Clone, PartialEq)]
enum Gesture {
    Edges(SegmentId),
    SegmentName(SegmentId),
    /// The pane and its window's name: another window is another step, another parameter is not.
    Parameter(PaneId, &'static str),
    Scale(usize),
    Note(Option<u64>),
    Tuning,
    HandTone(usize),
    Fundamental,
}

impl Gesture {
    fn of(command: &Command) -> Option<Self> {
        Some(match command {
            Command::MoveSegment(id, _) => Self::Edges(*id),
            Command::RenameSegment(id, _) => Self::SegmentName(*id),
            Command::SetWindow(id, window) => Self::Parameter(*id, window.name()),
            Command::SetScale(channel, _) => Self::Scale(*channel),
            Command::SetNote(note) => Self::Note(note.frequency_hz.map(f64::to_bits)),
            Command::SetTuning(_) => Self::Tuning,
            Command::ChangeHandTone(at, _) => Self::HandTone(*at),
            Command::PinFundamental(Some(_)) => Self::Fundamental,
            _ => return None,
        })
    }
}

impl History {
    /// A history without steps.
    pub fn new() -> Self {
        Self::default()
    }

    /// Applies a command, remembers how to take it back, and says whether anything changed.
    ///
    /// Consecutive changes of one gesture (one segment's edges, one pane's parameter, one text) are one step until
    /// [`History::close_step`]. What is picked and what the axes show is changed without a step.
    pub fn apply(&mut self, session: &mut Session, command: Command) -> bool {
        if matches!(command, Command::Pick(_) | Command::SetAxes(_)) {
            return command.apply(session);
        }
        let (name, gesture) = (command.name(), Gesture::of(&command));
        let goes_on = gesture.is_some() && gesture == self.open;
        let before = (!goes_on).then(|| session.clone());
        if !command.apply(session) {
            return false;
        }
        if let Some(other) = before {
            self.close_step();
            self.past.push(Step { name, other });
            if self.past.len() > MAX_STEPS {
                self.past.remove(0);
            }
        }
        self.future.clear();
        self.open = gesture;
        true
    }

    /// Ends a gesture: what comes next is a step of its own. Call it when the pointer or a field is let go.
    pub fn close_step(&mut self) {
        self.open = None;
    }

    /// Takes the newest step back; `false` where there is none.
    pub fn undo(&mut self, session: &mut Session) -> bool {
        self.close_step();
        let Some(step) = self.past.pop() else { return false };
        self.future.push(swap(step, session));
        true
    }

    /// Takes the step taken back last once more; `false` where there is none.
    pub fn redo(&mut self, session: &mut Session) -> bool {
        self.close_step();
        let Some(step) = self.future.pop() else { return false };
        self.past.push(swap(step, session));
        true
    }

    /// What the newest step is called.
    pub fn undo_name(&self) -> Option<&'static str> {
        self.past.last().map(|step| step.name)
    }

    /// What the step taken back last is called.
    pub fn redo_name(&self) -> Option<&'static str> {
        self.future.last().map(|step| step.name)
    }
}

/// Exchanges the document with the step's. What is not undone stays: the capture's whereabouts, the pick, the axes.
fn swap(step: Step, session: &mut Session) -> Step {
    let mut other = step.other;
    other.capture.clone_from(&session.capture);
    other.picked_hz = session.picked_hz;
    other.axes = session.axes;
    Step { name: step.name, other: std::mem::replace(session, other) }
}
