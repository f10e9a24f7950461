//! Blocks of a channel: their levels and spectra.

use std::f64::consts::TAU;
use std::ops::Range;
use std::sync::Arc;

use realfft::{RealFftPlanner, RealToComplex, num_complex::Complex64};

use super::grow::sum_of_logarithms;
use crate::signal::{SignalError, Source, Span, Watch};

/// Blocks aimed at in a capture: up to twice as many are made.
const BLOCKS: u64 = 192;
/// Shortest block, in samples, unless the capture is shorter than eight of them.
const SHORTEST_BLOCK: u64 = 32;
/// Longest segment that is transformed.
const LONGEST_SEGMENT: usize = 4096;
/// Blocks left out at an end of a stretch that is not an end of the capture: a change that sets in slowly shows only
/// in the block after the one it begins in.
pub(super) const GUARD: u64 = 2;
/// Power under this part of a block's whole is lost in what is louder: leakage and rounding, not a property of the
/// signal.
const DEPTH: f64 = 1e-9;

/// One channel of samples that somebody else holds.
#[derive(Debug)]
pub(super) struct Lent<'a>(pub(super) &'a [f64]);

impl Source for Lent<'_> {
    fn sample_rate_hz(&self) -> f64 {
        1.0
    }

    fn n_channels(&self) -> usize {
        1
    }

    fn n_frames(&self) -> u64 {
        self.0.len() as u64
    }

    fn read_frames(&self, start: u64, out: &mut [f64]) -> Result<(), SignalError> {
        let end = start.saturating_add(out.len() as u64);
        let out_of_range = SignalError::OutOfRange { start, end, frames: self.n_frames() };
        let part = usize::try_from(start).ok().and_then(|from| self.0.get(from..from.checked_add(out.len())?));
        out.copy_from_slice(part.ok_or(out_of_range)?);
        Ok(())
    }
}

/// What is kept of a channel.
pub(super) struct Blocks {
    block: u64,
    n_lines: usize,
    /// Segments averaged in a block's spectrum.
    pub(super) n_averaged: u64,
    /// Natural logarithm of each block's r.m.s. about its mean.
    levels: Vec<f64>,
    /// Whether all of a block's samples, and their squares, are finite numbers.
    finite: Vec<bool>,
    /// Power of each line, block by block.
    power: Vec<f32>,
    /// The sum of the natural logarithms of a block's powers.
    ln_power: Vec<f64>,
}

impl Blocks {
    pub(super) fn read(source: &dyn Source, channel: usize, watch: &Watch) -> Result<Self, SignalError> {
        let n_frames = source.n_frames();
        let block = if n_frames < 8 * SHORTEST_BLOCK { n_frames / 8 } else { (n_frames / BLOCKS).max(SHORTEST_BLOCK) };
        // Powers of two where there is a choice: quick to transform, and twice the count at most.
        let block = if block < LONGEST_SEGMENT as u64 && block >= SHORTEST_BLOCK {
            1 << block.ilog2()
        } else {
            block / LONGEST_SEGMENT as u64 * LONGEST_SEGMENT as u64 + if block < SHORTEST_BLOCK { block } else { 0 }
        };
        let segment = block.min(LONGEST_SEGMENT as u64) as usize;
        let mut spectrum = Spectrum::new(segment);
        let n_blocks = n_frames / block;
        let mut blocks = Self {
            block,
            n_lines: spectrum.n_lines(),
            n_averaged: block / segment as u64,
            levels: Vec::new(),
            finite: Vec::new(),
            power: Vec::new(),
            ln_power: Vec::new(),
        };
        let mut frames = vec![0.0; segment * source.n_channels()];
        for b in 0..n_blocks {
            for s in 0..blocks.n_averaged {
                watch.check()?;
                source.read_frames(b * block + s * segment as u64, &mut frames)?;
                spectrum.add(frames.iter().skip(channel).step_by(source.n_channels()).copied());
            }
            blocks.keep(&mut spectrum);
            watch.report(b as f64 / n_blocks as f64);
        }
        blocks.fill_in_silence();
        Ok(blocks)
    }

    fn keep(&mut self, spectrum: &mut Spectrum) {
        let (mean_square, lines) = spectrum.take();
        self.finite.push(mean_square.is_finite());
        self.levels.push(0.5 * mean_square.max(f64::MIN_POSITIVE).ln());
        let least = DEPTH * lines.iter().sum::<f64>();
        self.power.extend(lines.iter().map(|&p| (p + least) as f32));
    }

