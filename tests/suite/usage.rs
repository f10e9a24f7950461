//! What can be given, and what is said to what cannot.

use std::fs;
use std::process::Stdio;

use crate::shop::{Ran, Shop};

#[test]
fn help_tells_the_commands_with_examples_and_the_exit_statuses() {
    let shop = Shop::new();
    let help = shop.run(&["--help"]).done();
    for part in ["read", "recheck", "windows", "Examples:", "Exit status:", "CAPTURE|SESSION"] {
        assert!(help.contains(part), "{part} in:\n{help}");
    }
    let help = shop.run(&["read", "--help"]).done();
    for option in [
        "--channel",
        "--segment",
        "--windows",
        "--quantity",
        "--unit",
        "--factor",
        "--sensitivity",
        "--full-scale-volts",
        "--detector",
        "--reference",
        "--rate",
        "--kind",
        "--remove",
        "--tone",
        "--max-tones",
        "--false-alarm",
        "--json",
        "--csv",
        "--save",
        "--replace",
    ] {
        assert!(help.contains(option), "{option} in:\n{help}");
    }
    assert_eq!(shop.run(&["--version"]).done(), concat!("panewise ", env!("CARGO_PKG_VERSION"), "\n"));
}

#[test]
fn bad_usage_is_told_in_one_line() {
    let shop = Shop::new();
    shop.pump("pump.wav");
    for (arguments, part) in [
        (&["read"][..], "CAPTURE"),
        (&["--no-such"], "--no-such"),
        (&["recheck"], "SESSION"),
        (&["pump.wav", "other.wav"], "other.wav"),
        (&["read", "pump.wav", "--to", "velocity"], "--to"),
        (&["read", "pump.wav", "--json", "--csv"], "--csv"),
        (&["read", "pump.wav", "--segment", "9"], "START..END"),
        (&["read", "pump.wav", "--segment", "3..2"], "END after START"),
        (&["read", "pump.wav", "--segment", "-1..5"], "START and END must not be negative"),
        (&["read", "pump.wav", "--segment", "1...5"], "three dots"),
        (&["read", "pump.wav", "--segment", "9n..5"], "both with 'n' or both without"),
        (&["read", "pump.wav", "--segment", "0..9"], "8 s or 32768n"),
        (&["read", "pump.wav", "--segment", "0n..4n"], "mark at least 8"),
        (&["read", "pump.wav", "--channel", "0"], "from 1 on"),
        (&["read", "pump.wav", "--channel", "-1"], "'-1' for '--channel <K>': give a whole number from 1 on"),
        (&["read", "pump.wav", "--channel", "a"], "'a' for '--channel <K>': give a whole number from 1 on"),
        (&["read", "pump.wav", "--channel", "3"], "give 1 to 2"),
        (&["read", "pump.wav", "--channel", "x"], "--channel"),
        (&["read", "pump.wav", "--windows", "hann,nosuch"], "nosuch"),
        (&["read", "pump.wav", "--windows", ""], "--windows"),
        (&["read", "pump.wav", "--quantity", "loudness"], "sound-pressure"),
        (&["read", "pump.wav", "--quantity", "velocity", "--unit", "Pa", "--factor", "1"], "unit 'Pa'"),
        (&["read", "pump.wav", "--unit", "g"], "needs a factor"),
        (&["read", "pump.wav", "--factor", "2"], "--unit"),
        (&["read", "pump.wav", "--unit", "g", "--factor", "0"], "above 0"),
        (&["read", "pump.wav", "--unit", "g", "--factor", "-5"], "above 0"),
        (&["read", "pump.wav", "--unit", "g", "--factor", "NaN"], "above 0"),
        (&["read", "pump.wav", "--sensitivity", "0.01"], "--full-scale-volts"),
        (&["read", "pump.wav", "--detector", "loud"], "peak-to-peak"),
        (&["read", "pump.wav", "--unit", "g", "--factor", "1e308"], "from 1e-12 to 1e12"),
        (&["read", "pump.wav", "--unit", "g", "--factor", "1e-300"], "from 1e-12 to 1e12"),
        (&["read", "pump.wav", "--unit", "g", "--factor", "1", "--reference", "1e-13"], "from 1e-12 to 1e12"),
        (
            &["read", "pump.wav", "--unit", "g", "--sensitivity", "1e-9", "--full-scale-volts", "1e9"],
            "the voltage at full scale over the sensitivity is 1e18",
        ),
        (&["read", "pump.wav", "--rate", "0"], "above 0"),
        (&["read", "pump.wav", "--rate", "1e300"], "from 1e-6 to 1e12 Hz"),
        (&["read", "pump.wav", "--tone", "1e300"], "--tone 1e300 Hz is not below half the sample rate"),
        (&["read", "pump.wav", "--false-alarm", "1e300"], "--false-alarm is 1e300"),
        (&["windows", "--kernel", "hann", "--duration", "1e300"], "from 1e-6 to 1e9 s"),
        (&["windows", "--kernel", "hann", "--duration", "-1"], "above 0"),
        (&["read", "pump.wav", "--max-tones", "-2"], "from 1 on"),
        (&["raed", "pump.wav"], "no command is called 'raed': did you mean 'read'?"),
        (&["raed"], "no command is called 'raed': did you mean 'read'?"),
        (&["analyse", "pump.wav", "--json"], "no command is called 'analyse': see 'panewise --help'"),
        (&["pump.wav", "read"], "a command comes first, as in 'panewise read pump.wav'"),
        (&["read", "pump.wav", "--windows", "flattop"], "did you mean 'flat-top'?"),
        (&["read", "pump.wav", "--remove", "all"], "none, mean, line"),
        (&["read", "pump.wav", "--kind", "noise"], "tones, random, transient"),
        (&["read", "pump.wav", "--tone", "5000"], "below half the sample rate"),
        (&["read", "pump.wav", "--tone", "50,kept"], "HZ,held"),
        (&["read", "pump.wav", "--max-tones", "0"], "--max-tones"),
        (&["read", "pump.wav", "--false-alarm", "1"], "--false-alarm"),
        (&["read", "pump.wav", "--save", "pump.wav"], ".session.ron"),
        (&["read", "pump.wav", "--save", "nowhere/pump.session.ron"], "nowhere"),
    ] {
        let said = shop.run(arguments).refused();
        assert!(said.contains(part), "{arguments:?}: {said}");
        assert!(said.matches("--help'").count() <= 1 && said.len() < 300, "{arguments:?}: {said}");
    }
}

