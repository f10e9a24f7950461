//! What is looked for in a segment, and what is found.

use std::sync::Arc;

use realfft::num_complex::Complex64;

use super::fit::UnitUncertainty;
use super::motion::Motion;
use crate::signal::Removal;
use crate::spectrum::Floor;

/// A tone named by hand: where it is to be looked for.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct NamedTone {
    /// Where it is, bins.
    pub nu: f64,
    /// Whether it is held there.
    pub held: bool,
}

/// A tone found, in bins and full scales.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct FoundTone {
    /// Where it is, bins; of a tone that moves the mean over the segment.
    pub nu: f64,
    /// Peak amplitude and cosine phase at the first sample, A e^{jφ}; of a tone that moves the root of the mean square
    /// over the segment.
    pub amplitude: Complex64,
    /// Its power over one rectangular line's mean noise; 0 without a floor.
    pub snr: f64,
    /// Whether it was named by hand.
    pub by_hand: bool,
    /// Whether its frequency is held.
    pub held: bool,
    /// Whether it stands over the floor by no more than noise alone would in one search of ten: listed, not counted.
    pub faint: bool,
}

/// What a search looks for.
#[derive(Debug, Clone, Copy)]
pub struct Quest<'a> {
    /// What was taken out of the segment.
    pub removal: Removal,
    /// The chance that noise alone gives any tone.
    pub false_alarm: f64,
    /// How many tones are kept: those that stand highest over their floor.
    pub max_tones: usize,
    /// Tones named by hand, kept whatever the search finds; those less than half a cycle from 0 Hz or half the rate are
    /// passed over.
    pub named: &'a [NamedTone],
    /// Places, in bins, where no tone is to be listed, within three quarters of a bin. What stands there is fitted all the
    /// same, so that it spoils no other tone; a tone named there is listed.
    pub refused: &'a [f64],
}

/// What a search gives.
#[derive(Debug, Clone)]
pub struct Search {
    /// The tones, by frequency.
    pub tones: Vec<FoundTone>,
    /// Whether all of them were fitted jointly; else they stand as well as they could be fitted.
    pub settled: bool,
    /// What noise of unit variance a sample does to each, one for each of `tones`; none where the fit did not settle.
    pub unit_uncertainties: Vec<UnitUncertainty>,
    /// One-sided noise, as |X\[k\]|² of the rectangular window; `None` where the segment is too short to tell.
    pub noise: Option<Noise>,
    /// How many tones were left out, being the weakest over their floor.
    pub n_left_out: usize,
    /// How each tone moves, where it was seen to; one for each of `tones`.
    pub motions: Vec<Option<Motion>>,
    /// The samples less the fitted tones and background.
    pub residue: Arc<[f64]>,
}

/// The local noise of a segment.
#[derive(Debug, Clone)]
pub struct Noise {
    floor: Floor,
    /// S2 of the window the floor was taken from.
    s2: f64,
}

impl Noise {
    /// A floor and the sum S2 of the window it was taken from.
    pub(super) fn new(floor: Floor, s2: f64) -> Self {
        Self { floor, s2 }
    }

    /// The mean noise power |Y|² a line at `nu` bins, of a window with the sum S2.
    pub fn line_power(&self, nu: f64, s2: f64) -> f64 {
        self.floor.at(nu) / self.s2 * s2
    }

    /// The standard deviation of a sample whose white noise would be as strong at `nu` bins; `n` samples.
    pub fn sample_deviation(&self, nu: f64, n: f64) -> f64 {
        (self.line_power(nu, n) / n).sqrt()
    }

    /// A tone's |X|² in a rectangular pane of `n` samples over that pane's mean noise a line.
    pub fn snr(&self, tone: &FoundTone, n: f64) -> f64 {
        (tone.amplitude.norm() * n / 2.0).powi(2) / self.line_power(tone.nu, n)
    }

    /// The median of [`Noise::line_power`] over the band.
    pub fn typical_line_power(&self, s2: f64) -> f64 {
        self.floor.typical() / self.s2 * s2
    }
}
