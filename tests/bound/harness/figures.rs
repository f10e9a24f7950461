//! Figures of a run against their aims.

use panewise::reading::Verdict;

use super::scenes::{NEAR, Scene, Tint};
use super::score::{Found, Outcome, Record, rms};

/// One figure.
#[derive(Debug, Clone)]
pub struct Figure {
    pub what: String,
    pub value: f64,
    /// How many tones or captures it is over.
    pub count: usize,
    /// What is aimed at, in words.
    pub aim: String,
    pub met: bool,
}

/// How a figure of few cases is judged.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Judging {
    /// As it is.
    Plain,
    /// With three standard errors of a figure that sits on the edge of its aim.
    FewCases,
}

impl Judging {
    fn errors(self) -> f64 {
        match self {
            Self::Plain => 0.0,
            Self::FewCases => 3.0,
        }
    }
}

/// The most that errors may be, in bounds.
const BOUND: f64 = 1.05;

/// Part of intervals that may hold the truth.
const COVERAGE: (f64, f64) = (0.93, 0.97);

/// Judges outcomes of one kind.
#[derive(Debug, Clone, Copy)]
pub struct Judge<'a> {
    pub name: &'a str,
    pub outcomes: &'a [&'a Outcome],
    pub judging: Judging,
}

impl Judge<'_> {
    /// Tones of which the aims speak: 20 dB over the floor, 40 where a neighbour is near.
    fn eligible(&self) -> Vec<&Record> {
        let records = self.outcomes.iter().flat_map(|o| &o.records);
        records.filter(|r| r.snr_db >= if r.gap < NEAR { 40.0 } else { 19.999 }).collect()
    }

    fn found(&self) -> Vec<&Found> {
        self.eligible().iter().filter_map(|r| r.found.as_ref()).collect()
    }

    fn figure(&self, what: &str, value: f64, count: usize, aim: String, met: bool) -> Figure {
        Figure { what: format!("{}: {what}", self.name), value, count, aim, met: met && count > 0 }
    }

    /// Root-mean-square errors of amplitude and frequency over the bound, each at most `most`. The root mean square of
    /// n normal deviates has a relative standard error of 1/√(2n).
    pub fn errors_within(&self, most: f64) -> Vec<Figure> {
        let found = self.found();
        let limit = most * (1.0 + self.judging.errors() / (2.0 * found.len() as f64).sqrt());
        let of = |what: &str, error: fn(&Found) -> f64| {
            let value = rms(found.iter().map(|f| error(f)));
            self.figure(
                &format!("{what} error in bounds"),
                value,
                found.len(),
                format!("<= {limit:.3}"),
                value <= limit,
            )
        };
        vec![of("amplitude", |f| f.amplitude_in_bounds), of("frequency", |f| f.nu_in_bounds)]
    }

    /// Errors against the bound, and against what the same noise makes of a linear fit, which few cases tell as well as
    /// many.
    pub fn errors(&self) -> Vec<Figure> {
        let found = self.found();
        let of = |what: &str, error: fn(&Found) -> f64, least: fn(&Found) -> f64| {
            let value = rms(found.iter().map(|f| error(f))) / rms(found.iter().map(|f| least(f)));
            let what = format!("{what} error over a linear fit's");
            self.figure(&what, value, found.len(), format!("<= {BOUND:.3}"), value <= BOUND)
        };
        let mut figures = self.errors_within(BOUND);
        figures.push(of("amplitude", |f| f.amplitude_in_bounds, |f| f.least_amplitude_in_bounds));
        figures.push(of("frequency", |f| f.nu_in_bounds, |f| f.least_nu_in_bounds));
        figures
    }

    /// How many of the intervals hold the truth. A part p of n cases has a standard error of √(p(1-p)/n).
    pub fn intervals(&self) -> Vec<Figure> {
        let found = self.found();
        let of = |what: &str, in_u95: fn(&Found) -> Option<f64>| {
            let stated: Vec<f64> = found.iter().filter_map(|f| in_u95(f)).collect();
            let held = stated.iter().filter(|e| e.abs() <= 1.0).count();
            let value = held as f64 / stated.len() as f64;
            let room = |p: f64| self.judging.errors() * (p * (1.0 - p) / stated.len() as f64).sqrt();
            let (low, high) = (COVERAGE.0 - room(COVERAGE.0), COVERAGE.1 + room(COVERAGE.1));
            let what = format!("{what} intervals that hold the truth");
            self.figure(&what, value, stated.len(), format!("{low:.3} to {high:.3}"), (low..=high).contains(&value))
        };
        let stated = found.iter().filter(|f| f.amplitude_in_u95.is_some() && f.nu_in_u95.is_some()).count();
        vec![
            of("amplitude", |f| f.amplitude_in_u95),
            of("frequency", |f| f.nu_in_u95),
            self.at_least_99("tones with an uncertainty", stated, found.len()),
        ]
    }

    /// A part of at least 99 %.
    pub fn at_least_99(&self, what: &str, good: usize, of: usize) -> Figure {
        let least = 0.99 - self.judging.errors() * (0.99 * 0.01 / of as f64).sqrt();
        let value = good as f64 / of as f64;
        self.figure(what, value, of, format!(">= {least:.3}"), value >= least)
    }

    /// None at all.
    pub fn none(&self, what: &str, bad: usize, of: usize) -> Figure {
        self.figure(what, bad as f64, of, "none".to_owned(), bad == 0)
    }

    pub fn detection(&self) -> Figure {
        self.at_least_99("tones found", self.found().len(), self.eligible().len())
    }

    pub fn no_false_tones(&self) -> Figure {
        let clean = self.outcomes.iter().filter(|o| o.false_tones.is_empty()).count();
        self.at_least_99("captures without a false tone", clean, self.outcomes.len())
    }

    /// Tones of a kind that have the verdict.
    pub fn verdicts(&self, what: &str, verdict: Verdict, which: impl Fn(&Record) -> bool) -> Figure {
        let records = self.outcomes.iter().flat_map(|o| &o.records);
        let found: Vec<&Found> = records.filter(|r| which(r)).filter_map(|r| r.found.as_ref()).collect();
        let right = found.iter().filter(|f| f.verdict == Some(verdict)).count();
        self.at_least_99(what, right, found.len())
    }

    pub fn no_tone_is_a_skirt(&self) -> Figure {
        let found = self.found();
        let skirts = found.iter().filter(|f| f.verdict == Some(Verdict::Skirt)).count();
        self.none("true tones called skirt", skirts, found.len())
    }
}

