//! The figures a session said when it was saved, so that a recheck can list those that moved.

use serde::{Deserialize, Serialize};

use crate::signal::Span;

/// What a Reading said: plain numbers and words.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Figures {
    /// The channel read, counted from 0.
    pub channel: usize,
    /// The segment read.
    pub segment: Span,
    /// Samples a second used.
    pub sample_rate_hz: f64,
    /// What levels are stated over: `dB re 1 µm/s² (r.m.s.)`.
    pub reference: String,
    /// The panes' windows, as written: `kaiser=8.6`.
    pub windows: Vec<String>,
    /// The tone table, by frequency.
    pub tones: Vec<ToneFigures>,
}

/// One row of the tone table.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct ToneFigures {
    /// Frequency.
    pub frequency_hz: f64,
    /// Peak amplitude in the unit.
    pub amplitude: f64,
    /// Level over the reference.
    pub level_db: f64,
    /// Expanded uncertainty of the frequency; `None` where none was stated, and in sessions of format 1.
    #[serde(default)]
    pub frequency_u95_hz: Option<f64>,
    /// Expanded uncertainty of the level; `None` likewise.
    #[serde(default)]
    pub level_u95_db: Option<f64>,
    /// The verdict's word; `None` likewise.
    #[serde(default)]
    pub verdict: Option<String>,
    /// The word of the verdict that a user has put in its place.
    #[serde(default)]
    pub overruled: Option<String>,
    /// One for each pane, in order.
    pub readings: Vec<PaneFigures>,
}

/// What one pane said of a tone.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(deny_unknown_fields)]
pub struct PaneFigures {
    /// The state's word.
    pub state: String,
    /// Where its maximum was, Hz.
    pub peak_hz: f64,
    /// Its level over the reference.
    pub level_db: f64,
}

/// A figure, or none.
#[derive(Debug, Clone, PartialEq, Serialize)]
#[serde(untagged)]
pub enum Figure {
    /// There was, or is, none: the tone came or went.
    None,
    /// A number.
    Number(f64),
    /// A word.
    Word(String),
}

/// One figure that does not stand.
#[derive(Debug, Clone, PartialEq, Serialize)]
pub struct Moved {
    /// Which figure: `tone 124.8000 Hz: level_db in pane 2 (hann)`.
    pub what: String,
    /// What was saved.
    pub was: Figure,
    /// What it is now.
    pub is: Figure,
}

/// Two levels this near are one: another processor may round the last digits of a transform differently.
const LEVELS_ALIKE_DB: f64 = 1e-6;

/// The same for frequencies and amplitudes, as a ratio.
const RATIOS_ALIKE: f64 = 1e-7;

/// The same for uncertainties, which rest on the noise that a fit leaves, a small difference of larger numbers.
const SPREADS_ALIKE: f64 = 1e-5;

impl Figures {
    /// The figures that differ between these, which were saved, and `now`.
    ///
    /// Levels are taken as equal within 10⁻⁶ dB, frequencies and amplitudes within 10⁻⁷ of their size: what different
    /// processors may round differently, and far below any uncertainty. Tones are matched by frequency, within one
    /// line spacing.
    pub fn moved(&self, now: &Self) -> Vec<Moved> {
        let mut moved = Vec::new();
        let mut words = |what: &str, was: String, is: String| {
            if was != is {
                moved.push(Moved { what: what.to_owned(), was: Figure::Word(was), is: Figure::Word(is) });
            }
        };
        let span = |f: &Self| format!("{}n..{}n", f.segment.start, f.segment.end());
        words("channel", (self.channel + 1).to_string(), (now.channel + 1).to_string());
        words("segment", span(self), span(now));
        words("reference", self.reference.clone(), now.reference.clone());
        words("windows", self.windows.join(","), now.windows.join(","));
        ratio(&mut moved, "sample_rate_hz".to_owned(), self.sample_rate_hz, now.sample_rate_hz);
        self.moved_tones(now, &mut moved);
        moved
    }

