//! The Reading: every figure, in the fields the machine-readable output has.
//!
//! A figure that cannot be given is `None` (`null`), never left out and never made up. Fields may be added, never
//! renamed or removed without a new [`Reading::SCHEMA`].

use serde::{Serialize, Serializer};

pub use crate::session::Verdict;
use crate::signal::Removed;
use crate::tone::Kind;
use crate::units::Detector;

/// One segment, read.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Reading {
    /// [`Reading::SCHEMA`].
    pub schema: u32,
    /// The program's version.
    pub version: String,
    /// The capture.
    pub capture: CaptureFacts,
    /// The segment.
    pub segment: SegmentFacts,
    /// What levels mean.
    pub scale: ScaleFacts,
    /// One for each pane, in order.
    pub panes: Vec<PaneFacts>,
    /// Windows ranked for this segment, best first.
    pub advice: Vec<AdviceLine>,
    /// Tones, by frequency.
    pub tones: Vec<Tone>,
    /// The frequency that orders are counted by, where one is pinned.
    pub fundamental: Option<FundamentalFact>,
    /// What the user has decided, by frequency.
    pub decisions: Vec<Decision>,
    /// Peaks that are leakage: at most the strongest 50 a pane, by pane, strongest first.
    pub skirts: Vec<SkirtPeak>,
    /// What a reader of these figures should know.
    pub warnings: Vec<Warning>,
}

impl Reading {
    /// The version of the machine-readable form.
    pub const SCHEMA: u32 = 1;
}

/// The capture read.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct CaptureFacts {
    /// Path as given.
    pub path: String,
    /// BLAKE3 of its bytes, hex; `None` where it was not computed.
    pub blake3: Option<String>,
    /// Samples a second used.
    pub sample_rate_hz: f64,
    /// Channels.
    pub channels: usize,
    /// Frames.
    pub frames: u64,
    /// Format in words.
    pub format: String,
}

/// The segment read.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SegmentFacts {
    /// Channel, counted from 1.
    pub channel: usize,
    /// First sample.
    pub start_sample: u64,
    /// Samples.
    pub samples: u64,
    /// Start in seconds from the start of the capture.
    pub start_s: f64,
    /// Duration in seconds.
    pub duration_s: f64,
    /// `tones`, `random` or `transient`, found or set by hand; `None` where the segment is too short or silent.
    pub kind: Option<Kind>,
    /// What decides that, in a sentence.
    pub kind_why: Option<String>,
    /// The level of the smallest tone that the search would see, by the median of the floor over the band, over the
    /// reference; `None` for too short a segment.
    pub smallest_tone_db: Option<f64>,
    /// What was taken out, in the scale's unit.
    pub removed: Removed,
}

/// What levels mean.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct ScaleFacts {
    /// The quantity's name.
    pub quantity: &'static str,
    /// The unit.
    pub unit: String,
    /// The detector.
    pub detector: Detector,
    /// What a detected level is divided by, in the unit.
    pub reference: f64,
    /// How the reference is printed.
    pub reference_label: String,
    /// Units in one full scale.
    pub factor: f64,
}

/// One pane.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct PaneFacts {
    /// The window's catalogue name.
    pub window: String,
    /// Its parameter: none, a number, or a list.
    #[serde(serialize_with = "parameter")]
    pub parameter: Vec<f64>,
    /// S1/N.
    pub coherent_gain: f64,
    /// Equivalent noise bandwidth in bins.
    pub enbw_bins: f64,
    /// Equivalent noise bandwidth in hertz.
    pub enbw_hz: f64,
    /// 1/T.
    pub line_spacing_hz: f64,
    /// Median over the band of the mean noise a line, detector and reference applied; `None` for too short a segment.
    pub floor_db: Option<f64>,
    /// The largest error to expect of a tone's level in this pane, leak and noise together; `None` where some tone
    /// cannot be read in it or the tones were not fitted jointly.
    pub expected_worst_error_db: Option<f64>,
    /// How many of the pane's strongest peaks outside main lobes are leakage of the tones: [`Reading::skirts`] lists at
    /// most 50 of them, and some hundred lines are looked at. `None` where the tones were not fitted jointly or there is
    /// no floor.
    pub n_skirts: Option<usize>,
}

