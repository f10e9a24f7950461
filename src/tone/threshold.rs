//! How far over the floor a peak must stand so that noise alone seldom gives one.

/// The ratio of a line's power to the floor that noise alone passes anywhere in the search with probability
/// `false_alarm`.
///
/// Solves M (1 + √(πz/3)) Π_{j=0}^{r-1} (L-j)/(L-j + z/ln 2) = P for z: the threshold of an ordered-statistic detector
/// whose floor is the r-th of L lines, r = (L+1)/2, divided by ln 2, for M lines searched and the crossing rate of the
/// spectrum between them. `n_lines` is M (at least 1 is used), `floor_lines` L (likewise), `false_alarm` P, between 0
/// and 1. The result lies between 1 and 1e9.
///
/// # Reference
/// Rohling, Radar CFAR thresholding in clutter and multiple target situations, IEEE Trans. Aerospace and Electronic
/// Systems 19(4), 1983 (from memory).
pub fn detection_threshold(n_lines: usize, floor_lines: usize, false_alarm: f64) -> f64 {
    let lines = floor_lines.max(1);
    let rank = lines.div_ceil(2);
    let log_chance = |z: f64| {
        let product: f64 = (0..rank).map(|j| -((z / std::f64::consts::LN_2) / (lines - j) as f64).ln_1p()).sum();
        (n_lines.max(1) as f64).ln() + (std::f64::consts::PI * z / 3.0).sqrt().ln_1p() + product
    };
    let wanted = false_alarm.clamp(1e-12, 0.999).ln();
    let (mut low, mut high) = (1.0_f64, 1e9_f64);
    for _ in 0..200 {
        let middle = (low * high).sqrt();
        if log_chance(middle) > wanted { low = middle } else { high = middle }
    }
    high
}

#[cfg(test)]
mod tests {
    use super::*;

    /// 8192 lines, medians of 101, one chance in a thousand: 21.1 (computed independently with the same formula).
    #[test]
    fn a_worked_case() {
        let z = detection_threshold(8192, 101, 1e-3);
        assert!((z - 21.1).abs() < 0.05, "{z}");
    }

    #[test]
    fn more_lines_a_poorer_floor_and_a_smaller_chance_ask_for_more() {
        let base = detection_threshold(1000, 101, 1e-3);
        assert!(detection_threshold(10_000, 101, 1e-3) > base);
        assert!(detection_threshold(1000, 21, 1e-3) > base);
        assert!(detection_threshold(1000, 101, 1e-4) > base);
        assert!(detection_threshold(0, 0, 0.0).is_finite());
    }
}
