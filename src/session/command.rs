//! Every change of the document, named, applied in one place.

use super::SAME_TONE_LINES;
use super::{HandTone, NamedSegment, Note, Overrule, Pane, PaneId, Refusal, SegmentId, Session, Tuning, ViewAxes};
use crate::signal::{RATES_HZ, Removal, Span};
use crate::tone::Kind;
use crate::units::{Factor, Scale};
use crate::window::Window;

/// The most panes a session has.
pub const MAX_PANES: usize = 8;

/// The most segments a session has.
pub const MAX_SEGMENTS: usize = 500;

/// The most tones a search may be asked for.
pub const MAX_TONES: usize = 10_000;

/// The most refusals, and the most verdicts overruled, that a session has.
pub const MAX_DECISIONS: usize = 1000;

/// Letters kept of who decided something and of why.
const REASON_LETTERS: usize = 500;

/// Letters kept of a segment's name.
const NAME_LETTERS: usize = 120;

/// A change of the document.
#[derive(Debug, Clone, PartialEq)]
#[non_exhaustive]
pub enum Command {
    /// Read another channel.
    ChooseChannel(usize),
    /// Say what the samples of a channel mean.
    SetScale(usize, Scale),
    /// Let a rate stand in for the file's, or take that back.
    SetRate(Option<f64>),
    /// Choose what is taken out before the transform.
    SetRemoval(Removal),
    /// Move the edges of a segment.
    MoveSegment(SegmentId, Span),
    /// Mark one more segment and make it current.
    AddSegment(Span),
    /// Call a segment something else.
    RenameSegment(SegmentId, String),
    /// Say what the current segment holds, or leave that to be found.
    SetKind(Option<Kind>),
    /// Take a segment away.
    RemoveSegment(SegmentId),
    /// Read another segment.
    ChooseSegment(SegmentId),
    /// Put a window in a new pane at the end.
    AddPane(Window),
    /// Put another window, or another parameter, in a pane.
    SetWindow(PaneId, Window),
    /// Show the residue in a pane, or the segment again.
    ShowResidue(PaneId, bool),
    /// Take a pane away.
    RemovePane(PaneId),
    /// Move a pane to a place in the order.
    MovePane(PaneId, usize),
    /// Pick the tone at a frequency, or none.
    Pick(Option<f64>),
    /// Name a tone by hand.
    AddHandTone(HandTone),
    /// Hold a tone's frequency as given, or let it be fitted: names the tone where it was not.
    HoldTone(HandTone),
    /// Put another frequency, name or reason in the place of a hand-named tone.
    ChangeHandTone(usize, HandTone),
    /// Take a hand-named tone back.
    RemoveHandTone(usize),
    /// List no tone at a place; one named there by hand is taken back.
    RefuseTone(Refusal),
    /// Take a refusal back.
    TakeBackRefusal(usize),
    /// Put a verdict in the place of the program's.
    Overrule(Overrule),
    /// Let the program's verdict stand again.
    TakeBackOverrule(usize),
    /// Count orders by a frequency, or by none.
    PinFundamental(Option<f64>),
    /// Write or replace the remark about a tone or the session; an empty text takes it away.
    SetNote(Note),
    /// Change what governs the search.
    SetTuning(Tuning),
    /// Show another part of the axes.
    SetAxes(ViewAxes),
}

