//! What is asked or told over everything else.

use std::collections::VecDeque;
use std::path::{Path, PathBuf};

use eframe::egui::{self, Button, Context, Grid, Id, Modal, RichText, ScrollArea, TextEdit, Ui};

use super::action::{ENTRIES, Menu};
use super::decide::Decide;
use super::desk::file_name;
use super::files::{Changed, Kept, Opened};
use super::{figure, theme, widget};
use crate::session::{Loaded, Recovered};

/// What is to happen once unsaved work is dealt with.
#[derive(Debug)]
pub(super) enum After {
    Quit,
    Open(PathBuf),
    /// Put on the desk what was opened meanwhile.
    Take(Box<Opened>),
}

/// The question or the text shown.
#[derive(Debug)]
pub(super) enum Dialog {
    Keys,
    About,
    Path(String),
    SavePath(String),
    /// The desk whose session is to be saved, and the file that stands there already.
    Replace(u64, PathBuf),
    Unsaved(After),
    /// The session, and the path typed.
    Missing(Box<Kept>, String),
    Changed(Box<Changed>),
    Recover(Vec<Recovered>),
    ToneNote {
        frequency_hz: f64,
        text: String,
    },
    /// Something decided by hand: who and why.
    Decide(Decide),
}

/// The dialog shown and those that wait for it to close: none throws another away.
#[derive(Debug, Default)]
pub(super) struct Dialogs(VecDeque<Dialog>);

impl Dialogs {
    /// Whether none is shown.
    pub(super) fn is_empty(&self) -> bool {
        self.0.is_empty()
    }

    /// Shows a dialog, after those that are there.
    pub(super) fn put(&mut self, dialog: Dialog) {
        self.0.push_back(dialog);
    }

    /// Shows a dialog now; the one shown comes back after it.
    pub(super) fn interrupt(&mut self, dialog: Dialog) {
        if let Dialog::Unsaved(After::Quit) = dialog {
            self.0.retain(|d| !matches!(d, Dialog::Unsaved(After::Quit)));
        }
        self.0.push_front(dialog);
    }

    /// Takes the one shown, or the first that is such a one, out.
    pub(super) fn take_if(&mut self, is_it: impl Fn(&Dialog) -> bool) -> Option<Dialog> {
        let at = self.0.iter().position(is_it)?;
        self.0.remove(at)
    }
}

/// What the user said.
#[derive(Debug)]
pub(super) enum Reply {
    Close,
    Open(PathBuf),
    SaveThen(After),
    DiscardThen(After),
    SaveAt(PathBuf),
    Replace(u64, PathBuf),
    /// The session is not to be saved.
    NoSave,
    AskLocate(Box<Kept>),
    Locate(Box<Kept>, PathBuf),
    UseChanged(Box<Changed>),
    Recover(Box<Recovered>),
    DiscardRecoveries(Vec<Recovered>),
    Note(f64, String),
    Decide(Decide),
}

/// The caution of the about box.
pub(super) const CAUTION: &str = "Figures from this tool may decide whether a machine runs near people. Check the \
     instrument chain and the calibration. The stated uncertainty covers only what its budget lists. Machine safety, \
     exposure and acceptance decisions follow the applicable local codes and standards and the judgement of licensed \
     or qualified people.";

/// Shows the dialog; gives it back while it stays open.
pub(super) fn show(ctx: &Context, dialog: Dialog) -> Result<Dialog, Reply> {
    let mut dialog = dialog;
    let mut said = None;
    let frame = egui::Frame::popup(&ctx.global_style()).inner_margin(egui::Margin::same(16));
    let modal = Modal::new(Id::unique("dialog")).frame(frame).show(ctx, |ui| {
        ui.set_width(460.0_f32.min(ui.ctx().content_rect().width() - 60.0));
        ui.spacing_mut().item_spacing.y = 8.0;
        match &mut dialog {
            Dialog::Keys => keys(ui, &mut said),
            Dialog::About => about(ui, &mut said),
            Dialog::Path(text) => {
                let label = "Type or paste the path of a capture or a session.";
                path(ui, ("Open by path", label, "Open"), text, &mut said);
            }
            Dialog::SavePath(text) => {
                let label = "Type or paste the path of the session's file.";
                path(ui, ("Save by path", label, "Save"), text, &mut said);
            }
            Dialog::Replace(_, path) => replace(ui, path, &mut said),
            Dialog::Unsaved(_) => unsaved(ui, &mut said),
            Dialog::Missing(kept, text) => missing(ui, &kept.loaded, text, &mut said),
            Dialog::Changed(changed) => changed_capture(ui, changed, &mut said),
            Dialog::Recover(list) => recover(ui, list, &mut said),
            Dialog::ToneNote { frequency_hz, text } => tone_note(ui, *frequency_hz, text, &mut said),
            Dialog::Decide(decide) => decision(ui, decide, &mut said),
        }
    });
    if said.is_none() && modal.should_close() && !matches!(dialog, Dialog::Recover(_)) {
        said = Some(Said::No);
    }
    match said {
        None => Ok(dialog),
        Some(said) => Err(reply(dialog, said)),
    }
}

