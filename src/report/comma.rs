//! The tone table as comma-separated values.

use super::ReportError;
use crate::reading::{Reading, Tone};
use crate::units::Detector;

/// The tone table as comma-separated values, UTF-8, a row a tone: the tone's figures in the machine-readable output's
/// names, then for each pane its level, peak frequency, state and raw line. Numbers are full precision.
///
/// # Errors
/// [`ReportError::Csv`].
pub fn csv_table(reading: &Reading) -> Result<Vec<u8>, ReportError> {
    let mut writer = csv::Writer::from_writer(Vec::new());
    writer.write_record(head(reading))?;
    for tone in &reading.tones {
        writer.write_record(row(reading, tone))?;
    }
    writer.into_inner().map_err(|error| ReportError::Csv(error.into_error().into()))
}

fn head(reading: &Reading) -> Vec<String> {
    let figures =
        ["frequency_hz", "frequency_u95_hz", "amplitude", "amplitude_u95", "level", "level_db", "level_u95_db"];
    let about = ["agreement_db", "unit", "detector", "reference", "tags"];
    let judged = ["order", "verdict", "why", "overruled", "overruled_by", "overruled_reason"];
    let mut cells: Vec<String> = figures.into_iter().chain(about).chain(judged).map(String::from).collect();
    for (i, pane) in reading.panes.iter().enumerate() {
        let pane = format!("pane {} {}", i + 1, pane.written());
        cells.extend(["level_db", "peak_hz", "state", "u_db"].map(|what| format!("{pane} {what}")));
    }
    cells
}

fn row(reading: &Reading, tone: &Tone) -> Vec<String> {
    let scale = &reading.scale;
    let mut cells = vec![
        tone.frequency_hz.to_string(),
        optional(tone.frequency_u95_hz),
        tone.amplitude.to_string(),
        optional(tone.amplitude_u95),
        tone.level.to_string(),
        tone.level_db.to_string(),
        optional(tone.level_u95_db),
        optional(tone.agreement_db),
        scale.unit.clone(),
        Detector::name(scale.detector).to_owned(),
        scale.reference.to_string(),
        tone.tags.join("; "),
        optional(tone.order),
        tone.verdict.map(|v| v.word().to_owned()).unwrap_or_default(),
        tone.why.clone().unwrap_or_default(),
    ];
    let overruled = tone.overruled.as_ref();
    cells.extend(
        overruled
            .map_or([const { String::new() }; 3], |o| [o.verdict.word().to_owned(), o.by.clone(), o.reason.clone()]),
    );
    for pane in &tone.readings {
        cells.extend([
            pane.level_db.to_string(),
            pane.peak_hz.to_string(),
            pane.state.word().to_owned(),
            optional(pane.u_db),
        ]);
    }
    cells
}

/// A figure that cannot be given is an empty cell.
fn optional(value: Option<f64>) -> String {
    value.map(|v| v.to_string()).unwrap_or_default()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::sample::{judged, reading};

    #[test]
    fn every_row_has_a_cell_for_each_head_and_numbers_come_back_exactly() {
        let reading = reading();
        let bytes = csv_table(&reading).unwrap();
        let mut table = csv::Reader::from_reader(bytes.as_slice());
        let head: Vec<_> = table.headers().unwrap().iter().map(str::to_owned).collect();
        let rows: Vec<_> = table.records().collect::<Result<_, _>>().unwrap();
        assert_eq!(rows.len(), reading.tones.len());
        let cell = |name: &str| rows[0].get(head.iter().position(|h| h == name).unwrap()).unwrap().to_owned();
        assert_eq!(cell("level_db").parse::<f64>().unwrap().to_bits(), reading.tones[0].level_db.to_bits());
        assert_eq!(cell("frequency_u95_hz").parse::<f64>().unwrap(), 0.000_31);
        assert_eq!((cell("amplitude_u95"), cell("level")), (String::new(), "1".to_owned()));
        assert_eq!(cell("pane 1 rectangular state"), "under-skirt");
        assert_eq!(cell("pane 2 kaiser=8.6 peak_hz").parse::<f64>().unwrap(), 24.96);
        assert_eq!(cell("pane 2 kaiser=8.6 u_db"), "");
        assert_eq!((cell("order"), cell("verdict")), (String::new(), String::new()));
        assert_eq!((cell("unit"), cell("detector")), ("m/s²".to_owned(), "rms".to_owned()));
    }

    #[test]
    fn a_verdict_and_what_was_put_in_its_place_have_cells_of_their_own() {
        let text = String::from_utf8(csv_table(&judged()).unwrap()).unwrap();
        assert!(text.contains(",3,crowded,\"a tone, too near\",holds,N.N.,\"seen, on the spot\","), "{text}");
    }
}
