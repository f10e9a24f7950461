//! What a crash would lose: the unsaved session, kept in a file of the running program.
//!
//! Every running program has a slot of its own, a file and a lock beside it. The lock is held for as long as the
//! program lives and is let go by the system when it dies, however it dies; a slot whose lock can be had is one whose
//! program is gone, and is offered.

use std::fs::{self, File, TryLockError};
use std::path::{Path, PathBuf};
use std::time::{SystemTime, UNIX_EPOCH};

use super::file::{io_error, load, write_recovery_file};
use super::{Loaded, Session, SessionError};

const FILE_ENDING: &str = ".recovery.ron";
const LOCK_ENDING: &str = ".recovery.lock";

/// The slot of a running program.
#[derive(Debug)]
pub struct Recovery {
    file: PathBuf,
    lock_path: PathBuf,
    _lock: File,
}

/// What a program that is gone has left. While this value lives, no other program is offered the same.
#[derive(Debug)]
pub struct Recovered {
    /// The file it was left in.
    pub file: PathBuf,
    /// When it was written last.
    pub written: SystemTime,
    /// The session, with the file the user has saved it in, if any, in [`Loaded::saved_as`].
    pub loaded: Loaded,
    lock_path: PathBuf,
    _lock: File,
}

/// The folder of recovery files: `recovery` in the folder `PANEWISE_HOME` names, or in the system's place for such
/// things.
///
/// # Errors
/// [`SessionError::NoFolder`] where the system names none.
pub fn recovery_dir() -> Result<PathBuf, SessionError> {
    let home = super::recent::home(dirs::data_local_dir, "recovery files")?;
    Ok(home.join("recovery"))
}

/// Takes a slot in `folder`, which is made if it is not there.
///
/// # Errors
/// [`SessionError::Io`].
pub fn start_recovery(folder: &Path) -> Result<Recovery, SessionError> {
    fs::create_dir_all(folder).map_err(|reason| io_error(folder, reason))?;
    let since = SystemTime::now().duration_since(UNIX_EPOCH).map_or(0, |d| d.as_nanos());
    for attempt in 0..100_u32 {
        let stem = format!("{}-{since:x}-{attempt}", std::process::id());
        let lock_path = folder.join(format!("{stem}{LOCK_ENDING}"));
        let lock = match File::create_new(&lock_path) {
            Err(reason) if reason.kind() == std::io::ErrorKind::AlreadyExists => continue,
            made => made.map_err(|reason| io_error(&lock_path, reason))?,
        };
        // A finder may hold it for the moment it takes to see that there is nothing to recover: then take another.
        if lock.try_lock().is_ok() && lock_path.exists() {
            return Ok(Recovery { file: folder.join(format!("{stem}{FILE_ENDING}")), lock_path, _lock: lock });
        }
    }
    Err(io_error(folder, std::io::Error::other("no slot for a recovery file could be had")))
}

/// Writes the unsaved session into the program's slot. `saved_as` is where the user has saved it before, if anywhere.
///
/// # Errors
/// [`SessionError`]; what the slot held before is then still there.
pub fn write_recovery(slot: &Recovery, session: &Session, saved_as: Option<&Path>) -> Result<(), SessionError> {
    write_recovery_file(&slot.file, session, saved_as)
}

impl Recovery {
    /// Takes what the slot holds away: there is nothing unsaved any more.
    ///
    /// # Errors
    /// [`SessionError::Io`].
    pub fn clear(&self) -> Result<(), SessionError> {
        remove(&self.file)
    }

    /// Gives the slot up at a regular end. Without this the session is offered at the next start.
    ///
    /// # Errors
    /// [`SessionError::Io`].
    pub fn finish(self) -> Result<(), SessionError> {
        let Self { file, lock_path, _lock: lock } = self;
        remove(&file)?;
        drop(lock);
        remove(&lock_path)
    }
}