#[test]
fn what_is_misspelt_leads_to_the_one_help_page_that_lists_it() {
    let shop = Shop::new();
    for (arguments, said) in [
        (&["read", "x.wav", "--no-such"][..], "there is no option '--no-such': see 'panewise read --help'"),
        (&["read", "x.wav", "--segmnt", "1..2"], "there is no option '--segmnt': did you mean '--segment'?\n"),
        (&["recheck", "a", "b"], "'b' is one argument too many: see 'panewise recheck --help'"),
        (&["windows", "--zzz"], "see 'panewise windows --help'"),
        (&["--no-such"], "there is no option '--no-such': see 'panewise --help'"),
        (&["read"], "see 'panewise read --help'"),
        (&["help", "raed"], "see 'panewise --help'"),
    ] {
        let line = shop.run(arguments).refused();
        assert!(line.contains(said), "{arguments:?}: {line}");
    }
}

#[test]
fn what_the_system_refuses_is_told_with_what_to_do() {
    let shop = Shop::new();
    shop.pump("pump.wav");
    fs::create_dir(shop.path("folder.session.ron")).unwrap();
    for (arguments, said) in [
        (&["read", "gone.wav"][..], "gone.wav: there is no such file or folder: check the path"),
        (&["read", "gone.session.ron"], "gone.session.ron: there is no such file or folder: check the path"),
        (&["recheck", "folder.session.ron"], "is not an ordinary file: choose a .session.ron file"),
        (
            &["read", "pump.wav", "--save", "nowhere/a.session.ron"],
            "nowhere: nothing can be saved in this folder: there is no such file or folder: check the path",
        ),
    ] {
        let line = shop.run(arguments).refused();
        assert!(line.contains(said), "{arguments:?}: {line}");
        assert!(!line.contains("os error") && !line.contains(".panewise-"), "{line}");
    }
}

