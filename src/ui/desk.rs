//! What lies on the desk: the open capture, the document about it, and its newest figures.

use std::path::{Path, PathBuf};
use std::sync::Arc;

use super::parts::Parts;
use super::survey::Steady;
use super::worker::Latest;
use crate::capture::{Capture, Overview};
use crate::reading::{Reading, Request};
use crate::session::{CaptureRef, Figures, History, NamedSegment, Session};
use crate::signal::{Span, Watch};
use crate::units::Scale;
use crate::window::Window;

/// The open capture and all that belongs to it.
#[derive(Debug)]
#[expect(clippy::struct_excessive_bools, reason = "each is a state of its own: nothing here excludes another")]
pub(super) struct Desk {
    /// Which opening this is; what comes from an earlier one is dropped.
    pub(super) number: u64,
    /// The document.
    pub(super) session: Session,
    /// Its steps.
    pub(super) history: History,
    /// The samples.
    pub(super) capture: Arc<Capture>,
    /// The whole of it, small; filled in the background.
    pub(super) overview: Overview,
    /// The figures saved with the session that was opened and what they were asked for with, until they are compared.
    pub(super) recheck: Option<(Request, Figures)>,
    /// Whether everything there is to find in the capture has been found.
    pub(super) surveyed: bool,
    /// The channel that was, or is being, read through.
    pub(super) surveyed_channel: Option<usize>,
    /// Whether the user has marked anything: then no suggestion takes its place.
    pub(super) marked: bool,
    /// Whether the range shown still follows the tones found, as it does until the user touches it.
    pub(super) fits_axes: bool,
    /// How steady the channel read is, and the stretches that are suggested.
    pub(super) steady: Steady,
    /// The file the session is kept in.
    pub(super) file: Option<PathBuf>,
    /// The document as it was last saved, or as it was when the capture was opened.
    saved: Session,
    /// The figures.
    pub(super) latest: Latest,
    /// What the tones make of the panes, and what they leave.
    pub(super) parts: Parts,
    /// Calls off what is still being made of this capture.
    pub(super) watch: Watch,
    /// Calls off the columns that the strip last wanted.
    pub(super) columns_watch: Watch,
    /// Whether nobody has changed anything since its channel was chosen, nor marked anything before: then the suggested
    /// stretch may take its place.
    pub(super) untouched: bool,
}

/// What the session says of a capture just opened.
pub(super) fn capture_ref(capture: &Capture) -> CaptureRef {
    CaptureRef {
        path: capture.path.to_string_lossy().into_owned(),
        blake3: String::new(),
        sample_rate_hz: capture.source.sample_rate_hz(),
        channels: capture.source.n_channels(),
        frames: capture.source.n_frames(),
        format: capture.format.clone(),
    }
}

impl Desk {
    /// Which pane of the curves at hand is that of pane `index`, whose window is `window`: panes may have been moved or
    /// changed since the curves were made.
    pub(super) fn curve_of(&self, index: usize, window: &Window) -> Option<usize> {
        place_of(self.latest.spectra()?.windows(), index, |w| w == window)
    }

    /// Which pane of the Reading at hand is that of pane `index`, whose window is `window`.
    pub(super) fn reading_of(&self, index: usize, window: &Window) -> Option<usize> {
        let written = window.to_string();
        place_of(&self.reading()?.panes, index, |p| p.written() == written)
    }

    /// The scale that levels are shown in: the channel's, or full scales while that cannot be used.
    pub(super) fn shown_scale(&self) -> Scale {
        let scale = self.session.scale();
        if scale.check().is_ok() { scale } else { Scale::default() }
    }

    /// A desk with a capture fresh from its file; `dress` puts in the document what is known of it already.
    pub(super) fn fresh(number: u64, capture: Arc<Capture>, dress: impl FnOnce(&mut Session)) -> Self {
        let mut session = Session::new(capture_ref(&capture));
        dress(&mut session);
        let fits_axes = session.axes.frequency_hz.is_none();
        let mut desk = Self::with_session(number, capture, session, None);
        (desk.fits_axes, desk.marked, desk.untouched) = (fits_axes, false, true);
        desk
    }

    /// A desk with a session and the capture it is about.
    pub(super) fn with_session(number: u64, capture: Arc<Capture>, session: Session, file: Option<PathBuf>) -> Self {
        Self {
            number,
            saved: session.clone(),
            session,
            history: History::new(),
            overview: Overview::new(&capture),
            capture,
            recheck: None,
            surveyed: false,
            surveyed_channel: None,
            marked: true,
            fits_axes: false,
            steady: Steady::default(),
            file,
            latest: Latest::default(),
            parts: Parts::default(),
            watch: Watch::new(),
            columns_watch: Watch::new(),
            untouched: false,
        }
    }

    /// Takes the document as saved.
    pub(super) fn mark_saved(&mut self, session: Session) {
        self.saved = session;
    }

    /// Takes the document as never saved, such as one that was recovered.
    pub(super) fn mark_unsaved(&mut self) {
        self.saved.panes.clear();
    }

    /// Whether there is something that saving would keep. What the axes show and what is picked goes with a saved
    /// session but is nothing anybody would want to be asked about.
    pub(super) fn is_unsaved(&self) -> bool {
        !same_work(&self.session, &self.saved)
    }

    /// Whether this is the work that lies on the desk.
    pub(super) fn holds(&self, session: &Session) -> bool {
        same_work(&self.session, session)
    }

    /// Whether figures of the document as it is now are still to come.
    pub(super) fn awaits_figures(&self) -> bool {
        let asked = self.latest.asked.as_ref().map(|a| &a.1);
        asked != Some(&self.request()) || self.latest.is_busy()
    }

