//! Windows that are designed for their length or from a wanted side-lobe level.

use std::f64::consts::PI;

use realfft::RealFftPlanner;
use realfft::num_complex::Complex64;

use super::angle::cis_turns;

/// The amplitude of the Dolph-Chebyshev design of N samples at real ν: T_{N-1}(x_0 cos(πν/N)), which swings between
/// -1 and 1 outside the main lobe and is R = 10^(dB/20) at ν = 0.
///
/// x_0 = cosh(arcosh(R)/(N-1)) is so close to one for long segments that x_0² - 1 is taken as a product of
/// sum and difference instead.
///
/// # Reference
/// C. L. Dolph, Proc. IRE 34 (1946) 335-348; as a window: F. J. Harris, Proc. IEEE 66 (1978) 51-83, section V-F.
#[derive(Debug, Clone, Copy)]
pub(super) struct Chebyshev {
    n: usize,
    order: f64,
    cosh: f64,
    sinh: f64,
}

impl Chebyshev {
    /// The design for `n` >= 2 samples with side lobes `attenuation_db` below the main lobe.
    pub(super) fn new(n: usize, attenuation_db: f64) -> Self {
        let order = n as f64 - 1.0;
        let reach = 10_f64.powf(attenuation_db / 20.0).acosh() / order;
        Self { n, order, cosh: reach.cosh(), sinh: reach.sinh() }
    }

    /// The amplitude at `bins`, -N to N.
    pub(super) fn amplitude(&self, bins: f64) -> f64 {
        let (sin, cos) = (PI * bins / self.n as f64).sin_cos();
        // z = x_0 cos θ; z² - 1 = (sinh c - cosh c |sin θ|)(sinh c + cosh c |sin θ|).
        let part = self.cosh * sin.abs();
        let above_one = (self.sinh - part) * (self.sinh + part);
        if above_one >= 0.0 {
            let size = (self.order * above_one.sqrt().asinh()).cosh();
            if cos < 0.0 && self.n.is_multiple_of(2) { -size } else { size }
        } else {
            (self.order * (-above_one).sqrt().atan2(self.cosh * cos)).cos()
        }
    }

    /// The samples, symmetric about (N-1)/2, not yet scaled: the inverse transform of the amplitudes at the lines.
    pub(super) fn samples(&self) -> Vec<f64> {
        let n = self.n;
        let mut lines: Vec<Complex64> = (0..=n / 2).map(|k| self.line(k)).collect();
        let plan = RealFftPlanner::<f64>::new().plan_fft_inverse(n);
        let mut samples = plan.make_output_vec();
        if plan.process(&mut lines, &mut samples).is_err() {
            // Lengths agree by construction and both end lines are made real; nothing else can fail.
            return vec![1.0; n];
        }
        let share = 0.5 / n as f64;
        samples.iter().zip(samples.iter().rev()).map(|(a, b)| share * (a + b)).collect()
    }

    fn line(&self, k: usize) -> Complex64 {
        let n = self.n as u64;
        if 2 * k == self.n {
            // T of odd order at zero; the transform wants this line real.
            return Complex64::new(0.0, 0.0);
        }
        // e^{-jπk(N-1)/N} = (-1)^k e^{jπk/N}.
        let turn = cis_turns(k as u64 * (n + 1), 2 * n);
        if k == 0 { Complex64::new(self.amplitude(0.0), 0.0) } else { turn * self.amplitude(k as f64) }
    }
}

/// How often the Slepian iteration is repeated; each brings the next even sequence down by a factor of three or more.
const SLEPIAN_ROUNDS: usize = 40;

