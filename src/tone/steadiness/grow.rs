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
pub(super) struct Model {
    per_power: Vec<f64>,
    ln_power: f64,
    bound: f64,
}

impl Model {
    /// The mean of some blocks, at least one.
    pub(super) fn of(blocks: &Blocks, stretch: impl ExactSizeIterator<Item = usize>) -> Self {
        let n = stretch.len() as f64;
        let mut mean = vec![0.0; blocks.n_lines()];
        for b in stretch {
            for (m, &p) in mean.iter_mut().zip(blocks.lines(b)) {
                *m += f64::from(p) / n;
            }
        }
        let ln_power = sum_of_logarithms(mean.iter().copied());
        let per_power = mean.iter().map(|m| 1.0 / m).collect();
        Self { per_power, ln_power, bound: bound(blocks, n) }
    }

    /// How far block `b` departs from the model, over the bound. The departure is the mean over the lines of
    /// x - ln x - 1, x the power over the model's: the likelihood ratio of Gaussian noise (Itakura and Saito 1968).
    /// It is quadratic in small changes of level and grows with the ratio itself where a tone comes up.
    pub(super) fn departure(&self, blocks: &Blocks, b: usize) -> f64 {
        let ratios = product_sum(blocks.lines(b), &self.per_power);
        let logs = blocks.ln_power(b) - self.ln_power;
        ((ratios - logs) / blocks.n_lines() as f64 - 1.0) / self.bound
    }

    fn fits(&self, blocks: &Blocks, b: usize) -> bool {
        self.departure(blocks, b) <= 1.0
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

/// Terms added side by side, so that they need not wait for one another.
const LANES: usize = 8;

/// The sum of products.
fn product_sum(a: &[f32], b: &[f64]) -> f64 {
    let (a, b) = (a.chunks_exact(LANES), b.chunks_exact(LANES));
    let rest: f64 = a.remainder().iter().zip(b.remainder()).map(|(&x, y)| f64::from(x) * y).sum();
    let mut sums = [0.0; LANES];
    for (a, b) in a.zip(b) {
        for ((sum, &x), y) in sums.iter_mut().zip(a).zip(b) {
            *sum += f64::from(x) * y;
        }
    }
    sums.iter().sum::<f64>() + rest
}

/// Σ ln x of positive values, from the logarithms of products of a few, each held near 1 by its exponent.
pub(super) fn sum_of_logarithms(values: impl Iterator<Item = f64>) -> f64 {
    let (mut sum, mut product, mut exponents) = (0.0, 1.0_f64, 0_i64);
    for (i, x) in values.enumerate() {
        let bits = x.to_bits();
        let exponent = (bits >> 52) as i64 & 0x7ff;
        if exponent == 0 || exponent == 0x7ff {
            // Zero, subnormal, infinite or no number: as it is.
            sum += x.ln();
            continue;
        }
        exponents += exponent - 1023;
        // The sign stays: the logarithm of a negative value is no number.
        product *= f64::from_bits(bits & !(0x7ff << 52) | (1023 << 52));
        if i % 512 == 511 {
            sum += product.ln();
            product = 1.0;
        }
    }
    sum + product.ln() + exponents as f64 * std::f64::consts::LN_2
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn sums_of_logarithms_and_products_are_those_taken_one_by_one() {
        for n in [0, 1, 7, 8, 9, 511, 512, 513, 5000] {
            let values: Vec<f64> =
                (0..n).map(|i| 10_f64.powi(i % 61 - 30) * (1.0 + 0.37 * f64::from(i % 13))).collect();
            let plain: f64 = values.iter().map(|x| x.ln()).sum();
            let sum = sum_of_logarithms(values.iter().copied());
            assert!((sum - plain).abs() <= 1e-9 * f64::from(n).max(1.0), "{n}: {sum}, {plain}");
            let short: Vec<f32> = (0..n).map(|i| 0.5 + (i % 17) as f32).collect();
            let plain: f64 = short.iter().zip(&values).map(|(&x, y)| f64::from(x) * y).sum();
            assert!((product_sum(&short, &values) - plain).abs() <= 1e-12 * plain.abs(), "{n}");
        }
        assert!(sum_of_logarithms([1.0, f64::NAN].into_iter()).is_nan());
        assert_eq!(sum_of_logarithms([1.0, 0.0].into_iter()), f64::NEG_INFINITY);
        assert_eq!(sum_of_logarithms([f64::INFINITY, 2.0].into_iter()), f64::INFINITY);
        assert!((sum_of_logarithms([5e-324, 2.0].into_iter()) - (5e-324_f64.ln() + 2_f64.ln())).abs() < 1e-9);
    }
}
