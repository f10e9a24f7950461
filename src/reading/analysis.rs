//! The one call that makes a Reading.

use std::sync::Arc;

use super::{Reading, Request};
use crate::signal::{Cancelled, SignalError, Source, Watch};
use crate::spectrum::Spectra;
use crate::units::ScaleError;

/// Why there is no Reading.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum ReadingError {
    /// The samples could not be had.
    #[error(transparent)]
    Signal(#[from] SignalError),
    /// The scale cannot be used.
    #[error(transparent)]
    Scale(#[from] ScaleError),
    /// The segment is too short to say anything.
    #[error("the segment holds {samples} samples: mark at least {least}")]
    TooShort {
        /// How many it holds.
        samples: u64,
        /// How many are needed.
        least: u64,
    },
    /// A sample is not a number.
    #[error("sample {at} of the segment is not a finite number: mark a segment without it")]
    NotFinite {
        /// Which sample, counted from the start of the capture.
        at: u64,
    },
    /// The work was cancelled.
    #[error(transparent)]
    Cancelled(#[from] Cancelled),
}

/// A segment's curves and, once made, its Reading.
#[derive(Debug, Clone)]
pub struct Analysis {
    /// What was asked.
    pub request: Request,
    /// The transform and the panes.
    pub spectra: Arc<Spectra>,
    /// The figures.
    pub reading: Arc<Reading>,
}

/// Only the curves: quick enough to follow a dragged edge.
///
/// # Errors
/// [`ReadingError`].
pub fn analyse_curves(source: &dyn Source, request: &Request, watch: &Watch) -> Result<Arc<Spectra>, ReadingError> {
    let _ = (source, request, watch);
    Err(ReadingError::Cancelled(Cancelled))
}

/// The Reading, on curves made before or made now.
///
/// # Errors
/// [`ReadingError`].
pub fn analyse(
    source: &dyn Source,
    request: &Request,
    curves: Option<Arc<Spectra>>,
    watch: &Watch,
) -> Result<Analysis, ReadingError> {
    let _ = (source, request, curves, watch);
    Err(ReadingError::Cancelled(Cancelled))
}
