//! Spectra of a track: where in the narrow band something stands, at once or while it sweeps.

use std::f64::consts::PI;

use realfft::num_complex::Complex64;

use super::Grid;

/// Sweeps are tried up to this many bins over the segment, either way, in steps of one bin.
const MOST_SWEEP: i32 = 40;

/// The strongest place of `points` within `reach` bins of the carrier that `allowed` allows: offset in bins and the
/// phasor Σ z e^{-jπδu} there.
pub(super) fn strongest(
    grid: &Grid,
    points: &[Complex64],
    reach: f64,
    allowed: impl Fn(f64) -> bool,
) -> Option<(f64, Complex64)> {
    let lines = padded(grid, points);
    let length = lines.len() as i64;
    let per_line = grid.len() as f64 / length as f64;
    let most = (reach / per_line).floor().min(length as f64 / 2.0 - 1.0) as i64;
    let place = |k: i64| k as f64 * per_line;
    let power = |k: i64| lines[k.rem_euclid(length) as usize].norm_sqr();
    let best = (-most..=most).filter(|k| allowed(place(*k))).max_by(|a, b| power(*a).total_cmp(&power(*b)))?;
    Some((place(best), at(grid, points, place(best))))
}

/// Σ z e^{-jπδu} over the points.
pub(super) fn at(grid: &Grid, points: &[Complex64], offset: f64) -> Complex64 {
    points.iter().zip(&grid.places).map(|(z, u)| z * Complex64::cis(-PI * offset * u)).sum()
}

/// The linear sweep, in bins over the segment, that gathers the most of `points` in one place, and that place.
pub(super) fn best_sweep(grid: &Grid, points: &[Complex64], reach: f64) -> (f64, f64) {
    let mut best = (0.0, 0.0, 0.0);
    for sweep in -MOST_SWEEP..=MOST_SWEEP {
        let sweep = f64::from(sweep);
        // A sweep of D bins: Φ = π D u²/4.
        let straight: Vec<Complex64> =
            points.iter().zip(&grid.places).map(|(z, u)| z * Complex64::cis(-PI * sweep / 4.0 * u * u)).collect();
        if let Some((offset, sum)) = strongest(grid, &straight, reach, |_| true)
            && sum.norm_sqr() > best.2
        {
            best = (sweep, offset, sum.norm_sqr());
        }
    }
    (best.0, best.1)
}

fn padded(grid: &Grid, points: &[Complex64]) -> Vec<Complex64> {
    let mut lines = points.to_vec();
    lines.resize(grid.transform.len(), Complex64::ZERO);
    grid.transform.process(&mut lines);
    lines
}
