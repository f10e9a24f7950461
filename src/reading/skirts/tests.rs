//! Skirt peaks of invented segments whose tones are known.

use std::f64::consts::TAU;
use std::sync::Arc;

use rand_core::{Rng as _, SeedableRng as _};

use crate::reading::{Analysis, Request, analyse};
use crate::session::{CaptureRef, Session};
use crate::signal::{Removal, Stored, Watch};
use crate::spectrum::Spectra;
use crate::tone::{Quest, search};
use crate::window::Window;

const RATE_HZ: f64 = 8192.0;

/// A tone: bins, peak amplitude, phase.
type Made = (f64, f64, f64);

fn uniform(seed: u64) -> impl FnMut() -> f64 {
    let mut random = rand_pcg::Pcg64Mcg::seed_from_u64(seed);
    move || ((random.next_u64() >> 11) as f64 + 0.5) / (1_u64 << 53) as f64
}

/// The tones in white Gaussian noise of standard deviation `noise` (Box and Muller's method).
fn samples(tones: &[Made], noise: f64, n: usize, seed: u64) -> Vec<f64> {
    let mut uniform = uniform(seed);
    let sample = |i: usize| {
        let of = |&(nu, a, phase): &Made| a * (TAU * nu * i as f64 / n as f64 + phase).cos();
        let gauss = (-2.0 * uniform().ln()).sqrt() * (TAU * uniform()).cos();
        tones.iter().map(of).sum::<f64>() + noise * gauss
    };
    (0..n).map(sample).collect()
}

fn read(samples: Vec<f64>, windows: &[&str]) -> Analysis {
    let n = samples.len();
    let capture = CaptureRef {
        path: "made.wav".to_owned(),
        blake3: String::new(),
        sample_rate_hz: RATE_HZ,
        channels: 1,
        frames: n as u64,
        format: "made".to_owned(),
    };
    let windows: Vec<Window> = windows.iter().map(|w| Window::parse(w).unwrap()).collect();
    let request = Request { windows, ..Request::from_session(&Session::new(capture)) };
    analyse(&Stored::new(RATE_HZ, 1, samples), &request, None, &Watch::new()).unwrap()
}

/// Places of the skirt peaks of a pane, bins.
fn places(analysis: &Analysis, pane: usize) -> Vec<f64> {
    let spacing = analysis.segment.spectra.line_spacing_hz();
    analysis.reading.skirts.iter().filter(|s| s.pane == pane).map(|s| s.frequency_hz / spacing).collect()
}

/// The side lobes of a rectangular window have their tops where tan πx = πx, N samples or many: 1.4303, 2.4590, 3.4709
/// bins and so on from the middle, nearing a half.
#[test]
fn every_side_lobe_of_a_lone_tone_between_lines_is_one() {
    for (n, nu, seed) in
        [(8192, 1000.5, 1), (8191, 1000.13, 2), (4096, 700.31, 3), (20_000, 3000.88, 4), (4096, 61.4, 5)]
    {
        let analysis = read(samples(&[(nu, 1.0, 0.4)], 1e-3, n, seed), &["rectangular"]);
        let spacing = analysis.segment.spectra.line_spacing_hz();
        let found = places(&analysis, 0);
        // A lobe m bins off stands at A/(π m); its power over the noise is (A/(2σ))²·N/(π m)², here far over z.
        for lobe in 1..=20_u32 {
            let off = f64::from(lobe) + 0.5;
            for place in [nu - off, nu + off] {
                assert!(found.iter().any(|f| (f - place).abs() < 0.25), "N {n}, ν {nu}: none at {place}: {found:?}");
            }
        }
        assert_eq!(found.len(), 50);
        assert!(analysis.reading.panes[0].n_skirts.unwrap() >= 50);
        for skirt in &analysis.reading.skirts {
            let off = (skirt.frequency_hz / spacing - nu).abs();
            assert!((off - off.floor() - 0.5).abs() < 0.3 && off > 1.2, "{off}");
            assert_eq!(skirt.from_hz.len(), 1);
            assert!((skirt.from_hz[0] / spacing - nu).abs() < 0.01);
        }
        let levels: Vec<f64> = analysis.reading.skirts.iter().map(|s| s.level_db).collect();
        assert!(levels.is_sorted_by(|a, b| a >= b));
        // 13.26 dB under the tone (Harris 1978, table I: -13 dB).
        assert!((levels[0] - analysis.reading.tones[0].level_db + 13.26).abs() < 0.1, "{}", levels[0]);
    }
}

#[test]
fn tapered_windows_have_theirs_at_their_own_side_lobes() {
    // Highest side lobes: Harris 1978, table I, and Nuttall 1981, table II.
    for (window, side_lobe_db) in [("hann", -31.5), ("hamming", -42.7), ("blackman-harris", -92.0), ("kaiser=6", -44.5)]
    {
        let analysis = read(samples(&[(1000.37, 1.0, 0.4)], 1e-7, 8192, 9), &[window]);
        let top = analysis.reading.tones[0].level_db;
        let highest = analysis.reading.skirts.iter().map(|s| s.level_db - top).fold(f64::NEG_INFINITY, f64::max);
        assert!((highest - side_lobe_db).abs() < 1.0, "{window}: {highest}");
        assert!(analysis.reading.panes[0].n_skirts.unwrap() > 10, "{window}");
    }
}

