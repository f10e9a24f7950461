//! How values are written on the command line.

use std::ops::RangeInclusive;

use super::usage::nearest;
use crate::session::{HandTone, MAX_PANES, Refusal};
use crate::signal::{RATES_HZ, Removal, Span};
use crate::tone::Kind;
use crate::units::{Detector, Quantity, Scale};
use crate::window::{Window, WindowError, catalogue};

/// One edge of a segment.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) enum Edge {
    Seconds(f64),
    Sample(u64),
}

/// A segment as it is written.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct SegmentWish {
    written: String,
    start: Edge,
    end: Edge,
}

/// Windows as they are written.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct WindowList(pub Vec<Window>);

pub(super) fn segment(text: &str) -> Result<SegmentWish, String> {
    const SHAPE: &str = "write START..END, in seconds (9.0..33.0) or in samples (0n..4096n)";
    let (start, end) = text.split_once("..").ok_or(SHAPE)?;
    if end.starts_with('.') {
        return Err(format!("three dots can be read in two ways: {SHAPE}"));
    }
    if [start, end].iter().any(|edge| edge.trim_start().starts_with('-')) {
        return Err(format!("START and END must not be negative: {SHAPE}"));
    }
    match (edge(start).ok_or(SHAPE)?, edge(end).ok_or(SHAPE)?) {
        (Edge::Seconds(_), Edge::Sample(_)) | (Edge::Sample(_), Edge::Seconds(_)) => {
            Err("one edge is in samples and the other in seconds: write both with 'n' or both without".to_owned())
        }
        (start, end) => Ok(SegmentWish { written: text.to_owned(), start, end }),
    }
}

fn edge(text: &str) -> Option<Edge> {
    let text = text.trim();
    match text.strip_suffix('n') {
        Some(samples) => samples.parse().ok().map(Edge::Sample),
        None => text.parse().ok().filter(|s: &f64| s.is_finite() && *s >= 0.0).map(Edge::Seconds),
    }
}

impl SegmentWish {
    /// The samples meant in a capture of `frames` at `rate_hz`, seconds rounded to the nearest sample.
    pub(super) fn span(&self, rate_hz: f64, frames: u64) -> Result<Span, String> {
        let sample = |edge| match edge {
            // A product too large for an index saturates and is then refused as past the end.
            Edge::Seconds(seconds) => (seconds * rate_hz).round() as u64,
            Edge::Sample(sample) => sample,
        };
        let (start, end) = (sample(self.start), sample(self.end));
        if end > frames {
            let s = frames as f64 / rate_hz;
            let written = &self.written;
            return Err(format!(
                "segment {written} ends past the capture's end, {s} s or {frames}n: give an END in it"
            ));
        }
        if start >= end {
            return Err(format!("segment {} holds no sample: give an END after START", self.written));
        }
        Ok(Span::from_range(start..end))
    }
}

/// Windows parted by commas; a comma before anything but a letter goes on with the parameters: `taylor=4,35,hann`.
pub(super) fn windows(text: &str) -> Result<WindowList, String> {
    let mut written: Vec<String> = Vec::new();
    for part in text.split(',') {
        match written.last_mut() {
            Some(last) if !part.trim_start().starts_with(char::is_alphabetic) => {
                last.push(',');
                last.push_str(part);
            }
            _ => written.push(part.to_owned()),
        }
    }
    if written.len() > MAX_PANES {
        return Err(format!("{} windows are more than the {MAX_PANES} there can be panes", written.len()));
    }
    written
        .iter()
        .map(|text| Window::parse(text).map_err(|error| no_window(&error)))
        .collect::<Result<_, _>>()
        .map(WindowList)
}

/// Why a window cannot be had, with the one that was most likely meant.
fn no_window(error: &WindowError) -> String {
    let near = match error {
        WindowError::Unknown { given } => nearest(given, catalogue().iter().map(|entry| entry.name)),
        _ => None,
    };
    match near {
        Some(near) => format!("{error}; did you mean '{near}'?"),
        None => error.to_string(),
    }
}

