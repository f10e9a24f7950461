//! What a channel measures.

/// A physical quantity that a channel can carry.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Default, Hash, serde::Serialize, serde::Deserialize)]
#[serde(rename_all = "kebab-case")]
pub enum Quantity {
    /// Vibratory acceleration.
    Acceleration,
    /// Vibratory velocity.
    Velocity,
    /// Vibratory displacement.
    Displacement,
    /// Force.
    Force,
    /// Sound pressure in air.
    SoundPressure,
    /// Voltage.
    Voltage,
    /// Electric current.
    Current,
    /// Strain.
    Strain,
    /// Samples as the file has them, or a quantity that is none of the others.
    #[default]
    Plain,
}

impl Quantity {
    /// Every quantity, in the order in which they are offered.
    pub const ALL: [Self; 9] = [
        Self::Acceleration,
        Self::Velocity,
        Self::Displacement,
        Self::Force,
        Self::SoundPressure,
        Self::Voltage,
        Self::Current,
        Self::Strain,
        Self::Plain,
    ];

    /// The name on the command line and in files.
    pub fn name(self) -> &'static str {
        match self {
            Self::Acceleration => "acceleration",
            Self::Velocity => "velocity",
            Self::Displacement => "displacement",
            Self::Force => "force",
            Self::SoundPressure => "sound-pressure",
            Self::Voltage => "voltage",
            Self::Current => "current",
            Self::Strain => "strain",
            Self::Plain => "plain",
        }
    }

    /// The name in running text.
    pub fn title(self) -> &'static str {
        match self {
            Self::SoundPressure => "sound pressure",
            other => other.name(),
        }
    }

    /// The quantity of that name.
    pub fn parse(name: &str) -> Option<Self> {
        Self::ALL.into_iter().find(|q| q.name() == name)
    }

    /// The symbol of the coherent SI unit.
    pub fn si_symbol(self) -> &'static str {
        match self {
            Self::Acceleration => "m/s²",
            Self::Velocity => "m/s",
            Self::Displacement => "m",
            Self::Force => "N",
            Self::SoundPressure => "Pa",
            Self::Voltage => "V",
            Self::Current => "A",
            Self::Strain => "m/m",
            Self::Plain => "FS",
        }
    }

    /// The preferred reference value for levels, in the coherent SI unit, where ISO 1683 names one.
    ///
    /// # Reference
    /// ISO 1683:2015, preferred reference values: sound pressure in gases 20 µPa, vibratory acceleration 1 µm/s²,
    /// velocity 1 nm/s, displacement 1 pm, force 1 µN (the last two from memory).
    pub fn iso_reference_si(self) -> Option<f64> {
        match self {
            Self::SoundPressure => Some(20e-6),
            Self::Acceleration | Self::Force => Some(1e-6),
            Self::Velocity => Some(1e-9),
            Self::Displacement => Some(1e-12),
            Self::Voltage | Self::Current | Self::Strain | Self::Plain => None,
        }
    }
}
