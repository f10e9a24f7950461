//! Readings of invented segments whose tones are known.

use rand_core::{Rng as _, SeedableRng as _};

use super::{Reading, ReadingError, ReadingState, Request, Segment, Tone, Verdict, analyse};
use crate::session::{CaptureRef, HandTone, Session};
use crate::signal::{Span, Stored, Watch};
use crate::units::{Detector, Factor, Quantity, Scale, db};

const RATE_HZ: f64 = 8192.0;

struct Made {
    frequency_hz: f64,
    peak: f64,
    phase: f64,
}

fn made(frequency_hz: f64, peak: f64) -> Made {
    Made { frequency_hz, peak, phase: 0.7 * frequency_hz }
}

/// White Gaussian noise of standard deviation `noise` under the tones (Box and Muller's method, fixed seed).
fn capture(tones: &[Made], noise: f64, n: usize) -> Stored {
    let mut random = rand_pcg::Pcg64Mcg::seed_from_u64(11);
    let mut uniform = move || ((random.next_u64() >> 11) as f64 + 0.5) / (1_u64 << 53) as f64;
    let sample = |i: usize| {
        let t = i as f64 / RATE_HZ;
        let tones: f64 =
            tones.iter().map(|m| m.peak * (std::f64::consts::TAU * m.frequency_hz * t + m.phase).cos()).sum();
        tones + noise * (-2.0 * uniform().ln()).sqrt() * (std::f64::consts::TAU * uniform()).cos()
    };
    Stored::new(RATE_HZ, 1, (0..n).map(sample).collect())
}

fn request(n: usize) -> Request {
    let capture = CaptureRef {
        path: "made.wav".to_owned(),
        blake3: String::new(),
        sample_rate_hz: RATE_HZ,
        channels: 1,
        frames: n as u64,
        format: "made".to_owned(),
    };
    Request::from_session(&Session::new(capture))
}

fn read(tones: &[Made], noise: f64, n: usize) -> Reading {
    let analysis = analyse(&capture(tones, noise, n), &request(n), None, &Watch::new()).unwrap();
    Reading::clone(&analysis.reading)
}

fn nearest(reading: &Reading, frequency_hz: f64) -> &Tone {
    let distance = |t: &&Tone| (t.frequency_hz - frequency_hz).abs();
    reading.tones.iter().min_by(|a, b| distance(a).total_cmp(&distance(b))).unwrap()
}

fn state(tone: &Tone, window: &str) -> ReadingState {
    tone.readings.iter().find(|r| r.window == window).unwrap().state
}

/// The tones that count.
fn counted(reading: &Reading) -> impl Iterator<Item = &Tone> {
    reading.tones.iter().filter(|t| t.verdict != Some(Verdict::Faint))
}

/// The pump's steady segment in little: a pair 3.8 lines apart, and a weak tone 62 dB under one 7.9 lines off.
fn pump() -> Vec<Made> {
    vec![
        made(24.96, 0.42),
        made(99.84, 0.11),
        made(100.00, 0.23),
        made(124.47, 4.9e-4),
        made(124.80, 0.61),
        made(249.6, 0.05),
    ]
}

#[test]
fn no_single_window_reads_the_pump_but_the_table_does() {
    let reading = read(&pump(), 1e-3, 24 * 8192);
    let found: Vec<f64> = counted(&reading).map(|t| (t.frequency_hz * 100.0).round() / 100.0).collect();
    assert_eq!(found, [24.96, 99.84, 100.0, 124.47, 124.8, 249.6]);
    for made in pump() {
        let tone = nearest(&reading, made.frequency_hz);
        let error = db(tone.amplitude / made.peak);
        // The sharpest clear pane may carry up to 0.1 dB of leakage, and the weak tone its noise.
        assert!(error.abs() < 0.2, "{} Hz: {error} dB", made.frequency_hz);
        let agreement = tone.agreement_db.unwrap();
        assert!(agreement < 0.25, "{} Hz: {agreement} dB", made.frequency_hz);
    }
    let (pair, weak) = (nearest(&reading, 99.84), nearest(&reading, 124.47));
    assert_eq!(state(pair, "blackman-harris"), ReadingState::Crowded);
    assert_eq!(state(pair, "flat-top"), ReadingState::Crowded);
    assert_eq!(state(pair, "hann"), ReadingState::Clear);
    assert_eq!(state(weak, "rectangular"), ReadingState::UnderSkirt);
    assert_eq!(state(weak, "hann"), ReadingState::UnderSkirt);
    assert_eq!(state(weak, "blackman-harris"), ReadingState::Clear);
    assert_eq!(state(weak, "flat-top"), ReadingState::Clear);
    assert!(weak.readings.iter().find(|r| r.window == "flat-top").unwrap().borrowed);
    assert_eq!((weak.verdict, pair.verdict), (Some(Verdict::Holds), Some(Verdict::Holds)));
}