/// Which button was pressed.
#[derive(Debug, Clone, Copy, PartialEq)]
enum Said {
    No,
    Yes,
    Other,
    Nth(usize),
}

fn reply(dialog: Dialog, said: Said) -> Reply {
    match (dialog, said) {
        (Dialog::Path(text), Said::Yes) => Reply::Open(typed_path(&text)),
        (Dialog::Unsaved(after), Said::Yes) => Reply::SaveThen(after),
        (Dialog::Unsaved(after), Said::Other) => Reply::DiscardThen(after),
        (Dialog::SavePath(text), Said::Yes) => Reply::SaveAt(typed_path(&text)),
        (Dialog::Replace(number, path), Said::Yes) => Reply::Replace(number, path),
        (Dialog::SavePath(_) | Dialog::Replace(..), _) => Reply::NoSave,
        (Dialog::Missing(kept, text), Said::Yes) => Reply::Locate(kept, typed_path(&text)),
        (Dialog::Missing(kept, _), Said::Other) => Reply::AskLocate(kept),
        (Dialog::Changed(changed), Said::Yes) => Reply::UseChanged(changed),
        (Dialog::Changed(changed), Said::Other) => Reply::AskLocate(Box::new(changed.kept)),
        (Dialog::Recover(mut list), Said::Nth(i)) if i < list.len() => Reply::Recover(Box::new(list.remove(i))),
        (Dialog::Recover(list), Said::Other) => Reply::DiscardRecoveries(list),
        (Dialog::ToneNote { frequency_hz, text }, Said::Yes) => Reply::Note(frequency_hz, text),
        (Dialog::Decide(decide), Said::Yes) => Reply::Decide(decide),
        _ => Reply::Close,
    }
}

/// A path as typed or pasted, without quotes and space around it.
pub(super) fn typed_path(text: &str) -> PathBuf {
    let text = text.trim();
    let bare = text.strip_prefix('"').and_then(|t| t.strip_suffix('"')).unwrap_or(text);
    PathBuf::from(bare.strip_prefix("file://").unwrap_or(bare))
}

fn head(ui: &mut Ui, text: &str) {
    let font = theme::heavy(ui.ctx(), theme::HEAD);
    ui.label(RichText::new(text).font(font));
}

/// Buttons, the one that goes on first.
fn buttons(ui: &mut Ui, said: &mut Option<Said>, list: &[(&str, Said, bool)]) {
    ui.horizontal(|ui| {
        for (text, meaning, enabled) in list {
            if ui.add_enabled(*enabled, Button::new(*text)).clicked() {
                *said = Some(*meaning);
            }
        }
    });
}

/// The text field of a dialog, which takes the keys when nothing else has them; whether Enter was pressed in it.
fn entered(ui: &mut Ui, name: &str, text: &mut String) -> bool {
    let response = ui.add(TextEdit::singleline(text).desired_width(f32::INFINITY)).accessible_name(name);
    // Enter takes the focus away, and a field that has it again has not lost it: this is asked first.
    let enter = response.lost_focus() && ui.input(|i| i.key_pressed(egui::Key::Enter));
    if !enter && ui.memory(|m| m.focused().is_none()) {
        response.request_focus();
    }
    enter
}

fn keys(ui: &mut Ui, said: &mut Option<Said>) {
    head(ui, "Keys");
    ScrollArea::vertical().max_height(420.0).show(ui, |ui| {
        Grid::new("keys").num_columns(2).spacing([24.0, 2.0]).show(ui, |ui| {
            for menu in Menu::ALL {
                for entry in ENTRIES.iter().filter(|e| e.menu == menu) {
                    let Some(key) = entry.key else { continue };
                    ui.label(ui.ctx().format_shortcut(&key));
                    ui.label(entry.name);
                    ui.end_row();
                }
            }
            for (key, what) in [
                ("Tab", "To the next part of the screen"),
                (
                    "Left, Right",
                    "In a pane: hairline by one line (Shift: ten); at a segment's edge: one sample (Shift: ten)",
                ),
                ("Up, Down", "The tone above or below"),
                ("Wheel", "Zoom about the pointer"),
                ("Drag", "In the strip: mark; in a pane: move along"),
                ("Double click", "Show all"),
            ] {
                ui.label(key);
                ui.add(egui::Label::new(what).wrap());
                ui.end_row();
            }
        });
    });
    buttons(ui, said, &[("Close", Said::No, true)]);
}

fn about(ui: &mut Ui, said: &mut Option<Said>) {
    head(ui, "Panewise");
    ui.label(format!("Version {}", env!("CARGO_PKG_VERSION")));
    ui.label("From a recorded capture to a signed figure: several windows side by side, each tone's frequency and corrected level.");
    ui.label(CAUTION);
    widget::quiet(ui, "Licence: MIT or Apache-2.0. Typeface: Open Sans, Apache-2.0.");
    buttons(ui, said, &[("Close", Said::No, true)]);
}

