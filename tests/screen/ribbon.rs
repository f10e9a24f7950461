//! The steadiness ribbon, the stretches it suggests, and what the segment holds.

use eframe::egui::{Key, Modifiers, Role};
use egui_kittest::kittest::{NodeT as _, Queryable as _};
use panewise::signal::Span;
use panewise::tone::Kind;

use super::desk::{Desk, RATE_HZ, SECONDS, Screen, write_channels};

/// A capture that is loud for 9 s, then half as strong.
fn two_parts(desk: &Desk) {
    write_channels(&desk.path("parts.wav"), |t, x| [x * if t < 9.0 { 1.0 } else { 0.5 }, x]);
}

fn span(screen: &Screen<'_>) -> Span {
    screen.session().current_segment().expect("a segment").span
}

/// Seconds of the segment's edges.
fn edges(screen: &Screen<'_>) -> (f64, f64) {
    let span = span(screen);
    (span.start as f64 / f64::from(RATE_HZ), span.end() as f64 / f64::from(RATE_HZ))
}

#[test]
fn suggested_stretches_are_taken_by_click_by_key_and_as_new_segments() {
    let desk = Desk::new();
    two_parts(&desk);
    let mut screen = desk.open("parts.wav");
    let first = edges(&screen);
    assert!(first.0 == 0.0 && first.1 > 8.0 && first.1 <= 9.1, "{first:?}");
    assert!(screen.shows("Steadiness ribbon, 2 steady stretches"));
    assert!(
        screen
            .harness
            .get_by_label_contains("Steady stretch 1,")
            .accesskit_node()
            .label()
            .unwrap()
            .ends_with(", marked")
    );

    screen.harness.get_by_label_contains("Steady stretch 2,").click();
    screen.settle();
    let second = edges(&screen);
    assert!(second.0 >= 8.9 && second.1 == f64::from(SECONDS), "{second:?}");
    screen.menu("Capture", "Undo");
    screen.settle();
    assert_eq!(edges(&screen), first);

    // From one to the next by key, and round.
    screen.key(Modifiers::NONE, Key::J);
    screen.settle();
    assert_eq!(edges(&screen), second);
    screen.key(Modifiers::NONE, Key::J);
    screen.settle();
    assert_eq!(edges(&screen), first);

    // With the keys on it, Enter; with Shift as one more segment.
    screen.harness.get_by_label_contains("Steady stretch 2,").focus();
    screen.harness.step();
    screen.key(Modifiers::SHIFT, Key::Enter);
    screen.settle();
    let session = screen.session();
    assert_eq!(session.segments.len(), 2);
    assert_eq!(edges(&screen), second);
}

#[test]
fn the_ribbon_reads_out_block_by_block_and_enter_marks_the_stretch_it_is_in() {
    let desk = Desk::new();
    two_parts(&desk);
    let mut screen = desk.open("parts.wav");
    screen.menu("Segment", "Mark the whole capture");
    screen.settle();
    let ribbon = |screen: &Screen<'_>| {
        screen.harness.get_by_label_contains("Steadiness ribbon").accesskit_node().label().unwrap()
    };
    screen.harness.get_by_label_contains("Steadiness ribbon").focus();
    screen.harness.step();
    assert!(ribbon(&screen).contains("; 0.000 to 0.0") && ribbon(&screen).contains(": steady; level "));
    screen.key(Modifiers::NONE, Key::End);
    assert!(ribbon(&screen).contains("to 16.000 s: steady"), "{}", ribbon(&screen));
    screen.key(Modifiers::SHIFT, Key::ArrowLeft);
    screen.key(Modifiers::NONE, Key::ArrowLeft);
    assert!(!ribbon(&screen).contains("to 16.000 s"), "{}", ribbon(&screen));
    screen.key(Modifiers::NONE, Key::Enter);
    screen.settle();
    assert!(edges(&screen).0 >= 8.9 && edges(&screen).1 == f64::from(SECONDS), "{:?}", edges(&screen));
    // Somewhere between the stretches it says what changes.
    screen.key(Modifiers::NONE, Key::Home);
    let mut told = false;
    for _ in 0..400 {
        screen.harness.key_press(Key::ArrowRight);
        screen.harness.step();
        told |= ribbon(&screen).contains(": a change is here, level −");
    }
    assert!(told);
}

#[test]
fn a_ribbon_zoomed_in_keeps_what_is_in_sight() {
    let desk = Desk::new();
    two_parts(&desk);
    let mut screen = desk.open("parts.wav");
    screen.menu("Segment", "Zoom the strip to the segment");
    screen.settle();
    assert!(!screen.shows("Steady stretch 2,") || screen.shows("Steady stretch 1,"));
    // Out of sight it can be had all the same, and then shows.
    screen.key(Modifiers::NONE, Key::J);
    screen.settle();
    assert!(edges(&screen).0 >= 8.9);
    assert!(screen.shows("Steady stretch 2,"));
}

#[test]
fn what_the_segment_holds_is_shown_with_its_reason_and_can_be_overruled() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    assert!(screen.shows("of the power"), "the reason");
    let kind = |screen: &Screen<'_>| screen.harness.state().reading().expect("a reading").0.segment.kind;
    assert_eq!(kind(&screen), Some(Kind::Tones));
    screen.harness.get_by_role_and_label(Role::ComboBox, "Holds").scroll_to_me();
    screen.harness.run_steps(8);
    screen.click("Holds");
    screen.click("random noise");
    screen.settle();
    assert_eq!((kind(&screen), screen.session().segments[0].kind), (Some(Kind::Random), Some(Kind::Random)));
    assert!(screen.shows("set by hand; found to be tones"));
    screen.menu("Capture", "Undo: say what the segment holds");
    screen.settle();
    assert_eq!(kind(&screen), Some(Kind::Tones));
}