/// Largest difference allowed between what any two windows say of a lone tone's level.
const AGREEMENT_DB: f64 = 0.001;

#[test]
fn all_windows_agree_on_a_lone_tone_at_every_offset_and_phase_from_three_cycles() {
    let n = 512;
    let mut request = request(n);
    let windows = "rectangular hann hamming blackman blackman-harris flat-top kaiser=7 dolph-chebyshev=70";
    request.windows = windows.split(' ').map(|w| crate::window::Window::parse(w).unwrap()).collect();
    for cycles in [3, 5, 17, 100, 252] {
        for tenth in 0..=5 {
            for phase in 0..6 {
                let nu = f64::from(cycles) + 0.1 * f64::from(tenth);
                let tone = Made { frequency_hz: nu * RATE_HZ / n as f64, peak: 0.4, phase: 1.05 * f64::from(phase) };
                let source = capture(&[tone], 0.0, n);
                let reading = analyse(&source, &request, None, &Watch::new()).unwrap().reading;
                let at = format!("{nu} cycles, phase {phase}");
                let row = nearest(&reading, nu * RATE_HZ / n as f64);
                for pane in &row.readings {
                    let error = db(pane.amplitude / 0.4);
                    assert!(error.abs() < AGREEMENT_DB, "{at}, {}: {error} dB, {:?}", pane.window, pane.state);
                }
            }
        }
    }
}

#[test]
fn every_window_of_the_catalogue_agrees_on_a_lone_tone_from_three_cycles() {
    let n = 512;
    let windows: Vec<_> =
        crate::window::catalogue().iter().map(|e| crate::window::Window::parse(e.name).unwrap()).collect();
    for nu in [3.0, 3.3, 4.5, 60.2] {
        for phase in 0..3 {
            let tone = Made { frequency_hz: nu * RATE_HZ / n as f64, peak: 0.4, phase: 2.1 * f64::from(phase) };
            let source = capture(&[tone], 0.0, n);
            let request = Request { windows: windows.clone(), ..request(n) };
            let reading = analyse(&source, &request, None, &Watch::new()).unwrap().reading;
            for pane in &nearest(&reading, nu * RATE_HZ / n as f64).readings {
                let error = db(pane.amplitude / 0.4);
                assert!(error.abs() < AGREEMENT_DB, "{nu} cycles, phase {phase}, {}: {error} dB", pane.window);
            }
        }
    }
}

#[test]
fn every_ledger_sums_to_its_level() {
    let n = 8192;
    let mut request = request(n);
    request.scale = Scale {
        quantity: Quantity::Acceleration,
        unit: "g".to_owned(),
        factor: Factor::UnitsPerFullScale(10.0),
        detector: Detector::PeakToPeak,
        reference: None,
    };
    let analysis = analyse(&capture(&[made(100.3, 0.5)], 1e-4, n), &request, None, &Watch::new()).unwrap();
    let tone = &analysis.reading.tones[0];
    // 0.5 of full scale, 10 g at full scale: 5 g peak, 10 g peak to peak; re 1 µm/s².
    let expected = db(10.0 * 9.806_65 / 1e-6);
    for reading in &tone.readings {
        let sum: f64 = reading.ledger.iter().map(|s| s.db).sum();
        assert!((sum - reading.level_db).abs() < 1e-9);
        assert!((reading.level_db - expected).abs() < 0.01, "{}: {}", reading.window, reading.level_db);
    }
    assert!((tone.level - 10.0).abs() < 0.01);
}

