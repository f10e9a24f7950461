//! Every window the program knows, one entry each. Adding a window is adding an entry here.
//!
//! Cosine sums are written with positive coefficients a_k of w\[n\] = Σ_k (-1)^k a_k cos(2πkn/N); their scale does not
//! matter, since every level is corrected by the window's own sum.

#![allow(clippy::unreadable_literal, reason = "coefficients stand as they are printed")]

use super::catalogue::{Entry, Family, ParameterSpec, Shape, cosine_sum, count, formula, made, range};
use super::{design, shape};

const HARRIS: &str = "F. J. Harris, Proc. IEEE 66 (1978) 51-83";
const NUTTALL: &str = "A. H. Nuttall, IEEE Trans. ASSP-29 (1981) 84-91";
const HEINZEL: &str =
    "G. Heinzel, A. Ruediger, R. Schilling, Spectrum and spectral density estimation by the DFT, 2002";
const ANTONA: &str = "G. D'Antona, A. Ferrero, Digital Signal Processing for Measurement Systems, 2006, p. 70-72";
const KAISER: &str = "J. F. Kaiser, in Kuo and Kaiser, System Analysis by Digital Computer, 1966; F. J. Harris 1978";

/// The coefficients of a cosine sum of one's own; Hann's by default.
const COEFFICIENTS: [ParameterSpec; 16] = [
    range("a_0", 0.0, 1e6, 0.5, 0.01),
    range("a_1", -1e6, 1e6, 0.5, 0.01),
    range("a_2", -1e6, 1e6, 0.0, 0.01),
    range("a_3", -1e6, 1e6, 0.0, 0.01),
    range("a_4", -1e6, 1e6, 0.0, 0.01),
    range("a_5", -1e6, 1e6, 0.0, 0.01),
    range("a_6", -1e6, 1e6, 0.0, 0.01),
    range("a_7", -1e6, 1e6, 0.0, 0.01),
    range("a_8", -1e6, 1e6, 0.0, 0.01),
    range("a_9", -1e6, 1e6, 0.0, 0.01),
    range("a_10", -1e6, 1e6, 0.0, 0.01),
    range("a_11", -1e6, 1e6, 0.0, 0.01),
    range("a_12", -1e6, 1e6, 0.0, 0.01),
    range("a_13", -1e6, 1e6, 0.0, 0.01),
    range("a_14", -1e6, 1e6, 0.0, 0.01),
    range("a_15", -1e6, 1e6, 0.0, 0.01),
];