impl PaneFacts {
    /// The pane's window as it is written: `kaiser=8.6`.
    pub fn written(&self) -> String {
        written(&self.window, &self.parameter)
    }
}

fn written(window: &str, parameters: &[f64]) -> String {
    let parameters: Vec<_> = parameters.iter().map(f64::to_string).collect();
    if parameters.is_empty() { window.to_owned() } else { format!("{window}={}", parameters.join(",")) }
}

/// No parameter is `null`, one is a number, more are a list.
fn parameter<S: Serializer>(parameters: &[f64], serializer: S) -> Result<S::Ok, S::Error> {
    match parameters {
        [] => serializer.serialize_none(),
        [one] => serializer.serialize_f64(*one),
        more => more.serialize(serializer),
    }
}

/// A window ranked for this segment.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct AdviceLine {
    /// The window's catalogue name.
    pub window: String,
    /// Its parameter.
    #[serde(serialize_with = "parameter")]
    pub parameter: Vec<f64>,
    /// `None`: some tone is unreadable.
    pub expected_worst_error_db: Option<f64>,
    /// What decides.
    pub why: String,
}

impl AdviceLine {
    /// The window as it is written: `kaiser=8.6`.
    pub fn written(&self) -> String {
        written(&self.window, &self.parameter)
    }
}

/// The pinned fundamental.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct FundamentalFact {
    /// As it was pinned.
    pub pinned_hz: f64,
    /// As orders are counted by it: the best estimate of the tone within half a line of it, else as it was pinned.
    pub used_hz: f64,
}

/// What a user can decide.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "lowercase")]
pub enum DecisionKind {
    /// A tone was named.
    Named,
    /// A tone was named, and its frequency is held.
    Held,
    /// No tone is listed there.
    Refused,
    /// A verdict was put in the place of the program's.
    Overruled,
}

impl DecisionKind {
    /// The word for it.
    pub fn word(self) -> &'static str {
        match self {
            Self::Named => "named",
            Self::Held => "held",
            Self::Refused => "refused",
            Self::Overruled => "overruled",
        }
    }
}

/// Something the user has decided.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Decision {
    /// What.
    pub kind: DecisionKind,
    /// Where.
    pub frequency_hz: f64,
    /// The verdict put in place.
    pub verdict: Option<Verdict>,
    /// Who; empty where that was not said.
    pub by: String,
    /// Why; empty where that was not said.
    pub reason: String,
    /// The tone it belongs to; `None` where none is listed there, as at a place refused.
    pub tone_hz: Option<f64>,
}

/// An overruled verdict.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Overruled {
    /// Who.
    pub by: String,
    /// Why.
    pub reason: String,
    /// What it was set to.
    pub verdict: Verdict,
}

/// One contribution to a tone's uncertainty.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct BudgetItem {
    /// What contributes.
    pub item: String,
    /// Standard uncertainty of the amplitude.
    pub u_amplitude: Option<f64>,
    /// Standard uncertainty of the frequency, Hz.
    pub u_frequency_hz: Option<f64>,
    /// Whether the user has stated it.
    pub stated: bool,
}

