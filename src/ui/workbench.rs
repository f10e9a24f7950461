//! The screen without its window: state, the order of a frame, the panels.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::mpsc::{Receiver, Sender, channel};
use std::time::{Duration, Instant};

use eframe::egui::{CentralPanel, Context, Frame, Margin, Panel, Ui, ViewportCommand};

use super::action;
use super::desk::Desk;
use super::dialog::{After, Dialog};
use super::files::{Event, Slot};
use super::lane::Lane;
use super::menu::Menus;
use super::notice::Notices;
use super::services::Services;
use super::view::{Intent, Intents, View};
use super::worker::Worker;
use super::{card, dialog, empty, panes, setup, status, strip, table, theme};
use crate::reading::Reading;
use crate::session::{RecentFile, Session};
use crate::signal::Watch;

/// A document that was changed is kept for recovery so long after.
pub(super) const AUTOSAVE_AFTER: Duration = Duration::from_secs(3);

/// The threads, started with the first frame, when there is something to wake.
#[derive(Debug)]
pub(super) struct Threads {
    pub(super) worker: Worker,
    /// Opening and saving.
    pub(super) files: Lane<Event>,
    /// Reading captures through.
    pub(super) survey: Lane<Event>,
    /// The desktop's dialogs.
    pub(super) dialogs: Lane<Event>,
}

/// The screen: everything but the window it is shown in.
#[derive(Debug)]
pub struct Workbench {
    pub(super) services: Services,
    pub(super) threads: Option<Threads>,
    pub(super) events: Receiver<Event>,
    sender: Sender<Event>,
    pub(super) desk: Option<Desk>,
    pub(super) view: View,
    pub(super) notices: Notices,
    pub(super) dialog: Option<Dialog>,
    pub(super) recent: Vec<RecentFile>,
    pub(super) slot: Slot,
    /// What is being opened, and how to call it off.
    pub(super) opening: Option<(String, Watch)>,
    /// Openings so far.
    pub(super) n_opened: u64,
    /// A file to open as soon as there are threads.
    pub(super) waiting: Option<PathBuf>,
    /// Whether a save is on its way.
    pub(super) saving: bool,
    /// What follows once the session is saved.
    pub(super) after_save: Option<After>,
    /// When the document has to be kept for recovery.
    pub(super) autosave_due: Option<Instant>,
    /// Whether the window may close.
    pub(super) may_close: bool,
    title: String,
}

impl Workbench {
    /// A screen with nothing on it.
    pub fn new(services: Services) -> Self {
        let (sender, events) = channel();
        Self {
            services,
            threads: None,
            events,
            sender,
            desk: None,
            view: View::default(),
            notices: Notices::default(),
            dialog: None,
            recent: Vec::new(),
            slot: Slot::default(),
            opening: None,
            n_opened: 0,
            waiting: None,
            saving: false,
            after_save: None,
            autosave_due: None,
            may_close: false,
            title: String::new(),
        }
    }

    /// Puts typeface, spacing and themes in place; once, before the first frame.
    pub fn dress(ctx: &Context) {
        theme::install(ctx);
    }

    /// Opens a capture or a session, as its name says.
    pub fn open(&mut self, path: &Path) {
        self.waiting = Some(path.to_owned());
    }

    /// The document, if a capture is open.
    pub fn session(&self) -> Option<&Session> {
        self.desk.as_ref().map(|d| &d.session)
    }

    /// The newest Reading, and whether it is the one asked for.
    pub fn reading(&self) -> Option<(&Reading, bool)> {
        let desk = self.desk.as_ref()?;
        Some((desk.reading()?, desk.latest.is_current()))
    }

    /// Whether there is work that saving would keep.
    pub fn is_unsaved(&self) -> bool {
        self.desk.as_ref().is_some_and(Desk::is_unsaved)
    }

    /// Whether nothing is being opened, saved or computed.
    pub fn is_settled(&self) -> bool {
        let busy = self.desk.as_ref().is_some_and(|d| d.latest.is_busy() || !d.surveyed);
        self.opening.is_none() && self.waiting.is_none() && !self.saving && !busy
    }

