//! Tracks of made signals: what each is held to be.

use std::f64::consts::{PI, TAU};

use rand_core::{Rng as _, SeedableRng as _};
use realfft::num_complex::Complex64;

use super::*;

const N: usize = 4096;

/// Gaussian noise of the given standard deviation.
fn noise(seed: u64, deviation: f64, n: usize) -> Vec<f64> {
    let mut random = rand_pcg::Pcg64Mcg::seed_from_u64(seed);
    let mut uniform = move || ((random.next_u64() >> 11) as f64 + 0.5) / (1_u64 << 53) as f64;
    (0..n).map(|_| deviation * (-2.0 * uniform().ln()).sqrt() * (TAU * uniform()).cos()).collect()
}

/// Deviation of noise under which a tone of peak 1 stands `db` over a line's mean noise.
fn deviation(db: f64, n: usize) -> f64 {
    // Power over noise of a line: A² N / (4 σ²).
    (n as f64 / 4.0 / 10_f64.powf(db / 10.0)).sqrt()
}

/// Explains what stands around `nu` bins in samples whose noise has a deviation of `sigma`.
fn explained(samples: &[f64], nu: f64, sigma: f64) -> Account {
    let grid = Grid::new(samples.len());
    let track = grid.track(samples, nu);
    let bar = Bar {
        point_variance: track.point_variance(samples.len() as f64 * sigma * sigma),
        rounding: 0.0,
        tone: 22.0,
        may_move: true,
        may_have_company: true,
    };
    let mean = track.points.iter().sum::<Complex64>() / grid.len() as f64;
    explain(&track, &Path::steady(nu, mean * 2.0), &bar)
}

fn moving(path: &Path, n: usize, sigma: f64, seed: u64) -> Vec<f64> {
    let mut samples = noise(seed, sigma, n);
    path.take_out(&mut samples, -1.0);
    samples
}

#[test]
fn a_path_put_into_samples_comes_out_of_its_track() {
    let path = Path { nu: 700.3, phase: vec![0.4, 0.3, 1.2, -0.2], level: vec![0.1, -0.3, 0.05] };
    let samples = moving(&path, N, 0.0, 1);
    // Against the definition.
    let middle = (N as f64 - 1.0) / 2.0;
    for (i, x) in samples.iter().enumerate() {
        let m = i as f64 - middle;
        let p = path::legendre(2.0 * m / N as f64);
        let at = |c: &[f64]| c.iter().zip(p).map(|(c, p)| c * p).sum::<f64>();
        let wanted = at(&path.level).exp() * (at(&path.phase) + TAU * path.nu * m / N as f64).cos();
        assert!((x - wanted).abs() < 1e-6, "sample {i}: {x} for {wanted}");
    }
    let grid = Grid::new(N);
    let track = grid.track(&samples, path.nu);
    for (point, own) in track.points.iter().zip(path.points(&grid)) {
        assert!((point - own).norm() < 1e-2, "{point} for {own}");
    }
}

#[test]
fn a_steady_tone_stays_one() {
    for seed in 0..40 {
        let db = 20.0 + 2.0 * seed as f64;
        let sigma = deviation(db, N);
        let account = explained(&moving(&Path::steady(700.3, Complex64::new(0.8, 0.6)), N, sigma, seed), 700.2, sigma);
        assert!(account.company.is_empty() && account.path.is_steady(), "{db} dB, seed {seed}: {account:?}");
        assert!((account.path.mean_frequency() - 700.3).abs() < 0.2);
    }
}

#[test]
fn a_drift_is_one_tone_that_moves() {
    for (drift, db) in [(0.1, 80.0), (0.5, 60.0), (1.0, 40.0), (3.0, 40.0), (3.0, 80.0), (-6.0, 60.0), (12.0, 60.0)] {
        for seed in 0..4 {
            let sigma = deviation(db, N);
            // A sweep of D bins: Φ = π D u²/4 = π D (2 P_2 + 1)/12.
            let path = Path { nu: 700.3, phase: vec![0.4, 0.0, PI * drift / 6.0], level: vec![0.0, 0.01] };
            let account = explained(&moving(&path, N, sigma, seed), 700.8, sigma);
            assert!(account.company.is_empty(), "drift {drift}, {db} dB, seed {seed}: {account:?}");
            let found = account.path.frequency(1.0) - account.path.frequency(-1.0);
            assert!((found - drift).abs() < 0.1, "drift {drift}, {db} dB, seed {seed}: {found}");
        }
    }
}

#[test]
fn two_steady_tones_are_two() {
    for (apart, db, ratio) in
        [(1.2, 40.0, 1.0), (1.5, 40.0, 0.7), (2.0, 40.0, 0.3), (3.8, 60.0, 0.5), (3.0, 60.0, 0.01), (1.2, 60.0, 0.5)]
    {
        for seed in 0..8 {
            let sigma = deviation(db, N);
            let phase = seed as f64 * 0.8;
            let mut samples = moving(&Path::steady(700.3, Complex64::new(0.8, 0.6)), N, sigma, seed);
            Path::steady(700.3 + apart, Complex64::from_polar(ratio, phase)).take_out(&mut samples, -1.0);
            let account = explained(&samples, 700.6, sigma);
            assert!(
                account.company.len() == 1 && account.path.is_steady(),
                "{apart} apart, {db} dB, seed {seed}: {account:?}"
            );
        }
    }
}

#[test]
fn a_giant_that_drifts_beside_a_weak_steady_tone_is_both() {
    for seed in 0..8 {
        let sigma = deviation(70.0, N);
        let path = Path { nu: 700.3, phase: vec![0.4, 0.0, PI / 6.0], level: vec![0.0, 0.01] };
        let mut samples = moving(&path, N, sigma, seed);
        Path::steady(704.0, Complex64::from_polar(10_f64.powf(-40.0 / 20.0), 0.7)).take_out(&mut samples, -1.0);
        let account = explained(&samples, 700.5, sigma);
        assert!(account.company.len() == 1 && !account.path.is_steady(), "seed {seed}: {account:?}");
        assert!((account.company[0].nu - 704.0).abs() < 0.3);
    }
}
