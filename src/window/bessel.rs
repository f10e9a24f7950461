//! The modified Bessel function of order zero, as the Kaiser window needs it.

/// From here on the asymptotic series reaches rounding before its terms grow again (smallest term about e^{-2x}).
const ASYMPTOTIC_FROM: f64 = 20.0;

/// e^{-x}·I_0(x) for x >= 0, to a few units in the last place.
///
/// Below 20 the power series, whose terms are all positive, above it the asymptotic series.
///
/// # Reference
/// Abramowitz and Stegun, Handbook of Mathematical Functions, 1964, 9.6.12 and 9.7.1.
pub(super) fn i0_scaled(x: f64) -> f64 {
    if x < ASYMPTOTIC_FROM { power_series(x) * (-x).exp() } else { asymptotic_series(x) }
}

fn power_series(x: f64) -> f64 {
    let quarter = 0.25 * x * x;
    let (mut term, mut sum, mut k) = (1.0, 1.0, 1.0);
    while term > 1e-17 * sum {
        term *= quarter / (k * k);
        sum += term;
        k += 1.0;
    }
    sum
}

fn asymptotic_series(x: f64) -> f64 {
    let (mut term, mut sum, mut k) = (1.0_f64, 1.0, 1.0);
    while term > 1e-17 * sum && k < 2.0 * x {
        let odd = 2.0 * k - 1.0;
        term *= odd * odd / (8.0 * k * x);
        sum += term;
        k += 1.0;
    }
    sum / (std::f64::consts::TAU * x).sqrt()
}

#[cfg(test)]
mod tests {
    use super::i0_scaled;

    #[test]
    fn tabulated_values_are_met() {
        // Abramowitz and Stegun 1964, table 9.8, e^{-x} I_0(x) for x = 0, 1, 5, 10; table 9.8 is printed to 10 digits.
        for (x, printed) in [(0.0, 1.0), (1.0, 0.465_759_607_6), (5.0, 0.183_540_812_6), (10.0, 0.127_833_337_2)] {
            assert!((i0_scaled(x) - printed).abs() < 6e-11, "x = {x}: {}", i0_scaled(x));
        }
    }

    #[test]
    fn both_series_agree_where_they_meet() {
        for step in 0..20 {
            let x = 20.0 + 0.5 * f64::from(step);
            let (power, asymptotic) = (super::power_series(x) * (-x).exp(), super::asymptotic_series(x));
            assert!((power / asymptotic - 1.0).abs() < 2e-14, "x = {x}: {power} {asymptotic}");
        }
    }
}
