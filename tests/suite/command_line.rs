//! The real binary on a real file: what it prints, what it keeps, what it leaves alone.

use serde_json::Value;

use crate::shop::{Shop, bytes};

const SEGMENT: [&str; 2] = ["--segment", "1..7"];
const SCALE: [&str; 4] = ["--quantity", "acceleration", "--factor", "100"];

#[track_caller]
fn assert_keys(value: &Value, keys: &str) {
    let object = value.as_object().unwrap();
    for key in keys.split_whitespace() {
        assert!(object.contains_key(key), "no {key} in {value}");
    }
}

#[test]
fn the_machine_readable_reading_has_every_key() {
    let shop = Shop::new();
    let wav = shop.pump("pump.wav");
    let before = bytes(&wav);
    let reading = shop.run(&[&["read", "pump.wav", "--json"], &SEGMENT[..], &SCALE].concat()).json();
    assert_keys(&reading, "schema version capture segment scale panes advice tones skirts warnings");
    assert_keys(&reading["capture"], "path blake3 sample_rate_hz channels frames format");
    assert_keys(&reading["segment"], "channel start_sample samples start_s duration_s kind kind_why removed");
    assert_keys(&reading["segment"]["removed"], "what offset slope_per_s");
    assert_keys(&reading["scale"], "quantity unit detector reference factor");
    let panes = reading["panes"].as_array().unwrap();
    assert_eq!(panes.len(), 6);
    for pane in panes {
        assert_keys(pane, "window parameter coherent_gain enbw_bins enbw_hz line_spacing_hz floor_db");
        assert_keys(pane, "expected_worst_error_db n_skirts");
    }
    let tones = reading["tones"].as_array().unwrap();
    assert!(tones.len() >= 3, "{tones:?}");
    for tone in tones {
        assert_keys(tone, "frequency_hz frequency_u95_hz amplitude amplitude_u95 level level_db level_u95_db");
        assert_keys(tone, "phase_rad verdict why overruled budget noise_density snr_db drift_hz drift_db");
        assert_keys(tone, "tags order agreement_db readings");
        let readings = tone["readings"].as_array().unwrap();
        assert_eq!(readings.len(), 6);
        for reading in readings {
            assert_keys(reading, "window state peak_hz borrowed amplitude level_db u_db predicted_leak_db ledger");
            let ledger = reading["ledger"].as_array().unwrap();
            let sum: f64 = ledger.iter().map(|step| step["db"].as_f64().unwrap()).sum();
            assert!((sum - reading["level_db"].as_f64().unwrap()).abs() < 1e-9, "{reading}");
        }
    }
    assert_eq!(reading["schema"], 1);
    assert_eq!(reading["capture"]["blake3"], blake3::hash(&before).to_hex().as_str());
    assert_eq!((&reading["segment"]["start_sample"], &reading["segment"]["samples"]), (&4096.into(), &24576.into()));
    assert_eq!(bytes(&wav), before, "the capture was written to");
}

#[test]
fn the_tones_put_in_are_read_at_their_frequency_and_level() {
    let shop = Shop::new();
    shop.pump("pump.wav");
    let reading = shop.run(&[&["read", "pump.wav", "--json"], &SEGMENT[..], &SCALE].concat()).json();
    let tones = reading["tones"].as_array().unwrap();
    // Peak amplitudes in full scales, 100 m/s² each; level through r.m.s. over 1 µm/s² (ISO 1683).
    for (frequency_hz, peak) in [(24.96, 0.2), (124.8, 0.4), (411.3, 0.01)] {
        let near = |tone: &&Value| (tone["frequency_hz"].as_f64().unwrap() - frequency_hz).abs() < 0.05 / 6.0;
        let tone = tones.iter().find(near).unwrap_or_else(|| panic!("no tone at {frequency_hz} Hz"));
        let expected_db = 20.0 * (100.0 * peak / std::f64::consts::SQRT_2 / 1e-6).log10();
        let level_db = tone["level_db"].as_f64().unwrap();
        assert!((level_db - expected_db).abs() < 0.05, "{frequency_hz} Hz: {level_db} dB, put in {expected_db} dB");
    }
}

