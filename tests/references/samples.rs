//! Samples and kernels against independently computed ones.

use panewise::window::Window;

use super::computed::{KERNELS, SAMPLES};

/// Of the largest sample.
const SAMPLE_TOLERANCE: f64 = 1e-12;
/// Of Σ|w|, for windows without a closed form.
const KERNEL_TOLERANCE: f64 = 1e-10;
/// Of N·Σ|a_k|, for cosine sums: rounding.
const COSINE_SUM_TOLERANCE: f64 = 2e-15;

#[test]
fn samples_are_those_of_the_definition() {
    for (text, n, expected) in SAMPLES {
        let samples = Window::parse(text).unwrap().samples(*n);
        let largest = samples.iter().fold(0.0_f64, |largest, w| largest.max(w.abs()));
        for (i, value) in *expected {
            assert!(
                (samples[*i] - value).abs() <= SAMPLE_TOLERANCE * largest,
                "{text} N = {n}, w[{i}] = {}",
                samples[*i]
            );
        }
    }
}

#[test]
fn kernels_are_those_of_the_definition() {
    for (text, n, nu, re, im) in KERNELS {
        let window = Window::parse(text).unwrap();
        let value = window.kernel(*n).at(*nu);
        let error = (value.re - re).hypot(value.im - im);
        let allowed = match window.cosine_terms() {
            Some(terms) => COSINE_SUM_TOLERANCE * *n as f64 * terms.iter().map(|a| a.abs()).sum::<f64>(),
            None => KERNEL_TOLERANCE * window.samples(*n).iter().map(|w| w.abs()).sum::<f64>(),
        };
        assert!(error <= allowed, "{text} N = {n}, W({nu}) = {value}, off by {error:e}, allowed {allowed:e}");
    }
}
