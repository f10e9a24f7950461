//! Open, mark, compare, read.

use eframe::egui::{Key, Modifiers, Role};
use egui_kittest::kittest::Queryable as _;

use super::desk::{Desk, RATE_HZ, SECONDS, Screen};

fn span(screen: &Screen<'_>) -> (u64, u64) {
    let session = screen.session();
    let span = session.current_segment().expect("a segment").span;
    (span.start, span.end())
}

#[test]
fn a_capture_opens_by_typed_path_and_says_what_it_is() {
    let desk = Desk::new();
    let mut screen = desk.bare();
    screen.harness.get_by_label("Path").click();
    screen.harness.step();
    screen.harness.get_by_label("Path").type_text(&desk.path("pump.wav").to_string_lossy());
    screen.harness.step();
    screen.click("Open");
    screen.settle();
    assert_eq!(screen.session().capture.frames, u64::from(RATE_HZ * SECONDS));
    assert!(screen.shows("pump.wav"));
    assert!(screen.shows("2048 Hz, 16.0 s"));
    let (reading, current) = screen.harness.state().reading().expect("a reading");
    assert!(current && reading.tones.len() >= 3);
}

#[test]
fn a_file_that_is_none_is_one_sentence_that_can_be_dismissed() {
    let desk = Desk::new();
    std::fs::write(desk.path("bad.wav"), b"not a recording").unwrap();
    let mut screen = desk.bare();
    screen.harness.state_mut().open(&desk.path("bad.wav"));
    screen.wait_for("Dismiss:");
    screen.settle();
    assert!(screen.harness.state().session().is_none());
    let dismiss = screen.harness.get_by_label_contains("Dismiss:");
    assert!(dismiss.rect().is_positive());
    dismiss.click();
    screen.harness.step();
    screen.harness.step();
    assert!(!screen.shows("Dismiss:"));
}

#[test]
fn a_segment_is_marked_by_dragging_and_undone_in_one_step() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.menu("Segment", "Mark the whole capture");
    screen.settle();
    let strip = screen.harness.get_by_label_contains("Recording strip").rect();
    let y = strip.center().y;
    let at = |part: f32| eframe::egui::pos2(strip.left() + part * strip.width(), y);
    screen.drag(at(0.25), at(0.75));
    screen.settle();
    let frames = f64::from(RATE_HZ * SECONDS);
    let (start, end) = span(&screen);
    assert!((start as f64 / frames - 0.25).abs() < 0.01, "{start}");
    assert!((end as f64 / frames - 0.75).abs() < 0.01, "{end}");
    assert!(screen.harness.state().reading().is_some_and(|r| r.1));
    screen.key(Modifiers::COMMAND, Key::Z);
    screen.settle();
    assert_eq!(span(&screen), (0, u64::from(RATE_HZ * SECONDS)), "a drag is one step");
    screen.key(Modifiers::COMMAND | Modifiers::SHIFT, Key::Z);
    screen.settle();
    assert_eq!(span(&screen), (start, end));
}

#[test]
fn a_segment_is_marked_by_typing_and_nudged_by_keys() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.menu("Segment", "Mark the whole capture");
    screen.type_number("Start", "4");
    screen.type_number("End", "12");
    assert_eq!(span(&screen), (4 * u64::from(RATE_HZ), 12 * u64::from(RATE_HZ)));
    assert!(
        screen.harness.query_all_by(|n| n.value().is_some_and(|v| v.contains("lines every 0.1250 Hz"))).count() >= 1
    );
    screen.harness.get_by_role_and_label(Role::Slider, "Segment start").focus();
    screen.harness.step();
    screen.harness.step();
    screen.key(Modifiers::NONE, Key::ArrowRight);
    screen.key(Modifiers::SHIFT, Key::ArrowRight);
    assert_eq!(span(&screen).0, 4 * u64::from(RATE_HZ) + 11);
}

