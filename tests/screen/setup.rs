//! The setup column, the menus, the sheets.

use eframe::egui::{Key, Modifiers};
use egui_kittest::kittest::Queryable as _;
use panewise::signal::Removal;
use panewise::units::Quantity;

use super::desk::Desk;

#[test]
fn a_scale_changes_every_level_and_can_be_undone() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let level = |s: &super::desk::Screen<'_>| s.harness.state().reading().expect("a reading").0.tones[0].level;
    let before = level(&screen);
    screen.click("Quantity");
    screen.harness.get_by_label("acceleration").click();
    screen.harness.step();
    screen.settle();
    assert_eq!(screen.session().scale().quantity, Quantity::Acceleration);
    screen.type_number("1 FS is", "98.1");
    assert!((level(&screen) / before - 98.1).abs() < 1e-6);
    assert!(screen.harness.query_all_by(|n| n.value().is_some_and(|v| v.contains("dB re 1 µm/s²"))).count() >= 1);
    for _ in 0..4 {
        screen.key(Modifiers::COMMAND, Key::Z);
        screen.settle();
    }
    assert_eq!(screen.session().scale().quantity, Quantity::Plain);
    assert!((level(&screen) - before).abs() < 1e-12);
}

#[test]
fn menus_show_their_keys_and_f1_lists_them() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.menu("Segment", "Take out a straight line");
    assert_eq!(screen.session().removal, Removal::Line);
    screen.key(Modifiers::NONE, Key::F1);
    assert!(screen.harness.query_by_label("Fit to the picked tone").is_some());
    screen.key(Modifiers::NONE, Key::Escape);
    assert!(screen.harness.query_by_label("Fit to the picked tone").is_none());
    screen.menu("Help", "About");
    assert!(screen.harness.query_all_by(|n| n.value().is_some_and(|v| v.contains("qualified people"))).count() >= 1);
}

#[test]
fn the_setup_column_folds_away() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    assert!(screen.shows("Quantity"));
    screen.key(Modifiers::NONE, Key::F9);
    assert!(!screen.shows("Quantity"));
}

#[test]
fn the_other_channel_is_read_when_chosen() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let strongest = |s: &super::desk::Screen<'_>| {
        let (reading, _) = s.harness.state().reading().expect("a reading");
        reading.tones.iter().map(|t| t.level_db).fold(f64::NEG_INFINITY, f64::max)
    };
    let first = strongest(&screen);
    screen.click("Channel");
    screen.click("channel 2");
    screen.settle();
    assert_eq!(screen.session().channel, 1);
    // The second channel holds half the first: 20 lg 0.5 = -6.02 dB.
    assert!((strongest(&screen) - first + 6.0206).abs() < 0.001);
}