    /// Digital silence has no spectrum; a floor far under the loudest block keeps its ratios finite.
    fn fill_in_silence(&mut self) {
        let loudest = self.power.iter().copied().filter(|p| p.is_finite()).fold(0.0, f32::max);
        let floor = (loudest * 1e-16).max(f32::MIN_POSITIVE);
        for p in &mut self.power {
            *p = p.max(floor);
        }
        let lines = self.power.chunks_exact(self.n_lines.max(1));
        self.ln_power = lines.map(|l| sum_of_logarithms(l.iter().map(|&p| f64::from(p)))).collect();
    }

    pub(super) fn len(&self) -> usize {
        self.levels.len()
    }

    /// Whether all samples of block `b`, and their squares, are finite numbers.
    pub(super) fn is_finite(&self, b: usize) -> bool {
        self.finite.get(b).copied().unwrap_or(false)
    }

    pub(super) fn n_lines(&self) -> usize {
        self.n_lines
    }

    pub(super) fn levels(&self) -> &[f64] {
        &self.levels
    }

    /// Samples in a block.
    pub(super) fn block(&self) -> u64 {
        self.block
    }

    /// Powers of block `b`.
    pub(super) fn lines(&self, b: usize) -> &[f32] {
        self.power.get(b * self.n_lines..(b + 1) * self.n_lines).unwrap_or_default()
    }

    /// The sum of the natural logarithms of the powers of block `b`.
    pub(super) fn ln_power(&self, b: usize) -> f64 {
        self.ln_power.get(b).copied().unwrap_or(f64::NAN)
    }

    /// The r.m.s. of some blocks.
    pub(super) fn rms(&self, range: Range<usize>) -> f64 {
        let levels = self.levels.get(range).unwrap_or_default();
        (levels.iter().map(|l| (2.0 * l).exp()).sum::<f64>() / levels.len().max(1) as f64).sqrt()
    }

    /// The samples of the blocks `range`, less [`GUARD`] blocks on each side that is not an end of the capture.
    pub(super) fn span(&self, range: Range<usize>, n_frames: u64) -> Span {
        let start = if range.start == 0 { 0 } else { (range.start as u64 + GUARD) * self.block };
        let end =
            if range.end == self.len() { n_frames } else { (range.end as u64).saturating_sub(GUARD) * self.block };
        Span::from_range(start..end)
    }
}

/// The average power spectrum of segments, about each segment's mean.
struct Spectrum {
    fft: Arc<dyn RealToComplex<f64>>,
    window: Vec<f64>,
    samples: Vec<f64>,
    lines: Vec<Complex64>,
    scratch: Vec<Complex64>,
    power: Vec<f64>,
    mean_square: f64,
    n: u32,
}

impl Spectrum {
    fn new(segment: usize) -> Self {
        let fft = RealFftPlanner::new().plan_fft_forward(segment);
        Self {
            window: (0..segment).map(|i| 0.5 - 0.5 * (TAU * i as f64 / segment as f64).cos()).collect(),
            samples: fft.make_input_vec(),
            lines: fft.make_output_vec(),
            scratch: fft.make_scratch_vec(),
            power: vec![0.0; segment / 2],
            mean_square: 0.0,
            n: 0,
            fft,
        }
    }

    /// Lines kept: all but 0 Hz.
    fn n_lines(&self) -> usize {
        self.power.len()
    }

    fn add(&mut self, samples: impl Iterator<Item = f64>) {
        for (to, from) in self.samples.iter_mut().zip(samples) {
            *to = from;
        }
        let n = self.samples.len() as f64;
        let mean = self.samples.iter().sum::<f64>() / n;
        self.mean_square += self.samples.iter().map(|x| (x - mean) * (x - mean)).sum::<f64>() / n;
        for (x, w) in self.samples.iter_mut().zip(&self.window) {
            *x = (*x - mean) * w;
        }
        // Fails only for buffers of another length than the plan's own.
        if self.fft.process_with_scratch(&mut self.samples, &mut self.lines, &mut self.scratch).is_ok() {
            for (p, y) in self.power.iter_mut().zip(self.lines.iter().skip(1)) {
                *p += y.norm_sqr() / n;
            }
        }
        self.n += 1;
    }

    /// Mean square and average spectrum of what was added, and empties both.
    fn take(&mut self) -> (f64, Vec<f64>) {
        let n = f64::from(self.n.max(1));
        let lines = self.power.iter_mut().map(|p| std::mem::take(p) / n).collect();
        self.n = 0;
        (std::mem::take(&mut self.mean_square) / n, lines)
    }
}
