//! The session's file: RON text, versioned, written whole or not at all.

use std::fs;
use std::io::{Read, Write};
use std::path::{Path, PathBuf};

use ron::ser::PrettyConfig;
use serde::{Deserialize, Serialize};

use super::locate::{from_folder, to_folder};
use super::{Figures, Session, SessionError};

/// How the name of a session's file ends.
pub const EXTENSION: &str = ".session.ron";

/// The format written, and the newest one read.
///
/// Format 2 added refusals, overruled verdicts, the pinned fundamental, who named a tone, and verdicts and uncertainties
/// among the figures; sessions of format 1 have none of them and are read as they are.
pub const FORMAT: u32 = 2;

/// No session is longer than this.
const MOST_BYTES: u64 = 16 << 20;

/// What stands in the file.
#[derive(Debug, Serialize, Deserialize)]
#[serde(rename = "Session", deny_unknown_fields)]
struct File {
    /// [`FORMAT`].
    format: u32,
    /// The version of the program that wrote it.
    program: String,
    document: Session,
    /// What the document read as when it was saved.
    figures: Option<Figures>,
    /// In a recovery file only: the file that the user has saved the session in.
    #[serde(default, skip_serializing_if = "Option::is_none")]
    saved_as: Option<String>,
}

/// The part that every format has.
#[derive(Debug, Deserialize)]
#[serde(rename = "Session")]
struct Head {
    format: u32,
}

/// A session as it was saved.
#[derive(Debug, Clone, PartialEq)]
pub struct Loaded {
    /// The document, its capture's path as seen from the current folder.
    pub session: Session,
    /// The figures saved with it.
    pub figures: Option<Figures>,
    /// The version of the program that wrote it.
    pub program: String,
    /// In a recovery file: where the user has saved the session.
    pub saved_as: Option<PathBuf>,
}

/// The name with [`EXTENSION`] at its end, added where it is not there yet.
#[must_use]
pub fn with_extension(path: &Path) -> PathBuf {
    if has_extension(path) {
        return path.to_owned();
    }
    let name = path.file_name().map(|n| n.to_string_lossy().into_owned()).unwrap_or_default();
    let stem = name.strip_suffix(".ron").or_else(|| name.strip_suffix(".session")).unwrap_or(&name);
    path.with_file_name(format!("{stem}{EXTENSION}"))
}

/// Whether the name is one of a session's file.
pub fn has_extension(path: &Path) -> bool {
    path.file_name().is_some_and(|n| n.to_string_lossy().to_lowercase().ends_with(EXTENSION))
}

/// Saves the session: written beside its place, then moved there in one step, so that a crash leaves the old file or
/// the new one, never a part.
///
/// The capture's path is stored relative to the session's folder where that can be said. `figures` are what the
/// document read as now, `None` if it has not been read.
///
/// # Errors
/// [`SessionError`]; the file is then as it was.
pub fn save(path: &Path, session: &Session, figures: Option<&Figures>) -> Result<(), SessionError> {
    // A link is followed, so that the file it names is replaced and not the link.
    let target = fs::canonicalize(path).unwrap_or_else(|_| path.to_owned());
    if !has_extension(path) || !has_extension(&target) {
        return Err(SessionError::Name { path: path.to_owned() });
    }
    let capture = &session.capture.path;
    if capture.contains(char::REPLACEMENT_CHARACTER) && !Path::new(capture).exists() {
        // Only what cannot be told as text came to be such a path.
        return Err(SessionError::CaptureName { path: PathBuf::from(capture) });
    }
    if fs::canonicalize(capture).is_ok_and(|capture| capture == target) {
        return Err(SessionError::OverCapture { path: path.to_owned() });
    }
    let folder = folder_of(&target);
    let mut document = session.clone();
    document.capture.path = to_folder(&session.capture.path, &folder);
    write(&target, document, figures.cloned(), None)
}

/// Reads a session. The file is only read.
///
/// # Errors
/// [`SessionError`] where it cannot be read, is newer than this program, damaged, or says what cannot be.
pub fn load(path: &Path) -> Result<Loaded, SessionError> {
    let text = read_text(path)?;
    let damaged = |error: ron::error::SpannedError| SessionError::Damaged {
        path: path.to_owned(),
        what: error.to_string().replace(['\n', '\r'], " "),
    };
    let head: Head = ron::from_str(&text).map_err(damaged)?;
    if head.format > FORMAT {
        return Err(SessionError::Newer { path: path.to_owned(), format: head.format, reads: FORMAT });
    }
    let file: File = ron::from_str(&text).map_err(damaged)?;
    let mut session = file.document;
    session.check().map_err(|what| SessionError::Invalid { path: path.to_owned(), what })?;
    session.capture.path = from_folder(&session.capture.path, &folder_of(&real(path)));
    let saved_as = file.saved_as.map(PathBuf::from);
    Ok(Loaded { session, figures: file.figures, program: file.program, saved_as })
}

