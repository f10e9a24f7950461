//! The recording strip: the whole capture drawn small, on which segments are marked.

use eframe::egui::{
    self, Align2, CursorIcon, EventFilter, Id, Key, Modifiers, Painter, PointerButton, Rect, Response, Role, Sense,
    Stroke, Ui, WidgetInfo, pos2, vec2,
};

use super::desk::Desk;
use super::plot::Axis;
use super::theme::{self, Palette};
use super::view::{Intent, Intents, View};
use super::{figure, ribbon, widget};
use crate::session::{Command, NamedSegment};
use crate::signal::{Extent, Span};

/// Height of the strip with its time axis.
pub(super) const HEIGHT: f32 = 92.0 + ribbon::HEIGHT;
const AXIS: f32 = 16.0;
/// How near an edge takes the pointer, in points to either side.
const GRIP: f32 = 12.0;
/// Fewest frames shown.
const LEAST_FRAMES: f64 = 16.0;

/// What columns are of.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct StripKey {
    pub(super) channel: usize,
    range: (f64, f64),
    n: usize,
}

/// The columns last drawn and what they are of.
#[derive(Debug, Default)]
pub(super) struct StripCache {
    kept: Option<(StripKey, f64, Vec<Extent>)>,
    /// Columns narrower than the overview's blocks, read from the samples in the background.
    raw: Option<(StripKey, Vec<Extent>)>,
    wanted: Option<(StripKey, Vec<f64>)>,
    asked: Option<StripKey>,
}

impl StripCache {
    /// The columns to draw: each the extent of its samples, or coarser ones while those are being read.
    fn columns(&mut self, desk: &Desk, range: (f64, f64), n: usize) -> &[Extent] {
        let key = StripKey { channel: desk.session.channel, range, n };
        let edges =
            |n: usize| -> Vec<f64> { (0..=n).map(|i| range.0 + (range.1 - range.0) * i as f64 / n as f64).collect() };
        if self.raw.as_ref().is_some_and(|raw| raw.0 == key) {
            return self.raw.as_ref().map_or(&[], |raw| &raw.1);
        }
        let progress = desk.overview.progress();
        if self.kept.as_ref().is_none_or(|kept| (kept.0, kept.1) != (key, progress)) {
            let columns = desk.overview.columns(key.channel, &edges(n)).unwrap_or_else(|| {
                if self.asked != Some(key) {
                    self.wanted = Some((key, edges(n)));
                }
                coarse(desk, key.channel, range)
            });
            self.kept = Some((key, progress, columns));
        }
        self.kept.as_ref().map_or(&[], |kept| &kept.2)
    }

    /// The columns to be read from the samples, told once.
    pub(super) fn wanted(&mut self) -> Option<(StripKey, Vec<f64>)> {
        let wanted = self.wanted.take()?;
        self.asked = Some(wanted.0);
        Some(wanted)
    }

    /// Wants columns of the first channel.
    #[cfg(test)]
    pub(super) fn want(&mut self, range: (f64, f64)) {
        self.wanted = Some((StripKey { channel: 0, range, n: 1 }, vec![range.0, range.1]));
    }

    /// Whether columns of this range were read.
    #[cfg(test)]
    pub(super) fn has(&self, range: (f64, f64)) -> bool {
        self.raw.as_ref().is_some_and(|raw| raw.0.range == range)
    }

    /// Takes in columns read from the samples.
    pub(super) fn take(&mut self, key: StripKey, columns: Vec<Extent>) {
        if self.asked == Some(key) {
            self.raw = Some((key, columns));
        }
    }
}

/// As many columns as the overview can tell apart in `range`; none where that is not one.
fn coarse(desk: &Desk, channel: usize, range: (f64, f64)) -> Vec<Extent> {
    let n = ((range.1 - range.0) / 1024.0).floor().max(1.0) as usize;
    let edges: Vec<f64> = (0..=n).map(|i| range.0 + (range.1 - range.0) * i as f64 / n as f64).collect();
    desk.overview.columns(channel, &edges).unwrap_or_default()
}

