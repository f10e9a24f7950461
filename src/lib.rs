//! Panewise turns a recorded capture into a signed figure: mark a steady segment, lay several DFT windows over it
//! side by side, read each tone's frequency and corrected level, and keep the session that gives the same numbers
//! again.
//!
//! # The plan of the house
//!
//! Each floor stands only on floors below it (a test holds this). Nothing below [`ui`] knows that a screen exists;
//! nothing in the numerics knows that files exist.
//!
//! | floor | what it is |
//! |---|---|
//! | `main.rs` | arguments in, exit status out |
//! | [`ui`] | the window of the desktop: draws state, sends commands; holds no numerics |
//! | [`cli`] | the headless commands |
//! | [`report`] | tables and figures: a [`reading::Reading`] in, bytes out |
//! | [`reading`] | from a capture and a session to one [`reading::Reading`]: what screen, command line and report show |
//! | [`session`] | the document: what is saved, its commands, undo |
//! | [`capture`] | recording files: readers, overview, what is wrong with them |
//! | [`tone`] | peaks over the floor, pane readings, ledgers, states |
//! | [`spectrum`] | one transform of the segment, many panes |
//! | [`window`] | the catalogue of DFT windows, their kernels and figures of merit |
//! | [`signal`] | what a stretch of samples is |
//! | [`units`] | quantities, detectors, references, decibels |
//!
//! # Words
//!
//! **window** is a DFT window, **pane** is one window applied to the segment with its plot, a **line** is one value
//! of a spectrum, a spectral position counted in lines is a **bin** (symbol ν). Frequencies are in hertz outside and
//! in bins inside; names say which. All numerics are in `f64`; `f32` is used for drawing only.

pub mod capture;
pub mod cli;
pub mod reading;
pub mod report;
pub mod session;
pub mod signal;
pub mod spectrum;
pub mod tone;
pub mod ui;
pub mod units;
pub mod window;
