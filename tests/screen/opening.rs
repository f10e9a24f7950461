//! What a capture shows when it opens, what a channel has of its own, what is kept from run to run.

use eframe::egui::{Key, Modifiers, Theme};
use egui_kittest::kittest::Queryable as _;
use panewise::units::Quantity;

use super::desk::{Desk, RATE_HZ, SECONDS, Screen, write_capture, write_channels};

#[test]
fn the_demonstration_opens_with_its_scale_and_its_part_of_the_axes() {
    let desk = Desk::new();
    write_capture(&desk.path("demonstration.wav"), 1.0);
    let mut screen = desk.bare();
    screen.click("Open the demonstration capture");
    screen.settle();
    let session = screen.session();
    assert_eq!(session.axes.frequency_hz, Some((0.0, 300.0)));
    for scale in &session.scales {
        assert_eq!((scale.quantity, scale.unit.as_str()), (Quantity::Acceleration, "m/s²"));
        assert!((scale.units_per_full_scale() - 98.1).abs() < 1e-9);
    }
    let (reading, _) = screen.harness.state().reading().expect("a reading");
    // 0.9 · 0.5 of full scale: 98.1 · 0.45 / √2 m/s² r.m.s.
    assert!((reading.tones[0].level - 98.1 * 0.45 / 2.0_f64.sqrt()).abs() < 0.01, "{}", reading.tones[0].level);
    assert!(reading.warnings.iter().all(|w| !w.text.contains("scale")));
    assert!(!screen.harness.state().is_unsaved(), "nobody has done anything yet");
    assert!(screen.shows("Spectrum 1, rectangular: 0.000 to 300.000 Hz") || screen.shows("to 300.00 Hz"));
}

#[test]
fn another_capture_shows_what_holds_its_tones_until_the_axes_are_touched() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    assert_eq!(screen.session().scale().quantity, Quantity::Plain);
    // The highest tone is at 300.125 Hz; a tenth above, two digits' worth.
    assert_eq!(screen.session().axes.frequency_hz, Some((0.0, 340.0)));
    screen.key(Modifiers::NONE, Key::A);
    screen.type_number("Start", "2");
    assert_eq!(screen.session().axes.frequency_hz, None, "touched axes stay");
}

fn strip_span(screen: &Screen<'_>) -> (u64, u64) {
    let session = screen.session();
    let span = session.current_segment().expect("a segment").span;
    (span.start, span.end())
}

#[test]
fn a_channel_brings_its_own_doubts_and_suggestion() {
    let desk = Desk::new();
    let half = f64::from(SECONDS) / 2.0;
    // The second channel is clipped, and falls to a quarter half-way.
    let clipped = |t: f64, x: f64| (2.0 * x).clamp(-0.4, 0.4) * if t < half { 1.0 } else { 0.25 };
    write_channels(&desk.path("two.wav"), |t, x| [x, clipped(t, x)]);
    let mut screen = desk.open("two.wav");
    let frames = u64::from(RATE_HZ * SECONDS);
    let first = strip_span(&screen);
    assert!(first.1 > frames * 9 / 10, "{first:?}");
    assert!(!screen.shows("Channel 2"));
    screen.click("Channel");
    screen.click("channel 2");
    screen.settle();
    assert!(screen.shows("Channel 2: Clipped"));
    let second = strip_span(&screen);
    assert!(second.1 <= frames * 55 / 100 || second.0 >= frames * 45 / 100, "{second:?}");
    screen.click("Channel");
    screen.click("channel 1");
    screen.settle();
    assert!(!screen.shows("Channel 2: Clipped"));
    assert_eq!(strip_span(&screen), first);

    // What the user has marked stays.
    screen.type_number("Start", "1");
    let marked = strip_span(&screen);
    screen.click("Channel");
    screen.click("channel 2");
    screen.settle();
    assert_eq!(strip_span(&screen), marked);
}

#[test]
fn a_named_tone_is_taken_back() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::N);
    screen.key(Modifiers::NONE, Key::H);
    screen.key(Modifiers::COMMAND, Key::T);
    screen.settle();
    assert_eq!(screen.session().hand_tones.len(), 1);
    screen.menu("Tones", "Take back the named tone");
    screen.settle();
    assert!(screen.session().hand_tones.is_empty());
    screen.key(Modifiers::COMMAND, Key::Z);
    assert_eq!(screen.session().hand_tones.len(), 1);
    screen.key(Modifiers::NONE, Key::Backspace);
    assert!(screen.session().hand_tones.is_empty());
}

#[test]
fn the_search_is_tuned_in_the_setup_column() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.type_number("Most tones", "2");
    assert_eq!(screen.session().tuning.max_tones, 2);
    let (reading, current) = screen.harness.state().reading().expect("a reading");
    assert!(current && reading.tones.len() == 2);
    screen.type_number("False alarm", "1e-6");
    assert!((screen.session().tuning.false_alarm - 1e-6).abs() < 1e-12);
}

#[test]
fn a_rate_stands_in_for_the_files() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let strongest = |s: &Screen<'_>| s.harness.state().reading().expect("a reading").0.tones[0].frequency_hz;
    let before = strongest(&screen);
    screen.type_text("Rate", "8192/3");
    assert_eq!(screen.session().rate_hz, Some(8192.0 / 3.0));
    assert!((strongest(&screen) / before - 4.0 / 3.0).abs() < 1e-9);

    screen.type_text("Rate", "fast");
    assert_eq!(screen.session().rate_hz, Some(8192.0 / 3.0), "what is no rate changes nothing");
    let said = |s: &Screen<'_>, text: &str| {
        s.harness.query_all_by(|n| n.value().is_some_and(|v| v.contains(text))).count() >= 1
    };
    assert!(said(&screen, "a ratio such as 25600/3"));
    screen.type_text("Rate", "");
    assert_eq!(screen.session().rate_hz, None);
    assert!((strongest(&screen) - before).abs() < 1e-9);
}

#[test]
fn theme_and_scale_are_kept_from_run_to_run() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.menu("View", "Light");
    screen.menu("View", "Larger");
    screen.menu("View", "Larger");
    screen.wait("nothing is kept", |_| desk.path("preferences.ron").is_file());
    screen.wait("the scale is not kept", |_| {
        std::fs::read_to_string(desk.path("preferences.ron")).is_ok_and(|t| t.contains("light") && t.contains("1.2"))
    });
    drop(screen);
    let screen = desk.open("pump.wav");
    assert_eq!(screen.harness.ctx.theme(), Theme::Light);
    assert!((screen.harness.ctx.zoom_factor() - 1.2).abs() < 1e-3);
}
