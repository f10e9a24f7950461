//! The setup column: everything that changes figures, in the order of the job.

use eframe::egui::{self, ComboBox, RichText, ScrollArea, TextEdit, Ui};

use super::action::Action;
use super::desk::Desk;
use super::typed::{Bounds, number_row};
use super::view::{Intent, Intents, View};
use super::widget::{quiet, row, section};
use super::{advice, figure, list, theme};
use super::{setup_hands, setup_kind, setup_rate, setup_scale, setup_search};
use crate::session::{Command, FrequencyAxis, MAX_PANES, Note, ViewAxes};
use crate::signal::{Removal, Span};

/// Width of the column.
pub(super) const WIDTH: f32 = 248.0;

/// Shows the column.
pub(super) fn show(ui: &mut Ui, desk: &Desk, view: &mut View, intents: &mut Intents) {
    ScrollArea::vertical().id_salt("setup").auto_shrink(false).show(ui, |ui| {
        ui.set_max_width(WIDTH - 24.0);
        ui.spacing_mut().combo_width = 120.0;
        setup_scale::show(ui, desk, intents);
        setup_rate::show(ui, desk, intents);
        segments(ui, desk, view, intents);
        panes(ui, desk, intents);
        advice::show(ui, desk, intents);
        setup_search::show(ui, desk, intents);
        setup_hands::show(ui, desk, view, intents);
        notes(ui, desk, intents);
        ui.add_space(12.0);
    });
}

fn segments(ui: &mut Ui, desk: &Desk, view: &mut View, intents: &mut Intents) {
    section(ui, "Segment");
    if desk.session.segments.len() > 1 {
        chips(ui, desk, intents);
    }
    let Some(segment) = desk.segment() else { return };
    name(ui, desk, intents);
    let rate = desk.session.sample_rate_hz();
    let frames = desk.session.capture.frames;
    let unit = if view.in_samples { 1.0 } else { 1.0 / rate };
    let span = segment.span;
    let mut moved: Option<Span> = None;
    let fields = [
        ("Start", span.start, 0..=frames.saturating_sub(1)),
        ("End", span.end(), 1..=frames),
        ("Length", span.samples, 1..=frames),
    ];
    for (label, samples, range) in fields {
        let bounds = Bounds::within(*range.start() as f64 * unit..=*range.end() as f64 * unit);
        let (suffix, decimals) = if view.in_samples { ("", 0) } else { (" s", 4) };
        let typed = number_row(
            ui,
            label,
            samples as f64 * unit,
            &bounds,
            |f| {
                let f = f.speed(frames as f64 * unit / 4000.0).suffix(suffix);
                f.max_decimals(decimals).min_decimals(decimals.min(3))
            },
            |ui| {
                let text = if view.in_samples { "samples" } else { "seconds" };
                let hint = "Type positions in seconds or in samples";
                if label == "Start" && ui.button(text).on_hover_text(hint).clicked() {
                    view.in_samples = !view.in_samples;
                }
            },
        );
        if typed.changed {
            let at = (typed.value / unit).round().clamp(*range.start() as f64, *range.end() as f64) as u64;
            moved = Some(match label {
                "Start" => started_at(span, at, frames),
                "End" => ended_at(span, at),
                _ => Span { start: span.start, samples: at }.clipped_to(frames),
            });
        }
        if typed.ended {
            view.refit_level = true;
            intents.push(Intent::CloseStep);
        }
    }
    if let Some(span) = moved.filter(|s| *s != span) {
        intents.push(Intent::Change(Command::MoveSegment(segment.id, span)));
    }
    let spacing = desk.line_spacing_hz();
    let facts = format!(
        "{} {}, {} s\nlines every {} Hz",
        figure::count(span.samples),
        if span.samples == 1 { "sample" } else { "samples" },
        figure::seconds(span.samples as f64 / rate, rate),
        figure::significant(spacing, 4)
    );
    quiet(ui, facts);
    setup_kind::show(ui, desk, intents);
    removal(ui, desk, intents);
}

