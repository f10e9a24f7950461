//! Save, reopen, close, recover.

use std::path::PathBuf;

use eframe::egui::{Key, Modifiers};
use egui_kittest::kittest::Queryable as _;
use panewise::ui::Ask;

use super::desk::{Desk, write_capture};

#[test]
fn a_session_saved_and_reopened_gives_the_same_figures() {
    let desk = Desk::new();
    let file = desk.path("pump.session.ron");
    let mut screen = desk.open("pump.wav");
    screen.type_number("Start", "2");
    screen.menu("Panes", "Remove this pane");
    screen.settle();
    let (before, current) = screen.harness.state().reading().map(|(r, c)| (r.clone(), c)).expect("a reading");
    assert!(current && screen.harness.state().is_unsaved());
    desk.picker.paths.lock().unwrap().push_back(file.clone());
    screen.key(Modifiers::COMMAND, Key::S);
    screen.wait("it is not saved", |b| !b.is_unsaved());
    assert!(file.is_file());
    assert!(screen.shows("Saved in"));
    assert_eq!(desk.picker.asked.lock().unwrap().as_slice(), [Ask::SaveSession("pump.session.ron".to_owned())]);
    let session = screen.session();
    drop(screen);

    let screen = desk.open("pump.session.ron");
    let (after, current) = screen.harness.state().reading().expect("a reading");
    assert!(current);
    assert_eq!(after.tones, before.tones, "to the last digit");
    assert_eq!((screen.session().segments, screen.session().panes), (session.segments, session.panes));
    assert!(!screen.harness.state().is_unsaved());
}

#[test]
fn a_moved_capture_is_asked_for_and_a_changed_one_is_said_to_be_changed() {
    let desk = Desk::new();
    let file = desk.path("pump.session.ron");
    let mut screen = desk.open("pump.wav");
    desk.picker.paths.lock().unwrap().push_back(file.clone());
    screen.key(Modifiers::COMMAND, Key::S);
    screen.wait("it is not saved", |_| file.is_file());
    screen.settle();
    drop(screen);
    std::fs::create_dir(desk.path("elsewhere")).unwrap();
    std::fs::rename(desk.path("pump.wav"), desk.path("elsewhere/pump.wav")).unwrap();

    let mut screen = desk.bare();
    screen.harness.state_mut().open(&file);
    screen.settle();
    assert!(screen.shows("Path of the capture"));
    screen.harness.get_by_label("Path of the capture").click();
    screen.harness.step();
    let there = desk.path("elsewhere/pump.wav");
    screen.harness.get_by_label("Path of the capture").type_text(&there.to_string_lossy());
    screen.harness.step();
    screen.click("Use this path");
    screen.settle();
    assert!(screen.shows("has moved and is the same"));
    drop(screen);

    write_capture(&desk.path("pump.wav"), 0.5);
    let mut screen = desk.bare();
    screen.harness.state_mut().open(&file);
    screen.settle();
    assert!(screen.harness.state().session().is_none(), "a changed capture is not used silently");
    assert!(screen.harness.query_by_label("Compute anew").is_some());
    screen.click("Compute anew");
    screen.settle();
    assert!(screen.harness.state().is_unsaved());
}

#[test]
fn unsaved_changes_are_asked_about_before_another_capture() {
    let desk = Desk::new();
    write_capture(&desk.path("other.wav"), 0.5);
    let mut screen = desk.open("pump.wav");
    screen.type_number("Start", "3");
    let path = desk.path("other.wav");
    screen.harness.state_mut().open(&path);
    screen.harness.step();
    screen.harness.step();
    screen.click("Cancel");
    assert!(screen.session().capture.path.ends_with("pump.wav"));
    screen.harness.state_mut().open(&path);
    screen.harness.step();
    screen.harness.step();
    screen.click("Discard");
    screen.settle();
    assert!(screen.session().capture.path.ends_with("other.wav"));
}

/// The recovery files there are.
fn left(desk: &Desk) -> Vec<PathBuf> {
    let entries = std::fs::read_dir(desk.path("recovery")).into_iter().flatten().flatten().map(|e| e.path());
    entries.filter(|p| p.to_string_lossy().ends_with(".recovery.ron")).collect()
}

/// A thread of the program that is gone may hold its slot for a moment yet.
fn wait_until_given_up(desk: &Desk) {
    for _ in 0..1000 {
        if !panewise::session::find_recoveries(&desk.path("recovery")).is_empty() {
            return;
        }
        std::thread::sleep(std::time::Duration::from_millis(10));
    }
    panic!("after ten seconds the slot is not given up");
}

#[test]
fn work_lost_in_a_crash_is_offered_again() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.type_number("Start", "5");
    let start = screen.session().segments[0].span.start;
    screen.wait("nothing is kept", |_| left(&desk).len() == 1);
    // The program is gone without a regular end.
    drop(screen);
    wait_until_given_up(&desk);
    let mut screen = desk.bare();
    screen.wait_for("An earlier run ended without saving");
    screen.harness.get_by_label_contains("Recover pump.wav").click();
    screen.harness.step();
    screen.settle();
    assert_eq!(screen.session().segments[0].span.start, start);
    assert!(screen.harness.state().is_unsaved());
}

