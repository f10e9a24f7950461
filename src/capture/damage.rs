//! What is wrong with a channel's samples: clipping, offset, dropouts, values that are not numbers.
//!
//! Gathered in one pass over the samples, so that it costs nothing beside the overview. A run of equal samples tells
//! of damage only where it is entered or left by a jump: a slow signal, or one of a few quantisation steps, repeats
//! its values by nature.

/// What was found in the samples of one channel, on the normalised scale.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Damage {
    /// How many samples were looked at.
    pub n_samples: u64,
    /// The least finite sample; 0 of none.
    pub min: f64,
    /// The greatest finite sample; 0 of none.
    pub max: f64,
    /// The mean of the finite samples.
    pub mean: f64,
    /// The r.m.s. of the finite samples about their mean.
    pub rms: f64,
    /// Samples that stand at full scale in runs of two or more, or at the channel's extremes in runs of three or more
    /// that begin or end with a jump.
    pub n_clipped: u64,
    /// Stretches of more than 32 equal samples that begin or end with a jump, within a channel otherwise alive.
    pub n_dropouts: u64,
    /// Samples in them.
    pub n_dropped: u64,
    /// Samples that are infinite or not a number.
    pub n_not_finite: u64,
}

/// Equal samples that count as a dropout when there are more of them.
const HELD: u64 = 32;
/// Equal extreme samples that count as clipped away from full scale.
const FLAT: u64 = 3;
/// Equal samples at full scale that count as clipped.
const AT_FULL_SCALE: u64 = 2;
/// A step larger than so many of the smallest is a jump: a smooth top that quantisation made flat is left by two at most.
const JUMP: f64 = 4.0;
/// The mean over the r.m.s. of the rest that is worth a word.
const OFFSET_RATIO: f64 = 0.5;
/// Below so many samples the mean of noise alone may be that large.
const OFFSET_SAMPLES: u64 = 64;

impl Damage {
    /// What is worth saying: a stable code (`clipping`, `offset`, `dropouts`, `not-finite`) and a sentence each.
    pub fn doubts(&self) -> Vec<(&'static str, String)> {
        let mut doubts = Vec::new();
        let percent = |n: u64| 100.0 * n as f64 / self.n_samples.max(1) as f64;
        if self.n_clipped > 0 {
            let (n, part) = (self.n_clipped, percent(self.n_clipped));
            doubts.push((
                "clipping",
                format!("Clipped: {n} samples ({part:.2} %) stand at an extreme in runs, so levels read low and harmonics may be false."),
            ));
        }
        if self.has_offset() {
            let (mean, ratio) = (self.mean, self.mean.abs() / self.rms);
            doubts.push((
                "offset",
                format!("Offset: the mean is {mean:.4} FS, {ratio:.1} times the r.m.s. of the rest; it leaks over the lowest frequencies unless removed."),
            ));
        }
        if self.n_dropouts > 0 {
            let (n, dropped, part) = (self.n_dropouts, self.n_dropped, percent(self.n_dropped));
            doubts.push((
                "dropouts",
                format!("Dropouts: the signal stands still {n} times, {dropped} samples ({part:.2} %), so levels read low and the floor is raised."),
            ));
        }
        if self.n_not_finite > 0 {
            let (n, part) = (self.n_not_finite, percent(self.n_not_finite));
            doubts.push((
                "not-finite",
                format!("{n} samples ({part:.2} %) are infinite or not a number: mark a segment without them."),
            ));
        }
        doubts
    }

    fn has_offset(&self) -> bool {
        self.n_samples >= OFFSET_SAMPLES && self.rms > 0.0 && self.mean.abs() > OFFSET_RATIO * self.rms
    }
}

/// What is doubtful about a segment's samples: a stable code and a sentence each, as [`Damage::doubts`].
///
/// `bits_per_sample` is [`super::Capture::bits_per_sample`].
pub fn segment_doubts(samples: &[f64], bits_per_sample: Option<u32>) -> Vec<(&'static str, String)> {
    let mut scan = DamageScan::new(bits_per_sample);
    for &x in samples {
        scan.push(x);
    }
    scan.so_far().doubts()
}

