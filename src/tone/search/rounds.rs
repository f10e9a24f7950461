//! Fitting, looking at what is left, and making something of it, until only noise is left.

use realfft::num_complex::Complex64;

use super::super::model::Member;
use super::super::residue::{Peak, ResidueSpectrum};
use super::super::track::{Bar, LEAST_APART, Path, explain, may_move};
use super::{APART, Hunt, Left, SAME_AS_NAMED, mean_amplitude, span};
use crate::signal::{Cancelled, Watch};

/// Rounds at most.
const MOST_ROUNDS: usize = 16;

/// A tone is asked so often whether it moves or has company: what is left then is more than can be followed.
const MOST_ASKED: usize = 3;

/// So many tones beside one, and so much left over noise in power all the same, are a crowd.
const A_CROWD: usize = 3;
const CROWD_LEAVES: f64 = 3.0;

/// A peak nearer than this to a tone asks first whether that tone moves, bins.
const NEAR: f64 = 4.0;

/// A peak of the residue counts when it stands this much over what the peaks accepted before it in the same round
/// leak there (an amplitude ratio).
const OVER_SKIRT: f64 = 2.0;

/// A tone nearer than this to another is not asked whether it moves: its track would hold both, bins.
const LONE: f64 = 2.5;

/// Nor is one nearer than this to 0 Hz or half the rate: its own image would be in its track, bins.
const FROM_ENDS: f64 = 8.0;

/// On the pedestal of a tone that could not be followed a peak must stand so much more over its near surroundings.
const PEDESTAL_FACTOR: f64 = 1.5;

/// Lines to either side that are the near surroundings of a peak.
const SURROUNDINGS: f64 = 15.0;

/// Of the threshold of detection, what a tone must keep when all are fitted together.
const SIGNIFICANT: f64 = 0.5;