impl Command {
    /// What the change is called behind "Undo".
    pub fn name(&self) -> &'static str {
        match self {
            Self::ChooseChannel(_) => "choose channel",
            Self::SetScale(..) => "set scale",
            Self::SetRate(_) => "set sample rate",
            Self::SetRemoval(_) => "choose removal",
            Self::MoveSegment(..) => "move segment",
            Self::AddSegment(_) => "mark segment",
            Self::RenameSegment(..) => "rename segment",
            Self::SetKind(_) => "say what the segment holds",
            Self::RemoveSegment(_) => "remove segment",
            Self::ChooseSegment(_) => "choose segment",
            Self::AddPane(_) => "add pane",
            Self::SetWindow(..) => "change window",
            Self::ShowResidue(_, true) => "show residue",
            Self::ShowResidue(_, false) => "show segment",
            Self::RemovePane(_) => "remove pane",
            Self::MovePane(..) => "move pane",
            Self::Pick(_) => "pick tone",
            Self::AddHandTone(_) => "name tone",
            Self::HoldTone(HandTone { held: true, .. }) => "hold frequency",
            Self::HoldTone(_) => "let frequency be fitted",
            Self::ChangeHandTone(..) => "change named tone",
            Self::RemoveHandTone(_) => "take back named tone",
            Self::RefuseTone(_) => "refuse tone",
            Self::TakeBackRefusal(_) => "take back refusal",
            Self::Overrule(_) => "overrule verdict",
            Self::TakeBackOverrule(_) => "take back overruling",
            Self::PinFundamental(Some(_)) => "pin fundamental",
            Self::PinFundamental(None) => "unpin fundamental",
            Self::SetNote(_) => "write note",
            Self::SetTuning(_) => "tune search",
            Self::SetAxes(_) => "change axes",
        }
    }

    /// Applies the change to `session` and says whether anything changed.
    ///
    /// What cannot be meant is brought into range (spans are clipped to the capture and keep at least one sample) or
    /// left undone (unknown ids, numbers that are not finite, the last pane or segment taken away).
    pub fn apply(self, session: &mut Session) -> bool {
        match self {
            Self::ChooseChannel(channel) => channel < session.capture.channels && put(&mut session.channel, channel),
            Self::SetScale(channel, scale) => {
                scale_is_finite(&scale) && session.scales.get_mut(channel).is_some_and(|place| put(place, scale))
            }
            Self::SetRate(rate) => rate.is_none_or(|r| RATES_HZ.contains(&r)) && put(&mut session.rate_hz, rate),
            Self::SetRemoval(removal) => put(&mut session.removal, removal),
            Self::MoveSegment(id, span) => {
                let span = inside(span, session.capture.frames);
                segment(session, id).is_some_and(|s| put(&mut s.span, span))
            }
            Self::AddSegment(span) => add_segment(session, span),
            Self::RenameSegment(id, name) => {
                let name: String = name.trim().chars().take(NAME_LETTERS).collect();
                !name.is_empty() && segment(session, id).is_some_and(|s| put(&mut s.name, name))
            }
            Self::SetKind(kind) => {
                let id = session.current;
                segment(session, id).is_some_and(|s| put(&mut s.kind, kind))
            }
            Self::RemoveSegment(id) => remove_segment(session, id),
            Self::ChooseSegment(id) => segment(session, id).is_some() && put(&mut session.current, id),
            Self::AddPane(window) => add_pane(session, window),
            Self::SetWindow(id, window) => pane(session, id).is_some_and(|p| put(&mut p.window, window)),
            Self::ShowResidue(id, residue) => pane(session, id).is_some_and(|p| put(&mut p.residue, residue)),
            Self::RemovePane(id) => remove_pane(session, id),
            Self::MovePane(id, to) => move_pane(session, id, to),
            Self::Pick(frequency) => is_frequency(frequency) && put(&mut session.picked_hz, frequency),
            Self::AddHandTone(tone) | Self::HoldTone(tone) => add_hand_tone(session, &tone),
            Self::ChangeHandTone(at, tone) => {
                let tone = HandTone { by: said(&tone.by), reason: said(&tone.reason), ..tone };
                is_in_band(session, tone.frequency_hz)
                    && session.hand_tones.get_mut(at).is_some_and(|place| put(place, tone))
            }
            Self::RemoveHandTone(at) => take_out(&mut session.hand_tones, at),
            Self::RefuseTone(refusal) => refuse_tone(session, &refusal),
            Self::TakeBackRefusal(at) => take_out(&mut session.refused, at),
            Self::Overrule(overrule) => overrule_verdict(session, &overrule),
            Self::TakeBackOverrule(at) => take_out(&mut session.overruled, at),
            Self::PinFundamental(hz) => {
                hz.is_none_or(|hz| is_in_band(session, hz)) && put(&mut session.fundamental_hz, hz)
            }
            Self::SetNote(note) => is_frequency(note.frequency_hz) && set_note(session, note),
            Self::SetTuning(tuning) => {
                let usable = tuning.false_alarm > 0.0 && tuning.false_alarm < 1.0;
                let tuning = Tuning { max_tones: tuning.max_tones.clamp(1, MAX_TONES), ..tuning };
                usable && put(&mut session.tuning, tuning)
            }
            Self::SetAxes(axes) => axes_are_usable(&axes) && put(&mut session.axes, axes),
        }
    }
}

