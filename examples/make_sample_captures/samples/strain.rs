//! Strain of the sluice gate from a slow logger, as text with decimal commas.

use super::Made;
use super::noise::{Colour, Part};
use super::synth::{self, Tone};
use super::truth::{Content, Steady, Truth};

const RATE_HZ: f64 = 10.0;
const FRAMES: u64 = 3000;
const UNIT: &str = "\u{b5}m/m";
const OFFSET: f64 = 143.0;
const SLOPE_PER_S: f64 = 0.021;

pub(crate) fn make() -> Made {
    let tones = [
        Tone::new(0.0117, 8.8, 0.65, "sway of the gate, 3.5 cycles in the file"),
        Tone::new(0.31, 1.5, -2.05, "waves on the channel"),
    ];
    let parts = [Part { density: 0.03, colour: Colour::White }];
    let samples = synth::steady(&tones, &parts, RATE_HZ, 6100, FRAMES as usize);
    let mut text = format!("Saltmarsh Drainage Board;sluice gate 3, logger 7\r\ntime s;gate strain {UNIT}\r\n");
    for (i, x) in samples.iter().enumerate() {
        let t = i as f64 / RATE_HZ;
        let row = format!("{t:.1};{:.3}\r\n", x + OFFSET + SLOPE_PER_S * t);
        text.push_str(&row.replace('.', ","));
    }
    let truth = Truth {
        file: "saltmarsh-sluice-strain.csv",
        what: "Strain of sluice gate 3: a slow sway on a drifting line",
        format: "text, UTF-8: semicolons, decimal commas, a title row, a row of names with units, a time column",
        sample_rate_hz: RATE_HZ,
        channels: 1,
        frames: FRAMES,
        quantity: "strain",
        unit: UNIT,
        units_per_full_scale: None,
        scale_note: "numbers are in \u{b5}m/m",
        steady: vec![Steady::new(0, FRAMES, RATE_HZ)],
        content: vec![Content {
            offset: OFFSET,
            slope_per_s: SLOPE_PER_S,
            ..synth::content("gate strain", &tones, &parts, RATE_HZ, UNIT)
        }],
    };
    Made { bytes: text.into_bytes(), truth }
}
