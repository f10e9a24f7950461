//! The card beside the table: the ledger of one cell, step by step, and what else is known of the tone.

use eframe::egui::{self, Align, Layout, RichText, ScrollArea, Ui};

use super::desk::Desk;
use super::table::picked_row;
use super::view::{Intents, View};
use super::{card_tone, figure, theme, widget};
use crate::reading::{PaneReading, Reading, ReadingState, Tone};

/// Width of the card.
pub(super) const WIDTH: f32 = 276.0;
/// From this width on the card stands beside the table, in less below it.
pub(super) const BESIDE: f32 = 960.0;
/// Height of the card below the table.
pub(super) const HEIGHT: f32 = 66.0;

/// A step so small is only named.
const SMALL_DB: f64 = 0.0005;

/// The tone and the pane whose ledger is shown: the cell chosen, else the sharpest pane that reads the picked tone
/// clear of everything.
pub(super) fn chosen<'a>(reading: &'a Reading, desk: &Desk, view: &View) -> Option<(&'a Tone, usize)> {
    let tone = reading.tones.get(picked_row(reading, desk)?)?;
    let sharpest = || {
        let clear = |i: &usize| tone.readings.get(*i).is_some_and(|r| r.state == ReadingState::Clear);
        let width = |i: &usize| reading.panes.get(*i).map_or(f64::INFINITY, |p| p.enbw_bins);
        (0..tone.readings.len()).filter(clear).min_by(|a, b| width(a).total_cmp(&width(b)))
    };
    let pane = view.card_pane.filter(|p| *p < tone.readings.len()).or_else(sharpest).unwrap_or(0);
    (!tone.readings.is_empty()).then_some((tone, pane))
}

/// Shows the card.
pub(super) fn show(ui: &mut Ui, desk: &Desk, view: &mut View, reading: &Reading, intents: &mut Intents) {
    let Some((tone, pane)) = chosen(reading, desk, view) else { return };
    let Some(cell) = tone.readings.get(pane) else { return };
    if !desk.latest.is_current() {
        ui.multiply_opacity(0.55);
    }
    ScrollArea::vertical().id_salt("card").auto_shrink(false).show(ui, |ui| {
        turn_pages(ui, view);
        let spacing = desk.line_spacing_hz();
        let head = theme::heavy(ui.ctx(), theme::BODY);
        ui.spacing_mut().item_spacing.y = 1.0;
        ui.spacing_mut().interact_size.y = 16.0;
        let title = format!("{} Hz in {}", figure::hertz(tone.frequency_hz, spacing), cell.window);
        ui.label(RichText::new(title).font(head));
        card_tone::verdict(ui, tone);
        state(ui, cell);
        ledger(ui, cell, &reading.scale.reference_label);
        ui.add_space(4.0);
        facts(ui, cell, spacing);
        card_tone::facts(ui, tone, reading, desk, view, intents);
    });
}

/// Shows the card low and wide, for screens without room beside the table.
pub(super) fn show_below(ui: &mut Ui, desk: &Desk, view: &mut View, reading: &Reading, intents: &mut Intents) {
    let Some((tone, pane)) = chosen(reading, desk, view) else { return };
    let Some(cell) = tone.readings.get(pane) else { return };
    if !desk.latest.is_current() {
        ui.multiply_opacity(0.55);
    }
    let spacing = desk.line_spacing_hz();
    ui.spacing_mut().item_spacing = egui::vec2(10.0, 1.0);
    ui.spacing_mut().interact_size.y = 16.0;
    ScrollArea::vertical().id_salt("card below").auto_shrink(false).show(ui, |ui| {
        turn_pages(ui, view);
        ui.horizontal(|ui| {
            let head = theme::heavy(ui.ctx(), theme::BODY);
            let title = format!("{} Hz in {}", figure::hertz(tone.frequency_hz, spacing), cell.window);
            ui.label(RichText::new(title).font(head));
            state(ui, cell);
        });
        card_tone::verdict(ui, tone);
        ui.horizontal_wrapped(|ui| {
            let palette = theme::palette(ui.ctx());
            for step in cell.ledger.iter().filter(|s| s.db.abs() >= SMALL_DB) {
                let text = format!("{} {}", step.step, figure::fixed(step.db, 3));
                ui.label(RichText::new(text).color(palette.ink));
            }
            let sum: f64 = cell.ledger.iter().map(|s| s.db).sum();
            let text = format!("level {} dB", figure::fixed(sum, 3));
            ui.label(RichText::new(text).font(theme::heavy(ui.ctx(), theme::BODY)));
        });
        ui.horizontal_wrapped(|ui| {
            facts(ui, cell, spacing);
            small(ui, cell);
        });
        card_tone::facts(ui, tone, reading, desk, view, intents);
    });
}

