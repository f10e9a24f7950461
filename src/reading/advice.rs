//! Advice in words: windows ranked for this segment, and what decides on each.

use super::output::{AdviceLine, Warning};
use crate::signal::{Cancelled, Watch};
use crate::spectrum::Spectra;
use crate::tone::{Deciding, Known, Search, WindowAdvice, advise, judge};
use crate::window::{Window, catalogue};

/// Windows that are not for steady tones, or are whatever the user makes of them.
const NOT_RANKED: [&str; 2] = ["exponential", "cosine-sum"];

/// The catalogue's windows, each at its usual parameter, ranked for the tones of this segment; nothing where the tones
/// were not fitted.
pub(super) fn ranked(spectra: &Spectra, found: &Search, watch: &Watch) -> Result<Vec<AdviceLine>, Cancelled> {
    if !found.settled {
        return Ok(Vec::new());
    }
    let entries = catalogue().iter().filter(|e| !NOT_RANKED.contains(&e.name));
    let windows: Vec<Window> = entries.filter_map(|e| Window::parse(e.name).ok()).collect();
    let ranked = advise(&windows, spectra.n_samples(), &found.tones, known(found), watch)?;
    Ok(ranked.iter().map(|advice| line(spectra, found, advice)).collect())
}

/// The largest error to expect of a pane; `None` where some tone cannot be read in it, or the tones were not fitted.
pub(super) fn expected_worst_error_db(spectra: &Spectra, found: &Search, window: &Window) -> Option<f64> {
    judge(window, spectra.n_samples(), &found.tones, known(found)).filter(|_| found.settled)?.worst_db
}

fn known(found: &Search) -> Known<'_> {
    Known { noise: found.noise.as_ref(), units: &found.unit_uncertainties }
}

/// Says so where no window of the catalogue reads all tones.
pub(super) fn no_window_reads_all(advice: &[AdviceLine]) -> Option<Warning> {
    let best = advice.first().filter(|best| best.expected_worst_error_db.is_none())?;
    let text =
        format!("no window reads all tones of this segment ({} {}): the joint fit carries them", best.window, best.why);
    Some(Warning { code: "no-window", text })
}

fn line(spectra: &Spectra, found: &Search, advice: &WindowAdvice) -> AdviceLine {
    AdviceLine {
        window: advice.window.name().to_owned(),
        parameter: advice.window.parameters().to_vec(),
        expected_worst_error_db: advice.worst_db,
        why: why(spectra, found, advice.deciding),
    }
}

fn why(spectra: &Spectra, found: &Search, deciding: Deciding) -> String {
    let decimals = (2.0 - spectra.line_spacing_hz().log10()).floor().clamp(0.0, 9.0) as usize;
    let hz = |i: usize| {
        let nu = found.tones.get(i).map_or(f64::NAN, |t| t.nu);
        format!("{:.decimals$} Hz", nu * spectra.line_spacing_hz())
    };
    match deciding {
        Deciding::Merges(a, b) => format!("merges {} and {}", hz(a), hz(b)),
        Deciding::Skirt(tone, from) => format!("{} stands in the skirt of {}", hz(tone), hz(from)),
        Deciding::Noise(tone) => format!("the noise at {} decides", hz(tone)),
    }
}
