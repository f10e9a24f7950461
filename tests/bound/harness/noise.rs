//! Noise of known density.

use std::f64::consts::{PI, TAU};

use realfft::num_complex::Complex64;

use super::dice::Dice;

/// How noise is coloured. Densities are given as the variance a sample of white noise as strong at that frequency.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Colour {
    /// Unit variance.
    White,
    /// y\[n\] = x\[n\] + ρ y\[n-1\], x white of unit variance.
    FirstOrder { rho: f64 },
    /// White noise of unit variance and a resonance `gain` times its amplitude: two poles at `place` cycles a sample,
    /// `width` cycles a sample wide (3 dB).
    Resonance { place: f64, width: f64, gain: f64 },
}

impl Colour {
    pub fn is_white(self) -> bool {
        self == Self::White
    }

    /// The density at `cycles` a sample.
    pub fn density(self, cycles: f64) -> f64 {
        let turn = Complex64::cis(-TAU * cycles);
        match self {
            Self::White => 1.0,
            Self::FirstOrder { rho } => 1.0 / (1.0 - rho * turn).norm_sqr(),
            Self::Resonance { place, width, gain } => {
                let peak = poles(place, width, Complex64::cis(-TAU * place));
                1.0 + gain * gain * (peak / poles(place, width, turn)).norm_sqr()
            }
        }
    }

    /// `n` samples.
    pub fn samples(self, n: usize, dice: &mut Dice) -> Vec<f64> {
        match self {
            Self::White => (0..n).map(|_| dice.normal()).collect(),
            Self::FirstOrder { rho } => recursion(n, 1.0, rho, 0.0, dice),
            Self::Resonance { place, width, gain } => {
                let radius = (-PI * width).exp();
                let top = gain * poles(place, width, Complex64::cis(-TAU * place)).norm();
                let mut samples = recursion(n, top, 2.0 * radius * (TAU * place).cos(), -radius * radius, dice);
                for x in &mut samples {
                    *x += dice.normal();
                }
                samples
            }
        }
    }
}

/// The resonance's denominator.
fn poles(place: f64, width: f64, turn: Complex64) -> Complex64 {
    let radius = (-PI * width).exp();
    1.0 - 2.0 * radius * (TAU * place).cos() * turn + radius * radius * turn * turn
}

/// Samples a recursion runs before the first that is kept: what it started from has died away by e^-60 and more.
const WARM_UP: usize = 4000;

fn recursion(n: usize, gain: f64, back1: f64, back2: f64, dice: &mut Dice) -> Vec<f64> {
    let (mut last, mut before) = (0.0, 0.0);
    let mut step = || {
        let y = gain * dice.normal() + back1 * last + back2 * before;
        before = last;
        last = y;
        y
    };
    for _ in 0..WARM_UP {
        step();
    }
    (0..n).map(|_| step()).collect()
}
