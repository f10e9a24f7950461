//! The menu bar, in the order of the job, and what is open at its right end.

use std::path::PathBuf;

use eframe::egui::{self, Align, Button, ComboBox, Layout, MenuBar, RichText, ThemePreference, Ui};

use super::act::current_pane;
use super::action::{Action, ENTRIES, Entry, Menu};
use super::advice::advised;
use super::desk::{Desk, file_name};
use super::view::{Intent, Intents, View};
use super::{decide, figure, list, theme};
use crate::session::{Command, FrequencyAxis, MAX_PANES, RecentFile};
use crate::signal::Removal;

/// What the menus are made from.
#[derive(Debug)]
pub(super) struct Menus<'a> {
    pub(super) desk: Option<&'a Desk>,
    pub(super) recent: &'a [RecentFile],
    pub(super) demonstration: Option<&'a PathBuf>,
}

impl Menus<'_> {
    /// Shows the bar.
    pub(super) fn show(&self, ui: &mut Ui, view: &View, intents: &mut Intents) {
        MenuBar::new().ui(ui, |ui| {
            for menu in Menu::ALL {
                ui.menu_button(menu.title(), |ui| {
                    ui.set_min_width(230.0);
                    self.menu(ui, menu, view, intents);
                });
            }
            if let Some(desk) = self.desk {
                ui.with_layout(Layout::right_to_left(Align::Center), |ui| facts(ui, desk, intents));
            }
        });
    }

    fn menu(&self, ui: &mut Ui, menu: Menu, view: &View, intents: &mut Intents) {
        for entry in ENTRIES.iter().filter(|e| e.menu == menu) {
            if matches!(
                entry.action,
                Action::Save
                    | Action::Undo
                    | Action::Quit
                    | Action::ShowSegment
                    | Action::ZoomIn
                    | Action::EnlargePane
                    | Action::NameTone
            ) {
                ui.separator();
            }
            self.item(ui, entry, view, intents);
            if entry.action == Action::OpenDemonstration {
                self.recent(ui, intents);
            }
        }
        match menu {
            Menu::Segment => self.removal(ui, intents),
            Menu::View => themes(ui),
            _ => {}
        }
    }

    fn item(&self, ui: &mut Ui, entry: &Entry, view: &View, intents: &mut Intents) {
        let key = entry.key.map(|k| ui.ctx().format_shortcut(&k)).unwrap_or_default();
        let (name, enabled) = self.state(entry, view);
        let on = match entry.action {
            Action::ToggleSetup => view.setup_open,
            Action::ToggleSkirts => view.skirts,
            Action::ToggleSmallest => view.smallest,
            Action::ShowResidue => self.desk.is_some_and(|d| shows_residue(d, view)),
            Action::ToggleLog => self.desk.is_some_and(|d| d.session.axes.frequency_axis == FrequencyAxis::Logarithmic),
            Action::HoldTone => self.desk.is_some_and(|d| decide::is_held(d, view)),
            Action::PinFundamental => self.desk.is_some_and(|d| d.session.fundamental_hz.is_some()),
            _ => false,
        };
        let button = Button::new(name).shortcut_text(key).selected(on);
        if ui.add_enabled(enabled, button).clicked() {
            intents.push(Intent::Do(entry.action));
            ui.close();
        }
    }

    /// The name an entry goes by now, and whether it can be done.
    fn state(&self, entry: &Entry, view: &View) -> (String, bool) {
        let with = |name: &str, step: Option<&'static str>| {
            (step.map_or_else(|| name.to_owned(), |s| format!("{name}: {s}")), step.is_some())
        };
        let Some(desk) = self.desk else {
            let demonstration = entry.action != Action::OpenDemonstration || self.demonstration.is_some();
            return (entry.name.to_owned(), !entry.needs_capture && demonstration);
        };
        let enabled = match entry.action {
            Action::Undo => return with(entry.name, desk.history.undo_name()),
            Action::Redo => return with(entry.name, desk.history.redo_name()),
            Action::OpenDemonstration => self.demonstration.is_some(),
            Action::UseSuggestion | Action::NextSuggestion => desk.steady.longest().is_some(),
            Action::RemoveSegment | Action::NextSegment => desk.session.segments.len() > 1,
            Action::UseAdvised => advised(desk).is_some(),
            Action::AddAdvised => advised(desk).is_some() && desk.session.panes.len() < MAX_PANES,
            Action::AddPane => desk.session.panes.len() < MAX_PANES,
            Action::TakeBackTone => super::act::hand_tone(desk, view).is_some(),
            Action::PinFundamental => desk.session.picked_hz.or(desk.session.fundamental_hz).is_some(),
            Action::NameTone => view.hairline_hz.is_some(),
            Action::RemovePane | Action::PaneLeft | Action::PaneRight => desk.session.panes.len() > 1,
            Action::WholePeriods
            | Action::CardDown
            | Action::CardUp
            | Action::FitTone
            | Action::HairlineToTone
            | Action::HoldTone
            | Action::RefuseTone
            | Action::Overrule
            | Action::Unpick
            | Action::NoteTone => desk.session.picked_hz.is_some(),
            _ => true,
        };
        (entry.name.to_owned(), enabled)
    }

    fn recent(&self, ui: &mut Ui, intents: &mut Intents) {
        ui.add_enabled_ui(!self.recent.is_empty(), |ui| {
            ui.menu_button("Recent", |ui| {
                for file in self.recent {
                    let name = file_name(&file.path);
                    let button = Button::new(name);
                    let response = ui.add_enabled(!file.missing, button);
                    let response = response.on_hover_text(file.path.to_string_lossy());
                    if response.on_disabled_hover_text("It is not there any more.").clicked() {
                        intents.push(Intent::Open(file.path.clone()));
                        ui.close();
                    }
                }
            });
        });
    }

    fn removal(&self, ui: &mut Ui, intents: &mut Intents) {
        let Some(desk) = self.desk else { return };
        ui.separator();
        for (removal, name) in [
            (Removal::None, "Take out nothing"),
            (Removal::Mean, "Take out the mean"),
            (Removal::Line, "Take out a straight line"),
        ] {
            if ui.radio(desk.session.removal == removal, name).clicked() {
                intents.push(Intent::Change(Command::SetRemoval(removal)));
                ui.close();
            }
        }
    }
}

