//! Every window the program knows, one entry each.

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
}

/// How a window's samples are made.
#[derive(Debug, Clone, Copy)]
pub(super) enum Shape {
    /// The coefficients a_k, all positive.
    CosineSum(&'static [f64]),
}

/// One window (or family with parameters) of the catalogue.
#[derive(Debug)]
pub struct Entry {
    /// Its name on screen, on the command line and in files.
    pub name: &'static str,
    /// What kind of design it is.
    pub family: Family,
    /// Its parameters, in order.
    pub parameters: &'static [ParameterSpec],
    /// When to reach for it and what it costs, one sentence.
    pub purpose: &'static str,
    /// Where its definition is published.
    pub source: &'static str,
    pub(super) shape: Shape,
}

/// The catalogue, in the order in which windows are offered.
pub fn catalogue() -> &'static [Entry] {
    CATALOGUE
}

const CATALOGUE: &[Entry] = &[
    Entry {
        name: "rectangular",
        family: Family::CosineSum,
        parameters: &[],
        purpose: "",
        source: "",
        shape: Shape::CosineSum(&[1.0]),
    },
    Entry {
        name: "hann",
        family: Family::CosineSum,
        parameters: &[],
        purpose: "",
        source: "",
        shape: Shape::CosineSum(&[0.5, 0.5]),
    },
];
