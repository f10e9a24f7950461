//! What a segment holds: steady tones, steady noise, or one transient that dies inside it.
//!
//! The kind decides which scale a level is to be stated on. The level of a line of noise moves with the segment's
//! length on an amplitude scale, that of a tone on a density scale, and both on a transient with the silence around it:
//! so what carries the greater part of the power decides between the first two, and a transient is told before either.

use super::Search;

/// What a segment holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Kind {
    /// Steady tones: levels of each, on an amplitude scale.
    Tones,
    /// Steady noise: a power density.
    Random,
    /// One event that dies inside the segment: an energy density.
    Transient,
}

impl Kind {
    /// Every kind.
    pub const ALL: [Self; 3] = [Self::Tones, Self::Random, Self::Transient];

    /// Its word.
    pub fn name(self) -> &'static str {
        match self {
            Self::Tones => "tones",
            Self::Random => "random",
            Self::Transient => "transient",
        }
    }

    /// The kind of that word.
    pub fn parse(word: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|kind| kind.name() == word)
    }
}

/// Why a segment is of its kind.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Grounds {
    /// Every sample is the same: no kind.
    Silence,
    /// Too few lines to tell tones from noise: no kind.
    TooShort,
    /// It dies inside the segment: transient.
    Dies(Decay),
    /// No tone stands over the noise: random.
    NoTone,
    /// Tones carry this part of the power about a straight line: tones from a half on, else random.
    Tones {
        /// How many, those that are doubtful left out.
        n: usize,
        /// Their part of the power, 0 to 1.
        share: f64,
    },
}

impl Grounds {
    /// The kind that follows.
    pub fn kind(&self) -> Option<Kind> {
        match self {
            Self::Silence | Self::TooShort => None,
            Self::Dies(_) => Some(Kind::Transient),
            Self::NoTone => Some(Kind::Random),
            Self::Tones { share, .. } => Some(if *share >= HALF { Kind::Tones } else { Kind::Random }),
        }
    }
}

/// Tones that carry this part of the power make the segment one of tones.
const HALF: f64 = 0.5;

/// How a transient dies.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Decay {
    /// Where its level is greatest, as a part of the segment.
    pub peak_at: f64,
    /// The greatest level over that of the segment's last tenth, dB; infinite where nothing is left there.
    pub fall_db: f64,
    /// The shortest part of the segment that holds nine tenths of its energy.
    pub holds: f64,
}

/// Blocks whose levels tell a transient.
const BLOCKS: usize = 64;
/// The fewest of them that do, and the fewest samples in one.
const FEWEST_BLOCKS: usize = 16;
const FEWEST_SAMPLES: usize = 8;
/// The last tenth lies at least this far (20 dB) under the greatest level, and so does the start unless the greatest
/// level stands in the first tenth.
const FALL: f64 = 0.1;
/// The part of the energy that is looked for,
const ENERGY: f64 = 0.9;
/// and the part of the segment that must hold it.
const HELD_WITHIN: f64 = 0.5;
/// A stretch that stays within 3 dB of the greatest level for more than this part of the time it takes to fall by
/// 20 dB to either side is one of steady work switched on and off, not an event: an exponential decay stays there for
/// 0.15, a Gaussian burst for 0.39, a half sine for 0.53, what is switched for nearly all.
const PLATEAU: f64 = 0.6;
/// Fewer blocks than this over the fall say nothing of the shape.
const SHAPED: usize = 6;

