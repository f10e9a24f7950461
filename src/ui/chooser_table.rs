//! The rows of the chooser: a window a row, its figures for this segment.

use eframe::egui::{
    self, Align2, Color32, Painter, Rect, Response, Role, ScrollArea, Sense, Stroke, Ui, WidgetInfo, pos2, vec2,
};

use super::desk::Desk;
use super::merits::Figures;
use super::pane_head::shape_of;
use super::theme::{self, Palette};
use super::view::View;
use super::{figure, widget};
use crate::window::Window;

/// Width of the rows of the windows in panes.
pub(super) const IN_PANES: f32 = 340.0;
/// From this width on both lists have room.
pub(super) const BOTH: f32 = 744.0;

const ROW: f32 = 24.0;
/// The columns of one of the two lists.
#[derive(Debug, Clone, Copy)]
struct Widths {
    /// The name's, with what stands before it.
    name: f32,
    /// What stands before the name.
    indent: f32,
    figure: f32,
}

const CATALOGUE: Widths = Widths { name: 138.0, indent: 32.0, figure: 60.0 };
const PANES: Widths = Widths { name: 106.0, indent: 20.0, figure: 58.0 };

impl Widths {
    /// The right ends of the figures' columns.
    fn ends(self, left: f32) -> [f32; 4] {
        std::array::from_fn(|i| left + self.name + (i + 1) as f32 * self.figure)
    }

    /// Where the purpose begins.
    fn purpose(self, left: f32) -> f32 {
        left + self.name + 4.0 * self.figure + 16.0
    }
}

/// A purpose is shown where it has so much room.
const PURPOSE: f32 = 120.0;

const HEADS: [(&str, &str); 4] = [("ENBW", "Hz"), ("side lobe", "dB"), ("scalloping", "dB"), ("main lobe", "Hz")];

/// A window and its figures as they are written for this segment.
#[derive(Debug)]
pub(super) struct Figured {
    window: Window,
    /// In the order of the heads.
    texts: [String; 4],
}

impl Figured {
    /// Of a window over the segment read; dots where the figures are still being computed.
    pub(super) fn of(window: &Window, desk: &Desk, view: &mut View) -> Self {
        let samples = desk.segment().map_or(1, |s| s.span.samples);
        let texts = view.merits.of(window, samples).map_or_else(
            || std::array::from_fn(|_| "…".to_owned()),
            |figures| written(&figures, desk.line_spacing_hz()),
        );
        Self { window: window.clone(), texts }
    }

    fn name(&self, panes: &[usize]) -> String {
        let [enbw, side_lobe, scalloping, main_lobe] = &self.texts;
        let panes: Vec<String> = panes.iter().map(|i| format!(", in pane {}", i + 1)).collect();
        format!(
            "{}: ENBW {enbw} Hz, highest side lobe {side_lobe} dB, scalloping loss {scalloping} dB, main lobe \
             {main_lobe} Hz{}",
            self.window,
            panes.concat()
        )
    }
}

fn written(figures: &Figures, spacing_hz: f64) -> [String; 4] {
    let hz = |bins: f64| figure::significant(bins * spacing_hz, 3);
    [
        hz(figures.enbw_bins),
        figure::fixed(figures.side_lobe_db, 1),
        figure::fixed(figures.scalloping_db, 3),
        hz(figures.main_lobe_bins),
    ]
}

/// The panes that hold the very window.
fn panes_of(window: &Window, desk: &Desk) -> Vec<usize> {
    let panes = desk.session.panes.iter().enumerate();
    panes.filter(|(_, p)| p.window == *window).map(|(i, _)| i).collect()
}

