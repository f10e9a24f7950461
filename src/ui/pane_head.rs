//! A pane's head: the window's shape drawn small, its name and parameters, the reading at the hairline; below, quietly,
//! its noise bandwidth and highest side lobe.

use eframe::egui::containers::menu::MenuButton;
use eframe::egui::{self, Align, Button, Layout, Rect, RichText, Ui, UiBuilder, vec2};

use super::desk::Desk;
use super::pane::figures_pass;
use super::panes::Shared;
use super::typed;
use super::view::{Intent, Intents, View};
use super::{figure, pane_menu, parameters, theme, widget};
use crate::session::{Command, Pane};
use crate::window::Window;

/// Height of the head.
pub(super) const HEIGHT: f32 = 42.0;
/// Points of a shape drawn small.
const SHAPE: usize = 64;

/// Shows the head of pane `index`.
pub(super) fn show(
    ui: &mut Ui,
    index: usize,
    pane: &Pane,
    desk: &Desk,
    view: &mut View,
    shared: &Shared,
    intents: &mut Intents,
) {
    let rect = ui.max_rect();
    let palette = theme::palette(ui.ctx());
    let (hue, _) = theme::pane_hue(palette, pane.id);
    let shape = Rect::from_min_size(rect.min + vec2(0.0, 4.0), vec2(32.0, 18.0));
    widget::glyph(ui.painter(), shape, &shape_of(ui, &pane.window), hue);
    let line = Rect::from_min_max(rect.min + vec2(38.0, 0.0), egui::pos2(rect.right(), rect.top() + 26.0));
    let mut first =
        ui.new_child(UiBuilder::new().max_rect(line).layout(Layout::left_to_right(Align::Center)).id_salt("first"));
    let right = reading_at_hairline(&mut first, (index, pane), desk, view, shared);
    first.spacing_mut().item_spacing.x = 4.0;
    let rest = Rect::from_min_max(line.min, egui::pos2(right - 4.0, line.bottom()));
    let mut first =
        ui.new_child(UiBuilder::new().max_rect(rest).layout(Layout::left_to_right(Align::Center)).id_salt("name"));
    first.set_clip_rect(rest.expand(2.0).intersect(ui.clip_rect()));
    name(&mut first, index, pane, view, intents);
    let complaint = parameters(&mut first, index, pane, view, intents);
    let below = Rect::from_min_max(egui::pos2(line.left(), line.bottom()), rect.max);
    let mut second =
        ui.new_child(UiBuilder::new().max_rect(below).layout(Layout::left_to_right(Align::Center)).id_salt("second"));
    match complaint {
        Some(complaint) => typed::complain(&mut second, &complaint),
        None => merits(&mut second, pane, desk, view, shared),
    }
}

fn name(ui: &mut Ui, index: usize, pane: &Pane, view: &mut View, intents: &mut Intents) {
    let font = theme::heavy(ui.ctx(), theme::HEAD);
    let button = Button::new(RichText::new(pane.window.name()).font(font)).frame_when_inactive(false);
    ui.spacing_mut().button_padding.x = 4.0;
    let (response, _) = MenuButton::from_button(button).ui(ui, |ui| pane_menu::show(ui, pane, intents));
    let residue = if pane.residue { ", residue" } else { "" };
    let response = response.accessible_name(format!("Pane {}: {}{residue}", index + 1, pane.window));
    if response.clicked() || response.has_focus() {
        view.pane = Some(pane.id);
    }
}

/// The fields of the window's parameters; while one is at hand, the kernel it makes is drawn over the curve. Gives what
/// is to be said of a number that was not taken as it was typed.
fn parameters(ui: &mut Ui, index: usize, pane: &Pane, view: &mut View, intents: &mut Intents) -> Option<String> {
    let key = egui::Id::unique(("parameters", pane.id));
    let edited = parameters::edit(ui, key, &format!("Pane {}", index + 1), &pane.window);
    if edited.busy && view.choosing.is_none() {
        view.preview = Some((pane.id, edited.window.clone().unwrap_or_else(|| pane.window.clone())));
    }
    if let Some(window) = edited.window {
        intents.push(Intent::Change(Command::SetWindow(pane.id, window)));
    }
    if edited.ended {
        intents.push(Intent::CloseStep);
    }
    edited.complaint
}

/// Writes the reading at the right end and gives the left end of what it took.
fn reading_at_hairline(ui: &mut Ui, (index, pane): (usize, &Pane), desk: &Desk, view: &View, shared: &Shared) -> f32 {
    let right = ui.max_rect().right();
    let Some(hz) = view.hairline_hz.filter(|_| figures_pass(desk, view, pane)) else { return right };
    let Some((place, spectra)) = desk.curve_shown(index, &pane.window, pane.residue) else { return right };
    let level = spectra.value_db(place, hz) + shared.offset_db;
    let text = format!("{} Hz  {} dB", figure::hertz(hz, shared.spacing_hz * 10.0), figure::fixed(level, 1));
    let mut left = right;
    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
        left = ui.label(text).rect.left();
    });
    left
}

/// Noise bandwidth and highest side lobe; while they are being computed the old ones are shown dimmed.
fn merits(ui: &mut Ui, pane: &Pane, desk: &Desk, view: &mut View, shared: &Shared) {
    let key = egui::Id::unique(("merits", pane.id));
    let samples = desk.segment().map_or(1, |s| s.span.samples);
    let known = view.merits.of(&pane.window, samples);
    if let Some(figures) = known {
        ui.data_mut(|d| d.insert_temp(key, figures));
    }
    if pane.residue {
        let text = RichText::new("residue").font(theme::quiet()).color(theme::palette(ui.ctx()).accent);
        ui.label(text).on_hover_text("What is left of the segment when the fitted tones are taken out");
    }
    let Some(figures) = known.or_else(|| ui.data(|d| d.get_temp(key))) else { return };
    if known.is_none() {
        ui.multiply_opacity(0.55);
    }
    let hz = figures.enbw_bins * shared.spacing_hz;
    let side_lobe = figure::fixed(figures.side_lobe_db, 1);
    widget::quiet(ui, format!("ENBW {} Hz  ·  highest side lobe {side_lobe} dB", figure::significant(hz, 3)));
}

/// The window's shape in few points, kept from frame to frame.
pub(super) fn shape_of(ui: &Ui, window: &Window) -> std::sync::Arc<Vec<f32>> {
    let key = egui::Id::unique(("shape", window.to_string()));
    if let Some(kept) = ui.data(|d| d.get_temp::<std::sync::Arc<Vec<f32>>>(key)) {
        return kept;
    }
    let mut samples: Vec<f32> = window.samples(SHAPE).iter().map(|v| *v as f32).collect();
    // A periodic window's last sample is one short of its end: close the shape with its first.
    samples.extend(samples.first().copied());
    let top = samples.iter().copied().fold(1e-9_f32, f32::max);
    let shape = std::sync::Arc::new(samples.iter().map(|v| v / top).collect::<Vec<f32>>());
    ui.data_mut(|d| d.insert_temp(key, std::sync::Arc::clone(&shape)));
    shape
}