    /// Whether the window may close: nothing is unsaved, or the user has said so.
    pub fn may_close(&self) -> bool {
        self.may_close || !self.is_unsaved()
    }

    /// A regular end: nothing is offered for recovery at the next start.
    pub fn finish(&self) {
        self.slot.finish();
    }

    /// What goes on without drawing: answers of the threads, dropped files, autosave, the question on closing.
    pub fn logic(&mut self, ctx: &Context) {
        self.start_threads(ctx);
        if let Some(path) = self.waiting.take() {
            self.want_open(&path);
        }
        for event in self.events.try_iter().collect::<Vec<_>>() {
            self.take_event(ctx, event);
        }
        self.take_answers();
        for file in ctx.input(|i| i.raw.dropped_files.clone()) {
            self.want_open(file.path());
        }
        self.autosave(ctx);
        if ctx.input(|i| i.viewport().close_requested()) && !self.may_close() {
            ctx.send_viewport_cmd(ViewportCommand::CancelClose);
            self.dialog = Some(Dialog::Unsaved(After::Quit));
        }
        self.name_window(ctx);
    }

    /// One frame.
    pub fn ui(&mut self, ui: &mut Ui) {
        let mut intents = Intents::new();
        if self.dialog.is_none() {
            let typing = ui.ctx().text_edit_focused();
            intents.extend(action::pressed(ui.ctx(), typing).into_iter().map(Intent::Do));
        }
        self.panels(ui, &mut intents);
        for intent in intents {
            self.carry_out(ui.ctx(), intent);
        }
        self.submit();
        self.read_columns();
        if let Some(shown) = self.dialog.take() {
            match dialog::show(ui.ctx(), shown) {
                Ok(open) => self.dialog = Some(open),
                Err(reply) => self.take_reply(ui.ctx(), reply),
            }
        }
    }

    fn panels(&mut self, ui: &mut Ui, intents: &mut Intents) {
        let palette = theme::palette(ui.ctx());
        let paper = |x: i8, y: i8| Frame::new().fill(palette.paper).inner_margin(Margin::symmetric(x, y));
        Panel::top("menu").frame(paper(8, 2)).show(ui, |ui| {
            let demonstration = self.services.demonstration.as_ref();
            Menus { desk: self.desk.as_ref(), recent: &self.recent, demonstration }.show(ui, &self.view, intents);
        });
        if !self.notices.is_empty() {
            Panel::top("notices").frame(paper(12, 4)).show(ui, |ui| self.notices.show(ui));
        }
        if let Some((name, watch)) = &self.opening {
            Panel::top("opening").frame(paper(12, 4)).show(ui, |ui| status::opening(ui, name, watch));
        }
        let Some(desk) = &self.desk else {
            CentralPanel::default().frame(paper(8, 8)).show(ui, |ui| {
                let demonstration = self.services.demonstration.as_ref();
                empty::show(ui, demonstration, &self.recent, &mut self.view, intents);
            });
            return;
        };
        let view = &mut self.view;
        let mut open = view.setup_open;
        if open {
            Panel::left("setup").resizable(false).exact_size(setup::WIDTH).frame(paper(12, 4)).show(ui, |ui| {
                setup::show(ui, desk, view, intents);
            });
        }
        open &= view.setup_open;
        view.setup_open = open;
        bench(ui, desk, view, intents, &paper);
    }

    fn start_threads(&mut self, ctx: &Context) {
        if self.threads.is_some() {
            return;
        }
        let wake = || {
            let ctx = ctx.clone();
            move || ctx.request_repaint()
        };
        let lane = |name: &str| {
            let unforeseen = || Event::Refused("file work failed in a way that was not foreseen: try again".to_owned());
            Lane::start(name, self.sender.clone(), wake(), unforeseen)
        };
        let started = Worker::start(wake()).and_then(|worker| {
            Ok(Threads { worker, files: lane("files")?, survey: lane("survey")?, dialogs: lane("dialogs")? })
        });
        match started {
            Ok(threads) => {
                let (recent, recovery) = (self.services.recent.clone(), self.services.recovery.clone());
                threads.files.run(move |tell| {
                    if let Some(file) = recent {
                        tell(Event::Recent(crate::session::list_recent(&file)));
                    }
                    if let Some(folder) = recovery {
                        tell(Event::Recoveries(crate::session::find_recoveries(&folder)));
                    }
                });
                self.threads = Some(threads);
            }
            Err(error) => self.notices.refuse(&format!("the system gives no threads ({error}): nothing can be opened")),
        }
    }

