//! The session's file: it comes back exactly, and what is damaged, newer or foreign is refused and left alone.

use std::fs;
use std::path::Path;

use panewise::session::{
    CaptureRef, Command, FORMAT, Figures, FrequencyAxis, HandTone, Note, Overrule, PaneFigures, PaneId, Refusal,
    SegmentId, Session, SessionError, ToneFigures, Tuning, Verdict, ViewAxes, load, save,
};
use panewise::signal::{Removal, Span};
use panewise::tone::Kind;
use panewise::units::{Detector, Factor, Quantity, Scale};
use panewise::window::Window;

use crate::shop::Shop;

/// A document in which every part says something.
fn document() -> Session {
    let mut session = Session::new(CaptureRef {
        path: "pump.wav".to_owned(),
        blake3: "c0".repeat(32),
        sample_rate_hz: 8192.0 / 3.0,
        channels: 2,
        frames: 327_680,
        format: "WAV, 24-bit integer".to_owned(),
    });
    let scale = Scale {
        quantity: Quantity::Acceleration,
        unit: "m/s²".to_owned(),
        factor: Factor::Sensitivity { volts_per_unit: 0.1 + 0.2, full_scale_volts: 1e-310 },
        detector: Detector::PeakToPeak,
        reference: Some(1e-6),
    };
    for command in [
        Command::ChooseChannel(1),
        Command::SetScale(1, scale),
        Command::SetRate(Some(8_191.999_999_999_999)),
        Command::SetRemoval(Removal::Line),
        Command::AddSegment(Span { start: 73_728, samples: 196_608 }),
        Command::SetKind(Some(Kind::Transient)),
        Command::RenameSegment(SegmentId(2), "steady \"run\" ) , \\ 2\nµ".to_owned()),
        Command::AddPane(Window::parse("hann").unwrap()),
        Command::RemovePane(PaneId(2)),
        Command::Pick(Some(124.8)),
        Command::AddHandTone(HandTone::at(124.47, true)),
        Command::HoldTone(HandTone { by: "N.N.".to_owned(), reason: "rig".to_owned(), ..HandTone::at(130.0, true) }),
        Command::RefuseTone(Refusal { frequency_hz: 50.5, by: "N.N.".to_owned(), reason: "recorder".to_owned() }),
        Command::Overrule(Overrule {
            frequency_hz: 99.85,
            channel: 1,
            segment: SegmentId(2),
            verdict: Verdict::Disputed,
            by: "N.N.".to_owned(),
            reason: "the load changed".to_owned(),
        }),
        Command::PinFundamental(Some(24.96)),
        Command::SetNote(Note { frequency_hz: None, text: "two\nlines /* and */ // more".to_owned() }),
        Command::SetNote(Note { frequency_hz: Some(99.84), text: "four times shaft".to_owned() }),
        Command::SetTuning(Tuning { false_alarm: 1e-4, max_tones: 17 }),
        Command::SetAxes(ViewAxes {
            frequency_axis: FrequencyAxis::Logarithmic,
            frequency_hz: Some((1.0, 1000.0)),
            level_db: Some((-120.0, 0.0)),
        }),
    ] {
        let name = command.name();
        assert!(command.apply(&mut session), "{name}");
    }
    session
}

fn figures() -> Figures {
    let reading = |level_db| PaneFigures { state: "clear".to_owned(), peak_hz: 124.800_000_000_000_01, level_db };
    let readings = vec![reading(-0.0), reading(f64::NEG_INFINITY), reading(1.0 / 3.0)];
    Figures {
        channel: 1,
        segment: Span { start: 73_728, samples: 196_608 },
        sample_rate_hz: 8_191.999_999_999_999,
        reference: "dB re 1 µm/s² (peak-to-peak)".to_owned(),
        windows: vec!["hann".to_owned()],
        tones: vec![ToneFigures {
            frequency_hz: f64::from_bits(0x405f_3333_3333_3334),
            amplitude: 5e-324,
            level_db: 140.0,
            frequency_u95_hz: Some(1e-4),
            level_u95_db: None,
            verdict: Some("holds".to_owned()),
            overruled: Some("disputed".to_owned()),
            readings,
        }],
    }
}

fn saved(shop: &Shop) -> std::path::PathBuf {
    let path = shop.path("pump.session.ron");
    save(&path, &document(), Some(&figures())).unwrap();
    path
}

