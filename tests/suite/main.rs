//! Tests of the whole program: the real binary, the files it writes, the plan of the house.

// A helper of a test fails the test.
#![allow(clippy::unwrap_used, clippy::expect_used, clippy::panic)]

mod command_line;
mod layering;
mod readme;
mod recheck;
mod session_file;
mod shop;
mod usage;