impl Hunt<'_> {
    /// Goes on until the residue holds nothing but noise; what is left then.
    pub(super) fn rounds(&mut self, watch: &Watch) -> Result<Left, Cancelled> {
        let mut asked_all = false;
        let mut round = 0;
        loop {
            watch.check()?;
            watch.report(0.9 * round as f64 / MOST_ROUNDS as f64);
            self.model.fit(watch)?;
            let left = self.left();
            round += 1;
            let Some(spectrum) = left.spectrum.as_ref().filter(|_| round < MOST_ROUNDS) else { return Ok(left) };
            let (peaks, hopeless) = self.peaks(spectrum);
            let mut changed = self.adopt(&peaks, &hopeless, &left.residue, spectrum, watch)?;
            if !changed && !asked_all {
                asked_all = true;
                changed = self.ask_who_moves(&left.residue, spectrum, watch)?;
            }
            if !changed {
                return Ok(left);
            }
        }
    }

    /// Peaks of the residue that are still to be accounted for, strongest first.
    pub(super) fn unexplained(&self, spectrum: &ResidueSpectrum) -> Vec<Peak> {
        self.peaks(spectrum).0
    }

    /// The same, and those that nothing can be made of: what they leak is no tone either.
    fn peaks(&self, spectrum: &ResidueSpectrum) -> (Vec<Peak>, Vec<Peak>) {
        let mut peaks = spectrum.peaks(&self.thresholds);
        peaks.retain(|p| p.is_tone);
        let all = peaks.clone();
        peaks.retain(|p| self.stubborn.iter().all(|s| (s - p.nu).abs() > 1.0));
        for member in self.model.members.iter().filter(|m| !m.followed) {
            let reach = NEAR + span(&member.path) / 2.0;
            let below = member.nu() - reach - spectrum.reach_of_pedestal(member.nu() - reach, -1.0);
            let above = member.nu() + reach + spectrum.reach_of_pedestal(member.nu() + reach, 1.0);
            // On the pedestal of a tone that could not be followed only what stands out of the pedestal itself counts.
            let threshold = PEDESTAL_FACTOR * self.thresholds.least();
            let top = |p: &Peak| p.over_floor * spectrum.floor().at(p.nu);
            let stands_out = |p: &Peak| top(p) > threshold * spectrum.near_floor(p.nu, SURROUNDINGS);
            let inside = |p: &Peak| (below..above).contains(&p.nu);
            let near = |p: &Peak| (p.nu - member.nu()).abs() < reach;
            peaks.retain(|p| !inside(p) || (!near(p) && stands_out(p)));
        }
        let hopeless = all.into_iter().filter(|p| !peaks.contains(p)).collect();
        (peaks, hopeless)
    }

    /// Makes something of each peak: a new tone, or another account of the tone beside it. Whether anything changed.
    fn adopt(
        &mut self,
        peaks: &[Peak],
        hopeless: &[Peak],
        residue: &[f64],
        spectrum: &ResidueSpectrum,
        watch: &Watch,
    ) -> Result<bool, Cancelled> {
        let mut accepted: Vec<Peak> = Vec::new();
        for peak in peaks {
            watch.check()?;
            if self.is_full() {
                break;
            }
            if accepted.iter().any(|a| (a.nu - peak.nu).abs() < APART) {
                continue;
            }
            // Side lobes of the rectangular window fall as 1/(πd).
            let leak = |a: &Peak| a.amplitude.norm() / (std::f64::consts::PI * (a.nu - peak.nu).abs());
            let stronger = hopeless.iter().filter(|h| h.amplitude.norm() > peak.amplitude.norm());
            let leaked: f64 = accepted.iter().chain(stronger).map(leak).sum();
            if peak.amplitude.norm() < OVER_SKIRT * leaked {
                continue;
            }
            accepted.push(*peak);
            if let Some(host) = self.account_for(peak, residue, spectrum) {
                // Its remains were those of another account, and may reach far: the ends of a path are abrupt.
                accepted.push(Peak { amplitude: host.path.middle(), nu: host.nu(), ..*peak });
            }
        }
        Ok(!accepted.is_empty())
    }

    /// Makes something of one peak; the tone beside it as it was, where that had to be asked.
    fn account_for(&mut self, peak: &Peak, residue: &[f64], spectrum: &ResidueSpectrum) -> Option<Member> {
        let distance = |i: &usize| {
            let member = &self.model.members[*i];
            ((member.nu() - peak.nu).abs() - span(&member.path) / 2.0).max(0.0)
        };
        let members = 0..self.model.members.len();
        let host = members.min_by(|a, b| distance(a).total_cmp(&distance(b))).filter(|i| distance(i) < NEAR);
        let before = host.and_then(|i| self.model.members.get(i).cloned());
        if host.is_some_and(|i| self.ask(i, residue, spectrum, true)) {
            return before;
        }
        let host_moves = host.is_some_and(|i| !self.model.members[i].path.is_steady());
        if host_moves || self.is_known(peak.nu, LEAST_APART) {
            // Nothing can be made of it: it is part of how that tone moves.
            if let Some(member) = host.and_then(|i| self.model.members.get_mut(i)) {
                member.followed &= member.path.is_steady();
            }
            self.stubborn.push(peak.nu);
            return before;
        }
        self.model.members.push(Member::found(peak.nu, self.seen_from_middle(peak.nu, peak.amplitude)));
        None
    }

    /// Asks whether a tone moves or has company; whether its account changed.
    fn ask(&mut self, i: usize, residue: &[f64], spectrum: &ResidueSpectrum, may_have_company: bool) -> bool {
        if self.model.members[i].n_asked >= MOST_ASKED {
            return false;
        }
        self.model.members[i].n_asked += 1;
        let member = &self.model.members[i];
        let path = member.path.clone().recentred();
        let mut track = self.model.grid.track(residue, path.nu);
        // Where one tone's remains cover the whole band, the floor is theirs; the track itself then holds less.
        let spread = track.points.iter().map(Complex64::norm_sqr).sum::<f64>() / track.points.len().max(1) as f64;
        let rounding = track.point_variance(self.rounding_power(self.n()));
        let point_variance = track.point_variance(spectrum.floor().at(member.nu())).min(spread).max(rounding);
        if !may_have_company && !may_move(&track, &path, point_variance) {
            return false;
        }
        track.add(&path);
        let bar =
            Bar { point_variance, rounding, tone: self.thresholds.least(), may_move: !member.held, may_have_company };
        let mut account = explain(&track, &path, &bar);
        let noise = point_variance * track.points.len() as f64;
        // A crowd that still leaves much is no crowd: the tone changes abruptly, and is followed as far as it can be.
        let crowd = account.company.len() >= A_CROWD && account.left > CROWD_LEAVES * noise;
        if crowd {
            account = explain(&track, &path, &Bar { may_have_company: false, ..bar });
        }
        let orders = |path: &Path| path.phase.len() + path.level.len();
        let longer = orders(&account.path) > orders(&path);
        let company: Vec<_> = account.company.iter().filter(|c| !self.is_known_beside(i, c.nu)).copied().collect();
        let member = &mut self.model.members[i];
        if crowd {
            (member.followed, member.n_asked) = (false, MOST_ASKED);
        }
        if !longer && company.is_empty() {
            return crowd;
        }
        let left_over = account.left / noise;
        if !member.held {
            let steady = account.path.is_steady();
            member.path = account.path.recentred();
            member.left_over = if steady { 1.0 } else { left_over };
            if steady {
                member.path = Path::steady(member.path.nu, member.path.middle());
            }
        }
        self.model.members.extend(company.iter().map(|c| Member::found(c.nu, c.middle_amplitude)));
        true
    }

    fn is_known_beside(&self, i: usize, nu: f64) -> bool {
        let mut others = self.model.members.iter().enumerate().filter(|(j, _)| *j != i);
        others.any(|(_, m)| (m.nu() - nu).abs() < SAME_AS_NAMED)
    }

    /// Asks every lone steady tone whether it moves by less than the residue shows.
    fn ask_who_moves(&mut self, residue: &[f64], spectrum: &ResidueSpectrum, watch: &Watch) -> Result<bool, Cancelled> {
        let mut changed = false;
        for i in 0..self.model.members.len() {
            watch.check()?;
            let member = &self.model.members[i];
            let lone = self.model.members.iter().filter(|m| (m.nu() - member.nu()).abs() < LONE).count() == 1;
            let open = member.nu().min(self.n() / 2.0 - member.nu()) > FROM_ENDS;
            if lone && open && member.path.is_steady() && !member.held {
                changed |= self.ask(i, residue, spectrum, false);
            }
        }
        Ok(changed)
    }

    /// Takes tones out again that, all fitted together, do not stand over the noise.
    pub(super) fn give_up_insignificant(&mut self, mut left: Left, watch: &Watch) -> Result<Left, Cancelled> {
        for _ in 0..MOST_ROUNDS {
            watch.check()?;
            let Some(weak) = left.spectrum.as_ref().and_then(|spectrum| self.insignificant(spectrum)) else { break };
            if weak.is_empty() {
                break;
            }
            let mut at = 0;
            self.model.members.retain(|_| {
                at += 1;
                !weak.contains(&(at - 1))
            });
            self.model.fit(watch)?;
            left = self.left();
        }
        Ok(left)
    }

    /// The tones that do not stand over the noise; of those that stand close together only the weakest, since the others
    /// may rise without it.
    fn insignificant(&self, spectrum: &ResidueSpectrum) -> Option<Vec<usize>> {
        let units = self.uncertainties()?;
        // A lone tone's amplitude over its uncertainty, squared, is twice its power over a line's noise.
        let power = |i: usize| {
            let member = &self.model.members[i];
            let deviation = (spectrum.floor().at(member.nu()) / self.n()).sqrt();
            0.5 * (mean_amplitude(&member.path) / (units[i].amplitude * deviation)).powi(2)
        };
        let members = 0..self.model.members.len();
        let mut weak: Vec<(usize, f64)> = members
            .filter(|i| self.model.members[*i].named.is_none())
            .map(|i| (i, power(i)))
            .filter(|w| w.1 < SIGNIFICANT * self.thresholds.least())
            .collect();
        weak.sort_by(|a, b| a.1.total_cmp(&b.1));
        let mut given_up: Vec<usize> = Vec::new();
        for (i, _) in weak {
            let nu = self.model.members[i].nu();
            if given_up.iter().all(|j| (self.model.members[*j].nu() - nu).abs() > APART) {
                given_up.push(i);
            }
        }
        Some(given_up)
    }
}
