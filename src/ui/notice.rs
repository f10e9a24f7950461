//! Sentences about what happened, until they are dismissed.

use eframe::egui::{RichText, Ui};

use super::theme;

/// At most so many are shown; older ones go.
const MOST: usize = 4;

#[derive(Debug)]
struct Notice {
    text: String,
    alarming: bool,
    /// About the samples of the channel read.
    doubt: bool,
}

/// The notices shown.
#[derive(Debug, Default)]
pub(super) struct Notices {
    list: Vec<Notice>,
}

impl Notices {
    /// Something did not work.
    pub(super) fn refuse(&mut self, text: &str) {
        self.add(text, true, false);
    }

    /// Something to know.
    pub(super) fn tell(&mut self, text: &str) {
        self.add(text, false, false);
    }

    /// Something doubtful about the samples of the channel read.
    pub(super) fn doubt(&mut self, text: &str) {
        self.add(text, false, true);
    }

    /// Another channel is read.
    pub(super) fn forget_doubts(&mut self) {
        self.list.retain(|n| !n.doubt);
    }

    fn add(&mut self, text: &str, alarming: bool, doubt: bool) {
        self.list.retain(|n| n.text != text);
        self.list.push(Notice { text: text.to_owned(), alarming, doubt });
        if self.list.len() > MOST {
            self.list.remove(0);
        }
    }

    /// What was said is not so any more.
    pub(super) fn forget(&mut self, text: &str) {
        self.list.retain(|n| n.text != text);
    }

    /// What belonged to another capture.
    pub(super) fn clear(&mut self) {
        self.list.clear();
    }

    pub(super) fn is_empty(&self) -> bool {
        self.list.is_empty()
    }

    /// Shows them, each with a way to be rid of it.
    pub(super) fn show(&mut self, ui: &mut Ui) {
        let palette = theme::palette(ui.ctx());
        let mut gone = None;
        for (i, notice) in self.list.iter().enumerate() {
            ui.horizontal(|ui| {
                if ui.button("Dismiss").accessible_name(format!("Dismiss: {}", notice.text)).clicked() {
                    gone = Some(i);
                }
                let ink = if notice.alarming { palette.alarm } else { palette.ink };
                ui.add(eframe::egui::Label::new(RichText::new(&notice.text).color(ink)).wrap());
            });
        }
        if let Some(i) = gone {
            self.list.remove(i);
        }
    }
}
