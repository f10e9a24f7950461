//! How steady a channel is along its length, and the stretches whose blocks look alike.
//!
//! The capture is cut into some 200 to 400 blocks. Of each the level and the power spectrum (Hann, averaged over short
//! segments) are kept; nothing else, so that memory does not grow with the capture. A stretch is steady when
//!
//! - the spectrum of each block departs from the stretch's own by no more than its degrees of freedom explain,
//! - no change point of the levels stands out (CUSUM), and
//! - the levels show no trend (reverse arrangements test; Bendat and Piersol, Random Data, 4th ed. 2010, section 4.5.2).
//!
//! The last alone would pass a symmetric run-up and run-down. A change of level counts only above half a decibel:
//! beats and the small wobble of a machine are steady.

mod blocks;
mod course;
mod grow;
mod levels;

use std::ops::Range;

use crate::signal::{Cancelled, SignalError, Source, Span, Watch};

use blocks::{Blocks, Lent};

/// Shortest stretch worth suggesting, in samples.
const SHORTEST: u64 = 64;

/// A stretch whose r.m.s. is so far below that of the whole capture (20 dB) is the silence around the work, not the
/// work.
const QUIET: f64 = 0.1;

/// A stretch shorter than the longest by more than this is of no use beside it.
const LEAST_OF_LONGEST: u64 = 10;

/// A block of a channel beside those around it.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SteadyBlock {
    /// Its samples; the last block takes what is left at the end of the capture.
    pub span: Span,
    /// Its r.m.s. about its mean, over that of the whole channel, dB; -∞ for silence.
    pub level_db: f64,
    /// Its level less that of the block before, dB; 0 for the first. Not to be trusted where a sample is not a number.
    pub level_change_db: f64,
    /// How much it differs from the blocks before, or from those after where that is less, in spectrum or level, over
    /// what chance and small beats explain: up to 1 is no change. Infinite where a sample is not a number.
    pub change: f64,
    /// Whether it is 20 dB or more under the whole channel: rest, not work.
    pub is_quiet: bool,
}

/// A place where what is before and after differ.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ChangePoint {
    /// The sample it is near: changes are placed to the block.
    pub sample: u64,
    /// The level after it less that before, dB.
    pub level_db: f64,
}

/// How steady a channel is along its length.
#[derive(Debug, Clone, PartialEq, Default)]
pub struct Steadiness {
    /// The blocks, from start to end: a few hundred at most; none for a capture of fewer than 64 samples.
    pub blocks: Vec<SteadyBlock>,
    /// Where it changes, from start to end.
    pub changes: Vec<ChangePoint>,
    /// Steady stretches that do not overlap, longest first: those of at least a tenth of the longest.
    pub stretches: Vec<Span>,
}

impl Steadiness {
    /// The longest steady stretch.
    pub fn longest(&self) -> Option<Span> {
        self.stretches.first().copied()
    }

    /// The block that holds a sample.
    pub fn block_at(&self, sample: u64) -> Option<(usize, &SteadyBlock)> {
        let at = self.blocks.partition_point(|block| block.span.end() <= sample);
        self.blocks.get(at).filter(|block| block.span.start <= sample).map(|block| (at, block))
    }

    /// The stretch that holds a sample, by its place among [`Steadiness::stretches`].
    pub fn stretch_at(&self, sample: u64) -> Option<usize> {
        self.stretches.iter().position(|s| s.start <= sample && sample < s.end())
    }
}

/// How steady a channel is along its length.
///
/// Where a stretch ends inside the capture, two blocks are left out on that side: the change begins somewhere in
/// them. Samples that are not finite make their block unlike any other.
///
/// # Errors
/// As [`Source::read_frames`]; [`SignalError::NoChannel`]; [`SignalError::Cancelled`].
pub fn steadiness(source: &dyn Source, channel: usize, watch: &Watch) -> Result<Steadiness, SignalError> {
    let n_frames = source.n_frames();
    let Some(blocks) = read(source, channel, watch)? else { return Ok(Steadiness::default()) };
    let (stretches, parts) = stretches(&blocks, n_frames, watch)?;
    Ok(Steadiness { blocks: course::course(&blocks, n_frames), changes: course::changes(&blocks, &parts), stretches })
}

/// The longest steady stretch of a channel; none where there is no stretch of 64 samples that is steady and not the
/// silence before or after something louder (20 dB under the r.m.s. of the whole).
///
/// # Errors
/// As [`steadiness`].
pub fn suggest_steady(
    source: &dyn Source,
    channel: usize,
    sample_rate_hz: f64,
    watch: &Watch,
) -> Result<Option<Span>, SignalError> {
    // Time enters only through the number of blocks.
    let _ = sample_rate_hz;
    let Some(blocks) = read(source, channel, watch)? else { return Ok(None) };
    Ok(stretches(&blocks, source.n_frames(), watch)?.0.first().copied())
}

/// The longest steady stretch of samples in memory, as [`suggest_steady`].
///
/// # Errors
/// [`SignalError::Cancelled`].
pub fn longest_steady(samples: &[f64], watch: &Watch) -> Result<Option<Span>, SignalError> {
    suggest_steady(&Lent(samples), 0, 1.0, watch)
}

/// The blocks of a channel; none for one of fewer than 64 samples.
fn read(source: &dyn Source, channel: usize, watch: &Watch) -> Result<Option<Blocks>, SignalError> {
    let channels = source.n_channels();
    if channel >= channels {
        return Err(SignalError::NoChannel { channel, channels });
    }
    if source.n_frames() < SHORTEST {
        return Ok(None);
    }
    Blocks::read(source, channel, watch).map(Some)
}

/// The steady stretches, longest first and apart from one another, and the blocks they came from with their changes
/// still at their ends.
fn stretches(blocks: &Blocks, n_frames: u64, watch: &Watch) -> Result<(Vec<Span>, Vec<Range<usize>>), Cancelled> {
    let whole = blocks.rms(0..blocks.len());
    let mut found: Vec<Range<usize>> = Vec::new();
    for stretch in grow::stretches(blocks, watch)? {
        found.extend(levels::level_parts(blocks.levels(), stretch));
    }
    found.sort_by_key(|part| (std::cmp::Reverse(part.len()), part.start));
    let (mut spans, mut parts): (Vec<Span>, Vec<Range<usize>>) = (Vec::new(), Vec::new());
    for part in found {
        let part = parts.iter().fold(part, apart);
        if part.len() < levels::FEWEST || blocks.rms(part.clone()) <= QUIET * whole {
            continue;
        }
        let span = blocks.span(part.clone(), n_frames);
        if span.samples >= SHORTEST {
            spans.push(span);
            parts.push(part);
        }
    }
    let mut order: Vec<usize> = (0..spans.len()).collect();
    order.sort_by_key(|&i| (std::cmp::Reverse(spans[i].samples), spans[i].start));
    let spans: Vec<Span> = order.iter().map(|&i| spans[i]).collect();
    let least = spans.first().map_or(0, |longest| longest.samples / LEAST_OF_LONGEST);
    let worth = |span: &Span| span.samples >= least;
    Ok((spans.into_iter().filter(worth).collect(), parts))
}

/// What is left of `part` beside what is taken: the longer side.
fn apart(part: Range<usize>, taken: &Range<usize>) -> Range<usize> {
    if part.end <= taken.start || taken.end <= part.start {
        return part;
    }
    let before = part.start..taken.start.max(part.start);
    let after = taken.end.min(part.end)..part.end;
    if before.len() >= after.len() { before } else { after }
}

#[cfg(test)]
mod tests;
