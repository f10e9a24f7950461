//! Finding the tones of a segment, whatever panes are open.
//!
//! The strongest peaks of a pane with low side lobes begin. All tones known are fitted together and taken out; a peak
//! of what is left that noise does not explain is a tone, or says that the tone beside it moves or is two; all are
//! fitted again, until nothing is left but noise (after RELAX: Li and Stoica, Efficient mixed-spectrum estimation,
//! IEEE Trans. Signal Processing 44(2), 1996, from memory).

mod result;
mod rounds;

use std::f64::consts::TAU;

use realfft::num_complex::Complex64;

use super::found::{Quest, Search};
use super::model::{Member, Model};
use super::residue::{ResidueSpectrum, Thresholds};
use super::track::Path;
use crate::signal::{Cancelled, Watch};
use crate::spectrum::{Floor, Spectra};
use crate::window::Window;

/// The window whose pane gives the first tones: its side lobes are below what most captures hold.
const FIRST_LOOK: &str = "blackman-harris";

/// Lines of that pane left out of its floor at either end: its main lobe.
const FIRST_MARGIN: usize = 4;

/// A first peak stands at least this much over the floor, in power: weaker ones are left to the residue.
const FIRST_OVER_FLOOR: f64 = 100.0;

/// Of peaks nearer than this to one another only the strongest is looked at in a round, bins: the others may be its
/// skirt, or its path.
const APART: f64 = 8.0;

/// A tone named by hand, or a place refused, within this of a peak is that peak, bins.
const SAME_AS_NAMED: f64 = 0.75;

/// A tone named by hand must stand this far from 0 Hz and half the rate: half a cycle in the segment.
pub const LEAST_CYCLES: f64 = 0.5;

/// So many tones are fitted together whatever is asked for, before the weakest are left out: what they leak is known
/// then.
const FITTED: usize = 64;

/// Lines of noise that go with each parameter fitted.
const LINES_A_PARAMETER: f64 = 0.5;

/// Looks for tones in the segment of `spectra`, whose own panes do not matter, and fits them jointly.
///
/// # Errors
/// [`Cancelled`] where the watch says so.
pub fn search(spectra: &Spectra, quest: &Quest<'_>, watch: &Watch) -> Result<Search, Cancelled> {
    let mut hunt = Hunt::new(spectra, quest);
    hunt.name_tones();
    hunt.first_look(watch)?;
    let left = hunt.rounds(watch)?;
    let mut left = hunt.give_up_insignificant(left, watch)?;
    if hunt.model.moves() {
        hunt.model.fit_to_the_end(watch)?;
        left = hunt.left();
    }
    hunt.result(left, watch)
}

/// What a search knows at any time.
struct Hunt<'a> {
    spectra: &'a Spectra,
    quest: &'a Quest<'a>,
    model: Model<'a>,
    thresholds: Thresholds,
    rms: f64,
    /// Places of peaks that nothing could be made of, bins.
    stubborn: Vec<f64>,
}

/// What the model leaves of the segment.
struct Left {
    residue: Vec<f64>,
    /// `None` where the segment is too short to tell a floor.
    spectrum: Option<ResidueSpectrum>,
}

impl<'a> Hunt<'a> {
    fn new(spectra: &'a Spectra, quest: &'a Quest<'a>) -> Self {
        let n = spectra.n_samples();
        let mean_square = spectra.samples().iter().map(|x| x * x).sum::<f64>() / n.max(1) as f64;
        Self {
            spectra,
            quest,
            model: Model::new(spectra, quest.removal),
            thresholds: Thresholds::of(n, quest.false_alarm),
            rms: mean_square.sqrt(),
            stubborn: Vec::new(),
        }
    }

    fn n(&self) -> f64 {
        self.spectra.n_samples() as f64
    }

    /// An amplitude with the phase of the first sample, seen from the middle of the segment.
    fn seen_from_middle(&self, nu: f64, amplitude: Complex64) -> Complex64 {
        amplitude * Complex64::cis(TAU * nu / self.n() * (self.n() - 1.0) / 2.0)
    }

