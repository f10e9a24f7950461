//! What is known of a tone whatever the pane: verdict and why, uncertainty item by item, how it moves, what would part it.

use eframe::egui::{self, Align, Align2, Layout, RichText, Role, Sense, Shape, Stroke, Ui, WidgetInfo, pos2, vec2};

use super::action::Action;
use super::desk::Desk;
use super::pane_marks::verdict_shown;
use super::table::verdict_word;
use super::view::{Intent, Intents, View};
use super::{advice, figure, theme, widget};
use crate::reading::{BudgetItem, CourseFact, Reading, Tone};

/// Height of a small plot.
const PLOT: f32 = 52.0;

/// The verdict's mark and word, and the sentence why; who put another in its place.
pub(super) fn verdict(ui: &mut Ui, tone: &Tone) {
    let Some(shown) = verdict_shown(tone) else { return };
    let palette = theme::palette(ui.ctx());
    ui.horizontal(|ui| {
        ui.spacing_mut().interact_size.y = 18.0;
        let (rect, _) = ui.allocate_exact_size(vec2(14.0, 18.0), Sense::hover());
        widget::verdict_mark(ui.painter(), rect.center(), shown, theme::verdict_hue(palette, shown));
        ui.label(RichText::new(verdict_word(shown)).font(theme::heavy(ui.ctx(), theme::BODY)));
    });
    if let Some(overruled) = &tone.overruled {
        let found =
            tone.verdict.filter(|v| *v != shown).map_or(String::new(), |v| format!(" (found: {})", verdict_word(v)));
        ui.label(format!("set by {}: {}{found}", overruled.by, overruled.reason));
    }
    if let Some(why) = &tone.why {
        ui.add(egui::Label::new(why).wrap());
    }
}

/// Uncertainty, noise, drift, tags, order; how the tone moves; what length would part it.
pub(super) fn facts(ui: &mut Ui, tone: &Tone, reading: &Reading, desk: &Desk, view: &mut View, intents: &mut Intents) {
    for line in advice::lengths(tone, reading, desk, view) {
        widget::quiet(ui, line);
    }
    periods(ui, tone, desk, intents);
    course(ui, tone, &reading.scale.reference_label);
    uncertainty(ui, tone, &reading.scale.unit);
    for line in lines(tone, reading) {
        widget::quiet(ui, line);
    }
}

/// How many periods the segment holds, and a way to make them whole.
fn periods(ui: &mut Ui, tone: &Tone, desk: &Desk, intents: &mut Intents) {
    let Some(segment) = desk.segment() else { return };
    let n = segment.span.samples as f64 / desk.session.sample_rate_hz() * tone.frequency_hz;
    ui.horizontal_wrapped(|ui| {
        widget::quiet(ui, format!("{} periods in the segment", figure::fixed(n, 3)));
        let button = ui.add(egui::Button::new("whole periods").small());
        let button = button.on_hover_text("Set the segment to the nearest length of whole periods");
        if button.accessible_name("Set the segment to whole periods of the picked tone").clicked() {
            intents.push(Intent::Do(Action::WholePeriods));
        }
    });
}

/// What is known in one line each.
pub(super) fn lines(tone: &Tone, reading: &Reading) -> Vec<String> {
    let unit = &reading.scale.unit;
    let spacing = reading.panes.first().map_or(0.01, |p| p.line_spacing_hz);
    let mut lines = Vec::new();
    if let Some(hz) = tone.drift_hz {
        let db = tone.drift_db.map_or(String::new(), |db| format!(", {} dB", signed(db, 2)));
        lines.push(format!("from start to end {} Hz{db}", signed(hz, figure::decimals(spacing / 10.0, 9))));
    }
    if let Some(density) = tone.noise_density {
        lines.push(format!("noise here {} ({unit})²/Hz", figure::significant(density, 3)));
    }
    if let Some(db) = tone.snr_db {
        lines.push(format!("{} dB over one line's noise", figure::fixed(db, 1)));
    }
    if let Some(order) = tone.order {
        lines.push(format!("order {}", figure::fixed(order, 4)));
    }
    if !tone.tags.is_empty() {
        lines.push(tone.tags.join(", "));
    }
    lines
}

fn signed(value: f64, decimals: usize) -> String {
    let text = figure::fixed(value, decimals);
    if text.starts_with(['−', '–']) { text } else { format!("+{text}") }
}

/// The expanded uncertainty and what it is made of.
fn uncertainty(ui: &mut Ui, tone: &Tone, unit: &str) {
    let Some(budget) = &tone.budget else { return };
    ui.add_space(4.0);
    let head = theme::heavy(ui.ctx(), theme::QUIET);
    ui.label(RichText::new("Uncertainty").font(head));
    let two = |value: Option<f64>, unit: &str| value.map(|v| format!("± {} {unit}", figure::significant(v, 2)));
    let parts = [two(tone.frequency_u95_hz, "Hz"), two(tone.amplitude_u95, unit), two(tone.level_u95_db, "dB")];
    let parts: Vec<String> = parts.into_iter().flatten().collect();
    if !parts.is_empty() {
        widget::quiet(ui, format!("expanded (k = 2): {}", parts.join(", ")));
    }
    row(ui, ["standard", "amplitude", "frequency"].map(str::to_owned), true);
    for item in budget {
        row(ui, cells(item, unit), false);
    }
}

