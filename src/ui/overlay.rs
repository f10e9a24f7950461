//! The kernel of a window that is being chosen, drawn over a pane's own curve: what the tone and its neighbours would
//! become.

use std::sync::Arc;

use super::desk::Desk;
use super::plot::Axis;
use super::table::picked_row;
use crate::reading::Tone;
use crate::signal::Extent;
use crate::window::{Kernel, Window};

/// A kernel without closed form is that of so many samples at most.
const SAMPLES: u64 = 4096;

/// Nulls are drawn so deep, dB.
const LEAST_DB: f64 = -400.0;

/// Lobes are drawn out where a column is less than this, bins; denser ones would be a smear.
const FINE: f64 = 0.3;

/// Places looked at in a column.
const PLACES: usize = 6;

/// The tone a kernel is centred on: the one picked, else the strongest.
pub(super) fn centre(desk: &Desk) -> Option<&Tone> {
    let tones = &desk.reading()?.tones;
    let picked = picked_row(desk.reading()?, desk).and_then(|row| tones.get(row));
    picked.or_else(|| tones.iter().max_by(|a, b| a.level_db.total_cmp(&b.level_db)))
}

/// What columns are of.
#[derive(Debug, Clone, PartialEq)]
struct Key {
    window: String,
    samples: u64,
    centre_hz: f64,
    spacing_hz: f64,
    range: (f64, f64, bool),
    n_columns: usize,
}

/// The kernel and the columns last drawn.
#[derive(Debug, Default)]
pub(super) struct KernelCache {
    kernel: Option<(String, u64, Kernel)>,
    columns: Option<(Key, Arc<Vec<Extent>>)>,
}

impl KernelCache {
    /// The kernel of `window` over a segment of `samples`, lines `spacing_hz` apart, about `centre_hz`, over the
    /// columns of `axis`: decibels over its own top.
    ///
    /// Cosine sums are those of the segment's length. For the others a table is made at the kernel's first use, and it
    /// is made for 4096 samples at most, since this is the thread that draws: in bins that kernel is the same to the
    /// eye out to a quarter of its length, and past that nothing is drawn.
    pub(super) fn columns(
        &mut self,
        window: &Window,
        samples: u64,
        (centre_hz, spacing_hz): (f64, f64),
        axis: &Axis,
        n_columns: usize,
    ) -> Arc<Vec<Extent>> {
        let text = window.to_string();
        let range = (axis.lo, axis.hi, axis.log);
        let key = Key { window: text.clone(), samples, centre_hz, spacing_hz, range, n_columns };
        if let Some((_, columns)) = self.columns.as_ref().filter(|(kept, _)| *kept == key) {
            return Arc::clone(columns);
        }
        let exact = window.cosine_terms().is_some() || samples <= SAMPLES;
        let n = if exact { samples } else { SAMPLES };
        if self.kernel.as_ref().is_none_or(|k| (&k.0, k.1) != (&text, n)) {
            self.kernel = Some((text, n, window.kernel(n as usize)));
        }
        let reach_bins = if exact { f64::INFINITY } else { n as f64 / 4.0 };
        let edges: Vec<f64> = axis.edges(n_columns).iter().map(|hz| (hz - centre_hz) / spacing_hz).collect();
        let kernel = self.kernel.as_ref().map(|k| &k.2);
        let columns = Arc::new(kernel.map_or_else(Vec::new, |kernel| kernel_columns(kernel, &edges, reach_bins)));
        self.columns = Some((key, Arc::clone(&columns)));
        columns
    }
}

/// The kernel over columns between neighbouring edges, in bins. A column of a small part of a bin holds least and greatest;
/// a wider one only the greatest, looked for half-way between the bins, where the side lobes of most windows have
/// their tops, and in the middle of the main lobe.
fn kernel_columns(kernel: &Kernel, edges: &[f64], reach_bins: f64) -> Vec<Extent> {
    let top = kernel.at(0.0).norm();
    let level = |nu: f64| (20.0 * (kernel.at(nu).norm() / top).log10()).max(LEAST_DB) as f32;
    let column = |from: f64, to: f64| {
        if !(top > 0.0 && from < to && from <= reach_bins && to >= -reach_bins) {
            return Extent::EMPTY;
        }
        let place = |i: usize, of: usize| from + (to - from) * i as f64 / of as f64;
        if to - from < FINE {
            return (0..=PLACES).fold(Extent::EMPTY, |all, i| all.with(level(place(i, PLACES))));
        }
        // The column may be narrower than a lobe: the tops beside it are then its envelope.
        let tops = (0..PLACES).map(|i| level(place(2 * i + 1, 2 * PLACES).floor() + 0.5));
        let inside = from.abs().min(to.abs()) < 4.0;
        let tops = tops.filter(|_| !inside || to - from >= 1.0);
        let tops = tops.chain(inside.then(|| (0..=PLACES).map(|i| level(place(i, PLACES)))).into_iter().flatten());
        let main = (from <= 0.0 && to >= 0.0).then_some(0.0);
        let highest = tops.chain(main).fold(f32::NEG_INFINITY, f32::max);
        Extent { min: highest, max: highest }
    };
    edges.windows(2).map(|w| column(w[0], w[1])).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_top_stands_at_the_tone_and_a_null_beside_it() {
        let hann = Window::parse("hann").unwrap();
        let axis = Axis::linear(90.0, 110.0, 0.0, 400.0);
        let mut cache = KernelCache::default();
        let columns = cache.columns(&hann, 1 << 20, (100.0, 1.0), &axis, 400);
        let at = |hz: f64| columns[((hz - 90.0) * 20.0 - 0.5).round() as usize];
        assert!(at(100.0).max.abs() < 1e-3, "{:?}", at(100.0));
        assert!(at(102.02).min < -60.0, "{:?}", at(102.02));
        // Half a bin off the middle Hann's kernel is 1.42 dB down (Harris 1978, table I).
        assert!((at(100.5).max + 1.42).abs() < 0.1, "{:?}", at(100.5));
        let again = cache.columns(&hann, 1 << 20, (100.0, 1.0), &axis, 400);
        assert!(Arc::ptr_eq(&columns, &again));
    }

    #[test]
    fn wide_columns_keep_main_lobe_and_side_lobes() {
        let axis = Axis::linear(0.0, 4000.0, 0.0, 100.0);
        for (text, far) in [("rectangular", -60.0), ("kaiser=8.6", -120.0)] {
            let window = Window::parse(text).unwrap();
            let columns = KernelCache::default().columns(&window, 1 << 20, (1020.0, 1.0), &axis, 100);
            assert!(columns[25].max.abs() < 1e-3, "{text}: {:?}", columns[25]);
            let near = columns[30].max;
            assert!(near > far && near < -40.0, "{text}: {near}");
        }
        // Past a quarter of its length the stand-in says nothing.
        let window = Window::parse("kaiser=8.6").unwrap();
        let columns = KernelCache::default().columns(&window, 1 << 20, (1020.0, 1.0), &axis, 100);
        assert!(columns[80].is_empty());
    }
}