/// Scrolls by the pages that keys asked for, each somewhat less than what is in sight.
fn turn_pages(ui: &Ui, view: &mut View) {
    let pages = std::mem::take(&mut view.card_scroll);
    if pages != 0 {
        ui.scroll_with_delta(egui::vec2(0.0, -0.85 * ui.clip_rect().height() * pages as f32));
    }
}

/// The steps too small to be written out.
fn small(ui: &mut Ui, cell: &PaneReading) {
    let names: Vec<&str> = cell.ledger.iter().filter(|s| s.db.abs() < SMALL_DB).map(|s| s.step).collect();
    if !names.is_empty() {
        widget::quiet(ui, format!("less than {SMALL_DB} dB each: {}", names.join(", ")));
    }
}

fn state(ui: &mut Ui, cell: &PaneReading) {
    let why = match cell.state {
        ReadingState::Clear => "clear: nothing stands in the way",
        ReadingState::Crowded => "crowded: another tone stands inside this window's main lobe",
        ReadingState::UnderSkirt => "under-skirt: leakage of other tones moves this level",
        ReadingState::BelowFloor => "below-floor: this pane's floor covers the tone",
    };
    widget::quiet(ui, why);
}

/// Where the peak is and what noise does to it.
fn facts(ui: &mut Ui, cell: &PaneReading, spacing: f64) {
    let peak = figure::hertz(cell.peak_hz, spacing);
    let borrowed = if cell.borrowed { ", borrowed from a sharper pane" } else { "" };
    widget::quiet(ui, format!("peak at {peak} Hz{borrowed}"));
    if let Some(leak) = cell.predicted_leak_db {
        let leak = if leak.abs() < SMALL_DB { "less than 0.0005".to_owned() } else { figure::fixed(leak, 3) };
        widget::quiet(ui, format!("other tones move it by {leak} dB; the row's level is free of that"));
    }
    if let Some(u) = cell.u_db {
        widget::quiet(
            ui,
            format!("noise alone moves it by {} dB (one standard uncertainty)", figure::significant(u, 2)),
        );
    }
}

/// The steps in decibels, and their sum.
fn ledger(ui: &mut Ui, cell: &PaneReading, reference: &str) {
    let palette = theme::palette(ui.ctx());
    for step in cell.ledger.iter().filter(|s| s.db.abs() >= SMALL_DB) {
        line(ui, step.step, &figure::fixed(step.db, 3), palette.ink, false);
    }
    small(ui, cell);
    let (rect, _) = ui.allocate_exact_size(egui::vec2(ui.available_width(), 5.0), egui::Sense::hover());
    ui.painter().hline(rect.x_range(), rect.center().y, egui::Stroke::new(1.0, palette.rule));
    let sum: f64 = cell.ledger.iter().map(|s| s.db).sum();
    line(ui, "level", &format!("{} dB", figure::fixed(sum, 3)), palette.ink, true);
    widget::quiet(ui, reference);
}

fn line(ui: &mut Ui, name: &str, value: &str, ink: egui::Color32, strong: bool) {
    let font = if strong { theme::heavy(ui.ctx(), theme::BODY) } else { theme::body() };
    ui.horizontal(|ui| {
        // Nothing here is pressed: lines may stand closer than targets do.
        ui.spacing_mut().interact_size.y = 16.0;
        ui.label(RichText::new(name).font(font.clone()).color(ink));
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.add_space(8.0);
            ui.label(RichText::new(value).font(font).color(ink));
        });
    });
}
