//! The way from values to points on the screen and back, and the ticks between.

/// One axis: values from `lo` to `hi` laid out from `from` to `to` points (which may run either way).
#[derive(Debug, Clone, Copy, PartialEq)]
pub(crate) struct Axis {
    pub(crate) lo: f64,
    pub(crate) hi: f64,
    /// Laid out by the logarithm; `lo` is then above 0.
    pub(crate) log: bool,
    pub(crate) from: f32,
    pub(crate) to: f32,
}

/// A place on an axis that is marked.
#[derive(Debug, Clone, PartialEq)]
pub(crate) struct Tick {
    pub(crate) value: f64,
    /// What is written there; nothing for the small ones.
    pub(crate) label: Option<String>,
}

impl Axis {
    /// An axis laid out in proportion.
    pub(crate) fn linear(lo: f64, hi: f64, from: f32, to: f32) -> Self {
        Self { lo, hi: if hi > lo { hi } else { lo + 1.0 }, log: false, from, to }
    }

    /// An axis laid out by the logarithm where the values allow it.
    pub(crate) fn logarithmic(lo: f64, hi: f64, from: f32, to: f32) -> Self {
        Self { log: lo > 0.0 && hi > lo, ..Self::linear(lo, hi, from, to) }
    }

    fn inner(&self, value: f64) -> f64 {
        if self.log { value.max(f64::MIN_POSITIVE).log10() } else { value }
    }

    fn outer(&self, inner: f64) -> f64 {
        if self.log { 10_f64.powf(inner) } else { inner }
    }

    /// Where a value stands, in points; far off the axis it is held near its ends.
    pub(crate) fn at(&self, value: f64) -> f32 {
        let (lo, hi) = (self.inner(self.lo), self.inner(self.hi));
        let part = ((self.inner(value) - lo) / (hi - lo)).clamp(-10.0, 11.0);
        self.from + (part * f64::from(self.to - self.from)) as f32
    }

    /// The value at a point.
    pub(crate) fn value(&self, at: f32) -> f64 {
        let (lo, hi) = (self.inner(self.lo), self.inner(self.hi));
        let length = f64::from(self.to - self.from);
        let part = if length == 0.0 { 0.0 } else { f64::from(at - self.from) / length };
        self.outer(lo + part * (hi - lo))
    }

    /// The range shown after zooming by `factor` (below 1 shows less) about `about`.
    pub(crate) fn zoomed(&self, factor: f64, about: f64) -> (f64, f64) {
        let (lo, hi, about) = (self.inner(self.lo), self.inner(self.hi), self.inner(about));
        (self.outer(about - (about - lo) * factor), self.outer(about + (hi - about) * factor))
    }

    /// The range shown after moving the contents by `points`.
    pub(crate) fn panned(&self, points: f32) -> (f64, f64) {
        let (lo, hi) = (self.inner(self.lo), self.inner(self.hi));
        let move_by = -f64::from(points) * (hi - lo) / f64::from(self.to - self.from);
        (self.outer(lo + move_by), self.outer(hi + move_by))
    }

    /// `n + 1` rising edges of `n` columns.
    pub(crate) fn edges(&self, n: usize) -> Vec<f64> {
        let (lo, hi) = (self.inner(self.lo), self.inner(self.hi));
        (0..=n).map(|i| self.outer(lo + (hi - lo) * i as f64 / n.max(1) as f64)).collect()
    }

    /// Ticks whose labels stand at least `gap` points apart.
    pub(crate) fn ticks(&self, gap: f32) -> Vec<Tick> {
        let room = f64::from((self.to - self.from).abs() / gap.max(1.0)).max(1.0);
        if self.log && self.hi / self.lo >= 8.0 { self.decade_ticks(room) } else { self.even_ticks(room) }
    }

    /// Ticks of a level axis: steps that decibels are counted in.
    pub(crate) fn level_ticks(&self, gap: f32) -> Vec<Tick> {
        let least = (self.hi - self.lo) / f64::from((self.to - self.from).abs() / gap.max(1.0)).max(1.0);
        let steps = [0.1, 0.2, 0.5, 1.0, 2.0, 3.0, 5.0, 10.0, 20.0, 30.0, 40.0, 60.0];
        let step = steps.into_iter().find(|s| *s >= least * (1.0 - 1e-9)).unwrap_or_else(|| nice_step(least));
        self.ticks_of(step)
    }

    fn even_ticks(&self, room: f64) -> Vec<Tick> {
        self.ticks_of(nice_step((self.hi - self.lo) / room))
    }

