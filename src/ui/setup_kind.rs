//! What the segment holds: found, or as the user says.

use eframe::egui::{ComboBox, Ui};

use super::desk::Desk;
use super::list;
use super::view::{Intent, Intents};
use super::widget::{quiet, row};
use crate::session::Command;
use crate::tone::Kind;

/// The row of the setup column, and the reason under it.
pub(super) fn show(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let set = desk.segment().and_then(|s| s.kind);
    row(ui, "Holds", |ui, id| {
        let combo = ComboBox::from_id_salt("kind").selected_text(chosen(desk, set));
        let shown = list::show(ui, combo, |ui| {
            let mut taken = false;
            for choice in std::iter::once(None).chain(Kind::ALL.map(Some)) {
                if list::item(ui, set == choice, title(choice)) {
                    intents.push(Intent::Change(Command::SetKind(choice)));
                    taken = true;
                }
            }
            taken
        });
        shown.labelled_by(id);
    });
    if let Some(why) = desk.reading().and_then(|r| r.segment.kind_why.as_deref()) {
        quiet(ui, why);
    }
}

/// What a choice is called in the list.
fn title(kind: Option<Kind>) -> &'static str {
    match kind {
        None => "as found",
        Some(Kind::Tones) => "tones",
        Some(Kind::Random) => "random noise",
        Some(Kind::Transient) => "a transient",
    }
}

/// What stands on the button: the user's word, else what is found.
fn chosen(desk: &Desk, set: Option<Kind>) -> &'static str {
    let found = desk.reading().and_then(|r| r.segment.kind);
    match (set, found) {
        (Some(kind), _) => title(Some(kind)),
        (None, Some(Kind::Tones)) => "tones (found)",
        (None, Some(Kind::Random)) => "random (found)",
        (None, Some(Kind::Transient)) => "transient (found)",
        (None, None) => "not told",
    }
}