/// What programs that are gone have left in `folder`, newest first. Files of live programs and files that cannot be
/// read are left alone.
pub fn find_recoveries(folder: &Path) -> Vec<Recovered> {
    let Ok(entries) = fs::read_dir(folder) else { return Vec::new() };
    let mut found: Vec<_> = entries.flatten().filter_map(|entry| recover(&entry.path())).collect();
    found.sort_by_key(|r| std::cmp::Reverse(r.written));
    found
}

/// Looks at one lock of the folder; a lock that guards nothing is swept away.
fn recover(lock_path: &Path) -> Option<Recovered> {
    let stem = lock_path.file_name()?.to_str()?.strip_suffix(LOCK_ENDING)?;
    let file = lock_path.with_file_name(format!("{stem}{FILE_ENDING}"));
    let lock = File::options().read(true).write(true).open(lock_path).ok()?;
    match lock.try_lock() {
        Ok(()) => {}
        Err(TryLockError::WouldBlock | TryLockError::Error(_)) => return None,
    }
    let Ok(written) = fs::metadata(&file).and_then(|m| m.modified()) else {
        // Nothing was unsaved. A failure to sweep is tried again at the next start.
        let _ = fs::remove_file(lock_path);
        return None;
    };
    let loaded = load(&file).ok()?;
    Some(Recovered { file, written, loaded, lock_path: lock_path.to_owned(), _lock: lock })
}

/// Throws away what a program has left.
///
/// # Errors
/// [`SessionError::Io`].
pub fn discard(recovered: Recovered) -> Result<(), SessionError> {
    let Recovered { file, lock_path, _lock: lock, .. } = recovered;
    remove(&file)?;
    drop(lock);
    remove(&lock_path)
}

fn remove(path: &Path) -> Result<(), SessionError> {
    match fs::remove_file(path) {
        Err(reason) if reason.kind() != std::io::ErrorKind::NotFound => Err(io_error(path, reason)),
        _ => Ok(()),
    }
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::session::tests::pump;

    #[test]
    fn a_live_program_keeps_its_file_and_a_dead_one_leaves_it() {
        let folder = tempfile::tempdir().unwrap();
        let (one, other) = (start_recovery(folder.path()).unwrap(), start_recovery(folder.path()).unwrap());
        write_recovery(&one, &pump(), Some(Path::new("/data/pump.session.ron"))).unwrap();
        write_recovery(&other, &pump(), None).unwrap();
        assert!(find_recoveries(folder.path()).is_empty());

        // Dropped without `finish`: the program died.
        drop(one);
        let found = find_recoveries(folder.path());
        assert_eq!(found.len(), 1);
        assert_eq!(found[0].loaded.saved_as.as_deref(), Some(Path::new("/data/pump.session.ron")));
        assert_eq!(found[0].loaded.session.panes, pump().panes);
        // Whoever was offered it has it to itself.
        assert!(find_recoveries(folder.path()).is_empty());
        drop(found);
        assert_eq!(find_recoveries(folder.path()).len(), 1);
        discard(find_recoveries(folder.path()).remove(0)).unwrap();
        assert!(find_recoveries(folder.path()).is_empty());
        other.finish().unwrap();
        assert_eq!(fs::read_dir(folder.path()).unwrap().count(), 0);
    }

    #[test]
    fn nothing_unsaved_is_nothing_offered() {
        let folder = tempfile::tempdir().unwrap();
        let slot = start_recovery(&folder.path().join("made/here")).unwrap();
        write_recovery(&slot, &pump(), None).unwrap();
        slot.clear().unwrap();
        slot.clear().unwrap();
        drop(slot);
        assert!(find_recoveries(&folder.path().join("made/here")).is_empty());
        assert!(find_recoveries(&folder.path().join("nowhere")).is_empty());
    }

    #[test]
    fn a_damaged_recovery_file_is_left_alone() {
        let folder = tempfile::tempdir().unwrap();
        fs::write(folder.path().join(format!("1-2-0{LOCK_ENDING}")), "").unwrap();
        let file = folder.path().join(format!("1-2-0{FILE_ENDING}"));
        fs::write(&file, "Session(format: 1, ").unwrap();
        assert!(find_recoveries(folder.path()).is_empty());
        assert!(file.exists());
    }
}
