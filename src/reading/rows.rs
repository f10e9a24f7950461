//! The rows of the tone table: one tone, read in every pane.

use super::Request;
use super::budget::Budget;
use super::output::{LedgerStep, PaneReading, ReadingState, Tone};
use crate::signal::{Cancelled, Watch};
use crate::spectrum::Spectra;
use crate::tone::{Disturbance, LoneReading, PaneView, Search, State};
use crate::units::{Scale, db};

/// Amplitudes below this, in the unit, are stated as if they were this large: levels in decibels stay finite.
pub(super) const LEAST_AMPLITUDE: f64 = 1e-30;

/// Over the reference, through the detector; finite for any amplitude.
pub(super) fn level_db(scale: &Scale, peak: f64) -> f64 {
    scale.level_db(peak.max(LEAST_AMPLITUDE))
}

/// The rows, by frequency.
pub(super) fn tones(
    spectra: &Spectra,
    request: &Request,
    found: &Search,
    watch: &Watch,
) -> Result<Vec<Tone>, Cancelled> {
    let mut rows = Vec::with_capacity(found.tones.len());
    for i in 0..found.tones.len() {
        watch.check()?;
        watch.report(0.5 + 0.5 * i as f64 / found.tones.len() as f64);
        rows.push(row(spectra, request, found, i));
    }
    rows.sort_by(|a, b| a.frequency_hz.total_cmp(&b.frequency_hz));
    Ok(rows)
}

/// The panes, narrowest noise bandwidth first.
fn by_sharpness(spectra: &Spectra) -> Vec<usize> {
    let enbw = |pane: usize| {
        let sums = spectra.sums(pane);
        sums.s2 / (sums.s1 * sums.s1)
    };
    let mut panes: Vec<usize> = (0..spectra.windows().len()).collect();
    panes.sort_by(|&a, &b| enbw(a).total_cmp(&enbw(b)));
    panes
}

fn row(spectra: &Spectra, request: &Request, found: &Search, i: usize) -> Tone {
    let tone = found.tones[i];
    let order = by_sharpness(spectra);
    let mut frequency = tone.nu;
    let mut sharpest: Option<(f64, f64)> = None;
    let mut readings: Vec<Option<PaneReading>> = vec![None; order.len()];
    // Flat-tops last: they borrow the frequency of the joint fit, or of the sharpest pane that sees the tone clearly.
    let (tops, sharp): (Vec<usize>, Vec<usize>) = order.iter().partition(|&&p| spectra.windows()[p].is_flat_top());
    for pane in sharp.into_iter().chain(tops) {
        let noise = found.noise.as_ref().map_or(0.0, |n| n.line_power(tone.nu, spectra.sums(pane).s2));
        let disturbance = Disturbance::of(spectra, pane, &found.tones, i, noise);
        let (mut reading, lone) = pane_reading(spectra, request, pane, frequency, tone.held, &disturbance);
        reading.predicted_leak_db = found.settled.then_some(disturbance.leak_db);
        if reading.state == ReadingState::Clear && sharpest.is_none() {
            sharpest = Some((reading.peak_hz, reading.amplitude));
            if !found.settled {
                frequency = lone.nu;
            }
        }
        readings[pane] = Some(reading);
    }
    let readings: Vec<PaneReading> = readings.into_iter().flatten().collect();
    let seen = (tone.nu * spectra.line_spacing_hz(), tone.amplitude.norm() * request.scale.units_per_full_scale());
    let (frequency_hz, amplitude) = if found.settled { seen } else { sharpest.unwrap_or(seen) };
    let tags = [("by-hand", tone.by_hand), ("held", tone.held)];
    let tags = tags.into_iter().filter(|t| t.1).map(|t| t.0.to_owned()).collect();
    let budget = Budget::of(spectra, request, found, i);
    Tone {
        frequency_hz,
        frequency_u95_hz: budget.as_ref().map(|b| b.frequency_u95_hz),
        amplitude,
        amplitude_u95: budget.as_ref().map(|b| b.amplitude_u95),
        level: request.scale.level(amplitude),
        level_db: level_db(&request.scale, amplitude),
        level_u95_db: budget.as_ref().map(|b| b.level_u95_db(amplitude)),
        phase_rad: found.settled.then(|| tone.amplitude.arg()),
        verdict: None,
        why: None,
        overruled: None,
        budget: budget.map(|b| b.items),
        noise_density: None,
        snr_db: None,
        drift_hz: None,
        drift_db: None,
        course: None,
        tags,
        order: None,
        agreement_db: agreement(&readings),
        readings,
    }
}

