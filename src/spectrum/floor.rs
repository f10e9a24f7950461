//! The local noise floor of a pane, from running medians that tones do not lift.

/// The mean noise power a line, as it varies along a pane.
///
/// A running median over some hundred lines, divided by ln 2 (the median of an exponential population over its mean),
/// interpolated in its logarithm. Towards 0 Hz and half the rate, where coloured noise bends most, the medians are
/// shorter: a quarter hundred lines at the ends.
#[derive(Debug, Clone)]
pub struct Floor {
    /// The middle of each median, in lines, rising.
    places: Vec<f64>,
    /// How many lines each holds.
    lengths: Vec<usize>,
    log_power: Vec<f64>,
}

/// Lines in one median, at least and at most.
const LENGTHS: (usize, usize) = (25, 201);

/// A median takes in no more than this part of the band, so that a floor that changes is followed.
const PART_OF_BAND: usize = 8;

/// Of the lines of one median, fitted tones may have emptied no more than this part.
const MOST_EMPTIED: f64 = 0.6;

/// Fewer lines than this say nothing of a floor.
const LEAST_LINES: usize = 16;

/// Power below which a floor is held to be nothing but rounding; keeps logarithms finite.
const NOTHING: f64 = 1e-300;

impl Floor {
    /// The most lines in one median, for a pane of `n_lines` lines.
    pub fn longest(n_lines: usize) -> usize {
        (n_lines / PART_OF_BAND).clamp(LENGTHS.0, LENGTHS.1).min(n_lines.max(1))
    }

    /// The floor of `power`, leaving out `margin` lines at either end, which hold what is left of the mean and the
    /// pane's image; `None` where fewer than 16 lines remain.
    pub fn of(power: &[f64], margin: usize) -> Option<Self> {
        Self::of_residue(power, margin, &[])
    }

    /// The floor of what a fit has left: `emptied` are the places (bins, rising) of the tones taken out, and how many
    /// lines' worth of noise went with each. The median is that of the lines which still hold their noise.
    pub fn of_residue(power: &[f64], margin: usize, emptied: &[(f64, f64)]) -> Option<Self> {
        let inner = power.get(margin..power.len().checked_sub(margin)?)?;
        if inner.len() < LEAST_LINES {
            return None;
        }
        let mut floor = Self { places: Vec::new(), lengths: Vec::new(), log_power: Vec::new() };
        let mut work = Vec::new();
        let longest = Self::longest(inner.len());
        let shortest = LENGTHS.0.min(longest);
        let last = inner.len() - shortest.div_ceil(2);
        let mut centre = shortest / 2;
        loop {
            let length = centre.min(inner.len() - centre).clamp(shortest, longest);
            let from = centre.saturating_sub(length / 2).min(inner.len() - length);
            work.clear();
            work.extend_from_slice(&inner[from..from + length]);
            let (first, past) = ((from + margin) as f64, (from + length + margin) as f64);
            let begin = emptied.partition_point(|(nu, _)| *nu < first);
            let inside = emptied[begin..].iter().take_while(|(nu, _)| *nu < past);
            let empty = inside.map(|(_, lines)| lines).sum::<f64>().min(MOST_EMPTIED * length as f64);
            // The emptied lines are the lowest of all.
            let rank = (empty + (length as f64 - empty) / 2.0) as usize;
            floor.log_power.push((at_rank(&mut work, rank) / std::f64::consts::LN_2).max(NOTHING).ln());
            floor.places.push(f64::midpoint(first, past - 1.0));
            floor.lengths.push(length);
            if centre >= last {
                break;
            }
            centre = (centre + (length / 3).max(1)).min(last);
        }
        Some(floor)
    }

    /// The two medians next to line `k`, and how far it is from the first to the second, from 0 to 1.
    fn around(&self, k: f64) -> (usize, usize, f64) {
        let above = self.places.partition_point(|place| *place <= k).min(self.places.len() - 1);
        let below = above.saturating_sub(1);
        let (first, second) = (self.places[below], self.places[above]);
        let part = if second > first { ((k - first) / (second - first)).clamp(0.0, 1.0) } else { 0.0 };
        (below, above, part)
    }

    /// The mean noise power a line at line `k` (which need not be whole).
    pub fn at(&self, k: f64) -> f64 {
        let (below, above, part) = self.around(k);
        (self.log_power[below] * (1.0 - part) + self.log_power[above] * part).exp()
    }

    /// How many lines the median next to line `k` holds.
    pub fn length_at(&self, k: f64) -> usize {
        let (below, above, part) = self.around(k);
        self.lengths[if part < 0.5 { below } else { above }]
    }

    /// The median over the band of the mean noise power a line.
    pub fn typical(&self) -> f64 {
        median(&mut self.log_power.clone()).exp()
    }
}

fn median(values: &mut [f64]) -> f64 {
    at_rank(values, values.len() / 2)
}

/// The value that has `rank` lower ones.
fn at_rank(values: &mut [f64], rank: usize) -> f64 {
    let rank = rank.min(values.len().saturating_sub(1));
    if values.is_empty() { f64::NAN } else { *values.select_nth_unstable_by(rank, f64::total_cmp).1 }
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
    fn lines_that_a_fit_emptied_do_not_lower_it() {
        let mut power = exponential(20_000, |_| 3.0);
        let emptied: Vec<(f64, f64)> = (20..19_980).step_by(8).map(|k| (f64::from(k), 2.0)).collect();
        for (k, _) in &emptied {
            power[*k as usize] = 0.0;
            power[*k as usize + 1] = 0.0;
        }
        let floor = Floor::of_residue(&power, 1, &emptied).unwrap();
        assert!((floor.typical() / 3.0 - 1.0).abs() < 0.05, "{}", floor.typical());
        assert!(Floor::of(&power, 1).unwrap().typical() < 2.5);
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
