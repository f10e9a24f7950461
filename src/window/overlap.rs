//! What a window does to overlapped blocks.

use super::Window;

/// Length over which overlaps are judged, so that a hop of one is 0.025 % and halves and quarters are whole.
const N: usize = 4000;

/// Coarse step of the search for the recommended overlap, and how many coarse hits are searched around.
const COARSE_STEP: usize = 8;
const N_CANDIDATES: usize = 8;

/// A window's overlap figures; they do not depend on its length.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct OverlapFigures {
    pub(super) correlation_50: f64,
    pub(super) correlation_75: f64,
    pub(super) recommended_percent: f64,
}

impl OverlapFigures {
    pub(super) fn of(window: &Window) -> Self {
        let samples = window.samples(N);
        Self {
            correlation_50: correlation(&samples, N / 2),
            correlation_75: correlation(&samples, N / 4),
            recommended_percent: 100.0 * (1.0 - best_hop(&samples) as f64 / N as f64),
        }
    }
}

/// Σ w\[i\] w\[i + hop\] / Σ w² (Harris 1978, eq. 17).
fn correlation(samples: &[f64], hop: usize) -> f64 {
    let product: f64 = samples.iter().zip(samples.iter().skip(hop)).map(|(a, b)| a * b).sum();
    product / samples.iter().map(|w| w * w).sum::<f64>()
}

/// Smallest over largest weight that a sample of a long record gets from all blocks `hop` apart
/// (amplitude flatness, Heinzel et al. 2002).
fn amplitude_flatness(samples: &[f64], hop: usize) -> f64 {
    let mut weights = vec![0.0; hop];
    for block in samples.chunks(hop) {
        for (weight, sample) in weights.iter_mut().zip(block) {
            *weight += sample;
        }
    }
    let (low, high) = weights.iter().fold((f64::MAX, f64::MIN), |(low, high), w| (w.min(low), w.max(high)));
    if high > 0.0 { low / high } else { 0.0 }
}

/// Even weighting of the record against repeated data: what the recommended overlap makes largest.
fn advantage(samples: &[f64], hop: usize) -> f64 {
    amplitude_flatness(samples, hop) - correlation(samples, hop)
}

/// The hop of largest advantage; of equals the longest, which costs least.
fn best_hop(samples: &[f64]) -> usize {
    let n = samples.len();
    let mut coarse: Vec<(f64, usize)> =
        (1..=n / COARSE_STEP).map(|i| i * COARSE_STEP).map(|hop| (advantage(samples, hop), hop)).collect();
    coarse.sort_by(|a, b| b.0.total_cmp(&a.0).then(b.1.cmp(&a.1)));
    let near =
        coarse.iter().take(N_CANDIDATES).flat_map(|(_, hop)| hop.saturating_sub(COARSE_STEP)..=hop + COARSE_STEP);
    let tried = near.filter(|hop| (1..=n).contains(hop)).map(|hop| (advantage(samples, hop), hop));
    tried.max_by(|a, b| a.0.total_cmp(&b.0).then(a.1.cmp(&b.1))).map_or(n, |(_, hop)| hop)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn hann_at_half_overlap_is_one_sixth_and_the_best() {
        // Harris 1978, table I: 16.7 %; in closed form 1/6 at 50 % and 0.6593 at 75 %.
        let figures = OverlapFigures::of(&Window::parse("hann").unwrap());
        assert!((figures.correlation_50 - 1.0 / 6.0).abs() < 1e-12);
        assert!((figures.correlation_75 - (0.5 + 1.0 / std::f64::consts::PI / 2.0)).abs() < 1e-6);
        assert_eq!(figures.recommended_percent, 50.0);
    }

    #[test]
    fn rectangular_blocks_share_what_they_overlap() {
        let figures = OverlapFigures::of(&Window::parse("rectangular").unwrap());
        let expected = OverlapFigures { correlation_50: 0.5, correlation_75: 0.75, recommended_percent: 0.0 };
        assert_eq!(figures, expected);
    }

    #[test]
    fn the_short_search_finds_what_a_full_one_finds() {
        for text in ["blackman", "hft95", "kaiser=8.6", "tukey=0.3", "exponential=40"] {
            let samples = Window::parse(text).unwrap().samples(800);
            let full = (1..=800).map(|hop| advantage(&samples, hop)).fold(f64::MIN, f64::max);
            let found = advantage(&samples, best_hop(&samples));
            assert!((found - full).abs() < 1e-12, "{text}: {found} {full}");
        }
    }
}
