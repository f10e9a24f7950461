//! File work, done on lanes of its own: opening, saving, what is made of a capture once it is open.

use std::path::{Path, PathBuf};
use std::sync::{Arc, Mutex, PoisonError};
use std::time::Duration;

use super::desk::adopt;
use super::services::Ask;
use super::strip::StripKey;
use crate::capture::{self, Capture, Overview};
use crate::session::{
    self, CaptureState, Figures, Found, Loaded, RecentFile, Recovered, Recovery, Session, SessionCapture, SessionError,
    find_capture, open_capture,
};
use crate::signal::{Extent, Watch};
use crate::tone::{self, Steadiness};

/// What is said of file work that failed in a way nobody thought of.
pub(super) const UNFORESEEN: &str = "file work failed in a way that was not foreseen: try again";

/// What came of file work.
#[derive(Debug)]
pub(super) enum Event {
    /// A question for a file was answered.
    Picked(Picked),
    /// What came of the opening of that number.
    Opening(u64, Outcome),
    /// Something by the way did not work; one sentence.
    Said(String),
    /// More of the capture has been read through.
    Read,
    /// What is doubtful about the samples of a channel; behind the opening's number stands the channel.
    Doubts((u64, usize), Vec<String>),
    /// Columns of samples that were wanted for the strip.
    Columns(u64, StripKey, Vec<Extent>),
    /// All there is to find in a channel has been found.
    Surveyed((u64, usize)),
    /// How steady a channel is.
    Steady((u64, usize), Arc<Steadiness>),
    /// The capture's BLAKE3.
    Hashed(u64, String),
    /// The session is saved, as it was then.
    Saved(u64, Box<Saved>),
    /// A session could not be saved; one sentence.
    NotSaved(String),
    /// Figures of a window that were wanted.
    Figures(super::merits::Key, super::merits::Figures),
    /// What was wanted of an analysis; behind the opening's number stands the generation of its Reading.
    Part(u64, u64, super::parts::Made),
    /// What earlier runs left unsaved.
    Recoveries(Vec<Recovered>),
    /// The list of recent files.
    Recent(Vec<RecentFile>),
}

/// A file that was asked for.
#[derive(Debug)]
pub(super) struct Picked {
    pub(super) ask: Ask,
    /// The desk it was asked for, if there was one.
    pub(super) desk: Option<u64>,
    /// The file chosen.
    pub(super) path: Option<PathBuf>,
    /// Whether a file stands there that nobody was asked about.
    pub(super) replaces: bool,
    /// How long the question stood.
    pub(super) took: Duration,
}

/// A session that was saved.
#[derive(Debug, Clone)]
pub(super) struct Saved {
    pub(super) path: PathBuf,
    pub(super) session: Session,
    /// Whether the figures it reads as went with it.
    pub(super) with_figures: bool,
}

/// What came of opening a file.
#[derive(Debug)]
pub(super) enum Outcome {
    /// It is open.
    Opened(Box<Opened>),
    /// It could not be opened; one sentence.
    Refused(String),
    /// It was called off.
    CalledOff,
    /// A session's capture is nowhere to be found.
    Missing(Box<Kept>),
    /// A session's capture is not what it was.
    Changed(Box<Changed>),
}

/// A session as it was found, and where.
#[derive(Debug)]
pub(super) struct Kept {
    pub(super) loaded: Loaded,
    /// The file it was found in.
    pub(super) found_in: PathBuf,
    /// Set where an earlier run left it unsaved; nobody else is offered it while this lives.
    pub(super) recovered: Option<Recovered>,
}

impl Kept {
    /// What an earlier run left.
    pub(super) fn left(recovered: Recovered) -> Self {
        Self { loaded: recovered.loaded.clone(), found_in: recovered.file.clone(), recovered: Some(recovered) }
    }

    /// The file the session is kept in: for one that was left unsaved the one it was saved in before, if any.
    fn file(&self) -> Option<PathBuf> {
        if self.recovered.is_some() { self.loaded.saved_as.clone() } else { Some(self.found_in.clone()) }
    }

    /// The session with its capture.
    fn opened(self, session: Session, capture: Capture, as_saved: bool, remark: Option<String>) -> Opened {
        let (file, recovered) = (self.file(), self.recovered);
        let as_saved = as_saved && recovered.is_none();
        // What was left unsaved may have moved on since its figures were kept.
        let figures = self.loaded.figures.filter(|_| recovered.is_none());
        Opened { capture, session: Some(session), file, as_saved, remark, recovered, figures }
    }
}

/// A capture that is open, with the session about it, if there is one.
#[derive(Debug)]
pub(super) struct Opened {
    pub(super) capture: Capture,
    pub(super) session: Option<Session>,
    /// The file the session is kept in.
    pub(super) file: Option<PathBuf>,
    /// Whether the session is as it stands in that file.
    pub(super) as_saved: bool,
    /// What the user should know.
    pub(super) remark: Option<String>,
    /// What an earlier run left of it: may go once the session is safe elsewhere.
    pub(super) recovered: Option<Recovered>,
    /// The figures that were saved with the session.
    pub(super) figures: Option<Figures>,
}

/// A session whose capture is not what it was.
#[derive(Debug)]
pub(super) struct Changed {
    pub(super) kept: Kept,
    pub(super) capture: Capture,
    pub(super) blake3: String,
}

/// Opens what `path` names: a session where its name says so, else a capture.
pub(super) fn open(path: &Path, watch: &Watch) -> Outcome {
    if session::has_extension(path) {
        return match session::load(path) {
            Ok(loaded) => open_session(Kept { loaded, found_in: path.to_owned(), recovered: None }, watch),
            Err(error) => Outcome::Refused(error.to_string()),
        };
    }
    match capture::open(path) {
        Ok(capture) => {
            let opened = Opened {
                capture,
                session: None,
                file: None,
                as_saved: true,
                remark: None,
                recovered: None,
                figures: None,
            };
            Outcome::Opened(Box::new(opened))
        }
        Err(error) => Outcome::Refused(error.to_string()),
    }
}

