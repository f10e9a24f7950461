//! The sample captures of the Saltmarsh pumping station, made in memory. The station and all its data are invented.

mod calibrators;
mod fan;
mod noise;
mod pump;
mod readme;
mod strain;
mod synth;
mod tap;
mod truth;

use std::error::Error;

use truth::Truth;

/// One made file and what truly is in it.
struct Made {
    bytes: Vec<u8>,
    truth: Truth,
}

type Outcome<T> = Result<T, Box<dyn Error>>;

/// Every file of `sample-captures/`: name and bytes.
pub(crate) fn files() -> Outcome<Vec<(String, Vec<u8>)>> {
    let made = [
        pump::make()?,
        calibrators::exciter()?,
        tap::make()?,
        fan::make()?,
        calibrators::sound_calibrator()?,
        strain::make(),
    ];
    let (mut files, mut truths) = (Vec::new(), Vec::new());
    for Made { bytes, truth } in made {
        files.push((truth.file.to_owned(), bytes));
        truths.push(truth);
    }
    let mut json = serde_json::to_string_pretty(&truths)?;
    json.push('\n');
    files.push(("truth.json".to_owned(), json.into_bytes()));
    files.push(("README.md".to_owned(), readme::text(&truths)?.into_bytes()));
    Ok(files)
}
