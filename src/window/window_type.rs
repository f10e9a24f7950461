//! A window as the user chose it: an entry of the catalogue with its parameters.

use std::fmt;
use std::str::FromStr;
use std::sync::Arc;

use super::catalogue::{Entry, Shape, catalogue};
use super::{Kernel, Merit};

/// A window of the catalogue with its parameters; written `hann`, `kaiser=8.6`, `cosine-sum=0.5,0.5`.
#[derive(Clone)]
pub struct Window {
    entry: &'static Entry,
    parameters: Vec<f64>,
}

/// A window that cannot be had.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum WindowError {
    /// No entry has that name.
    #[error("no window is called '{given}': 'panewise windows' lists them")]
    Unknown {
        /// The name given.
        given: String,
    },
}

/// The sums of a window of N samples.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct Sums {
    /// S1 = Σ w.
    pub s1: f64,
    /// S2 = Σ w².
    pub s2: f64,
}

impl Window {
    /// The window written `text`.
    ///
    /// # Errors
    /// [`WindowError`] for an unknown name, or a parameter that is missing, not a number or out of range.
    pub fn parse(text: &str) -> Result<Self, WindowError> {
        let entry = catalogue().iter().find(|e| e.name == text.trim());
        let entry = entry.ok_or_else(|| WindowError::Unknown { given: text.trim().to_owned() })?;
        Ok(Self { entry, parameters: Vec::new() })
    }

    /// The catalogue's entry.
    pub fn entry(&self) -> &'static Entry {
        self.entry
    }

    /// The catalogue's name, without parameters.
    pub fn name(&self) -> &'static str {
        self.entry.name
    }

    /// The parameters, in the order of the entry's [`Entry::parameters`] (for `cosine-sum` the coefficients).
    pub fn parameters(&self) -> &[f64] {
        &self.parameters
    }

    /// The coefficients a_k of w\[n\] = Σ_k (-1)^k a_k cos(2πkn/N), where the window is a cosine sum.
    pub fn cosine_terms(&self) -> Option<&[f64]> {
        match self.entry.shape {
            Shape::CosineSum(terms) => Some(terms),
        }
    }

    /// Whether its top is so flat that its maximum says nothing of frequency (scalloping loss under 0.05 dB).
    pub fn is_flat_top(&self) -> bool {
        false
    }

    /// Half the width of the main lobe at N samples, from its top to the first null, bins.
    pub fn main_lobe_half_width_bins(&self, n: usize) -> f64 {
        self.merit(n).width_null_bins / 2.0
    }

    /// The samples w\[0\] to w\[n-1\].
    pub fn samples(&self, n: usize) -> Vec<f64> {
        let terms = self.cosine_terms().unwrap_or(&[1.0]);
        (0..n).map(|i| super::kernel::cosine_sum_sample(terms, i, n)).collect()
    }

    /// The sums S1 and S2 over N samples.
    pub fn sums(&self, n: usize) -> Sums {
        let samples = self.samples(n);
        Sums { s1: samples.iter().sum(), s2: samples.iter().map(|w| w * w).sum() }
    }

    /// The kernel for N samples.
    pub fn kernel(&self, n: usize) -> Kernel {
        Kernel::new(self, n)
    }

    /// The figures of merit for N samples, computed once for each window and length.
    pub fn merit(&self, n: usize) -> Arc<Merit> {
        Arc::new(Merit::of(self, n))
    }
}

impl PartialEq for Window {
    fn eq(&self, other: &Self) -> bool {
        self.entry.name == other.entry.name && self.parameters == other.parameters
    }
}

impl fmt::Debug for Window {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "Window({self})")
    }
}

impl fmt::Display for Window {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(self.entry.name)
    }
}

impl FromStr for Window {
    type Err = WindowError;

    fn from_str(text: &str) -> Result<Self, Self::Err> {
        Self::parse(text)
    }
}

impl serde::Serialize for Window {
    fn serialize<S: serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_str(self)
    }
}

impl<'de> serde::Deserialize<'de> for Window {
    fn deserialize<D: serde::Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let text = String::deserialize(deserializer)?;
        text.parse().map_err(serde::de::Error::custom)
    }
}
