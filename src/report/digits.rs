//! Numbers in as many digits as they deserve.

/// Decimals at most: lines of the slowest rate that can be meant are still told apart.
pub(super) const MOST_DECIMALS: usize = 18;

/// Decimals that show two digits of an uncertainty, at least none and at most `most`.
pub(super) fn decimals_of(u95: f64, most: usize) -> usize {
    // An uncertainty that would round up to three digits has one decimal less.
    let decimals = 1.0 - u95.log10().floor();
    if decimals.is_finite() { decimals.clamp(0.0, most as f64) as usize } else { 0 }
}

/// Figures of one column, each in its own decimals, with room left so that their points stand in a line.
pub(super) fn aligned(figures: &[(f64, usize)]) -> Vec<String> {
    let most = figures.iter().map(|f| f.1).max().unwrap_or(0);
    let text = |&(value, decimals): &(f64, usize)| format!("{value:.decimals$}{}", room(decimals, most));
    figures.iter().map(text).collect()
}

/// The room that stands in the place of missing decimals.
pub(super) fn room(decimals: usize, most: usize) -> String {
    " ".repeat(most - decimals.min(most) + usize::from(decimals == 0 && most > 0))
}

/// An uncertainty in `decimals`; what is less but not nothing is said to be less.
pub(super) fn or_less(u: f64, decimals: usize) -> String {
    let least = 10_f64.powi(-i32::try_from(decimals).unwrap_or(0));
    if u > 0.0 && u < 0.5 * least { format!("<{least:.decimals$}") } else { format!("{u:.decimals$}") }
}

/// A number in `n` significant digits.
pub(super) fn digits(value: f64, n: usize) -> String {
    if value == 0.0 || !value.is_finite() {
        return value.to_string();
    }
    let exponent = value.abs().log10().floor();
    if (-4.0..9.0).contains(&exponent) {
        let decimals = (n as f64 - 1.0 - exponent).max(0.0) as usize;
        format!("{value:.decimals$}")
    } else {
        format!("{value:.*e}", n.saturating_sub(1))
    }
}

/// A number in the digits that two of its uncertainty allow; in five where none is stated.
pub(super) fn digits_by(value: f64, u95: Option<f64>) -> String {
    let known = u95.filter(|u| *u > 0.0 && u.is_finite() && value != 0.0);
    let n = known.map_or(5.0, |u| value.abs().log10().floor() - u.log10().floor() + 2.0);
    digits(value, n.clamp(1.0, 15.0) as usize)
}

/// A number in few digits with its unit.
pub(super) fn short(value: f64, unit: &str) -> String {
    let text = digits(value, 6);
    let text = if text.contains('.') && !text.contains('e') {
        text.trim_end_matches('0').trim_end_matches('.')
    } else {
        &text
    };
    format!("{text} {unit}")
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_keep_their_significant_digits() {
        for (value, expected) in [
            (0.0, "0"),
            (14.142_135, "14.142"),
            (0.001_234_567, "0.0012346"),
            (123_456.7, "123457"),
            (1e-9, "1.0000e-9"),
            (f64::NAN, "NaN"),
        ] {
            assert_eq!(digits(value, 5), expected);
        }
        assert_eq!(short(24.0, "s"), "24 s");
        assert_eq!(short(8192.0, "Hz"), "8192 Hz");
        assert_eq!(short(100.0, "Hz"), "100 Hz");
    }

    #[test]
    fn two_digits_of_an_uncertainty_decide() {
        for (u95, decimals) in [(0.000_31, 5), (0.012, 3), (1.0, 1), (31.0, 0), (4e5, 0), (0.0, 0), (f64::NAN, 0)] {
            assert_eq!(decimals_of(u95, 18), decimals, "{u95}");
        }
        assert_eq!(decimals_of(1e-9, 5), 5);
        for (value, u95, expected) in [
            (0.429_713_3, Some(0.000_12), "0.42971"),
            (1234.5, Some(35.0), "1234"),
            (1234.5, Some(350.0), "1234"),
            (3.456_789e-7, Some(1.2e-9), "3.457e-7"),
            (1.0, None, "1.0000"),
            (0.0, Some(1.0), "0"),
            (1.0, Some(50.0), "1"),
        ] {
            assert_eq!(digits_by(value, u95), expected, "{value} ± {u95:?}");
        }
        assert_eq!(
            (or_less(0.000_04, 4), or_less(0.000_06, 4), or_less(0.0, 2)),
            ("<0.0001".into(), "0.0001".into(), "0.00".into())
        );
    }

    #[test]
    fn points_stand_in_a_line() {
        assert_eq!(aligned(&[(1.25, 2), (100.0, 0), (3.0, 1)]), ["1.25", "100   ", "3.0 "]);
        assert_eq!(aligned(&[(100.0, 0)]), ["100"]);
        assert_eq!(aligned(&[]), Vec::<String>::new());
    }
}
