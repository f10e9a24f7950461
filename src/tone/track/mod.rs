//! One tone's own narrow band, looked at along the segment: is it one steady tone, one that moves, or several?
//!
//! The samples are turned back by a carrier's frequency and averaged over some hundred equal blocks. What is left is
//! a slow complex signal, in which a tone that stands still is one point, a tone that moves a curve, and a neighbour
//! within reach a turning phasor. All of it costs one pass over the samples; everything after that is small.

mod account;
mod explain;
mod fit;
mod path;
mod spectrum;

use std::f64::consts::TAU;
use std::sync::Arc;

use realfft::num_complex::Complex64;
use rustfft::{Fft, FftPlanner};

pub(super) use account::{Account, Company};
pub(super) use explain::{Bar, LEAST_APART, explain, may_move};
pub(super) use fit::fit as refit;
pub(super) use path::Path;

/// Blocks of a track; fewer where the segment has fewer samples.
const BLOCKS: usize = 256;

/// How many lines of a track's transform make one bin.
const PADDING: usize = 4;

/// The highest order of a path's phase and level.
pub(super) const MOST_ORDER: usize = 10;

/// How the samples of a segment are divided into blocks.
pub(super) struct Grid {
    n: usize,
    /// Where each block ends.
    ends: Vec<usize>,
    /// The middle of each block, from -1 at the segment's start to 1 at its end.
    places: Vec<f64>,
    /// Legendre polynomials P_0 to P_10 at the places.
    basis: Vec<Vec<f64>>,
    /// Of the points and zeros behind them.
    transform: Arc<dyn Fft<f64>>,
}

impl std::fmt::Debug for Grid {
    fn fmt(&self, f: &mut std::fmt::Formatter<'_>) -> std::fmt::Result {
        f.debug_struct("Grid").field("n", &self.n).field("blocks", &self.len()).finish_non_exhaustive()
    }
}

impl Grid {
    /// For segments of `n` samples; at least one block.
    pub(super) fn new(n: usize) -> Self {
        let n_blocks = n.clamp(1, BLOCKS);
        let ends: Vec<usize> = (1..=n_blocks).map(|b| b * n / n_blocks).collect();
        let starts = std::iter::once(0).chain(ends.iter().copied());
        let middle = |(from, to): (usize, &usize)| ((from + to) as f64 - n as f64) / n.max(1) as f64;
        let places: Vec<f64> = starts.zip(&ends).map(middle).collect();
        let rows: Vec<_> = places.iter().map(|u| path::legendre(*u)).collect();
        let basis = (0..=MOST_ORDER).map(|p| rows.iter().map(|row| row[p]).collect()).collect();
        let transform = FftPlanner::new().plan_fft_forward((PADDING * n_blocks).next_power_of_two());
        Self { n, ends, places, basis, transform }
    }

    /// Samples in the segment.
    pub(super) fn n_samples(&self) -> usize {
        self.n
    }

    /// How many blocks there are.
    pub(super) fn len(&self) -> usize {
        self.places.len()
    }

    /// What block `b` holds, in a track around `carrier`, of a real tone whose half envelope there is `half` and whose
    /// frequency there is `nu` (bins): the tone turned back by the carrier, and its image turned back likewise.
    fn seen(&self, b: usize, half: Complex64, nu: f64, carrier: f64) -> (Complex64, Complex64) {
        let turn = TAU / self.n as f64;
        let length = self.block_length(b);
        let image = Complex64::cis(-(turn * carrier * self.places[b] * self.n as f64).rem_euclid(TAU));
        (half * averaged(turn * (nu - carrier), length), half.conj() * image * averaged(turn * (nu + carrier), length))
    }

    fn block_length(&self, b: usize) -> f64 {
        let from = if b == 0 { 0 } else { self.ends[b - 1] };
        (self.ends[b] - from) as f64
    }

    /// The power of a tone's image in a track around `carrier`, over that of the tone itself: blocks of many samples
    /// average it away.
    pub(super) fn image_share(&self, carrier: f64) -> f64 {
        let kept = |b: usize| averaged(2.0 * TAU * carrier / self.n as f64, self.block_length(b)).powi(2);
        (0..self.len()).map(kept).sum::<f64>() / self.len() as f64
    }

    /// e^{-j2πνm/N} averaged over each block of `samples`.
    pub(super) fn track(&self, samples: &[f64], nu: f64) -> Track<'_> {
        let omega = TAU * nu / self.n.max(1) as f64;
        let middle = (self.n as f64 - 1.0) / 2.0;
        let turns: Vec<(f64, f64)> =
            (0..TABLE).map(|k| Complex64::cis(-omega * k as f64)).map(|t| (t.re, t.im)).collect();
        let mut from = 0;
        let mut points = Vec::with_capacity(self.len());
        for &to in &self.ends {
            let block = samples.get(from..to).unwrap_or_default();
            let mut sum = Complex64::ZERO;
            for (i, part) in block.chunks(TABLE).enumerate() {
                let (mut re, mut im) = (0.0, 0.0);
                for (x, turn) in part.iter().zip(&turns) {
                    re += x * turn.0;
                    im += x * turn.1;
                }
                let start = (from + i * TABLE) as f64 - middle;
                sum += Complex64::new(re, im) * Complex64::cis(-(omega * start).rem_euclid(TAU));
            }
            points.push(sum / block.len().max(1) as f64);
            from = to;
        }
        Track { grid: self, nu, points }
    }
}

/// The mean of e^{jθk} over `length` samples k about their middle: sin(Lθ/2)/(L sin(θ/2)).
fn averaged(theta: f64, length: f64) -> f64 {
    let below = (theta / 2.0).sin() * length;
    if below.abs() < 1e-9 {
        (length * theta / 2.0).cos() * (theta / 2.0).cos()
    } else {
        (length * theta / 2.0).sin() / below
    }
}

/// Samples for which one table of turns serves.
const TABLE: usize = 64;

/// A narrow band around a carrier.
#[derive(Debug, Clone)]
pub(super) struct Track<'a> {
    pub(super) grid: &'a Grid,
    /// The carrier, bins.
    pub(super) nu: f64,
    /// One point a block: half the peak amplitude of a tone, turning by its distance from the carrier.
    pub(super) points: Vec<Complex64>,
}

impl Track<'_> {
    /// Adds what a path with this carrier looks like here.
    pub(super) fn add(&mut self, path: &Path) {
        for (point, own) in self.points.iter_mut().zip(path.points(self.grid)) {
            *point += own;
        }
    }

    /// The variance of a point by noise of `line_power` (|X|² a line).
    pub(super) fn point_variance(&self, line_power: f64) -> f64 {
        let n = self.grid.n as f64;
        line_power * self.grid.len() as f64 / (n * n)
    }
}

#[cfg(test)]
mod tests;
