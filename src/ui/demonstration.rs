//! The demonstration capture opens telling its story: what its samples mean, and the part of the axes where it happens.

use std::path::Path;

use crate::session::{Note, Session};
use crate::units::{Factor, Quantity, Scale};

/// m/s² at full scale, both channels, as `sample-captures/README.md` documents it.
const UNITS_PER_FULL_SCALE: f64 = 98.1;

/// What is shown at first, Hz: shaft, mains and vane pass with their harmonics.
const SHOWN_HZ: (f64, f64) = (0.0, 300.0);

const NOTE: &str = "Demonstration, invented: Saltmarsh Drainage Board, pump 2, bearing housing. Scale as documented in \
                    sample-captures/README.md: 98.1 m/s² at full scale.";

/// Whether `path` is the demonstration capture, by whatever way it is named.
pub(super) fn is(path: &Path, demonstration: Option<&Path>) -> bool {
    let Some(demonstration) = demonstration else { return false };
    match (path.canonicalize(), demonstration.canonicalize()) {
        (Ok(a), Ok(b)) => a == b,
        _ => false,
    }
}

/// Puts what is known of the demonstration capture into a new document about it.
pub(super) fn dress(session: &mut Session) {
    for scale in &mut session.scales {
        *scale = Scale {
            quantity: Quantity::Acceleration,
            unit: Quantity::Acceleration.si_symbol().to_owned(),
            factor: Factor::UnitsPerFullScale(UNITS_PER_FULL_SCALE),
            ..Scale::default()
        };
    }
    if SHOWN_HZ.1 < session.sample_rate_hz() / 2.0 {
        session.axes.frequency_hz = Some(SHOWN_HZ);
    }
    session.notes.push(Note { frequency_hz: None, text: NOTE.to_owned() });
}
