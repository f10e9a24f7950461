//! What each action of the menus does.

use eframe::egui::Context;

use super::action::Action;
use super::advice::{advised, whole_periods};
use super::chooser::Choosing;
use super::decide;
use super::desk::Desk;
use super::dialog::Dialog;
use super::plot::Axis;
use super::preferences::SCALES;
use super::services::Ask;
use super::table;
use super::view::{Intents, View, frequency_range, held_range};
use super::workbench::Workbench;
use crate::session::{Command, FrequencyAxis, HandTone, MAX_PANES, PaneId, ViewAxes};
use crate::signal::Span;

/// A step of the screen's scale.
const SCALE_STEP: f32 = 0.1;
/// A tone is shown with so many lines to either side.
const LINES_AROUND: f64 = 30.0;

impl Workbench {
    /// Does what a menu entry says.
    pub(super) fn act(&mut self, ctx: &Context, action: Action) {
        match action {
            Action::OpenCapture => self.ask(Ask::Capture),
            Action::OpenSession => self.ask(Ask::Session),
            Action::OpenPath => self.dialogs.put(Dialog::Path(String::new())),
            Action::OpenDemonstration => {
                if let Some(path) = self.services.demonstration.clone() {
                    self.want_open(&path);
                }
            }
            Action::Save => self.save(),
            Action::SaveAs if self.desk.is_some() => self.ask(Ask::SaveSession(self.proposed_name())),
            Action::Undo | Action::Redo => self.step_back(action == Action::Undo),
            Action::SavePath => self.ask_save_path(),
            Action::Quit => self.want_quit(ctx),
            Action::Keys => self.dialogs.put(Dialog::Keys),
            Action::About => self.dialogs.put(Dialog::About),
            Action::ToggleSkirts => self.view.skirts = !self.view.skirts,
            Action::ToggleSmallest => self.view.smallest = !self.view.smallest,
            Action::ToggleSetup => self.view.setup_open = !self.view.setup_open,
            Action::Larger => scale(ctx, ctx.zoom_factor() + SCALE_STEP),
            Action::Smaller => scale(ctx, ctx.zoom_factor() - SCALE_STEP),
            Action::NormalSize => scale(ctx, SCALES.0),
            Action::CopyTable => self.copy_table(ctx),
            Action::NoteTone => self.ask_note(),
            Action::RefuseTone | Action::Overrule => self.ask_decision(action),
            other => self.act_on_desk(other),
        }
    }

    fn step_back(&mut self, undo: bool) {
        let Some(desk) = &mut self.desk else { return };
        let done = if undo { desk.history.undo(&mut desk.session) } else { desk.history.redo(&mut desk.session) };
        if done {
            self.view.refit_level = true;
            self.note_change();
        }
    }

    fn copy_table(&mut self, ctx: &Context) {
        let Some(desk) = &self.desk else { return };
        match desk.reading().filter(|_| desk.latest.is_current()) {
            Some(reading) => {
                ctx.copy_text(table::as_text(reading));
                self.notices.tell("The tone table is on the clipboard, tab-separated.");
            }
            None => self.notices.refuse("The figures are not those of the segment yet: wait until they are computed."),
        }
    }

    fn ask_note(&mut self) {
        let Some(desk) = &self.desk else { return };
        let Some(frequency_hz) = desk.session.picked_hz else { return };
        let spacing = desk.line_spacing_hz();
        let near = |hz: Option<f64>| hz.is_some_and(|hz| (hz - frequency_hz).abs() <= spacing);
        let old = desk.session.notes.iter().find(|n| near(n.frequency_hz));
        let text = old.map(|n| n.text.clone()).unwrap_or_default();
        let frequency_hz = old.and_then(|n| n.frequency_hz).unwrap_or(frequency_hz);
        self.dialogs.put(Dialog::ToneNote { frequency_hz, text });
    }

