//! Seeded chance: uniform and normal deviates.

use std::f64::consts::TAU;

use rand_core::{Rng as _, SeedableRng as _};
use rand_pcg::Pcg64Mcg;

/// A stream of deviates that a seed fixes.
pub struct Dice {
    random: Pcg64Mcg,
    spare: Option<f64>,
}

impl Dice {
    pub fn of(seed: u64) -> Self {
        // Neighbouring seeds are spread over the state by the golden ratio.
        Self { random: Pcg64Mcg::seed_from_u64(seed.wrapping_mul(0x9e37_79b9_7f4a_7c15)), spare: None }
    }

    /// Uniform between two values.
    pub fn between(&mut self, from: f64, to: f64) -> f64 {
        from + (to - from) * ((self.random.next_u64() >> 11) as f64 / (1_u64 << 53) as f64)
    }

    /// One of the choices.
    pub fn pick<T: Copy>(&mut self, choices: &[T]) -> T {
        choices[(self.between(0.0, choices.len() as f64) as usize).min(choices.len() - 1)]
    }

    pub fn chance(&mut self, part: f64) -> bool {
        self.between(0.0, 1.0) < part
    }

    /// Normal with unit variance (Box and Muller 1958).
    pub fn normal(&mut self) -> f64 {
        if let Some(spare) = self.spare.take() {
            return spare;
        }
        let radius = (-2.0 * (1.0 - self.between(0.0, 1.0)).ln()).sqrt();
        let angle = self.between(0.0, TAU);
        self.spare = Some(radius * angle.sin());
        radius * angle.cos()
    }
}
