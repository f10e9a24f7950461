//! What was found of each tone and what was decided by hand, under the tone table.

use super::digits::digits;
use super::text::plain;
use crate::reading::{BudgetItem, Decision, DecisionKind, Reading, Tone};

/// A line a tone: its verdict and why, who put another in its place, and what its uncertainty is made of. Nothing where
/// nothing was judged.
pub(super) fn verdicts(reading: &Reading, frequencies: &[String]) -> String {
    if reading.tones.iter().all(|t| t.verdict.is_none() && t.overruled.is_none()) {
        return String::new();
    }
    let width = frequencies.iter().map(|f| f.chars().count()).max().unwrap_or(0);
    let line =
        |(tone, frequency): (&Tone, &String)| format!("{frequency:>width$} Hz  {}{}\n", verdict(tone), made_of(tone));
    let lines: String = reading.tones.iter().zip(frequencies).map(line).collect();
    format!("\nVerdicts, and what makes the standard uncertainty of the level:\n{lines}")
}

fn verdict(tone: &Tone) -> String {
    let found = tone.verdict.map_or("-", |v| v.word());
    let why = tone.why.as_deref().map(|why| format!(": {}", plain(why))).unwrap_or_default();
    match &tone.overruled {
        None => format!("{found}{why}"),
        Some(o) => format!("{}{} (found {found}{why})", o.verdict.word(), said(&o.by, &o.reason)),
    }
}

/// The items of a budget that are known, in per cent of the amplitude.
fn made_of(tone: &Tone) -> String {
    let part = |i: &BudgetItem| {
        let percent = 100.0 * i.u_amplitude? / tone.amplitude;
        (percent.is_finite() && percent > 0.0).then(|| format!("{} {} %", plain(&i.item), digits(percent, 2)))
    };
    let parts: Vec<_> = tone.budget.iter().flatten().filter_map(part).collect();
    if parts.is_empty() { String::new() } else { format!(" [{}]", parts.join(", ")) }
}

/// The items of the budgets that nobody has stated.
pub(super) fn not_stated(reading: &Reading) -> Vec<String> {
    let mut items: Vec<String> = Vec::new();
    for item in reading.tones.iter().filter_map(|t| t.budget.as_ref()).flatten().filter(|i| !i.stated) {
        let item = plain(&item.item);
        if !items.contains(&item) {
            items.push(item);
        }
    }
    items
}

/// A line for each thing decided by hand.
pub(super) fn decisions(reading: &Reading) -> String {
    let lines = reading.decisions.iter().map(|d| format!("By hand: {}\n", decision(d)));
    let text: String = lines.collect();
    let fundamental = reading.fundamental.map(|f| {
        let followed = if f.used_hz == f.pinned_hz {
            String::new()
        } else {
            format!(", read as the tone there, {} Hz", digits(f.used_hz, 8))
        };
        format!("By hand: orders are counted by {} Hz{followed}\n", f.pinned_hz)
    });
    let text = fundamental.unwrap_or_default() + &text;
    if text.is_empty() { text } else { format!("\n{text}") }
}

/// One decision in words: `refused at 124.5 Hz by N.N.: the recorder's own`.
fn decision(decision: &Decision) -> String {
    let what = match (decision.kind, decision.verdict) {
        (DecisionKind::Held, _) => "tone named and its frequency held".to_owned(),
        (DecisionKind::Named, _) => "tone named".to_owned(),
        (DecisionKind::Overruled, Some(verdict)) => format!("verdict overruled as '{}'", verdict.word()),
        (kind, _) => kind.word().to_owned(),
    };
    let nowhere = match (decision.kind, decision.tone_hz) {
        (DecisionKind::Refused, _) | (_, Some(_)) => "",
        _ => " (no tone is listed there)",
    };
    format!("{what} at {} Hz{nowhere}{}", decision.frequency_hz, said(&decision.by, &decision.reason))
}

/// ` by N.N.: seen on the spot`, as far as it was said.
fn said(by: &str, reason: &str) -> String {
    let by = if by.is_empty() { String::new() } else { format!(" by {}", plain(by)) };
    if reason.is_empty() { by } else { format!("{by}: {}", plain(reason)) }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::sample::{judged, reading};

    #[test]
    fn nothing_judged_and_nothing_decided_print_nothing() {
        assert_eq!(
            (verdicts(&reading(), &["24.96".to_owned()]), decisions(&reading())),
            (String::new(), String::new())
        );
    }

    #[test]
    fn an_overruled_verdict_is_printed_with_the_one_found_and_who_and_why() {
        assert_eq!(
            verdicts(&judged(), &["24.96000".to_owned()]),
            "\nVerdicts, and what makes the standard uncertainty of the level:\n24.96000 Hz  holds by N.N.: seen, on the \
             spot (found crowded: a tone, too near) [noise 0.00085 %]\n"
        );
        assert_eq!(not_stated(&judged()), ["factor"]);
    }

    #[test]
    fn decisions_are_lines_and_keep_to_their_line() {
        assert_eq!(
            decisions(&judged()),
            "\nBy hand: orders are counted by 8.3 Hz, read as the tone there, 8.3200000 Hz\n\
             By hand: verdict overruled as 'holds' at 24.96 Hz by N.N.: seen, on the spot\n\
             By hand: tone named and its frequency held at 99.84 Hz (no tone is listed there)\n\
             By hand: refused at 124.5 Hz by N.N.: the recorder's own\u{fffd}hum\n"
        );
    }
}
