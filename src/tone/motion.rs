//! How a tone moves over its segment.

use std::f64::consts::{PI, TAU};

use realfft::num_complex::Complex64;

use super::track::{Grid, Path};
use crate::window::Window;

/// A tone at one moment.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CoursePoint {
    /// When, as a part of the segment: 0 at its start, 1 at its end.
    pub part: f64,
    /// Frequency, bins.
    pub nu: f64,
    /// Peak amplitude, full scales.
    pub amplitude: f64,
}

/// How a tone moves over the segment, where it was seen to move.
#[derive(Debug, Clone, PartialEq)]
pub struct Motion {
    /// Frequency at the segment's end less that at its start, bins.
    pub drift_nu: f64,
    /// Level at the segment's end less that at its start, dB.
    pub drift_db: f64,
    /// Greatest less least frequency, bins.
    pub span_nu: f64,
    /// Greatest less least level, dB.
    pub span_db: f64,
    /// Standard deviation of the frequency over eight equal parts of the segment, bins.
    pub scatter_nu: f64,
    /// Standard deviation of the peak amplitude over eight equal parts of the segment, full scales.
    pub scatter_amplitude: f64,
    /// Whether the path followed leaves nothing but noise.
    pub followed: bool,
    /// The course of it, from start to end.
    pub course: Vec<CoursePoint>,
    /// e^{j(phase)} times the peak amplitude at the middle of equal parts of the segment, turned back by its mean
    /// frequency `nu` about the segment's middle.
    envelope: Vec<Complex64>,
    nu: f64,
    n: f64,
}

/// Levels of a path are followed so far under its greatest, 60 dB: below that a polynomial says nothing.
pub(super) const LEAST: f64 = 1e-3;

/// Points of a course.
const POINTS: usize = 65;

/// Parts of the segment whose scatter is taken.
pub const PARTS: usize = 8;

/// Frequencies further than this from the tone see no difference between a tone that moves and a steady one, bins.
const NEAR: f64 = 64.0;

impl Motion {
    pub(super) fn of(path: &Path, grid: &Grid, followed: bool) -> Self {
        let amplitude = |u: f64| path.amplitude(u).max(LEAST * path.greatest_amplitude());
        let course: Vec<CoursePoint> = (0..POINTS)
            .map(|i| i as f64 / (POINTS - 1) as f64)
            .map(|part| {
                let u = 2.0 * part - 1.0;
                CoursePoint { part, nu: path.frequency(u), amplitude: amplitude(u) }
            })
            .collect();
        let parts: Vec<f64> = (0..PARTS).map(|i| (2.0 * i as f64 + 1.0) / PARTS as f64 - 1.0).collect();
        let (span_nu, span_nepers) = path.span();
        let decibels = 20.0 / std::f64::consts::LN_10;
        let path = &path.clone().recentred();
        Self {
            drift_nu: path.frequency(1.0) - path.frequency(-1.0),
            drift_db: decibels * (amplitude(1.0) / amplitude(-1.0)).ln(),
            span_nu,
            span_db: decibels * span_nepers,
            scatter_nu: deviation(&parts, |u| path.frequency(u)),
            scatter_amplitude: deviation(&parts, amplitude),
            followed,
            course,
            envelope: path.envelope(grid),
            nu: path.nu,
            n: grid.n_samples() as f64,
        }
    }

    /// Y(ν) of the tone alone under `window`, without its image; `None` so far from the tone that a steady one of its
    /// mean serves.
    pub fn seen_under(&self, window: &Window, nu: f64) -> Option<Complex64> {
        let offset = nu - self.nu;
        if offset.abs() > NEAR {
            return None;
        }
        let n_parts = self.envelope.len();
        // The window in the middle of each part: every second value of one twice as finely sampled.
        let profile = window.samples(2 * n_parts);
        let middles = profile.iter().skip(1).step_by(2);
        let parts = n_parts as f64;
        // The mean over a part of a phasor that turns by the offset.
        let x = PI * offset / parts;
        let kept = if x.abs() < 1e-6 { 1.0 } else { x.sin() / x };
        let places = (0..n_parts).map(|b| (b as f64 + 0.5) / parts - 0.5);
        let sum: Complex64 = self
            .envelope
            .iter()
            .zip(middles)
            .zip(places)
            .map(|((envelope, w), place)| envelope * *w * Complex64::cis(-TAU * offset * place))
            .sum();
        // Counted from the first sample, as amplitudes are.
        let first = Complex64::cis(-PI * nu * (1.0 - 1.0 / self.n));
        Some(sum * first * (0.5 * kept * self.n / parts))
    }
}

fn deviation(places: &[f64], value: impl Fn(f64) -> f64) -> f64 {
    let values: Vec<f64> = places.iter().map(|u| value(*u)).collect();
    let n = values.len() as f64;
    let mean = values.iter().sum::<f64>() / n;
    (values.iter().map(|v| (v - mean).powi(2)).sum::<f64>() / (n - 1.0)).sqrt()
}
