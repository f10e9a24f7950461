//! Lists that drop down, by keys.

use eframe::egui::{Key, Modifiers, Role};
use egui_kittest::kittest::{NodeT as _, Queryable as _};
use panewise::units::Quantity;

use super::desk::{Desk, Screen};

fn focused(screen: &Screen<'_>, name: &str) -> bool {
    let node = screen.harness.get_by_role_and_label(Role::ComboBox, name);
    node.accesskit_node().is_focused()
}

#[test]
fn enter_chooses_closes_and_gives_the_focus_back() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.harness.get_by_role_and_label(Role::ComboBox, "Quantity").focus();
    screen.harness.step();
    screen.key(Modifiers::NONE, Key::Enter);
    assert!(screen.harness.query_by_label("acceleration").is_some());
    for key in [Key::ArrowDown, Key::ArrowDown, Key::Enter] {
        screen.key(Modifiers::NONE, key);
    }
    screen.settle();
    let chosen = screen.session().scale().quantity;
    assert_ne!(chosen, Quantity::Plain);
    assert!(screen.harness.query_by_label("none stated").is_none(), "the list is closed");
    assert!(focused(&screen, "Quantity"));
    // What Tab and Enter do next is done to the next field.
    screen.key(Modifiers::NONE, Key::Tab);
    assert!(!focused(&screen, "Quantity"));
    screen.key(Modifiers::NONE, Key::Enter);
    screen.settle();
    assert_eq!(screen.session().scale().quantity, chosen);
}

#[test]
fn an_open_list_keeps_its_keys_to_itself() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    let before = screen.session();
    let n_spectra = |s: &Screen<'_>| s.harness.query_all_by_label_contains("Spectrum ").count();
    let shown = n_spectra(&screen);
    assert!(shown > 1);
    screen.click("Quantity");
    assert!(screen.harness.query_by_label("acceleration").is_some());
    for key in [Key::ArrowDown, Key::E, Key::N, Key::Delete, Key::ArrowDown] {
        screen.key(Modifiers::NONE, key);
    }
    screen.settle();
    assert_eq!(screen.session(), before);
    assert_eq!(n_spectra(&screen), shown);
    screen.key(Modifiers::NONE, Key::Escape);
    assert!(screen.harness.query_by_label("acceleration").is_none());
    screen.harness.get_by_role_and_label(Role::Button, "Panes").click();
    screen.harness.step();
    screen.harness.step();
    screen.key(Modifiers::NONE, Key::E);
    screen.key(Modifiers::NONE, Key::Escape);
    assert_eq!(n_spectra(&screen), shown);
    // With nothing open they work.
    screen.key(Modifiers::NONE, Key::E);
    screen.harness.step();
    assert_eq!(n_spectra(&screen), 1);
}
