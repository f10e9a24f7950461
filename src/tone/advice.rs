//! Which windows would read this segment's tones, and how wrong each would be.

use realfft::num_complex::Complex64;

use super::fit::UnitUncertainty;
use super::found::{FoundTone, Noise};
use super::state::{Disturbance, Lobes};
use crate::signal::{Cancelled, Watch};
use crate::units::db;
use crate::window::{Kernel, Window};

/// What a window would make of the tones of a segment.
#[derive(Debug, Clone)]
pub struct WindowAdvice {
    /// The window.
    pub window: Window,
    /// The largest expected error of a tone's level, dB; `None` where some tone cannot be read.
    pub worst_db: Option<f64>,
    /// The mean of the expected errors of the tones that can be read, dB.
    pub mean_db: f64,
    /// How many tones cannot be read.
    pub n_unreadable: usize,
    /// What decides.
    pub deciding: Deciding,
}

/// What decides on a window, by the tones' places in the list.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Deciding {
    /// It merges these two.
    Merges(usize, usize),
    /// The first stands in the skirt of the second.
    Skirt(usize, usize),
    /// The noise at this tone.
    Noise(usize),
}

/// Windows longer than this, whose kernel needs their samples, are judged at this length: the lobes near a tone do not
/// depend on it.
const LONGEST_SAMPLED: usize = 4096;

/// A window as far as it matters here.
struct Judged {
    kernel: Kernel,
    lobes: Lobes,
    n: usize,
}

impl Judged {
    fn of(window: &Window, n: usize) -> Self {
        let short = n.min(LONGEST_SAMPLED);
        let n_kernel = if window.cosine_terms().is_some() { n } else { short };
        let merit = window.merit(short);
        let kernel = window.kernel(n_kernel);
        let lobes = Lobes {
            half_width_bins: merit.width_null_bins / 2.0,
            // As the window would have them at the segment's own length.
            s1: merit.coherent_gain * n as f64,
            s2: merit.enbw_bins * merit.coherent_gain * merit.coherent_gain * n as f64,
        };
        Self { kernel, lobes, n: n_kernel }
    }

    /// The kernel over its own top; beyond half the length it is judged at, its last lobe.
    fn relative(&self, nu: f64) -> Complex64 {
        let reach = self.n as f64 / 2.0;
        self.kernel.at(nu.clamp(-reach, reach)) / self.kernel.at(0.0)
    }
}

/// Ranks `windows` for the tones of a segment of `n` samples, best first: by the worst expected error of a tone's level,
/// √(leak² + noise²) in dB, then by the mean; windows that cannot read some tone last, those that miss fewest first.
///
/// A tone cannot be read where another stands inside the window's main lobe. No tones give no advice.
///
/// # Errors
/// [`Cancelled`] where the watch says so.
pub fn advise(
    windows: &[Window],
    n: usize,
    tones: &[FoundTone],
    known: Known<'_>,
    watch: &Watch,
) -> Result<Vec<WindowAdvice>, Cancelled> {
    let mut ranked = Vec::with_capacity(windows.len());
    for window in windows {
        watch.check()?;
        ranked.extend(judge(window, n, tones, known));
    }
    ranked.sort_by(|a, b| {
        let worst = |w: &WindowAdvice| w.worst_db.unwrap_or(f64::INFINITY);
        let key = |w: &WindowAdvice| (w.n_unreadable, worst(w), w.mean_db);
        let (a, b) = (key(a), key(b));
        a.0.cmp(&b.0).then(a.1.total_cmp(&b.1)).then(a.2.total_cmp(&b.2))
    });
    Ok(ranked)
}

/// What is known beside the tones themselves.
#[derive(Debug, Clone, Copy, Default)]
pub struct Known<'a> {
    /// The noise; none without a floor.
    pub noise: Option<&'a Noise>,
    /// What noise of unit variance does to each tone; none where they were not fitted.
    pub units: &'a [UnitUncertainty],
}

impl Known<'_> {
    /// How far the place of tone `i` is uncertain, bins.
    fn place(&self, i: usize, nu: f64, n: f64) -> f64 {
        let unit = self.units.get(i).map_or(0.0, |u| u.omega);
        unit * self.noise.map_or(0.0, |noise| noise.sample_deviation(nu, n)) * n / std::f64::consts::TAU
    }
}

