//! Invented captures, their bounds, and how well they are read.

#![allow(dead_code, reason = "the test and the bench use different parts")]
#![allow(
    missing_docs,
    unreachable_pub,
    missing_debug_implementations,
    reason = "a test target has no public interface"
)]

pub mod advice;
pub mod dice;
pub mod figures;
pub mod fisher;
pub mod made;
pub mod noise;
pub mod read;
pub mod scenes;
pub mod score;
