//! Windows given by a formula of time.
//!
//! Each is even about the middle of the segment. A formula is given both the distance from the middle and the
//! distance from the edge, so that neither loses digits.

use std::f64::consts::PI;

use super::bessel::i0_scaled;

/// Where a sample lies in the segment; both distances as fractions of half its length, x + y = 1.
#[derive(Debug, Clone, Copy)]
pub(super) struct Place {
    /// Distance from the middle, x = 2|t| of Harris 1978: 0 in the middle, 1 at the edge.
    pub(super) x: f64,
    /// Distance from the edge: 0 at the edge, 1 in the middle.
    pub(super) y: f64,
}

/// A window's height at a place, for given parameters.
pub(super) type Formula = fn(Place, &[f64]) -> f64;

impl Place {
    /// The place of sample `i` of `n`, DFT-even: sample 0 is the edge, sample n/2 the middle.
    pub(super) fn of(i: usize, n: usize) -> Self {
        let edge = 2 * i.min(n.saturating_sub(i));
        Self { x: n.abs_diff(edge) as f64 / n as f64, y: edge as f64 / n as f64 }
    }

    /// The place at a distance `y` from the edge.
    pub(super) fn from_edge(y: f64) -> Self {
        Self { x: 1.0 - y, y }
    }
}

fn first(parameters: &[f64]) -> f64 {
    parameters.first().copied().unwrap_or(0.0)
}

/// 1 - x.
pub(super) fn triangular(place: Place, _: &[f64]) -> f64 {
    place.y
}

/// 1 - x².
pub(super) fn welch(place: Place, _: &[f64]) -> f64 {
    place.y * (1.0 + place.x)
}

/// cos(πx/2).
pub(super) fn cosine(place: Place, _: &[f64]) -> f64 {
    quarter_wave(place)
}

/// cos³(πx/2).
pub(super) fn cosine_cubed(place: Place, _: &[f64]) -> f64 {
    quarter_wave(place).powi(3)
}

fn quarter_wave(place: Place) -> f64 {
    (0.5 * PI * place.y).sin()
}

/// One in the middle, a raised cosine over the outer part α.
pub(super) fn tukey(place: Place, parameters: &[f64]) -> f64 {
    let taper = first(parameters);
    if place.y >= taper { 1.0 } else { (0.5 * PI * place.y / taper).sin().powi(2) }
}

/// (1 - x)·cos(πx) + sin(πx)/π.
pub(super) fn bohman(place: Place, _: &[f64]) -> f64 {
    let angle = PI * place.y;
    if angle > 0.1 {
        return (angle.sin() - angle * angle.cos()) / PI;
    }
    // sin a - a cos a = a³/3·(1 - a²/10·(1 - a²/28·(1 - a²/54·(1 - ...)))): no cancellation near the edge.
    let square = angle * angle;
    let series = 1.0 - square / 54.0 * (1.0 - square / 88.0);
    angle * square / (3.0 * PI) * (1.0 - square / 10.0 * (1.0 - square / 28.0 * series))
}

/// 1 - 6x²(1-x) up to x = 1/2, 2(1-x)³ beyond.
pub(super) fn parzen(place: Place, _: &[f64]) -> f64 {
    if place.x <= 0.5 { 1.0 - 6.0 * place.x * place.x * place.y } else { 2.0 * place.y.powi(3) }
}

/// exp(-(αx)²/2).
pub(super) fn gaussian(place: Place, parameters: &[f64]) -> f64 {
    (-0.5 * (first(parameters) * place.x).powi(2)).exp()
}

/// I_0(β√(1-x²))/I_0(β).
pub(super) fn kaiser(place: Place, parameters: &[f64]) -> f64 {
    let beta = first(parameters);
    let root = (place.y * (1.0 + place.x)).sqrt();
    let fall = -beta * place.x * place.x / (1.0 + root);
    fall.exp() * i0_scaled(beta * root) / i0_scaled(beta)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn places_are_dft_even() {
        for n in [1, 2, 3, 7, 8, 1009] {
            assert_eq!((Place::of(0, n).x, Place::of(0, n).y), (1.0, 0.0));
            for i in 1..n {
                let (here, mirror) = (Place::of(i, n), Place::of(n - i, n));
                assert_eq!((here.x, here.y), (mirror.x, mirror.y));
            }
        }
        assert_eq!(Place::of(4, 8).x, 0.0);
    }

    #[test]
    fn middles_are_one_and_edges_as_defined() {
        let formulas: [(Formula, &[f64], f64); 9] = [
            (triangular, &[], 0.0),
            (welch, &[], 0.0),
            (cosine, &[], 0.0),
            (cosine_cubed, &[], 0.0),
            (tukey, &[0.25], 0.0),
            (bohman, &[], 0.0),
            (parzen, &[], 0.0),
            (gaussian, &[3.0], (-4.5_f64).exp()),
            (kaiser, &[0.0], 1.0),
        ];
        for (formula, parameters, edge) in formulas {
            assert!((formula(Place::from_edge(1.0), parameters) - 1.0).abs() < 1e-15);
            assert!((formula(Place::from_edge(0.0), parameters) - edge).abs() < 1e-15);
        }
    }

    #[test]
    fn bohman_joins_its_series() {
        let place = Place::from_edge(0.1 / PI);
        let angle = PI * place.y;
        let direct = (angle.sin() - angle * angle.cos()) / PI;
        assert!((bohman(place, &[]) / direct - 1.0).abs() < 1e-12);
    }

    #[test]
    fn a_tukey_window_runs_from_rectangular_to_hann() {
        for i in 0..16 {
            let place = Place::of(i, 16);
            assert_eq!(tukey(place, &[0.0]), 1.0);
            assert!((tukey(place, &[1.0]) - 0.5 * (1.0 - (PI * place.y).cos())).abs() < 1e-15);
        }
    }
}