    /// Whether no more tones are taken in.
    fn is_full(&self) -> bool {
        let n_found = self.model.members.iter().filter(|m| m.named.is_none()).count();
        n_found >= self.quest.max_tones.max(FITTED)
    }

    fn name_tones(&mut self) {
        let n = self.n();
        // A column of no amplitude has no frequency: a tone named in silence starts with a trace.
        let trace = Complex64::new(1e-12 * self.rms.max(1e-12), 0.0);
        for named in self.quest.named {
            if !(named.nu >= LEAST_CYCLES && named.nu <= n / 2.0 - LEAST_CYCLES) {
                continue;
            }
            let amplitude = self.spectra.dense().at(named.nu) * (2.0 / n);
            let mut member = Member::found(named.nu, self.seen_from_middle(named.nu, amplitude) + trace);
            member.named = Some(*named);
            member.held = named.held;
            self.model.members.push(member);
        }
    }

    /// The strongest peaks of a pane with low side lobes.
    fn first_look(&mut self, watch: &Watch) -> Result<(), Cancelled> {
        let windows: Vec<Window> = Window::parse(FIRST_LOOK).into_iter().collect();
        let look = self.spectra.with_windows(&windows, watch)?;
        let power = look.power(0);
        let Some(floor) = Floor::of(power, FIRST_MARGIN) else { return Ok(()) };
        let rounding = self.rounding_power(look.sums(0).s2);
        let is_top = |k: &usize| power[*k] > power[k - 1] && power[*k] >= power[k + 1];
        let counts = |k: &usize| power[*k] > FIRST_OVER_FLOOR * floor.at(*k as f64).max(rounding);
        let mut lines: Vec<usize> = (2..power.len().saturating_sub(2)).filter(is_top).filter(counts).collect();
        lines.sort_by(|&a, &b| power[b].total_cmp(&power[a]));
        let s1 = look.sums(0).s1;
        let mut taken: Vec<f64> = Vec::new();
        for k in lines {
            let nu = k as f64;
            if self.is_full() {
                break;
            }
            if taken.iter().any(|t| (t - nu).abs() < APART) {
                continue;
            }
            taken.push(nu);
            if self.is_known(nu, SAME_AS_NAMED + 0.5) {
                continue;
            }
            let amplitude = look.at(0, nu) * (2.0 / s1);
            self.model.members.push(Member::found(nu, self.seen_from_middle(nu, amplitude)));
        }
        Ok(())
    }

    /// The power |Y|² a line of rounding, which is no noise, under a window with the sum S2.
    fn rounding_power(&self, s2: f64) -> f64 {
        (super::residue::ROUNDING * self.rms).powi(2) * s2
    }

    /// Whether no tone is to be listed at a place.
    fn is_refused(&self, nu: f64) -> bool {
        self.quest.refused.iter().any(|place| (place - nu).abs() < SAME_AS_NAMED)
    }

    /// Whether a tone of the model stands within `reach` of a place.
    fn is_known(&self, nu: f64, reach: f64) -> bool {
        self.model.members.iter().any(|m| (m.nu() - nu).abs() < reach)
    }

    /// What the model as it stands leaves.
    fn left(&self) -> Left {
        let residue = self.model.residue();
        let lines = |m: &Member| LINES_A_PARAMETER * (m.path.phase.len() + m.path.level.len()) as f64;
        let mut emptied: Vec<(f64, f64)> = self.model.members.iter().map(|m| (m.nu(), lines(m))).collect();
        emptied.sort_by(|a, b| a.0.total_cmp(&b.0));
        let spectrum = ResidueSpectrum::of(&residue, &emptied, self.rms);
        Left { residue, spectrum }
    }
}

/// Greatest less least frequency of a path, bins.
fn span(path: &Path) -> f64 {
    if path.is_steady() { 0.0 } else { path.span().0 }
}

fn mean_amplitude(path: &Path) -> f64 {
    if path.is_steady() { path.middle().norm() } else { path.root_mean_square() }
}
