//! Steady tones, and writing samples as WAV.

use std::f64::consts::{SQRT_2, TAU};
use std::io::Cursor;

use super::Outcome;
use super::noise::{self, Part};
use super::truth::{Content, ToneTruth};

/// A tone as it is put in: r.m.s. level in the unit, cosine phase at the start of the steady stretch.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Tone {
    pub(crate) frequency_hz: f64,
    pub(crate) rms: f64,
    pub(crate) phase_rad: f64,
    pub(crate) what: &'static str,
}

impl Tone {
    pub(crate) const fn new(frequency_hz: f64, rms: f64, phase_rad: f64, what: &'static str) -> Self {
        Self { frequency_hz, rms, phase_rad, what }
    }

    /// The tone's value `seconds` after the start of the steady stretch.
    pub(crate) fn at(&self, seconds: f64) -> f64 {
        let cycles = self.frequency_hz * seconds;
        self.rms * SQRT_2 * libm::cos(TAU * (cycles - libm::floor(cycles)) + self.phase_rad)
    }
}

/// What a channel of steady tones in noise truly holds.
pub(crate) fn content(channel: &'static str, tones: &[Tone], parts: &[Part], rate_hz: f64, unit: &str) -> Content {
    let truth = |tone: &Tone| ToneTruth {
        frequency_hz: tone.frequency_hz,
        rms: tone.rms,
        peak: tone.rms * SQRT_2,
        phase_rad: tone.phase_rad,
        noise_density: noise::density(parts, rate_hz, tone.frequency_hz),
        what: tone.what,
    };
    Content {
        channel,
        tones: tones.iter().map(truth).collect(),
        decaying: Vec::new(),
        offset: 0.0,
        slope_per_s: 0.0,
        noise: noise::describe(parts, unit),
    }
}

/// Steady tones in noise, `n` samples.
pub(crate) fn steady(tones: &[Tone], parts: &[Part], rate_hz: f64, seed: u64, n: usize) -> Vec<f64> {
    let mut samples = noise::coloured(parts, rate_hz, seed, n);
    for (i, x) in samples.iter_mut().enumerate() {
        *x += tones.iter().map(|tone| tone.at(i as f64 / rate_hz)).sum::<f64>();
    }
    samples
}

const BITS: u16 = 24;

/// A 24-bit WAV file of channels whose samples are in a unit of which `full_scale` is 1.0.
pub(crate) fn wav(channels: &[Vec<f64>], rate_hz: u32, full_scale: f64) -> Outcome<Vec<u8>> {
    let spec = hound::WavSpec {
        channels: u16::try_from(channels.len())?,
        sample_rate: rate_hz,
        bits_per_sample: BITS,
        sample_format: hound::SampleFormat::Int,
    };
    let mut file = Cursor::new(Vec::new());
    let mut writer = hound::WavWriter::new(&mut file, spec)?;
    let steps = f64::from(1_u32 << (BITS - 1));
    let n = channels.iter().map(Vec::len).min().unwrap_or(0);
    for i in 0..n {
        for channel in channels {
            let value = (channel[i] / full_scale * steps).round();
            if value.abs() >= steps {
                return Err(format!("sample {i} is {} and would clip at {full_scale}", channel[i]).into());
            }
            writer.write_sample(value as i32)?;
        }
    }
    writer.finalize()?;
    Ok(file.into_inner())
}
