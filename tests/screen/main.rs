//! The job walked through the screen by accessible names and keys, without a display: each step is checked on the
//! document and on what is shown.

mod desk;
mod journey;
mod keeping;
mod setup;