/// Writes a session with its capture's path as it is, for recovery.
pub(super) fn write_recovery_file(path: &Path, session: &Session, saved_as: Option<&Path>) -> Result<(), SessionError> {
    let mut document = session.clone();
    document.capture.path = absolute(Path::new(&session.capture.path));
    // A name that is no text would come back as another one: the session is then asked a place for anew.
    let saved_as = saved_as.filter(|path| path.to_str().is_some());
    write(path, document, None, saved_as.map(absolute))
}

fn absolute(path: &Path) -> String {
    std::path::absolute(path).unwrap_or_else(|_| path.to_owned()).to_string_lossy().into_owned()
}

fn write(
    path: &Path,
    document: Session,
    figures: Option<Figures>,
    saved_as: Option<String>,
) -> Result<(), SessionError> {
    document.check().map_err(|what| SessionError::Invalid { path: path.to_owned(), what })?;
    let program = env!("CARGO_PKG_VERSION").to_owned();
    let file = File { format: FORMAT, program, document, figures, saved_as };
    let text = to_ron(&file).map_err(|error| io_error(path, std::io::Error::other(error)))?;
    if text.len() as u64 > MOST_BYTES {
        return Err(SessionError::TooMuch { path: path.to_owned(), bytes: text.len() as u64, most: MOST_BYTES });
    }
    write_whole(path, text.as_bytes())
}

/// A value as the program writes it to its own files.
pub(super) fn to_ron<T: Serialize>(value: &T) -> Result<String, ron::Error> {
    let pretty = PrettyConfig::new().struct_names(true).new_line("\n").indentor("  ");
    let mut text = ron::Options::default().to_string_pretty(value, pretty)?;
    text.push('\n');
    Ok(text)
}

/// The text of a file of the program's own, if it is not longer than any.
pub(super) fn read_text(path: &Path) -> Result<String, SessionError> {
    let io = |reason| io_error(path, reason);
    let facts = fs::metadata(path).map_err(io)?;
    if !facts.is_file() {
        return Err(SessionError::NotAFile { path: path.to_owned() });
    }
    let bytes = facts.len();
    let too_long = |bytes| SessionError::TooLong { path: path.to_owned(), bytes, most: MOST_BYTES };
    if bytes > MOST_BYTES {
        return Err(too_long(bytes));
    }
    let mut raw = Vec::new();
    // It may have grown since.
    fs::File::open(path).map_err(io)?.take(MOST_BYTES + 1).read_to_end(&mut raw).map_err(io)?;
    if raw.len() as u64 > MOST_BYTES {
        return Err(too_long(raw.len() as u64));
    }
    String::from_utf8(raw).map_err(|_| SessionError::NotText { path: path.to_owned() })
}

/// Writes a file beside its place and moves it there.
pub(super) fn write_whole(path: &Path, bytes: &[u8]) -> Result<(), SessionError> {
    let io = |reason| io_error(path, reason);
    let standing = fs::metadata(path).ok();
    if standing.as_ref().is_some_and(|m| m.permissions().readonly()) {
        return Err(SessionError::ReadOnly { path: path.to_owned() });
    }
    let folder = folder_of(path);
    // The new file's own name means nothing to the user: what the system says is said of the folder.
    let refused = |error: std::io::Error| SessionError::Folder { folder: folder.clone(), reason: error.kind().into() };
    let mut file = new_file_in(&folder).map_err(refused)?;
    file.write_all(bytes).map_err(io)?;
    if let Some(standing) = standing {
        file.as_file().set_permissions(standing.permissions()).map_err(io)?;
    }
    file.as_file().sync_all().map_err(io)?;
    file.persist(path).map_err(|error| io(error.error))?;
    sync_folder(&folder);
    Ok(())
}

/// A new file with the rights that any new file of the user gets, not those of a secret one.
fn new_file_in(folder: &Path) -> std::io::Result<tempfile::NamedTempFile> {
    let mut builder = tempfile::Builder::new();
    builder.prefix(".panewise-").suffix(".part");
    #[cfg(unix)]
    {
        use std::os::unix::fs::PermissionsExt;
        builder.permissions(fs::Permissions::from_mode(0o666));
    }
    builder.tempfile_in(folder)
}

/// Has the new name of a file written out too, where the system can; the file itself is safe already.
fn sync_folder(folder: &Path) {
    #[cfg(unix)]
    if let Ok(folder) = fs::File::open(folder) {
        // A folder that cannot be synced (some network shares) is no reason to say the save failed.
        let _ = folder.sync_all();
    }
    #[cfg(not(unix))]
    let _ = folder;
}

/// The file that a link leads to; else the path as it is.
pub(super) fn real(path: &Path) -> PathBuf {
    let linked = fs::symlink_metadata(path).is_ok_and(|about| about.file_type().is_symlink());
    let target = if linked { fs::canonicalize(path).ok() } else { None };
    target.unwrap_or_else(|| path.to_owned())
}

/// The folder a file is in.
pub(super) fn folder_of(path: &Path) -> PathBuf {
    match path.parent() {
        Some(folder) if !folder.as_os_str().is_empty() => folder.to_owned(),
        _ => PathBuf::from("."),
    }
}

pub(super) fn io_error(path: &Path, reason: std::io::Error) -> SessionError {
    SessionError::Io { path: path.to_owned(), reason }
}
