//! The handheld exciter and the sound calibrator, to read factors off.

use super::noise::{Colour, Part};
use super::synth::{self, Tone};
use super::truth::{Steady, Truth};
use super::{Made, Outcome, fan, pump};

const DURATION_S: u32 = 10;

pub(crate) fn exciter() -> Outcome<Made> {
    let tones = [
        Tone::new(159.155, 10.0, 0.80, "exciter, 10 m/s\u{b2} r.m.s. at 1000 rad/s"),
        Tone::new(318.31, 0.012, -1.20, "its second harmonic"),
        Tone::new(477.465, 0.004, 2.10, "its third harmonic"),
    ];
    let noise = [Part { density: 2.0e-8, colour: Colour::White }];
    calibrator(
        "saltmarsh-exciter.wav",
        "Handheld exciter on the drive-end sensor, steady throughout",
        ("acceleration", "m/s\u{b2}", pump::FULL_SCALE, pump::SCALE_NOTE),
        pump::RATE_HZ,
        (&tones, &noise, "drive end"),
    )
}

pub(crate) fn sound_calibrator() -> Outcome<Made> {
    // 94 dB re 20 uPa.
    let rms = 20e-6 * libm::pow(10.0, 94.0 / 20.0);
    let tones = [
        Tone::new(1000.0, rms, -0.35, "calibrator, 94.0 dB re 20 \u{b5}Pa"),
        Tone::new(2000.0, 0.003, 1.65, "its second harmonic"),
    ];
    let noise = [Part { density: 1.0e-9, colour: Colour::White }];
    calibrator(
        "saltmarsh-sound-calibrator.wav",
        "Sound calibrator on the duct microphone, steady throughout",
        ("sound pressure", "Pa", fan::FULL_SCALE, fan::SCALE_NOTE),
        fan::RATE_HZ,
        (&tones, &noise, "duct"),
    )
}

fn calibrator(
    file: &'static str,
    what: &'static str,
    (quantity, unit, full_scale, scale_note): (&'static str, &'static str, f64, &'static str),
    rate: u32,
    (tones, noise, channel): (&[Tone], &[Part], &'static str),
) -> Outcome<Made> {
    let (rate_hz, frames) = (f64::from(rate), u64::from(DURATION_S * rate));
    let samples = synth::steady(tones, noise, rate_hz, 3100 + u64::from(rate), frames as usize);
    let truth = Truth {
        file,
        what,
        format: "WAV, 24-bit integer",
        sample_rate_hz: rate_hz,
        channels: 1,
        frames,
        quantity,
        unit,
        units_per_full_scale: Some(full_scale),
        scale_note,
        steady: vec![Steady::new(0, frames, rate_hz)],
        content: vec![synth::content(channel, tones, noise, rate_hz, unit)],
    };
    Ok(Made { bytes: synth::wav(&[samples], rate, full_scale)?, truth })
}
