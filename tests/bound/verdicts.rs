//! What a Reading says beside its figures: leakage by its name, the same whatever panes are open, sound advice.

use panewise::reading::{Reading, Verdict};
use panewise::window::Window;

use crate::harness::advice::{Advised, judge};
use crate::harness::made::Made;
use crate::harness::read::read;
use crate::harness::scenes::{Scene, Tint, make};

/// The kernel's side lobes judged: those that stand this much over the pane's noise, dB.
const OVER_NOISE_DB: f64 = 20.0;

/// Of which so many strongest.
const STRONGEST: usize = 24;

/// Noise 20 dB under a lobe moves its top by some tenths of a bin at most.
const TOP_OFF: f64 = 0.4;

/// Where the side lobes of a rectangular pane over a lone tone have their tops, bins.
fn side_lobes(made: &Made) -> Vec<f64> {
    const STEPS: i32 = 100;
    let n = made.n();
    let kernel = Window::parse("rectangular").unwrap().kernel(n);
    let tone = made.tones[0];
    let level_db = |offset: f64| kernel.level_db(offset) + made.snr_db(&tone);
    let mut lobes: Vec<(f64, f64)> = Vec::new();
    for step in -40 * STEPS..40 * STEPS {
        let at = |k: i32| f64::from(k) / f64::from(STEPS);
        let (before, here, after) = (level_db(at(step - 1)), level_db(at(step)), level_db(at(step + 1)));
        let place = tone.nu + at(step);
        let inside = place > 2.0 && place < n as f64 / 2.0 - 2.0;
        if at(step).abs() > 1.0 && here > before && here >= after && here > OVER_NOISE_DB && inside {
            lobes.push((here, place));
        }
    }
    lobes.sort_by(|a, b| b.0.total_cmp(&a.0));
    lobes.into_iter().take(STRONGEST).map(|l| l.1).collect()
}

#[test]
fn every_side_lobe_of_a_rectangular_pane_is_called_a_skirt() {
    let mut n_lobes = 0;
    for seed in 0..40 {
        let made = make(Scene::Lone, Tint::White, seed);
        let tone = made.tones[0];
        // In the open, so that the image does not move the lobes; off its line or on it.
        if made.snr_db(&tone) < 50.0 || tone.nu < 50.0 || tone.nu > made.n() as f64 / 2.0 - 50.0 {
            continue;
        }
        let reading = read(&made, &["rectangular"]);
        for lobe in side_lobes(&made) {
            n_lobes += 1;
            let called = reading.skirts.iter().any(|s| s.pane == 0 && (s.frequency_hz - lobe).abs() < TOP_OFF);
            assert!(called, "seed {seed}: the side lobe at {lobe:.2} of the tone at {:.2}", tone.nu);
        }
        let tone_listed = reading.skirts.iter().any(|s| (s.frequency_hz - tone.nu).abs() < 1.0);
        assert!(!tone_listed, "seed {seed}: the tone itself is listed as a skirt");
    }
    assert!(n_lobes > 100, "{n_lobes} side lobes");
}

/// What of a tone must not depend on the panes.
#[derive(Debug, PartialEq)]
struct Said {
    frequency_hz: f64,
    amplitude: f64,
    amplitude_u95: Option<f64>,
    verdict: Option<Verdict>,
    why: Option<String>,
}

fn said(reading: &Reading) -> Vec<Said> {
    let of = |t: &panewise::reading::Tone| Said {
        frequency_hz: t.frequency_hz,
        amplitude: t.amplitude,
        amplitude_u95: t.amplitude_u95,
        verdict: t.verdict,
        why: t.why.clone(),
    };
    reading.tones.iter().map(of).collect()
}

#[test]
fn what_is_said_of_tones_does_not_depend_on_the_panes() {
    let standing = panewise::session::DEFAULT_WINDOWS;
    let mut reversed = standing;
    reversed.reverse();
    let sets: [&[&str]; 6] = [
        &reversed,
        &["hann"],
        &["rectangular"],
        &["flat-top"],
        &["kaiser=8.6", "rectangular", "flat-top"],
        &["blackman-harris", "hann"],
    ];
    for scene in [Scene::Lone, Scene::Company, Scene::Giant, Scene::Drift, Scene::Sweep, Scene::Edge] {
        for seed in 0..3 {
            let made = make(scene, Tint::White, seed);
            let first = said(&read(&made, &standing));
            for windows in sets {
                assert_eq!(said(&read(&made, windows)), first, "{scene:?}, seed {seed}, {windows:?}");
            }
        }
    }
}

/// At least 95 of 100, less three standard errors.
fn at_least_95(good: usize, of: usize) -> bool {
    good as f64 >= of as f64 * (0.95 - 3.0 * (0.95 * 0.05 / of as f64).sqrt())
}

#[test]
fn the_window_advised_is_among_the_best() {
    let mut worse = Vec::new();
    let mut n_captures = 0;
    for scene in [Scene::Parted, Scene::Company, Scene::Giant] {
        for seed in 100..125 {
            let made = make(scene, Tint::White, seed);
            if made.tones.len() < 2 {
                continue;
            }
            n_captures += 1;
            let outcome = judge(&made, &read(&made, &["hann"]));
            if outcome != Advised::Well {
                worse.push((scene, seed, outcome));
            }
        }
    }
    assert!(at_least_95(n_captures - worse.len(), n_captures), "{} of {n_captures}: {worse:?}", worse.len());
}