    /// Puts the suggested stretch in the place of the whole capture; not a step anybody took, so none to undo.
    pub(super) fn start_from(&mut self, span: Span) {
        let was_saved = !self.is_unsaved();
        if let Some(segment) = self.session.segments.first_mut() {
            segment.span = span;
            "steady run".clone_into(&mut segment.name);
        }
        if was_saved {
            self.saved = self.session.clone();
        }
    }

    /// What the document asks for. What the file hashes to is left out: it changes no figure.
    pub(super) fn request(&self) -> Request {
        let mut request = Request::from_session(&self.session);
        request.capture.blake3.clear();
        request
    }

    /// What became of the figures saved with the session: whether all stand, and a sentence; once, as soon as those
    /// asked for by the session as it was opened are there.
    pub(super) fn take_verdict(&mut self) -> Option<(bool, String)> {
        if self.recheck.is_none() || !self.latest.is_current() {
            return None;
        }
        let now = crate::reading::figures_of(self.reading()?);
        let asked = self.latest.asked.as_ref().map(|a| a.1.clone())?;
        let (request, saved) = self.recheck.take()?;
        // The document was changed meanwhile: its figures are no longer those to compare.
        if asked != request {
            return None;
        }
        let moved = saved.moved(&now);
        let Some(first) = moved.first() else {
            let n = saved.tones.len();
            return Some((true, format!("Every figure saved with this session stands ({n} tones).")));
        };
        let (n, word) = (moved.len(), if moved.len() == 1 { "figure" } else { "figures" });
        let (was, is) = (crate::report::figure_text(&first.was), crate::report::figure_text(&first.is));
        let text = format!("{n} {word} moved since this session was saved: {} was {was}, is {is}", first.what);
        Some((false, if n > 1 { format!("{text}, and more.") } else { format!("{text}.") }))
    }

    /// The segment read.
    pub(super) fn segment(&self) -> Option<&NamedSegment> {
        self.session.current_segment()
    }

    /// The newest Reading, whether or not it is the one asked for.
    pub(super) fn reading(&self) -> Option<&Arc<Reading>> {
        self.latest.reading.as_ref().map(|r| &r.2)
    }

    /// 1/T of the segment read.
    pub(super) fn line_spacing_hz(&self) -> f64 {
        let samples = self.segment().map_or(1, |s| s.span.samples.max(1));
        self.session.sample_rate_hz() / samples as f64
    }

    /// The capture's file name.
    pub(super) fn name(&self) -> String {
        file_name(&self.capture.path)
    }
}

impl Drop for Desk {
    fn drop(&mut self) {
        self.watch.cancel();
        self.parts.call_off();
        self.columns_watch.cancel();
        self.steady.watch.cancel();
    }
}

/// The last part of a path, as text.
pub(super) fn file_name(path: &Path) -> String {
    path.file_name().map_or_else(|| path.to_string_lossy().into_owned(), |n| n.to_string_lossy().into_owned())
}

fn same_work(a: &Session, b: &Session) -> bool {
    let plain = |s: &Session| {
        let mut s = s.clone();
        s.capture.blake3.clear();
        s.picked_hz = None;
        s.axes = crate::session::ViewAxes::default();
        s
    };
    plain(a) == plain(b)
}

/// Makes a session fit a capture that is not the one it was saved with: spans end where it ends, the channel is one
/// it has.
pub(super) fn adopt(session: &mut Session, capture: &Capture, blake3: String) {
    let facts = CaptureRef { blake3, ..capture_ref(capture) };
    for segment in &mut session.segments {
        let clipped = segment.span.clipped_to(facts.frames);
        segment.span = if clipped.samples == 0 { Span { start: 0, samples: facts.frames } } else { clipped };
    }
    session.channel = session.channel.min(facts.channels.saturating_sub(1));
    session.scales.resize_with(facts.channels, crate::units::Scale::default);
    session.capture = facts;
}

/// The place of what `is_it`: `index` itself if that is one, else the first.
pub(super) fn place_of<T>(list: &[T], index: usize, is_it: impl Fn(&T) -> bool) -> Option<usize> {
    if list.get(index).is_some_and(&is_it) { Some(index) } else { list.iter().position(is_it) }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::signal::Stored;

    fn capture(frames: usize, channels: usize) -> Capture {
        Capture {
            path: PathBuf::from("pump.wav"),
            format: "test".to_owned(),
            bits_per_sample: None,
            truncated: false,
            source: Arc::new(Stored::new(100.0, channels, vec![0.0; frames * channels])),
            doubts: Vec::new(),
            stamp: crate::capture::Stamp::default(),
        }
    }

    #[test]
    fn a_pick_is_not_unsaved_work_but_a_name_is() {
        let mut desk = Desk::fresh(1, Arc::new(capture(50, 1)), |_| {});
        assert!(!desk.is_unsaved() && desk.untouched && !desk.marked);
        desk.session.picked_hz = Some(3.0);
        assert!(!desk.is_unsaved());
        desk.session.segments[0].name = "run".to_owned();
        assert!(desk.is_unsaved());
    }

    #[test]
    fn a_shorter_capture_takes_the_session_over() {
        let mut session = Session::new(capture_ref(&capture(100, 2)));
        session.channel = 1;
        session.segments[0].span = Span { start: 80, samples: 20 };
        adopt(&mut session, &capture(50, 1), "ab".to_owned());
        assert_eq!(session.segments[0].span, Span { start: 0, samples: 50 });
        assert_eq!((session.channel, session.scales.len(), session.capture.frames), (0, 1, 50));
    }
}
