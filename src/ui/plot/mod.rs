//! What a plot is made of: axes, ticks, curves, labels that keep clear of each other.

mod axis;
mod curve;
mod labels;

pub(super) use axis::Axis;
pub(super) use curve::{CurveCache, Trace, draw_tint, draw_trace};
pub(super) use labels::{Wish, place};
