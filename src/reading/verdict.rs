//! The verdict on a tone, and the sentence why: from the fit and the standing set of windows, whatever panes are open.

use super::output::{PaneReading, ReadingState, Tone, Verdict};
use crate::spectrum::weighted_line;
use crate::tone::{Motion, Search};
use crate::units::db;
use crate::window::Window;

/// A frequency that moves further than this over the segment wanders, bins.
const MOST_MOVED: f64 = 0.25;

/// A level that moves further than this, and than its uncertainty, wanders, dB.
const MOST_MOVED_DB: f64 = 0.1;

/// A neighbour that raises the uncertainty of the frequency by more than this ratio crowds the tone.
const CROWDED: f64 = 1.1;

/// Readings differ when they are this many standard uncertainties from the best estimate, given what both share.
const APART: f64 = 3.5;

/// Differences under this do not matter to anybody, dB.
const NO_MATTER_DB: f64 = 0.01;

/// Noise leaves so many times its mean power in a line once in a hundred thousand.
const LEFT_OVER: f64 = 11.5;

/// Two tones this far apart are no longer crowded by the fit, lines.
const PARTED_LINES: f64 = 2.0;

/// What a verdict rests on.
pub(super) struct Judged<'a> {
    pub(super) spacing_hz: f64,
    pub(super) found: &'a Search,
    /// Which tone.
    pub(super) i: usize,
    /// Its row, but for the verdict.
    pub(super) row: &'a Tone,
    /// How the standing set of windows reads it.
    pub(super) standing: &'a [PaneReading],
}

