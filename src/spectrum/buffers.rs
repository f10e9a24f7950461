//! Large buffers used again: fresh memory costs more than filling it, and a dragged edge asks for a dozen at every step.

use std::sync::{Mutex, PoisonError};

use realfft::num_complex::Complex64;

/// Buffers of real values.
pub(super) static REAL: Pool<f64> = Pool::new();

/// Buffers of complex values.
pub(super) static COMPLEX: Pool<Complex64> = Pool::new();

/// Buffers kept for use again.
const KEPT: usize = 8;

/// Smaller buffers are not worth keeping, values.
const LEAST: usize = 1 << 12;

/// Larger buffers are not kept: a segment of minutes is not dragged at every frame, and its memory is wanted back.
const MOST: usize = 1 << 21;

/// Spare buffers of one kind.
pub(super) struct Pool<T>(Mutex<Vec<Vec<T>>>);

impl<T: Clone + Default> Pool<T> {
    const fn new() -> Self {
        Self(Mutex::new(Vec::new()))
    }

    /// A buffer of `n` values, whatever they are.
    pub(super) fn take(&self, n: usize) -> Vec<T> {
        let mut spare = self.0.lock().unwrap_or_else(PoisonError::into_inner);
        // One that is much too large would hold its memory for nothing.
        let fits = |b: &Vec<T>| b.capacity() >= n && b.capacity() <= 2 * n.max(LEAST);
        let found = spare.iter().position(fits).map(|place| spare.swap_remove(place));
        drop(spare);
        let mut buffer = found.unwrap_or_default();
        buffer.resize(n, T::default());
        buffer
    }

    /// Gives a buffer back. The oldest kept makes room, so that lengths no longer asked for do not stay.
    pub(super) fn give_back(&self, buffer: Vec<T>) {
        if !(LEAST..=MOST).contains(&buffer.capacity()) {
            return;
        }
        let mut spare = self.0.lock().unwrap_or_else(PoisonError::into_inner);
        if spare.len() == KEPT {
            spare.remove(0);
        }
        spare.push(buffer);
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn a_buffer_has_the_length_asked_for_whatever_was_given_back() {
        for n in [0, 1, LEAST, 3 * LEAST, 2 * LEAST, 100, MOST + 1, 5] {
            let buffer = REAL.take(n);
            assert_eq!(buffer.len(), n);
            REAL.give_back(buffer);
        }
    }
}