/// What `samples` hold, `found` in them, and why.
pub fn kind_of(samples: &[f64], found: &Search) -> Grounds {
    let power = power_about_a_line(samples);
    let scale = samples.iter().fold(0.0_f64, |m, x| m.max(x.abs()));
    // What rounding leaves of a constant is no signal.
    if power.is_nan() || power.sqrt() <= 1e-13 * scale || power == 0.0 {
        return Grounds::Silence;
    }
    if let Some(decay) = decay_of(samples) {
        return Grounds::Dies(decay);
    }
    let counted = || found.tones.iter().filter(|tone| !tone.faint);
    let n = counted().count();
    if n == 0 {
        return if found.noise.is_none() { Grounds::TooShort } else { Grounds::NoTone };
    }
    // Tones that could not be fitted together are no measure of what is left beside them.
    let share = if found.settled {
        1.0 - power_about_a_line(&found.residue) / power
    } else {
        counted().map(|tone| 0.5 * tone.amplitude.norm_sqr()).sum::<f64>() / power
    };
    Grounds::Tones { n, share: share.clamp(0.0, 1.0) }
}

/// The mean square about the straight line that fits best.
fn power_about_a_line(samples: &[f64]) -> f64 {
    let n = samples.len() as f64;
    let middle = 0.5 * (n - 1.0);
    let mean = samples.iter().sum::<f64>() / n;
    let (mut squares, mut leaning) = (0.0, 0.0);
    for (i, x) in samples.iter().enumerate() {
        let x = x - mean;
        squares += x * x;
        leaning += x * (i as f64 - middle);
    }
    let places = n * (n * n - 1.0) / 12.0;
    let line = if places > 0.0 { leaning * leaning / places } else { 0.0 };
    ((squares - line) / n).max(0.0)
}

/// How it dies, where it does.
fn decay_of(samples: &[f64]) -> Option<Decay> {
    let energies = block_energies(samples)?;
    let n = energies.len();
    let total: f64 = energies.iter().sum();
    let (peak_at, peak) = energies.iter().copied().enumerate().max_by(|a, b| a.1.total_cmp(&b.1))?;
    let mean = |blocks: &[f64]| blocks.iter().sum::<f64>() / blocks.len().max(1) as f64;
    let tenth = (n / 10).max(1);
    let last = mean(energies.get(n - tenth..)?);
    let quiet = FALL * FALL * peak;
    let starts_quiet = *energies.first()? <= quiet;
    if last > quiet || !(starts_quiet || peak_at < tenth) {
        return None;
    }
    let holds = shortest_holding(&energies, ENERGY * total) as f64 / n as f64;
    let high = energies.iter().filter(|e| **e >= 0.5 * peak).count();
    let over = energies.iter().filter(|e| **e >= quiet).count();
    if holds > HELD_WITHIN || (over >= SHAPED && high as f64 > PLATEAU * over as f64) {
        return None;
    }
    Some(Decay { peak_at: (peak_at as f64 + 0.5) / n as f64, fall_db: 10.0 * (peak / last).log10(), holds })
}

/// The energy of each block about the offset that most blocks have; `None` for too few samples.
fn block_energies(samples: &[f64]) -> Option<Vec<f64>> {
    let n_blocks = BLOCKS.min(samples.len() / FEWEST_SAMPLES);
    if n_blocks < FEWEST_BLOCKS {
        return None;
    }
    let edge = |b: usize| b * samples.len() / n_blocks;
    let blocks = || (0..n_blocks).filter_map(|b| samples.get(edge(b)..edge(b + 1)));
    let mut means: Vec<f64> = blocks().map(|block| block.iter().sum::<f64>() / block.len() as f64).collect();
    let offset = *means.select_nth_unstable_by(n_blocks / 2, f64::total_cmp).1;
    let energy = |block: &[f64]| block.iter().map(|x| (x - offset) * (x - offset)).sum::<f64>() / block.len() as f64;
    Some(blocks().map(energy).collect())
}

/// The fewest neighbouring blocks that hold `energy`.
fn shortest_holding(energies: &[f64], energy: f64) -> usize {
    let (mut best, mut from, mut sum) = (energies.len(), 0, 0.0);
    for (to, e) in energies.iter().enumerate() {
        sum += e;
        while let Some(first) = energies.get(from).filter(|first| sum - **first >= energy) {
            sum -= first;
            from += 1;
        }
        if sum >= energy {
            best = best.min(to + 1 - from);
        }
    }
    best
}

#[cfg(test)]
mod tests;
