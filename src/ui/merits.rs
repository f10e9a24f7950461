//! Figures of merit of windows for the screen: computed in the background, shown as soon as they are there.

use std::collections::HashMap;

use crate::window::Window;

/// A window's text and the number of samples its figures are of.
pub(super) type Key = (String, usize);

/// So many are kept before old ones are forgotten: several catalogues' worth.
const MOST: usize = 1024;

/// Figures are of at least and at most so many samples.
const SAMPLES: (u64, u64) = (16, 4096);

/// The figures of a window that a choice goes by.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Figures {
    /// Equivalent noise bandwidth, bins.
    pub(super) enbw_bins: f64,
    /// The highest side lobe over the main lobe, dB.
    pub(super) side_lobe_db: f64,
    /// Scalloping loss, dB.
    pub(super) scalloping_db: f64,
    /// The main lobe from first null to first null, bins.
    pub(super) main_lobe_bins: f64,
}

/// Figures that somebody waits for.
#[derive(Debug)]
pub(super) struct Wanted {
    window: Window,
    n: usize,
}

impl Wanted {
    /// Computes them: some milliseconds, so never on the thread that draws.
    pub(super) fn compute(self) -> (Key, Figures) {
        let merit = self.window.merit(self.n);
        let figures = Figures {
            enbw_bins: merit.enbw_bins,
            side_lobe_db: merit.highest_side_lobe_db,
            scalloping_db: merit.scalloping_loss_db,
            main_lobe_bins: merit.width_null_bins,
        };
        ((self.window.to_string(), self.n), figures)
    }
}

/// The figures there are, and those that are wanted.
#[derive(Debug, Default)]
pub(super) struct Merits {
    /// `None` while they are being computed.
    kept: HashMap<Key, Option<Figures>>,
    wanted: Vec<Wanted>,
}

impl Merits {
    /// The figures of a window over a segment of `samples`; `None` while they are being computed.
    ///
    /// They are those of the power of two below, and of 4096 samples at most: past some hundred samples no digit shown
    /// depends on the length, and so an edge may be dragged without asking anew at every sample.
    pub(super) fn of(&mut self, window: &Window, samples: u64) -> Option<Figures> {
        let n = 1_usize << samples.clamp(SAMPLES.0, SAMPLES.1).ilog2();
        let key = (window.to_string(), n);
        if let Some(known) = self.kept.get(&key) {
            return *known;
        }
        if self.kept.len() >= MOST {
            self.kept.retain(|_, figures| figures.is_none());
        }
        self.kept.insert(key, None);
        self.wanted.push(Wanted { window: window.clone(), n });
        None
    }

    /// What has to be computed, told once.
    pub(super) fn wanted(&mut self) -> Vec<Wanted> {
        std::mem::take(&mut self.wanted)
    }

    /// Takes in figures.
    pub(super) fn take(&mut self, key: Key, figures: Figures) {
        self.kept.insert(key, Some(figures));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn figures_are_asked_for_once_and_kept() {
        let (mut merits, hann) = (Merits::default(), Window::parse("hann").unwrap());
        assert_eq!(merits.of(&hann, 206_848), None);
        assert_eq!(merits.of(&hann, 206_849), None);
        let wanted = merits.wanted();
        assert_eq!((wanted.len(), merits.wanted().len()), (1, 0));
        for one in wanted {
            let (key, figures) = one.compute();
            merits.take(key, figures);
        }
        // Harris 1978, table I: 1.50 bins, 1.42 dB, -32 dB; first nulls two bins to either side.
        let figures = merits.of(&hann, 206_848).unwrap();
        assert!((figures.enbw_bins - 1.5).abs() < 1e-9 && (figures.main_lobe_bins - 4.0).abs() < 1e-6);
        assert!((figures.scalloping_db - 1.42).abs() < 0.005 && (figures.side_lobe_db + 31.5).abs() < 0.1);
    }
}
