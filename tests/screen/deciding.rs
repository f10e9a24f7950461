//! What is decided by hand on the screen: by keys and by menu, with a name that is asked once, and taken back again.

use eframe::egui::{self, Key, Modifiers};
use egui_kittest::kittest::{NodeT as _, Queryable as _};
use panewise::session::Verdict;

use super::desk::{Desk, Screen, TONES};

const PLAIN: Modifiers = Modifiers::NONE;

fn frequencies(screen: &Screen<'_>) -> Vec<f64> {
    let (reading, current) = screen.harness.state().reading().expect("a reading");
    assert!(current);
    reading.tones.iter().map(|t| t.frequency_hz).collect()
}

/// Picks the tone in the n-th row.
fn pick(screen: &mut Screen<'_>, n: usize) {
    screen.key(PLAIN, Key::U);
    for _ in 0..n {
        screen.key(PLAIN, Key::N);
    }
    screen.settle();
}

fn click_in_setup(screen: &mut Screen<'_>, label: &str) {
    screen.harness.get_by_label(label).scroll_to_me();
    screen.harness.run_steps(8);
    screen.click(label);
    screen.settle();
}

#[test]
fn a_tone_is_refused_by_keys_alone_with_name_and_reason_and_taken_back() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let before = frequencies(&screen);
    assert_eq!(before.len(), TONES.len());
    pick(&mut screen, 2);
    screen.key(PLAIN, Key::X);
    assert!(screen.shows("Refuse the tone at 124.8"));
    // Nothing is decided without a name and a reason.
    screen.text("N. Name");
    screen.key(PLAIN, Key::Enter);
    assert!(screen.shows("Refuse the tone at 124.8") && screen.session().refused.is_empty());
    // Enter has left the field: Tab finds the next one from where it was.
    screen.harness.get_by_role_and_label(egui::Role::TextInput, "Reason").focus();
    screen.harness.step();
    screen.text("pick-up, not the pump");
    screen.key(PLAIN, Key::Enter);
    screen.settle();
    let session = screen.session();
    assert_eq!(session.refused.len(), 1);
    assert!((session.refused[0].frequency_hz - 124.8).abs() < 1e-3);
    assert_eq!(
        (session.refused[0].by.as_str(), session.refused[0].reason.as_str()),
        ("N. Name", "pick-up, not the pump")
    );
    assert_eq!(frequencies(&screen).len(), TONES.len() - 1);
    assert!(screen.shows("by N. Name: pick-up, not the pump"));
    let label = screen
        .harness
        .query_all_by_label_contains("Take back the refusal at 124.8")
        .find_map(|n| n.accesskit_node().label())
        .expect("a way to take it back");
    click_in_setup(&mut screen, &label);
    assert_eq!(frequencies(&screen), before);
    screen.key(Modifiers::COMMAND, Key::Z);
    screen.settle();
    assert_eq!(screen.session().refused.len(), 1);
}

#[test]
fn a_verdict_is_overruled_and_the_name_is_remembered_in_the_next_run() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    pick(&mut screen, 1);
    screen.menu("Tones", "Overrule the picked tone's verdict");
    assert!(screen.shows("Overrule the verdict at 50.0"));
    screen.text("N. Name");
    screen.harness.get_by_role_and_label(egui::Role::RadioButton, "disputed").click();
    screen.harness.step();
    screen.harness.get_by_role_and_label(egui::Role::TextInput, "Reason").focus();
    screen.harness.step();
    screen.text("the load changed");
    screen.click("Overrule");
    screen.settle();
    let overruled = screen.session().overruled;
    assert_eq!(
        (overruled.len(), overruled[0].verdict, overruled[0].reason.as_str()),
        (1, Verdict::Disputed, "the load changed")
    );
    let (reading, _) = screen.harness.state().reading().unwrap();
    let beside = reading.tones[0].overruled.as_ref().expect("it stands beside the row");
    assert_eq!((beside.verdict, beside.by.as_str()), (Verdict::Disputed, "N. Name"));
    assert!(screen.shows("Take back the verdict at 50.0"));
    screen.harness.state().finish();
    drop(screen);

    let mut screen = desk.open("pump.wav");
    pick(&mut screen, 1);
    screen.key(PLAIN, Key::O);
    // The name is there, and the keys go to the reason.
    let name = screen.harness.get_by_role_and_label(egui::Role::TextInput, "Your name");
    assert_eq!(name.accesskit_node().value().as_deref(), Some("N. Name"));
    screen.text("again");
    screen.key(PLAIN, Key::Enter);
    screen.settle();
    assert_eq!(screen.session().overruled[0].reason, "again");
}

