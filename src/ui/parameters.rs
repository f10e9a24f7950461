//! Editing a window's parameters: a named spin box for each, or a text for a list of coefficients.

use eframe::egui::{Id, Ui};

use super::typed::{Bounds, watched};
use super::{figure, theme, widget};
use crate::window::Window;

/// More parameters than this are edited as one text.
const MOST_BOXES: usize = 2;

/// What came of editing.
#[derive(Debug, Default)]
pub(super) struct Edited {
    /// The window with other parameters.
    pub(super) window: Option<Window>,
    /// A drag or a text has ended.
    pub(super) ended: bool,
    /// A field is being dragged, typed in or hovered: what it does to the kernel should be seen.
    pub(super) busy: bool,
    /// What is to be said of a number that was not taken as it was typed.
    pub(super) complaint: Option<String>,
}

/// Shows the fields of `window`, whose names for assistive technology begin with `name`.
pub(super) fn edit(ui: &mut Ui, key: Id, name: &str, window: &Window) -> Edited {
    let specs = window.entry().parameters;
    if specs.len().max(window.parameters().len()) > MOST_BOXES {
        return coefficients(ui, key, name, window);
    }
    let mut edited = Edited::default();
    for (i, (value, spec)) in window.parameters().iter().zip(specs).enumerate() {
        let mut v = *value;
        let decimals = if spec.whole { 0 } else { figure::decimals(spec.step * 10.0, 4).max(2) };
        let bounds = Bounds::within(spec.min..=spec.max);
        let (response, complaint) = watched(ui, &mut v, &bounds, |field| {
            field.speed(spec.step * 0.2).max_decimals(decimals).prefix(format!("{} ", spec.symbol))
        });
        let response = response.accessible_name(format!("{name}: {}", spec.symbol));
        edited.complaint = edited.complaint.or(complaint);
        if response.changed() {
            let mut all = window.parameters().to_vec();
            if let Some(place) = all.get_mut(i) {
                *place = if spec.whole { v.round() } else { v };
            }
            edited.window = Window::from_parts(window.name(), &all).ok();
        }
        edited.ended |= response.drag_stopped() || response.lost_focus();
        edited.busy |= response.dragged() || response.has_focus() || response.hovered();
    }
    edited
}

/// A list of parameters as text, taken when the field is left; a list that cannot be is not taken.
fn coefficients(ui: &mut Ui, key: Id, name: &str, window: &Window) -> Edited {
    let list: Vec<String> = window.parameters().iter().map(f64::to_string).collect();
    let (response, typed) =
        widget::text_when_left(ui, key, &list.join(", "), |f| f.desired_width(110.0).font(theme::quiet()));
    let response = response.accessible_name(format!("{name}: coefficients"));
    let taken = typed.as_deref().and_then(numbers).and_then(|n| Window::from_parts(window.name(), &n).ok());
    Edited {
        window: taken.filter(|w| w != window),
        ended: typed.is_some(),
        busy: response.has_focus(),
        complaint: None,
    }
}

/// Numbers parted by commas; none is no list.
fn numbers(text: &str) -> Option<Vec<f64>> {
    text.split(',').map(|part| part.trim().parse().ok()).collect()
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_list_is_numbers_parted_by_commas() {
        assert_eq!(numbers(" 0.5, 0.25 ,1e-3"), Some(vec![0.5, 0.25, 1e-3]));
        assert_eq!(numbers("0.5; 0.5"), None);
        assert_eq!(numbers(""), None);
    }
}
