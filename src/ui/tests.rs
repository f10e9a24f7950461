//! What comes back from threads and dialogs, in whatever order it comes.

use std::path::{Path, PathBuf};
use std::sync::Arc;
use std::sync::atomic::{AtomicUsize, Ordering};
use std::time::Duration;

use eframe::egui::Context;

use super::desk::Desk;
use super::dialog::{After, Dialog, Reply};
use super::files::{Event, Kept, Opened, Outcome, Picked, Saved};
use super::services::{Ask, Picker, Services};
use super::workbench::{Opening, Workbench};
use crate::capture::{Capture, Stamp};
use crate::session::{Command, Loaded, Session};
use crate::signal::{SignalError, Source, Span, Stored, Watch};
use crate::tone::Steadiness;

#[derive(Debug)]
struct Nobody;

impl Picker for Nobody {
    fn pick(&self, _: &Ask, _: Option<&Path>) -> Option<PathBuf> {
        None
    }
}

fn capture(path: &str) -> Capture {
    Capture {
        path: PathBuf::from(path),
        format: "test".to_owned(),
        bits_per_sample: None,
        truncated: false,
        source: Arc::new(Stored::new(100.0, 1, vec![0.0; 400])),
        doubts: Vec::new(),
        stamp: Stamp::default(),
    }
}

fn opened(path: &str) -> Outcome {
    let capture = capture(path);
    Outcome::Opened(Box::new(Opened {
        capture,
        session: None,
        file: None,
        as_saved: true,
        remark: None,
        recovered: None,
        figures: None,
    }))
}

/// A screen whose threads have not started, with a capture on the desk.
fn bench() -> Workbench {
    let services =
        Services { picker: Arc::new(Nobody), recent: None, recovery: None, preferences: None, demonstration: None };
    let mut bench = Workbench::new(services);
    bench.desk = Some(Desk::fresh(1, Arc::new(capture("pump.wav")), |_| {}));
    bench.n_opened = 1;
    bench
}

fn opening(bench: &mut Workbench, number: u64) -> Watch {
    let watch = Watch::new();
    bench.opening = Some(Opening { number, name: "pump.wav".to_owned(), watch: watch.clone(), given_up: None });
    watch
}

fn edit(bench: &mut Workbench) {
    let pane = bench.desk.as_ref().unwrap().session.panes[0].id;
    bench.change(Command::RemovePane(pane));
    assert!(bench.is_unsaved());
}

fn take(bench: &mut Workbench, event: Event) {
    bench.take_event(&Context::default(), event);
}

fn shown(bench: &mut Workbench) -> Option<Dialog> {
    bench.dialogs.take_if(|_| true)
}

fn name(bench: &Workbench) -> String {
    bench.desk.as_ref().unwrap().name()
}

#[test]
fn only_the_newest_opening_that_was_not_called_off_counts() {
    let mut bench = bench();
    let watch = opening(&mut bench, 2);
    take(&mut bench, Event::Opening(1, opened("older.wav")));
    take(&mut bench, Event::Opening(1, Outcome::CalledOff));
    take(&mut bench, Event::Opening(1, Outcome::Refused("older".to_owned())));
    assert!(bench.opening.is_some() && bench.notices.is_empty());
    assert_eq!(name(&bench), "pump.wav");
    watch.cancel();
    take(&mut bench, Event::Opening(2, opened("called-off.wav")));
    assert!(bench.opening.is_none());
    assert_eq!(name(&bench), "pump.wav");
    opening(&mut bench, 3);
    take(&mut bench, Event::Opening(3, opened("newest.wav")));
    assert_eq!(name(&bench), "newest.wav");
}

#[test]
fn work_done_while_a_file_was_opened_is_asked_about() {
    let mut bench = bench();
    opening(&mut bench, 1);
    edit(&mut bench);
    take(&mut bench, Event::Opening(1, opened("other.wav")));
    assert_eq!(name(&bench), "pump.wav");
    assert!(bench.autosave_due.is_some(), "what is unsaved is still to be kept for recovery");
    let Some(Dialog::Unsaved(after)) = shown(&mut bench) else { panic!("no question") };
    bench.take_reply(&Context::default(), Reply::DiscardThen(after));
    assert_eq!(name(&bench), "other.wav");
    assert!(!bench.is_unsaved());
}

