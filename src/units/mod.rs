//! Quantities, units, detectors, references and decibels: what a sample means and how a level is stated.

mod quantity;
mod scale;
mod unit;

pub use quantity::Quantity;
pub use scale::{Detector, Factor, Scale, ScaleError};
pub use unit::{Unit, UnitError};

/// A number for a message, in few letters whatever its size.
pub fn brief(value: f64) -> String {
    let plain = value == 0.0 || !value.is_finite() || (1e-4..1e9).contains(&value.abs());
    if plain { value.to_string() } else { format!("{value:e}") }
}

/// A ratio of field quantities in decibels, 20 lg(ratio); -∞ for 0.
pub fn db(ratio: f64) -> f64 {
    20.0 * ratio.log10()
}

/// The ratio of field quantities that `db` decibels stand for.
pub fn from_db(db: f64) -> f64 {
    10.0_f64.powf(db / 20.0)
}
