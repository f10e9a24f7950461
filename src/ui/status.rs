//! What is going on: opening, computing, failed.

use std::time::Duration;

use eframe::egui::{Label, ProgressBar, RichText, Ui};

use super::desk::Desk;
use super::view::{Intent, Intents, View};
use super::{figure, theme, widget};
use crate::reading::{AdviceLine, Reading};
use crate::signal::Watch;

/// A capture that is being opened, and how to call that off.
pub(super) fn opening(ui: &mut Ui, name: &str, watch: &Watch) {
    ui.horizontal(|ui| {
        ui.label(format!("Opening {name}"));
        let bar = ProgressBar::new(watch.progress() as f32).desired_width(160.0).desired_height(8.0);
        ui.add(bar).accessible_name("Opening");
        if ui.button("Cancel").accessible_name("Cancel opening").clicked() {
            watch.cancel();
        }
    });
    ui.ctx().request_repaint_after(Duration::from_millis(100));
}

/// The line over the table: whether its figures are those asked for, what they refer to, what to know of them.
pub(super) fn figures(ui: &mut Ui, desk: &Desk, view: &View, intents: &mut Intents) {
    let palette = theme::palette(ui.ctx());
    ui.horizontal(|ui| {
        ui.set_min_height(24.0);
        let font = theme::heavy(ui.ctx(), theme::BODY);
        ui.label(RichText::new("Tones").font(font).color(palette.accent));
        if let Some(failure) = &desk.latest.failure {
            ui.label(RichText::new(failure).color(palette.alarm));
            if ui.button("Try again").clicked() {
                intents.push(Intent::Retry);
            }
        } else if desk.latest.called_off && !desk.latest.is_current() {
            ui.label("Called off; the figures below are older than the segment.");
            if ui.button("Compute").clicked() {
                intents.push(Intent::Retry);
            }
        } else if desk.latest.is_busy() && !view.marking {
            widget::quiet(ui, "computing; figures shown are older");
            let bar = ProgressBar::new(desk.latest.progress as f32).desired_width(120.0).desired_height(8.0);
            ui.add(bar).accessible_name("Computing");
            if ui.button("Cancel").accessible_name("Cancel computing").clicked() {
                intents.push(Intent::CallOff);
            }
            ui.ctx().request_repaint_after(Duration::from_millis(100));
        } else if let Some(reading) = desk.reading() {
            let text = format!(
                "{} over the floor{}  ·  levels in {}",
                reading.tones.len(),
                smallest(reading),
                reading.scale.reference_label
            );
            widget::quiet(ui, text);
            if let Some(best) = reading.advice.first() {
                ui.add(Label::new(RichText::new(advised(best)).font(theme::quiet()).color(palette.quiet)).truncate());
            }
        }
    });
    if desk.latest.is_current()
        && let Some(reading) = desk.reading()
    {
        // Lines of their own: what is doubtful about the figures is not to be cut short.
        for warning in &reading.warnings {
            ui.add(Label::new(RichText::new(&warning.text).color(palette.alarm)).wrap());
        }
    }
}

/// The level from which on a tone would be seen.
fn smallest(reading: &Reading) -> String {
    let level = reading.segment.smallest_tone_db.map(|db| figure::fixed(db, 1));
    level.map_or_else(String::new, |db| format!("  ·  smallest that would be seen {db} dB"))
}

/// The window advised, and how far it can be trusted.
fn advised(best: &AdviceLine) -> String {
    let window = best.written();
    match best.expected_worst_error_db {
        Some(error) => {
            let error = figure::significant(error, 2);
            format!("·  window advised: {window}, worst error to expect {error} dB ({})", best.why)
        }
        None => format!("·  no window reads all tones; {window} reads most ({})", best.why),
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn advice_says_what_decides_and_when_no_window_does() {
        let mut best = AdviceLine {
            window: "kaiser".to_owned(),
            parameter: vec![8.0],
            expected_worst_error_db: Some(0.45),
            why: "the noise at 124.470 Hz decides".to_owned(),
        };
        let text = advised(&best);
        assert_eq!(
            text,
            "·  window advised: kaiser=8, worst error to expect 0.45 dB (the noise at 124.470 Hz decides)"
        );
        best.expected_worst_error_db = None;
        assert!(advised(&best).starts_with("·  no window reads all tones; kaiser=8 reads most"));
    }
}
