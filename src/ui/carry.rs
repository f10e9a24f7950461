//! The one place where what panels, keys, threads and dialogs want is carried out.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::time::Instant;

use eframe::egui::{Context, ViewportCommand};

use super::desk::{Desk, file_name};
use super::dialog::{After, Dialog, Reply};
use super::files::{self, Event, Opened};
use super::services::Ask;
use super::view::Intent;
use super::workbench::{AUTOSAVE_AFTER, Workbench};
use crate::session::{Command, Found, Note, Recovered};
use crate::signal::Watch;

impl Workbench {
    /// Carries out what a panel wants.
    pub(super) fn carry_out(&mut self, ctx: &Context, intent: Intent) {
        match intent {
            Intent::Change(command) => self.change(command),
            Intent::CloseStep => {
                if let Some(desk) = &mut self.desk {
                    desk.history.close_step();
                }
            }
            Intent::Do(action) => self.act(ctx, action),
            Intent::Open(path) => self.want_open(&path),
            Intent::CallOff => {
                if let (Some(desk), Some(threads)) = (&mut self.desk, &self.threads) {
                    threads.worker.cancel();
                    desk.latest.called_off = true;
                }
            }
            Intent::Retry => {
                if let Some(desk) = &mut self.desk {
                    desk.latest.asked = None;
                }
            }
        }
    }

    /// Changes the document.
    pub(super) fn change(&mut self, command: Command) {
        let Some(desk) = &mut self.desk else { return };
        let windows = matches!(command, Command::AddPane(_) | Command::RemovePane(_) | Command::SetScale(..));
        let other_samples = matches!(
            command,
            Command::ChooseChannel(_) | Command::ChooseSegment(_) | Command::AddSegment(_) | Command::RemoveSegment(_)
        );
        if desk.history.apply(&mut desk.session, command) {
            self.view.refit_level |= windows || other_samples;
            self.note_change();
        }
    }

    /// The document has changed: it has to be kept for recovery before long.
    pub(super) fn note_change(&mut self) {
        self.autosave_due.get_or_insert_with(|| Instant::now() + AUTOSAVE_AFTER);
    }

    /// Opens a file, once unsaved work is dealt with.
    pub(super) fn want_open(&mut self, path: &Path) {
        if self.is_unsaved() {
            self.dialog = Some(Dialog::Unsaved(After::Open(path.to_owned())));
        } else {
            self.start_opening(path);
        }
    }

    fn start_opening(&mut self, path: &Path) {
        let path = path.to_owned();
        self.open_on_lane(file_name(&path), move |watch| files::open(&path, watch));
    }

    fn open_on_lane(&mut self, name: String, job: impl FnOnce(&Watch) -> Event + Send + 'static) {
        let Some(threads) = &self.threads else { return };
        let watch = Watch::new();
        if let Some((_, old)) = self.opening.replace((name, watch.clone())) {
            old.cancel();
        }
        threads.files.run(move |tell| tell(job(&watch)));
    }

    /// Asks the desktop for a file.
    pub(super) fn ask(&self, ask: Ask) {
        let Some(threads) = &self.threads else { return };
        let picker = Arc::clone(&self.services.picker);
        let folder = self.desk.as_ref().and_then(|d| {
            let beside = d.file.as_deref().unwrap_or(&d.capture.path);
            beside.parent().filter(|p| !p.as_os_str().is_empty()).map(Path::to_owned)
        });
        threads.dialogs.run(move |tell| {
            let path = picker.pick(&ask, folder.as_deref());
            tell(Event::Picked(ask, path));
        });
    }

