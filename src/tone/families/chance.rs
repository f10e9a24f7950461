//! How likely fits come about by chance.

/// The chance of `least` or more events where `mean` are expected: the upper tail of Poisson's law.
///
/// It bounds that of independent events of unequal chances from above where `least` is more than one over their mean
/// (Hoeffding 1956, On the distribution of the number of successes in independent trials; from memory).
pub(super) fn poisson_tail(mean: f64, least: usize) -> f64 {
    if least == 0 {
        return 1.0;
    }
    if mean.is_nan() || mean <= 0.0 {
        return 0.0;
    }
    let ln_term = (1..=least).fold(-mean, |ln, k| ln + mean.ln() - (k as f64).ln());
    let mut term = ln_term.exp();
    let mut sum = term;
    let mut k = least as f64;
    while term > sum * 1e-12 || k < mean {
        k += 1.0;
        term *= mean / k;
        sum += term;
        if k > 1e4 {
            return 1.0;
        }
    }
    sum.min(1.0)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_tail_has_its_known_values() {
        // 1 - e^-λ; 1 - e^-λ (1 + λ).
        for mean in [1e-6, 0.01, 0.5, 3.0, 50.0] {
            let (one, two) = (1.0 - f64::exp(-mean), 1.0 - f64::exp(-mean) * (1.0 + mean));
            assert!((poisson_tail(mean, 1) - one).abs() < 1e-12, "{mean}");
            assert!((poisson_tail(mean, 2) - two).abs() < 1e-12, "{mean}");
        }
        assert!((poisson_tail(1e-4, 3) / (1e-12 / 6.0) - 1.0).abs() < 1e-3);
        assert_eq!((poisson_tail(0.0, 1), poisson_tail(0.0, 0), poisson_tail(f64::NAN, 1)), (0.0, 1.0, 0.0));
        assert_eq!(poisson_tail(1e9, 3), 1.0);
    }
}
