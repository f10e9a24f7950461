//! Parts of a stretch whose level neither steps nor drifts.

use std::ops::Range;

/// A change of level that matters: half a decibel, in nepers.
const CHANGE: f64 = 0.0576;
/// The greatest excursion of the standardised cumulative sum that chance explains: P = 2 exp(-2 c^2) = 1.2e-4
/// (the limit law of Kolmogorov 1933 for a Brownian bridge).
const EXCURSION: f64 = 2.2;
/// Standard deviations at which the reverse arrangements show a trend: two-sided P = 1e-4.
const TREND: f64 = 3.9;
/// Fewest levels in which a change can be told, and so the fewest blocks that can be called steady.
pub(super) const FEWEST: usize = 8;

/// Splits the blocks `stretch` where their levels change, until no part has a change point or a trend.
pub(super) fn level_parts(levels: &[f64], stretch: Range<usize>) -> Vec<Range<usize>> {
    let (mut parts, mut open) = (Vec::new(), vec![stretch]);
    while let Some(part) = open.pop() {
        let values = levels.get(part.clone()).unwrap_or_default();
        match split(values) {
            Some(at) => open.extend([part.start..part.start + at, part.start + at..part.end]),
            None => parts.push(part),
        }
    }
    parts
}

/// Where to split `levels`, if anywhere: at the greatest excursion of the cumulative sum.
fn split(levels: &[f64]) -> Option<usize> {
    if levels.len() < FEWEST {
        return None;
    }
    let n = levels.len() as f64;
    let mean = levels.iter().sum::<f64>() / n;
    let (mut sum, mut at, mut greatest) = (0.0, 0, 0.0_f64);
    for (i, level) in levels.iter().enumerate().take(levels.len() - 1) {
        sum += level - mean;
        if f64::abs(sum) > greatest {
            (at, greatest) = (i + 1, sum.abs());
        }
    }
    let (before, after) = levels.split_at(at);
    let change = (average(before) - average(after)).abs();
    let excursion = greatest / (deviation(levels) * n.sqrt());
    let changed = excursion > EXCURSION || reverse_arrangements(levels).abs() > TREND;
    (changed && change > CHANGE && !before.is_empty() && !after.is_empty()).then_some(at)
}

fn average(values: &[f64]) -> f64 {
    values.iter().sum::<f64>() / values.len().max(1) as f64
}

/// The standard deviation from neighbouring differences, which a slow change does not inflate.
fn deviation(levels: &[f64]) -> f64 {
    let squares: f64 = levels.windows(2).map(|w| (w[1] - w[0]) * (w[1] - w[0])).sum();
    (squares / (2.0 * (levels.len().max(2) - 1) as f64)).sqrt().max(1e-12)
}

/// The number of pairs in falling order, less its mean n(n-1)/4 for values without a trend, over its standard
/// deviation, the root of n(2n+5)(n-1)/72 (Bendat and Piersol, Random Data, eq. 4.69 and 4.70). Positive: falling.
fn reverse_arrangements(levels: &[f64]) -> f64 {
    let n = levels.len() as f64;
    let falling = |(i, x): (usize, &f64)| levels.iter().skip(i + 1).filter(|&y| x > y).count();
    let count: usize = levels.iter().enumerate().map(falling).sum();
    (count as f64 - n * (n - 1.0) / 4.0) / (n * (2.0 * n + 5.0) * (n - 1.0) / 72.0).sqrt()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn reverse_arrangements_of_ordered_values() {
        let rising: Vec<f64> = (0..20).map(f64::from).collect();
        // A = 0 against a mean of 95 and a deviation of sqrt(20 * 45 * 19 / 72).
        assert!((reverse_arrangements(&rising) + 95.0 / 237.5_f64.sqrt()).abs() < 1e-12);
        // The worked example of Bendat and Piersol, section 4.5.2, from memory: these 20 values hold 86 reverse
        // arrangements.
        let example =
            [5.2, 6.2, 3.7, 6.4, 3.9, 4.0, 3.9, 5.3, 4.0, 4.6, 5.9, 6.5, 4.3, 5.7, 3.1, 5.6, 5.2, 3.9, 6.2, 5.0];
        assert!((reverse_arrangements(&example) - (86.0 - 95.0) / 237.5_f64.sqrt()).abs() < 1e-12);
    }

    #[test]
    fn a_step_is_split_where_it_is_and_a_small_wobble_is_not() {
        let step: Vec<f64> = (0..60).map(|i| if i < 23 { 0.0 } else { 0.2 } + 0.01 * f64::from(i % 3)).collect();
        let mut parts = level_parts(&step, 0..60);
        parts.sort_by_key(|p| p.start);
        assert_eq!(parts, [0..23, 23..60]);
        let whole = |levels: &[f64]| level_parts(levels, 0..levels.len()).first() == Some(&(0..levels.len()));
        let beat: Vec<f64> = (0..100).map(|i| 0.04 * (f64::from(i) * 0.1).sin()).collect();
        assert!(whole(&beat));
    }

    #[test]
    fn few_blocks_and_none_are_left_alone() {
        assert_eq!(level_parts(&[], 0..0).len(), 1);
        assert_eq!(level_parts(&[0.0, 9.0], 0..2).len(), 1);
    }
}
