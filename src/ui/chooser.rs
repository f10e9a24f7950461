//! Choosing a window in place: the catalogue stands where the tone table stood, the kernel of the window looked at is
//! drawn over the pane's own curve.

use eframe::egui::{
    self, Align, Button, EventFilter, Id, Key, Layout, Modifiers, Rect, RichText, Role, Sense, Ui, UiBuilder,
    WidgetInfo, pos2,
};

use super::chooser_table::{self, Figured};
use super::desk::Desk;
use super::view::{Intent, Intents, View};
use super::{parameters, theme, widget};
use crate::session::{Command, MAX_PANES, PaneId};
use crate::window::{Window, catalogue};

/// The list that has the keyboard.
const LIST: &str = "windows to choose from";

/// Rows a page.
const PAGE: usize = 8;

/// What the window is chosen for.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum Target {
    Pane(PaneId),
    /// A pane to be added.
    New,
}

/// A window being chosen.
#[derive(Debug, Clone)]
pub(super) struct Choosing {
    target: Target,
    /// The one marked in the list, with its parameters.
    window: Window,
    /// The one under the pointer.
    hovered: Option<Window>,
    /// The list has to be brought to the marked row.
    reveal: bool,
    /// The list has to take the keyboard.
    take_focus: bool,
}

/// What is done with the choice.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
enum End {
    Take,
    Leave,
}

impl Choosing {
    /// A choice for a pane that is there, from its own window on.
    pub(super) fn for_pane(desk: &Desk, id: PaneId) -> Option<Self> {
        let pane = desk.session.panes.iter().find(|p| p.id == id)?;
        Some(Self::from(Target::Pane(id), pane.window.clone()))
    }

    /// A choice for a new pane, from the first window that no pane has.
    pub(super) fn for_new_pane(desk: &Desk) -> Option<Self> {
        let panes = &desk.session.panes;
        if panes.len() >= MAX_PANES {
            return None;
        }
        let is_free = |name: &str| !panes.iter().any(|p| p.window.name() == name);
        let entry = catalogue().iter().find(|e| is_free(e.name)).or_else(|| catalogue().first())?;
        Some(Self::from(Target::New, Window::parse(entry.name).ok()?))
    }

    fn from(target: Target, window: Window) -> Self {
        Self { target, window, hovered: None, reveal: true, take_focus: true }
    }

    /// The pane whose curve the kernel is drawn over: the one chosen for, else the one last touched, else the first.
    fn shown_in(&self, desk: &Desk, view: &View) -> Option<PaneId> {
        let panes = &desk.session.panes;
        let is_there = |id: &PaneId| panes.iter().any(|p| p.id == *id);
        match self.target {
            Target::Pane(id) => Some(id).filter(is_there),
            Target::New => view.pane.filter(is_there).or_else(|| panes.first().map(|p| p.id)),
        }
    }

    /// Marks the entry `at`: with the pane's own parameters where it is the pane's window, else the standing ones.
    fn mark(&mut self, at: usize, desk: &Desk) {
        let Some(entry) = catalogue().get(at) else { return };
        self.hovered = None;
        if entry.name != self.window.name()
            && let Some(window) = self.of_entry(entry.name, desk)
        {
            self.window = window;
        }
    }

    fn of_entry(&self, name: &str, desk: &Desk) -> Option<Window> {
        let own = desk.session.panes.iter().find(|p| self.target == Target::Pane(p.id)).map(|p| &p.window);
        match own.filter(|w| w.name() == name) {
            Some(own) => Some(own.clone()),
            None if self.window.name() == name => Some(self.window.clone()),
            None => Window::parse(name).ok(),
        }
    }

    fn row(&self) -> usize {
        catalogue().iter().position(|e| e.name == self.window.name()).unwrap_or(0)
    }

    fn title(&self, desk: &Desk) -> String {
        let at = desk.session.panes.iter().position(|p| self.target == Target::Pane(p.id));
        at.map_or_else(|| "Window for a new pane".to_owned(), |i| format!("Window for pane {}", i + 1))
    }
}

/// Shows the choice in the place of the tone table.
pub(super) fn show(ui: &mut Ui, desk: &Desk, view: &mut View, intents: &mut Intents) {
    let Some(mut choosing) = view.choosing.take() else { return };
    let Some(shown_in) = choosing.shown_in(desk, view) else { return };
    // A field that is left with Enter or Esc keeps that key: who has the keyboard is asked before fields are shown.
    let elsewhere = ui.memory(egui::Memory::focused).is_some_and(|id| id != Id::unique(LIST));
    let mut end = head(ui, desk, &mut choosing);
    let looked_at = choosing.hovered.as_ref().unwrap_or(&choosing.window);
    widget::quiet(ui, looked_at.entry().purpose).on_hover_text(format!("Source: {}", looked_at.entry().source));
    end = end.or(table(ui, desk, view, &mut choosing, elsewhere));
    match end {
        None => {
            let looked_at = choosing.hovered.as_ref().unwrap_or(&choosing.window);
            view.preview = Some((shown_in, looked_at.clone()));
            if choosing.reveal {
                view.reveal_pane = Some(shown_in);
            }
            choosing.reveal = false;
            view.choosing = Some(choosing);
        }
        Some(End::Leave) => {}
        Some(End::Take) => {
            view.refit_level = true;
            intents.push(Intent::CloseStep);
            intents.push(Intent::Change(match choosing.target {
                Target::Pane(id) => Command::SetWindow(id, choosing.window),
                Target::New => Command::AddPane(choosing.window),
            }));
            intents.push(Intent::CloseStep);
        }
    }
}

