//! Windows as text: `hann`, `kaiser=8.6`, `taylor=4,30`.

use std::fmt;
use std::str::FromStr;

use super::Window;
use super::catalogue::{Entry, ParameterSpec, catalogue};
use super::error::WindowError;

/// The longest piece of a wrong text that a message repeats.
const LONGEST_QUOTE: usize = 40;

/// The least share of Σ|a_k| that the mean a_0 must have.
const LEAST_MEAN: f64 = 0.01;

impl Window {
    /// The window written `text`: a name of the catalogue, after `=` its parameters parted by commas. A family with
    /// no parameter given takes its default ones. Spaces around the parts and the case of letters do not matter.
    ///
    /// # Errors
    /// [`WindowError`] for an unknown name, or a parameter that is not a number or out of range, too many or too few
    /// of them, or a cosine sum without a clearly positive mean.
    ///
    /// # Example
    /// ```
    /// use panewise::window::Window;
    /// let window = Window::parse("kaiser=8.6")?;
    /// assert_eq!(window.to_string(), "kaiser=8.6");
    /// # Ok::<(), panewise::window::WindowError>(())
    /// ```
    pub fn parse(text: &str) -> Result<Self, WindowError> {
        let (name, rest) = match text.split_once('=') {
            Some((name, rest)) => (name, Some(rest)),
            None => (text, None),
        };
        let entry = find(name)?;
        let parameters = match rest {
            Some(rest) => numbers(entry, rest)?,
            None => entry.default_parameters(),
        };
        Self::new(entry, parameters)
    }

    /// The window called `name` with these parameters; none takes the default ones.
    ///
    /// # Errors
    /// As [`Window::parse`].
    pub fn from_parts(name: &str, parameters: &[f64]) -> Result<Self, WindowError> {
        let entry = find(name)?;
        let parameters = if parameters.is_empty() { entry.default_parameters() } else { parameters.to_vec() };
        Self::new(entry, parameters)
    }
}

fn find(name: &str) -> Result<&'static Entry, WindowError> {
    let name = name.trim();
    let found = catalogue().iter().find(|entry| entry.name.eq_ignore_ascii_case(name));
    found.ok_or_else(|| WindowError::Unknown { given: quoted(name) })
}

fn quoted(text: &str) -> String {
    if text.chars().count() <= LONGEST_QUOTE {
        return text.to_owned();
    }
    text.chars().take(LONGEST_QUOTE).chain("...".chars()).collect()
}

fn numbers(entry: &'static Entry, text: &str) -> Result<Vec<f64>, WindowError> {
    let most = entry.parameters.len();
    let given = text.split(',').count();
    if given > most {
        return Err(WindowError::TooMany { name: entry.name, given, most, example: example(entry) });
    }
    text.split(',').map(|part| number(entry, part.trim())).collect()
}

fn number(entry: &'static Entry, part: &str) -> Result<f64, WindowError> {
    let not_a_number = || WindowError::NotANumber { name: entry.name, given: quoted(part), example: example(entry) };
    let value: f64 = part.parse().map_err(|_| not_a_number())?;
    if value.is_nan() { Err(not_a_number()) } else { Ok(value) }
}

fn example(entry: &Entry) -> String {
    written(entry.name, &entry.default_parameters())
}

fn written(name: &str, parameters: &[f64]) -> String {
    let mut text = name.to_owned();
    for (i, value) in parameters.iter().enumerate() {
        text.push(if i == 0 { '=' } else { ',' });
        text.push_str(&value.to_string());
    }
    text
}

/// The parameters, if the entry allows them; -0 becomes 0.
pub(super) fn check_parameters(entry: &'static Entry, parameters: Vec<f64>) -> Result<Vec<f64>, WindowError> {
    let (given, most) = (parameters.len(), entry.parameters.len());
    if given > most {
        return Err(WindowError::TooMany { name: entry.name, given, most, example: example(entry) });
    }
    if given < entry.least {
        let least = entry.least;
        return Err(WindowError::TooFew { name: entry.name, given, least, example: example(entry) });
    }
    for (spec, value) in entry.parameters.iter().zip(&parameters) {
        check_range(entry, spec, *value)?;
    }
    if entry.has_own_coefficients() {
        let mean = parameters.first().copied().unwrap_or(0.0);
        let total: f64 = parameters.iter().map(|a| a.abs()).sum();
        // Written so that zeros alone are refused, too.
        if mean <= 0.0 || mean < LEAST_MEAN * total {
            return Err(WindowError::NoMean { name: entry.name, mean, total });
        }
    }
    Ok(parameters.into_iter().map(|value| value + 0.0).collect())
}

fn check_range(entry: &'static Entry, spec: &ParameterSpec, given: f64) -> Result<(), WindowError> {
    let (name, symbol, min, max) = (entry.name, spec.symbol, spec.min, spec.max);
    if !(min..=max).contains(&given) {
        return Err(WindowError::OutOfRange { name, symbol, given, min, max });
    }
    if spec.whole && given.fract() != 0.0 {
        return Err(WindowError::NotWhole { name, symbol, given, min, max });
    }
    Ok(())
}

impl PartialEq for Window {
    fn eq(&self, other: &Self) -> bool {
        self.name() == other.name() && self.parameters() == other.parameters()
    }
}

impl fmt::Debug for Window {
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        write!(f, "Window({self})")
    }
}

impl fmt::Display for Window {
    /// Name and parameters, such that [`Window::parse`] gives the same window to the last bit.
    fn fmt(&self, f: &mut fmt::Formatter<'_>) -> fmt::Result {
        f.pad(&written(self.name(), self.parameters()))
    }
}

impl FromStr for Window {
    type Err = WindowError;

    fn from_str(text: &str) -> Result<Self, Self::Err> {
        Self::parse(text)
    }
}

impl serde::Serialize for Window {
    fn serialize<S: serde::Serializer>(&self, serializer: S) -> Result<S::Ok, S::Error> {
        serializer.collect_str(self)
    }
}

impl<'de> serde::Deserialize<'de> for Window {
    fn deserialize<D: serde::Deserializer<'de>>(deserializer: D) -> Result<Self, D::Error> {
        let text = String::deserialize(deserializer)?;
        text.parse().map_err(serde::de::Error::custom)
    }
}
