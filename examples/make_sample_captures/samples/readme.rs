//! `sample-captures/README.md`: the truth as tables.

use std::fmt::{Error, Write};

use super::truth::{Content, Truth};

const HEAD: &str = "# Sample captures

Recordings from the Saltmarsh Drainage Board, an invented pumping station. The station, its machines and every sample
are made up: `cargo run --example make_sample_captures` rewrites this folder byte for byte, this page included.
`truth.json` holds the same for programs.

A tone is peak \u{b7} cos(2\u{3c0} \u{b7} frequency \u{b7} t + phase), t from the start of the steady stretch; levels are r.m.s. in the file's
unit. Noise is the one-sided density at the tone. \"1 FS\" is full scale, 1.0 of the samples as they are read.

";

pub(crate) fn text(truths: &[Truth]) -> Result<String, Error> {
    let mut page = HEAD.to_owned();
    writeln!(page, "| file | rate, Hz | channels | duration, s | quantity, unit | factor to type in |")?;
    writeln!(page, "|---|---|---|---|---|---|")?;
    for t in truths {
        let factor =
            t.units_per_full_scale.map_or("none: in the unit".to_owned(), |f| format!("{f} {} per FS", t.unit));
        writeln!(
            page,
            "| `{}` | {} | {} | {} | {}, {} | {factor} |",
            t.file,
            t.sample_rate_hz,
            t.channels,
            t.frames as f64 / t.sample_rate_hz,
            t.quantity,
            t.unit
        )?;
    }
    for t in truths {
        file(&mut page, t)?;
    }
    Ok(page)
}

fn file(page: &mut String, t: &Truth) -> Result<(), Error> {
    writeln!(page, "\n## {}\n\n{}.\n\n- Format: {}.\n- Scale: {}.", t.file, t.what, t.format, t.scale_note)?;
    for s in &t.steady {
        let end = s.start_sample + s.samples;
        writeln!(page, "- Steady: {} s to {} s (samples {} to {end}).", s.start_s, s.end_s, s.start_sample)?;
    }
    for (i, content) in t.content.iter().enumerate() {
        channel(page, i + 1, content, t.unit)?;
    }
    Ok(())
}

fn channel(page: &mut String, number: usize, content: &Content, unit: &str) -> Result<(), Error> {
    writeln!(page, "\nChannel {number}, {}. Noise: {}.", content.channel, content.noise)?;
    if content.offset != 0.0 {
        writeln!(page, "Line: {} {unit} at the start, {} {unit} a second.", content.offset, content.slope_per_s)?;
    }
    if !content.tones.is_empty() {
        writeln!(page, "\n| frequency, Hz | level, {unit} r.m.s. | phase, rad | noise, ({unit})\u{b2}/Hz | what |")?;
        writeln!(page, "|---|---|---|---|---|")?;
    }
    for t in &content.tones {
        let (f, rms, phase, what) = (t.frequency_hz, t.rms, t.phase_rad, t.what);
        writeln!(page, "| {f} | {rms:.7} | {phase} | {:.3e} | {what} |", t.noise_density)?;
    }
    if !content.decaying.is_empty() {
        writeln!(
            page,
            "\n| from, s | frequency, Hz | peak, {unit} | decay, 1/s | phase, rad |\n|---|---|---|---|---|"
        )?;
    }
    for d in &content.decaying {
        let phase = d.phase_rad;
        writeln!(page, "| {} | {} | {} | {} | {phase:.4} |", d.onset_s, d.frequency_hz, d.peak, d.decay_per_s)?;
    }
    Ok(())
}
