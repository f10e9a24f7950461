//! A segment's panes and their curves.

use std::sync::{Arc, OnceLock};

use realfft::num_complex::Complex64;

use super::buffers;
use super::{Dense, Transform, cosine_pane_powers, sampled_pane_power, transform};
use crate::signal::{Cancelled, Extent, Pyramid, Watch};
use crate::window::{Kernel, Sums, Window};

/// The lowest level a curve shows, dB over full scale: where rounding ends any spectrum in double precision.
pub const LEAST_DB: f64 = -400.0;

/// A pane's curve over pixel columns: for each the least and greatest level in it.
pub type Curve = Vec<Extent>;

/// The panes of one segment, from one transform of it.
#[derive(Debug)]
pub struct Spectra {
    samples: Arc<[f64]>,
    sample_rate_hz: f64,
    transform: Arc<Transform>,
    dense: Arc<OnceLock<Dense>>,
    windows: Vec<Window>,
    pub(super) panes: Vec<PaneLines>,
}

/// One pane: what its window makes of the segment.
#[derive(Debug)]
pub(super) struct PaneLines {
    window: Window,
    sums: Sums,
    power: Vec<f64>,
    pyramid: OnceLock<Pyramid>,
    kernel: OnceLock<Kernel>,
    /// For a window that is no cosine sum: the dense transform of the windowed samples.
    own_dense: OnceLock<Dense>,
}

/// Lines in the lowest blocks of a pane's extremes.
const PYRAMID_BLOCK: usize = 64;

/// Columns narrower than so many lines show the transform between the lines too.
const LINES_A_COLUMN: f64 = 2.0;

impl Spectra {
    /// The panes of `windows` over `samples`.
    ///
    /// # Errors
    /// [`Cancelled`] where the watch says so.
    pub fn new(samples: Arc<[f64]>, sample_rate_hz: f64, windows: &[Window], watch: &Watch) -> Result<Self, Cancelled> {
        let transform = Arc::new(transform(&samples));
        watch.check()?;
        let panes = pane_lines(&samples, &transform, windows, watch)?;
        let dense = Arc::default();
        Ok(Self { samples, sample_rate_hz, transform, dense, windows: windows.to_vec(), panes })
    }

    /// The same segment under other windows: the transform is not made again.
    ///
    /// # Errors
    /// [`Cancelled`] where the watch says so.
    pub fn with_windows(&self, windows: &[Window], watch: &Watch) -> Result<Self, Cancelled> {
        Ok(Self {
            samples: Arc::clone(&self.samples),
            sample_rate_hz: self.sample_rate_hz,
            transform: Arc::clone(&self.transform),
            dense: Arc::clone(&self.dense),
            windows: windows.to_vec(),
            panes: pane_lines(&self.samples, &self.transform, windows, watch)?,
        })
    }

    /// Samples in the segment.
    pub fn n_samples(&self) -> usize {
        self.samples.len()
    }

    /// The segment's samples, after what was taken out of them.
    pub fn samples(&self) -> &[f64] {
        &self.samples
    }

    /// Samples a second.
    pub fn sample_rate_hz(&self) -> f64 {
        self.sample_rate_hz
    }

    /// Hertz from line to line, 1/T.
    pub fn line_spacing_hz(&self) -> f64 {
        self.sample_rate_hz / self.samples.len().max(1) as f64
    }

    /// The panes' windows, in order.
    pub fn windows(&self) -> &[Window] {
        &self.windows
    }

    /// S1 and S2 of a pane's window.
    pub fn sums(&self, pane: usize) -> Sums {
        self.panes.get(pane).map_or(Sums { s1: 0.0, s2: 0.0 }, |p| p.sums)
    }

    /// The power |Y\[k\]|² of every line k = 0..N/2 of a pane; none for a pane that is not there.
    pub fn power(&self, pane: usize) -> &[f64] {
        self.panes.get(pane).map_or(&[], |p| &p.power)
    }

    /// Y(ν) of a pane at ν bins.
    pub fn at(&self, pane: usize, nu: f64) -> Complex64 {
        let Some(lines) = self.panes.get(pane) else { return Complex64::ZERO };
        if let Some(terms) = lines.window.cosine_terms() {
            return self.dense().windowed_at(terms, nu);
        }
        lines.own_dense.get_or_init(|| Dense::of(&windowed(&self.samples, &lines.window))).at(nu)
    }

    /// The kernel W(ν) of a pane's window at the segment's length.
    pub fn kernel_at(&self, pane: usize, nu: f64) -> Complex64 {
        let Some(lines) = self.panes.get(pane) else { return Complex64::ZERO };
        lines.kernel.get_or_init(|| lines.window.kernel(self.n_samples())).at(nu)
    }

