//! The window: a thin shell around the [`Workbench`].

use std::path::PathBuf;

use eframe::egui;

use super::preferences::Preferences;
use super::{Services, Workbench};

/// Why there is no window.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum RunError {
    /// There is no display, or no OpenGL on it.
    #[error("no window can be opened here ({reason})")]
    NoWindow {
        /// What is missing, in a few words.
        reason: String,
    },
}

/// Opens the window, with a capture or a session on it if one is named, and returns when it is closed.
///
/// # Errors
/// [`RunError::NoWindow`] where there is no display or no OpenGL.
pub fn run(start: Option<PathBuf>) -> Result<(), RunError> {
    let services = Services::desktop();
    let kept = services.preferences.as_deref().map(Preferences::load).unwrap_or_default();
    let viewport = egui::ViewportBuilder::default()
        .with_title("Panewise")
        .with_app_id("panewise")
        .with_inner_size([kept.window.0, kept.window.1])
        .with_maximized(kept.maximised)
        .with_min_inner_size([800.0, 560.0])
        .with_drag_and_drop(true);
    let viewport = match eframe::icon_data::from_png_bytes(include_bytes!("../../assets/icon.png")) {
        Ok(icon) => viewport.with_icon(icon),
        Err(_) => viewport,
    };
    let options = eframe::NativeOptions { viewport, ..Default::default() };
    let made = eframe::run_native(
        "panewise",
        options,
        Box::new(move |cc| Ok(Box::new(App::new(&cc.egui_ctx, services, start)))),
    );
    made.map_err(|error| RunError::NoWindow { reason: reason(&error) })
}

/// Why there is no window, in a few words: what the system itself says names lines of its source.
fn reason(error: &eframe::Error) -> String {
    match error {
        eframe::Error::WinitEventLoop(_) | eframe::Error::Winit(_) => "there is no display".to_owned(),
        eframe::Error::NoGlutinConfigs(..) | eframe::Error::Glutin(_) | eframe::Error::OpenGL(_) => {
            "the display has no OpenGL".to_owned()
        }
        other @ eframe::Error::AppCreation(_) => {
            other.to_string().lines().next().unwrap_or("no reason given").to_owned()
        }
    }
}

struct App {
    bench: Workbench,
}

impl App {
    fn new(ctx: &egui::Context, services: Services, start: Option<PathBuf>) -> Self {
        Workbench::dress(ctx);
        let mut bench = Workbench::new(services);
        if let Some(path) = start {
            bench.open(&path);
        }
        Self { bench }
    }
}

impl eframe::App for App {
    fn logic(&mut self, ctx: &egui::Context, _: &mut eframe::Frame) {
        self.bench.logic(ctx);
    }

    fn ui(&mut self, ui: &mut egui::Ui, _: &mut eframe::Frame) {
        self.bench.ui(ui);
    }

    fn on_exit(&mut self, _: Option<&eframe::glow::Context>) {
        self.bench.finish();
    }
}
