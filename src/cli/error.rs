//! Why a command failed.

use std::io;
use std::path::PathBuf;

use crate::capture::{CaptureError, plainly};
use crate::reading::ReadingError;
use crate::report::ReportError;
use crate::session::SessionError;
use crate::signal::SignalError;

/// Why a command failed: one sentence each that says what, where and what to do.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub(super) enum CliError {
    #[error(transparent)]
    Capture(#[from] CaptureError),
    #[error(transparent)]
    Session(#[from] SessionError),
    #[error("{}: {reason}", .path.display())]
    Reading { path: PathBuf, reason: ReadingError },
    #[error("{}: {reason}", .path.display())]
    Signal { path: PathBuf, reason: SignalError },
    #[error(transparent)]
    Report(#[from] ReportError),
    #[error("{0}")]
    Usage(String),
    #[error("the output could not be written: {}", plainly(.0))]
    Output(io::Error),
    #[error("{}: is there already, and may be another session: save under another name, or give --replace too", .0.display())]
    Standing(PathBuf),
    #[error("{}: its capture {capture} is not there, nor in the session's folder: put it back, or mark it anew with 'panewise read CAPTURE'", .session.display())]
    Missing { session: PathBuf, capture: String },
    #[error("{}: its capture {} has changed since the session was saved: 'panewise recheck' lists what moved", .session.display(), .capture.display())]
    Changed { session: PathBuf, capture: PathBuf },
    #[error("{}: was saved without figures, so there is nothing to recheck: save it again from the window, or with 'panewise read --save'", .session.display())]
    NoFigures { session: PathBuf },
    #[error("{}: does not state its capture's BLAKE3, so nobody can say whether the capture is the same: save it again from the window, or with 'panewise read --save'", .session.display())]
    NoHash { session: PathBuf },
}
