//! What is read off a kernel: widths of the main lobe, side lobes, flatness.

use super::Kernel;

/// A window whose kernel stays this close to W(0) within half a bin is a flat-top.
pub(super) const FLAT_TOP_DB: f64 = 0.05;

/// Levels are not followed below this: f64 holds about -320 dB.
const LOWEST_DB: f64 = -400.0;

/// Step of the search for the main lobe's edge and widths, bins.
const FINE_STEP: f64 = 1.0 / 32.0;

/// Step of the search for side lobes, bins, and how far past the main lobe it goes.
const LOBE_STEP: f64 = 1.0 / 16.0;
const LOBE_REACH: f64 = 60.0;

/// How many of the highest side lobes found in steps are refined.
const N_REFINED: usize = 8;

/// A minimum of the kernel ends the main lobe only if it is this deep; a flat-top's ripple is not.
const NULL_BELOW_DB: f64 = -6.0;

/// Where the main lobe is taken to end if the kernel has no minimum at all.
const EDGE_WITHOUT_NULL_DB: f64 = -20.0;

/// A kernel's levels over W(0), 0 to N/2 bins.
#[derive(Debug, Clone, Copy)]
pub(super) struct Lobes<'a> {
    kernel: &'a Kernel,
    top: f64,
    reach: f64,
}

impl<'a> Lobes<'a> {
    pub(super) fn new(kernel: &'a Kernel) -> Self {
        Self { kernel, top: kernel.at(0.0).norm(), reach: 0.5 * kernel.n() as f64 }
    }

    fn magnitude(&self, bins: f64) -> f64 {
        self.kernel.at(bins).norm() / self.top
    }

    /// Level at `bins` over W(0), dB.
    pub(super) fn level_db(&self, bins: f64) -> f64 {
        (20.0 * self.magnitude(bins).log10()).max(LOWEST_DB)
    }

    /// The full width at exactly `level_db`, bins: twice the first place where the kernel has fallen to it.
    pub(super) fn width_bins(&self, level_db: f64) -> f64 {
        2.0 * self.first_below(level_db).unwrap_or(self.reach)
    }

    fn first_below(&self, level_db: f64) -> Option<f64> {
        let mut above = 0.0;
        loop {
            let bins = above + FINE_STEP;
            if bins > self.reach {
                return None;
            }
            if self.level_db(bins) < level_db {
                return Some(bisect(above, bins, |x| self.level_db(x) < level_db));
            }
            above = bins;
        }
    }

    /// The middle of the main lobe to its end, bins: the first minimum below -6 dB, which is the first null where the
    /// window has nulls; without any minimum the place where the kernel has fallen by 20 dB.
    pub(super) fn half_width_bins(&self) -> f64 {
        let (mut before, mut here) = (self.magnitude(0.0), self.magnitude(FINE_STEP));
        let mut bins = FINE_STEP;
        while bins + FINE_STEP <= self.reach {
            let after = self.magnitude(bins + FINE_STEP);
            if here <= before && here < after {
                let minimum = golden(bins - FINE_STEP, bins + FINE_STEP, |x| self.magnitude(x));
                if self.level_db(minimum) < NULL_BELOW_DB {
                    return self.on_line(minimum);
                }
            }
            (before, here) = (here, after);
            bins += FINE_STEP;
        }
        self.first_below(EDGE_WITHOUT_NULL_DB).unwrap_or(self.reach)
    }

    /// A null found beside a line is on it when the kernel is no larger there.
    fn on_line(&self, minimum: f64) -> f64 {
        let line = minimum.round();
        // A null of higher order, as Parzen's, is so flat that rounding hides its middle.
        let near = (minimum - line).abs() < 2e-3;
        if near && self.magnitude(line) <= self.magnitude(minimum).max(1e-13) { line } else { minimum }
    }

    /// The highest side lobe over W(0), dB, within 60 bins past the main lobe; where the kernel only falls, its level
    /// at the end of the main lobe.
    pub(super) fn highest_side_lobe_db(&self, half_width_bins: f64) -> f64 {
        let end = (half_width_bins + LOBE_REACH).min(self.reach);
        let n_steps = ((end - half_width_bins) / LOBE_STEP).floor() as usize;
        let place = |i: usize| half_width_bins + i as f64 * LOBE_STEP;
        let levels: Vec<f64> = (0..=n_steps + 1).map(|i| self.magnitude(place(i))).collect();
        let mut lobes: Vec<(f64, f64)> = levels
            .windows(3)
            .enumerate()
            .filter_map(|(i, around)| match around {
                [before, here, after] if here >= before && here > after => Some((*here, place(i + 1))),
                _ => None,
            })
            .collect();
        lobes.sort_by(|a, b| b.0.total_cmp(&a.0));
        let refined = lobes.iter().take(N_REFINED).map(|(_, bins)| {
            let top = golden(bins - LOBE_STEP, bins + LOBE_STEP, |x| -self.magnitude(x));
            self.level_db(top)
        });
        refined.reduce(f64::max).unwrap_or_else(|| self.level_db(half_width_bins))
    }

    /// The largest departure from W(0) within half a bin, dB, with its sign.
    pub(super) fn flatness_db(&self) -> f64 {
        const N_STEPS: u32 = 32;
        let step = 0.5 / f64::from(N_STEPS);
        let size = |x: f64| self.level_db(x).abs();
        let coarse = (1..=N_STEPS).map(|i| f64::from(i) * step).max_by(|a, b| size(*a).total_cmp(&size(*b)));
        let coarse = coarse.unwrap_or(0.5);
        let fine = golden(coarse - step, (coarse + step).min(0.5), |x| -size(x));
        self.level_db(if size(fine) > size(coarse) { fine } else { coarse })
    }

    /// The slope of the side lobes' envelope between two places two octaves apart, dB an octave.
    pub(super) fn envelope_slope_db(&self, from_bins: f64) -> f64 {
        let highest =
            |start: f64| (0..64).map(|i| self.level_db(start + f64::from(i) * LOBE_STEP)).fold(LOWEST_DB, f64::max);
        0.5 * (highest(4.0 * from_bins) - highest(from_bins))
    }
}

/// The place between `outside` and `inside` where `is_inside` turns true, to the last digits.
fn bisect(mut outside: f64, mut inside: f64, is_inside: impl Fn(f64) -> bool) -> f64 {
    for _ in 0..60 {
        let middle = 0.5 * (outside + inside);
        if is_inside(middle) {
            inside = middle;
        } else {
            outside = middle;
        }
    }
    0.5 * (outside + inside)
}

/// The minimum of `height` between two places, by golden sections.
fn golden(mut low: f64, mut high: f64, height: impl Fn(f64) -> f64) -> f64 {
    const SHARE: f64 = 0.618_033_988_749_894_8;
    let (mut left, mut right) = (high - SHARE * (high - low), low + SHARE * (high - low));
    let (mut at_left, mut at_right) = (height(left), height(right));
    for _ in 0..70 {
        if at_left <= at_right {
            (high, right, at_right) = (right, left, at_left);
            left = high - SHARE * (high - low);
            at_left = height(left);
        } else {
            (low, left, at_left) = (left, right, at_right);
            right = low + SHARE * (high - low);
            at_right = height(right);
        }
    }
    0.5 * (low + high)
}
