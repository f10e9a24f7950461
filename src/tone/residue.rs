//! What a fit leaves of a segment, and the peaks in it that noise does not explain.

use realfft::num_complex::Complex64;

use super::threshold::detection_threshold;
use crate::spectrum::{Floor, Transform, transform_padded};

/// Tones nearer to 0 Hz or half the rate than this are not looked for, bins.
const MARGIN: f64 = 1.5;

/// Lines left out of the floor at either end: what is left of the background.
const FLOOR_MARGIN: usize = 1;

/// The residue is looked at twice a line: no peak then loses more than a decibel between lines.
const PADDING: usize = 2;

/// A residue this far under the segment is rounding, not noise: deviation of a sample over the segment's r.m.s.
pub(super) const ROUNDING: f64 = 1e-10;

/// Peaks looked at, strongest over their floor first.
const MOST_PEAKS: usize = 4096;

/// How far over the floor a peak must stand, by the number of lines that the floor there is a median of.
#[derive(Debug, Clone)]
pub(super) struct Thresholds {
    /// Lines in a median, rising, and the threshold to be a tone and to be faint.
    steps: Vec<(usize, f64, f64)>,
}

/// Of peaks that noise gives in more than one search of ten none is listed at all.
const FAINT: f64 = 0.1;

/// Lengths of medians for which thresholds are worked out.
const LENGTHS: [usize; 8] = [1, 16, 25, 35, 50, 71, 100, 150];

impl Thresholds {
    /// For a segment of `n` samples and the chance `false_alarm` that noise alone gives any tone.
    pub(super) fn of(n: usize, false_alarm: f64) -> Self {
        let n_lines = n / 2;
        let longest = Floor::longest(n_lines);
        let lengths = LENGTHS.into_iter().filter(|l| *l < longest).chain([longest]);
        let threshold = |length, chance| detection_threshold(n_lines, length, chance);
        let step = |l| (l, threshold(l, false_alarm), threshold(l, FAINT.max(false_alarm)));
        Self { steps: lengths.map(step).collect() }
    }

    /// To be a tone and to be faint, where the floor is a median of `length` lines.
    fn at(&self, length: usize) -> (f64, f64) {
        let next = self.steps.iter().rev().find(|s| s.0 <= length).or(self.steps.first());
        next.map_or((f64::INFINITY, f64::INFINITY), |s| (s.1, s.2))
    }

    /// To be a tone where the floor is at its longest.
    pub(super) fn least(&self) -> f64 {
        self.steps.last().map_or(f64::INFINITY, |s| s.1)
    }
}

/// A peak of the residue.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Peak {
    /// Where, bins.
    pub(super) nu: f64,
    /// Its power |R(ν)|² over a line's mean noise.
    pub(super) over_floor: f64,
    /// Whether that is more than noise alone would give.
    pub(super) is_tone: bool,
    /// The tone of that peak, amplitude and cosine phase at the first sample.
    pub(super) amplitude: Complex64,
}

/// The spectrum of what a fit left, and its floor.
#[derive(Debug)]
pub(super) struct ResidueSpectrum {
    n: usize,
    transform: Transform,
    power: Vec<f64>,
    floor: Floor,
}

impl ResidueSpectrum {
    /// Of `residue`, left by taking tones at the places `emptied` (see [`Floor::of_residue`]) out of samples with an
    /// r.m.s. of `rms`; `None` where the segment is too short to tell a floor.
    pub(super) fn of(residue: &[f64], emptied: &[(f64, f64)], rms: f64) -> Option<Self> {
        let n = residue.len();
        let transform = transform_padded(residue, PADDING);
        let rounding = n as f64 * (ROUNDING * rms).powi(2);
        let power: Vec<f64> = transform.lines().iter().map(|x| x.norm_sqr() + rounding).collect();
        let lines: Vec<f64> = power.iter().step_by(PADDING).copied().collect();
        let floor = Floor::of_residue(&lines, FLOOR_MARGIN, emptied)?;
        Some(Self { n, transform, power, floor })
    }

    /// The floor, as |X\[k\]|² of the rectangular window.
    pub(super) fn floor(&self) -> &Floor {
        &self.floor
    }

    /// Gives the floor.
    pub(super) fn into_floor(self) -> Floor {
        self.floor
    }

