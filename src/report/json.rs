//! The figures for machines: one JSON object, numbers in full precision, `null` for what cannot be given.

use serde::Serialize;

use super::ReportError;
use crate::reading::Reading;
use crate::session::{CaptureState, Moved};

/// A Reading as a JSON object; a number that is not finite is `null`.
///
/// # Errors
/// [`ReportError::Json`].
pub fn reading_json(reading: &Reading) -> Result<Vec<u8>, ReportError> {
    line(reading)
}

#[derive(Serialize)]
struct Recheck<'a> {
    same: bool,
    figures: &'a [Moved],
    capture: CaptureState,
}

/// The outcome of a recheck as a JSON object.
///
/// # Errors
/// [`ReportError::Json`].
pub fn recheck_json(same: bool, figures: &[Moved], capture: CaptureState) -> Result<Vec<u8>, ReportError> {
    line(&Recheck { same, figures, capture })
}

pub(super) fn line<T: Serialize + ?Sized>(value: &T) -> Result<Vec<u8>, ReportError> {
    let mut bytes = serde_json::to_vec_pretty(value)?;
    bytes.push(b'\n');
    Ok(bytes)
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::sample::reading;
    use crate::session::Figure;

    #[test]
    fn what_cannot_be_given_is_null_and_never_left_out() {
        let value: serde_json::Value = serde_json::from_slice(&reading_json(&reading()).unwrap()).unwrap();
        assert_eq!(value["schema"], 1);
        let tone = value["tones"][0].as_object().unwrap();
        for key in ["amplitude_u95", "verdict", "why", "budget", "phase_rad", "order", "overruled"] {
            assert!(tone.get(key).unwrap().is_null(), "{key}");
        }
        assert_eq!(value["panes"][0]["parameter"], serde_json::Value::Null);
        assert_eq!(value["panes"][1]["parameter"], 8.6);
        assert!(value["panes"][0]["floor_db"].is_null(), "a number that is not finite");
    }

    #[test]
    fn a_recheck_says_what_was_and_is() {
        let gone = Moved { what: "tone".to_owned(), was: Figure::Number(99.84), is: Figure::None };
        let bytes = recheck_json(false, &[gone], CaptureState::Moved).unwrap();
        let value: serde_json::Value = serde_json::from_slice(&bytes).unwrap();
        let expected = serde_json::json!({
            "same": false, "figures": [{"what": "tone", "was": 99.84, "is": null}], "capture": "moved"
        });
        assert_eq!(value, expected);
    }
}
