//! Peaks of a pane that are leakage: what the window makes of tones, and no tones themselves.

use realfft::num_complex::Complex64;

use super::output::SkirtPeak;
use super::{Request, parts, rows};
use crate::signal::{Cancelled, Watch};
use crate::spectrum::{Spectra, Stretch, Transform, transform};
use crate::tone::{Noise, Search};

/// The skirt peaks of all panes.
#[derive(Debug, Default)]
pub(super) struct Found {
    /// The strongest of each pane, by pane, then strongest first.
    pub(super) peaks: Vec<SkirtPeak>,
    /// How many each pane has among the peaks looked at.
    pub(super) n: Vec<Option<usize>>,
}

/// Skirt peaks listed of each pane.
const LISTED: usize = 50;

/// Lines of a pane about which peaks are looked for: those of the greatest power outside main lobes.
const LINES: usize = 300;

/// Beside the strongest tones so many side lobes are looked at whatever the lines show: a tone on a line hides them.
const LOBES_BESIDE: usize = 12;

/// How many tones count as the strongest.
const STRONGEST: usize = 4;

/// A line may stand so far under the top of the lobe it lies in, as a part of its power, and the lobe still be found.
const LINE_OF_TOP: f64 = 0.1;

/// Places looked at from line to line: a side lobe is about a bin wide.
const A_LINE: usize = 4;

/// What the tones leave of a peak, as a part of its power, that is no matter whatever the floor: 30 dB under the peak
/// nothing of its own makes it one.
const NO_MATTER: f64 = 1e-3;

/// A peak is the tones' when it stands at least so many times over what they leave, power.
const MADE_BY_TONES: f64 = 4.0;

/// The floor hardly changes over so many lines.
const SAME_FLOOR: usize = 32;

/// Further than so many bins off a tone's image makes no part of a skirt worth naming.
const IMAGE_REACH: f64 = 64.0;

/// Tones are named as the origin until what is left is less than this part of all.
const LEFT_UNNAMED: f64 = 0.25;

/// At most so many tones are named.
const NAMED: usize = 4;

/// Finds the skirt peaks: local maxima of |Y(ν)| outside every main lobe that stand over the pane's floor as a tone would
/// have to, and that the fitted tones account for: what these leave there does not count as a peak itself.
///
/// With P the pane's mean noise power a line, `z` the threshold of the search and R the residue's lines to either side
/// under the pane's window, a local maximum is one where |Y|² > z·P, |R|² < max(z·P, 1e-3·|Y|²) and |Y|² > 4·|R|².
/// The residue knows of tones that move too. `None` for every pane where the tones were not fitted or there is no floor.
pub(super) fn find(
    spectra: &Spectra,
    request: &Request,
    found: &Search,
    z: f64,
    watch: &Watch,
) -> Result<Found, Cancelled> {
    let n_panes = spectra.windows().len();
    let Some(noise) = found.noise.as_ref().filter(|_| found.settled) else {
        return Ok(Found { peaks: Vec::new(), n: vec![None; n_panes] });
    };
    if found.tones.is_empty() {
        return Ok(Found { peaks: Vec::new(), n: vec![Some(0); n_panes] });
    }
    let residue = transform(&found.residue);
    let mut all = Found::default();
    for pane in 0..n_panes {
        watch.check()?;
        let look = Look { spectra, found, noise, residue: &residue, z, pane };
        let tops = look.skirt_tops();
        all.n.push(Some(tops.len()));
        all.peaks.extend(tops.iter().take(LISTED).map(|top| look.peak(request, *top)));
    }
    Ok(all)
}

/// One pane being looked over.
struct Look<'a> {
    spectra: &'a Spectra,
    found: &'a Search,
    noise: &'a Noise,
    residue: &'a Transform,
    z: f64,
    pane: usize,
}

/// A place and |Y|² there.
type Top = (f64, f64);

