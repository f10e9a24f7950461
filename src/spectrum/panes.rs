//! Many panes from one transform: the power |Y|² a line of every window.

use realfft::num_complex::Complex64;

use super::Transform;
use super::transform::transform;

/// Lines worked on at a time: the sums of one block stay in the nearest cache.
const BLOCK: usize = 256;

/// Transforms with fewer lines than this are not worth a second thread.
const LINES_FOR_TWO: usize = 1 << 14;

/// The power |Y\[k\]|², k = 0..N/2, of each cosine-sum window over one transform.
///
/// Y\[k\] = a_0 X\[k\] + Σ_m (-1)^m (a_m/2)(X\[k-m\] + X\[k+m\]), the transform of w\[n\]·x\[n\] for
/// w\[n\] = Σ_m (-1)^m a_m cos(2πmn/N): windowing is a short convolution of the lines. `windows` holds a_0, a_1, ...
/// of each window; a window without terms gives zeros.
///
/// # Reference
/// Nuttall, Some windows with very good sidelobe behavior, IEEE Trans. ASSP 29(1), 1981, on windowing by convolution
/// in the frequency domain (from memory).
pub fn cosine_pane_powers(transform: &Transform, windows: &[&[f64]]) -> Vec<Vec<f64>> {
    let n_lines = transform.lines().len();
    let kernels: Vec<Vec<f64>> = windows.iter().map(|terms| line_weights(terms)).collect();
    let mut powers = vec![vec![0.0; n_lines]; windows.len()];
    if n_lines < LINES_FOR_TWO {
        let mut parts: Vec<&mut [f64]> = powers.iter_mut().map(Vec::as_mut_slice).collect();
        fill(transform, &kernels, 0, &mut parts);
        return powers;
    }
    let half = n_lines / 2;
    let (mut low, mut high): (Vec<_>, Vec<_>) = powers.iter_mut().map(|p| p.split_at_mut(half)).unzip();
    std::thread::scope(|scope| {
        scope.spawn(|| fill(transform, &kernels, half, &mut high));
        fill(transform, &kernels, 0, &mut low);
    });
    powers
}

/// a_0 and (-1)^m a_m/2: what X\[k\] and the sums X\[k-m\] + X\[k+m\] are weighted with.
fn line_weights(terms: &[f64]) -> Vec<f64> {
    let weight = |(m, a): (usize, &f64)| match m {
        0 => *a,
        m if m % 2 == 0 => a / 2.0,
        _ => -a / 2.0,
    };
    terms.iter().enumerate().map(weight).collect()
}

/// Fills `out` (a slice a window, all of one length) with the powers of the lines from `first` on.
fn fill(transform: &Transform, kernels: &[Vec<f64>], first: usize, out: &mut [&mut [f64]]) {
    let n_out = out.first().map_or(0, |o| o.len());
    let reach = kernels.iter().map(Vec::len).max().unwrap_or(0).saturating_sub(1);
    let mut padded = vec![Complex64::ZERO; BLOCK + 2 * reach];
    let mut sums = vec![[Complex64::ZERO; BLOCK]; reach];
    let mut windowed = [Complex64::ZERO; BLOCK];
    for from in (0..n_out).step_by(BLOCK) {
        let len = BLOCK.min(n_out - from);
        transform.copy_from((first + from) as i64 - reach as i64, &mut padded[..len + 2 * reach]);
        let centre = &padded[reach..reach + len];
        for (m, sum) in (1..).zip(&mut sums) {
            let below = &padded[reach - m..reach - m + len];
            let above = &padded[reach + m..reach + m + len];
            for ((s, b), a) in sum[..len].iter_mut().zip(below).zip(above) {
                *s = b + a;
            }
        }
        for (kernel, powers) in kernels.iter().zip(out.iter_mut()) {
            combine(kernel, centre, &sums, &mut windowed[..len]);
            for (p, y) in powers[from..from + len].iter_mut().zip(&windowed) {
                *p = y.re * y.re + y.im * y.im;
            }
        }
    }
}

fn combine(kernel: &[f64], centre: &[Complex64], sums: &[[Complex64; BLOCK]], out: &mut [Complex64]) {
    let a0 = kernel.first().copied().unwrap_or(0.0);
    for (y, x) in out.iter_mut().zip(centre) {
        *y = x * a0;
    }
    for (weight, sum) in kernel.iter().skip(1).zip(sums) {
        for (y, s) in out.iter_mut().zip(sum) {
            *y += s * *weight;
        }
    }
}

/// The power |Y\[k\]|², k = 0..N/2, of a window given by its samples: a transform of its own.
pub fn sampled_pane_power(samples: &[f64], window: &[f64]) -> Vec<f64> {
    let windowed = samples.iter().zip(window).map(|(x, w)| x * w).collect();
    transform(windowed).lines().iter().map(Complex64::norm_sqr).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    const HANN: &[f64] = &[0.5, 0.5];
    const FOUR_TERMS: &[f64] = &[0.35875, 0.48829, 0.14128, 0.01168];

    fn window_samples(terms: &[f64], n: usize) -> Vec<f64> {
        let sample = |i: usize| {
            let turn = std::f64::consts::TAU * i as f64 / n as f64;
            line_weights(terms)
                .iter()
                .enumerate()
                .map(|(m, c)| if m == 0 { *c } else { 2.0 * c * (m as f64 * turn).cos() })
                .sum()
        };
        (0..n).map(sample).collect()
    }

    #[test]
    fn convolving_lines_equals_windowing_samples_at_every_length() {
        for n in (1..=64).chain([255, 256, 257, 600, 1031]) {
            let samples: Vec<f64> = (0..n).map(|i| (1.3 * i as f64).sin() + 0.2 * (i % 7) as f64).collect();
            let powers = cosine_pane_powers(&transform(samples.clone()), &[&[1.0], HANN, FOUR_TERMS]);
            for (terms, power) in [&[1.0][..], HANN, FOUR_TERMS].iter().zip(&powers) {
                let direct = sampled_pane_power(&samples, &window_samples(terms, n));
                for (k, (a, b)) in power.iter().zip(&direct).enumerate() {
                    assert!((a - b).abs() <= 1e-12 * (n * n) as f64, "N = {n}, k = {k}: {a} against {b}");
                }
            }
        }
    }

    #[test]
    fn two_threads_give_what_one_gives() {
        let n = 2 * LINES_FOR_TWO + 10;
        let samples: Vec<f64> = (0..n).map(|i| (0.37 * i as f64).sin()).collect();
        let transform = transform(samples);
        let kernels = vec![line_weights(FOUR_TERMS)];
        let mut alone = vec![0.0; n / 2 + 1];
        fill(&transform, &kernels, 0, &mut [alone.as_mut_slice()]);
        assert_eq!(cosine_pane_powers(&transform, &[FOUR_TERMS]), vec![alone]);
    }

    #[test]
    fn a_window_without_terms_gives_zeros() {
        assert_eq!(cosine_pane_powers(&transform(vec![1.0, 2.0, 3.0]), &[&[]]), vec![vec![0.0, 0.0]]);
    }
}
