//! What can be done with a pane.

use eframe::egui::{Button, Ui};

use super::action::{Action, entry_of};
use super::view::{Intent, Intents};
use super::{theme, widget};
use crate::session::Pane;

/// What can be done with one pane.
pub(super) fn show(ui: &mut Ui, pane: &Pane, intents: &mut Intents) {
    for action in [
        Action::ChooseWindow,
        Action::ShowResidue,
        Action::EnlargePane,
        Action::PaneLeft,
        Action::PaneRight,
        Action::RemovePane,
    ] {
        let Some(entry) = entry_of(action) else { continue };
        let key = entry.key.map(|k| ui.ctx().format_shortcut(&k)).unwrap_or_default();
        let on = action == Action::ShowResidue && pane.residue;
        if ui.add(Button::new(entry.name).shortcut_text(key).selected(on)).clicked() {
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
