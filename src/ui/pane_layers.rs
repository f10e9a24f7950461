//! What lies under a pane's curve: the tint of leakage and its peaks, the floor, the smallest tone that would be seen.

use eframe::egui::{Align2, Painter, Rect, Shape, Stroke, Vec2, pos2, vec2};

use super::desk::Desk;
use super::pane::{Plot, STALE};
use super::plot::draw_tint;
use super::view::View;
use super::{figure, theme, widget};
use crate::reading::{Reading, SkirtPeak, SmallestTone};

/// How much of a pane's hue its skirts have.
const TINT: f32 = 0.24;

/// Skirt peaks are marked where neighbours stand at least so far apart, points.
const APART: f32 = 9.0;

/// The hairline is on a skirt peak within so much of it, lines and points.
const NEAR: (f64, f32) = (0.6, 3.0);

/// A tone within so many points of the hairline goes before a skirt peak.
const TONE_FIRST: f32 = 7.0;

/// In a plot so high lines are named.
const ROOMY: f32 = 260.0;

/// Points from place to place of the line of the smallest tone.
const STEP: f32 = 4.0;

impl Plot<'_> {
    /// Tints what the fitted tones make of this pane outside their main lobes; dimmed where it is of an older segment.
    pub(super) fn draw_skirts(&self, painter: &Painter, n_columns: usize, desk: &Desk, view: &mut View) {
        let Some((place, skirts)) = desk.skirts_of(self.index, &self.pane.window) else { return };
        let lobes = skirts.lobes.get(place).map_or(&[][..], |l| l);
        let columns = view.tints.columns_outside(&skirts.spectra, (place, lobes), &self.frequency, n_columns);
        let current = desk.part_is_current(desk.parts.skirts.as_ref().map(|s| s.0));
        let (hue, _) = theme::pane_hue(self.palette, self.pane.id);
        let hue = hue.gamma_multiply(if current { TINT } else { TINT * STALE });
        draw_tint(painter, &columns, self.area, &self.level, hue, self.shared.offset_db);
    }

    pub(super) fn draw_floor(&self, painter: &Painter, reading: &Reading) {
        let Some(floor) = self.read.and_then(|i| reading.panes.get(i)).and_then(|p| p.floor_db) else { return };
        let y = painter.round_to_pixel_center(self.level.at(floor));
        let points = [pos2(self.area.left(), y), pos2(self.area.right(), y)];
        self.name_line(painter, y, "floor");
        painter.extend(Shape::dashed_line(&points, Stroke::new(1.0, self.palette.quiet), 2.0, 3.0));
    }

    /// Along the band, the level of the smallest tone that would be seen: the same in every pane.
    pub(super) fn draw_smallest(&self, painter: &Painter, desk: &Desk) {
        let Some((_, analysis)) = &desk.latest.analysed else { return };
        let Some(smallest) = SmallestTone::of(analysis) else { return };
        let n = (self.area.width() / STEP).ceil().max(1.0) as usize;
        let x = |i: usize| (self.area.left() + i as f32 * STEP).min(self.area.right());
        let y = |x: f32| self.level.at(smallest.at_db(self.frequency.value(x)) + self.shared.offset_db);
        let points: Vec<_> = (0..=n).map(x).map(|x| pos2(x, y(x))).collect();
        let ink = if desk.latest.is_current() { self.palette.quiet } else { self.palette.quiet.gamma_multiply(STALE) };
        self.name_line(painter, y(self.area.left()), "smallest tone that would be seen");
        painter.extend(Shape::dashed_line(&points, Stroke::new(1.0, ink), 9.0, 3.0));
    }

    /// Says what a line across the plot is, where there is room for words.
    fn name_line(&self, painter: &Painter, y: f32, text: &str) {
        if self.area.height() >= ROOMY {
            let at = pos2(self.area.left() + 4.0, y - 1.0);
            widget::write(painter, at, Align2::LEFT_BOTTOM, text, theme::quiet(), self.palette.quiet);
        }
    }

    fn skirt_peaks<'r>(&self, reading: &'r Reading) -> impl Iterator<Item = &'r SkirtPeak> {
        let (read, lo, hi) = (self.read, self.frequency.lo, self.frequency.hi);
        let mine = move |s: &&SkirtPeak| Some(s.pane) == read && (lo..=hi).contains(&s.frequency_hz);
        reading.skirts.iter().filter(mine)
    }

    fn place(&self, skirt: &SkirtPeak) -> eframe::egui::Pos2 {
        pos2(self.frequency.at(skirt.frequency_hz), self.level.at(skirt.level_db))
    }

    /// An open tick over each skirt peak, where they do not crowd each other.
    pub(super) fn draw_skirt_peaks(&self, painter: &Painter, reading: &Reading, desk: &Desk) {
        let mut places: Vec<_> = self.skirt_peaks(reading).map(|s| self.place(s)).collect();
        places.sort_by(|a, b| a.x.total_cmp(&b.x));
        let gaps = places.windows(2).map(|pair| pair.last().map_or(0.0, |b| b.x) - pair.first().map_or(0.0, |a| a.x));
        if gaps.fold(f32::INFINITY, f32::min) < APART {
            return;
        }
        let ink = if desk.latest.is_current() { self.palette.quiet } else { self.palette.quiet.gamma_multiply(0.6) };
        let stroke = Stroke::new(1.2, ink);
        for at in places.into_iter().filter(|at| self.area.contains(*at)) {
            let foot = at - vec2(0.0, 3.0);
            painter.line_segment([foot + vec2(-3.5, -4.0), foot], stroke);
            painter.line_segment([foot, foot + vec2(3.5, -4.0)], stroke);
        }
    }

    /// The skirt peak that the hairline is on.
    fn skirt_at_hairline<'r>(&self, reading: &'r Reading, view: &View) -> Option<&'r SkirtPeak> {
        let hz = view.hairline_hz?;
        let x = self.frequency.at(hz);
        let beside_a_tone = |t: &crate::reading::Tone| (self.frequency.at(t.frequency_hz) - x).abs() < TONE_FIRST;
        if reading.tones.iter().any(beside_a_tone) {
            return None;
        }
        let near = |s: &&SkirtPeak| {
            (s.frequency_hz - hz).abs() <= NEAR.0 * self.shared.spacing_hz
                || (self.frequency.at(s.frequency_hz) - x).abs() <= NEAR.1
        };
        self.skirt_peaks(reading).filter(near).max_by(|a, b| a.level_db.total_cmp(&b.level_db))
    }

    /// Names the skirt peak that the hairline is on, beside it; gives the room that takes.
    pub(super) fn name_skirt(&self, painter: &Painter, reading: &Reading, desk: &Desk, view: &View) -> Option<Rect> {
        let skirt = self.skirt_at_hairline(reading, view).filter(|_| desk.latest.is_current())?;
        let text = named(skirt);
        let size = widget::text_size(painter, &text, theme::quiet());
        let peak = self.place(skirt);
        let left = (peak.x + 6.0).min(self.area.right() - size.x - 4.0).max(self.area.left() + 4.0);
        let top = (peak.y - size.y - 10.0).clamp(self.area.top() + 2.0, self.area.bottom() - size.y - 2.0);
        let rect = Rect::from_min_size(pos2(left, top), size);
        painter.circle_stroke(peak, 4.5, Stroke::new(1.2, self.palette.accent));
        painter.rect_filled(rect.expand2(Vec2::new(3.0, 1.0)), 2.0, self.palette.card);
        widget::write(painter, rect.min, Align2::LEFT_TOP, &text, theme::quiet(), self.palette.ink);
        Some(rect)
    }

    /// How many skirt peaks the pane has and what the hairline is on, for those who do not see it.
    pub(super) fn skirts_in_words(&self, desk: &Desk, view: &View) -> String {
        let Some(reading) = desk.reading().filter(|_| !self.pane.residue) else { return String::new() };
        let n = self.read.and_then(|i| reading.panes.get(i)).and_then(|p| p.n_skirts).filter(|n| *n > 0);
        let n = n.map_or(String::new(), |n| format!(", {n} skirt {}", if n == 1 { "peak" } else { "peaks" }));
        let at = self.skirt_at_hairline(reading, view).map_or(String::new(), |s| format!("; {}", named(s)));
        n + &at
    }
}

/// `skirt of 124.80 Hz, not a tone`.
fn named(skirt: &SkirtPeak) -> String {
    let from: Vec<String> = skirt.from_hz.iter().map(|hz| figure::fixed(*hz, 2)).collect();
    format!("skirt of {} Hz, not a tone", from.join(" and "))
}
