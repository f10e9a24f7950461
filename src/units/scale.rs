//! The scale: what a normalised sample means, and how a level is stated.

use super::{Quantity, Unit, UnitError, brief, db};

/// What a level states of a tone of peak amplitude A.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Hash, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Detector {
    /// Root mean square, A/√2.
    #[default]
    Rms,
    /// Peak, A.
    Peak,
    /// Peak to peak, 2A.
    PeakToPeak,
}

impl Detector {
    /// Every detector, in the order in which they are offered.
    pub const ALL: [Self; 3] = [Self::Rms, Self::Peak, Self::PeakToPeak];

    /// The detected level of a tone of unit peak amplitude.
    pub fn of_unit_peak(self) -> f64 {
        match self {
            Self::Rms => std::f64::consts::FRAC_1_SQRT_2,
            Self::Peak => 1.0,
            Self::PeakToPeak => 2.0,
        }
    }

    /// The name on the command line and in files.
    pub fn name(self) -> &'static str {
        match self {
            Self::Rms => "rms",
            Self::Peak => "peak",
            Self::PeakToPeak => "peak-to-peak",
        }
    }

    /// The name in running text.
    pub fn title(self) -> &'static str {
        match self {
            Self::Rms => "r.m.s.",
            other => other.name(),
        }
    }

    /// The detector of that name.
    pub fn parse(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|d| d.name() == name)
    }
}

/// How normalised samples turn into units.
#[derive(Debug, Clone, Copy, PartialEq, Default, serde::Serialize, serde::Deserialize)]
#[serde(deny_unknown_fields)]
pub enum Factor {
    /// Not stated: samples stay in full scales.
    #[default]
    NotStated,
    /// So many units are full scale.
    UnitsPerFullScale(f64),
    /// A sensor of so many volts a unit, into an input of so many volts at full scale.
    Sensitivity {
        /// Volts a unit.
        volts_per_unit: f64,
        /// Volts at full scale.
        full_scale_volts: f64,
    },
}

/// A scale that cannot be used.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum ScaleError {
    /// The unit is not one of the quantity.
    #[error(transparent)]
    Unit(#[from] UnitError),
    /// A number that has to be above 0 is not.
    #[error("{what} is {}: give a number above 0", brief(*.value))]
    NotPositive {
        /// Which number.
        what: &'static str,
        /// What it is.
        value: f64,
    },
    /// A number is so small or large that it can only be a slip, and that levels would lose their meaning.
    #[error("{what} is {}: give one from {:e} to {:e}", brief(*.value), Scale::LEAST, Scale::MOST)]
    OutOfRange {
        /// Which number.
        what: &'static str,
        /// What it is.
        value: f64,
    },
    /// A factor was given without naming the unit it leads to.
    #[error("a factor needs the unit it leads to: name the quantity or the unit")]
    NoUnit,
    /// A unit was given without saying how many of them full scale is.
    #[error("unit {unit} needs a factor: give units per full scale, or a sensitivity with the volts at full scale")]
    NoFactor {
        /// The unit.
        unit: String,
    },
}

/// What a normalised sample means and how a level is stated. Part of the document.
#[derive(Debug, Clone, PartialEq, serde::Serialize, serde::Deserialize)]
#[serde(deny_unknown_fields)]
pub struct Scale {
    /// What the channel measures.
    pub quantity: Quantity,
    /// The unit's spelling.
    pub unit: String,
    /// How normalised samples turn into that unit.
    pub factor: Factor,
    /// What a level states.
    pub detector: Detector,
    /// The reference of levels in decibels, in the unit; `None` for the default.
    pub reference: Option<f64>,
}

impl Default for Scale {
    fn default() -> Self {
        Self {
            quantity: Quantity::Plain,
            unit: "FS".to_owned(),
            factor: Factor::NotStated,
            detector: Detector::Rms,
            reference: None,
        }
    }
}

impl Scale {
    /// The least factor, sensitivity, voltage or reference.
    pub const LEAST: f64 = 1e-12;

    /// The greatest factor, sensitivity, voltage or reference.
    pub const MOST: f64 = 1e12;

