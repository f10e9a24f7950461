//! The figures of a Reading that a session keeps.

use super::{PaneFacts, Reading};
use crate::session::{Figures, PaneFigures, ToneFigures};
use crate::signal::Span;

/// What a session keeps of a Reading, so that a recheck can tell which figures moved.
pub fn figures_of(reading: &Reading) -> Figures {
    let tones = reading.tones.iter().map(|tone| ToneFigures {
        frequency_hz: tone.frequency_hz,
        amplitude: tone.amplitude,
        level_db: tone.level_db,
        frequency_u95_hz: tone.frequency_u95_hz,
        level_u95_db: tone.level_u95_db,
        verdict: tone.verdict.map(|v| v.word().to_owned()),
        overruled: tone.overruled.as_ref().map(|o| o.verdict.word().to_owned()),
        readings: tone
            .readings
            .iter()
            .map(|r| PaneFigures { state: r.state.word().to_owned(), peak_hz: r.peak_hz, level_db: r.level_db })
            .collect(),
    });
    Figures {
        channel: reading.segment.channel.saturating_sub(1),
        segment: Span { start: reading.segment.start_sample, samples: reading.segment.samples },
        sample_rate_hz: reading.capture.sample_rate_hz,
        reference: reading.scale.reference_label.clone(),
        windows: reading.panes.iter().map(PaneFacts::written).collect(),
        tones: tones.collect(),
    }
}
