//! `panewise recheck`: figures that stand, figures that moved, captures that moved, changed or went.

use std::fs;

use serde_json::Value;

use crate::shop::{Ran, Shop, bytes};

/// A shop with a capture and a session saved about it.
fn saved() -> Shop {
    let shop = Shop::new();
    shop.pump("pump.wav");
    shop.run(&["read", "pump.wav", "--segment", "1..7", "--save", "pump.session.ron"]).done();
    shop
}

fn recheck(shop: &Shop, session: &str) -> (i32, Value) {
    let ran = shop.run(&["recheck", session, "--json"]);
    assert_eq!(ran.err, "");
    (ran.status, serde_json::from_str(&ran.out).unwrap())
}

#[test]
fn every_figure_of_an_untouched_session_stands() {
    let shop = saved();
    let before = (bytes(&shop.path("pump.wav")), bytes(&shop.path("pump.session.ron")));
    let (status, found) = recheck(&shop, "pump.session.ron");
    assert_eq!((status, found), (0, serde_json::json!({"same": true, "figures": [], "capture": "same"})));
    let text = shop.run(&["recheck", "pump.session.ron"]).done();
    assert!(text.contains("every figure") && text.contains("capture: same"), "{text}");
    assert_eq!((bytes(&shop.path("pump.wav")), bytes(&shop.path("pump.session.ron"))), before);
}

#[test]
fn a_figure_that_was_altered_is_listed_with_what_it_was_and_is() {
    let shop = saved();
    let path = shop.path("pump.session.ron");
    let text = fs::read_to_string(&path).unwrap();
    let (head, figures) = text.split_at(text.find("  figures: Some(").unwrap());
    let at = figures.find("level_db: ").unwrap() + "level_db: ".len();
    let end = at + figures[at..].find(',').unwrap();
    let was: f64 = figures[at..end].parse().unwrap();
    fs::write(&path, format!("{head}{}{}{}", &figures[..at], was + 0.001, &figures[end..])).unwrap();
    let (status, found) = recheck(&shop, "pump.session.ron");
    assert_eq!((status, &found["same"], &found["capture"]), (1, &Value::Bool(false), &"same".into()));
    let moved = found["figures"].as_array().unwrap();
    assert_eq!(moved.len(), 1, "{moved:?}");
    assert!(moved[0]["what"].as_str().unwrap().ends_with("Hz: level_db"), "{}", moved[0]);
    assert!((moved[0]["was"].as_f64().unwrap() - moved[0]["is"].as_f64().unwrap() - 0.001).abs() < 1e-9);
    let ran = shop.run(&["recheck", "pump.session.ron"]);
    assert_eq!((ran.status, ran.err.as_str()), (1, ""));
    assert!(ran.out.contains("1 figure moved") && ran.out.contains(": was "), "{}", ran.out);
}

#[test]
fn a_capture_moved_beside_the_session_is_found() {
    let shop = saved();
    fs::create_dir(shop.path("archive")).unwrap();
    fs::rename(shop.path("pump.session.ron"), shop.path("archive/pump.session.ron")).unwrap();
    let (status, found) = recheck(&shop, "archive/pump.session.ron");
    assert_eq!((status, &found["capture"]), (1, &"missing".into()), "its folder has no such capture yet");
    fs::rename(shop.path("pump.wav"), shop.path("archive/pump.wav")).unwrap();
    let (status, found) = recheck(&shop, "archive/pump.session.ron");
    assert_eq!((status, &found["capture"], &found["same"]), (0, &"same".into(), &Value::Bool(true)));

    let shop = Shop::new();
    fs::create_dir(shop.path("site")).unwrap();
    shop.pump("site/pump.wav");
    shop.run(&["read", "site/pump.wav", "--segment", "1..7", "--save", "pump.session.ron"]).done();
    fs::rename(shop.path("site/pump.wav"), shop.path("pump.wav")).unwrap();
    let (status, found) = recheck(&shop, "pump.session.ron");
    assert_eq!((status, &found["capture"], &found["same"]), (0, &"moved".into(), &Value::Bool(true)));
    let text = shop.run(&["recheck", "pump.session.ron"]).done();
    assert!(text.contains("capture: moved, read from pump.wav"), "{text}");
    let reading = shop.run(&["read", "pump.session.ron", "--json"]).json();
    assert!(reading["warnings"].as_array().unwrap().iter().any(|w| w["code"] == "moved-capture"));
}