    /// The local maxima that are at least faint, strongest over their floor first.
    pub(super) fn peaks(&self, thresholds: &Thresholds) -> Vec<Peak> {
        let power = &self.power;
        let place = |i: usize| i as f64 / PADDING as f64;
        let band = MARGIN..=self.n as f64 / 2.0 - MARGIN;
        let least = thresholds.steps.iter().map(|s| s.2).fold(f64::INFINITY, f64::min);
        let mut peaks = Vec::new();
        for i in 1..power.len().saturating_sub(1) {
            if !(power[i] > power[i - 1] && power[i] >= power[i + 1]) {
                continue;
            }
            let floor = self.floor.at(place(i));
            // Between two points a decibel may be lost.
            if power[i] * 1.3 < least * floor {
                continue;
            }
            let (shift, top) = summit([power[i - 1], power[i], power[i + 1]]);
            let nu = place(i) + shift / PADDING as f64;
            let (tone, faint) = thresholds.at(self.floor.length_at(nu));
            if top > faint * floor && band.contains(&nu) {
                let here = self.transform.lines().get(i).map_or(0.0, |x| x.arg());
                // The phase of a lone peak turns by half a turn a bin, less a part of a sample.
                let turn = std::f64::consts::PI * (1.0 - 1.0 / self.n as f64);
                let phase = here - turn * shift / PADDING as f64;
                let amplitude = Complex64::from_polar(2.0 * top.sqrt() / self.n as f64, phase);
                peaks.push(Peak { nu, over_floor: top / floor, is_tone: top > tone * floor, amplitude });
            }
        }
        peaks.sort_by(|a, b| b.over_floor.total_cmp(&a.over_floor));
        peaks.truncate(MOST_PEAKS);
        peaks
    }

    /// The median power of the lines within `reach` of a place, over ln 2: the floor of its near surroundings.
    pub(super) fn near_floor(&self, nu: f64, reach: f64) -> f64 {
        let from = ((nu - reach).max(0.0) * PADDING as f64) as usize;
        let to = (((nu + reach) * PADDING as f64) as usize).min(self.power.len());
        let mut lines: Vec<f64> = self.power.get(from..to).unwrap_or_default().to_vec();
        lines.sort_by(f64::total_cmp);
        lines.get(lines.len() / 2).map_or(0.0, |m| m / std::f64::consts::LN_2)
    }

    /// How far from `nu`, going by `step` (±1 bin), the mean power of eight lines stays over three times the floor.
    pub(super) fn reach_of_pedestal(&self, nu: f64, step: f64) -> f64 {
        let mut reach = 0.0;
        while reach < MOST_PEDESTAL {
            let middle = nu + step * (reach + PEDESTAL / 2.0);
            let from = ((middle - PEDESTAL / 2.0).max(0.0) * PADDING as f64) as usize;
            let to = (((middle + PEDESTAL / 2.0) * PADDING as f64).max(0.0) as usize).min(self.power.len());
            let lines = self.power.get(from..to).unwrap_or_default();
            let mean = lines.iter().sum::<f64>() / lines.len().max(1) as f64;
            if lines.is_empty() || mean < 3.0 * self.floor.at(middle) {
                break;
            }
            reach += PEDESTAL / 2.0;
        }
        reach
    }
}

/// Lines of which a pedestal is the mean, and how far out it is followed.
const PEDESTAL: f64 = 8.0;
const MOST_PEDESTAL: f64 = 400.0;

/// Top of the parabola through three logarithms: its distance from the middle one, in their spacing, and its height.
fn summit(power: [f64; 3]) -> (f64, f64) {
    let [below, here, above] = power.map(|p| p.max(f64::MIN_POSITIVE).ln());
    let curvature = below - 2.0 * here + above;
    if curvature >= 0.0 {
        return (0.0, power[1]);
    }
    let shift = (0.5 * (below - above) / curvature).clamp(-0.5, 0.5);
    (shift, (here - 0.25 * (below - above) * shift).exp())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_lone_peak_is_read_nearly_as_it_is() {
        let n = 1024;
        for nu in [100.0, 100.2, 100.5, 100.77] {
            let tone = |i: usize| (std::f64::consts::TAU * nu * i as f64 / n as f64 + 0.7).cos();
            let noise = |i: usize| 1e-3 * ((i * i * 7919 % 10_007) as f64 / 5000.0 - 1.0);
            let samples: Vec<f64> = (0..n).map(|i| 0.5 * tone(i) + noise(i)).collect();
            let spectrum = ResidueSpectrum::of(&samples, &[], 0.35).unwrap();
            let peak = spectrum.peaks(&Thresholds::of(n, 1e-3))[0];
            assert!((peak.nu - nu).abs() < 0.03, "{peak:?} for {nu}");
            assert!((peak.amplitude - Complex64::from_polar(0.5, 0.7)).norm() < 0.03, "{peak:?} for {nu}");
        }
    }
}
