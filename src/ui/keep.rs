//! Saving: once the figures are there, then whatever was to follow.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::time::Duration;

use eframe::egui::{Context, ViewportCommand};

use super::dialog::{After, Dialog};
use super::files::{self, Event, Picked, Saved};
use super::lane::guarded;
use super::services::Ask;
use super::workbench::Workbench;

/// A question turned down sooner than anybody could was never shown: the desktop has nobody to ask it.
const NOBODY_ASKED: Duration = Duration::from_millis(300);

const WAITS: &str = "The session is saved as soon as its figures are computed.";

/// Saves that wait or are on their way.
#[derive(Debug, Default)]
pub(super) struct Saving {
    /// The desk and the file of a save that waits for its figures.
    due: Option<(u64, PathBuf)>,
    n_running: usize,
    /// What follows once the session is saved.
    pub(super) after: Option<After>,
}

impl Saving {
    /// Whether a save waits or is on its way.
    pub(super) fn is_busy(&self) -> bool {
        self.due.is_some() || self.n_running > 0
    }

    /// The session that was to be saved is given up.
    pub(super) fn give_up(&mut self) {
        self.due = None;
        self.after = None;
    }

    /// One save less on its way; gives what follows, when it was the last.
    fn ended(&mut self) -> Option<After> {
        self.n_running = self.n_running.saturating_sub(1);
        if self.is_busy() { None } else { self.after.take() }
    }
}

impl Workbench {
    /// Asks the desktop for a file.
    pub(super) fn ask(&self, ask: Ask) {
        let Some(threads) = &self.threads else { return };
        let picker = Arc::clone(&self.services.picker);
        let (desk, folder) = (self.desk.as_ref().map(|d| d.number), self.folder());
        threads.dialogs.run(move |tell| {
            let since = std::time::Instant::now();
            let path = guarded(|| picker.pick(&ask, folder.as_deref())).flatten();
            // The desktop has asked about the name as it was given.
            let replaces = matches!(ask, Ask::SaveSession(_))
                && path.as_deref().is_some_and(|p| {
                    let target = crate::session::with_extension(p);
                    target != p && target.exists()
                });
            tell(Event::Picked(Picked { ask, desk, path, replaces, took: since.elapsed() }));
        });
    }

    fn folder(&self) -> Option<PathBuf> {
        let desk = self.desk.as_ref()?;
        let beside = desk.file.as_deref().unwrap_or(&desk.capture.path);
        beside.parent().filter(|p| !p.as_os_str().is_empty()).map(Path::to_owned)
    }

    /// Takes in the answer to a question for a file.
    pub(super) fn take_picked(&mut self, picked: Picked) {
        let Picked { ask, desk, path, replaces, took } = picked;
        let Some(path) = path else { return self.take_no_answer(&ask, took) };
        match ask {
            Ask::Capture | Ask::Session => self.want_open(&path),
            Ask::SaveSession(_) => self.take_target(desk, &path, replaces),
            Ask::Locate => {
                let missing = self.dialogs.take_if(|d| matches!(d, Dialog::Missing(..)));
                if let Some(Dialog::Missing(kept, _)) = missing {
                    self.locate(*kept, path);
                }
            }
        }
    }

    fn take_no_answer(&mut self, ask: &Ask, took: Duration) {
        let nobody = took < NOBODY_ASKED;
        match ask {
            Ask::SaveSession(_) if nobody => self.ask_save_path(),
            Ask::SaveSession(_) => self.saving.after = None,
            Ask::Capture | Ask::Session if nobody => self.dialogs.put(Dialog::Path(String::new())),
            Ask::Capture | Ask::Session | Ask::Locate => {}
        }
    }

    /// Asks for the path to save at, without the desktop's help.
    pub(super) fn ask_save_path(&mut self) {
        let Some(desk) = &self.desk else { return };
        let standing = desk.file.clone();
        let path = standing.unwrap_or_else(|| self.folder().unwrap_or_default().join(self.proposed_name()));
        self.dialogs.put(Dialog::SavePath(path.to_string_lossy().into_owned()));
    }

    /// Saves at a path that was typed, unless another file stands there.
    pub(super) fn save_at(&mut self, path: PathBuf) {
        let (Some(desk), Some(threads)) = (&self.desk, &self.threads) else { return };
        let (number, ask) = (Some(desk.number), Ask::SaveSession(self.proposed_name()));
        threads.files.run(move |tell| {
            let replaces = crate::session::with_extension(&path).exists();
            tell(Event::Picked(Picked { ask, desk: number, path: Some(path), replaces, took: Duration::MAX }));
        });
    }

