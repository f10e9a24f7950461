//! Cancelling and progress of long work.

use std::sync::Arc;
use std::sync::atomic::{AtomicBool, AtomicU32, Ordering};

/// The work was called off; what it had is discarded.
#[derive(Debug, Clone, Copy, PartialEq, Eq, thiserror::Error)]
#[error("cancelled")]
pub struct Cancelled;

/// A handle shared between long work and whoever waits for it: the waiter may cancel, the work tells how far it is.
///
/// Clones share one state.
#[derive(Debug, Clone, Default)]
pub struct Watch(Arc<State>);

#[derive(Debug, Default)]
struct State {
    cancelled: AtomicBool,
    permille: AtomicU32,
}

impl Watch {
    /// A watch that nobody has cancelled, at no progress.
    pub fn new() -> Self {
        Self::default()
    }

    /// Asks the work to stop at its next check.
    pub fn cancel(&self) {
        self.0.cancelled.store(true, Ordering::Relaxed);
    }

    /// Whether the work was asked to stop.
    pub fn is_cancelled(&self) -> bool {
        self.0.cancelled.load(Ordering::Relaxed)
    }

    /// Long loops call this every few milliseconds.
    ///
    /// # Errors
    /// [`Cancelled`] once [`Watch::cancel`] was called.
    pub fn check(&self) -> Result<(), Cancelled> {
        if self.is_cancelled() { Err(Cancelled) } else { Ok(()) }
    }

    /// Tells how much of the work is done, 0 to 1.
    pub fn report(&self, part: f64) {
        self.0.permille.store((part.clamp(0.0, 1.0) * 1000.0).round() as u32, Ordering::Relaxed);
    }

    /// How much of the work is done, 0 to 1.
    pub fn progress(&self) -> f64 {
        f64::from(self.0.permille.load(Ordering::Relaxed)) / 1000.0
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn clones_share_cancellation_and_progress() {
        let watch = Watch::new();
        let other = watch.clone();
        other.report(0.25);
        assert_eq!(watch.progress(), 0.25);
        assert_eq!(watch.check(), Ok(()));
        other.cancel();
        assert_eq!(watch.check(), Err(Cancelled));
    }
}
