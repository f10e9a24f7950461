//! `panewise read`: a capture or a session in, its tone table out.

use std::io::Write;
use std::path::{Path, PathBuf};

use super::arguments::{ReadWish, ScaleWish, SearchWish};
use super::{CliError, put};
use crate::capture::{self, Capture};
use crate::reading::{Reading, ReadingError, Request, Segment, Warning, analyse, figures_of};
use crate::report;
use crate::session::{
    self, CaptureRef, CaptureState, Command, HandTone, Pane, PaneId, Refusal, Session, SessionCapture,
};
use crate::signal::{Span, Watch};
use crate::tone::suggest_steady;
use crate::units::{Factor, Quantity, Scale, Unit, brief};

/// A capture that is open, and the document that says what to read of it.
pub(super) struct Opened {
    pub capture: Capture,
    pub session: Session,
    pub warnings: Vec<Warning>,
    /// Whether the user has marked the segment.
    marked: bool,
}

impl Opened {
    /// A session on its own capture.
    pub(super) fn of_session(capture: Capture, session: Session) -> Self {
        Self { warnings: doubts(&capture), capture, session, marked: true }
    }
}

pub(super) fn read(wish: &ReadWish, out: &mut dyn Write) -> Result<(), CliError> {
    if let Some(path) = wish.save.as_deref().filter(|path| !wish.replace && stands(path)) {
        return Err(CliError::Standing(path.to_owned()));
    }
    // JSON states the content's hash, and so does a session.
    let mut opened = open(&wish.input, wish.json || wish.save.is_some())?;
    change(&mut opened, wish)?;
    let reading = reading_of(&opened)?;
    if let Some(path) = &wish.save {
        session::save(path, &opened.session, Some(&figures_of(&reading)))?;
    }
    if wish.json {
        put(out, &report::reading_json(&reading)?)
    } else if wish.csv {
        put(out, &report::csv_table(&reading)?)
    } else {
        put(out, report::tone_table(&reading).as_bytes())
    }
}

/// Whether a session would be written over. Any other file is refused by its name, whatever was allowed.
fn stands(path: &Path) -> bool {
    session::has_extension(path) && path.symlink_metadata().is_ok()
}

/// The reading of a capture or session as text, with nothing else asked for.
pub(super) fn text_of(path: &Path) -> Result<String, CliError> {
    let mut opened = open(path, false)?;
    mark_steady(&mut opened)?;
    Ok(report::tone_table(&reading_of(&opened)?))
}

fn open(path: &Path, hashed: bool) -> Result<Opened, CliError> {
    if session::has_extension(path) {
        return open_session(path);
    }
    let capture = capture::open(path)?;
    let blake3 = if hashed { capture.blake3(&Watch::new())? } else { String::new() };
    let session = Session::new(CaptureRef::of(&capture, blake3));
    let warnings = doubts(&capture);
    Ok(Opened { capture, session, warnings, marked: false })
}

/// A session is read on its own capture only: one that has changed gives other figures.
fn open_session(path: &Path) -> Result<Opened, CliError> {
    let mut session = session::load(path)?.session;
    let SessionCapture { capture, state, now } = open_capture_of(&session, path)?;
    if state == CaptureState::Changed {
        return Err(CliError::Changed { session: path.to_owned(), capture: capture.path });
    }
    session.capture = now;
    let invalid = |what| session::SessionError::Invalid { path: path.to_owned(), what };
    session.check().map_err(invalid)?;
    let mut opened = Opened::of_session(capture, session);
    if state == CaptureState::Moved {
        let from = opened.capture.path.display();
        let text = format!("the capture was not where the session says, and was read from {from}");
        opened.warnings.push(Warning { code: "moved-capture", text });
    }
    Ok(opened)
}

/// The capture of a session, what became of it, and what it is now.
pub(super) fn open_capture_of(session: &Session, path: &Path) -> Result<SessionCapture, CliError> {
    let missing = || CliError::Missing { session: path.to_owned(), capture: session.capture.path.clone() };
    let found = session::find_capture(&session.capture, path).ok_or_else(missing)?;
    Ok(session::open_capture(&session.capture, &found, &Watch::new())?)
}

/// What was doubtful on opening. A capture that holds less than it claims says so in one of its sentences.
fn doubts(capture: &Capture) -> Vec<Warning> {
    let code = if capture.truncated { "truncated" } else { "capture" };
    capture.doubts.iter().map(|text| Warning { code, text: text.clone() }).collect()
}

