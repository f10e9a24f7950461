//! The transform between its lines: Y(ν) at any real ν in constant time.

use realfft::num_complex::Complex64;

use super::buffers;
use super::transform::{Transform, transform_in_place};
use crate::window::taps::{N_TAPS, tap_derivatives, taps, transform_of_taps};

/// A transform that can be evaluated at any real frequency.
///
/// X(ν) = Σ_n x\[n\] e^{-j2πνn/N} is interpolated from a transform of twice the length (see the taps of the window
/// floor), after the samples were divided by the taps' own transform; the error is about 1e-14 of Σ|x| (a test holds
/// 1e-13). Windowing by a cosine sum shifts whole lines, and so needs no transform of its own.
///
/// # Reference
/// Fessler and Sutton, Nonuniform fast Fourier transforms using min-max interpolation, IEEE Trans. Signal Processing
/// 51(2), 2003 (from memory).
#[derive(Debug, Clone)]
pub struct Dense {
    n: usize,
    doubled: Transform,
}

impl Dense {
    /// The dense transform of `samples`.
    pub fn of(samples: &[f64]) -> Self {
        let n = samples.len().max(1);
        let middle = n / 2;
        let mut doubled = buffers::REAL.take(2 * n);
        doubled.fill(0.0);
        doubled[..samples.len()].copy_from_slice(samples);
        // The divisor is even about the middle sample: one serves both sides.
        for distance in 0..=n / 2 {
            let divisor = transform_of_taps(distance as f64 / (2 * n) as f64);
            doubled[middle - distance] /= divisor;
            if distance > 0 && middle + distance < n {
                doubled[middle + distance] /= divisor;
            }
        }
        let transform = transform_in_place(&mut doubled);
        buffers::REAL.give_back(doubled);
        Self { n, doubled: transform }
    }

    /// Samples in the segment, N.
    pub fn n_samples(&self) -> usize {
        self.n
    }

    /// X(ν): the transform of the samples as they are.
    pub fn at(&self, nu: f64) -> Complex64 {
        self.windowed_at(&[1.0], nu)
    }

    /// Y(ν): the transform of the samples times the cosine sum with the coefficients `terms` (a_0, a_1, ...), of which
    /// those past the sixteenth are left out.
    pub fn windowed_at(&self, terms: &[f64], nu: f64) -> Complex64 {
        let terms = &terms[..terms.len().min(MOST_TERMS)];
        let reach = 2 * terms.len().saturating_sub(1);
        let place = 2.0 * nu;
        let first = place.floor() as i64 - N_TAPS as i64 / 2 + 1;
        let mut lines = [Complex64::ZERO; N_TAPS + 4 * MOST_TERMS];
        let lines = &mut lines[..N_TAPS + 2 * reach];
        self.doubled.copy_from(first - reach as i64, lines);
        let weights = taps(place - place.floor());
        // The samples were counted from the middle for φ, from the first one for the transform.
        let middle = std::f64::consts::PI * (self.n / 2) as f64 / self.n as f64;
        let mut turn = Complex64::cis(-middle * (place - first as f64));
        let step = Complex64::cis(middle);
        let mut sum = Complex64::ZERO;
        for (i, weight) in weights.iter().enumerate() {
            sum += turn * *weight * windowed_line(&lines[i..=i + 2 * reach], terms);
            turn *= step;
        }
        sum
    }
}

/// How many moments [`Dense::moments_at`] gives.
pub const MOMENTS: usize = crate::window::taps::N_DERIVATIVES;

impl Dense {
    /// Σ_n x\[n\] m^p e^{-j2πνm/N} for p = 0, 1, 2, with m = n - (N-1)/2 counted from the segment's middle.
    ///
    /// The p-th is the p-th derivative of the transform, times (jN/2π)^p: the interpolating function is differentiated
    /// in its place. Errors stay below 1e-13, 3e-12 and 1e-9 of Σ|x|·(N/2)^p.
    pub fn moments_at(&self, nu: f64) -> [Complex64; MOMENTS] {
        let place = 2.0 * nu;
        let first = place.floor() as i64 - N_TAPS as i64 / 2 + 1;
        let mut lines = [Complex64::ZERO; N_TAPS];
        self.doubled.copy_from(first, &mut lines);
        let n = self.n as f64;
        let middle = self.n / 2;
        let quarter_turns = std::f64::consts::PI * middle as f64 / n;
        // e^{jπjn0/N} of line j, reduced before it is turned into a phase: j is large, n0/N near a half.
        let turn_of = (first as f64 * quarter_turns).rem_euclid(std::f64::consts::TAU);
        let mut turn = Complex64::cis(turn_of);
        let step = Complex64::cis(quarter_turns);
        let weights = tap_derivatives(place - place.floor());
        let mut sums = [Complex64::ZERO; MOMENTS];
        for (i, line) in lines.iter().enumerate() {
            for (sum, weights) in sums.iter_mut().zip(&weights) {
                *sum += turn * line * weights[i];
            }
            turn *= step;
        }
        // φ is a function of 2ν; d/dν brings a 2, and Σ x (n - n0)^p e^{...} a jN/2π, each time.
        let per_order = Complex64::I * (n / std::f64::consts::PI);
        let about_line = [sums[0], sums[1] * per_order, sums[2] * per_order * per_order];
        let shift = middle as f64 - (n - 1.0) / 2.0;
        let turn = Complex64::cis(-std::f64::consts::TAU * nu * shift / n);
        [
            turn * about_line[0],
            turn * (about_line[1] + about_line[0] * shift),
            turn * (about_line[2] + about_line[1] * (2.0 * shift) + about_line[0] * (shift * shift)),
        ]
    }
}

