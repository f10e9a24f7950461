//! How far other tones disturb a pane's reading of one.

use realfft::num_complex::Complex64;

use super::found::{FoundTone, Search};
use crate::spectrum::Spectra;
use crate::units::db;

/// What stands in the way of one reading.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Disturbance {
    /// Whether another tone stands inside the pane's main lobe, not so weak that it could not matter.
    pub crowded: bool,
    /// What they do to the level, signed, dB.
    pub leak_db: f64,
    /// What noise does to the level, one standard uncertainty, dB.
    pub noise_db: f64,
    /// The tone's power over the pane's mean noise a line.
    pub over_floor: f64,
    /// Which tone disturbs it most.
    pub strongest: Option<usize>,
}

/// A neighbour with less than this part of the tone's amplitude does not crowd it, whatever the distance: it could
/// move the level by 0.01 dB at most.
const CROWDING_PART: f64 = 1.15e-3;

/// Leakage under this does not count, dB.
const LEAK_DB: f64 = 0.1;

/// A reading whose power is less than this over the pane's noise is covered by the floor.
const OVER_FLOOR: f64 = 4.0;

/// What a reading can be, judged from the tones known.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum State {
    /// Nothing stands in the way.
    Clear,
    /// Another tone stands inside the main lobe.
    Crowded,
    /// Leakage moves the level more than 0.1 dB and more than noise does.
    UnderSkirt,
    /// The pane's floor covers the tone.
    BelowFloor,
}

/// What of a window's kernel and sums a disturbance is judged by.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Lobes {
    /// Half the width of the main lobe, bins.
    pub half_width_bins: f64,
    /// Σ w.
    pub s1: f64,
    /// Σ w².
    pub s2: f64,
}

impl Disturbance {
    /// Of tone `of` among those found, in pane `pane`, read at the tone itself.
    pub fn of(spectra: &Spectra, pane: usize, found: &Search, of: usize) -> Self {
        let n = spectra.n_samples();
        let half_width_bins = spectra.windows().get(pane).map_or(0.0, |w| w.main_lobe_half_width_bins(n));
        let sums = spectra.sums(pane);
        let lobes = Lobes { half_width_bins, s1: sums.s1, s2: sums.s2 };
        let top = spectra.kernel_at(pane, 0.0);
        let nu = found.tones.get(of).map_or(0.0, |t| t.nu);
        let noise_power = found.noise.as_ref().map_or(0.0, |noise| noise.line_power(nu, sums.s2));
        let steady = |nu: f64| spectra.kernel_at(pane, nu) / top;
        Self::under(steady, &lobes, &found.tones, of, noise_power).read_at(spectra, pane, found, of, nu)
    }

    /// The same where the pane's maximum stands at `place` bins: the skirt of others draws it aside, to where they raise
    /// it most. What tones that move leak is that of their paths.
    #[must_use]
    pub fn read_at(self, spectra: &Spectra, pane: usize, found: &Search, of: usize, place: f64) -> Self {
        let Some(tone) = found.tones.get(of) else { return self };
        let (top, s1) = (spectra.kernel_at(pane, 0.0), spectra.sums(pane).s1);
        let kernel = |nu: f64| spectra.kernel_at(pane, nu) / top;
        let window = spectra.windows().get(pane);
        let mut seen = tone.amplitude * kernel(place - tone.nu);
        for (j, (other, motion)) in found.tones.iter().zip(&found.motions).enumerate() {
            if j == of || other.faint {
                continue;
            }
            let path = motion.as_ref().zip(window).and_then(|(motion, window)| motion.seen_under(window, place));
            seen += path.map_or_else(|| other.amplitude * kernel(place - other.nu), |path| path * (2.0 / s1));
            seen += other.amplitude.conj() * kernel(place + other.nu);
        }
        Self { leak_db: db(seen.norm() / tone.amplitude.norm()), ..self }
    }

    /// The same under any window: `kernel` gives W(ν)/W(0).
    pub fn under(
        kernel: impl Fn(f64) -> Complex64,
        lobes: &Lobes,
        tones: &[FoundTone],
        of: usize,
        noise_power: f64,
    ) -> Self {
        let nothing = Self { crowded: false, leak_db: 0.0, noise_db: 0.0, over_floor: 0.0, strongest: None };
        let Some(tone) = tones.get(of) else { return nothing };
        let own = tone.amplitude.norm();
        let mut leak = Complex64::ZERO;
        let (mut crowded, mut most) = (false, 0.0);
        let mut strongest = None;
        for (i, other) in tones.iter().enumerate() {
            // A faint peak is not counted as a tone.
            if i == of || other.faint {
                continue;
            }
            let distance = tone.nu - other.nu;
            let near = other.amplitude * kernel(distance);
            leak += near + other.amplitude.conj() * kernel(tone.nu + other.nu);
            let crowds = distance.abs() < lobes.half_width_bins && other.amplitude.norm() > CROWDING_PART * own;
            // The one to name is whoever crowds, else whoever leaks most.
            let weight = near.norm() + if crowds { own + other.amplitude.norm() } else { 0.0 };
            if weight > most {
                (most, strongest) = (weight, Some(i));
            }
            crowded |= crowds;
        }
        let own_power = (own * lobes.s1 / 2.0).powi(2);
        Self {
            crowded,
            leak_db: db((tone.amplitude + leak).norm() / own),
            // Of the noise |Y|² only the part in phase with the tone moves its level: half the power.
            noise_db: db(1.0 + (noise_power / 2.0 / own_power).sqrt()),
            over_floor: own_power / noise_power,
            strongest,
        }
    }

    /// The word for it.
    pub fn state(&self) -> State {
        // Without a known floor nothing is covered: a ratio to no noise is infinite, or not a number for no tone.
        if self.over_floor < OVER_FLOOR {
            State::BelowFloor
        } else if self.crowded {
            State::Crowded
        } else if self.leak_db.abs() > LEAK_DB && self.leak_db.abs() > self.noise_db {
            State::UnderSkirt
        } else {
            State::Clear
        }
    }
}
