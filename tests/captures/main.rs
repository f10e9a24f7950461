//! The sample captures: made again byte for byte, opened through the product's reader, and holding what they claim.

// Tests stop at the first surprise, helpers included; the solver is written as in a textbook.
#![allow(clippy::unwrap_used, clippy::panic, clippy::needless_range_loop)]

#[path = "../../examples/make_sample_captures/samples/mod.rs"]
mod samples;

mod contents;
mod kinds;
mod oddities;
mod readings;
mod steady;
mod tables;
mod truth;
