//! The transform of given samples at every real frequency.

use std::f64::consts::PI;
use std::sync::OnceLock;

use realfft::RealFftPlanner;
use realfft::num_complex::Complex64;

use super::angle::{Position, cis_turns};
use super::taps::{BEFORE, N_TAPS, taps, transform_of_taps};

/// Up to this many samples every value is a plain sum.
const PLAIN_UP_TO: usize = 64;

/// The transform of N samples that are symmetric, sample 0 apart or not.
///
/// About the middle the transform is real, R(ν), and R is limited in band because the segment is limited in time. So a
/// table at half bins of the samples, each divided by the interpolating function's own transform, gives R anywhere
/// from the 16 nearest entries, to about 1e-14 of Σ|w|.
#[derive(Debug)]
pub(super) struct Gridded {
    samples: Vec<f64>,
    /// Twice the middle of the symmetry, in samples.
    twice_middle: usize,
    /// Sample 0 of a DFT-even window, which has no partner.
    lone: f64,
    table: OnceLock<Vec<f64>>,
}

impl Gridded {
    /// Of samples symmetric about N/2 with sample 0 apart (`dft_even`), or about (N-1)/2.
    pub(super) fn new(mut samples: Vec<f64>, dft_even: bool) -> Self {
        let n = samples.len();
        let lone = match samples.first_mut() {
            Some(sample) if dft_even => std::mem::take(sample),
            _ => 0.0,
        };
        let twice_middle = if dft_even { n } else { n.saturating_sub(1) };
        Self { samples, twice_middle, lone, table: OnceLock::new() }
    }

    /// W(ν).
    pub(super) fn at(&self, position: Position) -> Complex64 {
        let n = self.samples.len();
        let real = if n <= PLAIN_UP_TO { self.plain(position.bins()) } else { self.interpolated(position.bins()) };
        let mut phase = position.half_turns();
        if self.twice_middle != n {
            phase *= Complex64::cis(PI * position.bins() / n as f64);
        }
        phase * real + self.lone
    }

    /// R(ν) = Σ w\[i\] cos(2πν(i - middle)/N).
    fn plain(&self, bins: f64) -> f64 {
        let turn = PI * bins / self.samples.len() as f64;
        let middle = self.twice_middle as f64;
        self.samples.iter().enumerate().map(|(i, w)| w * (turn * (2.0 * i as f64 - middle)).cos()).sum()
    }

    fn interpolated(&self, bins: f64) -> f64 {
        let table = self.table.get_or_init(|| self.make_table());
        if table.is_empty() {
            return self.plain(bins);
        }
        let place = 2.0 * bins.abs();
        let before = place.floor();
        let weights = taps(place - before);
        let first = before as i64 - i64::from(BEFORE);
        let inside = usize::try_from(first).ok().and_then(|first| table.get(first..first + N_TAPS));
        match inside {
            Some(entries) => entries.iter().zip(weights).map(|(entry, weight)| entry * weight).sum(),
            None => (first..).zip(weights).map(|(m, weight)| self.entry(table, m) * weight).sum(),
        }
    }

    /// The table continued beyond 0 and N, where R is even and repeats with a sign.
    fn entry(&self, table: &[f64], m: i64) -> f64 {
        let (m, period) = (m.unsigned_abs() as usize, 2 * self.samples.len());
        if m < table.len() {
            return table.get(m).copied().unwrap_or(0.0);
        }
        let value = table.get(period.saturating_sub(m)).copied().unwrap_or(0.0);
        if self.twice_middle.is_multiple_of(2) { value } else { -value }
    }

    /// R at 0, 1/2, ... N/2 bins, of the samples divided by the interpolant's transform; empty if it cannot be had.
    fn make_table(&self) -> Vec<f64> {
        let n = self.samples.len();
        let mut spread: Vec<f64> = self.samples.iter().enumerate().map(|(i, w)| w / self.weight(i)).collect();
        spread.resize(2 * n, 0.0);
        let plan = RealFftPlanner::<f64>::new().plan_fft_forward(2 * n);
        let mut lines = plan.make_output_vec();
        if plan.process(&mut spread, &mut lines).is_err() {
            // Lengths agree by construction, so this is not met; values are then plain sums.
            return Vec::new();
        }
        let turns = |m: usize| cis_turns((m * self.twice_middle) as u64, 4 * n as u64);
        lines.iter().enumerate().map(|(m, line)| (line * turns(m)).re).collect()
    }

    /// The interpolant's transform at sample `i`, whose distance from the middle is its frequency along the table.
    fn weight(&self, i: usize) -> f64 {
        let n = self.samples.len();
        transform_of_taps((2 * i).abs_diff(self.twice_middle) as f64 / (4 * n) as f64)
    }
}