#[test]
fn a_saved_session_is_not_replaced_unless_that_was_asked_for() {
    let shop = Shop::new();
    shop.pump("pump.wav");
    let save = |more: &[&str]| {
        shop.run(&[&["read", "pump.wav", "--segment", "1..3", "--save", "a.session.ron"], more].concat())
    };
    save(&[]).done();
    let first = fs::read(shop.path("a.session.ron")).unwrap();
    let said = save(&["--channel", "2"]).refused();
    assert!(said.contains("a.session.ron: is there already") && said.contains("--replace"), "{said}");
    assert_eq!(fs::read(shop.path("a.session.ron")).unwrap(), first);
    // Reading a session and keeping it under its own name replaces it just as much.
    let said = shop.run(&["read", "a.session.ron", "--save", "a.session.ron"]).refused();
    assert!(said.contains("--replace"), "{said}");
    save(&["--channel", "2", "--replace"]).done();
    assert_ne!(fs::read(shop.path("a.session.ron")).unwrap(), first);
    let said = shop.run(&["read", "pump.wav", "--replace"]).refused();
    assert!(said.contains("--save"), "{said}");
}

#[test]
fn bad_input_is_told_in_one_line_that_names_it() {
    let shop = Shop::new();
    fs::write(shop.path("empty.wav"), "").unwrap();
    fs::write(shop.path("garbage.wav"), vec![0x5a; 5000]).unwrap();
    fs::create_dir(shop.path("folder.wav")).unwrap();
    fs::create_dir(shop.path("folder.session.ron")).unwrap();
    fs::write(shop.path("garbage.session.ron"), "Session(format: 1, program: 3)").unwrap();
    fs::write(shop.path("newer.session.ron"), "Session(format: 3, what: [(1, 2)])").unwrap();
    for name in ["missing", "empty", "garbage", "folder"] {
        let said = shop.run(&["read", &format!("{name}.wav")]).refused();
        assert!(said.contains(&format!("{name}.wav")), "{said}");
    }
    for command in ["read", "recheck"] {
        for name in ["missing", "garbage", "folder", "newer"] {
            let said = shop.run(&[command, &format!("{name}.session.ron")]).refused();
            assert!(said.contains(&format!("{name}.session.ron")), "{said}");
        }
    }
    let said = shop.run(&["read", "newer.session.ron"]).refused();
    assert!(said.contains("was written by a newer Panewise (format 3; this one reads 2)"), "{said}");
    let said = shop.run(&["read", "garbage.session.ron"]).refused();
    assert!(said.contains("line:column 1:"), "{said}");
}

#[test]
fn a_reader_that_stops_reading_is_no_failure() {
    let shop = Shop::new();
    let mut child = shop.command(&["windows", "--json"]).stdout(Stdio::piped()).stderr(Stdio::piped()).spawn().unwrap();
    drop(child.stdout.take());
    let ran = Ran::of(child.wait_with_output().unwrap());
    assert_eq!((ran.status, ran.err.as_str()), (0, ""));
}

#[cfg(target_os = "linux")]
#[test]
fn a_full_disk_is_a_failure() {
    let shop = Shop::new();
    let full = fs::File::options().write(true).open("/dev/full").unwrap();
    let output = shop.command(&["windows"]).stdout(full).output().unwrap();
    let said = Ran::of(output).refused();
    assert!(said.contains("could not be written"), "{said}");
}
