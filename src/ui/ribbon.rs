//! The steadiness ribbon under the recording strip: how steady each stretch is, and the stretches suggested.
//!
//! A steady stretch is a bar with ends; a column stands for a block that changes, the higher the more; dots are rest; a
//! tick from top to bottom is a place where what is before and after differ. Some hundred blocks whatever the capture,
//! so that they are drawn anew in every frame.

use eframe::egui::{
    Align2, Button, Color32, EventFilter, Id, Key, Mesh, Modifiers, Painter, Rect, Response, Role, Sense, Shape,
    Stroke, Ui, WidgetInfo, pos2, vec2,
};

use super::desk::Desk;
use super::plot::Axis;
use super::theme::{self, Palette};
use super::view::{Intent, Intents, View};
use super::{figure, widget};
use crate::session::Command;
use crate::signal::Span;
use crate::tone::{Steadiness, SteadyBlock};

/// Height of the band.
pub(super) const HEIGHT: f32 = 18.0;
/// Stretches that are suggested: the longest.
pub(super) const SUGGESTED: usize = 8;
/// How far a suggestion takes the pointer above the band, so that it can be hit.
const REACH: f32 = 6.0;
/// A change so many doublings over what chance explains fills the band.
const FULL: f64 = 4.0;

/// Where something is said, in points, and what.
pub(super) type Said = Option<(f32, String)>;

/// Shows the band along `axis` in `rect`; gives what is to be said of the place pointed at.
pub(super) fn show(
    ui: &mut Ui,
    desk: &Desk,
    (axis, rect): (&Axis, Rect),
    view: &mut View,
    intents: &mut Intents,
) -> Said {
    let palette = theme::palette(ui.ctx());
    let painter = ui.painter_at(rect);
    painter.hline(rect.x_range(), rect.top(), Stroke::new(1.0, palette.rule));
    let Some(found) = desk.steady.found.as_deref() else {
        waiting(ui, desk, rect, intents);
        return None;
    };
    draw(&painter, desk, found, axis, rect, palette);
    let band = ui.interact(rect, Id::unique("steadiness ribbon"), Sense::click());
    let mut said = steer(ui, &band, desk, found, axis, view, intents);
    describe(&band, desk, found, view);
    for (rank, span) in found.stretches.iter().take(SUGGESTED).enumerate() {
        let over = suggestion(ui, desk, (rank, *span), (axis, rect), view, intents);
        said = over.or(said);
    }
    if band.has_focus() {
        painter.rect_stroke(rect.shrink(1.0), 2.0, Stroke::new(1.5, palette.accent), eframe::egui::StrokeKind::Inside);
    }
    said
}

/// While it is being read, how far that is, and how to call it off; else how to have it read.
fn waiting(ui: &mut Ui, desk: &Desk, rect: Rect, intents: &mut Intents) {
    let palette = theme::palette(ui.ctx());
    let reading = desk.steady.is_reading();
    let text = if reading {
        format!("reading how steady the capture is, {:.0} %", 100.0 * desk.steady.watch.progress())
    } else {
        "how steady the capture is has not been read".to_owned()
    };
    let at = pos2(rect.left() + 6.0, rect.center().y);
    let written = widget::write(&ui.painter_at(rect), at, Align2::LEFT_CENTER, &text, theme::quiet(), palette.quiet);
    let (word, name) =
        if reading { ("Cancel", "Cancel reading steadiness") } else { ("Read it", "Read how steady the capture is") };
    let place = Rect::from_min_max(
        pos2(written.right() + 8.0, rect.top() - REACH),
        pos2(written.right() + 64.0, rect.bottom() - 1.0),
    );
    if ui.put(place, Button::new(word).small()).accessible_name(name).clicked() {
        if reading {
            desk.steady.watch.cancel();
        } else {
            intents.push(Intent::ReadSteadiness);
        }
    }
    if reading {
        ui.ctx().request_repaint_after(std::time::Duration::from_millis(200));
    }
}