    fn moved_tones(&self, now: &Self, moved: &mut Vec<Moved>) {
        let near_hz = self.sample_rate_hz / self.segment.samples.max(1) as f64;
        let (mut was, mut is) = (self.tones.iter().peekable(), now.tones.iter().peekable());
        loop {
            let gap_hz = match (was.peek(), is.peek()) {
                (None, None) => return,
                (Some(_), None) => f64::NEG_INFINITY,
                (None, Some(_)) => f64::INFINITY,
                (Some(a), Some(b)) => a.frequency_hz - b.frequency_hz,
            };
            if gap_hz < -near_hz {
                was.next().into_iter().for_each(|tone| moved.push(came_or_went(tone, true)));
            } else if gap_hz > near_hz {
                is.next().into_iter().for_each(|tone| moved.push(came_or_went(tone, false)));
            } else if let (Some(a), Some(b)) = (was.next(), is.next()) {
                a.moved(b, &self.windows, moved);
            }
        }
    }
}

impl ToneFigures {
    fn moved(&self, now: &Self, windows: &[String], moved: &mut Vec<Moved>) {
        let name = format!("tone {:.4} Hz", self.frequency_hz);
        ratio(moved, format!("{name}: frequency_hz"), self.frequency_hz, now.frequency_hz);
        ratio(moved, format!("{name}: amplitude"), self.amplitude, now.amplitude);
        level(moved, format!("{name}: level_db"), self.level_db, now.level_db);
        self.moved_beside(&name, now, moved);
        if self.readings.len() != now.readings.len() {
            let count = |tone: &Self| Figure::Number(tone.readings.len() as f64);
            moved.push(Moved { what: format!("{name}: number of readings"), was: count(self), is: count(now) });
        }
        for (i, (was, is)) in self.readings.iter().zip(&now.readings).enumerate() {
            let pane = format!("pane {} ({})", i + 1, windows.get(i).map_or("", String::as_str));
            ratio(moved, format!("{name}: peak_hz in {pane}"), was.peak_hz, is.peak_hz);
            level(moved, format!("{name}: level_db in {pane}"), was.level_db, is.level_db);
            if was.state != is.state {
                let what = format!("{name}: state in {pane}");
                moved.push(Moved { what, was: Figure::Word(was.state.clone()), is: Figure::Word(is.state.clone()) });
            }
        }
    }
}

impl ToneFigures {
    /// What goes with a figure: its uncertainty and its verdict. What was not saved has not moved.
    fn moved_beside(&self, name: &str, now: &Self, moved: &mut Vec<Moved>) {
        for (what, was, is) in [
            ("frequency_u95_hz", self.frequency_u95_hz, now.frequency_u95_hz),
            ("level_u95_db", self.level_u95_db, now.level_u95_db),
        ] {
            let Some(was) = was else { continue };
            let what = format!("{name}: {what}");
            match is {
                Some(is) => number(moved, what, was, is, SPREADS_ALIKE * was.abs().max(is.abs())),
                None => moved.push(Moved { what, was: Figure::Number(was), is: Figure::None }),
            }
        }
        for (what, was, is) in
            [("verdict", &self.verdict, &now.verdict), ("overruled", &self.overruled, &now.overruled)]
        {
            if was.is_some() && was != is {
                let figure = |word: &Option<String>| word.clone().map_or(Figure::None, Figure::Word);
                moved.push(Moved { what: format!("{name}: {what}"), was: figure(was), is: figure(is) });
            }
        }
    }
}

fn came_or_went(tone: &ToneFigures, went: bool) -> Moved {
    let what = format!("tone {:.4} Hz: frequency_hz", tone.frequency_hz);
    let (here, none) = (Figure::Number(tone.frequency_hz), Figure::None);
    if went { Moved { what, was: here, is: none } } else { Moved { what, was: none, is: here } }
}

fn ratio(moved: &mut Vec<Moved>, what: String, was: f64, is: f64) {
    number(moved, what, was, is, RATIOS_ALIKE * was.abs().max(is.abs()));
}

fn level(moved: &mut Vec<Moved>, what: String, was: f64, is: f64) {
    number(moved, what, was, is, LEVELS_ALIKE_DB);
}

