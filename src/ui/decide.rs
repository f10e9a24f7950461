//! What is decided by hand on the screen: a frequency held, a tone refused, a verdict overruled, a fundamental pinned;
//! and the question who decides it and why.

use eframe::egui::{Key, Response, RichText, TextEdit, Ui};

use super::act::hand_tone;
use super::action::Action;
use super::desk::Desk;
use super::dialog::Dialog;
use super::table::picked_row;
use super::view::View;
use super::workbench::Workbench;
use super::{figure, theme, widget};
use crate::reading::{Tone, Verdict};
use crate::session::{Command, HandTone, Overrule, Refusal};

/// What is to be decided.
#[derive(Debug, Clone, PartialEq)]
enum What {
    Refuse,
    /// The verdict found, and the one to stand.
    Overrule(Option<Verdict>, Verdict),
    /// The named tone, by its place in the list.
    Named(usize),
}

/// A decision being made: what, where, who and why.
#[derive(Debug, Clone, PartialEq)]
pub(super) struct Decide {
    what: What,
    frequency_hz: f64,
    /// Decimals of the frequency that say something.
    decimals: usize,
    by: String,
    reason: String,
    /// Whether the first field has had the keys.
    shown: bool,
}

impl Decide {
    /// What is asked.
    pub(super) fn title(&self) -> String {
        let place = format!("{} Hz", figure::fixed(self.frequency_hz, self.decimals));
        match self.what {
            What::Refuse => format!("Refuse the tone at {place}"),
            What::Overrule(..) => format!("Overrule the verdict at {place}"),
            What::Named(_) => format!("Why there is a tone at {place}"),
        }
    }

    /// The word on the button that goes on.
    pub(super) fn go(&self) -> &'static str {
        match self.what {
            What::Refuse => "Refuse",
            What::Overrule(..) => "Overrule",
            What::Named(_) => "Keep",
        }
    }

    /// Whether all is said that has to be: nothing is decided against the program without a name and a reason.
    pub(super) fn is_complete(&self) -> bool {
        let said = !self.by.trim().is_empty() && !self.reason.trim().is_empty();
        said || matches!(self.what, What::Named(_))
    }

    /// Shows the fields; says whether Enter was pressed in one.
    pub(super) fn show(&mut self, ui: &mut Ui) -> bool {
        match &mut self.what {
            What::Refuse => drop(ui.label("No tone is listed there any more, in whatever segment is read. What stands there is still fitted, so that it leaks into no other.")),
            What::Overrule(found, verdict) => {
                let found = found.map_or("no verdict was found", Verdict::word);
                ui.label(format!("Found: {found}. Yours stands in its place; both are kept and printed."));
                ui.horizontal_wrapped(|ui| {
                    for one in Verdict::ALL {
                        ui.radio_value(verdict, one, one.word());
                    }
                });
            }
            What::Named(_) => {}
        }
        let first = !std::mem::replace(&mut self.shown, true);
        let name = line(ui, "Your name", &mut self.by);
        let reason = line(ui, "Reason", &mut self.reason);
        if first {
            if self.by.is_empty() { name.request_focus() } else { reason.request_focus() }
        }
        widget::quiet(ui, "The name is remembered for the next time.");
        [name, reason].iter().any(|r| r.lost_focus() && ui.input(|i| i.key_pressed(Key::Enter)))
    }

    /// The change of the document it comes to.
    fn command(self, desk: &Desk) -> Option<Command> {
        let Self { what, frequency_hz, by, reason, .. } = self;
        Some(match what {
            What::Refuse => Command::RefuseTone(Refusal { frequency_hz, by, reason }),
            What::Overrule(_, verdict) => {
                let (channel, segment) = (desk.session.channel, desk.session.current);
                Command::Overrule(Overrule { frequency_hz, channel, segment, verdict, by, reason })
            }
            What::Named(at) => {
                let tone = desk.session.hand_tones.get(at)?;
                Command::ChangeHandTone(at, HandTone { by, reason, ..tone.clone() })
            }
        })
    }
}

/// A line of text under its name.
fn line(ui: &mut Ui, name: &str, text: &mut String) -> Response {
    let label = ui.label(RichText::new(name).color(theme::palette(ui.ctx()).quiet));
    ui.add(TextEdit::singleline(text).desired_width(f32::INFINITY)).labelled_by(label.id).accessible_name(name)
}

/// The row that is picked.
fn picked(desk: &Desk) -> Option<&Tone> {
    let reading = desk.reading()?;
    reading.tones.get(picked_row(reading, desk)?)
}

