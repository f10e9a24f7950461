//! A window is chosen in place: by pointer, by keys, with its parameters.

use eframe::egui::{Key, Modifiers, Role};
use egui_kittest::kittest::Queryable as _;
use panewise::window::{Window, catalogue};

use super::desk::{Desk, Screen};

fn window(screen: &Screen<'_>, pane: usize) -> String {
    screen.session().panes[pane].window.to_string()
}

fn row(screen: &Screen<'_>, start: &str) -> Option<String> {
    use egui_kittest::kittest::NodeT as _;
    let rows = screen.harness.query_all_by_role(Role::Button);
    rows.filter_map(|n| n.accesskit_node().label()).find(|label| label.starts_with(start))
}

#[test]
fn arrows_move_enter_takes_and_esc_leaves() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::W);
    assert!(screen.shows("Windows to choose from"));
    let entry = |i: usize| catalogue()[i].name;
    screen.key(Modifiers::NONE, Key::ArrowDown);
    screen.key(Modifiers::NONE, Key::ArrowDown);
    // Nothing is picked: the strongest tone it is, 50 Hz.
    assert!(screen.shows(&format!("kernel of {} at 50.00 Hz drawn over it", entry(2))));
    screen.key(Modifiers::NONE, Key::Escape);
    assert!(!screen.shows("Windows to choose from") && !screen.shows("kernel of"));
    assert_eq!(window(&screen, 0), "rectangular");

    screen.key(Modifiers::NONE, Key::W);
    screen.key(Modifiers::NONE, Key::ArrowDown);
    screen.key(Modifiers::NONE, Key::ArrowDown);
    screen.key(Modifiers::NONE, Key::ArrowUp);
    screen.key(Modifiers::NONE, Key::Enter);
    screen.settle();
    assert_eq!(window(&screen, 0), entry(1));
    assert!(screen.shows(&format!("Spectrum 1, {}", entry(1))));
    screen.key(Modifiers::COMMAND, Key::Z);
    screen.settle();
    assert_eq!(window(&screen, 0), "rectangular", "one step takes it back");
}

#[test]
fn the_whole_catalogue_is_listed_with_its_figures_in_hertz() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.menu("Segment", "Mark the whole capture");
    screen.settle();
    screen.key(Modifiers::NONE, Key::W);
    for entry in catalogue() {
        let name = Window::parse(entry.name).unwrap().to_string();
        assert!(row(&screen, &format!("{name}: ENBW")).is_some(), "{name}");
    }
    for _ in 0..3000 {
        screen.harness.step();
        if !row(&screen, "exponential").expect("a row").contains('…') {
            break;
        }
        std::thread::sleep(std::time::Duration::from_millis(10));
    }
    // 16 s: lines 1/16 Hz apart. Harris 1978, table I: 1.50 bins, -32 dB, 1.42 dB; nulls two bins to either side.
    let hann = row(&screen, "hann: ENBW").expect("a row");
    let said = "ENBW 0.0938 Hz, highest side lobe −31.5 dB, scalloping loss 1.424 dB, main lobe 0.250 Hz, in pane 2";
    assert_eq!(hann, format!("hann: {said}"));
    assert!(!row(&screen, "bohman").expect("a row").contains("in pane"));
}

#[test]
fn the_kernel_stands_on_the_tone_picked() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::N);
    screen.key(Modifiers::NONE, Key::ArrowDown);
    let picked = screen.session().picked_hz.expect("a pick");
    assert!((picked - 124.8).abs() < 0.01, "{picked}");
    screen.harness.get_by_label_contains("Pane 3: hamming").click();
    screen.harness.step();
    screen.harness.step();
    screen.harness.get_by_label_contains("Choose this pane's window").click();
    screen.harness.step();
    screen.harness.step();
    assert!(screen.shows("Window for pane 3"));
    screen.choose("nuttall-4c");
    let shown = screen.harness.get_by_label_contains("kernel of nuttall-4c at 124.80 Hz");
    assert!(shown.rect().is_positive());
    assert!(screen.harness.query_by_label_contains("Spectrum 3, hamming").is_some());
    screen.click("Take nuttall-4c");
    screen.settle();
    assert_eq!(window(&screen, 2), "nuttall-4c");
}

#[test]
fn parameters_have_names_and_are_chosen_with_the_window() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::W);
    screen.choose("taylor=4,30");
    let symbols: Vec<_> = Window::parse("taylor").unwrap().entry().parameters.iter().map(|p| p.symbol).collect();
    assert_eq!(symbols.len(), 2);
    screen.type_number(&format!("Chosen window: {}", symbols[0]), "6");
    screen.type_number(&format!("Chosen window: {}", symbols[1]), "45");
    assert!(screen.shows("kernel of taylor=6,45"));
    assert_eq!(window(&screen, 0), "rectangular", "nothing is taken yet");
    screen.click("Take taylor=6,45");
    screen.settle();
    assert_eq!(window(&screen, 0), "taylor=6,45");
    // In the pane's head, too.
    screen.type_number(&format!("Pane 1: {}", symbols[1]), "50");
    assert_eq!(window(&screen, 0), "taylor=6,50");
}

#[test]
fn a_cosine_sum_is_typed_as_a_list() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::Insert);
    assert!(screen.shows("Window for a new pane"));
    screen.choose("cosine-sum=0.5,0.5");
    screen.type_text("Chosen window: coefficients", "0.54, 0.46");
    screen.click("Take cosine-sum=0.54,0.46");
    screen.settle();
    assert_eq!(window(&screen, 6), "cosine-sum=0.54,0.46");
    screen.type_text("Pane 7: coefficients", "0.42, 0.5, nonsense");
    assert_eq!(window(&screen, 6), "cosine-sum=0.54,0.46", "a list that cannot be is not taken");
    screen.type_text("Pane 7: coefficients", "0.42, 0.5, 0.08");
    assert_eq!(window(&screen, 6), "cosine-sum=0.42,0.5,0.08");
}

#[test]
fn the_kernel_is_drawn_while_a_parameter_is_at_hand() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::NONE, Key::W);
    screen.choose("kaiser=8.6");
    screen.click("Take kaiser=8.6");
    screen.settle();
    assert!(!screen.shows("kernel of"));
    let field = screen.harness.get_by_role_and_label(Role::SpinButton, "Pane 1: β").rect().center();
    screen.harness.hover_at(field);
    screen.harness.step();
    screen.harness.drag_at(field);
    screen.harness.step();
    screen.harness.hover_at(field + eframe::egui::vec2(60.0, 0.0));
    screen.harness.step();
    screen.harness.step();
    assert!(screen.shows("kernel of kaiser="), "while it is dragged");
    screen.harness.drop_at(field + eframe::egui::vec2(60.0, 0.0));
    screen.settle();
    assert!(!screen.shows("kernel of"));
    assert_ne!(window(&screen, 0), "kaiser=8.6");
}