/// What is chosen for, the fields of the marked window's parameters, and the two ways out.
fn head(ui: &mut Ui, desk: &Desk, choosing: &mut Choosing) -> Option<End> {
    let mut end = None;
    ui.horizontal(|ui| {
        let palette = theme::palette(ui.ctx());
        let font = theme::heavy(ui.ctx(), theme::BODY);
        ui.label(RichText::new(choosing.title(desk)).font(font.clone()).color(palette.accent));
        ui.label(RichText::new(choosing.window.name()).font(font));
        let edited = parameters::edit(ui, Id::unique("chosen window"), "Chosen window", &choosing.window);
        if edited.busy {
            choosing.hovered = None;
        }
        if let Some(window) = edited.window {
            choosing.window = window;
        }
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            if ui.add(Button::new("Leave").shortcut_text("Esc")).clicked() {
                end = Some(End::Leave);
            }
            let name = format!("Take {}", choosing.window);
            if ui.add(Button::new("Take").shortcut_text("Enter")).accessible_name(name).clicked() {
                end = Some(End::Take);
            }
        });
    });
    end
}

/// The catalogue, and beside it the windows in panes where there is room for both.
fn table(ui: &mut Ui, desk: &Desk, view: &mut View, choosing: &mut Choosing, elsewhere: bool) -> Option<End> {
    let area = ui.available_rect_before_wrap();
    let list = ui.interact(area, Id::unique(LIST), Sense::focusable_noninteractive());
    list.widget_info(|| WidgetInfo::labeled(Role::ListBox, true, "Windows to choose from"));
    if std::mem::take(&mut choosing.take_focus) {
        list.request_focus();
    }
    let mut end = if elsewhere { None } else { keys(ui, list.id, desk, choosing) };
    let beside = area.width() >= chooser_table::BOTH;
    let split = if beside { area.right() - chooser_table::IN_PANES - 16.0 } else { area.right() };
    let left = Rect::from_min_max(area.min, pos2(split, area.bottom()));
    let mut ui_left = ui.new_child(UiBuilder::new().max_rect(left).id_salt("catalogue"));
    let said = catalogue_rows(&mut ui_left, desk, view, choosing);
    if let Some((row, taken)) = said {
        choosing.mark(row, desk);
        list.request_focus();
        end = end.or(taken.then_some(End::Take));
    }
    if beside {
        let right = Rect::from_min_max(pos2(split + 16.0, area.top()), area.max);
        let mut ui_right = ui.new_child(UiBuilder::new().max_rect(right).id_salt("windows in panes"));
        chooser_table::in_panes(&mut ui_right, desk, view);
    }
    ui.allocate_rect(area, Sense::hover());
    end
}

/// The rows of the catalogue; gives the one clicked and whether it was clicked twice.
fn catalogue_rows(ui: &mut Ui, desk: &Desk, view: &mut View, choosing: &mut Choosing) -> Option<(usize, bool)> {
    let (mut clicked, mut hovered) = (None, None);
    let marked = choosing.row();
    let moved = ui.input(|i| i.pointer.delta() != egui::Vec2::ZERO);
    chooser_table::head(ui, true);
    egui::ScrollArea::vertical().id_salt("catalogue rows").auto_shrink(false).show(ui, |ui| {
        ui.spacing_mut().item_spacing.y = 0.0;
        for (row, entry) in catalogue().iter().enumerate() {
            let of_entry = choosing.of_entry(entry.name, desk);
            let Some(window) = of_entry.filter(|_| row != marked).or_else(|| Some(choosing.window.clone())) else {
                continue;
            };
            let figured = Figured::of(&window, desk, view);
            let response = chooser_table::catalogue_row(ui, &figured, row == marked, desk);
            if row == marked && choosing.reveal {
                response.scroll_to_me(Some(Align::Center));
            }
            if response.clicked() {
                clicked = Some((row, response.double_clicked()));
            }
            if response.hovered() {
                hovered = Some(window);
            }
        }
    });
    if hovered.is_none() || moved {
        choosing.hovered = hovered;
    }
    clicked
}

/// Arrows move through the list, Enter takes, Esc leaves.
fn keys(ui: &Ui, list: Id, desk: &Desk, choosing: &mut Choosing) -> Option<End> {
    let filter = EventFilter { vertical_arrows: true, escape: true, ..EventFilter::default() };
    ui.memory_mut(|m| m.set_focus_lock_filter(list, filter));
    // A key held down may come more than once in a frame.
    let times = |key| ui.input_mut(|i| i.count_and_consume_key(Modifiers::NONE, key));
    let pressed = |key| times(key) > 0;
    let last = catalogue().len().saturating_sub(1);
    for (key, forward, back) in [
        (Key::ArrowDown, 1, 0),
        (Key::ArrowUp, 0, 1),
        (Key::PageDown, PAGE, 0),
        (Key::PageUp, 0, PAGE),
        (Key::Home, 0, last),
        (Key::End, last, 0),
    ] {
        let n = times(key);
        if n > 0 {
            choosing.mark((choosing.row() + n * forward).min(last).saturating_sub(n * back), desk);
            choosing.reveal = true;
        }
    }
    if pressed(Key::Escape) {
        return Some(End::Leave);
    }
    pressed(Key::Enter).then_some(End::Take)
}