fn draw(painter: &Painter, desk: &Desk, found: &Steadiness, axis: &Axis, rect: Rect, palette: &Palette) {
    let marked = desk.segment().map(|s| s.span);
    for span in &found.stretches {
        draw_stretch(painter, desk, *span, marked == Some(*span), (axis, rect), palette);
    }
    let base = rect.bottom() - 1.0;
    let mut mesh = Mesh::default();
    let mut dotted_from = f32::NEG_INFINITY;
    for block in &found.blocks {
        let (x0, x1) = (axis.at(block.span.start as f64), axis.at(block.span.end() as f64));
        if x1 < rect.left() || x0 > rect.right() {
            continue;
        }
        if block.is_quiet {
            dotted_from = dots(&mut mesh, (x0.max(dotted_from), x1.min(rect.right())), base, palette.quiet);
            continue;
        }
        let (height, colour) = if block.change > 1.0 {
            (column_height(block.change) * (rect.height() - 3.0), palette.ink.gamma_multiply(0.72))
        } else if found.stretch_at(block.span.start).is_some() {
            continue;
        } else {
            (1.5, palette.quiet)
        };
        // Neighbours stay apart where there is room.
        let gap = if x1 - x0 > 3.0 { 1.0 } else { 0.0 };
        mesh.add_colored_rect(Rect::from_min_max(pos2(x0, base - height), pos2(x1 - gap, base)), colour);
    }
    painter.add(Shape::mesh(mesh));
    for change in &found.changes {
        draw_change(painter, axis.at(change.sample as f64), rect, palette);
    }
    if found.stretches.is_empty() {
        let text = if found.blocks.is_empty() { "too short to tell how steady it is" } else { "no steady stretch" };
        let size = widget::text_size(painter, text, theme::quiet());
        let ground = Rect::from_min_size(pos2(rect.left() + 4.0, rect.top() + 1.0), vec2(size.x + 8.0, HEIGHT - 2.0));
        painter.rect_filled(ground, 2.0, palette.card);
        let at = pos2(rect.left() + 8.0, rect.center().y);
        widget::write(painter, at, Align2::LEFT_CENTER, text, theme::quiet(), palette.quiet);
    }
}

/// The height of a column, as a part of the band's.
fn column_height(change: f64) -> f32 {
    (0.25 + 0.75 * (change.log2() / FULL).clamp(0.0, 1.0)) as f32
}

/// Dots from `x0` to `x1`; gives where the next may stand.
fn dots(mesh: &mut Mesh, (x0, x1): (f32, f32), base: f32, colour: Color32) -> f32 {
    const STEP: f32 = 6.0;
    let mut x = (x0 / STEP).ceil() * STEP;
    while x < x1 {
        mesh.add_colored_rect(Rect::from_min_size(pos2(x, base - 3.0), vec2(2.0, 2.0)), colour);
        x += STEP;
    }
    x
}

/// A bar with ends, and its length where there is room.
fn draw_stretch(
    painter: &Painter,
    desk: &Desk,
    span: Span,
    marked: bool,
    (axis, rect): (&Axis, Rect),
    palette: &Palette,
) {
    let (x0, x1) = (axis.at(span.start as f64), axis.at(span.end() as f64));
    let bar = Rect::from_x_y_ranges(x0..=x1, rect.top() + 1.0..=rect.bottom() - 1.0);
    let seen = bar.intersect(rect);
    if !seen.is_positive() {
        return;
    }
    painter.rect_filled(bar, 0.0, palette.accent.gamma_multiply(if marked { 0.30 } else { 0.14 }));
    let foot = Rect::from_min_max(pos2(x0, bar.bottom() - 3.0), bar.max);
    painter.rect_filled(foot, 0.0, palette.accent);
    for x in [x0, x1 - 2.0] {
        painter.rect_filled(Rect::from_min_max(pos2(x, bar.top()), pos2(x + 2.0, bar.bottom())), 0.0, palette.accent);
    }
    let text = format!("steady, {}", length(desk, span));
    let size = widget::text_size(painter, &text, theme::quiet());
    if size.x + 16.0 < seen.width() {
        let at = pos2(seen.center().x, seen.top() + 0.5 * (seen.height() - 3.0));
        widget::write(painter, at, Align2::CENTER_CENTER, &text, theme::quiet(), palette.ink);
    }
}

/// A tick from top to bottom with a wedge.
fn draw_change(painter: &Painter, x: f32, rect: Rect, palette: &Palette) {
    if x < rect.left() || x > rect.right() {
        return;
    }
    let x = painter.round_to_pixel_center(x);
    painter.vline(x, rect.y_range(), Stroke::new(1.0, palette.ink));
    let top = rect.top() + 1.0;
    let wedge = vec![pos2(x - 4.0, top), pos2(x + 4.0, top), pos2(x, top + 5.0)];
    painter.add(Shape::convex_polygon(wedge, palette.ink, Stroke::NONE));
}