/// Kinds of capture whose tones are steady.
const STEADY: [Scene; 6] = [Scene::Lone, Scene::Edge, Scene::Company, Scene::Giant, Scene::Parted, Scene::Many];

/// The figures of each kind of capture, with three standard errors allowed.
pub fn of_each(run: &[(Scene, Tint, Vec<Outcome>)]) -> Vec<Figure> {
    let mut figures = Vec::new();
    for (scene, tint, outcomes) in run {
        let name = format!("{}, {}", tint.name(), scene.name());
        let all: Vec<&Outcome> = outcomes.iter().collect();
        figures.extend(of_scene(*scene, Judge { name: &name, outcomes: &all, judging: Judging::FewCases }));
        if *scene == Scene::Sweep {
            let mut neighbours = outcomes.clone();
            for outcome in &mut neighbours {
                outcome.records.retain(|r| r.drift == 0.0);
            }
            let neighbours: Vec<&Outcome> = neighbours.iter().collect();
            let name = format!("{name}, steady neighbour");
            let judge = Judge { name: &name, outcomes: &neighbours, judging: Judging::FewCases };
            figures.extend(judge.errors_within(TWICE));
        }
    }
    figures
}

/// The figures over all steady tones, and over all captures, as they are.
pub fn of_all(run: &[(Scene, Tint, Vec<Outcome>)]) -> Vec<Figure> {
    let mut figures = Vec::new();
    for tint in [Tint::White, Tint::Coloured] {
        let of = |scenes: &[Scene]| -> Vec<&Outcome> {
            run.iter().filter(|r| r.1 == tint && scenes.contains(&r.0)).flat_map(|r| &r.2).collect()
        };
        let judge = |what: &str, outcomes: &[&Outcome], work: &dyn Fn(Judge<'_>) -> Vec<Figure>| {
            work(Judge { name: &format!("{}, {what}", tint.name()), outcomes, judging: Judging::Plain })
        };
        figures.extend(judge("all steady tones", &of(&STEADY), &|j| {
            let mut all = j.errors();
            all.extend(j.intervals());
            all.extend([j.detection(), j.no_false_tones(), j.no_tone_is_a_skirt()]);
            all
        }));
        figures.extend(judge("lone and well parted tones", &of(&[Scene::Lone, Scene::Parted]), &|j| {
            vec![j.verdicts("tones that hold", Verdict::Holds, |_| true)]
        }));
        for scene in [Scene::Giant, Scene::Noise, Scene::Drift, Scene::Sweep] {
            figures.extend(judge(scene.name(), &of(&[scene]), &|j| {
                let detection = (scene != Scene::Noise).then(|| j.detection());
                detection.into_iter().chain([j.no_false_tones()]).collect()
            }));
        }
    }
    figures
}

/// The most that errors of a sweeping tone's steady neighbour may be, in bounds.
const TWICE: f64 = 2.0;

fn of_scene(scene: Scene, judge: Judge<'_>) -> Vec<Figure> {
    match scene {
        Scene::Noise => vec![judge.no_false_tones()],
        Scene::Drift => vec![
            judge.detection(),
            judge.no_false_tones(),
            judge.no_tone_is_a_skirt(),
            judge.verdicts("under 0.2 line hold", Verdict::Holds, |r| r.drift.abs() < 0.2),
            judge.verdicts("over 0.3 line wander", Verdict::Wanders, |r| r.drift.abs() > 0.3),
        ],
        Scene::Sweep => vec![
            judge.detection(),
            judge.no_false_tones(),
            judge.no_tone_is_a_skirt(),
            judge.verdicts("sweeping tones wander", Verdict::Wanders, |r| r.drift != 0.0),
            judge.verdicts("steady neighbours hold", Verdict::Holds, |r| r.drift == 0.0),
        ],
        Scene::Lone | Scene::Edge | Scene::Company | Scene::Giant | Scene::Parted | Scene::Many => {
            let mut figures = judge.errors();
            figures.extend(judge.intervals());
            figures.extend([judge.detection(), judge.no_false_tones(), judge.no_tone_is_a_skirt()]);
            if matches!(scene, Scene::Lone | Scene::Parted) {
                figures.push(judge.verdicts("tones that hold", Verdict::Holds, |_| true));
            }
            figures
        }
    }
}