#[test]
fn a_session_comes_back_to_the_last_bit() {
    let shop = Shop::new();
    let path = saved(&shop);
    let mut loaded = load(&path).unwrap();
    assert_eq!(loaded.program, env!("CARGO_PKG_VERSION"));
    // The capture was named from the current folder, and is told from there again.
    let capture = std::mem::take(&mut loaded.session.capture.path);
    assert_eq!(fs::canonicalize(Path::new(&capture).parent().unwrap()).unwrap(), std::env::current_dir().unwrap());
    let expected = Session { capture: CaptureRef { path: String::new(), ..document().capture }, ..document() };
    assert_eq!(loaded.session, expected);
    let read = loaded.figures.unwrap();
    assert_eq!(read, figures());
    assert_eq!(read.tones[0].readings[0].level_db.to_bits(), (-0.0_f64).to_bits());
    assert_eq!(figures().moved(&read), []);
}

#[test]
fn saving_again_gives_the_same_bytes_and_leaves_nothing_behind() {
    let shop = Shop::new();
    let path = saved(&shop);
    let first = fs::read(&path).unwrap();
    saved(&shop);
    assert_eq!(fs::read(&path).unwrap(), first);
    assert!(!first.contains(&b'\r'));
    assert_eq!(fs::read_dir(shop.path("")).unwrap().count(), 1);
}

#[test]
fn a_file_cut_at_any_byte_is_refused() {
    let shop = Shop::new();
    let path = saved(&shop);
    let whole = fs::read(&path).unwrap();
    let closing = whole.iter().rposition(|b| *b == b')').unwrap();
    for length in 0..=closing {
        fs::write(&path, &whole[..length]).unwrap();
        let error = load(&path).expect_err("a part of a session");
        assert!(matches!(error, SessionError::Damaged { .. } | SessionError::NotText { .. }), "{length}: {error}");
        assert!(!error.to_string().contains('\n'));
    }
}

#[test]
fn a_damaged_byte_never_panics_and_never_gives_an_impossible_document() {
    let shop = Shop::new();
    let path = saved(&shop);
    let whole = fs::read(&path).unwrap();
    let mut refused = 0;
    for (at, byte) in (0..whole.len()).step_by(2).zip([b'9', b'-', b'(', b'1', 0xff].into_iter().cycle()) {
        let mut damaged = whole.clone();
        damaged[at] = byte;
        fs::write(&path, &damaged).unwrap();
        match load(&path) {
            Ok(loaded) => assert_eq!(loaded.session.check(), Ok(()), "byte {at}"),
            Err(_) => refused += 1,
        }
        assert_eq!(fs::read(&path).unwrap(), damaged, "the file was touched");
    }
    assert!(refused > whole.len() / 8, "{refused}");
}

#[test]
fn what_cannot_be_is_refused_by_name() {
    let shop = Shop::new();
    let path = saved(&shop);
    let whole = fs::read_to_string(&path).unwrap();
    for (from, to, said) in [
        ("format: 2", "format: 7", "newer Panewise (format 7; this one reads 2)"),
        ("rate_hz: Some(8191.999999999999)", "rate_hz: Some(NaN)", "the sample rate is NaN"),
        ("channel: 1", "channel: 2", "it reads channel 3 of a capture that has 2"),
        ("current: SegmentId(2)", "current: SegmentId(5)", "the segment to read (id 5)"),
        ("samples: 196608", "samples: 18446744073709551615", "takes samples 73728 to"),
        ("samples: 196608", "samples: 0", "takes samples 73728 to"),
        ("samples: 196608", "samples: -1", "line:column"),
        ("id: PaneId(3)", "id: PaneId(1)", "pane id 1 stands twice"),
        ("last_pane_id: 7", "last_pane_id: 4294967295", "pane id 4294967295"),
        ("window: \"hann\"", "window: \"no-such\"", "no-such"),
        ("frequency_hz: 124.47", "frequency_hz: inf", "a tone named by hand is inf"),
        ("frequency_hz: 50.5", "frequency_hz: -50.5", "a refusal is -50.5"),
        ("frequency_hz: 99.85", "frequency_hz: NaN", "a verdict overruled is NaN"),
        ("verdict: disputed", "verdict: fine", "fine"),
        ("fundamental_hz: Some(24.96)", "fundamental_hz: Some(0.0)", "the fundamental pinned is 0"),
        ("max_tones: 17", "max_tones: 99999999", "99999999 tones to search for"),
        ("false_alarm: 0.0001", "false_alarm: 1.5", "false alarm"),
        ("channels: 2", "channels: 3", "2 scales where 3 to 3"),
        ("removal: line", "removal: line, colour: 3", "colour"),
        ("program: ", "author: \"x\", program: ", "author"),
    ] {
        assert!(whole.contains(from), "{from} in:\n{whole}");
        fs::write(&path, whole.replacen(from, to, 1)).unwrap();
        let error = load(&path).expect_err(to).to_string();
        assert!(error.contains(said), "{to}: {error}");
        assert!(!error.contains('\n'), "{error}");
    }
    assert_eq!(FORMAT, 2);
}

