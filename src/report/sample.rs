//! A Reading made by hand, for tests.

use crate::reading::{
    AdviceLine, BudgetItem, CaptureFacts, Decision, DecisionKind, FundamentalFact, LedgerStep, Overruled, PaneFacts,
    PaneReading, Reading, ReadingState, ScaleFacts, SegmentFacts, Tone, Verdict, Warning,
};
use crate::signal::{Removal, Removed};
use crate::tone::Kind;
use crate::units::Detector;

/// Two panes over 24 s of an invented pump, one tone.
pub(super) fn reading() -> Reading {
    Reading {
        schema: Reading::SCHEMA,
        version: "0.1.0".to_owned(),
        capture: CaptureFacts {
            path: "pump.wav".to_owned(),
            blake3: None,
            sample_rate_hz: 8192.0,
            channels: 2,
            frames: 327_680,
            format: "WAV, 24-bit integer".to_owned(),
        },
        segment: SegmentFacts {
            channel: 1,
            start_sample: 73_728,
            samples: 196_608,
            start_s: 9.0,
            duration_s: 24.0,
            kind: Some(Kind::Tones),
            kind_why: Some("1 tone carries 98.0 % of the power".to_owned()),
            smallest_tone_db: Some(41.5),
            removed: Removed { what: Removal::Mean, offset: 0.01, slope_per_s: 0.0 },
        },
        scale: ScaleFacts {
            quantity: "acceleration",
            unit: "m/s²".to_owned(),
            detector: Detector::Rms,
            reference: 1e-6,
            reference_label: "dB re 1 µm/s² (r.m.s.)".to_owned(),
            factor: 100.0,
        },
        panes: vec![pane("rectangular", &[], Some(f64::NEG_INFINITY)), pane("kaiser", &[8.6], None)],
        advice: vec![AdviceLine {
            window: "kaiser".to_owned(),
            parameter: vec![8.6],
            expected_worst_error_db: Some(0.45),
            why: "the noise at 24.96 Hz decides".to_owned(),
        }],
        fundamental: None,
        decisions: Vec::new(),
        tones: vec![tone()],
        skirts: Vec::new(),
        warnings: vec![Warning { code: "assumed-segment", text: "the longest steady stretch was read".to_owned() }],
    }
}

pub(super) fn without_tones() -> Reading {
    Reading { tones: Vec::new(), ..reading() }
}

/// The same with all that is decided of a tone and beside it.
pub(super) fn judged() -> Reading {
    let mut reading = reading();
    let said = |kind, frequency_hz, reason: &str| Decision {
        kind,
        frequency_hz,
        verdict: None,
        by: "N.N.".to_owned(),
        reason: reason.to_owned(),
        tone_hz: None,
    };
    reading.fundamental = Some(FundamentalFact { pinned_hz: 8.3, used_hz: 8.32 });
    reading.decisions = vec![
        Decision {
            verdict: Some(Verdict::Holds),
            tone_hz: Some(24.96),
            ..said(DecisionKind::Overruled, 24.96, "seen, on the spot")
        },
        Decision { by: String::new(), ..said(DecisionKind::Held, 99.84, "") },
        said(DecisionKind::Refused, 124.5, "the recorder's own\nhum"),
    ];
    let budget = |item: &str, u: Option<f64>| BudgetItem {
        item: item.to_owned(),
        u_amplitude: u,
        u_frequency_hz: u,
        stated: u.is_some(),
    };
    let tone = &mut reading.tones[0];
    tone.verdict = Some(Verdict::Crowded);
    tone.why = Some("a tone, too near".to_owned());
    tone.order = Some(3.0);
    tone.tags = vec!["harmonic 3 of 8.32".to_owned()];
    tone.amplitude_u95 = Some(0.000_033);
    tone.budget = Some(vec![budget("noise", Some(1.2e-5)), budget("neighbours", Some(0.0)), budget("factor", None)]);
    let (by, reason) = ("N.N.".to_owned(), "seen, on the spot".to_owned());
    tone.overruled = Some(Overruled { by, reason, verdict: Verdict::Holds });
    reading
}

fn pane(window: &str, parameter: &[f64], floor_db: Option<f64>) -> PaneFacts {
    PaneFacts {
        window: window.to_owned(),
        parameter: parameter.to_vec(),
        coherent_gain: 1.0,
        enbw_bins: 1.0,
        enbw_hz: 1.0 / 24.0,
        line_spacing_hz: 1.0 / 24.0,
        floor_db,
        expected_worst_error_db: None,
        n_skirts: None,
    }
}

fn tone() -> Tone {
    Tone {
        frequency_hz: 24.96,
        frequency_u95_hz: Some(0.000_31),
        amplitude: std::f64::consts::SQRT_2,
        amplitude_u95: None,
        level: 1.0,
        level_db: 120.000_000_000_000_01,
        level_u95_db: Some(0.000_2),
        phase_rad: None,
        verdict: None,
        why: None,
        overruled: None,
        budget: None,
        noise_density: None,
        snr_db: None,
        drift_hz: None,
        drift_db: None,
        course: None,
        tags: Vec::new(),
        order: None,
        agreement_db: Some(0.01),
        readings: vec![
            read("rectangular", ReadingState::UnderSkirt, 120.01, Some(0.001)),
            read("kaiser=8.6", ReadingState::Clear, 120.0, None),
        ],
    }
}

fn read(window: &str, state: ReadingState, level_db: f64, u_db: Option<f64>) -> PaneReading {
    PaneReading {
        window: window.to_owned(),
        state,
        peak_hz: 24.96,
        borrowed: false,
        amplitude: 1.4,
        level_db,
        u_db,
        predicted_leak_db: None,
        ledger: vec![LedgerStep { step: "raw line", db: level_db }],
    }
}
