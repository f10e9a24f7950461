//! The plan of the house: a floor uses only floors below it.

use std::fs;
use std::path::{Path, PathBuf};

/// From the ground up.
const FLOORS: [&str; 11] =
    ["units", "signal", "window", "spectrum", "tone", "capture", "session", "reading", "report", "cli", "ui"];

fn height(floor: &str) -> Option<usize> {
    FLOORS.iter().position(|f| *f == floor)
}

/// The floors named after `crate::` in a source text, comments left out.
fn floors_named(source: &str) -> Vec<String> {
    let code: String = source.lines().map(|line| line.split("//").next().unwrap_or("").to_owned() + "\n").collect();
    code.match_indices("crate::").flat_map(|(at, found)| names(&code[at + found.len()..])).collect()
}

/// The first name of a path, or of each path in braces.
fn names(rest: &str) -> Vec<String> {
    let name = |text: &str| text.trim_start().chars().take_while(|c| c.is_alphanumeric() || *c == '_').collect();
    let Some(group) = rest.strip_prefix('{') else { return vec![name(rest)] };
    let (mut depth, mut found, mut start) = (0, Vec::new(), 0);
    for (at, letter) in group.char_indices() {
        match letter {
            '{' => depth += 1,
            '}' if depth > 0 => depth -= 1,
            ',' | '}' if depth == 0 => {
                found.push(name(&group[start..at]));
                start = at + 1;
                if letter == '}' {
                    break;
                }
            }
            _ => {}
        }
    }
    found
}

/// The floors that a source text on `floor` uses although they stand above it.
fn looks_up(floor: &str, source: &str) -> Vec<String> {
    let own = height(floor).expect("a floor of the plan");
    floors_named(source).into_iter().filter(|name| height(name).is_some_and(|h| h > own)).collect()
}

fn sources(folder: &Path) -> Vec<PathBuf> {
    let mut found = Vec::new();
    for entry in fs::read_dir(folder).unwrap() {
        let path = entry.unwrap().path();
        if path.is_dir() {
            found.extend(sources(&path));
        } else if path.extension().is_some_and(|e| e == "rs") {
            found.push(path);
        }
    }
    found
}

fn house() -> PathBuf {
    Path::new(env!("CARGO_MANIFEST_DIR")).join("src")
}

#[test]
fn no_floor_looks_up() {
    let mut n_files = 0;
    for floor in FLOORS {
        for path in sources(&house().join(floor)) {
            n_files += 1;
            let above = looks_up(floor, &fs::read_to_string(&path).unwrap());
            assert!(above.is_empty(), "{} uses {above:?}, above its floor", path.display());
        }
    }
    assert!(n_files > FLOORS.len(), "only {n_files} files were looked at");
}

#[test]
fn every_folder_is_a_floor_of_the_plan() {
    for entry in fs::read_dir(house()).unwrap() {
        let entry = entry.unwrap();
        let name = entry.file_name().into_string().unwrap();
        let known = if entry.path().is_dir() { height(&name).is_some() } else { name == "lib.rs" || name == "main.rs" };
        assert!(known, "src/{name} is on no floor");
    }
}

#[test]
fn a_look_up_is_seen_however_it_is_written() {
    for (floor, source) in [
        ("session", "use crate::reading::Reading;"),
        ("session", "use crate::{signal::Span, ui};"),
        ("session", "use crate::{\n    signal::{Span, Watch},\n    reading::{self, Reading},\n};"),
        ("units", "fn f() { crate::window::Window::parse(\"hann\"); }"),
        ("cli", "pub use crate :: report; use crate::ui::run;"),
    ] {
        assert_eq!(looks_up(floor, source).len(), 1, "{source}");
    }
    for (floor, source) in [
        ("session", "use crate::session::Session; use crate::signal::Span;"),
        ("session", "// crate::reading holds it\nuse super::x; /// [`crate::ui`]"),
    ] {
        assert_eq!(looks_up(floor, source), Vec::<String>::new(), "{source}");
    }
}
