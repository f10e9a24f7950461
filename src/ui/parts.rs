//! What the tones make of the panes and what they leave, made in the background when somebody wants to see it.

use std::sync::Arc;

use super::desk::{Desk, place_of};
use super::files::Event;
use super::workbench::Workbench;
use crate::reading::{Analysis, Skirts, residue_of, skirts_of};
use crate::signal::Watch;
use crate::spectrum::Spectra;
use crate::window::Window;

/// Segments longer than this have no skirts drawn: they would take as much memory again as the curves do.
const MOST_WITH_SKIRTS: usize = 1 << 23;

/// One part of an analysis.
#[derive(Debug)]
pub(super) enum Made {
    Skirts(Skirts),
    Residue(Arc<Spectra>),
}

/// The parts there are, each with the generation of the Reading it belongs to.
#[derive(Debug, Default)]
pub(super) struct Parts {
    pub(super) skirts: Option<(u64, Arc<Skirts>)>,
    pub(super) residue: Option<(u64, Arc<Spectra>)>,
    /// The generations last asked for.
    asked: [u64; 2],
    watch: Watch,
}

impl Parts {
    /// Takes in what was made for generation `generation`.
    pub(super) fn take(&mut self, generation: u64, made: Made) {
        match made {
            Made::Skirts(skirts) => self.skirts = Some((generation, Arc::new(skirts))),
            Made::Residue(spectra) => self.residue = Some((generation, spectra)),
        }
    }

    /// Whether something was asked for that is still to come.
    pub(super) fn is_busy(&self) -> bool {
        let made = [self.skirts.as_ref().map(|s| s.0), self.residue.as_ref().map(|r| r.0)];
        self.asked.iter().zip(made).any(|(asked, made)| *asked > made.unwrap_or(0))
    }

    /// Calls off what is being made.
    pub(super) fn call_off(&self) {
        self.watch.cancel();
    }
}

impl Desk {
    /// The curve that pane `index` shows, and its place among the spectra it is one of.
    pub(super) fn curve_shown(&self, index: usize, window: &Window, residue: bool) -> Option<(usize, &Arc<Spectra>)> {
        if !residue {
            return self.curve_of(index, window).zip(self.latest.spectra());
        }
        let spectra = self.parts.residue.as_ref().map(|r| &r.1)?;
        Some((place_of(spectra.windows(), index, |w| w == window)?, spectra))
    }

    /// The skirts of pane `index`, and its place among them.
    pub(super) fn skirts_of(&self, index: usize, window: &Window) -> Option<(usize, &Arc<Skirts>)> {
        let skirts = self.parts.skirts.as_ref().map(|s| &s.1)?;
        Some((place_of(skirts.spectra.windows(), index, |w| w == window)?, skirts))
    }

    /// Whether a part of generation `generation` is of the segment as it is asked for now.
    pub(super) fn part_is_current(&self, generation: Option<u64>) -> bool {
        self.latest.is_current() && generation.is_some() && generation == self.latest.analysed.as_ref().map(|a| a.0)
    }
}

impl Workbench {
    /// Has the parts made that are shown and are not those of the newest Reading.
    pub(super) fn make_parts(&mut self) {
        let (Some(desk), Some(threads)) = (&mut self.desk, &self.threads) else { return };
        let Some((generation, analysis)) = desk.latest.analysed.clone() else { return };
        if !desk.latest.is_current() {
            return;
        }
        let short = analysis.segment.spectra.n_samples() <= MOST_WITH_SKIRTS;
        let wanted =
            [self.view.skirts && analysis.found.settled && short, desk.session.panes.iter().any(|p| p.residue)];
        let parts = &mut desk.parts;
        if parts.asked.iter().all(|asked| *asked != generation) && wanted != [false; 2] {
            // What is still being made is of an older Reading.
            parts.watch.cancel();
            parts.watch = Watch::new();
        }
        let makers: [fn(&Analysis, &Watch) -> Option<Made>; 2] = [
            |analysis, watch| Some(Made::Skirts(skirts_of(analysis, watch).ok()?)),
            |analysis, watch| Some(Made::Residue(residue_of(analysis, watch).ok()?)),
        ];
        for ((wanted, asked), make) in wanted.into_iter().zip(&mut parts.asked).zip(makers) {
            if !wanted || *asked == generation {
                continue;
            }
            *asked = generation;
            let (number, watch, analysis) = (desk.number, parts.watch.clone(), Arc::clone(&analysis));
            threads.parts.run(move |tell| {
                if let Some(made) = make(&analysis, &watch) {
                    tell(Event::Part(number, generation, made));
                }
            });
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn parts_of_an_older_reading_are_not_current() {
        use crate::signal::Stored;
        let samples: Vec<f64> = (0..4096).map(|i| (0.3 * f64::from(i)).sin() + 1e-3 * f64::from(i * 7 % 11)).collect();
        let capture = crate::capture::Capture {
            path: "pump.wav".into(),
            format: "test".to_owned(),
            bits_per_sample: None,
            truncated: false,
            source: Arc::new(Stored::new(100.0, 1, samples)),
            doubts: Vec::new(),
            stamp: crate::capture::Stamp::default(),
        };
        let mut desk = Desk::fresh(1, Arc::new(capture), |_| {});
        let request = desk.request();
        let watch = Watch::new();
        let analysis = crate::reading::analyse(&*desk.capture.source, &request, None, &watch).unwrap();
        desk.latest.asked = Some((3, request));
        let residue = residue_of(&analysis, &watch).unwrap();
        desk.latest.take(super::super::worker::Answer::Reading(3, Box::new(analysis)));
        desk.parts.take(2, Made::Residue(residue));
        let hann = Window::parse("hann").unwrap();
        assert!(desk.curve_shown(1, &hann, true).is_some_and(|(place, _)| place == 1));
        assert!(!desk.part_is_current(desk.parts.residue.as_ref().map(|r| r.0)));
        assert!(desk.part_is_current(Some(3)) && !desk.part_is_current(None));
        assert!(desk.skirts_of(1, &hann).is_none());
    }
}