    /// Prepares the extremes that curves of many lines a column are drawn from: quick, but not for a screen to wait on.
    pub fn prepare_curves(&self) {
        for pane in &self.panes {
            pane.pyramid();
        }
    }

    /// Prepares the values between lines, for curves and readings: several transforms' time.
    ///
    /// # Errors
    /// [`Cancelled`] where the watch says so.
    pub fn prepare_between_lines(&self, watch: &Watch) -> Result<(), Cancelled> {
        for pane in 0..self.panes.len() {
            watch.check()?;
            self.at(pane, 0.0);
        }
        Ok(())
    }

    /// Whether values between the lines of a pane are at hand; until then curves show its lines.
    pub fn has_between_lines(&self, pane: usize) -> bool {
        self.panes.get(pane).is_some_and(|lines| self.dense_of(lines).is_some())
    }

    fn dense_of<'a>(&'a self, lines: &'a PaneLines) -> Option<&'a Dense> {
        if lines.window.cosine_terms().is_some() { self.dense.get() } else { lines.own_dense.get() }
    }

    /// |Y(ν)|² where values between lines are at hand, else that of the nearest line: never waits.
    fn power_at_hand(&self, lines: &PaneLines, nu: f64) -> f64 {
        let between = self.dense_of(lines).map(|dense| match lines.window.cosine_terms() {
            Some(terms) => dense.windowed_at(terms, nu).norm_sqr(),
            None => dense.at(nu).norm_sqr(),
        });
        between.or_else(|| lines.power.get(nu.round().max(0.0) as usize).copied()).unwrap_or(0.0)
    }

    /// The curve of pane `pane` over columns whose edges, in hertz and rising, are `edges_hz` (one more than columns).
    ///
    /// Each column holds the least and greatest level in it, as 20 lg of the peak amplitude over full scale (dB), not
    /// below [`LEAST_DB`]. A column of two or more lines shows their extremes; a narrower one the true transform
    /// between lines as well, once that was prepared ([`Spectra::prepare_between_lines`]), and the nearest line until
    /// then. Columns outside 0 Hz to half the rate are empty.
    pub fn curve_db(&self, pane: usize, edges_hz: &[f64]) -> Curve {
        let Some(lines) = self.panes.get(pane) else {
            return vec![Extent::EMPTY; edges_hz.len().saturating_sub(1)];
        };
        let bins: Vec<f64> = edges_hz.iter().map(|f| f / self.line_spacing_hz()).collect();
        let mut last = None;
        bins.windows(2).map(|edges| self.column(lines, edges[0], edges[1], &mut last)).collect()
    }

    /// One column; `last` carries the power at the edge shared with the column before.
    pub(super) fn column(&self, lines: &PaneLines, from: f64, to: f64, last: &mut Option<(f64, f64)>) -> Extent {
        let top = self.n_samples() as f64 / 2.0;
        if !(from < to && to >= 0.0 && from <= top) {
            return Extent::EMPTY;
        }
        let inside = from.max(0.0).ceil() as usize..to.min(top).floor() as usize + 1;
        let mut power = lines.pyramid().exact(&lines.power, inside);
        if to - from < LINES_A_COLUMN {
            let at_edge = |nu: f64| self.power_at_hand(lines, nu);
            let known = last.filter(|(nu, _)| *nu == from).map(|(_, power)| power);
            let right = at_edge(to.min(top));
            *last = Some((to, right));
            for value in [
                known.unwrap_or_else(|| at_edge(from.max(0.0))),
                at_edge(f64::midpoint(from.max(0.0), to.min(top))),
                right,
            ] {
                power = power.with(value as f32);
            }
        }
        if power.is_empty() {
            return Extent::EMPTY;
        }
        let level = |power: f32| amplitude_db(f64::from(power), lines.sums.s1) as f32;
        Extent { min: level(power.min), max: level(power.max) }
    }

    /// The level that pane `pane` shows at a frequency: 20 lg of the peak amplitude over full scale (dB); that of the
    /// nearest line until values between lines were prepared.
    pub fn value_db(&self, pane: usize, frequency_hz: f64) -> f64 {
        let top = self.n_samples() as f64 / 2.0;
        let nu = (frequency_hz / self.line_spacing_hz()).clamp(0.0, top);
        let power = self.panes.get(pane).map_or(0.0, |lines| self.power_at_hand(lines, nu));
        amplitude_db(power, self.sums(pane).s1)
    }

    /// The dense transform of the segment as it is, under no window.
    pub fn dense(&self) -> &Dense {
        self.dense.get_or_init(|| Dense::of(&self.samples))
    }
}

impl Drop for PaneLines {
    fn drop(&mut self) {
        buffers::REAL.give_back(std::mem::take(&mut self.power));
    }
}

