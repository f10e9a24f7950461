//! What is kept without being asked for: unsaved work for recovery, theme and sizes for the next run.

use std::time::{Duration, Instant};

use eframe::egui::Context;

use super::preferences::Preferences;
use super::workbench::Workbench;

/// A document that was changed is kept for recovery so long after.
const AUTOSAVE_AFTER: Duration = Duration::from_secs(3);

/// Theme and sizes that were changed are kept so long after.
const PREFERENCES_AFTER: Duration = Duration::from_secs(1);

impl Workbench {
    /// The document has changed: it has to be kept for recovery before long.
    pub(super) fn note_change(&mut self) {
        self.autosave_due.get_or_insert_with(|| Instant::now() + AUTOSAVE_AFTER);
    }

    pub(super) fn autosave(&mut self, ctx: &Context) {
        let Some(due) = self.autosave_due else { return };
        let left = due.saturating_duration_since(Instant::now());
        if !left.is_zero() {
            ctx.request_repaint_after(left);
            return;
        }
        self.autosave_due = None;
        let (Some(desk), Some(threads), Some(folder)) = (&self.desk, &self.threads, &self.services.recovery) else {
            return;
        };
        let slot = self.slot.clone();
        if !desk.is_unsaved() {
            threads.files.run(move |_| slot.clear());
            return;
        }
        let (folder, session, file) = (folder.clone(), desk.session.clone(), desk.file.clone());
        threads.files.run(move |tell| {
            if let Some(event) = slot.keep(&folder, &session, file.as_deref()) {
                tell(event);
            }
        });
    }

    /// Who decides things here; empty until somebody has said so.
    pub(super) fn person(&self) -> &str {
        self.preferences.as_ref().map_or("", |p| &p.person)
    }

    /// Remembers who decides things here.
    pub(super) fn remember_person(&mut self, person: &str) {
        let preferences = self.preferences.get_or_insert_with(Preferences::default);
        if preferences.person != person {
            person.clone_into(&mut preferences.person);
            self.preferences_due.get_or_insert_with(|| Instant::now() + PREFERENCES_AFTER);
        }
    }

    /// Puts theme and sizes in force at the start, and keeps them when they have changed.
    pub(super) fn keep_preferences(&mut self, ctx: &Context) {
        let (Some(file), Some(threads)) = (&self.services.preferences, &self.threads) else { return };
        let Some(before) = &self.preferences else {
            let kept = Preferences::load(file);
            kept.put_in_force(ctx);
            self.preferences = Some(kept);
            return;
        };
        let now = Preferences::in_force(ctx, before);
        if now != *before {
            self.preferences_due.get_or_insert_with(|| Instant::now() + PREFERENCES_AFTER);
            self.preferences = Some(now.clone());
        }
        let Some(due) = self.preferences_due else { return };
        let left = due.saturating_duration_since(Instant::now());
        if !left.is_zero() {
            ctx.request_repaint_after(left);
            return;
        }
        self.preferences_due = None;
        let file = file.clone();
        threads.files.run(move |_| {
            // What cannot be kept is set anew next time.
            let _ = now.save(&file);
        });
    }
}