/// Coefficients of a cosine sum that are used.
const MOST_TERMS: usize = 16;

/// The middle one of `lines`, windowed: a whole line of the segment is two of the doubled transform.
fn windowed_line(lines: &[Complex64], terms: &[f64]) -> Complex64 {
    let middle = lines.len() / 2;
    let mut sum = lines[middle] * terms.first().copied().unwrap_or(0.0);
    for (m, a) in terms.iter().enumerate().skip(1) {
        let half = if m % 2 == 0 { a / 2.0 } else { -a / 2.0 };
        sum += (lines[middle - 2 * m] + lines[middle + 2 * m]) * half;
    }
    sum
}

#[cfg(test)]
mod tests {
    use super::*;

    fn slow(samples: &[f64], nu: f64) -> Complex64 {
        let turn = -std::f64::consts::TAU * nu / samples.len() as f64;
        samples.iter().enumerate().map(|(i, x)| Complex64::cis(turn * i as f64) * x).sum()
    }

    fn some_samples(n: usize) -> Vec<f64> {
        (0..n).map(|i| (0.9 * i as f64).sin() + 0.01 * (i % 5) as f64 - 0.3).collect()
    }

    /// Allowed error of a value, in units of Σ|x|.
    const ERROR: f64 = 1e-13;

    #[test]
    fn values_between_lines_equal_the_definition() {
        for n in [1, 2, 3, 5, 16, 17, 97, 1000, 1009] {
            let samples = some_samples(n);
            let dense = Dense::of(&samples);
            let size: f64 = samples.iter().map(|x| x.abs()).sum();
            for i in -40..200 {
                let nu = 0.237 * f64::from(i);
                let error = (dense.at(nu) - slow(&samples, nu)).norm();
                assert!(error < ERROR * size, "N = {n}, ν = {nu}: {error:e} of {size}");
            }
        }
    }

    #[test]
    fn windowed_values_equal_windowing_the_samples() {
        let terms = [0.42, 0.5, 0.08];
        let n = 300;
        let samples = some_samples(n);
        let window = |i: usize| {
            let turn = std::f64::consts::TAU * i as f64 / n as f64;
            terms[0] - terms[1] * turn.cos() + terms[2] * (2.0 * turn).cos()
        };
        let windowed: Vec<f64> = samples.iter().enumerate().map(|(i, x)| x * window(i)).collect();
        let dense = Dense::of(&samples);
        for i in 0..500 {
            let nu = 0.3 * f64::from(i);
            let error = (dense.windowed_at(&terms, nu) - slow(&windowed, nu)).norm();
            assert!(error < ERROR * 300.0, "ν = {nu}: {error:e}");
        }
    }

    #[test]
    fn moments_equal_their_sums() {
        for n in [8, 17, 100, 1009] {
            let samples = some_samples(n);
            let dense = Dense::of(&samples);
            let size: f64 = samples.iter().map(|x| x.abs()).sum();
            let middle = (n as f64 - 1.0) / 2.0;
            for i in 0..60 {
                let nu = 0.37 * f64::from(i);
                let turn = -std::f64::consts::TAU * nu / n as f64;
                let moments = dense.moments_at(nu);
                for (p, moment) in (0..).zip(moments) {
                    let term = |(i, x): (usize, &f64)| {
                        let m = i as f64 - middle;
                        Complex64::cis(turn * m) * x * m.powi(p)
                    };
                    let sum: Complex64 = samples.iter().enumerate().map(term).sum();
                    let error = (moment - sum).norm() / (size * (n as f64 / 2.0).powi(p));
                    assert!(error < [1e-13, 3e-12, 1e-9][p as usize], "N = {n}, ν = {nu}, p = {p}: {error:e}");
                }
            }
        }
    }
}