/// A hand-named tone: `124.47` or `124.47,held`.
pub(super) fn tone(text: &str) -> Result<HandTone, String> {
    let (frequency, held) = match text.split_once(',') {
        Some((frequency, word)) if word.trim() == "held" => (frequency, true),
        Some(_) => return Err("write HZ or HZ,held".to_owned()),
        None => (text, false),
    };
    Ok(HandTone::at(positive(frequency)?, held))
}

/// A place refused: `124.5` or `124.5,the recorder's own`.
pub(super) fn refusal(text: &str) -> Result<Refusal, String> {
    let (frequency, reason) = text.split_once(',').unwrap_or((text, ""));
    Ok(Refusal { frequency_hz: positive(frequency)?, by: String::new(), reason: reason.trim().to_owned() })
}

pub(super) fn positive(text: &str) -> Result<f64, String> {
    let value = text.trim().parse().ok().filter(|v: &f64| v.is_finite() && *v > 0.0);
    value.ok_or_else(|| "give a number above 0".to_owned())
}

/// A number of a scale: a factor, sensitivity, voltage or reference.
pub(super) fn of_scale(text: &str) -> Result<f64, String> {
    within(text, Scale::LEAST..=Scale::MOST, "")
}

pub(super) fn rate(text: &str) -> Result<f64, String> {
    within(text, RATES_HZ, " Hz")
}

/// The duration of a segment that a figure is drawn for.
pub(super) fn duration(text: &str) -> Result<f64, String> {
    within(text, 1e-6..=1e9, " s")
}

fn within(text: &str, range: RangeInclusive<f64>, unit: &str) -> Result<f64, String> {
    let value = positive(text)?;
    let (least, most) = (range.start(), range.end());
    if range.contains(&value) { Ok(value) } else { Err(format!("give a number from {least:e} to {most:e}{unit}")) }
}

/// A number that counts, from 1 on.
pub(super) fn count(text: &str) -> Result<usize, String> {
    let value = text.trim().parse().ok().filter(|n: &usize| *n > 0);
    value.ok_or_else(|| "give a whole number from 1 on".to_owned())
}

pub(super) fn quantity(text: &str) -> Result<Quantity, String> {
    Quantity::parse(text).ok_or_else(|| one_of(&Quantity::ALL.map(Quantity::name)))
}

pub(super) fn detector(text: &str) -> Result<Detector, String> {
    Detector::parse(text).ok_or_else(|| one_of(&Detector::ALL.map(Detector::name)))
}

pub(super) fn kind(text: &str) -> Result<Kind, String> {
    Kind::parse(text).ok_or_else(|| one_of(&Kind::ALL.map(Kind::name)))
}

pub(super) fn removal(text: &str) -> Result<Removal, String> {
    match text {
        "none" => Ok(Removal::None),
        "mean" => Ok(Removal::Mean),
        "line" => Ok(Removal::Line),
        _ => Err(one_of(&["none", "mean", "line"])),
    }
}

