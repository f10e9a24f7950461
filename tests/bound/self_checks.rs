//! The harness itself, against what is known.

use std::f64::consts::TAU;

use panewise::signal::Removal;
use realfft::num_complex::Complex64;

use crate::harness::dice::Dice;
use crate::harness::fisher::{Bound, Linearised, bounds};
use crate::harness::made::Recipe;
use crate::harness::noise::Colour;
use crate::harness::scenes::{Scene, Tint, make};
use crate::harness::score::rms;

/// Captures of each kind.
const SEEDS: u64 = 120;

/// The mean periodogram over many stretches against the density, at 5 standard errors.
#[test]
fn noise_has_the_density_it_states() {
    let n = 512;
    let rounds = 400;
    let colours = [
        Colour::White,
        Colour::FirstOrder { rho: 0.8 },
        Colour::FirstOrder { rho: -0.7 },
        Colour::Resonance { place: 0.2, width: 0.06, gain: 3.0 },
    ];
    for colour in colours {
        for line in [20_u32, 100, 110, 200] {
            let cycles = f64::from(line) / n as f64;
            let mut dice = Dice::of(u64::from(line));
            let power: f64 = (0..rounds)
                .map(|_| {
                    let x = colour.samples(n, &mut dice);
                    let turned = x.iter().enumerate().map(|(i, x)| x * Complex64::cis(-TAU * cycles * i as f64));
                    turned.sum::<Complex64>().norm_sqr() / n as f64
                })
                .sum::<f64>()
                / f64::from(rounds);
            let off = (power / colour.density(cycles) - 1.0).abs();
            assert!(off < 5.0 / f64::from(rounds).sqrt(), "{colour:?} at line {line}: {off}");
        }
    }
}

fn bounds_of(n: usize, tones: &[(f64, f64)]) -> (Vec<Bound>, f64) {
    let mut recipe = Recipe::new(0, n, Colour::White, Removal::Mean, Dice::of(1));
    for (nu, snr_db) in tones {
        recipe.tone(*nu, *snr_db, 0.0);
    }
    let made = recipe.finish();
    (bounds(&made), made.tones[0].peak)
}

/// Rife and Boorstyn, IEEE Trans. Information Theory 20 (1974) 591-598, for a real tone far from the ends (from
/// memory): var A = 2σ²/N, var ω = 24σ²/(A²N(N²-1)).
#[test]
fn a_lone_tone_has_the_known_bound() {
    let (bounds, peak) = bounds_of(1000, &[(200.3, 40.0)]);
    let n = 1000.0_f64;
    let omega = (24.0 / (peak * peak * n * (n * n - 1.0))).sqrt();
    assert!((bounds[0].amplitude / (2.0 / n).sqrt() - 1.0).abs() < 0.005);
    assert!((bounds[0].nu / (omega * n / TAU) - 1.0).abs() < 0.005);
}

/// Two tones 0.6 lines apart cost each other much more than two far apart.
#[test]
fn a_neighbour_raises_the_bound() {
    let of_pair = |gap: f64| bounds_of(512, &[(100.0, 40.0), (100.0 + gap, 40.0)]).0[0];
    assert!(of_pair(0.6).nu > 2.0 * of_pair(50.0).nu);
}

/// A tone's power over a line's mean noise is what was asked for: A²N²/4 over σ²N.
#[test]
fn a_tone_stands_as_high_as_asked() {
    let mut recipe = Recipe::new(0, 100, Colour::FirstOrder { rho: 0.5 }, Removal::Mean, Dice::of(1));
    recipe.tone(20.0, 33.0, 0.0);
    let made = recipe.finish();
    assert!((made.snr_db(&made.tones[0]) - 33.0).abs() < 1e-9);
}

/// What noise does to a linear fit is the bound, over many captures of every kind: within 3 standard errors in white
/// noise. In coloured noise a least-squares fit feels the density about the tone, not at it alone: by a few parts in a
/// hundred where the density bends sharply.
#[test]
fn a_fit_without_any_fault_sits_at_the_bound() {
    for tint in [Tint::White, Tint::Coloured] {
        for scene in [Scene::Lone, Scene::Edge, Scene::Company, Scene::Giant, Scene::Parted] {
            let (mut amplitude, mut nu) = (Vec::new(), Vec::new());
            for seed in 0..SEEDS {
                let made = make(scene, tint, seed);
                let linearised = Linearised::of(&made);
                for (error, bound) in linearised.errors().iter().zip(linearised.bounds()) {
                    amplitude.push(error.0 / bound.amplitude);
                    nu.push(error.1 / bound.nu);
                }
            }
            let room = 3.0 / (2.0 * nu.len() as f64).sqrt() + if tint == Tint::White { 0.0 } else { 0.02 };
            for errors in [amplitude, nu] {
                let value = rms(errors.iter().copied());
                assert!((value - 1.0).abs() < room, "{scene:?} {tint:?}: {value}");
            }
        }
    }
}