/// One pass over a channel's samples.
#[derive(Debug, Clone)]
pub(super) struct DamageScan {
    /// Top and bottom code of integer samples.
    rails: Option<(f64, f64)>,
    /// The least step between samples: known of integers, the least seen of others.
    quantum: f64,
    n_samples: u64,
    n_not_finite: u64,
    /// The first finite sample, about which sums are taken so that they keep their digits.
    pivot: Option<f64>,
    sum: f64,
    sum_of_squares: f64,
    run: Run,
    top: Extreme,
    bottom: Extreme,
    n_at_rails: u64,
    n_dropouts: u64,
    n_dropped: u64,
}

#[derive(Debug, Clone, Copy)]
struct Run {
    value: f64,
    n: u64,
    /// The step by which it was entered; 0 at the start.
    entered_by: f64,
}

/// An extreme of the samples so far and the samples in flat runs on it.
#[derive(Debug, Clone, Copy)]
struct Extreme {
    value: f64,
    n_flat: u64,
}

impl Extreme {
    fn flat_run(&mut self, run: Run) {
        if run.value == self.value && run.n >= FLAT {
            self.n_flat += run.n;
        }
    }
}

impl DamageScan {
    pub(super) fn new(bits_per_sample: Option<u32>) -> Self {
        let quantum = bits_per_sample.map(|bits| 0.5_f64.powi(bits as i32 - 1));
        Self {
            rails: quantum.map(|q| (1.0 - q, q - 1.0)),
            quantum: quantum.unwrap_or(f64::INFINITY),
            n_samples: 0,
            n_not_finite: 0,
            pivot: None,
            sum: 0.0,
            sum_of_squares: 0.0,
            run: Run { value: f64::NAN, n: 0, entered_by: 0.0 },
            top: Extreme { value: f64::NEG_INFINITY, n_flat: 0 },
            bottom: Extreme { value: f64::INFINITY, n_flat: 0 },
            n_at_rails: 0,
            n_dropouts: 0,
            n_dropped: 0,
        }
    }

    pub(super) fn push(&mut self, x: f64) {
        self.n_samples += 1;
        if !x.is_finite() {
            self.n_not_finite += 1;
            self.end_run(0.0);
            self.run = Run { value: f64::NAN, n: 0, entered_by: 0.0 };
            return;
        }
        let from_pivot = x - *self.pivot.get_or_insert(x);
        self.sum += from_pivot;
        self.sum_of_squares += from_pivot * from_pivot;
        if x == self.run.value {
            self.run.n += 1;
            return;
        }
        let step = if self.run.n > 0 { (x - self.run.value).abs() } else { 0.0 };
        if self.rails.is_none() && step > 0.0 {
            self.quantum = self.quantum.min(step);
        }
        self.end_run(step);
        self.run = Run { value: x, n: 1, entered_by: step };
        if x > self.top.value {
            self.top = Extreme { value: x, n_flat: 0 };
        }
        if x < self.bottom.value {
            self.bottom = Extreme { value: x, n_flat: 0 };
        }
    }

    fn end_run(&mut self, left_by: f64) {
        let run = self.run;
        if self.rails.is_some_and(|(top, bottom)| run.value >= top || run.value <= bottom) {
            self.n_at_rails += if run.n >= AT_FULL_SCALE { run.n } else { 0 };
        } else if left_by.max(run.entered_by) > JUMP * self.quantum {
            self.top.flat_run(run);
            self.bottom.flat_run(run);
            if run.n > HELD && run.value != self.top.value && run.value != self.bottom.value {
                self.n_dropouts += 1;
                self.n_dropped += run.n;
            }
        }
    }