#[test]
fn a_decision_is_given_up_with_escape() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    pick(&mut screen, 1);
    screen.key(PLAIN, Key::X);
    screen.text("N. Name");
    screen.key(PLAIN, Key::Escape);
    screen.key(PLAIN, Key::Escape);
    screen.settle();
    assert!(!screen.shows("Refuse the tone at") && screen.session().refused.is_empty());
    // Without a pick there is nothing to decide on.
    screen.key(PLAIN, Key::U);
    screen.key(PLAIN, Key::O);
    assert!(!screen.shows("Overrule the verdict at"));
}

#[test]
fn a_frequency_is_held_and_let_go_and_a_named_tone_is_moved_by_typing() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    pick(&mut screen, 3);
    screen.key(Modifiers::COMMAND, Key::H);
    screen.settle();
    let held = screen.session().hand_tones;
    assert!(held.len() == 1 && held[0].held && (held[0].frequency_hz - 300.125).abs() < 1e-3, "{held:?}");
    let (reading, _) = screen.harness.state().reading().unwrap();
    assert!(reading.tones[2].tags.ends_with(&["by-hand".to_owned(), "held".to_owned()]), "{:?}", reading.tones[2].tags);
    screen.key(Modifiers::COMMAND, Key::H);
    screen.settle();
    assert!(!screen.session().hand_tones[0].held);
    screen.type_number("Tone 1", "301");
    assert_eq!(screen.session().hand_tones[0].frequency_hz, 301.0);
    let label = "Hold the tone at 301.000 Hz there";
    click_in_setup(&mut screen, label);
    assert!(screen.session().hand_tones[0].held);
    click_in_setup(&mut screen, "Say why there is a tone at 301.000 Hz");
    screen.text("N. Name");
    screen.click("Keep");
    screen.settle();
    assert_eq!(screen.session().hand_tones[0].by, "N. Name");
    click_in_setup(&mut screen, "Take back the tone named at 301.000 Hz");
    assert!(screen.session().hand_tones.is_empty());
}

#[test]
fn a_fundamental_is_pinned_followed_typed_and_unpinned() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    pick(&mut screen, 1);
    screen.key(PLAIN, Key::F);
    screen.settle();
    assert!((screen.session().fundamental_hz.unwrap() - 50.0).abs() < 1e-3);
    let (reading, _) = screen.harness.state().reading().unwrap();
    assert!((reading.tones[1].order.unwrap() - 124.8 / 50.0).abs() < 1e-4);
    screen.type_number("Order 1", "25");
    let (reading, _) = screen.harness.state().reading().unwrap();
    assert!((reading.tones[0].order.unwrap() - 2.0).abs() < 1e-4);
    click_in_setup(&mut screen, "Unpin the fundamental");
    assert_eq!(screen.session().fundamental_hz, None);
    assert!(screen.harness.state().reading().unwrap().0.tones.iter().all(|t| t.order.is_none()));
    // The same key twice on one tone pins and unpins.
    screen.key(PLAIN, Key::F);
    screen.settle();
    screen.key(PLAIN, Key::F);
    screen.settle();
    assert_eq!(screen.session().fundamental_hz, None);
}