/// The discrete prolate spheroidal (Slepian) sequence of order zero of N samples that gathers its energy within
/// ±`half_width_bins`, not yet scaled, all samples positive.
///
/// The sequence is the top eigenvector of Slepian's tridiagonal matrix. That matrix is (N²-1)/4 minus a chain of
/// springs i(N-i)/2 with a restoring term 2·sin²(πW)·((N-1)/2 - i)² at each sample; the sequence is the softest shape
/// of that chain and is found by inverse iteration. Written so, no step subtracts, so that every sample, the smallest
/// included, keeps its digits at any N. O(N).
///
/// # Reference
/// D. Slepian, Bell System Technical Journal 57 (1978) 1371-1430, eq. 14.
pub(super) fn slepian(n: usize, half_width_bins: f64) -> Vec<f64> {
    let half_width = (half_width_bins / n as f64).min(0.5);
    let chain = Chain::new(n, 2.0 * (PI * half_width).sin().powi(2));
    let mut shape = vec![1.0; chain.upper.len()];
    for _ in 0..SLEPIAN_ROUNDS {
        if chain.solve(&mut shape) < 1e-15 {
            break;
        }
    }
    // The half chain ends in the middle sample for odd N and one before the mirror for even N.
    let mirror: Vec<f64> = shape.iter().rev().skip(n % 2).copied().collect();
    shape.extend(mirror);
    shape
}

/// The first half of the chain; the second mirrors it, so its end is free (even N) or ends in the middle (odd N).
#[derive(Debug)]
struct Chain {
    /// Share of the solution of the sample before, forward.
    lower: Vec<f64>,
    /// Share of the sample after, backward.
    upper: Vec<f64>,
    /// What multiplies the right-hand side.
    gain: Vec<f64>,
    /// The last right-hand side's weight: half a sample in the middle of an odd length.
    last_weight: f64,
}

impl Chain {
    fn new(n: usize, stiffness: f64) -> Self {
        let half = n.div_ceil(2);
        let spring = |i: usize| 0.5 * i as f64 * (n - i) as f64;
        let last_weight = if n % 2 == 1 { 0.5 } else { 1.0 };
        let (mut lower, mut upper, mut gain) =
            (Vec::with_capacity(half), Vec::with_capacity(half), Vec::with_capacity(half));
        let mut excess = 0.0;
        for i in 0..half {
            let distance = 0.5 * (n as f64 - 1.0) - i as f64;
            let weight = if i + 1 == half { last_weight } else { 1.0 };
            let before = if i == 0 { 0.0 } else { spring(i) };
            lower.push(if i == 0 { 0.0 } else { before / (before + excess) });
            let carried = if i == 0 { 0.0 } else { before * excess / (before + excess) };
            excess = weight * stiffness * distance * distance + carried;
            let after = if i + 1 == half { 0.0 } else { spring(i + 1) };
            upper.push(after / (after + excess));
            gain.push(1.0 / (after + excess));
        }
        Self { lower, upper, gain, last_weight }
    }

    /// One inverse iteration on `shape`, scaled so that the last (largest) sample is one; the largest change.
    fn solve(&self, shape: &mut [f64]) -> f64 {
        let before = shape.to_vec();
        if let Some(last) = shape.last_mut() {
            *last *= self.last_weight;
        }
        let mut carried = 0.0;
        for (value, lower) in shape.iter_mut().zip(&self.lower) {
            *value += lower * carried;
            carried = *value;
        }
        let mut after = 0.0;
        for ((value, upper), gain) in shape.iter_mut().zip(&self.upper).zip(&self.gain).rev() {
            *value = *value * gain + upper * after;
            after = *value;
        }
        let scale = shape.last().map_or(1.0, |last| 1.0 / last);
        for value in shape.iter_mut() {
            *value *= scale;
        }
        shape.iter().zip(&before).map(|(a, b)| (a - b).abs()).fold(0.0, f64::max)
    }
}

