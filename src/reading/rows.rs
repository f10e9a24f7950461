//! The rows of the tone table: one tone, read in every pane.

use super::Request;
use super::budget::Budget;
use super::output::{CourseFact, LedgerStep, PaneReading, ReadingState, Tone};
use super::verdict;
use crate::session::DEFAULT_WINDOWS;
use crate::signal::{Cancelled, Watch};
use crate::spectrum::Spectra;
use crate::tone::{CoursePoint, Disturbance, LoneReading, Motion, PaneView, Search, State};
use crate::units::{Scale, db};
use crate::window::Window;

/// Amplitudes below this, in the unit, are stated as if they were this large: levels in decibels stay finite.
pub(super) const LEAST_AMPLITUDE: f64 = 1e-30;

/// Over the reference, through the detector; finite for any amplitude.
pub(super) fn level_db(scale: &Scale, peak: f64) -> f64 {
    scale.level_db(peak.max(LEAST_AMPLITUDE))
}

/// The rows, by frequency, each with its verdict.
///
/// # Errors
/// [`Cancelled`] where the watch says so.
pub(super) fn tones(
    spectra: &Spectra,
    request: &Request,
    found: &Search,
    watch: &Watch,
) -> Result<Vec<Tone>, Cancelled> {
    let standing = Standing::of(spectra, watch)?;
    let mut rows = Vec::with_capacity(found.tones.len());
    for i in 0..found.tones.len() {
        watch.check()?;
        watch.report(0.5 + 0.5 * i as f64 / found.tones.len() as f64);
        rows.push(row(spectra, &standing, request, found, i));
    }
    rows.sort_by(|a, b| a.frequency_hz.total_cmp(&b.frequency_hz));
    Ok(rows)
}

/// The standing set of windows, whatever panes are open: verdicts rest on them.
struct Standing {
    /// Those of the set that are not open.
    others: Spectra,
    /// Where each of the set is: among the open panes, or among the others.
    places: Vec<Place>,
}

#[derive(Clone, Copy)]
enum Place {
    Open(usize),
    Other(usize),
}

impl Standing {
    fn of(spectra: &Spectra, watch: &Watch) -> Result<Self, Cancelled> {
        let set: Vec<Window> = DEFAULT_WINDOWS.iter().filter_map(|name| Window::parse(name).ok()).collect();
        let mut missing = Vec::new();
        let mut places = Vec::new();
        for window in set {
            if let Some(pane) = spectra.windows().iter().position(|open| *open == window) {
                places.push(Place::Open(pane));
            } else {
                places.push(Place::Other(missing.len()));
                missing.push(window);
            }
        }
        Ok(Self { others: spectra.with_windows(&missing, watch)?, places })
    }

    /// The set's readings of tone `i`, of which `open` are at hand.
    fn readings(&self, request: &Request, found: &Search, i: usize, open: &[PaneReading]) -> Vec<PaneReading> {
        let reading = |place: &Place| match *place {
            Place::Open(pane) => open.get(pane).cloned(),
            Place::Other(pane) => Some(pane_reading(&self.others, request, found, pane, i)),
        };
        self.places.iter().filter_map(reading).collect()
    }
}

fn row(spectra: &Spectra, standing: &Standing, request: &Request, found: &Search, i: usize) -> Tone {
    let tone = found.tones[i];
    let motion = found.motions.get(i).and_then(Option::as_ref);
    let readings: Vec<PaneReading> =
        (0..spectra.windows().len()).map(|pane| pane_reading(spectra, request, found, pane, i)).collect();
    let spacing_hz = spectra.line_spacing_hz();
    let factor = request.scale.units_per_full_scale();
    let amplitude = tone.amplitude.norm() * factor;
    let tags = [("by-hand", tone.by_hand), ("held", tone.held)];
    let tags = tags.into_iter().filter(|t| t.1).map(|t| t.0.to_owned()).collect();
    let budget = Budget::of(spectra, request, found, i);
    let n = spectra.n_samples() as f64;
    let density = found.noise.as_ref().map(|noise| {
        // One-sided, of the rectangular window: S2 is N.
        2.0 * noise.line_power(tone.nu, n) / (spectra.sample_rate_hz() * n) * factor * factor
    });
    let mut row = Tone {
        frequency_hz: tone.nu * spacing_hz,
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
        noise_density: density,
        snr_db: (tone.snr > 0.0).then(|| 10.0 * tone.snr.log10()),
        drift_hz: motion.map(|m| m.drift_nu * spacing_hz),
        drift_db: motion.map(|m| m.drift_db),
        course: motion.map(|m| course(m, spectra, request)),
        tags,
        order: None,
        agreement_db: agreement(&readings),
        readings,
    };
    let judged = verdict::Judged {
        spacing_hz,
        found,
        i,
        row: &row,
        standing: &standing.readings(request, found, i, &row.readings),
    };
    let (word, why) = judged.verdict();
    (row.verdict, row.why) = (Some(word), Some(why));
    row
}

