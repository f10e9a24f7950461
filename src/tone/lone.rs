//! Reading one tone in one pane: where the pane's maximum is, and the level there, with the tone's own image and what
//! removing the mean or a line took of it solved for.

use realfft::num_complex::Complex64;

use crate::signal::Removal;
use crate::spectrum::Spectra;

/// A pane's reading of one tone, in bins and full scales.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct LoneReading {
    /// Where the tone is, in bins.
    pub nu: f64,
    /// Peak amplitude and cosine phase at the segment's first sample, A e^{jφ}.
    pub amplitude: Complex64,
    /// |Y(ν)| of the pane there, nothing corrected.
    pub magnitude: f64,
    /// |Y\[k\]| of the line nearest to it.
    pub line_magnitude: f64,
}

/// One pane of a segment, with what was removed from the segment.
#[derive(Debug, Clone, Copy)]
pub struct PaneView<'a> {
    /// The segment's panes.
    pub spectra: &'a Spectra,
    /// Which of them.
    pub pane: usize,
    /// What was taken out of the segment before its transform.
    pub removal: Removal,
}

/// How far from the place given a maximum is looked for, bins.
const REACH: f64 = 1.0;

/// Steps in which the surroundings are looked over, bins: a main lobe is at least 2 bins wide.
const STEP: f64 = 0.25;

/// Rounds in which maximum and image settle; each takes the error down by at least the image's share.
const ROUNDS: usize = 100;

/// A maximum that moves less than this has settled, bins.
const SETTLED: f64 = 1e-11;

impl PaneView<'_> {
    fn n(&self) -> f64 {
        self.spectra.n_samples() as f64
    }

    fn kernel(&self, nu: f64) -> Complex64 {
        self.spectra.kernel_at(self.pane, nu)
    }

    /// The pane's reading of the tone whose maximum lies within a line of `near` (bins); `None` where there is none.
    ///
    /// The maximum is that of |Y(ν)| less the tone's own image and its own share of what was removed; exact for a lone
    /// tone.
    pub fn read_near(&self, near: f64) -> Option<LoneReading> {
        let mut nu = self.nearest_maximum(near)?;
        for _ in 0..ROUNDS {
            let amplitude = self.amplitude_at(nu);
            let own = OwnTerms::of(self, nu, amplitude);
            let next = maximum(|mu| (self.spectra.at(self.pane, mu) - own.at(self, mu)).norm_sqr(), nu);
            let next = next.clamp(near - 2.0 * REACH, near + 2.0 * REACH);
            let settled = (next - nu).abs() < SETTLED;
            nu = next;
            if settled {
                break;
            }
        }
        Some(self.read_at(nu))
    }

    /// The pane's reading of a tone that is at `nu` (bins), wherever the pane's maximum may be.
    pub fn read_at(&self, nu: f64) -> LoneReading {
        let line = nu.round().clamp(0.0, (self.n() / 2.0).floor()) as usize;
        LoneReading {
            nu,
            amplitude: self.amplitude_at(nu),
            magnitude: self.spectra.at(self.pane, nu).norm(),
            line_magnitude: self.spectra.power(self.pane).get(line).map_or(0.0, |p| p.sqrt()),
        }
    }

    /// The place of the nearest maximum of |Y| within [`REACH`] of `near`.
    fn nearest_maximum(&self, near: f64) -> Option<f64> {
        let steps = (REACH / STEP).round() as i32 + 1;
        let places: Vec<f64> = (-steps..=steps).map(|i| near + STEP * f64::from(i)).collect();
        let power: Vec<f64> = places.iter().map(|&mu| self.spectra.at(self.pane, mu).norm_sqr()).collect();
        let tops = (1..places.len() - 1).filter(|&i| power[i] > power[i - 1] && power[i] >= power[i + 1]);
        let distance = |i: &usize| (places[*i] - near).abs();
        let top = tops.min_by(|a, b| distance(a).total_cmp(&distance(b)))?;
        let place = maximum(|mu| self.spectra.at(self.pane, mu).norm_sqr(), places[top]);
        ((place - near).abs() <= REACH + STEP).then_some(place)
    }

    /// The amplitude A e^{jφ} of the tone at `nu` whose pane stands at Y(ν) there.
    ///
    /// Y(ν) = a P + a* Q with P = W(0)/2 - (D W(ν) + E V(ν))/2 and Q = W(2ν)/2 - (D* W(ν) + E* V(ν))/2; see
    /// [`OwnTerms`] for D, E and V. Solved for a; where tone and image coincide (0 Hz, half the rate) the image is left
    /// out.
    fn amplitude_at(&self, nu: f64) -> Complex64 {
        let y = self.spectra.at(self.pane, nu);
        let w0 = self.kernel(0.0) / 2.0;
        let taken = Taken::by(self.removal, nu, self.n());
        let (w, v) = (self.kernel(nu), self.ramp_kernel(nu));
        let p = w0 - (taken.mean * w + taken.slope * v) / 2.0;
        let q = self.kernel(2.0 * nu) / 2.0 - (taken.mean.conj() * w + taken.slope.conj() * v) / 2.0;
        let determinant = p.norm_sqr() - q.norm_sqr();
        if determinant > 1e-4 * w0.norm_sqr() { (y * p.conj() - y.conj() * q) / determinant } else { y / w0 }
    }

    /// V(ν) = Σ_n w\[n\] (n - (N-1)/2) e^{-j2πνn/N}: what a line of unit slope looks like in the pane.
    fn ramp_kernel(&self, nu: f64) -> Complex64 {
        if self.removal != Removal::Line {
            return Complex64::ZERO;
        }
        // Σ n w e^{-j2πνn/N} = (jN/2π) dW/dν; W is smooth over a bin, so a central difference serves.
        let h = 1e-4;
        let slope = (self.kernel(nu + h) - self.kernel(nu - h)) / (2.0 * h);
        Complex64::I * slope * (self.n() / std::f64::consts::TAU) - self.kernel(nu) * ((self.n() - 1.0) / 2.0)
    }
}

