//! The tone table: a row a tone, a column a pane.

use std::cell::RefCell;

use eframe::egui::{
    self, Align, Align2, Key, Layout, Modifiers, Rect, Response, Role, ScrollArea, Sense, Ui, WidgetInfo, pos2, vec2,
};
use egui_extras::{Column, TableBuilder, TableRow};

use super::action::Action;
use super::desk::Desk;
use super::pane::is_picked;
use super::pane_marks::verdict_shown;
use super::theme::{self, Palette};
use super::view::{Cell, Intent, Intents, View};
use super::{figure, widget};
use crate::reading::{PaneFacts, PaneReading, Reading, ReadingState, Tone, Verdict};
use crate::session::Command;

const ROW: f32 = 24.0;
/// Width of the first column.
const FREQUENCY: f32 = 78.0;
/// In less room uncertainties are left to the report.
const NARROW: f32 = 900.0;

/// Shows the table; figures that are not those asked for are dimmed.
pub(super) fn show(ui: &mut Ui, desk: &Desk, view: &mut View, intents: &mut Intents) {
    let Some(reading) = desk.reading().cloned() else {
        nothing_yet(ui, desk);
        return;
    };
    if !desk.latest.is_current() {
        ui.multiply_opacity(0.55);
    }
    if reading.tones.is_empty() {
        ui.add_space(8.0);
        ui.label("No tone stands over the floor of this segment. Mark a longer one, or name a tone at the hairline.");
        return;
    }
    let table = Table {
        desk,
        reading: &reading,
        picked: picked_row(&reading, desk),
        palette: theme::palette(ui.ctx()),
        narrow: ui.available_width() < NARROW,
        frequencies: RefCell::default(),
    };
    ScrollArea::horizontal().id_salt("tone table, sideways").auto_shrink(false).show(ui, |ui| {
        table.show(ui, view, intents);
        table.keep_frequencies_in_sight(ui);
    });
}

fn nothing_yet(ui: &mut Ui, desk: &Desk) {
    ui.add_space(8.0);
    let text = match &desk.latest.failure {
        Some(_) => "There are no figures for this segment.",
        None if desk.latest.called_off => "The computation was called off.",
        None => "Reading the tones…",
    };
    widget::quiet(ui, text);
}

/// The row of the tone that is picked.
pub(super) fn picked_row(reading: &Reading, desk: &Desk) -> Option<usize> {
    let picked = desk.session.picked_hz?;
    let spacing = desk.line_spacing_hz();
    let near = |i: &usize| reading.tones.get(*i).map_or(f64::INFINITY, |t| (t.frequency_hz - picked).abs());
    (0..reading.tones.len())
        .filter(|i| reading.tones.get(*i).is_some_and(|t| is_picked(t.frequency_hz, Some(picked), spacing)))
        .min_by(|a, b| near(a).total_cmp(&near(b)))
}

struct Table<'a> {
    desk: &'a Desk,
    reading: &'a Reading,
    picked: Option<usize>,
    palette: &'static Palette,
    /// There is no room for uncertainties beside levels.
    narrow: bool,
    /// Where frequencies stand, and what they are: they are written again where the table is scrolled sideways.
    frequencies: RefCell<Vec<(Rect, String, bool)>>,
}

