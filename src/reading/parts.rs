//! A segment parted by the fit: what its tones make of each pane, and what they leave.
//!
//! Neither is needed for a figure, so neither is made before somebody wants to see it.

use std::sync::Arc;

use super::Analysis;
use crate::signal::{Cancelled, Watch};
use crate::spectrum::{Spectra, Stretch, joined};
use crate::tone::Search;

/// What the fitted tones make of the panes, and where that is no leakage.
#[derive(Debug, Clone)]
pub struct Skirts {
    /// The fitted tones and background under the segment's windows. The transform is linear: this is the segment's less
    /// the residue's.
    pub spectra: Arc<Spectra>,
    /// For each pane the main lobes of the tones and of what was taken out, bins, rising and apart.
    pub lobes: Vec<Vec<Stretch>>,
}

/// The skirts of an analysis, with values between lines: some transforms' time.
///
/// # Errors
/// [`Cancelled`] where the watch says so.
pub fn skirts_of(analysis: &Analysis, watch: &Watch) -> Result<Skirts, Cancelled> {
    let segment = &analysis.segment.spectra;
    let samples: Arc<[f64]> = segment.samples().iter().zip(&*analysis.found.residue).map(|(x, r)| x - r).collect();
    let spectra = prepared(segment, samples, watch)?;
    let lobes = (0..segment.windows().len()).map(|pane| lobes(segment, &analysis.found, pane)).collect();
    Ok(Skirts { spectra, lobes })
}

/// The residue under the segment's windows, with values between lines: some transforms' time.
///
/// # Errors
/// [`Cancelled`] where the watch says so.
pub fn residue_of(analysis: &Analysis, watch: &Watch) -> Result<Arc<Spectra>, Cancelled> {
    prepared(&analysis.segment.spectra, Arc::clone(&analysis.found.residue), watch)
}

fn prepared(like: &Spectra, samples: Arc<[f64]>, watch: &Watch) -> Result<Arc<Spectra>, Cancelled> {
    let spectra = Spectra::new(samples, like.sample_rate_hz(), like.windows(), watch)?;
    spectra.prepare_curves();
    spectra.prepare_between_lines(watch)?;
    Ok(Arc::new(spectra))
}

/// The main lobes of the tones found, as wide as a tone that moves makes them, and that of what was taken out, in bins.
pub(super) fn lobes(spectra: &Spectra, found: &Search, pane: usize) -> Vec<Stretch> {
    let half = spectra.windows().get(pane).map_or(0.0, |w| w.main_lobe_half_width_bins(spectra.n_samples()));
    let lobe = |i: usize, nu: f64| {
        let course = found.motions.get(i).and_then(Option::as_ref).map_or(&[][..], |m| &m.course);
        let (least, most) = course.iter().fold((nu, nu), |(a, b), p| (a.min(p.nu), b.max(p.nu)));
        (least - half, most + half)
    };
    let mut lobes: Vec<Stretch> = found.tones.iter().enumerate().map(|(i, t)| lobe(i, t.nu)).collect();
    // What is left of the mean or line stands about 0 Hz.
    lobes.push((-half, half));
    joined(lobes)
}
