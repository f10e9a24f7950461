//! The whole capture at a glance: extremes of every channel, and its damage, grown in the background.

use std::sync::{Arc, PoisonError, RwLock};

use super::Capture;
use super::damage::{Damage, DamageScan};
use crate::signal::{Extent, Pyramid, SignalError, Source, Watch};

/// Samples in a block of the lowest level.
const BLOCK: usize = 256;
/// A column is answered from blocks where it covers at least so many of them, so that a peak is drawn at most an
/// eighth of a column from its place.
const BLOCKS_A_COLUMN: f64 = 4.0;
/// Values read between two looks at the watch, all channels together.
const VALUES_AT_ONCE: usize = 1 << 17;

/// Extremes and damage of a capture, shared between the worker that fills it and the screen that draws it: clones
/// share one content.
#[derive(Debug, Clone)]
pub struct Overview {
    content: Arc<RwLock<Content>>,
}

#[derive(Debug)]
struct Content {
    n_frames: u64,
    n_done: u64,
    channels: Vec<Channel>,
}

#[derive(Debug)]
struct Channel {
    pyramid: Pyramid,
    scan: DamageScan,
}

impl Overview {
    /// An overview of `capture` with nothing in it yet: [`Overview::fill`] fills it.
    pub fn new(capture: &Capture) -> Self {
        Self::of_source(&*capture.source, capture.bits_per_sample)
    }

    /// An empty overview of `source`; `bits_per_sample` as [`Capture::bits_per_sample`].
    pub fn of_source(source: &dyn Source, bits_per_sample: Option<u32>) -> Self {
        let channel = || Channel { pyramid: Pyramid::new(BLOCK), scan: DamageScan::new(bits_per_sample) };
        let channels = (0..source.n_channels()).map(|_| channel()).collect();
        Self { content: Arc::new(RwLock::new(Content { n_frames: source.n_frames(), n_done: 0, channels })) }
    }

    /// Reads `source` (the one the overview was made for) from where the last filling stopped, calling `on_progress`
    /// after every block.
    ///
    /// # Errors
    /// As [`Source::read_frames`]; [`SignalError::Cancelled`]. What was read by then stays.
    pub fn fill(&self, source: &dyn Source, watch: &Watch, mut on_progress: impl FnMut()) -> Result<(), SignalError> {
        let n_channels = source.n_channels();
        let frames_at_once = (VALUES_AT_ONCE / n_channels).max(1);
        let mut block = Vec::new();
        let (n_frames, mut at) = self.read(|c| (c.n_frames, c.n_done));
        while at < n_frames {
            watch.check()?;
            let n = frames_at_once.min(usize::try_from(n_frames - at).unwrap_or(usize::MAX));
            block.resize(n * n_channels, 0.0);
            source.read_frames(at, &mut block)?;
            at += n as u64;
            self.add(&block, n_channels, at);
            watch.report(at as f64 / n_frames as f64);
            on_progress();
        }
        Ok(())
    }

    fn add(&self, block: &[f64], n_channels: usize, n_done: u64) {
        let mut content = self.content.write().unwrap_or_else(PoisonError::into_inner);
        for (i, channel) in content.channels.iter_mut().enumerate() {
            for &x in block.iter().skip(i).step_by(n_channels) {
                channel.scan.push(x);
                channel.pyramid.push([x as f32]);
            }
        }
        content.n_done = n_done;
    }

    fn read<T>(&self, what: impl FnOnce(&Content) -> T) -> T {
        what(&self.content.read().unwrap_or_else(PoisonError::into_inner))
    }

    /// The part of the capture that is in, 0 to 1.
    pub fn progress(&self) -> f64 {
        self.read(|c| if c.n_frames == 0 { 1.0 } else { c.n_done as f64 / c.n_frames as f64 })
    }

    /// Whether all of the capture is in.
    pub fn is_complete(&self) -> bool {
        self.read(|c| c.n_done == c.n_frames)
    }

    /// What is wrong with a channel as far as it is in; none if there is no such channel.
    pub fn damage(&self, channel: usize) -> Option<Damage> {
        self.read(|c| c.channels.get(channel).map(|channel| channel.scan.so_far()))
    }

    /// The extent of each column between neighbouring `edges` (sample positions, rising; n + 1 of them for n
    /// columns), as far as the capture is in.
    ///
    /// Every block belongs to exactly one column, so no peak is lost or drawn twice. None where a column is so narrow
    /// that the samples themselves are needed ([`raw_columns`]), or if there is no such channel.
    pub fn columns(&self, channel: usize, edges: &[f64]) -> Option<Vec<Extent>> {
        let narrowest = edges.windows(2).map(|w| w[1] - w[0]).fold(f64::INFINITY, f64::min);
        if edges.iter().any(|edge| edge.is_nan()) || narrowest < BLOCKS_A_COLUMN * BLOCK as f64 {
            return None;
        }
        self.read(|c| {
            let pyramid = &c.channels.get(channel)?.pyramid;
            let n = c.n_frames as f64;
            let n_blocks = c.n_frames.div_ceil(BLOCK as u64) as usize;
            // The nearest boundary of blocks; the last, short block goes to the column that holds the end.
            let block_at = |edge: f64| if edge >= n { n_blocks } else { (edge / BLOCK as f64).round() as usize };
            Some(edges.windows(2).map(|w| pyramid.blocks(block_at(w[0])..block_at(w[1]))).collect())
        })
    }
}