/// Shows the strip.
pub(super) fn show(ui: &mut Ui, desk: &Desk, view: &mut View, intents: &mut Intents) {
    let palette = theme::palette(ui.ctx());
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), HEIGHT), Sense::click_and_drag());
    let frames = desk.session.capture.frames as f64;
    let range = view.strip.unwrap_or((0.0, frames));
    let wave =
        Rect::from_min_max(rect.min + vec2(1.0, 1.0), pos2(rect.right() - 1.0, rect.bottom() - AXIS - ribbon::HEIGHT));
    let band = Rect::from_min_max(pos2(wave.left(), wave.bottom()), pos2(wave.right(), rect.bottom() - AXIS));
    let axis = Axis::linear(range.0, range.1.max(range.0 + 1.0), wave.left(), wave.right());
    let painter = ui.painter_at(rect);
    painter.rect_filled(rect, 3.0, palette.card);
    draw_segments(&painter, desk, &axis, wave, palette);
    draw_wave(ui, &painter, desk, view, &axis, wave);
    name_segments(&painter, desk, &axis, wave, palette);
    draw_time(&painter, desk.session.sample_rate_hz(), &axis, rect, palette);
    painter.rect_stroke(rect, 3.0, Stroke::new(1.0, palette.rule), egui::StrokeKind::Inside);
    describe(&response, desk, range);
    steer(ui, &response, desk, view, &axis, intents);
    let said = ribbon::show(ui, desk, (&axis, band), view, intents);
    if let Some(segment) = desk.segment() {
        for end in [false, true] {
            edge(ui, desk, segment, end, (&axis, wave), view, intents);
        }
    }
    if let Some(said) = &said {
        ribbon::call_out(ui, wave, said);
    }
}

fn describe(response: &Response, desk: &Desk, range: (f64, f64)) {
    let rate = desk.session.sample_rate_hz();
    let text = format!(
        "Recording strip, {} to {} s of {} s",
        figure::seconds(range.0 / rate, rate),
        figure::seconds(range.1 / rate, rate),
        figure::seconds(desk.session.capture.frames as f64 / rate, rate)
    );
    response.widget_info(|| WidgetInfo::labeled(Role::Figure, true, &text));
}

fn draw_wave(ui: &Ui, painter: &Painter, desk: &Desk, view: &mut View, axis: &Axis, wave: Rect) {
    let palette = theme::palette(ui.ctx());
    if !desk.overview.is_complete() {
        let text = format!("reading the capture, {:.0} %", 100.0 * desk.overview.progress());
        let at = wave.right_top() + vec2(-6.0, 2.0);
        widget::write(painter, at, Align2::RIGHT_TOP, &text, theme::quiet(), palette.quiet);
    }
    let ppp = ui.ctx().pixels_per_point();
    let n = ((wave.width() * ppp).round().max(1.0) as usize).min(8192);
    let columns = view.strip_cache.columns(desk, (axis.lo, axis.hi), n);
    let full = columns.iter().filter(|c| !c.is_empty());
    let top = f64::from(full.fold(1e-9_f32, |m, c| m.max(c.max.abs()).max(c.min.abs()))) * 1.05;
    let height = Axis::linear(-top, top, wave.bottom(), wave.top());
    let width = wave.width() / columns.len().max(1) as f32;
    let colour = palette.quiet.gamma_multiply(0.75);
    let mut mesh = egui::Mesh::default();
    let mut last: Option<(f32, f32)> = None;
    for (i, column) in columns.iter().enumerate().filter(|(_, c)| !c.is_empty()) {
        let x = wave.left() + i as f32 * width;
        let (y0, y1) = (height.at(f64::from(column.max)), height.at(f64::from(column.min)));
        // Neighbours meet, and nothing is thinner than a point.
        let (mut y0, mut y1) = if y1 - y0 < 1.0 { (0.5 * (y0 + y1) - 0.5, 0.5 * (y0 + y1) + 0.5) } else { (y0, y1) };
        if let Some((a, b)) = last {
            (y0, y1) = (y0.min(b), y1.max(a));
        }
        last = Some((y0, y1));
        mesh.add_colored_rect(Rect::from_min_max(pos2(x, y0), pos2(x + width, y1)), colour);
    }
    painter.add(egui::Shape::mesh(mesh));
}