    fn take_target(&mut self, asked_for: Option<u64>, path: &Path, replaces: bool) {
        let Some(desk) = self.desk.as_ref().filter(|d| Some(d.number) == asked_for) else {
            self.saving.after = None;
            self.notices.refuse("Nothing was saved: the session that was to be saved is not open any more.");
            return;
        };
        let target = crate::session::with_extension(path);
        if replaces && desk.file.as_ref() != Some(&target) {
            self.dialogs.put(Dialog::Replace(desk.number, target));
        } else {
            self.save_to(&target);
        }
    }

    /// Saves where the session is kept, or asks where to.
    pub(super) fn save(&mut self) {
        let Some(desk) = &self.desk else { return };
        match desk.file.clone() {
            Some(file) => self.save_to(&file),
            None => self.ask(Ask::SaveSession(self.proposed_name())),
        }
    }

    /// A name for the session's file: that of its capture.
    pub(super) fn proposed_name(&self) -> String {
        let Some(desk) = &self.desk else { return String::new() };
        let stem = desk.capture.path.file_stem().map(|s| s.to_string_lossy().into_owned()).unwrap_or_default();
        format!("{stem}{}", crate::session::EXTENSION)
    }

    /// Saves the session in a file, once its figures are there to go with it.
    pub(super) fn save_to(&mut self, path: &Path) {
        let Some(desk) = &self.desk else { return };
        self.saving.due = Some((desk.number, crate::session::with_extension(path)));
        if desk.awaits_figures() {
            self.notices.tell(WAITS);
        }
        self.save_due();
    }

    /// Saves what was to be saved, if its figures are there or will not come.
    pub(super) fn save_due(&mut self) {
        let Some((number, path)) = self.saving.due.clone() else { return };
        let Some(threads) = &self.threads else { return };
        let Some(desk) = self.desk.as_ref().filter(|d| d.number == number) else {
            self.saving.due = None;
            return;
        };
        if desk.awaits_figures() {
            return;
        }
        let session = desk.session.clone();
        let current = desk.reading().filter(|_| desk.latest.is_current());
        let figures = current.map(|reading| crate::reading::figures_of(reading));
        let capture = Arc::clone(&desk.capture);
        self.saving.due = None;
        self.saving.n_running += 1;
        threads.files.run(move |tell| {
            let saved = guarded(|| files::save(number, path, session, figures.as_ref(), &capture));
            tell(saved.unwrap_or_else(|| Event::NotSaved(files::UNFORESEEN.to_owned())));
        });
    }

    /// Takes in that a session was saved.
    pub(super) fn take_saved(&mut self, ctx: &Context, number: u64, saved: Saved) {
        let Saved { path, session, with_figures } = saved;
        let after = self.saving.ended();
        self.notices.forget(WAITS);
        self.note_recent(&path);
        let without = if with_figures { "" } else { " without figures, as they are not computed" };
        self.notices.tell(&format!("Saved in {}{without}.", path.display()));
        let Some(desk) = self.desk_of(number) else { return };
        desk.session.capture.blake3.clone_from(&session.capture.blake3);
        desk.mark_saved(session);
        desk.file = Some(path);
        if desk.is_unsaved() {
            // It was changed while it was written.
            self.note_change();
            if let Some(after) = after {
                self.dialogs.interrupt(Dialog::Unsaved(after));
            }
            return;
        }
        self.clear_slot();
        if let Some(after) = after {
            self.go_on(ctx, after);
        }
    }

    /// Takes in that a session could not be saved.
    pub(super) fn take_not_saved(&mut self, text: &str) {
        self.saving.ended();
        self.saving.after = None;
        self.notices.forget(WAITS);
        self.notices.refuse(text);
    }

    /// There is nothing to be kept for recovery.
    pub(super) fn clear_slot(&mut self) {
        self.autosave_due = None;
        if let Some(threads) = &self.threads {
            let slot = self.slot.clone();
            threads.files.run(move |_| slot.clear());
        }
    }

    /// Closes the window, once what is being saved is saved and the user was asked about what is not.
    pub(super) fn want_quit(&mut self, ctx: &Context) {
        if self.may_close() {
            ctx.send_viewport_cmd(ViewportCommand::Close);
        } else if self.saving.is_busy() && self.saving.after.is_none() {
            self.saving.after = Some(After::Quit);
        } else {
            // Also where a save is long on its way: the user may have waited enough.
            self.dialogs.interrupt(Dialog::Unsaved(After::Quit));
        }
    }

    /// Does what was to follow.
    pub(super) fn go_on(&mut self, ctx: &Context, after: After) {
        match after {
            After::Quit => {
                self.may_close = true;
                ctx.send_viewport_cmd(ViewportCommand::Close);
            }
            After::Open(path) => self.start_opening(&path),
            After::Take(opened) => self.accept(*opened),
        }
    }
}
