//! What the user has decided: which rows it changes, and the list of it.

use super::Request;
use super::output::{Decision, DecisionKind, Overruled, Tone};
use crate::session::SAME_TONE_LINES;

/// The row that a decision at `frequency_hz` belongs to: the nearest, if it is near enough.
fn row_at(tones: &[Tone], frequency_hz: f64, line_spacing_hz: f64) -> Option<usize> {
    let apart = |i: &usize| tones.get(*i).map_or(f64::INFINITY, |t| (t.frequency_hz - frequency_hz).abs());
    let nearest = (0..tones.len()).min_by(|a, b| apart(a).total_cmp(&apart(b)));
    nearest.filter(|i| apart(i) <= SAME_TONE_LINES * line_spacing_hz)
}

/// Puts the user's verdicts beside those found.
pub(super) fn overrule(tones: &mut [Tone], request: &Request, line_spacing_hz: f64) {
    for overrule in &request.overruled {
        let row = row_at(tones, overrule.frequency_hz, line_spacing_hz);
        if let Some(tone) = row.and_then(|i| tones.get_mut(i)) {
            let (by, reason) = (overrule.by.clone(), overrule.reason.clone());
            tone.overruled = Some(Overruled { by, reason, verdict: overrule.verdict });
        }
    }
}

/// All that was decided, by frequency.
pub(super) fn decisions(tones: &[Tone], request: &Request, line_spacing_hz: f64) -> Vec<Decision> {
    let tone_hz = |hz: f64| row_at(tones, hz, line_spacing_hz).and_then(|i| tones.get(i)).map(|t| t.frequency_hz);
    let named = request.hand_tones.iter().map(|t| Decision {
        kind: if t.held { DecisionKind::Held } else { DecisionKind::Named },
        frequency_hz: t.frequency_hz,
        verdict: None,
        by: t.by.clone(),
        reason: t.reason.clone(),
        tone_hz: tone_hz(t.frequency_hz),
    });
    let refused = request.refused.iter().map(|r| Decision {
        kind: DecisionKind::Refused,
        frequency_hz: r.frequency_hz,
        verdict: None,
        by: r.by.clone(),
        reason: r.reason.clone(),
        tone_hz: None,
    });
    let overruled = request.overruled.iter().map(|o| Decision {
        kind: DecisionKind::Overruled,
        frequency_hz: o.frequency_hz,
        verdict: Some(o.verdict),
        by: o.by.clone(),
        reason: o.reason.clone(),
        tone_hz: tone_hz(o.frequency_hz),
    });
    let mut decisions: Vec<Decision> = named.chain(refused).chain(overruled).collect();
    decisions.sort_by(|a, b| a.frequency_hz.total_cmp(&b.frequency_hz));
    decisions
}

#[cfg(test)]
mod tests {
    use crate::reading::output::DecisionKind;
    use crate::reading::{Reading, Request, analyse};
    use crate::session::{CaptureRef, Command, HandTone, Overrule, Refusal, SegmentId, Session, Verdict};
    use crate::signal::{Stored, Watch};

    const RATE_HZ: f64 = 2048.0;
    const N: usize = 4096;
    /// Lines are half a hertz apart.
    const TONES_HZ: [f64; 4] = [31.3, 62.6, 93.9, 200.4];

    fn session() -> Session {
        Session::new(CaptureRef {
            path: "made.wav".to_owned(),
            blake3: String::new(),
            sample_rate_hz: RATE_HZ,
            channels: 1,
            frames: N as u64,
            format: "made".to_owned(),
        })
    }

    fn read(session: &Session) -> Reading {
        // Noise of a linear congruence: enough for a floor.
        let mut state = 1_u32;
        let sample = |i: usize| {
            state = state.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
            let t = std::f64::consts::TAU * i as f64 / RATE_HZ;
            let tones: f64 = TONES_HZ.iter().map(|hz| (hz * t + hz).cos()).sum();
            tones + 1e-3 * (f64::from(state >> 8) / f64::from(1 << 24) - 0.5)
        };
        let source = Stored::new(RATE_HZ, 1, (0..N).map(sample).collect());
        let analysis = analyse(&source, &Request::from_session(session), None, &Watch::new()).unwrap();
        Reading::clone(&analysis.reading)
    }

