//! The panes in a grid that fits, and what they share: axes, hairline, level range.

use eframe::egui::{self, Rect, ScrollArea, Sense, Ui, UiBuilder, pos2, vec2};

use super::action::Action;
use super::desk::Desk;
use super::plot::Axis;
use super::view::{Intent, Intents, View, frequency_range};
use super::{pane, theme};
use crate::session::{FrequencyAxis, MAX_PANES};
use crate::units::{Scale, from_db};

/// Space between panes.
const GAP: f32 = 8.0;
/// A pane is at least so wide, where the screen allows.
const LEAST_WIDTH: f32 = 300.0;
/// A pane is at least so high; a grid that is higher scrolls.
const LEAST_HEIGHT: f32 = 148.0;
/// The level axis reaches at least so far over the highest line.
const HEADROOM_DB: f64 = 15.0;
/// At most so many columns.
const MOST_COLUMNS: usize = 4;

/// What all panes share in a frame.
#[derive(Debug, Clone, Copy)]
pub(super) struct Shared {
    /// Frequencies shown, Hz.
    pub(super) frequency: (f64, f64),
    /// Laid out by the logarithm.
    pub(super) log: bool,
    /// Levels shown, dB over the reference.
    pub(super) level: (f64, f64),
    /// From decibels over full scale to decibels over the reference.
    pub(super) offset_db: f64,
    /// 1/T of the curves shown.
    pub(super) spacing_hz: f64,
    /// Half the sample rate.
    pub(super) nyquist_hz: f64,
}

impl Shared {
    /// The frequency axis from `left` to `right`.
    pub(super) fn frequency_axis(&self, left: f32, right: f32) -> Axis {
        let (lo, hi) = self.frequency;
        if self.log {
            Axis::logarithmic(lo.max(self.spacing_hz.min(hi / 10.0)), hi, left, right)
        } else {
            Axis::linear(lo, hi, left, right)
        }
    }
}

/// What `scale` adds to decibels over full scale.
pub(super) fn offset_db(scale: &Scale) -> f64 {
    let offset = scale.level_db(scale.units_per_full_scale() * from_db(0.0));
    if offset.is_finite() { offset } else { 0.0 }
}

/// What the panes share now; fits the level range where that is due.
pub(super) fn shared(desk: &Desk, view: &mut View) -> Shared {
    let axes = desk.session.axes;
    let rate = desk.session.sample_rate_hz();
    let offset_db = offset_db(&desk.shown_scale());
    let due = view.refit_level && !view.marking && desk.latest.curves_are_current();
    if (due || view.fitted_level.is_none())
        && let Some(fitted) = fit_level(desk, offset_db)
    {
        view.fitted_level = Some(fitted);
        view.refit_level = !desk.latest.curves_are_current();
    }
    let level = axes.level_db.or(view.fitted_level).unwrap_or((offset_db - 140.0, offset_db));
    Shared {
        frequency: frequency_range(&axes, rate),
        log: axes.frequency_axis == FrequencyAxis::Logarithmic,
        level,
        offset_db,
        spacing_hz: desk.line_spacing_hz(),
        nyquist_hz: rate / 2.0,
    }
}

/// A level range that holds the highest line of every pane and reaches somewhat below their floors.
fn fit_level(desk: &Desk, offset_db: f64) -> Option<(f64, f64)> {
    let spectra = desk.latest.spectra()?;
    let edges = Axis::linear(0.0, spectra.sample_rate_hz() / 2.0, 0.0, 1.0).edges(64);
    let (mut top, mut middle) = (f64::NEG_INFINITY, f64::INFINITY);
    for pane in 0..spectra.windows().len() {
        let mut least: Vec<f64> = Vec::new();
        for column in spectra.curve_db(pane, &edges).iter().filter(|c| !c.is_empty()) {
            top = top.max(f64::from(column.max));
            least.push(f64::from(column.max));
        }
        least.sort_by(f64::total_cmp);
        if let Some(value) = least.get(least.len() / 8) {
            middle = middle.min(*value);
        }
    }
    if !top.is_finite() || top <= -390.0 {
        return None;
    }
    // Room for the labels of the highest marks.
    let top = ((top + offset_db + HEADROOM_DB) / 10.0).ceil() * 10.0;
    let low = ((middle + offset_db - 25.0) / 10.0).floor() * 10.0;
    Some((low.clamp(top - 200.0, top - 60.0), top))
}