#[test]
fn no_true_tone_is_one_and_every_one_stands_clear_of_main_lobes() {
    let windows = ["rectangular", "hann", "blackman-harris", "flat-top", "kaiser=8.6", "exponential=30"];
    let n = 8192;
    for seed in 0..12 {
        let mut uniform = uniform(100 + seed);
        // Strong tones, weak ones in their skirts six lines away and further, and one at a few cycles.
        let mut tones = vec![(2.2 + 2.0 * uniform(), 0.2, TAU * uniform())];
        for i in 0..6 {
            let at = 300.0 + 550.0 * f64::from(i) + 40.0 * uniform();
            tones.push((at, 0.2 + uniform(), TAU * uniform()));
            tones.push((at + 6.0 + 20.0 * uniform(), 10_f64.powf(-2.0 - uniform()), TAU * uniform()));
        }
        let analysis = read(samples(&tones, 1e-3, n, seed), &windows);
        assert!(!analysis.reading.skirts.is_empty());
        for (pane, window) in windows.iter().enumerate() {
            let half = Window::parse(window).unwrap().main_lobe_half_width_bins(n);
            for place in places(&analysis, pane) {
                let near = tones.iter().map(|t| (t.0 - place).abs()).fold(f64::INFINITY, f64::min);
                assert!(near > half - 0.2, "{window}, seed {seed}: a skirt {near} lines from a tone, at {place}");
            }
        }
    }
}

/// What the fit does not know of is told from a skirt by what the tones leave of it.
#[test]
fn a_tone_that_the_fit_does_not_know_of_is_none() {
    let windows: Vec<Window> =
        ["rectangular", "hann", "kaiser=8.6"].iter().map(|w| Window::parse(w).unwrap()).collect();
    let (n, strong, weak) = (8192, (1000.4, 1.0, 0.3), (1013.2, 5e-3, 1.0));
    let samples: Arc<[f64]> = samples(&[strong, weak], 1e-4, n, 5).into();
    let spectra = Spectra::new(Arc::clone(&samples), RATE_HZ, &windows, &Watch::new()).unwrap();
    let quest = Quest { removal: Removal::None, false_alarm: 1e-3, max_tones: 10, named: &[], refused: &[] };
    let mut found = search(&spectra, &quest, &Watch::new()).unwrap();
    assert_eq!(found.tones.len(), 2);
    let gone = found.tones.remove(1);
    found.motions.truncate(1);
    let back = |i: usize| gone.amplitude.norm() * (TAU * gone.nu * i as f64 / n as f64 + gone.amplitude.arg()).cos();
    found.residue = found.residue.iter().enumerate().map(|(i, r)| r + back(i)).collect();
    let analysis = read(samples.to_vec(), &["rectangular", "hann", "kaiser=8.6"]);
    let all = super::find(&spectra, &analysis.request, &found, analysis.threshold, &Watch::new()).unwrap();
    let spacing = spectra.line_spacing_hz();
    for skirt in &all.peaks {
        let off = (skirt.frequency_hz / spacing - weak.0).abs();
        // A rectangular window's own side lobes go on around it, 12 dB over it and more.
        assert!(
            off > 0.9 || (skirt.pane == 0 && skirt.level_db > analysis.reading.tones[1].level_db + 6.0),
            "{skirt:?}"
        );
    }
    let beside = |pane: usize| all.peaks.iter().any(|s| s.pane == pane);
    assert!(beside(0) && beside(1));
}

#[test]
fn noise_alone_and_too_short_a_segment_have_none() {
    let analysis = read(samples(&[], 1e-3, 4096, 3), &["rectangular", "hann"]);
    assert!(analysis.reading.skirts.is_empty());
    assert_eq!(analysis.reading.panes[0].n_skirts, Some(0));
    let analysis = read(samples(&[(4.0, 1.0, 0.0)], 1e-3, 16, 3), &["rectangular"]);
    assert!(analysis.reading.skirts.is_empty());
    assert_eq!((analysis.reading.panes[0].n_skirts, analysis.reading.segment.smallest_tone_db), (None, None));
}

/// White noise of standard deviation σ a sample has a mean power Nσ² a line; a tone whose power there is z times that
/// has the peak amplitude 2σ√(z/N).
#[test]
fn the_smallest_tone_follows_the_noise() {
    let (n, noise) = (1 << 16, 1e-3);
    let analysis = read(samples(&[(900.3, 0.5, 0.0)], noise, n, 8), &["hann"]);
    let z = analysis.threshold;
    let expected = 20.0 * (2.0 * noise * (z / n as f64).sqrt()).log10();
    let stated = analysis.reading.segment.smallest_tone_db.unwrap();
    // Levels in full scales: a sine of full scale reads 0 dB.
    assert!((stated - expected).abs() < 0.5, "{stated} against {expected}");
    let along = crate::reading::SmallestTone::of(&analysis).unwrap();
    for hz in [100.0, 2000.0, 4000.0] {
        assert!((along.at_db(hz) - expected).abs() < 2.0, "{hz} Hz: {}", along.at_db(hz));
    }
}

/// By linearity the skirts are the segment's panes less the residue's.
#[test]
fn the_parts_of_a_segment_sum_to_it() {
    let watch = Watch::new();
    let analysis = read(samples(&[(900.3, 0.5, 0.0), (941.8, 0.01, 1.0)], 1e-4, 8192, 8), &["rectangular", "kaiser=7"]);
    let skirts = crate::reading::skirts_of(&analysis, &watch).unwrap();
    let residue = crate::reading::residue_of(&analysis, &watch).unwrap();
    for pane in 0..2 {
        for i in 0..200 {
            let nu = 880.0 + 0.37 * f64::from(i);
            let whole = analysis.segment.spectra.at(pane, nu);
            assert!((skirts.spectra.at(pane, nu) + residue.at(pane, nu) - whole).norm() < 1e-9);
        }
        assert_eq!(skirts.lobes[pane].len(), 3);
    }
    // The tones are out of it: what stands at them is noise.
    assert!(residue.value_db(0, 900.3) < -80.0, "{}", residue.value_db(0, 900.3));
}
