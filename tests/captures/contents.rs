//! The committed samples are those the generator makes, and hold what `truth.json` says.

use panewise::capture;
use panewise::signal::{Span, Watch, read_channel};

use crate::samples;
use crate::truth::{fit, folder, truth_of, truths};

#[test]
fn the_generator_rewrites_every_committed_file_byte_for_byte() {
    let made = samples::files().unwrap();
    let mut n_bytes = 0;
    for (name, bytes) in &made {
        let committed = std::fs::read(folder().join(name)).unwrap();
        assert!(committed == *bytes, "{name} differs: run `cargo run --example make_sample_captures`");
        n_bytes += bytes.len();
    }
    assert_eq!(made.len(), std::fs::read_dir(folder()).unwrap().count(), "a file nobody makes");
    assert!(n_bytes < 12_000_000, "{n_bytes} bytes of samples");
}

#[test]
fn every_wav_opens_with_its_rate_channels_frames_and_format() {
    for truth in truths() {
        let path = folder().join(truth["file"].as_str().unwrap());
        let opened = capture::open(&path);
        if path.extension().unwrap() == "csv" {
            let message = opened.unwrap_err().to_string();
            assert!(
                message.ends_with("is not a WAV file but a text file: this version opens WAV recordings"),
                "{message}"
            );
            continue;
        }
        let capture = opened.unwrap();
        assert_eq!(capture.format, truth["format"].as_str().unwrap());
        assert_eq!(capture.bits_per_sample, Some(24));
        assert_eq!(capture.sample_rate_hz(), truth["sample_rate_hz"].as_f64().unwrap());
        assert_eq!(capture.n_channels() as u64, truth["channels"].as_u64().unwrap());
        assert_eq!(capture.n_frames(), truth["frames"].as_u64().unwrap());
        assert!(capture.doubts.is_empty() && !capture.truncated, "{:?}", capture.doubts);
    }
}

/// Six standard deviations of an amplitude's fit: u(A) = sqrt(G/T) (Rife and Boorstyn 1974, with the local density).
const DEVIATIONS: f64 = 6.0;

#[test]
fn every_tone_has_its_level_and_phase() {
    for truth in truths() {
        let Ok(capture) = capture::open(&folder().join(truth["file"].as_str().unwrap())) else { continue };
        let Some(steady) = truth["steady"].get(0) else { continue };
        let rate_hz = capture.sample_rate_hz();
        let span =
            Span { start: steady["start_sample"].as_u64().unwrap(), samples: steady["samples"].as_u64().unwrap() };
        let factor = truth["units_per_full_scale"].as_f64().unwrap();
        for (channel, content) in truth["content"].as_array().unwrap().iter().enumerate() {
            let samples = read_channel(&*capture.source, channel, span, &Watch::new()).unwrap();
            let tones = content["tones"].as_array().unwrap();
            let frequencies: Vec<f64> = tones.iter().map(|t| t["frequency_hz"].as_f64().unwrap()).collect();
            let fitted = fit(&samples, rate_hz, &frequencies);
            for (tone, (cosine, sine)) in tones.iter().zip(fitted) {
                let (peak, phase) = (tone["peak"].as_f64().unwrap(), tone["phase_rad"].as_f64().unwrap());
                let density = tone["noise_density"].as_f64().unwrap();
                let u = (density * rate_hz / span.samples as f64).sqrt();
                let (off_cosine, off_sine) = (cosine * factor - peak * phase.cos(), sine * factor + peak * phase.sin());
                assert!(
                    off_cosine.hypot(off_sine) < DEVIATIONS * u,
                    "{}: {tone}: {off_cosine} {off_sine}",
                    truth["file"]
                );
                assert_eq!(peak, tone["rms"].as_f64().unwrap() * 2.0_f64.sqrt());
            }
        }
    }
}

#[test]
fn the_pump_holds_the_pair_and_the_weak_tone_of_the_scenario() {
    let truth = truth_of("saltmarsh-pump2-bearing.wav");
    let tones = truth["content"][0]["tones"].as_array().unwrap();
    let tone = |f: f64| tones.iter().find(|t| t["frequency_hz"] == f).unwrap();
    let rms = |f: f64| tone(f)["rms"].as_f64().unwrap();
    let under_vane_pass_db = 20.0 * (rms(124.80) / rms(124.47)).log10();
    assert!((under_vane_pass_db - 62.0).abs() < 0.5, "{under_vane_pass_db} dB");
    assert!(rms(99.84) > 0.0 && rms(100.00) > 0.0);
    // Over the mean noise of a rectangular line of 24 s.
    let snr_db = 10.0 * (rms(124.47).powi(2) * 24.0 / tone(124.47)["noise_density"].as_f64().unwrap()).log10();
    assert!((25.0..30.0).contains(&snr_db), "{snr_db} dB");
    assert!(truth["steady"][0]["end_s"].as_f64().unwrap() - truth["steady"][0]["start_s"].as_f64().unwrap() >= 24.0);
}

#[test]
fn the_tap_rises_from_rest_and_dies_inside_its_file() {
    let capture = capture::open(&folder().join("saltmarsh-hammer-tap.wav")).unwrap();
    let all = Span { start: 0, samples: capture.n_frames() };
    let samples = read_channel(&*capture.source, 0, all, &Watch::new()).unwrap();
    let rms = |part: &[f64]| (part.iter().map(|x| x * x).sum::<f64>() / part.len() as f64).sqrt();
    let (before, tap, end) = (rms(&samples[..4000]), rms(&samples[4096..6000]), rms(&samples[28_000..]));
    assert!(tap > 300.0 * before, "{tap} over {before}");
    assert!((end / before - 1.0).abs() < 0.1, "{end} after, {before} before");
}

#[test]
fn hashing_tells_progress_stops_when_cancelled_and_gives_the_hash_of_the_bytes() {
    let path = folder().join("saltmarsh-pump2-bearing.wav");
    let capture = capture::open(&path).unwrap();
    let watch = Watch::new();
    let expected = blake3::hash(&std::fs::read(&path).unwrap()).to_hex().to_string();
    assert_eq!(capture.blake3(&watch).unwrap(), expected);
    assert_eq!(watch.progress(), 1.0);
    watch.cancel();
    let capture::CaptureError::Io { reason, .. } = capture.blake3(&watch).unwrap_err() else { panic!() };
    assert_eq!(reason.kind(), std::io::ErrorKind::Interrupted);
}
