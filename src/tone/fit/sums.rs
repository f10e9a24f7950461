//! The sums Σ m^p e^{jθm} over a segment's centred samples, in closed form: what the normal matrix of a fit of tones is
//! made of.

use std::f64::consts::{PI, TAU};

use realfft::num_complex::Complex64;

/// Powers of m that are summed: 0 to 4.
pub(super) const POWERS: usize = 5;

/// Coefficients of a power series in an increment, highest order POWERS-1.
type Jet = [f64; POWERS];

/// S_p(θ) = Σ_m m^p e^{jθm}, p = 0..4, over m = -(N-1)/2, -(N-3)/2, ... (N-1)/2, for `n` = N samples.
///
/// D(θ) = Σ e^{jθm} = sin(Nθ/2)/sin(θ/2) is real and even; S_p = (-j)^p d^p D/dθ^p. The derivatives are taken by
/// power-series arithmetic on D = N·sinc(Nθ/2)/sinc(θ/2), sinc x = sin(x)/x, which is smooth where the quotient of
/// sines is not. Relative to N·(N/2)^p the error is some 1e-15 times the powers of Nθ/2 that cancel, about 1e-13.
pub(super) fn centred_sums(n: usize, theta: f64) -> [Complex64; POWERS] {
    let turns = (theta / TAU).round();
    let reduced = theta - TAU * turns;
    // m is half-odd for even N: a whole turn then changes the sign.
    let sign = if n.is_multiple_of(2) && turns.rem_euclid(2.0) == 1.0 { -1.0 } else { 1.0 };
    let count = n as f64;
    let above = sinc_jet(count * reduced / 2.0, count / 2.0);
    let below = sinc_jet(reduced / 2.0, 0.5);
    let quotient = divide(above, below);
    let mut factorial = 1.0;
    std::array::from_fn(|p| {
        if p > 0 {
            factorial *= p as f64;
        }
        // (-j)^p: 1, -j, -1, j, 1.
        let turn = [Complex64::ONE, -Complex64::I, -Complex64::ONE, Complex64::I][p % 4];
        turn * (sign * count * quotient[p] * factorial)
    })
}

/// The power series of sinc(x + rate·h) in h.
fn sinc_jet(x: f64, rate: f64) -> Jet {
    let derivatives = sinc_derivatives(x);
    let (mut factorial, mut power) = (1.0, 1.0);
    std::array::from_fn(|p| {
        if p > 0 {
            factorial *= p as f64;
            power *= rate;
        }
        derivatives[p] * power / factorial
    })
}

/// sinc and its derivatives to the fourth at x.
fn sinc_derivatives(x: f64) -> Jet {
    if x.abs() < PI {
        return sinc_derivatives_by_series(x);
    }
    // x·sinc = sin: the p-th derivative gives x s_p + p s_{p-1} = sin(x + pπ/2).
    let (sin, cos) = x.sin_cos();
    let of_sine = [sin, cos, -sin, -cos, sin];
    let mut derivatives = [0.0; POWERS];
    derivatives[0] = sin / x;
    for p in 1..POWERS {
        derivatives[p] = (of_sine[p] - p as f64 * derivatives[p - 1]) / x;
    }
    derivatives
}

/// sinc x = Σ (-1)^k x^{2k}/(2k+1)!, differentiated term by term.
fn sinc_derivatives_by_series(x: f64) -> Jet {
    const TERMS: i32 = 16;
    let mut derivatives = [0.0; POWERS];
    let mut coefficient = 1.0;
    for k in 0..TERMS {
        let exponent = 2 * k;
        let mut falling = coefficient;
        for (p, derivative) in (0..).zip(&mut derivatives) {
            if exponent >= p {
                *derivative += falling * x.powi(exponent - p);
                falling *= f64::from(exponent - p);
            }
        }
        coefficient *= -1.0 / f64::from((exponent + 2) * (exponent + 3));
    }
    derivatives
}

/// The power series of a quotient.
fn divide(above: Jet, below: Jet) -> Jet {
    let mut quotient = [0.0; POWERS];
    for p in 0..POWERS {
        let known: f64 = (0..p).map(|i| quotient[i] * below[p - i]).sum();
        quotient[p] = (above[p] - known) / below[0];
    }
    quotient
}

#[cfg(test)]
mod tests {
    use super::*;

    fn slow(n: usize, theta: f64) -> [Complex64; POWERS] {
        let middle = (n as f64 - 1.0) / 2.0;
        let mut sums = [Complex64::ZERO; POWERS];
        for i in 0..n {
            let m = i as f64 - middle;
            for (p, sum) in (0..).zip(&mut sums) {
                *sum += Complex64::cis(theta * m) * m.powi(p);
            }
        }
        sums
    }

    #[test]
    fn closed_forms_equal_the_sums() {
        for n in [1, 2, 3, 10, 101, 1000] {
            for theta in
                [0.0, 1e-9, 1e-3, 0.01, 0.1, 1.0, 2.0, 3.0, PI - 1e-3, PI, 4.0, 6.0, TAU - 3e-3, TAU, 7.0, -0.5, 12.0]
            {
                let (closed, summed) = (centred_sums(n, theta), slow(n, theta));
                for p in 0..POWERS {
                    let size = n as f64 * (n as f64 / 2.0).powi(p as i32);
                    let error = (closed[p] - summed[p]).norm() / size;
                    assert!(error < 3e-13, "N = {n}, θ = {theta}, p = {p}: {error:e}");
                }
            }
        }
    }
}
