//! Angles kept exact where whole numbers allow it.

use realfft::num_complex::Complex64;

/// cos(2π·m/n), with m/n reduced to an eighth of a turn in whole numbers first, so that it is right to the last place
/// and symmetric exactly. `n` is not 0.
pub(super) fn cos_turns(m: u64, n: u64) -> f64 {
    let m = m % n;
    let m = m.min(n - m);
    let angle = |part: u64, whole: u64| std::f64::consts::TAU * part as f64 / whole as f64;
    if 8 * m <= n {
        angle(m, n).cos()
    } else if 8 * m <= 3 * n {
        let sine = angle((4 * m).abs_diff(n), 4 * n).sin();
        if 4 * m <= n { sine } else { -sine }
    } else {
        -angle(n - 2 * m, 2 * n).cos()
    }
}

/// e^{j2π·m/n}. `n` is not 0.
pub(super) fn cis_turns(m: u64, n: u64) -> Complex64 {
    // sin(2πm/n) = cos(2π(4m - n)/(4n)).
    let (m, whole) = (4 * (m % n), 4 * n);
    Complex64::new(cos_turns(m, whole), cos_turns(m + whole - n, whole))
}

/// A position ν of a kernel of period N, taken apart: ν = line + offset (mod N).
#[derive(Debug, Clone, Copy)]
pub(super) struct Position {
    /// The nearest line, reduced to -N/2 < line <= N/2.
    pub(super) line: f64,
    /// What is left, -1/2 to 1/2, exact.
    pub(super) offset: f64,
}

impl Position {
    pub(super) fn new(nu: f64, n: usize) -> Self {
        let nearest = nu.round();
        Self { line: centred(nearest, n as f64), offset: nu - nearest }
    }

    /// The position in bins.
    pub(super) fn bins(self) -> f64 {
        self.line + self.offset
    }

    /// e^{-jπν}, ν as reduced.
    pub(super) fn half_turns(self) -> Complex64 {
        let phase = Complex64::cis(-std::f64::consts::PI * self.offset);
        if self.line % 2.0 == 0.0 { phase } else { -phase }
    }
}

/// A whole number reduced to -n/2 < x <= n/2; exact.
pub(super) fn centred(whole: f64, n: f64) -> f64 {
    let x = whole.rem_euclid(n);
    if 2.0 * x > n { x - n } else { x }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn whole_eighths_are_exact() {
        assert_eq!(cos_turns(0, 8), 1.0);
        assert_eq!(cos_turns(2, 8), 0.0);
        assert_eq!(cos_turns(4, 8), -1.0);
        assert_eq!(cos_turns(1, 1), 1.0);
        assert_eq!(cos_turns(1, 2), -1.0);
        assert_eq!(cis_turns(1, 4), Complex64::new(0.0, 1.0));
        assert_eq!(cis_turns(3, 4), Complex64::new(0.0, -1.0));
    }

    #[test]
    fn every_turn_meets_the_library() {
        for n in 1..40_u64 {
            for m in 0..2 * n {
                let angle = std::f64::consts::TAU * m as f64 / n as f64;
                assert!((cis_turns(m, n) - Complex64::cis(angle)).norm() < 2e-15 * (1.0 + angle), "{m}/{n}");
            }
        }
    }

    #[test]
    fn positions_reduce_to_one_period() {
        let position = Position::new(-1e6 - 0.25, 10);
        assert_eq!((position.line, position.offset), (0.0, -0.25));
        assert_eq!(Position::new(5.0, 10).line, 5.0);
        assert_eq!(Position::new(-5.0, 10).line, 5.0);
        assert_eq!(Position::new(1e300, 7).offset, 0.0);
    }
}
