//! The trait through which all samples are read, and a source held in memory.

use std::fmt::Debug;
use std::ops::{Range, RangeInclusive};

use super::{Cancelled, Watch};

/// The sample rates that can be meant: from a sample in eleven days to a thousand times the fastest converter.
pub const RATES_HZ: RangeInclusive<f64> = 1e-6..=1e12;

/// Why samples could not be had.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum SignalError {
    /// The span reaches past the end of the signal.
    #[error("samples {start} to {end} were asked for, but the signal ends at {frames}: mark a segment inside it")]
    OutOfRange {
        /// First sample asked for.
        start: u64,
        /// One past the last sample asked for.
        end: u64,
        /// How many there are in a channel.
        frames: u64,
    },
    /// There is no such channel.
    #[error("channel {} was asked for, but there are {channels}: choose one of them", .channel + 1)]
    NoChannel {
        /// The channel asked for, counted from 0.
        channel: usize,
        /// How many there are.
        channels: usize,
    },
    /// The source failed while reading.
    #[error("{what} at frame {frame}: the file may have been cut or replaced while open; open it again")]
    Unreadable {
        /// What the source said.
        what: String,
        /// Where it happened.
        frame: u64,
    },
    /// The work was cancelled.
    #[error(transparent)]
    Cancelled(#[from] Cancelled),
}

/// Where samples come from: a number of channels at one rate, read in blocks of frames.
///
/// A frame is one sample of every channel. Implementations are shared between threads and never write to what they
/// read from.
pub trait Source: Send + Sync + Debug {
    /// Frames a second as the source states it, in hertz; above 0 and finite.
    fn sample_rate_hz(&self) -> f64;

    /// How many channels there are; at least 1.
    fn n_channels(&self) -> usize;

    /// How many frames can be read.
    fn n_frames(&self) -> u64;

    /// Bits of a sample where samples are integers, whose full scale 2^(bits-1) reads as 1.0; none for any others.
    fn bits_per_sample(&self) -> Option<u32> {
        None
    }

    /// Fills `out` with frames from `start` on, interleaved: `out.len()` is a whole number of frames.
    ///
    /// # Errors
    /// [`SignalError::OutOfRange`] past the end, [`SignalError::Unreadable`] where the source fails.
    fn read_frames(&self, start: u64, out: &mut [f64]) -> Result<(), SignalError>;
}

/// A stretch of consecutive samples, counted from the start of the capture.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, serde::Serialize, serde::Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Span {
    /// First sample.
    pub start: u64,
    /// How many samples.
    pub samples: u64,
}

impl Span {
    /// The span of `range`; empty if the range is.
    pub fn from_range(range: Range<u64>) -> Self {
        Self { start: range.start, samples: range.end.saturating_sub(range.start) }
    }

    /// One past the last sample.
    pub fn end(self) -> u64 {
        self.start.saturating_add(self.samples)
    }

    /// The part of the span that lies below `frames`.
    #[must_use]
    pub fn clipped_to(self, frames: u64) -> Self {
        Self::from_range(self.start.min(frames)..self.end().min(frames))
    }
}

/// Values read at a time where a whole span is wanted: large enough to be quick, small enough to be cancelled soon, and
/// bounded however many channels there are.
const VALUES_A_BLOCK: usize = 1 << 17;

/// One channel of a span, as normalised samples.
///
/// # Errors
/// As [`Source::read_frames`]; [`SignalError::NoChannel`]; [`SignalError::Cancelled`].
pub fn read_channel(source: &dyn Source, channel: usize, span: Span, watch: &Watch) -> Result<Vec<f64>, SignalError> {
    let channels = source.n_channels();
    if channel >= channels {
        return Err(SignalError::NoChannel { channel, channels });
    }
    if span.end() > source.n_frames() {
        return Err(SignalError::OutOfRange { start: span.start, end: span.end(), frames: source.n_frames() });
    }
    let mut samples = Vec::with_capacity(span.samples as usize);
    let frames_a_block = (VALUES_A_BLOCK / channels).clamp(1, (span.samples as usize).max(1));
    let mut frames = vec![0.0; frames_a_block * channels];
    let mut at = span.start;
    while at < span.end() {
        watch.check()?;
        let n = frames_a_block.min((span.end() - at) as usize);
        let block = &mut frames[..n * channels];
        source.read_frames(at, block)?;
        samples.extend(block.iter().skip(channel).step_by(channels));
        at += n as u64;
    }
    Ok(samples)
}

/// A source whose samples are in memory, interleaved.
#[derive(Debug, Clone)]
pub struct Stored {
    sample_rate_hz: f64,
    channels: usize,
    interleaved: Vec<f64>,
}

impl Stored {
    /// A source of interleaved samples; samples past the last whole frame are left out.
    ///
    /// # Panics
    /// If `channels` is 0 or the rate is not a positive number.
    pub fn new(sample_rate_hz: f64, channels: usize, mut interleaved: Vec<f64>) -> Self {
        assert!(channels > 0, "a signal has at least one channel");
        assert!(sample_rate_hz > 0.0 && sample_rate_hz.is_finite(), "sample rate {sample_rate_hz} Hz");
        interleaved.truncate(interleaved.len() / channels * channels);
        Self { sample_rate_hz, channels, interleaved }
    }
}

impl Source for Stored {
    fn sample_rate_hz(&self) -> f64 {
        self.sample_rate_hz
    }

    fn n_channels(&self) -> usize {
        self.channels
    }

    fn n_frames(&self) -> u64 {
        (self.interleaved.len() / self.channels) as u64
    }

    fn read_frames(&self, start: u64, out: &mut [f64]) -> Result<(), SignalError> {
        let n = (out.len() / self.channels) as u64;
        let out_of_range = SignalError::OutOfRange { start, end: start.saturating_add(n), frames: self.n_frames() };
        let from = usize::try_from(start).ok().and_then(|s| s.checked_mul(self.channels));
        let from = from.filter(|&f| f <= self.interleaved.len()).ok_or_else(|| out_of_range.clone())?;
        let block = self.interleaved.get(from..from + out.len()).ok_or(out_of_range)?;
        out.copy_from_slice(block);
        Ok(())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn two_channels() -> Stored {
        Stored::new(10.0, 2, vec![0.0, 10.0, 1.0, 11.0, 2.0, 12.0, 3.0])
    }

    #[test]
    fn a_channel_is_taken_out_of_the_frames() {
        let read = read_channel(&two_channels(), 1, Span { start: 1, samples: 2 }, &Watch::new());
        assert_eq!(read, Ok(vec![11.0, 12.0]));
    }

    #[test]
    fn spans_past_the_end_and_missing_channels_are_refused() {
        let source = two_channels();
        assert_eq!(source.n_frames(), 3);
        let past = read_channel(&source, 0, Span { start: 2, samples: 2 }, &Watch::new());
        assert_eq!(past, Err(SignalError::OutOfRange { start: 2, end: 4, frames: 3 }));
        let missing = read_channel(&source, 2, Span { start: 0, samples: 1 }, &Watch::new());
        assert_eq!(missing, Err(SignalError::NoChannel { channel: 2, channels: 2 }));
        assert!(source.read_frames(u64::MAX, &mut [0.0; 2]).is_err());
    }

    #[test]
    fn a_cancelled_read_stops() {
        let watch = Watch::new();
        watch.cancel();
        let read = read_channel(&two_channels(), 0, Span { start: 0, samples: 3 }, &watch);
        assert_eq!(read, Err(SignalError::Cancelled(Cancelled)));
    }
}
