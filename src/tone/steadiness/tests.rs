use std::f64::consts::TAU;

use super::*;
use crate::signal::Stored;

const RATE_HZ: f64 = 8192.0;

/// Uniform noise in -1..1 from a multiplicative generator: white, and the same on every run.
fn noise(n: usize) -> Vec<f64> {
    let mut state = 0x2545_F491_4F6C_DD1D_u64;
    let mut next = || {
        state ^= state << 13;
        state ^= state >> 7;
        state ^= state << 17;
        (state >> 11) as f64 / (1_u64 << 52) as f64 - 1.0
    };
    (0..n).map(|_| next()).collect()
}

fn suggest(samples: Vec<f64>) -> Option<Span> {
    let source = Stored::new(RATE_HZ, 1, samples);
    suggest_steady(&source, 0, RATE_HZ, &Watch::new()).unwrap()
}

fn tone(n: usize, frequency_hz: f64) -> Vec<f64> {
    (0..n).map(|i| (TAU * frequency_hz * i as f64 / RATE_HZ).sin()).collect()
}

#[test]
fn white_noise_of_any_length_is_steady_throughout() {
    for n in (64..1200).step_by(37).chain([2000, 6144, 40_001, 300_000, 900_000]) {
        assert_eq!(suggest(noise(n)), Some(Span { start: 0, samples: n as u64 }), "{n} samples");
    }
    assert_eq!(suggest(noise(63)), None);
    assert_eq!(suggest(Vec::new()), None);
}

#[test]
fn tones_alone_and_with_a_small_wobble_and_beating_are_steady_throughout() {
    let n = 120_000;
    let whole = Some(Span { start: 0, samples: n as u64 });
    assert_eq!(suggest(tone(n, 777.7)), whole);
    let wobble = |i: usize| 1.0 + 0.009 * (TAU * i as f64 / 50_000.0).sin();
    assert_eq!(suggest(tone(n, 777.7).iter().enumerate().map(|(i, x)| x * wobble(i)).collect()), whole);
    let pair = tone(n, 100.0).iter().zip(tone(n, 100.4)).map(|(a, b)| a + 0.05 * b).collect();
    assert_eq!(suggest(pair), whole);
    assert_eq!(suggest(vec![0.25; n]), whole);
}

#[test]
fn a_step_in_level_and_a_step_in_frequency_end_the_stretch_within_a_few_blocks() {
    let (n, at) = (200_000, 130_000);
    let block = 1024;
    let level: Vec<f64> = noise(n).iter().enumerate().map(|(i, x)| if i < at { *x } else { 0.8 * x }).collect();
    let mut frequency: Vec<f64> = tone(at, 700.0);
    frequency.extend(tone(n - at, 740.0));
    for (what, samples) in [("level", level), ("frequency", frequency)] {
        let span = suggest(samples).unwrap();
        assert_eq!(span.start, 0, "{what}");
        let short = at as i64 - span.end() as i64;
        // A step of a fifth in noise cannot be placed to the block.
        let limit = if what == "level" { 9 * block } else { 4 * block };
        assert!((-limit / 8..limit).contains(&short), "{what}: {short} samples short");
    }
}

#[test]
fn a_slow_drift_of_level_is_not_taken_whole() {
    let n = 200_000;
    let drift: Vec<f64> = noise(n).iter().enumerate().map(|(i, x)| x * (1.0 + i as f64 / n as f64)).collect();
    let span = suggest(drift);
    assert!(span.is_none_or(|s| s.samples < n as u64 / 2), "{span:?}");
}

#[test]
fn silence_around_the_work_is_not_suggested_but_the_work_is() {
    let mut samples: Vec<f64> = noise(200_000).iter().map(|x| 0.001 * x).collect();
    for (x, loud) in samples.iter_mut().skip(120_000).zip(noise(50_000)) {
        *x += loud;
    }
    let span = suggest(samples).unwrap();
    assert!(span.start >= 120_000 && span.end() <= 170_000 && span.samples > 45_000, "{span:?}");
}

#[test]
fn a_missing_channel_and_a_cancelled_watch_are_errors_and_odd_samples_are_not() {
    let source = Stored::new(RATE_HZ, 1, noise(5000));
    assert!(matches!(suggest_steady(&source, 1, RATE_HZ, &Watch::new()), Err(SignalError::NoChannel { .. })));
    let watch = Watch::new();
    watch.cancel();
    assert!(matches!(suggest_steady(&source, 0, RATE_HZ, &watch), Err(SignalError::Cancelled(_))));
    let mut samples = noise(50_000);
    samples[20_000] = f64::NAN;
    samples[20_001] = f64::INFINITY;
    let span = suggest(samples).unwrap();
    assert!(span.start > 20_001 && span.end() == 50_000, "{span:?}");
    suggest(vec![f64::NAN; 5000]);
    suggest(vec![1e308; 5000]);
    suggest(noise(5000).iter().map(|x| x * 1e300).collect());
}