impl Look<'_> {
    /// The skirt peaks, strongest first.
    fn skirt_tops(&self) -> Vec<Top> {
        let lobes = parts::lobes(self.spectra, self.found, self.pane);
        let windowed = self.own_residue();
        let mut tops = self.tops(&self.lines(&lobes), &lobes);
        tops.retain(|top| self.is_skirt(*top, windowed.as_ref()));
        tops.sort_by(|a, b| b.1.total_cmp(&a.1));
        tops
    }

    /// The lines from each of which on to the next one peaks are looked for, rising.
    fn lines(&self, lobes: &[Stretch]) -> Vec<usize> {
        let power = self.spectra.power(self.pane);
        let s2 = self.spectra.sums(self.pane).s2;
        let mut lines: Vec<usize> = Vec::new();
        for gap in gaps(lobes, power.len()) {
            for from in gap.clone().step_by(SAME_FLOOR) {
                let block = from..(from + SAME_FLOOR).min(gap.end);
                let middle = 0.5 * (block.start + block.end) as f64;
                let least = LINE_OF_TOP * self.z * self.noise.line_power(middle, s2);
                lines.extend(block.filter(|k| power.get(*k).is_some_and(|p| *p > least)));
            }
        }
        let stronger = |a: &usize, b: &usize| power[*b].total_cmp(&power[*a]);
        if lines.len() > LINES {
            lines.select_nth_unstable_by(LINES, stronger);
            lines.truncate(LINES);
        }
        // The top of a lobe may lie to either side of its line.
        let below: Vec<usize> = lines.iter().map(|k| k.saturating_sub(1)).collect();
        lines.extend(below);
        lines.extend(self.beside_the_strongest(lobes, power.len()));
        lines.sort_unstable();
        lines.dedup();
        lines
    }

    fn beside_the_strongest(&self, lobes: &[Stretch], n_lines: usize) -> Vec<usize> {
        let mut tones: Vec<_> = self.found.tones.iter().collect();
        tones.sort_by(|a, b| b.amplitude.norm_sqr().total_cmp(&a.amplitude.norm_sqr()));
        let mut lines = Vec::new();
        for tone in tones.into_iter().take(STRONGEST) {
            let Some(lobe) = lobes.iter().find(|l| (l.0..=l.1).contains(&tone.nu)) else { continue };
            let (low, high) = (lobe.0.max(0.0).floor() as usize, lobe.1.max(0.0).floor() as usize);
            lines.extend(low.saturating_sub(LOBES_BESIDE)..=low);
            lines.extend(high..(high + LOBES_BESIDE).min(n_lines.saturating_sub(1)));
        }
        lines
    }

    /// Local maxima of |Y(ν)| between the lines given, outside the main lobes and over the threshold.
    fn tops(&self, lines: &[usize], lobes: &[Stretch]) -> Vec<Top> {
        let s2 = self.spectra.sums(self.pane).s2;
        let half_rate = self.spectra.n_samples() as f64 / 2.0;
        let mut tops = Vec::new();
        for run in lines.chunk_by(|a, b| a + 1 == *b) {
            let (Some(first), Some(last)) = (run.first(), run.last()) else { continue };
            // A step more at either end, so that a top on the run's edge is seen as one.
            let places = -1..=((last - first + 1) * A_LINE + 1) as i64;
            let nu = |step: i64| *first as f64 + step as f64 / A_LINE as f64;
            let power: Vec<f64> = places.map(|step| self.power_at(nu(step))).collect();
            for (step, around) in (0_i64..).zip(power.windows(3)) {
                let [before, here, after] = *around else { continue };
                if !(here > before && here >= after) {
                    continue;
                }
                let place = nu(step) + vertex(before, here, after) / A_LINE as f64;
                if !(place > 0.0 && place < half_rate) || lobes.iter().any(|l| (l.0..=l.1).contains(&place)) {
                    continue;
                }
                let top = self.power_at(place).max(here);
                if top > self.z * self.noise.line_power(place, s2) {
                    tops.push((place, top));
                }
            }
        }
        tops
    }

    fn power_at(&self, nu: f64) -> f64 {
        self.spectra.at(self.pane, nu).norm_sqr()
    }

    /// The residue under this pane's window, where that is no cosine sum.
    fn own_residue(&self) -> Option<Transform> {
        let window = self.spectra.windows().get(self.pane).filter(|w| w.cosine_terms().is_none())?;
        let samples = window.samples(self.spectra.n_samples());
        Some(transform(&self.found.residue.iter().zip(samples).map(|(x, w)| x * w).collect::<Vec<_>>()))
    }

    fn is_skirt(&self, (nu, power): Top, own_residue: Option<&Transform>) -> bool {
        let terms = self.spectra.windows().get(self.pane).and_then(|w| w.cosine_terms()).unwrap_or(&[]);
        let line = |k: f64| match own_residue {
            Some(own) => own.at(k as i64).norm_sqr(),
            None => windowed_line(self.residue, terms, k as i64).norm_sqr(),
        };
        let left = line(nu.floor()).max(line(nu.ceil()));
        let noise = self.noise.line_power(nu, self.spectra.sums(self.pane).s2);
        left < (self.z * noise).max(NO_MATTER * power) && power > MADE_BY_TONES * left
    }

    fn peak(&self, request: &Request, (nu, power): Top) -> SkirtPeak {
        let amplitude = 2.0 * power.sqrt() / self.spectra.sums(self.pane).s1;
        let spacing_hz = self.spectra.line_spacing_hz();
        SkirtPeak {
            pane: self.pane,
            frequency_hz: nu * spacing_hz,
            level_db: rows::level_db(&request.scale, amplitude * request.scale.units_per_full_scale()),
            from_hz: self.origins(nu).iter().map(|from| from * spacing_hz).collect(),
        }
    }

    /// The tones that make most of the skirt at `nu`, greatest part first, bins.
    fn origins(&self, nu: f64) -> Vec<f64> {
        let kernel = |mu: f64| self.spectra.kernel_at(self.pane, mu);
        let part = |tone: &crate::tone::FoundTone| {
            let direct = tone.amplitude * kernel(nu - tone.nu);
            let image = nu + tone.nu;
            let image = if image < IMAGE_REACH { tone.amplitude.conj() * kernel(image) } else { Complex64::ZERO };
            (direct + image).norm()
        };
        let mut parts: Vec<(f64, f64)> = self.found.tones.iter().map(|t| (t.nu, part(t))).collect();
        parts.sort_by(|a, b| b.1.total_cmp(&a.1));
        let all: f64 = parts.iter().map(|p| p.1).sum();
        let mut left = all;
        let mut origins = Vec::new();
        for (from, part) in parts.into_iter().take(NAMED) {
            if !origins.is_empty() && left < LEFT_UNNAMED * all {
                break;
            }
            origins.push(from);
            left -= part;
        }
        origins
    }
}

