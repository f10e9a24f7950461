//! What an entry of the catalogue is; the entries themselves stand in `entries.rs`.

use super::entries::CATALOGUE;
use super::shape::Formula;

/// What kind of design a window is.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub enum Family {
    /// A short sum of cosines.
    CosineSum,
    /// A shape given by a formula of time.
    Shape,
    /// A design whose samples follow from its length.
    Design,
}

/// What a window's parameter means and where it may lie.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct ParameterSpec {
    /// Its letter or name: `β`.
    pub symbol: &'static str,
    /// Smallest value allowed.
    pub min: f64,
    /// Largest value allowed.
    pub max: f64,
    /// The value taken when none is given.
    pub default: f64,
    /// A comfortable step for a spin button.
    pub step: f64,
    /// Whether only whole values are allowed.
    pub whole: bool,
}

/// How a window's samples are made.
#[derive(Debug, Clone, Copy)]
pub(super) enum Shape {
    /// Fixed coefficients a_k of w\[n\] = Σ_k (-1)^k a_k cos(2πkn/N).
    CosineSum(&'static [f64]),
    /// Coefficients a_k that follow from the parameters.
    Terms(fn(&[f64]) -> Vec<f64>),
    /// A formula of time, even about the middle.
    Formula(Formula),
    /// Dolph-Chebyshev.
    DolphChebyshev,
    /// Slepian's sequence of order zero.
    Slepian,
    /// A decaying exponential that starts at one.
    Exponential,
}

/// One window (or family with parameters) of the catalogue.
#[derive(Debug)]
pub struct Entry {
    /// Its name on screen, on the command line and in files.
    pub name: &'static str,
    /// What kind of design it is.
    pub family: Family,
    /// Its parameters, in order. `cosine-sum` takes as many of its coefficients as are given, at least one.
    pub parameters: &'static [ParameterSpec],
    /// When to reach for it and what it costs, one sentence.
    pub purpose: &'static str,
    /// Where its definition is published.
    pub source: &'static str,
    pub(super) shape: Shape,
    /// The fewest parameters that make one, when any is given.
    pub(super) least: usize,
    /// How many parameters are taken when none is given.
    pub(super) n_default: usize,
}

impl Entry {
    /// Whether it is DFT-even: symmetric about sample N/2, one period of N samples. Dolph-Chebyshev and Slepian are
    /// not (they are symmetric about (N-1)/2, which their defining property asks for), nor is the exponential.
    pub fn is_dft_even(&self) -> bool {
        !matches!(self.shape, Shape::DolphChebyshev | Shape::Slepian | Shape::Exponential)
    }

    /// Whether its parameters are the coefficients of a cosine sum, as many as one likes.
    pub fn has_own_coefficients(&self) -> bool {
        self.least < self.parameters.len()
    }

    /// The parameters taken when none is given.
    pub fn default_parameters(&self) -> Vec<f64> {
        self.parameters.iter().take(self.n_default).map(|spec| spec.default).collect()
    }
}

/// The catalogue, in the order in which windows are offered.
pub fn catalogue() -> &'static [Entry] {
    CATALOGUE
}

/// A cosine sum of fixed coefficients.
pub(super) const fn cosine_sum(
    name: &'static str,
    terms: &'static [f64],
    purpose: &'static str,
    source: &'static str,
) -> Entry {
    let shape = Shape::CosineSum(terms);
    Entry { name, family: Family::CosineSum, parameters: &[], purpose, source, shape, least: 0, n_default: 0 }
}

/// A window given by a formula of time.
pub(super) const fn formula(
    name: &'static str,
    parameters: &'static [ParameterSpec],
    formula: Formula,
    purpose: &'static str,
    source: &'static str,
) -> Entry {
    made(name, Family::Shape, parameters, Shape::Formula(formula), purpose, source)
}

/// Any other window, all of whose parameters are given together.
pub(super) const fn made(
    name: &'static str,
    family: Family,
    parameters: &'static [ParameterSpec],
    shape: Shape,
    purpose: &'static str,
    source: &'static str,
) -> Entry {
    Entry { name, family, parameters, purpose, source, shape, least: parameters.len(), n_default: parameters.len() }
}

/// A parameter that may take any value of its range.
pub(super) const fn range(symbol: &'static str, min: f64, max: f64, default: f64, step: f64) -> ParameterSpec {
    ParameterSpec { symbol, min, max, default, step, whole: false }
}

/// A parameter that counts.
pub(super) const fn count(symbol: &'static str, min: f64, max: f64, default: f64) -> ParameterSpec {
    ParameterSpec { symbol, min, max, default, step: 1.0, whole: true }
}
