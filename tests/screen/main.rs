//! The job walked through the screen by accessible names and keys, without a display: each step is checked on the
//! document and on what is shown.

#![allow(clippy::expect_used, clippy::panic, clippy::unwrap_used)]

mod choosing;
mod deciding;
mod desk;
mod journey;
mod keeping;
mod lists;
mod opening;
mod parting;
mod ribbon;
mod setup;
mod typing;
