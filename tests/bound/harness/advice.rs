//! What each window of the catalogue would make of a capture whose tones are known.

use panewise::reading::Reading;
use panewise::units::db;
use panewise::window::{Window, catalogue};

use super::fisher::{Bound, bounds};
use super::made::Made;

/// Not for steady tones, or whatever its coefficients make of it.
const NOT_RANKED: [&str; 2] = ["exponential", "cosine-sum"];

/// A neighbour of a smaller part of a tone's amplitude moves its level by 0.01 dB at most, wherever it stands.
const MATTERS: f64 = 1.15e-3;

/// Where a normal deviate of unit variance is looked at, and with what weight (three-point Gauss-Hermite quadrature).
const PLACES: [(f64, f64); 3] =
    [(-1.732_050_807_568_877_2, 1.0 / 6.0), (0.0, 2.0 / 3.0), (1.732_050_807_568_877_2, 1.0 / 6.0)];

/// The largest expected error of a tone's level, √(leak² + noise²) dB; `None` where the main lobe of some tone holds
/// another.
///
/// The leak is a root mean square: over the phases of the tones, and over where the level is taken, which noise moves by
/// the bound at least. A null of the kernel that happens to lie on a neighbour is no merit of a window, nor is a leak that
/// happens to be in quadrature: nobody who does not know the truth could choose by them.
pub fn worst_db(window: &Window, made: &Made, bounds: &[Bound]) -> Option<f64> {
    let n = made.n();
    let kernel = window.kernel(n);
    let (sums, half) = (window.sums(n), window.main_lobe_half_width_bins(n));
    let mut worst: f64 = 0.0;
    for (i, tone) in made.tones.iter().enumerate() {
        let own = tone.peak / 2.0 * kernel.at(0.0).norm();
        let mut power = 0.0;
        for (_, other) in made.tones.iter().enumerate().filter(|(j, _)| *j != i) {
            if (tone.nu - other.nu).abs() < half && other.peak > MATTERS * tone.peak {
                return None;
            }
            for (deviate, weight) in PLACES {
                let place = tone.nu + deviate * bounds[i].nu;
                let parts = kernel.at(place - other.nu).norm_sqr() + kernel.at(place + other.nu).norm_sqr();
                power += weight * (other.peak / 2.0).powi(2) * parts;
            }
        }
        // Only the part in phase with the tone moves its level: half the power, of leak and noise alike.
        let level = |power: f64| db(1.0 + (power / 2.0).sqrt() / own);
        worst = worst.max(level(power).hypot(level(made.density(tone.nu) * sums.s2)));
    }
    Some(worst)
}

/// What came of the advice.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Advised {
    /// The window is among the best, or no window reads all and it says so.
    Well,
    /// Another would be better by more than 10 % and 0.01 dB, or some tone cannot be read in it though others could.
    Worse,
    /// No window reads all, and it does not say so, or it says so though one does.
    NotSaid,
}

pub fn judge(made: &Made, reading: &Reading) -> Advised {
    let windows = catalogue().iter().filter(|e| !NOT_RANKED.contains(&e.name)).map(|e| Window::parse(e.name).unwrap());
    let bounds = bounds(made);
    let errors: Vec<(Window, Option<f64>)> = windows.map(|w| (w.clone(), worst_db(&w, made, &bounds))).collect();
    let best = errors.iter().filter_map(|e| e.1).fold(f64::INFINITY, f64::min);
    let said = reading.warnings.iter().any(|w| w.code == "no-window");
    if said != best.is_infinite() {
        return Advised::NotSaid;
    }
    if best.is_infinite() {
        return Advised::Well;
    }
    let advised = reading.advice.first().and_then(|a| errors.iter().find(|e| e.0.name() == a.window)).and_then(|e| e.1);
    match advised {
        Some(error) if error <= (1.1 * best).max(best + 0.01) => Advised::Well,
        _ => Advised::Worse,
    }
}
