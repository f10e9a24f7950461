//! Commands, undo and the checks of the document.

use super::*;
use crate::signal::Span;
use crate::tone::Kind;
use crate::units::{Factor, Scale};
use crate::window::Window;

/// A session about an invented capture of two channels and 1000 frames.
pub(super) fn pump() -> Session {
    Session::new(CaptureRef {
        path: "pump.wav".to_owned(),
        blake3: "ab".repeat(32),
        sample_rate_hz: 1000.0,
        channels: 2,
        frames: 1000,
        format: "WAV, 24-bit integer".to_owned(),
    })
}

fn window(text: &str) -> Window {
    Window::parse(text).unwrap()
}

const FIRST: SegmentId = SegmentId(1);

fn span(start: u64, samples: u64) -> Span {
    Span { start, samples }
}

#[test]
fn a_new_session_is_valid() {
    assert_eq!(pump().check(), Ok(()));
}

#[test]
fn spans_are_brought_into_the_capture() {
    let mut session = pump();
    for (given, expected) in [
        (span(100, 200), span(100, 200)),
        (span(900, 200), span(900, 100)),
        (span(5000, 1), span(999, 1)),
        (span(10, 0), span(10, 1)),
        (span(u64::MAX, u64::MAX), span(999, 1)),
    ] {
        Command::MoveSegment(FIRST, given).apply(&mut session);
        assert_eq!(session.segments[0].span, expected, "{given:?}");
        assert_eq!(session.check(), Ok(()));
    }
    assert!(!Command::MoveSegment(SegmentId(9), span(0, 5)).apply(&mut session));
}

#[test]
fn a_capture_without_frames_has_an_empty_segment() {
    let mut session = Session::new(CaptureRef { frames: 0, ..pump().capture });
    assert_eq!(session.check(), Ok(()));
    Command::AddSegment(span(0, 5)).apply(&mut session);
    assert_eq!(session.check(), Ok(()));
}

#[test]
fn the_last_segment_stays_and_ids_are_not_given_again() {
    let mut session = pump();
    assert!(!Command::RemoveSegment(FIRST).apply(&mut session));
    assert!(Command::AddSegment(span(0, 10)).apply(&mut session));
    assert_eq!(session.current, SegmentId(2));
    assert!(Command::RemoveSegment(SegmentId(2)).apply(&mut session));
    assert_eq!(session.current, FIRST);
    assert!(Command::AddSegment(span(0, 10)).apply(&mut session));
    assert_eq!(session.current, SegmentId(3));
    assert_eq!(session.current_segment().unwrap().name, "segment 3");
}

#[test]
fn panes_number_one_to_eight_and_keep_their_ids() {
    let mut session = pump();
    while session.panes.len() < MAX_PANES {
        assert!(Command::AddPane(window("hann")).apply(&mut session));
    }
    assert!(!Command::AddPane(window("hann")).apply(&mut session));
    let first = session.panes[0].id;
    assert!(Command::MovePane(first, 99).apply(&mut session));
    assert_eq!(session.panes.last().unwrap().id, first);
    assert!(!Command::MovePane(PaneId(77), 0).apply(&mut session));
    for id in session.panes.iter().map(|p| p.id).collect::<Vec<_>>() {
        Command::RemovePane(id).apply(&mut session);
    }
    assert_eq!(session.panes.len(), 1);
    let last = session.last_pane_id;
    Command::AddPane(window("hann")).apply(&mut session);
    assert_eq!(session.panes[1].id, PaneId(last + 1));
    assert_eq!(session.check(), Ok(()));
}

