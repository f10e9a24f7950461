//! Data of others whose tones are published or labelled: see `tests/data/README.md` for where they come from.

use std::f64::consts::TAU;
use std::path::PathBuf;

use nalgebra::{DMatrix, DVector};
use panewise::capture;
use panewise::reading::{Reading, Request, Tone, Verdict, analyse};
use panewise::session::{CaptureRef, HandTone, Session};
use panewise::signal::{Source, Stored, Watch};

fn path(name: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/data").join(name)
}

/// The values below a heading.
fn values(name: &str) -> Vec<f64> {
    std::fs::read_to_string(path(name)).unwrap().lines().skip(1).map(|line| line.parse().unwrap()).collect()
}

fn reading(source: &dyn Source, channel: usize, hand_tones: Vec<HandTone>) -> Reading {
    let mut session = Session::new(CaptureRef {
        path: "open data".to_owned(),
        blake3: String::new(),
        sample_rate_hz: source.sample_rate_hz(),
        channels: source.n_channels(),
        frames: source.n_frames(),
        format: "open data".to_owned(),
    });
    session.channel = channel;
    session.hand_tones = hand_tones;
    let analysis = analyse(source, &Request::from_session(&session), None, &Watch::new()).unwrap();
    Reading::clone(&analysis.reading)
}

fn nearest(reading: &Reading, frequency_hz: f64) -> &Tone {
    let distance = |t: &Tone| (t.frequency_hz - frequency_hz).abs();
    reading.tones.iter().min_by(|a, b| distance(a).total_cmp(&distance(b))).unwrap()
}

/// NIST Statistical Reference Datasets, nonlinear regression, ENSO: certified parameters b1 to b9 of
/// y = b1 + b2 cos(2πx/12) + b3 sin(2πx/12) + b5 cos(2πx/b4) + b6 sin(2πx/b4) + b8 cos(2πx/b7) + b9 sin(2πx/b7),
/// x = 1..168, and their standard deviations.
const ENSO: [(f64, f64); 9] = [
    (10.510_749_193, 0.174_888_324_67),
    (3.076_212_808_5, 0.243_100_521_39),
    (0.532_801_382_27, 0.243_546_866_18),
    (44.311_088_7, 0.944_080_259_76),
    (-1.623_142_858_6, 0.280_783_696_11),
    (0.525_544_937_56, 0.480_737_011_19),
    (26.887_614_44, 0.416_129_391_3),
    (0.212_322_884_88, 0.514_600_229_11),
    (1.496_687_041_8, 0.254_344_688_93),
];

/// The certified residual standard deviation, 159 degrees of freedom.
const ENSO_RESIDUAL: f64 = 2.226_964_240_3;

/// Period, and the places of the parameters: of the period itself where it was fitted, of cosine and sine.
const ENSO_TONES: [(f64, Option<usize>, usize); 3] =
    [(12.0, None, 1), (44.311_088_7, Some(3), 4), (26.887_614_44, Some(6), 7)];

/// The covariance of b1 to b9 at the certified values, from the derivatives at every sample.
fn enso_covariance() -> DMatrix<f64> {
    let row = |i: usize| {
        let x = (i + 1) as f64;
        let mut row = DVector::zeros(9);
        row[0] = 1.0;
        for (period, fitted, at) in ENSO_TONES {
            let angle = TAU * x / period;
            row[at] = angle.cos();
            row[at + 1] = angle.sin();
            if let Some(place) = fitted {
                row[place] = (ENSO[at].0 * angle.sin() - ENSO[at + 1].0 * angle.cos()) * angle / period;
            }
        }
        row
    };
    let information: DMatrix<f64> = (0..168).map(|i| &row(i) * row(i).transpose()).sum();
    information.try_inverse().unwrap() * (ENSO_RESIDUAL * ENSO_RESIDUAL)
}

/// A fit has settled when it is this near the least squares, as a part of what noise does.
const SETTLED: f64 = 1e-4;

fn read_enso() -> Reading {
    let hand = |period: f64, held: bool| HandTone::at(1.0 / period, held);
    let source = Stored::new(1.0, 1, values("enso.csv"));
    reading(&source, 0, vec![hand(12.0, true), hand(44.0, false), hand(27.0, false)])
}

#[test]
fn the_certified_three_tone_fit_is_found() {
    let reading = read_enso();
    assert_eq!(reading.tones.len(), 3);
    for (period, fitted, at) in ENSO_TONES {
        let tone = nearest(&reading, 1.0 / period);
        let (cosine, sine) = (ENSO[at].0, ENSO[at + 1].0);
        let off = (tone.amplitude - cosine.hypot(sine)).abs();
        assert!(off < SETTLED * ENSO[at].1, "{period} months: amplitude {} is {off:e} off", tone.amplitude);
        let months_off = (1.0 / tone.frequency_hz - period).abs();
        let most = fitted.map_or(1e-9, |place| SETTLED * ENSO[place].1);
        assert!(months_off < most, "{period} months: {months_off:e} off");
        // b cos + c sin = A cos(angle - atan2(c, b)); the first sample is x = 1.
        let phase = TAU / period - sine.atan2(cosine);
        let turn = (tone.phase_rad.unwrap() - phase) / TAU;
        assert!((turn - turn.round()).abs() < SETTLED, "{period} months: phase {turn} turns off");
    }
}

/// Our density is the local one, of 84 lines and fewer: its own relative standard deviation is some 0.1, and the
/// certified one is over the whole band. A third covers both.
const ENSO_NOISE: f64 = 0.33;

