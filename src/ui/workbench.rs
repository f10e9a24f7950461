//! The screen without its window: state, the order of a frame, the panels.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::mpsc::{Receiver, Sender, channel};
use std::time::{Duration, Instant};

use eframe::egui::{CentralPanel, Context, Frame, Margin, Panel, Popup, Ui, ViewportCommand};

use super::action;
use super::desk::Desk;
use super::dialog::Dialogs;
use super::files::{Event, Slot, UNFORESEEN};
use super::keep::Saving;
use super::lane::Lane;
use super::menu::Menus;
use super::notice::Notices;
use super::preferences::Preferences;
use super::services::Services;
use super::survey::fit_axes_at_first;
use super::view::{Intent, Intents, View};
use super::worker::Worker;
use super::{card, chooser, dialog, empty, panes, setup, status, strip, table, theme};
use crate::reading::Reading;
use crate::session::{RecentFile, Session};
use crate::signal::Watch;

/// The threads, started with the first frame, when there is something to wake.
#[derive(Debug)]
pub(super) struct Threads {
    pub(super) worker: Worker,
    /// Opening.
    pub(super) opening: Lane<Event>,
    /// Saving.
    pub(super) files: Lane<Event>,
    /// Reading the samples behind the columns of the strip.
    pub(super) strip: Lane<Event>,
    /// Reading captures through.
    pub(super) survey: Lane<Event>,
    /// Figures of windows.
    pub(super) figures: Lane<Event>,
    /// Skirts and residues.
    pub(super) parts: Lane<Event>,
    /// The desktop's dialogs.
    pub(super) dialogs: Lane<Event>,
}

