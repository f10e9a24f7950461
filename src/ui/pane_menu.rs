//! Choosing a window from the catalogue, and what else can be done with a pane.

use eframe::egui::{Button, ScrollArea, Ui};

use super::action::{Action, entry_of};
use super::view::{Intent, Intents};
use super::{theme, widget};
use crate::session::{Command, Pane};
use crate::window::{Window, catalogue};

/// Offers the catalogue; `chosen` gets the window taken, with its parameters as they stand by default.
pub(super) fn choose(ui: &mut Ui, mut chosen: impl FnMut(Window)) {
    ui.set_min_width(190.0);
    ScrollArea::vertical().max_height(420.0).show(ui, |ui| {
        for entry in catalogue() {
            let button = Button::new(entry.name).frame_when_inactive(false).min_size(eframe::egui::vec2(180.0, 24.0));
            let response = ui.add(button).on_hover_text(entry.purpose);
            if response.clicked() {
                if let Ok(window) = Window::parse(entry.name) {
                    chosen(window);
                }
                ui.close();
            }
        }
    });
}

/// What can be done with one pane.
pub(super) fn show(ui: &mut Ui, pane: &Pane, intents: &mut Intents) {
    ui.menu_button("Replace the window", |ui| {
        choose(ui, |window| intents.push(Intent::Change(Command::SetWindow(pane.id, window))));
    });
    for action in [Action::EnlargePane, Action::PaneLeft, Action::PaneRight, Action::RemovePane] {
        let Some(entry) = entry_of(action) else { continue };
        let key = entry.key.map(|k| ui.ctx().format_shortcut(&k)).unwrap_or_default();
        if ui.add(Button::new(entry.name).shortcut_text(key)).clicked() {
            intents.push(Intent::Do(action));
            ui.close();
        }
    }
    ui.separator();
    ui.scope(|ui| {
        ui.set_max_width(280.0);
        widget::quiet(ui, pane.window.entry().purpose);
        let source = pane.window.entry().source;
        if !source.is_empty() {
            ui.add(eframe::egui::Label::new(
                eframe::egui::RichText::new(format!("Source: {source}"))
                    .font(theme::quiet())
                    .color(theme::palette(ui.ctx()).quiet),
            ));
        }
    });
}
