//! Opening a capture.

use std::path::{Path, PathBuf};
use std::sync::Arc;

use crate::signal::{Source, Watch};

/// Why a capture cannot be opened: one sentence that says what, where and what to do.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum CaptureError {
    /// The system refused.
    #[error("{}: {reason}", .path.display())]
    Io {
        /// The file.
        path: PathBuf,
        /// What the system said.
        reason: std::io::Error,
    },
}

/// An open recording.
#[derive(Debug, Clone)]
pub struct Capture {
    /// Where it is.
    pub path: PathBuf,
    /// Its format in words: `WAV, 24-bit integer`.
    pub format: String,
    /// Its samples.
    pub source: Arc<dyn Source>,
    /// What was doubtful on opening, a sentence each.
    pub doubts: Vec<String>,
}

/// Opens the recording at `path`.
///
/// # Errors
/// [`CaptureError`].
pub fn open(path: &Path) -> Result<Capture, CaptureError> {
    let reason = std::io::Error::other("not yet");
    Err(CaptureError::Io { path: path.to_owned(), reason })
}

impl Capture {
    /// BLAKE3 of the file's bytes, hex.
    ///
    /// # Errors
    /// [`CaptureError::Io`]; a cancelled watch gives an interrupted one.
    pub fn blake3(&self, watch: &Watch) -> Result<String, CaptureError> {
        let _ = watch;
        Err(CaptureError::Io { path: self.path.clone(), reason: std::io::Error::other("not yet") })
    }
}
