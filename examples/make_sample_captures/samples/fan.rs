//! The duct fan: noise with one tone, sound pressure.

use super::noise::{Colour, Part};
use super::synth::{self, Tone};
use super::truth::{Steady, Truth};
use super::{Made, Outcome};

pub(crate) const RATE_HZ: u32 = 16_384;
pub(crate) const FULL_SCALE: f64 = 20.0;
pub(crate) const SCALE_NOTE: &str = "20 Pa at full scale: 50 mV/Pa into 1.0 V at full scale";
const FRAMES: u64 = 20 * RATE_HZ as u64;

pub(crate) fn make() -> Outcome<Made> {
    let rate_hz = f64::from(RATE_HZ);
    let tones = [Tone::new(236.5, 0.0356, 1.15, "blade pass, 11 blades at 21.5 Hz")];
    let noise = [
        Part { density: 6.0e-6, colour: Colour::Below { corner_hz: 400.0 } },
        Part { density: 4.0e-8, colour: Colour::Around { centre_hz: 2900.0, quality: 3.0 } },
        Part { density: 1.0e-9, colour: Colour::White },
    ];
    let samples = synth::steady(&tones, &noise, rate_hz, 4100, FRAMES as usize);
    let truth = Truth {
        file: "saltmarsh-fan-duct.wav",
        what: "Duct of the cooling fan: broadband noise with one tone, steady throughout",
        format: "WAV, 24-bit integer",
        sample_rate_hz: rate_hz,
        channels: 1,
        frames: FRAMES,
        quantity: "sound pressure",
        unit: "Pa",
        units_per_full_scale: Some(FULL_SCALE),
        scale_note: SCALE_NOTE,
        steady: vec![Steady::new(0, FRAMES, rate_hz)],
        content: vec![synth::content("duct", &tones, &noise, rate_hz, "Pa")],
    };
    Ok(Made { bytes: synth::wav(&[samples], RATE_HZ, FULL_SCALE)?, truth })
}
