//! All tones of a segment at once: the steady ones fitted jointly, the ones that move each on its own path.

use std::f64::consts::TAU;

use realfft::num_complex::Complex64;

use super::fit::{SteadyTone, fit_jointly};
use super::found::NamedTone;
use super::synthesis::{take_out_background, take_out_tone};
use super::track::{Account, Grid, Path, refit};
use crate::signal::{Cancelled, Removal, Watch};
use crate::spectrum::{Dense, Spectra};

/// One tone of the model.
#[derive(Debug, Clone)]
pub(super) struct Member {
    /// Where it goes.
    pub(super) path: Path,
    /// Where it was named by hand, if it was.
    pub(super) named: Option<NamedTone>,
    /// Whether its frequency is held: as it was named, or because no tone was to be had near the name.
    pub(super) held: bool,
    /// Whether its path leaves nothing to be followed; steady tones' always do.
    pub(super) followed: bool,
    /// How often it was asked whether it moves or has company.
    pub(super) n_asked: usize,
    /// What its path left over what noise would have, as a power ratio; 1 for steady tones.
    pub(super) left_over: f64,
}

impl Member {
    /// A steady tone found.
    pub(super) fn found(nu: f64, middle_amplitude: Complex64) -> Self {
        let path = Path::steady(nu, middle_amplitude);
        Self { path, named: None, held: false, followed: true, n_asked: 0, left_over: 1.0 }
    }

    /// Its mean frequency, bins.
    pub(super) fn nu(&self) -> f64 {
        if self.path.is_steady() { self.path.nu } else { self.path.mean_frequency() }
    }

    fn middle_amplitude(&self) -> Complex64 {
        self.path.middle()
    }
}

/// The tones and the background of a segment.
#[derive(Debug)]
pub(super) struct Model<'a> {
    spectra: &'a Spectra,
    removal: Removal,
    pub(super) grid: Grid,
    pub(super) members: Vec<Member>,
    pub(super) background: (f64, f64),
    /// Whether the last fit settled.
    pub(super) settled: bool,
}

/// Rounds in which steady and moving tones are fitted in turn, to the end and while the search goes on.
const ROUNDS: usize = 8;
const ROUNDS_BETWEEN: usize = 2;

/// Paths that change by less than this part of what is left of their track have settled.
const SETTLED: f64 = 1e-3;

/// A path is fitted until a step brings less than this part of a point's share of what is left.
const ENOUGH: f64 = 1e-3;

/// A tone that a fit moves further than this did not settle, bins.
const MOST_MOVED: f64 = 1.5;

/// Tones that a fit brings nearer to one another than this cannot be told apart, bins.
const LEAST_APART: f64 = 0.7;

impl<'a> Model<'a> {
    pub(super) fn new(spectra: &'a Spectra, removal: Removal) -> Self {
        let grid = Grid::new(spectra.n_samples());
        Self { spectra, removal, grid, members: Vec::new(), background: (0.0, 0.0), settled: true }
    }

    fn n(&self) -> f64 {
        self.spectra.n_samples() as f64
    }

    /// The samples less everything.
    pub(super) fn residue(&self) -> Vec<f64> {
        let mut samples = self.without_moving();
        self.take_out_steady(&mut samples);
        samples
    }

    fn without_moving(&self) -> Vec<f64> {
        let mut samples = self.spectra.samples().to_vec();
        for member in self.members.iter().filter(|m| !m.path.is_steady()) {
            member.path.take_out(&mut samples, 1.0);
        }
        samples
    }

    fn take_out_steady(&self, samples: &mut [f64]) {
        let line = TAU / self.n();
        let middle = (self.n() - 1.0) / 2.0;
        take_out_background(samples, self.background);
        for member in self.members.iter().filter(|m| m.path.is_steady()) {
            let omega = member.path.nu * line;
            take_out_tone(samples, omega, member.middle_amplitude() * Complex64::cis(-omega * middle));
        }
    }

    /// Fits all of it anew, from where it stands, well enough for the search to go on.
    ///
    /// # Errors
    /// [`Cancelled`] where the watch says so.
    pub(super) fn fit(&mut self, watch: &Watch) -> Result<(), Cancelled> {
        self.fit_in(ROUNDS_BETWEEN, watch)
    }

    /// As [`Model::fit`], until steady and moving tones no longer change one another.
    ///
    /// # Errors
    /// [`Cancelled`] where the watch says so.
    pub(super) fn fit_to_the_end(&mut self, watch: &Watch) -> Result<(), Cancelled> {
        self.fit_in(ROUNDS, watch)
    }

    /// Whether any of the tones moves.
    pub(super) fn moves(&self) -> bool {
        self.members.iter().any(|m| !m.path.is_steady())
    }

    fn fit_in(&mut self, rounds: usize, watch: &Watch) -> Result<(), Cancelled> {
        if !self.moves() {
            return self.fit_steady(None, watch);
        }
        for _ in 0..rounds {
            let mut rest = self.without_moving();
            self.fit_steady(Some(&Dense::of(&rest)), watch)?;
            self.take_out_steady(&mut rest);
            if self.fit_moving(&mut rest, watch)? < SETTLED {
                break;
            }
        }
        Ok(())
    }

