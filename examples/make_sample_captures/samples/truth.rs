//! What truly is in a made capture, as `truth.json` states it.

use serde::Serialize;

/// One file.
#[derive(Debug, Clone, Serialize)]
pub(crate) struct Truth {
    pub(crate) file: &'static str,
    pub(crate) what: &'static str,
    pub(crate) format: &'static str,
    pub(crate) sample_rate_hz: f64,
    pub(crate) channels: usize,
    pub(crate) frames: u64,
    pub(crate) quantity: &'static str,
    pub(crate) unit: &'static str,
    /// None where the file's numbers are in the unit.
    pub(crate) units_per_full_scale: Option<f64>,
    pub(crate) scale_note: &'static str,
    /// Stretches in which every tone is exactly constant.
    pub(crate) steady: Vec<Steady>,
    /// One a channel.
    pub(crate) content: Vec<Content>,
}

/// A steady stretch.
#[derive(Debug, Clone, Copy, Serialize)]
pub(crate) struct Steady {
    pub(crate) start_sample: u64,
    pub(crate) samples: u64,
    pub(crate) start_s: f64,
    pub(crate) end_s: f64,
}

impl Steady {
    pub(crate) fn new(start_sample: u64, end_sample: u64, rate_hz: f64) -> Self {
        let seconds = |sample: u64| sample as f64 / rate_hz;
        let samples = end_sample - start_sample;
        Self { start_sample, samples, start_s: seconds(start_sample), end_s: seconds(end_sample) }
    }
}

/// What one channel holds.
#[derive(Debug, Clone, Serialize)]
pub(crate) struct Content {
    pub(crate) channel: &'static str,
    pub(crate) tones: Vec<ToneTruth>,
    pub(crate) decaying: Vec<DecayTruth>,
    /// Constant part, and slope, unit a second.
    pub(crate) offset: f64,
    pub(crate) slope_per_s: f64,
    pub(crate) noise: String,
}

/// A tone: x(t) = peak cos(2 pi frequency t + phase), t from the start of the steady stretch.
#[derive(Debug, Clone, Serialize)]
pub(crate) struct ToneTruth {
    pub(crate) frequency_hz: f64,
    pub(crate) rms: f64,
    pub(crate) peak: f64,
    pub(crate) phase_rad: f64,
    /// One-sided, unit squared a hertz, at the tone.
    pub(crate) noise_density: f64,
    pub(crate) what: &'static str,
}

/// A mode that dies away: x(t) = peak exp(-decay t) cos(2 pi frequency t + phase), t from its onset.
#[derive(Debug, Clone, Serialize)]
pub(crate) struct DecayTruth {
    pub(crate) onset_s: f64,
    pub(crate) frequency_hz: f64,
    pub(crate) peak: f64,
    pub(crate) decay_per_s: f64,
    pub(crate) phase_rad: f64,
}
