//! The smallest tone that the search would see.

use super::{Analysis, Request, rows};
use crate::spectrum::{Floor, Spectra};
use crate::tone::{Noise, Search, detection_threshold};
use crate::units::db;

/// How far a line's power must stand over the floor for the search to count it (z).
pub(super) fn threshold(spectra: &Spectra, request: &Request) -> f64 {
    let n_lines = spectra.n_samples() / 2;
    detection_threshold(n_lines, Floor::longest(n_lines), request.tuning.false_alarm)
}

/// The peak amplitude, in full scales, of a tone whose power is z times the mean noise power a line.
///
/// A tone of peak amplitude A stands at |X|² = (A·N/2)² in a rectangular pane of N samples: A = 2·√(z·P)/N.
fn amplitude(z: f64, line_power: f64, n: f64) -> f64 {
    2.0 * (z * line_power).sqrt() / n
}

/// Over the reference, by the median of the floor over the band; `None` without a floor.
pub(super) fn typical_db(spectra: &Spectra, request: &Request, found: &Search, z: f64) -> Option<f64> {
    let n = spectra.n_samples() as f64;
    let least = amplitude(z, found.noise.as_ref()?.typical_line_power(n), n);
    Some(rows::level_db(&request.scale, least * request.scale.units_per_full_scale()))
}

/// The smallest tone that would be seen, along the band.
#[derive(Debug, Clone, Copy)]
pub struct SmallestTone<'a> {
    noise: &'a Noise,
    z: f64,
    n: f64,
    spacing_hz: f64,
}

impl<'a> SmallestTone<'a> {
    /// Of an analysis; `None` where its segment is too short to tell a floor.
    pub fn of(analysis: &'a Analysis) -> Option<Self> {
        let spectra = &analysis.segment.spectra;
        Some(Self {
            noise: analysis.found.noise.as_ref()?,
            z: analysis.threshold,
            n: spectra.n_samples() as f64,
            spacing_hz: spectra.line_spacing_hz(),
        })
    }

    /// 20 lg of its peak amplitude over full scale, at a frequency.
    pub fn at_db(&self, frequency_hz: f64) -> f64 {
        db(amplitude(self.z, self.noise.line_power(frequency_hz / self.spacing_hz, self.n), self.n))
    }
}
