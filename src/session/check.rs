//! Whether a document can be: everything a file might say that the program relies on not to happen.

use super::command::{MAX_DECISIONS, MAX_PANES, MAX_SEGMENTS, MAX_TONES, axes_are_usable, scale_is_finite};
use super::{DocumentError, Session};
use crate::signal::RATES_HZ;

impl Session {
    /// Checks that the document is one the program could have made.
    ///
    /// # Errors
    /// [`DocumentError`] naming the first thing that cannot be.
    pub fn check(&self) -> Result<(), DocumentError> {
        self.check_counts()?;
        self.check_segments()?;
        self.check_panes()?;
        self.check_numbers()
    }

    fn check_counts(&self) -> Result<(), DocumentError> {
        let count = |what, n: usize, least, most| {
            if (least..=most).contains(&n) { Ok(()) } else { Err(DocumentError::Count { what, n, least, most }) }
        };
        let channels = self.capture.channels;
        count("channels", channels, 1, usize::from(u16::MAX))?;
        count("scales", self.scales.len(), channels, channels)?;
        count("segments", self.segments.len(), 1, MAX_SEGMENTS)?;
        count("panes", self.panes.len(), 1, MAX_PANES)?;
        count("tones named by hand", self.hand_tones.len(), 0, MAX_TONES)?;
        count("refusals", self.refused.len(), 0, MAX_DECISIONS)?;
        count("verdicts overruled", self.overruled.len(), 0, MAX_DECISIONS)?;
        count("tones to search for", self.tuning.max_tones, 1, MAX_TONES)?;
        if self.channel >= channels {
            return Err(DocumentError::Channel { channel: self.channel, channels });
        }
        Ok(())
    }

    fn check_segments(&self) -> Result<(), DocumentError> {
        let frames = self.capture.frames;
        for segment in &self.segments {
            let (start, end) = (segment.span.start, segment.span.start.checked_add(segment.span.samples));
            let fits = end.is_some_and(|end| end <= frames) && (segment.span.samples > 0 || frames == 0);
            if !fits {
                let name: String = segment.name.chars().take(40).filter(|c| !c.is_control()).collect();
                return Err(DocumentError::Span { name, start, end: segment.span.end(), frames });
            }
        }
        check_ids("segment", self.segments.iter().map(|s| s.id.0), self.last_segment_id)?;
        match self.current_segment() {
            Some(_) => Ok(()),
            None => Err(DocumentError::NoCurrent { id: self.current.0 }),
        }
    }

    fn check_panes(&self) -> Result<(), DocumentError> {
        check_ids("pane", self.panes.iter().map(|p| p.id.0), self.last_pane_id)
    }

    fn check_numbers(&self) -> Result<(), DocumentError> {
        let positive = |what, value: f64| {
            if value > 0.0 && value.is_finite() { Ok(()) } else { Err(DocumentError::Number { what, value }) }
        };
        let rate = |what, value: f64| {
            if RATES_HZ.contains(&value) { Ok(()) } else { Err(DocumentError::Number { what, value }) }
        };
        let frequency = |what, value: f64| {
            if value >= 0.0 && value.is_finite() { Ok(()) } else { Err(DocumentError::Number { what, value }) }
        };
        rate("the capture's sample rate", self.capture.sample_rate_hz)?;
        rate("the sample rate", self.sample_rate_hz())?;
        positive("the chance of a false alarm", self.tuning.false_alarm)?;
        positive("one less the chance of a false alarm", 1.0 - self.tuning.false_alarm)?;
        self.hand_tones.iter().try_for_each(|t| positive("the frequency of a tone named by hand", t.frequency_hz))?;
        self.refused.iter().try_for_each(|r| positive("the frequency of a refusal", r.frequency_hz))?;
        self.overruled.iter().try_for_each(|o| positive("the frequency of a verdict overruled", o.frequency_hz))?;
        self.fundamental_hz.map_or(Ok(()), |f| positive("the fundamental pinned", f))?;
        self.notes.iter().filter_map(|n| n.frequency_hz).try_for_each(|f| frequency("the frequency of a note", f))?;
        self.picked_hz.map_or(Ok(()), |f| frequency("the frequency picked", f))?;
        if !self.scales.iter().all(scale_is_finite) {
            return Err(DocumentError::Number { what: "a number of a scale", value: f64::NAN });
        }
        if !axes_are_usable(&self.axes) {
            return Err(DocumentError::Number { what: "a limit of the axes", value: f64::NAN });
        }
        Ok(())
    }
}

/// No session has given so many ids; room is left to go on counting.
const MAX_ID: u32 = 1 << 30;

fn check_ids(what: &'static str, ids: impl Iterator<Item = u32>, last: u32) -> Result<(), DocumentError> {
    if last > MAX_ID {
        return Err(DocumentError::Id { what, id: last });
    }
    let mut seen = std::collections::BTreeSet::new();
    for id in ids {
        if id > last || !seen.insert(id) {
            return Err(DocumentError::Id { what, id });
        }
    }
    Ok(())
}
