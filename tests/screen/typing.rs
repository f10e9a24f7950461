//! What is typed: dialogs, numbers, texts.

use eframe::egui::{Key, Modifiers};
use egui_kittest::kittest::Queryable as _;

use super::desk::Desk;

#[test]
fn enter_opens_what_is_typed_as_a_path() {
    let desk = Desk::new();
    let mut screen = desk.bare();
    screen.key(Modifiers::COMMAND, Key::L);
    assert!(screen.shows("Type or paste the path of a capture"));
    screen.text(&desk.path("pump.wav").to_string_lossy());
    screen.key(Modifiers::NONE, Key::Enter);
    screen.settle();
    assert!(screen.harness.state().session().is_some());
    assert!(!screen.shows("Type or paste the path of a capture"));
}

#[test]
fn enter_with_no_path_typed_keeps_asking() {
    let desk = Desk::new();
    let mut screen = desk.bare();
    screen.key(Modifiers::COMMAND, Key::L);
    screen.key(Modifiers::NONE, Key::Enter);
    assert!(screen.shows("Type or paste the path of a capture"));
    screen.text(&desk.path("pump.wav").to_string_lossy());
    screen.key(Modifiers::NONE, Key::Enter);
    screen.settle();
    assert!(screen.harness.state().session().is_some());
}

#[test]
fn enter_keeps_the_note_on_a_tone_and_escape_drops_it() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::N);
    screen.settle();
    screen.key(Modifiers::COMMAND, Key::N);
    screen.text("belt");
    screen.key(Modifiers::NONE, Key::Enter);
    let notes = screen.session().notes;
    assert_eq!(notes.iter().map(|n| n.text.as_str()).collect::<Vec<_>>(), ["belt"]);
    assert!(screen.harness.query_by_label("Keep").is_none());
    assert!(screen.shows("belt"));
    screen.key(Modifiers::COMMAND, Key::N);
    screen.text(" drive");
    screen.key(Modifiers::NONE, Key::Escape);
    assert!(screen.harness.query_by_label("Keep").is_none());
    assert_eq!(screen.session().notes, notes);
}
