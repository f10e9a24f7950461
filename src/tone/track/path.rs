//! The way of one tone through the segment: phase and logarithm of its level as low polynomials of time.

use std::f64::consts::{PI, TAU};

use nalgebra::{Cholesky, DMatrix, DVector};
use realfft::num_complex::Complex64;

use super::super::motion::LEAST;
use super::{Grid, MOST_ORDER};

/// A tone whose phase and level change smoothly: Re(e^{Λ(u) + jΦ(u)} e^{j2πνm/N}), with m counted from the segment's
/// middle and u = 2m/N from -1 to 1; Λ and Φ are sums of Legendre polynomials.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Path {
    /// The carrier ν, bins.
    pub(crate) nu: f64,
    /// Coefficients of Φ, rad, from order 0; two of them make a steady tone.
    pub(crate) phase: Vec<f64>,
    /// Coefficients of Λ, nepers of peak amplitude, from order 0; one of them makes a steady tone.
    pub(crate) level: Vec<f64>,
}

/// P_0(u) to P_10(u).
pub(super) fn legendre(u: f64) -> [f64; MOST_ORDER + 1] {
    let mut row = [1.0; MOST_ORDER + 1];
    row[1] = u;
    for p in 2..=MOST_ORDER {
        let order = p as f64;
        row[p] = ((2.0 * order - 1.0) * u * row[p - 1] - (order - 1.0) * row[p - 2]) / order;
    }
    row
}

/// P_p, P'_p and P''_p at `u` for the first `n` orders, at least two: P'_{p+1} = P'_{p-1} + (2p+1) P_p, and its
/// derivative.
fn legendre_derivatives(u: f64, n: usize) -> [[f64; 3]; MOST_ORDER + 1] {
    let mut rows = [[0.0; 3]; MOST_ORDER + 1];
    rows[0][0] = 1.0;
    (rows[1][0], rows[1][1]) = (u, 1.0);
    for p in 1..n.min(MOST_ORDER + 1) - 1 {
        let order = p as f64;
        let odd = 2.0 * order + 1.0;
        rows[p + 1][0] = (odd * u * rows[p][0] - order * rows[p - 1][0]) / (order + 1.0);
        rows[p + 1][1] = rows[p - 1][1] + odd * rows[p][0];
        rows[p + 1][2] = rows[p - 1][2] + odd * rows[p][1];
    }
    rows
}

fn sum(coefficients: &[f64], values: impl Iterator<Item = f64>) -> f64 {
    coefficients.iter().zip(values).map(|(c, v)| c * v).sum()
}

impl Path {
    /// A steady tone at `nu` bins, `middle_amplitude` its amplitude and phase in the middle of the segment.
    pub(crate) fn steady(nu: f64, middle_amplitude: Complex64) -> Self {
        let level = middle_amplitude.norm().max(f64::MIN_POSITIVE).ln();
        Self { nu, phase: vec![middle_amplitude.arg(), 0.0], level: vec![level] }
    }

    /// Whether it neither changes its frequency nor its level.
    pub(crate) fn is_steady(&self) -> bool {
        self.phase.len() <= 2 && self.level.len() <= 1
    }

    /// Amplitude and phase in the middle of the segment.
    pub(crate) fn middle(&self) -> Complex64 {
        let row = legendre(0.0);
        Complex64::from_polar(sum(&self.level, row.into_iter()).exp(), sum(&self.phase, row.into_iter()))
    }

    /// How far two paths with one carrier are apart, as the sum of squares over the points of a track.
    pub(crate) fn distance(&self, other: &Self, grid: &Grid) -> f64 {
        let pairs = self.envelope(grid).into_iter().zip(other.envelope(grid));
        pairs.map(|(a, b)| (a - b).norm_sqr() / 4.0).sum()
    }

    /// Peak amplitude at u.
    pub(crate) fn amplitude(&self, u: f64) -> f64 {
        sum(&self.level, legendre(u).into_iter()).exp()
    }

