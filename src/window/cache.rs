//! A small store of what was computed for a window and a length.

use std::collections::VecDeque;
use std::sync::{Mutex, PoisonError};

use super::Window;

/// How many results are kept; the oldest goes first.
const CAPACITY: usize = 512;

#[derive(Debug)]
struct Stored<V> {
    window: String,
    n: usize,
    value: V,
}

/// Results keyed by a window's text and a length, bounded in number.
#[derive(Debug)]
pub(super) struct Cache<V> {
    stored: Mutex<VecDeque<Stored<V>>>,
}

impl<V: Clone> Cache<V> {
    pub(super) const fn new() -> Self {
        Self { stored: Mutex::new(VecDeque::new()) }
    }

    /// The stored result, or `make`'s. Computing goes on outside the lock; two threads may both compute, to the same
    /// result.
    pub(super) fn get(&self, window: &Window, n: usize, make: impl FnOnce() -> V) -> V {
        let text = window.to_string();
        if let Some(value) = self.find(&text, n) {
            return value;
        }
        let value = make();
        let mut stored = self.stored.lock().unwrap_or_else(PoisonError::into_inner);
        if stored.len() >= CAPACITY {
            stored.pop_front();
        }
        stored.push_back(Stored { window: text, n, value: value.clone() });
        value
    }

    fn find(&self, text: &str, n: usize) -> Option<V> {
        let stored = self.stored.lock().unwrap_or_else(PoisonError::into_inner);
        stored.iter().rev().find(|one| one.n == n && one.window == text).map(|one| one.value.clone())
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn results_are_kept_and_bounded() {
        let (cache, window) = (Cache::new(), Window::parse("hann").unwrap());
        assert_eq!(cache.get(&window, 8, || 1), 1);
        assert_eq!(cache.get(&window, 8, || 2), 1);
        assert_eq!(cache.get(&window, 9, || 3), 3);
        for n in 0..2 * CAPACITY {
            cache.get(&window, n, || 0);
        }
        assert_eq!(cache.stored.lock().unwrap().len(), CAPACITY);
    }
}