#[test]
fn numbers_that_cannot_be_change_nothing() {
    let mut session = pump();
    let before = session.clone();
    let nan = f64::NAN;
    let bad_scale = Scale { factor: Factor::UnitsPerFullScale(nan), ..Scale::default() };
    for command in [
        Command::ChooseChannel(2),
        Command::SetScale(0, bad_scale),
        Command::SetScale(5, Scale::default()),
        Command::SetRate(Some(nan)),
        Command::SetRate(Some(0.0)),
        Command::SetRate(Some(1e300)),
        Command::Pick(Some(nan)),
        Command::AddHandTone(HandTone::at(nan, false)),
        Command::AddHandTone(HandTone::at(500.0, false)),
        Command::RemoveHandTone(0),
        Command::SetNote(Note { frequency_hz: Some(f64::INFINITY), text: "x".to_owned() }),
        Command::SetNote(Note { frequency_hz: None, text: "  ".to_owned() }),
        Command::SetTuning(Tuning { false_alarm: nan, max_tones: 5 }),
        Command::SetTuning(Tuning { false_alarm: 1.0, max_tones: 5 }),
        Command::SetAxes(ViewAxes { level_db: Some((0.0, -10.0)), ..ViewAxes::default() }),
        Command::RenameSegment(FIRST, "  ".to_owned()),
    ] {
        let name = command.name();
        assert!(!command.apply(&mut session), "{name}");
        assert_eq!(session, before, "{name}");
    }
}

#[test]
fn a_note_is_written_replaced_and_taken_away() {
    let mut session = pump();
    let note = |text: &str| Command::SetNote(Note { frequency_hz: Some(24.96), text: text.to_owned() });
    assert!(note("shaft").apply(&mut session));
    assert!(note("shaft speed").apply(&mut session));
    assert_eq!(session.notes.len(), 1);
    assert!(note(" ").apply(&mut session));
    assert!(session.notes.is_empty());
}

#[test]
fn a_drag_is_one_step_and_undo_leaves_the_view_alone() {
    let (mut session, mut history) = (pump(), History::new());
    let before = session.clone();
    for start in 1..50 {
        history.apply(&mut session, Command::MoveSegment(FIRST, span(start, 100)));
    }
    let dragged = session.clone();
    history.close_step();
    history.apply(&mut session, Command::MoveSegment(FIRST, span(300, 100)));
    history.apply(&mut session, Command::Pick(Some(24.96)));
    assert_eq!(history.undo_name(), Some("move segment"));
    assert!(history.undo(&mut session));
    assert_eq!(session.segments, dragged.segments);
    assert!(history.undo(&mut session));
    assert_eq!(session.segments, before.segments);
    assert_eq!(session.picked_hz, Some(24.96));
    assert!(!history.undo(&mut session));
    assert!(history.redo(&mut session) && history.redo(&mut session) && !history.redo(&mut session));
    assert_eq!(session.segments[0].span, span(300, 100));
}

#[test]
fn another_window_is_another_step_and_what_changes_nothing_is_none() {
    let (mut session, mut history) = (pump(), History::new());
    let pane = session.panes[0].id;
    history.apply(&mut session, Command::SetWindow(pane, window("hann")));
    history.apply(&mut session, Command::SetWindow(pane, window("hann")));
    history.apply(&mut session, Command::SetWindow(pane, window("rectangular")));
    assert!(history.undo(&mut session));
    assert_eq!(session.panes[0].window, window("hann"));
    assert_eq!(history.redo_name(), Some("change window"));
    history.apply(&mut session, Command::RemovePane(pane));
    assert_eq!(history.redo_name(), None);
    assert!(history.undo(&mut session) && history.undo(&mut session) && !history.undo(&mut session));
    assert_eq!(session, pump());
}