/// An item's name, and what it does to amplitude and frequency.
fn cells(item: &BudgetItem, unit: &str) -> [String; 3] {
    if !item.stated {
        return [item.item.clone(), "not stated".to_owned(), "not stated".to_owned()];
    }
    let value = |u: Option<f64>, unit: &str| {
        u.map_or_else(|| "–".to_owned(), |u| format!("{} {unit}", figure::significant(u, 2)))
    };
    [item.item.clone(), value(item.u_amplitude, unit), value(item.u_frequency_hz, "Hz")]
}

fn row(ui: &mut Ui, [name, amplitude, frequency]: [String; 3], head: bool) {
    let palette = theme::palette(ui.ctx());
    let text = |t: String, ink| RichText::new(t).font(theme::quiet()).color(ink);
    let ink = if head { palette.quiet } else { palette.ink };
    ui.horizontal(|ui| {
        ui.spacing_mut().interact_size.y = 15.0;
        ui.spacing_mut().item_spacing.x = 4.0;
        let width = ui.available_width() - 8.0;
        let cell = vec2(width * 0.36, 15.0);
        ui.allocate_ui_with_layout(vec2(width * 0.26, 15.0), Layout::left_to_right(Align::Center), |ui| {
            ui.set_min_width(width * 0.26);
            ui.add(egui::Label::new(text(name, palette.quiet)).truncate());
        });
        for value in [amplitude, frequency] {
            ui.allocate_ui_with_layout(cell, Layout::right_to_left(Align::Center), |ui| {
                ui.set_min_width(cell.x);
                ui.label(text(value, ink));
            });
        }
    });
}

/// Two small plots of a tone that moves: frequency and level over the segment.
fn course(ui: &mut Ui, tone: &Tone, reference: &str) {
    let Some(course) = tone.course.as_ref().filter(|c| c.len() > 1) else { return };
    ui.add_space(4.0);
    plot(ui, ("Frequency", "Hz"), course, |p| p.frequency_hz);
    plot(ui, ("Level", reference), course, |p| p.level_db);
}

