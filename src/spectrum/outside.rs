//! Curves with parts of the band left out: what a pane shows beside its tones' main lobes.

use super::{Curve, Spectra};
use crate::signal::Extent;

/// Part of a band, bins: from, to.
pub type Stretch = (f64, f64);

impl Spectra {
    /// As [`Spectra::curve_db`], of what lies outside `left_out` (bins, rising and apart; see [`joined`]): a column that
    /// lies inside them is empty, one that reaches out of them shows the least and greatest level outside.
    ///
    /// Needs the values between lines: until those were prepared ([`Spectra::prepare_between_lines`]) every column is
    /// empty, since the nearest line may be one that is left out.
    pub fn curve_outside_db(&self, pane: usize, edges_hz: &[f64], left_out: &[Stretch]) -> Curve {
        let n_columns = edges_hz.len().saturating_sub(1);
        let Some(lines) = self.panes.get(pane).filter(|_| self.has_between_lines(pane)) else {
            return vec![Extent::EMPTY; n_columns];
        };
        let bins: Vec<f64> = edges_hz.iter().map(|f| f / self.line_spacing_hz()).collect();
        let mut last = None;
        // Stretches that end before the column are done with: columns rise too.
        let mut first = 0;
        let columns = bins.windows(2).map(|edges| {
            let (mut from, to) = (edges[0], edges[1]);
            while left_out.get(first).is_some_and(|s| s.1 <= from) {
                first += 1;
            }
            let mut all = Extent::EMPTY;
            for &(start, end) in left_out.iter().skip(first).take_while(|s| s.0 < to) {
                all = all.join(self.column(lines, from, start.min(to), &mut last));
                from = from.max(end);
            }
            all.join(self.column(lines, from, to, &mut last))
        });
        columns.collect()
    }
}

/// Stretches in rising order, those that touch joined; what is not finite or not rising is left out.
pub fn joined(mut stretches: Vec<Stretch>) -> Vec<Stretch> {
    stretches.retain(|s| s.0.is_finite() && s.1.is_finite() && s.0 < s.1);
    stretches.sort_by(|a, b| a.0.total_cmp(&b.0));
    let mut all: Vec<Stretch> = Vec::with_capacity(stretches.len());
    for (from, to) in stretches {
        match all.last_mut() {
            Some(last) if from <= last.1 => last.1 = last.1.max(to),
            _ => all.push((from, to)),
        }
    }
    all
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::signal::Watch;
    use crate::window::Window;

    fn lone(n: usize, nu: f64) -> Spectra {
        let windows: Vec<Window> = ["rectangular", "hann"].iter().map(|w| Window::parse(w).unwrap()).collect();
        let samples = (0..n).map(|i| (std::f64::consts::TAU * nu * i as f64 / n as f64 + 0.4).cos()).collect();
        Spectra::new(samples, n as f64, &windows, &Watch::new()).unwrap()
    }

    fn edges(from: f64, to: f64, n: u32) -> Vec<f64> {
        (0..=n).map(|i| from + (to - from) * f64::from(i) / f64::from(n)).collect()
    }

    #[test]
    fn stretches_are_joined_and_nonsense_is_left_out() {
        let many = vec![(5.0, 6.0), (1.0, 2.0), (1.5, 3.0), (3.0, 4.0), (9.0, 8.0), (f64::NAN, 1.0)];
        assert_eq!(joined(many), [(1.0, 4.0), (5.0, 6.0)]);
        assert!(joined(Vec::new()).is_empty());
    }

    #[test]
    fn nothing_left_out_is_the_curve_itself() {
        let spectra = lone(5000, 1234.3);
        spectra.prepare_between_lines(&Watch::new()).unwrap();
        for (from, to) in [(-10.0, 2600.0), (1200.0, 1260.0)] {
            let edges = edges(from, to, 300);
            assert_eq!(spectra.curve_outside_db(1, &edges, &[]), spectra.curve_db(1, &edges));
        }
    }

    #[test]
    fn the_main_lobe_is_out_of_every_column_and_the_side_lobes_are_in() {
        let spectra = lone(5000, 1234.3);
        let lobe = [(1233.3, 1235.3)];
        assert!(spectra.curve_outside_db(0, &edges(0.0, 2500.0, 10), &lobe).iter().all(|c| c.is_empty()));
        spectra.prepare_between_lines(&Watch::new()).unwrap();
        // From columns of 250 lines to columns of a twentieth of one; the first side lobe stands 13.26 dB under the top
        // (Harris 1978, table I: -13 dB), and lines next to the main lobe's end some way under that.
        for (from, to) in [(0.0, 2500.0), (1200.0, 1270.0), (1230.0, 1240.0)] {
            let curve = spectra.curve_outside_db(0, &edges(from, to, 10.max(10 * (250.0 / (to - from)) as u32)), &lobe);
            let highest = curve.iter().fold(Extent::EMPTY, |a, b| a.join(*b)).max;
            assert!((-17.0..-13.2).contains(&highest), "{from} to {to}: {highest}");
        }
        let inside = spectra.curve_outside_db(0, &edges(1233.4, 1235.2, 30), &lobe);
        assert!(inside.iter().all(|c| c.is_empty()));
    }
}
