//! The segment parted on the screen: what is leakage, what is left, which window and which length are advised.

use eframe::egui::{Key, Modifiers};
use egui_kittest::kittest::{NodeT as _, Queryable as _};

use super::desk::{Desk, RATE_HZ, Screen};

fn labelled(screen: &Screen<'_>, part: &str) -> Option<String> {
    screen.harness.query_all_by_label_contains(part).find_map(|n| n.accesskit_node().label())
}

#[test]
fn a_pane_shows_the_residue_by_key_and_menu_and_undo_takes_it_back() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let reading_before = screen.harness.state().reading().map(|r| r.0.clone()).unwrap();
    screen.key(Modifiers::NONE, Key::R);
    screen.settle();
    assert!(screen.session().panes[0].residue);
    assert!(screen.shows("Spectrum 1, rectangular, residue") && screen.shows("Pane 1: rectangular, residue"));
    // No figure changes with what is shown.
    assert_eq!(screen.harness.state().reading().map(|r| r.0.clone()).unwrap(), reading_before);
    // The hairline on the strongest tone: its half of full scale is gone from the residue, the others keep it.
    screen.key(Modifiers::NONE, Key::N);
    screen.key(Modifiers::NONE, Key::H);
    screen.settle();
    let level = |text: String| text.split("Hz").nth(1).unwrap().trim().trim_end_matches(" dB").replace('−', "-");
    let levels: Vec<f64> = screen
        .harness
        .query_all_by_label_contains(" Hz  ")
        .filter_map(|n| n.accesskit_node().value().or(n.accesskit_node().label()))
        .filter(|text| text.starts_with("50.0") && text.ends_with(" dB"))
        .map(|text| level(text).parse().unwrap())
        .collect();
    assert!(levels.len() >= 6, "{levels:?}");
    assert!(levels[0] < -60.0 && levels[1] > -8.0, "{levels:?}");
    screen.key(Modifiers::COMMAND, Key::Z);
    screen.settle();
    assert!(!screen.session().panes[0].residue && !screen.shows(", residue"));
    screen.menu("Panes", "Residue in this pane");
    screen.settle();
    assert!(screen.session().panes[0].residue);
}

#[test]
fn the_residue_goes_with_the_segment_and_is_saved() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::R);
    screen.settle();
    screen.type_number("Length", "3");
    screen.settle();
    assert!(screen.shows("Spectrum 1, rectangular, residue"));
    let text = ron::to_string(&screen.session()).unwrap();
    assert!(text.contains("residue:true"), "{text}");
}

#[test]
fn skirts_are_counted_named_at_the_hairline_and_can_be_turned_off() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    // Four seconds and some: 124.8 Hz then stands between lines, and its side lobes show.
    screen.type_number("Length", "4.1");
    screen.settle();
    let figure = labelled(&screen, "Spectrum 1, rectangular").unwrap();
    assert!(figure.contains(" skirt peaks"), "{figure}");
    let reading = screen.harness.state().reading().unwrap().0.clone();
    let skirt = reading.skirts.iter().find(|s| s.pane == 0).unwrap();
    assert!(reading.tones.iter().all(|t| (t.frequency_hz - skirt.frequency_hz).abs() > 0.2));
    // The second tone fitted to the panes, the hairline is walked by lines until it stands on a side lobe.
    screen.key(Modifiers::NONE, Key::N);
    screen.key(Modifiers::NONE, Key::N);
    screen.key(Modifiers::NONE, Key::T);
    screen.settle();
    screen.harness.get_by_label_contains("Spectrum 1, rectangular").click();
    screen.harness.step();
    let found = (0..60).any(|_| {
        screen.key(Modifiers::NONE, Key::ArrowRight);
        labelled(&screen, "Spectrum 1, rectangular").unwrap().contains("skirt of 124.80 Hz, not a tone")
    });
    assert!(found, "{:?}", labelled(&screen, "Spectrum 1, rectangular"));
    screen.menu("View", "Skirts");
    screen.settle();
    screen.menu("View", "Smallest tone that would be seen");
    screen.settle();
    assert!(screen.shows("smallest that would be seen"));
}

#[test]
fn advised_windows_are_ranked_and_one_key_puts_the_first_in_a_pane_or_a_new_one() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let best = screen.harness.state().reading().unwrap().0.advice[0].clone();
    assert!(screen.shows("Windows advised") && screen.shows(&best.why));
    screen.harness.get_by_label_contains("Spectrum 2, hann").click();
    screen.harness.step();
    screen.key(Modifiers::NONE, Key::G);
    screen.settle();
    assert_eq!(screen.session().panes[1].window.to_string(), best.written());
    screen.key(Modifiers::COMMAND, Key::Z);
    screen.settle();
    assert_eq!(screen.session().panes[1].window.to_string(), "hann");
    screen.key(Modifiers::SHIFT, Key::G);
    screen.settle();
    assert_eq!(screen.session().panes.len(), 7);
    assert_eq!(screen.session().panes[6].window.to_string(), best.written());
}

#[test]
fn a_button_beside_an_advised_window_puts_it_in_the_pane_last_touched() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let advice = screen.harness.state().reading().unwrap().0.advice.clone();
    let used: Vec<String> = screen.session().panes.iter().map(|p| p.window.to_string()).collect();
    let free = advice.iter().take(5).map(panewise::reading::AdviceLine::written).find(|w| !used.contains(w)).unwrap();
    screen.harness.get_by_label(&format!("Put {free} in the pane last touched")).click_accesskit();
    screen.settle();
    assert_eq!(screen.session().panes[0].window.to_string(), free);
    screen.key(Modifiers::COMMAND, Key::Z);
    screen.settle();
    screen.harness.get_by_label(&format!("Put {free} in a new pane")).click_accesskit();
    screen.settle();
    assert_eq!(screen.session().panes[6].window.to_string(), free);
}

#[test]
fn the_segment_is_set_to_whole_periods_of_the_picked_tone() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.type_number("Length", "3.999");
    screen.settle();
    screen.key(Modifiers::NONE, Key::N);
    screen.key(Modifiers::NONE, Key::N);
    let before = screen.session().current_segment().unwrap().span;
    screen.key(Modifiers::NONE, Key::K);
    screen.settle();
    let after = screen.session().current_segment().unwrap().span;
    let periods = after.samples as f64 / f64::from(RATE_HZ) * 124.8;
    assert_eq!(after.start, before.start);
    assert!((periods - periods.round()).abs() < 0.5 * 124.8 / f64::from(RATE_HZ) + 1e-6, "{periods}");
    assert!(after.samples.abs_diff(before.samples) <= 9, "{before:?} {after:?}");
    screen.key(Modifiers::COMMAND, Key::Z);
    screen.settle();
    assert_eq!(screen.session().current_segment().unwrap().span, before);
}