/// One quantity over the segment, its least and greatest value written at its ends.
fn plot(ui: &mut Ui, (what, unit): (&str, &str), course: &[CourseFact], value: impl Fn(&CourseFact) -> f64) {
    let finite: Vec<(f64, f64)> = course.iter().map(|p| (p.time_s, value(p))).filter(|p| p.1.is_finite()).collect();
    let bounds = |of: &dyn Fn(&(f64, f64)) -> f64| {
        finite.iter().map(of).fold((f64::INFINITY, f64::NEG_INFINITY), |(a, b), v| (a.min(v), b.max(v)))
    };
    let ((from, to), (least, most)) = (bounds(&|p| p.0), bounds(&|p| p.1));
    if finite.len() < 2 || from >= to {
        return;
    }
    let decimals = figure::decimals((most - least).max(1e-6), 6);
    let (low, high) = (figure::fixed(least, decimals), figure::fixed(most, decimals));
    let palette = theme::palette(ui.ctx());
    widget::quiet(ui, format!("{what} over the segment, {unit}"));
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width() - 8.0, PLOT), Sense::hover());
    let text = format!(
        "{what} over the segment: {low} to {high} {unit}, from {} s to {} s",
        figure::fixed(from, 2),
        figure::fixed(to, 2)
    );
    response.widget_info(|| WidgetInfo::labeled(Role::Figure, true, &text));
    let painter = ui.painter();
    let room = [&low, &high].map(|t| widget::text_size(painter, t, theme::quiet()).x).into_iter().fold(0.0, f32::max);
    let area = egui::Rect::from_min_max(rect.min + vec2(room + 6.0, 4.0), rect.max - vec2(2.0, 16.0));
    painter.hline(area.x_range(), area.bottom(), Stroke::new(1.0, palette.rule));
    painter.vline(area.left(), area.y_range(), Stroke::new(1.0, palette.rule));
    let part = |v: f64, a: f64, b: f64| if b > a { ((v - a) / (b - a)) as f32 } else { 0.5 };
    let points = finite.iter().map(|p| {
        let x = area.left() + part(p.0, from, to) * area.width();
        pos2(x, area.bottom() - part(p.1, least, most) * area.height())
    });
    painter.add(Shape::line(points.collect(), Stroke::new(1.5, palette.ink)));
    let write = |at, anchor, text: &str| widget::write(painter, at, anchor, text, theme::quiet(), palette.quiet);
    write(pos2(area.left() - 4.0, area.top()), Align2::RIGHT_CENTER, &high);
    write(pos2(area.left() - 4.0, area.bottom()), Align2::RIGHT_CENTER, &low);
    write(pos2(area.left(), area.bottom() + 2.0), Align2::LEFT_TOP, &format!("{} s", figure::fixed(from, 2)));
    write(pos2(area.right(), area.bottom() + 2.0), Align2::RIGHT_TOP, &format!("{} s", figure::fixed(to, 2)));
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_not_stated_is_said_and_is_no_zero() {
        let item = |stated, u| BudgetItem { item: "clock".to_owned(), u_amplitude: u, u_frequency_hz: None, stated };
        assert_eq!(cells(&item(false, None), "g"), ["clock", "not stated", "not stated"]);
        assert_eq!(cells(&item(true, Some(0.001_23)), "g"), ["clock", "0.0012 g", "–"]);
    }

    /// A desk with a pair of tones read, whose first has a verdict, a budget and a course.
    fn desk() -> Desk {
        use crate::reading::{Overruled, Verdict, analyse};
        use crate::signal::{Stored, Watch};
        use std::sync::Arc;
        let turn = std::f64::consts::TAU / 1000.0;
        let sample = |i: u32| {
            let i = f64::from(i);
            (100.2 * turn * i).cos() + 0.5 * (101.4 * turn * i).cos() + 1e-4 * (i * i * 0.7).sin()
        };
        let capture = crate::capture::Capture {
            path: "pump.wav".into(),
            format: "test".to_owned(),
            bits_per_sample: None,
            truncated: false,
            source: Arc::new(Stored::new(1000.0, 1, (0..4096).map(sample).collect())),
            doubts: Vec::new(),
            stamp: crate::capture::Stamp::default(),
        };
        let mut desk = Desk::fresh(1, Arc::new(capture), |_| {});
        let request = desk.request();
        let mut analysis = analyse(&*desk.capture.source, &request, None, &Watch::new()).unwrap();
        let mut reading = Reading::clone(&analysis.reading);
        let at = |i: u32| CourseFact {
            time_s: 4.096 * f64::from(i) / 20.0,
            frequency_hz: 100.0 + 0.02 * f64::from(i),
            level_db: -3.0 + 0.1 * f64::from(i),
        };
        let tone = &mut reading.tones[0];
        tone.verdict = Some(Verdict::Disputed);
        tone.why = Some("the clear readings lie 0.4 dB apart".to_owned());
        tone.overruled = Some(Overruled {
            by: "A. Mason".to_owned(),
            reason: "the run was cut short".to_owned(),
            verdict: Verdict::Wanders,
        });
        tone.course = Some((0..=20).map(at).collect());
        tone.order = Some(4.01);
        analysis.reading = Arc::new(reading);
        desk.latest.asked = Some((1, request));
        desk.latest.take(super::super::worker::Answer::Reading(1, Box::new(analysis)));
        desk.session.picked_hz = Some(100.2);
        desk
    }

    #[test]
    fn the_card_says_verdict_reason_budget_course_and_what_would_part_it() {
        use eframe::egui::Context;
        use egui_kittest::Harness;
        use egui_kittest::kittest::Queryable as _;
        let (desk, mut view, mut intents) = (desk(), View::default(), Intents::new());
        let reading = desk.reading().unwrap().clone();
        let dress = |ctx: &Context| super::super::workbench::Workbench::dress(ctx);
        for _ in 0..2 {
            let mut harness = Harness::builder()
                .with_size([300.0, 1200.0])
                .with_context_setup(dress)
                .build_ui(|ui| super::super::card::show(ui, &desk, &mut view, &reading, &mut intents));
            harness.step();
            for text in [
                "wanders",
                "set by A. Mason: the run was cut short (found: disputed)",
                "the clear readings lie 0.4 dB apart",
                "not stated",
                "order 4.0100",
                "Frequency over the segment: 100.00 to 100.40 Hz, from 0.00 s to 4.10 s",
                "Level over the segment: ",
                "periods in the segment",
            ] {
                assert!(harness.query_all_by_label_contains(text).next().is_some(), "{text}");
            }
            harness.get_by_label("Set the segment to whole periods of the picked tone").click();
            harness.step();
            drop(harness);
            // Widths of main lobes are computed in the background.
            for wanted in view.merits.wanted() {
                let (key, figures) = wanted.compute();
                view.merits.take(key, figures);
            }
        }
        assert!(intents.iter().any(|i| matches!(i, Intent::Do(Action::WholePeriods))));
        // 1.2 Hz apart: the half main lobe of five terms is five bins.
        let tone = &reading.tones[0];
        let lengths = advice::lengths(tone, &reading, &desk, &mut view);
        let flat_top = lengths.iter().find(|l| l.starts_with("flat-top")).unwrap();
        assert!(flat_top.contains("parts it from 101.40 Hz in a segment of 4.17 s or more"), "{flat_top}");
    }

    #[test]
    fn a_drift_has_its_sign() {
        assert_eq!((signed(0.5, 1), signed(-0.5, 1)), ("+0.5".to_owned(), "−0.5".to_owned()));
    }
}
