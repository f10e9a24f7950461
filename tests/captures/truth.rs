//! `truth.json` and least squares, for the tests here.

use std::f64::consts::TAU;
use std::path::PathBuf;

use serde_json::Value;

pub(crate) fn folder() -> PathBuf {
    PathBuf::from(concat!(env!("CARGO_MANIFEST_DIR"), "/sample-captures"))
}

/// The object of each file, in the order made.
pub(crate) fn truths() -> Vec<Value> {
    let text = std::fs::read_to_string(folder().join("truth.json")).unwrap();
    serde_json::from_str(&text).unwrap()
}

pub(crate) fn truth_of(file: &str) -> Value {
    truths().into_iter().find(|t| t["file"] == file).unwrap()
}

/// Cosine and sine amplitudes of tones at known frequencies, and a constant, by least squares: the columns are
/// nearly orthogonal, so the normal equations are well conditioned.
pub(crate) fn fit(samples: &[f64], rate_hz: f64, frequencies_hz: &[f64]) -> Vec<(f64, f64)> {
    let width = 2 * frequencies_hz.len() + 1;
    let mut normal = vec![vec![0.0; width + 1]; width];
    let mut row = vec![1.0; width];
    for (n, &x) in samples.iter().enumerate() {
        for (k, f) in frequencies_hz.iter().enumerate() {
            let (sine, cosine) = (TAU * (f * n as f64 / rate_hz).fract()).sin_cos();
            (row[2 * k], row[2 * k + 1]) = (cosine, sine);
        }
        for i in 0..width {
            for j in i..width {
                normal[i][j] += row[i] * row[j];
            }
            normal[i][width] += row[i] * x;
        }
    }
    for i in 0..width {
        for j in 0..i {
            normal[i][j] = normal[j][i];
        }
    }
    let solved = solve(normal);
    frequencies_hz.iter().enumerate().map(|(k, _)| (solved[2 * k], solved[2 * k + 1])).collect()
}

/// Gauss elimination without pivoting: the matrix is symmetric and positive definite.
fn solve(mut rows: Vec<Vec<f64>>) -> Vec<f64> {
    let n = rows.len();
    for i in 0..n {
        for j in i + 1..n {
            let factor = rows[j][i] / rows[i][i];
            for k in i..=n {
                rows[j][k] -= factor * rows[i][k];
            }
        }
    }
    let mut x = vec![0.0; n];
    for i in (0..n).rev() {
        let known: f64 = (i + 1..n).map(|j| rows[i][j] * x[j]).sum();
        x[i] = (rows[i][n] - known) / rows[i][i];
    }
    x
}
