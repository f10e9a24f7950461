//! Six panes of one segment against one real transform of the same length, side by side in one run.
//!
//! Prints medians of interleaved rounds and their ratio; absolute times drift with the machine, the ratio does not.
//! With the environment variable PANEWISE_PYTHON naming a Python that has SciPy, six windowed transforms there are timed
//! in the same run.

#![allow(clippy::print_stdout, clippy::unwrap_used, missing_docs)]

use std::hint::black_box;
use std::time::{Duration, Instant};

use panewise::session::DEFAULT_WINDOWS;
use panewise::signal::Watch;
use panewise::spectrum::{Dense, Spectra, cosine_pane_powers, transform};
use panewise::window::Window;
use realfft::RealFftPlanner;

const ROUNDS: usize = 15;

fn main() {
    for n in [1 << 17, 1 << 20, 196_608, 1_000_003] {
        compare(n);
    }
}

fn compare(n: usize) {
    let samples: Vec<f64> = (0..n).map(|i| (0.0321 * i as f64).sin() + 1e-3 * (0.77 * i as f64).cos()).collect();
    let windows: Vec<Window> = DEFAULT_WINDOWS.iter().map(|w| Window::parse(w).unwrap()).collect();
    let terms: Vec<&[f64]> = windows.iter().map(|w| w.cosine_terms().unwrap()).collect();
    let plan = RealFftPlanner::<f64>::new().plan_fft_forward(n);
    let (mut input, mut output, mut scratch) = (plan.make_input_vec(), plan.make_output_vec(), plan.make_scratch_vec());
    let lines = transform(&samples);
    let shared: std::sync::Arc<[f64]> = samples.clone().into();
    // The plan for this length is made once, as it is while the same segment is looked at.
    let rows: &mut [(&str, &mut dyn FnMut())] = &mut [
        ("one real transform (realfft, planned, no allocation)", &mut || {
            input.copy_from_slice(&samples);
            plan.process_with_scratch(&mut input, &mut output, &mut scratch).unwrap();
            black_box(&output);
        }),
        ("six panes from it", &mut || {
            black_box(cosine_pane_powers(&lines, &terms));
        }),
        ("transform and six panes, as when an edge is dragged", &mut || {
            black_box(Spectra::new(shared.clone(), 8192.0, &windows, &Watch::new()).unwrap());
        }),
        ("dense transform", &mut || {
            black_box(Dense::of(&samples));
        }),
    ];
    println!("N = {n}");
    let medians = medians(rows);
    for ((name, _), median) in rows.iter().zip(&medians) {
        let ratio = median.as_secs_f64() / medians[0].as_secs_f64();
        println!("  {name:55} {:9.3} ms  {ratio:6.2} transforms", median.as_secs_f64() * 1e3);
    }
    if let Some(scipy) = scipy_seconds(n) {
        let ratio = scipy / medians[1].as_secs_f64();
        println!(
            "  {:55} {:9.3} ms  {ratio:6.2} times the six panes",
            "six scipy.fft.rfft(x*w) with magnitudes",
            scipy * 1e3
        );
    }
}

/// What SciPy takes for six windowed transforms with magnitudes, where a Python with it is named.
fn scipy_seconds(n: usize) -> Option<f64> {
    let python = std::env::var_os("PANEWISE_PYTHON")?;
    let script = concat!(env!("CARGO_MANIFEST_DIR"), "/benches/panes_scipy.py");
    let output = std::process::Command::new(python).arg(script).arg(n.to_string()).output().unwrap();
    assert!(output.status.success(), "{}", String::from_utf8_lossy(&output.stderr));
    String::from_utf8(output.stdout).unwrap().trim().parse().ok()
}

fn medians(rows: &mut [(&str, &mut dyn FnMut())]) -> Vec<Duration> {
    let mut times = vec![Vec::with_capacity(ROUNDS); rows.len()];
    for round in 0..=ROUNDS {
        for (row, times) in rows.iter_mut().zip(&mut times) {
            let start = Instant::now();
            (row.1)();
            // The first round warms caches and plans.
            if round > 0 {
                times.push(start.elapsed());
            }
        }
    }
    times
        .iter_mut()
        .map(|t| {
            t.sort();
            t[t.len() / 2]
        })
        .collect()
}