impl Judged<'_> {
    /// The word and the sentence.
    pub(super) fn verdict(&self) -> (Verdict, String) {
        let tone = &self.found.tones[self.i];
        if tone.faint {
            let text = "stands over the floor by no more than noise alone gives once in ten such segments: listed, not \
                        counted";
            return (Verdict::Faint, text.to_owned());
        }
        if let Some(why) = self.wanders() {
            return (Verdict::Wanders, why);
        }
        if let Some(why) = self.crowded() {
            return (Verdict::Crowded, why);
        }
        if !self.found.settled {
            let text = "the tones of the segment could not be fitted together: look at its panes before reporting it";
            return (Verdict::Disputed, text.to_owned());
        }
        if let Some(why) = self.disputed() {
            return (Verdict::Disputed, why);
        }
        (Verdict::Holds, self.holds())
    }

    fn motion(&self) -> Option<&Motion> {
        self.found.motions.get(self.i).and_then(Option::as_ref)
    }

    fn wanders(&self) -> Option<String> {
        let motion = self.motion()?;
        let u_db = self.row.level_u95_db.unwrap_or(0.0);
        let frequency = motion.span_nu > MOST_MOVED;
        let level = motion.span_db > MOST_MOVED_DB.max(u_db);
        let hz = self.hertz(motion.span_nu * self.spacing_hz);
        let decibels =
            if motion.span_db > 59.9 { "60 dB or more".to_owned() } else { format!("{:.2} dB", motion.span_db) };
        let what = match (frequency, level) {
            (true, true) => format!("frequency moves by {hz} ({:.2} lines) and level by {decibels}", motion.span_nu),
            (true, false) => format!("frequency moves by {hz} ({:.2} lines)", motion.span_nu),
            (false, true) => format!("level moves by {decibels}"),
            (false, false) => return None,
        };
        let rest = if motion.followed { "" } else { "; it moves in more ways than were followed" };
        Some(format!("{what} over the segment: its figures are means{rest}"))
    }

    fn crowded(&self) -> Option<String> {
        let tone = &self.found.tones[self.i];
        let neighbour = self.nearest();
        let raised = self
            .found
            .unit_uncertainties
            .get(self.i)
            .is_some_and(|u| self.motion().is_none() && u.omega > CROWDED * u.lone_omega);
        if let Some((nu, distance)) = neighbour.filter(|n| raised && n.1 < 2.0 * PARTED_LINES) {
            let apart_hz = distance * self.spacing_hz;
            let parted_s = PARTED_LINES / apart_hz;
            return Some(format!(
                "{} stands {distance:.2} lines away and widens the uncertainty: {:.3} s of segment would part the two",
                self.hertz(nu * self.spacing_hz),
                parted_s
            ));
        }
        let nobody = !self.standing.iter().any(|r| r.state == ReadingState::Clear);
        if !nobody || self.standing.is_empty() {
            return None;
        }
        let Some((nu, distance)) = self.neighbour_in_the_way(tone.nu) else {
            return Some("no window of the standing set reads it clear: its floor covers it in most".to_owned());
        };
        let (window, length_s) = self.parting(distance)?;
        Some(format!(
            "no window of the standing set reads it clear of {}, {distance:.2} lines away: {window} would part the two \
             in a segment of {length_s:.3} s",
            self.hertz(nu * self.spacing_hz)
        ))
    }

    /// The nearest other tone: where it is and how far away, bins.
    fn nearest(&self) -> Option<(f64, f64)> {
        let nu = self.found.tones[self.i].nu;
        let others = self.found.tones.iter().enumerate().filter(|(j, t)| *j != self.i && !t.faint);
        others.map(|(_, t)| (t.nu, (t.nu - nu).abs())).min_by(|a, b| a.1.total_cmp(&b.1))
    }

    /// The tone most in the way of this one: the greatest for its distance.
    fn neighbour_in_the_way(&self, nu: f64) -> Option<(f64, f64)> {
        let others = self.found.tones.iter().enumerate().filter(|(j, t)| *j != self.i && !t.faint);
        let weight = |t: &crate::tone::FoundTone| t.amplitude.norm() / (t.nu - nu).abs().max(1e-3);
        let most = others.max_by(|a, b| weight(a.1).total_cmp(&weight(b.1)))?;
        Some((most.1.nu, (most.1.nu - nu).abs()))
    }

    /// The window of the standing set that needs the longest segment of those its lobes allow, and that length: the
    /// one with the lowest side lobes parts what the others leave under a skirt.
    fn parting(&self, distance: f64) -> Option<(String, f64)> {
        let widest = self.standing.iter().filter(|r| r.state == ReadingState::Crowded).filter_map(|r| {
            let window = Window::parse(&r.window).ok()?;
            let half = window.main_lobe_half_width_bins(HALF_WIDTH_SAMPLES);
            Some((r.window.clone(), half / (distance * self.spacing_hz)))
        });
        widest.min_by(|a, b| a.1.total_cmp(&b.1)).or_else(|| {
            let window = Window::parse("blackman-harris").ok()?;
            let half = window.main_lobe_half_width_bins(HALF_WIDTH_SAMPLES);
            Some((window.to_string(), 2.0 * half / (distance * self.spacing_hz)))
        })
    }

    fn disputed(&self) -> Option<String> {
        let u_db = db(1.0 + self.row.amplitude_u95? / 2.0 / self.row.amplitude.max(1e-300));
        let off = |r: &PaneReading| {
            let u_pane = r.u_db.unwrap_or(0.0);
            let noise = (2.0 * u_db.hypot(u_pane)).max(APART * (u_pane * u_pane - u_db * u_db).max(0.0).sqrt());
            let leak = r.predicted_leak_db.map_or(0.0, f64::abs);
            (r.level_db - self.row.level_db).abs() - noise - leak - NO_MATTER_DB
        };
        let clear = self.standing.iter().filter(|r| r.state == ReadingState::Clear);
        let worst = clear.max_by(|a, b| off(a).total_cmp(&off(b)))?;
        if off(worst) <= 0.0 || !self.leaves_more_than_noise(worst) {
            return None;
        }
        Some(format!(
            "{} reads it {:.3} dB from the fit, more than noise and known neighbours explain: not to be reported \
             without a look",
            worst.window,
            worst.level_db - self.row.level_db
        ))
    }

    /// Whether what the fit leaves at the tone, under the reading's window, is more than noise: whatever the other tones
    /// leak there is in the fit, and explains no more.
    fn leaves_more_than_noise(&self, reading: &PaneReading) -> bool {
        let (Ok(window), Some(noise)) = (Window::parse(&reading.window), &self.found.noise) else { return true };
        let tone = &self.found.tones[self.i];
        let n = self.found.residue.len();
        let sums = window.sums(n);
        let left = weighted_line(&self.found.residue, &window.samples(n), tone.nu);
        let level = db(1.0 + 2.0 * left.norm() / sums.s1 / tone.amplitude.norm());
        left.norm_sqr() > LEFT_OVER * noise.line_power(tone.nu, sums.s2) && level > NO_MATTER_DB
    }

    fn holds(&self) -> String {
        let clear: Vec<f64> =
            self.standing.iter().filter(|r| r.state == ReadingState::Clear).map(|r| r.level_db).collect();
        let spread = clear.iter().copied().fold(f64::NEG_INFINITY, f64::max)
            - clear.iter().copied().fold(f64::INFINITY, f64::min);
        let moves = if self.motion().is_some() { "nearly steady" } else { "steady" };
        match clear.len() {
            0 => format!("fitted and {moves}"),
            1 => format!("fitted, {moves}, and one window of the standing set reads it clear"),
            n => format!("fitted, {moves}, and {n} windows of the standing set agree within {spread:.3} dB"),
        }
    }

    /// A frequency with the digits that a hundredth of a line has.
    fn hertz(&self, hz: f64) -> String {
        let decimals = (2.0 - self.spacing_hz.log10()).floor().clamp(0.0, 9.0) as usize;
        format!("{hz:.decimals$} Hz")
    }
}

/// The length at which lobes are measured: their width in bins does not depend on it.
const HALF_WIDTH_SAMPLES: usize = 4096;
