//! Lists that drop down from a button, one thing of which is chosen.

use eframe::egui::{ComboBox, Key, Response, Ui, WidgetText};

/// Shows the button and, where it is open, the list that `things` fills in with [`item`]; `things` tells whether one
/// was chosen. A list that was left by a key gives the focus back to its button.
pub(super) fn show(ui: &mut Ui, list: ComboBox<'_>, things: impl FnOnce(&mut Ui) -> bool) -> Response {
    let shown = list.show_ui(ui, things);
    let by_key = ui.input(|i| i.key_pressed(Key::Enter) || i.key_pressed(Key::Space));
    let left = ui.input(|i| i.key_pressed(Key::Escape));
    if shown.inner.is_some_and(|chosen| left || (chosen && by_key)) {
        shown.response.request_focus();
    }
    shown.response
}

/// One thing of a list; whether it was chosen, by a click or by a key, which closes the list.
pub(super) fn item(ui: &mut Ui, current: bool, text: impl Into<WidgetText>) -> bool {
    let text: WidgetText = text.into();
    let chosen = ui.selectable_label(current, text).clicked();
    if chosen {
        // A click closes it by itself, a key does not.
        ui.close();
    }
    chosen
}
