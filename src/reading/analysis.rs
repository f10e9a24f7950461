//! The one call that makes a Reading.

use std::sync::Arc;

use super::output::{CaptureFacts, PaneFacts, Reading, ScaleFacts, SegmentFacts, Warning};
use super::{Request, advice, families, hands, kind, rows, skirts, smallest};
use crate::capture::segment_doubts;
use crate::signal::{Cancelled, RATES_HZ, Removed, SignalError, Source, Span, Watch, read_channel, remove};
use crate::spectrum::Spectra;
use crate::tone::{LEAST_CYCLES, NamedTone, Quest, Search, search};
use crate::units::{ScaleError, brief};

/// Why there is no Reading.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum ReadingError {
    /// The samples could not be had.
    #[error(transparent)]
    Signal(#[from] SignalError),
    /// The scale cannot be used.
    #[error(transparent)]
    Scale(#[from] ScaleError),
    /// The segment is too short to say anything.
    #[error("the segment holds {samples} samples: mark at least {}", Segment::LEAST)]
    TooShort {
        /// How many it holds.
        samples: u64,
    },
    /// The segment is too long for one transform.
    #[error(
        "the segment holds {samples} samples, more than the {} that one transform takes: mark a shorter one",
        Segment::MOST
    )]
    TooLong {
        /// How many it holds.
        samples: u64,
    },
    /// A sample is not a number.
    #[error("sample {at} of the capture is not a finite number: mark a segment without it")]
    NotFinite {
        /// Which sample, counted from the start of the capture.
        at: u64,
    },
    /// The rate is not one of [`RATES_HZ`].
    #[error(
        "the sample rate is {} Hz: give one from {:e} to {:e} Hz",
        brief(*.rate_hz), RATES_HZ.start(), RATES_HZ.end()
    )]
    NoRate {
        /// What it is.
        rate_hz: f64,
    },
    /// The work was cancelled.
    #[error(transparent)]
    Cancelled(#[from] Cancelled),
}

/// A segment's samples, checked, with the mean or a line taken out, and their panes.
#[derive(Debug, Clone)]
pub struct Segment {
    /// The panes.
    pub spectra: Arc<Spectra>,
    /// What was taken out, in full scales.
    pub removed: Removed,
    /// What is doubtful about the samples: a word and a sentence each.
    pub doubts: Vec<Warning>,
}

impl Segment {
    /// The fewest samples a segment may have.
    pub const LEAST: u64 = 8;

    /// The most samples that one transform takes: its panes then need about 2 GB.
    pub const MOST: u64 = 1 << 25;
}

/// A segment's curves and its Reading.
#[derive(Debug, Clone)]
pub struct Analysis {
    /// What was asked.
    pub request: Request,
    /// The segment's panes.
    pub segment: Segment,
    /// The figures.
    pub reading: Arc<Reading>,
    /// What they were made from: the tones as they were fitted, the noise, the residue.
    pub found: Arc<Search>,
    /// How far a line's power must stand over the floor to count (z).
    pub threshold: f64,
}

/// Only the curves: quick enough to follow a dragged edge.
///
/// # Errors
/// [`ReadingError`].
pub fn analyse_curves(source: &dyn Source, request: &Request, watch: &Watch) -> Result<Segment, ReadingError> {
    let rate_hz = request.sample_rate_hz;
    if !RATES_HZ.contains(&rate_hz) {
        return Err(ReadingError::NoRate { rate_hz });
    }
    let mut samples = samples_of(source, request, watch)?;
    let doubts = segment_doubts(&samples, source.bits_per_sample());
    let doubts = doubts.into_iter().map(|(code, text)| Warning { code, text }).collect();
    let removed = remove(&mut samples, rate_hz, request.removal);
    let spectra = Arc::new(Spectra::new(samples.into(), rate_hz, &request.windows, watch)?);
    spectra.prepare_curves();
    Ok(Segment { spectra, removed, doubts })
}