#[test]
fn certified_standard_deviations_are_stated() {
    let covariance = enso_covariance();
    for (place, (_, deviation)) in ENSO.iter().enumerate() {
        let off = covariance[(place, place)].sqrt() / deviation - 1.0;
        assert!(off.abs() < 1e-6, "the certified deviation of b{} is not that of the model: {off:e}", place + 1);
    }
    let reading = read_enso();
    for (period, fitted, at) in ENSO_TONES {
        let tone = nearest(&reading, 1.0 / period);
        let (cosine, sine) = (ENSO[at].0, ENSO[at + 1].0);
        let (x, y) = (cosine / cosine.hypot(sine), sine / cosine.hypot(sine));
        let variance = x * x * covariance[(at, at)]
            + 2.0 * x * y * covariance[(at, at + 1)]
            + y * y * covariance[(at + 1, at + 1)];
        let ratio = tone.amplitude_u95.unwrap() / 2.0 / variance.sqrt();
        assert!((ratio - 1.0).abs() < ENSO_NOISE, "{period} months: u(A) is {ratio} of the certified");
        let Some(place) = fitted else {
            assert_eq!(tone.frequency_u95_hz, Some(0.0));
            continue;
        };
        let certified = ENSO[place].1 / (period * period);
        let ratio = tone.frequency_u95_hz.unwrap() / 2.0 / certified;
        assert!((ratio - 1.0).abs() < ENSO_NOISE, "{period} months: u(f) is {ratio} of the certified");
    }
}

/// IERS Conventions (2010), Table 8.1, zonal tides of the length of day: cycles a day, peak amplitude (µs), and how far
/// ours may be off it, as a part of it: what the noise of the data does.
const TIDES: [(f64, f64, f64); 9] = [
    (0.073_202_202_630_732, 361.738_5, 0.03),
    (0.073_349_296_422_045, 147.182_0, 0.04),
    (0.036_291_647_088_030, 191.731_8, 0.03),
    (0.109_493_849_718_762, 68.291, 0.05),
    (0.109_640_943_510_075, 28.298, 0.12),
    (0.067_726_383_975_503, 31.240, 0.12),
    (0.031_434_736_887_473, 36.018, 0.25),
    (0.072_583_294_176_059, 15.433, 0.2),
    (0.140_928_586_606_235, 10.904, 0.25),
];

/// Cycles a day.
const TIDE_OFF: f64 = 2e-6;

/// The tides of 13.66 and 13.63 days stand 3.5 lines apart in these 65 years.
#[test]
fn the_tides_in_the_length_of_day_are_read() {
    let source = Stored::new(1.0, 1, values("length-of-day.csv"));
    let reading = reading(&source, 0, Vec::new());
    for (cycles_a_day, amplitude, part) in TIDES {
        let tone = nearest(&reading, cycles_a_day);
        let period = 1.0 / cycles_a_day;
        let off = tone.frequency_hz - cycles_a_day;
        // The weakest tides are known no better than their noise lets them.
        let most = TIDE_OFF.max(tone.frequency_u95_hz.unwrap());
        assert!(off.abs() < most, "{period} days: {off:e} cycles a day off");
        let off = tone.amplitude / amplitude - 1.0;
        assert!(off.abs() < part, "{period} days: {} µs instead of {amplitude}", tone.amplitude);
    }
}

/// The generator writes sines of 100 µV into files of 16 bits; its labels say their frequencies (channel names of the
/// file).
#[test]
fn the_generators_sines_are_as_labelled() {
    let capture = capture::open(&path("generator.wav")).unwrap();
    let microvolts = 0.030_518_043_793_4 * 32_768.0;
    for (channel, frequency_hz) in (1..).zip([1.0, 8.0, 8.1777, 8.5, 15.0, 17.0, 50.0]) {
        let reading = reading(&*capture.source, channel, Vec::new());
        let strongest = reading.tones.iter().max_by(|a, b| a.amplitude.total_cmp(&b.amplitude)).unwrap();
        let off = strongest.frequency_hz - frequency_hz;
        assert!(off.abs() < 2e-5, "{frequency_hz} Hz read {off:e} Hz off");
        let amplitude = strongest.amplitude * microvolts;
        assert!((amplitude - 100.0).abs() < 0.25, "{frequency_hz} Hz: {amplitude} µV");
    }
}

#[test]
fn the_generators_noise_holds_no_tone() {
    let capture = capture::open(&path("generator.wav")).unwrap();
    let reading = reading(&*capture.source, 0, Vec::new());
    let tones = reading.tones.iter().filter(|t| t.verdict != Some(Verdict::Faint)).count();
    assert_eq!(tones, 0);
}

/// 440 Hz at -3.00 dB re full scale, as its name and level say.
#[test]
fn the_440_hertz_file_reads_as_named() {
    let capture = capture::open(&path("sine-440.wav")).unwrap();
    for channel in 0..2 {
        let reading = reading(&*capture.source, channel, Vec::new());
        let strongest = reading.tones.iter().max_by(|a, b| a.amplitude.total_cmp(&b.amplitude)).unwrap();
        assert!((strongest.frequency_hz - 440.0).abs() < 1e-4, "{} Hz", strongest.frequency_hz);
        assert!((strongest.amplitude - 10.0_f64.powf(-3.0 / 20.0)).abs() < 1e-5, "{}", strongest.amplitude);
        for pane in &strongest.readings {
            // Whole periods: every window agrees.
            assert!((pane.amplitude / strongest.amplitude - 1.0).abs() < 1e-5, "{}: {}", pane.window, pane.amplitude);
        }
    }
}
