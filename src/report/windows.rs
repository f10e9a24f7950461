//! The window catalogue with its figures of merit.

use serde::Serialize;
use serde::ser::Serializer;

use super::ReportError;
use super::json::line;
use super::table::{Align, Table};
use crate::window::{Family, Merit, Window, catalogue};

/// Samples of the windows whose figures are listed: long enough that none depends on the length in the digits shown.
const N_SAMPLES: usize = 4096;

/// One window with its figures.
#[derive(Debug, Serialize)]
struct Listed {
    name: &'static str,
    #[serde(serialize_with = "parameter")]
    parameter: Vec<f64>,
    family: &'static str,
    coherent_gain: f64,
    enbw_bins: f64,
    scalloping_loss_db: f64,
    worst_case_processing_loss_db: f64,
    width_3db_bins: f64,
    width_6db_bins: f64,
    width_null_bins: f64,
    highest_side_lobe_db: f64,
    side_lobe_falloff_db_per_octave: f64,
    overlap_correlation_50: f64,
    overlap_correlation_75: f64,
    recommended_overlap_percent: f64,
    flatness_db: f64,
    coefficients: Option<Vec<f64>>,
    source: &'static str,
}

/// No parameter is `null`, one is a number, more are a list.
fn parameter<S: Serializer>(parameters: &[f64], serializer: S) -> Result<S::Ok, S::Error> {
    match parameters {
        [] => serializer.serialize_none(),
        [one] => serializer.serialize_f64(*one),
        more => more.serialize(serializer),
    }
}

impl Listed {
    fn of(window: &Window) -> Self {
        let merit: &Merit = &window.merit(N_SAMPLES);
        Self {
            name: window.name(),
            parameter: window.parameters().to_vec(),
            family: family(window.entry().family),
            coherent_gain: merit.coherent_gain,
            enbw_bins: merit.enbw_bins,
            scalloping_loss_db: merit.scalloping_loss_db,
            worst_case_processing_loss_db: merit.worst_case_processing_loss_db,
            width_3db_bins: merit.width_3db_bins,
            width_6db_bins: merit.width_6db_bins,
            width_null_bins: merit.width_null_bins,
            highest_side_lobe_db: merit.highest_side_lobe_db,
            side_lobe_falloff_db_per_octave: merit.side_lobe_falloff_db_per_octave,
            overlap_correlation_50: merit.overlap_correlation_50,
            overlap_correlation_75: merit.overlap_correlation_75,
            recommended_overlap_percent: merit.recommended_overlap_percent,
            flatness_db: merit.flatness_db,
            coefficients: window.cosine_terms().map(<[f64]>::to_vec),
            source: window.entry().source,
        }
    }
}

fn family(family: Family) -> &'static str {
    match family {
        Family::CosineSum => "cosine sum",
        Family::Shape => "shape",
        Family::Design => "design",
    }
}

/// The windows listed, in the catalogue's order, families at their usual parameter.
fn windows() -> impl Iterator<Item = Window> {
    catalogue().iter().filter_map(|entry| Window::parse(entry.name).ok())
}

/// The catalogue as a JSON array, one object a window; a figure that a window does not have is `null`.
///
/// # Errors
/// [`ReportError::Json`].
pub fn windows_json() -> Result<Vec<u8>, ReportError> {
    line(&windows().map(|window| Listed::of(&window)).collect::<Vec<_>>())
}

/// The catalogue as text: the figures by which windows are chosen, then when to reach for each.
pub fn windows_table() -> String {
    let head = [
        ["window", "coherent", "ENBW", "scalloping", "-3 dB", "-6 dB", "nulls", "side lobe", "fall-off", "overlap"],
        ["", "gain", "bins", "dB", "bins", "bins", "bins", "dB", "dB/octave", "%"],
    ];
    let mut columns = vec![Align::Right; 10];
    columns.splice(..1, [Align::Left]);
    let mut table = Table::new(columns);
    for row in head {
        table.head(row.map(String::from).to_vec());
    }
    let mut purposes = Table::new(vec![Align::Left; 2]);
    for window in windows() {
        table.row(row(&window));
        purposes.row(vec![window.to_string(), window.entry().purpose.to_owned()]);
    }
    format!(
        "{}\nFigures are computed for {N_SAMPLES} samples. Overlap is the one recommended for averaging.\n\n{}",
        table.text(),
        purposes.text()
    )
}

fn row(window: &Window) -> Vec<String> {
    let merit = window.merit(N_SAMPLES);
    vec![
        window.to_string(),
        number(merit.coherent_gain, 4),
        number(merit.enbw_bins, 4),
        number(merit.scalloping_loss_db, 3),
        number(merit.width_3db_bins, 3),
        number(merit.width_6db_bins, 3),
        number(merit.width_null_bins, 2),
        number(merit.highest_side_lobe_db, 1),
        number(merit.side_lobe_falloff_db_per_octave, 1),
        number(merit.recommended_overlap_percent, 0),
    ]
}

/// A figure that a window does not have (side lobes of one without any) is a dash.
fn number(value: f64, decimals: usize) -> String {
    if value.is_finite() { format!("{value:.decimals$}") } else { "-".to_owned() }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_window_of_the_catalogue_is_listed_with_every_key() {
        let value: serde_json::Value = serde_json::from_slice(&windows_json().unwrap()).unwrap();
        let list = value.as_array().unwrap();
        assert_eq!(list.len(), catalogue().len());
        let hann = list.iter().find(|w| w["name"] == "hann").unwrap();
        assert_eq!(hann.as_object().unwrap().len(), 18);
        assert!(hann["parameter"].is_null());
        assert_eq!(hann["coefficients"], serde_json::json!([0.5, 0.5]));
        // Harris 1978, table 1: Hann, coherent gain 0.50, ENBW 1.50 bins.
        assert!((hann["coherent_gain"].as_f64().unwrap() - 0.5).abs() < 1e-12);
        assert!((hann["enbw_bins"].as_f64().unwrap() - 1.5).abs() < 1e-9);
    }

    #[test]
    fn the_table_has_a_line_for_each_window() {
        let text = windows_table();
        for window in windows() {
            let name = window.to_string();
            assert_eq!(text.lines().filter(|l| l.split("  ").next() == Some(&name)).count(), 2, "{name}");
        }
    }
}
