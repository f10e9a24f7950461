//! What a search says of the tones it found.

use std::f64::consts::TAU;

use realfft::num_complex::Complex64;

use super::super::fit::{SteadyTone, UnitUncertainty, unit_uncertainties};
use super::super::found::{FoundTone, Noise, Search};
use super::super::model::Member;
use super::super::motion::Motion;
use super::super::residue::{Peak, ResidueSpectrum};
use super::{Hunt, Left, mean_amplitude, span};
use crate::signal::{Cancelled, Watch};

/// A tone that moves by less than this counts as steady for what it does to its neighbours' uncertainty, bins.
const STEADY_ENOUGH: f64 = 0.5;

/// A tone this far from 0 Hz and half the rate has the bounds of one far from both, bins.
const FAR_FROM_ENDS: f64 = 30.0;

/// Faint peaks listed at most.
const MOST_FAINT: usize = 5;

/// A faint peak this near to a tone is held to be left over from it, bins.
const NEAR: f64 = 4.0;

/// One tone and what goes with it.
struct Row {
    tone: FoundTone,
    unit: Option<UnitUncertainty>,
    motion: Option<Motion>,
}

impl Hunt<'_> {
    /// What noise of unit variance does to each member; `None` where two cannot be told apart.
    pub(super) fn uncertainties(&self) -> Option<Vec<UnitUncertainty>> {
        let line = TAU / self.n();
        let together = |m: &Member| m.path.is_steady() || span(&m.path) < STEADY_ENOUGH;
        let as_steady: Vec<SteadyTone> = self
            .model
            .members
            .iter()
            .filter(|m| together(m))
            .map(|m| SteadyTone { omega: m.nu() * line, middle_amplitude: m.path.middle(), held: m.held })
            .collect();
        let mut joint = unit_uncertainties(self.spectra.n_samples(), self.quest.removal, &as_steady)?.into_iter();
        let members = self.model.members.iter().map(|m| {
            let among = if together(m) { joint.next() } else { None };
            let mut unit = self.unit_uncertainty(m, among);
            if let Some(alone) = self.alone_at_an_end(m) {
                (unit.lone_amplitude, unit.lone_omega) = (alone.amplitude, alone.omega);
            }
            unit
        });
        Some(members.collect())
    }

    /// The bounds of a tone alone, where 0 Hz or half the rate is so near that its own image and the background count.
    fn alone_at_an_end(&self, member: &Member) -> Option<UnitUncertainty> {
        let nu = member.nu();
        let near = nu.min(self.n() / 2.0 - nu) < FAR_FROM_ENDS;
        let alone =
            SteadyTone { omega: nu * TAU / self.n(), middle_amplitude: member.path.middle(), held: member.held };
        let units = unit_uncertainties(self.spectra.n_samples(), self.quest.removal, &[alone]).filter(|_| near)?;
        units.first().copied().filter(|_| !member.held)
    }

    fn unit_uncertainty(&self, member: &Member, among: Option<UnitUncertainty>) -> UnitUncertainty {
        let lone = UnitUncertainty::lone(self.spectra.n_samples(), mean_amplitude(&member.path));
        let mut unit = among.unwrap_or(lone);
        if !member.path.is_steady() {
            let (amplitude, nu) = member.path.unit_uncertainty(&self.model.grid).unwrap_or((0.0, 0.0));
            // What a path leaves over is not noise, but as little known.
            let left_over = member.left_over.max(1.0).sqrt();
            unit.amplitude = unit.amplitude.max(amplitude) * left_over;
            unit.omega = unit.omega.max(nu * TAU / self.n()) * left_over;
        }
        if member.held && member.named.is_none_or(|named| !named.held) {
            // Nothing was found near its name: it stands there as well as its level lets one say.
            unit.omega = unit.lone_omega;
        }
        unit
    }

    /// The tones kept, in order.
    pub(super) fn result(mut self, mut left: Left, watch: &Watch) -> Result<Search, Cancelled> {
        let n_found = self.model.members.iter().filter(|m| m.named.is_none()).count();
        let n_too_many = n_found.saturating_sub(self.quest.max_tones);
        let n_not_taken = left.spectrum.as_ref().filter(|_| self.is_full()).map_or(0, |s| self.unexplained(s).len());
        // Looked for before any tone is left out: those would all be faint peaks.
        let faint = left.spectrum.as_ref().map_or_else(Vec::new, |s| self.faint(s));
        if n_too_many > 0 {
            self.leave_out_weakest(left.spectrum.as_ref());
            self.model.fit(watch)?;
            left.residue = self.model.residue();
        }
        let units = self.uncertainties();
        let settled = self.model.settled && units.is_some();
        let noise = left.spectrum.map(|s| Noise::new(s.into_floor(), self.n()));
        let unit = |i: usize| units.as_ref().and_then(|u| u.get(i).copied());
        // What stands at a refused place is fitted, so that it spoils no other, and not listed.
        let listed = |m: &&(usize, &Member)| m.1.named.is_some() || !self.is_refused(m.1.nu());
        let members: Vec<(usize, &Member)> = self.model.members.iter().enumerate().collect();
        let mut rows: Vec<Row> = members.iter().filter(listed).map(|(i, member)| self.row(member, unit(*i))).collect();
        rows.extend(faint.iter().map(|p| self.faint_row(p)));
        rows.sort_by(|a, b| a.tone.nu.total_cmp(&b.tone.nu));
        for row in &mut rows {
            row.tone.snr = noise.as_ref().map_or(0.0, |noise| noise.snr(&row.tone, self.n()));
        }
        let unit_uncertainties = if settled { rows.iter().filter_map(|r| r.unit).collect() } else { Vec::new() };
        Ok(Search {
            tones: rows.iter().map(|r| r.tone).collect(),
            settled,
            unit_uncertainties,
            noise,
            n_left_out: n_too_many + n_not_taken,
            motions: rows.into_iter().map(|r| r.motion).collect(),
            residue: left.residue.into(),
        })
    }

    /// Keeps the tones that stand highest over their floor, and those named by hand.
    fn leave_out_weakest(&mut self, spectrum: Option<&ResidueSpectrum>) {
        let over = |m: &Member| {
            let floor = spectrum.map_or(1.0, |s| s.floor().at(m.nu()));
            mean_amplitude(&m.path).powi(2) / floor
        };
        let mut order: Vec<(bool, f64, usize)> =
            self.model.members.iter().enumerate().map(|(i, m)| (m.named.is_none(), -over(m), i)).collect();
        order.sort_by(|a, b| a.0.cmp(&b.0).then(a.1.total_cmp(&b.1)));
        let n_named = order.iter().filter(|o| !o.0).count();
        let mut kept: Vec<usize> = order.iter().take(n_named + self.quest.max_tones).map(|o| o.2).collect();
        kept.sort_unstable();
        self.model.members = kept.iter().filter_map(|i| self.model.members.get(*i).cloned()).collect();
    }

    /// Peaks that stand over the floor, but not by enough.
    fn faint(&self, spectrum: &ResidueSpectrum) -> Vec<Peak> {
        let mut peaks = spectrum.peaks(&self.thresholds);
        let near = |p: &Peak, m: &Member| (m.nu() - p.nu).abs() < NEAR + span(&m.path);
        peaks.retain(|p| !p.is_tone && !self.is_refused(p.nu) && !self.model.members.iter().any(|m| near(p, m)));
        peaks.truncate(MOST_FAINT);
        peaks
    }

    fn row(&self, member: &Member, unit: Option<UnitUncertainty>) -> Row {
        let amplitude = Complex64::from_polar(mean_amplitude(&member.path), member.path.first_phase(self.n()));
        let tone = FoundTone {
            nu: member.nu(),
            amplitude,
            snr: 0.0,
            by_hand: member.named.is_some(),
            held: member.named.is_some_and(|named| named.held),
            faint: false,
        };
        let motion = (!member.path.is_steady()).then(|| Motion::of(&member.path, &self.model.grid, member.followed));
        Row { tone, unit, motion }
    }

    fn faint_row(&self, peak: &Peak) -> Row {
        let tone =
            FoundTone { nu: peak.nu, amplitude: peak.amplitude, snr: 0.0, by_hand: false, held: false, faint: true };
        let unit = UnitUncertainty::lone(self.spectra.n_samples(), peak.amplitude.norm());
        Row { tone, unit: Some(unit), motion: None }
    }
}
