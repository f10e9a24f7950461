//! The segment's panes.

use crate::signal::Extent;
use crate::window::Window;

/// The transform of a segment and its panes: one-sided power |Y|² a line, for every window.
#[derive(Debug)]
pub struct Spectra {
    n: usize,
    sample_rate_hz: f64,
    windows: Vec<Window>,
}

/// A pane's curve over pixel columns: for each the least and greatest amplitude (peak, full scale) of the spectrum.
pub type Curve = Vec<Extent>;

impl Spectra {
    /// Samples in the segment.
    pub fn n_samples(&self) -> usize {
        self.n
    }

    /// Samples a second.
    pub fn sample_rate_hz(&self) -> f64 {
        self.sample_rate_hz
    }

    /// The panes' windows, in order.
    pub fn windows(&self) -> &[Window] {
        &self.windows
    }

    /// The curve of pane `pane` over columns whose edges, in hertz and rising, are `edges_hz` (one more than columns).
    ///
    /// Each column holds the least and greatest amplitude in it, as 20 lg of the peak amplitude over full scale (dB),
    /// finite and not below -400 dB. A column that holds whole lines shows their extremes; a narrower one shows the
    /// true transform between lines.
    pub fn curve_db(&self, pane: usize, edges_hz: &[f64]) -> Curve {
        let _ = pane;
        vec![Extent::EMPTY; edges_hz.len().saturating_sub(1)]
    }

    /// The amplitude that pane `pane` shows at a frequency: 20 lg of the peak amplitude over full scale (dB).
    pub fn value_db(&self, pane: usize, frequency_hz: f64) -> f64 {
        let _ = (pane, frequency_hz);
        -400.0
    }
}