impl Table<'_> {
    fn show(&self, ui: &mut Ui, view: &mut View, intents: &mut Intents) {
        ui.spacing_mut().item_spacing = vec2(4.0, 0.0);
        // Chosen figures stay in ink.
        ui.visuals_mut().selection.stroke.color = self.palette.ink;
        let has_verdicts = self.reading.tones.iter().any(|t| verdict_shown(t).is_some());
        let has_spread = !self.narrow && self.reading.tones.iter().any(|t| t.amplitude_u95.is_some());
        let n_panes = self.reading.panes.len();
        let heads = self.heads(has_verdicts);
        let mut builder = TableBuilder::new(ui)
            .id_salt(("tone table", n_panes, has_verdicts, has_spread))
            .sense(Sense::click())
            .auto_shrink(false)
            .cell_layout(Layout::right_to_left(Align::Center))
            .column(Column::exact(FREQUENCY))
            .column(Column::exact(if has_spread { 150.0 } else { 104.0 }))
            .column(Column::exact(58.0));
        if has_verdicts {
            builder = builder.column(Column::exact(80.0));
        }
        for pane in &self.reading.panes {
            builder = builder.column(Column::exact((pane.window.len() as f32 * 6.2 + 8.0).clamp(88.0, 130.0)));
        }
        builder = builder.column(Column::exact(80.0)).column(Column::remainder().at_least(70.0).clip(true));
        if std::mem::take(&mut view.reveal_pick)
            && let Some(row) = self.picked
        {
            builder = builder.scroll_to_row(row, None);
        }
        builder.header(ROW, |row| self.head(row, &heads)).body(|body| {
            body.rows(ROW, self.reading.tones.len(), |row| self.row(row, has_verdicts, view, intents));
        });
    }

    /// What stands over the columns, but for the last.
    fn heads(&self, has_verdicts: bool) -> Vec<String> {
        let scale = &self.reading.scale;
        let level = format!("level, {} {}", scale.unit, scale.detector.title());
        let mut heads = vec!["frequency, Hz".to_owned(), level, "level, dB".to_owned()];
        if has_verdicts {
            heads.push("verdict".to_owned());
        }
        heads.extend(self.reading.panes.iter().map(PaneFacts::written));
        heads.resize(self.reading.panes.len() + 3 + usize::from(has_verdicts), String::new());
        heads.push("agreement, dB".to_owned());
        heads
    }

    fn head(&self, mut row: TableRow<'_, '_>, heads: &[String]) {
        let quiet = |text: &str| egui::RichText::new(text).font(theme::quiet()).color(self.palette.quiet);
        for (column, head) in heads.iter().enumerate() {
            row.col(|ui| {
                if column == 0 {
                    self.frequencies.borrow_mut().push((ui.max_rect(), head.clone(), false));
                }
                ui.add(egui::Label::new(quiet(head)).truncate());
            });
        }
        row.col(|ui| {
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                ui.add_space(12.0);
                ui.label(quiet("note"));
            });
        });
    }

    /// Scrolled sideways, the frequencies stay at the left edge, on paper of their own.
    fn keep_frequencies_in_sight(&self, ui: &Ui) {
        let frequencies = self.frequencies.borrow();
        let (Some((head, ..)), sight) = (frequencies.first(), ui.clip_rect()) else { return };
        if head.left() >= sight.left() - 0.5 {
            return;
        }
        let strip = Rect::from_x_y_ranges(sight.left()..=sight.left() + FREQUENCY + 6.0, sight.y_range());
        let below = Rect::from_min_max(pos2(strip.left(), head.bottom()), strip.max);
        for (i, (cell, text, picked)) in frequencies.iter().enumerate() {
            let painter = ui.painter().with_clip_rect(if i == 0 { strip } else { below.intersect(sight) });
            let place = Rect::from_x_y_ranges(strip.x_range(), cell.y_range());
            painter.rect_filled(place, 0.0, if *picked { self.palette.selection } else { self.palette.paper });
            let (font, ink) =
                if i == 0 { (theme::quiet(), self.palette.quiet) } else { (theme::body(), self.palette.ink) };
            let at = pos2(strip.left() + FREQUENCY, place.center().y);
            widget::write(&painter, at, Align2::RIGHT_CENTER, text, font, ink);
        }
        let rule = egui::Stroke::new(1.0, self.palette.rule);
        ui.painter().with_clip_rect(sight).vline(strip.right(), strip.y_range(), rule);
    }

    fn row(&self, mut row: TableRow<'_, '_>, has_verdicts: bool, view: &mut View, intents: &mut Intents) {
        let index = row.index();
        let Some(tone) = self.reading.tones.get(index) else { return };
        let spacing = self.desk.line_spacing_hz();
        row.set_selected(self.picked == Some(index));
        let frequency = figure::hertz(tone.frequency_hz, spacing);
        row.col(|ui| {
            let place = (ui.max_rect(), frequency.clone(), self.picked == Some(index));
            self.frequencies.borrow_mut().push(place);
            ui.add(egui::Label::new(&frequency).selectable(false));
        });
        let detector = self.reading.scale.detector.of_unit_peak();
        let (level, spread) = figure::with_uncertainty(tone.level, tone.amplitude_u95.map(|u| u * detector));
        row.col(|ui| self.figure(ui, &level, if self.narrow { "" } else { &spread }));
        row.col(|ui| self.figure(ui, &figure::fixed(tone.level_db, 2), ""));
        if has_verdicts {
            row.col(|ui| self.verdict(ui, tone));
        }
        let mut chosen: Option<Option<usize>> = None;
        for (pane, reading) in tone.readings.iter().enumerate() {
            row.col(|ui| {
                if self.cell(ui, &frequency, pane, reading, Cell { tone: index, pane }, view).clicked() {
                    chosen = Some(Some(pane));
                }
            });
        }
        let agreement = tone.agreement_db.map_or_else(|| "–".to_owned(), |a| figure::fixed(a, 3));
        row.col(|ui| drop(ui.add(egui::Label::new(agreement).selectable(false))));
        row.col(|ui| self.note(ui, tone, spacing));
        let response = row.response();
        let name = format!("Tone {frequency} Hz");
        let picked = self.picked == Some(index);
        response.widget_info(|| WidgetInfo::selected(Role::Row, true, picked, &name));
        if response.clicked() && chosen.is_none() {
            chosen = Some(None);
        }
        if let Some(pane) = chosen {
            intents.push(Intent::Change(Command::Pick(Some(tone.frequency_hz))));
            view.card_pane = pane;
        }
    }

    /// A figure, its uncertainty quieter beside it.
    fn figure(&self, ui: &mut Ui, value: &str, spread: &str) {
        if !spread.is_empty() {
            let text = egui::RichText::new(spread).color(self.palette.quiet);
            ui.add(egui::Label::new(text).selectable(false));
        }
        ui.add(egui::Label::new(value).selectable(false));
    }

    fn verdict(&self, ui: &mut Ui, tone: &Tone) {
        let Some(verdict) = verdict_shown(tone) else { return };
        let rect = ui.available_rect_before_wrap();
        let word = verdict_word(verdict);
        let hue = theme::verdict_hue(self.palette, verdict);
        widget::verdict_mark(ui.painter(), pos2(rect.left() + 14.0, rect.center().y), verdict, hue);
        ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
            ui.add_space(24.0);
            let response = ui.add(egui::Label::new(word).selectable(false));
            if let Some(why) = &tone.why {
                response.on_hover_text(why);
            }
        });
    }

    /// One cell: the level, or the word for why it is not to be trusted; a mark of its state beside it.
    fn cell(
        &self,
        ui: &mut Ui,
        frequency: &str,
        pane: usize,
        reading: &PaneReading,
        cell: Cell,
        view: &View,
    ) -> Response {
        let rect = ui.available_rect_before_wrap();
        // What the frequencies cover when the table is scrolled sideways is not to be clicked.
        let sight = ui.clip_rect();
        let free = Rect::from_min_max(pos2(rect.left().max(sight.left() + FREQUENCY + 6.0), rect.top()), rect.max);
        let response = ui.interact(free, egui::Id::unique(("cell", cell.tone, cell.pane)), Sense::click());
        let level = figure::fixed(reading.level_db, 2);
        let word = reading.state.word();
        let window = &reading.window;
        let name = format!("{frequency} Hz in pane {}, {window}: {level} dB, {word}", pane + 1);
        response.widget_info(|| WidgetInfo::labeled(Role::Button, true, &name));
        let painter = ui.painter();
        let chosen = self.picked == Some(cell.tone) && view.card_pane == Some(pane);
        if chosen || response.has_focus() || response.hovered() {
            let stroke = egui::Stroke::new(if response.hovered() && !chosen { 1.0 } else { 1.5 }, self.palette.accent);
            painter.rect_stroke(rect.shrink(1.0), 3.0, stroke, egui::StrokeKind::Inside);
        }
        let clear = reading.state == ReadingState::Clear;
        let (text, ink) = if clear { (level, self.palette.ink) } else { (word.to_owned(), self.palette.quiet) };
        let right = pos2(rect.right() - 4.0, rect.center().y);
        let taken: Rect = widget::write(painter, right, Align2::RIGHT_CENTER, &text, theme::body(), ink);
        if !clear {
            widget::state_mark(painter, pos2(taken.left() - 10.0, rect.center().y), reading.state, ink);
        }
        response.on_hover_text(format!("{name}. Click for its ledger."))
    }

    fn note(&self, ui: &mut Ui, tone: &Tone, spacing: f64) {
        let notes = &self.desk.session.notes;
        let mine = notes.iter().find(|n| n.frequency_hz.is_some_and(|hz| (hz - tone.frequency_hz).abs() <= spacing));
        let tags = tone.tags.iter().map(|t| compact(t)).collect::<Vec<_>>().join(", ");
        let text = match (mine, tags.is_empty()) {
            (Some(note), true) => note.text.clone(),
            (Some(note), false) => format!("{} ({tags})", note.text),
            (None, _) => tags,
        };
        ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
            ui.add_space(12.0);
            ui.add(egui::Label::new(text).selectable(false).truncate());
        });
    }
}