/// Keys and clicks on the band itself move a place that is read out; Enter marks the stretch it lies in. Gives where
/// and what to say.
fn steer(
    ui: &Ui,
    band: &Response,
    desk: &Desk,
    found: &Steadiness,
    axis: &Axis,
    view: &mut View,
    intents: &mut Intents,
) -> Said {
    let last = found.blocks.len().checked_sub(1)?;
    let block_at = |x: f32| found.block_at(axis.value(x).max(0.0) as u64).map(|(at, _)| at);
    if let Some(pointer) = band.interact_pointer_pos().filter(|_| band.clicked()) {
        band.request_focus();
        view.ribbon_block = block_at(pointer.x).unwrap_or(last);
    } else if band.clicked()
        && let Some(rank) = found.blocks.get(view.ribbon_block).and_then(|b| found.stretch_at(middle(b)))
    {
        take(ui, desk, found.stretches[rank], view, intents);
    }
    if band.has_focus() {
        let filter = EventFilter { horizontal_arrows: true, ..EventFilter::default() };
        ui.memory_mut(|m| m.set_focus_lock_filter(band.id, filter));
        let mut at = view.ribbon_block.min(last) as f64;
        ui.input_mut(|input| {
            for (modifiers, step) in [(Modifiers::SHIFT, 10.0), (Modifiers::NONE, 1.0)] {
                at -= step * input.count_and_consume_key(modifiers, Key::ArrowLeft) as f64;
                at += step * input.count_and_consume_key(modifiers, Key::ArrowRight) as f64;
            }
            if input.consume_key(Modifiers::NONE, Key::Home) {
                at = 0.0;
            }
            if input.consume_key(Modifiers::NONE, Key::End) {
                at = last as f64;
            }
        });
        view.ribbon_block = at.clamp(0.0, last as f64) as usize;
    }
    let over = band.hover_pos().and_then(|at| Some((at.x, block_at(at.x)?)));
    let told = over.or_else(|| {
        let block = found.blocks.get(view.ribbon_block).filter(|_| band.has_focus())?;
        Some((axis.at(middle(block) as f64), view.ribbon_block))
    });
    told.map(|(x, at)| (x, words(desk, found, at)))
}

fn middle(block: &SteadyBlock) -> u64 {
    block.span.start + block.span.samples / 2
}

fn describe(band: &Response, desk: &Desk, found: &Steadiness, view: &View) {
    let n = found.stretches.len();
    let what = match n {
        0 => "no steady stretch".to_owned(),
        1 => "1 steady stretch".to_owned(),
        n => format!("{n} steady stretches"),
    };
    let at = view.ribbon_block.min(found.blocks.len().saturating_sub(1));
    let text = format!("Steadiness ribbon, {what}; {}", words(desk, found, at));
    let rate = desk.session.sample_rate_hz();
    let value = found.blocks.get(at).map_or(0.0, |b| b.span.start as f64 / rate);
    band.widget_info(|| WidgetInfo::slider(true, value, &text));
}

/// What a block is, in words.
fn words(desk: &Desk, found: &Steadiness, at: usize) -> String {
    let Some(block) = found.blocks.get(at) else { return "the capture is too short to tell".to_owned() };
    let what = match found.stretch_at(middle(block)) {
        _ if block.change == f64::INFINITY => "holds samples that are no finite numbers".to_owned(),
        _ if block.is_quiet => "rest, 20 dB or more under the whole".to_owned(),
        Some(_) if block.change <= 1.0 => "steady".to_owned(),
        Some(_) => "in a steady stretch, though it stands out a little".to_owned(),
        None if block.change > 1.0 => {
            let times = if block.change < 100.0 {
                format!("{} times", figure::significant(block.change, 2))
            } else {
                "over 100 times".to_owned()
            };
            format!("changes by {times} what chance explains")
        }
        None => match found.changes.iter().find(|c| at_block(block, c.sample)) {
            Some(change) => format!("a change is here, level {} from before to after", decibels(change.level_db)),
            None => "calm, but next to a change, or too short a calm to suggest".to_owned(),
        },
    };
    let level = format!(
        "level {} against the whole, {} against the block before",
        decibels(block.level_db),
        decibels(block.level_change_db)
    );
    format!("{}: {what}; {level}", from_to(desk, block.span))
}

/// Whether a change lies in a block or at one of its edges.
fn at_block(block: &SteadyBlock, sample: u64) -> bool {
    (block.span.start..=block.span.end()).contains(&sample)
}

fn decibels(db: f64) -> String {
    let sign = if db > 0.0 { "+" } else { "" };
    if db.is_finite() { format!("{sign}{} dB", figure::fixed(db, 1)) } else { "no".to_owned() }
}

