//! Series: tones that are whole multiples of one.

use super::chance::poisson_tail;
use super::field::{COVER, Field};
use super::{ALLOWED, Found, TELLING};

/// The most series told.
const MOST_SERIES: usize = 12;

/// A fundamental nearer to 0 Hz than this has its multiples too close together to tell them, lines.
const LEAST_LINES: f64 = 4.0;

/// A member starts a series of its own where it is this much stronger than the orders beside it, and so is each of
/// its multiples (an amplitude ratio).
const STANDS_OUT: f64 = 2.0;

/// A fundamental and those that are multiples of it.
#[derive(Debug, Clone)]
pub(super) struct Series {
    /// The place of the fundamental, where it is a tone.
    pub(super) of: Option<usize>,
    /// The fundamental's frequency as it was found or pinned.
    pub(super) of_hz: f64,
    /// The fundamental by all its members, and its standard uncertainty.
    pub(super) hz: f64,
    pub(super) u_hz: f64,
    /// Order and place, the fundamental's own included.
    pub(super) members: Vec<(u32, usize)>,
    /// Whether the user has pinned it.
    pub(super) pinned: bool,
    /// The chance that as many tones which stand anywhere fit, were each fit on its own.
    likeness: f64,
    /// The chance that the fits which tell something of the fundamental come about.
    chance: f64,
}

impl Series {
    /// The multiples of `hz` among the places that `may`, from the lowest up: each refines the fundamental, so that the
    /// next may stand further up.
    fn grown(field: &Field, of: Option<usize>, hz: f64, u_hz: f64, may: impl Fn(usize) -> bool) -> Self {
        let mut series =
            Self { of, of_hz: hz, hz, u_hz, members: Vec::new(), pinned: false, likeness: 1.0, chance: 1.0 };
        series.members.extend(of.map(|place| (1, place)));
        let mut weight = u_hz.powi(-2);
        let mut expected = 0.0;
        let start = field.places.partition_point(|p| p.hz < 1.5 * hz);
        for (i, place) in field.places.iter().enumerate().skip(start) {
            if !may(i) {
                continue;
            }
            let order = (place.hz / series.hz).round();
            let tolerance = COVER * place.u_hz.hypot(order * series.u_hz);
            let by_chance = 2.0 * tolerance / series.hz;
            if by_chance > TELLING {
                continue;
            }
            expected += by_chance;
            let off = place.hz - order * series.hz;
            if off.abs() > tolerance {
                continue;
            }
            let order = order as u32;
            match series.members.last_mut().filter(|m| m.0 == order) {
                // Of two at one order the stronger is the member.
                Some(last) if field.places.get(last.1).is_some_and(|p| p.amplitude < place.amplitude) => last.1 = i,
                Some(_) => {}
                None => {
                    let k = f64::from(order);
                    let adds = (k / place.u_hz).powi(2);
                    series.hz += off / k * adds / (weight + adds);
                    weight += adds;
                    series.u_hz = weight.powf(-0.5);
                    series.members.push((order, i));
                }
            }
        }
        series.likeness = poisson_tail(expected, series.members.iter().filter(|m| m.0 > 1).count());
        series.chance = poisson_tail(expected, series.n_telling());
        series
    }

    /// How many fits say something each: of orders with a common divisor all but the first follow from one another.
    fn n_telling(&self) -> usize {
        let orders: Vec<u32> = self.members.iter().map(|m| m.0).filter(|k| *k > 1).collect();
        let with = |d: u32| orders.iter().filter(|k| k.is_multiple_of(d)).count();
        let following = orders.iter().map(|&d| smallest_divisor(d)).map(|d| with(d).saturating_sub(1)).max();
        orders.len() - following.unwrap_or(0)
    }

    /// Members that start a series of their own, and their order: they and their multiples stand out of the orders
    /// beside them, as a vane pass does of a shaft's.
    pub(super) fn inner_fundamentals(&self, field: &Field) -> Vec<(usize, u32)> {
        let amplitude = |order: u32| {
            let member = self.members.iter().find(|m| m.0 == order);
            member.and_then(|m| field.places.get(m.1)).map_or(0.0, |p| p.amplitude)
        };
        let stands_out = |k: u32| amplitude(k) > STANDS_OUT * amplitude(k - 1).max(amplitude(k + 1));
        let starts = |k: u32| {
            let multiples: Vec<u32> = self.members.iter().map(|m| m.0).filter(|m| m.is_multiple_of(k)).collect();
            k > 1 && multiples.contains(&(2 * k)) && multiples.into_iter().all(stands_out)
        };
        let candidates = self.members.iter().filter(|m| starts(m.0));
        let mut inner: Vec<(usize, u32)> = Vec::new();
        for &(order, place) in candidates {
            // A multiple of one that has started does not start again.
            if !inner.iter().any(|i| order.is_multiple_of(i.1)) {
                inner.push((place, order));
            }
        }
        inner
    }

    /// Orders that sidebands may stand about: inner fundamentals and their multiples.
    pub(super) fn carriers(&self, field: &Field) -> Vec<u32> {
        let inner = self.inner_fundamentals(field);
        let of_inner = |k: u32| inner.iter().any(|i| k.is_multiple_of(i.1));
        self.members.iter().map(|m| m.0).filter(|k| of_inner(*k)).collect()
    }
}

fn smallest_divisor(k: u32) -> u32 {
    (2..=k.isqrt()).find(|d| k.is_multiple_of(*d)).unwrap_or(k)
}

impl Found {
    /// The series among the tones, the most certain first; the pinned one before all.
    pub(super) fn harmonics(&self, pinned_hz: Option<f64>) -> Vec<Series> {
        let field = &self.field;
        let mut taken = vec![false; field.places.len()];
        let mut told: Vec<Series> = Vec::new();
        let take = |series: Series, taken: &mut Vec<bool>, told: &mut Vec<Series>| {
            for &(_, place) in &series.members {
                if let Some(place) = taken.get_mut(place) {
                    *place = true;
                }
            }
            told.push(series);
        };
        if let Some(hz) = pinned_hz {
            let of = field.fitting(hz, 0.0, |_| true);
            let u_hz = of.and_then(|i| field.places.get(i)).map_or(field.unknown_u_hz(), |p| p.u_hz);
            let series = Series { pinned: true, ..Series::grown(field, of, hz, u_hz, |_| true) };
            if series.chance <= ALLOWED {
                take(series, &mut taken, &mut told);
            }
        }
        while told.len() < MOST_SERIES {
            let free = |i: usize| taken.get(i).is_some_and(|t| !t);
            let candidates =
                field.places.iter().enumerate().filter(|(i, p)| free(*i) && p.hz >= LEAST_LINES * field.line_hz);
            let grown = candidates.map(|(i, p)| Series::grown(field, Some(i), p.hz, p.u_hz, free));
            let n_tried = field.places.len() as f64;
            let sure = grown.filter(|s| s.members.len() > 1 && s.chance * n_tried <= ALLOWED);
            let Some(best) = sure.min_by(|a, b| a.likeness.total_cmp(&b.likeness)) else { break };
            take(best, &mut taken, &mut told);
        }
        told
    }
}
