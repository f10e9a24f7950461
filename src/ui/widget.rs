//! Small parts used all over: texts, fields, drawn marks.

use eframe::egui::{self, Color32, Id, Painter, Pos2, Rect, Response, RichText, Shape, Stroke, Ui, Vec2, pos2, vec2};

use super::theme;
use crate::reading::{ReadingState, Verdict};

/// The head of a section.
pub(super) fn section(ui: &mut Ui, text: &str) -> Response {
    let font = theme::heavy(ui.ctx(), theme::BODY);
    let colour = theme::palette(ui.ctx()).accent;
    ui.add_space(8.0);
    ui.label(RichText::new(text).font(font).color(colour))
}

/// Quiet text.
pub(super) fn quiet(ui: &mut Ui, text: impl Into<String>) -> Response {
    let colour = theme::palette(ui.ctx()).quiet;
    ui.label(RichText::new(text).font(theme::quiet()).color(colour))
}

/// A row of a form: a quiet label in a column of its own, the field beside it.
pub(super) fn row<R>(ui: &mut Ui, label: &str, field: impl FnOnce(&mut Ui, Id) -> R) -> R {
    ui.horizontal(|ui| {
        let colour = theme::palette(ui.ctx()).quiet;
        let (rect, _) = ui.allocate_exact_size(vec2(68.0, 24.0), egui::Sense::hover());
        let text = egui::Label::new(RichText::new(label).color(colour)).selectable(false).halign(egui::Align::LEFT);
        let mut cell = ui
            .new_child(egui::UiBuilder::new().max_rect(rect).layout(egui::Layout::left_to_right(egui::Align::Center)));
        let label = cell.add(text);
        field(ui, label.id)
    })
    .inner
}

/// What came of a number's field.
#[derive(Debug, Clone, Copy, PartialEq)]
pub(super) struct Typed {
    pub(super) value: f64,
    pub(super) changed: bool,
    /// A drag or a text has ended.
    pub(super) ended: bool,
}

/// A text field that is taken when it is left, not while it is typed in: gives the text then. Esc leaves it as it was.
pub(super) fn text_when_left(
    ui: &mut Ui,
    key: Id,
    current: &str,
    shape: impl for<'a> FnOnce(egui::TextEdit<'a>) -> egui::TextEdit<'a>,
) -> (Response, Option<String>) {
    let mut text = ui.data(|d| d.get_temp::<String>(key)).unwrap_or_else(|| current.to_owned());
    let response = ui.add(shape(egui::TextEdit::singleline(&mut text)));
    if response.changed() {
        ui.data_mut(|d| d.insert_temp(key, text.clone()));
    }
    if !response.lost_focus() {
        return (response, None);
    }
    ui.data_mut(|d| d.remove_temp::<String>(key));
    let taken = !ui.input(|i| i.key_pressed(egui::Key::Escape)) && text != current;
    (response, taken.then_some(text))
}

/// Draws the mark of a reading's state: a disc is clear, a ring is crowded, a short bar is under a skirt, a dot is
/// below the floor.
pub(super) fn state_mark(painter: &Painter, at: Pos2, state: ReadingState, ink: Color32) {
    match state {
        ReadingState::Clear => drop(painter.circle_filled(at, 3.5, ink)),
        ReadingState::Crowded => drop(painter.circle_stroke(at, 3.0, Stroke::new(1.5, ink))),
        ReadingState::UnderSkirt => {
            painter.line_segment([at - vec2(4.0, 0.0), at + vec2(4.0, 0.0)], Stroke::new(2.0, ink));
        }
        ReadingState::BelowFloor => drop(painter.circle_filled(at, 1.5, ink)),
    }
}

/// Draws the mark of a verdict: `holds` a disc, `crowded` a ring, `wanders` a tilde, `disputed` a ring with a bar,
/// `skirt` a short bar, `faint` a dot.
pub(super) fn verdict_mark(painter: &Painter, at: Pos2, verdict: Verdict, ink: Color32) {
    let stroke = Stroke::new(1.5, ink);
    match verdict {
        Verdict::Holds => drop(painter.circle_filled(at, 4.0, ink)),
        Verdict::Crowded => drop(painter.circle_stroke(at, 3.5, stroke)),
        Verdict::Wanders => {
            let wave = (0..=12).map(|i| {
                let x = (i as f32 - 6.0) * 0.8;
                at + vec2(x, 2.5 * (x * 0.65).sin())
            });
            painter.add(Shape::line(wave.collect(), stroke));
        }
        Verdict::Disputed => {
            painter.circle_stroke(at, 3.5, stroke);
            painter.line_segment([at - vec2(5.0, 0.0), at + vec2(5.0, 0.0)], stroke);
        }
        Verdict::Skirt => drop(painter.line_segment([at - vec2(4.0, 0.0), at + vec2(4.0, 0.0)], Stroke::new(2.0, ink))),
        Verdict::Faint => drop(painter.circle_filled(at, 1.5, ink)),
    }
}

/// A window's shape drawn small, from its samples.
pub(super) fn glyph(painter: &Painter, rect: Rect, shape: &[f32], colour: Color32) {
    let n = shape.len().max(2) as f32 - 1.0;
    let low = shape.iter().copied().fold(0.0_f32, f32::min);
    let points: Vec<Pos2> = shape
        .iter()
        .enumerate()
        .map(|(i, v)| {
            let part = (v - low) / (1.0 - low);
            pos2(rect.left() + rect.width() * i as f32 / n, rect.bottom() - part.clamp(0.0, 1.0) * rect.height())
        })
        .collect();
    painter.add(Shape::line(points, Stroke::new(1.5, colour)));
}

/// Writes text at a place and gives the room it takes.
pub(super) fn write(
    painter: &Painter,
    at: Pos2,
    anchor: egui::Align2,
    text: &str,
    font: egui::FontId,
    colour: Color32,
) -> Rect {
    painter.text(at, anchor, text, font, colour)
}

/// Writes text from `at`, its left end half-way up, in one line no longer than `width`; what is cut off becomes dots.
pub(super) fn write_cut(painter: &Painter, at: Pos2, width: f32, text: &str, font: egui::FontId, colour: Color32) {
    let mut job = egui::text::LayoutJob::simple_singleline(text.to_owned(), font, colour);
    job.wrap = egui::text::TextWrapping::truncate_at_width(width);
    let galley = painter.layout_job(job);
    painter.galley(pos2(at.x, at.y - 0.5 * galley.size().y), galley, colour);
}

/// The size a text takes in one line.
pub(super) fn text_size(painter: &Painter, text: &str, font: egui::FontId) -> Vec2 {
    painter.layout_no_wrap(text.to_owned(), font, Color32::PLACEHOLDER).size()
}