fn one_of(names: &[&str]) -> String {
    format!("give one of {}", names.join(", "))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn segments_in_seconds_and_samples() {
        let span = |text: &str| segment(text).unwrap().span(8192.0, 327_680);
        assert_eq!(span("9.0..33.0"), Ok(Span { start: 73_728, samples: 196_608 }));
        assert_eq!(span("0n..4096n"), Ok(Span { start: 0, samples: 4096 }));
        assert_eq!(span("0.00006..0.00012"), Ok(Span { start: 0, samples: 1 }));
        assert_eq!(span("0..40"), Ok(Span { start: 0, samples: 327_680 }));
    }

    #[test]
    fn segments_that_cannot_be() {
        for text in ["", "9", "9..", "..9", "9..x", "-1..2", "NaN..2", "0..inf", "1.5n..2n", "0n..4096nn"] {
            assert!(segment(text).is_err(), "{text}");
        }
        assert!(segment("9...33").unwrap_err().contains("three dots"), "9 to .33?");
        assert!(segment("9....33").unwrap_err().contains("three dots"));
        for mixed in ["9n..33", "9..33n"] {
            assert!(segment(mixed).unwrap_err().contains("in samples and the other in seconds"), "{mixed}");
        }
        for negative in ["-1..5", "1..-5", "-9n..5n"] {
            assert!(segment(negative).unwrap_err().contains("must not be negative"), "{negative}");
        }
        let span = |text: &str| segment(text).unwrap().span(8192.0, 327_680).unwrap_err();
        assert_eq!(span("33..9"), "segment 33..9 holds no sample: give an END after START");
        assert!(span("5n..5n").contains("holds no sample"));
        assert!(span("9..41").contains("ends past the capture's end, 40 s or 327680n"));
        assert!(span("0..1e300").contains("ends past"));
        assert!(span("0n..18446744073709551615n").contains("ends past"));
    }

    #[test]
    fn a_comma_parts_windows_only_before_a_letter() {
        let written = |text: &str| windows(text).map(|l| l.0.iter().map(ToString::to_string).collect::<Vec<_>>());
        assert_eq!(written("hann, rectangular").unwrap(), ["hann", "rectangular"]);
        let error = windows("hann,no-such=4,35").unwrap_err();
        assert!(error.contains("no-such") && !error.contains("did you mean"), "{error}");
        let error = windows("hann,flattop").unwrap_err();
        assert!(error.ends_with("'panewise windows' lists them; did you mean 'flat-top'?"), "{error}");
        assert!(windows("").is_err());
        assert!(windows("hann,").is_err());
        assert!(windows(&["hann"; 9].join(",")).unwrap_err().starts_with("9 windows are more than the 8"));
    }

    #[test]
    fn numbers_stay_in_their_ranges() {
        assert_eq!((of_scale("98.1"), rate("8192"), count("3")), (Ok(98.1), Ok(8192.0), Ok(3)));
        for text in ["1e308", "1e-300"] {
            assert_eq!(of_scale(text).unwrap_err(), "give a number from 1e-12 to 1e12");
            assert_eq!(rate(text).unwrap_err(), "give a number from 1e-6 to 1e12 Hz");
            assert_eq!(duration(text).unwrap_err(), "give a number from 1e-6 to 1e9 s");
        }
        for text in ["0", "-1", "a", "1.5", "", "99999999999999999999999"] {
            assert!(count(text).is_err(), "{text}");
        }
    }

    #[test]
    fn hand_tones_may_be_held() {
        assert_eq!(tone("124.47"), Ok(HandTone::at(124.47, false)));
        assert_eq!(tone("124.47,held"), Ok(HandTone::at(124.47, true)));
        for text in ["", "0", "-3", "124.47,kept", "inf"] {
            assert!(tone(text).is_err(), "{text}");
        }
    }

    #[test]
    fn a_refusal_may_say_why() {
        let refused =
            |frequency_hz, reason: &str| Refusal { frequency_hz, by: String::new(), reason: reason.to_owned() };
        assert_eq!(refusal("124.5"), Ok(refused(124.5, "")));
        assert_eq!(refusal("124.5, one, two"), Ok(refused(124.5, "one, two")));
        for text in ["", "0", ",why", "x,why", "NaN"] {
            assert!(refusal(text).is_err(), "{text}");
        }
    }

    #[test]
    fn words_that_are_none_are_answered_with_those_that_are() {
        assert_eq!(removal("all").unwrap_err(), "give one of none, mean, line");
        assert_eq!(detector("r.m.s.").unwrap_err(), "give one of rms, peak, peak-to-peak");
        assert!(quantity("loudness").unwrap_err().contains("sound-pressure"));
    }
}
