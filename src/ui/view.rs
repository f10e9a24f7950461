//! What is shown and how, beside the document: kept while the program runs, never undone.

use std::path::PathBuf;

use super::action::Action;
use super::chooser::Choosing;
use super::merits::Merits;
use super::overlay::KernelCache;
use super::plot::CurveCache;
use super::strip::StripCache;
use crate::session::{Command, PaneId, ViewAxes};
use crate::window::Window;

/// Something a panel wants done. Panels only push these; they are carried out in one place after the panels.
#[derive(Debug)]
pub(super) enum Intent {
    /// Change the document.
    Change(Command),
    /// Put a window in the pane that pane commands act on.
    Put(Window),
    /// A drag, a spin or a text has ended: what comes next is a step of its own.
    CloseStep,
    /// Do what a menu entry does.
    Do(Action),
    /// Ask who named a tone, and why.
    Explain(usize),
    /// Open a file, a capture or a session as its name says.
    Open(PathBuf),
    /// Stop what is being computed.
    CallOff,
    /// Compute what is asked for after it was called off or failed.
    Retry,
    /// Read how steady the capture is, after that was called off.
    ReadSteadiness,
}

/// What panels push.
pub(super) type Intents = Vec<Intent>;

/// The cell of the tone table whose ledger is shown.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Cell {
    pub(super) tone: usize,
    pub(super) pane: usize,
}

/// What is shown and how.
#[derive(Debug)]
#[expect(clippy::struct_excessive_bools, reason = "each is a state of its own: nothing here excludes another")]
pub(super) struct View {
    /// The frames the strip shows, first and one past the last; `None`: all.
    pub(super) strip: Option<(f64, f64)>,
    /// Whether a segment is being marked or an edge dragged: the level axis then stays put.
    pub(super) marking: bool,
    /// Where a mark by dragging began, in frames.
    pub(super) mark_from: Option<f64>,
    /// Where the hairline stands.
    pub(super) hairline_hz: Option<f64>,
    /// The level range fitted to what there is.
    pub(super) fitted_level: Option<(f64, f64)>,
    /// Whether the level range has to be fitted again.
    pub(super) refit_level: bool,
    /// Whether the setup column is open.
    pub(super) setup_open: bool,
    /// Whether positions are typed in samples rather than seconds.
    pub(super) in_samples: bool,
    /// The pane the pane commands act on.
    pub(super) pane: Option<PaneId>,
    /// The pane shown alone.
    pub(super) enlarged: Option<PaneId>,
    /// The pane whose column the ledger card shows; `None`: the sharpest clear one.
    pub(super) card_pane: Option<usize>,
    /// Pages the card is to be scrolled on by.
    pub(super) card_scroll: i32,
    /// Whether the picked tone's row has to be brought into sight.
    pub(super) reveal_pick: bool,
    /// The window being chosen.
    pub(super) choosing: Option<Choosing>,
    /// The window whose kernel is drawn over a pane in this frame.
    pub(super) preview: Option<(PaneId, Window)>,
    /// A pane to bring into sight.
    pub(super) reveal_pane: Option<PaneId>,
    /// Figures of windows.
    pub(super) merits: Merits,
    /// The kernel last drawn.
    pub(super) kernels: KernelCache,
    /// Columns of curves.
    pub(super) curves: CurveCache,
    /// Columns of skirts.
    pub(super) tints: CurveCache,
    /// Whether what is leakage is tinted, and its peaks marked.
    pub(super) skirts: bool,
    /// Whether the smallest tone that would be seen is drawn.
    pub(super) smallest: bool,
    /// The block of the steadiness ribbon that keys have moved to.
    pub(super) ribbon_block: usize,
    /// Columns of the strip.
    pub(super) strip_cache: StripCache,
    /// What is typed in the empty state's path field.
    pub(super) typed_path: String,
}

impl Default for View {
    fn default() -> Self {
        Self {
            strip: None,
            marking: false,
            mark_from: None,
            hairline_hz: None,
            fitted_level: None,
            refit_level: true,
            setup_open: true,
            in_samples: false,
            pane: None,
            enlarged: None,
            card_pane: None,
            card_scroll: 0,
            reveal_pick: false,
            choosing: None,
            preview: None,
            reveal_pane: None,
            merits: Merits::default(),
            kernels: KernelCache::default(),
            curves: CurveCache::default(),
            tints: CurveCache::default(),
            skirts: true,
            smallest: true,
            ribbon_block: 0,
            strip_cache: StripCache::default(),
            typed_path: String::new(),
        }
    }
}

impl View {
    /// The view of another capture: what belongs to the old one is forgotten, what belongs to the user is kept.
    pub(super) fn for_new_capture(&mut self) {
        let old = std::mem::take(self);
        self.setup_open = old.setup_open;
        self.in_samples = old.in_samples;
        self.skirts = old.skirts;
        self.smallest = old.smallest;
        self.merits = old.merits;
    }
}

/// The frequency range the axes show, Hz.
pub(super) fn frequency_range(axes: &ViewAxes, rate_hz: f64) -> (f64, f64) {
    axes.frequency_hz.unwrap_or((0.0, rate_hz / 2.0))
}

/// `range` moved and narrowed so that it lies in 0 to `nyquist_hz` and is at least `least_hz` wide.
pub(super) fn held_range((lo, hi): (f64, f64), least_hz: f64, nyquist_hz: f64) -> Option<(f64, f64)> {
    if !(lo.is_finite() && hi.is_finite()) {
        return None;
    }
    let width = (hi - lo).max(least_hz.min(nyquist_hz));
    if width >= nyquist_hz * 0.9999 {
        return None;
    }
    let middle = 0.5 * (lo + hi);
    let lo = (middle - 0.5 * width).clamp(0.0, nyquist_hz - width);
    Some((lo, lo + width))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn ranges_are_held_between_zero_and_half_the_rate() {
        assert_eq!(held_range((-5.0, 15.0), 1.0, 100.0), Some((0.0, 20.0)));
        assert_eq!(held_range((90.0, 120.0), 1.0, 100.0), Some((70.0, 100.0)));
        assert_eq!(held_range((50.0, 50.0), 2.0, 100.0), Some((49.0, 51.0)));
        assert_eq!(held_range((-5.0, 500.0), 1.0, 100.0), None);
        assert_eq!(held_range((f64::NAN, 1.0), 1.0, 100.0), None);
    }
}
