//! What governs the search for tones, in the setup column.

use eframe::egui::Ui;

use super::desk::Desk;
use super::typed::{Bounds, number_row};
use super::view::{Intent, Intents};
use super::widget::{quiet, section};
use crate::session::{Command, MAX_TONES, Tuning};

/// The smallest and the largest chance of a false alarm offered.
const FALSE_ALARM: (f64, f64) = (1e-12, 0.5);

/// Shows the section.
pub(super) fn show(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    section(ui, "Search");
    let before = desk.session.tuning;
    let speed = before.false_alarm * 0.02;
    let bounds = Bounds::within(FALSE_ALARM.0..=FALSE_ALARM.1);
    let chance =
        number_row(ui, "False alarm", before.false_alarm, &bounds, |f| f.speed(speed).max_decimals(12), |_| {});
    let bounds = Bounds::within(1.0..=MAX_TONES as f64);
    let most = number_row(ui, "Most tones", before.max_tones as f64, &bounds, |f| f.max_decimals(0), |_| {});
    quiet(ui, "the chance that noise alone gives any tone at all");
    let after = Tuning { false_alarm: chance.value, max_tones: most.value.round() as usize };
    if (chance.changed || most.changed) && after != before {
        intents.push(Intent::Change(Command::SetTuning(after)));
    }
    if chance.ended || most.ended {
        intents.push(Intent::CloseStep);
    }
}
