//! A window's transform at every real frequency.

use std::f64::consts::PI;
use std::sync::Arc;

use realfft::num_complex::Complex64;

use super::Window;
use super::angle::{Position, centred};
use super::catalogue::Shape;
use super::design::Chebyshev;
use super::gridded::Gridded;
use super::window_type::{decay_of_segment, scale_to_one};

/// The kernel W(ν) = Σ_n w\[n\] e^{-j2πνn/N} of a window of N samples. Cheap to clone.
///
/// Cosine sums, Dolph-Chebyshev and the exponential are in closed form, cosine sums to rounding of N·Σ|a_k|; the others
/// come from their samples through a table, to about 1e-14 of Σ|w|. A table is made at the kernel's first use.
#[derive(Debug, Clone)]
pub struct Kernel {
    n: usize,
    form: Form,
}

#[derive(Debug, Clone)]
enum Form {
    /// One sample, 1.
    One,
    CosineSum {
        terms: Arc<[f64]>,
        /// w\[0\], the height of the edge.
        edge: f64,
    },
    /// The design's amplitude times a scale.
    Chebyshev {
        design: Chebyshev,
        scale: f64,
    },
    /// exp(-decay) is left at the segment's end.
    Exponential {
        decay: f64,
    },
    Sampled(Arc<Gridded>),
}

impl Kernel {
    pub(super) fn new(window: &Window, n: usize) -> Self {
        Self { n, form: Form::new(window, n) }
    }

    /// The number of samples N; the kernel repeats after N bins.
    pub fn n(&self) -> usize {
        self.n
    }

    /// W(ν) at ν bins; 0 for a window of no samples.
    pub fn at(&self, nu: f64) -> Complex64 {
        if self.n == 0 {
            return Complex64::new(0.0, 0.0);
        }
        let position = Position::new(nu, self.n);
        match &self.form {
            Form::One => Complex64::new(1.0, 0.0),
            Form::CosineSum { terms, edge } => cosine_sum(terms, *edge, self.n as f64, position),
            Form::Chebyshev { design, scale } => {
                let turn = Complex64::cis(PI * position.bins() / self.n as f64);
                position.half_turns() * turn * (scale * design.amplitude(position.bins()))
            }
            Form::Exponential { decay } => exponential(*decay, self.n as f64, position),
            Form::Sampled(gridded) => gridded.at(position),
        }
    }

    /// |W(ν)|/|W(0)| in dB; -∞ at a null.
    pub fn level_db(&self, nu: f64) -> f64 {
        20.0 * (self.at(nu).norm() / self.at(0.0).norm()).log10()
    }
}

impl Form {
    fn new(window: &Window, n: usize) -> Self {
        if n <= 1 {
            return Self::One;
        }
        if let Some(terms) = window.shared_terms() {
            let edge = terms.iter().enumerate().map(|(k, a)| if k % 2 == 0 { *a } else { -a }).sum();
            return Self::CosineSum { terms, edge };
        }
        match window.entry().shape {
            Shape::DolphChebyshev => {
                let design = Chebyshev::new(n, window.first_parameter());
                Self::Chebyshev { scale: scale_to_one(&design.samples()), design }
            }
            Shape::Exponential => Self::Exponential { decay: decay_of_segment(window.first_parameter()) },
            _ => Self::Sampled(Arc::new(Gridded::new(window.samples(n), window.entry().is_dft_even()))),
        }
    }
}

/// Dirichlet kernels at every ±k, summed. With δ the distance to the nearest line,
/// W = e^{-jπδ} { sin(πδ)·Σ_k (-1)^k a_k/2 [cot(π(ν-k)/N) + cot(π(ν+k)/N)] + j·w\[0\]·sin(πδ) }: each cotangent is a
/// Dirichlet kernel about the middle of the segment, the last part is what the unpaired sample 0 adds.
fn cosine_sum(terms: &[f64], edge: f64, n: f64, position: Position) -> Complex64 {
    let sine = (PI * position.offset).sin();
    let dirichlet = |shift: f64| {
        let line = centred(position.line + shift, n);
        if line != 0.0 {
            sine / (PI * (line + position.offset) / n).tan()
        } else if position.offset == 0.0 {
            n
        } else {
            sine / (PI * position.offset / n).tan()
        }
    };
    let mut sum = 0.0;
    for (k, a) in terms.iter().enumerate().rev() {
        let both = if k == 0 { dirichlet(0.0) } else { 0.5 * (dirichlet(-(k as f64)) + dirichlet(k as f64)) };
        sum += if k % 2 == 0 { a * both } else { -a * both };
    }
    Complex64::new(sum, edge * sine) * Complex64::cis(-PI * position.offset)
}

