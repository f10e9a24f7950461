//! Figures as they are written on the screen: as many digits as they deserve, a true minus sign.

/// Decimals that show `step` to a tenth, between 0 and `most`.
pub(super) fn decimals(step: f64, most: usize) -> usize {
    if step > 0.0 && step.is_finite() { (-(step / 10.0).log10()).ceil().clamp(0.0, most as f64) as usize } else { 0 }
}

/// A number with fixed decimals and a true minus sign; a dash where there is none.
pub(super) fn fixed(value: f64, decimals: usize) -> String {
    if !value.is_finite() {
        return "–".to_owned();
    }
    let text = format!("{value:.decimals$}");
    match text.strip_prefix('-') {
        Some(rest) if rest.bytes().any(|b| (b'1'..=b'9').contains(&b)) => format!("−{rest}"),
        Some(rest) => rest.to_owned(),
        None => text,
    }
}

/// A frequency on a segment whose lines are `spacing_hz` apart.
pub(super) fn hertz(value: f64, spacing_hz: f64) -> String {
    fixed(value, decimals(spacing_hz, 6))
}

/// A positive value to `digits` significant digits, with a power of ten where plain digits would be long.
pub(super) fn significant(value: f64, digits: usize) -> String {
    if !value.is_finite() {
        return "–".to_owned();
    }
    if value == 0.0 {
        return "0".to_owned();
    }
    let power = value.abs().log10().floor() as i32;
    if !(-6..7).contains(&power) {
        return format!("{:.*e}", digits.saturating_sub(1), value).replace('-', "−");
    }
    fixed(value, (i32::try_from(digits).unwrap_or(9) - 1 - power).max(0) as usize)
}

/// A value and its expanded uncertainty, in as many digits as the uncertainty allows (two of its own); the
/// uncertainty is empty where there is none.
pub(super) fn with_uncertainty(value: f64, uncertainty: Option<f64>) -> (String, String) {
    match uncertainty.filter(|u| *u > 0.0 && u.is_finite()) {
        Some(u) => {
            let decimals = (1.0 - u.log10().floor()).clamp(0.0, 12.0) as usize;
            (fixed(value, decimals), format!("± {}", fixed(u, decimals)))
        }
        None => (significant(value, 4), String::new()),
    }
}

/// A count with thin spaces between thousands.
pub(super) fn count(n: u64) -> String {
    let digits = n.to_string();
    let head = digits.len() % 3;
    let mut text = digits[..head].to_owned();
    for (i, c) in digits[head..].chars().enumerate() {
        if i % 3 == 0 && !text.is_empty() {
            text.push('\u{2009}');
        }
        text.push(c);
    }
    text
}

/// Seconds to the nearest sample's worth of digits, at most six.
pub(super) fn seconds(value: f64, rate_hz: f64) -> String {
    fixed(value, if rate_hz > 0.0 { decimals(10.0 / rate_hz, 6).min(4) } else { 3 })
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn digits_follow_what_is_known() {
        assert_eq!(hertz(124.8, 1.0 / 24.0), "124.800");
        assert_eq!(hertz(124.8, 1.0), "124.8");
        assert_eq!(significant(0.000_346_21, 4), "0.0003462");
        assert_eq!(significant(1234.5, 3), "1234");
        assert_eq!(significant(9.1e-9, 3), "9.10e−9");
        assert_eq!(significant(f64::NAN, 3), "–");
    }

    #[test]
    fn a_value_has_the_digits_of_its_uncertainty() {
        let written = |v, u| with_uncertainty(v, u);
        assert_eq!(written(0.429_71, Some(0.000_12)), ("0.42971".to_owned(), "± 0.00012".to_owned()));
        assert_eq!(written(1234.5, Some(35.0)), ("1234".to_owned(), "± 35".to_owned()));
        assert_eq!(written(0.5, None), ("0.5000".to_owned(), String::new()));
    }

    #[test]
    fn minus_is_a_minus_and_zero_has_none() {
        assert_eq!(fixed(-7.26, 1), "−7.3");
        assert_eq!(fixed(-0.001, 1), "0.0");
        assert_eq!(fixed(f64::NEG_INFINITY, 1), "–");
    }

    #[test]
    fn thousands_are_parted() {
        assert_eq!(count(7), "7");
        assert_eq!(count(196_608), "196\u{2009}608");
        assert_eq!(count(1_000_000), "1\u{2009}000\u{2009}000");
    }
}