/// A tag in little room: `harmonic 3 of 24.96` is `3 × 24.96`.
fn compact(tag: &str) -> String {
    let series = tag.strip_prefix("harmonic ").and_then(|rest| rest.split_once(" of "));
    series.map_or_else(|| tag.to_owned(), |(order, of)| format!("{order} × {of}"))
}

pub(super) fn verdict_word(verdict: Verdict) -> &'static str {
    match verdict {
        Verdict::Holds => "holds",
        Verdict::Crowded => "crowded",
        Verdict::Wanders => "wanders",
        Verdict::Disputed => "disputed",
        Verdict::Skirt => "skirt",
        Verdict::Faint => "faint",
    }
}

/// Up and down move the pick while nothing else wants these keys.
pub(super) fn keys(ui: &Ui, intents: &mut Intents) {
    let free = ui.memory(|m| m.focused().is_none()) && !egui::Popup::is_any_open(ui.ctx());
    if !free {
        return;
    }
    for (key, action) in [(Key::ArrowDown, Action::NextTone), (Key::ArrowUp, Action::PreviousTone)] {
        let n = ui.input_mut(|i| i.count_and_consume_key(Modifiers::NONE, key));
        intents.extend(std::iter::repeat_with(|| Intent::Do(action)).take(n));
    }
}

