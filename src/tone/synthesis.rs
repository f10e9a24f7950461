//! A segment less its fitted tones: the residue.

use realfft::num_complex::Complex64;

/// Samples for which one table of turns serves.
const BLOCK: usize = 64;

/// Takes Re(a e^{jωn}) out of `samples`, n counted from the first of them; `amplitude` is a, `omega` ω in rad a sample.
///
/// The phase is computed anew for every block of samples: the error stays at rounding however long the segment.
pub(super) fn take_out_tone(samples: &mut [f64], omega: f64, amplitude: Complex64) {
    let turns: [Complex64; BLOCK] = std::array::from_fn(|k| Complex64::cis(omega * k as f64));
    let (re, im) = (turns.map(|t| t.re), turns.map(|t| t.im));
    for (b, block) in samples.chunks_mut(BLOCK).enumerate() {
        let start = amplitude * Complex64::cis((omega * (b * BLOCK) as f64).rem_euclid(std::f64::consts::TAU));
        for ((x, re), im) in block.iter_mut().zip(&re).zip(&im) {
            *x -= start.re * re - start.im * im;
        }
    }
}

/// Takes a constant and a slope a sample out, m counted from the middle of the segment.
pub(super) fn take_out_background(samples: &mut [f64], (constant, slope): (f64, f64)) {
    let middle = (samples.len() as f64 - 1.0) / 2.0;
    for (n, x) in samples.iter_mut().enumerate() {
        *x -= constant + slope * (n as f64 - middle);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_tone_and_a_line_leave_nothing() {
        let (omega, amplitude) = (0.7123, Complex64::from_polar(2.0, 0.3));
        let mut samples: Vec<f64> = (0..10_007)
            .map(|n| 2.0 * (omega * f64::from(n) + 0.3).cos() + 0.5 + 1e-3 * (f64::from(n) - 5003.0))
            .collect();
        take_out_tone(&mut samples, omega, amplitude);
        take_out_background(&mut samples, (0.5, 1e-3));
        assert!(samples.iter().all(|x| x.abs() < 1e-11));
    }
}
