//! Where the sample captures are found steady, against where they truly are.

use panewise::capture;
use panewise::signal::{Span, Watch};
use panewise::tone::suggest_steady;

use crate::truth::{folder, truth_of};

fn suggest(file: &str, channel: usize) -> Option<Span> {
    let capture = capture::open(&folder().join(file)).unwrap();
    suggest_steady(&*capture.source, channel, capture.sample_rate_hz(), &Watch::new()).unwrap()
}

#[test]
fn the_pump_is_steady_for_24_s_and_never_while_it_runs_up_or_down() {
    let file = "saltmarsh-pump2-bearing.wav";
    let steady = &truth_of(file)["steady"][0];
    let start = steady["start_sample"].as_u64().unwrap();
    let end = start + steady["samples"].as_u64().unwrap();
    for channel in 0..2 {
        let span = suggest(file, channel).unwrap();
        assert!(span.start >= start && span.end() <= end, "channel {channel}: {span:?} in {start} to {end}");
        assert!(span.samples >= 24 * 8192, "channel {channel}: {} s", span.samples as f64 / 8192.0);
    }
}

#[test]
fn what_is_steady_throughout_is_suggested_whole() {
    for file in ["saltmarsh-exciter.wav", "saltmarsh-fan-duct.wav", "saltmarsh-sound-calibrator.wav"] {
        let frames = truth_of(file)["frames"].as_u64().unwrap();
        assert_eq!(suggest(file, 0), Some(Span { start: 0, samples: frames }), "{file}");
    }
}

#[test]
fn a_tap_has_no_steady_stretch() {
    assert_eq!(suggest("saltmarsh-hammer-tap.wav", 0), None);
}
