//! What the screen needs from outside: somebody to ask for a file, and folders. Tests bring their own.

use std::path::{Path, PathBuf};
use std::sync::Arc;

use crate::session::{recent_file, recovery_dir};

/// What a file is asked for.
#[derive(Debug, Clone, PartialEq, Eq)]
pub enum Ask {
    /// A recording to open.
    Capture,
    /// A session to open.
    Session,
    /// Where to save the session; the name proposed.
    SaveSession(String),
    /// Where the session's capture has gone.
    Locate,
}

/// Somebody who can be asked for a file. Asked on a thread of its own, so it may take its time.
pub trait Picker: Send + Sync + std::fmt::Debug {
    /// The file chosen; `None` where the question was turned down.
    fn pick(&self, ask: &Ask, folder: Option<&Path>) -> Option<PathBuf>;
}

/// The desktop's own dialogs.
#[derive(Debug, Clone, Copy, Default)]
pub struct DesktopPicker;

impl Picker for DesktopPicker {
    fn pick(&self, ask: &Ask, folder: Option<&Path>) -> Option<PathBuf> {
        let dialog = rfd::FileDialog::new();
        let dialog = folder.map_or(dialog.clone(), |f| dialog.set_directory(f));
        match ask {
            Ask::Capture => dialog.set_title("Open a capture").add_filter("Recordings", &["wav", "wave"]).pick_file(),
            Ask::Locate => {
                dialog.set_title("Where is the session's capture?").add_filter("All files", &["*"]).pick_file()
            }
            Ask::Session => dialog.set_title("Open a session").add_filter("Sessions", &["ron"]).pick_file(),
            Ask::SaveSession(name) => dialog.set_title("Save the session").set_file_name(name).save_file(),
        }
    }
}

/// What the screen needs from outside.
#[derive(Debug, Clone)]
pub struct Services {
    /// Who is asked for files.
    pub picker: Arc<dyn Picker>,
    /// The file that keeps the list of recent files; `None`: no list is kept.
    pub recent: Option<PathBuf>,
    /// The folder of recovery files; `None`: nothing is kept for recovery.
    pub recovery: Option<PathBuf>,
    /// The file that keeps theme and sizes; `None`: they are not kept.
    pub preferences: Option<PathBuf>,
    /// Where to look for the demonstration capture.
    pub demonstration: Option<PathBuf>,
}

impl Services {
    /// Those of a desktop.
    pub fn desktop() -> Self {
        Self {
            picker: Arc::new(DesktopPicker),
            recent: recent_file().ok(),
            recovery: recovery_dir().ok(),
            preferences: recent_file().ok().map(|file| file.with_file_name("preferences.ron")),
            demonstration: crate::cli::demonstration(),
        }
    }
}
