//! What was decided by hand, in the setup column: a list, and a way to take each back.

use eframe::egui::{self, Button, Response, Ui};

use super::desk::Desk;
use super::figure;
use super::typed::{Bounds, number_row};
use super::view::{Intent, Intents, View};
use super::widget::{quiet, section};
use crate::session::{Command, HandTone};

/// Shows the section.
pub(super) fn show(ui: &mut Ui, desk: &Desk, view: &View, intents: &mut Intents) {
    section(ui, "By hand");
    fundamental(ui, desk, view, intents);
    for (at, tone) in desk.session.hand_tones.iter().enumerate() {
        named(ui, desk, at, tone, intents);
    }
    for (at, refusal) in desk.session.refused.iter().enumerate() {
        let place = hertz(desk, refusal.frequency_hz);
        let back = Command::TakeBackRefusal(at);
        entry(ui, &format!("{place} refused"), &format!("Take back the refusal at {place}"), back, intents);
        said(ui, &refusal.by, &refusal.reason);
    }
    let mut n_elsewhere = desk.session.overruled.len();
    for (at, overrule) in desk.session.overruled_here() {
        n_elsewhere -= 1;
        let place = hertz(desk, overrule.frequency_hz);
        let text = format!("{place} {}", overrule.verdict.word());
        let back = Command::TakeBackOverrule(at);
        entry(ui, &text, &format!("Take back the verdict at {place}"), back, intents);
        said(ui, &overrule.by, &overrule.reason);
    }
    if n_elsewhere > 0 {
        quiet(ui, format!("{n_elsewhere} more overruled in other segments or channels"));
    }
    if desk.session.hand_tones.is_empty() && desk.session.refused.is_empty() && desk.session.overruled.is_empty() {
        quiet(ui, "no tone named or refused, no verdict overruled");
    }
}

/// A frequency as lines of the segment deserve.
fn hertz(desk: &Desk, frequency_hz: f64) -> String {
    format!("{} Hz", figure::hertz(frequency_hz, desk.line_spacing_hz()))
}

/// Half the rate, below which a tone stands.
fn bounds(desk: &Desk) -> Bounds {
    Bounds::above_zero(1e-9..=desk.session.sample_rate_hz() / 2.0 * (1.0 - 1e-9))
}

fn fundamental(ui: &mut Ui, desk: &Desk, view: &View, intents: &mut Intents) {
    let Some(pinned_hz) = desk.session.fundamental_hz else {
        let place = desk.session.picked_hz.or(view.hairline_hz);
        let button = ui.add_enabled(place.is_some(), Button::new("Pin a fundamental"));
        let button = button.on_hover_text("Orders are then counted by it: a shaft's speed of turning.");
        if button.on_disabled_hover_text("Pick a tone, or put the hairline somewhere, first.").clicked() {
            intents.push(Intent::Change(Command::PinFundamental(place)));
            intents.push(Intent::CloseStep);
        }
        return;
    };
    let decimals = figure::decimals(desk.line_spacing_hz(), 6);
    let mut unpinned = false;
    let typed = number_row(
        ui,
        "Order 1",
        pinned_hz,
        &bounds(desk),
        |f| f.suffix(" Hz").speed(desk.line_spacing_hz()).max_decimals(decimals),
        |ui| unpinned = back(ui, "unpin", "Unpin the fundamental").clicked(),
    );
    if typed.changed {
        intents.push(Intent::Change(Command::PinFundamental(Some(typed.value))));
    }
    if typed.ended {
        intents.push(Intent::CloseStep);
    }
    if unpinned {
        intents.push(Intent::Change(Command::PinFundamental(None)));
    }
    let used = desk.reading().and_then(|r| r.fundamental).filter(|f| f.pinned_hz == pinned_hz);
    if let Some(used) = used.filter(|f| f.used_hz != f.pinned_hz) {
        quiet(ui, format!("followed as the tone at {}", hertz(desk, used.used_hz)));
    }
}

/// A tone named by hand: where, whether it is held there, who and why.
fn named(ui: &mut Ui, desk: &Desk, at: usize, tone: &HandTone, intents: &mut Intents) {
    let mut changed = tone.clone();
    let decimals = figure::decimals(desk.line_spacing_hz(), 6);
    let place = hertz(desk, tone.frequency_hz);
    let mut taken_back = false;
    let typed = number_row(
        ui,
        &format!("Tone {}", at + 1),
        tone.frequency_hz,
        &bounds(desk),
        |f| f.suffix(" Hz").speed(desk.line_spacing_hz()).max_decimals(decimals),
        |ui| taken_back = back(ui, "remove", &format!("Take back the tone named at {place}")).clicked(),
    );
    changed.frequency_hz = typed.value;
    let mut toggled = false;
    ui.horizontal(|ui| {
        let check = ui.checkbox(&mut changed.held, "held");
        toggled = check.accessible_name(format!("Hold the tone at {place} there")).changed();
        if back(ui, "why…", &format!("Say why there is a tone at {place}")).clicked() {
            intents.push(Intent::Explain(at));
        }
    });
    said(ui, &tone.by, &tone.reason);
    if taken_back {
        intents.push(Intent::Change(Command::RemoveHandTone(at)));
    } else if typed.changed || toggled {
        intents.push(Intent::Change(Command::ChangeHandTone(at, changed)));
    }
    if typed.ended || toggled {
        intents.push(Intent::CloseStep);
    }
}

/// One decision and the button that takes it back.
fn entry(ui: &mut Ui, text: &str, name: &str, command: Command, intents: &mut Intents) {
    ui.horizontal(|ui| {
        ui.add(egui::Label::new(text).truncate());
        ui.with_layout(egui::Layout::right_to_left(egui::Align::Center), |ui| {
            if back(ui, "take back", name).clicked() {
                intents.push(Intent::Change(command));
            }
        });
    });
}

/// A small button with a name that says of what it is.
fn back(ui: &mut Ui, text: &str, name: &str) -> Response {
    ui.add(Button::new(text).small()).accessible_name(name)
}

/// Who and why.
fn said(ui: &mut Ui, by: &str, reason: &str) {
    let text = match (by.is_empty(), reason.is_empty()) {
        (true, true) => return,
        (false, true) => format!("by {by}"),
        (true, false) => reason.to_owned(),
        (false, false) => format!("by {by}: {reason}"),
    };
    let colour = super::theme::palette(ui.ctx()).quiet;
    let text = egui::RichText::new(text).font(super::theme::quiet()).color(colour);
    ui.add(egui::Label::new(text).wrap());
}
