//! How fast side lobes fall.

use super::Window;
use super::catalogue::Shape;
use super::lobes::Lobes;
use super::shape::{Formula, Place};

/// One power of frequency, dB an octave: 20 lg 2.
const ONE_POWER_DB: f64 = 6.020_599_913_279_624;

/// Coefficients are taken to be written with at least so many decimals.
const FEWEST_DECIMALS: usize = 5;
const MOST_DECIMALS: usize = 15;

/// Length and place at which a design's envelope is measured.
const MEASURED_N: usize = 4096;
const MEASURED_FROM_BINS: f64 = 64.0;

/// The slope of the side lobes far from the main lobe, dB an octave (negative).
///
/// A window whose first m-1 derivatives vanish at its edge has side lobes that fall with the (m+1)-th power of
/// frequency. Designs are measured.
///
/// # Reference
/// A. H. Nuttall, IEEE Trans. ASSP-29 (1981) 84-91, section II.
pub(super) fn side_lobe_falloff_db_per_octave(window: &Window) -> f64 {
    if let Some(terms) = window.cosine_terms() {
        return -ONE_POWER_DB * f64::from(2 * cosine_sum_order(terms) + 1);
    }
    match window.entry().shape {
        Shape::Formula(formula) => -ONE_POWER_DB * (edge_order(formula, window.parameters()) + 1.0),
        _ => Lobes::new(&window.kernel(MEASURED_N)).envelope_slope_db(MEASURED_FROM_BINS),
    }
}

/// How many of the even derivatives Σ (-1)^k k^(2j) a_k, j = 0, 1, ..., vanish at the edge (the odd ones do anyway),
/// within what rounding the coefficients, as written in decimals, can leave of them.
fn cosine_sum_order(terms: &[f64]) -> u32 {
    let decimals = terms.iter().map(|a| n_decimals(*a)).max().unwrap_or(0).clamp(FEWEST_DECIMALS, MOST_DECIMALS);
    let rounding = 0.5 / 10_f64.powf(decimals as f64);
    let mut powers = vec![1.0; terms.len()];
    for order in 0..terms.len() {
        let signed = |k: usize| if k.is_multiple_of(2) { 1.0 } else { -1.0 };
        let derivative: f64 = terms.iter().zip(&powers).enumerate().map(|(k, (a, p))| signed(k) * a * p).sum();
        let reach: f64 = powers.iter().sum();
        if derivative.abs() > rounding * reach {
            return order as u32;
        }
        for (k, power) in powers.iter_mut().enumerate() {
            *power *= (k * k) as f64;
        }
    }
    // A sum of K+1 terms cannot have more vanish unless all are zero, which no window is.
    terms.len() as u32
}

fn n_decimals(value: f64) -> usize {
    value.to_string().split_once('.').map_or(0, |(_, decimals)| decimals.len())
}

/// The power of the distance from the edge with which a formula starts.
fn edge_order(formula: Formula, parameters: &[f64]) -> f64 {
    // So near that a Tukey taper of 1e-5 still counts, so far that no formula loses its digits.
    let near = 2.0_f64.powi(-20);
    let (outer, inner) =
        (formula(Place::from_edge(0.5 * near), parameters), formula(Place::from_edge(near), parameters));
    (inner / outer).log2().round()
}

#[cfg(test)]
mod tests {
    use super::*;

    fn powers(text: &str) -> f64 {
        side_lobe_falloff_db_per_octave(&Window::parse(text).unwrap()) / -ONE_POWER_DB
    }

    #[test]
    fn every_kind_of_edge_gives_its_power() {
        for (text, expected) in [
            ("rectangular", 1.0),
            ("triangular", 2.0),
            ("welch", 2.0),
            ("hann", 3.0),
            ("cosine-cubed", 4.0),
            ("parzen", 4.0),
            ("bohman", 4.0),
            ("nuttall-4", 7.0),
            ("tukey=0", 1.0),
            ("tukey=0.001", 3.0),
            ("kaiser=40", 1.0),
            ("gaussian=8", 1.0),
            ("cosine-sum=1,2,1", 3.0),
            ("hft248d", 3.0),
        ] {
            assert_eq!(powers(text), expected, "{text}");
        }
    }

    #[test]
    fn designs_are_measured() {
        assert!(powers("dolph-chebyshev=70").abs() < 1e-3);
        assert!((powers("slepian=3") - 1.0).abs() < 0.02);
        assert!((powers("exponential=60") - 1.0).abs() < 0.02);
    }
}