fn from_to(desk: &Desk, span: Span) -> String {
    let rate = desk.session.sample_rate_hz();
    let seconds = |sample: u64| figure::seconds(sample as f64 / rate, rate.min(1000.0));
    format!("{} to {} s", seconds(span.start), seconds(span.end()))
}

fn length(desk: &Desk, span: Span) -> String {
    let seconds = span.samples as f64 / desk.session.sample_rate_hz();
    format!("{} s", figure::significant(seconds, 4))
}

/// One suggestion: a button over its bar. Gives where and what to say while it is pointed at or has the keys.
fn suggestion(
    ui: &Ui,
    desk: &Desk,
    (rank, span): (usize, Span),
    (axis, rect): (&Axis, Rect),
    view: &mut View,
    intents: &mut Intents,
) -> Said {
    let (x0, x1) = (axis.at(span.start as f64), axis.at(span.end() as f64));
    let bar = Rect::from_min_max(pos2(x0, rect.top() - REACH), pos2(x1.max(x0 + 8.0), rect.bottom()));
    let seen = bar.intersect(rect.with_min_y(rect.top() - REACH));
    if !seen.is_positive() {
        return None;
    }
    let response = ui.interact(seen, Id::unique(("steady stretch", rank)), Sense::click());
    let marked = desk.segment().is_some_and(|s| s.span == span);
    let name = format!(
        "Steady stretch {}, {}, {} long{}",
        rank + 1,
        from_to(desk, span),
        length(desk, span),
        if marked { ", marked" } else { "" }
    );
    response.widget_info(|| WidgetInfo::labeled(Role::Button, true, &name));
    if response.clicked() {
        take(ui, desk, span, view, intents);
    }
    let keyed = response.has_focus();
    if keyed {
        let palette = theme::palette(ui.ctx());
        let frame = seen.with_min_y(rect.top()).shrink(1.0);
        let stroke = Stroke::new(2.0, palette.ink);
        ui.painter_at(rect).rect_stroke(frame, 2.0, stroke, eframe::egui::StrokeKind::Inside);
    }
    let x = response.hover_pos().map(|at| at.x).or(keyed.then(|| seen.center().x))?;
    let how = if marked {
        "it is the segment read"
    } else {
        "click or Enter reads it as the segment, with Shift as one more segment"
    };
    Some((x, format!("steady from {}, {} long; {how}", from_to(desk, span), length(desk, span))))
}

/// The current segment becomes the stretch; with Shift a new one does.
fn take(ui: &Ui, desk: &Desk, span: Span, view: &mut View, intents: &mut Intents) {
    view.refit_level = true;
    let command = if ui.input(|i| i.modifiers.shift) {
        Command::AddSegment(span)
    } else {
        Command::MoveSegment(desk.session.current, span)
    };
    // A step of its own, also where a drag has just ended.
    intents.extend([Intent::CloseStep, Intent::Change(command), Intent::CloseStep]);
}

/// Says what is pointed at, over the foot of the strip.
pub(super) fn call_out(ui: &Ui, wave: Rect, (x, text): &(f32, String)) {
    let (painter, palette) = (&ui.painter_at(wave), theme::palette(ui.ctx()));
    let size = widget::text_size(painter, text, theme::quiet());
    let half = 0.5 * size.x + 6.0;
    let x =
        if 2.0 * half < wave.width() { x.clamp(wave.left() + half, wave.right() - half) } else { wave.left() + half };
    let ground = Rect::from_center_size(pos2(x, wave.bottom() - 13.0), size + vec2(12.0, 4.0));
    painter.rect_filled(ground, 3.0, palette.card);
    painter.rect_stroke(ground, 3.0, Stroke::new(1.0, palette.rule), eframe::egui::StrokeKind::Inside);
    widget::write(painter, ground.center(), Align2::CENTER_CENTER, text, theme::quiet(), palette.ink);
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_column_grows_with_the_doublings_of_a_change_and_fills_the_band_at_most() {
        assert_eq!(column_height(1.0), 0.25);
        assert_eq!(column_height(4.0), 0.625);
        assert_eq!((column_height(16.0), column_height(f64::INFINITY)), (1.0, 1.0));
    }

    #[test]
    fn dots_stand_on_one_grid_whatever_the_blocks() {
        let mut mesh = Mesh::default();
        let next = dots(&mut mesh, (1.0, 14.0), 10.0, Color32::BLACK);
        let next = dots(&mut mesh, (14.0_f32.max(next), 31.0), 10.0, Color32::BLACK);
        assert_eq!((mesh.vertices.len() / 4, next), (5, 36.0));
    }
}
