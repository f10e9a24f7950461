//! What the user decides against the program, or beside it: who and why are kept with it.

use serde::{Deserialize, Serialize};

use super::{SegmentId, Session};

/// A decision belongs to the tone that stands this near to its place, lines of the segment read.
pub const SAME_TONE_LINES: f64 = 0.75;

/// What a tone is.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Verdict {
    /// Fitted, steady, parted from its neighbours, and the clear readings agree.
    Holds,
    /// A neighbour is too near.
    Crowded,
    /// It moves over the segment.
    Wanders,
    /// Clear readings disagree and nothing explains it.
    Disputed,
    /// Leakage of stronger tones; not a tone.
    Skirt,
    /// Too weak to be sure.
    Faint,
}

impl Verdict {
    /// All of them, the best first.
    pub const ALL: [Self; 6] = [Self::Holds, Self::Crowded, Self::Wanders, Self::Disputed, Self::Faint, Self::Skirt];

    /// The word for it.
    pub fn word(self) -> &'static str {
        match self {
            Self::Holds => "holds",
            Self::Crowded => "crowded",
            Self::Wanders => "wanders",
            Self::Disputed => "disputed",
            Self::Skirt => "skirt",
            Self::Faint => "faint",
        }
    }
}

/// A place where no tone is to be listed, in whatever segment is read. What stands there is fitted with the other
/// tones, so that it leaks into none of them.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Refusal {
    /// Where.
    pub frequency_hz: f64,
    /// Who; may be empty.
    #[serde(default)]
    pub by: String,
    /// Why; may be empty.
    #[serde(default)]
    pub reason: String,
}

/// A verdict that stands in the place of the program's, for one channel in one segment. Both are shown.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Overrule {
    /// The tone, by its frequency.
    pub frequency_hz: f64,
    /// The channel, counted from 0.
    pub channel: usize,
    /// The segment.
    pub segment: SegmentId,
    /// What it is said to be.
    pub verdict: Verdict,
    /// Who.
    pub by: String,
    /// Why.
    pub reason: String,
}

impl Session {
    /// One over the duration of the segment read; infinite where it holds nothing.
    pub fn line_spacing_hz(&self) -> f64 {
        let samples = self.current_segment().map_or(0, |s| s.span.samples);
        self.sample_rate_hz() / samples as f64
    }

    /// Whether two places are one tone in the segment read.
    pub fn is_same_tone(&self, a_hz: f64, b_hz: f64) -> bool {
        (a_hz - b_hz).abs() <= SAME_TONE_LINES * self.line_spacing_hz()
    }

    /// The verdicts overruled of the channel and segment read.
    pub fn overruled_here(&self) -> impl Iterator<Item = (usize, &Overrule)> {
        let here = |o: &Overrule| o.channel == self.channel && o.segment == self.current;
        self.overruled.iter().enumerate().filter(move |(_, o)| here(o))
    }
}
