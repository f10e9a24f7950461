//! What the window keeps from run to run beside any document: its theme, the size of all that is on it, its own size.

use std::io::{Error, Result, Write};
use std::path::Path;

use eframe::egui::{Context, ThemePreference};
use serde::{Deserialize, Serialize};

/// No file of preferences is longer than this.
const MOST_BYTES: u64 = 1 << 16;
/// The window is at least and at most so large, in points.
const SIDES: (f32, f32) = (560.0, 16_000.0);
/// The smallest and the largest scale of the screen.
pub(super) const SCALES: (f32, f32) = (1.0, 2.0);

#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Serialize, Deserialize)]
#[serde(rename_all = "lowercase")]
enum Theme {
    Light,
    Dark,
    #[default]
    System,
}

/// What is kept.
#[derive(Debug, Clone, PartialEq, Serialize, Deserialize)]
#[serde(default)]
pub(super) struct Preferences {
    theme: Theme,
    /// How much larger than normal everything is.
    scale: f32,
    /// Width and height, in points of the normal scale.
    pub(super) window: (f32, f32),
    pub(super) maximised: bool,
    /// Who decides things here, as it was typed last.
    pub(super) person: String,
}

impl Default for Preferences {
    fn default() -> Self {
        Self { theme: Theme::System, scale: 1.0, window: (1280.0, 800.0), maximised: false, person: String::new() }
    }
}

impl Preferences {
    /// Those kept in `file`; the standing ones where there are none that can be read.
    pub(super) fn load(file: &Path) -> Self {
        let short = std::fs::metadata(file).is_ok_and(|m| m.is_file() && m.len() <= MOST_BYTES);
        let text = short.then(|| std::fs::read_to_string(file).ok()).flatten();
        text.and_then(|text| ron::from_str::<Self>(&text).ok()).unwrap_or_default().held()
    }

    /// Keeps them in `file`: written beside its place and moved there in one step.
    pub(super) fn save(&self, file: &Path) -> Result<()> {
        let pretty = ron::ser::PrettyConfig::new().struct_names(true).new_line("\n").indentor("  ");
        let text = ron::Options::default().to_string_pretty(self, pretty).map_err(Error::other)?;
        let folder = file.parent().filter(|f| !f.as_os_str().is_empty()).unwrap_or_else(|| Path::new("."));
        std::fs::create_dir_all(folder)?;
        let mut part = tempfile::Builder::new().prefix(".panewise-").suffix(".part").tempfile_in(folder)?;
        part.write_all(text.as_bytes())?;
        part.write_all(b"\n")?;
        part.as_file().sync_all()?;
        part.persist(file).map(drop).map_err(|error| error.error)
    }

    /// What is in force now. A window that fills the screen or is out of sight keeps the size it had `before`.
    pub(super) fn in_force(ctx: &Context, before: &Self) -> Self {
        let theme = match ctx.options(|o| o.theme_preference) {
            ThemePreference::Light => Theme::Light,
            ThemePreference::Dark => Theme::Dark,
            ThemePreference::System => Theme::System,
        };
        let scale = ctx.zoom_factor();
        let (size, maximised, apart) = ctx.input(|i| {
            let viewport = i.viewport();
            let is = |what: Option<bool>| what.unwrap_or(false);
            let size = viewport.inner_rect.map(|r| r.size() * scale);
            (size, is(viewport.maximized), is(viewport.fullscreen) || is(viewport.minimized))
        });
        let size = size.filter(|s| !maximised && !apart && s.x >= SIDES.0 && s.y >= SIDES.0);
        let window = size.map_or(before.window, |s| (s.x.round(), s.y.round()));
        Self { theme, scale, window, maximised, person: before.person.clone() }.held()
    }

    /// Puts theme and scale in force; the window itself is made with its size.
    pub(super) fn put_in_force(&self, ctx: &Context) {
        ctx.set_theme(match self.theme {
            Theme::Light => ThemePreference::Light,
            Theme::Dark => ThemePreference::Dark,
            Theme::System => ThemePreference::System,
        });
        ctx.set_zoom_factor(self.scale);
    }

    /// Every number in its range, whatever the file says.
    fn held(mut self) -> Self {
        let standing = Self::default();
        let inside = |v: f32, (lo, hi): (f32, f32), or: f32| if v.is_finite() { v.clamp(lo, hi) } else { or };
        self.scale = inside(self.scale, SCALES, standing.scale);
        self.window =
            (inside(self.window.0, SIDES, standing.window.0), inside(self.window.1, SIDES, standing.window.1));
        self
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn what_is_kept_comes_back_and_what_cannot_be_is_brought_into_range() {
        let folder = tempfile::tempdir().unwrap();
        let file = folder.path().join("settings/preferences.ron");
        assert_eq!(Preferences::load(&file), Preferences::default());
        let kept = Preferences {
            theme: Theme::Dark,
            scale: 1.5,
            window: (1024.0, 700.0),
            maximised: true,
            person: "N. Name".to_owned(),
        };
        kept.save(&file).unwrap();
        assert_eq!(Preferences::load(&file), kept);
        std::fs::write(&file, "Preferences(scale: NaN, window: (1e9, -3), theme: light, later: 3)").unwrap();
        let held = Preferences::load(&file);
        assert_eq!((held.scale, held.window, held.theme), (1.0, (SIDES.1, SIDES.0), Theme::Light));
        std::fs::write(&file, "Preferences(scale: ").unwrap();
        assert_eq!(Preferences::load(&file), Preferences::default());
        std::fs::write(&file, [0xff, 0xfe]).unwrap();
        assert_eq!(Preferences::load(&file), Preferences::default());
    }
}
