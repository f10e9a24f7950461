//! `panewise recheck`: a saved session computed anew, figure by figure.

use std::fmt::Write as _;
use std::io::Write;
use std::path::Path;

use super::arguments::RecheckWish;
use super::read::{Opened, open_capture_of, reading_of};
use super::{CliError, DONE, FOUND_A_PROBLEM, put};
use crate::capture::CaptureError;
use crate::reading::figures_of;
use crate::report::{figure_text, recheck_json};
use crate::session::{self, CaptureState, Figures, Moved, Session, SessionCapture};

/// What a recheck found.
struct Found {
    figures: Vec<Moved>,
    capture: CaptureState,
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
    let saved = loaded.figures.ok_or_else(|| CliError::NoFigures { session: wish.session.clone() })?;
    if loaded.session.capture.blake3.is_empty() {
        return Err(CliError::NoHash { session: wish.session.clone() });
    }
    let found = compare(loaded.session, &saved, &wish.session)?;
    if wish.json {
        put(out, &recheck_json(found.same(), &found.figures, found.capture)?)?;
    } else {
        put(out, told(&found, &saved, &wish.session).as_bytes())?;
    }
    Ok(if found.same() { DONE } else { FOUND_A_PROBLEM })
}

fn compare(mut session: Session, saved: &Figures, path: &Path) -> Result<Found, CliError> {
    let SessionCapture { capture, state, now } = match open_capture_of(&session, path) {
        Err(CliError::Missing { .. }) => return Ok(unread(CaptureState::Missing, "the capture is not there")),
        // It was a capture when the session was saved. What the system refuses says nothing of its content.
        Err(CliError::Capture(why)) if !matches!(why, CaptureError::Io { .. }) => {
            return Ok(unread(CaptureState::Changed, &why.to_string()));
        }
        opened => opened?,
    };
    session.capture = now;
    if let Err(why) = session.check() {
        // A changed capture may have become too short for the segment, or have lost the channel.
        return Ok(unread(state, &why.to_string()));
    }
    let opened = Opened::of_session(capture, session);
    match reading_of(&opened) {
        Ok(reading) => Ok(Found { figures: saved.moved(&figures_of(&reading)), capture: state, unread: None }),
        Err(why) if state == CaptureState::Changed => Ok(unread(state, &why.to_string())),
        Err(why) => Err(why),
    }
}

fn unread(capture: CaptureState, why: &str) -> Found {
    Found { figures: Vec::new(), capture, unread: Some(why.to_owned()) }
}

fn told(found: &Found, saved: &Figures, path: &Path) -> String {
    let name = path.display();
    let n_tones = saved.tones.len();
    let capture = found.capture.word();
    if found.same() {
        return format!("{name}: every figure of {n_tones} tones stands; capture: {capture}\n");
    }
    let mut text = match &found.unread {
        Some(why) => format!("{name}: nothing could be computed: {why}; capture: {capture}\n"),
        None => format!("{name}: {} figures moved; capture: {capture}\n", found.figures.len()),
    };
    for figure in &found.figures {
        // Writing to a string cannot fail.
        let _ = writeln!(text, "{}: was {}, is {}", figure.what, figure_text(&figure.was), figure_text(&figure.is));
    }
    text
}
