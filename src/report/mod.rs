//! Tables and figures: a [`Reading`](crate::reading::Reading) or the catalogue in, text out.

mod comma;
mod digits;
mod json;
mod judged;
mod kernels;
#[cfg(test)]
mod sample;
mod table;
mod text;
mod windows;

pub use comma::csv_table;
pub use json::{reading_json, recheck_json};
pub use kernels::kernels_svg;
pub(crate) use text::plain;
pub use text::{figure_text, tone_table};
pub use windows::{windows_json, windows_table};

/// What whoever signs a figure must know.
pub const CAUTION: &str = "Caution: check the instrument chain and the calibration. A stated uncertainty covers only \
what its budget lists. Machine safety, exposure and acceptance decisions follow the applicable local codes and \
standards and the judgement of licensed or qualified people.";

/// Why a table could not be made.
#[derive(Debug, thiserror::Error)]
#[non_exhaustive]
pub enum ReportError {
    /// The table of comma-separated values.
    #[error("the table could not be written: {0}")]
    Csv(#[from] csv::Error),
    /// The machine-readable object.
    #[error("the figures could not be written: {0}")]
    Json(#[from] serde_json::Error),
}
