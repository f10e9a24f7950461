//! The one place where what panels, keys, threads and dialogs want is carried out.

use std::path::{Path, PathBuf};
use std::sync::Arc;

use eframe::egui::Context;

use super::demonstration;
use super::desk::{Desk, file_name};
use super::dialog::{After, Dialog, Reply};
use super::files::{self, Event, Kept, Opened, Outcome, UNFORESEEN};
use super::lane::guarded;
use super::services::Ask;
use super::view::Intent;
use super::workbench::{Opening, Workbench};
use super::worker::Latest;
use crate::session::{Command, Found, Note, Recovered, Session};
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
            Intent::Put(window) => {
                let pane = self.desk.as_ref().and_then(|d| super::act::current_pane(d, &self.view));
                if let Some((_, id)) = pane {
                    self.change(Command::SetWindow(id, window));
                }
                if let Some(desk) = &mut self.desk {
                    desk.history.close_step();
                }
            }
            Intent::Do(action) => self.act(ctx, action),
            Intent::Explain(at) => self.ask_why_named(at),
            Intent::Open(path) => self.want_open(&path),
            Intent::CallOff => {
                if let (Some(desk), Some(threads)) = (&mut self.desk, &self.threads) {
                    threads.worker.cancel();
                    desk.latest.called_off = true;
                }
            }
            Intent::ReadSteadiness => self.read_steadiness(),
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
        let marks = matches!(
            command,
            Command::MoveSegment(..)
                | Command::AddSegment(_)
                | Command::RemoveSegment(_)
                | Command::RenameSegment(..)
                | Command::ChooseSegment(_)
        );
        let sets_axes = matches!(command, Command::SetAxes(_));
        let is_step = !sets_axes && !matches!(command, Command::Pick(_) | Command::ChooseChannel(_));
        let rate_before = desk.session.sample_rate_hz();
        if desk.history.apply(&mut desk.session, command) {
            // A channel may still bring its suggestion with it, as long as nothing is marked.
            desk.untouched &= !is_step;
            desk.marked |= marks;
            desk.fits_axes &= !sets_axes;
            follow_rate(desk, rate_before);
            self.view.refit_level |= windows || other_samples;
            self.note_change();
        }
    }

    /// Opens a file, once unsaved work is dealt with.
    pub(super) fn want_open(&mut self, path: &Path) {
        if self.is_unsaved() {
            self.dialogs.put(Dialog::Unsaved(After::Open(path.to_owned())));
        } else {
            self.start_opening(path);
        }
    }

    pub(super) fn start_opening(&mut self, path: &Path) {
        let path = path.to_owned();
        self.open_on_lane(file_name(&path), move |watch| files::open(&path, watch));
    }

    fn open_on_lane(&mut self, name: String, job: impl FnOnce(&Watch) -> Outcome + Send + 'static) {
        let Some(threads) = &self.threads else { return };
        self.n_openings += 1;
        let (number, watch) = (self.n_openings, Watch::new());
        let given_up = self.given_up.take();
        if let Some(old) = self.opening.replace(Opening { number, name, watch: watch.clone(), given_up }) {
            old.watch.cancel();
        }
        threads.opening.run(move |tell| {
            let outcome = guarded(|| job(&watch)).unwrap_or_else(|| Outcome::Refused(UNFORESEEN.to_owned()));
            tell(Event::Opening(number, outcome));
        });
    }

    /// Takes in what came of file work.
    pub(super) fn take_event(&mut self, ctx: &Context, event: Event) {
        match event {
            Event::Picked(picked) => self.take_picked(picked),
            Event::Read => {}
            Event::Opening(number, outcome) => self.take_outcome(number, outcome),
            Event::Said(text) => self.notices.refuse(&text),
            Event::NotSaved(text) => self.take_not_saved(&text),
            Event::Columns(number, key, columns) => {
                if self.desk_of(number).is_some() {
                    self.view.strip_cache.take(key, columns);
                }
            }
            Event::Doubts(about, doubts) => self.take_doubts(about, &doubts),
            Event::Surveyed(about) => self.take_surveyed(about),
            Event::Steady(about, found) => self.take_steadiness(about, found),
            Event::Figures(key, figures) => self.view.merits.take(key, figures),
            Event::Part(number, generation, made) => {
                if let Some(desk) = self.desk_of(number) {
                    desk.parts.take(generation, made);
                }
            }
            Event::Hashed(number, blake3) => {
                if let Some(desk) = self.desk_of(number) {
                    desk.session.capture.blake3 = blake3;
                }
            }
            Event::Saved(number, saved) => self.take_saved(ctx, number, *saved),
            Event::Recoveries(list) if list.is_empty() => {}
            Event::Recoveries(list) => self.dialogs.put(Dialog::Recover(list)),
            Event::Recent(list) => self.recent = list,
        }
    }

    pub(super) fn desk_of(&mut self, number: u64) -> Option<&mut Desk> {
        self.desk.as_mut().filter(|d| d.number == number)
    }

    pub(super) fn locate(&mut self, kept: Kept, path: PathBuf) {
        let name = file_name(&path);
        let found = Found { path, moved: true };
        self.open_on_lane(name, move |watch| files::open_found(kept, &found, watch));
    }

    /// Takes in what came of an opening, unless it was called off or another one took its place.
    fn take_outcome(&mut self, number: u64, outcome: Outcome) {
        let Some(opening) = self.opening.take_if(|o| o.number == number) else { return };
        if opening.watch.is_cancelled() {
            return;
        }
        match outcome {
            Outcome::Opened(opened) => self.deliver(opened, opening.given_up.as_ref()),
            Outcome::Refused(text) => self.notices.refuse(&text),
            Outcome::CalledOff => {}
            Outcome::Missing(kept) => self.dialogs.put(Dialog::Missing(kept, String::new())),
            Outcome::Changed(changed) => self.dialogs.put(Dialog::Changed(changed)),
        }
    }

    /// Puts what was opened on the desk; asks before, where that holds unsaved work other than the user gave up: it may
    /// have been changed while the file was opened.
    fn deliver(&mut self, opened: Box<Opened>, given_up: Option<&Session>) {
        let loses = self.desk.as_ref().is_some_and(|d| d.is_unsaved() && !given_up.is_some_and(|g| d.holds(g)));
        if loses {
            self.dialogs.put(Dialog::Unsaved(After::Take(opened)));
        } else {
            self.accept(*opened);
        }
    }

    /// Puts what was opened on the desk; what lay there is gone.
    pub(super) fn accept(&mut self, opened: Opened) {
        let Opened { capture, session, file, as_saved, remark, recovered, figures } = opened;
        self.n_opened += 1;
        let number = self.n_opened;
        let capture = Arc::new(capture);
        let demonstration = self.services.demonstration.as_deref();
        let mut desk = if let Some(session) = session {
            Desk::with_session(number, Arc::clone(&capture), session, file)
        } else if demonstration::is(&capture.path, demonstration) {
            Desk::fresh(number, Arc::clone(&capture), demonstration::dress)
        } else {
            Desk::fresh(number, Arc::clone(&capture), |_| {})
        };
        if let Some(threads) = &self.threads {
            desk.latest = Latest::after(threads.worker.newest());
        }
        desk.recheck = figures.map(|figures| (desk.request(), figures));
        if !as_saved {
            desk.mark_unsaved();
        }
        self.notices.clear();
        for text in capture.doubts.iter().chain(&remark) {
            self.notices.tell(text);
        }
        self.saving.give_up();
        self.given_up = None;
        self.view.for_new_capture();
        self.note_recent(desk.file.as_deref().unwrap_or(&capture.path));
        self.clear_slot();
        if let Some(recovered) = recovered {
            self.take_up(&desk, recovered);
        }
        self.desk = Some(desk);
        if !as_saved {
            self.note_change();
        }
    }

    /// Keeps what an earlier run left in this run's own slot; only then the old one may go.
    fn take_up(&self, desk: &Desk, recovered: Recovered) {
        let (Some(threads), Some(folder)) = (&self.threads, self.services.recovery.clone()) else { return };
        let (slot, session, file) = (self.slot.clone(), desk.session.clone(), desk.file.clone());
        threads.files.run(move |tell| match slot.keep(&folder, &session, file.as_deref()) {
            Some(event) => tell(event),
            // A leftover would only be offered once too often.
            None => drop(crate::session::discard(recovered)),
        });
    }

    pub(super) fn note_recent(&self, path: &Path) {
        let (Some(threads), Some(file)) = (&self.threads, self.services.recent.clone()) else { return };
        let path = path.to_owned();
        threads.files.run(move |tell| {
            if let Err(error) = crate::session::note_recent(&file, &path) {
                tell(Event::Said(format!("the list of recent files could not be kept: {error}")));
            }
            tell(Event::Recent(crate::session::list_recent(&file)));
        });
    }

    /// Takes in what the user said to a dialog.
    pub(super) fn take_reply(&mut self, ctx: &Context, reply: Reply) {
        match reply {
            Reply::Close => {}
            Reply::Open(path) => self.want_open(&path),
            Reply::SaveThen(after) => {
                self.saving.after = Some(after);
                self.save();
            }
            Reply::DiscardThen(after) => {
                self.given_up = self.desk.as_ref().map(|d| d.session.clone());
                self.go_on(ctx, after);
            }
            Reply::SaveAt(path) => self.save_at(path),
            Reply::Replace(number, path) => {
                if self.desk_of(number).is_some() {
                    self.save_to(&path);
                }
            }
            Reply::NoSave => self.saving.after = None,
            Reply::AskLocate(kept) => {
                self.dialogs.interrupt(Dialog::Missing(kept, String::new()));
                self.ask(Ask::Locate);
            }
            Reply::Locate(kept, path) => self.locate(*kept, path),
            Reply::UseChanged(changed) => self.deliver(Box::new(files::use_changed(*changed)), None),
            Reply::Recover(one) => {
                let name = file_name(Path::new(&one.loaded.session.capture.path));
                self.open_on_lane(name, move |watch| files::open_session(Kept::left(*one), watch));
            }
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
            Reply::Decide(decide) => self.take_decision(decide),
            Reply::Note(frequency_hz, text) => {
                self.change(Command::SetNote(Note { frequency_hz: Some(frequency_hz), text }));
            }
        }
    }
}

/// Where another rate stands in for the file's, what is shown goes on showing the same lines.
fn follow_rate(desk: &mut Desk, rate_before_hz: f64) {
    let ratio = desk.session.sample_rate_hz() / rate_before_hz;
    if ratio == 1.0 || !ratio.is_finite() {
        return;
    }
    let axes = &mut desk.session.axes;
    axes.frequency_hz = axes.frequency_hz.map(|(lo, hi)| (lo * ratio, hi * ratio));
    desk.session.picked_hz = desk.session.picked_hz.map(|hz| hz * ratio);
}