/// Puts a value in a place and says whether it is another one.
fn put<T: PartialEq>(place: &mut T, value: T) -> bool {
    let changed = *place != value;
    *place = value;
    changed
}

fn segment(session: &mut Session, id: SegmentId) -> Option<&mut NamedSegment> {
    session.segments.iter_mut().find(|s| s.id == id)
}

fn pane(session: &mut Session, id: PaneId) -> Option<&mut Pane> {
    session.panes.iter_mut().find(|p| p.id == id)
}

/// The span clipped to the capture, with at least one sample where the capture has any.
fn inside(span: Span, frames: u64) -> Span {
    let start = span.start.min(frames.saturating_sub(1));
    let end = span.end().min(frames).max((start + 1).min(frames));
    Span::from_range(start..end)
}

fn is_frequency(frequency_hz: Option<f64>) -> bool {
    frequency_hz.is_none_or(|f| f >= 0.0 && f.is_finite())
}

/// Whether every number of a scale is finite. A scale that cannot be used yet (a unit without its factor, say) is
/// still one the user is typing, and is kept.
pub(super) fn scale_is_finite(scale: &Scale) -> bool {
    let factor = match scale.factor {
        Factor::NotStated => true,
        Factor::UnitsPerFullScale(factor) => factor.is_finite(),
        Factor::Sensitivity { volts_per_unit, full_scale_volts } => {
            volts_per_unit.is_finite() && full_scale_volts.is_finite()
        }
    };
    factor && scale.reference.is_none_or(f64::is_finite)
}

/// Whether every range of the axes is finite and rising.
pub(super) fn axes_are_usable(axes: &ViewAxes) -> bool {
    let rising = |range: Option<(f64, f64)>| range.is_none_or(|(a, b)| a < b && a.is_finite() && b.is_finite());
    rising(axes.frequency_hz) && rising(axes.level_db)
}

fn add_segment(session: &mut Session, span: Span) -> bool {
    let Some(id) = session.last_segment_id.checked_add(1) else { return false };
    if session.segments.len() >= MAX_SEGMENTS {
        return false;
    }
    session.last_segment_id = id;
    let span = inside(span, session.capture.frames);
    session.segments.push(NamedSegment { id: SegmentId(id), name: format!("segment {id}"), span, kind: None });
    session.current = SegmentId(id);
    true
}

fn remove_segment(session: &mut Session, id: SegmentId) -> bool {
    let Some(at) = session.segments.iter().position(|s| s.id == id) else { return false };
    if session.segments.len() < 2 {
        return false;
    }
    session.segments.remove(at);
    session.overruled.retain(|o| o.segment != id);
    if session.current == id {
        let neighbour = session.segments.get(at).or_else(|| session.segments.last());
        session.current = neighbour.map_or(id, |s| s.id);
    }
    true
}

fn add_pane(session: &mut Session, window: Window) -> bool {
    let Some(id) = session.last_pane_id.checked_add(1) else { return false };
    if session.panes.len() >= MAX_PANES {
        return false;
    }
    session.last_pane_id = id;
    session.panes.push(Pane { id: PaneId(id), window, residue: false });
    true
}

fn remove_pane(session: &mut Session, id: PaneId) -> bool {
    let before = session.panes.len();
    if before > 1 {
        session.panes.retain(|p| p.id != id);
    }
    session.panes.len() != before
}

