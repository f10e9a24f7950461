//! Finding the tones of a segment, whatever panes are open.
//!
//! Three windows of its own look at the segment, from the sharpest to the one with the lowest side lobes. A local
//! maximum counts when it stands over the local floor by more than noise would, and over what the tones found so far
//! leak into that window by more than their side lobes could. What was found is then fitted jointly, so that each tone
//! is known free of the others' leakage.

use std::sync::Arc;

use realfft::num_complex::Complex64;

use super::fit::{SteadyTone, UnitUncertainty, fit_jointly};
use super::lone::PaneView;
use super::motion::Motion;
use super::synthesis::{take_out_background, take_out_tone};
use super::threshold::detection_threshold;
use crate::signal::{Cancelled, Removal, Watch};
use crate::spectrum::{Floor, Spectra};
use crate::window::Window;

/// A tone named by hand: where it is to be looked for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct NamedTone {
    /// Where it is, bins.
    pub nu: f64,
    /// Whether it is held there.
    pub held: bool,
}

/// A tone found, in bins and full scales.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FoundTone {
    /// Where it is, bins.
    pub nu: f64,
    /// Peak amplitude and cosine phase at the first sample, A e^{jφ}.
    pub amplitude: Complex64,
    /// Its power over one rectangular line's mean noise; 0 without a floor.
    pub snr: f64,
    /// Whether it was named by hand.
    pub by_hand: bool,
    /// Whether its frequency is held.
    pub held: bool,
    /// Whether it stands over the floor by no more than noise alone would in one search of ten: listed, not counted.
    pub faint: bool,
}

/// What a search gives.
#[derive(Debug, Clone)]
pub struct Search {
    /// The tones, by frequency.
    pub tones: Vec<FoundTone>,
    /// Whether all of them were fitted jointly; else they stand as they were seen one at a time.
    pub settled: bool,
    /// What noise of unit variance a sample does to each, where they were fitted jointly; else none.
    pub unit_uncertainties: Vec<UnitUncertainty>,
    /// One-sided noise, as |X\[k\]|² of the rectangular window; `None` where the segment is too short to tell.
    pub noise: Option<Noise>,
    /// How many tones were left out, being the weakest over their floor.
    pub n_left_out: usize,
    /// How each tone moves, where it was seen to; one for each of `tones`.
    pub motions: Vec<Option<Motion>>,
    /// The samples less the fitted tones and background.
    pub residue: Arc<[f64]>,
}

/// The local noise of a segment.
#[derive(Debug, Clone)]
pub struct Noise {
    floor: Floor,
    /// S2 of the window the floor was taken from.
    s2: f64,
}

impl Noise {
    /// The mean noise power |Y|² a line at `nu` bins, of a window with the sum S2.
    pub fn line_power(&self, nu: f64, s2: f64) -> f64 {
        self.floor.at(nu) / self.s2 * s2
    }

    /// The standard deviation of a sample whose white noise would be as strong at `nu` bins; `n` samples.
    pub fn sample_deviation(&self, nu: f64, n: f64) -> f64 {
        (self.line_power(nu, n) / n).sqrt()
    }

    /// A tone's |X|² in a rectangular pane of `n` samples over that pane's mean noise a line.
    pub fn snr(&self, tone: &FoundTone, n: f64) -> f64 {
        (tone.amplitude.norm() * n / 2.0).powi(2) / self.line_power(tone.nu, n)
    }

    /// The median of [`Noise::line_power`] over the band.
    pub fn typical_line_power(&self, s2: f64) -> f64 {
        self.floor.typical() / self.s2 * s2
    }
}

/// The search's own windows, sharpest first; the last has the lowest side lobes and gives the floor.
const WINDOWS: [&str; 3] = ["hann", "blackman", "blackman-harris"];

/// Tones nearer to 0 Hz or half the rate than this are not looked for, bins.
const MARGIN: f64 = 1.5;

/// Lines left out of the floor at either end: the main lobe of the window it is taken from.
const FLOOR_MARGIN: usize = 4;

/// A peak counts when it stands this much over the skirts of the tones found so far (an amplitude ratio).
const OVER_SKIRT: f64 = 2.0;

/// Two tones nearer than this are one, bins.
const SAME: f64 = 0.5;

/// A tone named by hand within this of one found is that one, bins.
const SAME_AS_NAMED: f64 = 0.75;

/// A tone named by hand must stand this far from 0 Hz and half the rate: half a cycle in the segment.
pub const LEAST_CYCLES: f64 = 0.5;