/// What is being opened.
#[derive(Debug)]
pub(super) struct Opening {
    /// Which opening it is: what comes of another one is dropped.
    pub(super) number: u64,
    /// The file's name.
    pub(super) name: String,
    /// Calls it off.
    pub(super) watch: Watch,
    /// The unsaved work that the user gave up for it.
    pub(super) given_up: Option<Session>,
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
    pub(super) dialogs: Dialogs,
    pub(super) recent: Vec<RecentFile>,
    pub(super) slot: Slot,
    /// What is being opened.
    pub(super) opening: Option<Opening>,
    /// Openings so far.
    pub(super) n_openings: u64,
    /// Desks so far.
    pub(super) n_opened: u64,
    /// The unsaved work that the user gave up for the opening that comes next.
    pub(super) given_up: Option<Session>,
    /// A file to open as soon as there are threads.
    pub(super) waiting: Option<PathBuf>,
    /// Saves that wait or are on their way.
    pub(super) saving: Saving,
    /// When the document has to be kept for recovery.
    pub(super) autosave_due: Option<Instant>,
    /// Whether the window may close.
    pub(super) may_close: bool,
    /// Theme and sizes as they were last seen; `None` until they are read from their file.
    pub(super) preferences: Option<Preferences>,
    /// When they have to be written.
    pub(super) preferences_due: Option<Instant>,
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
            dialogs: Dialogs::default(),
            recent: Vec::new(),
            slot: Slot::default(),
            opening: None,
            n_openings: 0,
            n_opened: 0,
            given_up: None,
            waiting: None,
            saving: Saving::default(),
            autosave_due: None,
            may_close: false,
            preferences: None,
            preferences_due: None,
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
        let busy = self.desk.as_ref().is_some_and(|d| d.latest.is_busy() || !d.surveyed || d.parts.is_busy());
        self.opening.is_none() && self.waiting.is_none() && !self.saving.is_busy() && !busy
    }

    /// Whether the window may close: nothing is unsaved or being saved, or the user has said so.
    pub fn may_close(&self) -> bool {
        self.may_close || !(self.is_unsaved() || self.saving.is_busy())
    }

    /// A regular end: nothing is offered for recovery at the next start.
    pub fn finish(&self) {
        self.slot.finish();
        if let (Some(_), Some(now), Some(file)) = (&self.preferences_due, &self.preferences, &self.services.preferences)
        {
            // What cannot be kept is set anew next time.
            let _ = now.save(file);
        }
    }

    /// What goes on without drawing: answers of the threads, dropped files, autosave, the question on closing.
    pub fn logic(&mut self, ctx: &Context) {
        self.start_threads(ctx);
        self.keep_preferences(ctx);
        if let Some(path) = self.waiting.take() {
            self.want_open(&path);
        }
        for event in self.events.try_iter().collect::<Vec<_>>() {
            self.take_event(ctx, event);
        }
        self.take_answers(ctx);
        self.save_due();
        for file in ctx.input(|i| i.raw.dropped_files.clone()) {
            self.want_open(file.path());
        }
        self.autosave(ctx);
        if ctx.input(|i| i.viewport().close_requested()) && !self.may_close() {
            ctx.send_viewport_cmd(ViewportCommand::CancelClose);
            self.want_quit(ctx);
        }
        self.name_window(ctx);
    }

    /// One frame.
    pub fn ui(&mut self, ui: &mut Ui) {
        let mut intents = Intents::new();
        if self.dialogs.is_empty() {
            // Keys that type belong to an open list too.
            let typing = ui.ctx().text_edit_focused() || Popup::is_any_open(ui.ctx());
            intents.extend(action::pressed(ui.ctx(), typing).into_iter().map(Intent::Do));
        }
        self.view.preview = None;
        self.panels(ui, &mut intents);
        for intent in intents {
            self.carry_out(ui.ctx(), intent);
        }
        self.submit();
        self.survey();
        self.read_columns();
        self.read_figures();
        self.make_parts();
        if let Some(shown) = self.dialogs.take_if(|_| true) {
            match dialog::show(ui.ctx(), shown) {
                Ok(open) => self.dialogs.interrupt(open),
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
        if let Some(Opening { name, watch, .. }) = &self.opening {
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
        let lane = |name: &str| Lane::start(name, self.sender.clone(), wake(), || Event::Said(UNFORESEEN.to_owned()));
        let started = Worker::start(wake()).and_then(|worker| {
            let (opening, files, strip) = (lane("opening")?, lane("files")?, lane("strip")?);
            let (survey, figures, dialogs) = (lane("survey")?, lane("figures")?, lane("dialogs")?);
            let parts = lane("parts")?;
            Ok(Threads { worker, opening, files, strip, survey, figures, parts, dialogs })
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

    fn take_answers(&mut self, ctx: &Context) {
        let Some(threads) = &self.threads else { return };
        let answers = threads.worker.answers();
        if let Some(desk) = &mut self.desk {
            for answer in answers {
                desk.latest.take(answer);
            }
            desk.latest.progress = threads.worker.progress();
            if desk.latest.is_busy() {
                // Also while an edge is held still in a drag: what waits is served by asking for answers.
                ctx.request_repaint_after(Duration::from_millis(100));
            }
            match desk.take_verdict() {
                Some((true, text)) => self.notices.tell(&text),
                Some((false, text)) => self.notices.refuse(&text),
                None => {}
            }
        }
    }

    /// Asks for what the document asks for, where that has changed.
    pub(super) fn submit(&mut self) {
        let (Some(desk), Some(threads)) = (&mut self.desk, &self.threads) else { return };
        let request = desk.request();
        if desk.latest.asked.as_ref().is_some_and(|(_, asked)| *asked == request) {
            fit_axes_at_first(desk);
            return;
        }
        let curves = desk.latest.reusable(&request);
        let source = Arc::clone(&desk.capture.source);
        let generation = threads.worker.submit(source, request.clone(), curves);
        desk.latest.asked = Some((generation, request));
        desk.latest.failure = None;
        desk.latest.called_off = false;
    }

    /// Has figures of windows computed that are shown as soon as they are there.
    fn read_figures(&mut self) {
        let Some(threads) = &self.threads else { return };
        for wanted in self.view.merits.wanted() {
            threads.figures.run(move |tell| {
                let (key, figures) = wanted.compute();
                tell(Event::Figures(key, figures));
            });
        }
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
    let beside = ui.available_width() >= card::BESIDE;
    let table_height = (height * if beside { 0.3 } else { 0.38 }).clamp(118.0, 340.0);
    if view.choosing.is_some() {
        let height = (height * 0.46).clamp(210.0, 440.0);
        let bottom = Panel::bottom("choosing").resizable(true).default_size(height).size_range(150.0..=600.0);
        bottom.frame(paper(8, 6)).show(ui, |ui| {
            chooser::show(ui, desk, view, intents);
            ui.take_available_space();
        });
        CentralPanel::default().frame(paper(8, 4)).show(ui, |ui| panes::show(ui, desk, view, intents));
        return;
    }
    let bottom = Panel::bottom("tones").resizable(true).default_size(table_height).size_range(96.0..=height * 0.7);
    bottom.frame(paper(8, 6)).show(ui, |ui| {
        status::figures(ui, desk, view, intents);
        if let Some(reading) = desk.reading().cloned()
            && card::chosen(&reading, desk, view).is_some()
        {
            if beside {
                let card = Panel::right("card").resizable(false).exact_size(card::WIDTH).frame(paper(8, 0));
                card.show(ui, |ui| card::show(ui, desk, view, &reading, intents));
            } else {
                let card = Panel::bottom("card below").resizable(false).exact_size(card::HEIGHT).frame(paper(0, 6));
                card.show(ui, |ui| card::show_below(ui, desk, view, &reading, intents));
            }
        }
        CentralPanel::no_frame().show(ui, |ui| table::show(ui, desk, view, intents));
        ui.take_available_space();
    });
    CentralPanel::default().frame(paper(8, 4)).show(ui, |ui| panes::show(ui, desk, view, intents));
    table::keys(ui, intents);
}
