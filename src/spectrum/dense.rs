//! The transform between its lines: Y(ν) at any real ν in constant time.

use std::sync::LazyLock;

use realfft::num_complex::Complex64;

use super::transform::{Transform, transform_in_place};

/// Lines of the doubled transform that take part in one value.
const TAPS: usize = 16;

/// Shape of the interpolating function, π·TAPS·(1 - 1/(2σ)) for the doubling σ = 2 (Fessler and Sutton 2003).
const BETA: f64 = std::f64::consts::PI * TAPS as f64 * 0.75;

/// A transform that can be evaluated at any real frequency.
///
/// X(ν) = Σ_n x\[n\] e^{-j2πνn/N} is interpolated from a transform of twice the length with the Kaiser-Bessel function
/// φ(u) = I0(β√(1-(2u/T)²)), T = 16 taps, after the samples were divided by the transform of φ; the error is about
/// 1e-14 of Σ|x| (a test holds 1e-13). Windowing by a cosine sum shifts whole lines, and so needs no transform of its
/// own.
///
/// # Reference
/// Fessler and Sutton, Nonuniform fast Fourier transforms using min-max interpolation, IEEE Trans. Signal Processing
/// 51(2), 2003; Potts, Steidl and Tasche, Fast Fourier transforms for nonequispaced data, 2001 (Kaiser-Bessel
/// functions); both from memory.
#[derive(Debug, Clone)]
pub struct Dense {
    n: usize,
    doubled: Transform,
}