fn draw_segments(painter: &Painter, desk: &Desk, axis: &Axis, wave: Rect, palette: &Palette) {
    for segment in &desk.session.segments {
        let current = segment.id == desk.session.current;
        let (x0, x1) = (axis.at(segment.span.start as f64), axis.at(segment.span.end() as f64));
        let band = Rect::from_x_y_ranges(x0..=x1, wave.y_range()).intersect(wave);
        if !band.is_positive() {
            continue;
        }
        let fill = if current { palette.accent.gamma_multiply(0.22) } else { palette.quiet.gamma_multiply(0.12) };
        painter.rect_filled(band, 0.0, fill);
        if !current {
            let stroke = Stroke::new(1.0, palette.quiet);
            painter.vline(x0, wave.y_range(), stroke);
            painter.vline(x1, wave.y_range(), stroke);
        }
    }
}

/// Names stand over the drawing, on a ground of their own.
fn name_segments(painter: &Painter, desk: &Desk, axis: &Axis, wave: Rect, palette: &Palette) {
    for segment in &desk.session.segments {
        let (x0, x1) = (axis.at(segment.span.start as f64), axis.at(segment.span.end() as f64));
        let band = Rect::from_x_y_ranges(x0..=x1, wave.y_range()).intersect(wave);
        let size = widget::text_size(painter, &segment.name, theme::quiet());
        if band.width() < size.x + 16.0 {
            continue;
        }
        let current = segment.id == desk.session.current;
        let ink = if current { palette.ink } else { palette.quiet };
        let rect = Rect::from_min_size(pos2(band.left() + 6.0, wave.top() + 2.0), size);
        painter.rect_filled(rect.expand2(vec2(3.0, 0.0)), 2.0, palette.card.gamma_multiply(0.8));
        widget::write(painter, rect.min, Align2::LEFT_TOP, &segment.name, theme::quiet(), ink);
    }
}

fn draw_time(painter: &Painter, rate_hz: f64, axis: &Axis, rect: Rect, palette: &Palette) {
    let seconds = Axis::linear(axis.lo / rate_hz, axis.hi / rate_hz, axis.from, axis.to);
    let y = rect.bottom() - AXIS;
    painter.hline(rect.x_range(), y, Stroke::new(1.0, palette.rule));
    for tick in seconds.ticks(80.0) {
        let x = seconds.at(tick.value);
        painter.vline(x, y..=y + 3.0, Stroke::new(1.0, palette.quiet));
        let text = format!("{} s", tick.label.unwrap_or_default());
        let half = 0.5 * widget::text_size(painter, &text, theme::quiet()).x + 4.0;
        let x = x.clamp(rect.left() + half, rect.right() - half);
        widget::write(painter, pos2(x, y + 2.0), Align2::CENTER_TOP, &text, theme::quiet(), palette.quiet);
    }
}

