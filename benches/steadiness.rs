//! The search for steady stretches, on one thread: what it adds to an analysis, and what a longer capture takes.
//!
//! Prints medians of several rounds against their aims and against one real transform of the same length. Exits with 1
//! where an aim is missed.

#![allow(clippy::print_stdout, clippy::unwrap_used, missing_docs)]

use std::f64::consts::TAU;
use std::hint::black_box;
use std::process::ExitCode;
use std::time::{Duration, Instant};

use panewise::signal::{Stored, Watch};
use panewise::tone::suggest_steady;
use rand_core::{Rng as _, SeedableRng as _};
use realfft::RealFftPlanner;

const ROUNDS: usize = 9;

const AIMS: [(u32, Duration); 2] = [(18, Duration::from_millis(10)), (20, Duration::from_millis(30))];

fn main() -> ExitCode {
    let mut missed = 0;
    for (log2_samples, aim) in AIMS {
        let n = 1_usize << log2_samples;
        for (what, samples) in [("steady", steady(n)), ("running up and down", runs(n)), ("steps", steps(n))] {
            missed += usize::from(!measure(what, samples, aim));
        }
    }
    if missed == 0 { ExitCode::SUCCESS } else { ExitCode::FAILURE }
}

/// Whether the aim is met.
fn measure(what: &str, samples: Vec<f64>, aim: Duration) -> bool {
    let n = samples.len();
    let plan = RealFftPlanner::<f64>::new().plan_fft_forward(n);
    let (mut input, mut output) = (plan.make_input_vec(), plan.make_output_vec());
    let mut scratch = plan.make_scratch_vec();
    let transform = median(|| {
        input.copy_from_slice(&samples);
        plan.process_with_scratch(&mut input, &mut output, &mut scratch).unwrap();
        black_box(&output);
    });
    let source = Stored::new(8192.0, 1, samples);
    let mut longest = 0.0;
    let time = median(|| {
        let found = suggest_steady(&source, 0, 8192.0, &Watch::new()).unwrap();
        longest = found.map_or(0.0, |span| span.samples as f64 / n as f64);
    });
    let met = time <= aim;
    println!(
        "2^{} samples, {what:20} {:8.2} ms, {:5.1} transforms; longest {:3.0} %; aim {} ms, {}",
        n.ilog2(),
        time.as_secs_f64() * 1e3,
        time.as_secs_f64() / transform.as_secs_f64(),
        100.0 * longest,
        aim.as_millis(),
        if met { "met" } else { "MISSED" }
    );
    met
}

/// The median time of a few rounds, after one that warms up.
fn median(mut work: impl FnMut()) -> Duration {
    work();
    let mut times: Vec<Duration> = (0..ROUNDS)
        .map(|_| {
            let start = Instant::now();
            work();
            start.elapsed()
        })
        .collect();
    times.sort_unstable();
    times[ROUNDS / 2]
}

fn noise(n: usize) -> Vec<f64> {
    let mut random = rand_pcg::Pcg64Mcg::seed_from_u64(11);
    let mut uniform = move || (random.next_u64() >> 11) as f64 / (1_u64 << 53) as f64 - 0.5;
    (0..n).map(|_| 0.01 * (uniform() + uniform() + uniform() + uniform())).collect()
}

/// Twenty tones in noise.
fn steady(n: usize) -> Vec<f64> {
    let tone = |i: usize, k: usize| (TAU * (0.003 + 0.0217 * k as f64) * i as f64).sin() / (k + 1) as f64;
    noise(n).into_iter().enumerate().map(|(i, x)| x + (0..20).map(|k| tone(i, k)).sum::<f64>()).collect()
}

/// A machine that runs up, stays, and runs down, each for a third.
fn runs(n: usize) -> Vec<f64> {
    let mut turned = 0.0;
    let speed = |at: f64| (3.0 * at).min(1.0).min(3.0 - 3.0 * at);
    let swept = |(i, x): (usize, f64)| {
        let speed = speed(i as f64 / n as f64);
        turned += speed;
        x + speed * speed * (1..=10).map(|k| (TAU * 0.021 * f64::from(k) * turned).sin()).sum::<f64>()
    };
    noise(n).into_iter().enumerate().map(swept).collect()
}

/// Thirty stretches, each with tones of its own.
fn steps(n: usize) -> Vec<f64> {
    let tone = |i: usize, k: usize| {
        let stretch = 30 * i / n;
        (TAU * (0.011 + 0.0017 * stretch as f64) * (k + 1) as f64 * i as f64).sin()
    };
    noise(n).into_iter().enumerate().map(|(i, x)| x + (0..5).map(|k| tone(i, k)).sum::<f64>()).collect()
}