/// The segment with another start; past its end the whole of it moves, as far as the capture goes.
fn started_at(span: Span, at: u64, frames: u64) -> Span {
    if at < span.end() { Span::from_range(at..span.end()) } else { Span { start: at, ..span }.clipped_to(frames) }
}

/// The segment with another end; before its start the whole of it moves, as far as the capture goes.
fn ended_at(span: Span, at: u64) -> Span {
    let start = if at > span.start { span.start } else { at.saturating_sub(span.samples) };
    Span::from_range(start..at)
}

fn chips(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    ui.horizontal_wrapped(|ui| {
        for segment in &desk.session.segments {
            let current = segment.id == desk.session.current;
            let chip = ui.selectable_label(current, &segment.name);
            if chip.accessible_name(format!("Read segment {}", segment.name)).clicked() {
                intents.push(Intent::Change(Command::ChooseSegment(segment.id)));
            }
        }
    });
}

fn name(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let Some(segment) = desk.segment() else { return };
    row(ui, "Name", |ui, id| {
        let mut text = segment.name.clone();
        let response = ui.add(TextEdit::singleline(&mut text).desired_width(f32::INFINITY)).labelled_by(id);
        if response.changed() {
            intents.push(Intent::Change(Command::RenameSegment(segment.id, text)));
        }
        if response.lost_focus() {
            intents.push(Intent::CloseStep);
        }
    });
}

fn removal(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let title = |r: Removal| match r {
        Removal::None => "nothing",
        Removal::Mean => "the mean",
        Removal::Line => "a straight line",
    };
    row(ui, "Take out", |ui, id| {
        let combo = ComboBox::from_id_salt("removal").selected_text(title(desk.session.removal));
        let shown = list::show(ui, combo, |ui| {
            let mut chosen = false;
            for choice in [Removal::None, Removal::Mean, Removal::Line] {
                if list::item(ui, desk.session.removal == choice, title(choice)) {
                    intents.push(Intent::Change(Command::SetRemoval(choice)));
                    chosen = true;
                }
            }
            chosen
        });
        shown.labelled_by(id);
    });
    if let Some(reading) = desk.reading().filter(|_| desk.session.removal != Removal::None) {
        let removed = reading.segment.removed;
        let unit = &reading.scale.unit;
        let slope = match removed.what {
            Removal::Line => format!(", slope {} {unit} a second", figure::significant(removed.slope_per_s, 3)),
            _ => String::new(),
        };
        quiet(ui, format!("taken out: {} {unit}{slope}", figure::significant(removed.offset, 3)));
    }
}

fn panes(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    section(ui, "Panes");
    for (i, pane) in desk.session.panes.iter().enumerate() {
        ui.horizontal(|ui| {
            let palette = theme::palette(ui.ctx());
            let (hue, _) = theme::pane_hue(palette, pane.id);
            let (rect, _) = ui.allocate_exact_size(egui::vec2(14.0, 24.0), egui::Sense::hover());
            ui.painter().hline(rect.x_range(), rect.center().y, egui::Stroke::new(2.5, hue));
            ui.add(egui::Label::new(pane.window.to_string()).truncate());
            ui.with_layout(egui::Layout::right_to_left(egui::Align::Center), |ui| {
                let remove = ui.add_enabled(desk.session.panes.len() > 1, egui::Button::new("remove").small());
                if remove.accessible_name(format!("Remove pane {}, {}", i + 1, pane.window)).clicked() {
                    intents.push(Intent::Change(Command::RemovePane(pane.id)));
                }
            });
        });
    }
    ui.add_enabled_ui(desk.session.panes.len() < MAX_PANES, |ui| {
        let response = ui.button("Add a window");
        if response.on_disabled_hover_text("Eight panes are the most: remove one first.").clicked() {
            intents.push(Intent::Do(Action::AddPane));
        }
    });
    frequency(ui, desk, intents);
}

