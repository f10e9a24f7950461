//! The document's parts.

use serde::{Deserialize, Serialize};

use super::{Overrule, Refusal};
use crate::capture::Capture;
use crate::signal::{Removal, Span};
use crate::tone::Kind;
use crate::units::Scale;
use crate::window::Window;

/// The windows a new session starts with.
pub const DEFAULT_WINDOWS: [&str; 6] = ["rectangular", "hann", "hamming", "blackman", "blackman-harris", "flat-top"];

/// Which capture the session is about, and what it was when the session was saved.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct CaptureRef {
    /// Its path; in a saved session relative to the session's folder where that can be said, with `/` between parts.
    pub path: String,
    /// BLAKE3 of the file's bytes, hex; empty while it is not known yet.
    pub blake3: String,
    /// Frames a second as the file states it.
    pub sample_rate_hz: f64,
    /// Channels.
    pub channels: usize,
    /// Frames.
    pub frames: u64,
    /// The format in words: `WAV, 24-bit integer`.
    pub format: String,
}

impl CaptureRef {
    /// What an open capture is; `blake3` is empty while it is not known yet.
    pub fn of(capture: &Capture, blake3: String) -> Self {
        Self {
            path: capture.path.to_string_lossy().into_owned(),
            blake3,
            sample_rate_hz: capture.source.sample_rate_hz(),
            channels: capture.source.n_channels(),
            frames: capture.source.n_frames(),
            format: capture.format.clone(),
        }
    }
}

/// Identifies a segment for life.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord, Serialize, Deserialize)]
pub struct SegmentId(pub u32);

/// Identifies a pane for life; its hue follows from it.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, PartialOrd, Ord, Serialize, Deserialize)]
pub struct PaneId(pub u32);

/// A marked part of the capture.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct NamedSegment {
    /// Which one it is.
    pub id: SegmentId,
    /// What the user calls it.
    pub name: String,
    /// The samples marked.
    pub span: Span,
    /// What the user says it holds, in the place of what is found. Left out of a saved session where nothing is said, so
    /// that older programs open that.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    pub kind: Option<Kind>,
}

/// One window over the segment.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Pane {
    /// Which one it is.
    pub id: PaneId,
    /// Its window.
    pub window: Window,
    /// Whether it shows the residue in the place of the segment. Left out of a saved session where it does not, so that
    /// older programs open that.
    #[serde(default, skip_serializing_if = "std::ops::Not::not")]
    pub residue: bool,
}

/// A tone named by hand.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct HandTone {
    /// Where it is, or is to be looked for.
    pub frequency_hz: f64,
    /// Whether its frequency is held as given.
    pub held: bool,
    /// Who named it; may be empty.
    #[serde(default, skip_serializing_if = "String::is_empty")]
    pub by: String,
    /// Why; may be empty.
    #[serde(default, skip_serializing_if = "String::is_empty")]
    pub reason: String,
}

impl HandTone {
    /// A tone that nobody in particular names.
    pub fn at(frequency_hz: f64, held: bool) -> Self {
        Self { frequency_hz, held, by: String::new(), reason: String::new() }
    }
}

/// A remark, about a tone or about the whole session.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Note {
    /// The tone it is about; `None`: the whole session.
    pub frequency_hz: Option<f64>,
    /// The remark.
    pub text: String,
}

/// How frequency is laid out in the panes.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum FrequencyAxis {
    /// In proportion.
    #[default]
    Linear,
    /// By its logarithm.
    Logarithmic,
}

/// What the panes' axes show. Kept with the session; changing it is not undone.
#[derive(Debug, Clone, Copy, PartialEq, Default, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ViewAxes {
    /// How frequency is laid out.
    pub frequency_axis: FrequencyAxis,
    /// Lowest and highest frequency shown, Hz; `None`: everything up to half the rate.
    pub frequency_hz: Option<(f64, f64)>,
    /// Lowest and highest level shown, dB; `None`: fitted to what there is.
    pub level_db: Option<(f64, f64)>,
}