/// Wheel zooms about the pointer, dragging marks, dragging with another button or Shift moves the strip.
fn steer(ui: &Ui, response: &Response, desk: &Desk, view: &mut View, axis: &Axis, intents: &mut Intents) {
    let frames = desk.session.capture.frames as f64;
    let pointer = response.hover_pos().or(response.interact_pointer_pos());
    // Also over what lies on the strip: handles, and the ribbon.
    if let Some(at) = ui.input(|i| i.pointer.hover_pos()).filter(|_| ui.rect_contains_pointer(response.rect)) {
        let (scroll, zoom) = ui.input(|i| (i.smooth_scroll_delta(), i.zoom_delta()));
        let wheel = if scroll.y == 0.0 { 1.0 } else { f64::from(-scroll.y / 200.0).exp() } / f64::from(zoom);
        if (wheel - 1.0).abs() > 1e-6 {
            view.strip = held_strip(axis.zoomed(wheel, axis.value(at.x)), frames);
        } else if scroll.x != 0.0 {
            view.strip = held_strip(axis.panned(scroll.x), frames);
        }
    }
    let shift = ui.input(|i| i.modifiers.shift);
    let other = response.dragged_by(PointerButton::Middle) || response.dragged_by(PointerButton::Secondary);
    if other || (shift && response.dragged_by(PointerButton::Primary) && view.mark_from.is_none()) {
        view.strip = held_strip(axis.panned(response.drag_delta().x), frames);
        return;
    }
    if response.double_clicked() {
        view.strip = None;
    }
    if response.drag_started_by(PointerButton::Primary) && !shift {
        view.mark_from = ui.input(|i| i.pointer.press_origin()).map(|p| axis.value(p.x));
    }
    if let (Some(from), Some(at), true) = (view.mark_from, pointer, response.dragged_by(PointerButton::Primary)) {
        view.marking = true;
        mark(desk, from, axis.value(at.x), intents);
    }
    if response.drag_stopped() && view.mark_from.take().is_some() {
        finish(view, intents);
    }
}

fn mark(desk: &Desk, a: f64, b: f64, intents: &mut Intents) {
    let frames = desk.session.capture.frames as f64;
    let (lo, hi) = (a.min(b).clamp(0.0, frames).round() as u64, a.max(b).clamp(0.0, frames).round() as u64);
    let span = Span::from_range(lo..hi.max(lo + 1));
    intents.push(Intent::Change(Command::MoveSegment(desk.session.current, span)));
}

fn finish(view: &mut View, intents: &mut Intents) {
    view.marking = false;
    view.refit_level = true;
    intents.push(Intent::CloseStep);
}

/// A range of frames inside the capture and at least [`LEAST_FRAMES`] wide; `None` shows all.
pub(super) fn held_strip((lo, hi): (f64, f64), frames: f64) -> Option<(f64, f64)> {
    let width = (hi - lo).max(LEAST_FRAMES);
    if !(lo.is_finite() && hi.is_finite()) || width >= frames {
        return None;
    }
    let lo = (0.5 * (lo + hi - width)).clamp(0.0, frames - width);
    Some((lo, lo + width))
}

/// One edge of the current segment: a slider under pointer and keys.
fn edge(
    ui: &mut Ui,
    desk: &Desk,
    segment: &NamedSegment,
    end: bool,
    (axis, wave): (&Axis, Rect),
    view: &mut View,
    intents: &mut Intents,
) {
    let palette = theme::palette(ui.ctx());
    let at = if end { segment.span.end() } else { segment.span.start };
    let x = axis.at(at as f64);
    let visible = x >= wave.left() - 1.0 && x <= wave.right() + 1.0;
    let middle = 0.5 * (axis.at(segment.span.start as f64) + axis.at(segment.span.end() as f64));
    // Two edges close together share the room between them.
    let (left, right) = if end { ((x - GRIP).max(middle), x + GRIP) } else { (x - GRIP, (x + GRIP).min(middle)) };
    let grip = Rect::from_x_y_ranges(left..=right.max(left + 2.0), wave.y_range());
    let name = if end { "Segment end" } else { "Segment start" };
    let response = ui
        .interact(grip.intersect(wave.expand(GRIP)), Id::unique(("segment edge", end)), Sense::click_and_drag())
        .on_hover_cursor(CursorIcon::ResizeHorizontal);
    let rate = desk.session.sample_rate_hz();
    response.widget_info(|| WidgetInfo::slider(true, at as f64 / rate, name));
    if visible {
        let lit = response.hovered() || response.dragged() || response.has_focus();
        let x = ui.painter().round_to_pixel_center(x.clamp(wave.left() + 1.0, wave.right() - 1.0));
        let painter = ui.painter_at(wave);
        painter.vline(x, wave.y_range(), Stroke::new(if lit { 3.0 } else { 2.0 }, palette.accent));
        let tab = Rect::from_center_size(pos2(x, wave.bottom() - 10.0), vec2(7.0, 16.0));
        painter.rect_filled(tab, 2.0, palette.accent);
        if response.has_focus() {
            painter.rect_stroke(tab.expand(3.0), 3.0, Stroke::new(1.5, palette.ink), egui::StrokeKind::Outside);
        }
    }
    if response.clicked() || response.drag_started() {
        response.request_focus();
    }
    if response.dragged_by(PointerButton::Primary)
        && let Some(pointer) = response.interact_pointer_pos()
    {
        view.marking = true;
        move_edge(desk, segment, end, axis.value(pointer.x), intents);
    }
    if response.drag_stopped() {
        finish(view, intents);
    }
    if response.has_focus() {
        edge_keys(ui, &response, desk, segment, end, view, intents);
    }
}