/// Line k under a cosine sum, from the lines without window: Y\[k\] = a_0 X\[k\] + Σ_m (-1)^m (a_m/2)(X\[k-m\] + X\[k+m\]).
fn windowed_line(lines: &Transform, terms: &[f64], k: i64) -> Complex64 {
    let part = |(m, a): (i64, &f64)| match m {
        0 => lines.at(k) * *a,
        _ => (lines.at(k - m) + lines.at(k + m)) * (if m % 2 == 0 { 0.5 } else { -0.5 } * a),
    };
    (0_i64..).zip(terms).map(part).sum()
}

/// The lines outside of `lobes`, in stretches.
fn gaps(lobes: &[Stretch], n_lines: usize) -> impl Iterator<Item = std::ops::Range<usize>> {
    let ends = lobes.iter().map(|l| l.1.max(0.0).floor() as usize + 1);
    let starts = lobes.iter().map(|l| l.0.max(0.0).ceil() as usize);
    let ranges = std::iter::once(0).chain(ends).zip(starts.chain(std::iter::once(n_lines)));
    ranges.map(move |(from, to)| from.min(n_lines)..to.min(n_lines))
}

/// Where the parabola through three logarithms has its top, in steps from the middle one, -1/2 to 1/2.
fn vertex(before: f64, here: f64, after: f64) -> f64 {
    let [a, b, c] = [before, here, after].map(|p| p.max(f64::MIN_POSITIVE).ln());
    let bend = a - 2.0 * b + c;
    if bend < 0.0 { (0.5 * (a - c) / bend).clamp(-0.5, 0.5) } else { 0.0 }
}

#[cfg(test)]
mod tests;
