//! Fitting all tones of a segment together by nonlinear least squares.

use std::f64::consts::TAU;

use nalgebra::{DMatrix, DVector};
use realfft::num_complex::Complex64;

use super::normal::{NormalEquations, SteadyTone};
use crate::signal::{Cancelled, Removal, Watch};
use crate::spectrum::Dense;

/// The background and the tones that fit a segment best.
#[derive(Debug, Clone)]
pub struct JointFit {
    /// The tones.
    pub tones: Vec<SteadyTone>,
    /// The constant and the slope a sample fitted with them (what was left of the mean or the line).
    pub background: (f64, f64),
    /// Whether the steps died away.
    pub converged: bool,
    /// Whether they came down to what no reading shows: a thousandth of a line.
    pub nearly: bool,
}

/// Standard uncertainties of one tone for noise of unit variance a sample.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct UnitUncertainty {
    /// Of the peak amplitude, jointly with all other tones.
    pub amplitude: f64,
    /// Of the frequency, rad a sample; 0 where it is held.
    pub omega: f64,
    /// Of the amplitude, were the tone alone.
    pub lone_amplitude: f64,
    /// Of the frequency, were the tone alone.
    pub lone_omega: f64,
}

/// Gauss-Newton steps at most.
const MOST_STEPS: usize = 60;

/// Longest step of a frequency, bins: a quarter of a line keeps each tone on its own peak.
const LONGEST_STEP: f64 = 0.25;

/// Frequencies that move less than this have nearly settled, bins.
const NEARLY: f64 = 1e-3;

/// Frequencies that move less than this have settled, bins.
const SETTLED: f64 = 1e-9;

/// Fits `start` jointly to the samples of `samples`, of which `removal` was removed before (and is fitted again).
///
/// Gauss-Newton with amplitudes solved linearly; `None` where two tones cannot be told apart.
///
/// # Errors
/// [`Cancelled`] where the watch says so; it is asked at every step.
///
/// # Reference
/// IEEE Std 1057, four-parameter sine fit, for one tone; Kay, Fundamentals of Statistical Signal Processing:
/// Estimation Theory, 1993, section 8.9, for nonlinear least squares (both from memory).
pub fn fit_jointly(
    samples: &Dense,
    removal: Removal,
    start: &[SteadyTone],
    watch: &Watch,
) -> Result<Option<JointFit>, Cancelled> {
    let n = samples.n_samples();
    let line = TAU / n as f64;
    let mut tones = start.to_vec();
    let mut background = (0.0, 0.0);
    let mut converged = tones.is_empty();
    let mut nearly = converged;
    for _ in 0..MOST_STEPS {
        watch.check()?;
        let Some(equations) = NormalEquations::of(n, removal, &tones) else { return Ok(None) };
        let step = equations.step(samples, &linear(removal, background, &tones));
        let longest = advance(removal, &mut background, &mut tones, &step, LONGEST_STEP * line);
        nearly = longest < NEARLY * line;
        if longest < SETTLED * line {
            converged = true;
            break;
        }
    }
    Ok(Some(JointFit { tones, background, converged, nearly }))
}

impl UnitUncertainty {
    /// The bounds of a lone tone far from 0 Hz and half the rate, of peak amplitude `amplitude` in `n` samples.
    ///
    /// # Reference
    /// Rife and Boorstyn, Single-tone parameter estimation from discrete-time observations, IEEE Trans. Information
    /// Theory 20(5), 1974, for a real tone (from memory).
    pub fn lone(n: usize, amplitude: f64) -> Self {
        let count = n as f64;
        let lone_amplitude = (2.0 / count).sqrt();
        let lone_omega = (24.0 / (amplitude * amplitude * count * (count * count - 1.0))).sqrt();
        Self { amplitude: lone_amplitude, omega: lone_omega, lone_amplitude, lone_omega }
    }
}

/// Standard uncertainties of each of `tones` for noise of unit variance a sample, from the inverse of the joint normal
/// matrix of a segment of `n` samples; `None` where two tones cannot be told apart.
pub fn unit_uncertainties(n: usize, removal: Removal, tones: &[SteadyTone]) -> Option<Vec<UnitUncertainty>> {
    if tones.is_empty() {
        return Some(Vec::new());
    }
    let covariance = NormalEquations::of(n, removal, tones)?.covariance();
    Some(uncertainties(n, removal, tones, &covariance))
}

/// How many columns the background has.
fn n_background(removal: Removal) -> usize {
    match removal {
        Removal::None => 0,
        Removal::Mean => 1,
        Removal::Line => 2,
    }
}

/// The parameters the model stands at, with 0 for the frequencies.
fn linear(removal: Removal, background: (f64, f64), tones: &[SteadyTone]) -> DVector<f64> {
    let mut parameters = [background.0, background.1][..n_background(removal)].to_vec();
    for tone in tones {
        parameters.extend([tone.middle_amplitude.re, tone.middle_amplitude.im]);
        if !tone.held {
            parameters.push(0.0);
        }
    }
    DVector::from_vec(parameters)
}

