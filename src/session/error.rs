//! What can go wrong with a session and its file: one sentence each that says what, where and what to do.

use std::path::PathBuf;

use crate::capture::plainly;
use crate::units::brief;

/// Something in a document that cannot be.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum DocumentError {
    /// A number is not finite or out of its range.
    #[error("{what} is {}, which cannot be", brief(*.value))]
    Number {
        /// Which number.
        what: &'static str,
        /// What it is.
        value: f64,
    },
    /// The list has too few or too many.
    #[error("it has {n} {what} where {least} to {most} can be")]
    Count {
        /// Of what.
        what: &'static str,
        /// How many there are.
        n: usize,
        /// How few there may be.
        least: usize,
        /// How many there may be.
        most: usize,
    },
    /// The channel read is not one of the capture's.
    #[error("it reads channel {} of a capture that has {channels}", .channel + 1)]
    Channel {
        /// The channel, counted from 0.
        channel: usize,
        /// How many there are.
        channels: usize,
    },
    /// A segment does not lie in the capture.
    #[error("segment '{name}' takes samples {start} to {end} of a capture of {frames}")]
    Span {
        /// The segment's name.
        name: String,
        /// First sample.
        start: u64,
        /// One past the last sample.
        end: u64,
        /// How many there are.
        frames: u64,
    },
    /// An id stands twice, or is greater than the greatest given.
    #[error("{what} id {id} stands twice or was never given")]
    Id {
        /// Of what.
        what: &'static str,
        /// The id.
        id: u32,
    },
    /// The segment read is not there.
    #[error("the segment to read (id {id}) is not among its segments")]
    NoCurrent {
        /// The id looked for.
        id: u32,
    },
}

/// Why a session could not be saved or opened. The file is as it was.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum SessionError {
    /// The system refused.
    #[error("{}: {}", .path.display(), plainly(.reason))]
    Io {
        /// The file or folder.
        path: PathBuf,
        /// What the system said.
        reason: std::io::Error,
    },
    /// Nothing can be written in the folder the file was to stand in.
    #[error("{}: nothing can be saved in this folder: {}", .folder.display(), plainly(.reason))]
    Folder {
        /// The folder.
        folder: PathBuf,
        /// What the system said.
        reason: std::io::Error,
    },
    /// The path leads to a folder or a device.
    #[error("{}: is not an ordinary file: choose a .session.ron file", .path.display())]
    NotAFile {
        /// The path.
        path: PathBuf,
    },
    /// The file is longer than any session.
    #[error("{}: {bytes} bytes is too long for a session ({most} at most): choose a .session.ron file", .path.display())]
    TooLong {
        /// The file.
        path: PathBuf,
        /// Its length.
        bytes: u64,
        /// How long it may be.
        most: u64,
    },
    /// There is more in the document than a file may hold.
    #[error("{}: would be {bytes} bytes long, more than a session may be ({most}): shorten the notes or take tones named by hand away", .path.display())]
    TooMuch {
        /// The file.
        path: PathBuf,
        /// How long it would be.
        bytes: u64,
        /// How long it may be.
        most: u64,
    },
    /// The capture's path cannot be written as text.
    #[error("{}: a session cannot hold a capture's path that is not UTF-8: rename it and open it again", .path.display())]
    CaptureName {
        /// The capture's path, as far as it can be told.
        path: PathBuf,
    },
    /// The file is not text.
    #[error("{}: is not UTF-8 text: choose a .session.ron file", .path.display())]
    NotText {
        /// The file.
        path: PathBuf,
    },
    /// A newer program wrote it.
    #[error("{}: was written by a newer Panewise (format {format}; this one reads {reads}): update Panewise", .path.display())]
    Newer {
        /// The file.
        path: PathBuf,
        /// Its format.
        format: u32,
        /// The newest format known here.
        reads: u32,
    },
    /// It is not a session, or a damaged one.
    #[error("{}: is damaged or no session, at line:column {what}: restore it from a copy, or correct that place", .path.display())]
    Damaged {
        /// The file.
        path: PathBuf,
        /// Line, column and what is wrong there.
        what: String,
    },
    /// It reads well but says what cannot be.
    #[error("{}: is not a valid session: {what}: restore it from a copy, or correct that value", .path.display())]
    Invalid {
        /// The file.
        path: PathBuf,
        /// What is wrong.
        what: DocumentError,
    },
    /// The file may not be written.
    #[error("{}: is read-only: save under another name", .path.display())]
    ReadOnly {
        /// The file.
        path: PathBuf,
    },
    /// The name is not one of a session.
    #[error("{}: a session's name ends in .session.ron: save it under such a name", .path.display())]
    Name {
        /// The name given.
        path: PathBuf,
    },
    /// Saving would write over the capture.
    #[error("{}: is the capture itself, which is never written to: save under another name", .path.display())]
    OverCapture {
        /// The name given.
        path: PathBuf,
    },
    /// No folder is known in which to keep this.
    #[error("this system names no folder for {what}: set PANEWISE_HOME to one")]
    NoFolder {
        /// What was to be kept.
        what: &'static str,
    },
}