/// What removing the mean or a line takes of a tone a e^{j2πνn/N}: Re(a·mean) and, a sample, Re(a·slope).
#[derive(Debug, Clone, Copy)]
struct Taken {
    mean: Complex64,
    slope: Complex64,
}

impl Taken {
    /// The mean of e^{j2πνn/N} and the slope of its least-squares line, over n = 0..N-1.
    fn by(removal: Removal, nu: f64, n: f64) -> Self {
        let nothing = Self { mean: Complex64::ZERO, slope: Complex64::ZERO };
        let x = std::f64::consts::PI * nu / n;
        let (sin, cos) = x.sin_cos();
        if removal == Removal::None || sin.abs() < 1e-12 {
            return nothing;
        }
        let middle = Complex64::cis(x * (n - 1.0));
        let (sin_n, cos_n) = (n * x).sin_cos();
        let mean = middle * (sin_n / sin / n);
        if removal == Removal::Mean {
            return Self { mean, ..nothing };
        }
        // Σ (n - m) e^{j2x(n - m)} = (1/2j) d/dx [sin(Nx)/sin x].
        let derivative = (n * cos_n * sin - sin_n * cos) / (sin * sin);
        let moment = middle * Complex64::new(0.0, -derivative / 2.0);
        Self { mean, slope: moment / (n * (n * n - 1.0) / 12.0) }
    }
}

/// What stands in a pane beside the tone itself because of the tone: its image and its share of what was removed.
struct OwnTerms {
    nu: f64,
    half_image: Complex64,
    mean: f64,
    slope: f64,
}

impl OwnTerms {
    fn of(view: &PaneView<'_>, nu: f64, amplitude: Complex64) -> Self {
        let taken = Taken::by(view.removal, nu, view.n());
        Self {
            nu,
            half_image: amplitude.conj() / 2.0,
            mean: (amplitude * taken.mean).re,
            slope: (amplitude * taken.slope).re,
        }
    }

