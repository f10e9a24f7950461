//! The joint Cramér-Rao bound, from the derivatives of the model at every sample: nothing here is shared with the fit.

use std::f64::consts::TAU;

use nalgebra::DMatrix;
use panewise::signal::Removal;

use super::made::{Made, MadeTone};

/// The bound on one tone's standard deviations.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Bound {
    /// Of the peak amplitude.
    pub amplitude: f64,
    /// Of the mean frequency, bins.
    pub nu: f64,
}

/// The bounds of all tones, with their phases, the drift of those that drift and the background unknown too; the noise
/// is white of the density that there truly is at each tone.
///
/// # Reference
/// D. C. Rife, R. R. Boorstyn, Multiple tone parameter estimation from discrete-time observations, Bell System
/// Technical Journal 55 (1976) 1389-1410 (from memory): the inverse of the information matrix JᵀJ/σ².
pub fn bounds(made: &Made) -> Vec<Bound> {
    let n = made.n();
    let mut columns: Vec<Vec<f64>> = Vec::new();
    let parts: Vec<f64> = (0..n).map(|i| i as f64 / n as f64).collect();
    let mut places = Vec::new();
    for tone in &made.tones {
        places.push(columns.len());
        columns.extend(derivatives(tone, &parts));
    }
    if made.removal != Removal::None {
        columns.push(vec![1.0; n]);
    }
    if made.removal == Removal::Line {
        columns.push(parts.iter().map(|t| t - 0.5).collect());
    }
    if columns.is_empty() {
        return Vec::new();
    }
    let mut scales = Vec::new();
    for column in &mut columns {
        let length = column.iter().map(|x| x * x).sum::<f64>().sqrt();
        for x in column.iter_mut() {
            *x /= length;
        }
        scales.push(length);
    }
    let jacobian = DMatrix::from_fn(n, columns.len(), |i, j| columns[j][i]);
    let inverse = (jacobian.transpose() * &jacobian).cholesky().expect("the tones can be told apart").inverse();
    let deviation = |j: usize| inverse[(j, j)].sqrt() / scales[j];
    let bound = |(tone, place): (&MadeTone, usize)| {
        let noise = made.density(tone.nu).sqrt();
        Bound { amplitude: noise * deviation(place), nu: noise * deviation(place + 1) }
    };
    made.tones.iter().zip(places).map(bound).collect()
}

/// By peak, mean frequency, phase and, where it drifts, drift.
fn derivatives(tone: &MadeTone, parts: &[f64]) -> Vec<Vec<f64>> {
    let by = |derivative: &dyn Fn(f64) -> f64| parts.iter().map(|&t| derivative(t)).collect::<Vec<f64>>();
    // About the middle of the segment, so that frequency and phase are told apart well.
    let minus_sine = |t: f64| -tone.peak * tone.angle(t).sin();
    let mut columns = vec![by(&|t| tone.angle(t).cos()), by(&|t| minus_sine(t) * TAU * (t - 0.5)), by(&minus_sine)];
    if tone.drift != 0.0 {
        columns.push(by(&|t| minus_sine(t) * TAU / 2.0 * (t * t - t)));
    }
    columns
}