/// The same segment under the windows now asked for; nothing is read again.
///
/// # Errors
/// [`ReadingError::Cancelled`].
pub fn with_windows(segment: &Segment, request: &Request, watch: &Watch) -> Result<Segment, ReadingError> {
    let spectra = Arc::new(segment.spectra.with_windows(&request.windows, watch)?);
    spectra.prepare_curves();
    Ok(Segment { spectra, ..segment.clone() })
}

/// The Reading, on curves made before for the same request, or made now.
///
/// # Errors
/// [`ReadingError`].
pub fn analyse(
    source: &dyn Source,
    request: &Request,
    curves: Option<Segment>,
    watch: &Watch,
) -> Result<Analysis, ReadingError> {
    request.scale.check()?;
    let segment = match curves {
        Some(segment) => segment,
        None => analyse_curves(source, request, watch)?,
    };
    segment.spectra.prepare_between_lines(watch)?;
    watch.report(0.2);
    let (named, mut doubts) = named_tones(&segment.spectra, request);
    let spacing_hz = segment.spectra.line_spacing_hz();
    let refused: Vec<f64> = request.refused.iter().map(|r| r.frequency_hz / spacing_hz).collect();
    let quest = Quest {
        removal: request.removal,
        false_alarm: request.tuning.false_alarm,
        max_tones: request.tuning.max_tones,
        named: &named,
        refused: &refused,
    };
    let found = search(&segment.spectra, &quest, watch)?;
    let judged = kind::judge(&segment, request, &found);
    doubts.extend(match kind::transient(judged.kind) {
        Some(warning) => Some(warning),
        None => kind::unsteady(&segment, request, watch)?,
    });
    watch.report(0.5);
    let mut tones = rows::tones(&segment.spectra, request, &found, watch)?;
    let fundamental = families::fill(&mut tones, request, spacing_hz);
    hands::overrule(&mut tones, request, spacing_hz);
    let threshold = smallest::threshold(&segment.spectra, request);
    let leaked = skirts::find(&segment.spectra, request, &found, threshold, watch)?;
    let smallest_tone_db = smallest::typical_db(&segment.spectra, request, &found, threshold);
    let advice = advice::ranked(&segment.spectra, &found, watch)?;
    doubts.extend(advice::no_window_reads_all(&advice));
    let reading = Reading {
        schema: Reading::SCHEMA,
        version: env!("CARGO_PKG_VERSION").to_owned(),
        capture: capture_facts(request),
        segment: segment_facts(&segment, request, smallest_tone_db, judged),
        scale: scale_facts(request),
        panes: pane_facts(&segment.spectra, request, &found, &leaked.n),
        advice,
        fundamental,
        decisions: hands::decisions(&tones, request, spacing_hz),
        tones,
        skirts: leaked.peaks,
        warnings: warnings(&segment, request, &found, doubts),
    };
    Ok(Analysis { request: request.clone(), segment, reading: Arc::new(reading), found: Arc::new(found), threshold })
}

fn samples_of(source: &dyn Source, request: &Request, watch: &Watch) -> Result<Vec<f64>, ReadingError> {
    let Span { start, samples: n } = request.span;
    if n < Segment::LEAST {
        return Err(ReadingError::TooShort { samples: n });
    }
    if n > Segment::MOST {
        return Err(ReadingError::TooLong { samples: n });
    }
    let samples = read_channel(source, request.channel, request.span, watch)?;
    match samples.iter().position(|x| !x.is_finite()) {
        Some(at) => Err(ReadingError::NotFinite { at: start + at as u64 }),
        None => Ok(samples),
    }
}

fn capture_facts(request: &Request) -> CaptureFacts {
    let capture = &request.capture;
    CaptureFacts {
        path: capture.path.clone(),
        blake3: (!capture.blake3.is_empty()).then(|| capture.blake3.clone()),
        sample_rate_hz: request.sample_rate_hz,
        channels: capture.channels,
        frames: capture.frames,
        format: capture.format.clone(),
    }
}

