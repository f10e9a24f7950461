//! What each block is beside those before it, and where the channel changes.

use std::ops::Range;

use super::blocks::{Blocks, GUARD};
use super::grow::Model;
use super::{ChangePoint, QUIET, SteadyBlock};
use crate::signal::Span;

/// Blocks before, and after, that a block is held against.
const AROUND: usize = 6;
/// Blocks on each side that the level of a change is taken from, beyond those the change may begin or end in.
const BESIDE: usize = 4;
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
            is_quiet: rms <= QUIET * whole && blocks.is_finite(b),
        }
    };
    blocks.levels().iter().enumerate().map(block).collect()
}

fn finite(value: f64, otherwise: f64) -> f64 {
    if value.is_nan() { otherwise } else { value }
}

/// How far block `b` is from those before it or from those after it, whichever is less, over what chance explains: a
/// step then shows as a change between two calm sides, and what changes all along shows all along.
fn change(blocks: &Blocks, b: usize, allowed: f64) -> f64 {
    if !blocks.is_finite(b) {
        return f64::INFINITY;
    }
    let before = b.checked_sub(AROUND).map(|first| first..b);
    let after = (b + 1 + AROUND <= blocks.len()).then_some(b + 1..b + 1 + AROUND);
    let sides = before.into_iter().chain(after).filter(|side| side.clone().all(|b| blocks.is_finite(b)));
    sides.map(|side| change_against(blocks, b, side, allowed)).reduce(f64::min).unwrap_or(0.0)
}

fn change_against(blocks: &Blocks, b: usize, side: Range<usize>, allowed: f64) -> f64 {
    let spectrum = Model::of(blocks, side.clone()).departure(blocks, b);
    let levels = blocks.levels().get(side).unwrap_or_default();
    let mean = levels.iter().sum::<f64>() / levels.len().max(1) as f64;
    let level = blocks.levels().get(b).map_or(0.0, |level| (level - mean).abs() / allowed);
    if spectrum.is_nan() || level.is_nan() { f64::INFINITY } else { spectrum.max(level) }
}

/// The change of a level, in nepers, that chance or small beats explain: from the quarter of second differences that are
/// least, which neither a ramp nor a capture most of which changes inflates. A quarter of normal second differences lies
/// under 0.3186 of their deviation, which is the root of 6 times one level's.
fn allowed_change(levels: &[f64]) -> f64 {
    let bend = |w: &[f64]| if let [a, b, c] = w { (a - 2.0 * b + c).abs() } else { 0.0 };
    let mut bends: Vec<f64> = levels.windows(3).map(bend).filter(|s| s.is_finite()).collect();
    let quarter = bends.len() / 4;
    if bends.is_empty() {
        return LEAST_CHANGE;
    }
    let deviation = *bends.select_nth_unstable_by(quarter, f64::total_cmp).1 / (0.3186 * 6_f64.sqrt());
    (DEVIATIONS * deviation * (1.0 + 1.0 / AROUND as f64).sqrt()).max(LEAST_CHANGE)
}

/// Where the channel changes: the ends of the steady parts that are not ends of the channel.
pub(super) fn changes(blocks: &Blocks, parts: &[Range<usize>]) -> Vec<ChangePoint> {
    let inside = |edge: &usize| *edge > 0 && *edge < blocks.len();
    let mut edges: Vec<usize> = parts.iter().flat_map(|p| [p.start, p.end]).filter(inside).collect();
    edges.sort_unstable();
    edges.dedup_by(|later, earlier| *later - *earlier < SAME);
    let level = |range: Range<usize>| blocks.rms(range);
    let point = |edge: usize| {
        let (left, right) = (edge.saturating_sub(GUARD as usize), (edge + GUARD as usize).min(blocks.len() - 1));
        let before = level(left.saturating_sub(BESIDE)..left.max(1));
        let after = level(right..(right + BESIDE).min(blocks.len()));
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
