//! The four-parameter sine fit of IEEE Std 1057, on its own, against the search's lone tone.

use std::f64::consts::TAU;

use nalgebra::{DMatrix, DVector};
use panewise::signal::Removal;

use crate::harness::dice::Dice;
use crate::harness::made::{Made, Recipe};
use crate::harness::noise::Colour;
use crate::harness::read::read;

/// A cos(ωn) + B sin(ωn) + C: amplitude, frequency (bins) and cosine phase at the first sample.
struct SineFit {
    amplitude: f64,
    nu: f64,
    phase: f64,
}

/// Steps; three or four are enough from a start within a quarter of a line.
const STEPS: usize = 30;

/// IEEE Std 1057-2017, four-parameter (frequency unknown) least-squares sine fit (from memory): D holds cos(ωn), sin(ωn),
/// 1 and n(B cos(ωn) - A sin(ωn)) with A and B of the step before; ω grows by the fourth unknown. n is counted from the
/// segment's middle here, which conditions D and changes no result.
fn sine_fit(samples: &[f64], start_nu: f64) -> SineFit {
    let n = samples.len();
    let middle = (n as f64 - 1.0) / 2.0;
    let y = DVector::from_column_slice(samples);
    let mut omega = TAU * start_nu / n as f64;
    let three = DMatrix::from_fn(n, 3, |i, j| base(omega, i as f64 - middle)[j]);
    let mut unknowns = three.svd(true, true).solve(&y, 0.0).unwrap();
    for _ in 0..STEPS {
        let (a, b) = (unknowns[0], unknowns[1]);
        let design = DMatrix::from_fn(n, 4, |i, j| {
            let m = i as f64 - middle;
            let [cos, sin, one] = base(omega, m);
            // The fourth column is divided by N, as its unknown is then multiplied by it: columns of like length.
            [cos, sin, one, m / n as f64 * (b * cos - a * sin)][j]
        });
        unknowns = design.svd(true, true).solve(&y, 0.0).unwrap();
        omega += unknowns[3] / n as f64;
    }
    let (a, b) = (unknowns[0], unknowns[1]);
    SineFit { amplitude: a.hypot(b), nu: omega * n as f64 / TAU, phase: (-b).atan2(a) - omega * middle }
}

fn base(omega: f64, m: f64) -> [f64; 3] {
    let (sin, cos) = (omega * m).sin_cos();
    [cos, sin, 1.0]
}

fn lone(n: usize, nu: f64, snr_db: f64, seed: u64) -> Made {
    let mut recipe = Recipe::new(seed, n, Colour::White, Removal::Mean, Dice::of(seed));
    recipe.tone(nu, snr_db, 0.0);
    recipe.finish()
}

/// Both end where steps die away: the search's at 1e-9 line. Noise moves both away from what was put in by 1e-5 and more.
const ROUNDING: f64 = 1e-9;

#[test]
fn a_lone_tone_is_the_sine_fit_of_ieee_1057() {
    let cases = [
        (256, 2.3, 40.0),
        (256, 3.7, 60.0),
        (400, 6.5, 30.0),
        (777, 100.25, 35.0),
        (1000, 5.0, 80.0),
        (1024, 128.0, 50.0),
        (1024, 509.2, 45.0),
        (2048, 333.33, 70.0),
    ];
    for (seed, (n, nu, snr_db)) in (1..).zip(cases) {
        let made = lone(n, nu, snr_db, seed);
        let fit = sine_fit(&made.samples, nu + 0.1);
        let reading = read(&made, &["hann"]);
        assert_eq!(reading.tones.len(), 1, "{nu} of {n}");
        let tone = &reading.tones[0];
        let off = tone.amplitude / fit.amplitude - 1.0;
        assert!(off.abs() < ROUNDING, "{nu} of {n}: amplitude {off:e} off");
        let off = tone.frequency_hz - fit.nu;
        assert!(off.abs() < ROUNDING, "{nu} of {n}: {off:e} lines off");
        let turns = (tone.phase_rad.unwrap() - fit.phase) / TAU;
        assert!((turns - turns.round()).abs() < ROUNDING, "{nu} of {n}: phase {turns} turns off");
        // Not by chance: noise moves both away from what was put in by much more.
        assert!((fit.nu - nu).abs() > 100.0 * ROUNDING, "{nu} of {n}");
    }
}