/// Arrow keys move an edge by a sample, with Shift by ten, with Ctrl by a hundredth of what is shown.
fn edge_keys(
    ui: &Ui,
    response: &Response,
    desk: &Desk,
    segment: &NamedSegment,
    end: bool,
    view: &mut View,
    intents: &mut Intents,
) {
    let filter = EventFilter { horizontal_arrows: true, ..EventFilter::default() };
    ui.memory_mut(|m| m.set_focus_lock_filter(response.id, filter));
    let frames = desk.session.capture.frames as f64;
    let shown = view.strip.map_or(frames, |(a, b)| b - a);
    let at = if end { segment.span.end() } else { segment.span.start } as f64;
    let mut moved = 0.0;
    ui.input_mut(|input| {
        let bounds =
            if end { (segment.span.start as f64 + 1.0, frames) } else { (0.0, segment.span.end() as f64 - 1.0) };
        for (modifiers, step) in
            [(Modifiers::COMMAND, (shown / 100.0).round().max(100.0)), (Modifiers::SHIFT, 10.0), (Modifiers::NONE, 1.0)]
        {
            moved -= step * input.count_and_consume_key(modifiers, Key::ArrowLeft) as f64;
            moved += step * input.count_and_consume_key(modifiers, Key::ArrowRight) as f64;
        }
        if input.consume_key(Modifiers::NONE, Key::Home) {
            moved = bounds.0 - at;
        }
        if input.consume_key(Modifiers::NONE, Key::End) {
            moved = bounds.1 - at;
        }
    });
    if moved != 0.0 {
        view.refit_level = true;
        move_edge(desk, segment, end, at + moved, intents);
    }
}

fn move_edge(desk: &Desk, segment: &NamedSegment, end: bool, to: f64, intents: &mut Intents) {
    let frames = desk.session.capture.frames;
    let to = to.clamp(0.0, frames as f64).round() as u64;
    let range = if end {
        segment.span.start..to.max(segment.span.start + 1)
    } else {
        to.min(segment.span.end().saturating_sub(1))..segment.span.end()
    };
    let span = Span::from_range(range);
    if span != segment.span {
        intents.push(Intent::Change(Command::MoveSegment(segment.id, span)));
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_strip_stays_in_the_capture() {
        assert_eq!(held_strip((-50.0, 150.0), 1000.0), Some((0.0, 200.0)));
        assert_eq!(held_strip((500.0, 501.0), 1000.0), Some((492.5, 508.5)));
        assert_eq!(held_strip((-5.0, 2000.0), 1000.0), None);
        assert_eq!(held_strip((f64::NAN, 1.0), 1000.0), None);
    }
}