    fn act_on_desk(&mut self, action: Action) {
        let Some(desk) = &self.desk else { return };
        let mut intents = Intents::new();
        let command = on_segment(desk, &mut self.view, action)
            .or_else(|| on_axes(desk, &mut self.view, action))
            .or_else(|| on_panes(desk, &mut self.view, action))
            .or_else(|| on_tones(desk, &mut self.view, action, &mut intents));
        intents.extend(command.map(super::view::Intent::Change));
        for intent in intents {
            if let super::view::Intent::Change(command) = intent {
                self.change(decide::signed(command, self.person()));
                // What a menu does is a step of its own, also where a drag or a spin would go on.
                if let Some(desk) = &mut self.desk {
                    desk.history.close_step();
                }
            }
        }
    }
}

fn scale(ctx: &Context, factor: f32) {
    ctx.set_zoom_factor(factor.clamp(SCALES.0, SCALES.1));
}

fn on_segment(desk: &Desk, view: &mut View, action: Action) -> Option<Command> {
    let session = &desk.session;
    let frames = session.capture.frames as f64;
    match action {
        Action::UseSuggestion => {
            view.refit_level = true;
            desk.steady.longest().map(|span| Command::MoveSegment(session.current, span))
        }
        Action::NextSuggestion => {
            view.refit_level = true;
            let span = next_suggestion(desk)?;
            if view.strip.is_some_and(|(lo, hi)| (span.start as f64) < lo || span.end() as f64 > hi) {
                view.strip = None;
            }
            Some(Command::MoveSegment(session.current, span))
        }
        Action::MarkAll => {
            view.refit_level = true;
            let span = Span { start: 0, samples: session.capture.frames };
            Some(Command::MoveSegment(session.current, span))
        }
        Action::WholePeriods => {
            view.refit_level = true;
            Some(Command::MoveSegment(session.current, whole_periods(desk)?))
        }
        Action::AddSegment => {
            let (lo, hi) = view.strip.unwrap_or((frames / 4.0, frames * 3.0 / 4.0));
            Some(Command::AddSegment(Span::from_range(lo.max(0.0) as u64..hi.min(frames) as u64)))
        }
        Action::NextSegment => {
            let at = session.segments.iter().position(|s| s.id == session.current)?;
            let next = session.segments.iter().cycle().nth(at + 1)?;
            Some(Command::ChooseSegment(next.id))
        }
        Action::RemoveSegment => Some(Command::RemoveSegment(session.current)),
        Action::ShowSegment => {
            let span = desk.segment()?.span;
            let margin = span.samples as f64 * 0.08;
            let range = (span.start as f64 - margin, span.end() as f64 + margin);
            view.strip = super::strip::held_strip(range, frames);
            None
        }
        Action::ShowCapture => {
            view.strip = None;
            None
        }
        _ => None,
    }
}

/// The suggested stretch after the one that is the current segment, from the longest on.
fn next_suggestion(desk: &Desk) -> Option<Span> {
    let suggested = desk.steady.suggested();
    let now = desk.segment()?.span;
    let at = suggested.iter().position(|s| *s == now).map_or(0, |at| at + 1);
    suggested.get(at % suggested.len().max(1)).copied()
}

fn on_axes(desk: &Desk, view: &mut View, action: Action) -> Option<Command> {
    let axes = desk.session.axes;
    let nyquist = desk.session.sample_rate_hz() / 2.0;
    let (lo, hi) = frequency_range(&axes, desk.session.sample_rate_hz());
    let log = axes.frequency_axis == FrequencyAxis::Logarithmic;
    let axis = if log { Axis::logarithmic(lo.max(hi * 1e-4), hi, 0.0, 1.0) } else { Axis::linear(lo, hi, 0.0, 1.0) };
    let about = view.hairline_hz.filter(|hz| (lo..=hi).contains(hz)).unwrap_or_else(|| axis.value(0.5));
    let shown = |range| {
        let frequency_hz = held_range(range, 4.0 * desk.line_spacing_hz(), nyquist);
        Some(Command::SetAxes(ViewAxes { frequency_hz, ..axes }))
    };
    match action {
        Action::ZoomIn => shown(axis.zoomed(0.5, about)),
        Action::ZoomOut => shown(axis.zoomed(2.0, about)),
        Action::PanLeft => shown(axis.panned(0.25)),
        Action::PanRight => shown(axis.panned(-0.25)),
        Action::FullRange => Some(Command::SetAxes(ViewAxes { frequency_hz: None, ..axes })),
        Action::FitTone => {
            let hz = desk.session.picked_hz?;
            view.hairline_hz = Some(hz);
            let around = LINES_AROUND * desk.line_spacing_hz();
            shown((hz - around, hz + around))
        }
        Action::ToggleLog => {
            let frequency_axis = if log { FrequencyAxis::Linear } else { FrequencyAxis::Logarithmic };
            Some(Command::SetAxes(ViewAxes { frequency_axis, ..axes }))
        }
        Action::FitLevel => {
            view.refit_level = true;
            Some(Command::SetAxes(ViewAxes { level_db: None, ..axes }))
        }
        _ => None,
    }
}

