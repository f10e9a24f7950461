//! Tags and orders of the rows.

use super::Request;
use super::output::{FundamentalFact, Tone};
use crate::tone::families::{Setting, Sighting, fundamental_hz, tags};

/// Adds to each row what it belongs to and its order; gives the fundamental used.
pub(super) fn fill(tones: &mut [Tone], request: &Request, line_spacing_hz: f64) -> Option<FundamentalFact> {
    let sighting =
        |t: &Tone| Sighting { frequency_hz: t.frequency_hz, u95_hz: t.frequency_u95_hz, amplitude: t.amplitude };
    let sightings: Vec<Sighting> = tones.iter().map(sighting).collect();
    let setting =
        Setting { sample_rate_hz: request.sample_rate_hz, line_spacing_hz, fundamental_hz: request.fundamental_hz };
    for (tone, tags) in tones.iter_mut().zip(tags(&sightings, &setting)) {
        let mut written: Vec<String> = tags.iter().map(|t| t.written(line_spacing_hz)).collect();
        written.append(&mut tone.tags);
        tone.tags = written;
    }
    let used_hz = fundamental_hz(&sightings, &setting)?;
    for tone in tones {
        tone.order = Some(tone.frequency_hz / used_hz);
    }
    request.fundamental_hz.map(|pinned_hz| FundamentalFact { pinned_hz, used_hz })
}