/// The heads of the columns.
pub(super) fn head(ui: &mut Ui, purpose: bool) {
    let widths = if purpose { CATALOGUE } else { PANES };
    let (rect, _) = ui.allocate_exact_size(vec2(ui.available_width(), 32.0), Sense::hover());
    let (painter, ink) = (ui.painter_at(rect), theme::palette(ui.ctx()).quiet);
    let title = if purpose { "window" } else { "in the panes" };
    let base = rect.bottom() - 2.0;
    widget::write(&painter, pos2(rect.left() + 4.0, base), Align2::LEFT_BOTTOM, title, theme::quiet(), ink);
    for ((what, unit), right) in HEADS.into_iter().zip(widths.ends(rect.left())) {
        widget::write(&painter, pos2(right, base - 13.0), Align2::RIGHT_BOTTOM, what, theme::quiet(), ink);
        widget::write(&painter, pos2(right, base), Align2::RIGHT_BOTTOM, unit, theme::quiet(), ink);
    }
    let left = widths.purpose(rect.left());
    if purpose && rect.right() - left >= PURPOSE {
        let at = pos2(left, base);
        widget::write(&painter, at, Align2::LEFT_BOTTOM, "when to reach for it", theme::quiet(), ink);
    }
}

/// One row of the catalogue, marked in the hue of the panes that hold the window.
pub(super) fn catalogue_row(ui: &mut Ui, figured: &Figured, marked: bool, desk: &Desk) -> Response {
    let palette = theme::palette(ui.ctx());
    let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width() - 8.0, ROW), Sense::click());
    let panes = panes_of(&figured.window, desk);
    let name = figured.name(&panes);
    response.widget_info(|| WidgetInfo::selected(Role::Button, true, marked, &name));
    if !ui.is_rect_visible(rect) {
        return response;
    }
    let painter = ui.painter_at(rect);
    if marked {
        painter.rect_filled(rect, 2.0, palette.selection);
    }
    if response.hovered() || response.has_focus() {
        painter.rect_stroke(rect, 2.0, Stroke::new(1.0, palette.accent), egui::StrokeKind::Inside);
    }
    let hue = panes.first().and_then(|&i| hue_of(palette, desk, i));
    let place = Rect::from_min_size(pos2(rect.left() + 4.0, rect.center().y - 7.0), vec2(22.0, 14.0));
    widget::glyph(&painter, place, &shape_of(ui, &figured.window), hue.unwrap_or(palette.quiet));
    write(&painter, rect, CATALOGUE, figured, palette);
    let left = CATALOGUE.purpose(rect.left());
    if rect.right() - left >= PURPOSE {
        let (at, purpose) = (pos2(left, rect.center().y), figured.window.entry().purpose);
        widget::write_cut(&painter, at, rect.right() - left, purpose, theme::quiet(), palette.quiet);
    }
    response
}

/// The windows that stand in panes already, to compare with.
pub(super) fn in_panes(ui: &mut Ui, desk: &Desk, view: &mut View) {
    let palette = theme::palette(ui.ctx());
    head(ui, false);
    ScrollArea::vertical().id_salt("windows in panes").auto_shrink(false).show(ui, |ui| {
        ui.spacing_mut().item_spacing.y = 0.0;
        for (i, pane) in desk.session.panes.iter().enumerate() {
            let figured = Figured::of(&pane.window, desk, view);
            let (rect, response) = ui.allocate_exact_size(vec2(ui.available_width(), ROW), Sense::hover());
            let name = figured.name(&[i]);
            response.widget_info(|| WidgetInfo::labeled(Role::Label, true, &name));
            let painter = ui.painter_at(rect);
            if let Some(hue) = hue_of(palette, desk, i) {
                let y = painter.round_to_pixel_center(rect.center().y);
                painter.hline(rect.left() + 2.0..=rect.left() + 14.0, y, Stroke::new(2.5, hue));
            }
            write(&painter, rect, PANES, &figured, palette);
        }
    });
}

fn hue_of(palette: &Palette, desk: &Desk, pane: usize) -> Option<Color32> {
    desk.session.panes.get(pane).map(|p| theme::pane_hue(palette, p.id).0)
}

/// A row's name and figures.
fn write(painter: &Painter, rect: Rect, widths: Widths, figured: &Figured, palette: &Palette) {
    let at = pos2(rect.left() + widths.indent, rect.center().y);
    // A long name may reach into the first figure's column as far as that is empty.
    let room = widths.name - widths.indent + widths.figure * 0.25;
    widget::write_cut(painter, at, room, &figured.window.to_string(), theme::body(), palette.ink);
    for (text, right) in figured.texts.iter().zip(widths.ends(rect.left())) {
        widget::write(painter, pos2(right, rect.center().y), Align2::RIGHT_CENTER, text, theme::body(), palette.ink);
    }
}
