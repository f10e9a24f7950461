//! Figures held against published and independently computed ones. Each value stands as a literal beside its source.

#![allow(missing_docs, reason = "a test target has no public interface")]
#![allow(clippy::unwrap_used, reason = "a test that cannot go on stops")]

mod computed;
mod exceptions;
mod open_data;
mod practice;
mod published;
mod samples;
mod windows;
