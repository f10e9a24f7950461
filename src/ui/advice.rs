//! Which windows suit this segment, and which length of it would part a crowded tone.

use eframe::egui::{Align, Button, Label, Layout, RichText, Ui, vec2};

use super::action::{Action, entry_of};
use super::desk::Desk;
use super::table::picked_row;
use super::view::{Intent, Intents, View};
use super::widget::{quiet, section};
use super::{figure, theme};
use crate::reading::{AdviceLine, PaneReading, Reading, ReadingState, Segment, Tone, Verdict};
use crate::session::{Command, MAX_PANES};
use crate::signal::Span;
use crate::window::Window;

/// So many of the windows ranked are shown.
const SHOWN: usize = 5;

/// Width of the column that says where a window is in use, or puts it to use.
const USE: f32 = 72.0;

/// A neighbour with less than this part of a tone's amplitude does not crowd it.
const CROWDING_PART: f64 = 1.15e-3;

/// The window ranked first for the segment as it is.
pub(super) fn advised(desk: &Desk) -> Option<Window> {
    let reading = desk.reading().filter(|_| desk.latest.is_current())?;
    Window::parse(&reading.advice.first()?.written()).ok()
}

/// The segment with the length nearest to its own that holds whole periods of the picked tone; its start is kept, and
/// where the capture ends before it there are fewer periods.
pub(super) fn whole_periods(desk: &Desk) -> Option<Span> {
    let reading = desk.reading()?;
    let tone = reading.tones.get(picked_row(reading, desk)?)?;
    let span = desk.segment()?.span;
    with_whole_periods(span, desk.session.sample_rate_hz() / tone.frequency_hz, desk.session.capture.frames)
}

fn with_whole_periods(span: Span, samples_a_period: f64, frames: u64) -> Option<Span> {
    if !(samples_a_period.is_finite() && samples_a_period > 0.0) {
        return None;
    }
    let room = frames.saturating_sub(span.start);
    let most = ((room as f64 + 0.5) / samples_a_period).floor();
    let periods = (span.samples as f64 / samples_a_period).round().max(1.0).min(most);
    let samples = (periods * samples_a_period).round() as u64;
    (Segment::LEAST..=room).contains(&samples).then_some(Span { samples, ..span })
}

/// The section of the setup column: windows ranked, what is in use marked with its own expected error.
pub(super) fn show(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let Some(reading) = desk.reading().filter(|r| !r.advice.is_empty()) else { return };
    section(ui, "Windows advised");
    let current = desk.latest.is_current();
    ui.scope(|ui| {
        if !current {
            ui.multiply_opacity(0.55);
        }
        ui.spacing_mut().item_spacing.y = 1.0;
        if reading.advice.first().is_some_and(|best| best.expected_worst_error_db.is_none()) {
            quiet(ui, "No window reads all tones; the first reads most.");
        }
        quiet(ui, "window and worst error to expect, dB");
        for (rank, line) in reading.advice.iter().take(SHOWN).enumerate() {
            ranked(ui, (rank, line), desk, current, intents);
        }
        own(ui, reading);
    });
}

/// One window ranked, and what it takes to use it.
fn ranked(ui: &mut Ui, (rank, line): (usize, &AdviceLine), desk: &Desk, current: bool, intents: &mut Intents) {
    let written = line.written();
    let panes = desk.session.panes.iter().position(|p| p.window.to_string() == written);
    let error = error(line.expected_worst_error_db);
    ui.horizontal(|ui| {
        ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
            ui.spacing_mut().item_spacing.x = 4.0;
            ui.spacing_mut().button_padding.x = 5.0;
            use_of(ui, |ui| match panes {
                Some(pane) => {
                    quiet(ui, format!("pane {}", pane + 1));
                }
                None => buttons(ui, &written, desk, current, intents),
            });
            ui.label(RichText::new(&error).font(theme::quiet()));
            ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                let text = Label::new(RichText::new(&written).font(theme::quiet())).selectable(false).truncate();
                let name = format!("{written}: worst error {error} dB, {}", line.why);
                ui.add(text).on_hover_text(&name);
            });
        });
    });
    if rank == 0 {
        quiet(ui, &line.why);
    }
}

/// What stands behind a window's expected error, in a column of its own.
fn use_of(ui: &mut Ui, contents: impl FnOnce(&mut Ui)) {
    let size = vec2(USE, ui.spacing().interact_size.y);
    ui.allocate_ui_with_layout(size, Layout::right_to_left(Align::Center), |ui| {
        ui.set_min_width(USE);
        contents(ui);
    });
}