/// The pane the pane commands act on: the one last touched, else the first.
pub(super) fn current_pane(desk: &Desk, view: &View) -> Option<(usize, PaneId)> {
    let panes = &desk.session.panes;
    let at = view.pane.and_then(|id| panes.iter().position(|p| p.id == id)).unwrap_or(0);
    panes.get(at).map(|p| (at, p.id))
}

fn on_panes(desk: &Desk, view: &mut View, action: Action) -> Option<Command> {
    let (at, id) = current_pane(desk, view)?;
    match action {
        Action::ChooseWindow => {
            view.choosing = Choosing::for_pane(desk, id);
            None
        }
        Action::AddPane => {
            view.choosing = Choosing::for_new_pane(desk);
            None
        }
        Action::EnlargePane => {
            view.enlarged = if view.enlarged.is_some() { None } else { Some(id) };
            None
        }
        Action::ShowResidue => {
            let residue = desk.session.panes.get(at).is_some_and(|p| p.residue);
            Some(Command::ShowResidue(id, !residue))
        }
        Action::UseAdvised => Some(Command::SetWindow(id, advised(desk)?)),
        Action::AddAdvised => Some(Command::AddPane(advised(desk)?)),
        Action::PaneLeft => at.checked_sub(1).map(|to| Command::MovePane(id, to)),
        Action::PaneRight => Some(Command::MovePane(id, (at + 1).min(MAX_PANES - 1))),
        Action::RemovePane => Some(Command::RemovePane(id)),
        _ => None,
    }
}

fn on_tones(desk: &Desk, view: &mut View, action: Action, intents: &mut Intents) -> Option<Command> {
    match action {
        Action::NextTone => table::step(desk, view, intents, true),
        Action::PreviousTone => table::step(desk, view, intents, false),
        Action::HairlineToTone => view.hairline_hz = desk.session.picked_hz.or(view.hairline_hz),
        Action::CardDown => view.card_scroll += 1,
        Action::CardUp => view.card_scroll -= 1,
        Action::Unpick => return Some(Command::Pick(None)),
        Action::TakeBackTone => return hand_tone(desk, view).map(Command::RemoveHandTone),
        Action::HoldTone => return decide::hold(desk, view),
        Action::PinFundamental => return decide::pin(desk),
        Action::NameTone => {
            let frequency_hz = view.hairline_hz?;
            return Some(Command::AddHandTone(HandTone::at(frequency_hz, false)));
        }
        _ => {}
    }
    None
}

/// The tone named by hand that is picked, or that the hairline stands on. What was named moves to the peak beside it
/// when it is read, so the nearest within a line counts.
pub(super) fn hand_tone(desk: &Desk, view: &View) -> Option<usize> {
    let spacing = desk.line_spacing_hz();
    let nearest = |hz: f64| {
        let tones = desk.session.hand_tones.iter().enumerate();
        let near = tones.map(|(i, t)| (i, (t.frequency_hz - hz).abs())).filter(|(_, d)| *d <= spacing);
        near.min_by(|a, b| a.1.total_cmp(&b.1)).map(|(i, _)| i)
    };
    desk.session.picked_hz.and_then(nearest).or_else(|| view.hairline_hz.and_then(nearest))
}