    /// Frequency at u, bins.
    pub(crate) fn frequency(&self, u: f64) -> f64 {
        self.nu + sum(&self.phase, legendre_derivatives(u, self.phase.len().max(2)).iter().map(|d| d[1])) / PI
    }

    /// The mean frequency: turns over the segment, bins.
    pub(crate) fn mean_frequency(&self) -> f64 {
        let ends = |u: f64| sum(&self.phase, legendre(u).into_iter());
        self.nu + (ends(1.0) - ends(-1.0)) / TAU
    }

    /// e^{Λ + jΦ} at each of the grid's places.
    pub(crate) fn envelope(&self, grid: &Grid) -> Vec<Complex64> {
        (0..grid.len())
            .map(|b| {
                let at = |coefficients: &[f64]| sum(coefficients, grid.basis.iter().map(|row| row[b]));
                Complex64::from_polar(at(&self.level).exp(), at(&self.phase))
            })
            .collect()
    }

    /// What it looks like in a track around its carrier: the tone, and its image.
    pub(super) fn parts(&self, grid: &Grid) -> Vec<(Complex64, Complex64)> {
        let still = self.is_steady().then(|| self.frequency(0.0));
        let part = |(b, envelope): (usize, Complex64)| {
            let nu = still.unwrap_or_else(|| self.frequency(grid.places[b]));
            grid.seen(b, envelope * 0.5, nu, self.nu)
        };
        self.envelope(grid).into_iter().enumerate().map(part).collect()
    }

    /// The same, both together.
    pub(super) fn points(&self, grid: &Grid) -> Vec<Complex64> {
        self.parts(grid).into_iter().map(|(tone, image)| tone + image).collect()
    }

    /// The same tone seen from its own mean frequency: the carrier takes the linear part of the phase.
    pub(crate) fn recentred(mut self) -> Self {
        let shift = self.mean_frequency() - self.nu;
        if let Some(slope) = self.phase.get_mut(1) {
            *slope -= shift * PI;
            self.nu += shift;
        }
        self
    }

    /// The root of the mean square of its peak amplitude over the segment.
    pub(crate) fn root_mean_square(&self) -> f64 {
        let squares = moments().map(|u| self.amplitude(u).powi(2));
        (squares.sum::<f64>() / MOMENTS as f64).sqrt()
    }

    /// Its greatest peak amplitude.
    pub(crate) fn greatest_amplitude(&self) -> f64 {
        moments().chain([-1.0, 1.0]).map(|u| self.amplitude(u)).fold(0.0, f64::max)
    }

    /// Greatest less least frequency, bins, and level, nepers; where it is 60 dB under its greatest it counts no more.
    pub(crate) fn span(&self) -> (f64, f64) {
        let least = LEAST * self.greatest_amplitude();
        let heard: Vec<f64> = moments().chain([-1.0, 1.0]).filter(|u| self.amplitude(*u) >= least).collect();
        let range = |value: &dyn Fn(f64) -> f64| {
            let values = heard.iter().map(|u| value(*u));
            let (low, high) =
                values.fold((f64::INFINITY, f64::NEG_INFINITY), |(low, high), v| (low.min(v), high.max(v)));
            high - low
        };
        let all_heard = heard.len() == MOMENTS + 2;
        let level = if all_heard { range(&|u| self.amplitude(u).ln()) } else { -LEAST.ln() };
        (range(&|u| self.frequency(u)), level)
    }

    /// The phase at the first of `n` samples.
    pub(crate) fn first_phase(&self, n: f64) -> f64 {
        let first = 1.0 / n - 1.0;
        let own = sum(&self.phase, legendre(first).into_iter());
        own + (TAU * self.nu * first / 2.0).rem_euclid(TAU)
    }

