//! One frame of the screen (update and tessellation, no painting) with six panes over a segment of 2^20 samples.
//!
//! Three states: the pointer moving over the panes; the wheel zooming, so that every curve is made anew; an edge of the
//! segment dragged, with the worker busy beside. Prints median and worst of many frames.

#![allow(clippy::print_stdout, clippy::unwrap_used, missing_docs)]

use std::path::Path;
use std::sync::Arc;
use std::time::{Duration, Instant};

use eframe::egui::{self, Context, Event, Modifiers, MouseWheelUnit, PointerButton, Pos2, RawInput, Rect, pos2, vec2};
use panewise::reading::{Request, analyse_curves};
use panewise::session::{CaptureRef, Session};
use panewise::signal::{Span, Watch};
use panewise::ui::{DesktopPicker, Services, Workbench};

const RATE_HZ: u32 = 8192;
const SAMPLES: u32 = 1 << 20;
const FRAMES: usize = 200;
const SIZE: egui::Vec2 = vec2(1280.0, 800.0);

fn main() {
    let folder = tempfile::tempdir().unwrap();
    let capture = folder.path().join("bench.wav");
    write_capture(&capture);
    let mut screen = Screen::new(&capture, folder.path());
    let over_pane = pos2(700.0, 280.0);
    screen
        .measure("pointer moving over a pane", |i| vec![Event::PointerMoved(over_pane + vec2((i % 100) as f32, 0.0))]);
    screen.measure("zooming with the wheel", |i| {
        let up = if (i / 20) % 2 == 0 { 1.0 } else { -1.0 };
        vec![Event::PointerMoved(over_pane), wheel(up)]
    });
    following(&capture);
    // The end handle of a segment over the whole capture stands at the strip's right edge.
    let edge = pos2(1270.0, 90.0);
    screen.frame(vec![Event::PointerMoved(edge)]);
    screen.frame(vec![Event::PointerMoved(edge), button(edge, true)]);
    screen.measure("dragging an edge of the segment", |i| {
        vec![Event::PointerMoved(edge - vec2(1.0 + (i % 50) as f32, 0.0))]
    });
}

/// What lies between an edge's move and new curves: the samples read from the file, their transform and six panes.
fn following(path: &Path) {
    let capture = panewise::capture::open(path).unwrap();
    let mut request = Request::from_session(&Session::new(CaptureRef::of(&capture, String::new())));
    let mut times: Vec<Duration> = (0..50)
        .map(|i| {
            request.span = Span { start: 1000, samples: (1 << 17) + i };
            let start = Instant::now();
            analyse_curves(&*capture.source, &request, &Watch::new()).unwrap();
            start.elapsed()
        })
        .collect();
    times.sort();
    let ms = |t: Duration| t.as_secs_f64() * 1e3;
    let (median, worst) = (ms(times[25]), ms(times[49]));
    println!("{:36} median {median:6.2} ms, worst {worst:6.2} ms", "new curves of 2^17 samples and some");
}

fn wheel(up: f32) -> Event {
    Event::MouseWheel {
        unit: MouseWheelUnit::Line,
        delta: vec2(0.0, up),
        phase: egui::TouchPhase::Move,
        source: egui::MouseWheelSource::Unknown,
        modifiers: Modifiers::NONE,
    }
}

fn button(pos: Pos2, pressed: bool) -> Event {
    Event::PointerButton { pos, button: PointerButton::Primary, pressed, modifiers: Modifiers::NONE }
}

struct Screen {
    ctx: Context,
    bench: Workbench,
    n_frames: u32,
}

impl Screen {
    /// A screen that has opened the capture, computed everything and come to rest.
    fn new(capture: &Path, folder: &Path) -> Self {
        let ctx = Context::default();
        Workbench::dress(&ctx);
        let services = Services {
            picker: Arc::new(DesktopPicker),
            recent: Some(folder.join("recent.ron")),
            recovery: None,
            preferences: None,
            demonstration: None,
        };
        let mut screen = Self { ctx, bench: Workbench::new(services), n_frames: 0 };
        screen.bench.open(capture);
        while !(screen.bench.is_settled() && screen.bench.reading().is_some_and(|(_, current)| current)) {
            screen.frame(Vec::new());
            std::thread::sleep(Duration::from_millis(5));
        }
        for _ in 0..20 {
            screen.frame(Vec::new());
        }
        screen
    }

    fn frame(&mut self, events: Vec<Event>) -> Duration {
        self.n_frames += 1;
        let input = RawInput {
            screen_rect: Some(Rect::from_min_size(Pos2::ZERO, SIZE)),
            time: Some(f64::from(self.n_frames) / 60.0),
            events,
            ..RawInput::default()
        };
        let start = Instant::now();
        let bench = &mut self.bench;
        let output = self.ctx.run_ui(input, |ui| {
            bench.logic(ui);
            bench.ui(ui);
        });
        let primitives = self.ctx.tessellate(output.shapes.clone(), output.pixels_per_point);
        let taken = start.elapsed();
        assert!(!primitives.is_empty());
        output.drop_without_applying_deltas();
        taken
    }

    fn measure(&mut self, what: &str, events: impl Fn(usize) -> Vec<Event>) {
        let mut times: Vec<Duration> = (0..FRAMES).map(|i| self.frame(events(i))).collect();
        times.sort();
        let ms = |t: Duration| t.as_secs_f64() * 1e3;
        println!("{what:36} median {:6.2} ms, worst {:6.2} ms", ms(times[FRAMES / 2]), ms(times[FRAMES - 1]));
    }
}

fn write_capture(path: &Path) {
    let spec = hound::WavSpec {
        channels: 1,
        sample_rate: RATE_HZ,
        bits_per_sample: 24,
        sample_format: hound::SampleFormat::Int,
    };
    let mut writer = hound::WavWriter::create(path, spec).unwrap();
    let mut state = 1_u32;
    for i in 0..SAMPLES {
        state = state.wrapping_mul(1_664_525).wrapping_add(1_013_904_223);
        let noise = (f64::from(state >> 8) / f64::from(1 << 24) - 0.5) * 2e-4;
        let t = f64::from(i) / f64::from(RATE_HZ);
        let tones: f64 =
            (1..=20).map(|k| (std::f64::consts::TAU * 24.96 * f64::from(k) * t).sin() / f64::from(30 * k)).sum();
        writer.write_sample(((tones + noise) * 8_388_607.0).round() as i32).unwrap();
    }
    writer.finalize().unwrap();
}
