//! Where a channel is steady: the longest stretch whose blocks look alike.
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
mod grow;
mod levels;

use crate::signal::{SignalError, Source, Span, Watch};

use blocks::Blocks;

/// Shortest stretch worth suggesting, in samples.
const SHORTEST: u64 = 64;

/// A stretch whose r.m.s. is so far below that of the whole capture (20 dB) is the silence around the work, not the
/// work.
const QUIET: f64 = 0.1;

/// The longest steady stretch of a channel; none where there is no stretch of 64 samples that is steady and not the
/// silence before or after something louder (20 dB under the r.m.s. of the whole).
///
/// Where a stretch ends inside the capture, two blocks are left out on that side: the change begins somewhere in
/// them. Samples that are not finite make their block unlike any other.
///
/// # Errors
/// As [`Source::read_frames`]; [`SignalError::NoChannel`]; [`SignalError::Cancelled`].
pub fn suggest_steady(
    source: &dyn Source,
    channel: usize,
    sample_rate_hz: f64,
    watch: &Watch,
) -> Result<Option<Span>, SignalError> {
    // Time enters only through the number of blocks.
    let _ = sample_rate_hz;
    let channels = source.n_channels();
    if channel >= channels {
        return Err(SignalError::NoChannel { channel, channels });
    }
    let n_frames = source.n_frames();
    if n_frames < SHORTEST {
        return Ok(None);
    }
    let blocks = Blocks::read(source, channel, watch)?;
    let loud_enough = |from: usize, to: usize| blocks.rms(from..to) > QUIET * blocks.rms(0..blocks.len());
    let mut best: Option<Span> = None;
    for stretch in grow::stretches(&blocks, watch)? {
        for part in levels::level_parts(blocks.levels(), stretch) {
            if part.len() < levels::FEWEST || !loud_enough(part.start, part.end) {
                continue;
            }
            let span = blocks.span(part, n_frames);
            if span.samples >= SHORTEST && best.is_none_or(|b| span.samples > b.samples) {
                best = Some(span);
            }
        }
    }
    Ok(best)
}

#[cfg(test)]
mod tests;
