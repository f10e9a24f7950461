//! The catalogue of DFT windows, their kernels and their figures of merit.
//!
//! Windows are DFT-even (periodic): w\[n\], n = 0..N-1, with period N. A cosine sum is
//! w\[n\] = Σ_k (-1)^k a_k cos(2πkn/N). The kernel is W(ν) = Σ_n w\[n\] e^{-j2πνn/N} at every real ν.

mod catalogue;
mod kernel;
mod merit;
mod window_type;

pub use catalogue::{Entry, Family, ParameterSpec, catalogue};
pub use kernel::Kernel;
pub use merit::Merit;
pub use window_type::{Sums, Window, WindowError};