fn agreement(readings: &[PaneReading]) -> Option<f64> {
    let clear = readings.iter().filter(|r| r.state == ReadingState::Clear);
    let levels: Vec<f64> = clear.map(|r| r.level_db).collect();
    let max = levels.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let min = levels.iter().copied().fold(f64::INFINITY, f64::min);
    (levels.len() > 1).then_some(max - min)
}

/// One cell of the table. `frequency` (bins) is where the tone is looked for, and what a flat-top borrows.
fn pane_reading(
    spectra: &Spectra,
    request: &Request,
    pane: usize,
    frequency: f64,
    held: bool,
    disturbance: &Disturbance,
) -> (PaneReading, LoneReading) {
    let view = PaneView { spectra, pane, removal: request.removal };
    let window = &spectra.windows()[pane];
    let mut state = match disturbance.state() {
        State::Clear => ReadingState::Clear,
        State::Crowded => ReadingState::Crowded,
        State::UnderSkirt => ReadingState::UnderSkirt,
        State::BelowFloor => ReadingState::BelowFloor,
    };
    let borrowed = held || window.is_flat_top();
    let maximum = if borrowed || state == ReadingState::BelowFloor { None } else { view.read_near(frequency) };
    if maximum.is_none() && !borrowed && state == ReadingState::Clear {
        // Nothing rises here: whatever the skirts predict, they cover the tone.
        state = ReadingState::UnderSkirt;
    }
    let lone = maximum.unwrap_or_else(|| view.read_at(frequency));
    let factor = request.scale.units_per_full_scale();
    let amplitude = lone.amplitude.norm() * factor;
    let ledger = ledger(&request.scale, &lone, spectra.sums(pane).s1);
    let reading = PaneReading {
        window: window.to_string(),
        state,
        peak_hz: lone.nu * spectra.line_spacing_hz(),
        borrowed,
        amplitude,
        level_db: level_db(&request.scale, amplitude),
        u_db: (disturbance.noise_db > 0.0).then_some(disturbance.noise_db),
        predicted_leak_db: None,
        ledger,
    };
    (reading, lone)
}

/// The corrections from the raw line to the level; they sum to it.
fn ledger(scale: &Scale, lone: &LoneReading, s1: f64) -> Vec<LedgerStep> {
    let amplitude = (lone.amplitude.norm() * scale.units_per_full_scale()).max(LEAST_AMPLITUDE);
    let factor = scale.units_per_full_scale();
    let line = lone.line_magnitude.max(f64::MIN_POSITIVE);
    let magnitude = lone.magnitude.max(f64::MIN_POSITIVE);
    let steps = [
        ("line", db(line)),
        ("window", db(2.0 / s1)),
        ("offset", db(magnitude) - db(line)),
        ("image", db(amplitude / factor) - db(magnitude) - db(2.0 / s1)),
        ("smear", 0.0),
        ("detector", db(scale.detector.of_unit_peak())),
        ("factor", db(factor)),
        ("response", 0.0),
        ("quantity", 0.0),
        ("weighting", 0.0),
        ("reference", -db(scale.reference_value())),
    ];
    steps.into_iter().map(|(step, db)| LedgerStep { step, db }).collect()
}
