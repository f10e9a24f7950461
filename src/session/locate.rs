//! Where a session's capture is: paths relative to the session's folder, and what became of a capture since.

use std::fs;
use std::path::{Component, Path, PathBuf};

use super::CaptureRef;
use super::file::{folder_of, real};
use crate::capture::{self, Capture, CaptureError};
use crate::signal::Watch;

/// What became of a session's capture since it was saved.
#[derive(Debug, Clone, Copy, PartialEq, Eq, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum CaptureState {
    /// It is where it was, and the same.
    Same,
    /// It is the same, in another place.
    Moved,
    /// Its content is another one.
    Changed,
    /// It was not found.
    Missing,
}

impl CaptureState {
    /// The word for it.
    pub fn word(self) -> &'static str {
        match self {
            Self::Same => "same",
            Self::Moved => "moved",
            Self::Changed => "changed",
            Self::Missing => "missing",
        }
    }
}

/// A capture that was found.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct Found {
    /// Where it is.
    pub path: PathBuf,
    /// Whether that is another place than the session says.
    pub moved: bool,
}

/// Looks for a session's capture: where the session says, else under the same name in the session's folder.
pub fn find_capture(capture: &CaptureRef, session_file: &Path) -> Option<Found> {
    let stated = PathBuf::from(&capture.path);
    if stated.is_file() {
        return Some(Found { path: stated, moved: false });
    }
    let beside = in_folder(&folder_of(&real(session_file)), Path::new(stated.file_name()?));
    beside.is_file().then_some(Found { path: beside, moved: true })
}

/// A session's capture, open.
#[derive(Debug, Clone)]
pub struct SessionCapture {
    /// The samples.
    pub capture: Capture,
    /// What became of it since the session was saved.
    pub state: CaptureState,
    /// What it is now.
    pub now: CaptureRef,
}

/// Opens the capture of a session where it was found, and says what became of it. `watch` tells how far it is read.
///
/// Whoever puts [`SessionCapture::now`] in the session has to [check](super::Session::check) it once more: the session
/// may tell of samples or channels that the capture does not have.
///
/// # Errors
/// [`CaptureError`]; a cancelled watch gives one of the kind `Interrupted`.
pub fn open_capture(saved: &CaptureRef, found: &Found, watch: &Watch) -> Result<SessionCapture, CaptureError> {
    let capture = capture::open(&found.path)?;
    let now = CaptureRef::of(&capture, capture.blake3(watch)?);
    Ok(SessionCapture { state: capture_state(saved, found, &now), capture, now })
}

/// What became of a capture that was found and is `now`.
///
/// A session kept before its capture's content was hashed (a recovery file may be) takes the capture as the same where
/// rate, channels and frames are.
pub fn capture_state(saved: &CaptureRef, found: &Found, now: &CaptureRef) -> CaptureState {
    let same = if saved.blake3.is_empty() {
        let rates = (saved.sample_rate_hz.to_bits(), now.sample_rate_hz.to_bits());
        rates.0 == rates.1 && saved.channels == now.channels && saved.frames == now.frames
    } else {
        saved.blake3 == now.blake3
    };
    match (same, found.moved) {
        (false, _) => CaptureState::Changed,
        (true, true) => CaptureState::Moved,
        (true, false) => CaptureState::Same,
    }
}

/// A path as it is stored in a file in `folder`: relative to it, with `/` between parts; absolute where the two have
/// nothing but a root in common.
pub(super) fn to_folder(path: &str, folder: &Path) -> String {
    let real = |p: &Path| fs::canonicalize(p).or_else(|_| std::path::absolute(p));
    let (Ok(target), Ok(base)) = (real(Path::new(path)), real(folder)) else { return path.to_owned() };
    let shared = target.components().zip(base.components()).take_while(|(a, b)| a == b).count();
    let named = target.components().take(shared).any(|c| matches!(c, Component::Normal(_)));
    if !named && base.components().count() > shared {
        return target.to_string_lossy().into_owned();
    }
    let up = base.components().skip(shared).map(|_| "..".to_owned());
    let down = target.components().skip(shared).map(|c| c.as_os_str().to_string_lossy().into_owned());
    up.chain(down).collect::<Vec<_>>().join("/")
}

/// The stored path as seen from the current folder.
pub(super) fn from_folder(stored: &str, folder: &Path) -> String {
    in_folder(folder, Path::new(stored)).to_string_lossy().into_owned()
}

/// `path` in `folder`; the current folder is not spelt out.
fn in_folder(folder: &Path, path: &Path) -> PathBuf {
    if folder == Path::new(".") { path.to_owned() } else { folder.join(path) }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::tests::pump;

    #[test]
    fn paths_are_told_from_the_sessions_folder() {
        let root = tempfile::tempdir().unwrap();
        let sessions = root.path().join("reports/2026");
        fs::create_dir_all(&sessions).unwrap();
        let capture = root.path().join("pump.wav");
        fs::write(&capture, "").unwrap();
        let capture = capture.to_string_lossy();
        assert_eq!(to_folder(&capture, &sessions), "../../pump.wav");
        assert_eq!(to_folder(&capture, root.path()), "pump.wav");
        assert!(fs::metadata(from_folder("../../pump.wav", &sessions)).is_ok());
        assert_eq!(from_folder("pump.wav", Path::new(".")), "pump.wav");
    }

    #[cfg(unix)]
    #[test]
    fn nothing_but_the_root_in_common_is_told_in_full() {
        assert_eq!(to_folder("/nowhere-one/a.wav", Path::new("/nowhere-two/b")), "/nowhere-one/a.wav");
        assert_eq!(to_folder("/nowhere-one/a.wav", Path::new("/nowhere-one/b")), "../a.wav");
    }

    #[test]
    fn a_capture_is_found_where_it_was_or_beside_the_session() {
        let root = tempfile::tempdir().unwrap();
        let mut capture = pump().capture;
        capture.path = root.path().join("gone/pump.wav").to_string_lossy().into_owned();
        let session = root.path().join("pump.session.ron");
        assert_eq!(find_capture(&capture, &session), None);
        fs::write(root.path().join("pump.wav"), "").unwrap();
        let found = find_capture(&capture, &session).unwrap();
        assert_eq!(found, Found { path: root.path().join("pump.wav"), moved: true });
        let another = CaptureRef { blake3: "another".to_owned(), ..capture.clone() };
        assert_eq!(capture_state(&capture, &found, &capture), CaptureState::Moved);
        assert_eq!(capture_state(&capture, &found, &another), CaptureState::Changed);
        let stays = Found { moved: false, ..found };
        assert_eq!(capture_state(&capture, &stays, &capture), CaptureState::Same);
    }

    #[test]
    fn a_capture_that_was_never_hashed_is_the_same_only_with_the_same_facts() {
        let now = pump().capture;
        let never = CaptureRef { blake3: String::new(), ..now.clone() };
        let found = Found { path: PathBuf::from("pump.wav"), moved: false };
        assert_eq!(capture_state(&never, &found, &now), CaptureState::Same);
        for other in [
            CaptureRef { frames: 999, ..never.clone() },
            CaptureRef { channels: 1, ..never.clone() },
            CaptureRef { sample_rate_hz: 999.0, ..never.clone() },
        ] {
            assert_eq!(capture_state(&other, &found, &now), CaptureState::Changed);
        }
    }
}
