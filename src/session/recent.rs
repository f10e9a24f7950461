//! The captures and sessions opened lately.

use std::fs;
use std::path::{Path, PathBuf};

use serde::{Deserialize, Serialize};

use super::SessionError;
use super::file::{folder_of, io_error, read_text, to_ron, write_whole};

/// How many are remembered.
pub const MAX_RECENT: usize = 12;

/// One of the list.
#[derive(Debug, Clone, PartialEq, Eq)]
pub struct RecentFile {
    /// Where it is, or was.
    pub path: PathBuf,
    /// Whether it is not there now.
    pub missing: bool,
}

#[derive(Debug, Default, Serialize, Deserialize)]
struct Recent {
    files: Vec<String>,
}

/// The file the list is kept in: `recent.ron` in the folder `PANEWISE_HOME` names, or in the system's place for
/// settings.
///
/// # Errors
/// [`SessionError::NoFolder`] where the system names none.
pub fn recent_file() -> Result<PathBuf, SessionError> {
    Ok(home(dirs::config_dir, "the list of recent files")?.join("recent.ron"))
}

/// The program's folder: the one `PANEWISE_HOME` names, else `panewise` in a folder of the system.
pub(super) fn home(system: fn() -> Option<PathBuf>, what: &'static str) -> Result<PathBuf, SessionError> {
    match std::env::var_os("PANEWISE_HOME") {
        Some(folder) if !folder.is_empty() => Ok(PathBuf::from(folder)),
        _ => system().map(|folder| folder.join("panewise")).ok_or(SessionError::NoFolder { what }),
    }
}

/// The list kept in `file`, newest first; empty where there is none that can be read.
pub fn list_recent(file: &Path) -> Vec<RecentFile> {
    let paths = read(file).files.into_iter().take(MAX_RECENT).map(PathBuf::from);
    paths.map(|path| RecentFile { missing: !path.is_file(), path }).collect()
}

/// Puts `path` at the head of the list kept in `file`.
///
/// # Errors
/// [`SessionError`] where the list cannot be written.
pub fn note_recent(file: &Path, path: &Path) -> Result<(), SessionError> {
    let path = std::path::absolute(path).unwrap_or_else(|_| path.to_owned());
    change(file, |files| {
        let path = path.to_string_lossy().into_owned();
        files.retain(|f| *f != path);
        files.insert(0, path);
        files.truncate(MAX_RECENT);
    })
}

/// Takes `path` off the list kept in `file`.
///
/// # Errors
/// [`SessionError`] where the list cannot be written.
pub fn forget_recent(file: &Path, path: &Path) -> Result<(), SessionError> {
    let path = path.to_string_lossy();
    change(file, |files| files.retain(|f| *f != path))
}

fn read(file: &Path) -> Recent {
    read_text(file).ok().and_then(|text| ron::from_str(&text).ok()).unwrap_or_default()
}

fn change(file: &Path, how: impl FnOnce(&mut Vec<String>)) -> Result<(), SessionError> {
    let mut recent = read(file);
    how(&mut recent.files);
    let folder = folder_of(file);
    fs::create_dir_all(&folder).map_err(|reason| io_error(&folder, reason))?;
    let text = to_ron(&recent).map_err(|error| io_error(file, std::io::Error::other(error)))?;
    write_whole(file, text.as_bytes())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn the_newest_comes_first_once_and_the_oldest_falls_off() {
        let folder = tempfile::tempdir().unwrap();
        let file = folder.path().join("settings/recent.ron");
        assert!(list_recent(&file).is_empty());
        for i in 0..20 {
            note_recent(&file, &folder.path().join(format!("{i}.wav"))).unwrap();
        }
        let there = folder.path().join("15.wav");
        fs::write(&there, "").unwrap();
        note_recent(&file, &there).unwrap();
        let list = list_recent(&file);
        assert_eq!(list.len(), MAX_RECENT);
        assert_eq!(list[0], RecentFile { path: there.clone(), missing: false });
        assert!(list[1].missing && list[1].path.ends_with("19.wav"));
        assert_eq!(list.iter().filter(|r| r.path == there).count(), 1);
        forget_recent(&file, &there).unwrap();
        assert_eq!(list_recent(&file).len(), MAX_RECENT - 1);
    }

    #[test]
    fn a_damaged_list_is_an_empty_one() {
        let folder = tempfile::tempdir().unwrap();
        let file = folder.path().join("recent.ron");
        fs::write(&file, "(files: [").unwrap();
        assert!(list_recent(&file).is_empty());
        note_recent(&file, Path::new("/a.wav")).unwrap();
        assert_eq!(list_recent(&file).len(), 1);
    }
}
