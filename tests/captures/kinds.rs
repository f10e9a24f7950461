//! What each sample capture holds, as its user would name it.

use panewise::capture;
use panewise::reading::{Reading, Request, analyse};
use panewise::session::{CaptureRef, Command, Session};
use panewise::signal::{Source, Span, Stored, Watch};
use panewise::tone::{Kind, suggest_steady};

use crate::truth::{folder, truth_of};

/// The suggested stretch, or the whole where there is none, as a first reading has it.
fn read(source: &dyn Source, kind: Option<Kind>) -> Reading {
    let rate_hz = source.sample_rate_hz();
    let mut session = Session::new(CaptureRef {
        path: "sample".to_owned(),
        blake3: String::new(),
        sample_rate_hz: rate_hz,
        channels: source.n_channels(),
        frames: source.n_frames(),
        format: String::new(),
    });
    if let Some(span) = suggest_steady(source, 0, rate_hz, &Watch::new()).unwrap() {
        session.segments[0].span = span;
    }
    Command::SetKind(kind).apply(&mut session);
    let analysis = analyse(source, &Request::from_session(&session), None, &Watch::new()).unwrap();
    Reading::clone(&analysis.reading)
}

fn read_file(file: &str, kind: Option<Kind>) -> Reading {
    read(&*capture::open(&folder().join(file)).unwrap().source, kind)
}

/// The strain's numbers: the third column at a decimal comma, after two lines of titles.
fn strain() -> Stored {
    let text = std::fs::read_to_string(folder().join("saltmarsh-sluice-strain.csv")).unwrap();
    let number = |line: &str| line.rsplit(';').next()?.trim().replace(',', ".").parse::<f64>().ok();
    let samples: Vec<f64> = text.lines().filter_map(number).collect();
    assert_eq!(samples.len() as u64, truth_of("saltmarsh-sluice-strain.csv")["frames"].as_u64().unwrap());
    Stored::new(10.0, 1, samples)
}

fn why(reading: &Reading) -> &str {
    reading.segment.kind_why.as_deref().unwrap()
}

fn warns(reading: &Reading, code: &str) -> bool {
    reading.warnings.iter().any(|w| w.code == code)
}

#[test]
fn machines_exciters_calibrators_and_gates_are_of_tones() {
    for file in ["saltmarsh-pump2-bearing.wav", "saltmarsh-exciter.wav", "saltmarsh-sound-calibrator.wav"] {
        let reading = read_file(file, None);
        assert_eq!(reading.segment.kind, Some(Kind::Tones), "{file}: {}", why(&reading));
        assert!(why(&reading).contains("more than 99.9 % of the power"), "{file}: {}", why(&reading));
        assert!(!warns(&reading, "transient"), "{file}");
    }
    let reading = read(&strain(), None);
    assert_eq!(reading.segment.kind, Some(Kind::Tones), "{}", why(&reading));
}

/// Its tone carries 1.27e-3 of some 5.1e-3 Pa²: a quarter.
#[test]
fn the_fan_duct_is_random_and_its_tone_is_read_all_the_same() {
    let reading = read_file("saltmarsh-fan-duct.wav", None);
    assert_eq!(reading.segment.kind, Some(Kind::Random), "{}", why(&reading));
    assert!(why(&reading).starts_with("1 tone carries 24.") || why(&reading).starts_with("1 tone carries 25."));
    assert!(reading.tones.iter().any(|t| (t.frequency_hz - 236.5).abs() < 0.05));
}

#[test]
fn the_hammer_tap_is_a_transient_and_warned_of() {
    let file = "saltmarsh-hammer-tap.wav";
    let reading = read_file(file, None);
    assert_eq!(reading.segment.kind, Some(Kind::Transient), "{}", why(&reading));
    assert!(why(&reading).contains("from its peak near 0.5"), "{}", why(&reading));
    assert!(warns(&reading, "transient") && !warns(&reading, "not-steady"));
    // The user's word goes before what is found.
    let reading = read_file(file, Some(Kind::Tones));
    assert_eq!(reading.segment.kind, Some(Kind::Tones));
    assert!(why(&reading).starts_with("set by hand; found to be transient: the level falls by"), "{}", why(&reading));
    assert!(!warns(&reading, "transient"));
}

/// The pump from standstill to standstill is work that is switched on and off, not an event.
#[test]
fn the_pump_with_its_run_up_and_run_down_is_no_transient() {
    let source = capture::open(&folder().join("saltmarsh-pump2-bearing.wav")).unwrap().source;
    let mut session = Session::new(CaptureRef {
        path: "pump".to_owned(),
        blake3: String::new(),
        sample_rate_hz: 8192.0,
        channels: 2,
        frames: source.n_frames(),
        format: String::new(),
    });
    session.segments[0].span = Span { start: 0, samples: source.n_frames() };
    let analysis = analyse(&*source, &Request::from_session(&session), None, &Watch::new()).unwrap();
    assert_ne!(analysis.reading.segment.kind, Some(Kind::Transient), "{}", why(&analysis.reading));
    assert!(warns(&analysis.reading, "not-steady"));
}
