//! What the window opens with when nothing was given.

use std::path::{Path, PathBuf};

/// The demonstration capture, as the project keeps it.
const DEMONSTRATION: &str = "sample-captures/saltmarsh-pump2-bearing.wav";

/// How far above the program its project is looked for: `target/release/panewise` stands three below it.
const FLOORS_UP: usize = 5;

/// The demonstration capture, looked for in the current folder and in those above the program.
pub(crate) fn demonstration() -> Option<PathBuf> {
    let here = Path::new(DEMONSTRATION);
    if here.is_file() {
        return Some(here.to_owned());
    }
    let program = std::env::current_exe().ok()?;
    program.ancestors().skip(1).take(FLOORS_UP).map(|folder| folder.join(DEMONSTRATION)).find(|path| path.is_file())
}
