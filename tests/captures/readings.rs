//! What the program reads from the samples, against what was put into them.

use panewise::capture;
use panewise::reading::{Reading, ReadingState, Request, Tone, analyse};
use panewise::session::{CaptureRef, Session};
use panewise::signal::{Span, Watch};
use panewise::units::{Factor, Quantity, Scale, db};
use panewise::window::Window;
use realfft::num_complex::Complex64;
use serde_json::Value;

use crate::truth::{folder, truth_of};

struct TrueTone {
    frequency_hz: f64,
    peak: f64,
    phase_rad: f64,
    noise_density: f64,
}

fn true_tones(truth: &Value, channel: usize) -> Vec<TrueTone> {
    let number = |tone: &Value, key: &str| tone[key].as_f64().unwrap();
    let tones = truth["content"][channel]["tones"].as_array().unwrap();
    let made = |t: &Value| TrueTone {
        frequency_hz: number(t, "frequency_hz"),
        peak: number(t, "peak"),
        phase_rad: number(t, "phase_rad"),
        noise_density: number(t, "noise_density"),
    };
    tones.iter().map(made).collect()
}

/// The steady stretch of a sample's first channel in the standing set of windows.
fn read(truth: &Value) -> Reading {
    let file = truth["file"].as_str().unwrap();
    let capture = capture::open(&folder().join(file)).unwrap();
    let steady = &truth["steady"][0];
    let mut session = Session::new(CaptureRef {
        path: file.to_owned(),
        blake3: String::new(),
        sample_rate_hz: capture.sample_rate_hz(),
        channels: capture.n_channels(),
        frames: capture.n_frames(),
        format: capture.format.clone(),
    });
    session.segments[0].span =
        Span { start: steady["start_sample"].as_u64().unwrap(), samples: steady["samples"].as_u64().unwrap() };
    session.scales[0] = Scale {
        quantity: Quantity::parse(&truth["quantity"].as_str().unwrap().replace(' ', "-")).unwrap(),
        unit: truth["unit"].as_str().unwrap().to_owned(),
        factor: Factor::UnitsPerFullScale(truth["units_per_full_scale"].as_f64().unwrap()),
        ..Scale::default()
    };
    let analysis = analyse(&*capture.source, &Request::from_session(&session), None, &Watch::new()).unwrap();
    Reading::clone(&analysis.reading)
}

fn nearest(reading: &Reading, frequency_hz: f64) -> &Tone {
    let distance = |t: &&Tone| (t.frequency_hz - frequency_hz).abs();
    reading.tones.iter().min_by(|a, b| distance(a).total_cmp(&distance(b))).unwrap()
}

/// What the true neighbours do to the level of tone `i` in a window, dB.
fn leak_db(window: &str, n: usize, line_hz: f64, tones: &[TrueTone], i: usize) -> f64 {
    let kernel = Window::parse(window).unwrap().kernel(n);
    let phasor = |t: &TrueTone| Complex64::from_polar(t.peak / 2.0, t.phase_rad);
    let nu = |t: &TrueTone| t.frequency_hz / line_hz;
    let own = phasor(&tones[i]) * kernel.at(0.0);
    let others = tones.iter().enumerate().filter(|(j, _)| *j != i);
    let leak: Complex64 = others
        .map(|(_, t)| {
            phasor(t) * kernel.at(nu(&tones[i]) - nu(t)) + phasor(t).conj() * kernel.at(nu(&tones[i]) + nu(t))
        })
        .sum();
    db((own + leak).norm() / own.norm())
}

/// A tone is lone when no other stands within this of it, lines.
const LONE_LINES: f64 = 12.0;

/// A tone is strong when it stands this much over one rectangular line's mean noise: noise then moves even a flat-top's
/// reading (noise bandwidth 3.8 lines) by a standard uncertainty of 0.012 dB at most.
const STRONG_DB: f64 = 60.0;