    /// Saves the session in a file.
    pub(super) fn save_to(&mut self, path: &Path) {
        let (Some(desk), Some(threads)) = (&self.desk, &self.threads) else { return };
        let path = crate::session::with_extension(path);
        let (number, session) = (desk.number, desk.session.clone());
        let current = desk.reading().filter(|_| desk.latest.is_current());
        let figures = current.map(|reading| crate::reading::figures_of(reading));
        let (capture, watch) = (Arc::clone(&desk.capture), Watch::new());
        self.saving = true;
        threads.files.run(move |tell| tell(files::save(number, &path, session, figures.as_ref(), &capture, &watch)));
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

    /// Takes in what came of file work.
    pub(super) fn take_event(&mut self, ctx: &Context, event: Event) {
        match event {
            Event::Picked(ask, Some(path)) => self.take_picked(&ask, path),
            Event::Picked(Ask::SaveSession(_), None) => self.after_save = None,
            Event::Picked(_, None) | Event::Read => {}
            Event::Opened(opened) => self.take_opened(*opened),
            Event::Refused(text) => {
                self.opening = None;
                self.saving = false;
                self.after_save = None;
                self.notices.refuse(&text);
            }
            Event::CalledOff => self.opening = None,
            Event::Missing(loaded, file) => {
                self.opening = None;
                self.dialog = Some(Dialog::Missing(loaded, file, String::new()));
            }
            Event::Changed(changed) => {
                self.opening = None;
                self.dialog = Some(Dialog::Changed(changed));
            }
            Event::Columns(number, key, columns) => {
                if self.desk_of(number).is_some() {
                    self.view.strip_cache.take(key, columns);
                }
            }
            Event::Doubts(number, doubts) => {
                if self.desk_of(number).is_some() {
                    for text in &doubts {
                        self.notices.tell(text);
                    }
                }
            }
            Event::Surveyed(number) => {
                if let Some(desk) = self.desk_of(number) {
                    desk.surveyed = true;
                }
            }
            Event::Suggested(number, span) => self.take_suggestion(number, span),
            Event::Hashed(number, blake3) => {
                if let Some(desk) = self.desk_of(number) {
                    desk.session.capture.blake3 = blake3;
                }
            }
            Event::Saved(number, path, session) => self.take_saved(ctx, number, &path, *session),
            Event::Recoveries(list) if list.is_empty() => {}
            Event::Recoveries(list) => self.dialog = Some(Dialog::Recover(list)),
            Event::Recent(list) => self.recent = list,
        }
    }

    fn desk_of(&mut self, number: u64) -> Option<&mut Desk> {
        self.desk.as_mut().filter(|d| d.number == number)
    }

    fn take_picked(&mut self, ask: &Ask, path: PathBuf) {
        match ask {
            Ask::Capture | Ask::Session => self.want_open(&path),
            Ask::SaveSession(_) => self.save_to(&path),
            Ask::Locate => {
                if let Some(Dialog::Missing(loaded, file, _)) = self.dialog.take() {
                    self.locate(*loaded, file, path);
                }
            }
        }
    }

    fn locate(&mut self, loaded: crate::session::Loaded, file: PathBuf, path: PathBuf) {
        let name = file_name(&path);
        let found = Found { path, moved: true };
        self.open_on_lane(name, move |watch| files::open_found(loaded, &file, &found, watch));
    }

    fn take_opened(&mut self, opened: Opened) {
        let Opened { capture, session, file, as_saved, remark } = opened;
        self.opening = None;
        self.n_opened += 1;
        let number = self.n_opened;
        let capture = Arc::new(capture);
        let mut desk = match session {
            Some(session) => Desk::with_session(number, Arc::clone(&capture), session, file),
            None => Desk::fresh(number, Arc::clone(&capture)),
        };
        if !as_saved {
            desk.mark_unsaved();
        }
        self.notices.clear();
        for text in capture.doubts.iter().chain(&remark) {
            self.notices.tell(text);
        }
        self.view.for_new_capture();
        self.start_survey(&desk);
        self.note_recent(desk.file.as_deref().unwrap_or(&capture.path));
        self.autosave_due = None;
        self.desk = Some(desk);
        if !as_saved {
            self.note_change();
        }
    }

    fn start_survey(&self, desk: &Desk) {
        let Some(threads) = &self.threads else { return };
        let (capture, session, watch) = (Arc::clone(&desk.capture), desk.session.clone(), desk.watch.clone());
        let (number, overview) = (desk.number, desk.overview.clone());
        threads.survey.run(move |tell| files::survey(number, (&capture, &overview), &session, &watch, tell));
    }

    /// Has columns read that the strip wants from the samples themselves.
    pub(super) fn read_columns(&mut self) {
        let (Some(desk), Some(threads)) = (&self.desk, &self.threads) else { return };
        let Some((key, edges)) = self.view.strip_cache.wanted() else { return };
        let (capture, watch, number) = (Arc::clone(&desk.capture), desk.watch.clone(), desk.number);
        threads.files.run(move |tell| {
            // What cannot be read stays as coarse as it is drawn; the reading of the segment says why.
            if let Ok(columns) = crate::capture::raw_columns(&*capture.source, key.channel, &edges, &watch) {
                tell(Event::Columns(number, key, columns));
            }
        });
    }

    fn note_recent(&self, path: &Path) {
        let (Some(threads), Some(file)) = (&self.threads, self.services.recent.clone()) else { return };
        let path = path.to_owned();
        threads.files.run(move |tell| {
            if let Err(error) = crate::session::note_recent(&file, &path) {
                tell(Event::Refused(format!("the list of recent files could not be kept: {error}")));
            }
            tell(Event::Recent(crate::session::list_recent(&file)));
        });
    }

    fn take_suggestion(&mut self, number: u64, span: crate::signal::Span) {
        let Some(desk) = self.desk_of(number) else { return };
        desk.suggestion = Some(span);
        if desk.is_unmarked() {
            desk.start_from(span);
            self.view.refit_level = true;
        }
    }

    fn take_saved(&mut self, ctx: &Context, number: u64, path: &Path, session: crate::session::Session) {
        self.saving = false;
        let Some(desk) = self.desk_of(number) else { return };
        desk.session.capture.blake3.clone_from(&session.capture.blake3);
        desk.mark_saved(session);
        desk.file = Some(path.to_owned());
        let unsaved = desk.is_unsaved();
        if let (false, Some(threads)) = (unsaved, &self.threads) {
            let slot = self.slot.clone();
            threads.files.run(move |_| slot.clear());
            self.autosave_due = None;
        }
        self.note_recent(path);
        self.notices.tell(&format!("Saved in {}.", path.display()));
        if let Some(after) = self.after_save.take() {
            self.go_on(ctx, after);
        }
    }

    fn go_on(&mut self, ctx: &Context, after: After) {
        match after {
            After::Quit => {
                self.may_close = true;
                ctx.send_viewport_cmd(ViewportCommand::Close);
            }
            After::Open(path) => self.start_opening(&path),
        }
    }

    /// Takes in what the user said to a dialog.
    pub(super) fn take_reply(&mut self, ctx: &Context, reply: Reply) {
        match reply {
            Reply::Close => {}
            Reply::Open(path) => self.want_open(&path),
            Reply::SaveThen(after) => {
                self.after_save = Some(after);
                self.save();
            }
            Reply::DiscardThen(after) => {
                let slot = self.slot.clone();
                if let Some(threads) = &self.threads {
                    threads.files.run(move |_| slot.clear());
                }
                self.autosave_due = None;
                self.go_on(ctx, after);
            }
            Reply::AskLocate(loaded, file) => {
                self.dialog = Some(Dialog::Missing(loaded, file, String::new()));
                self.ask(Ask::Locate);
            }
            Reply::Locate(loaded, file, path) => self.locate(*loaded, file, path),
            Reply::UseChanged(changed) => self.take_opened(files::use_changed(*changed)),
            Reply::Recover(one, rest) => self.recover(*one, rest),
            Reply::DiscardRecoveries(list) => {
                if let Some(threads) = &self.threads {
                    threads.files.run(move |_| {
                        for one in list {
                            // What cannot be thrown away is offered again at the next start.
                            let _ = crate::session::discard(one);
                        }
                    });
                }
            }
            Reply::Note(frequency_hz, text) => {
                self.change(Command::SetNote(Note { frequency_hz: Some(frequency_hz), text }));
            }
        }
    }

    /// Takes up what an earlier run left; it is kept in this run's own slot from then on.
    fn recover(&mut self, one: Recovered, _rest: Vec<Recovered>) {
        let (file, loaded) = (one.file.clone(), one.loaded.clone());
        let name = file_name(Path::new(&loaded.session.capture.path));
        let (slot, folder) = (self.slot.clone(), self.services.recovery.clone());
        self.open_on_lane(name, move |watch| {
            let event = files::recover(loaded, &file, watch);
            if let (Event::Opened(opened), Some(folder)) = (&event, &folder)
                && let Some(session) = &opened.session
                && slot.keep(folder, session, opened.file.as_deref()).is_none()
            {
                // Safe in this run's slot: the old one may go.
                let _ = crate::session::discard(one);
            }
            event
        });
    }
}
