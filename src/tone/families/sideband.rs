//! Sidebands: tones evenly spaced about a stronger one.

use super::harmonic::Series;
use super::{ALLOWED, Found, Tag};

/// Sidebands looked for on either side.
const MOST_SIDE: u32 = 8;

/// What stands further off than this part of its carrier's frequency is no sideband of it.
const MOST_SPACING: f64 = 1.0 / 3.0;

/// The first on either side are so alike (an amplitude ratio); else one is a tone of its own, and what lies beyond it a
/// product of the two.
const ALIKE: f64 = 10.0;

/// Sidebands that fit one carrier and one spacing.
#[derive(Debug, Default)]
struct Bands {
    places: Vec<usize>,
    /// The chance of the fits, all together, leaving out `given` of them.
    chance: f64,
    both_sides: bool,
}

impl Found {
    /// Tags sidebands: within a series about what stands out of it, then about any tone.
    pub(super) fn sidebands(&mut self, series: &[Series]) {
        for one in series {
            self.in_series(one);
        }
        let free: Vec<bool> = (0..self.field.places.len()).map(|i| self.is_free(i)).collect();
        let known: Vec<(f64, f64)> = series.iter().map(|s| (s.hz, s.u_hz)).collect();
        let carriers = self.field.strongest(usize::MAX);
        let n_pairs = self.n_pairs(&free);
        for carrier in carriers {
            let n_known = (2 * known.len() * self.field.places.len()) as f64;
            let by_known = known.iter().map(|&(hz, u_hz)| self.bands(carrier, hz, u_hz, None, &free));
            let told = by_known.filter(|b| !b.places.is_empty() && b.chance * n_known <= ALLOWED);
            let of_pairs = self.by_pairs(carrier, &free);
            let told = told.chain(of_pairs.filter(|b| b.both_sides && b.chance * n_pairs <= ALLOWED));
            let places: Vec<usize> = told.flat_map(|b| b.places).collect();
            for place in places {
                self.tag(place, Tag::Sideband);
            }
        }
    }

    /// Orders beside what stands out of a series, falling away from it, and nearer to it than to the fundamental.
    fn in_series(&mut self, series: &Series) {
        let at = |order: u32| series.members.iter().find(|m| m.0 == order).map(|m| m.1);
        let amplitude = |place: usize| self.field.places.get(place).map_or(0.0, |p| p.amplitude);
        let carriers = series.carriers(&self.field);
        let mut found = Vec::new();
        for &carrier in &carriers {
            let (Some(middle), Some(low), Some(high)) = (at(carrier), at(carrier - 1), at(carrier + 1)) else {
                continue;
            };
            if amplitude(low).max(amplitude(high)) >= amplitude(middle) {
                continue;
            }
            for down in [true, false] {
                let mut before = amplitude(middle);
                for m in 1..=MOST_SIDE {
                    let order = if down { carrier.checked_sub(m) } else { carrier.checked_add(m) };
                    let Some((order, place)) = order.and_then(|k| Some((k, at(k)?))) else { break };
                    if carriers.contains(&order) || amplitude(place) >= before || order <= m + 1 {
                        break;
                    }
                    before = amplitude(place);
                    found.push(place);
                }
            }
        }
        for place in found {
            self.tag(place, Tag::Sideband);
        }
    }

    /// How many pairs of a tone and a weaker one that nothing explains there are: so many spacings are tried.
    fn n_pairs(&self, free: &[bool]) -> f64 {
        let n = self.field.places.len();
        let n_free = free.iter().filter(|f| **f).count();
        (n * n_free) as f64 / 2.0
    }

    /// What stands about a carrier, spaced as each weaker tone is that nothing explains.
    fn by_pairs(&self, carrier: usize, free: &[bool]) -> impl Iterator<Item = Bands> {
        let middle = self.field.places.get(carrier).copied();
        (0..self.field.places.len()).filter(|&i| free.get(i).is_some_and(|f| *f)).filter_map(move |i| {
            let (middle, side) = (middle?, self.field.places.get(i)?);
            let spacing = middle.hz - side.hz;
            // Each pair is found from its lower tone.
            let usable = spacing > 2.0 * self.field.line_hz && side.amplitude < middle.amplitude;
            usable.then(|| self.bands(carrier, spacing, middle.u_hz.hypot(side.u_hz), Some(i), free))
        })
    }

    /// The tones at a carrier plus and minus whole multiples of a spacing, without a gap.
    fn bands(&self, carrier: usize, spacing: f64, u_hz: f64, given: Option<usize>, free: &[bool]) -> Bands {
        let mut bands = Bands { chance: 1.0, ..Bands::default() };
        let Some(middle) = self.field.places.get(carrier) else { return bands };
        let may = |i: usize| {
            let weaker = self.field.places.get(i).is_some_and(|p| p.amplitude < middle.amplitude);
            weaker && free.get(i).is_some_and(|f| *f)
        };
        if spacing > MOST_SPACING * middle.hz {
            return bands;
        }
        let mut sides = [0.0; 2];
        for (sign, side) in [-1.0, 1.0].into_iter().zip(&mut sides) {
            for m in 1..=MOST_SIDE {
                let step = f64::from(m);
                let (hz, u) = (middle.hz + sign * step * spacing, middle.u_hz.hypot(step * u_hz));
                if hz <= 0.0 || hz >= self.field.rate_hz / 2.0 {
                    break;
                }
                let Some(place) = self.field.fitting(hz, u, may) else { break };
                if m == 1 {
                    *side = self.field.places.get(place).map_or(0.0, |p| p.amplitude);
                }
                bands.places.push(place);
                if given != Some(place) {
                    bands.chance *= self.by_chance(hz, u, place).min(1.0);
                }
            }
        }
        let [low, high] = sides;
        bands.both_sides = low > 0.0 && high > 0.0 && low <= ALIKE * high && high <= ALIKE * low;
        bands
    }

    /// How many tones fit a prediction by chance, the one that does left out.
    pub(super) fn by_chance(&self, hz: f64, u_hz: f64, place: usize) -> f64 {
        let own = self.field.places.get(place).map_or(0.0, |p| p.u_hz);
        self.field.expected(hz, 2.0 * super::field::COVER * own.hypot(u_hz), Some(place))
    }
}