fn course(motion: &Motion, spectra: &Spectra, request: &Request) -> Vec<CourseFact> {
    let duration_s = spectra.n_samples() as f64 / spectra.sample_rate_hz();
    let factor = request.scale.units_per_full_scale();
    let fact = |point: &CoursePoint| CourseFact {
        time_s: point.part * duration_s,
        frequency_hz: point.nu * spectra.line_spacing_hz(),
        level_db: level_db(&request.scale, point.amplitude * factor),
    };
    motion.course.iter().map(fact).collect()
}

fn agreement(readings: &[PaneReading]) -> Option<f64> {
    let clear = readings.iter().filter(|r| r.state == ReadingState::Clear);
    let levels: Vec<f64> = clear.map(|r| r.level_db).collect();
    let max = levels.iter().copied().fold(f64::NEG_INFINITY, f64::max);
    let min = levels.iter().copied().fold(f64::INFINITY, f64::min);
    (levels.len() > 1).then_some(max - min)
}

/// A tone that moves further than this over the segment has no one maximum in a pane: it is read at its mean, bins.
const ONE_MAXIMUM: f64 = 0.25;

/// One cell of the table: tone `i` in pane `pane`.
fn pane_reading(spectra: &Spectra, request: &Request, found: &Search, pane: usize, i: usize) -> PaneReading {
    let view = PaneView { spectra, pane, removal: request.removal };
    let window = &spectra.windows()[pane];
    let tone = found.tones[i];
    let motion = found.motions.get(i).and_then(Option::as_ref);
    let disturbance = Disturbance::of(spectra, pane, found, i);
    let spread = motion.is_some_and(|m| m.span_nu > ONE_MAXIMUM);
    let borrowed = tone.held || spread || window.is_flat_top();
    let covered = disturbance.state() == State::BelowFloor;
    let maximum = if borrowed || covered { None } else { view.read_near(tone.nu) };
    let disturbance = maximum.map_or(disturbance, |m| disturbance.read_at(spectra, pane, found, i, m.nu));
    let state = match disturbance.state() {
        // Nothing rises here: whatever the skirts predict, they cover the tone.
        State::Clear if maximum.is_none() && !borrowed => ReadingState::UnderSkirt,
        State::Clear => ReadingState::Clear,
        State::Crowded => ReadingState::Crowded,
        State::UnderSkirt => ReadingState::UnderSkirt,
        State::BelowFloor => ReadingState::BelowFloor,
    };
    let lone = maximum.unwrap_or_else(|| view.read_at(tone.nu));
    // What a path makes of the pane's maximum, against what a tone that stands still would.
    let smeared = motion.and_then(|m| m.seen_under(window, lone.nu));
    let smeared = smeared.map_or(1.0, |seen| 2.0 * seen.norm() / spectra.sums(pane).s1 / tone.amplitude.norm());
    let smear = 1.0 / smeared.max(LEAST_SMEARED);
    let amplitude = lone.amplitude.norm() * smear * request.scale.units_per_full_scale();
    PaneReading {
        window: window.to_string(),
        state,
        peak_hz: lone.nu * spectra.line_spacing_hz(),
        borrowed,
        amplitude,
        level_db: level_db(&request.scale, amplitude),
        u_db: (disturbance.noise_db > 0.0).then_some(disturbance.noise_db),
        predicted_leak_db: found.settled.then_some(disturbance.leak_db),
        ledger: ledger(&request.scale, &lone, smear, spectra.sums(pane).s1),
    }
}

/// A path that leaves less than this of a pane's reading is not corrected for any further.
const LEAST_SMEARED: f64 = 1e-3;

/// The corrections from the raw line to the level; they sum to it.
fn ledger(scale: &Scale, lone: &LoneReading, smear: f64, s1: f64) -> Vec<LedgerStep> {
    let amplitude = (lone.amplitude.norm() * scale.units_per_full_scale()).max(LEAST_AMPLITUDE);
    let factor = scale.units_per_full_scale();
    let line = lone.line_magnitude.max(f64::MIN_POSITIVE);
    let magnitude = lone.magnitude.max(f64::MIN_POSITIVE);
    let steps = [
        ("line", db(line)),
        ("window", db(2.0 / s1)),
        ("offset", db(magnitude) - db(line)),
        ("image", db(amplitude / factor) - db(magnitude) - db(2.0 / s1)),
        ("smear", db(smear)),
        ("detector", db(scale.detector.of_unit_peak())),
        ("factor", db(factor)),
        ("response", 0.0),
        ("quantity", 0.0),
        ("weighting", 0.0),
        ("reference", -db(scale.reference_value())),
    ];
    steps.into_iter().map(|(step, db)| LedgerStep { step, db }).collect()
}