#[test]
fn the_check_names_what_cannot_be() {
    let broken = |how: fn(&mut Session)| {
        let mut session = pump();
        how(&mut session);
        session.check().unwrap_err().to_string()
    };
    assert_eq!(broken(|s| s.panes.clear()), "it has 0 panes where 1 to 8 can be");
    assert_eq!(broken(|s| s.channel = 2), "it reads channel 3 of a capture that has 2");
    assert_eq!(broken(|s| s.current = SegmentId(4)), "the segment to read (id 4) is not among its segments");
    assert_eq!(broken(|s| s.last_pane_id = 0), "pane id 1 stands twice or was never given");
    assert_eq!(broken(|s| s.rate_hz = Some(f64::NAN)), "the sample rate is NaN, which cannot be");
    assert!(broken(|s| s.segments[0].span = span(u64::MAX, u64::MAX)).starts_with("segment 'segment 1' takes"));
    assert!(broken(|s| s.segments.push(s.segments[0].clone())).starts_with("segment id 1 stands twice"));
    assert!(broken(|s| s.scales.clear()).starts_with("it has 0 scales"));
    assert!(broken(|s| s.axes.level_db = Some((f64::NAN, 0.0))).starts_with("a limit of the axes"));
}

#[test]
fn a_saved_session_comes_back_and_its_capture_is_told_from_its_folder() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = pump();
    session.capture.path = folder.path().join("pump.wav").to_string_lossy().into_owned();
    let path = folder.path().join("pump.session.ron");
    save(&path, &session, None).unwrap();
    let loaded = load(&path).unwrap();
    assert_eq!(loaded.session, session);
    let text = std::fs::read_to_string(&path).unwrap();
    assert!(text.starts_with("Session(\n  format: 2,\n  program: "), "{text}");
    assert!(text.contains("path: \"pump.wav\""), "{text}");
}

#[test]
fn a_session_is_never_saved_over_a_capture() {
    let folder = tempfile::tempdir().unwrap();
    let mut session = pump();
    let wav = folder.path().join("pump.wav");
    std::fs::write(&wav, "samples").unwrap();
    session.capture.path = wav.to_string_lossy().into_owned();
    assert!(matches!(save(&wav, &session, None), Err(SessionError::Name { .. })));
    assert_eq!(with_extension(&wav), folder.path().join("pump.wav.session.ron"));
    assert_eq!(with_extension(std::path::Path::new("a.ron")), std::path::Path::new("a.session.ron"));
}

#[test]
fn more_than_can_be_loaded_is_not_saved() {
    let folder = tempfile::tempdir().unwrap();
    let path = folder.path().join("pump.session.ron");
    let mut session = pump();
    save(&path, &session, None).unwrap();
    let before = std::fs::read(&path).unwrap();
    session.notes.push(Note { frequency_hz: None, text: "x".repeat(17 << 20) });
    assert!(matches!(save(&path, &session, None), Err(SessionError::TooMuch { .. })));
    assert_eq!(std::fs::read(&path).unwrap(), before);
    assert!(load(&path).is_ok());
}

#[cfg(unix)]
#[test]
fn a_capture_whose_path_is_no_text_is_refused_by_name() {
    use std::os::unix::ffi::OsStrExt;
    let folder = tempfile::tempdir().unwrap();
    let wav = folder.path().join(std::ffi::OsStr::from_bytes(b"pump-\xff.wav"));
    std::fs::write(&wav, "samples").unwrap();
    let mut session = pump();
    session.capture.path = wav.to_string_lossy().into_owned();
    let path = folder.path().join("pump.session.ron");
    let error = save(&path, &session, None).unwrap_err();
    assert!(matches!(error, SessionError::CaptureName { .. }), "{error}");
    assert!(!path.exists());
    // The character that stands for what is no text may also be meant.
    let wav = folder.path().join("pump-\u{fffd}.wav");
    std::fs::write(&wav, "samples").unwrap();
    session.capture.path = wav.to_string_lossy().into_owned();
    save(&path, &session, None).unwrap();
}