#[test]
fn the_second_channel_and_other_options_are_obeyed() {
    let shop = Shop::new();
    shop.pump("pump.wav");
    let level_db = |more: &[&str]| {
        let base = ["read", "pump.wav", "--json", "--segment", "4096n..28672n", "--windows", "flat-top"];
        let reading = shop.run(&[&base, more].concat()).json();
        let tones = reading["tones"].as_array().unwrap();
        let strongest = tones.iter().map(|t| t["level_db"].as_f64().unwrap()).fold(f64::MIN, f64::max);
        (strongest, reading)
    };
    let (first, reading) = level_db(&[]);
    assert_eq!(reading["scale"]["unit"], "FS");
    assert!(reading["warnings"].as_array().unwrap().iter().any(|w| w["code"] == "no-scale"));
    let (second, reading) = level_db(&["--channel", "2"]);
    assert_eq!(reading["segment"]["channel"], 2);
    assert!((first - second - 20.0 * 2.0_f64.log10()).abs() < 1e-3);
    let (volts, reading) =
        level_db(&["--unit", "V", "--factor", "2", "--detector", "peak-to-peak", "--reference", "0.5"]);
    assert_eq!(
        (&reading["scale"]["quantity"], &reading["scale"]["detector"]),
        (&"voltage".into(), &"peak-to-peak".into())
    );
    // A full-scale sine is 0 dB without a scale; here it is 4 V peak to peak over 0.5 V.
    assert!((volts - first - 20.0 * 8.0_f64.log10()).abs() < 1e-9);
    assert_eq!(reading["segment"]["kind"], "tones");
    let (_, reading) = level_db(&["--kind", "random"]);
    assert_eq!(reading["segment"]["kind"], "random");
    assert!(reading["segment"]["kind_why"].as_str().unwrap().starts_with("set by hand; found to be tones: "));
    let (_, reading) = level_db(&["--rate", "8192", "--remove", "line", "--max-tones", "1", "--tone", "100,held"]);
    assert_eq!(reading["capture"]["sample_rate_hz"], 8192.0);
    assert_eq!(reading["segment"]["removed"]["what"], "line");
    let held = reading["tones"].as_array().unwrap().iter().find(|t| t["frequency_hz"] == 100.0).unwrap();
    assert!(held["tags"].as_array().unwrap().contains(&"held".into()));
}

#[test]
fn text_and_csv_show_the_same_tones() {
    let shop = Shop::new();
    shop.pump("pump.wav");
    let arguments = [&["read", "pump.wav"], &SEGMENT[..], &SCALE].concat();
    let text = shop.run(&arguments).done();
    let csv = shop.run(&[&arguments[..], &["--csv"]].concat()).done();
    let json = shop.run(&[&arguments[..], &["--json"]].concat()).json();
    let tones = json["tones"].as_array().unwrap();
    let mut table = csv::Reader::from_reader(csv.as_bytes());
    let rows: Vec<_> = table.records().collect::<Result<_, _>>().unwrap();
    assert_eq!(rows.len(), tones.len());
    for (row, tone) in rows.iter().zip(tones) {
        let frequency_hz = tone["frequency_hz"].as_f64().unwrap();
        assert_eq!(row[0].parse::<f64>().unwrap().to_bits(), frequency_hz.to_bits());
        // A row in text: frequency, its uncertainty, level in the unit, level in decibels, ...
        let near = |line: &&str| {
            let first = line.split_whitespace().next().and_then(|cell| cell.parse::<f64>().ok());
            first.is_some_and(|f| (f - frequency_hz).abs() < 1e-3)
        };
        let line = text.lines().find(near).unwrap_or_else(|| panic!("no row of {frequency_hz} Hz in\n{text}"));
        let cells: Vec<_> = line.split_whitespace().collect();
        let decimals = cells[3].split_once('.').map_or(0, |(_, after)| after.len());
        assert_eq!(cells[3], format!("{:.decimals$}", tone["level_db"].as_f64().unwrap()), "{line}");
        // As many decimals as two digits of the uncertainty have, but for one that is less than the last of them.
        let u95_db = tone["level_u95_db"].as_f64().unwrap();
        assert_eq!(decimals, ((1.0 - u95_db.log10().floor()) as usize).min(5), "{u95_db}: {line}");
        let level = tone["level"].as_f64().unwrap();
        assert!((cells[2].parse::<f64>().unwrap() / level - 1.0).abs() < 1e-4, "{level}: {line}");
        assert!((level / tone["amplitude"].as_f64().unwrap() - std::f64::consts::FRAC_1_SQRT_2).abs() < 1e-12);
    }
    assert!(text.contains("Acceleration: levels in m/s² r.m.s. and in dB re 1 µm/s² (r.m.s.)"));
    assert!(text.contains("Caution: check the instrument chain"));
}