/// One tone.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Tone {
    /// Frequency by the joint fit; of a tone that moves the mean over the segment.
    pub frequency_hz: f64,
    /// Its expanded uncertainty, k = 2; `None` where the joint fit did not settle or no floor can be told.
    pub frequency_u95_hz: Option<f64>,
    /// Peak amplitude in the scale's unit.
    pub amplitude: f64,
    /// Its expanded uncertainty, k = 2; `None` likewise.
    pub amplitude_u95: Option<f64>,
    /// Through the detector, in the unit.
    pub level: f64,
    /// Over the reference.
    pub level_db: f64,
    /// 20 lg(1 + U/A); `None` likewise.
    pub level_u95_db: Option<f64>,
    /// Cosine phase at the segment's first sample, -π to π; `None` where the joint fit did not settle.
    pub phase_rad: Option<f64>,
    /// What it is, by the fit and the standing set of windows.
    pub verdict: Option<Verdict>,
    /// The sentence that goes with the verdict.
    pub why: Option<String>,
    /// An overruled verdict.
    pub overruled: Option<Overruled>,
    /// What the uncertainty is made of; `None` likewise. `noise` is the lone-tone bound, `neighbours` what the joint
    /// covariance adds; what only the user can state is listed as not stated.
    pub budget: Option<Vec<BudgetItem>>,
    /// One-sided noise density at the tone, unit²/Hz, of what the fit leaves; `None` without a floor.
    pub noise_density: Option<f64>,
    /// Power over one rectangular line's mean noise, dB; `None` without a floor.
    pub snr_db: Option<f64>,
    /// Frequency at the segment's end less that at its start; `None` where the tone was not seen to move.
    pub drift_hz: Option<f64>,
    /// Level at the segment's end less that at its start; `None` likewise.
    pub drift_db: Option<f64>,
    /// Frequency and level over the segment, where the tone was seen to move.
    pub course: Option<Vec<CourseFact>>,
    /// `by-hand`, `held`; more with the joint fit.
    pub tags: Vec<String>,
    /// Against the pinned fundamental.
    pub order: Option<f64>,
    /// Largest less smallest level of the readings that are clear, dB; `None` with fewer than two.
    pub agreement_db: Option<f64>,
    /// One for each pane, in order.
    pub readings: Vec<PaneReading>,
}

/// A tone at one moment.
#[derive(Debug, Clone, Copy, PartialEq, Serialize)]
pub struct CourseFact {
    /// Seconds from the segment's start.
    pub time_s: f64,
    /// Frequency.
    pub frequency_hz: f64,
    /// Over the reference.
    pub level_db: f64,
}

/// How far one pane's reading of a tone can be trusted.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize)]
#[serde(rename_all = "kebab-case")]
pub enum ReadingState {
    /// Nothing stands in the way.
    Clear,
    /// Another tone stands inside the pane's main lobe.
    Crowded,
    /// Leakage of other tones moves the level by more than 0.1 dB and more than the pane's noise does.
    UnderSkirt,
    /// The pane's floor covers it.
    BelowFloor,
}

impl ReadingState {
    /// The word for it.
    pub fn word(self) -> &'static str {
        match self {
            Self::Clear => "clear",
            Self::Crowded => "crowded",
            Self::UnderSkirt => "under-skirt",
            Self::BelowFloor => "below-floor",
        }
    }
}

/// What one pane says of one tone.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct PaneReading {
    /// The pane's window, as written: `kaiser=8.6`.
    pub window: String,
    /// How far it can be trusted.
    pub state: ReadingState,
    /// Where the pane's maximum is, Hz (or the borrowed frequency).
    pub peak_hz: f64,
    /// Whether the frequency is borrowed from a sharper pane.
    pub borrowed: bool,
    /// Peak amplitude in the unit.
    pub amplitude: f64,
    /// Over the reference.
    pub level_db: f64,
    /// What noise alone does to the level in this pane, dB (one standard uncertainty); `None` without a floor.
    pub u_db: Option<f64>,
    /// What the other tones do to the level here, signed, by the joint fit; `None` where that did not settle.
    pub predicted_leak_db: Option<f64>,
    /// Corrections from the raw line to the level; they sum to [`PaneReading::level_db`].
    pub ledger: Vec<LedgerStep>,
}

/// One correction.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct LedgerStep {
    /// Its name.
    pub step: &'static str,
    /// Its size, dB.
    pub db: f64,
}

/// A peak that is leakage.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct SkirtPeak {
    /// The pane's index.
    pub pane: usize,
    /// Where it is.
    pub frequency_hz: f64,
    /// Its level.
    pub level_db: f64,
    /// The tones that make most of it, the greatest part first; at most four.
    pub from_hz: Vec<f64>,
}

/// Something a reader of the figures should know.
#[derive(Debug, Clone, PartialEq, Eq, Serialize)]
pub struct Warning {
    /// A word for machines: `clipping`, `assumed-segment`.
    pub code: &'static str,
    /// A sentence.
    pub text: String,
}
