//! The local noise floor of a pane, from running medians that tones do not lift.

/// The mean noise power a line, as it varies along a pane.
///
/// A running median over some hundred lines, divided by ln 2 (the median of an exponential population over its mean),
/// taken at every quarter of its length and interpolated in its logarithm.
#[derive(Debug, Clone)]
pub struct Floor {
    hop: usize,
    first: usize,
    log_power: Vec<f64>,
}

/// Lines in one median.
const LENGTH: usize = 201;

/// Fewer lines than this say nothing of a floor.
const LEAST_LINES: usize = 16;

/// Power below which a floor is held to be nothing but rounding; keeps logarithms finite.
const NOTHING: f64 = 1e-300;

impl Floor {
    /// Lines in one median of the floor.
    pub const LENGTH: usize = LENGTH;

    /// The floor of `power`, leaving out `margin` lines at either end, which hold what is left of the mean and the
    /// pane's image; `None` where fewer than 16 lines remain.
    pub fn of(power: &[f64], margin: usize) -> Option<Self> {
        let inner = power.get(margin..power.len().checked_sub(margin)?)?;
        if inner.len() < LEAST_LINES {
            return None;
        }
        let length = LENGTH.min(inner.len());
        let hop = (length / 4).max(1);
        let mut lines = Vec::with_capacity(length);
        let mut log_power = Vec::new();
        let mut from = 0;
        loop {
            lines.clear();
            lines.extend_from_slice(&inner[from..from + length]);
            log_power.push((median(&mut lines) / std::f64::consts::LN_2).max(NOTHING).ln());
            if from + length == inner.len() {
                break;
            }
            from = (from + hop).min(inner.len() - length);
        }
        Some(Self { hop, first: margin + length / 2, log_power })
    }

    /// The mean noise power a line at line `k` (which need not be whole).
    pub fn at(&self, k: f64) -> f64 {
        let place = ((k - self.first as f64) / self.hop as f64).clamp(0.0, (self.log_power.len() - 1) as f64);
        let below = place.floor() as usize;
        let above = (below + 1).min(self.log_power.len() - 1);
        let part = place - below as f64;
        (self.log_power[below] * (1.0 - part) + self.log_power[above] * part).exp()
    }

    /// The median over the band of the mean noise power a line.
    pub fn typical(&self) -> f64 {
        median(&mut self.log_power.clone()).exp()
    }
}

fn median(values: &mut [f64]) -> f64 {
    let middle = values.len() / 2;
    if values.is_empty() { f64::NAN } else { *values.select_nth_unstable_by(middle, f64::total_cmp).1 }
}

#[cfg(test)]
mod tests {
    use super::*;
    use rand_core::{Rng as _, SeedableRng as _};

    fn exponential(n: usize, mean: impl Fn(usize) -> f64) -> Vec<f64> {
        let mut random = rand_pcg::Pcg64Mcg::seed_from_u64(7);
        let mut uniform = move || (random.next_u64() >> 11) as f64 / (1_u64 << 53) as f64;
        (0..n).map(|i| -mean(i) * (1.0 - uniform()).ln()).collect()
    }

    #[test]
    fn too_few_lines_have_no_floor() {
        assert!(Floor::of(&[1.0; 15], 0).is_none());
        assert!(Floor::of(&[1.0; 20], 4).is_none());
        assert!(Floor::of(&[], 4).is_none());
        assert!(Floor::of(&[1.0; 16], 0).is_some());
    }

    #[test]
    fn white_noise_gives_its_mean_and_tones_do_not_lift_it() {
        let mut power = exponential(20_000, |_| 3.0);
        for k in (50..20_000).step_by(100) {
            power[k] = 1e9;
        }
        let floor = Floor::of(&power, 4).unwrap();
        assert!((floor.typical() / 3.0 - 1.0).abs() < 0.05, "{}", floor.typical());
    }

    #[test]
    fn a_slope_is_followed() {
        let mean = |i: usize| 10.0_f64.powf(-(i as f64) / 5000.0);
        let floor = Floor::of(&exponential(20_000, mean), 0).unwrap();
        for k in (0..20_000).step_by(777) {
            let ratio = floor.at(k as f64) / mean(k);
            assert!((0.7..1.4).contains(&ratio), "line {k}: {ratio}");
        }
    }
}
