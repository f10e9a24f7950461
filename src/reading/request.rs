//! What a Reading depends on, all of it.

use crate::session::{CaptureRef, HandTone, Overrule, Refusal, Session, Tuning};
use crate::signal::{Removal, Span};
use crate::tone::Kind;
use crate::units::Scale;
use crate::window::Window;

/// Everything a Reading depends on beside the samples. Equal requests on equal samples give equal Readings.
#[derive(Debug, Clone, PartialEq)]
pub struct Request {
    /// The capture, for the record.
    pub capture: CaptureRef,
    /// Samples a second.
    pub sample_rate_hz: f64,
    /// The channel, counted from 0.
    pub channel: usize,
    /// The segment.
    pub span: Span,
    /// What the user says the segment holds; `None`: what is found.
    pub kind: Option<Kind>,
    /// What a sample means.
    pub scale: Scale,
    /// What is taken out first.
    pub removal: Removal,
    /// The panes' windows, in order.
    pub windows: Vec<Window>,
    /// Tones named by hand.
    pub hand_tones: Vec<HandTone>,
    /// Places where no tone is to be.
    pub refused: Vec<Refusal>,
    /// Verdicts put in the place of the program's, those of this channel and segment.
    pub overruled: Vec<Overrule>,
    /// The frequency that orders are counted by.
    pub fundamental_hz: Option<f64>,
    /// What governs the search.
    pub tuning: Tuning,
}

impl Request {
    /// What the session asks for.
    pub fn from_session(session: &Session) -> Self {
        Self {
            capture: session.capture.clone(),
            sample_rate_hz: session.sample_rate_hz(),
            channel: session.channel,
            span: session.current_segment().map_or(Span { start: 0, samples: 0 }, |s| s.span),
            kind: session.current_segment().and_then(|s| s.kind),
            scale: session.scale(),
            removal: session.removal,
            windows: session.panes.iter().map(|p| p.window.clone()).collect(),
            hand_tones: session.hand_tones.clone(),
            refused: session.refused.clone(),
            overruled: session.overruled_here().map(|(_, o)| o.clone()).collect(),
            fundamental_hz: session.fundamental_hz,
            tuning: session.tuning,
        }
    }
}