/// What governs the search for tones.
#[derive(Debug, Clone, Copy, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Tuning {
    /// The chance that noise alone gives any tone at all in the search.
    pub false_alarm: f64,
    /// At most so many tones; the weakest over their floor are left out.
    pub max_tones: usize,
}

impl Default for Tuning {
    fn default() -> Self {
        Self { false_alarm: 1e-3, max_tones: 200 }
    }
}

/// The document. Small enough to snapshot.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(rename = "Document", deny_unknown_fields)]
pub struct Session {
    /// The capture.
    pub capture: CaptureRef,
    /// A sample rate that stands in for the file's, Hz.
    pub rate_hz: Option<f64>,
    /// The channel read, counted from 0.
    pub channel: usize,
    /// What a sample means, a scale for each channel.
    pub scales: Vec<Scale>,
    /// The segments marked; never empty.
    pub segments: Vec<NamedSegment>,
    /// The greatest segment id given so far: no later segment gets an id a second time.
    pub last_segment_id: u32,
    /// The segment read.
    pub current: SegmentId,
    /// What is taken out of the segment before its transform.
    pub removal: Removal,
    /// The panes, in the order shown; 1 to 8.
    pub panes: Vec<Pane>,
    /// The greatest pane id given so far.
    pub last_pane_id: u32,
    /// Tones named by hand.
    pub hand_tones: Vec<HandTone>,
    /// Places where no tone is to be.
    #[serde(default)]
    pub refused: Vec<Refusal>,
    /// Verdicts that stand in the place of the program's.
    #[serde(default)]
    pub overruled: Vec<Overrule>,
    /// The frequency that orders are counted by, as a machine's speed of turning, Hz. Where a tone stands within half a
    /// line of it in the segment read, that tone's best estimate is used: a pinned shaft is followed from segment to
    /// segment, and a speed typed in few digits does not spoil the high orders.
    #[serde(default)]
    pub fundamental_hz: Option<f64>,
    /// What governs the search for tones.
    pub tuning: Tuning,
    /// The tone picked, by its frequency, Hz.
    pub picked_hz: Option<f64>,
    /// Remarks.
    pub notes: Vec<Note>,
    /// What the axes show.
    pub axes: ViewAxes,
}

impl Session {
    /// A new session about a capture: one segment over all of it, the standing set of windows, no scale stated.
    pub fn new(capture: CaptureRef) -> Self {
        let span = Span { start: 0, samples: capture.frames };
        let whole = NamedSegment { id: SegmentId(1), name: "segment 1".to_owned(), span, kind: None };
        let windows = DEFAULT_WINDOWS.iter().filter_map(|name| Window::parse(name).ok());
        let panes: Vec<_> =
            (1..).zip(windows).map(|(id, window)| Pane { id: PaneId(id), window, residue: false }).collect();
        Self {
            scales: vec![Scale::default(); capture.channels],
            capture,
            rate_hz: None,
            channel: 0,
            segments: vec![whole],
            last_segment_id: 1,
            current: SegmentId(1),
            removal: Removal::Mean,
            last_pane_id: panes.len() as u32,
            panes,
            hand_tones: Vec::new(),
            refused: Vec::new(),
            overruled: Vec::new(),
            fundamental_hz: None,
            tuning: Tuning::default(),
            picked_hz: None,
            notes: Vec::new(),
            axes: ViewAxes::default(),
        }
    }

    /// Samples a second, as read: the override, else the file's.
    pub fn sample_rate_hz(&self) -> f64 {
        self.rate_hz.unwrap_or(self.capture.sample_rate_hz)
    }

    /// The segment read.
    pub fn current_segment(&self) -> Option<&NamedSegment> {
        self.segments.iter().find(|s| s.id == self.current)
    }

    /// The scale of the channel read.
    pub fn scale(&self) -> Scale {
        self.scales.get(self.channel).cloned().unwrap_or_default()
    }
}
