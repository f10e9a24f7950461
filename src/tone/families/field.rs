//! The tones by frequency, how near is near, and how crowded a place is.

use super::{Setting, Sighting};

/// The standard uncertainty of a frequency is taken as at least this part of a line: what a slow change of strength
/// does to the tones of one machine.
const LEAST_PART: f64 = 0.02;

/// The same where no uncertainty is known.
const UNKNOWN_PART: f64 = 0.1;

/// Fits lie within so many standard uncertainties.
pub(super) const COVER: f64 = 3.0;

/// A place's crowd is told from so many neighbours.
const N_NEAR: usize = 4;

/// One tone.
#[derive(Debug, Clone, Copy)]
pub(super) struct Place {
    /// Which of the tones given.
    pub(super) index: usize,
    pub(super) hz: f64,
    /// Standard uncertainty.
    pub(super) u_hz: f64,
    pub(super) amplitude: f64,
}

/// The tones, by frequency.
#[derive(Debug)]
pub(super) struct Field {
    pub(super) places: Vec<Place>,
    pub(super) line_hz: f64,
    pub(super) rate_hz: f64,
}

impl Field {
    pub(super) fn of(tones: &[Sighting], setting: &Setting) -> Self {
        let line_hz = setting.line_spacing_hz;
        let positive = |x: f64| x > 0.0 && x.is_finite();
        let known = tones.iter().enumerate().filter(|(_, t)| positive(t.frequency_hz) && positive(t.amplitude));
        let mut places: Vec<Place> = known
            .map(|(index, tone)| {
                let u95 = tone.u95_hz.filter(|u| u.is_finite() && *u >= 0.0);
                let u_hz = u95.map_or(UNKNOWN_PART * line_hz, |u| (u / 2.0).hypot(LEAST_PART * line_hz));
                Place { index, hz: tone.frequency_hz, u_hz, amplitude: tone.amplitude }
            })
            .collect();
        places.sort_by(|a, b| a.hz.total_cmp(&b.hz));
        Self { places, line_hz, rate_hz: setting.sample_rate_hz }
    }

    /// The standard uncertainty of a frequency that is not a tone's.
    pub(super) fn least_u_hz(&self) -> f64 {
        LEAST_PART * self.line_hz
    }

    /// The same of a frequency that was typed.
    pub(super) fn unknown_u_hz(&self) -> f64 {
        UNKNOWN_PART * self.line_hz
    }

    /// The tone nearest to `hz` that fits a prediction of standard uncertainty `u_hz`, of those that `may`.
    pub(super) fn fitting(&self, hz: f64, u_hz: f64, may: impl Fn(usize) -> bool) -> Option<usize> {
        let at = self.places.partition_point(|p| p.hz < hz);
        let mut best: Option<(f64, usize)> = None;
        // Neighbours that are uncertain themselves reach further: a handful each way is looked at.
        for i in at.saturating_sub(N_NEAR)..(at + N_NEAR).min(self.places.len()) {
            let Some(place) = self.places.get(i) else { continue };
            let apart = (place.hz - hz).abs();
            if apart <= COVER * place.u_hz.hypot(u_hz) && may(i) && best.is_none_or(|b| apart < b.0) {
                best = Some((apart, i));
            }
        }
        best.map(|b| b.1)
    }

    /// How many tones stand in `width_hz` at `hz` on the average, leaving out the one at place `without`: by the
    /// distance of the fourth neighbour, and at least as many as if all were spread over the band.
    pub(super) fn expected(&self, hz: f64, width_hz: f64, without: Option<usize>) -> f64 {
        let n = self.places.len();
        let over_band = n as f64 / (self.rate_hz / 2.0);
        let (mut below, mut above) = (self.places.partition_point(|p| p.hz < hz), 0);
        above += below;
        let (mut count, mut reach) = (0, 0.0);
        while count < N_NEAR {
            let under = below.checked_sub(1).and_then(|i| self.places.get(i)).map(|p| hz - p.hz);
            let over = self.places.get(above).map(|p| p.hz - hz);
            let (i, distance) = match (under, over) {
                (Some(u), Some(o)) if u <= o => (below - 1, u),
                (_, Some(o)) => (above, o),
                (Some(u), None) => (below - 1, u),
                (None, None) => break,
            };
            if i < below {
                below -= 1;
            } else {
                above += 1;
            }
            if without != Some(i) {
                count += 1;
                reach = distance;
            }
        }
        let near = if count > 0 { count as f64 / (2.0 * f64::max(reach, self.line_hz)) } else { 0.0 };
        width_hz * near.max(over_band)
    }

    /// The strongest tones, strongest first.
    pub(super) fn strongest(&self, n: usize) -> Vec<usize> {
        let mut order: Vec<usize> = (0..self.places.len()).collect();
        let amplitude = |i: &usize| self.places.get(*i).map_or(0.0, |p| p.amplitude);
        order.sort_by(|a, b| amplitude(b).total_cmp(&amplitude(a)));
        order.truncate(n);
        order
    }
}