impl Dense {
    /// The dense transform of `samples`.
    pub fn of(samples: &[f64]) -> Self {
        let n = samples.len().max(1);
        let middle = (n / 2) as f64;
        let t = |i: usize| (i as f64 - middle) / (2 * n) as f64;
        let mut doubled: Vec<f64> = samples.iter().enumerate().map(|(i, x)| x / transform_of_phi(t(i))).collect();
        doubled.resize(2 * n, 0.0);
        Self { n, doubled: transform_in_place(&mut doubled) }
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
        let first = place.floor() as i64 - TAPS as i64 / 2 + 1;
        let mut lines = [Complex64::ZERO; TAPS + 4 * MOST_TERMS];
        let lines = &mut lines[..TAPS + 2 * reach];
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
pub const MOMENTS: usize = 3;

impl Dense {
    /// Σ_n x\[n\] m^p e^{-j2πνm/N} for p = 0, 1, 2, with m = n - (N-1)/2 counted from the segment's middle.
    ///
    /// The p-th is the p-th derivative of the transform, times (jN/2π)^p: the interpolating function is differentiated
    /// in its place. Errors stay below 1e-13, 3e-12 and 1e-9 of Σ|x|·(N/2)^p.
    pub fn moments_at(&self, nu: f64) -> [Complex64; MOMENTS] {
        let place = 2.0 * nu;
        let first = place.floor() as i64 - TAPS as i64 / 2 + 1;
        let mut lines = [Complex64::ZERO; TAPS];
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

/// φ and its first two derivatives at the sixteen taps around a place that lies `part` past a line.
fn tap_derivatives(part: f64) -> [[f64; TAPS]; MOMENTS] {
    static SERIES_OF_DERIVATIVES: LazyLock<[[[f64; TAPS]; SERIES]; MOMENTS]> = LazyLock::new(|| {
        let of_taps = series_of_taps();
        let first = differentiated(&of_taps);
        let second = differentiated(&first);
        [of_taps, first, second]
    });
    std::array::from_fn(|order| clenshaw(&SERIES_OF_DERIVATIVES[order], part))
}

/// The Chebyshev series of the derivative with respect to the part of a line (half of what the series runs over).
fn differentiated(series: &[[f64; TAPS]; SERIES]) -> [[f64; TAPS]; SERIES] {
    let mut derivative = [[0.0; TAPS]; SERIES];
    for order in (1..SERIES).rev() {
        for tap in 0..TAPS {
            let above = if order + 1 < SERIES { derivative[order + 1][tap] } else { 0.0 };
            derivative[order - 1][tap] = above + 2.0 * order as f64 * series[order][tap];
        }
    }
    for tap in 0..TAPS {
        derivative[0][tap] /= 2.0;
    }
    derivative.map(|row| row.map(|c| 2.0 * c))
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

/// Terms of the Chebyshev series of φ over one line of the doubled transform; the last are below 1e-17.
const SERIES: usize = 24;

/// φ at the sixteen taps around a place that lies `part` (0 to 1) past a line.
fn taps(part: f64) -> [f64; TAPS] {
    static SERIES_OF_TAPS: LazyLock<[[f64; TAPS]; SERIES]> = LazyLock::new(series_of_taps);
    clenshaw(&SERIES_OF_TAPS, part)
}

/// Clenshaw's recurrence, all taps side by side.
fn clenshaw(series: &[[f64; TAPS]; SERIES], part: f64) -> [f64; TAPS] {
    let x = 2.0 * part - 1.0;
    let (mut next, mut after) = ([0.0; TAPS], [0.0; TAPS]);
    for coefficients in series.iter().skip(1).rev() {
        for tap in 0..TAPS {
            let value = 2.0 * x * next[tap] - after[tap] + coefficients[tap];
            after[tap] = next[tap];
            next[tap] = value;
        }
    }
    std::array::from_fn(|tap| x * next[tap] - after[tap] + series[0][tap])
}

fn series_of_taps() -> [[f64; TAPS]; SERIES] {
    let angle = |j: usize| std::f64::consts::PI * (j as f64 + 0.5) / SERIES as f64;
    let value = |tap: usize, j: usize| {
        let part = f64::midpoint(angle(j).cos(), 1.0);
        phi(part + TAPS as f64 / 2.0 - 1.0 - tap as f64)
    };
    std::array::from_fn(|order| {
        let norm = if order == 0 { 1.0 } else { 2.0 } / SERIES as f64;
        std::array::from_fn(|tap| {
            norm * (0..SERIES).map(|j| value(tap, j) * (order as f64 * angle(j)).cos()).sum::<f64>()
        })
    })
}

/// φ(u) = I0(β√(1-(2u/T)²)) / I0(β).
fn phi(u: f64) -> f64 {
    let x = 2.0 * u / TAPS as f64;
    let root = (1.0 - x * x).max(0.0).sqrt();
    scaled_i0(BETA * root) * (BETA * (root - 1.0)).exp() / *SCALED_I0_OF_BETA
}

/// ∫φ(u) e^{-j2πut} du = T sinh(√(β²-(πTt)²)) / (√(β²-(πTt)²) I0(β)), |t| up to 1/4.
fn transform_of_phi(t: f64) -> f64 {
    let turn = std::f64::consts::PI * TAPS as f64 * t;
    let root = (BETA * BETA - turn * turn).sqrt();
    let sinh = ((root - BETA).exp() - (-root - BETA).exp()) / 2.0;
    TAPS as f64 * sinh / (root * *SCALED_I0_OF_BETA)
}

static SCALED_I0_OF_BETA: LazyLock<f64> = LazyLock::new(|| scaled_i0(BETA));

/// I0(x) e^{-x} for x from 0 to a few dozen, by the ascending series of positive terms (Abramowitz and Stegun 9.6.12).
fn scaled_i0(x: f64) -> f64 {
    let quarter = x * x / 4.0;
    let (mut term, mut sum) = (1.0, 1.0);
    for k in 1..200 {
        term *= quarter / f64::from(k * k);
        sum += term;
        if term < 1e-17 * sum {
            break;
        }
    }
    sum * (-x).exp()
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

    /// Abramowitz and Stegun, Handbook of Mathematical Functions, table 9.8: e^{-x} I0(x) at 1, 5 and 10 (from memory).
    #[test]
    fn the_bessel_function_meets_its_table() {
        for (x, value) in [(0.0, 1.0), (1.0, 0.465_759_607_6), (5.0, 0.183_540_812_6), (10.0, 0.127_833_337_2)] {
            assert!((scaled_i0(x) - value).abs() < 1e-9, "{x}: {}", scaled_i0(x));
        }
    }
}
