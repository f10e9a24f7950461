//! What is made of a capture by reading it through, and what follows from it: doubts, the suggested stretch, the range
//! shown at first.

use std::sync::Arc;

use super::desk::Desk;
use super::files::{self, Event, UNFORESEEN};
use super::lane::guarded;
use super::ribbon::SUGGESTED;
use super::view::held_range;
use super::workbench::Workbench;
use crate::signal::{Span, Watch};
use crate::tone::Steadiness;

/// The range shown at first reaches so far over the highest tone,
const OVER_THE_HIGHEST: f64 = 1.1;
/// and is at least this part of the band.
const LEAST_OF_BAND: f64 = 0.1;

/// How steady the channel read is, as far as that is known.
#[derive(Debug, Default)]
pub(super) struct Steady {
    /// What was found.
    pub(super) found: Option<Arc<Steadiness>>,
    /// Tells how far the reading is, and calls it off.
    pub(super) watch: Watch,
}

impl Steady {
    /// Forgets what was found and calls off what is being read, for what comes next.
    fn start(&mut self) {
        std::mem::take(self).watch.cancel();
    }

    /// Whether it is being read, or waits to be.
    pub(super) fn is_reading(&self) -> bool {
        self.found.is_none() && !self.watch.is_cancelled()
    }

    /// The longest steady stretch.
    pub(super) fn longest(&self) -> Option<Span> {
        self.found.as_ref()?.longest()
    }

    /// The stretches that are suggested, longest first.
    pub(super) fn suggested(&self) -> &[Span] {
        let stretches = self.found.as_ref().map_or(&[][..], |found| &found.stretches);
        stretches.get(..SUGGESTED).unwrap_or(stretches)
    }
}

impl Workbench {
    /// Has the capture read through, or, where that is done, what is made of the channel now read.
    pub(super) fn survey(&mut self) {
        let (Some(desk), Some(threads)) = (&mut self.desk, &self.threads) else { return };
        let channel = desk.session.channel;
        if desk.surveyed_channel == Some(channel) {
            return;
        }
        if desk.surveyed_channel.is_some() {
            self.notices.forget_doubts();
        }
        desk.surveyed_channel = Some(channel);
        desk.surveyed = false;
        desk.steady.start();
        desk.untouched = !desk.marked;
        let (capture, session, watch) = (Arc::clone(&desk.capture), desk.session.clone(), desk.watch.clone());
        let (number, overview, steady) = (desk.number, desk.overview.clone(), desk.steady.watch.clone());
        threads.survey.run(move |tell| {
            if guarded(|| files::survey(number, (&capture, &overview), &session, (&watch, &steady), tell)).is_none() {
                tell(Event::Said(UNFORESEEN.to_owned()));
                tell(Event::Surveyed((number, channel)));
            }
        });
    }

    /// Has columns read that the strip wants from the samples themselves.
    pub(super) fn read_columns(&mut self) {
        let (Some(desk), Some(threads)) = (&mut self.desk, &self.threads) else { return };
        let Some((key, edges)) = self.view.strip_cache.wanted() else { return };
        // The strip has moved on: what it wanted before is of no use any more.
        let watch = Watch::new();
        std::mem::replace(&mut desk.columns_watch, watch.clone()).cancel();
        let (capture, number) = (Arc::clone(&desk.capture), desk.number);
        threads.strip.run(move |tell| {
            // What cannot be read stays as coarse as it is drawn; the reading of the segment says why.
            if let Ok(columns) = crate::capture::raw_columns(&*capture.source, key.channel, &edges, &watch) {
                tell(Event::Columns(number, key, columns));
            }
        });
    }

    /// The desk, if what is told is about what it holds now.
    fn desk_about(&mut self, (number, channel): (u64, usize)) -> Option<&mut Desk> {
        self.desk.as_mut().filter(|d| d.number == number && d.session.channel == channel)
    }

    pub(super) fn take_doubts(&mut self, about: (u64, usize), doubts: &[String]) {
        let Some(desk) = self.desk_about(about) else { return };
        let several = desk.session.capture.channels > 1;
        for text in doubts {
            let text = if several { format!("Channel {}: {text}", about.1 + 1) } else { text.clone() };
            self.notices.doubt(&text);
        }
    }

    /// Reads how steady the channel is, after that was called off.
    pub(super) fn read_steadiness(&mut self) {
        let (Some(desk), Some(threads)) = (&mut self.desk, &self.threads) else { return };
        desk.steady.start();
        let about = (desk.number, desk.session.channel);
        let (capture, watch) = (Arc::clone(&desk.capture), desk.steady.watch.clone());
        threads.survey.run(move |tell| {
            if guarded(|| files::read_steadiness(about, &capture, &watch, tell)).is_none() {
                watch.cancel();
                tell(Event::Said(UNFORESEEN.to_owned()));
            }
        });
    }

    /// How steady the channel is has been read; its longest stretch is used where the user has not marked anything.
    pub(super) fn take_steadiness(&mut self, about: (u64, usize), found: Arc<Steadiness>) {
        let Some(desk) = self.desk_about(about) else { return };
        let longest = found.longest();
        desk.steady.found = Some(found);
        if let Some(span) = longest.filter(|_| desk.untouched) {
            desk.start_from(span);
            self.view.refit_level = true;
        }
    }

    pub(super) fn take_surveyed(&mut self, about: (u64, usize)) {
        if let Some(desk) = self.desk_about(about) {
            desk.surveyed = true;
        }
    }
}

/// Shows 0 Hz to a little above the highest tone, once there are tones, until the user has touched the axes.
pub(super) fn fit_axes_at_first(desk: &mut Desk) {
    if !desk.fits_axes || !desk.latest.is_current() {
        return;
    }
    if let Some(reading) = desk.reading() {
        let highest = reading.tones.iter().map(|t| t.frequency_hz).fold(0.0, f64::max);
        desk.session.axes.frequency_hz = first_range(highest, desk.session.sample_rate_hz() / 2.0);
    }
    // A suggested stretch may still come, and with it other tones.
    desk.fits_axes = !desk.surveyed;
}

/// From 0 Hz to a little above `highest_hz`, two digits' worth; everything where that is nearly all.
fn first_range(highest_hz: f64, nyquist_hz: f64) -> Option<(f64, f64)> {
    if highest_hz <= 0.0 {
        return None;
    }
    let top = (highest_hz * OVER_THE_HIGHEST).max(nyquist_hz * LEAST_OF_BAND);
    let step = 10_f64.powf(top.log10().floor() - 1.0);
    held_range((0.0, (top / step).ceil() * step), 0.0, nyquist_hz)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_first_range_holds_every_tone_and_a_tenth_of_the_band() {
        assert_eq!(first_range(300.125, 1024.0), Some((0.0, 340.0)));
        assert_eq!(first_range(5.0, 1000.0), Some((0.0, 100.0)));
        assert_eq!(first_range(950.0, 1000.0), None);
        assert_eq!(first_range(0.0, 1000.0), None);
    }
}
