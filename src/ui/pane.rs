//! One pane: its head, its curve, its marks, its part of the shared axes and hairline.

use std::sync::Arc;

use eframe::egui::{
    self, Align2, EventFilter, Key, Modifiers, Painter, PointerButton, Rect, Response, Role, Sense, Stroke, Ui,
    UiBuilder, WidgetInfo, pos2, vec2,
};

use super::desk::Desk;
use super::panes::Shared;
use super::plot::{Axis, Trace, draw_trace};
use super::theme::{self, Palette};
use super::view::{Intent, Intents, View, held_range};
use super::{figure, overlay, pane_head, widget};
use crate::reading::{PaneReading, ReadingState, Tone};
use crate::session::{Command, Pane, ViewAxes};
use crate::spectrum::Spectra;
use crate::window::Window;

/// Room for level labels.
const LEFT: f32 = 40.0;
/// Room for frequency labels.
const BOTTOM: f32 = 18.0;
/// Room for what levels refer to.
const REFERENCE: f32 = 20.0;
/// A pane so high has that room.
const ROOMY: f32 = 170.0;
/// How near a mark takes a click, in points.
const NEAR: f32 = 12.0;

/// Shows pane `index` of the session in `rect`.
pub(super) fn show(
    ui: &mut Ui,
    rect: Rect,
    index: usize,
    desk: &Desk,
    view: &mut View,
    shared: &Shared,
    intents: &mut Intents,
) {
    let Some(pane) = desk.session.panes.get(index) else { return };
    let palette = theme::palette(ui.ctx());
    ui.painter().rect(rect, 4.0, palette.card, Stroke::new(1.0, palette.rule), egui::StrokeKind::Inside);
    let inner = rect.shrink2(vec2(8.0, 6.0));
    let head = Rect::from_min_size(inner.min, vec2(inner.width(), pane_head::HEIGHT));
    // A low pane has no room to name the reference; the line over the tone table names it as well.
    let names_reference = rect.height() >= ROOMY;
    let above = if names_reference { REFERENCE } else { 6.0 };
    let area = Rect::from_min_max(
        pos2(inner.left() + LEFT, head.bottom() + above),
        pos2(inner.right() - 2.0, inner.bottom() - BOTTOM),
    );
    let curve = desk.curve_shown(index, &pane.window, pane.residue);
    let mut head_ui = ui.new_child(UiBuilder::new().max_rect(head).id_salt(("pane head", pane.id)));
    pane_head::show(&mut head_ui, index, pane, desk, view, shared, intents);
    let plot = Plot {
        index,
        read: desk.reading_of(index, &pane.window),
        pane,
        area,
        frequency: shared.frequency_axis(area.left(), area.right()),
        level: Axis::linear(shared.level.0, shared.level.1, area.bottom(), area.top()),
        shared,
        palette,
        names_reference,
    };
    let response = ui.interact(area, egui::Id::unique(("pane plot", pane.id)), Sense::click_and_drag());
    plot.describe(&response, desk, view);
    plot.steer(ui, &response, desk, view, intents);
    plot.draw(ui, curve, desk, view);
    if response.has_focus() {
        let ring = Stroke::new(1.5, palette.accent);
        ui.painter().rect_stroke(rect, 4.0, ring, egui::StrokeKind::Inside);
    }
}

/// How much of its ink a curve keeps that is not of what was asked for.
pub(super) const STALE: f32 = 0.4;

/// Whether the curve that a pane shows may pass for the one asked for: it is, or it follows an edge being dragged. A
/// residue does not follow: it comes with the Reading.
pub(super) fn figures_pass(desk: &Desk, view: &View, pane: &Pane) -> bool {
    if pane.residue {
        return desk.part_is_current(desk.parts.residue.as_ref().map(|r| r.0));
    }
    desk.latest.curves_are_current() || view.marking
}

