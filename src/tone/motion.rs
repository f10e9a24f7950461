//! How a tone moves over its segment.

/// A tone at one moment.
#[derive(Debug, Clone, Copy, PartialEq)]
pub struct CoursePoint {
    /// When, as a part of the segment: 0 at its start, 1 at its end.
    pub part: f64,
    /// Frequency, bins.
    pub nu: f64,
    /// Peak amplitude, full scales.
    pub amplitude: f64,
}

/// How a tone moves over the segment, where it was seen to move.
#[derive(Debug, Clone, PartialEq)]
pub struct Motion {
    /// Frequency at the segment's end less that at its start, bins.
    pub drift_nu: f64,
    /// Level at the segment's end less that at its start, dB.
    pub drift_db: f64,
    /// Greatest less least frequency, bins.
    pub span_nu: f64,
    /// Greatest less least level, dB.
    pub span_db: f64,
    /// The course of it, from start to end.
    pub course: Vec<CoursePoint>,
}
