//! What a recorder or a machine makes of strong tones: products of two, images, folds.

use super::chance::poisson_tail;
use super::field::{COVER, Place};
use super::{ALLOWED, Found, N_STRONG, PRODUCT_PART, Tag};

/// Harmonics up to this order are looked for where they fold.
const MOST_ORDER: u32 = 10;

/// Images stand about whole parts of the rate: its half, third and quarter.
const PARTS: [f64; 3] = [2.0, 3.0, 4.0];

/// A place where something would stand if the sources made it.
#[derive(Debug, Clone, Copy)]
struct Prediction {
    hz: f64,
    u_hz: f64,
    /// The weakest of what makes it.
    source: f64,
}

/// A frequency as it is seen at `rate_hz`: folded into 0 to half the rate.
pub(super) fn folded(hz: f64, rate_hz: f64) -> f64 {
    let within = hz.rem_euclid(rate_hz);
    within.min(rate_hz - within)
}

impl Found {
    /// The tones that fit predictions, and the chance that as many would anyhow.
    fn met(&self, predictions: &[Prediction]) -> (Vec<usize>, f64) {
        let (mut met, mut expected) = (Vec::new(), 0.0);
        for p in predictions {
            let may = |i: usize| {
                let weak = self.field.places.get(i).is_some_and(|t| t.amplitude <= PRODUCT_PART * p.source);
                weak && self.is_free(i) && !met.contains(&i)
            };
            let place = self.field.fitting(p.hz, p.u_hz, may);
            expected += match place {
                Some(place) => self.by_chance(p.hz, p.u_hz, place),
                None => self.field.expected(p.hz, 2.0 * COVER * p.u_hz.hypot(self.field.least_u_hz()), None),
            };
            met.extend(place);
        }
        let chance = poisson_tail(expected, met.len());
        (met, chance)
    }

    fn strong(&self) -> Vec<Place> {
        let order = self.field.strongest(N_STRONG);
        order.into_iter().filter_map(|i| self.field.places.get(i).copied()).collect()
    }

    fn in_band(&self, hz: f64) -> bool {
        hz > self.field.line_hz && hz < self.field.rate_hz / 2.0 - self.field.line_hz
    }

    /// Tags images. What makes one of a tone makes one of every stronger tone too.
    pub(super) fn images(&mut self) {
        let strong = self.strong();
        let n_tried = (PARTS.len() * strong.len()) as f64;
        for part in PARTS {
            let about = self.field.rate_hz / part;
            let mut predictions = Vec::new();
            let mut told = Vec::new();
            for tone in &strong {
                let around = if part == 2.0 { vec![about - tone.hz] } else { vec![about - tone.hz, about + tone.hz] };
                let seen = around.into_iter().map(f64::abs).filter(|hz| self.in_band(*hz));
                predictions.extend(seen.map(|hz| Prediction { hz, u_hz: tone.u_hz, source: tone.amplitude }));
                let (met, chance) = self.met(&predictions);
                if !met.is_empty() && chance * n_tried <= ALLOWED {
                    told = met;
                }
            }
            for place in told {
                self.tag(place, Tag::Image);
            }
        }
    }

    /// Tags harmonics beyond half the rate that fold back.
    pub(super) fn folds(&mut self) {
        let strong = self.strong();
        let rate_hz = self.field.rate_hz;
        for tone in &strong {
            let beyond = (2..=MOST_ORDER).map(f64::from).filter(|k| k * tone.hz > rate_hz / 2.0);
            let predictions: Vec<_> = beyond
                .map(|k| Prediction { hz: folded(k * tone.hz, rate_hz), u_hz: k * tone.u_hz, source: tone.amplitude })
                .filter(|p| self.in_band(p.hz))
                .collect();
            let (met, chance) = self.met(&predictions);
            if chance * strong.len() as f64 <= ALLOWED {
                for place in met {
                    self.tag(place, Tag::Fold);
                }
            }
        }
    }

    /// Tags sums and differences of two strong tones, and of one of them twice and the other.
    pub(super) fn intermodulation(&mut self) {
        let strong = self.strong();
        let n_pairs = (strong.len() * strong.len().saturating_sub(1)) as f64 / 2.0;
        let mut told = Vec::new();
        for (i, a) in strong.iter().enumerate() {
            for b in strong.iter().skip(i + 1) {
                let source = a.amplitude.min(b.amplitude);
                let of = |x: f64, y: f64| {
                    let (hz, u_hz) = ((x * a.hz + y * b.hz).abs(), (x * a.u_hz).hypot(y * b.u_hz));
                    Prediction { hz, u_hz, source }
                };
                let products = [of(1.0, 1.0), of(1.0, -1.0), of(2.0, -1.0), of(-1.0, 2.0)];
                let predictions: Vec<_> = products.into_iter().filter(|p| self.in_band(p.hz)).collect();
                let (met, chance) = self.met(&predictions);
                if chance * n_pairs <= ALLOWED {
                    told.extend(met);
                }
            }
        }
        for place in told {
            self.tag(place, Tag::Intermodulation);
        }
    }
}
