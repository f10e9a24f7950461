//! Numbers as people type them: read with either decimal mark, and a word on what was not taken as it was typed.

use std::cell::{Cell, RefCell};
use std::ops::RangeInclusive;

use eframe::egui::{DragValue, Id, Label, Response, RichText, Ui};

use super::theme;
use super::widget::{Typed, row};

/// What a number may be.
#[derive(Debug, Clone)]
pub(super) struct Bounds {
    range: RangeInclusive<f64>,
    above_zero: bool,
}

impl Bounds {
    /// A number outside is taken as the nearest that can be, and that is said.
    pub(super) fn within(range: RangeInclusive<f64>) -> Self {
        Self { range, above_zero: false }
    }

    /// A number that is not above 0, or beyond what the range allows, is not taken, and that is said.
    pub(super) fn above_zero(range: RangeInclusive<f64>) -> Self {
        Self { range, above_zero: true }
    }

    /// What is to be said of a number that was typed as `text`.
    fn complaint(&self, number: f64, text: &str) -> Option<String> {
        let (lo, hi) = (*self.range.start(), *self.range.end());
        if self.above_zero && number <= 0.0 {
            return Some(format!("{text} is not taken: it has to be above 0."));
        }
        if self.range.contains(&number) {
            return None;
        }
        if self.above_zero {
            return Some(format!("{text} is not taken: it has to lie between {lo:e} and {hi:e}."));
        }
        let short = |v: f64| {
            if v != 0.0 && v.abs() < 1e-5 { format!("{v:e}") } else { ((v * 1e6).round() / 1e6).to_string() }
        };
        let taken = if number < lo { lo } else { hi };
        Some(format!("{text} is outside {} to {}: {} is taken.", short(lo), short(hi), short(taken)))
    }

    fn takes(&self, number: f64) -> bool {
        !self.above_zero || (number > 0.0 && self.range.contains(&number))
    }
}

/// Reads a number: spaces do not count, the decimal mark may be a comma.
pub(super) fn read(text: &str) -> Option<f64> {
    let mut bare: String = text.chars().filter(|c| !c.is_whitespace()).collect();
    bare = bare.replace('−', "-");
    if bare.matches(',').count() == 1 && !bare.contains('.') {
        bare = bare.replace(',', ".");
    }
    bare.parse().ok().filter(|v: &f64| v.is_finite())
}

/// What came of a text, where one was taken: a complaint, or none.
type Outcome = Option<Option<String>>;

/// Adds a number's field. A text that was left as it was shown changes nothing, though digits may have been left out
/// of it. Gives what came of a text that was typed.
fn add<'a>(
    ui: &mut Ui,
    value: &'a mut f64,
    bounds: &'a Bounds,
    shape: impl FnOnce(DragValue<'a>) -> DragValue<'a>,
) -> (Response, Outcome) {
    let before = *value;
    let outcome: Cell<Outcome> = Cell::new(None);
    let shown = RefCell::new(String::new());
    let formatter = ui.style().number_formatter.clone();
    let format = |v: f64, decimals: RangeInclusive<usize>| {
        let text = formatter.format(v, decimals);
        if v == before {
            shown.borrow_mut().clone_from(&text);
        }
        text
    };
    let parse = |text: &str| {
        let text = text.trim();
        if text.is_empty() || *shown.borrow() == text {
            return Some(before);
        }
        let Some(number) = read(text) else {
            outcome.set(Some(Some(format!("“{text}” is no number."))));
            return None;
        };
        outcome.set(Some(bounds.complaint(number, text)));
        bounds.takes(number).then_some(number)
    };
    let field = shape(DragValue::new(value).update_while_editing(false)).range(bounds.range.clone());
    let response = ui.add(field.custom_formatter(format).custom_parser(parse));
    (response, outcome.take())
}

/// A number's field and what is to be said of what was typed there, kept until something else is.
pub(super) fn watched<'a>(
    ui: &mut Ui,
    value: &'a mut f64,
    bounds: &'a Bounds,
    shape: impl FnOnce(DragValue<'a>) -> DragValue<'a>,
) -> (Response, Option<String>) {
    let (response, outcome) = add(ui, value, bounds, shape);
    let key = response.id.with("complaint");
    match outcome {
        Some(Some(complaint)) => drop(ui.data_mut(|d| d.insert_temp(key, complaint))),
        Some(None) => ui.data_mut(|d| d.remove::<String>(key)),
        None if response.gained_focus() || response.dragged() => ui.data_mut(|d| d.remove::<String>(key)),
        None => {}
    }
    let complaint = ui.data(|d| d.get_temp::<String>(key));
    (response, complaint)
}

/// A row of a form with a number's field and something beside it; below, what was not taken as it was typed.
pub(super) fn number_row(
    ui: &mut Ui,
    label: &str,
    mut value: f64,
    bounds: &Bounds,
    shape: impl for<'a> FnOnce(DragValue<'a>) -> DragValue<'a>,
    beside: impl FnOnce(&mut Ui),
) -> Typed {
    let (response, complaint) = row(ui, label, |ui, id: Id| {
        let (response, complaint) = watched(ui, &mut value, bounds, shape);
        let response = response.labelled_by(id);
        beside(ui);
        (response, complaint)
    });
    if let Some(complaint) = complaint {
        complain(ui, &complaint);
    }
    Typed { value, changed: response.changed(), ended: response.drag_stopped() || response.lost_focus() }
}

/// Says what was not taken.
pub(super) fn complain(ui: &mut Ui, text: &str) {
    let alarm = theme::palette(ui.ctx()).alarm;
    ui.add(Label::new(RichText::new(text).font(theme::quiet()).color(alarm)).wrap());
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn numbers_are_read_with_either_decimal_mark() {
        assert_eq!(read("9,5"), Some(9.5));
        assert_eq!(read(" 1 024.25 "), Some(1024.25));
        assert_eq!(read("−3"), Some(-3.0));
        assert_eq!(read("1e3"), Some(1000.0));
        for text in ["abc", "1,024.5", "1,2,3", "inf", "nan", ""] {
            assert_eq!(read(text), None, "{text}");
        }
    }

    #[test]
    fn what_is_outside_is_clamped_or_refused_and_said() {
        let beta = Bounds::within(0.0..=40.0);
        assert!(beta.takes(100.0) && beta.complaint(40.0, "40").is_none());
        assert_eq!(beta.complaint(100.0, "100").unwrap(), "100 is outside 0 to 40: 40 is taken.");
        let factor = Bounds::above_zero(1e-12..=1e12);
        assert!(!factor.takes(-5.0) && !factor.takes(0.0) && factor.takes(98.1));
        assert_eq!(factor.complaint(-5.0, "-5").unwrap(), "-5 is not taken: it has to be above 0.");
        assert!(factor.complaint(98.1, "98,1").is_none());
    }
}