/// Peaks looked at in each window, strongest first.
const MOST_CANDIDATES: usize = 20_000;

/// Tones kept while searching, before the weakest are left out.
const MOST_FOUND: usize = 400;

/// What a search looks for.
#[derive(Debug, Clone, Copy)]
pub struct Quest<'a> {
    /// What was taken out of the segment.
    pub removal: Removal,
    /// The chance that noise alone gives any tone.
    pub false_alarm: f64,
    /// How many tones are kept: those that stand highest over their floor.
    pub max_tones: usize,
    /// Tones named by hand, kept whatever the search finds; those less than half a cycle from 0 Hz or half the rate are
    /// passed over.
    pub named: &'a [NamedTone],
    /// Places, in bins, where no tone is to be: one found within [`SAME_AS_NAMED`] of them is not fitted. What is named
    /// stays.
    pub refused: &'a [f64],
}

/// Looks for tones in the segment of `spectra`, whose own panes do not matter, and fits them jointly.
///
/// # Errors
/// [`Cancelled`] where the watch says so.
pub fn search(spectra: &Spectra, quest: &Quest<'_>, watch: &Watch) -> Result<Search, Cancelled> {
    let windows: Vec<Window> = WINDOWS.iter().filter_map(|name| Window::parse(name).ok()).collect();
    let looks = spectra.with_windows(&windows, watch)?;
    let quietest = windows.len() - 1;
    let floor = Floor::of(looks.power(quietest), FLOOR_MARGIN);
    let noise = floor.map(|floor| Noise { floor, s2: looks.sums(quietest).s2 });
    let mut found = Vec::new();
    if let Some(noise) = &noise {
        let n_lines = looks.power(quietest).len();
        // Lines of a tapered window are not independent: half of them count towards the floor.
        let floor_lines = (Floor::LENGTH.min(n_lines) / 2).max(1);
        let z = detection_threshold(n_lines, floor_lines, quest.false_alarm / WINDOWS.len() as f64);
        for pane in 0..windows.len() {
            let view = PaneView { spectra: &looks, pane, removal: quest.removal };
            look(&view, noise, z, &mut found, watch)?;
        }
    }
    found.retain(|f| !quest.refused.iter().any(|nu| (nu - f.nu).abs() < SAME_AS_NAMED));
    let n_found = found.len();
    found.sort_by(|a, b| b.snr.total_cmp(&a.snr));
    found.truncate(quest.max_tones);
    let n_left_out = n_found - found.len();
    add_named(spectra, quest.named, &mut found);
    found.sort_by(|a, b| a.nu.total_cmp(&b.nu));
    let refined = refine(spectra, quest.removal, &mut found, watch)?;
    for tone in &mut found {
        tone.snr = noise.as_ref().map_or(0.0, |noise| noise.snr(tone, spectra.n_samples() as f64));
    }
    let settled = refined.is_some();
    let Refined { uncertainties: unit_uncertainties, background } = refined.unwrap_or_default();
    let motions = vec![None; found.len()];
    let residue = residue(spectra, &found, background);
    Ok(Search { tones: found, settled, unit_uncertainties, noise, n_left_out, motions, residue })
}

/// What the tones and the background leave of the samples.
fn residue(spectra: &Spectra, found: &[FoundTone], background: (f64, f64)) -> Arc<[f64]> {
    let mut samples = spectra.samples().to_vec();
    let line = std::f64::consts::TAU / samples.len() as f64;
    take_out_background(&mut samples, background);
    for tone in found {
        take_out_tone(&mut samples, line * tone.nu, tone.amplitude);
    }
    samples.into()
}

/// Marks the tones named by hand among those found, and adds those that were not.
fn add_named(spectra: &Spectra, named: &[NamedTone], found: &mut Vec<FoundTone>) {
    let n = spectra.n_samples() as f64;
    for name in named {
        if !(name.nu >= LEAST_CYCLES && name.nu <= n / 2.0 - LEAST_CYCLES) {
            continue;
        }
        let distance = |f: &FoundTone| (f.nu - name.nu).abs();
        let near = found.iter_mut().filter(|f| distance(f) < SAME_AS_NAMED);
        if let Some(tone) = near.min_by(|a, b| distance(a).total_cmp(&distance(b))) {
            tone.by_hand = true;
            if name.held {
                (tone.nu, tone.held) = (name.nu, true);
            }
            continue;
        }
        let amplitude = spectra.dense().at(name.nu) * (2.0 / n);
        found.push(FoundTone { nu: name.nu, amplitude, snr: 0.0, by_hand: true, held: name.held, faint: false });
    }
}