    /// Fits each path anew to what the others leave; the greatest change, over what is left of that path's track.
    fn fit_moving(&mut self, rest: &mut [f64], watch: &Watch) -> Result<f64, Cancelled> {
        let mut changed: f64 = 0.0;
        for i in 0..self.members.len() {
            let Some(member) = self.members.get(i).filter(|m| !m.path.is_steady()) else { continue };
            watch.check()?;
            let old = member.path.clone();
            let mut track = self.grid.track(rest, old.nu);
            track.add(&old);
            let start = Account::of(old.clone()).weighed(&track);
            let enough = ENOUGH * start.left / track.points.len() as f64;
            let account = refit(&track, start, enough);
            changed = changed.max(account.path.distance(&old, &self.grid) / account.left.max(f64::MIN_POSITIVE));
            old.take_out(rest, -1.0);
            account.path.take_out(rest, 1.0);
            if let Some(member) = self.members.get_mut(i) {
                member.path = account.path;
            }
        }
        Ok(changed)
    }

    /// Fits the steady tones jointly to `dense`, or to the segment as it is.
    fn fit_steady(&mut self, dense: Option<&Dense>, watch: &Watch) -> Result<(), Cancelled> {
        let dense = dense.unwrap_or_else(|| self.spectra.dense());
        let line = TAU / self.n();
        // Each round takes at most one tone away: it ends.
        loop {
            let steady: Vec<usize> = (0..self.members.len()).filter(|&i| self.members[i].path.is_steady()).collect();
            let start: Vec<SteadyTone> = steady
                .iter()
                .map(|&i| &self.members[i])
                .map(|m| SteadyTone { omega: m.path.nu * line, middle_amplitude: m.middle_amplitude(), held: m.held })
                .collect();
            let fit = fit_jointly(dense, self.removal, &start, watch)?;
            let Some(fit) = fit else {
                let places: Vec<f64> = start.iter().map(|t| t.omega / line).collect();
                if self.give_one_up(&steady, nearest_pair(&places)) {
                    continue;
                }
                self.settled = false;
                return Ok(());
            };
            let places: Vec<f64> = fit.tones.iter().map(|t| t.omega / line).collect();
            let strayed = (0..places.len()).find(|&k| !self.stayed(&self.members[steady[k]], places[k]));
            if let Some(k) = strayed {
                if self.pin_or_give_up(steady[k]) {
                    continue;
                }
            } else if let Some((a, b)) =
                nearest_pair(&places).filter(|(a, b)| (places[*a] - places[*b]).abs() < LEAST_APART)
                && self.give_one_up(&steady, Some((a, b)))
            {
                continue;
            }
            for (k, tone) in fit.tones.iter().enumerate() {
                let nu = if tone.held { self.members[steady[k]].path.nu } else { places[k] };
                self.members[steady[k]].path = Path::steady(nu, tone.middle_amplitude);
            }
            self.background = fit.background;
            self.settled = fit.converged || fit.nearly;
            return Ok(());
        }
    }

    fn stayed(&self, member: &Member, nu: f64) -> bool {
        let reach = self.n() / 2.0;
        (nu - member.named.map_or(member.path.nu, |named| named.nu)).abs() < MOST_MOVED && nu > 0.3 && nu < reach - 0.3
    }

    /// A tone named by hand that strays is held where it was named; any other is given up.
    fn pin_or_give_up(&mut self, i: usize) -> bool {
        let Some(member) = self.members.get_mut(i) else { return false };
        match member.named {
            Some(_) if member.held => false,
            Some(named) => {
                member.path = Path::steady(named.nu, member.path.middle());
                member.held = true;
                true
            }
            None => {
                self.members.remove(i);
                true
            }
        }
    }

    /// Gives up the weaker of two steady tones, or the one that was not named by hand.
    fn give_one_up(&mut self, steady: &[usize], pair: Option<(usize, usize)>) -> bool {
        let Some((a, b)) = pair.and_then(|(a, b)| Some((*steady.get(a)?, *steady.get(b)?))) else { return false };
        let weight = |i: usize| {
            let member = &self.members[i];
            (member.named.is_some(), member.middle_amplitude().norm())
        };
        let (first, second) = (weight(a), weight(b));
        let weaker = if first.0 == second.0 {
            if first.1 < second.1 { a } else { b }
        } else if first.0 {
            b
        } else {
            a
        };
        if self.members[weaker].named.is_some() {
            return false;
        }
        self.members.remove(weaker);
        true
    }
}

/// The two places that are nearest to one another.
fn nearest_pair(places: &[f64]) -> Option<(usize, usize)> {
    let mut order: Vec<usize> = (0..places.len()).collect();
    order.sort_by(|&a, &b| places[a].total_cmp(&places[b]));
    let gap = |w: &&[usize]| places[w[1]] - places[w[0]];
    order.windows(2).min_by(|a, b| gap(a).total_cmp(&gap(b))).map(|w| (w[0], w[1]))
}
