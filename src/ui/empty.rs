//! The screen before a capture is open: what to do, and the shortest way to do it.

use std::path::PathBuf;

use eframe::egui::{self, Button, RichText, TextEdit, Ui, vec2};

use super::action::Action;
use super::dialog::typed_path;
use super::view::{Intent, Intents, View};
use super::{theme, widget};
use crate::session::RecentFile;

/// Shows the empty state.
pub(super) fn show(
    ui: &mut Ui,
    demonstration: Option<&PathBuf>,
    recent: &[RecentFile],
    view: &mut View,
    intents: &mut Intents,
) {
    let room = ui.available_rect_before_wrap();
    let width = 560.0_f32.min(room.width() - 32.0);
    let place = egui::Rect::from_center_size(room.center(), vec2(width, (room.height() - 24.0).min(430.0)));
    let mut ui = ui.new_child(egui::UiBuilder::new().max_rect(place).id_salt("empty"));
    let ui = &mut ui;
    ui.spacing_mut().item_spacing.y = 8.0;
    let font = theme::heavy(ui.ctx(), 22.0);
    ui.label(RichText::new("Which tones are in your recording, and how strong are they?").font(font));
    ui.label(
        "Open a capture, mark the part where the machine runs steadily, and compare what several windows say of it, \
         side by side. Each tone gets a frequency, a level corrected for window and offset, and the ledger of those \
         corrections.",
    );
    ui.add_space(8.0);
    ui.horizontal(|ui| {
        if ui.add(Button::new("Open a capture…").min_size(vec2(150.0, 32.0))).clicked() {
            intents.push(Intent::Do(Action::OpenCapture));
        }
        let offer = Button::new("Open the demonstration capture").min_size(vec2(230.0, 32.0));
        let response = ui.add_enabled(demonstration.is_some(), offer);
        let where_not = "sample-captures/ was found neither in the working folder nor above the program.";
        if response.on_disabled_hover_text(where_not).clicked() {
            intents.push(Intent::Do(Action::OpenDemonstration));
        }
    });
    widget::quiet(ui, "You can also drop a recording (.wav) or a session (.session.ron) on this window.");
    ui.add_space(8.0);
    ui.horizontal(|ui| {
        let label = ui.label("Path");
        let field = TextEdit::singleline(&mut view.typed_path).desired_width(ui.available_width() - 72.0);
        let response = ui.add(field).labelled_by(label.id);
        let enter = response.lost_focus() && ui.input(|i| i.key_pressed(egui::Key::Enter));
        let ready = !view.typed_path.trim().is_empty();
        if (ui.add_enabled(ready, Button::new("Open")).clicked() || enter) && ready {
            intents.push(Intent::Open(typed_path(&view.typed_path)));
        }
    });
    let recent: Vec<_> = recent.iter().filter(|r| !r.missing).take(6).collect();
    if !recent.is_empty() {
        widget::section(ui, "Recent");
        for file in recent {
            let text = file.path.to_string_lossy();
            if ui.add(Button::new(text).frame_when_inactive(false).truncate()).clicked() {
                intents.push(Intent::Open(file.path.clone()));
            }
        }
    }
}