    fn take_answers(&mut self) {
        let Some(threads) = &self.threads else { return };
        let answers = threads.worker.answers();
        if let Some(desk) = &mut self.desk {
            for answer in answers {
                desk.latest.take(answer);
            }
            desk.latest.progress = threads.worker.progress();
        }
    }

    /// Asks for what the document asks for, where that has changed.
    pub(super) fn submit(&mut self) {
        let (Some(desk), Some(threads)) = (&mut self.desk, &self.threads) else { return };
        let mut request = desk.request();
        // What the file hashes to does not change a figure.
        request.capture.blake3.clear();
        if desk.latest.asked.as_ref().is_some_and(|(_, asked)| *asked == request) {
            return;
        }
        let curves = desk.latest.reusable(&request);
        let source = Arc::clone(&desk.capture.source);
        let generation = threads.worker.submit(source, request.clone(), curves);
        desk.latest.asked = Some((generation, request));
        desk.latest.failure = None;
        desk.latest.called_off = false;
    }

    fn autosave(&mut self, ctx: &Context) {
        let Some(due) = self.autosave_due else { return };
        let left = due.saturating_duration_since(Instant::now());
        if !left.is_zero() {
            ctx.request_repaint_after(left);
            return;
        }
        self.autosave_due = None;
        let (Some(desk), Some(threads), Some(folder)) = (&self.desk, &self.threads, &self.services.recovery) else {
            return;
        };
        let slot = self.slot.clone();
        if !desk.is_unsaved() {
            threads.files.run(move |_| slot.clear());
            return;
        }
        let (folder, session, file) = (folder.clone(), desk.session.clone(), desk.file.clone());
        threads.files.run(move |tell| {
            if let Some(event) = slot.keep(&folder, &session, file.as_deref()) {
                tell(event);
            }
        });
    }

    fn name_window(&mut self, ctx: &Context) {
        let title = self.desk.as_ref().map_or_else(
            || "Panewise".to_owned(),
            |d| format!("{}{} – Panewise", if d.is_unsaved() { "* " } else { "" }, d.name()),
        );
        if title != self.title {
            ctx.send_viewport_cmd(ViewportCommand::Title(title.clone()));
            self.title = title;
        }
    }
}

/// Strip, panes and table.
fn bench(ui: &mut Ui, desk: &Desk, view: &mut View, intents: &mut Intents, paper: &dyn Fn(i8, i8) -> Frame) {
    Panel::top("strip").resizable(false).show_separator_line(false).frame(paper(8, 4)).show(ui, |ui| {
        strip::show(ui, desk, view, intents);
    });
    let height = ui.available_height();
    let table_height = (height * 0.3).clamp(118.0, 260.0);
    let bottom = Panel::bottom("tones").resizable(true).default_size(table_height).size_range(96.0..=height * 0.7);
    bottom.frame(paper(8, 6)).show(ui, |ui| {
        status::figures(ui, desk, view, intents);
        if let Some(reading) = desk.reading().cloned()
            && card::chosen(&reading, desk, view).is_some()
        {
            let card = Panel::right("card").resizable(false).exact_size(card::WIDTH).frame(paper(8, 0));
            card.show(ui, |ui| card::show(ui, desk, view, &reading));
        }
        CentralPanel::no_frame().show(ui, |ui| table::show(ui, desk, view, intents));
        ui.take_available_space();
    });
    CentralPanel::default().frame(paper(8, 4)).show(ui, |ui| panes::show(ui, desk, view, intents));
    table::keys(ui, desk, view, intents);
}