    fn frequencies(reading: &Reading) -> Vec<f64> {
        reading.tones.iter().map(|t| (t.frequency_hz * 10.0).round() / 10.0).collect()
    }

    fn refusal(frequency_hz: f64) -> Refusal {
        Refusal { frequency_hz, by: "N.N.".to_owned(), reason: "not the pump's".to_owned() }
    }

    #[test]
    fn a_tone_refused_is_not_listed_and_the_refusal_is() {
        let mut session = session();
        let all = read(&session);
        assert_eq!(frequencies(&all), TONES_HZ);
        // Within three quarters of a line, and further off.
        Command::RefuseTone(refusal(200.2)).apply(&mut session);
        Command::RefuseTone(refusal(94.5)).apply(&mut session);
        let reading = read(&session);
        assert_eq!(frequencies(&reading), [31.3, 62.6, 93.9]);
        let decisions = &reading.decisions;
        assert_eq!(decisions.len(), 2);
        assert_eq!((decisions[1].kind, decisions[1].frequency_hz), (DecisionKind::Refused, 200.2));
        // It was fitted all the same: the others read as they did.
        for (with, without) in all.tones.iter().zip(&reading.tones) {
            assert_eq!((with.frequency_hz, with.amplitude), (without.frequency_hz, without.amplitude));
        }
        assert_eq!((decisions[1].by.as_str(), decisions[1].reason.as_str()), ("N.N.", "not the pump's"));
    }

    #[test]
    fn a_tone_named_after_it_was_refused_is_read() {
        let mut session = session();
        Command::RefuseTone(refusal(200.4)).apply(&mut session);
        Command::AddHandTone(HandTone::at(200.3, false)).apply(&mut session);
        assert_eq!(frequencies(&read(&session)), TONES_HZ);
    }

    #[test]
    fn an_overruled_verdict_stands_beside_the_one_found() {
        let mut session = session();
        let found = read(&session).tones[3].verdict;
        let overrule = |frequency_hz, verdict| Overrule {
            frequency_hz,
            channel: 0,
            segment: SegmentId(1),
            verdict,
            by: "N.N.".to_owned(),
            reason: "the fan ran up".to_owned(),
        };
        Command::Overrule(overrule(200.5, Verdict::Wanders)).apply(&mut session);
        Command::Overrule(overrule(500.0, Verdict::Skirt)).apply(&mut session);
        let reading = read(&session);
        let tone = &reading.tones[3];
        let overruled = tone.overruled.as_ref().unwrap();
        assert_eq!((tone.verdict, overruled.verdict), (found, Verdict::Wanders));
        assert_eq!((overruled.by.as_str(), overruled.reason.as_str()), ("N.N.", "the fan ran up"));
        assert!(reading.tones[..3].iter().all(|t| t.overruled.is_none()));
        // What belongs to no row is still listed.
        let places: Vec<_> = reading.decisions.iter().map(|d| (d.verdict, d.tone_hz.is_some())).collect();
        assert_eq!(places, [(Some(Verdict::Wanders), true), (Some(Verdict::Skirt), false)]);
    }

    #[test]
    fn orders_are_counted_by_the_tone_at_the_pinned_place_else_by_the_place() {
        let mut session = session();
        assert!(read(&session).tones.iter().all(|t| t.order.is_none()));
        Command::PinFundamental(Some(31.2)).apply(&mut session);
        let reading = read(&session);
        let orders: Vec<f64> = reading.tones.iter().map(|t| t.order.unwrap()).collect();
        assert!((orders[0] - 1.0).abs() < 1e-12 && (orders[2] - 3.0).abs() < 1e-3, "{orders:?}");
        assert!((orders[3] - 200.4 / 31.3).abs() < 1e-3);
        let fundamental = reading.fundamental.unwrap();
        assert!((fundamental.used_hz - 31.3).abs() < 1e-3 && fundamental.pinned_hz == 31.2);
        assert_eq!(reading.tones[1].tags, ["harmonic 2 of 31.3"]);
        Command::PinFundamental(Some(40.0)).apply(&mut session);
        let reading = read(&session);
        assert_eq!(reading.fundamental.unwrap().used_hz, 40.0);
        assert_eq!(reading.tones[1].order, Some(reading.tones[1].frequency_hz / 40.0));
    }
}
