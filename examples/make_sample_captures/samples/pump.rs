//! Pump 2, bearing housing: run-up, steady stretch, run-down.

use super::noise::{self, Colour, Part};
use super::synth::{self, Tone};
use super::truth::{Steady, Truth};
use super::{Made, Outcome};

pub(crate) const RATE_HZ: u32 = 8192;
pub(crate) const FULL_SCALE: f64 = 98.1;
pub(crate) const SCALE_NOTE: &str = "98.1 m/s\u{b2} at full scale: 10.0 mV/(m/s\u{b2}) into 0.981 V at full scale";
const FRAMES: u64 = 40 * RATE_HZ as u64;
/// Switched on: a soft starter ramps the speed in a straight line.
const ON_S: f64 = 0.5;
const STEADY_FROM_S: f64 = 8.75;
/// Switched off: the speed falls in a straight line that would reach standstill 8 s later.
const OFF_S: f64 = 33.25;
const COAST_S: f64 = 8.0;
/// The magnetic tones come and go with the current.
const CURRENT_RAMP_S: f64 = 0.25;

/// Tones that follow the speed, and those of the mains, which do not.
struct Machine {
    turning: Vec<Tone>,
    mains: Vec<Tone>,
    noise: Vec<Part>,
}

fn drive_end() -> Machine {
    Machine {
        turning: vec![
            Tone::new(24.96, 0.2970, 0.40, "1 x shaft"),
            Tone::new(49.92, 0.0640, -1.10, "2 x shaft"),
            Tone::new(74.88, 0.0312, 2.20, "3 x shaft"),
            Tone::new(99.84, 0.0778, -0.70, "4 x shaft, lower sideband of vane pass, 0.16 Hz from twice mains"),
            Tone::new(124.47, 0.000_346, 1.30, "bearing, 0.33 Hz and 61.9 dB under vane pass"),
            Tone::new(124.80, 0.4313, -2.00, "vane pass, 5 x shaft"),
            Tone::new(149.76, 0.0581, 0.95, "6 x shaft, upper sideband of vane pass"),
            Tone::new(174.72, 0.0147, -2.80, "7 x shaft, second upper sideband of vane pass"),
            Tone::new(224.64, 0.0102, 1.75, "9 x shaft, lower sideband of twice vane pass"),
            Tone::new(249.60, 0.0893, 0.15, "twice vane pass, 10 x shaft"),
            Tone::new(274.56, 0.0118, -1.45, "11 x shaft, upper sideband of twice vane pass"),
            Tone::new(374.40, 0.0347, 2.65, "three times vane pass, 15 x shaft"),
            Tone::new(1198.08, 0.0074, -0.25, "rotor bars, 48 x shaft"),
        ],
        mains: vec![
            Tone::new(100.00, 0.1626, 1.00, "twice mains, does not follow the speed"),
            Tone::new(200.00, 0.0210, -2.30, "four times mains, does not follow the speed"),
        ],
        noise: vec![
            Part { density: 1.5e-9, colour: Colour::White },
            Part { density: 5.0e-9, colour: Colour::Below { corner_hz: 250.0 } },
            Part { density: 6.0e-8, colour: Colour::Around { centre_hz: 1850.0, quality: 6.0 } },
        ],
    }
}

fn non_drive_end() -> Machine {
    Machine {
        turning: vec![
            Tone::new(24.96, 0.2210, -1.30, "1 x shaft"),
            Tone::new(49.92, 0.0880, 0.60, "2 x shaft"),
            Tone::new(74.88, 0.0195, -2.90, "3 x shaft"),
            Tone::new(99.84, 0.0493, 1.90, "4 x shaft, lower sideband of vane pass, 0.16 Hz from twice mains"),
            Tone::new(124.47, 0.000_122, -0.85, "bearing, 0.33 Hz and 66.2 dB under vane pass"),
            Tone::new(124.80, 0.2480, 2.45, "vane pass, 5 x shaft"),
            Tone::new(149.76, 0.0336, -1.75, "6 x shaft, upper sideband of vane pass"),
            Tone::new(249.60, 0.0462, -0.40, "twice vane pass, 10 x shaft"),
            Tone::new(374.40, 0.0209, 1.10, "three times vane pass, 15 x shaft"),
        ],
        mains: vec![
            Tone::new(100.00, 0.2240, -2.15, "twice mains, does not follow the speed"),
            Tone::new(200.00, 0.0305, 0.70, "four times mains, does not follow the speed"),
        ],
        noise: vec![
            Part { density: 1.2e-9, colour: Colour::White },
            Part { density: 3.5e-9, colour: Colour::Below { corner_hz: 300.0 } },
            Part { density: 3.0e-8, colour: Colour::Around { centre_hz: 2240.0, quality: 5.0 } },
        ],
    }
}

