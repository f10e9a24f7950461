//! A hammer tap on the bearing housing: modes that die inside the file.

use std::f64::consts::{FRAC_PI_2, TAU};

use super::noise::{self, Colour, Part};
use super::truth::{Content, DecayTruth, Truth};
use super::{Made, Outcome, pump, synth};

const FRAMES: u64 = 4 * pump::RATE_HZ as u64;
const ONSET_S: f64 = 0.5;
/// Frequency in hertz, peak in m/s², decay a second.
const MODES: [(f64, f64, f64); 4] = [(312.4, 9.0, 6.5), (587.9, 14.0, 9.0), (1243.6, 6.0, 18.0), (2104.0, 4.5, 30.0)];

pub(crate) fn make() -> Outcome<Made> {
    let rate_hz = f64::from(pump::RATE_HZ);
    let parts = [Part { density: 1.0e-8, colour: Colour::White }];
    let mut samples = noise::coloured(&parts, rate_hz, 5100, FRAMES as usize);
    for (i, x) in samples.iter_mut().enumerate() {
        let t = i as f64 / rate_hz - ONSET_S;
        if t >= 0.0 {
            *x += MODES
                .iter()
                .map(|&(f, peak, decay)| peak * libm::exp(-decay * t) * libm::sin(TAU * f * t))
                .sum::<f64>();
        }
    }
    let mode = |&(frequency_hz, peak, decay_per_s)| DecayTruth {
        onset_s: ONSET_S,
        frequency_hz,
        peak,
        decay_per_s,
        phase_rad: -FRAC_PI_2,
    };
    let truth = Truth {
        file: "saltmarsh-hammer-tap.wav",
        what: "Hammer tap on the bearing housing at 0.5 s, machine at rest; dies inside the file",
        format: "WAV, 24-bit integer",
        sample_rate_hz: rate_hz,
        channels: 1,
        frames: FRAMES,
        quantity: "acceleration",
        unit: "m/s\u{b2}",
        units_per_full_scale: Some(pump::FULL_SCALE),
        scale_note: pump::SCALE_NOTE,
        steady: Vec::new(),
        content: vec![Content {
            channel: "drive end",
            tones: Vec::new(),
            decaying: MODES.iter().map(mode).collect(),
            offset: 0.0,
            slope_per_s: 0.0,
            noise: noise::describe(&parts, "m/s\u{b2}"),
        }],
    };
    Ok(Made { bytes: synth::wav(&[samples], pump::RATE_HZ, pump::FULL_SCALE)?, truth })
}