    /// Checks that the unit is one of the quantity and that every number can be used.
    ///
    /// # Errors
    /// [`ScaleError`] naming what is wrong.
    pub fn check(&self) -> Result<(), ScaleError> {
        let unit = self.parsed_unit()?;
        match self.factor {
            Factor::NotStated if !unit.is_full_scale() => {
                return Err(ScaleError::NoFactor { unit: self.unit.clone() });
            }
            Factor::NotStated => {}
            _ if unit.is_full_scale() => return Err(ScaleError::NoUnit),
            Factor::UnitsPerFullScale(factor) => usable("the factor", factor)?,
            Factor::Sensitivity { volts_per_unit, full_scale_volts } => {
                usable("the sensitivity", volts_per_unit)?;
                usable("the voltage at full scale", full_scale_volts)?;
                usable("the voltage at full scale over the sensitivity", self.units_per_full_scale())?;
            }
        }
        self.reference.map_or(Ok(()), |reference| usable("the reference", reference))
    }

    /// The unit.
    ///
    /// # Errors
    /// [`UnitError`] where the spelling is not a unit of the quantity.
    pub fn parsed_unit(&self) -> Result<Unit, UnitError> {
        Unit::parse(self.quantity, &self.unit)
    }

    /// Units in one full scale of the normalised samples.
    pub fn units_per_full_scale(&self) -> f64 {
        match self.factor {
            Factor::NotStated => 1.0,
            Factor::UnitsPerFullScale(factor) => factor,
            Factor::Sensitivity { volts_per_unit, full_scale_volts } => full_scale_volts / volts_per_unit,
        }
    }

    /// Whether samples are shown in full scales.
    pub fn is_full_scale(&self) -> bool {
        self.quantity == Quantity::Plain && self.unit.trim() == "FS"
    }

    /// What a detected level is divided by before it is stated in decibels, in the unit.
    ///
    /// By default the preferred value of ISO 1683 for the quantity, else one unit; for full scale the detected level
    /// of a full-scale sine, so that such a sine reads 0 dB through every detector.
    pub fn reference_value(&self) -> f64 {
        self.reference.unwrap_or_else(|| {
            if self.is_full_scale() {
                return self.detector.of_unit_peak();
            }
            let unit = self.parsed_unit().map_or(1.0, |unit| unit.to_si());
            self.quantity.iso_reference_si().map_or(1.0, |reference| reference / unit)
        })
    }

    /// The detected level of a tone of peak amplitude `peak`, in the unit.
    pub fn level(&self, peak: f64) -> f64 {
        peak * self.detector.of_unit_peak()
    }

    /// The detected level of a tone of peak amplitude `peak` in decibels over the reference.
    pub fn level_db(&self, peak: f64) -> f64 {
        db(self.level(peak) / self.reference_value())
    }

    /// The reference as it is printed behind a level: `dB re 1 µm/s² (r.m.s.)`.
    pub fn reference_label(&self) -> String {
        if self.is_full_scale() && self.reference.is_none() {
            return format!("dB re full-scale sine ({})", self.detector.title());
        }
        let reference = self.reference_value();
        let iso = match self.quantity.iso_reference_si() {
            Some(si) if self.reference.is_none() => Some((si, self.quantity.si_symbol())),
            _ => None,
        };
        let text = match iso {
            Some((si, symbol)) => with_prefix(si, symbol),
            None => format!("{} {}", short(reference), self.unit),
        };
        format!("dB re {text} ({})", self.detector.title())
    }
}

/// Whether a number of a scale can be used.
fn usable(what: &'static str, value: f64) -> Result<(), ScaleError> {
    if (Scale::LEAST..=Scale::MOST).contains(&value) {
        Ok(())
    } else if value > 0.0 {
        Err(ScaleError::OutOfRange { what, value })
    } else {
        Err(ScaleError::NotPositive { what, value })
    }
}

/// A number in few digits, without the dust of a division.
fn short(value: f64) -> String {
    let rounded: f64 = format!("{value:.9e}").parse().unwrap_or(value);
    if (1e-4..1e6).contains(&rounded.abs()) { format!("{rounded}") } else { format!("{rounded:e}") }
}

/// A small SI value with the prefix that brings it to 1 or more.
fn with_prefix(value: f64, symbol: &str) -> String {
    for (prefix, size) in [("", 1.0), ("m", 1e-3), ("µ", 1e-6), ("n", 1e-9), ("p", 1e-12)] {
        if value >= 0.999_999 * size {
            return format!("{} {prefix}{symbol}", short(value / size));
        }
    }
    format!("{} {symbol}", short(value))
}

