//! Why a capture cannot be opened.

use std::io::{Error, ErrorKind};
use std::path::PathBuf;

/// What the system said of a file or folder, and what to do about it, in words without its error numbers.
pub fn plainly(reason: &Error) -> String {
    let (what, advice) = match reason.kind() {
        ErrorKind::NotFound => ("there is no such file or folder", "check the path"),
        ErrorKind::NotADirectory => ("a part of the path is not a folder", "check the path"),
        ErrorKind::InvalidFilename => ("the name is one that the system cannot have", "check the path"),
        ErrorKind::IsADirectory => ("it is a folder", "give a file"),
        ErrorKind::PermissionDenied => {
            ("the system does not allow it", "check the permission of the file and of its folder")
        }
        ErrorKind::ReadOnlyFilesystem => ("the disk can only be read", "choose another place"),
        ErrorKind::StorageFull | ErrorKind::QuotaExceeded => ("the disk is full", "make room or choose another place"),
        ErrorKind::Interrupted => ("it was broken off", "try again"),
        _ => return format!("the system says '{reason}': check that the disk is well and connected"),
    };
    format!("{what}: {advice}")
}

/// Why a capture cannot be opened: one sentence that says which file, what is wrong and what to do.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum CaptureError {
    /// The system refused.
    #[error("{}: {}", .path.display(), plainly(.reason))]
    Io {
        /// The file.
        path: PathBuf,
        /// What the system said.
        reason: std::io::Error,
    },
    /// The file is not what was opened any more.
    #[error("{} was replaced or written to since it was opened: open it again", .path.display())]
    Replaced {
        /// The file.
        path: PathBuf,
    },
    /// The path leads to a folder or a device.
    #[error("{} is not an ordinary file: choose a recording", .path.display())]
    NotAFile {
        /// The path.
        path: PathBuf,
    },
    /// The file has no bytes.
    #[error("{} is empty (0 bytes): copy it from the recorder again", .path.display())]
    Empty {
        /// The file.
        path: PathBuf,
    },
    /// Nothing in the file's first bytes says that it is a recording.
    #[error("{} is not a WAV file{}: this version opens WAV recordings", .path.display(), .seems.map(|s| format!(" but {s}")).unwrap_or_default())]
    NotARecording {
        /// The file.
        path: PathBuf,
        /// What it seems to be: `a FLAC file`.
        seems: Option<&'static str>,
    },
    /// The file breaks the rules of its format so that its samples cannot be trusted.
    #[error("{} is damaged: {what}; export or copy it from the recorder again", .path.display())]
    Malformed {
        /// The file.
        path: PathBuf,
        /// Which field, what it says, what would be right.
        what: String,
    },
    /// The file is in order, but of a kind that this version does not read.
    #[error("{}: {what}; this version reads WAV with 8, 16, 24 or 32-bit integer or 32-bit float samples, so export it as one of these", .path.display())]
    Unsupported {
        /// The file.
        path: PathBuf,
        /// What it holds.
        what: String,
    },
    /// The header is in order, but there is not one frame.
    #[error("{} holds no samples: the recorder may not have finished it, so copy or repair it there", .path.display())]
    NoFrames {
        /// The file.
        path: PathBuf,
    },
    /// The header states no sample rate.
    #[error("{} states a sample rate of 0 Hz, so no frequency can be read from it: export it with its rate", .path.display())]
    NoRate {
        /// The file.
        path: PathBuf,
    },
    /// The header states no channel.
    #[error("{} states 0 channels: export it again", .path.display())]
    NoChannels {
        /// The file.
        path: PathBuf,
    },
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_the_system_says_comes_with_what_to_do() {
        for (kind, part) in [
            (ErrorKind::NotFound, "check the path"),
            (ErrorKind::PermissionDenied, "check the permission"),
            (ErrorKind::StorageFull, "make room"),
        ] {
            let said = plainly(&kind.into());
            assert!(said.contains(part), "{kind}: {said}");
        }
        let said = plainly(&Error::other("bus reset"));
        assert!(said.contains("'bus reset': check that the disk"), "{said}");
        let path = PathBuf::from("site/pump.wav");
        let error = CaptureError::Io { path, reason: ErrorKind::NotFound.into() };
        assert_eq!(error.to_string(), "site/pump.wav: there is no such file or folder: check the path");
    }
}