fn buttons(ui: &mut Ui, written: &str, desk: &Desk, current: bool, intents: &mut Intents) {
    let Ok(window) = Window::parse(written) else { return };
    let key = |action| entry_of(action).and_then(|e| e.key).map(|k| ui.ctx().format_shortcut(&k)).unwrap_or_default();
    let keys = (key(Action::UseAdvised), key(Action::AddAdvised));
    let new = ui.add_enabled(current && desk.session.panes.len() < MAX_PANES, Button::new("new").small());
    let new = new.on_hover_text(format!("{written} in a new pane ({} takes the first)", keys.1));
    let new = new.on_disabled_hover_text("Eight panes are the most: remove one first.");
    if new.accessible_name(format!("Put {written} in a new pane")).clicked() {
        intents.push(Intent::Change(Command::AddPane(window.clone())));
    }
    let put = ui.add_enabled(current, Button::new("use").small());
    let put = put.on_hover_text(format!("{written} in the pane last touched ({} takes the first)", keys.0));
    if put.accessible_name(format!("Put {written} in the pane last touched")).clicked() {
        intents.push(Intent::Put(window));
    }
}

/// The panes in use whose windows are not among those shown.
fn own(ui: &mut Ui, reading: &Reading) {
    let shown: Vec<String> = reading.advice.iter().take(SHOWN).map(AdviceLine::written).collect();
    let rest: Vec<_> = reading.panes.iter().enumerate().filter(|(_, p)| !shown.contains(&p.written())).collect();
    if rest.is_empty() {
        return;
    }
    quiet(ui, "also in use");
    for (i, pane) in rest {
        ui.horizontal(|ui| {
            ui.spacing_mut().interact_size.y = 16.0;
            ui.with_layout(Layout::right_to_left(Align::Center), |ui| {
                use_of(ui, |ui| drop(quiet(ui, format!("pane {}", i + 1))));
                ui.label(RichText::new(error(pane.expected_worst_error_db)).font(theme::quiet()));
                ui.with_layout(Layout::left_to_right(Align::Center), |ui| {
                    let text = RichText::new(pane.written()).font(theme::quiet());
                    ui.add(Label::new(text).selectable(false).truncate());
                });
            });
        });
    }
}

fn error(expected_db: Option<f64>) -> String {
    expected_db.map_or_else(|| "misses some".to_owned(), |db| figure::significant(db, 2))
}

/// For a crowded tone: from which length of segment on each pane that cannot part it from its neighbour would.
pub(super) fn lengths(tone: &Tone, reading: &Reading, desk: &Desk, view: &mut View) -> Vec<String> {
    let crowded = |r: &PaneReading| r.state == ReadingState::Crowded;
    let is_crowded = tone.verdict == Some(Verdict::Crowded) || tone.readings.iter().any(crowded);
    let Some(neighbour) = neighbour(tone, reading).filter(|_| is_crowded) else { return Vec::new() };
    let distance_hz = (neighbour.frequency_hz - tone.frequency_hz).abs();
    let samples = desk.segment().map_or(1, |s| s.span.samples);
    let line = |(r, p): (&PaneReading, &crate::reading::PaneFacts)| {
        let window = Window::parse(&p.written()).ok().filter(|_| crowded(r))?;
        let half_bins = 0.5 * view.merits.of(&window, samples)?.main_lobe_bins;
        let seconds = half_bins / distance_hz;
        let (seconds, hz) = (figure::significant(seconds, 3), figure::fixed(neighbour.frequency_hz, 2));
        Some(format!("{window} parts it from {hz} Hz in a segment of {seconds} s or more"))
    };
    tone.readings.iter().zip(&reading.panes).filter_map(line).collect()
}

/// The nearest tone that is not so weak that it could not matter.
fn neighbour<'r>(tone: &Tone, reading: &'r Reading) -> Option<&'r Tone> {
    let distance = |t: &&Tone| (t.frequency_hz - tone.frequency_hz).abs();
    let matters = |t: &&Tone| t.amplitude > CROWDING_PART * tone.amplitude && distance(t) > 0.0;
    reading.tones.iter().filter(matters).min_by(|a, b| distance(a).total_cmp(&distance(b)))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn whole_periods_are_the_nearest_and_end_inside_the_capture() {
        let span = Span { start: 100, samples: 1000 };
        let whole = |a_period, frames| with_whole_periods(span, a_period, frames).map(|s| (s.start, s.samples));
        // 1000/81.92 = 12.2 periods: 12 of them.
        assert_eq!(whole(81.92, 10_000), Some((100, 983)));
        assert_eq!(whole(80.0, 10_000), Some((100, 1040)));
        assert_eq!(whole(80.0, 1100), Some((100, 960)));
        assert_eq!(whole(3000.0, 10_000), Some((100, 3000)));
        assert_eq!(whole(3000.0, 2000), None);
        assert_eq!(whole(f64::NAN, 2000), None);
        assert_eq!(whole(0.0, 2000), None);
        assert_eq!(with_whole_periods(Span { start: 0, samples: 2 }, 2.0, 100), None);
    }

    #[test]
    fn errors_are_stated_or_said_to_be_none() {
        assert_eq!(error(Some(0.4512)), "0.45");
        assert_eq!(error(None), "misses some");
    }
}
