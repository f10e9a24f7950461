//! What is known of a tone's uncertainty, item by item (JCGM 100).

use super::output::BudgetItem;
use super::{Request, rows};
use crate::spectrum::Spectra;
use crate::tone::{PARTS, Search};
use crate::units::db;

/// The coverage factor of expanded uncertainties.
const COVERAGE: f64 = 2.0;

/// A tone's budget and what follows from it.
pub(super) struct Budget {
    pub(super) items: Vec<BudgetItem>,
    /// Expanded uncertainty of the frequency, Hz.
    pub(super) frequency_u95_hz: f64,
    /// Expanded uncertainty of the peak amplitude, in the unit.
    pub(super) amplitude_u95: f64,
}

impl Budget {
    /// Of tone `i`; `None` where the tones were not fitted jointly or the segment is too short to tell its noise.
    ///
    /// `noise` is the lone-tone bound, `neighbours` what the joint covariance adds to it in quadrature, `change` what
    /// the mean of eight parts of the segment is uncertain by for a tone that was seen to move. What only the user can
    /// state stands in the list as not stated.
    pub(super) fn of(spectra: &Spectra, request: &Request, found: &Search, i: usize) -> Option<Self> {
        let unit = found.unit_uncertainties.get(i)?;
        let n = spectra.n_samples() as f64;
        let deviation = found.noise.as_ref()?.sample_deviation(found.tones.get(i)?.nu, n);
        let per_amplitude = deviation * request.scale.units_per_full_scale();
        let per_hz = deviation * spectra.sample_rate_hz() / std::f64::consts::TAU;
        let held = unit.omega == 0.0;
        let lone = (unit.lone_amplitude * per_amplitude, if held { 0.0 } else { unit.lone_omega * per_hz });
        let joint = (unit.amplitude * per_amplitude, unit.omega * per_hz);
        let added = |joint: f64, lone: f64| (joint * joint - lone * lone).max(0.0).sqrt();
        let evaluated = |item: &str, (amplitude, hz): (f64, f64)| BudgetItem {
            item: item.to_owned(),
            u_amplitude: Some(amplitude),
            u_frequency_hz: Some(hz),
            stated: true,
        };
        let missing =
            |item: &str| BudgetItem { item: item.to_owned(), u_amplitude: None, u_frequency_hz: None, stated: false };
        let change = found.motions.get(i).and_then(Option::as_ref).map_or((0.0, 0.0), |motion| {
            let parts = (PARTS as f64).sqrt();
            let factor = request.scale.units_per_full_scale();
            (motion.scatter_amplitude * factor / parts, motion.scatter_nu * spectra.line_spacing_hz() / parts)
        });
        let items = vec![
            evaluated("noise", lone),
            evaluated("neighbours", (added(joint.0, lone.0), added(joint.1, lone.1))),
            evaluated("change", change),
            missing("factor"),
            missing("response"),
            missing("clock"),
        ];
        let combined = |lone: f64, joint: f64, change: f64| COVERAGE * lone.max(joint).hypot(change);
        Some(Self {
            items,
            frequency_u95_hz: combined(lone.1, joint.1, change.1),
            amplitude_u95: combined(lone.0, joint.0, change.0),
        })
    }

    /// The expanded uncertainty of a level, dB, of a tone of peak amplitude `amplitude`.
    pub(super) fn level_u95_db(&self, amplitude: f64) -> f64 {
        db(1.0 + self.amplitude_u95 / amplitude.max(rows::LEAST_AMPLITUDE))
    }
}
