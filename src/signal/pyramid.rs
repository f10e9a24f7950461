//! The extremes of ever longer blocks of values, so that any stretch can be drawn without losing a peak.

use std::ops::Range;

/// The least and the greatest of some values, for drawing.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Extent {
    /// The least.
    pub min: f32,
    /// The greatest.
    pub max: f32,
}

impl Extent {
    /// The extent of nothing: joining it to another changes nothing.
    pub const EMPTY: Self = Self { min: f32::INFINITY, max: f32::NEG_INFINITY };

    /// The extent of both.
    #[must_use]
    pub fn join(self, other: Self) -> Self {
        Self { min: self.min.min(other.min), max: self.max.max(other.max) }
    }

    /// The extent with one more value.
    #[must_use]
    pub fn with(self, value: f32) -> Self {
        Self { min: self.min.min(value), max: self.max.max(value) }
    }

    /// Whether no value was ever joined (or only values that are not numbers).
    pub fn is_empty(self) -> bool {
        self.min > self.max
    }
}

/// Blocks joined into one of the level above.
const FAN: usize = 8;

/// Extremes of blocks of `block` values, of eight such blocks, of 64, and so on; grown from the front.
///
/// A level holds complete blocks only; the block still being filled stands apart.
#[derive(Debug, Clone)]
pub struct Pyramid {
    block: usize,
    n_values: u64,
    n_open: usize,
    open: Extent,
    levels: Vec<Vec<Extent>>,
}

impl Pyramid {
    /// An empty pyramid over blocks of `block` values.
    ///
    /// # Panics
    /// If `block` is 0.
    pub fn new(block: usize) -> Self {
        assert!(block > 0, "blocks of no values");
        Self { block, n_values: 0, n_open: 0, open: Extent::EMPTY, levels: vec![Vec::new()] }
    }

    /// The values in a block of the lowest level.
    pub fn block(&self) -> usize {
        self.block
    }

    /// How many values were pushed.
    pub fn n_values(&self) -> u64 {
        self.n_values
    }

    /// Adds values at the end.
    pub fn push(&mut self, values: impl IntoIterator<Item = f32>) {
        for value in values {
            self.open = self.open.with(value);
            self.n_open += 1;
            self.n_values += 1;
            if self.n_open == self.block {
                self.close_block();
            }
        }
    }

    fn close_block(&mut self) {
        let mut closed = std::mem::replace(&mut self.open, Extent::EMPTY);
        self.n_open = 0;
        for i in 0.. {
            if i == self.levels.len() {
                self.levels.push(Vec::new());
            }
            let level = &mut self.levels[i];
            level.push(closed);
            if !level.len().is_multiple_of(FAN) {
                return;
            }
            closed = level[level.len() - FAN..].iter().fold(Extent::EMPTY, |a, &b| a.join(b));
        }
    }

    /// The extent of the blocks `blocks` of the lowest level; blocks past the end count as empty.
    pub fn blocks(&self, blocks: Range<usize>) -> Extent {
        let n_closed = self.levels[0].len();
        let mut extent = if blocks.contains(&n_closed) { self.open } else { Extent::EMPTY };
        let (mut from, mut to) = (blocks.start, blocks.end.min(n_closed));
        for level in &self.levels {
            while from < to && !from.is_multiple_of(FAN) {
                extent = extent.join(level[from]);
                from += 1;
            }
            while from < to && !to.is_multiple_of(FAN) {
                to -= 1;
                extent = extent.join(level[to]);
            }
            from /= FAN;
            to /= FAN;
            if from >= to {
                break;
            }
        }
        extent
    }

    /// The extent of `values[range]`, where `values` are those that were pushed: exact at both ends.
    pub fn exact(&self, values: &[f64], range: Range<usize>) -> Extent {
        let range = range.start.min(values.len())..range.end.min(values.len());
        let scan =
            |part: Range<usize>| values.get(part).unwrap_or(&[]).iter().fold(Extent::EMPTY, |e, &v| e.with(v as f32));
        let (first, last) = (range.start.div_ceil(self.block), range.end / self.block);
        if first >= last {
            return scan(range);
        }
        scan(range.start..first * self.block).join(self.blocks(first..last)).join(scan(last * self.block..range.end))
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_range_has_its_true_extent() {
        let values: Vec<f64> = (0..1500).map(|i| f64::from((i * 7919) % 1009) - 500.0).collect();
        for block in [1, 3, 8] {
            let mut pyramid = Pyramid::new(block);
            pyramid.push(values.iter().map(|&v| v as f32));
            for (from, to) in [(0, 1500), (0, 1), (1, 2), (17, 18), (5, 900), (8, 64), (64, 1499), (1499, 1500), (7, 7)]
            {
                let expected = values[from..to].iter().fold(Extent::EMPTY, |e, &v| e.with(v as f32));
                assert_eq!(pyramid.exact(&values, from..to), expected, "block {block}, {from}..{to}");
            }
        }
    }

    #[test]
    fn blocks_past_the_end_are_empty() {
        let mut pyramid = Pyramid::new(4);
        assert!(pyramid.blocks(0..10).is_empty());
        pyramid.push([2.0, f32::NAN, 1.0]);
        assert_eq!(pyramid.blocks(0..10), Extent { min: 1.0, max: 2.0 });
        assert!(pyramid.blocks(1..10).is_empty());
    }
}