/// Whether the pane that commands act on shows the residue.
fn shows_residue(desk: &Desk, view: &View) -> bool {
    current_pane(desk, view).and_then(|(at, _)| desk.session.panes.get(at)).is_some_and(|p| p.residue)
}

fn themes(ui: &mut Ui) {
    ui.separator();
    let now = ui.options(|o| o.theme_preference);
    for (preference, name) in [
        (ThemePreference::Light, "Light"),
        (ThemePreference::Dark, "Dark"),
        (ThemePreference::System, "As the system has it"),
    ] {
        if ui.radio(now == preference, name).clicked() {
            ui.ctx().set_theme(preference);
            ui.close();
        }
    }
}

/// What is open: name, channel, rate, duration, format.
fn facts(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let rate = desk.session.sample_rate_hz();
    let seconds = desk.session.capture.frames as f64 / rate;
    let quiet = theme::palette(ui.ctx()).quiet;
    ui.add_space(4.0);
    let text = format!(
        "{} Hz, {} s, {}",
        figure::significant(rate, 6).trim_end_matches(".00").trim_end_matches(".0"),
        figure::fixed(seconds, 1),
        desk.capture.format
    );
    ui.label(RichText::new(text).color(quiet));
    channel(ui, desk, intents);
    let unsaved = if desk.is_unsaved() { " (not saved)" } else { "" };
    let name = desk.file.as_deref().map_or_else(|| desk.name(), |f| format!("{} in {}", desk.name(), file_name(f)));
    ui.add(egui::Label::new(RichText::new(format!("{name}{unsaved}")).color(quiet)).truncate());
}

fn channel(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let n = desk.session.capture.channels;
    let title = |c: usize| format!("channel {}", c + 1);
    if n == 1 {
        ui.label(RichText::new("1 channel").color(theme::palette(ui.ctx()).quiet));
        return;
    }
    let combo = ComboBox::from_id_salt("channel").selected_text(title(desk.session.channel)).width(90.0);
    let shown = list::show(ui, combo, |ui| {
        let mut chosen = false;
        for c in 0..n {
            if list::item(ui, desk.session.channel == c, title(c)) {
                intents.push(Intent::Change(Command::ChooseChannel(c)));
                chosen = true;
            }
        }
        chosen
    });
    shown.accessible_name("Channel");
}
