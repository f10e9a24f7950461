//! The scale in the setup column: what a sample means, and how a level is stated.

use eframe::egui::{self, ComboBox, TextEdit, Ui};

use super::desk::Desk;
use super::typed::{Bounds, complain, number_row, watched};
use super::view::{Intent, Intents};
use super::widget::{quiet, row, section};
use super::{figure, list, theme};
use crate::session::Command;
use crate::units::{Detector, Factor, Quantity, Scale};

/// Shows the section.
pub(super) fn show(ui: &mut Ui, desk: &Desk, intents: &mut Intents) {
    section(ui, "Scale");
    let before = desk.session.scale();
    let mut scale = before.clone();
    let mut ended = quantity(ui, &mut scale);
    ended |= unit(ui, &mut scale);
    ended |= factor(ui, &mut scale);
    detector(ui, &mut scale);
    ended |= reference(ui, &mut scale);
    match scale.check() {
        Ok(()) => drop(quiet(ui, format!("levels: {}", scale.reference_label()))),
        Err(error) => {
            let alarm = theme::palette(ui.ctx()).alarm;
            ui.label(egui::RichText::new(error.to_string()).font(theme::quiet()).color(alarm));
        }
    }
    if scale != before {
        intents.push(Intent::Change(Command::SetScale(desk.session.channel, scale)));
    }
    if ended {
        intents.push(Intent::CloseStep);
    }
}

/// The unit in which a quantity is met most often.
fn usual_unit(quantity: Quantity) -> &'static str {
    match quantity {
        Quantity::Velocity => "mm/s",
        Quantity::Displacement => "µm",
        Quantity::Strain => "µstrain",
        other => other.si_symbol(),
    }
}

fn quantity(ui: &mut Ui, scale: &mut Scale) -> bool {
    let title = |q: Quantity| if q == Quantity::Plain { "none stated" } else { q.title() };
    row(ui, "Quantity", |ui, id| {
        let combo = ComboBox::from_id_salt("quantity").selected_text(title(scale.quantity));
        let shown = list::show(ui, combo, |ui| {
            let mut chosen = false;
            for quantity in Quantity::ALL {
                let taken = list::item(ui, scale.quantity == quantity, title(quantity));
                chosen |= taken;
                if taken && scale.quantity != quantity {
                    scale.quantity = quantity;
                    usual_unit(quantity).clone_into(&mut scale.unit);
                    scale.reference = None;
                    // No factor is assumed, and none stated for another quantity is kept: levels wait for it.
                    scale.factor = Factor::NotStated;
                }
            }
            chosen
        });
        shown.labelled_by(id);
        false
    })
}

fn unit(ui: &mut Ui, scale: &mut Scale) -> bool {
    row(ui, "Unit", |ui, id| {
        let response = ui.add(TextEdit::singleline(&mut scale.unit).desired_width(64.0)).labelled_by(id);
        response.lost_focus()
    })
}

fn factor(ui: &mut Ui, scale: &mut Scale) -> bool {
    if scale.is_full_scale() {
        quiet(ui, "samples as the file has them, 1 FS is full scale");
        return false;
    }
    let by_sensitivity = matches!(scale.factor, Factor::Sensitivity { .. });
    row(ui, "Stated by", |ui, id| {
        let title = if by_sensitivity { "sensitivity" } else { "factor" };
        let combo = ComboBox::from_id_salt("factor").selected_text(title);
        let shown = list::show(ui, combo, |ui| {
            let units = scale.units_per_full_scale();
            let factor = list::item(ui, !by_sensitivity, "factor");
            if factor && by_sensitivity {
                scale.factor = Factor::UnitsPerFullScale(units);
            }
            let sensitivity = list::item(ui, by_sensitivity, "sensitivity");
            if sensitivity && !by_sensitivity {
                let full_scale_volts = 1.0;
                scale.factor = Factor::Sensitivity { volts_per_unit: full_scale_volts / units, full_scale_volts };
            }
            factor || sensitivity
        });
        shown.labelled_by(id);
    });
    let unit = scale.unit.clone();
    match &mut scale.factor {
        Factor::NotStated => {
            // Nothing is stated yet: 0 stands for that, and may be left standing.
            let bounds = Bounds::above_zero(0.0..=1e12);
            let typed = number_row(
                ui,
                "1 FS is",
                0.0,
                &bounds,
                |f| f.speed(0.1).suffix(format!(" {unit}")).max_decimals(9),
                |_| {},
            );
            if typed.changed && typed.value > 0.0 {
                scale.factor = Factor::UnitsPerFullScale(typed.value);
            }
            typed.ended
        }
        Factor::UnitsPerFullScale(units) => positive(ui, "1 FS is", units, &format!(" {unit}")),
        Factor::Sensitivity { volts_per_unit, full_scale_volts } => {
            let mut millivolts = *volts_per_unit * 1e3;
            let ended = positive(ui, "Sensor", &mut millivolts, &format!(" mV/({unit})"));
            if (millivolts * 1e-3 - *volts_per_unit).abs() > 1e-12 * volts_per_unit.abs() {
                *volts_per_unit = millivolts * 1e-3;
            }
            positive(ui, "1 FS is", full_scale_volts, " V") | ended
        }
    }
}

/// A field for a number above 0; typed, not dragged into nonsense.
fn positive(ui: &mut Ui, label: &str, value: &mut f64, suffix: &str) -> bool {
    let speed = (value.abs() * 0.005).max(1e-6);
    let bounds = Bounds::above_zero(1e-12..=1e12);
    let typed = number_row(ui, label, *value, &bounds, |f| f.speed(speed).suffix(suffix).max_decimals(9), |_| {});
    if typed.changed {
        *value = typed.value;
    }
    typed.ended
}

fn detector(ui: &mut Ui, scale: &mut Scale) {
    row(ui, "Detector", |ui, id| {
        let combo = ComboBox::from_id_salt("detector").selected_text(scale.detector.title());
        let shown = list::show(ui, combo, |ui| {
            let mut chosen = false;
            for detector in Detector::ALL {
                if list::item(ui, scale.detector == detector, detector.title()) {
                    scale.detector = detector;
                    chosen = true;
                }
            }
            chosen
        });
        shown.labelled_by(id);
    });
}

fn reference(ui: &mut Ui, scale: &mut Scale) -> bool {
    let mut own = scale.reference.is_some();
    let (ended, complaint) = row(ui, "Reference", |ui, id| {
        if ui.checkbox(&mut own, "own").labelled_by(id).changed() {
            scale.reference = own.then_some(1.0);
        }
        let Some(value) = scale.reference else { return (false, None) };
        let suffix = format!(" {}", scale.unit);
        let speed = (value.abs() * 0.005).max(1e-9);
        let bounds = Bounds::above_zero(1e-15..=1e9);
        let (response, complaint) = watched(ui, scale.reference.get_or_insert(value), &bounds, |f| {
            f.speed(speed).suffix(suffix).max_decimals(12)
        });
        let response = response.accessible_name(format!("Reference in {}", figure::significant(value, 3)));
        (response.drag_stopped() || response.lost_focus(), complaint)
    });
    if let Some(complaint) = complaint {
        complain(ui, &complaint);
    }
    ended
}