/// (1 - q^N)/(1 - q) with q = e^{-(decay + j2πν)/N}.
fn exponential(decay: f64, n: f64, position: Position) -> Complex64 {
    let below = one_less_exp(decay / n, 2.0 * PI * position.bins() / n);
    if below.norm_sqr() == 0.0 {
        return Complex64::new(n, 0.0);
    }
    one_less_exp(decay, 2.0 * PI * position.offset) / below
}

/// 1 - e^{-(x + jy)} without cancellation.
fn one_less_exp(x: f64, y: f64) -> Complex64 {
    let half = (0.5 * y).sin();
    Complex64::new(2.0 * half * half - (-x).exp_m1() * y.cos(), (-x).exp() * y.sin())
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::window::catalogue;

    /// Accuracy asked of cosine sums, of N·Σ|a_k|; the sum they are held against has rounding of its own.
    const CLOSED_FORM: f64 = 4e-15;
    /// Accuracy asked of all others, of Σ|w|.
    const SAMPLED: f64 = 2e-14;

    fn windows() -> Vec<Window> {
        let more =
            ["tukey=0", "tukey=1", "kaiser=40", "gaussian=0", "gaussian=8", "dolph-chebyshev=20", "taylor=32,80"];
        let more = more.into_iter().chain(["slepian=8", "exponential=0", "exponential=200", "cosine-sum=1,0.3,-0.4"]);
        let entries = catalogue().iter().map(|entry| entry.name);
        entries.chain(more).map(|text| Window::parse(text).unwrap()).collect()
    }

    /// The defining sum with its phases reduced in whole numbers, ν given as a fraction of whole numbers.
    fn plain_sum(samples: &[f64], above: i64, below: i64) -> Complex64 {
        let period = samples.len() as i128 * i128::from(below);
        let turn = |i: usize| {
            let part = (i as i128 * i128::from(above)).rem_euclid(period);
            Complex64::cis(-2.0 * PI * (part as f64 / period as f64))
        };
        samples.iter().enumerate().map(|(i, w)| turn(i) * w).sum()
    }

    #[test]
    fn every_kernel_is_the_sum_that_defines_it() {
        for window in windows() {
            for n in [1_u32, 2, 3, 4, 5, 8, 21, 64, 65, 66, 101, 256, 1009] {
                let (samples, kernel) = (window.samples(n as usize), window.kernel(n as usize));
                let size: f64 = samples.iter().map(|w| w.abs()).sum();
                let (size, share) = match window.cosine_terms() {
                    Some(terms) => (f64::from(n) * terms.iter().map(|a| a.abs()).sum::<f64>(), CLOSED_FORM),
                    None => (size, SAMPLED),
                };
                let near_period = 16 * i64::from(n);
                for above in (-40..220).chain(near_period - 20..near_period + 20).chain([8 * i64::from(n), 16_000_005])
                {
                    let error = (kernel.at(above as f64 / 16.0) - plain_sum(&samples, above, 16)).norm();
                    assert!(error <= share * size, "{window} N = {n} at {above}/16: {:e}", error / size);
                }
            }
        }
    }

    #[test]
    fn a_long_sampled_kernel_is_the_sum_that_defines_it() {
        for text in ["kaiser=8.6", "slepian=4", "tukey=0.25", "bohman", "dolph-chebyshev=80", "exponential=60"] {
            let window = Window::parse(text).unwrap();
            for n in [65_536_u32, 30_011] {
                let (samples, kernel) = (window.samples(n as usize), window.kernel(n as usize));
                for above in [0, 7, 31, 200_001, 8 * i64::from(n) - 1, 8 * i64::from(n)] {
                    let error = (kernel.at(above as f64 / 16.0) - plain_sum(&samples, above, 16)).norm();
                    let size: f64 = samples.iter().sum();
                    // The plain sum itself loses digits over so many samples.
                    assert!(error <= 5.0 * SAMPLED * size, "{text} N = {n} at {above}/16: {:e}", error / size);
                }
            }
        }
    }

    #[test]
    fn kernels_close_to_a_line_do_not_break() {
        let kernel = Window::parse("blackman").unwrap().kernel(1000);
        for line in [0.0, 1.0, 2.0, 3.0, 999.0, 1000.0] {
            for offset in [1e-300, 1e-16, 1e-12, 1e-9] {
                let (here, there) = (kernel.at(line), kernel.at(line + offset));
                assert!((here - there).norm() < 1e-5 && there.re.is_finite(), "{line} + {offset:e}");
            }
        }
        assert_eq!(kernel.at(1e300), kernel.at(1e300 % 1000.0));
        assert_eq!(kernel.at(7.0).norm(), 0.0);
    }

    #[test]
    fn no_samples_have_no_kernel_and_one_has_one() {
        for window in windows() {
            assert_eq!(window.kernel(0).at(0.3), Complex64::new(0.0, 0.0));
            assert_eq!(window.kernel(1).at(0.3), Complex64::new(1.0, 0.0));
        }
    }
}
