//! A screen to test: an invented capture in a folder of its own, a picker that answers from a list.

use std::collections::VecDeque;
use std::path::{Path, PathBuf};
use std::sync::{Arc, Mutex};
use std::time::Duration;

use eframe::egui::{self, Event, Key, Modifiers, PointerButton, Pos2};
use egui_kittest::Harness;
use egui_kittest::kittest::Queryable as _;
use panewise::session::Session;
use panewise::ui::{Ask, Picker, Services, Workbench};

/// Frames a second of the invented capture.
pub(crate) const RATE_HZ: u32 = 2048;
/// Its seconds.
pub(crate) const SECONDS: u32 = 16;
/// Its tones: hertz and peak amplitude in full scales; the exact lines of 4 s and the places between.
pub(crate) const TONES: [(f64, f64); 3] = [(50.0, 0.5), (124.8, 0.25), (300.125, 0.05)];

/// Answers from a list, and remembers what it was asked.
#[derive(Debug, Default)]
pub(crate) struct Answers {
    pub(crate) paths: Mutex<VecDeque<PathBuf>>,
    pub(crate) asked: Mutex<Vec<Ask>>,
}

impl Picker for Answers {
    fn pick(&self, ask: &Ask, _: Option<&Path>) -> Option<PathBuf> {
        self.asked.lock().unwrap().push(ask.clone());
        self.paths.lock().unwrap().pop_front()
    }
}

/// A folder with a capture, and a screen that keeps its things there.
pub(crate) struct Desk {
    pub(crate) folder: tempfile::TempDir,
    pub(crate) picker: Arc<Answers>,
}

impl Desk {
    pub(crate) fn new() -> Self {
        let folder = tempfile::tempdir().unwrap();
        write_capture(&folder.path().join("pump.wav"), 1.0);
        Self { folder, picker: Arc::default() }
    }

    pub(crate) fn path(&self, name: &str) -> PathBuf {
        self.folder.path().join(name)
    }

    pub(crate) fn services(&self) -> Services {
        Services {
            picker: Arc::<Answers>::clone(&self.picker),
            recent: Some(self.path("recent.ron")),
            recovery: Some(self.path("recovery")),
            preferences: Some(self.path("preferences.ron")),
            demonstration: Some(self.path("demonstration.wav")),
        }
    }

    /// A screen with nothing on it.
    pub(crate) fn bare(&self) -> Screen<'static> {
        let bench = Workbench::new(self.services());
        let harness = Harness::builder()
            .with_size([1280.0, 800.0])
            .with_max_steps(64)
            .with_context_setup(Workbench::dress)
            .build_ui_state(
                |ui, bench: &mut Workbench| {
                    bench.logic(ui);
                    bench.ui(ui);
                },
                bench,
            );
        Screen { harness }
    }

    /// A screen with a file open.
    pub(crate) fn open(&self, name: &str) -> Screen<'static> {
        let mut screen = self.bare();
        let path = self.path(name);
        screen.harness.state_mut().open(&path);
        screen.settle();
        screen
    }
}

/// Writes the invented capture: the tones in a little noise, half as strong on the second channel, 24-bit.
pub(crate) fn write_capture(path: &Path, gain: f64) {
    write_channels(path, |_, x| [gain * x, gain * x / 2.0]);
}

/// Writes what `channels` makes of the tones and of the time in seconds.
pub(crate) fn write_channels(path: &Path, channels: impl Fn(f64, f64) -> [f64; 2]) {
    let spec = hound::WavSpec {
        channels: 2,
        sample_rate: RATE_HZ,
        bits_per_sample: 24,
        sample_format: hound::SampleFormat::Int,
    };
    let mut writer = hound::WavWriter::create(path, spec).unwrap();
    let mut state = 1_u32;
    for i in 0..RATE_HZ * SECONDS {
        let t = f64::from(i) / f64::from(RATE_HZ);
        state = state.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
        let noise = (f64::from(state >> 8) / f64::from(1 << 24) - 0.5) * 2e-4;
        let tones: f64 = TONES.iter().map(|(hz, a)| a * (std::f64::consts::TAU * hz * t).sin()).sum();
        for x in channels(t, 0.9 * tones + noise) {
            writer.write_sample((x * 8_388_607.0).round() as i32).unwrap();
        }
    }
    writer.finalize().unwrap();
}

/// A screen under test.
pub(crate) struct Screen<'a> {
    pub(crate) harness: Harness<'a, Workbench>,
}