#[test]
fn a_changed_capture_is_said_to_be_changed_and_never_silently_used() {
    let shop = saved();
    shop.pump_with("pump.wav", 0.41);
    let (status, found) = recheck(&shop, "pump.session.ron");
    assert_eq!((status, &found["capture"], &found["same"]), (1, &"changed".into(), &Value::Bool(false)));
    let moved = found["figures"].as_array().unwrap();
    assert!(moved.iter().any(|m| m["what"].as_str().unwrap().starts_with("tone 124.8")), "{moved:?}");
    let text = shop.run(&["recheck", "pump.session.ron"]).out;
    assert!(text.contains("\npump.wav is not what it was when the session was saved: put that"), "{text}");
    let said = shop.run(&["read", "pump.session.ron"]).refused();
    assert!(said.contains("has changed since"), "{said}");
}

#[test]
fn another_recording_in_the_captures_place_is_said_to_be_another() {
    let shop = saved();
    let spec =
        hound::WavSpec { channels: 1, sample_rate: 8000, bits_per_sample: 16, sample_format: hound::SampleFormat::Int };
    let mut writer = hound::WavWriter::create(shop.path("pump.wav"), spec).unwrap();
    (0..500_i16).for_each(|i| writer.write_sample(i).unwrap());
    writer.finalize().unwrap();
    let ran = shop.run(&["recheck", "pump.session.ron"]);
    assert_eq!((ran.status, ran.err.as_str()), (1, ""));
    let said = "pump.wav is another recording (1 channel, 500 frames, 8000 Hz) than the session was made of \
                (2 channels, 32768 frames, 4096 Hz): put that one back; capture: changed";
    assert!(ran.out.contains(said), "{}", ran.out);
}

#[test]
fn a_capture_cut_short_is_changed_and_nothing_is_computed() {
    let shop = saved();
    let path = shop.path("pump.wav");
    let mut wav = bytes(&path);
    wav.truncate(wav.len() / 2);
    fs::write(&path, wav).unwrap();
    let (status, found) = recheck(&shop, "pump.session.ron");
    assert_eq!((status, &found["capture"], &found["same"]), (1, &"changed".into(), &Value::Bool(false)));
}

#[test]
fn a_missing_capture_is_said_to_be_missing() {
    let shop = saved();
    fs::remove_file(shop.path("pump.wav")).unwrap();
    let (status, found) = recheck(&shop, "pump.session.ron");
    let expected = serde_json::json!({"same": false, "figures": [], "capture": "missing"});
    assert_eq!((status, found), (1, expected));
    let said = shop.run(&["read", "pump.session.ron"]).refused();
    assert!(said.contains("pump.wav"), "{said}");
    let ran: Ran = shop.run(&["recheck", "pump.session.ron"]);
    assert_eq!(ran.status, 1);
    assert!(ran.out.contains("pump.wav is not there, nor in the session's folder: put it back"), "{}", ran.out);
    assert!(ran.out.contains("capture: missing"), "{}", ran.out);
}

#[test]
fn a_session_without_figures_has_nothing_to_recheck() {
    let shop = saved();
    let path = shop.path("pump.session.ron");
    let text = fs::read_to_string(&path).unwrap();
    let (head, _) = text.split_at(text.find("  figures: Some(").unwrap());
    fs::write(&path, format!("{head}  figures: None,\n)\n")).unwrap();
    let said = shop.run(&["recheck", "pump.session.ron"]).refused();
    assert!(said.contains("without figures"), "{said}");
}

#[test]
fn a_session_that_does_not_state_its_captures_hash_is_never_said_to_be_the_same() {
    let shop = saved();
    let path = shop.path("pump.session.ron");
    let text = fs::read_to_string(&path).unwrap();
    let at = text.find("blake3: \"").unwrap() + "blake3: \"".len();
    fs::write(&path, format!("{}{}", &text[..at], &text[at + 64..])).unwrap();
    let said = shop.run(&["recheck", "pump.session.ron"]).refused();
    assert!(said.contains("BLAKE3"), "{said}");
}

#[test]
fn a_session_that_tells_of_samples_its_capture_does_not_have_is_refused() {
    let shop = saved();
    let path = shop.path("pump.session.ron");
    let text = fs::read_to_string(&path).unwrap();
    let emptied = |mut text: String| {
        for name in ["frames: ", "start: ", "samples: "] {
            let at = text.find(name).unwrap() + name.len();
            let end = at + text[at..].find(',').unwrap();
            text.replace_range(at..end, "0");
        }
        text
    };
    fs::write(&path, emptied(text)).unwrap();
    let said = shop.run(&["read", "pump.session.ron"]).refused();
    assert!(said.contains("takes samples 0 to 0"), "{said}");
}
