//! Figures of merit, each computed from its definition.

use std::sync::Arc;

use super::cache::Cache;
use super::catalogue::Shape;
use super::fall_off::side_lobe_falloff_db_per_octave;
use super::lobes::Lobes;
use super::overlap::OverlapFigures;
use super::window_type::Sums;
use super::{Kernel, Window};

/// Figures read off a kernel are those of at least so many samples: in fewer the lobes have no room.
const SHORTEST: usize = 64;

/// And of at most so many, where the kernel has no closed form: beyond, they change by less than 1e-4 dB or bins.
const LONGEST: usize = 4096;

/// The figures of merit of a window of N samples (Harris 1978 names and defines most of them).
///
/// Coherent gain and equivalent noise bandwidth are those of the N samples. What is read off the kernel (scalloping,
/// widths, side lobes, flatness) is that of N samples, but of 64 at least, and of 4096 at most where the kernel has no
/// closed form. The overlap figures are those of 4000 samples. Finite N moves deep side lobes of windows with an edge:
/// `nuttall-4c` has -98.14 dB at 1024 samples and -98.17 dB in the limit.
#[derive(Debug, Clone, PartialEq)]
pub struct Merit {
    /// S1/N.
    pub coherent_gain: f64,
    /// Equivalent noise bandwidth N·S2/S1², in bins (`f64::MAX` where so few samples are taken that they sum to 0).
    pub enbw_bins: f64,
    /// How much lower the worst line between two bins reads, |W(0)|/|W(1/2)|, dB (positive).
    pub scalloping_loss_db: f64,
    /// Scalloping loss and 10 lg ENBW together, dB.
    pub worst_case_processing_loss_db: f64,
    /// Width of the main lobe at exactly -3 dB, bins.
    pub width_3db_bins: f64,
    /// Width at exactly -6 dB, bins.
    pub width_6db_bins: f64,
    /// Width from first null to first null, bins. A window without true nulls (Gaussian, exponential and others) has
    /// its first minimum in its place; one whose kernel only falls, the places where it has fallen by 20 dB.
    pub width_null_bins: f64,
    /// The highest side lobe, dB over the main lobe (negative), within 60 bins past the main lobe; where the kernel
    /// only falls, its level at the main lobe's end.
    pub highest_side_lobe_db: f64,
    /// How fast side lobes fall, dB an octave (negative): 6.02 dB for each power of frequency, which follows from how
    /// the window meets zero at its edge (Nuttall 1981); measured off the kernel for designs.
    pub side_lobe_falloff_db_per_octave: f64,
    /// Correlation of two blocks that overlap by half.
    pub overlap_correlation_50: f64,
    /// Correlation of two blocks that overlap by three quarters.
    pub overlap_correlation_75: f64,
    /// The overlap recommended for averaging, per cent: that of the largest difference between amplitude flatness
    /// (smallest over largest total weight of a sample) and overlap correlation (Heinzel, Ruediger, Schilling 2002).
    pub recommended_overlap_percent: f64,
    /// Largest departure from the top within half a bin, dB, with its sign.
    pub flatness_db: f64,
}

/// What is read off the kernel.
#[derive(Debug, Clone, Copy)]
struct LobeFigures {
    scalloping_loss_db: f64,
    width_3db_bins: f64,
    width_6db_bins: f64,
    half_width_bins: f64,
    highest_side_lobe_db: f64,
    falloff_db_per_octave: f64,
    flatness_db: f64,
}

impl LobeFigures {
    fn of(window: &Window, n: usize) -> Self {
        let kernel = window.kernel(n);
        let lobes = Lobes::new(&kernel);
        let half_width_bins = lobes.half_width_bins();
        Self {
            scalloping_loss_db: -lobes.level_db(0.5),
            width_3db_bins: lobes.width_bins(-3.0),
            width_6db_bins: lobes.width_bins(-6.0),
            half_width_bins,
            highest_side_lobe_db: lobes.highest_side_lobe_db(half_width_bins),
            falloff_db_per_octave: side_lobe_falloff_db_per_octave(window),
            flatness_db: lobes.flatness_db(),
        }
    }
}

static MERITS: Cache<Arc<Merit>> = Cache::new();
static LOBES: Cache<LobeFigures> = Cache::new();
static OVERLAPS: Cache<OverlapFigures> = Cache::new();
static HALF_WIDTHS: Cache<f64> = Cache::new();
static FLATNESSES: Cache<f64> = Cache::new();

impl Merit {
    fn of(window: &Window, n: usize) -> Self {
        let n = n.max(1);
        let enbw_bins = enbw_bins(window.sums(n), n);
        let lobe_length = lobe_length(window, n);
        let lobes = LOBES.get(window, lobe_length, || LobeFigures::of(window, lobe_length));
        let overlaps = OVERLAPS.get(window, 0, || OverlapFigures::of(window));
        Self {
            coherent_gain: window.sums(n).s1 / n as f64,
            enbw_bins,
            scalloping_loss_db: lobes.scalloping_loss_db,
            worst_case_processing_loss_db: lobes.scalloping_loss_db + 10.0 * enbw_bins.log10(),
            width_3db_bins: lobes.width_3db_bins,
            width_6db_bins: lobes.width_6db_bins,
            width_null_bins: 2.0 * lobes.half_width_bins,
            highest_side_lobe_db: lobes.highest_side_lobe_db,
            side_lobe_falloff_db_per_octave: lobes.falloff_db_per_octave,
            overlap_correlation_50: overlaps.correlation_50,
            overlap_correlation_75: overlaps.correlation_75,
            recommended_overlap_percent: overlaps.recommended_percent,
            flatness_db: lobes.flatness_db,
        }
    }
}

/// N·S2/S1² (Harris 1978, eq. 11), kept finite.
fn enbw_bins(sums: Sums, n: usize) -> f64 {
    let bins = n as f64 * sums.s2 / (sums.s1 * sums.s1);
    if bins.is_finite() { bins } else { f64::MAX }
}

/// The length whose kernel stands for one of N samples.
fn lobe_length(window: &Window, n: usize) -> usize {
    let closed_form = matches!(
        window.entry().shape,
        Shape::CosineSum(_) | Shape::Terms(_) | Shape::DolphChebyshev | Shape::Exponential
    );
    if closed_form { n.max(SHORTEST) } else { n.clamp(SHORTEST, LONGEST) }
}

pub(super) fn cached(window: &Window, n: usize) -> Arc<Merit> {
    MERITS.get(window, n, || Arc::new(Merit::of(window, n)))
}

pub(super) fn half_width_bins(window: &Window, n: usize) -> f64 {
    let n = n.clamp(SHORTEST, LONGEST);
    HALF_WIDTHS.get(window, n, || Lobes::new(&window.kernel(n)).half_width_bins())
}

pub(super) fn flatness_db(window: &Window) -> f64 {
    FLATNESSES.get(window, LONGEST, || Lobes::new(&Kernel::new(window, LONGEST)).flatness_db())
}
