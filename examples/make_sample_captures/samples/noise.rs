//! Coloured noise of known density from a seeded generator.

use std::f64::consts::{PI, TAU};

use rand_core::{Rng, SeedableRng};
use rand_pcg::Pcg32;

/// Independent normal deviates (Box and Muller 1958).
struct Normal {
    rng: Pcg32,
    spare: Option<f64>,
}

impl Normal {
    fn new(seed: u64) -> Self {
        Self { rng: Pcg32::seed_from_u64(seed), spare: None }
    }

    /// Uniform in (0, 1].
    fn uniform(&mut self) -> f64 {
        (f64::from(self.rng.next_u32()) + 1.0) / 4_294_967_296.0
    }

    fn next(&mut self) -> f64 {
        if let Some(spare) = self.spare.take() {
            return spare;
        }
        let radius = libm::sqrt(-2.0 * libm::log(self.uniform()));
        let angle = TAU * self.uniform();
        self.spare = Some(radius * libm::sin(angle));
        radius * libm::cos(angle)
    }
}

/// How a part of the noise is coloured.
#[derive(Debug, Clone, Copy)]
pub(crate) enum Colour {
    White,
    /// One pole.
    Below {
        corner_hz: f64,
    },
    /// Two poles.
    Around {
        centre_hz: f64,
        quality: f64,
    },
}

/// White noise of one-sided `density` (unit squared a hertz) through a filter whose gain is 1 at its best.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Part {
    pub(crate) density: f64,
    pub(crate) colour: Colour,
}

/// y[n] = gain x[n] + back1 y[n-1] + back2 y[n-2].
struct Recursion {
    gain: f64,
    back1: f64,
    back2: f64,
}

impl Recursion {
    fn new(colour: Colour, rate_hz: f64) -> Self {
        match colour {
            Colour::White => Self { gain: 1.0, back1: 0.0, back2: 0.0 },
            Colour::Below { corner_hz } => {
                let back1 = libm::exp(-TAU * corner_hz / rate_hz);
                Self { gain: 1.0 - back1, back1, back2: 0.0 }
            }
            Colour::Around { centre_hz, quality } => {
                let radius = libm::exp(-PI * centre_hz / quality / rate_hz);
                let back1 = 2.0 * radius * libm::cos(TAU * centre_hz / rate_hz);
                let raw = Self { gain: 1.0, back1, back2: -radius * radius };
                Self { gain: 1.0 / libm::sqrt(raw.power_gain(centre_hz, rate_hz)), ..raw }
            }
        }
    }

    fn power_gain(&self, frequency_hz: f64, rate_hz: f64) -> f64 {
        let angle = TAU * frequency_hz / rate_hz;
        let real = 1.0 - self.back1 * libm::cos(angle) - self.back2 * libm::cos(2.0 * angle);
        let imaginary = self.back1 * libm::sin(angle) + self.back2 * libm::sin(2.0 * angle);
        self.gain * self.gain / (real * real + imaginary * imaginary)
    }
}

/// Samples the filters run before the first that is kept.
const WARM_UP: usize = 8192;

/// The sum of independent parts, `n` samples.
pub(crate) fn coloured(parts: &[Part], rate_hz: f64, seed: u64, n: usize) -> Vec<f64> {
    let mut sum = vec![0.0; n];
    for (i, part) in parts.iter().enumerate() {
        let mut normal = Normal::new(seed + i as u64);
        let filter = Recursion::new(part.colour, rate_hz);
        let deviation = libm::sqrt(part.density * rate_hz / 2.0);
        let (mut before, mut last) = (0.0, 0.0);
        let mut step = || {
            let y = filter.gain * deviation * normal.next() + filter.back1 * last + filter.back2 * before;
            before = last;
            last = y;
            y
        };
        for _ in 0..WARM_UP {
            step();
        }
        for x in &mut sum {
            *x += step();
        }
    }
    sum
}

/// The one-sided density of the sum at a frequency, unit squared a hertz.
pub(crate) fn density(parts: &[Part], rate_hz: f64, frequency_hz: f64) -> f64 {
    parts.iter().map(|p| p.density * Recursion::new(p.colour, rate_hz).power_gain(frequency_hz, rate_hz)).sum()
}

/// The parts in words.
pub(crate) fn describe(parts: &[Part], unit: &str) -> String {
    let word = |part: &Part| {
        let density = part.density;
        match part.colour {
            Colour::White => format!("white {density:e} ({unit})\u{b2}/Hz"),
            Colour::Below { corner_hz } => format!("{density:e} falling from {corner_hz} Hz (one pole)"),
            Colour::Around { centre_hz, quality } => format!("{density:e} around {centre_hz} Hz (Q {quality})"),
        }
    };
    parts.iter().map(word).collect::<Vec<_>>().join(" + ")
}
