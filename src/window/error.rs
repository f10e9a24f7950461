//! Why a window cannot be had.

/// A window that cannot be had; the message says what to do.
#[derive(Debug, Clone, PartialEq, thiserror::Error)]
#[non_exhaustive]
pub enum WindowError {
    /// No entry has that name.
    #[error("no window is called '{given}': 'panewise windows' lists them")]
    Unknown {
        /// The name given.
        given: String,
    },
    /// A parameter is not a number.
    #[error("window '{name}': '{given}' is not a number; write it as in '{example}'")]
    NotANumber {
        /// The window.
        name: &'static str,
        /// What stood in the number's place.
        given: String,
        /// The window with its default parameters.
        example: String,
    },
    /// A parameter lies outside its range.
    #[error("window '{name}': {symbol} = {given} is out of range; it goes from {min} to {max}")]
    OutOfRange {
        /// The window.
        name: &'static str,
        /// The parameter's symbol.
        symbol: &'static str,
        /// The value given.
        given: f64,
        /// The smallest value allowed.
        min: f64,
        /// The largest value allowed.
        max: f64,
    },
    /// A parameter that counts something is not whole.
    #[error("window '{name}': {symbol} = {given} is not a whole number; give one from {min} to {max}")]
    NotWhole {
        /// The window.
        name: &'static str,
        /// The parameter's symbol.
        symbol: &'static str,
        /// The value given.
        given: f64,
        /// The smallest value allowed.
        min: f64,
        /// The largest value allowed.
        max: f64,
    },
    /// More parameters than the window has.
    #[error("window '{name}': {given} parameters given, it takes {most} at most; write '{example}'")]
    TooMany {
        /// The window.
        name: &'static str,
        /// How many were given.
        given: usize,
        /// How many it takes at most.
        most: usize,
        /// The window with its default parameters.
        example: String,
    },
    /// Some of the window's parameters are given, but not all.
    #[error("window '{name}': {given} of its {least} parameters given; give all, as in '{example}', or none")]
    TooFew {
        /// The window.
        name: &'static str,
        /// How many were given.
        given: usize,
        /// How many it needs.
        least: usize,
        /// The window with its default parameters.
        example: String,
    },
    /// A cosine sum whose mean is not clearly positive, so that a level cannot be corrected by it.
    #[error("window '{name}': its mean a_0 = {mean} is under 1 % of the sum of |a_k|, {total}; give a larger a_0")]
    NoMean {
        /// The window.
        name: &'static str,
        /// The coefficient a_0, the window's mean.
        mean: f64,
        /// Σ |a_k|.
        total: f64,
    },
}