#[test]
fn a_session_of_format_1_is_read_as_it_was() {
    let shop = Shop::new();
    let path = saved(&shop);
    let whole = fs::read_to_string(&path).unwrap();
    // What format 1 did not have, as it was written then: nothing of it.
    let mut old = String::new();
    let mut skip = false;
    for line in whole.lines() {
        let is = |what: &str| line.trim_start().starts_with(what);
        if is("refused: [") || is("overruled: [") {
            skip = true;
        }
        let newer = ["fundamental_hz", "by: ", "reason: ", "frequency_u95_hz", "level_u95_db", "verdict", "overruled"];
        if !skip && !newer.into_iter().any(is) {
            old.push_str(&line.replace("format: 2", "format: 1"));
            old.push('\n');
        }
        if skip && line.starts_with("    ],") {
            skip = false;
        }
    }
    assert!(old.contains("format: 1") && !old.contains("Refusal") && old.contains("tuning"), "{old}");
    fs::write(&path, old).unwrap();
    let loaded = load(&path).unwrap();
    let mut expected = document();
    (expected.refused, expected.overruled, expected.fundamental_hz) = (vec![], vec![], None);
    for tone in &mut expected.hand_tones {
        (tone.by, tone.reason) = (String::new(), String::new());
    }
    let capture = expected.capture.clone();
    assert_eq!(Session { capture, ..loaded.session }, expected);
    let figures = loaded.figures.unwrap();
    assert_eq!((figures.tones[0].verdict.clone(), figures.tones[0].frequency_u95_hz), (None, None));
    // What was never saved has not moved.
    assert_eq!(figures.moved(&self::figures()), []);
}

#[test]
fn what_is_no_session_at_all_is_refused() {
    let shop = Shop::new();
    let path = shop.path("a.session.ron");
    fs::write(&path, [0xff, 0xfe, 0x00]).unwrap();
    assert!(matches!(load(&path), Err(SessionError::NotText { .. })));
    fs::File::create(&path).unwrap().set_len(17 << 20).unwrap();
    assert!(matches!(load(&path), Err(SessionError::TooLong { .. })));
    fs::write(&path, "[".repeat(100_000)).unwrap();
    assert!(matches!(load(&path), Err(SessionError::Damaged { .. })));
    assert!(matches!(load(&shop.path("missing.session.ron")), Err(SessionError::Io { .. })));
    assert!(matches!(load(&shop.path("")), Err(SessionError::NotAFile { .. })));
}

#[test]
fn an_impossible_document_is_not_saved_and_the_old_file_stays() {
    let shop = Shop::new();
    let path = saved(&shop);
    let before = fs::read(&path).unwrap();
    let broken = Session { panes: Vec::new(), ..document() };
    assert!(matches!(save(&path, &broken, None), Err(SessionError::Invalid { .. })));
    assert_eq!(fs::read(&path).unwrap(), before);
}

#[test]
fn a_read_only_session_is_not_written_over() {
    let shop = Shop::new();
    let path = saved(&shop);
    let before = fs::read(&path).unwrap();
    let mut rights = fs::metadata(&path).unwrap().permissions();
    rights.set_readonly(true);
    fs::set_permissions(&path, rights).unwrap();
    let error = save(&path, &document(), None).unwrap_err();
    assert!(matches!(error, SessionError::ReadOnly { .. }), "{error}");
    assert_eq!(fs::read(&path).unwrap(), before);
    assert!(load(&path).is_ok());
}

#[cfg(unix)]
#[test]
fn rights_and_links_stay_as_they_were() {
    use std::os::unix::fs::{PermissionsExt, symlink};
    let shop = Shop::new();
    let path = saved(&shop);
    fs::write(shop.path("plain"), "").unwrap();
    let mode = |path: &Path| fs::metadata(path).unwrap().permissions().mode();
    assert_eq!(mode(&path), mode(&shop.path("plain")), "a new session has the rights of any new file");
    fs::set_permissions(&path, fs::Permissions::from_mode(0o640)).unwrap();
    let link = shop.path("link.session.ron");
    symlink(&path, &link).unwrap();
    save(&link, &document(), None).unwrap();
    assert!(fs::symlink_metadata(&link).unwrap().file_type().is_symlink());
    assert_eq!(load(&path).unwrap().figures, None);
    assert_eq!(mode(&path) & 0o777, 0o640);
}