    /// What the samples so far amount to.
    pub(super) fn so_far(&self) -> Damage {
        let mut ended = self.clone();
        ended.end_run(0.0);
        let n = (self.n_samples - self.n_not_finite).max(1) as f64;
        let about_pivot = self.sum / n;
        let variance = (self.sum_of_squares / n - about_pivot * about_pivot).max(0.0);
        let finite = |x: f64| if x.is_finite() { x } else { 0.0 };
        let alive = self.top.value > self.bottom.value;
        Damage {
            n_samples: self.n_samples,
            min: finite(self.bottom.value),
            max: finite(self.top.value),
            mean: self.pivot.unwrap_or(0.0) + about_pivot,
            rms: variance.sqrt(),
            n_clipped: ended.n_at_rails + if alive { ended.top.n_flat + ended.bottom.n_flat } else { 0 },
            n_dropouts: ended.n_dropouts,
            n_dropped: ended.n_dropped,
            n_not_finite: self.n_not_finite,
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn scan(samples: &[f64], bits: Option<u32>) -> Damage {
        let mut scan = DamageScan::new(bits);
        for &x in samples {
            scan.push(x);
        }
        scan.so_far()
    }

    fn sine(n: usize, period: f64, peak: f64, bits: u32) -> Vec<f64> {
        let steps = 2.0_f64.powi(bits as i32 - 1);
        let code = |x: f64| (x * steps).round().clamp(-steps, steps - 1.0) / steps;
        (0..n).map(|i| code(peak * (std::f64::consts::TAU * i as f64 / period).sin())).collect()
    }

    fn codes(samples: &[f64], bits: Option<u32>) -> Vec<&'static str> {
        segment_doubts(samples, bits).into_iter().map(|(code, _)| code).collect()
    }

    #[test]
    fn nothing_and_one_sample_and_silence_are_no_damage() {
        assert_eq!(codes(&[], Some(16)), [""; 0]);
        assert_eq!(codes(&[0.5], None), [""; 0]);
        assert_eq!(codes(&[0.0; 1000], Some(24)), [""; 0]);
        let empty = scan(&[], None);
        assert_eq!((empty.min, empty.max, empty.mean, empty.rms), (0.0, 0.0, 0.0, 0.0));
    }

    #[test]
    fn samples_at_full_scale_in_runs_are_counted() {
        let clean = sine(1000, 37.0, 0.99, 16);
        assert_eq!(codes(&clean, Some(16)), [""; 0]);
        let clipped = sine(1000, 37.0, 1.5, 16);
        let at_rails = clipped.iter().filter(|&&x| x == -1.0 || x == 1.0 - 0.5_f64.powi(15)).count() as u64;
        assert_eq!(scan(&clipped, Some(16)).n_clipped, at_rails);
        assert_eq!(codes(&clipped, Some(16)), ["clipping"]);
    }

    #[test]
    fn an_overload_before_the_converter_shows_as_flat_extremes() {
        let clipped: Vec<f64> = sine(1000, 50.3, 1.0, 24).iter().map(|x| (1.7 * x).clamp(-0.8, 0.8)).collect();
        for bits in [None, Some(24)] {
            assert_eq!(codes(&clipped, bits), ["clipping"], "{bits:?}");
        }
        let loud_float: Vec<f64> = sine(1000, 37.0, 1.0, 24).iter().map(|x| 3.0 * x).collect();
        assert_eq!(codes(&loud_float, None), [""; 0], "float samples beyond 1 are not clipped");
    }

    #[test]
    fn slow_and_faint_signals_repeat_values_without_being_damaged() {
        let slow = sine(80_000, 40_000.0, 0.5, 16);
        assert!(slow.windows(60).any(|w| w.iter().all(|x| *x == w[0])), "the case has its flat tops");
        for bits in [None, Some(16)] {
            assert_eq!(codes(&slow, bits), [""; 0]);
            assert_eq!(codes(&sine(40_000, 37.0, 1e-4, 16), bits), [""; 0]);
        }
    }

    #[test]
    fn held_and_zeroed_stretches_are_dropouts() {
        let mut samples = sine(2000, 37.3, 0.5, 16);
        samples[300..400].fill(0.0);
        let held = samples[1000];
        samples[1000..1050].fill(held);
        let damage = scan(&samples, Some(16));
        assert_eq!((damage.n_dropouts, damage.n_clipped), (2, 0));
        assert!((150..=152).contains(&damage.n_dropped), "{}", damage.n_dropped);
        assert_eq!(codes(&samples, Some(16)), ["dropouts"]);
    }

    #[test]
    fn an_offset_is_told_by_the_rest_and_keeps_its_digits() {
        let samples: Vec<f64> = sine(3700, 37.0, 1e-6, 32).iter().map(|x| x + 0.75).collect();
        let damage = scan(&samples, None);
        assert!((damage.mean - 0.75).abs() < 1e-12);
        assert!((damage.rms / (1e-6 / 2.0_f64.sqrt()) - 1.0).abs() < 1e-3, "{}", damage.rms);
        assert_eq!(codes(&samples, None), ["offset"]);
    }

    #[test]
    fn values_that_are_not_numbers_are_counted_and_left_out() {
        let mut samples = sine(1000, 37.0, 0.5, 16);
        samples[10] = f64::NAN;
        samples[20] = f64::INFINITY;
        let damage = scan(&samples, None);
        assert_eq!(damage.n_not_finite, 2);
        assert!(damage.rms.is_finite() && damage.max <= 0.5);
        assert_eq!(codes(&samples, None), ["not-finite"]);
    }
}
