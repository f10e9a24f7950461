//! Interpolation of a function limited in band from samples taken twice as densely as it needs.
//!
//! The interpolating function is the Kaiser-Bessel one, φ(u) = I_0(β√(1-(u/8)²))/I_0(β), |u| <= 8: sixteen samples make
//! a value. If the samples are those of the function divided by φ's own transform along the other axis, the error is
//! about 1e-14 of the largest value that the samples could add up to.
//!
//! # Reference
//! J. I. Jackson et al., IEEE Trans. Medical Imaging 10 (1991) 473-478 (gridding with the Kaiser-Bessel function).

use std::f64::consts::PI;
use std::sync::LazyLock;

use super::bessel::i0_scaled;

/// How many samples make a value.
pub(crate) const N_TAPS: usize = 16;

/// The sample before the place is number 7 of the sixteen, counted from 0.
pub(crate) const BEFORE: u8 = 7;

const WIDTH: f64 = N_TAPS as f64;

/// Best for samples twice as dense as needed: π·width·(1 - 1/4).
const BETA: f64 = PI * WIDTH * 0.75;

/// Terms of the Chebyshev series of φ over one step between samples; the last are below 1e-17.
const N_TERMS: usize = 24;

/// The weights of the sixteen samples around a place that lies `part` (0 to 1) of a step past sample [`BEFORE`].
pub(crate) fn taps(part: f64) -> [f64; N_TAPS] {
    static SERIES: LazyLock<[[f64; N_TAPS]; N_TERMS]> = LazyLock::new(series);
    clenshaw(&SERIES, part)
}

/// Clenshaw's recurrence for series over a part of a step, all taps side by side.
fn clenshaw(series: &[[f64; N_TAPS]; N_TERMS], part: f64) -> [f64; N_TAPS] {
    let twice = 4.0 * part - 2.0;
    let (mut next, mut after) = ([0.0; N_TAPS], [0.0; N_TAPS]);
    let [constant, others @ ..] = series;
    for terms in others.iter().rev() {
        for ((next, after), term) in next.iter_mut().zip(&mut after).zip(terms) {
            (*next, *after) = (twice * *next - *after + term, *next);
        }
    }
    let mut weights = *constant;
    for ((weight, next), after) in weights.iter_mut().zip(next).zip(after) {
        *weight += 0.5 * twice * next - after;
    }
    weights
}

/// φ and the derivatives that [`tap_derivatives`] gives.
pub(crate) const N_DERIVATIVES: usize = 3;

/// φ and its first two derivatives at the sixteen taps around a place that lies `part` past a line.
pub(crate) fn tap_derivatives(part: f64) -> [[f64; N_TAPS]; N_DERIVATIVES] {
    static OF_DERIVATIVES: LazyLock<[[[f64; N_TAPS]; N_TERMS]; N_DERIVATIVES]> = LazyLock::new(|| {
        let of_taps = series();
        let first = differentiated(&of_taps);
        let second = differentiated(&first);
        [of_taps, first, second]
    });
    std::array::from_fn(|order| clenshaw(&OF_DERIVATIVES[order], part))
}

/// The Chebyshev series of the derivative with respect to the part of a line (half of what the series runs over).
fn differentiated(series: &[[f64; N_TAPS]; N_TERMS]) -> [[f64; N_TAPS]; N_TERMS] {
    let mut derivative = [[0.0; N_TAPS]; N_TERMS];
    for order in (1..N_TERMS).rev() {
        for tap in 0..N_TAPS {
            let above = if order + 1 < N_TERMS { derivative[order + 1][tap] } else { 0.0 };
            derivative[order - 1][tap] = above + 2.0 * order as f64 * series[order][tap];
        }
    }
    for constant in &mut derivative[0] {
        *constant /= 2.0;
    }
    derivative.map(|row| row.map(|c| 2.0 * c))
}

/// φ's transform ∫ φ(u) cos(2πut) du at `cycles_per_step` t, |t| <= 1/4: what samples are divided by beforehand.
///
/// T sinh(r)/(r I_0(β)), r = √(β² - (πTt)²): r is above 30 over the whole range, where sinh(r) is e^r/2 to rounding.
pub(crate) fn transform_of_taps(cycles_per_step: f64) -> f64 {
    static SCALE: LazyLock<f64> = LazyLock::new(|| 0.5 * WIDTH / i0_scaled(BETA));
    let root = (BETA * BETA - (PI * WIDTH * cycles_per_step).powi(2)).sqrt();
    *SCALE * (root - BETA).exp() / root
}

fn series() -> [[f64; N_TAPS]; N_TERMS] {
    let angle = |node: usize| PI * (node as f64 + 0.5) / N_TERMS as f64;
    let value = |tap: usize, node: usize| {
        let part = 0.5 * (angle(node).cos() + 1.0);
        interpolant(part + f64::from(BEFORE) - tap as f64)
    };
    std::array::from_fn(|order| {
        let norm = if order == 0 { 1.0 } else { 2.0 } / N_TERMS as f64;
        std::array::from_fn(|tap| {
            let term = |node: usize| value(tap, node) * (order as f64 * angle(node)).cos();
            norm * (0..N_TERMS).map(term).sum::<f64>()
        })
    })
}

/// φ(u).
fn interpolant(u: f64) -> f64 {
    let x = 2.0 * u / WIDTH;
    let root = ((1.0 - x) * (1.0 + x)).max(0.0).sqrt();
    (BETA * (root - 1.0)).exp() * i0_scaled(BETA * root) / i0_scaled(BETA)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_series_is_the_function() {
        for step in 0..=100 {
            let part = f64::from(step) / 100.0;
            for (tap, weight) in taps(part).into_iter().enumerate() {
                let exact = interpolant(part + 7.0 - tap as f64);
                assert!((weight - exact).abs() < 1e-14, "{part} {tap}: {weight} {exact}");
            }
        }
    }

    #[test]
    fn a_cosine_below_the_limit_is_interpolated() {
        for cycles in [0.0, 0.1, 0.2, 0.25] {
            let wave = |u: f64| (2.0 * PI * cycles * u).cos();
            for step in 0..20 {
                let part = f64::from(step) / 20.0;
                let sum: f64 = taps(part).into_iter().enumerate().map(|(tap, weight)| weight * wave(tap as f64)).sum();
                let value = sum / transform_of_taps(cycles);
                assert!((value - wave(7.0 + part)).abs() < 1e-13, "{cycles} {part}: {:e}", value - wave(7.0 + part));
            }
        }
    }
}