    fn at(&self, view: &PaneView<'_>, mu: f64) -> Complex64 {
        let mut terms = self.half_image * view.kernel(mu + self.nu);
        if view.removal != Removal::None {
            terms -= view.kernel(mu) * self.mean + view.ramp_kernel(mu) * self.slope;
        }
        terms
    }
}

/// The place of the maximum of `power` near `start`: parabolas through the logarithm at three points, ever closer.
fn maximum(power: impl Fn(f64) -> f64, start: f64) -> f64 {
    let log = |mu: f64| power(mu).max(f64::MIN_POSITIVE).ln();
    let mut nu = start;
    for width in [0.1, 0.02, 0.01, 0.01, 0.01] {
        for _ in 0..8 {
            let (below, here, above) = (log(nu - width), log(nu), log(nu + width));
            let curvature = below - 2.0 * here + above;
            // On a slope without a top, walk up; never further than the width at a time.
            let step = if curvature < 0.0 {
                0.5 * width * (below - above) / curvature
            } else {
                width * (above - below).signum()
            };
            let step = step.clamp(-2.0 * width, 2.0 * width);
            nu += step;
            if step.abs() < 1e-3 * width {
                break;
            }
        }
    }
    nu
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::signal::{Watch, remove};
    use crate::units::db;
    use crate::window::Window;

    fn view_of(nu: f64, phase: f64, n: usize, windows: &[&str], removal: Removal) -> Spectra {
        let mut samples: Vec<f64> =
            (0..n).map(|i| 0.7 * (std::f64::consts::TAU * nu * i as f64 / n as f64 + phase).cos() + 0.2).collect();
        remove(&mut samples, 1.0, removal);
        let windows: Vec<Window> = windows.iter().map(|w| Window::parse(w).unwrap()).collect();
        Spectra::new(samples.into(), 1.0, &windows, &Watch::new()).unwrap()
    }

    /// Largest level difference allowed between a lone tone and any window's reading of it.
    const AGREEMENT_DB: f64 = 0.001;

    #[test]
    fn every_window_agrees_on_a_lone_tone_at_every_offset_and_phase_from_three_cycles() {
        let windows = ["rectangular", "hann"];
        for removal in [Removal::Mean, Removal::Line] {
            for cycles in [3.0, 4.0, 7.0, 100.0, 253.0] {
                for tenth in 0..=5 {
                    for phase in 0..8 {
                        let nu = cycles + 0.1 * f64::from(tenth);
                        let spectra = view_of(nu, 0.8 * f64::from(phase), 512, &windows, removal);
                        for (pane, window) in windows.iter().enumerate() {
                            let view = PaneView { spectra: &spectra, pane, removal };
                            let reading = view.read_near(nu + 0.2).unwrap();
                            let error = db(reading.amplitude.norm() / 0.7);
                            let at = format!("{window} at {nu}, phase {phase}, {removal:?}");
                            assert!(error.abs() < AGREEMENT_DB, "{at}: {error} dB");
                            assert!((reading.nu - nu).abs() < 1e-3, "{at}: {}", reading.nu);
                        }
                    }
                }
            }
        }
    }

    #[test]
    fn the_phase_is_that_at_the_first_sample() {
        let spectra = view_of(20.3, 1.1, 512, &["hann"], Removal::Mean);
        let view = PaneView { spectra: &spectra, pane: 0, removal: Removal::Mean };
        assert!((view.read_near(20.0).unwrap().amplitude.arg() - 1.1).abs() < 1e-6);
    }

    #[test]
    fn silence_has_no_maximum_and_reads_nothing() {
        let windows = [Window::parse("hann").unwrap()];
        let spectra = Spectra::new(vec![0.0; 64].into(), 1.0, &windows, &Watch::new()).unwrap();
        let view = PaneView { spectra: &spectra, pane: 0, removal: Removal::Mean };
        assert!(view.read_near(10.0).is_none());
        assert_eq!(view.read_at(10.0).amplitude.norm(), 0.0);
    }
}