#[cfg(test)]
mod tests {
    use super::*;

    fn acceleration(unit: &str) -> Scale {
        Scale {
            quantity: Quantity::Acceleration,
            unit: unit.to_owned(),
            factor: Factor::UnitsPerFullScale(98.1),
            ..Scale::default()
        }
    }

    /// ISO 1683:2015: 10 m/s² r.m.s. is 140 dB re 1 µm/s² (20 lg(10/1e-6)); one g r.m.s. 139.8304 dB.
    #[test]
    fn levels_over_the_preferred_references() {
        let level = acceleration("m/s²").level_db(10.0 * std::f64::consts::SQRT_2);
        assert!((level - 140.0).abs() < 1e-9, "{level}");
        let level = acceleration("g").level_db(std::f64::consts::SQRT_2);
        assert!((level - 139.8304).abs() < 5e-5, "{level}");
        assert_eq!(acceleration("g").reference_label(), "dB re 1 µm/s² (r.m.s.)");
    }

    #[test]
    fn a_full_scale_sine_reads_zero_through_every_detector() {
        for detector in Detector::ALL {
            let scale = Scale { detector, ..Scale::default() };
            assert!(scale.level_db(1.0).abs() < 1e-12);
        }
        assert_eq!(Scale::default().reference_label(), "dB re full-scale sine (r.m.s.)");
    }

    #[test]
    fn sensitivity_and_full_scale_volts_make_the_factor() {
        let factor = Factor::Sensitivity { volts_per_unit: 0.0102, full_scale_volts: 5.1 };
        let scale = Scale { factor, ..acceleration("m/s²") };
        assert!((scale.units_per_full_scale() - 500.0).abs() < 1e-9);
        assert_eq!(scale.check(), Ok(()));
    }

    #[test]
    fn what_cannot_be_used_is_named() {
        let zero = Scale { factor: Factor::UnitsPerFullScale(0.0), ..acceleration("m/s²") };
        assert_eq!(zero.check().unwrap_err().to_string(), "the factor is 0: give a number above 0");
        let none = Scale { factor: Factor::NotStated, ..acceleration("m/s²") };
        assert!(none.check().unwrap_err().to_string().starts_with("unit m/s² needs a factor"));
        let no_unit = Scale { factor: Factor::UnitsPerFullScale(500.0), ..Scale::default() };
        assert_eq!(no_unit.check(), Err(ScaleError::NoUnit));
        let reference = Scale { reference: Some(f64::NAN), ..acceleration("m/s²") };
        assert!(reference.check().is_err());
    }

    #[test]
    fn a_number_too_small_or_too_large_to_be_meant_is_refused_in_few_digits() {
        let factor = |factor| Scale { factor: Factor::UnitsPerFullScale(factor), ..acceleration("m/s²") }.check();
        assert_eq!((factor(1e-12), factor(1e12)), (Ok(()), Ok(())));
        for silly in [1e-300, 9.9e-13, 1.1e12, 1e308, f64::INFINITY] {
            let said = factor(silly).unwrap_err().to_string();
            assert!(said.ends_with(": give one from 1e-12 to 1e12") && said.len() < 80, "{said}");
        }
        assert!(factor(-1e300).unwrap_err().to_string().len() < 80);
        let of = |volts_per_unit, full_scale_volts| {
            Scale { factor: Factor::Sensitivity { volts_per_unit, full_scale_volts }, ..acceleration("m/s²") }.check()
        };
        assert_eq!(of(0.01, 1.0), Ok(()));
        assert!(matches!(of(1e-20, 1.0), Err(ScaleError::OutOfRange { .. })));
        assert!(matches!(of(0.01, 1e13), Err(ScaleError::OutOfRange { .. })));
        // Either may be meant, but not both together.
        assert!(matches!(of(1e-9, 1e9), Err(ScaleError::OutOfRange { .. })));
        let reference = Scale { reference: Some(1e-13), ..acceleration("m/s²") };
        assert!(matches!(reference.check(), Err(ScaleError::OutOfRange { .. })));
    }
}
