use std::f64::consts::TAU;

use super::*;
use crate::signal::{Removal, Watch};
use crate::spectrum::Spectra;
use crate::tone::{Quest, search};
use rand_core::{Rng as _, SeedableRng as _};

/// Uniform noise of standard deviation `sigma`.
fn noise(n: usize, sigma: f64, seed: u64) -> Vec<f64> {
    let mut random = rand_pcg::Pcg64Mcg::seed_from_u64(seed);
    let mut uniform = move || (random.next_u64() >> 11) as f64 / (1_u64 << 53) as f64 - 0.5;
    (0..n).map(|_| sigma * 12_f64.sqrt() * uniform()).collect()
}

fn grounds(samples: &[f64]) -> Grounds {
    let spectra = Spectra::new(samples.into(), 1000.0, &[], &Watch::new()).unwrap();
    let quest = Quest { removal: Removal::Mean, false_alarm: 1e-3, max_tones: 200, named: &[], refused: &[] };
    kind_of(samples, &search(&spectra, &quest, &Watch::new()).unwrap())
}

/// Noise of deviation 1 with a tone of that amplitude.
fn tone_in_noise(amplitude: f64) -> Vec<f64> {
    let tone = |i: usize| amplitude * (TAU * 0.1234 * i as f64).cos();
    noise(8192, 1.0, 3).into_iter().enumerate().map(|(i, x)| x + tone(i)).collect()
}

/// Shapes over a part of 4096 samples, at 0.11 cycles a sample over a little noise.
fn shaped(envelope: impl Fn(f64) -> f64) -> Vec<f64> {
    let ring = |i: usize| envelope(i as f64 / 4096.0) * (TAU * 0.11 * i as f64).sin();
    noise(4096, 1e-3, 5).into_iter().enumerate().map(|(i, x)| x + ring(i)).collect()
}

#[test]
fn silence_and_constants_have_no_kind() {
    for samples in [vec![0.0; 4096], vec![0.1; 4096], vec![-3e9; 100], vec![1e-300; 64]] {
        let found = grounds(&samples);
        assert_eq!((found, found.kind()), (Grounds::Silence, None));
    }
    // The removed mean leaves rounding.
    let mut rounding = vec![0.1; 4096];
    rounding[7] = 0.1 + 1e-17;
    assert_eq!(grounds(&rounding), Grounds::Silence);
}

#[test]
fn too_short_a_segment_has_no_kind() {
    let found = grounds(&noise(24, 1.0, 1));
    assert_eq!((found, found.kind()), (Grounds::TooShort, None));
}

#[test]
fn noise_alone_is_random() {
    for seed in 0..40 {
        let found = grounds(&noise(4096 + 37 * seed as usize, 1.0, seed));
        assert_eq!(found.kind(), Some(Kind::Random), "seed {seed}: {found:?}");
    }
    assert_eq!(grounds(&noise(4096, 1.0, 2)), Grounds::NoTone);
    // Noise that comes and goes by half its level dies nowhere.
    let swelling = noise(8192, 1.0, 9).into_iter().enumerate();
    let swelling: Vec<f64> = swelling.map(|(i, x)| x * (1.0 + 0.5 * (TAU * i as f64 / 8192.0).sin())).collect();
    assert_eq!(grounds(&swelling).kind(), Some(Kind::Random));
}

#[test]
fn the_greater_share_of_power_decides_between_tones_and_noise() {
    for (amplitude, kind) in [(0.5, Kind::Random), (1.2, Kind::Random), (1.7, Kind::Tones), (30.0, Kind::Tones)] {
        let found = grounds(&tone_in_noise(amplitude));
        let Grounds::Tones { n: 1, share } = found else { panic!("{amplitude}: {found:?}") };
        let expected = 0.5 * amplitude * amplitude / (0.5 * amplitude * amplitude + 1.0);
        assert!((share - expected).abs() < 0.02, "{amplitude}: {share} for {expected}");
        assert_eq!(found.kind(), Some(kind));
    }
}

