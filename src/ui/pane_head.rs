//! A pane's head: the window's shape drawn small, its name and parameters, the reading at the hairline; below, quietly,
//! its noise bandwidth and highest side lobe.

use eframe::egui::containers::menu::MenuButton;
use eframe::egui::{self, Align, Button, Layout, Rect, RichText, Ui, UiBuilder, vec2};

use super::desk::Desk;
use super::pane::figures_pass;
use super::panes::Shared;
use super::view::{Intent, Intents, View};
use super::{figure, pane_menu, theme, widget};
use crate::session::{Command, Pane};
use crate::window::Window;

/// Height of the head.
pub(super) const HEIGHT: f32 = 42.0;
/// Points of a shape drawn small.
const SHAPE: usize = 64;
/// Samples for figures of merit: enough that they no longer depend on it.
const MERIT_SAMPLES: usize = 4096;

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
    let right = reading_at_hairline(&mut first, (index, &pane.window), desk, view, shared);
    first.spacing_mut().item_spacing.x = 4.0;
    let rest = Rect::from_min_max(line.min, egui::pos2(right - 4.0, line.bottom()));
    let mut first =
        ui.new_child(UiBuilder::new().max_rect(rest).layout(Layout::left_to_right(Align::Center)).id_salt("name"));
    first.set_clip_rect(rest.expand(2.0).intersect(ui.clip_rect()));
    name(&mut first, index, pane, view, intents);
    parameters(&mut first, index, pane, intents);
    let below = Rect::from_min_max(egui::pos2(line.left(), line.bottom()), rect.max);
    let mut second =
        ui.new_child(UiBuilder::new().max_rect(below).layout(Layout::left_to_right(Align::Center)).id_salt("second"));
    merits(&mut second, pane, desk, shared);
}

fn name(ui: &mut Ui, index: usize, pane: &Pane, view: &mut View, intents: &mut Intents) {
    let font = theme::heavy(ui.ctx(), theme::HEAD);
    let button = Button::new(RichText::new(pane.window.name()).font(font)).frame_when_inactive(false);
    ui.spacing_mut().button_padding.x = 4.0;
    let (response, _) = MenuButton::from_button(button).ui(ui, |ui| pane_menu::show(ui, pane, intents));
    let response = response.accessible_name(format!("Pane {}: {}", index + 1, pane.window));
    if response.clicked() || response.has_focus() {
        view.pane = Some(pane.id);
    }
}

/// A field for each parameter; a long list (a cosine sum's coefficients) is edited as text.
fn parameters(ui: &mut Ui, index: usize, pane: &Pane, intents: &mut Intents) {
    let specs = pane.window.entry().parameters;
    if specs.len().max(pane.window.parameters().len()) > 2 {
        coefficients(ui, index, pane, intents);
        return;
    }
    for (i, (value, spec)) in pane.window.parameters().iter().zip(specs).enumerate().take(2) {
        let mut v = *value;
        let decimals = figure::decimals(spec.step * 10.0, 4);
        let field = egui::DragValue::new(&mut v)
            .range(spec.min..=spec.max)
            .speed(spec.step * 0.2)
            .max_decimals(decimals.max(2))
            .prefix(format!("{} ", spec.symbol))
            .update_while_editing(false);
        let response = ui.add(field).accessible_name(format!("Pane {}: {}", index + 1, spec.symbol));
        if response.changed() {
            let mut all = pane.window.parameters().to_vec();
            if let Some(place) = all.get_mut(i) {
                *place = v;
            }
            if let Some(window) = with_parameters(&pane.window, &all) {
                intents.push(Intent::Change(Command::SetWindow(pane.id, window)));
            }
        }
        if response.drag_stopped() || response.lost_focus() {
            intents.push(Intent::CloseStep);
        }
    }
}

/// A list of parameters as text, taken when the field is left; a list that cannot be is not taken.
fn coefficients(ui: &mut Ui, index: usize, pane: &Pane, intents: &mut Intents) {
    let key = egui::Id::unique(("coefficients", pane.id));
    let list: Vec<String> = pane.window.parameters().iter().map(f64::to_string).collect();
    let mut text = ui.data(|d| d.get_temp::<String>(key)).unwrap_or_else(|| list.join(", "));
    let field = egui::TextEdit::singleline(&mut text).desired_width(110.0).font(theme::quiet());
    let response = ui.add(field).accessible_name(format!("Pane {}: coefficients", index + 1));
    if response.changed() {
        ui.data_mut(|d| d.insert_temp(key, text.clone()));
    }
    if response.lost_focus() {
        ui.data_mut(|d| d.remove_temp::<String>(key));
        let numbers: Option<Vec<f64>> = text.split(',').map(|part| part.trim().parse().ok()).collect();
        if let Some(window) = numbers.and_then(|n| with_parameters(&pane.window, &n)) {
            intents.push(Intent::Change(Command::SetWindow(pane.id, window)));
        }
        intents.push(Intent::CloseStep);
    }
}

/// The same window with other parameters; `None` where they cannot be.
pub(super) fn with_parameters(window: &Window, parameters: &[f64]) -> Option<Window> {
    let list: Vec<String> = parameters.iter().map(f64::to_string).collect();
    Window::parse(&format!("{}={}", window.name(), list.join(","))).ok()
}

/// Writes the reading at the right end and gives the left end of what it took.
fn reading_at_hairline(
    ui: &mut Ui,
    (index, window): (usize, &Window),
    desk: &Desk,
    view: &View,
    shared: &Shared,
) -> f32 {
    let right = ui.max_rect().right();
    let (Some(hz), Some(spectra)) = (view.hairline_hz, desk.latest.spectra()) else { return right };
    let Some(place) = desk.curve_of(index, window).filter(|_| figures_pass(desk, view)) else { return right };
    let level = spectra.value_db(place, hz) + shared.offset_db;
    let text = format!("{} Hz  {} dB", figure::hertz(hz, shared.spacing_hz * 10.0), figure::fixed(level, 1));
    let mut left = right;
    ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
        left = ui.label(text).rect.left();
    });
    left
}

fn merits(ui: &mut Ui, pane: &Pane, desk: &Desk, shared: &Shared) {
    let n = desk.segment().map_or(MERIT_SAMPLES, |s| s.span.samples.clamp(16, MERIT_SAMPLES as u64) as usize);
    let merit = merit_of(ui, &pane.window, n);
    let hz = merit.0 * shared.spacing_hz;
    let text = format!("ENBW {} Hz  ·  highest side lobe {} dB", figure::significant(hz, 3), figure::fixed(merit.1, 1));
    widget::quiet(ui, text);
}

/// Noise bandwidth in bins and highest side lobe in dB, kept from frame to frame.
fn merit_of(ui: &Ui, window: &Window, n: usize) -> (f64, f64) {
    let key = egui::Id::unique(("merit", window.to_string(), n));
    if let Some(kept) = ui.data(|d| d.get_temp(key)) {
        return kept;
    }
    let merit = window.merit(n);
    let figures = (merit.enbw_bins, merit.highest_side_lobe_db);
    ui.data_mut(|d| d.insert_temp(key, figures));
    figures
}

/// The window's shape in few points, kept from frame to frame.
fn shape_of(ui: &Ui, window: &Window) -> std::sync::Arc<Vec<f32>> {
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
