//! The whole capture drawn small: columns of least and greatest value.

use crate::capture::Capture;
use crate::signal::{Extent, Pyramid, Watch};

/// Frames in a block of the lowest level.
const BLOCK: usize = 256;

/// Extremes of every channel of a capture.
#[derive(Debug)]
pub(super) struct Overview {
    channels: Vec<Pyramid>,
}

impl Overview {
    /// Reads the capture through; `None` where it was called off or cannot be read.
    pub(super) fn build(capture: &Capture, watch: &Watch) -> Option<Self> {
        let source = &capture.source;
        let n_channels = source.n_channels();
        let mut channels = vec![Pyramid::new(BLOCK); n_channels];
        let mut at = 0;
        while at < source.n_frames() {
            watch.check().ok()?;
            let n = (source.n_frames() - at).min(1 << 15);
            let mut frames = vec![0.0; n as usize * n_channels];
            source.read_frames(at, &mut frames).ok()?;
            for (c, pyramid) in channels.iter_mut().enumerate() {
                pyramid.push(frames.iter().skip(c).step_by(n_channels).map(|&v| v as f32));
            }
            at += n;
            watch.report(at as f64 / source.n_frames() as f64);
        }
        Some(Self { channels })
    }

    /// The extremes of `n` columns over the frames `from` to `to`.
    pub(super) fn columns(&self, channel: usize, (from, to): (f64, f64), n: usize) -> Vec<Extent> {
        let Some(pyramid) = self.channels.get(channel) else { return Vec::new() };
        let edge = |i: usize| ((from + (to - from) * i as f64 / n as f64) / BLOCK as f64).max(0.0) as usize;
        (0..n).map(|i| pyramid.blocks(edge(i)..edge(i + 1).max(edge(i) + 1))).collect()
    }
}