impl Screen<'_> {
    /// Lets frames pass until `done`, or fails after a minute.
    pub(crate) fn wait(&mut self, what: &str, done: impl Fn(&Workbench) -> bool) {
        for _ in 0..6000 {
            self.harness.step();
            if done(self.harness.state()) {
                return;
            }
            std::thread::sleep(Duration::from_millis(10));
        }
        panic!("after a minute: {what}");
    }

    /// Lets frames pass until a text is shown, or fails after a minute.
    pub(crate) fn wait_for(&mut self, text: &str) {
        for _ in 0..6000 {
            self.harness.step();
            if self.shows(text) {
                // What has just come is laid out once more before it can be clicked.
                self.harness.step();
                self.harness.step();
                return;
            }
            std::thread::sleep(Duration::from_millis(10));
        }
        panic!("after a minute not shown: {text}");
    }

    /// Lets frames pass until nothing is being opened, saved or computed.
    pub(crate) fn settle(&mut self) {
        self.harness.step();
        self.harness.step();
        self.wait("the screen does not settle", Workbench::is_settled);
        self.harness.step();
        self.harness.step();
    }

    pub(crate) fn session(&self) -> Session {
        self.harness.state().session().expect("a capture is open").clone()
    }

    pub(crate) fn click(&mut self, label: &str) {
        self.harness.get_by_label(label).click();
        self.harness.step();
        self.harness.step();
    }

    pub(crate) fn shows(&self, text: &str) -> bool {
        self.harness.query_all_by_label_contains(text).next().is_some()
    }

    /// Opens a menu and clicks one of its entries.
    pub(crate) fn menu(&mut self, menu: &str, entry: &str) {
        self.harness.get_by_role_and_label(egui::Role::Button, menu).click();
        self.harness.step();
        self.harness.step();
        let entry = entry.to_owned();
        let found = self.harness.get_by(move |node| {
            let acts = matches!(node.role(), egui::Role::Button | egui::Role::RadioButton);
            acts && node.label().is_some_and(|label| label.starts_with(&entry))
        });
        found.click();
        self.harness.step();
        self.harness.step();
    }

    pub(crate) fn key(&mut self, modifiers: Modifiers, key: Key) {
        self.harness.key_press_modifiers(modifiers, key);
        self.harness.step();
        self.harness.step();
    }

    /// Types into whatever has the keys.
    pub(crate) fn text(&mut self, text: &str) {
        self.harness.event(Event::Text(text.to_owned()));
        self.harness.step();
        self.harness.step();
    }

    /// Types a number into the field of that name.
    pub(crate) fn type_number(&mut self, label: &str, text: &str) {
        self.harness.get_by_role_and_label(egui::Role::SpinButton, label).scroll_to_me();
        // Scrolling glides.
        self.harness.run_steps(8);
        self.harness.get_by_role_and_label(egui::Role::SpinButton, label).click();
        self.harness.step();
        self.harness.step();
        self.key(Modifiers::COMMAND, Key::A);
        self.harness.event(Event::Text(text.to_owned()));
        self.harness.step();
        self.key(Modifiers::NONE, Key::Enter);
        self.settle();
    }

    /// Marks a window in the list that is chosen from.
    pub(crate) fn choose(&mut self, window: &str) {
        let start = format!("{window}: ENBW");
        let row = self.harness.get_by(move |node| {
            node.role() == egui::Role::Button && node.label().is_some_and(|label| label.starts_with(&start))
        });
        row.click_accesskit();
        self.harness.step();
        self.harness.step();
    }

    /// Types a text in the place of what stands in the field of that name.
    pub(crate) fn type_text(&mut self, label: &str, text: &str) {
        self.harness.get_by_role_and_label(egui::Role::TextInput, label).click();
        self.harness.step();
        self.harness.step();
        self.key(Modifiers::COMMAND, Key::A);
        self.key(Modifiers::NONE, Key::Delete);
        if !text.is_empty() {
            self.harness.event(Event::Text(text.to_owned()));
            self.harness.step();
        }
        self.key(Modifiers::NONE, Key::Enter);
        self.settle();
    }

    pub(crate) fn drag(&mut self, from: Pos2, to: Pos2) {
        let button = |pos, pressed| Event::PointerButton {
            pos,
            button: PointerButton::Primary,
            pressed,
            modifiers: Modifiers::NONE,
        };
        for event in [
            Event::PointerMoved(from),
            button(from, true),
            Event::PointerMoved(from + 0.3 * (to - from)),
            Event::PointerMoved(from + 0.7 * (to - from)),
            Event::PointerMoved(to),
            button(to, false),
            Event::PointerGone,
        ] {
            self.harness.event(event);
            self.harness.step();
            self.harness.step();
        }
    }
}
