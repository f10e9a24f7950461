//! Data of others whose tones are published or labelled: see `tests/data/README.md` for where they come from.

use std::path::PathBuf;

use panewise::capture;
use panewise::reading::{Reading, Request, Verdict, analyse};
use panewise::session::{CaptureRef, Session};
use panewise::signal::{Source, Watch};

fn path(name: &str) -> PathBuf {
    PathBuf::from(env!("CARGO_MANIFEST_DIR")).join("tests/data").join(name)
}

fn reading(source: &dyn Source, channel: usize) -> Reading {
    let mut session = Session::new(CaptureRef {
        path: "open data".to_owned(),
        blake3: String::new(),
        sample_rate_hz: source.sample_rate_hz(),
        channels: source.n_channels(),
        frames: source.n_frames(),
        format: "open data".to_owned(),
    });
    session.channel = channel;
    let analysis = analyse(source, &Request::from_session(&session), None, &Watch::new()).unwrap();
    Reading::clone(&analysis.reading)
}

/// The generator writes sines of 100 µV into files of 16 bits; its labels say their frequencies (channel names of the
/// file).
#[test]
fn the_generators_sines_are_as_labelled() {
    let capture = capture::open(&path("generator.wav")).unwrap();
    let microvolts = 0.030_518_043_793_4 * 32_768.0;
    for (channel, frequency_hz) in (1..).zip([1.0, 8.0, 8.1777, 8.5, 15.0, 17.0, 50.0]) {
        let reading = reading(&*capture.source, channel);
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
    let reading = reading(&*capture.source, 0);
    let tones = reading.tones.iter().filter(|t| t.verdict != Some(Verdict::Faint)).count();
    assert_eq!(tones, 0);
}

/// 440 Hz at -3.00 dB re full scale, as its name and level say.
#[test]
fn the_440_hertz_file_reads_as_named() {
    let capture = capture::open(&path("sine-440.wav")).unwrap();
    for channel in 0..2 {
        let reading = reading(&*capture.source, channel);
        let strongest = reading.tones.iter().max_by(|a, b| a.amplitude.total_cmp(&b.amplitude)).unwrap();
        assert!((strongest.frequency_hz - 440.0).abs() < 1e-4, "{} Hz", strongest.frequency_hz);
        assert!((strongest.amplitude - 10.0_f64.powf(-3.0 / 20.0)).abs() < 1e-5, "{}", strongest.amplitude);
        for pane in &strongest.readings {
            // Whole periods: every window agrees.
            assert!((pane.amplitude / strongest.amplitude - 1.0).abs() < 1e-5, "{}: {}", pane.window, pane.amplitude);
        }
    }
}