/// Not finite and equal to the bit is alike too; not a number against a number is not.
fn number(moved: &mut Vec<Moved>, what: String, was: f64, is: f64, alike: f64) {
    let apart = (was - is).abs();
    if was.to_bits() != is.to_bits() && !(apart.is_finite() && alike.is_finite() && apart <= alike) {
        moved.push(Moved { what, was: Figure::Number(was), is: Figure::Number(is) });
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    fn tone(frequency_hz: f64, level_db: f64) -> ToneFigures {
        let reading = PaneFigures { state: "clear".to_owned(), peak_hz: frequency_hz, level_db };
        ToneFigures {
            frequency_hz,
            amplitude: 1.0,
            level_db,
            frequency_u95_hz: Some(1e-3),
            level_u95_db: None,
            verdict: Some("holds".to_owned()),
            overruled: None,
            readings: vec![reading],
        }
    }

    fn figures(tones: Vec<ToneFigures>) -> Figures {
        Figures {
            channel: 0,
            segment: Span { start: 10, samples: 1000 },
            sample_rate_hz: 1000.0,
            reference: "dB re 1 V (r.m.s.)".to_owned(),
            windows: vec!["hann".to_owned()],
            tones,
        }
    }

    #[test]
    fn the_same_figures_stand_also_where_they_are_no_numbers() {
        let was = figures(vec![tone(24.96, -3.0), tone(99.84, f64::NAN), tone(124.8, f64::NEG_INFINITY)]);
        assert_eq!(was.moved(&was.clone()), []);
    }

    #[test]
    fn each_moved_figure_is_named_with_what_it_was_and_is() {
        let was = figures(vec![tone(24.96, -3.0), tone(124.8, -40.0)]);
        let mut now = was.clone();
        now.tones[1].readings[0].level_db = -40.01;
        now.tones[1].readings[0].state = "crowded".to_owned();
        let moved = was.moved(&now);
        let names: Vec<_> = moved.iter().map(|m| m.what.as_str()).collect();
        assert_eq!(names, ["tone 124.8000 Hz: level_db in pane 1 (hann)", "tone 124.8000 Hz: state in pane 1 (hann)"]);
        assert_eq!((&moved[0].was, &moved[0].is), (&Figure::Number(-40.0), &Figure::Number(-40.01)));
    }

    #[test]
    fn tones_that_came_or_went_do_not_shift_the_others() {
        let was = figures(vec![tone(24.96, -3.0), tone(99.84, -20.0), tone(124.8, -40.0)]);
        let now = figures(vec![tone(24.96, -3.0), tone(124.8, -40.0), tone(200.0, -60.0)]);
        let moved = was.moved(&now);
        assert_eq!(moved.len(), 2);
        assert_eq!((&moved[0].was, &moved[0].is), (&Figure::Number(99.84), &Figure::None));
        assert_eq!((&moved[1].was, &moved[1].is), (&Figure::None, &Figure::Number(200.0)));
    }

    #[test]
    fn a_number_against_none_moved_and_dust_did_not() {
        let was = figures(vec![tone(24.96, -3.0)]);
        assert_eq!(was.moved(&figures(vec![tone(24.96, f64::NAN)])).len(), 2);
        assert_eq!(was.moved(&figures(vec![tone(24.96 + 1e-12, -3.0 + 1e-9)])), []);
    }

    #[test]
    fn a_moved_verdict_and_uncertainty_are_named_and_what_was_never_saved_is_not() {
        let was = figures(vec![tone(24.96, -3.0)]);
        let mut now = was.clone();
        now.tones[0].verdict = Some("crowded".to_owned());
        now.tones[0].frequency_u95_hz = Some(1.1e-3);
        now.tones[0].level_u95_db = Some(0.1);
        let names: Vec<_> = was.moved(&now).into_iter().map(|m| m.what).collect();
        assert_eq!(names, ["tone 24.9600 Hz: frequency_u95_hz", "tone 24.9600 Hz: verdict"]);
        let mut old = was.clone();
        (old.tones[0].verdict, old.tones[0].frequency_u95_hz) = (None, None);
        assert_eq!(old.moved(&now), []);
    }

    #[test]
    fn another_segment_and_other_windows_are_named() {
        let was = figures(vec![]);
        let now = Figures { segment: Span { start: 0, samples: 5 }, windows: vec![], channel: 1, ..was.clone() };
        let names: Vec<_> = was.moved(&now).into_iter().map(|m| m.what).collect();
        assert_eq!(names, ["channel", "segment", "windows"]);
    }
}