/// The coefficients a_0 = 1, a_m = 2F_m of Taylor's window w(t) = 1 + 2Σ F_m cos(2πmt), m under n̄: n̄ - 1 nearly equal
/// side lobes `attenuation_db` below the main lobe. Parameters n̄, dB.
///
/// # Reference
/// T. T. Taylor, IRE Trans. Antennas and Propagation AP-3 (1955) 16-28; as a window: Carrara, Goodman and Majewski,
/// Spotlight Synthetic Aperture Radar, 1995, appendix D.
pub(super) fn taylor_terms(parameters: &[f64]) -> Vec<f64> {
    let (n_bar, attenuation_db) = match parameters {
        [n_bar, attenuation_db, ..] => (*n_bar, *attenuation_db),
        _ => (1.0, 0.0),
    };
    let a = 10_f64.powf(attenuation_db / 20.0).acosh() / PI;
    let dilation = n_bar * n_bar / (a * a + (n_bar - 0.5).powi(2));
    let n_zeros = n_bar as u32 - 1;
    let zeros: Vec<f64> = (1..=n_zeros).map(|k| dilation * (a * a + (f64::from(k) - 0.5).powi(2))).collect();
    let term = |m: u32| {
        let square = f64::from(m * m);
        let above: f64 = zeros.iter().map(|zero| 1.0 - square / zero).product();
        let below: f64 = (1..=n_zeros).filter(|k| *k != m).map(|k| 1.0 - square / f64::from(k * k)).product();
        let value = above / below;
        if m % 2 == 1 { value } else { -value }
    };
    std::iter::once(1.0).chain((1..=n_zeros).map(term)).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_chebyshev_design_is_r_in_the_middle_and_at_most_one_beyond_its_lobe() {
        for n in [2, 3, 16, 17, 1009] {
            let design = Chebyshev::new(n, 60.0);
            assert!((design.amplitude(0.0) - 1000.0).abs() < 1e-9, "n = {n}");
            for step in 0..200 {
                let bins = 3.0 + f64::from(step) / 200.0 * (n as f64 / 2.0 - 3.0);
                assert!(n < 16 || design.amplitude(bins).abs() <= 1.0 + 1e-12, "n = {n}, bins = {bins}");
            }
        }
    }

    #[test]
    fn short_chebyshev_designs_are_those_of_the_polynomial() {
        // N = 2: T_1, both samples equal. N = 3: T_2(x_0 cos θ) = x_0²(1 + cos 2θ) - 1, so the samples stand as
        // x_0² : 2(x_0² - 1) : x_0², with x_0² = (R + 1)/2.
        let two = Chebyshev::new(2, 40.0).samples();
        assert!((two[0] - two[1]).abs() < 1e-12 * two[0]);
        let three = Chebyshev::new(3, 40.0).samples();
        let square = 0.5 * (100.0 + 1.0);
        assert!((three[1] / three[0] - 2.0 * (square - 1.0) / square).abs() < 1e-12);
    }

    #[test]
    fn a_slepian_sequence_solves_its_eigenproblem() {
        for (n, half_width_bins) in [(2, 1.0), (3, 0.5), (4, 2.0), (31, 3.0), (64, 4.0), (257, 8.0)] {
            let shape = slepian(n, half_width_bins);
            assert_eq!(shape.len(), n);
            let cos = (2.0 * PI * (half_width_bins / n as f64).min(0.5)).cos();
            let diagonal = |i: usize| (0.5 * (n as f64 - 1.0) - i as f64).powi(2) * cos;
            let spring = |i: usize| 0.5 * i as f64 * (n - i) as f64;
            let times: Vec<f64> = (0..n)
                .map(|i| {
                    let before = if i > 0 { spring(i) * shape[i - 1] } else { 0.0 };
                    let after = if i + 1 < n { spring(i + 1) * shape[i + 1] } else { 0.0 };
                    before + diagonal(i) * shape[i] + after
                })
                .collect();
            let middle = n / 2;
            let value = times[middle] / shape[middle];
            for i in 0..n {
                let scale = (n * n) as f64;
                assert!((times[i] - value * shape[i]).abs() < 1e-13 * scale, "n = {n}, i = {i}");
                assert!(shape[i] > 0.0);
            }
        }
    }

    #[test]
    fn a_taylor_window_of_one_lobe_is_rectangular() {
        assert_eq!(taylor_terms(&[1.0, 30.0]), vec![1.0]);
        let terms = taylor_terms(&[4.0, 30.0]);
        assert_eq!((terms.len(), terms[0]), (4, 1.0));
    }
}