#[test]
fn an_offset_or_a_drift_is_neither_tone_nor_noise() {
    let drifting: Vec<f64> = tone_in_noise(3.0).iter().enumerate().map(|(i, x)| x + 500.0 - 0.02 * i as f64).collect();
    assert!((power_about_a_line(&drifting) / power_about_a_line(&tone_in_noise(3.0)) - 1.0).abs() < 1e-9);
    // The drift alone has a mean square of 2237, the tone 4.5.
    assert_eq!(grounds(&drifting).kind(), Some(Kind::Tones));
    assert_eq!(power_about_a_line(&[5.0]), 0.0);
    assert!(power_about_a_line(&[1.0, 2.0, 3.0, 4.0]) < 1e-12);
}

#[test]
fn what_dies_is_a_transient_whatever_tones_it_has() {
    let strike = |t: f64| if t < 0.125 { 0.0 } else { (-40.0 * (t - 0.125)).exp() };
    let found = grounds(&shaped(strike));
    let Grounds::Dies(decay) = found else { panic!("{found:?}") };
    assert_eq!(found.kind(), Some(Kind::Transient));
    assert!((decay.peak_at - 0.13).abs() < 0.02, "{decay:?}");
    // Nine tenths of e^{-80 t} lie within ln 10 / 80, two blocks of 1/64.
    assert!((decay.holds - 10_f64.ln() / 80.0).abs() < 1.0 / 64.0, "{decay:?}");
    // From the first block's r.m.s., about e^{-40/128} / sqrt 2, to the noise's deviation of 0.001.
    assert!((decay.fall_db - 54.5).abs() < 1.5, "{decay:?}");
    let alike: [&dyn Fn(f64) -> f64; 4] = [
        &|t| (-8.0 * t).exp(),
        &|t| (-(t - 0.4).powi(2) / 0.005).exp(),
        &|t| if (0.3..0.5).contains(&t) { (TAU * (t - 0.3) / 0.4).sin() } else { 0.0 },
        &|t| if (0.3..0.301).contains(&t) { 1.0 } else { 0.0 },
    ];
    for (i, envelope) in alike.into_iter().enumerate() {
        assert_eq!(grounds(&shaped(envelope)).kind(), Some(Kind::Transient), "shape {i}");
    }
    // Nothing but the event itself.
    let mut click = vec![0.0; 4096];
    click[2000] = 1.0;
    let found = grounds(&click);
    assert!(matches!(found, Grounds::Dies(Decay { fall_db: f64::INFINITY, .. })), "{found:?}");
}

#[test]
fn steady_work_with_a_start_or_an_end_is_no_transient() {
    let others: [&dyn Fn(f64) -> f64; 6] = [
        &|_| 1.0,
        // It dies away, but only by 15 dB.
        &|t| (-1.75 * t).exp(),
        // Switched on and left on; switched off half-way; on for a third.
        &|t| if t > 0.4 { 1.0 } else { 0.0 },
        &|t| if t < 0.6 { 1.0 } else { 0.0 },
        &|t| if (0.3..0.63).contains(&t) { 1.0 } else { 0.0 },
        // A machine that runs up, stays and runs down.
        &|t| (4.0 * t).min(1.0).min(4.0 - 4.0 * t).max(0.0).powi(2),
    ];
    for (i, envelope) in others.into_iter().enumerate() {
        let found = grounds(&shaped(envelope));
        assert_ne!(found.kind(), Some(Kind::Transient), "shape {i}: {found:?}");
    }
    // One slow cycle, and a beat.
    let slow: Vec<f64> = (0..4096).map(|i| (TAU * f64::from(i) / 4096.0).sin()).collect();
    assert_eq!(decay_of(&slow), None);
    assert_eq!(decay_of(&shaped(|t| (0.5 * TAU * t).sin())), None);
}

#[test]
fn numbers_of_any_size_and_length_give_some_answer() {
    for n in [8, 9, 63, 64, 127, 128, 129, 1000] {
        for scale in [1e-300, 1e-12, 1.0, 1e150] {
            let samples: Vec<f64> = noise(n, scale, n as u64);
            let _ = grounds(&samples).kind();
        }
    }
    assert_eq!(decay_of(&[]), None);
    assert_eq!(shortest_holding(&[0.0, 3.0, 1.0, 0.0], 3.5), 2);
    assert_eq!(shortest_holding(&[0.0, 4.0, 1.0, 0.0], 3.5), 1);
    for kind in Kind::ALL {
        assert_eq!(Kind::parse(kind.name()), Some(kind));
    }
    assert_eq!(Kind::parse("tone"), None);
}