/// Moves the pick to the next row, or to the one before.
pub(super) fn step(desk: &Desk, view: &mut View, intents: &mut Intents, down: bool) {
    let Some(reading) = desk.reading().filter(|r| !r.tones.is_empty()) else { return };
    let last = reading.tones.len() - 1;
    let row = match (picked_row(reading, desk), down) {
        (Some(row), true) => (row + 1).min(last),
        (Some(row), false) => row.saturating_sub(1),
        (None, true) => 0,
        (None, false) => last,
    };
    if let Some(tone) = reading.tones.get(row) {
        intents.push(Intent::Change(Command::Pick(Some(tone.frequency_hz))));
        view.reveal_pick = true;
    }
}

/// The table as tab-separated text, units in the head, a full stop as the decimal mark.
pub(super) fn as_text(reading: &Reading) -> String {
    let scale = &reading.scale;
    let mut text = format!(
        "frequency (Hz)\tlevel ({} {})\tlevel ({})\tagreement (dB)",
        scale.unit,
        scale.detector.title(),
        scale.reference_label
    );
    let windows = reading.tones.first().map(|t| t.readings.iter().map(|r| r.window.clone()).collect::<Vec<_>>());
    for window in windows.unwrap_or_default() {
        text.extend(["\t", &window, " (dB)\t", &window, " state"]);
    }
    text.push('\n');
    for tone in &reading.tones {
        let agreement = tone.agreement_db.map(|a| a.to_string()).unwrap_or_default();
        let mut cells =
            vec![tone.frequency_hz.to_string(), tone.level.to_string(), tone.level_db.to_string(), agreement];
        for reading in &tone.readings {
            cells.extend([reading.level_db.to_string(), reading.state.word().to_owned()]);
        }
        text.extend([cells.join("\t").as_str(), "\n"]);
    }
    text
}