    fn ticks_of(&self, step: f64) -> Vec<Tick> {
        let decimals = (-step.log10()).ceil().clamp(0.0, 9.0) as usize;
        let (first, last) = ((self.lo / step).ceil(), (self.hi / step).floor());
        let n = (last - first).clamp(-1.0, 1000.0);
        let mut ticks = Vec::new();
        let mut i = 0.0;
        while i <= n {
            let value = (first + i) * step;
            ticks.push(Tick { value, label: Some(crate::ui::figure::fixed(value, decimals)) });
            i += 1.0;
        }
        ticks
    }

    fn decade_ticks(&self, room: f64) -> Vec<Tick> {
        let n_decades = (self.hi / self.lo).log10();
        let labelled: &[u32] = match room / n_decades {
            r if r >= 6.0 => &[1, 2, 3, 5, 7],
            r if r >= 3.5 => &[1, 2, 5],
            r if r >= 1.0 => &[1],
            _ => &[],
        };
        let (first, last) = (self.lo.log10().floor() as i32, self.hi.log10().ceil() as i32);
        let mut ticks = Vec::new();
        for decade in first..=last {
            for digit in 1..10_u32 {
                let value = f64::from(digit) * 10_f64.powi(decade);
                if value < self.lo * (1.0 - 1e-9) || value > self.hi * (1.0 + 1e-9) {
                    continue;
                }
                let alone = labelled.is_empty() && digit == 1 && decade % 2 == 0;
                let label = (labelled.contains(&digit) || alone)
                    .then(|| crate::ui::figure::fixed(value, (-decade).clamp(0, 9) as usize));
                ticks.push(Tick { value, label });
            }
        }
        ticks
    }
}

/// The 1, 2 or 5 times a power of ten next above `least`.
fn nice_step(least: f64) -> f64 {
    if !(least > 0.0 && least.is_finite()) {
        return 1.0;
    }
    let power = 10_f64.powf(least.log10().floor());
    let digit = [1.0, 2.0, 5.0, 10.0].into_iter().find(|d| d * power >= least * (1.0 - 1e-9));
    digit.unwrap_or(10.0) * power
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn there_and_back_again() {
        for axis in [Axis::linear(10.0, 500.0, 20.0, 320.0), Axis::logarithmic(10.0, 500.0, 20.0, 320.0)] {
            for value in [10.0, 37.5, 499.0] {
                assert!((axis.value(axis.at(value)) - value).abs() < 1e-3 * value);
            }
            let (lo, hi) = axis.zoomed(0.5, 50.0);
            let zoomed = Axis { lo, hi, ..axis };
            assert!((zoomed.at(50.0) - axis.at(50.0)).abs() < 1e-3, "the value under the pointer stays put");
            let (lo, hi) = axis.panned(30.0);
            let panned = Axis { lo, hi, ..axis };
            assert!((panned.at(50.0) - axis.at(50.0) - 30.0).abs() < 1e-3);
        }
    }

    #[test]
    fn ticks_are_round_and_apart() {
        let axis = Axis::linear(123.6, 126.0, 0.0, 300.0);
        let labels: Vec<_> = axis.ticks(60.0).into_iter().filter_map(|t| t.label).collect();
        assert_eq!(labels, ["124.0", "124.5", "125.0", "125.5", "126.0"]);
        let down = Axis::linear(-120.0, 0.0, 200.0, 0.0);
        let levels: Vec<f64> = down.level_ticks(40.0).iter().map(|t| t.value).collect();
        assert_eq!(levels, [-120.0, -90.0, -60.0, -30.0, 0.0]);
    }

    #[test]
    fn decades_are_labelled_and_what_lies_between_is_not_when_tight() {
        let axis = Axis::logarithmic(1.0, 1000.0, 0.0, 180.0);
        let labels: Vec<_> = axis.ticks(50.0).into_iter().filter_map(|t| t.label).collect();
        assert_eq!(labels, ["1", "10", "100", "1000"]);
        assert!(axis.ticks(50.0).len() > 20);
    }

    #[test]
    fn an_axis_of_nothing_still_works() {
        let axis = Axis::linear(3.0, 3.0, 0.0, 0.0);
        assert!(axis.value(5.0).is_finite() && axis.at(3.0).is_finite());
        assert!(axis.ticks(50.0).len() < 20);
        assert!(!Axis::logarithmic(0.0, 10.0, 0.0, 1.0).log);
    }
}