/// The Reading that the document asks for.
pub(super) fn reading_of(opened: &Opened) -> Result<Reading, CliError> {
    let request = Request::from_session(&opened.session);
    let analysis = analyse(opened.capture.source.as_ref(), &request, None, &Watch::new());
    let reason = |reason: ReadingError| CliError::Reading { path: opened.capture.path.clone(), reason };
    let mut reading = Reading::clone(&analysis.map_err(reason)?.reading);
    reading.warnings.splice(0..0, opened.warnings.iter().cloned());
    Ok(reading)
}

/// Changes the document as the options ask.
fn change(opened: &mut Opened, wish: &ReadWish) -> Result<(), CliError> {
    let session = &mut opened.session;
    let usage = CliError::Usage;
    if let Some(channel) = wish.channel {
        let channels = session.capture.channels;
        if channel > channels {
            return Err(usage(format!("channel {channel} is not one of the capture's: give 1 to {channels}")));
        }
        Command::ChooseChannel(channel - 1).apply(session);
    }
    if let Some(rate_hz) = wish.rate {
        Command::SetRate(Some(rate_hz)).apply(session);
    }
    if let Some(removal) = wish.remove {
        Command::SetRemoval(removal).apply(session);
    }
    if let Some(windows) = &wish.windows {
        if !opened.marked {
            // The standing set of a new session has not been shown to anyone: its ids are free.
            session.last_pane_id = 0;
        }
        session.panes = (session.last_pane_id + 1..)
            .zip(&windows.0)
            .map(|(id, window)| Pane { id: PaneId(id), window: window.clone(), residue: false })
            .collect();
        session.last_pane_id += windows.0.len() as u32;
    }
    let scale = scale_of(session.scale(), &wish.scale).map_err(usage)?;
    Command::SetScale(session.channel, scale).apply(session);
    change_search(session, &wish.search).map_err(usage)?;
    if let Some(segment) = &wish.segment {
        let span = segment.span(session.sample_rate_hz(), session.capture.frames).map_err(usage)?;
        Command::MoveSegment(session.current, span).apply(session);
        opened.marked = true;
    }
    if wish.kind.is_some() {
        Command::SetKind(wish.kind).apply(session);
    }
    mark_steady(opened)?;
    decide(&mut opened.session, &wish.search).map_err(usage)
}

/// The scale with what was given put in.
fn scale_of(standing: Scale, wish: &ScaleWish) -> Result<Scale, String> {
    let mut scale = standing;
    let of_unit = wish.unit.as_deref().and_then(quantity_of_unit);
    if wish.quantity.is_some() || wish.unit.is_some() {
        scale.quantity = wish.quantity.or(of_unit).unwrap_or_default();
        let unit = wish.unit.as_deref().unwrap_or(scale.quantity.si_symbol());
        let unit = Unit::parse(scale.quantity, unit).map_err(|error| error.to_string())?;
        unit.symbol().clone_into(&mut scale.unit);
    }
    match (wish.factor, wish.sensitivity, wish.full_scale_volts) {
        (Some(factor), ..) => scale.factor = Factor::UnitsPerFullScale(factor),
        (_, Some(volts_per_unit), Some(full_scale_volts)) => {
            scale.factor = Factor::Sensitivity { volts_per_unit, full_scale_volts };
        }
        _ => {}
    }
    let stated = scale.factor != Factor::NotStated && wish.quantity.is_none() && wish.unit.is_none();
    if stated && scale.is_full_scale() {
        return Err("a factor or sensitivity needs to know of what: give --unit or --quantity too".to_owned());
    }
    scale.detector = wish.detector.unwrap_or(scale.detector);
    scale.reference = wish.reference.or(scale.reference);
    scale.check().map_err(|error| error.to_string())?;
    Ok(scale)
}

/// The quantity that a unit belongs to, where it belongs to one only.
fn quantity_of_unit(unit: &str) -> Option<Quantity> {
    let real = Quantity::ALL.into_iter().filter(|q| *q != Quantity::Plain);
    let mut of = real.filter(|q| Unit::parse(*q, unit).is_ok());
    of.next().filter(|_| of.next().is_none())
}

fn change_search(session: &mut Session, wish: &SearchWish) -> Result<(), String> {
    let mut tuning = session.tuning;
    if let Some(max_tones) = wish.max_tones {
        if max_tones > session::MAX_TONES {
            return Err(format!("--max-tones is {max_tones}: give 1 to {}", session::MAX_TONES));
        }
        tuning.max_tones = max_tones;
    }
    if let Some(false_alarm) = wish.false_alarm {
        if false_alarm >= 1.0 {
            let given = brief(false_alarm);
            return Err(format!("--false-alarm is {given}: give a chance above 0 and below 1"));
        }
        tuning.false_alarm = false_alarm;
    }
    Command::SetTuning(tuning).apply(session);
    Ok(())
}

