//! The whole analysis of a segment: its curves, the search and the fit of its tones, their verdicts, the advice.
//!
//! Prints the medians of several rounds against their aims, and how many plain transforms of the same length each takes:
//! absolute times drift with the machine, the ratio does not. Exits with 1 where an aim is missed.

#![allow(clippy::print_stdout, clippy::unwrap_used, missing_docs)]

use std::f64::consts::TAU;
use std::hint::black_box;
use std::process::ExitCode;
use std::time::{Duration, Instant};

use panewise::reading::{Request, analyse, analyse_curves};
use panewise::session::{CaptureRef, Session};
use panewise::signal::{Stored, Watch};
use rand_core::{Rng as _, SeedableRng as _};
use realfft::RealFftPlanner;

const ROUNDS: usize = 7;

/// A segment and what its analysis may take.
struct Case {
    log2_samples: u32,
    n_tones: usize,
    aim: Duration,
}

const CASES: [Case; 2] = [
    Case { log2_samples: 18, n_tones: 20, aim: Duration::from_millis(150) },
    Case { log2_samples: 20, n_tones: 50, aim: Duration::from_secs(2) },
];

fn main() -> ExitCode {
    let missed = CASES.iter().filter(|case| !measure(case)).count();
    if missed == 0 { ExitCode::SUCCESS } else { ExitCode::FAILURE }
}

/// Whether the aim is met.
fn measure(case: &Case) -> bool {
    let n = 1_usize << case.log2_samples;
    let samples = samples(n, case.n_tones);
    let plan = RealFftPlanner::<f64>::new().plan_fft_forward(n);
    let (mut input, mut output) = (plan.make_input_vec(), plan.make_output_vec());
    let mut scratch = plan.make_scratch_vec();
    let transform = median(|| {
        input.copy_from_slice(&samples);
        plan.process_with_scratch(&mut input, &mut output, &mut scratch).unwrap();
        black_box(&output);
    });
    let request = request(n);
    let source = Stored::new(request.sample_rate_hz, 1, samples);
    let curves = median(|| drop(black_box(analyse_curves(&source, &request, &Watch::new()).unwrap())));
    let mut found = 0;
    let whole = median(|| {
        let analysis = analyse(&source, &request, None, &Watch::new()).unwrap();
        found = analysis.reading.tones.len();
    });
    println!("2^{} samples, {} tones ({found} found)", case.log2_samples, case.n_tones);
    let row = |what: &str, time: Duration, tail: &str| {
        let ratio = time.as_secs_f64() / transform.as_secs_f64();
        println!("  {what:24} {:9.2} ms {ratio:7.1} transforms{tail}", time.as_secs_f64() * 1e3);
    };
    let met = whole <= case.aim && found == case.n_tones;
    let verdict = if met { "met" } else { "MISSED" };
    row("one real transform", transform, "");
    row("curves", curves, "");
    row("whole analysis", whole, &format!("; aim {} ms, {verdict}", case.aim.as_millis()));
    met
}

fn request(n: usize) -> Request {
    Request::from_session(&Session::new(CaptureRef {
        path: "invented".to_owned(),
        blake3: String::new(),
        sample_rate_hz: 65_536.0,
        channels: 1,
        frames: n as u64,
        format: "invented".to_owned(),
    }))
}

/// Steady tones of falling strength, off the lines and unevenly spaced, in white noise.
fn samples(n: usize, n_tones: usize) -> Vec<f64> {
    let mut random = rand_pcg::Pcg64Mcg::seed_from_u64(4);
    let mut uniform = move || (random.next_u64() >> 11) as f64 / (1_u64 << 53) as f64;
    let tones: Vec<(f64, f64, f64)> = (0..n_tones)
        .map(|k| {
            let place = (k as f64 + 0.2 + 0.6 * uniform()) / n_tones as f64;
            (TAU * (0.002 + 0.49 * place), 0.3 / (1.0 + k as f64), TAU * uniform())
        })
        .collect();
    (0..n)
        .map(|i| {
            let noise = (uniform() + uniform() + uniform() - 1.5) * 2e-3;
            noise + tones.iter().map(|(omega, peak, phase)| peak * (omega * i as f64 + phase).cos()).sum::<f64>()
        })
        .collect()
}

fn median(mut work: impl FnMut()) -> Duration {
    // The first round warms caches and plans.
    work();
    let mut times: Vec<Duration> = (0..ROUNDS)
        .map(|_| {
            let start = Instant::now();
            work();
            start.elapsed()
        })
        .collect();
    times.sort();
    times[ROUNDS / 2]
}
