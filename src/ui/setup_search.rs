//! What governs the search for tones, in the setup column.

use eframe::egui::Ui;

use super::desk::Desk;
use super::view::{Intent, Intents};
use super::widget::{number, quiet, row, section};
use crate::session::{Command, MAX_TONES, Tuning};

/// The smallest and the largest chance of a false alarm offered.
const FALSE_ALARM: (f64, f64) = (1e-12, 0.5);

/// Shows the section.
pub(super) fn show(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    section(ui, "Search");
    let before = desk.session.tuning;
    let chance = row(ui, "False alarm", |ui, id| {
        let speed = before.false_alarm * 0.02;
        number(ui, id, before.false_alarm, |f| {
            f.range(FALSE_ALARM.0..=FALSE_ALARM.1).speed(speed).custom_formatter(|v, _| format!("{v}"))
        })
    });
    let most = row(ui, "Most tones", |ui, id| {
        number(ui, id, before.max_tones as f64, |f| f.range(1.0..=MAX_TONES as f64).max_decimals(0))
    });
    quiet(ui, "the chance that noise alone gives any tone at all");
    let after = Tuning { false_alarm: chance.value, max_tones: most.value.round() as usize };
    if (chance.changed || most.changed) && after != before {
        intents.push(Intent::Change(Command::SetTuning(after)));
    }
    if chance.ended || most.ended {
        intents.push(Intent::CloseStep);
    }
}