/// Opens the capture a session is about, wherever it is now.
pub(super) fn open_session(kept: Kept, watch: &Watch) -> Outcome {
    match find_capture(&kept.loaded.session.capture, &kept.found_in) {
        Some(found) => open_found(kept, &found, watch),
        None => Outcome::Missing(Box::new(kept)),
    }
}

/// Opens a session with a capture that was found, and says whether that is what it was.
pub(super) fn open_found(kept: Kept, found: &Found, watch: &Watch) -> Outcome {
    let SessionCapture { capture, state, now } = match open_capture(&kept.loaded.session.capture, found, watch) {
        Ok(opened) => opened,
        Err(_) if watch.is_cancelled() => return Outcome::CalledOff,
        Err(error) => return Outcome::Refused(error.to_string()),
    };
    if state == CaptureState::Changed {
        return Outcome::Changed(Box::new(Changed { kept, capture, blake3: now.blake3 }));
    }
    let session = Session { capture: now, ..kept.loaded.session.clone() };
    if let Err(what) = session.check() {
        return Outcome::Refused(SessionError::Invalid { path: kept.found_in, what }.to_string());
    }
    let moved = format!("The capture has moved and is the same: it was found at {}.", found.path.display());
    let remark = (state == CaptureState::Moved).then_some(moved);
    Outcome::Opened(Box::new(kept.opened(session, capture, state == CaptureState::Same, remark)))
}

/// Takes a changed capture after the user has said so.
pub(super) fn use_changed(changed: Changed) -> Opened {
    let Changed { kept, capture, blake3 } = changed;
    let mut session = kept.loaded.session.clone();
    adopt(&mut session, &capture, blake3);
    let remark = "The capture has changed since the session was saved: all figures are computed anew from what it \
                  holds now.";
    kept.opened(session, capture, false, Some(remark.to_owned()))
}

/// Makes of a capture what takes reading it through: small picture, BLAKE3, and of the channel read its doubts and
/// how steady it is, which has a watch of its own. What is made already costs nothing.
pub(super) fn survey(
    number: u64,
    (capture, overview): (&Capture, &Overview),
    session: &Session,
    (watch, steady): (&Watch, &Watch),
    tell: &dyn Fn(Event),
) {
    if let Err(error) = overview.fill(&*capture.source, watch, || tell(Event::Read))
        && !watch.is_cancelled()
    {
        tell(Event::Said(error.to_string()));
    }
    let about = (number, session.channel);
    let doubts = overview.damage(session.channel).map(|d| d.doubts()).unwrap_or_default();
    tell(Event::Doubts(about, doubts.into_iter().map(|(_, text)| text).collect()));
    read_steadiness(about, capture, steady, tell);
    if session.capture.blake3.is_empty()
        && let Ok(blake3) = capture.blake3(watch)
    {
        tell(Event::Hashed(number, blake3));
    }
    tell(Event::Surveyed(about));
}

/// Reads how steady a channel is. What goes wrong then went wrong before, when the overview was made, and was told.
pub(super) fn read_steadiness(about: (u64, usize), capture: &Capture, watch: &Watch, tell: &dyn Fn(Event)) {
    match tone::steadiness(&*capture.source, about.1, watch) {
        Ok(found) => tell(Event::Steady(about, Arc::new(found))),
        // The ribbon says that it was not read.
        Err(_) => watch.cancel(),
    }
}

/// Saves the session, with its capture's BLAKE3 where that is not known yet.
pub(super) fn save(
    number: u64,
    path: PathBuf,
    mut session: Session,
    figures: Option<&Figures>,
    capture: &Capture,
) -> Event {
    if session.capture.blake3.is_empty() {
        match capture.blake3(&Watch::new()) {
            Ok(blake3) => session.capture.blake3 = blake3,
            Err(error) => return Event::NotSaved(error.to_string()),
        }
    }
    match session::save(&path, &session, figures) {
        Ok(()) => Event::Saved(number, Box::new(Saved { path, session, with_figures: figures.is_some() })),
        Err(error) => Event::NotSaved(error.to_string()),
    }
}

/// The recovery slot of this run, made when it is first needed.
#[derive(Debug, Clone, Default)]
pub(super) struct Slot(Arc<Mutex<Option<Recovery>>>);

impl Slot {
    /// Keeps an unsaved session safe.
    pub(super) fn keep(&self, folder: &Path, session: &Session, file: Option<&Path>) -> Option<Event> {
        let mut slot = self.0.lock().unwrap_or_else(PoisonError::into_inner);
        if slot.is_none() {
            match session::start_recovery(folder) {
                Ok(new) => *slot = Some(new),
                Err(error) => return Some(Event::Said(format!("nothing is kept for recovery: {error}"))),
            }
        }
        let written = session::write_recovery(slot.as_ref()?, session, file);
        written.err().map(|error| Event::Said(format!("not kept for recovery: {error}")))
    }

    /// There is nothing unsaved any more.
    pub(super) fn clear(&self) {
        if let Some(slot) = self.0.lock().unwrap_or_else(PoisonError::into_inner).as_ref() {
            // A leftover would only be offered once too often.
            let _ = slot.clear();
        }
    }

    /// A regular end.
    pub(super) fn finish(&self) {
        if let Some(slot) = self.0.lock().unwrap_or_else(PoisonError::into_inner).take() {
            let _ = slot.finish();
        }
    }
}