#[cfg(unix)]
#[test]
fn a_session_opened_through_a_link_finds_its_capture_beside_the_file_itself() {
    let folder = tempfile::tempdir().unwrap();
    let there = folder.path().join("archive");
    std::fs::create_dir(&there).unwrap();
    let wav = there.join("pump.wav");
    std::fs::write(&wav, "samples").unwrap();
    let mut session = pump();
    session.capture.path = wav.to_string_lossy().into_owned();
    let path = there.join("pump.session.ron");
    save(&path, &session, None).unwrap();
    let link = folder.path().join("newest.session.ron");
    std::os::unix::fs::symlink(&path, &link).unwrap();
    let loaded = load(&link).unwrap().session;
    let found = find_capture(&loaded.capture, &link).unwrap();
    assert_eq!(std::fs::canonicalize(&found.path).unwrap(), std::fs::canonicalize(&wav).unwrap());
    assert!(!found.moved);
}

#[test]
fn a_pane_shows_the_residue_by_a_step_of_its_own_and_older_sessions_show_the_segment() {
    let mut session = pump();
    let mut history = History::new();
    let pane = session.panes[1].id;
    assert!(history.apply(&mut session, Command::ShowResidue(pane, true)));
    assert_eq!(history.undo_name(), Some("show residue"));
    assert!(!history.apply(&mut session, Command::ShowResidue(pane, true)));
    assert!(!history.apply(&mut session, Command::ShowResidue(PaneId(999), true)));
    let text = ron::to_string(&session).unwrap();
    assert_eq!(ron::from_str::<Session>(&text).unwrap(), session);
    assert_eq!(text.matches("residue").count(), 1);
    assert!(history.undo(&mut session) && !session.panes[1].residue);
    assert!(!ron::to_string(&session).unwrap().contains("residue"));
}

fn refusal(frequency_hz: f64) -> Refusal {
    Refusal { frequency_hz, by: "N.N.".to_owned(), reason: "the recorder's own".to_owned() }
}

fn overrule(frequency_hz: f64, verdict: Verdict) -> Overrule {
    let (by, reason) = ("N.N.".to_owned(), "seen on the spot".to_owned());
    Overrule { frequency_hz, channel: 0, segment: FIRST, verdict, by, reason }
}

#[test]
fn decisions_are_steps_with_names_and_are_taken_back() {
    let mut session = pump();
    let mut history = History::new();
    for (command, name) in [
        (Command::RefuseTone(refusal(50.0)), "refuse tone"),
        (Command::Overrule(overrule(120.0, Verdict::Disputed)), "overrule verdict"),
        (Command::PinFundamental(Some(24.96)), "pin fundamental"),
        (Command::HoldTone(HandTone::at(99.84, true)), "hold frequency"),
    ] {
        assert!(history.apply(&mut session, command.clone()), "{name}");
        assert_eq!(history.undo_name(), Some(name));
        assert!(!history.apply(&mut session, command), "{name} twice");
    }
    assert_eq!(session.check(), Ok(()));
    for (command, name) in [
        (Command::ChangeHandTone(0, HandTone::at(99.85, true)), "change named tone"),
        (Command::ChangeHandTone(0, HandTone::at(99.84, true)), "change named tone"),
        (Command::TakeBackRefusal(0), "take back refusal"),
        (Command::TakeBackOverrule(0), "take back overruling"),
        (Command::PinFundamental(None), "unpin fundamental"),
        (Command::HoldTone(HandTone::at(99.84, false)), "let frequency be fitted"),
    ] {
        assert!(history.apply(&mut session, command), "{name}");
        assert_eq!(history.undo_name(), Some(name));
    }
    assert!(session.refused.is_empty() && session.overruled.is_empty() && session.fundamental_hz.is_none());
    // The two changes of one field are one step.
    for _ in 0..9 {
        assert!(history.undo(&mut session));
    }
    assert_eq!(session, pump());
}

#[test]
fn decisions_that_cannot_be_change_nothing() {
    let mut session = pump();
    for command in [
        Command::RefuseTone(refusal(f64::NAN)),
        Command::RefuseTone(refusal(500.0)),
        Command::Overrule(overrule(0.0, Verdict::Holds)),
        Command::Overrule(Overrule { channel: 2, ..overrule(50.0, Verdict::Holds) }),
        Command::Overrule(Overrule { segment: SegmentId(7), ..overrule(50.0, Verdict::Holds) }),
        Command::PinFundamental(Some(f64::INFINITY)),
        Command::PinFundamental(Some(-1.0)),
        Command::TakeBackRefusal(0),
        Command::ChangeHandTone(0, HandTone::at(50.0, false)),
        Command::TakeBackOverrule(3),
    ] {
        assert!(!command.clone().apply(&mut session), "{command:?}");
    }
    assert_eq!(session, pump());
}

