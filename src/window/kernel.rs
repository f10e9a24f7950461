//! A window's transform at every real frequency.

use realfft::num_complex::Complex64;

use super::Window;

/// The kernel W(ν) = Σ_n w\[n\] e^{-j2πνn/N} of a window of N samples.
#[derive(Debug, Clone)]
pub struct Kernel {
    samples: Vec<f64>,
}

pub(super) fn cosine_sum_sample(terms: &[f64], i: usize, n: usize) -> f64 {
    let turn = std::f64::consts::TAU * i as f64 / n as f64;
    terms.iter().enumerate().map(|(k, a)| if k % 2 == 0 { *a } else { -a } * (k as f64 * turn).cos()).sum()
}

impl Kernel {
    pub(super) fn new(window: &Window, n: usize) -> Self {
        Self { samples: window.samples(n) }
    }

    /// W(ν) at ν bins.
    pub fn at(&self, nu: f64) -> Complex64 {
        let n = self.samples.len() as f64;
        let turn = -std::f64::consts::TAU * nu / n;
        self.samples.iter().enumerate().map(|(i, w)| Complex64::cis(turn * i as f64) * w).sum()
    }
}