#[test]
fn work_that_was_given_up_is_asked_about_once() {
    let mut bench = bench();
    edit(&mut bench);
    opening(&mut bench, 1);
    bench.opening.as_mut().unwrap().given_up = bench.session().cloned();
    take(&mut bench, Event::Opening(1, opened("other.wav")));
    assert_eq!(name(&bench), "other.wav");
    // What was done after that was not given up.
    edit(&mut bench);
    opening(&mut bench, 2);
    bench.opening.as_mut().unwrap().given_up = bench.session().cloned();
    edit(&mut bench);
    take(&mut bench, Event::Opening(2, opened("third.wav")));
    assert_eq!(name(&bench), "other.wav");
    assert!(matches!(shown(&mut bench), Some(Dialog::Unsaved(After::Take(_)))));
}

fn saved(session: &Session) -> Box<Saved> {
    Box::new(Saved { path: PathBuf::from("pump.session.ron"), session: session.clone(), with_figures: true })
}

#[test]
fn what_was_done_while_saving_is_not_lost_by_quitting() {
    let mut bench = bench();
    edit(&mut bench);
    let written = saved(bench.session().unwrap());
    bench.saving.after = Some(After::Quit);
    edit(&mut bench);
    take(&mut bench, Event::Saved(1, written));
    assert!(!bench.may_close() && bench.is_unsaved());
    assert!(matches!(shown(&mut bench), Some(Dialog::Unsaved(After::Quit))));

    let written = saved(bench.session().unwrap());
    bench.saving.after = Some(After::Quit);
    take(&mut bench, Event::Saved(1, written));
    assert!(bench.may_close && !bench.is_unsaved());
}

#[test]
fn what_was_to_follow_one_desks_save_never_follows_anothers() {
    let mut bench = bench();
    bench.saving.after = Some(After::Quit);
    let written = saved(bench.session().unwrap());
    take(&mut bench, Event::Saved(7, written.clone()));
    assert!(bench.saving.after.is_none() && !bench.may_close);
    take(&mut bench, Event::Saved(1, written));
    assert!(!bench.may_close);
}

#[test]
fn a_failure_by_the_way_ends_neither_an_opening_nor_a_save() {
    let mut bench = bench();
    opening(&mut bench, 1);
    bench.saving.after = Some(After::Quit);
    bench.save_to(Path::new("pump"));
    take(&mut bench, Event::Said("the list of recent files could not be kept".to_owned()));
    assert!(bench.opening.is_some() && bench.saving.is_busy() && bench.saving.after.is_some());
    take(&mut bench, Event::NotSaved("the disk is full".to_owned()));
    assert!(bench.opening.is_some() && bench.saving.after.is_none());
}

fn picked(ask: Ask, desk: u64, path: Option<&str>, replaces: bool, took_ms: u64) -> Event {
    let took = Duration::from_millis(took_ms);
    Event::Picked(Picked { ask, desk: Some(desk), path: path.map(PathBuf::from), replaces, took })
}

#[test]
fn a_session_is_saved_only_where_it_was_to_be_and_over_nothing_unasked() {
    let mut bench = bench();
    let ask = || Ask::SaveSession("pump.session.ron".to_owned());
    take(&mut bench, picked(ask(), 7, Some("of-another.session.ron"), false, 900));
    assert!(!bench.saving.is_busy() && !bench.notices.is_empty());
    take(&mut bench, picked(ask(), 1, Some("pump"), true, 900));
    assert!(!bench.saving.is_busy());
    let Some(Dialog::Replace(1, path)) = shown(&mut bench) else { panic!("no question") };
    assert_eq!(path, Path::new("pump.session.ron"));
    bench.take_reply(&Context::default(), Reply::Replace(1, path));
    assert!(bench.saving.is_busy());
}

#[test]
fn where_the_desktop_asks_nobody_the_path_is_typed() {
    let mut bench = bench();
    let ask = || Ask::SaveSession("pump.session.ron".to_owned());
    bench.saving.after = Some(After::Quit);
    take(&mut bench, picked(ask(), 1, None, false, 2));
    let Some(Dialog::SavePath(text)) = shown(&mut bench) else { panic!("no way to save") };
    assert!(text.ends_with("pump.session.ron"), "{text}");
    assert!(bench.saving.after.is_some());
    bench.take_reply(&Context::default(), Reply::NoSave);
    assert!(bench.saving.after.is_none());
    // Somebody who thought about it and said no is not asked again.
    take(&mut bench, picked(ask(), 1, None, false, 2000));
    assert!(shown(&mut bench).is_none());
}