#[test]
fn noise_alone_gives_no_tones() {
    let with_tones = (1..=20).filter(|i| counted(&read(&[], 0.1, 3000 + 500 * i)).next().is_some()).count();
    assert_eq!(with_tones, 0);
}

#[test]
fn the_floor_is_that_of_the_noise() {
    let reading = read(&[made(1000.0, 0.5)], 0.01, 1 << 16);
    // A rectangular line's mean noise has the peak amplitude 2s/√N: re a full-scale sine.
    let floor = reading.panes[0].floor_db.unwrap();
    assert!((floor - db(2.0 * 0.01 / 256.0)).abs() < 0.5, "{floor}");
}

#[test]
fn a_tone_named_by_hand_is_read_where_it_is_held() {
    let n = 8192;
    let mut request = request(n);
    request.hand_tones = vec![HandTone::at(100.0, true), HandTone::at(310.2, false), HandTone::at(99_999.0, false)];
    let analysis = analyse(&capture(&[made(100.3, 0.5)], 1e-4, n), &request, None, &Watch::new()).unwrap();
    let tones: Vec<&Tone> = analysis.reading.tones.iter().filter(|t| t.tags.contains(&"by-hand".to_owned())).collect();
    assert_eq!(tones.len(), 2);
    assert!(tones[0].tags.ends_with(&["by-hand".to_owned(), "held".to_owned()]), "{:?}", tones[0].tags);
    assert!(tones[0].readings.iter().all(|r| r.peak_hz == 100.0 && r.borrowed));
    assert_eq!(tones[1].tags, ["by-hand"]);
}

#[test]
fn the_weakest_are_left_out_and_said_to_be() {
    let n = 8192;
    let tones: Vec<Made> = (1..=10).map(|i| made(f64::from(i) * 200.0 + 0.3, 0.01 * f64::from(i))).collect();
    let mut request = request(n);
    request.tuning.max_tones = 3;
    let reading = analyse(&capture(&tones, 1e-5, n), &request, None, &Watch::new()).unwrap().reading;
    assert_eq!(counted(&reading).count(), 3);
    assert!(counted(&reading).all(|t| t.frequency_hz > 1500.0));
    assert!(reading.warnings.iter().any(|w| w.code == "more-tones" && w.text.starts_with("7 more")));
}

#[test]
fn what_cannot_be_read_is_refused_with_a_reason() {
    let source = Stored::new(RATE_HZ, 1, vec![0.0, 1.0, f64::NAN, 2.0, 0.0, 1.0, 0.0, 1.0, 5.0, 3.0]);
    let spanning = |start, samples| Request { span: Span { start, samples }, ..request(10) };
    let error = |request: &Request| analyse(&source, request, None, &Watch::new()).unwrap_err();
    assert_eq!(error(&spanning(0, 10)), ReadingError::NotFinite { at: 2 });
    assert_eq!(error(&spanning(0, 7)), ReadingError::TooShort { samples: 7 });
    assert_eq!(error(&spanning(0, Segment::MOST + 1)), ReadingError::TooLong { samples: Segment::MOST + 1 });
    assert!(matches!(error(&spanning(3, 9)), ReadingError::Signal(_)));
    for sample_rate_hz in [0.0, -1.0, f64::NAN, f64::INFINITY, 1e300, 1e-300] {
        let refused = error(&Request { sample_rate_hz, ..spanning(3, 8) });
        assert!(matches!(refused, ReadingError::NoRate { .. }), "{sample_rate_hz:e}");
        assert!(refused.to_string().ends_with("give one from 1e-6 to 1e12 Hz"), "{refused}");
    }
}

#[test]
fn silence_and_the_shortest_segments_are_read() {
    for n in [8, 9, 16, 31, 64, 100] {
        let source = Stored::new(RATE_HZ, 1, vec![0.0; n]);
        let reading = analyse(&source, &request(n), None, &Watch::new()).unwrap().reading;
        assert!(reading.tones.is_empty(), "N = {n}");
        let json = serde_json::to_string(&*reading).unwrap();
        assert!(!json.contains("NaN") && !json.contains("inf"));
    }
}
