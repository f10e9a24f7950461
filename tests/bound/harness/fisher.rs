//! The joint Cramér-Rao bound, from the derivatives of the model at every sample: nothing here is shared with the fit.

use std::f64::consts::TAU;

use nalgebra::{DMatrix, DVector};
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

/// The model's derivatives at every sample, by each tone's peak, frequency, phase and, where it drifts, drift, and by the
/// background; columns are scaled to unit length.
pub struct Linearised<'a> {
    made: &'a Made,
    jacobian: DMatrix<f64>,
    scales: Vec<f64>,
    /// Of (JᵀJ).
    inverse: DMatrix<f64>,
    /// Each tone's first column.
    places: Vec<usize>,
}

impl<'a> Linearised<'a> {
    pub fn of(made: &'a Made) -> Self {
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
        let length = |column: &Vec<f64>| column.iter().map(|x| x * x).sum::<f64>().sqrt();
        let scales: Vec<f64> = columns.iter().map(length).collect();
        if columns.is_empty() {
            // No tones and nothing taken out: nothing to be told apart.
            return Self {
                made,
                jacobian: DMatrix::zeros(n, 0),
                scales: Vec::new(),
                inverse: DMatrix::zeros(0, 0),
                places,
            };
        }
        let jacobian = DMatrix::from_fn(n, columns.len(), |i, j| columns[j][i] / scales[j]);
        let inverse = (jacobian.transpose() * &jacobian).cholesky().expect("the tones can be told apart").inverse();
        Self { made, jacobian, scales, inverse, places }
    }

    /// The bounds of all tones, with everything else unknown too; the noise is white of the density that there truly is
    /// at each tone.
    ///
    /// # Reference
    /// D. C. Rife, R. R. Boorstyn, Multiple tone parameter estimation from discrete-time observations, Bell System
    /// Technical Journal 55 (1976) 1389-1410 (from memory): the inverse of the information matrix JᵀJ/σ².
    pub fn bounds(&self) -> Vec<Bound> {
        let deviation = |j: usize| self.inverse[(j, j)].sqrt() / self.scales[j];
        let bound = |(tone, place): (&MadeTone, &usize)| {
            let noise = self.made.density(tone.nu).sqrt();
            Bound { amplitude: noise * deviation(*place), nu: noise * deviation(place + 1) }
        };
        self.made.tones.iter().zip(&self.places).map(bound).collect()
    }

    /// The errors of amplitude and frequency that the capture's own noise makes in a least-squares fit, to first order:
    /// in white noise no unbiased estimate is better in the mean.
    pub fn errors(&self) -> Vec<(f64, f64)> {
        let noise = DVector::from_column_slice(&self.made.noise);
        let errors = &self.inverse * (self.jacobian.transpose() * noise);
        self.places.iter().map(|&j| (errors[j] / self.scales[j], errors[j + 1] / self.scales[j + 1])).collect()
    }
}

/// [`Linearised::bounds`].
pub fn bounds(made: &Made) -> Vec<Bound> {
    Linearised::of(made).bounds()
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