fn frequency(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let axes = desk.session.axes;
    let nyquist = desk.session.sample_rate_hz() / 2.0;
    let (lo, hi) = axes.frequency_hz.unwrap_or((0.0, nyquist));
    let mut set = |frequency_hz| intents.push(Intent::Change(Command::SetAxes(ViewAxes { frequency_hz, ..axes })));
    let speed = (hi - lo) / 300.0;
    let below = Bounds::within(0.0..=(hi - 1e-3).max(0.0));
    let from = number_row(ui, "From", lo, &below, |f| f.suffix(" Hz").speed(speed).max_decimals(3), |_| {});
    if from.changed {
        set(Some((from.value, hi)));
    }
    let above = Bounds::within((lo + 1e-3).min(nyquist)..=nyquist);
    let to = number_row(ui, "To", hi, &above, |f| f.suffix(" Hz").speed(speed).max_decimals(3), |_| {});
    if to.changed {
        set(Some((lo, to.value)));
    }
    let mut log = axes.frequency_axis == FrequencyAxis::Logarithmic;
    if ui.checkbox(&mut log, "logarithmic").changed() {
        let frequency_axis = if log { FrequencyAxis::Logarithmic } else { FrequencyAxis::Linear };
        intents.push(Intent::Change(Command::SetAxes(ViewAxes { frequency_axis, ..axes })));
    }
    level(ui, desk, intents);
}

fn level(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let axes = desk.session.axes;
    let mut fitted = axes.level_db.is_none();
    if ui.checkbox(&mut fitted, "fit the level axis").changed() {
        let level_db = if fitted { None } else { Some((-120.0, 0.0)) };
        intents.push(Intent::Change(Command::SetAxes(ViewAxes { level_db, ..axes })));
    }
    let Some((lo, hi)) = axes.level_db else { return };
    let mut set =
        |level_db| intents.push(Intent::Change(Command::SetAxes(ViewAxes { level_db: Some(level_db), ..axes })));
    let top = number_row(ui, "Top", hi, &Bounds::within(lo + 5.0..=400.0), |f| f.suffix(" dB").max_decimals(1), |_| {});
    if top.changed {
        set((lo, top.value));
    }
    let bottom = Bounds::within(-400.0..=hi - 5.0);
    let low = number_row(ui, "Bottom", lo, &bottom, |f| f.suffix(" dB").max_decimals(1), |_| {});
    if low.changed {
        set((low.value, hi));
    }
}

fn notes(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    section(ui, "Notes");
    let mut text =
        desk.session.notes.iter().find(|n| n.frequency_hz.is_none()).map(|n| n.text.clone()).unwrap_or_default();
    let hint = RichText::new("Where, when, who, with what").color(theme::palette(ui.ctx()).quiet);
    let field = TextEdit::multiline(&mut text).desired_rows(2).desired_width(f32::INFINITY).hint_text(hint);
    let response = ui.add(field).accessible_name("Notes on the session");
    if response.changed() {
        intents.push(Intent::Change(Command::SetNote(Note { frequency_hz: None, text })));
    }
    if response.lost_focus() {
        intents.push(Intent::CloseStep);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_start_past_the_end_and_an_end_before_the_start_move_the_whole() {
        let span = Span::from_range(90..330);
        assert_eq!(started_at(span, 100, 1000), Span::from_range(100..330));
        assert_eq!(started_at(span, 350, 1000), Span::from_range(350..590));
        assert_eq!(started_at(span, 330, 1000), Span::from_range(330..570));
        assert_eq!(started_at(span, 900, 1000), Span::from_range(900..1000));
        assert_eq!(ended_at(span, 100), Span::from_range(90..100));
        assert_eq!(ended_at(Span::from_range(500..600), 300), Span::from_range(200..300));
        assert_eq!(ended_at(span, 50), Span::from_range(0..50));
    }
}