    /// What noise of unit variance a sample does to its mean amplitude and its mean frequency (bins); `None` where
    /// its orders cannot be told apart.
    ///
    /// A point of a track holds the mean of N/B samples, B blocks: in each of its real parts a variance of B/2N. Phase
    /// and level do not mix, and both have the normal matrix Σ P_p P_q |s|², s the half envelope.
    pub(crate) fn unit_uncertainty(&self, grid: &Grid) -> Option<(f64, f64)> {
        let weights: Vec<f64> = self.envelope(grid).iter().map(|e| e.norm_sqr() / 4.0).collect();
        let variance = grid.len() as f64 / (2.0 * grid.n as f64);
        let of = |gradient: Vec<f64>| {
            let inner = |p: usize, q: usize| {
                weights.iter().enumerate().map(|(b, w)| w * grid.basis[p][b] * grid.basis[q][b]).sum::<f64>()
            };
            let matrix = DMatrix::from_fn(gradient.len(), gradient.len(), inner);
            let gradient = DVector::from_vec(gradient);
            let solved = Cholesky::new(matrix)?.solve(&gradient);
            Some((variance * gradient.dot(&solved)).max(0.0).sqrt())
        };
        let root = self.root_mean_square();
        let level = |p: usize| {
            let products = weights.iter().zip(&grid.basis[p]).map(|(w, basis)| 4.0 * w * basis);
            products.sum::<f64>() / (weights.len() as f64 * root)
        };
        let amplitude = of((0..self.level.len()).map(level).collect())?;
        // The mean frequency is the phase's growth over the segment, 2 for each odd order, over a whole turn.
        let growth = |p: usize| if p % 2 == 1 { 1.0 / PI } else { 0.0 };
        let nu = of((0..self.phase.len()).map(growth).collect())?;
        Some((amplitude, nu))
    }

    /// Takes the tone out of `samples`, or puts it back (`sign` 1.0 takes it out, -1.0 puts it back).
    ///
    /// Phase and level are followed to second order within blocks so short that the third does not matter.
    pub(crate) fn take_out(&self, samples: &mut [f64], sign: f64) {
        let n = samples.len();
        let step = 2.0 / n.max(1) as f64;
        let omega = TAU * self.nu / n.max(1) as f64;
        let middle = (n as f64 - 1.0) / 2.0;
        let block = (n / BLOCKS_A_TURN).clamp(1, LONGEST_BLOCK);
        let orders = self.phase.len().max(self.level.len()).max(2);
        for (b, block_samples) in samples.chunks_mut(block).enumerate() {
            let centre = (b * block) as f64 + (block_samples.len() as f64 - 1.0) / 2.0 - middle;
            let u = centre * step;
            let rows = legendre_derivatives(u, orders);
            let of = |order: usize| {
                let re = sum(&self.level, rows.iter().map(|r| r[order]));
                Complex64::new(re, sum(&self.phase, rows.iter().map(|r| r[order])))
            };
            let carrier = Complex64::new(0.0, (omega * centre).rem_euclid(TAU));
            let slope = of(1) * step + Complex64::new(0.0, omega);
            let bend = of(2) * (step * step / 2.0);
            // Value at k from the centre: exp(c + s k + b k²); stepped by ever turning factors.
            let first = -(block_samples.len() as f64 - 1.0) / 2.0;
            let mut value = (of(0) + carrier + slope * first + bend * (first * first)).exp() * sign;
            let mut factor = (slope + bend * (2.0 * first + 1.0)).exp();
            let turn = (bend * 2.0).exp();
            for x in block_samples {
                *x -= value.re;
                value *= factor;
                factor *= turn;
            }
        }
    }
}

/// Moments at which a path is looked at for its mean and range.
const MOMENTS: usize = 64;

/// The middles of so many equal parts of the segment.
fn moments() -> impl Iterator<Item = f64> {
    (0..MOMENTS).map(|i| (2.0 * i as f64 + 1.0) / MOMENTS as f64 - 1.0)
}

/// Blocks in which a tone is put together: at least so many in a segment that has the samples.
const BLOCKS_A_TURN: usize = 2048;

/// Samples in such a block at most.
const LONGEST_BLOCK: usize = 64;
