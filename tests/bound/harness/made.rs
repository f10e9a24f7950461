//! Invented captures: what is in them is known.

use std::f64::consts::TAU;

use panewise::signal::Removal;

use super::dice::Dice;
use super::noise::Colour;

/// A tone as it is put in. Its frequency moves in a straight line, `drift` lines over the segment, about `nu`.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct MadeTone {
    /// Mean frequency, bins.
    pub nu: f64,
    /// Peak amplitude.
    pub peak: f64,
    /// Cosine phase at the first sample.
    pub phase: f64,
    /// Lines it moves over the segment.
    pub drift: f64,
}

impl MadeTone {
    /// The phase at a part t of the segment.
    pub fn angle(&self, t: f64) -> f64 {
        TAU * (self.nu * t + self.drift / 2.0 * (t * t - t)) + self.phase
    }
}

/// A capture of unit-variance noise, coloured or not, tones, and an offset.
#[derive(Debug, Clone)]
pub struct Made {
    pub seed: u64,
    pub samples: Vec<f64>,
    /// The noise among them.
    pub noise: Vec<f64>,
    pub tones: Vec<MadeTone>,
    pub colour: Colour,
    pub removal: Removal,
}

impl Made {
    pub fn n(&self) -> usize {
        self.samples.len()
    }

    /// The noise density at `nu` bins, as the variance of white noise as strong.
    pub fn density(&self, nu: f64) -> f64 {
        self.colour.density(nu / self.n() as f64)
    }

    /// A tone's power over one rectangular line's mean noise, dB.
    pub fn snr_db(&self, tone: &MadeTone) -> f64 {
        let n = self.n() as f64;
        10.0 * (tone.peak * tone.peak * n / (4.0 * self.density(tone.nu))).log10()
    }

    /// Lines from tone `i` to its nearest neighbour.
    pub fn gap(&self, i: usize) -> f64 {
        let others = self.tones.iter().enumerate().filter(|(j, _)| *j != i);
        others.map(|(_, t)| (t.nu - self.tones[i].nu).abs()).fold(f64::INFINITY, f64::min)
    }
}

/// A capture being put together.
pub struct Recipe {
    seed: u64,
    n: usize,
    colour: Colour,
    removal: Removal,
    tones: Vec<MadeTone>,
    pub dice: Dice,
}

impl Recipe {
    pub fn new(seed: u64, n: usize, colour: Colour, removal: Removal, dice: Dice) -> Self {
        Self { seed, n, colour, removal, tones: Vec::new(), dice }
    }

    pub fn n(&self) -> usize {
        self.n
    }

    /// The peak amplitude of a tone that stands `snr_db` over one line's mean noise at `nu` bins.
    pub fn peak(&self, nu: f64, snr_db: f64) -> f64 {
        let density = self.colour.density(nu / self.n as f64);
        (4.0 * density / self.n as f64 * 10.0_f64.powf(snr_db / 10.0)).sqrt()
    }

    /// Puts a tone in, at any phase.
    pub fn tone(&mut self, nu: f64, snr_db: f64, drift: f64) {
        let phase = self.dice.between(0.0, TAU);
        self.tones.push(MadeTone { nu, peak: self.peak(nu, snr_db), phase, drift });
    }

    pub fn has_room(&self, nu: f64, lines: f64) -> bool {
        self.tones.iter().all(|t| (t.nu - nu).abs() >= lines)
    }

    pub fn finish(mut self) -> Made {
        let n = self.n as f64;
        let noise = self.colour.samples(self.n, &mut self.dice);
        let mut samples = noise.clone();
        let offset = if self.removal == Removal::None { 0.0 } else { self.dice.between(-5.0, 5.0) };
        let slope = if self.removal == Removal::Line { self.dice.between(-5.0, 5.0) } else { 0.0 };
        for (i, x) in samples.iter_mut().enumerate() {
            let t = i as f64 / n;
            *x += offset + slope * t + self.tones.iter().map(|tone| tone.peak * tone.angle(t).cos()).sum::<f64>();
        }
        self.tones.sort_by(|a, b| a.nu.total_cmp(&b.nu));
        Made { seed: self.seed, samples, noise, tones: self.tones, colour: self.colour, removal: self.removal }
    }
}