/// What one window would make of the tones; `None` where there are none.
///
/// The expected error of a level is that by leak and noise together, √(leak² + noise²): the leak as the root of its mean
/// square over all phases, since those are as little known as the noise, and over the places within the tone's
/// uncertainty, so that no null of a kernel that happens to lie at the estimate counts.
pub fn judge(window: &Window, n: usize, tones: &[FoundTone], known: Known<'_>) -> Option<WindowAdvice> {
    let judged = Judged::of(window, n);
    let mut worst: Option<(f64, Deciding)> = None;
    let mut merged = None;
    let (mut sum, mut n_read, mut n_unreadable) = (0.0, 0_usize, 0);
    for (i, tone) in tones.iter().enumerate().filter(|(_, tone)| !tone.faint) {
        let power = known.noise.map_or(0.0, |noise| noise.line_power(tone.nu, judged.lobes.s2));
        let disturbance = Disturbance::under(|nu| judged.relative(nu), &judged.lobes, tones, i, power);
        let strongest = disturbance.strongest;
        if disturbance.crowded {
            n_unreadable += 1;
            merged = merged.or(strongest.map(|j| Deciding::Merges(i.min(j), i.max(j))));
            continue;
        }
        let leak_db = judged.expected_leak_db(tones, i, known.place(i, tone.nu, n as f64));
        let error = leak_db.hypot(disturbance.noise_db);
        sum += error;
        n_read += 1;
        if worst.is_none_or(|(w, _)| error > w) {
            let by_leak = leak_db > disturbance.noise_db;
            let deciding = strongest.filter(|_| by_leak).map_or(Deciding::Noise(i), |j| Deciding::Skirt(i, j));
            worst = Some((error, deciding));
        }
    }
    let deciding = merged.or(worst.map(|w| w.1))?;
    Some(WindowAdvice {
        window: window.clone(),
        worst_db: worst.map(|w| w.0).filter(|_| n_unreadable == 0),
        mean_db: sum / n_read.max(1) as f64,
        n_unreadable,
        deciding,
    })
}

/// The three places, in standard uncertainties, and their weights at which a mean over a normal law is taken (Gauss and
/// Hermite's rule of third order; common practice).
const PLACES: [(f64, f64); 3] =
    [(0.0, 2.0 / 3.0), (1.732_050_807_568_877_2, 1.0 / 6.0), (-1.732_050_807_568_877_2, 1.0 / 6.0)];

impl Judged {
    /// The leak on tone `i` to expect, dB, where its place is uncertain by `u` bins.
    fn expected_leak_db(&self, tones: &[FoundTone], i: usize, u: f64) -> f64 {
        let Some(tone) = tones.get(i) else { return 0.0 };
        let others = tones.iter().enumerate().filter(|(j, t)| *j != i && !t.faint);
        let leak = |(_, other): (usize, &FoundTone)| {
            let at = |shift: f64| {
                let nu = tone.nu + shift * u;
                self.relative(nu - other.nu).norm_sqr() + self.relative(nu + other.nu).norm_sqr()
            };
            let mean: f64 = PLACES.iter().map(|(shift, weight)| weight * at(*shift)).sum();
            other.amplitude.norm_sqr() * mean
        };
        // Of a leak at a random phase half the power moves the level.
        db(1.0 + (others.map(leak).sum::<f64>() / 2.0).sqrt() / tone.amplitude.norm())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn tone(nu: f64, peak: f64) -> FoundTone {
        FoundTone { nu, amplitude: Complex64::new(peak, 0.0), snr: 0.0, by_hand: false, held: false, faint: false }
    }

    fn rank(tones: &[FoundTone]) -> Vec<WindowAdvice> {
        let windows = ["rectangular", "hann", "blackman-harris", "flat-top", "kaiser=8"];
        let windows: Vec<Window> = windows.iter().map(|w| Window::parse(w).unwrap()).collect();
        advise(&windows, 100_000, tones, Known::default(), &Watch::new()).unwrap()
    }

    fn of<'a>(ranked: &'a [WindowAdvice], name: &str) -> &'a WindowAdvice {
        ranked.iter().find(|a| a.window.name() == name).unwrap()
    }

    #[test]
    fn no_tones_no_advice() {
        assert!(rank(&[]).is_empty());
    }

    #[test]
    fn a_close_pair_asks_for_a_narrow_lobe() {
        let ranked = rank(&[tone(1000.0, 1.0), tone(1002.5, 1.0)]);
        assert_eq!(of(&ranked, "flat-top").worst_db, None);
        assert_eq!(of(&ranked, "flat-top").deciding, Deciding::Merges(0, 1));
        assert!(of(&ranked, "hann").worst_db.is_some());
        // Rectangular and Hann have main lobes of 1 and 2 bins; all others' are wider than the pair's 2.5.
        let unreadable: Vec<usize> = ranked.iter().map(|a| a.n_unreadable).collect();
        assert_eq!(unreadable, [0, 0, 2, 2, 2]);
    }

    #[test]
    fn a_weak_neighbour_asks_for_low_side_lobes() {
        let ranked = rank(&[tone(1000.3, 1.0), tone(1012.8, 1e-4)]);
        assert!(of(&ranked, "blackman-harris").worst_db.unwrap() < 1.0);
        assert!(of(&ranked, "rectangular").worst_db.unwrap() > 10.0);
        assert_eq!(of(&ranked, "rectangular").deciding, Deciding::Skirt(1, 0));
        assert!(["blackman-harris", "flat-top"].contains(&ranked[0].window.name()));
    }

    #[test]
    fn a_lone_tone_is_read_by_any_window() {
        for advice in rank(&[tone(1000.3, 1.0)]) {
            assert!(advice.worst_db.unwrap() < 0.01, "{}", advice.window);
            assert_eq!(advice.n_unreadable, 0);
        }
    }
}
