//! Units: a symbol, the quantity it measures and its size in the coherent SI unit.

use std::fmt;

use super::Quantity;

/// A unit of a quantity, spelt as the user will see it (`m/s²`, `mm/s`, `FS`).
#[derive(Debug, Clone, PartialEq)]
pub struct Unit {
    symbol: String,
    quantity: Quantity,
    to_si: f64,
}

/// A unit that is not known.
#[derive(Debug, Clone, PartialEq, Eq, thiserror::Error)]
#[error("unit '{given}' is not known for {}: use {} with or without a prefix{}", .quantity.title(), .quantity.si_symbol(), others(*.quantity))]
pub struct UnitError {
    /// What was given.
    pub given: String,
    /// The quantity it was given for.
    pub quantity: Quantity,
}

/// Units beside the SI unit and its multiples: symbol, quantity, size in the SI unit.
///
/// Standard free fall 9.80665 m/s² (3rd CGPM, 1901); inch 0.0254 m (international yard and pound agreement, 1959).
const OTHERS: &[(&str, Quantity, f64)] = &[
    ("g", Quantity::Acceleration, 9.806_65),
    ("Gal", Quantity::Acceleration, 0.01),
    ("in/s", Quantity::Velocity, 0.0254),
    ("mil", Quantity::Displacement, 0.0254e-3),
    ("in", Quantity::Displacement, 0.0254),
    ("µstrain", Quantity::Strain, 1e-6),
];

fn others(quantity: Quantity) -> String {
    let list: Vec<_> = OTHERS.iter().filter(|o| o.1 == quantity).map(|o| o.0).collect();
    if list.is_empty() { String::new() } else { format!(", or {}", list.join(", ")) }
}

/// SI prefixes met in this trade.
const PREFIXES: &[(&str, f64)] =
    &[("", 1.0), ("M", 1e6), ("k", 1e3), ("c", 1e-2), ("m", 1e-3), ("µ", 1e-6), ("n", 1e-9), ("p", 1e-12)];

impl Unit {
    /// Full scale: the normalised samples themselves.
    pub fn full_scale() -> Self {
        Self { symbol: "FS".to_owned(), quantity: Quantity::Plain, to_si: 1.0 }
    }

    /// The coherent SI unit of a quantity.
    pub fn si(quantity: Quantity) -> Self {
        Self { symbol: quantity.si_symbol().to_owned(), quantity, to_si: 1.0 }
    }

    /// The unit spelt `text`, as a unit of `quantity`.
    ///
    /// `u` is read as `µ`, `2` after `s` as `²`; a plain quantity takes any spelling as a unit of its own.
    ///
    /// # Errors
    /// [`UnitError`] where the spelling is not a unit of that quantity.
    pub fn parse(quantity: Quantity, text: &str) -> Result<Self, UnitError> {
        let given = text.trim();
        let error = || UnitError { given: given.to_owned(), quantity };
        if quantity == Quantity::Plain {
            let symbol = given.to_owned();
            return if given.is_empty() { Err(error()) } else { Ok(Self { symbol, quantity, to_si: 1.0 }) };
        }
        let symbol = given.replace("s^2", "s²").replace("s2", "s²").replace('\u{3bc}', "µ");
        let symbol = symbol.strip_prefix('u').map_or(symbol.clone(), |rest| format!("µ{rest}"));
        let known = OTHERS.iter().find(|o| o.1 == quantity && o.0 == symbol).map(|o| o.2);
        let to_si = known
            .or_else(|| {
                let prefix = symbol.strip_suffix(quantity.si_symbol())?;
                PREFIXES.iter().find(|p| p.0 == prefix).map(|p| p.1)
            })
            .ok_or_else(error)?;
        Ok(Self { symbol, quantity, to_si })
    }

    /// The symbol.
    pub fn symbol(&self) -> &str {
        &self.symbol
    }

    /// The quantity.
    pub fn quantity(&self) -> Quantity {
        self.quantity
    }

    /// How many coherent SI units one of this unit is.
    pub fn to_si(&self) -> f64 {
        self.to_si
    }

    /// Whether this is the normalised scale of the file.
    pub fn is_full_scale(&self) -> bool {
        self.quantity == Quantity::Plain && self.symbol == "FS"
    }
}

impl fmt::Display for Unit {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.write_str(&self.symbol)
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn spellings_lead_to_one_unit() {
        for text in ["m/s²", "m/s2", " m/s^2 "] {
            assert_eq!(Unit::parse(Quantity::Acceleration, text), Ok(Unit::si(Quantity::Acceleration)));
        }
        let micro = Unit::parse(Quantity::SoundPressure, "uPa").unwrap();
        assert_eq!((micro.symbol(), micro.to_si()), ("µPa", 1e-6));
    }

    #[test]
    fn other_units_have_their_sizes() {
        assert_eq!(Unit::parse(Quantity::Acceleration, "g").unwrap().to_si(), 9.806_65);
        assert_eq!(Unit::parse(Quantity::Velocity, "mm/s").unwrap().to_si(), 1e-3);
        assert_eq!(Unit::parse(Quantity::Displacement, "mil").unwrap().to_si(), 2.54e-5);
    }

    #[test]
    fn a_unit_of_another_quantity_is_refused() {
        let error = Unit::parse(Quantity::Velocity, "Pa").unwrap_err().to_string();
        assert_eq!(error, "unit 'Pa' is not known for velocity: use m/s with or without a prefix, or in/s");
        assert!(Unit::parse(Quantity::Plain, "").is_err());
    }
}
