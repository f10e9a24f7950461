//! What a segment holds, said with its reason, and what to know of one that is not steady.

use super::{Request, Segment, Warning};
use crate::signal::{SignalError, Watch};
use crate::tone::{Decay, Grounds, Kind, Search, kind_of, longest_steady};
use crate::units::brief;

/// The kind of a segment and why.
#[derive(Debug)]
pub(super) struct Judged {
    pub(super) kind: Option<Kind>,
    pub(super) why: String,
}

/// The kind found, or the one the user has set.
pub(super) fn judge(segment: &Segment, request: &Request, found: &Search) -> Judged {
    let samples = segment.spectra.samples();
    let grounds = kind_of(samples, found);
    let seconds = samples.len() as f64 / request.sample_rate_hz;
    let start_s = request.span.start as f64 / request.sample_rate_hz;
    let said = sentence(&grounds, start_s, seconds);
    let Some(by_hand) = request.kind else { return Judged { kind: grounds.kind(), why: said } };
    let found = match grounds.kind() {
        Some(kind) if kind == by_hand => "found to be so as well".to_owned(),
        Some(kind) => format!("found to be {}", kind.name()),
        None => "no kind was found".to_owned(),
    };
    Judged { kind: Some(by_hand), why: format!("set by hand; {found}: {said}") }
}

/// Why a segment is of its kind, with the figures that decide.
fn sentence(grounds: &Grounds, start_s: f64, seconds: f64) -> String {
    match grounds {
        Grounds::Silence => "every sample is the same".to_owned(),
        Grounds::TooShort => "too few lines to tell tones from noise".to_owned(),
        Grounds::NoTone => "no tone stands over the noise".to_owned(),
        Grounds::Dies(Decay { peak_at, fall_db, holds }) => {
            let fall = if fall_db.is_finite() { format!("by {fall_db:.1} dB") } else { "to nothing".to_owned() };
            format!(
                "the level falls {fall} from its peak near {} s to the last tenth, and 90 % of the energy lies within \
                 {} s of {} s",
                digits(start_s + peak_at * seconds),
                digits(holds * seconds),
                digits(seconds)
            )
        }
        Grounds::Tones { n, share } => {
            let (tones, carry) = if *n == 1 { ("tone", "carries") } else { ("tones", "carry") };
            let rest = if grounds.kind() == Some(Kind::Random) { ": the noise carries more" } else { "" };
            format!("{n} {tones} {carry} {} of the power{rest}", percent(*share))
        }
    }
}

/// Seconds in four digits.
fn digits(seconds: f64) -> String {
    let step = 10_f64.powf(seconds.abs().max(1e-12).log10().floor() - 3.0);
    brief(if step < 1.0 { (seconds / step).round() / (1.0 / step).round() } else { (seconds / step).round() * step })
}

fn percent(share: f64) -> String {
    let percent = 100.0 * share;
    if percent > 99.9 {
        "more than 99.9 %".to_owned()
    } else if percent < 0.1 {
        "less than 0.1 %".to_owned()
    } else {
        format!("{percent:.1} %")
    }
}

/// What is to be said of a transient.
pub(super) fn transient(kind: Option<Kind>) -> Option<Warning> {
    let text = "a transient: tone levels over the whole segment mean little, since they fall with every second of rest \
                taken in around it; mark the event alone, use the rectangular window, and compare levels only over \
                equal lengths";
    (kind == Some(Kind::Transient)).then(|| Warning { code: "transient", text: text.to_owned() })
}

/// A segment is called unsteady when its longest steady stretch is less than this part of it.
const STEADY_PART: f64 = 0.8;

/// What is to be said of a segment that is not steady: levels of tones are then means over it.
pub(super) fn unsteady(segment: &Segment, request: &Request, watch: &Watch) -> Result<Option<Warning>, SignalError> {
    let samples = segment.spectra.samples();
    let steady = longest_steady(samples, watch)?;
    let part = steady.map_or(0.0, |s| s.samples as f64 / samples.len() as f64);
    if part >= STEADY_PART || samples.iter().all(|x| *x == 0.0) {
        return Ok(None);
    }
    let at = |sample: u64| (request.span.start + sample) as f64 / request.sample_rate_hz;
    let which = steady.map_or("no part of the segment is steady".to_owned(), |s| {
        format!("only {:.3} s to {:.3} s of the segment is steady", at(s.start), at(s.end()))
    });
    let text = format!("{which}: levels are means over the segment, and a tone that moves may show as several");
    Ok(Some(Warning { code: "not-steady", text }))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_sentence_gives_the_figures_that_decide() {
        let say = |grounds: Grounds| sentence(&grounds, 2.0, 4.0);
        let decay = Decay { peak_at: 0.125, fall_db: 71.26, holds: 0.05 };
        assert_eq!(
            say(Grounds::Dies(decay)),
            "the level falls by 71.3 dB from its peak near 2.5 s to the last tenth, and 90 % of the energy lies within \
             0.2 s of 4 s"
        );
        assert!(say(Grounds::Dies(Decay { fall_db: f64::INFINITY, ..decay })).contains("falls to nothing from"));
        let tones = |n, share| say(Grounds::Tones { n, share });
        assert_eq!(tones(1, 0.2481), "1 tone carries 24.8 % of the power: the noise carries more");
        assert_eq!(tones(15, 0.9996), "15 tones carry more than 99.9 % of the power");
        assert_eq!(tones(2, 1e-5), "2 tones carry less than 0.1 % of the power: the noise carries more");
        for grounds in [Grounds::Silence, Grounds::TooShort, Grounds::NoTone] {
            assert!(!say(grounds).is_empty());
        }
    }

    #[test]
    fn a_transient_is_warned_of_and_nothing_else_is() {
        assert!(transient(Some(Kind::Transient)).is_some_and(|w| w.code == "transient"));
        assert!(transient(Some(Kind::Tones)).is_none() && transient(None).is_none());
    }
}