/// What a joint fit says beside the tones.
#[derive(Debug, Default)]
struct Refined {
    uncertainties: Vec<UnitUncertainty>,
    background: (f64, f64),
}

/// A joint fit that moves a tone further than this from where it was seen did not settle on it, bins.
const MOST_MOVED: f64 = 1.0;

/// Puts the jointly fitted frequencies and amplitudes in the place of those seen one at a time, and gives what noise
/// does to them.
///
/// Where the fit does not settle (tones too close to tell apart, or a tone that moves) all stay as they were seen.
fn refine(
    spectra: &Spectra,
    removal: Removal,
    found: &mut [FoundTone],
    watch: &Watch,
) -> Result<Option<Refined>, Cancelled> {
    let n = spectra.n_samples() as f64;
    let line = std::f64::consts::TAU / n;
    let middle = (n - 1.0) / 2.0;
    // A column of no amplitude has no frequency: a tone named in silence starts with a trace.
    let trace = Complex64::new(1e-12, 0.0);
    let start: Vec<SteadyTone> = found
        .iter()
        .map(|f| SteadyTone {
            omega: f.nu * line,
            middle_amplitude: f.amplitude * Complex64::cis(f.nu * line * middle) + trace,
            held: f.held,
        })
        .collect();
    let Some(fit) = fit_jointly(spectra.dense(), removal, &start, watch)? else { return Ok(None) };
    let stayed = |(f, t): (&FoundTone, &SteadyTone)| (t.omega / line - f.nu).abs() < MOST_MOVED;
    if !fit.converged || !found.iter().zip(&fit.tones).all(stayed) {
        return Ok(None);
    }
    let Some(uncertainties) = fit.unit_uncertainties() else { return Ok(None) };
    for (found, tone) in found.iter_mut().zip(&fit.tones) {
        found.nu = if tone.held { found.nu } else { tone.omega / line };
        found.amplitude = tone.middle_amplitude * Complex64::cis(-tone.omega * middle);
    }
    Ok(Some(Refined { uncertainties, background: fit.background }))
}

/// Adds to `found` what one window sees beyond it.
fn look(
    view: &PaneView<'_>,
    noise: &Noise,
    z: f64,
    found: &mut Vec<FoundTone>,
    watch: &Watch,
) -> Result<(), Cancelled> {
    for line in candidates(view, noise, z) {
        watch.check()?;
        if found.len() == MOST_FOUND {
            break;
        }
        let magnitude = view.spectra.power(view.pane)[line].sqrt();
        if magnitude < OVER_SKIRT * skirt(view, found, line as f64) {
            continue;
        }
        let Some(reading) = view.read_near(line as f64) else { continue };
        let inside = reading.nu >= MARGIN && reading.nu <= view.spectra.n_samples() as f64 / 2.0 - MARGIN;
        if !inside || found.iter().any(|f| (f.nu - reading.nu).abs() < SAME) {
            continue;
        }
        let mut tone = FoundTone {
            nu: reading.nu,
            amplitude: reading.amplitude,
            snr: 0.0,
            by_hand: false,
            held: false,
            faint: false,
        };
        tone.snr = noise.snr(&tone, view.spectra.n_samples() as f64);
        found.push(tone);
    }
    Ok(())
}

/// Lines that are local maxima over the threshold, strongest first.
fn candidates(view: &PaneView<'_>, noise: &Noise, z: f64) -> Vec<usize> {
    let power = view.spectra.power(view.pane);
    let s2 = view.spectra.sums(view.pane).s2;
    let is_top = |k: &usize| power[*k] > power[k - 1] && power[*k] >= power[k + 1];
    let counts = |k: &usize| power[*k] > z * noise.line_power(*k as f64, s2);
    let mut lines: Vec<usize> = (1..power.len().saturating_sub(1)).filter(is_top).filter(counts).collect();
    lines.sort_by(|&a, &b| power[b].total_cmp(&power[a]));
    lines.truncate(MOST_CANDIDATES);
    lines
}

/// The most that the tones found so far can put at `nu` in this window, as |Y|.
fn skirt(view: &PaneView<'_>, found: &[FoundTone], nu: f64) -> f64 {
    let kernel = |mu: f64| view.spectra.kernel_at(view.pane, mu).norm();
    found.iter().map(|f| f.amplitude.norm() / 2.0 * (kernel(nu - f.nu) + kernel(nu + f.nu))).sum()
}
