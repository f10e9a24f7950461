//! Many panes from one transform: the power |Y|² a line of every window.
//!
//! The pass runs with the widest vectors the processor has, and on two threads where that pays; the figures do not
//! depend on either.

// Only what is inlined into the dispatched closure is compiled for the wider vectors.
#![allow(clippy::inline_always)]
// Fixed-length blocks walked by index: what the vectoriser turns into straight vector code.
#![allow(clippy::needless_range_loop)]

use realfft::num_complex::Complex64;

use super::transform::transform_in_place;
use super::{Transform, buffers};

/// Lines worked on at a time: what one block needs stays in the nearest cache.
const BLOCK: usize = 128;

/// Transforms with fewer lines than this are not worth a second thread.
const LINES_FOR_TWO: usize = 1 << 15;

/// The power |Y\[k\]|², k = 0..M/2, of each cosine-sum window over one transform of length M = P·N.
///
/// Y\[k\] = a_0 X\[k\] + Σ_m (-1)^m (a_m/2)(X\[k-mP\] + X\[k+mP\]), the transform of w\[n\]·x\[n\] for
/// w\[n\] = Σ_m (-1)^m a_m cos(2πmn/N): windowing is a short convolution of the lines. `windows` holds a_0, a_1, ...
/// of each window; a window without terms gives zeros.
///
/// # Reference
/// Nuttall, Some windows with very good sidelobe behavior, IEEE Trans. ASSP 29(1), 1981, on windowing by convolution
/// in the frequency domain (from memory).
pub fn cosine_pane_powers(transform: &Transform, windows: &[&[f64]]) -> Vec<Vec<f64>> {
    let n_lines = transform.lines().len();
    let kernels: Vec<Vec<f64>> = windows.iter().map(|terms| line_weights(terms)).collect();
    let mut powers: Vec<Vec<f64>> = windows.iter().map(|_| buffers::REAL.take(n_lines)).collect();
    let arch = pulp::Arch::new();
    let fill = |first: usize, out: &mut [&mut [f64]]| arch.dispatch(|| fill(transform, &kernels, first, out));
    if n_lines < LINES_FOR_TWO {
        let mut parts: Vec<&mut [f64]> = powers.iter_mut().map(Vec::as_mut_slice).collect();
        fill(0, &mut parts);
        return powers;
    }
    let half = n_lines / 2;
    let (mut low, mut high): (Vec<_>, Vec<_>) = powers.iter_mut().map(|p| p.split_at_mut(half)).unzip();
    std::thread::scope(|scope| {
        scope.spawn(|| fill(half, &mut high));
        fill(0, &mut low);
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

/// Real and imaginary parts apart, so that lines stand side by side in vector registers.
#[derive(Clone, Copy)]
struct Parts {
    re: [f64; BLOCK],
    im: [f64; BLOCK],
}

const ZERO: Parts = Parts { re: [0.0; BLOCK], im: [0.0; BLOCK] };

/// Fills `out` (a slice a window, all of one length) with the powers of the lines from `first` on.
#[inline(always)]
fn fill(transform: &Transform, kernels: &[Vec<f64>], first: usize, out: &mut [&mut [f64]]) {
    let n_out = out.first().map_or(0, |o| o.len());
    let reach = kernels.iter().map(Vec::len).max().unwrap_or(0).saturating_sub(1) * transform.padding();
    let mut lines = vec![Complex64::ZERO; BLOCK + 2 * reach];
    // X[k] itself, then X[k-mP] + X[k+mP] for m = 1, 2, ...: shared by all windows.
    let mut sums = vec![ZERO; reach / transform.padding() + 1];
    let mut power = [0.0; BLOCK];
    for from in (0..n_out).step_by(BLOCK) {
        transform.copy_from((first + from) as i64 - reach as i64, &mut lines);
        add_mirrored(&lines, reach, transform.padding(), &mut sums);
        let len = BLOCK.min(n_out - from);
        for (kernel, powers) in kernels.iter().zip(out.iter_mut()) {
            combine(kernel, &sums, &mut power);
            powers[from..from + len].copy_from_slice(&power[..len]);
        }
    }
}

#[inline(always)]
fn add_mirrored(lines: &[Complex64], reach: usize, padding: usize, sums: &mut [Parts]) {
    for (m, sum) in sums.iter_mut().enumerate() {
        let shift = m * padding;
        let below = &lines[reach - shift..reach - shift + BLOCK];
        let above = &lines[reach + shift..reach + shift + BLOCK];
        for i in 0..BLOCK {
            let both = if m == 0 { below[i] } else { below[i] + above[i] };
            sum.re[i] = both.re;
            sum.im[i] = both.im;
        }
    }
}

/// The power of one window over a block: the common lengths are unrolled, so that sums stay in registers.
#[inline(always)]
fn combine(kernel: &[f64], sums: &[Parts], power: &mut [f64; BLOCK]) {
    match *kernel {
        [] => power.fill(0.0),
        [a] => unrolled([a], sums, power),
        [a, b] => unrolled([a, b], sums, power),
        [a, b, c] => unrolled([a, b, c], sums, power),
        [a, b, c, d] => unrolled([a, b, c, d], sums, power),
        [a, b, c, d, e] => unrolled([a, b, c, d, e], sums, power),
        _ => rolled(kernel, sums, power),
    }
}

#[inline(always)]
fn unrolled<const TERMS: usize>(kernel: [f64; TERMS], sums: &[Parts], power: &mut [f64; BLOCK]) {
    let Some(sums) = sums.first_chunk::<TERMS>() else { return };
    for i in 0..BLOCK {
        let (mut re, mut im) = (0.0, 0.0);
        for m in 0..TERMS {
            re += kernel[m] * sums[m].re[i];
            im += kernel[m] * sums[m].im[i];
        }
        power[i] = re * re + im * im;
    }
}

#[inline(always)]
fn rolled(kernel: &[f64], sums: &[Parts], power: &mut [f64; BLOCK]) {
    let mut total = ZERO;
    for (weight, sum) in kernel.iter().zip(sums) {
        for i in 0..BLOCK {
            total.re[i] += weight * sum.re[i];
            total.im[i] += weight * sum.im[i];
        }
    }
    for i in 0..BLOCK {
        power[i] = total.re[i] * total.re[i] + total.im[i] * total.im[i];
    }
}

/// The power |Y\[k\]|², k = 0..N/2, of a window given by its samples: a transform of its own.
pub fn sampled_pane_power(samples: &[f64], window: &[f64]) -> Vec<f64> {
    let mut windowed = buffers::REAL.take(samples.len());
    for ((y, x), w) in windowed.iter_mut().zip(samples).zip(window) {
        *y = x * w;
    }
    let transform = transform_in_place(&mut windowed);
    buffers::REAL.give_back(windowed);
    let mut power = buffers::REAL.take(transform.lines().len());
    for (p, y) in power.iter_mut().zip(transform.lines()) {
        *p = y.norm_sqr();
    }
    power
}

#[cfg(test)]
mod tests {
    use super::super::transform::transform;
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
            let powers = cosine_pane_powers(&transform(&samples), &[&[1.0], HANN, FOUR_TERMS]);
            for (terms, power) in [&[1.0][..], HANN, FOUR_TERMS].iter().zip(&powers) {
                let direct = sampled_pane_power(&samples, &window_samples(terms, n));
                for (k, (a, b)) in power.iter().zip(&direct).enumerate() {
                    assert!((a - b).abs() <= 1e-12 * (n * n) as f64, "N = {n}, k = {k}: {a} against {b}");
                }
            }
        }
    }

    #[test]
    fn padded_lines_are_windowed_as_the_samples_were() {
        for (n, padding) in [(1, 3), (8, 2), (9, 4), (300, 5)] {
            let samples: Vec<f64> = (0..n).map(|i| (0.9 * f64::from(i)).sin() + 0.3).collect();
            let windowed: Vec<f64> =
                samples.iter().zip(window_samples(FOUR_TERMS, samples.len())).map(|(x, w)| x * w).collect();
            let padded = super::super::transform::transform_padded(&samples, padding);
            let direct = super::super::transform::transform_padded(&windowed, padding);
            let power = &cosine_pane_powers(&padded, &[FOUR_TERMS])[0];
            assert_eq!(power.len(), samples.len() * padding / 2 + 1);
            for (k, (p, y)) in power.iter().zip(direct.lines()).enumerate() {
                assert!((p - y.norm_sqr()).abs() < 1e-12 * f64::from(n * n), "N = {n}, P = {padding}, k = {k}");
            }
        }
    }

    /// The window of Heinzel et al. 2002 with the deepest side lobes, -248.4 dB, by shifting lines and by windowing
    /// samples: double precision holds them either way. They fall on to -272 dB at 900 lines, where both ways still
    /// agree to hundredths of a decibel: rounding ends neither above about -300 dB.
    #[test]
    fn the_deepest_side_lobes_survive_both_ways_of_windowing() {
        let window = crate::window::Window::parse("hft248d").unwrap();
        let terms = window.cosine_terms().unwrap();
        let n = 4096;
        let nu = 1000.5;
        let samples: Vec<f64> = (0..n).map(|i| (std::f64::consts::TAU * nu * i as f64 / n as f64).cos()).collect();
        let shifted = &cosine_pane_powers(&transform(&samples), &[terms])[0];
        let direct = sampled_pane_power(&samples, &window.samples(n));
        let top = window.sums(n).s1.powi(2) / 4.0;
        let level = |power: f64| 10.0 * (power / top).log10();
        // Half-way between lines every lobe beyond the main lobe shows near its top.
        let lobes = |power: &[f64]| power[1015..1400].iter().copied().map(level).fold(f64::NEG_INFINITY, f64::max);
        for power in [shifted, &direct] {
            assert!((-250.0..-247.5).contains(&lobes(power)), "{} dB", lobes(power));
            assert!((level(power[1000]) - level(power[1001])).abs() < 1e-9);
        }
        let far = |power: &[f64]| power[1900..2000].iter().copied().map(level).fold(f64::NEG_INFINITY, f64::max);
        assert!(
            far(shifted) < -270.0 && (far(shifted) - far(&direct)).abs() < 0.05,
            "{} and {} dB",
            far(shifted),
            far(&direct)
        );
    }

    #[test]
    fn two_threads_give_what_one_gives() {
        let n = 2 * LINES_FOR_TWO + 10;
        let samples: Vec<f64> = (0..n).map(|i| (0.37 * i as f64).sin()).collect();
        let transform = transform(&samples);
        let kernels = vec![line_weights(FOUR_TERMS)];
        let mut alone = vec![0.0; n / 2 + 1];
        fill(&transform, &kernels, 0, &mut [alone.as_mut_slice()]);
        assert_eq!(cosine_pane_powers(&transform, &[FOUR_TERMS]), vec![alone]);
    }

    #[test]
    fn a_window_without_terms_gives_zeros() {
        assert_eq!(cosine_pane_powers(&transform(&[1.0, 2.0, 3.0]), &[&[]]), vec![vec![0.0, 0.0]]);
    }
}
