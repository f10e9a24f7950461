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

fn course(samples: Vec<f64>) -> Steadiness {
    steadiness(&Stored::new(RATE_HZ, 1, samples), 0, &Watch::new()).unwrap()
}

#[test]
fn blocks_cover_the_channel_and_steady_ones_change_by_no_more_than_chance_explains() {
    for n in [64, 65, 500, 6144, 40_001, 900_000] {
        let found = course(noise(n));
        assert_eq!((found.blocks[0].span.start, found.blocks.last().unwrap().span.end()), (0, n as u64));
        assert!(found.blocks.windows(2).all(|w| w[0].span.end() == w[1].span.start), "{n}");
        assert!(found.blocks.len() <= 384 && found.changes.is_empty(), "{n}: {} blocks", found.blocks.len());
        // One block in some hundred thousand may.
        let most = found.blocks.iter().map(|b| b.change).fold(0.0, f64::max);
        assert!(most <= 1.0, "{n}: {most}");
        assert_eq!(found.stretches, [Span { start: 0, samples: n as u64 }]);
        for (at, block) in found.blocks.iter().enumerate() {
            assert_eq!(found.block_at(block.span.start).map(|b| b.0), Some(at));
            assert_eq!(found.block_at(block.span.end() - 1).map(|b| b.0), Some(at));
        }
        assert_eq!((found.block_at(n as u64), found.stretch_at(n as u64)), (None, None));
    }
    assert_eq!(course(noise(63)), Steadiness::default());
}

#[test]
fn every_steady_stretch_is_found_longest_first_with_the_changes_between() {
    let part = |n: usize, hz: f64, level: f64| tone(n, hz).into_iter().map(move |x| level * x);
    let samples: Vec<f64> =
        part(60_000, 500.0, 1.0).chain(part(90_000, 500.0, 0.5)).chain(part(50_000, 730.0, 0.5)).collect();
    let found = course(samples);
    let block = found.blocks[0].span.samples;
    let near = |sample: u64, edge: u64| sample.abs_diff(edge) <= 4 * block;
    let spans: Vec<_> = found.stretches.iter().map(|s| (s.start, s.end())).collect();
    assert_eq!(spans.len(), 3, "{spans:?}");
    for ((start, end), (from, to)) in spans.iter().zip([(60_000, 150_000), (0, 60_000), (150_000, 200_000)]) {
        assert!(*start >= from && *end <= to && near(*start, from) && near(*end, to), "{spans:?}");
    }
    let changes: Vec<_> = found.changes.iter().map(|c| (c.sample, c.level_db)).collect();
    assert_eq!(changes.len(), 2, "{changes:?}");
    assert!(near(changes[0].0, 60_000) && (changes[0].1 + 6.02).abs() < 1.0, "{changes:?}");
    assert!(near(changes[1].0, 150_000) && changes[1].1.abs() < 0.5, "{changes:?}");
    // The blocks that hold the steps stand out, the middles of the stretches do not.
    for (edge, over) in [(60_000, true), (150_000, true), (30_000, false), (105_000, false), (180_000, false)] {
        let (at, _) = found.block_at(edge).unwrap();
        let most = found.blocks[at - 1..=at + 1].iter().map(|b| b.change).fold(0.0, f64::max);
        assert_eq!(most > 1.0, over, "{edge}: {most}");
    }
    let (at, _) = found.block_at(60_000).unwrap();
    let step: f64 = found.blocks[at - 1..at + 2].iter().map(|b| b.level_change_db).sum();
    assert!((step + 6.02).abs() < 0.05, "{step}");
}

#[test]
fn a_ramp_changes_all_along_and_rest_is_told_from_work() {
    let n = 100_000;
    // 60 dB from end to end.
    let ramp = |i: usize| 10_f64.powf(3.0 * i as f64 / n as f64);
    let found = course(tone(n, 640.0).iter().enumerate().map(|(i, x)| x * ramp(i)).collect());
    assert_eq!(found.stretches, []);
    let changing = found.blocks.iter().filter(|b| b.change > 1.0).count();
    assert!(changing > found.blocks.len() * 9 / 10, "{changing} of {}", found.blocks.len());
    assert!(found.blocks[0].is_quiet && !found.blocks.last().unwrap().is_quiet);
}

#[test]
fn odd_samples_stand_out_and_give_no_odd_figures() {
    let mut samples = noise(50_000);
    samples[20_000] = f64::NAN;
    let found = course(samples);
    let (_, odd) = found.block_at(20_000).unwrap();
    assert_eq!(odd.change, f64::INFINITY);
    for samples in [vec![0.0; 5000], vec![f64::NAN; 5000], vec![1e308; 5000], vec![0.25; 100]] {
        let found = course(samples);
        assert!(found.blocks.iter().all(|b| !b.change.is_nan() && !b.level_db.is_nan() && !b.level_change_db.is_nan()));
        assert!(found.changes.iter().all(|c| !c.level_db.is_nan()));
    }
}

#[test]
fn samples_in_memory_are_read_as_a_source_is() {
    let samples = noise(30_000);
    assert_eq!(longest_steady(&samples, &Watch::new()).unwrap(), suggest(samples));
    let watch = Watch::new();
    watch.cancel();
    assert!(longest_steady(&noise(5000), &watch).is_err());
}