/// The best estimate of the tone picked, else where the pick stands.
fn picked_hz(desk: &Desk) -> Option<f64> {
    picked(desk).map(|t| t.frequency_hz).or(desk.session.picked_hz)
}

/// Whether the picked tone's frequency is held.
pub(super) fn is_held(desk: &Desk, view: &View) -> bool {
    let held = |at: usize| desk.session.hand_tones.get(at).is_some_and(|t| t.held);
    desk.session.picked_hz.is_some() && hand_tone(desk, view).is_some_and(held)
}

/// Holds the picked tone at its best estimate, or lets it be fitted again where it was held.
pub(super) fn hold(desk: &Desk, view: &View) -> Option<Command> {
    let frequency_hz = picked_hz(desk)?;
    let Some(at) = hand_tone(desk, view) else { return Some(Command::HoldTone(HandTone::at(frequency_hz, true))) };
    let tone = desk.session.hand_tones.get(at)?.clone();
    let frequency_hz = if tone.held { tone.frequency_hz } else { frequency_hz };
    Some(Command::ChangeHandTone(at, HandTone { frequency_hz, held: !tone.held, ..tone }))
}

/// Pins the picked tone as fundamental; unpins where it is pinned already or none is picked.
pub(super) fn pin(desk: &Desk) -> Option<Command> {
    let pinned = desk.session.fundamental_hz;
    let same = |hz: &f64| pinned.is_none_or(|p| (p - hz).abs() > 0.5 * desk.line_spacing_hz());
    let hz = picked_hz(desk).filter(same);
    (hz.is_some() || pinned.is_some()).then_some(Command::PinFundamental(hz))
}

/// A decision with the name of who makes it.
pub(super) fn signed(command: Command, person: &str) -> Command {
    let sign = |tone: HandTone| if tone.by.is_empty() { HandTone { by: person.to_owned(), ..tone } } else { tone };
    match command {
        Command::AddHandTone(tone) => Command::AddHandTone(sign(tone)),
        Command::HoldTone(tone) => Command::HoldTone(sign(tone)),
        other => other,
    }
}

impl Workbench {
    /// Asks who refuses the picked tone or overrules its verdict, and why.
    pub(super) fn ask_decision(&mut self, action: Action) {
        let Some(desk) = &self.desk else { return };
        let Some(frequency_hz) = picked_hz(desk) else { return };
        let tone = picked(desk);
        let before = desk.session.overruled_here().map(|(_, o)| o);
        let before = before.filter(|o| desk.session.is_same_tone(o.frequency_hz, frequency_hz)).last();
        let what = if action == Action::RefuseTone {
            What::Refuse
        } else if let Some(tone) = tone {
            let standing = before.map(|o| o.verdict).or(tone.verdict).unwrap_or(Verdict::Holds);
            What::Overrule(tone.verdict, standing)
        } else {
            self.notices.refuse("There is no tone in the table where the pick stands: pick one first.");
            return;
        };
        let reason = before.filter(|_| what != What::Refuse).map(|o| o.reason.clone()).unwrap_or_default();
        let decimals = figure::decimals(desk.line_spacing_hz(), 6);
        let by = self.person().to_owned();
        self.dialogs.put(Dialog::Decide(Decide { what, frequency_hz, decimals, by, reason, shown: false }));
    }

    /// Asks who named a tone, and why.
    pub(super) fn ask_why_named(&mut self, at: usize) {
        let Some(desk) = &self.desk else { return };
        let Some(tone) = desk.session.hand_tones.get(at) else { return };
        let by = if tone.by.is_empty() { self.person().to_owned() } else { tone.by.clone() };
        let (frequency_hz, reason) = (tone.frequency_hz, tone.reason.clone());
        let decimals = figure::decimals(desk.line_spacing_hz(), 6);
        let what = What::Named(at);
        self.dialogs.put(Dialog::Decide(Decide { what, frequency_hz, decimals, by, reason, shown: false }));
    }

    /// Takes in what was decided.
    pub(super) fn take_decision(&mut self, decide: Decide) {
        let person = decide.by.trim().to_owned();
        if !person.is_empty() {
            self.remember_person(&person);
        }
        let Some(command) = self.desk.as_ref().and_then(|desk| decide.command(desk)) else { return };
        self.change(command);
        if let Some(desk) = &mut self.desk {
            desk.history.close_step();
        }
    }
}