#[test]
fn every_strong_lone_tone_of_the_pump_is_read_right_in_every_pane() {
    let truth = truth_of("saltmarsh-pump2-bearing.wav");
    let reading = read(&truth);
    let tones = true_tones(&truth, 0);
    let line_hz = reading.panes[0].line_spacing_hz;
    let duration_s = reading.segment.duration_s;
    let n = reading.segment.samples as usize;
    assert!(duration_s >= 24.0);
    let mut n_checked = 0;
    for (i, tone) in tones.iter().enumerate() {
        let lone = tones
            .iter()
            .enumerate()
            .all(|(j, other)| j == i || (other.frequency_hz - tone.frequency_hz).abs() > LONE_LINES * line_hz);
        // Power over a line's mean noise: A²/4·N² over G·fs·N/2.
        let snr = tone.peak * tone.peak * duration_s / (2.0 * tone.noise_density);
        if !lone || 10.0 * snr.log10() < STRONG_DB {
            continue;
        }
        n_checked += 1;
        for pane in &nearest(&reading, tone.frequency_hz).readings {
            let at = format!("{} Hz through {}", tone.frequency_hz, pane.window);
            let error = db(pane.amplitude / tone.peak);
            let allowed = match pane.window.as_str() {
                "flat-top" => 0.05,
                "rectangular" if leak_db("rectangular", n, line_hz, &tones, i).abs() >= 0.05 => continue,
                _ => 0.1,
            };
            assert!(error.abs() < allowed, "{at}: {error} dB");
            let off = (pane.peak_hz - tone.frequency_hz).abs() / line_hz;
            assert!(off < 0.05, "{at}: {off} lines off");
            assert_eq!(pane.borrowed, pane.window == "flat-top", "{at}");
        }
    }
    assert!(n_checked >= 7, "only {n_checked} strong lone tones");
}

#[test]
fn every_tone_of_the_pump_is_found_and_no_other() {
    let truth = truth_of("saltmarsh-pump2-bearing.wav");
    let reading = read(&truth);
    let tones = true_tones(&truth, 0);
    assert_eq!(reading.tones.len(), tones.len());
    for (read, made) in reading.tones.iter().zip(&tones) {
        let off = (read.frequency_hz - made.frequency_hz).abs() / reading.panes[0].line_spacing_hz;
        assert!(off < 0.1, "{} Hz read as {} Hz", made.frequency_hz, read.frequency_hz);
    }
}

/// No single window reads the pump: the pair is crowded in the flat-top, the weak tone under the skirts of the others.
#[test]
fn the_pumps_states_tell_why_no_single_window_reads_it() {
    let reading = read(&truth_of("saltmarsh-pump2-bearing.wav"));
    let state = |frequency_hz: f64, window: &str| {
        let tone = nearest(&reading, frequency_hz);
        tone.readings.iter().find(|r| r.window == window).unwrap().state
    };
    assert_eq!(state(99.84, "flat-top"), ReadingState::Crowded);
    assert_eq!(state(100.0, "flat-top"), ReadingState::Crowded);
    assert_eq!(state(99.84, "hann"), ReadingState::Clear);
    for window in ["rectangular", "hann", "hamming"] {
        assert_eq!(state(124.47, window), ReadingState::UnderSkirt, "{window}");
    }
    assert_eq!(state(124.47, "blackman-harris"), ReadingState::Clear);
    assert_eq!(state(124.47, "flat-top"), ReadingState::Clear);
}

/// The exciter's 10 m/s² r.m.s. at 159.155 Hz, to the last digit of "10.00" and "159.155", through every pane.
#[test]
fn the_exciter_reads_ten_through_every_pane() {
    let reading = read(&truth_of("saltmarsh-exciter.wav"));
    let tone = nearest(&reading, 159.155);
    assert!((tone.level - 10.0).abs() < 0.005, "{}", tone.level);
    for pane in &tone.readings {
        assert_eq!(pane.state, ReadingState::Clear, "{}", pane.window);
        let rms = pane.amplitude / 2.0_f64.sqrt();
        assert!((rms - 10.0).abs() < 0.005, "{}: {rms}", pane.window);
        assert!((pane.peak_hz - 159.155).abs() < 0.0005, "{}: {}", pane.window, pane.peak_hz);
        // 10 m/s² is 140 dB re 1 µm/s² (ISO 1683).
        assert!((pane.level_db - 140.0).abs() < 0.005, "{}: {}", pane.window, pane.level_db);
    }
}

/// 94 dB re 20 µPa at 1 kHz, as the calibrator states it (common practice, IEC 60942 calibrators).
#[test]
fn the_sound_calibrator_reads_94_decibels() {
    let reading = read(&truth_of("saltmarsh-sound-calibrator.wav"));
    let tone = nearest(&reading, 1000.0);
    for pane in &tone.readings {
        assert!((pane.level_db - 94.0).abs() < 0.01, "{}: {}", pane.window, pane.level_db);
    }
}

/// The fan's one tone is found in its noise, near its true level.
#[test]
fn the_fans_tone_is_found_in_its_noise() {
    let truth = truth_of("saltmarsh-fan-duct.wav");
    let reading = read(&truth);
    for made in true_tones(&truth, 0) {
        let tone = nearest(&reading, made.frequency_hz);
        let u = (made.noise_density / reading.segment.duration_s).sqrt() / made.peak;
        // Six standard deviations of the widest clear pane, whose noise is ENBW times the bound's.
        assert!(db(tone.amplitude / made.peak).abs() < db(1.0 + 6.0 * 2.0 * u), "{} Hz", made.frequency_hz);
    }
    assert!(reading.tones.len() < 4, "{} tones", reading.tones.len());
}