fn path(ui: &mut Ui, (title, label, go): (&str, &str, &str), text: &mut String, said: &mut Option<Said>) {
    head(ui, title);
    ui.label(label);
    if entered(ui, "Path", text) && !text.trim().is_empty() {
        *said = Some(Said::Yes);
    }
    buttons(ui, said, &[(go, Said::Yes, !text.trim().is_empty()), ("Cancel", Said::No, true)]);
}

fn replace(ui: &mut Ui, path: &Path, said: &mut Option<Said>) {
    head(ui, "There is a session of that name");
    ui.label(format!("{} is there already. What it holds would be gone.", path.display()));
    buttons(ui, said, &[("Replace", Said::Yes, true), ("Cancel", Said::No, true)]);
}

fn unsaved(ui: &mut Ui, said: &mut Option<Said>) {
    head(ui, "The session has changes that are not saved");
    ui.label("Save them before going on?");
    buttons(ui, said, &[("Save", Said::Yes, true), ("Discard", Said::Other, true), ("Cancel", Said::No, true)]);
}

fn missing(ui: &mut Ui, loaded: &Loaded, text: &mut String, said: &mut Option<Said>) {
    head(ui, "The session's capture is not there");
    ui.label(format!("It was {}.", loaded.session.capture.path));
    ui.label("Say where it is now; it is checked against what the session knows of it.");
    let enter = entered(ui, "Path of the capture", text);
    let typed = !text.trim().is_empty();
    if enter && typed {
        *said = Some(Said::Yes);
    }
    buttons(
        ui,
        said,
        &[("Use this path", Said::Yes, typed), ("Look for it…", Said::Other, true), ("Cancel", Said::No, true)],
    );
}

fn changed_capture(ui: &mut Ui, changed: &Changed, said: &mut Option<Said>) {
    head(ui, "The capture has changed since the session was saved");
    ui.label(format!("{} does not hold what it held then.", changed.capture.path.display()));
    if let Some(figures) = &changed.kept.loaded.figures {
        ui.label(format!("The session was saved with these figures ({}):", figures.reference));
        ScrollArea::vertical().max_height(160.0).show(ui, |ui| {
            for tone in &figures.tones {
                widget::quiet(
                    ui,
                    format!("{} Hz  {} dB", figure::fixed(tone.frequency_hz, 3), figure::fixed(tone.level_db, 2)),
                );
            }
        });
    }
    ui.label("They do not stand for what is in the file now.");
    buttons(
        ui,
        said,
        &[("Compute anew", Said::Yes, true), ("Look for the old one…", Said::Other, true), ("Cancel", Said::No, true)],
    );
}

fn recover(ui: &mut Ui, list: &[Recovered], said: &mut Option<Said>) {
    head(ui, "An earlier run ended without saving");
    ui.label("Its session was kept. Take it up again?");
    for (i, one) in list.iter().enumerate() {
        let name = file_name(&PathBuf::from(&one.loaded.session.capture.path));
        let age = one.written.elapsed().map_or_else(|_| String::new(), |d| format!(", {}", ago(d.as_secs())));
        ui.horizontal(|ui| {
            if ui.button("Recover").accessible_name(format!("Recover {name}")).clicked() {
                *said = Some(Said::Nth(i));
            }
            ui.label(format!("{name}{age}"));
        });
    }
    buttons(ui, said, &[("Not now", Said::No, true), ("Throw away", Said::Other, true)]);
}

fn ago(seconds: u64) -> String {
    match seconds {
        0..120 => "a moment ago".to_owned(),
        120..7200 => format!("{} minutes ago", seconds / 60),
        7200..172_800 => format!("{} hours ago", seconds / 3600),
        _ => format!("{} days ago", seconds / 86_400),
    }
}

fn tone_note(ui: &mut Ui, frequency_hz: f64, text: &mut String, said: &mut Option<Said>) {
    head(ui, &format!("Note on the tone at {} Hz", figure::fixed(frequency_hz, 2)));
    if entered(ui, "Note on the tone", text) {
        *said = Some(Said::Yes);
    }
    buttons(ui, said, &[("Keep", Said::Yes, true), ("Cancel", Said::No, true)]);
}

fn decision(ui: &mut Ui, decide: &mut Decide, said: &mut Option<Said>) {
    head(ui, &decide.title());
    let enter = decide.show(ui);
    let ready = decide.is_complete();
    if enter && ready {
        *said = Some(Said::Yes);
    }
    buttons(ui, said, &[(decide.go(), Said::Yes, ready), ("Cancel", Said::No, true)]);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn pasted_paths_lose_what_file_managers_put_around_them() {
        assert_eq!(typed_path(" \"/a b/c.wav\" "), PathBuf::from("/a b/c.wav"));
        assert_eq!(typed_path("file:///a/c.wav"), PathBuf::from("/a/c.wav"));
    }
}
