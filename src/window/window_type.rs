//! A window as the user chose it: an entry of the catalogue with its parameters.

use std::sync::Arc;

use super::angle::cos_turns;
use super::catalogue::{Entry, Shape};
use super::design::{Chebyshev, slepian};
use super::error::WindowError;
use super::lobes::FLAT_TOP_DB;
use super::shape::Place;
use super::text::check_parameters;
use super::{Kernel, Merit, merit};

/// A window of the catalogue with its parameters; written `hann`, `kaiser=8.6`, `cosine-sum=0.5,0.5`.
#[derive(Clone)]
pub struct Window {
    entry: &'static Entry,
    parameters: Vec<f64>,
    terms: Option<Arc<[f64]>>,
}

/// The sums of a window of N samples.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sums {
    /// S1 = Σ w.
    pub s1: f64,
    /// S2 = Σ w².
    pub s2: f64,
}

impl Window {
    /// The window of an entry with checked parameters.
    pub(super) fn new(entry: &'static Entry, parameters: Vec<f64>) -> Result<Self, WindowError> {
        let parameters = check_parameters(entry, parameters)?;
        let terms: Option<Arc<[f64]>> = match entry.shape {
            Shape::CosineSum(terms) => Some(terms.into()),
            Shape::Terms(terms) => Some(terms(&parameters).into()),
            _ => None,
        };
        Ok(Self { entry, parameters, terms })
    }

    /// The catalogue's entry.
    pub fn entry(&self) -> &'static Entry {
        self.entry
    }

    /// The catalogue's name, without parameters.
    pub fn name(&self) -> &'static str {
        self.entry.name
    }

    /// The parameters, in the order of the entry's [`Entry::parameters`] (for `cosine-sum` the coefficients).
    pub fn parameters(&self) -> &[f64] {
        &self.parameters
    }

    /// The coefficients a_k of w\[n\] = Σ_k (-1)^k a_k cos(2πkn/N), where the window is a cosine sum.
    pub fn cosine_terms(&self) -> Option<&[f64]> {
        self.terms.as_deref()
    }

    pub(super) fn shared_terms(&self) -> Option<Arc<[f64]>> {
        self.terms.clone()
    }

    pub(super) fn first_parameter(&self) -> f64 {
        self.parameters.first().copied().unwrap_or(0.0)
    }

    /// Whether its top is so flat that its maximum says nothing of frequency: the kernel stays within 0.05 dB of
    /// W(0) to half a bin, so that its scalloping loss is under 0.05 dB too.
    pub fn is_flat_top(&self) -> bool {
        // Only a cosine sum can be: every other entry's loss is 0.07 dB or more over its whole parameter range.
        self.terms.is_some() && merit::flatness_db(self).abs() < FLAT_TOP_DB
    }

    /// The samples w\[0\] to w\[n-1\]; one sample is 1 whatever the window.
    pub fn samples(&self, n: usize) -> Vec<f64> {
        if n <= 1 {
            return vec![1.0; n];
        }
        match (&self.entry.shape, &self.terms) {
            (Shape::CosineSum(_) | Shape::Terms(_), terms) => cosine_sum_samples(terms.as_deref().unwrap_or(&[1.0]), n),
            (Shape::Formula(formula), _) => {
                let half: Vec<f64> = (0..=n / 2).map(|i| formula(Place::of(i, n), &self.parameters)).collect();
                mirrored(&half, n)
            }
            (Shape::DolphChebyshev, _) => scaled_to_one(Chebyshev::new(n, self.first_parameter()).samples()),
            (Shape::Slepian, _) => slepian(n, self.first_parameter()),
            (Shape::Exponential, _) => {
                let decay = decay_of_segment(self.first_parameter());
                (0..n).map(|i| (-decay * i as f64 / n as f64).exp()).collect()
            }
        }
    }

    /// The sums S1 and S2 over N samples: in closed form for a cosine sum of K+1 terms over more than 2K samples,
    /// else by summing.
    pub fn sums(&self, n: usize) -> Sums {
        match self.cosine_terms() {
            Some([mean, others @ ..]) if n > 2 * others.len() && n > 1 => {
                let squares: f64 = others.iter().map(|a| a * a).sum();
                Sums { s1: n as f64 * mean, s2: n as f64 * (mean * mean + 0.5 * squares) }
            }
            _ => {
                let samples = self.samples(n);
                Sums { s1: compensated(samples.iter().copied()), s2: compensated(samples.iter().map(|w| w * w)) }
            }
        }
    }

    /// The kernel for N samples.
    pub fn kernel(&self, n: usize) -> Kernel {
        Kernel::new(self, n)
    }

    /// The figures of merit for N samples, computed once for each window and length.
    pub fn merit(&self, n: usize) -> Arc<Merit> {
        merit::cached(self, n)
    }

    /// Half the main lobe's width, from its middle to its first null, in bins; half of [`Merit::width_null_bins`] to
    /// the accuracy of a plot: found over 4096 samples at most, and kept, so that asking again costs nothing.
    pub fn main_lobe_half_width_bins(&self, n: usize) -> f64 {
        merit::half_width_bins(self, n)
    }
}

/// ln(1/r) of the whole segment for a decay in dB.
pub(super) fn decay_of_segment(decay_db: f64) -> f64 {
    decay_db * std::f64::consts::LN_10 / 20.0
}

/// Samples 0 to n/2 of a DFT-even window, with the rest mirrored.
fn mirrored(half: &[f64], n: usize) -> Vec<f64> {
    let rest = half.iter().skip(1).take((n - 1) / 2).rev();
    half.iter().chain(rest).copied().collect()
}

/// w\[n\] = Σ_k (-1)^k a_k cos(2πkn/N), every cosine from one table.
fn cosine_sum_samples(terms: &[f64], n: usize) -> Vec<f64> {
    let table: Vec<f64> = (0..=n / 2).map(|m| cos_turns(m as u64, n as u64)).collect();
    let cosine = |turn: usize| table.get(turn.min(n - turn)).copied().unwrap_or(1.0);
    let mut half = vec![0.0; n / 2 + 1];
    for (k, a) in terms.iter().enumerate() {
        let signed = if k % 2 == 0 { *a } else { -a };
        let step = k % n;
        let mut turn = 0;
        for value in &mut half {
            *value += signed * cosine(turn);
            turn += step;
            if turn >= n {
                turn -= n;
            }
        }
    }
    mirrored(&half, n)
}

/// Samples scaled so that the middle one is 1.
fn scaled_to_one(mut samples: Vec<f64>) -> Vec<f64> {
    let scale = scale_to_one(&samples);
    for value in &mut samples {
        *value *= scale;
    }
    samples
}

/// What makes the middle sample 1. Not the largest: the end samples of a long Dolph-Chebyshev design stand above it.
pub(super) fn scale_to_one(samples: &[f64]) -> f64 {
    samples.get(samples.len() / 2).map_or(1.0, |middle| 1.0 / middle)
}

/// A sum that does not lose digits with length (Neumaier 1974).
fn compensated(values: impl Iterator<Item = f64>) -> f64 {
    let (mut sum, mut lost) = (0.0_f64, 0.0_f64);
    for value in values {
        let next = sum + value;
        lost += if sum.abs() >= value.abs() { (sum - next) + value } else { (value - next) + sum };
        sum = next;
    }
    sum + lost
}
