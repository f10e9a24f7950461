//! The segment's real transform.

use std::sync::{Arc, Mutex, PoisonError};

use realfft::num_complex::Complex64;
use realfft::{RealFftPlanner, RealToComplex};

use super::buffers;

/// The lines X\[0\] to X\[M/2\] of X\[k\] = Σ_n x\[n\] e^{-j2πkn/M}, of N real samples padded with zeros to M = P·N.
///
/// P, the padding, is 1 unless asked for otherwise: padding shows more points of the same curve, it parts nothing.
#[derive(Debug, Clone)]
pub struct Transform {
    n: usize,
    padding: usize,
    lines: Vec<Complex64>,
}

impl Transform {
    /// The transform's length M: the samples and the zeros behind them.
    pub fn length(&self) -> usize {
        self.n
    }

    /// How many lines of the transform make one bin of the segment, P.
    pub fn padding(&self) -> usize {
        self.padding
    }

    /// X\[0\] to X\[M/2\].
    pub fn lines(&self) -> &[Complex64] {
        &self.lines
    }

    /// X\[k\] at any whole k: periodic in M, and X\[-k\] is the conjugate of X\[k\].
    pub fn at(&self, k: i64) -> Complex64 {
        let k = k.rem_euclid(self.n as i64) as usize;
        if k < self.lines.len() { self.lines[k] } else { self.lines[self.n - k].conj() }
    }

    /// Copies X\[first\], X\[first+1\], ... into `out`; any whole k is allowed, as for [`Transform::at`].
    pub fn copy_from(&self, first: i64, out: &mut [Complex64]) {
        let inside = usize::try_from(first).ok().and_then(|f| self.lines.get(f..f.checked_add(out.len())?));
        match inside {
            Some(lines) => out.copy_from_slice(lines),
            None => out.iter_mut().zip(first..).for_each(|(o, k)| *o = self.at(k)),
        }
    }
}

impl Drop for Transform {
    fn drop(&mut self) {
        buffers::COMPLEX.give_back(std::mem::take(&mut self.lines));
    }
}

/// The real transform of `samples`, of any length; a length is never cut or padded.
///
/// No samples at all give one line of 0.
pub fn transform(samples: &[f64]) -> Transform {
    let mut work = buffers::REAL.take(samples.len());
    work.copy_from_slice(samples);
    let transform = transform_in_place(&mut work);
    buffers::REAL.give_back(work);
    transform
}

/// As [`transform`], of the samples and so many zeros behind them that the transform is `padding` times as long.
///
/// # Panics
/// If `padding` is 0.
pub fn transform_padded(samples: &[f64], padding: usize) -> Transform {
    assert!(padding > 0, "padding to 0 times the length");
    let mut work = buffers::REAL.take(samples.len() * padding);
    work[..samples.len()].copy_from_slice(samples);
    work[samples.len()..].fill(0.0);
    let mut transform = transform_in_place(&mut work);
    transform.padding = padding;
    buffers::REAL.give_back(work);
    transform
}

/// As [`transform`], using up the samples.
pub(super) fn transform_in_place(samples: &mut [f64]) -> Transform {
    let n = samples.len();
    if n == 0 {
        return Transform { n: 1, padding: 1, lines: vec![Complex64::ZERO] };
    }
    let plan = plan(n);
    let mut lines = buffers::COMPLEX.take(n / 2 + 1);
    let mut scratch = buffers::COMPLEX.take(plan.get_scratch_len());
    // The buffers have the plan's lengths; the only other error is about inverse transforms.
    let done = plan.process_with_scratch(samples, &mut lines, &mut scratch);
    debug_assert!(done.is_ok(), "{done:?}");
    buffers::COMPLEX.give_back(scratch);
    Transform { n, padding: 1, lines }
}

/// Σ_n w\[n\] x\[n\] e^{-j2πνn/N} at one ν, in a pass over the samples; `weights` w are as many as the samples.
pub fn weighted_line(samples: &[f64], weights: &[f64], nu: f64) -> Complex64 {
    const BLOCK: usize = 64;
    let omega = std::f64::consts::TAU * nu / samples.len().max(1) as f64;
    let turns: Vec<Complex64> = (0..BLOCK).map(|k| Complex64::cis(-omega * k as f64)).collect();
    let blocks = samples.chunks(BLOCK).zip(weights.chunks(BLOCK)).enumerate();
    let block = |(b, (x, w)): (usize, (&[f64], &[f64]))| {
        let sum: Complex64 = x.iter().zip(w).zip(&turns).map(|((x, w), turn)| turn * (x * w)).sum();
        sum * Complex64::cis(-(omega * (b * BLOCK) as f64).rem_euclid(std::f64::consts::TAU))
    };
    blocks.map(block).sum()
}

/// How many plans are kept. A dragged edge asks for a new length at every step; each plan holds twiddle factors of
/// about the segment's size, so all of them cannot be kept.
const KEPT_PLANS: usize = 4;

fn plan(n: usize) -> Arc<dyn RealToComplex<f64>> {
    static PLANS: Mutex<Vec<Arc<dyn RealToComplex<f64>>>> = Mutex::new(Vec::new());
    let find = |plans: &mut Vec<Arc<dyn RealToComplex<f64>>>| {
        let place = plans.iter().position(|p| p.len() == n)?;
        let plan = plans.remove(place);
        plans.push(Arc::clone(&plan));
        Some(plan)
    };
    let lock = || PLANS.lock().unwrap_or_else(PoisonError::into_inner);
    if let Some(plan) = find(&mut lock()) {
        return plan;
    }
    // Planning takes as long as transforming: not under the lock.
    let plan = RealFftPlanner::<f64>::new().plan_fft_forward(n);
    let mut plans = lock();
    plans.push(Arc::clone(&plan));
    if plans.len() > KEPT_PLANS {
        plans.remove(0);
    }
    plan
}

#[cfg(test)]
mod tests {
    use super::*;

    /// The definition, term by term, with the angle reduced before it is turned into a phase.
    fn slow(samples: &[f64], k: usize) -> Complex64 {
        let n = samples.len();
        let phase = |i: usize| Complex64::cis(-std::f64::consts::TAU * ((i * k) % n) as f64 / n as f64);
        samples.iter().enumerate().map(|(i, x)| phase(i) * x).sum()
    }

    fn some_samples(n: usize) -> Vec<f64> {
        (0..n).map(|i| (0.7 * i as f64).sin() + 0.3 * ((i * i) as f64 * 0.01).cos() + 0.1).collect()
    }

    #[test]
    fn every_length_from_1_to_300_equals_the_definition() {
        for n in 1..=300 {
            let samples = some_samples(n);
            let transform = transform(&samples);
            assert_eq!(transform.lines().len(), n / 2 + 1);
            for k in 0..n {
                let error = (transform.at(k as i64) - slow(&samples, k)).norm();
                assert!(error < 1e-11, "N = {n}, k = {k}: {error:e}");
            }
        }
    }

    #[test]
    fn lines_repeat_and_mirror() {
        for n in [1, 2, 7, 8] {
            let transform = transform(&some_samples(n));
            for k in -20..20 {
                assert_eq!(transform.at(k), transform.at(k + n as i64));
                assert!((transform.at(k) - transform.at(-k).conj()).norm() < 1e-12);
            }
        }
        assert_eq!(super::transform(&[]).at(3), Complex64::ZERO);
    }
}
