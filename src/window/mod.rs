//! The catalogue of DFT windows, their kernels and their figures of merit.
//!
//! Windows are DFT-even (periodic): w\[n\], n = 0..N-1, with period N. A cosine sum is
//! w\[n\] = Σ_k (-1)^k a_k cos(2πkn/N). The kernel is W(ν) = Σ_n w\[n\] e^{-j2πνn/N} at every real ν. Designs that are
//! not DFT-even by nature say so ([`Entry::is_dft_even`]).

mod angle;
mod bessel;
mod cache;
mod catalogue;
mod design;
mod entries;
mod error;
mod fall_off;
mod gridded;
mod kernel;
mod lobes;
mod merit;
mod overlap;
mod shape;
pub(crate) mod taps;
#[cfg(test)]
mod tests;
mod text;
mod window_type;

pub use catalogue::{Entry, Family, ParameterSpec, catalogue};
pub use error::WindowError;
pub use kernel::Kernel;
pub use merit::Merit;
pub use window_type::{Sums, Window};
