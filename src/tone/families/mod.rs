//! What a tone belongs to: the mains, a series of harmonics, sidebands, products of two tones, images and folds.
//!
//! Everything here is judged from frequencies, their uncertainties and amplitudes alone. Two frequencies fit where they
//! agree within three combined standard uncertainties, each at least a fiftieth of a line. A family is told only where
//! so many fits would come about by chance in less than [`ALLOWED`] of captures whose tones stand anywhere: each fit
//! has the chance that a tone falls there anyhow, the fits of one family are counted as a Poisson number, and the
//! result is multiplied by how many families were tried.

mod chance;
mod field;
mod harmonic;
mod mains;
mod products;
mod sideband;
#[cfg(test)]
mod tests;

use field::Field;
use harmonic::Series;

/// Families of one kind that chance may make up, in captures of tones that stand anywhere.
const ALLOWED: f64 = 3e-3;

/// A fit likelier than this by chance says nothing of a single tone.
const TELLING: f64 = 0.02;

/// Families of products are looked for among so many of the strongest tones.
const N_STRONG: usize = 12;

/// A product, an image or a fold is at most this part of the amplitude of what makes it.
const PRODUCT_PART: f64 = 0.5;

/// A tone, as far as families go.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sighting {
    /// Frequency.
    pub frequency_hz: f64,
    /// Its expanded uncertainty, k = 2; `None` where it is not known.
    pub u95_hz: Option<f64>,
    /// Amplitude, in any unit.
    pub amplitude: f64,
}

/// Under what the tones were read.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Setting {
    /// Samples a second.
    pub sample_rate_hz: f64,
    /// One over the segment's duration.
    pub line_spacing_hz: f64,
    /// The fundamental that the user has pinned.
    pub fundamental_hz: Option<f64>,
}

/// What a tone is found to be.
#[derive(Debug, Clone, Copy, PartialEq)]
pub enum Tag {
    /// The mains or a multiple of it.
    Mains,
    /// A whole multiple of a tone, or of the pinned fundamental; that tone itself has order 1.
    Harmonic {
        /// Which multiple.
        order: u32,
        /// Of what.
        of_hz: f64,
    },
    /// Evenly spaced with others about a stronger tone.
    Sideband,
    /// A stronger tone mirrored about a quarter of the rate, as alternating converters do, or shifted by a third or a
    /// quarter of the rate.
    Image,
    /// f₁ ± f₂ or 2 f₁ - f₂ of two stronger tones.
    Intermodulation,
    /// A harmonic beyond half the rate of a stronger tone, folded back.
    Fold,
}

impl Tag {
    /// The tag as it is written: `harmonic 3 of 24.96`, with the decimals that lines `line_spacing_hz` apart deserve.
    pub fn written(&self, line_spacing_hz: f64) -> String {
        match self {
            Self::Mains => "mains".to_owned(),
            Self::Harmonic { order, of_hz } => {
                let decimals = (-line_spacing_hz.log10()).ceil().clamp(0.0, 9.0) as usize;
                format!("harmonic {order} of {of_hz:.decimals$}")
            }
            Self::Sideband => "sideband".to_owned(),
            Self::Image => "image".to_owned(),
            Self::Intermodulation => "intermodulation".to_owned(),
            Self::Fold => "fold".to_owned(),
        }
    }
}

/// The fundamental that orders are counted by: the pinned one, or the tone that stands within half a line of it, whose
/// frequency is known better.
pub fn fundamental_hz(tones: &[Sighting], setting: &Setting) -> Option<f64> {
    let pinned = setting.fundamental_hz.filter(|f| f.is_finite() && *f > 0.0)?;
    let distance = |t: &Sighting| (t.frequency_hz - pinned).abs();
    let near = tones.iter().filter(|t| distance(t) <= 0.5 * setting.line_spacing_hz);
    Some(near.min_by(|a, b| distance(a).total_cmp(&distance(b))).map_or(pinned, |t| t.frequency_hz))
}

/// What each of `tones` belongs to; one list for each, in their order.
///
/// Tones of no finite positive frequency or amplitude belong to nothing. Where a tone is a fundamental's multiple and
/// in a family of its own too, it carries both. The work grows as the square of the number of tones.
pub fn tags(tones: &[Sighting], setting: &Setting) -> Vec<Vec<Tag>> {
    let mut tags = vec![Vec::new(); tones.len()];
    let usable = setting.sample_rate_hz > 0.0 && setting.line_spacing_hz > 0.0;
    if !(usable && setting.sample_rate_hz.is_finite() && setting.line_spacing_hz.is_finite()) {
        return tags;
    }
    let field = Field::of(tones, setting);
    let mut found = Found { tags: vec![Vec::new(); field.places.len()], field };
    let mut series = found.harmonics(fundamental_hz(tones, setting));
    found.mains(&mut series);
    found.series(&series);
    found.sidebands(&series);
    found.images();
    found.folds();
    found.intermodulation();
    for (place, found) in found.field.places.iter().zip(found.tags) {
        if let Some(list) = tags.get_mut(place.index) {
            *list = found;
        }
    }
    tags
}

/// The tones and what was found of them so far.
struct Found {
    field: Field,
    tags: Vec<Vec<Tag>>,
}

impl Found {
    /// Puts a tag on a place, once.
    fn tag(&mut self, place: usize, tag: Tag) {
        if let Some(list) = self.tags.get_mut(place)
            && !list.contains(&tag)
        {
            list.push(tag);
        }
    }

    /// Whether nothing explains the tone at a place yet.
    fn is_free(&self, place: usize) -> bool {
        self.tags.get(place).is_some_and(Vec::is_empty)
    }

    /// Writes down the series, and the series within them.
    fn series(&mut self, series: &[Series]) {
        for one in series {
            for &(order, place) in &one.members {
                self.tag(place, Tag::Harmonic { order, of_hz: one.of_hz });
            }
        }
        for one in series {
            for (place, order) in one.inner_fundamentals(&self.field) {
                let Some(of_hz) = self.field.places.get(place).map(|p| p.hz) else { continue };
                for &(k, place) in one.members.iter().filter(|m| m.0.is_multiple_of(order)) {
                    self.tag(place, Tag::Harmonic { order: k / order, of_hz });
                }
            }
        }
    }
}
