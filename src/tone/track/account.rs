//! What a track is held to be: one tone on its path, and steady tones beside it.

use realfft::num_complex::Complex64;
use std::f64::consts::PI;

use super::{Grid, Path, Track};

/// A steady tone beside the one a track is about.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Company {
    /// Where it is, bins.
    pub(crate) nu: f64,
    /// Amplitude and phase in the middle of the segment.
    pub(crate) middle_amplitude: Complex64,
}

/// An account of a track, and what it leaves unexplained.
#[derive(Debug, Clone)]
pub(crate) struct Account {
    /// The tone.
    pub(crate) path: Path,
    /// Steady tones beside it.
    pub(crate) company: Vec<Company>,
    /// Σ |point - account|².
    pub(crate) left: f64,
}

impl Company {
    /// Its phasor at each point of a track around `carrier`, without its image.
    fn turns(&self, grid: &Grid, carrier: f64) -> impl Iterator<Item = Complex64> {
        let offset = self.nu - carrier;
        grid.places.iter().map(move |u| Complex64::cis(PI * offset * u) * 0.5)
    }

    /// What it looks like in a track around `carrier`: the tone, and its image.
    pub(super) fn parts(&self, grid: &Grid, carrier: f64) -> impl Iterator<Item = (Complex64, Complex64)> {
        let half = self.turns(grid, carrier).enumerate();
        half.map(move |(b, turn)| grid.seen(b, turn * self.middle_amplitude, self.nu, carrier))
    }
}

impl Account {
    /// A tone by itself, not weighed yet.
    pub(crate) fn of(path: Path) -> Self {
        Self { path, company: Vec::new(), left: f64::INFINITY }
    }

    /// What the account leaves of each point of `track`.
    pub(super) fn remainder(&self, track: &Track<'_>) -> Vec<Complex64> {
        let mut rest: Vec<Complex64> =
            track.points.iter().zip(self.path.points(track.grid)).map(|(z, own)| z - own).collect();
        for company in &self.company {
            for (rest, (tone, image)) in rest.iter_mut().zip(company.parts(track.grid, track.nu)) {
                *rest -= tone + image;
            }
        }
        rest
    }

    /// The account with its sum of squares.
    pub(crate) fn weighed(mut self, track: &Track<'_>) -> Self {
        self.left = self.remainder(track).iter().map(Complex64::norm_sqr).sum();
        self
    }
}