impl PaneLines {
    fn pyramid(&self) -> &Pyramid {
        self.pyramid.get_or_init(|| {
            let mut pyramid = Pyramid::new(PYRAMID_BLOCK);
            pyramid.push(self.power.iter().map(|&p| p as f32));
            pyramid
        })
    }
}

/// 20 lg(2√power/S1), not below [`LEAST_DB`].
fn amplitude_db(power: f64, s1: f64) -> f64 {
    (10.0 * (4.0 * power / (s1 * s1)).log10()).max(LEAST_DB)
}

fn windowed(samples: &[f64], window: &Window) -> Vec<f64> {
    samples.iter().zip(window.samples(samples.len())).map(|(x, w)| x * w).collect()
}

fn pane_lines(
    samples: &[f64],
    transform: &Transform,
    windows: &[Window],
    watch: &Watch,
) -> Result<Vec<PaneLines>, Cancelled> {
    let terms: Vec<&[f64]> = windows.iter().filter_map(Window::cosine_terms).collect();
    let mut cosine_powers = cosine_pane_powers(transform, &terms).into_iter();
    let mut panes = Vec::with_capacity(windows.len());
    for window in windows {
        watch.check()?;
        let of_cosines = window.cosine_terms().and_then(|_| cosine_powers.next());
        let power = of_cosines.unwrap_or_else(|| sampled_pane_power(samples, &window.samples(samples.len())));
        let sums = window.sums(samples.len());
        panes.push(PaneLines {
            window: window.clone(),
            sums,
            power,
            pyramid: OnceLock::new(),
            kernel: OnceLock::new(),
            own_dense: OnceLock::new(),
        });
    }
    Ok(panes)
}

#[cfg(test)]
mod tests {
    use super::*;

    fn tone(n: usize, nu: f64) -> Arc<[f64]> {
        (0..n).map(|i| (std::f64::consts::TAU * nu * i as f64 / n as f64 + 0.4).cos()).collect()
    }

    fn spectra(n: usize, nu: f64) -> Spectra {
        let windows: Vec<Window> = ["rectangular", "hann"].iter().map(|w| Window::parse(w).unwrap()).collect();
        let spectra = Spectra::new(tone(n, nu), n as f64, &windows, &Watch::new()).unwrap();
        assert!(!spectra.has_between_lines(0));
        spectra.prepare_between_lines(&Watch::new()).unwrap();
        assert!(spectra.has_between_lines(1));
        spectra
    }

    #[test]
    fn a_tone_on_a_line_reads_its_amplitude_in_every_pane() {
        let spectra = spectra(1000, 100.0);
        for pane in 0..2 {
            assert!(spectra.value_db(pane, 100.0).abs() < 1e-9, "{}", spectra.value_db(pane, 100.0));
        }
    }

    #[test]
    fn no_column_loses_the_peak_at_any_zoom() {
        let spectra = spectra(20_000, 1234.3);
        for (from, to) in [(0.0, 10_000.0), (1000.0, 1500.0), (1230.0, 1240.0), (1234.0, 1235.0)] {
            let edges: Vec<f64> = (0..=300).map(|i| from + (to - from) * f64::from(i) / 300.0).collect();
            for pane in 0..2 {
                let peak = spectra.curve_db(pane, &edges).iter().fold(Extent::EMPTY, |a, &b| a.join(b)).max;
                let line = (spectra.value_db(pane, 1234.0)) as f32;
                assert!(peak >= line - 1e-3 && peak < 1e-3, "{from} to {to}, pane {pane}: {peak}");
            }
        }
        // Zoomed in below a line per column, the top between the lines is seen: 0 dB.
        let edges: Vec<f64> = (0..=300).map(|i| 1234.0 + f64::from(i) / 300.0).collect();
        let peak = spectra.curve_db(0, &edges).iter().fold(Extent::EMPTY, |a, &b| a.join(b)).max;
        assert!(peak.abs() < 1e-3, "{peak}");
    }

    #[test]
    fn columns_outside_the_band_are_empty() {
        let curve = spectra(1000, 100.0).curve_db(0, &[-3.0, -2.0, -1.0, 600.0, 601.0, 602.0]);
        let empty: Vec<bool> = curve.iter().map(|e| e.is_empty()).collect();
        assert_eq!(empty, [true, true, false, true, true]);
    }

    #[test]
    fn other_windows_over_the_same_segment_are_as_if_new() {
        let hann = [Window::parse("hann").unwrap()];
        let first = spectra(777, 50.2);
        assert_eq!(first.with_windows(&hann, &Watch::new()).unwrap().power(0), first.power(1));
    }

    #[test]
    fn silence_stays_finite() {
        let windows = [Window::parse("rectangular").unwrap()];
        let spectra = Spectra::new(vec![0.0; 100].into(), 100.0, &windows, &Watch::new()).unwrap();
        assert_eq!(spectra.value_db(0, 10.0), LEAST_DB);
    }
}