fn segment_facts(
    segment: &Segment,
    request: &Request,
    smallest_tone_db: Option<f64>,
    judged: kind::Judged,
) -> SegmentFacts {
    let removed = segment.removed;
    let factor = request.scale.units_per_full_scale();
    let Span { start, samples } = request.span;
    SegmentFacts {
        channel: request.channel + 1,
        start_sample: start,
        samples,
        start_s: start as f64 / request.sample_rate_hz,
        duration_s: samples as f64 / request.sample_rate_hz,
        kind: judged.kind,
        kind_why: Some(judged.why),
        smallest_tone_db,
        removed: Removed { offset: removed.offset * factor, slope_per_s: removed.slope_per_s * factor, ..removed },
    }
}

fn scale_facts(request: &Request) -> ScaleFacts {
    let scale = &request.scale;
    ScaleFacts {
        quantity: scale.quantity.name(),
        unit: scale.unit.clone(),
        detector: scale.detector,
        reference: scale.reference_value(),
        reference_label: scale.reference_label(),
        factor: scale.units_per_full_scale(),
    }
}

fn pane_facts(spectra: &Spectra, request: &Request, found: &Search, n_skirts: &[Option<usize>]) -> Vec<PaneFacts> {
    let n = spectra.n_samples();
    let line_spacing_hz = spectra.line_spacing_hz();
    let facts = |(pane, window): (usize, &crate::window::Window)| {
        let sums = spectra.sums(pane);
        let enbw_bins = n as f64 * sums.s2 / (sums.s1 * sums.s1);
        let floor = found.noise.as_ref().map(|noise| 2.0 * noise.typical_line_power(sums.s2).sqrt() / sums.s1);
        PaneFacts {
            window: window.name().to_owned(),
            parameter: window.parameters().to_vec(),
            coherent_gain: sums.s1 / n as f64,
            enbw_bins,
            enbw_hz: enbw_bins * line_spacing_hz,
            line_spacing_hz,
            floor_db: floor.map(|peak| rows::level_db(&request.scale, peak * request.scale.units_per_full_scale())),
            expected_worst_error_db: advice::expected_worst_error_db(spectra, found, window),
            n_skirts: n_skirts.get(pane).copied().flatten(),
        }
    };
    spectra.windows().iter().enumerate().map(facts).collect()
}

/// The tones named by hand, in bins, and what is to be said of those that cannot be read.
fn named_tones(spectra: &Spectra, request: &Request) -> (Vec<NamedTone>, Vec<Warning>) {
    let (least, most) = (LEAST_CYCLES, spectra.n_samples() as f64 / 2.0 - LEAST_CYCLES);
    let mut named = Vec::new();
    let mut doubts = Vec::new();
    for tone in &request.hand_tones {
        let nu = tone.frequency_hz / spectra.line_spacing_hz();
        if (least..=most).contains(&nu) {
            named.push(NamedTone { nu, held: tone.held });
        } else {
            let text = format!(
                "the tone named at {} Hz is not read: this segment holds tones from {:.4} Hz to {:.4} Hz",
                tone.frequency_hz,
                least * spectra.line_spacing_hz(),
                most * spectra.line_spacing_hz()
            );
            doubts.push(Warning { code: "tone-not-read", text });
        }
    }
    (named, doubts)
}

fn warnings(segment: &Segment, request: &Request, found: &Search, doubts: Vec<Warning>) -> Vec<Warning> {
    let mut warnings = segment.doubts.clone();
    warnings.extend(doubts);
    if !found.settled {
        let text = "the tones could not be fitted together to the end: no uncertainty is stated, and levels may be off";
        warnings.push(Warning { code: "not-fitted", text: text.to_owned() });
    }
    if found.noise.is_none() {
        let text = format!(
            "the segment holds {} samples: too few lines to tell a noise floor, so no tones are looked for",
            request.span.samples
        );
        warnings.push(Warning { code: "low-resolution", text });
    }
    if found.n_left_out > 0 {
        let text = format!(
            "{} more peaks stand over the floor: the weakest over it were left out (at most {} tones)",
            found.n_left_out, request.tuning.max_tones
        );
        warnings.push(Warning { code: "more-tones", text });
    }
    if request.scale.is_full_scale() {
        let text = "the scale is not stated: levels are in full scales of the file".to_owned();
        warnings.push(Warning { code: "no-scale", text });
    }
    warnings
}