#[test]
fn a_pane_is_added_its_parameter_changed_and_the_curve_follows() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    assert_eq!(screen.session().panes.len(), 6);
    screen.click("Add a window");
    screen.choose("kaiser=8.6");
    screen.click("Take kaiser=8.6");
    screen.settle();
    let session = screen.session();
    assert_eq!((session.panes.len(), session.panes[6].window.name()), (7, "kaiser"));
    assert!(screen.shows("Spectrum 7, kaiser"));
    let beta = session.panes[6].window.entry().parameters[0].symbol;
    screen.type_number(&format!("Pane 7: {beta}"), "9.5");
    assert_eq!(screen.session().panes[6].window.parameters(), [9.5]);
    let (reading, current) = screen.harness.state().reading().expect("a reading");
    assert!(current);
    assert_eq!((reading.panes.len(), reading.panes[6].parameter.as_slice()), (7, [9.5].as_slice()));
}

#[test]
fn a_cell_is_read_with_its_ledger() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let cell = |n: &egui_kittest::Node<'_>| {
        use egui_kittest::kittest::NodeT as _;
        let label = n.accesskit_node().label().unwrap_or_default();
        label.starts_with("124.8") && label.contains("in pane 2, hann")
    };
    screen.harness.get_all_by_role(Role::Button).find(|n| cell(n)).expect("the cell").click();
    screen.harness.step();
    screen.harness.step();
    let picked = screen.session().picked_hz.expect("a pick");
    assert!((picked - 124.8).abs() < 0.01, "{picked}");
    let (reading, _) = screen.harness.state().reading().expect("a reading");
    let tone = reading.tones.iter().find(|t| (t.frequency_hz - 124.8).abs() < 0.01).expect("the tone");
    let sum: f64 = tone.readings[1].ledger.iter().map(|s| s.db).sum();
    assert!((sum - tone.readings[1].level_db).abs() < 1e-9);
    // 0.9 · 0.25 of full scale: 20 lg 0.225 = -12.96 dB re a full-scale sine.
    assert!((sum + 12.96).abs() < 0.02, "{sum}");
    assert!(screen.shows("peak at 124.8"));
    for step in &tone.readings[1].ledger {
        assert!(screen.shows(step.step), "the card lists {}", step.step);
    }
}

#[test]
fn keys_walk_the_tones_and_move_the_hairline() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::N);
    let first = screen.session().picked_hz.expect("a pick");
    screen.key(Modifiers::NONE, Key::ArrowDown);
    let second = screen.session().picked_hz.expect("a pick");
    assert!(second > first);
    screen.key(Modifiers::NONE, Key::H);
    screen.harness.get_by_label_contains("Spectrum 1, rectangular").focus();
    screen.harness.step();
    screen.harness.step();
    assert!(screen.shows("hairline at"));
    screen.key(Modifiers::NONE, Key::T);
    let (lo, hi) = screen.session().axes.frequency_hz.expect("a range");
    assert!(lo < second && second < hi && hi - lo < 40.0, "{lo} to {hi} around {second}");
    screen.key(Modifiers::NONE, Key::L);
    assert_eq!(screen.session().axes.frequency_axis, panewise::session::FrequencyAxis::Logarithmic);
    screen.key(Modifiers::NONE, Key::A);
    assert_eq!(screen.session().axes.frequency_hz, None);
}

#[test]
fn what_is_doubtful_about_the_figures_stands_above_the_table_uncut() {
    let desk = Desk::new();
    // A blow that dies away.
    super::desk::write_channels(&desk.path("tap.wav"), |t, x| [x * (-1.5 * t).exp(), 0.0]);
    let mut screen = desk.open("tap.wav");
    screen.menu("Segment", "Mark the whole capture");
    screen.settle();
    let warnings = screen.harness.state().reading().expect("a reading").0.warnings.clone();
    assert!(warnings.iter().any(|w| w.code == "transient"), "{warnings:?}");
    let head = screen.harness.get_by_label("frequency, Hz").rect();
    for warning in warnings {
        let line = screen.harness.get_by_label(&warning.text).rect();
        assert!(line.bottom() <= head.top() && line.width() > 300.0, "{line:?}");
    }
}