/// Columns and rows for `n` panes in a place so wide.
fn grid(n: usize, width: f32) -> (usize, usize) {
    let fit = (((width + GAP) / (LEAST_WIDTH + GAP)).floor() as usize).clamp(1, MOST_COLUMNS);
    let rows = n.max(1).div_ceil(fit);
    (n.max(1).div_ceil(rows), rows)
}

/// Shows the panes.
pub(super) fn show(ui: &mut Ui, desk: &Desk, view: &mut View, intents: &mut Intents) {
    let shared = shared(desk, view);
    let panes = &desk.session.panes;
    view.enlarged = view.enlarged.filter(|id| panes.iter().any(|p| p.id == *id));
    let shown: Vec<usize> =
        (0..panes.len()).filter(|&i| view.enlarged.is_none_or(|id| panes.get(i).is_some_and(|p| p.id == id))).collect();
    let area = ui.available_rect_before_wrap();
    let (columns, rows) = grid(shown.len(), area.width());
    let height = ((area.height() + GAP) / rows as f32 - GAP).max(LEAST_HEIGHT);
    let total = rows as f32 * (height + GAP) - GAP;
    if total <= area.height() + 0.5 {
        lay(ui, area, (columns, height), &shown, desk, view, &shared, intents);
        return;
    }
    ScrollArea::vertical().id_salt("panes").auto_shrink(false).show(ui, |ui| {
        let (rect, _) = ui.allocate_exact_size(vec2(ui.available_width() - 8.0, total), Sense::hover());
        if let Some(id) = view.reveal_pane.take()
            && let Some(place) = shown.iter().position(|&i| panes.get(i).is_some_and(|p| p.id == id))
        {
            let top = rect.top() + (place / columns) as f32 * (height + GAP);
            ui.scroll_to_rect(Rect::from_x_y_ranges(rect.x_range(), top..=top + height), None);
        }
        lay(ui, rect, (columns, height), &shown, desk, view, &shared, intents);
    });
}

#[expect(clippy::too_many_arguments, reason = "one place calls it, to keep the two ways of laying out alike")]
fn lay(
    ui: &mut Ui,
    area: Rect,
    (columns, height): (usize, f32),
    shown: &[usize],
    desk: &Desk,
    view: &mut View,
    shared: &Shared,
    intents: &mut Intents,
) {
    let width = (area.width() + GAP) / columns as f32 - GAP;
    let cell = |place: usize| {
        let (row, column) = (place / columns, place % columns);
        let min = pos2(area.left() + column as f32 * (width + GAP), area.top() + row as f32 * (height + GAP));
        Rect::from_min_size(min, vec2(width, height))
    };
    for (place, &index) in shown.iter().enumerate() {
        let rect = cell(place);
        if ui.is_rect_visible(rect) {
            pane::show(ui, rect, index, desk, view, shared, intents);
        }
    }
    let last = shown.len();
    if !last.is_multiple_of(columns) && view.enlarged.is_none() && desk.session.panes.len() < MAX_PANES {
        free_cell(ui, cell(last), intents);
    }
}

/// The place of a pane that is not there yet.
fn free_cell(ui: &mut Ui, rect: Rect, intents: &mut Intents) {
    let palette = theme::palette(ui.ctx());
    let corners = [rect.left_top(), rect.right_top(), rect.right_bottom(), rect.left_bottom(), rect.left_top()];
    ui.painter().extend(egui::Shape::dashed_line(&corners, egui::Stroke::new(1.0, palette.rule), 5.0, 4.0));
    let place = Rect::from_center_size(rect.center(), vec2(110.0, 28.0));
    let mut inner = ui.new_child(UiBuilder::new().max_rect(place).id_salt("free cell"));
    inner.vertical_centered(|ui| {
        if ui.button("Add a pane").clicked() {
            intents.push(Intent::Do(Action::AddPane));
        }
    });
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn one_to_eight_panes_fill_the_screens_named() {
        // Widths left beside the setup column at 1024, 1280 and 1920 points.
        assert_eq!(grid(6, 768.0), (2, 3));
        assert_eq!(grid(6, 1024.0), (3, 2));
        assert_eq!(grid(8, 1664.0), (4, 2));
        assert_eq!(grid(1, 1664.0), (1, 1));
        assert_eq!(grid(5, 1664.0), (3, 2));
        assert_eq!(grid(3, 200.0), (1, 3));
    }

    #[test]
    fn full_scale_reads_zero_in_full_scales() {
        assert!(offset_db(&Scale::default()).abs() < 1e-9);
    }
}
