//! Stretches of blocks with one spectrum.

use std::ops::Range;

use super::blocks::Blocks;
use crate::signal::{Cancelled, Watch};

/// Places from which stretches are grown.
const SEEDS: usize = 64;
/// Standard deviations by which a block may exceed the departure to be expected.
const DEVIATIONS: f64 = 6.0;
/// An exponential power that is exceeded with P = 6e-6.
const TAIL: f64 = 12.0;
/// Departure allowed beside: tones are no noise, and beat.
const ALLOWED: f64 = 0.15;

/// Stretches of blocks that share one spectrum, longest found first; they may overlap.
pub(super) fn stretches(blocks: &Blocks, watch: &Watch) -> Result<Vec<Range<usize>>, Cancelled> {
    let width = (blocks.len() / 48).max(4).min(blocks.len());
    let step = (blocks.len() / SEEDS).max(1);
    let mut found: Vec<Range<usize>> = Vec::new();
    for start in (0..=blocks.len() - width).step_by(step) {
        watch.check()?;
        let seed = start..start + width;
        if found.iter().any(|f| f.start <= seed.start && seed.end <= f.end) {
            continue;
        }
        if let Some(stretch) = grow(blocks, seed) {
            found.push(stretch);
        }
    }
    found.sort_by_key(|f| std::cmp::Reverse(f.len()));
    Ok(found)
}

/// The stretch around `seed`: grown from the seed's spectrum, then twice from that of the middle half of what was
/// found, so that a block at its ends is never held against a model that holds the block itself.
fn grow(blocks: &Blocks, seed: Range<usize>) -> Option<Range<usize>> {
    let mut stretch = seed.clone();
    let mut model_blocks = seed.clone();
    for _ in 0..3 {
        let centre = usize::midpoint(model_blocks.start, model_blocks.end);
        let model = Model::of(blocks, model_blocks);
        let fits = |&b: &usize| model.fits(blocks, b);
        let end = (centre..blocks.len()).take_while(fits).last()? + 1;
        let start = (0..centre).rev().take_while(fits).last().unwrap_or(centre);
        stretch = start..end;
        if stretch.len() < seed.len() {
            return None;
        }
        let margin = (stretch.len() / 4).min((stretch.len() - seed.len()) / 2);
        model_blocks = stretch.start + margin..stretch.end - margin;
    }
    Some(stretch)
}

/// The mean spectrum of a stretch, and how far a block of the same may depart from it.
struct Model {
    per_power: Vec<f64>,
    ln_power: f64,
    bound: f64,
}

impl Model {
    fn of(blocks: &Blocks, stretch: Range<usize>) -> Self {
        let n = stretch.len() as f64;
        let mut mean = vec![0.0; blocks.n_lines()];
        for b in stretch {
            for (m, &p) in mean.iter_mut().zip(blocks.lines(b).0) {
                *m += f64::from(p) / n;
            }
        }
        let ln_power = mean.iter().map(|m| m.ln()).sum::<f64>();
        let per_power = mean.iter().map(|m| 1.0 / m).collect();
        Self { per_power, ln_power, bound: bound(blocks, n) }
    }

    /// Whether block `b` departs no further than the bound. The departure is the mean over the lines of
    /// x - ln x - 1, x the power over the model's: the likelihood ratio of Gaussian noise (Itakura and Saito 1968).
    /// It is quadratic in small changes of level and grows with the ratio itself where a tone comes up.
    fn fits(&self, blocks: &Blocks, b: usize) -> bool {
        let (power, ln_power) = blocks.lines(b);
        let ratios: f64 = power.iter().zip(&self.per_power).map(|(&p, per)| f64::from(p) * per).sum();
        let logs: f64 = ln_power.iter().map(|&l| f64::from(l)).sum::<f64>() - self.ln_power;
        (ratios - logs) / blocks.n_lines() as f64 - 1.0 <= self.bound
    }
}

/// The greatest departure of noise from a model of `n` blocks.
///
/// With x the mean of m exponential powers, E[x - ln x - 1] = ln m - psi(m), near 1/(2m) + 1/(12m^2), and its
/// variance at m = 1 is pi^2/6 - 1; both fall with m, the deviation as 1/m. A model of n blocks adds about 1/(mn).
/// Neighbouring lines under a Hann window are half independent. Few lines do not make a normal law of it: the tail of
/// one exponential power is added.
fn bound(blocks: &Blocks, n: f64) -> f64 {
    let m = blocks.n_averaged.max(1) as f64;
    let expected = 0.5 / m + 1.0 / (12.0 * m * m) + 1.0 / (m * n);
    let deviation = (std::f64::consts::PI.powi(2) / 6.0 - 1.0).sqrt() / m;
    let n_lines = blocks.n_lines() as f64;
    expected + ALLOWED + DEVIATIONS * deviation / (n_lines / 2.0).max(1.0).sqrt() + TAIL / (m * n_lines)
}
