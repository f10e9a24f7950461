//! Taking the mean or a straight line out of a segment, over its whole length, before it is transformed.

/// What is taken out of a segment before its transform.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "lowercase")]
pub enum Removal {
    /// Nothing.
    None,
    /// The mean.
    #[default]
    Mean,
    /// The least-squares straight line.
    Line,
}

/// What was taken out, in the unit of the samples.
#[derive(Debug, Clone, Copy, PartialEq, serde::Serialize, serde::Deserialize)]
pub struct Removed {
    /// What was asked for.
    pub what: Removal,
    /// The value removed in the middle of the segment (the mean).
    pub offset: f64,
    /// The slope removed, unit a second; 0 unless a line was removed.
    pub slope_per_s: f64,
}

/// Takes `what` out of `samples` and says how much that was.
///
/// The line is the least-squares fit c + d·(n - (N-1)/2); its two terms are orthogonal, so c is the mean.
pub fn remove(samples: &mut [f64], sample_rate_hz: f64, what: Removal) -> Removed {
    if what == Removal::None || samples.is_empty() {
        return Removed { what, offset: 0.0, slope_per_s: 0.0 };
    }
    let n = samples.len() as f64;
    let offset = samples.iter().sum::<f64>() / n;
    // A second pass takes out what rounding left of the first: the mean of the remainders.
    let offset = offset + samples.iter().map(|x| x - offset).sum::<f64>() / n;
    let middle = (n - 1.0) / 2.0;
    let slope = if what == Removal::Line && samples.len() > 1 {
        let moment: f64 = samples.iter().enumerate().map(|(i, x)| (i as f64 - middle) * (x - offset)).sum();
        moment / (n * (n * n - 1.0) / 12.0)
    } else {
        0.0
    };
    for (i, x) in samples.iter_mut().enumerate() {
        *x -= offset + slope * (i as f64 - middle);
    }
    Removed { what, offset, slope_per_s: slope * sample_rate_hz }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_line_is_recovered_and_removed() {
        let mut samples: Vec<f64> = (0..101).map(|i| 3.0 + 0.5 * f64::from(i)).collect();
        let removed = remove(&mut samples, 10.0, Removal::Line);
        assert!((removed.offset - 28.0).abs() < 1e-12);
        assert!((removed.slope_per_s - 5.0).abs() < 1e-12);
        assert!(samples.iter().all(|x| x.abs() < 1e-12));
    }

    #[test]
    fn the_mean_leaves_the_slope_and_none_leaves_all() {
        let mut samples = vec![1.0, 2.0, 3.0];
        assert_eq!(remove(&mut samples, 1.0, Removal::None).offset, 0.0);
        assert_eq!(remove(&mut samples, 1.0, Removal::Mean).offset, 2.0);
        assert_eq!(samples, [-1.0, 0.0, 1.0]);
    }

    #[test]
    fn one_sample_and_none_at_all() {
        let mut one = [4.0];
        let removed = remove(&mut one, 1.0, Removal::Line);
        assert_eq!((removed.offset, removed.slope_per_s, one[0]), (4.0, 0.0, 0.0));
        assert_eq!(remove(&mut [], 1.0, Removal::Mean).offset, 0.0);
    }
}
