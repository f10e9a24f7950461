//! The sample rate in the setup column: the file's, or one that stands in for it.

use eframe::egui::{Id, RichText, Ui};

use super::desk::Desk;
use super::view::{Intent, Intents};
use super::{figure, theme, widget};
use crate::session::Command;

/// Shows the row. An empty field takes the file's rate.
pub(super) fn show(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    let (key, complaint) = (Id::unique("rate"), Id::unique("rate, complaint"));
    let own = desk.session.rate_hz;
    let of_file = format!("{} Hz", plain(desk.session.capture.sample_rate_hz));
    let typed = widget::row(ui, "Rate", |ui, id| {
        let hint = RichText::new(format!("file: {of_file}")).color(theme::palette(ui.ctx()).quiet);
        let current = own.map(plain).unwrap_or_default();
        let (response, typed) = widget::text_when_left(ui, key, &current, |f| f.desired_width(120.0).hint_text(hint));
        response.labelled_by(id).on_hover_text(
            "Samples a second where the file's rate is wrong: a number or a ratio such as 25600/3; empty for the file's",
        );
        typed
    });
    if let Some(text) = typed {
        match rate(&text) {
            Ok(rate) => {
                let _ = ui.data_mut(|d| d.remove_temp::<String>(complaint));
                if rate != own {
                    intents.push(Intent::Change(Command::SetRate(rate)));
                }
            }
            Err(sentence) => ui.data_mut(|d| {
                d.insert_temp(complaint, sentence);
            }),
        }
    }
    if let Some(sentence) = ui.data(|d| d.get_temp::<String>(complaint)) {
        let alarm = theme::palette(ui.ctx()).alarm;
        ui.label(RichText::new(sentence).font(theme::quiet()).color(alarm));
    } else if own.is_some() {
        widget::quiet(ui, format!("in the place of the file's {of_file}"));
    }
}

/// A rate in as few digits as say it.
fn plain(rate_hz: f64) -> String {
    let text = figure::fixed(rate_hz, 6);
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// A rate as it is written: nothing, a number, or a ratio of two numbers.
fn rate(text: &str) -> Result<Option<f64>, String> {
    let text = text.trim().trim_end_matches("Hz").trim();
    if text.is_empty() {
        return Ok(None);
    }
    let number = |part: &str| part.trim().parse::<f64>().ok();
    let value = match text.split_once('/') {
        Some((over, under)) => number(over).zip(number(under)).map(|(a, b)| a / b),
        None => number(text),
    };
    let usable = value.filter(|v| (1e-6..=1e12).contains(v));
    usable.map(Some).ok_or_else(|| "not a rate: write a number above 0, or a ratio such as 25600/3".to_owned())
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_rate_is_a_number_or_a_ratio_and_nothing_is_the_files() {
        assert_eq!(rate("8192"), Ok(Some(8192.0)));
        assert_eq!(rate(" 25600 / 3 Hz"), Ok(Some(25_600.0 / 3.0)));
        assert_eq!(rate("  "), Ok(None));
        for wrong in ["0", "-5", "1/0", "fast", "1/2/3", "NaN", "inf"] {
            assert!(rate(wrong).is_err(), "{wrong}");
        }
    }

    #[test]
    fn a_rate_is_written_without_noughts_at_its_end() {
        assert_eq!(plain(8192.0), "8192");
        assert_eq!(plain(25_600.0 / 3.0), "8533.333333");
        assert_eq!(plain(0.5), "0.5");
    }
}