/// Takes a step; the longest change of a frequency, rad a sample.
fn advance(
    removal: Removal,
    background: &mut (f64, f64),
    tones: &mut [SteadyTone],
    step: &DVector<f64>,
    longest: f64,
) -> f64 {
    let mut steps = step.iter().copied();
    let mut next = || steps.next().unwrap_or(0.0);
    if n_background(removal) > 0 {
        background.0 += next();
    }
    if n_background(removal) > 1 {
        background.1 += next();
    }
    let mut moved: f64 = 0.0;
    for tone in tones {
        tone.middle_amplitude += Complex64::new(next(), next());
        if !tone.held {
            let change = next().clamp(-longest, longest);
            tone.omega = (tone.omega + change).clamp(1e-9, std::f64::consts::PI - 1e-9);
            moved = moved.max(change.abs());
        }
    }
    moved
}

fn uncertainties(n: usize, removal: Removal, tones: &[SteadyTone], covariance: &DMatrix<f64>) -> Vec<UnitUncertainty> {
    let mut at = n_background(removal);
    tones
        .iter()
        .map(|tone| {
            let size = tone.middle_amplitude.norm();
            let (x, y) = (tone.middle_amplitude.re / size, tone.middle_amplitude.im / size);
            let variance = x * x * covariance[(at, at)]
                + 2.0 * x * y * covariance[(at, at + 1)]
                + y * y * covariance[(at + 1, at + 1)];
            let omega = if tone.held { 0.0 } else { covariance[(at + 2, at + 2)].max(0.0).sqrt() };
            at += if tone.held { 2 } else { 3 };
            UnitUncertainty { amplitude: variance.max(0.0).sqrt(), omega, ..UnitUncertainty::lone(n, size) }
        })
        .collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn samples(n: usize, tones: &[(f64, f64, f64)], mean: f64) -> Vec<f64> {
        let value = |i: usize| {
            tones.iter().map(|(nu, peak, phase)| peak * (TAU * nu * i as f64 / n as f64 + phase).cos()).sum::<f64>()
        };
        (0..n).map(|i| value(i) + mean).collect()
    }

    fn start(n: usize, nu: f64) -> SteadyTone {
        SteadyTone { omega: TAU * nu / n as f64, middle_amplitude: Complex64::new(0.1, 0.1), held: false }
    }

    #[test]
    fn tones_without_noise_are_recovered_to_rounding() {
        let n = 1000;
        let made = [(2.3, 1.0, 0.3), (50.2, 0.5, 1.0), (51.5, 0.2, -2.0), (300.7, 1e-4, 0.0), (498.1, 0.3, 2.0)];
        let dense = Dense::of(&samples(n, &made, 0.7));
        let starts: Vec<SteadyTone> = made.iter().map(|m| start(n, m.0 + 0.1)).collect();
        let fit = fit_jointly(&dense, Removal::Mean, &starts, &Watch::new()).unwrap().unwrap();
        assert!(fit.converged);
        assert!((fit.background.0 - 0.7).abs() < 1e-11);
        for (tone, made) in fit.tones.iter().zip(&made) {
            assert!((tone.omega * n as f64 / TAU - made.0).abs() < 1e-7, "{} Hz", made.0);
            assert!((tone.middle_amplitude.norm() - made.1).abs() < 1e-11, "{}", made.0);
        }
    }

    /// Rife and Boorstyn 1974, for one real tone far from the ends: u(A)² = 2σ²/N, u(ω)² = 24σ²/(A²N(N²-1)).
    #[test]
    fn a_lone_tone_has_the_lone_bound() {
        let n = 1000;
        let dense = Dense::of(&samples(n, &[(100.3, 0.5, 1.0)], 0.0));
        let fit = fit_jointly(&dense, Removal::Mean, &[start(n, 100.2)], &Watch::new()).unwrap().unwrap();
        let u = unit_uncertainties(n, Removal::Mean, &fit.tones).unwrap()[0];
        assert!((u.amplitude / u.lone_amplitude - 1.0).abs() < 0.01);
        assert!((u.omega / u.lone_omega - 1.0).abs() < 0.01);
    }

    #[test]
    fn a_held_frequency_stays() {
        let n = 1000;
        let dense = Dense::of(&samples(n, &[(100.3, 0.5, 1.0)], 0.0));
        let held = SteadyTone { held: true, ..start(n, 100.0) };
        let fit = fit_jointly(&dense, Removal::None, &[held], &Watch::new()).unwrap().unwrap();
        assert_eq!(fit.tones[0].omega, held.omega);
        assert_eq!(unit_uncertainties(n, Removal::None, &fit.tones).unwrap()[0].omega, 0.0);
    }

    #[test]
    fn one_tone_twice_cannot_be_told_apart() {
        let n = 100;
        let dense = Dense::of(&samples(n, &[(10.3, 0.5, 1.0)], 0.0));
        let twice = [start(n, 10.0), start(n, 10.0)];
        assert!(fit_jointly(&dense, Removal::Mean, &twice, &Watch::new()).unwrap().is_none());
    }
}
