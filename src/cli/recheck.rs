//! `panewise recheck`: a saved session computed anew, figure by figure.

use std::fmt::Write as _;
use std::io::Write;
use std::path::{Path, PathBuf};

use super::arguments::RecheckWish;
use super::read::{Opened, open_capture_of, reading_of};
use super::{CliError, DONE, FOUND_A_PROBLEM, put};
use crate::capture::CaptureError;
use crate::reading::figures_of;
use crate::report::{figure_text, plain, recheck_json};
use crate::session::{self, CaptureRef, CaptureState, Figures, Moved, Session, SessionCapture};
use crate::units::brief;

/// What a recheck found.
struct Found {
    figures: Vec<Moved>,
    capture: CaptureState,
    /// Where the capture was found.
    read_from: Option<PathBuf>,
    /// Why nothing could be computed, where nothing could.
    unread: Option<String>,
}

impl Found {
    fn same(&self) -> bool {
        let stands = matches!(self.capture, CaptureState::Same | CaptureState::Moved);
        stands && self.figures.is_empty() && self.unread.is_none()
    }
}

pub(super) fn recheck(wish: &RecheckWish, out: &mut dyn Write) -> Result<u8, CliError> {
    let loaded = session::load(&wish.session)?;
    let program = loaded.program;
    let saved = loaded.figures.ok_or_else(|| CliError::NoFigures { session: wish.session.clone() })?;
    if loaded.session.capture.blake3.is_empty() {
        return Err(CliError::NoHash { session: wish.session.clone() });
    }
    let found = compare(loaded.session, &saved, &wish.session)?;
    if wish.json {
        put(out, &recheck_json(found.same(), &found.figures, found.capture)?)?;
    } else {
        put(out, told(&found, &saved, &wish.session, &program).as_bytes())?;
    }
    Ok(if found.same() { DONE } else { FOUND_A_PROBLEM })
}

fn compare(mut session: Session, saved: &Figures, path: &Path) -> Result<Found, CliError> {
    let SessionCapture { capture, state, now } = match open_capture_of(&session, path) {
        Err(CliError::Missing { capture, .. }) => {
            let why = format!(
                "its capture {capture} is not there, nor in the session's folder: put it back where it was, or beside \
                 the session"
            );
            return Ok(unread(CaptureState::Missing, why));
        }
        // It was a capture when the session was saved. What the system refuses says nothing of its content.
        Err(CliError::Capture(why)) if !matches!(why, CaptureError::Io { .. }) => {
            return Ok(unread(CaptureState::Changed, why.to_string()));
        }
        opened => opened?,
    };
    let was = std::mem::replace(&mut session.capture, now);
    if let Err(why) = session.check() {
        // A changed capture may have become too short for the segment, or have lost the channel.
        return Ok(unread(state, another(&was, &session.capture).unwrap_or_else(|| why.to_string())));
    }
    let read_from = Some(capture.path.clone());
    let opened = Opened::of_session(capture, session);
    match reading_of(&opened) {
        Ok(reading) => {
            let figures = saved.moved(&figures_of(&reading));
            Ok(Found { figures, capture: state, read_from, unread: None })
        }
        Err(why) if state == CaptureState::Changed => Ok(unread(state, why.to_string())),
        Err(why) => Err(why),
    }
}

fn unread(capture: CaptureState, why: String) -> Found {
    Found { figures: Vec::new(), capture, read_from: None, unread: Some(why) }
}

/// How the capture found differs from the one the session was made of; none where they are alike on the outside.
fn another(was: &CaptureRef, now: &CaptureRef) -> Option<String> {
    let facts = |c: &CaptureRef| {
        format!("{}, {} frames, {} Hz", counted(c.channels, "channel"), c.frames, brief(c.sample_rate_hz))
    };
    let (was_facts, now_facts) = (facts(was), facts(now));
    (was_facts != now_facts).then(|| {
        format!(
            "{} is another recording ({now_facts}) than the session was made of ({was_facts}): put that one back",
            now.path
        )
    })
}

fn counted(n: usize, what: &str) -> String {
    format!("{n} {what}{}", if n == 1 { "" } else { "s" })
}

fn told(found: &Found, saved: &Figures, path: &Path, program: &str) -> String {
    let name = path.display();
    let tones = counted(saved.tones.len(), "tone");
    let from = |from: &PathBuf| format!(", read from {}", from.display());
    let moved = found.read_from.as_ref().filter(|_| found.capture == CaptureState::Moved);
    let capture = format!("{}{}", found.capture.word(), moved.map(from).unwrap_or_default());
    if found.same() {
        return format!("{name}: every figure of {tones} stands; capture: {capture}\n");
    }
    let mut text = match &found.unread {
        Some(why) => format!("{name}: nothing could be computed: {why}; capture: {capture}\n"),
        None => format!("{name}: {} moved; capture: {capture}\n", counted(found.figures.len(), "figure")),
    };
    if let Some(read_from) = found.read_from.as_ref().filter(|_| found.capture == CaptureState::Changed) {
        let read_from = read_from.display();
        let _ = writeln!(text, "{read_from} is not what it was when the session was saved: put that recording back");
    }
    // Writing to a string cannot fail.
    let this = env!("CARGO_PKG_VERSION");
    if program != this && !found.figures.is_empty() {
        let _ = writeln!(text, "the session was saved by Panewise {}, this is {this}", plain(program));
    }
    for figure in &found.figures {
        let _ = writeln!(text, "{}: was {}, is {}", figure.what, figure_text(&figure.was), figure_text(&figure.is));
    }
    text
}
