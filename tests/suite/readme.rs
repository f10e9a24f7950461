//! The README's tour is what the program prints.

use std::fs;
use std::path::Path;
use std::process::Command;

use crate::shop::Ran;

#[test]
fn the_tour_shows_what_its_command_prints() {
    let project = Path::new(env!("CARGO_MANIFEST_DIR"));
    let readme = fs::read_to_string(project.join("README.md")).unwrap();
    let shown: Vec<_> = readme.lines().filter_map(|line| line.strip_prefix("    ")).collect();
    let at = shown.iter().position(|line| line.starts_with("panewise read ")).expect("the tour's command");
    let command = format!("{} {}", shown[at].trim_end_matches('\\'), shown[at + 1]);
    let arguments: Vec<_> = command.split_whitespace().skip(1).collect();
    let output = Command::new(env!("CARGO_BIN_EXE_panewise")).args(arguments).current_dir(project).output().unwrap();
    let printed = Ran::of(output).done();
    let rows: Vec<_> = shown[at + 2..].iter().map(|line| line.trim_end()).filter(|line| !line.is_empty()).collect();
    assert!(rows.len() >= 10, "the table of the tour: {rows:?}");
    for row in rows {
        assert!(printed.lines().any(|line| line == row), "the README shows\n{row}\nbut the program prints\n{printed}");
    }
}