/// One pane's plot in a frame.
pub(super) struct Plot<'a> {
    pub(super) index: usize,
    /// Its place in the Reading at hand, if it has one there.
    pub(super) read: Option<usize>,
    pub(super) pane: &'a Pane,
    pub(super) area: Rect,
    pub(super) frequency: Axis,
    pub(super) level: Axis,
    pub(super) shared: &'a Shared,
    pub(super) palette: &'static Palette,
    pub(super) names_reference: bool,
}

impl Plot<'_> {
    /// What the plot shows, in words.
    fn describe(&self, response: &Response, desk: &Desk, view: &View) {
        let (lo, hi) = (self.frequency.lo, self.frequency.hi);
        let spacing = self.shared.spacing_hz;
        let hairline =
            view.hairline_hz.map_or(String::new(), |hz| format!(", hairline at {} Hz", figure::hertz(hz, spacing)));
        let n_clear = desk.reading().map_or(0, |r| {
            r.tones.iter().filter(|t| self.reading_of(t).is_some_and(|x| x.state == ReadingState::Clear)).count()
        });
        let kernel = view.preview.as_ref().filter(|(id, _)| *id == self.pane.id).zip(overlay::centre(desk));
        let kernel = kernel.map_or(String::new(), |((_, window), tone)| {
            format!(", {} drawn over it", kernel_title(window, tone.frequency_hz))
        });
        let residue = if self.pane.residue { ", residue" } else { "" };
        let skirts = self.skirts_in_words(desk, view);
        let text = format!(
            "Spectrum {}, {}{residue}: {} to {} Hz, {} tones clear{hairline}{kernel}{skirts}",
            self.index + 1,
            self.pane.window,
            figure::hertz(lo, spacing),
            figure::hertz(hi, spacing),
            n_clear,
        );
        response.widget_info(|| WidgetInfo::labeled(Role::Figure, true, &text));
    }

    /// Columns a pixel wide.
    fn n_columns(&self, ui: &Ui) -> usize {
        ((self.area.width() * ui.ctx().pixels_per_point()).round().max(1.0) as usize).min(4096)
    }

    pub(super) fn reading_of<'t>(&self, tone: &'t Tone) -> Option<&'t PaneReading> {
        tone.readings.get(self.read?)
    }

    fn draw(&self, ui: &Ui, curve: Option<(usize, &Arc<Spectra>)>, desk: &Desk, view: &mut View) {
        let whole = ui.painter().clone();
        self.draw_grid(&whole, desk);
        let painter = whole.with_clip_rect(self.area.intersect(whole.clip_rect()));
        let (hue, dashed) = theme::pane_hue(self.palette, self.pane.id);
        let n_columns = self.n_columns(ui);
        if view.skirts && !self.pane.residue {
            self.draw_skirts(&painter, n_columns, desk, view);
        }
        if let Some(reading) = desk.reading() {
            self.draw_floor(&painter, reading);
        }
        if view.smallest {
            self.draw_smallest(&painter, desk);
        }
        if let Some((place, spectra)) = curve {
            let n = n_columns;
            let columns = view.curves.columns(spectra, place, &self.frequency, n);
            let hue = if figures_pass(desk, view, self.pane) { hue } else { hue.gamma_multiply(STALE) };
            let trace = Trace { colour: hue, dashed, width: 1.25, offset: self.shared.offset_db };
            draw_trace(&painter, &columns, (self.area.left(), self.area.width() / n as f32), &self.level, trace);
        }
        let title = self.draw_kernel(ui, &painter, desk, view);
        self.draw_hairline(&painter, curve, desk, view);
        if let Some(reading) = desk.reading() {
            let mut taken: Vec<Rect> = title.iter().map(|t| t.0).collect();
            if view.skirts && !self.pane.residue {
                self.draw_skirt_peaks(&painter, reading, desk);
                taken.extend(self.name_skirt(&painter, reading, desk, view));
            }
            self.draw_marks(&painter, reading, desk, &taken);
        }
        if let Some((rect, text)) = title {
            painter.rect_filled(rect.expand2(vec2(3.0, 1.0)), 2.0, self.palette.card);
            widget::write(&painter, rect.min, Align2::LEFT_TOP, &text, theme::quiet(), self.palette.ink);
        }
    }

    /// Draws the axes; over the level axis stands what its levels refer to.
    fn draw_grid(&self, painter: &Painter, desk: &Desk) {
        let rule = Stroke::new(1.0, self.palette.rule.gamma_multiply(0.7));
        let area = self.area;
        for tick in self.level.level_ticks(24.0) {
            let y = painter.round_to_pixel_center(self.level.at(tick.value));
            painter.hline(area.x_range(), y, rule);
            let text = tick.label.unwrap_or_default();
            let at = pos2(area.left() - 5.0, y);
            widget::write(painter, at, Align2::RIGHT_CENTER, &text, theme::quiet(), self.palette.quiet);
        }
        let unit = "Hz";
        let unit_width = widget::text_size(painter, unit, theme::quiet()).x + 8.0;
        let mut free_from = area.left() - LEFT;
        for tick in self.frequency.ticks(50.0) {
            let x = painter.round_to_pixel_center(self.frequency.at(tick.value));
            painter.vline(x, area.y_range(), rule);
            let Some(text) = tick.label else { continue };
            let half = 0.5 * widget::text_size(painter, &text, theme::quiet()).x;
            if x - half > free_from && x + half < area.right() - unit_width {
                let at = pos2(x, area.bottom() + 3.0);
                widget::write(painter, at, Align2::CENTER_TOP, &text, theme::quiet(), self.palette.quiet);
                free_from = x + half + 8.0;
            }
        }
        let at = pos2(area.right(), area.bottom() + 3.0);
        widget::write(painter, at, Align2::RIGHT_TOP, unit, theme::quiet(), self.palette.quiet);
        if self.names_reference {
            let at = pos2(area.left() - LEFT, area.top() - 5.0);
            let reference = desk.shown_scale().reference_label();
            widget::write(painter, at, Align2::LEFT_BOTTOM, &reference, theme::quiet(), self.palette.quiet);
        }
    }

    /// The kernel of the window being chosen for this pane, over the tone picked; gives its title, to be written
    /// over the marks, and the title's place.
    fn draw_kernel(&self, ui: &Ui, painter: &Painter, desk: &Desk, view: &mut View) -> Option<(Rect, String)> {
        let (_, window) = view.preview.as_ref().filter(|(id, _)| *id == self.pane.id)?;
        let (tone, segment) = (overlay::centre(desk)?, desk.segment()?);
        let n = self.n_columns(ui);
        let place = (tone.frequency_hz, self.shared.spacing_hz);
        let columns = view.kernels.columns(window, segment.span.samples, place, &self.frequency, n);
        let trace = Trace { colour: self.palette.ink, dashed: false, width: 1.5, offset: tone.level_db };
        draw_trace(painter, &columns, (self.area.left(), self.area.width() / n as f32), &self.level, trace);
        let text = kernel_title(window, tone.frequency_hz);
        let size = widget::text_size(painter, &text, theme::quiet());
        let rect = Rect::from_min_size(pos2(self.area.right() - size.x - 4.0, self.area.top() + 2.0), size);
        Some((rect, text))
    }

    fn draw_hairline(&self, painter: &Painter, curve: Option<(usize, &Arc<Spectra>)>, desk: &Desk, view: &View) {
        let Some(hz) = view.hairline_hz.filter(|hz| (self.frequency.lo..=self.frequency.hi).contains(hz)) else {
            return;
        };
        let x = painter.round_to_pixel_center(self.frequency.at(hz));
        painter.vline(x, self.area.y_range(), Stroke::new(1.0, self.palette.accent));
        if let Some((place, spectra)) = curve.filter(|_| figures_pass(desk, view, self.pane)) {
            let y = self.level.at(spectra.value_db(place, hz) + self.shared.offset_db);
            painter.hline(x - 4.0..=x + 4.0, y, Stroke::new(2.0, self.palette.ink));
        }
    }

    /// Pointer and keys.
    fn steer(&self, ui: &Ui, response: &Response, desk: &Desk, view: &mut View, intents: &mut Intents) {
        if let Some(at) = response.hover_pos() {
            let hz = self.frequency.value(at.x).clamp(0.0, self.shared.nyquist_hz);
            if view.hairline_hz != Some(hz) && ui.input(|i| i.pointer.delta() != egui::Vec2::ZERO) {
                view.hairline_hz = Some(hz);
            }
            let (scroll, zoom) = ui.input(|i| (i.smooth_scroll_delta(), i.zoom_delta()));
            let wheel = f64::from(-scroll.y / 200.0).exp() / f64::from(zoom);
            if (wheel - 1.0).abs() > 1e-6 {
                self.show_range(self.frequency.zoomed(wheel, hz), desk, intents);
            } else if scroll.x != 0.0 {
                self.show_range(self.frequency.panned(scroll.x), desk, intents);
            }
        }
        if response.dragged_by(PointerButton::Primary) && response.drag_delta().x != 0.0 {
            self.show_range(self.frequency.panned(response.drag_delta().x), desk, intents);
        }
        if response.clicked() || response.drag_started() {
            response.request_focus();
        }
        if response.clicked() || response.has_focus() {
            view.pane = Some(self.pane.id);
        }
        if response.double_clicked() {
            intents.push(Intent::Change(Command::SetAxes(ViewAxes { frequency_hz: None, ..desk.session.axes })));
        } else if response.clicked()
            && let Some(at) = response.interact_pointer_pos()
        {
            self.pick(at, desk, view, intents);
        }
        if response.has_focus() {
            self.keys(ui, response, view);
        }
    }

    fn show_range(&self, range: (f64, f64), desk: &Desk, intents: &mut Intents) {
        let frequency_hz = held_range(range, 4.0 * self.shared.spacing_hz, self.shared.nyquist_hz);
        let axes = ViewAxes { frequency_hz, ..desk.session.axes };
        if axes != desk.session.axes {
            intents.push(Intent::Change(Command::SetAxes(axes)));
        }
    }

    /// Picks the tone whose mark is nearest to a click, if it is near.
    fn pick(&self, at: egui::Pos2, desk: &Desk, view: &mut View, intents: &mut Intents) {
        let Some(reading) = desk.reading() else { return };
        let near = reading
            .tones
            .iter()
            .filter_map(|t| Some((t, self.mark(t)?.1.distance(at))))
            .filter(|(_, d)| *d <= NEAR)
            .min_by(|a, b| a.1.total_cmp(&b.1));
        if let Some((tone, _)) = near {
            intents.push(Intent::Change(Command::Pick(Some(tone.frequency_hz))));
            view.card_pane = self.read;
            view.reveal_pick = true;
        }
    }

    /// Arrow keys move the hairline a line, with Shift ten.
    fn keys(&self, ui: &Ui, response: &Response, view: &mut View) {
        let filter = EventFilter { horizontal_arrows: true, ..EventFilter::default() };
        ui.memory_mut(|m| m.set_focus_lock_filter(response.id, filter));
        let mut lines = 0.0;
        ui.input_mut(|input| {
            for (modifiers, step) in [(Modifiers::SHIFT, 10.0), (Modifiers::NONE, 1.0)] {
                lines -= step * input.count_and_consume_key(modifiers, Key::ArrowLeft) as f64;
                lines += step * input.count_and_consume_key(modifiers, Key::ArrowRight) as f64;
            }
        });
        if lines != 0.0 {
            let spacing = self.shared.spacing_hz;
            let from = view.hairline_hz.unwrap_or(0.5 * (self.frequency.lo + self.frequency.hi));
            let line = (from / spacing).round() + lines;
            view.hairline_hz = Some((line * spacing).clamp(0.0, self.shared.nyquist_hz));
        }
    }
}

/// Whether a tone is the one picked: its frequency moves a little as windows and segments change.
pub(super) fn is_picked(tone_hz: f64, picked_hz: Option<f64>, spacing_hz: f64) -> bool {
    picked_hz.is_some_and(|hz| (hz - tone_hz).abs() <= spacing_hz)
}

fn kernel_title(window: &Window, hz: f64) -> String {
    format!("kernel of {window} at {} Hz", figure::fixed(hz, 2))
}