/// The extent of each column between neighbouring `edges` from the samples themselves: column i holds the samples n
/// with `edges[i] <= n < edges[i + 1]`, and is empty if there is none. Positions outside the capture hold nothing.
///
/// # Errors
/// As [`Source::read_frames`]; [`SignalError::NoChannel`]; [`SignalError::Cancelled`].
pub fn raw_columns(
    source: &dyn Source,
    channel: usize,
    edges: &[f64],
    watch: &Watch,
) -> Result<Vec<Extent>, SignalError> {
    let channels = source.n_channels();
    if channel >= channels {
        return Err(SignalError::NoChannel { channel, channels });
    }
    let first_from = |edge: &f64| (edge.ceil() as u64).min(source.n_frames());
    let firsts: Vec<u64> = edges.iter().map(first_from).collect();
    let mut columns = vec![Extent::EMPTY; firsts.len().saturating_sub(1)];
    let (Some(&start), Some(&end)) = (firsts.first(), firsts.last()) else { return Ok(columns) };
    let frames_at_once = ((VALUES_AT_ONCE / channels).max(1)) as u64;
    let mut block = Vec::new();
    let (mut at, mut column) = (start, 0);
    while at < end {
        watch.check()?;
        let n = frames_at_once.min(end - at);
        block.resize(n as usize * channels, 0.0);
        source.read_frames(at, &mut block)?;
        for (i, &x) in block.iter().skip(channel).step_by(channels).enumerate() {
            while firsts.get(column + 1).is_some_and(|&next| at + i as u64 >= next) {
                column += 1;
            }
            if let Some(extent) = columns.get_mut(column) {
                *extent = extent.with(x as f32);
            }
        }
        at += n;
    }
    Ok(columns)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::signal::Stored;

    const N: usize = 40_123;

    fn value(i: usize, channel: usize) -> f64 {
        ((i * 7919 + channel * 31) % 10_007) as f64 / 10_007.0
    }

    fn source() -> Stored {
        Stored::new(100.0, 2, (0..2 * N).map(|i| value(i / 2, i % 2)).collect())
    }

    fn filled(source: &Stored) -> Overview {
        let overview = Overview::of_source(source, None);
        overview.fill(source, &Watch::new(), || ()).unwrap();
        overview
    }

    fn edges(from: f64, to: f64, n: usize) -> Vec<f64> {
        (0..=n).map(|i| from + (to - from) * i as f64 / n as f64).collect()
    }

    #[test]
    fn wide_columns_hold_every_extreme_exactly_once() {
        let mut source = Stored::new(100.0, 1, vec![0.0; N]);
        for place in [0, 1, 255, 256, 1023, 1024, 20_000, N - 1] {
            let mut samples = vec![0.0; N];
            samples[place] = 1.0;
            source = Stored::new(100.0, 1, samples);
            let overview = filled(&source);
            for n in [1, 7, 38] {
                let columns = overview.columns(0, &edges(0.0, N as f64, n)).unwrap();
                let holding: Vec<usize> = (0..n).filter(|&i| columns[i].max == 1.0).collect();
                assert_eq!(holding.len(), 1, "a peak at {place} in {n} columns");
                let off = holding[0] as f64 + 0.5 - (place as f64 + 0.5) * n as f64 / N as f64;
                assert!(off.abs() <= 0.5 + 0.125 + 1e-9, "{place}: {off} columns away");
            }
        }
        assert!(source.n_frames() > 0);
    }

    #[test]
    fn narrow_columns_are_left_to_the_samples_which_are_exact() {
        let source = source();
        let overview = filled(&source);
        assert!(overview.columns(0, &edges(0.0, 1023.0, 1)).is_none());
        assert!(overview.columns(2, &edges(0.0, N as f64, 4)).is_none());
        assert!(overview.columns(0, &[0.0, f64::NAN]).is_none());
        let edges = [-5.0, 0.5, 3.0, 3.5, 9_000.25, N as f64 + 10.0, f64::INFINITY];
        let columns = raw_columns(&source, 1, &edges, &Watch::new()).unwrap();
        let bounds = [0, 1, 3, 4, 9001, N, N];
        for (i, column) in columns.iter().enumerate() {
            let expected = (bounds[i]..bounds[i + 1]).fold(Extent::EMPTY, |e, j| e.with(value(j, 1) as f32));
            assert_eq!(*column, expected, "column {i}");
        }
        assert!(raw_columns(&source, 0, &[], &Watch::new()).unwrap().is_empty());
        assert!(raw_columns(&source, 2, &edges, &Watch::new()).is_err());
    }

    #[test]
    fn a_cancelled_filling_keeps_what_is_in_and_goes_on_from_there() {
        let source = Stored::new(100.0, 1, (0..500_000).map(|i| f64::from(i % 100)).collect());
        let overview = Overview::of_source(&source, None);
        let watch = Watch::new();
        let cancelled = overview.fill(&source, &watch.clone(), || watch.cancel());
        assert!(matches!(cancelled, Err(SignalError::Cancelled(_))));
        assert!(overview.progress() > 0.0 && !overview.is_complete());
        let half = overview.columns(0, &edges(0.0, 500_000.0, 2)).unwrap();
        assert!(!half[0].is_empty() && half[1].is_empty());
        overview.fill(&source, &Watch::new(), || ()).unwrap();
        assert!(overview.is_complete());
        let damage = overview.damage(0).unwrap();
        assert_eq!((damage.n_samples, damage.min, damage.max), (500_000, 0.0, 99.0));
        assert!((damage.mean - 49.5).abs() < 1e-9);
    }
}
