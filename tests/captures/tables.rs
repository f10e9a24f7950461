//! The whole table of every sample: what truly is in it, nothing else, and how well it is known.

use panewise::capture;
use panewise::reading::{Reading, Request, Tone, Verdict, analyse};
use panewise::session::{CaptureRef, Session};
use panewise::signal::{Span, Watch};
use panewise::units::{Factor, Quantity, Scale};
use serde_json::Value;

use crate::truth::{folder, truths};

/// The steady stretch of one channel under the standing set of windows.
fn read(truth: &Value, channel: usize) -> Reading {
    let capture = capture::open(&folder().join(truth["file"].as_str().unwrap())).unwrap();
    let steady = &truth["steady"][0];
    let mut session = Session::new(CaptureRef::of(&capture, String::new()));
    session.channel = channel;
    session.segments[0].span =
        Span { start: steady["start_sample"].as_u64().unwrap(), samples: steady["samples"].as_u64().unwrap() };
    session.scales[channel] = Scale {
        quantity: Quantity::parse(&truth["quantity"].as_str().unwrap().replace(' ', "-")).unwrap(),
        unit: truth["unit"].as_str().unwrap().to_owned(),
        factor: Factor::UnitsPerFullScale(truth["units_per_full_scale"].as_f64().unwrap()),
        ..Scale::default()
    };
    let analysis = analyse(&*capture.source, &Request::from_session(&session), None, &Watch::new()).unwrap();
    Reading::clone(&analysis.reading)
}

/// Errors are within three standard uncertainties, one and a half expanded ones: of the forty tones of all samples one
/// in ten runs of other seeds would fail.
const ERROR_IN_U95: f64 = 1.5;

/// The density is told from some hundred lines and fewer, to 0.15 in its logarithm or 0.25 at the lowest: a factor of two
/// is three to four deviations.
const DENSITY_FACTOR: f64 = 2.0;

fn check(tone: &Tone, made: &Value, duration_s: f64, at: &str) {
    let number = |key: &str| made[key].as_f64().unwrap();
    let (peak, density) = (number("peak"), number("noise_density"));
    let amplitude_off = (tone.amplitude - peak) / tone.amplitude_u95.unwrap();
    assert!(amplitude_off.abs() < ERROR_IN_U95, "{at}: amplitude {amplitude_off} U off");
    let frequency_off = (tone.frequency_hz - number("frequency_hz")) / tone.frequency_u95_hz.unwrap();
    assert!(frequency_off.abs() < ERROR_IN_U95, "{at}: frequency {frequency_off} U off");
    let density_ratio = tone.noise_density.unwrap() / density;
    assert!(
        (1.0 / DENSITY_FACTOR..DENSITY_FACTOR).contains(&density_ratio),
        "{at}: density {density_ratio} times the true"
    );
    // A²T/(2G): its power over one rectangular line's mean noise.
    let snr_db = 10.0 * (peak * peak * duration_s / (2.0 * density)).log10();
    let off = tone.snr_db.unwrap() - snr_db;
    assert!(off.abs() < 10.0 * DENSITY_FACTOR.log10(), "{at}: {off} dB off over the floor");
    assert_eq!(tone.verdict, Some(Verdict::Holds), "{at}: {:?}", tone.why);
}

#[test]
fn every_sample_reads_as_what_is_in_it() {
    let mut n_tones = 0;
    for truth in truths() {
        let file = truth["file"].as_str().unwrap();
        if std::path::Path::new(file).extension() != Some("wav".as_ref())
            || truth["steady"].as_array().unwrap().is_empty()
        {
            continue;
        }
        for (channel, content) in truth["content"].as_array().unwrap().iter().enumerate() {
            let reading = read(&truth, channel);
            let made = content["tones"].as_array().unwrap();
            let counted: Vec<&Tone> = reading.tones.iter().filter(|t| t.verdict != Some(Verdict::Faint)).collect();
            let frequencies: Vec<f64> = counted.iter().map(|t| t.frequency_hz).collect();
            assert_eq!(counted.len(), made.len(), "{file}, channel {channel}: {frequencies:?}");
            for (tone, made) in counted.iter().zip(made) {
                let at = format!("{file}, channel {channel}, {} Hz", made["frequency_hz"]);
                check(tone, made, reading.segment.duration_s, &at);
                n_tones += 1;
            }
        }
    }
    assert!(n_tones >= 30, "{n_tones} tones");
}
