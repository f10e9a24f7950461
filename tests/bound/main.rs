//! What is read of invented captures, against the least error that any estimate can have.

#![allow(missing_docs, reason = "a test target has no public interface")]
#![allow(clippy::unwrap_used, clippy::expect_used, reason = "a test that cannot go on stops")]

mod captures;
mod harness;
mod self_checks;
mod sine_fit;
mod verdicts;