#[test]
fn work_left_in_a_crash_is_taken_up_with_a_moved_capture_and_saved_where_the_user_kept_it() {
    let desk = Desk::new();
    let file = desk.path("pump.session.ron");
    let mut screen = desk.open("pump.wav");
    desk.picker.paths.lock().unwrap().push_back(file.clone());
    screen.key(Modifiers::COMMAND, Key::S);
    screen.wait("it is not saved", |_| file.is_file());
    screen.settle();
    screen.type_number("Start", "5");
    let start = screen.session().segments[0].span.start;
    let left = || left(&desk);
    screen.wait("nothing is kept", |_| left().len() == 1);
    let old = left();
    drop(screen);
    wait_until_given_up(&desk);
    std::fs::create_dir(desk.path("elsewhere")).unwrap();
    std::fs::rename(desk.path("pump.wav"), desk.path("elsewhere/pump.wav")).unwrap();

    let mut screen = desk.bare();
    screen.wait_for("An earlier run ended without saving");
    screen.harness.get_by_label_contains("Recover pump.wav").click();
    screen.harness.step();
    screen.wait_for("Path of the capture");
    assert_eq!(left(), old, "it is there until it is safe elsewhere");
    screen.harness.get_by_label("Path of the capture").click();
    screen.harness.step();
    let there = desk.path("elsewhere/pump.wav");
    screen.harness.get_by_label("Path of the capture").type_text(&there.to_string_lossy());
    screen.harness.step();
    screen.click("Use this path");
    screen.settle();
    assert_eq!(screen.session().segments[0].span.start, start);
    screen.wait("the old recovery file is still there", |_| !old[0].exists());
    assert_eq!(left().len(), 1, "it is kept by this run");
    screen.key(Modifiers::COMMAND, Key::S);
    screen.wait("it is not saved", |b| !b.is_unsaved());
    assert_eq!(panewise::session::load(&file).unwrap().session.segments[0].span.start, start);
    screen.wait("what is saved is still kept for recovery", |_| left().is_empty());
}

#[test]
fn a_session_saved_right_after_a_change_takes_its_figures_along() {
    let desk = Desk::new();
    let file = desk.path("pump.session.ron");
    let mut screen = desk.open("pump.wav");
    desk.picker.paths.lock().unwrap().push_back(file.clone());
    screen.key(Modifiers::COMMAND, Key::S);
    screen.wait("it is not saved", |_| file.is_file());
    screen.settle();
    screen.harness.key_press(Key::Delete);
    screen.harness.key_press_modifiers(Modifiers::COMMAND, Key::S);
    screen.wait("it is not changed", |b| b.session().is_some_and(|s| s.panes.len() == 5));
    screen.wait("it is not saved", |b| !b.is_unsaved());
    let figures = panewise::session::load(&file).unwrap().figures.expect("figures");
    assert_eq!(figures.windows.len(), 5);
}

#[test]
fn where_there_are_no_desktop_dialogs_a_session_is_saved_by_path() {
    let desk = Desk::new();
    let mut screen = desk.open("pump.wav");
    screen.key(Modifiers::COMMAND, Key::S);
    screen.wait_for("Save by path");
    screen.click("Save");
    screen.settle();
    screen.wait("it is not saved", |_| desk.path("pump.session.ron").is_file());
    // Another file is not replaced unasked.
    std::fs::write(desk.path("other.session.ron"), "precious").unwrap();
    screen.menu("Capture", "Save session by path");
    screen.harness.get_by_label("Path").click();
    screen.key(Modifiers::COMMAND, Key::A);
    screen.harness.get_by_label("Path").type_text(&desk.path("other").to_string_lossy());
    screen.harness.step();
    screen.click("Save");
    screen.wait_for("There is a session of that name");
    assert_eq!(std::fs::read_to_string(desk.path("other.session.ron")).unwrap(), "precious");
    screen.click("Replace");
    screen.wait("it is not saved", |_| panewise::session::load(&desk.path("other.session.ron")).is_ok());
}

#[test]
fn a_session_whose_figures_moved_says_so_when_it_is_opened() {
    let desk = Desk::new();
    let file = desk.path("pump.session.ron");
    let mut screen = desk.open("pump.wav");
    desk.picker.paths.lock().unwrap().push_back(file.clone());
    screen.key(Modifiers::COMMAND, Key::S);
    screen.wait("it is not saved", |_| file.is_file());
    drop(screen);
    let loaded = panewise::session::load(&file).unwrap();
    let mut figures = loaded.figures.expect("figures");
    let n = figures.tones.len();
    let screen = desk.open("pump.session.ron");
    assert!(screen.shows(&format!("Every figure saved with this session stands ({n} tones).")));
    drop(screen);
    figures.tones[0].level_db += 1.0;
    panewise::session::save(&file, &loaded.session, Some(&figures)).unwrap();
    let screen = desk.open("pump.session.ron");
    assert!(screen.shows("1 figure moved since this session was saved"));
    assert!(!screen.shows("Every figure saved"));
    drop(screen);
    panewise::session::save(&file, &loaded.session, None).unwrap();
    let screen = desk.open("pump.session.ron");
    assert!(!screen.shows("moved since") && !screen.shows("Every figure saved"));
}
