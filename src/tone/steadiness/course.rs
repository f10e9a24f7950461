//! What each block is beside those before it, and where the channel changes.

use std::ops::Range;

use super::blocks::Blocks;
use super::grow::Model;
use super::{ChangePoint, QUIET, SteadyBlock};
use crate::signal::Span;

/// Blocks before that a block is held against.
const BEFORE: usize = 4;
/// Change of level between neighbours that is nothing: half a decibel, in nepers.
const LEAST_CHANGE: f64 = 0.0576;
/// Standard deviations of a level that chance explains.
const DEVIATIONS: f64 = 5.0;
/// Nepers to decibels.
const DB: f64 = 20.0 / std::f64::consts::LN_10;
/// Change points nearer to one another than this many blocks are one.
const SAME: usize = 5;

/// The blocks, from start to end.
pub(super) fn course(blocks: &Blocks, n_frames: u64) -> Vec<SteadyBlock> {
    let whole = blocks.rms(0..blocks.len());
    let allowed = allowed_change(blocks.levels());
    let mut last = None;
    let block = |(b, &level): (usize, &f64)| {
        let span = blocks.block_span(b, n_frames);
        let rms = level.exp();
        let level_change = level - last.replace(level).unwrap_or(level);
        SteadyBlock {
            span,
            level_db: finite(20.0 * (rms / whole).log10(), f64::NEG_INFINITY),
            level_change_db: finite(DB * level_change, f64::INFINITY),
            change: change(blocks, b, allowed),
            is_quiet: rms <= QUIET * whole,
        }
    };
    blocks.levels().iter().enumerate().map(block).collect()
}

fn finite(value: f64, otherwise: f64) -> f64 {
    if value.is_nan() { otherwise } else { value }
}

/// How far block `b` is from those before it, over what chance explains. The first blocks are held against one another.
fn change(blocks: &Blocks, b: usize, allowed: f64) -> f64 {
    if blocks.len() <= BEFORE {
        return 0.0;
    }
    let first = b.saturating_sub(BEFORE).min(blocks.len() - BEFORE - 1);
    let others: [usize; BEFORE] = std::array::from_fn(|i| first + i + usize::from(first + i >= b));
    let spectrum = Model::of(blocks, others.into_iter()).departure(blocks, b);
    let levels = blocks.levels();
    let level_of = |b: usize| levels.get(b).copied().unwrap_or(f64::NAN);
    let level = (level_of(b) - others.into_iter().map(level_of).sum::<f64>() / BEFORE as f64).abs() / allowed;
    if spectrum.is_nan() || level.is_nan() { f64::INFINITY } else { spectrum.max(level) }
}

/// The change of a level, in nepers, that chance or small beats explain: from the quarter of neighbours that differ
/// least, so that a capture most of which changes does not pass for one that is wild by nature. A quarter of normal
/// differences of two lies under 0.4506 of one's deviation.
fn allowed_change(levels: &[f64]) -> f64 {
    let mut steps: Vec<f64> = levels.windows(2).map(|w| (w[1] - w[0]).abs()).filter(|s| s.is_finite()).collect();
    let quarter = steps.len() / 4;
    if steps.is_empty() {
        return LEAST_CHANGE;
    }
    let deviation = *steps.select_nth_unstable_by(quarter, f64::total_cmp).1 / 0.4506;
    (DEVIATIONS * deviation * (1.0 + 1.0 / BEFORE as f64).sqrt()).max(LEAST_CHANGE)
}

/// Where the channel changes: the ends of the steady parts that are not ends of the channel.
pub(super) fn changes(blocks: &Blocks, parts: &[Range<usize>]) -> Vec<ChangePoint> {
    let inside = |edge: &usize| *edge > 0 && *edge < blocks.len();
    let mut edges: Vec<usize> = parts.iter().flat_map(|p| [p.start, p.end]).filter(inside).collect();
    edges.sort_unstable();
    edges.dedup_by(|later, earlier| *later - *earlier < SAME);
    let level = |range: Range<usize>| blocks.rms(range);
    let point = |edge: usize| {
        let before = level(edge.saturating_sub(BEFORE)..edge);
        let after = level(edge..(edge + BEFORE).min(blocks.len()));
        ChangePoint { sample: edge as u64 * blocks.block(), level_db: finite(20.0 * (after / before).log10(), 0.0) }
    };
    edges.into_iter().map(point).collect()
}

impl Blocks {
    /// The samples of a block; the last takes what is left.
    fn block_span(&self, b: usize, n_frames: u64) -> Span {
        let start = b as u64 * self.block();
        Span::from_range(start..if b + 1 == self.len() { n_frames } else { start + self.block() })
    }
}