pub(super) const CATALOGUE: &[Entry] = &[
    cosine_sum(
        "rectangular",
        &[1.0],
        "Finest resolution and least noise, for whole periods, transients that die inside the segment, or tones of like level; its side lobes hide all else",
        HARRIS,
    ),
    formula(
        "triangular",
        &[],
        shape::triangular,
        "Plain taper met in older work, whose transform is never negative; Hann does better at little more width",
        HARRIS,
    ),
    formula(
        "welch",
        &[],
        shape::welch,
        "Parabola with a narrow lobe for averaged densities; side lobes only 21 dB down",
        HARRIS,
    ),
    formula(
        "cosine",
        &[],
        shape::cosine,
        "Half a sine wave: a little more reach than rectangular at little cost in width; side lobes at -23 dB",
        HARRIS,
    ),
    cosine_sum(
        "hann",
        &[0.5, 0.5],
        "First choice for general work and for averaging; side lobes start at -31 dB but fall fast",
        HARRIS,
    ),
    formula(
        "cosine-cubed",
        &[],
        shape::cosine_cubed,
        "Between Hann and the fourth power: far tones fade at 24 dB an octave for a lobe a sixth wider than Hann's",
        HARRIS,
    ),
    cosine_sum(
        "cosine-fourth",
        &[0.375, 0.5, 0.125],
        "Far weak tones under strong ones: side lobes fall by 30 dB an octave; over a quarter wider than Hann",
        HARRIS,
    ),
    cosine_sum(
        "hamming",
        &[0.54, 0.46],
        "Tones of like level a few lines apart: nearest side lobes at -43 dB, but far ones hardly fall",
        HARRIS,
    ),
    cosine_sum(
        "hamming-exact",
        &[25.0 / 46.0, 21.0 / 46.0],
        "Hamming with an exact zero at 2.5 bins, where Hann's first side lobe stood; far side lobes hardly fall",
        HARRIS,
    ),
    cosine_sum(
        "blackman",
        &[0.42, 0.5, 0.08],
        "Weaker tones a few lines off: side lobes from -58 dB that fall fast; main lobe half again as wide as Hann's",
        HARRIS,
    ),
    cosine_sum(
        "blackman-exact",
        &[7938.0 / 18608.0, 9240.0 / 18608.0, 1430.0 / 18608.0],
        "Blackman with zeros at 3.5 and 4.5 bins: lobes 10 dB lower near the tone, but far ones hardly fall",
        HARRIS,
    ),
    cosine_sum(
        "blackman-harris-3",
        &[0.42323, 0.49755, 0.07922],
        "Near the lowest side lobes of three terms, -71 dB (67 in the first print); they hardly fall further out",
        HARRIS,
    ),
    cosine_sum(
        "blackman-harris",
        &[0.35875, 0.48829, 0.14128, 0.01168],
        "Tones up to 90 dB under a strong one; the main lobe, 8 lines wide, merges close pairs",
        HARRIS,
    ),
    cosine_sum(
        "nuttall-3",
        &[0.375, 0.5, 0.125],
        "Three terms with the fastest fall-off, 30 dB an octave; near side lobes at -47 dB",
        NUTTALL,
    ),
    cosine_sum(
        "nuttall-3a",
        &[0.40897, 0.5, 0.09103],
        "Three terms that fall by 18 dB an octave from -64 dB; a fair Blackman replacement",
        NUTTALL,
    ),
    cosine_sum(
        "nuttall-3b",
        &[0.4243801, 0.4973406, 0.0782793],
        "Lowest side lobes of any three terms, -71 dB; they hardly fall further out",
        NUTTALL,
    ),
    cosine_sum(
        "nuttall-4",
        &[0.3125, 0.46875, 0.1875, 0.03125],
        "Four terms with the fastest fall-off, 42 dB an octave, for tones far from a very strong one; near lobes only at -61 dB",
        NUTTALL,
    ),
    cosine_sum(
        "nuttall-4a",
        &[0.338946, 0.481973, 0.161054, 0.018027],
        "Falls by 30 dB an octave from -83 dB; an even choice of near and far at four terms",
        NUTTALL,
    ),
    cosine_sum(
        "nuttall-4b",
        &[0.355768, 0.487396, 0.144232, 0.012604],
        "Falls by 18 dB an octave from -93 dB: low near and far lobes; the main lobe is 8 lines wide",
        NUTTALL,
    ),
    cosine_sum(
        "nuttall-4c",
        &[0.3635819, 0.4891775, 0.1365995, 0.0106411],
        "Lowest side lobes of any four terms, -98 dB; they hardly fall further out",
        NUTTALL,
    ),
    cosine_sum(
        "flat-top",
        &[0.21557895, 0.41663158, 0.277263158, 0.083578947, 0.006947368],
        "A level off the line without correction, within 0.01 dB; needs tones ten lines apart and says nothing of frequency",
        ANTONA,
    ),
    cosine_sum(
        "flat-top-iso",
        &[1.0, 1.933, 1.286, 0.388, 0.0322],
        "Levels of a calibrator or a lone tone as the standard on spectra asks; wide, noise 5.8 dB over a line's",
        "ISO 18431-2:2004, coefficients as commonly quoted",
    ),
    cosine_sum(
        "sft3f",
        &[0.26526, 0.5, 0.23474],
        "Narrowest fast-falling flat-top; near side lobes only at -32 dB",
        HEINZEL,
    ),
    cosine_sum(
        "sft4f",
        &[0.21706, 0.42103, 0.28294, 0.07897],
        "Fast-falling flat-top of four terms; near side lobes at -45 dB",
        HEINZEL,
    ),
    cosine_sum(
        "sft5f",
        &[0.1881, 0.36923, 0.28702, 0.13077, 0.02488],
        "Flat-top whose lobes fall by 42 dB an octave; near ones at -57 dB and a wide lobe",
        HEINZEL,
    ),
    cosine_sum(
        "sft3m",
        &[0.28235, 0.52105, 0.19659],
        "Narrowest flat-top with even side lobes, -44 dB, for tones of like level",
        HEINZEL,
    ),
    cosine_sum(
        "sft4m",
        &[0.241906, 0.460841, 0.255381, 0.041872],
        "Flat-top with even side lobes at -66 dB; narrower than other flat-tops of that reach",
        HEINZEL,
    ),
    cosine_sum(
        "sft5m",
        &[0.209671, 0.407331, 0.281225, 0.092669, 0.0091036],
        "Flat-top with even side lobes at -90 dB; a full flat-top's width",
        HEINZEL,
    ),
    cosine_sum(
        "hft70",
        &[1.0, 1.90796, 1.07349, 0.18199],
        "Flat-top for tones down to -70 dB; the narrowest of its series",
        HEINZEL,
    ),
    cosine_sum(
        "hft95",
        &[1.0, 1.9383379, 1.3045202, 0.402827, 0.0350665],
        "Flat-top for tones down to -95 dB; far side lobes hardly fall",
        HEINZEL,
    ),
    cosine_sum(
        "hft90d",
        &[1.0, 1.942604, 1.340318, 0.440811, 0.043097],
        "Flat-top for tones down to -90 dB whose far side lobes fall by 18 dB an octave",
        HEINZEL,
    ),
    cosine_sum(
        "hft116d",
        &[1.0, 1.9575375, 1.4780705, 0.6367431, 0.1228389, 0.0066288],
        "Flat-top for tones down to -116 dB; main lobe of 12 lines",
        HEINZEL,
    ),
    cosine_sum(
        "hft144d",
        &[1.0, 1.96760033, 1.57983607, 0.81123644, 0.22583558, 0.02773848, 0.0009036],
        "Flat-top for tones down to -144 dB, past most converters; main lobe of 14 lines",
        HEINZEL,
    ),
    cosine_sum(
        "hft169d",
        &[1.0, 1.97441842, 1.65409888, 0.95788186, 0.3367342, 0.06364621, 0.00521942, 0.00010599],
        "Flat-top for computed data down to -168 dB as its printed coefficients give it; main lobe of 16 lines",
        HEINZEL,
    ),
    cosine_sum(
        "hft196d",
        &[1.0, 1.97928042, 1.710288951, 1.081629853, 0.448734314, 0.112376628, 0.015122992, 0.000871252, 0.000011896],
        "Flat-top for computed data down to -196 dB; main lobe of 18 lines",
        HEINZEL,
    ),
    cosine_sum(
        "hft223d",
        &[
            1.0,
            1.98298997309,
            1.75556083063,
            1.19037717712,
            0.56155440797,
            0.17296769663,
            0.03233247087,
            0.00324954578,
            0.0001380104,
            0.00000132725,
        ],
        "Flat-top for computed data down to -223 dB; main lobe of 20 lines",
        HEINZEL,
    ),
    cosine_sum(
        "hft248d",
        &[
            1.0,
            1.985844164102,
            1.791176438506,
            1.282075284005,
            0.667777530266,
            0.240160796576,
            0.056656381764,
            0.008134974479,
            0.00062454465,
            0.000019808998,
            0.000000132974,
        ],
        "Flat-top for proving a chain of computing, down to -248 dB; main lobe of 22 lines",
        HEINZEL,
    ),
    formula(
        "tukey",
        &[range("α", 0.0, 1.0, 0.5, 0.05)],
        shape::tukey,
        "Transients and short events whose middle must stand untouched; α is the tapered part, and side lobes stay near -15 dB",
        HARRIS,
    ),
    formula(
        "bohman",
        &[],
        shape::bohman,
        "Fall-off of 24 dB an octave from -46 dB; wide for what it gives near the tone",
        HARRIS,
    ),
    formula(
        "parzen",
        &[],
        shape::parzen,
        "Never a negative value in its transform, for smooth densities; wide",
        HARRIS,
    ),
    formula(
        "gaussian",
        &[range("α", 0.0, 8.0, 2.5, 0.1)],
        shape::gaussian,
        "Lobe that is a parabola in dB, which suits peak interpolation; α trades width for side lobes",
        HARRIS,
    ),
    formula(
        "kaiser",
        &[range("β", 0.0, 40.0, 8.6, 0.1)],
        shape::kaiser,
        "Width against side lobes by one number, near the best there is; side lobes fall by 6 dB an octave only",
        KAISER,
    ),
    // Sampled symmetric about (N-1)/2: the ripple is equal only with both end samples, whatever N is.
    made(
        "dolph-chebyshev",
        Family::Design,
        &[range("dB", 20.0, 240.0, 80.0, 1.0)],
        Shape::DolphChebyshev,
        "Narrowest lobe for a given side-lobe level, the same all the way out, so many strong tones add up; not DFT-even",
        "C. L. Dolph, Proc. IRE 34 (1946) 335-348",
    ),
    made(
        "taylor",
        Family::CosineSum,
        &[count("n̄", 1.0, 32.0, 4.0), range("dB", 20.0, 120.0, 30.0, 1.0)],
        Shape::Terms(design::taylor_terms),
        "A few near side lobes at a given level, then falling ones; holds it from n̄ = 4 at 30 dB, 13 at 60 dB",
        "T. T. Taylor, IRE Trans. Antennas and Propagation AP-3 (1955) 16-28",
    ),
    // Slepian's sequence belongs to its own N samples, symmetric about (N-1)/2.
    made(
        "slepian",
        Family::Design,
        &[range("NW", 0.5, 8.0, 3.0, 0.1)],
        Shape::Slepian,
        "Most energy within ±NW lines that a segment allows, for densities of wide range; not DFT-even, costly to make",
        "D. Slepian, Bell System Technical Journal 57 (1978) 1371-1430",
    ),
    made(
        "exponential",
        Family::Shape,
        &[range("dB", 0.0, 200.0, 40.0, 1.0)],
        Shape::Exponential,
        "Decaying responses that outlast the segment: falls by the given dB to its end; adds damping and has wide skirts",
        "common practice of impact testing, for instance D. J. Ewins, Modal Testing, 2000; the transform is a geometric series",
    ),
    Entry {
        name: "cosine-sum",
        family: Family::CosineSum,
        parameters: &COEFFICIENTS,
        purpose: "A cosine sum of one's own coefficients a_0, a_1, ... (w = a_0 - a_1 cos + a_2 cos - ...), for what is not listed",
        source: HARRIS,
        shape: Shape::Terms(<[f64]>::to_vec),
        least: 1,
        n_default: 2,
    },
];