#[test]
fn without_a_segment_the_one_assumed_is_told() {
    let shop = Shop::new();
    shop.pump("pump.wav");
    let reading = shop.run(&["read", "pump.wav", "--json"]).json();
    let warnings = reading["warnings"].as_array().unwrap();
    let assumed = warnings.iter().find(|w| w["code"] == "assumed-segment").unwrap();
    let start = reading["segment"]["start_sample"].as_u64().unwrap();
    let end = start + reading["segment"]["samples"].as_u64().unwrap();
    assert!(assumed["text"].as_str().unwrap().contains(&format!("{start}n..{end}n")), "{assumed}");
    let given = shop.run(&["read", "pump.wav", "--json", "--segment", "1..7"]).json();
    assert!(!given["warnings"].as_array().unwrap().iter().any(|w| w["code"] == "assumed-segment"));
}

#[test]
fn a_saved_session_read_again_gives_the_same_tone_table_to_the_last_digit() {
    let shop = Shop::new();
    let wav = shop.pump("pump.wav");
    let before = bytes(&wav);
    let more = ["--windows", "hann,rectangular,flat-top", "--channel", "2", "--save", "pump.session.ron", "--json"];
    let first = shop.run(&[&["read", "pump.wav"], &SEGMENT[..], &SCALE, &more].concat()).json();
    let saved = bytes(&shop.path("pump.session.ron"));
    let again = shop.run(&["read", "pump.session.ron", "--json"]).json();
    for key in ["tones", "panes", "scale", "segment", "capture"] {
        // Numbers are printed in the shortest form that reads back exactly, so equal text is equal to the last bit.
        assert_eq!(first[key].to_string(), again[key].to_string(), "{key}");
    }
    assert_eq!(bytes(&shop.path("pump.session.ron")), saved, "the session was written to");
    assert_eq!(bytes(&wav), before, "the capture was written to");
    let other = shop.run(&["read", "pump.session.ron", "--channel", "1", "--json"]).json();
    assert_eq!(other["segment"]["channel"], 1);
    let windows = |reading: &Value| reading["panes"].as_array().unwrap().iter().map(|p| p["window"].clone()).collect();
    let (asked, kept): (Vec<Value>, Vec<Value>) = (windows(&first), windows(&other));
    assert_eq!(asked, kept);
}

#[test]
fn the_windows_are_listed_for_people_and_machines() {
    let shop = Shop::new();
    let list = shop.run(&["windows", "--json"]).json();
    let list = list.as_array().unwrap();
    for window in list {
        assert_keys(window, "name parameter family coherent_gain enbw_bins scalloping_loss_db");
        assert_keys(window, "worst_case_processing_loss_db width_3db_bins width_6db_bins width_null_bins");
        assert_keys(window, "highest_side_lobe_db side_lobe_falloff_db_per_octave overlap_correlation_50");
        assert_keys(window, "overlap_correlation_75 recommended_overlap_percent flatness_db coefficients source");
    }
    let text = shop.run(&["windows"]).done();
    for name in ["rectangular", "hann", "hamming", "blackman", "blackman-harris", "flat-top"] {
        assert!(list.iter().any(|w| w["name"] == name), "{name}");
        assert!(text.lines().any(|line| line.starts_with(name)), "{name}");
    }
}

#[test]
fn without_a_display_the_capture_is_read_as_text() {
    let shop = Shop::new();
    shop.pump("pump.wav");
    let ran = shop.run(&["pump.wav"]);
    assert_eq!(ran.status, 0, "{}", ran.err);
    assert_eq!(ran.err.matches('\n').count(), 1, "{}", ran.err);
    assert!(ran.err.starts_with("panewise: ") && ran.err.contains("there is no display"), "{}", ran.err);
    assert!(ran.err.contains("pump.wav as text"), "{}", ran.err);
    let vane_pass = |line: &str| line.trim_start().starts_with("124.8") || line.trim_start().starts_with("124.7999");
    assert!(ran.out.lines().any(vane_pass), "{}", ran.out);
    let bad = shop.run(&["missing.wav"]).refused();
    assert!(bad.contains("missing.wav"), "{bad}");
}

#[test]
fn what_is_wrong_with_the_samples_is_told_beside_the_figures() {
    let shop = Shop::new();
    let codes = |name: &str| {
        let reading = shop.run(&["read", name, "--json", "--segment", "0..2"]).json();
        let warnings = reading["warnings"].as_array().unwrap();
        warnings.iter().map(|w| w["code"].as_str().unwrap().to_owned()).collect::<Vec<_>>()
    };
    let whole = shop.pump("pump.wav");
    assert_eq!(codes("pump.wav"), ["no-scale"]);
    let mut cut = bytes(&whole);
    cut.truncate(cut.len() / 2);
    std::fs::write(shop.path("cut.wav"), cut).unwrap();
    assert_eq!(codes("cut.wav"), ["truncated", "no-scale"]);
    // Three times full scale, cut off at the top code by the recorder.
    shop.pump_with("loud.wav", 3.0);
    assert_eq!(codes("loud.wav")[0], "clipping");
}