/// The speed over the steady speed at `t`, and the seconds at steady speed that turn the shaft as far as it has
/// turned since the steady stretch began.
fn speed_and_turned(t: f64) -> (f64, f64) {
    let ramp = STEADY_FROM_S - ON_S;
    if t < STEADY_FROM_S {
        let speed = ((t - ON_S) / ramp).max(0.0);
        (speed, -ramp / 2.0 * (1.0 - speed * speed))
    } else if t < OFF_S {
        (1.0, t - STEADY_FROM_S)
    } else {
        let coasting = t - OFF_S;
        (1.0 - coasting / COAST_S, OFF_S - STEADY_FROM_S + coasting - coasting * coasting / (2.0 * COAST_S))
    }
}

fn current(t: f64) -> f64 {
    ((t - ON_S) / CURRENT_RAMP_S).clamp(0.0, 1.0) * (1.0 - (t - OFF_S) / CURRENT_RAMP_S).clamp(0.0, 1.0)
}

impl Machine {
    fn samples(&self, seed: u64) -> Vec<f64> {
        let rate_hz = f64::from(RATE_HZ);
        let mut samples = noise::coloured(&self.noise, rate_hz, seed, FRAMES as usize);
        for (i, x) in samples.iter_mut().enumerate() {
            let t = i as f64 / rate_hz;
            let (speed, turned) = speed_and_turned(t);
            // Forces of a rotor, and the flow's noise, go with the square of its speed.
            let force = speed * speed;
            let turning: f64 = self.turning.iter().map(|tone| tone.at(turned)).sum();
            let mains: f64 = self.mains.iter().map(|tone| tone.at(t - STEADY_FROM_S)).sum();
            *x = *x * (0.1 + 0.9 * force) + force * turning + current(t) * mains;
        }
        samples
    }

    fn tones(&self) -> Vec<Tone> {
        let mut tones: Vec<Tone> = self.turning.iter().chain(&self.mains).copied().collect();
        tones.sort_by(|a, b| a.frequency_hz.total_cmp(&b.frequency_hz));
        tones
    }
}

pub(crate) fn make() -> Outcome<Made> {
    let (rate_hz, unit) = (f64::from(RATE_HZ), "m/s\u{b2}");
    let (drive, far) = (drive_end(), non_drive_end());
    let bytes = synth::wav(&[drive.samples(2100), far.samples(2200)], RATE_HZ, FULL_SCALE)?;
    let sample = |seconds: f64| (seconds * rate_hz) as u64;
    let truth = Truth {
        file: "saltmarsh-pump2-bearing.wav",
        what: "Pump 2, bearing housing: run-up from 0.5 s, steady from 8.75 s to 33.25 s, run-down",
        format: "WAV, 24-bit integer",
        sample_rate_hz: rate_hz,
        channels: 2,
        frames: FRAMES,
        quantity: "acceleration",
        unit,
        units_per_full_scale: Some(FULL_SCALE),
        scale_note: SCALE_NOTE,
        steady: vec![Steady::new(sample(STEADY_FROM_S), sample(OFF_S), rate_hz)],
        content: vec![
            synth::content("drive end", &drive.tones(), &drive.noise, rate_hz, unit),
            synth::content("non-drive end", &far.tones(), &far.noise, rate_hz, unit),
        ],
    };
    Ok(Made { bytes, truth })
}
