//! What is typed: dialogs, numbers, texts.

use eframe::egui::{Key, Modifiers, Role};
use egui_kittest::kittest::Queryable as _;
use panewise::units::Factor;

use super::desk::{Desk, RATE_HZ, Screen};

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

fn span(screen: &Screen<'_>) -> (u64, u64) {
    let session = screen.session();
    let span = session.current_segment().expect("a segment").span;
    (span.start, span.end())
}

#[test]
fn a_factor_that_cannot_be_is_not_taken_and_that_is_said() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.click("Quantity");
    screen.click("acceleration");
    screen.settle();
    for (typed, said) in [
        ("-5", "-5 is not taken: it has to be above 0."),
        ("0", "0 is not taken: it has to be above 0."),
        ("abc", "“abc” is no number."),
    ] {
        screen.type_number("1 FS is", "2");
        assert!(!screen.shows(said));
        screen.type_number("1 FS is", typed);
        assert_eq!(screen.session().scale().factor, Factor::UnitsPerFullScale(2.0), "{typed}");
        assert!(screen.shows(said), "{typed}");
    }
    screen.type_number("1 FS is", "98,1");
    assert_eq!(screen.session().scale().factor, Factor::UnitsPerFullScale(98.1));
    assert!(!screen.shows("is no number"));
}

#[test]
fn a_factor_not_stated_yet_is_not_stated_by_nonsense() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.click("Quantity");
    screen.click("acceleration");
    screen.settle();
    screen.type_number("1 FS is", "-5");
    assert_eq!(screen.session().scale().factor, Factor::NotStated);
    assert!(screen.shows("-5 is not taken"));
}

#[test]
fn a_later_stretch_is_typed_start_first_and_an_earlier_one_end_first() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let rate = u64::from(RATE_HZ);
    screen.type_number("Start", "1");
    screen.type_number("End", "4");
    screen.type_number("Start", "9,5");
    assert_eq!(span(&screen), (9 * rate + rate / 2, 12 * rate + rate / 2));
    screen.type_number("End", "8");
    assert_eq!(span(&screen), (5 * rate, 8 * rate));
    screen.type_number("End", "2");
    assert_eq!(span(&screen), (0, 2 * rate));
    screen.type_number("Start", "15");
    assert_eq!(span(&screen), (15 * rate, 16 * rate));
    screen.type_number("End", "20");
    assert_eq!(span(&screen), (15 * rate, 16 * rate));
    assert!(screen.shows("20 is outside 0.000488 to 16: 16 is taken."));
    screen.key(Modifiers::COMMAND, Key::Z);
    screen.settle();
    assert_eq!(span(&screen), (0, 2 * rate));
}

#[test]
fn walking_through_the_fields_moves_nothing() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.click("seconds");
    // Neither is a number of ten thousandths of a second.
    screen.type_number("Start", "2049");
    screen.type_number("End", "10003");
    screen.click("samples");
    assert_eq!(span(&screen), (2049, 10003));
    let before = screen.session();
    screen.harness.get_by_role_and_label(Role::SpinButton, "Start").click();
    for _ in 0..6 {
        screen.harness.step();
        screen.key(Modifiers::NONE, Key::Tab);
    }
    screen.settle();
    assert_eq!(screen.session(), before);
}

#[test]
fn one_sample_is_one_sample() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.click("seconds");
    screen.type_number("Length", "1");
    assert!(screen.shows("1 sample, "));
}

#[test]
fn a_parameter_out_of_range_says_its_range() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.click("Add a window");
    screen.choose("kaiser=8.6");
    screen.click("Take kaiser=8.6");
    screen.settle();
    screen.type_number("Pane 7: β", "100");
    assert_eq!(screen.session().panes[6].window.to_string(), "kaiser=40");
    assert!(screen.shows("100 is outside 0 to 40: 40 is taken."));
}