fn move_pane(session: &mut Session, id: PaneId, to: usize) -> bool {
    let Some(from) = session.panes.iter().position(|p| p.id == id) else { return false };
    let to = to.min(session.panes.len() - 1);
    let pane = session.panes.remove(from);
    session.panes.insert(to, pane);
    from != to
}

fn take_out<T>(list: &mut Vec<T>, at: usize) -> bool {
    let there = at < list.len();
    if there {
        list.remove(at);
    }
    there
}

fn is_in_band(session: &Session, frequency_hz: f64) -> bool {
    frequency_hz > 0.0 && frequency_hz < session.sample_rate_hz() / 2.0
}

/// A name or a reason on one line, not longer than is kept.
fn said(text: &str) -> String {
    let text: String = text.chars().map(|c| if c.is_control() { ' ' } else { c }).collect();
    text.trim().chars().take(REASON_LETTERS).collect()
}

/// Names a tone, or says something else of one named at this very place. A refusal there is taken back: what was said
/// last counts.
fn add_hand_tone(session: &mut Session, tone: &HandTone) -> bool {
    if !is_in_band(session, tone.frequency_hz) {
        return false;
    }
    let tone = HandTone { by: said(&tone.by), reason: said(&tone.reason), ..*tone };
    let near_hz = SAME_TONE_LINES * session.line_spacing_hz();
    if let Some(same) = session.hand_tones.iter_mut().find(|t| t.frequency_hz == tone.frequency_hz) {
        return put(same, tone);
    }
    if session.hand_tones.len() >= MAX_TONES {
        return false;
    }
    session.refused.retain(|r| (r.frequency_hz - tone.frequency_hz).abs() > near_hz);
    session.hand_tones.push(tone);
    true
}

fn refuse_tone(session: &mut Session, refusal: &Refusal) -> bool {
    if !is_in_band(session, refusal.frequency_hz) {
        return false;
    }
    let refusal = Refusal { by: said(&refusal.by), reason: said(&refusal.reason), ..*refusal };
    let near_hz = SAME_TONE_LINES * session.line_spacing_hz();
    let is_near = |hz: f64| (hz - refusal.frequency_hz).abs() <= near_hz;
    if let Some(same) = session.refused.iter_mut().find(|r| r.frequency_hz == refusal.frequency_hz) {
        return put(same, refusal);
    }
    if session.refused.len() >= MAX_DECISIONS {
        return false;
    }
    session.hand_tones.retain(|t| !is_near(t.frequency_hz));
    session.refused.push(refusal);
    true
}

/// Of one tone in one channel and segment only what was said last is kept.
fn overrule_verdict(session: &mut Session, overrule: &Overrule) -> bool {
    let known =
        overrule.channel < session.capture.channels && session.segments.iter().any(|s| s.id == overrule.segment);
    if !known || !is_in_band(session, overrule.frequency_hz) {
        return false;
    }
    let overrule = Overrule { by: said(&overrule.by), reason: said(&overrule.reason), ..*overrule };
    let near_hz = SAME_TONE_LINES * session.line_spacing_hz();
    let is_same = |o: &Overrule| {
        let place = (o.channel, o.segment) == (overrule.channel, overrule.segment);
        place && (o.frequency_hz - overrule.frequency_hz).abs() <= near_hz
    };
    if let Some(same) = session.overruled.iter_mut().find(|o| is_same(o)) {
        return put(same, overrule);
    }
    if session.overruled.len() >= MAX_DECISIONS {
        return false;
    }
    session.overruled.push(overrule);
    true
}

fn set_note(session: &mut Session, note: Note) -> bool {
    let at = session.notes.iter().position(|n| n.frequency_hz == note.frequency_hz);
    match (at, note.text.trim().is_empty()) {
        (None, true) => false,
        (None, false) => {
            session.notes.push(note);
            true
        }
        (Some(at), true) => {
            session.notes.remove(at);
            true
        }
        (Some(at), false) => session.notes.get_mut(at).is_some_and(|n| put(n, note)),
    }
}
