//! Curves over pixel columns: kept until what they show changes, drawn without losing a peak.

use std::sync::Arc;

use eframe::egui::{Color32, Mesh, Painter, Pos2, Rect, Shape, Stroke, pos2};

use super::Axis;
use crate::signal::Extent;
use crate::spectrum::{Spectra, Stretch};

/// A pane's columns, in decibels over full scale, and what they were made from.
#[derive(Debug)]
struct Kept {
    spectra: Arc<Spectra>,
    pane: usize,
    lo: f64,
    hi: f64,
    log: bool,
    /// Whether values between lines were at hand.
    fine: bool,
    columns: Arc<Vec<Extent>>,
}

/// The columns of every pane, made anew only where spectra, range or width changed.
#[derive(Debug, Default)]
pub(crate) struct CurveCache {
    kept: Vec<Option<Kept>>,
}

impl CurveCache {
    /// The `n_columns` columns of pane `pane` over the range of `axis`.
    pub(crate) fn columns(
        &mut self,
        spectra: &Arc<Spectra>,
        pane: usize,
        axis: &Axis,
        n_columns: usize,
    ) -> Arc<Vec<Extent>> {
        self.kept_or(spectra, pane, axis, n_columns, |edges| spectra.curve_db(pane, edges))
    }

    /// The columns of pane `pane` outside of `left_out`, which goes with the spectra; see
    /// [`Spectra::curve_outside_db`].
    pub(crate) fn columns_outside(
        &mut self,
        spectra: &Arc<Spectra>,
        (pane, left_out): (usize, &[Stretch]),
        axis: &Axis,
        n_columns: usize,
    ) -> Arc<Vec<Extent>> {
        self.kept_or(spectra, pane, axis, n_columns, |edges| spectra.curve_outside_db(pane, edges, left_out))
    }

    fn kept_or(
        &mut self,
        spectra: &Arc<Spectra>,
        pane: usize,
        axis: &Axis,
        n_columns: usize,
        make: impl FnOnce(&[f64]) -> Vec<Extent>,
    ) -> Arc<Vec<Extent>> {
        if self.kept.len() <= pane {
            self.kept.resize_with(pane + 1, || None);
        }
        let fine = spectra.has_between_lines(pane);
        if let Some(Some(kept)) = self.kept.get(pane)
            && kept.fine == fine
            && Arc::ptr_eq(&kept.spectra, spectra)
            && (kept.pane, kept.log, kept.columns.len()) == (pane, axis.log, n_columns)
            && (kept.lo, kept.hi) == (axis.lo, axis.hi)
        {
            return Arc::clone(&kept.columns);
        }
        let columns = Arc::new(make(&axis.edges(n_columns)));
        let spectra = Arc::clone(spectra);
        let kept = Kept { spectra, pane, lo: axis.lo, hi: axis.hi, log: axis.log, fine, columns: Arc::clone(&columns) };
        if let Some(place) = self.kept.get_mut(pane) {
            *place = Some(kept);
        }
        columns
    }
}

/// How a curve is drawn.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Trace {
    pub(crate) colour: Color32,
    pub(crate) dashed: bool,
    /// Of the stroke, in points.
    pub(crate) width: f32,
    /// Added to every value before it meets the axis.
    pub(crate) offset: f64,
}

/// Draws columns as one stroke that goes through the least and the greatest of each; `left` is the first column's
/// left edge and `width` a column's width, in points.
pub(crate) fn draw_trace(painter: &Painter, columns: &[Extent], (left, width): (f32, f32), level: &Axis, trace: Trace) {
    let stroke = Stroke::new(trace.width, trace.colour);
    for points in strokes(columns, (left, width), level, trace.offset) {
        if trace.dashed {
            painter.extend(Shape::dashed_line(&points, stroke, 6.0, 3.0));
        } else {
            painter.add(Shape::line(points, stroke));
        }
    }
}

/// Fills what lies under the greatest of each column, inside `area`; a column's width follows from their number.
pub(crate) fn draw_tint(painter: &Painter, columns: &[Extent], area: Rect, level: &Axis, colour: Color32, offset: f64) {
    let width = area.width() / columns.len().max(1) as f32;
    let mut mesh = Mesh::default();
    let mut add = |from: usize, to: usize, top: f32| {
        if top < area.bottom() {
            let x = |i: usize| area.left() + i as f32 * width;
            let fill = Rect::from_min_max(pos2(x(from), top.max(area.top())), pos2(x(to), area.bottom()));
            mesh.add_colored_rect(fill, colour);
        }
    };
    // Neighbours of one height are one piece.
    let (mut from, mut top) = (0, f32::INFINITY);
    for (i, column) in columns.iter().enumerate() {
        let here = if column.is_empty() { f32::INFINITY } else { level.at(f64::from(column.max) + offset) };
        if here != top {
            add(from, i, top);
            (from, top) = (i, here);
        }
    }
    add(from, columns.len(), top);
    if !mesh.is_empty() {
        painter.add(mesh);
    }
}

/// The points of the stroke, broken where columns are empty.
fn strokes(columns: &[Extent], (left, width): (f32, f32), level: &Axis, offset: f64) -> Vec<Vec<Pos2>> {
    let mut all = Vec::new();
    let mut points: Vec<Pos2> = Vec::with_capacity(2 * columns.len());
    for (i, column) in columns.iter().enumerate() {
        if column.is_empty() {
            all.push(std::mem::take(&mut points));
            continue;
        }
        let x = left + (i as f32 + 0.5) * width;
        let top = level.at(f64::from(column.max) + offset);
        let low = level.at(f64::from(column.min) + offset);
        if (low - top).abs() < 0.75 {
            points.push(pos2(x, 0.5 * (low + top)));
            continue;
        }
        let last = points.last().map_or(low, |p| p.y);
        let (first, second) = if (last - top).abs() < (last - low).abs() { (top, low) } else { (low, top) };
        points.push(pos2(x, first));
        points.push(pos2(x, second));
    }
    all.push(points);
    all.retain(|p| p.len() > 1);
    all
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_peak_is_on_the_stroke() {
        let columns: Vec<Extent> =
            (0..50).map(|i| Extent { min: -100.0 - (i % 7) as f32, max: if i == 31 { 0.0 } else { -80.0 } }).collect();
        let level = Axis::linear(-120.0, 0.0, 240.0, 0.0);
        let drawn = strokes(&columns, (10.0, 1.0), &level, 0.0);
        assert_eq!(drawn.len(), 1);
        let highest = drawn[0].iter().min_by(|a, b| a.y.total_cmp(&b.y)).unwrap();
        assert_eq!((highest.x, highest.y), (41.5, 0.0));
        assert!(drawn[0].iter().all(|p| p.x.is_finite() && p.y.is_finite()));
    }

    #[test]
    fn empty_columns_break_the_stroke() {
        let full = Extent { min: -60.0, max: -50.0 };
        let columns = [full, full, Extent::EMPTY, full, full];
        let level = Axis::linear(-120.0, 0.0, 240.0, 0.0);
        assert_eq!(strokes(&columns, (0.0, 1.0), &level, 0.0).len(), 2);
        assert!(strokes(&[Extent::EMPTY], (0.0, 1.0), &level, 0.0).is_empty());
    }
}
