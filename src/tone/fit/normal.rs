//! The normal equations of a joint fit, in closed form: the samples enter only through the moments of their transform.

use std::f64::consts::TAU;

use nalgebra::{Cholesky, DMatrix, DVector, Dyn};
use realfft::num_complex::Complex64;

use super::sums::centred_sums;
use crate::signal::Removal;
use crate::spectrum::Dense;

/// A steady tone of the model, Re(a e^{jωm}), m counted from the segment's middle.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct SteadyTone {
    /// Frequency ω, rad a sample.
    pub omega: f64,
    /// Peak amplitude and cosine phase in the middle of the segment, a = A e^{jφ}.
    pub middle_amplitude: Complex64,
    /// Whether its frequency is held.
    pub held: bool,
}

/// One column of the design: Re(g m^p e^{jωm}).
#[derive(Debug, Clone, Copy)]
struct Column {
    g: Complex64,
    power: usize,
    omega: f64,
}

/// The columns of a model: the background first, then for each tone its two amplitudes and, unless held, its frequency.
fn columns(removal: Removal, tones: &[SteadyTone]) -> Vec<Column> {
    let still = |power| Column { g: Complex64::ONE, power, omega: 0.0 };
    let mut columns = match removal {
        Removal::None => Vec::new(),
        Removal::Mean => vec![still(0)],
        Removal::Line => vec![still(0), still(1)],
    };
    for tone in tones {
        let omega = tone.omega;
        columns.push(Column { g: Complex64::ONE, power: 0, omega });
        columns.push(Column { g: Complex64::I, power: 0, omega });
        if !tone.held {
            columns.push(Column { g: Complex64::I * tone.middle_amplitude, power: 1, omega });
        }
    }
    columns
}

/// The normal matrix of a model over N samples, factored; columns are scaled to unit length inside.
#[derive(Debug, Clone)]
pub(super) struct NormalEquations {
    columns: Vec<Column>,
    scales: DVector<f64>,
    matrix: DMatrix<f64>,
    factor: Cholesky<f64, Dyn>,
}

impl NormalEquations {
    /// `None` where two columns cannot be told apart.
    pub(super) fn of(n: usize, removal: Removal, tones: &[SteadyTone]) -> Option<Self> {
        let columns = columns(removal, tones);
        let matrix = gram(n, &columns);
        let scales = matrix.diagonal().map(|d| if d > 0.0 { 1.0 / d.sqrt() } else { 1.0 });
        let scaled = DMatrix::from_fn(columns.len(), columns.len(), |i, j| matrix[(i, j)] * scales[i] * scales[j]);
        let factor = Cholesky::new(scaled)?;
        Some(Self { columns, scales, matrix, factor })
    }

    /// The least-squares step from `linear` (the amplitudes the model stands at, 0 for frequencies) towards the samples.
    pub(super) fn step(&self, samples: &Dense, linear: &DVector<f64>) -> DVector<f64> {
        let remainder = self.right_hand_side(samples) - &self.matrix * linear;
        self.factor.solve(&remainder.component_mul(&self.scales)).component_mul(&self.scales)
    }

    /// The inverse of the normal matrix: covariances for noise of unit variance a sample.
    pub(super) fn covariance(&self) -> DMatrix<f64> {
        let inverse = self.factor.inverse();
        DMatrix::from_fn(inverse.nrows(), inverse.ncols(), |i, j| inverse[(i, j)] * self.scales[i] * self.scales[j])
    }

    /// Σ x[m] Re(g m^p e^{jωm}) = Re(g·conj(Σ x m^p e^{-jωm})).
    fn right_hand_side(&self, samples: &Dense) -> DVector<f64> {
        let n = samples.n_samples() as f64;
        let mut known: Option<(f64, [Complex64; crate::spectrum::MOMENTS])> = None;
        let entries = self.columns.iter().map(|column| {
            let moments = match known {
                Some((omega, moments)) if omega == column.omega => moments,
                _ => samples.moments_at(column.omega * n / TAU),
            };
            known = Some((column.omega, moments));
            (column.g * moments[column.power].conj()).re
        });
        DVector::from_vec(entries.collect())
    }
}

/// All inner products of the columns: ½ Re(g h* S(ω-υ) + g h S(ω+υ)) with S = Σ m^{p+q} e^{jθm}.
fn gram(n: usize, columns: &[Column]) -> DMatrix<f64> {
    let mut matrix = DMatrix::zeros(columns.len(), columns.len());
    let blocks = blocks(columns);
    for (b, first) in blocks.iter().enumerate() {
        for second in &blocks[..=b] {
            let (omega, other) = (columns[first.start].omega, columns[second.start].omega);
            let (apart, together) = (centred_sums(n, omega - other), centred_sums(n, omega + other));
            for i in first.clone() {
                for j in second.clone() {
                    let (x, y) = (columns[i], columns[j]);
                    let power = x.power + y.power;
                    let product = (x.g * y.g.conj() * apart[power] + x.g * y.g * together[power]).re / 2.0;
                    matrix[(i, j)] = product;
                    matrix[(j, i)] = product;
                }
            }
        }
    }
    matrix
}

/// Runs of columns of one frequency.
fn blocks(columns: &[Column]) -> Vec<std::ops::Range<usize>> {
    let mut blocks = Vec::new();
    let mut start = 0;
    for i in 1..=columns.len() {
        if i == columns.len() || columns[i].omega != columns[start].omega {
            blocks.push(start..i);
            start = i;
        }
    }
    blocks
}
