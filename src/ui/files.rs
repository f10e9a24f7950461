//! File work, done on lanes of its own: opening, saving, what is made of a capture once it is open.

use std::path::{Path, PathBuf};
use std::sync::{Arc, Mutex, PoisonError};

use super::desk::{adopt, capture_ref};
use super::services::Ask;
use super::strip::StripKey;
use crate::capture::{self, Capture, Overview};
use crate::session::{
    self, CaptureState, Figures, Found, Loaded, RecentFile, Recovered, Recovery, Session, capture_state, find_capture,
};
use crate::signal::{Extent, Span, Watch};

/// What came of file work.
#[derive(Debug)]
pub(super) enum Event {
    /// A question for a file was answered.
    Picked(Ask, Option<PathBuf>),
    /// A capture is open.
    Opened(Box<Opened>),
    /// Something did not work; one sentence.
    Refused(String),
    /// Opening was called off.
    CalledOff,
    /// A session's capture is nowhere to be found.
    Missing(Box<Loaded>, PathBuf),
    /// A session's capture is not what it was.
    Changed(Box<Changed>),
    /// More of the capture has been read through.
    Read,
    /// What is doubtful about the samples of the channel read.
    Doubts(u64, Vec<String>),
    /// Columns of samples that were wanted for the strip.
    Columns(u64, StripKey, Vec<Extent>),
    /// All of the capture has been read through.
    Surveyed(u64),
    /// The stretch suggested.
    Suggested(u64, Span),
    /// The capture's BLAKE3.
    Hashed(u64, String),
    /// The session is saved, as it was then.
    Saved(u64, PathBuf, Box<Session>),
    /// What earlier runs left unsaved.
    Recoveries(Vec<Recovered>),
    /// The list of recent files.
    Recent(Vec<RecentFile>),
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
}

/// A session whose capture is not what it was.
#[derive(Debug)]
pub(super) struct Changed {
    pub(super) loaded: Loaded,
    pub(super) file: PathBuf,
    pub(super) capture: Capture,
    pub(super) blake3: String,
}

/// Opens what `path` names: a session where its name says so, else a capture.
pub(super) fn open(path: &Path, watch: &Watch) -> Event {
    if session::has_extension(path) {
        return match session::load(path) {
            Ok(loaded) => open_session(loaded, path, watch),
            Err(error) => Event::Refused(error.to_string()),
        };
    }
    match capture::open(path) {
        Ok(capture) => {
            let opened = Opened { capture, session: None, file: None, as_saved: true, remark: None };
            Event::Opened(Box::new(opened))
        }
        Err(error) => Event::Refused(error.to_string()),
    }
}

/// Opens the capture a session is about, wherever it is now.
pub(super) fn open_session(loaded: Loaded, file: &Path, watch: &Watch) -> Event {
    match find_capture(&loaded.session.capture, file) {
        Some(found) => open_found(loaded, file, &found, watch),
        None => Event::Missing(Box::new(loaded), file.to_owned()),
    }
}

/// Opens a session with a capture that was found, and says whether that is what it was.
pub(super) fn open_found(loaded: Loaded, file: &Path, found: &Found, watch: &Watch) -> Event {
    let opened = capture::open(&found.path).and_then(|capture| {
        let blake3 = capture.blake3(watch)?;
        Ok((capture, blake3))
    });
    let (capture, blake3) = match opened {
        Ok(both) => both,
        Err(_) if watch.is_cancelled() => return Event::CalledOff,
        Err(error) => return Event::Refused(error.to_string()),
    };
    let state = capture_state(&loaded.session.capture, found, &blake3);
    if state == CaptureState::Changed {
        return Event::Changed(Box::new(Changed { loaded, file: file.to_owned(), capture, blake3 }));
    }
    let mut session = loaded.session;
    session.capture = crate::session::CaptureRef { blake3, ..capture_ref(&capture) };
    let moved = format!("The capture has moved and is the same: it was found at {}.", found.path.display());
    Event::Opened(Box::new(Opened {
        capture,
        session: Some(session),
        file: Some(file.to_owned()),
        as_saved: state == CaptureState::Same,
        remark: (state == CaptureState::Moved).then_some(moved),
    }))
}

/// Opens what an earlier run left unsaved; it stays unsaved, in the file it was saved in before, if any.
pub(super) fn recover(loaded: Loaded, file: &Path, watch: &Watch) -> Event {
    let saved_as = loaded.saved_as.clone();
    match open_session(loaded, file, watch) {
        Event::Opened(mut opened) => {
            opened.file = saved_as;
            opened.as_saved = false;
            Event::Opened(opened)
        }
        other => other,
    }
}

/// Takes a changed capture after the user has said so.
pub(super) fn use_changed(changed: Changed) -> Opened {
    let Changed { loaded, file, capture, blake3 } = changed;
    let mut session = loaded.session;
    adopt(&mut session, &capture, blake3);
    let remark = "The capture has changed since the session was saved: all figures are computed anew from what it \
                  holds now.";
    Opened { capture, session: Some(session), file: Some(file), as_saved: false, remark: Some(remark.to_owned()) }
}

/// Makes of a capture what takes reading it through: small picture, doubts, suggestion, BLAKE3.
pub(super) fn survey(
    number: u64,
    (capture, overview): (&Capture, &Overview),
    session: &Session,
    watch: &Watch,
    tell: &dyn Fn(Event),
) {
    if let Err(error) = overview.fill(&*capture.source, watch, || tell(Event::Read))
        && !watch.is_cancelled()
    {
        tell(Event::Refused(error.to_string()));
    }
    let doubts = overview.damage(session.channel).map(|d| d.doubts()).unwrap_or_default();
    tell(Event::Doubts(number, doubts.into_iter().map(|(_, text)| text).collect()));
    let rate = session.sample_rate_hz();
    if let Ok(Some(span)) = crate::tone::suggest_steady(&*capture.source, session.channel, rate, watch) {
        tell(Event::Suggested(number, span));
    }
    if session.capture.blake3.is_empty()
        && let Ok(blake3) = capture.blake3(watch)
    {
        tell(Event::Hashed(number, blake3));
    }
    tell(Event::Surveyed(number));
}

/// Saves the session, with its capture's BLAKE3 where that is not known yet.
pub(super) fn save(
    number: u64,
    path: &Path,
    mut session: Session,
    figures: Option<&Figures>,
    capture: &Capture,
    watch: &Watch,
) -> Event {
    if session.capture.blake3.is_empty() {
        match capture.blake3(watch) {
            Ok(blake3) => session.capture.blake3 = blake3,
            Err(error) => return Event::Refused(error.to_string()),
        }
    }
    match session::save(path, &session, figures) {
        Ok(()) => Event::Saved(number, path.to_owned(), Box::new(session)),
        Err(error) => Event::Refused(error.to_string()),
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
                Err(error) => return Some(Event::Refused(format!("nothing is kept for recovery: {error}"))),
            }
        }
        let written = session::write_recovery(slot.as_ref()?, session, file);
        written.err().map(|error| Event::Refused(format!("not kept for recovery: {error}")))
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
