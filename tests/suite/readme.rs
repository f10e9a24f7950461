//! The README's tour is what the program prints.

use std::fs;
use std::path::Path;
use std::process::Command;

use crate::shop::Ran;

/// The lines that the README shows as typed or printed, before and after the list of commands.
fn shown() -> (Vec<String>, Vec<String>) {
    let readme = fs::read_to_string(project().join("README.md")).unwrap();
    let (before, after) = readme.split_once("## Commands").expect("the list of commands");
    let lines = |text: &str| text.lines().filter_map(|line| line.strip_prefix("    ")).map(str::to_owned).collect();
    (lines(before), lines(after))
}

fn project() -> &'static Path {
    Path::new(env!("CARGO_MANIFEST_DIR"))
}

fn run<'a>(arguments: impl Iterator<Item = &'a str>) -> String {
    let mut command = Command::new(env!("CARGO_BIN_EXE_panewise"));
    Ran::of(command.args(arguments).current_dir(project()).output().unwrap()).done()
}

#[test]
fn the_kernels_are_drawn_as_the_readme_has_it() {
    let (_, shown) = shown();
    let command = shown.iter().find_map(|line| line.strip_prefix("panewise windows --kernel ")).expect("the command");
    let (wish, _) = command.split_once(" > ").expect("where the figure goes");
    let svg = run(["windows", "--kernel"].into_iter().chain(wish.split_whitespace()));
    assert!(svg.starts_with("<svg") && svg.ends_with("</svg>\n"), "{svg}");
}

#[test]
fn the_tour_shows_what_its_command_prints() {
    let (shown, _) = shown();
    let at = shown.iter().position(|line| line.starts_with("panewise read ")).expect("the tour's command");
    let command = format!("{} {}", shown[at].trim_end_matches('\\'), shown[at + 1]);
    let printed = run(command.split_whitespace().skip(1));
    let rows: Vec<_> = shown[at + 2..].iter().map(|line| line.trim_end()).filter(|line| !line.is_empty()).collect();
    assert!(rows.len() >= 10, "the table of the tour: {rows:?}");
    for row in rows {
        assert!(printed.lines().any(|line| line == row), "the README shows\n{row}\nbut the program prints\n{printed}");
    }
}