/// Counts how often it is read, and takes its time.
#[derive(Debug, Default)]
struct Slow {
    reads: AtomicUsize,
}

impl Source for Slow {
    fn sample_rate_hz(&self) -> f64 {
        100.0
    }
    fn n_channels(&self) -> usize {
        1
    }
    fn n_frames(&self) -> u64 {
        400
    }
    fn read_frames(&self, _: u64, out: &mut [f64]) -> Result<(), SignalError> {
        self.reads.fetch_add(1, Ordering::Relaxed);
        std::thread::sleep(Duration::from_millis(40));
        out.fill(0.5);
        Ok(())
    }
}

#[test]
fn of_the_columns_a_strip_wants_while_it_moves_only_the_newest_are_read() {
    let mut bench = bench();
    let ctx = Context::default();
    bench.logic(&ctx);
    let slow = Arc::new(Slow::default());
    let capture = Capture { source: Arc::<Slow>::clone(&slow), ..capture("pump.wav") };
    bench.desk = Some(Desk::fresh(1, Arc::new(capture), |_| {}));
    for i in 0..30 {
        bench.view.strip_cache.want((f64::from(i), 100.0));
        bench.read_columns();
    }
    let newest = (29.0, 100.0);
    for _ in 0..500 {
        bench.logic(&ctx);
        if bench.view.strip_cache.has(newest) {
            break;
        }
        std::thread::sleep(Duration::from_millis(10));
    }
    assert!(bench.view.strip_cache.has(newest), "after five seconds there are no columns");
    let reads = slow.reads.load(Ordering::Relaxed);
    assert!(reads <= 3, "{reads} of 30 were read");
}

#[test]
fn no_dialog_throws_another_away() {
    let mut bench = bench();
    let note = || Dialog::ToneNote { frequency_hz: 24.96, text: "shaft".to_owned() };
    bench.dialogs.put(note());
    take(&mut bench, picked(Ask::Locate, 1, Some("there.wav"), false, 900));
    let session = bench.session().unwrap().clone();
    let loaded = Loaded { session, figures: None, program: String::new(), saved_as: None };
    let kept = Kept { loaded, found_in: PathBuf::from("pump.session.ron"), recovered: None };
    opening(&mut bench, 1);
    take(&mut bench, Event::Opening(1, Outcome::Missing(Box::new(kept))));
    assert!(matches!(shown(&mut bench), Some(Dialog::ToneNote { .. })));
    assert!(matches!(shown(&mut bench), Some(Dialog::Missing(..))));
    bench.dialogs.put(note());
    edit(&mut bench);
    bench.want_quit(&Context::default());
    bench.want_quit(&Context::default());
    assert!(matches!(shown(&mut bench), Some(Dialog::Unsaved(After::Quit))));
    assert!(matches!(shown(&mut bench), Some(Dialog::ToneNote { .. })));
    assert!(shown(&mut bench).is_none());
}

/// A capture with one steady stretch.
fn steady(span: Span) -> Arc<Steadiness> {
    Arc::new(Steadiness { stretches: vec![span], ..Steadiness::default() })
}

#[test]
fn a_suggestion_marks_only_what_nobody_has_touched() {
    let span = Span { start: 100, samples: 200 };
    let marked = |bench: &Workbench| bench.session().unwrap().segments[0].span;
    let mut fresh = bench();
    fresh.change(Command::Pick(Some(3.0)));
    take(&mut fresh, Event::Steady((1, 0), steady(span)));
    assert_eq!(marked(&fresh), span);

    let mut edited = bench();
    let whole = marked(&edited);
    edit(&mut edited);
    take(&mut edited, Event::Steady((1, 0), steady(span)));
    assert_eq!(marked(&edited), whole, "undoing the change would take the span back too");

    let mut loaded = bench();
    let session = loaded.session().unwrap().clone();
    loaded.desk = Some(Desk::with_session(1, Arc::new(capture("pump.wav")), session, None));
    take(&mut loaded, Event::Steady((1, 0), steady(span)));
    assert_eq!(marked(&loaded), whole, "a recovered session is as it was left");
}