/// What is decided by hand. It comes after the segment: how near is near depends on that.
fn decide(session: &mut Session, wish: &SearchWish) -> Result<(), String> {
    let half_hz = session.sample_rate_hz() / 2.0;
    let below = |option: &str, hz: f64| {
        let f = brief(hz);
        let said = || format!("{option} {f} Hz is not below half the sample rate: give one below {half_hz} Hz");
        if hz < half_hz { Ok(()) } else { Err(said()) }
    };
    let by = || wish.by.clone().unwrap_or_default();
    for tone in &wish.tone {
        below("--tone", tone.frequency_hz)?;
        Command::AddHandTone(HandTone { by: by(), ..tone.clone() }).apply(session);
    }
    for refusal in &wish.refuse {
        below("--refuse", refusal.frequency_hz)?;
        let near = wish.tone.iter().find(|t| session.is_same_tone(t.frequency_hz, refusal.frequency_hz));
        if let Some(tone) = near {
            let (named, refused) = (brief(tone.frequency_hz), brief(refusal.frequency_hz));
            return Err(format!(
                "--tone {named} and --refuse {refused} are one place at this resolution: give one of them"
            ));
        }
        Command::RefuseTone(Refusal { by: by(), ..refusal.clone() }).apply(session);
    }
    if let Some(hz) = wish.fundamental {
        below("--fundamental", hz)?;
        Command::PinFundamental(Some(hz)).apply(session);
    }
    Ok(())
}

/// Marks the longest steady stretch where the user has marked nothing, and says so.
fn mark_steady(opened: &mut Opened) -> Result<(), CliError> {
    if opened.marked {
        return Ok(());
    }
    let session = &mut opened.session;
    let (rate_hz, frames) = (session.sample_rate_hz(), session.capture.frames);
    let steady = suggest_steady(opened.capture.source.as_ref(), session.channel, rate_hz, &Watch::new())
        .map_err(|reason| CliError::Signal { path: PathBuf::from(&session.capture.path), reason })?;
    let (span, text) = assumed(steady, frames, rate_hz);
    Command::MoveSegment(session.current, span).apply(session);
    opened.warnings.push(Warning { code: "assumed-segment", text });
    Ok(())
}

/// What is read of a capture of `frames` where no segment was given, and what is said about it.
fn assumed(steady: Option<Span>, frames: u64, rate_hz: f64) -> (Span, String) {
    let whole = steady.unwrap_or(Span { start: 0, samples: frames });
    let span = Span { samples: whole.samples.min(Segment::MOST), ..whole };
    let (from_s, to_s) = (span.start as f64 / rate_hz, span.end() as f64 / rate_hz);
    let which = match (steady.is_some(), span == whole) {
        (true, true) => "the longest steady stretch was read",
        (true, false) => "as much as one transform takes of the longest steady stretch was read",
        (false, true) => "no stretch is steady, so the whole capture was read",
        (false, false) => "no stretch is steady, so as much of the capture as one transform takes was read",
    };
    let text = format!("no segment was given: {which}, {from_s:.3}..{to_s:.3} s ({}n..{}n)", span.start, span.end());
    (span, text)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_default_segment_longer_than_one_transform_is_clipped_and_said_to_be() {
        let long = Span { start: 100, samples: Segment::MOST + 1 };
        let (span, text) = assumed(Some(long), 1 << 40, 8192.0);
        assert_eq!(span, Span { start: 100, samples: Segment::MOST });
        assert!(text.contains("as much as one transform takes of the longest steady stretch"), "{text}");
        let (span, text) = assumed(None, 1 << 40, 8192.0);
        assert_eq!(span, Span { start: 0, samples: Segment::MOST });
        assert!(text.contains("no stretch is steady") && text.ends_with("(0n..33554432n)"), "{text}");
        let (span, text) = assumed(Some(Span { start: 8192, samples: 16_384 }), 1 << 40, 8192.0);
        assert_eq!(span, Span { start: 8192, samples: 16_384 });
        assert_eq!(text, "no segment was given: the longest steady stretch was read, 1.000..3.000 s (8192n..24576n)");
        assert_eq!(assumed(None, 5, 1.0).0, Span { start: 0, samples: 5 });
    }
}