#[test]
fn of_naming_and_refusing_one_place_the_last_counts() {
    // Lines stand 1 Hz apart.
    let mut session = pump();
    assert!(Command::AddHandTone(HandTone::at(50.0, false)).apply(&mut session));
    assert!(Command::AddHandTone(HandTone::at(60.0, false)).apply(&mut session));
    assert!(Command::RefuseTone(refusal(50.7)).apply(&mut session));
    assert_eq!(session.hand_tones, [HandTone::at(60.0, false)]);
    assert!(Command::AddHandTone(HandTone::at(50.0, true)).apply(&mut session));
    assert_eq!((session.hand_tones.len(), session.refused.len()), (2, 0));
}

#[test]
fn a_verdict_is_overruled_once_a_tone_in_its_own_channel_and_segment() {
    let mut session = pump();
    assert!(Command::Overrule(overrule(50.0, Verdict::Holds)).apply(&mut session));
    assert!(Command::Overrule(overrule(50.7, Verdict::Skirt)).apply(&mut session));
    assert_eq!(session.overruled, [overrule(50.7, Verdict::Skirt)]);
    assert!(Command::Overrule(Overrule { channel: 1, ..overrule(50.7, Verdict::Faint) }).apply(&mut session));
    assert!(Command::AddSegment(span(0, 500)).apply(&mut session));
    let second = session.current;
    assert!(Command::Overrule(Overrule { segment: second, ..overrule(50.7, Verdict::Faint) }).apply(&mut session));
    assert_eq!(session.overruled_here().map(|(i, o)| (i, o.verdict)).collect::<Vec<_>>(), [(2, Verdict::Faint)]);
    Command::ChooseSegment(FIRST).apply(&mut session);
    assert_eq!(session.overruled_here().map(|(i, o)| (i, o.verdict)).collect::<Vec<_>>(), [(0, Verdict::Skirt)]);
    assert!(Command::RemoveSegment(second).apply(&mut session));
    assert_eq!(session.overruled.len(), 2, "what was said of a segment goes with it");
}

#[test]
fn names_and_reasons_are_kept_on_one_line_and_not_endlessly() {
    let mut session = pump();
    let reason = format!(" one\ntwo{}", "x".repeat(10_000));
    assert!(Command::RefuseTone(Refusal { reason, ..refusal(50.0) }).apply(&mut session));
    assert!(session.refused[0].reason.starts_with("one two") && session.refused[0].reason.len() == 500);
}

#[test]
fn what_a_segment_holds_is_said_by_a_step_for_the_current_segment_and_older_sessions_say_nothing() {
    let mut session = pump();
    let mut history = History::new();
    let first = session.current;
    assert!(history.apply(&mut session, Command::SetKind(Some(Kind::Transient))));
    assert_eq!(history.undo_name(), Some("say what the segment holds"));
    assert!(!history.apply(&mut session, Command::SetKind(Some(Kind::Transient))));
    assert!(Command::AddSegment(span(0, 100)).apply(&mut session));
    assert_eq!(session.current_segment().unwrap().kind, None);
    let text = ron::to_string(&session).unwrap();
    assert_eq!(text.matches("kind:Some(transient)").count(), 1, "{text}");
    assert_eq!(ron::from_str::<Session>(&text).unwrap(), session);
    assert!(Command::ChooseSegment(first).apply(&mut session));
    assert!(Command::SetKind(None).apply(&mut session));
    assert!(!ron::to_string(&session).unwrap().contains("kind"));
}
