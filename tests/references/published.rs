//! Window figures as published, one row a window, figures in the order of the columns named; `.` where nothing is
//! printed.

/// What each column of a table holds.
#[derive(Debug, Clone, Copy, PartialEq, Eq)]
pub(super) enum Figure {
    CoherentGain,
    EnbwBins,
    ScallopingDb,
    WorstCaseDb,
    SideLobeDb,
    FallOffDb,
    Width3Bins,
    Width6Bins,
    NullToNullBins,
    Overlap75Percent,
    Overlap50Percent,
    RecommendedPercent,
    FlatnessDb,
}

/// A printed table.
#[derive(Debug)]
pub(super) struct Table {
    /// Author and year.
    pub(super) source: &'static str,
    /// The length at which figures are held against it; its own if it says one.
    pub(super) n: usize,
    pub(super) columns: &'static [Figure],
    /// Window and figures.
    pub(super) rows: &'static [(&'static str, &'static str)],
}

use Figure::{
    CoherentGain, EnbwBins, FallOffDb, FlatnessDb, NullToNullBins, Overlap50Percent, Overlap75Percent,
    RecommendedPercent, ScallopingDb, SideLobeDb, Width3Bins, Width6Bins, WorstCaseDb,
};

/// F. J. Harris, On the use of windows for harmonic analysis with the discrete Fourier transform, Proc. IEEE 66 (1978)
/// 51-83, table I. The values are given from memory. His 61 dB, 74 dB and 4-sample Kaiser-Bessel windows, which the
/// catalogue does not list, stand as cosine sums (74 dB with the coefficients that Nuttall corrected).
pub(super) const HARRIS: Table = Table {
    source: "Harris 1978, table I",
    n: 4096,
    columns: &[
        CoherentGain,
        EnbwBins,
        ScallopingDb,
        WorstCaseDb,
        SideLobeDb,
        FallOffDb,
        Width3Bins,
        Width6Bins,
        Overlap75Percent,
        Overlap50Percent,
    ],
    rows: &[
        ("rectangular", "1.00 1.00 3.92 3.92 -13 -6 0.89 1.21 75.0 50.0"),
        ("triangular", "0.50 1.33 1.82 3.07 -27 -12 1.28 1.78 71.9 25.0"),
        ("cosine", "0.64 1.23 2.10 3.01 -23 -12 1.20 1.65 75.5 31.8"),
        ("hann", "0.50 1.50 1.42 3.18 -32 -18 1.44 2.00 65.9 16.7"),
        ("cosine-cubed", "0.42 1.73 1.08 3.47 -39 -24 1.66 2.32 56.7 8.5"),
        ("cosine-fourth", "0.38 1.94 0.86 3.75 -47 -30 1.86 2.59 48.6 4.3"),
        ("hamming", "0.54 1.36 1.78 3.10 -43 -6 1.30 1.81 70.7 23.5"),
        ("welch", "0.67 1.20 2.22 3.01 -21 -12 1.16 1.59 76.5 34.4"),
        ("parzen", "0.38 1.92 0.90 3.72 -53 -24 1.82 2.55 49.3 5.0"),
        ("tukey=0.25", "0.88 1.10 2.96 3.39 -14 -18 1.01 1.38 74.1 44.4"),
        ("tukey=0.5", "0.75 1.22 2.24 3.11 -15 -18 1.15 1.57 72.7 36.4"),
        ("tukey=0.75", "0.63 1.36 1.73 3.07 -19 -18 1.31 1.80 70.5 25.1"),
        ("bohman", "0.41 1.79 1.02 3.54 -46 -24 1.71 2.38 54.5 7.4"),
        ("gaussian=2.5", "0.51 1.39 1.69 3.14 -42 -6 1.33 1.86 67.7 20.0"),
        ("gaussian=3", "0.43 1.64 1.25 3.40 -55 -6 1.55 2.18 57.5 10.6"),
        ("gaussian=3.5", "0.37 1.90 0.94 3.73 -69 -6 1.79 2.52 47.2 4.9"),
        ("dolph-chebyshev=50", "0.53 1.39 1.70 3.12 -50 0 1.33 1.85 69.6 22.3"),
        ("dolph-chebyshev=60", "0.48 1.51 1.44 3.23 -60 0 1.44 2.01 64.7 16.3"),
        ("dolph-chebyshev=70", "0.45 1.62 1.25 3.35 -70 0 1.55 2.17 60.2 11.9"),
        ("dolph-chebyshev=80", "0.42 1.73 1.10 3.48 -80 0 1.65 2.31 55.9 8.7"),
        ("kaiser=6.283185307179586", "0.49 1.50 1.46 3.20 -46 -6 1.43 1.99 65.7 16.9"),
        ("kaiser=7.853981633974483", "0.44 1.65 1.20 3.38 -57 -6 1.57 2.20 59.5 11.2"),
        ("kaiser=9.42477796076938", "0.40 1.80 1.02 3.56 -69 -6 1.71 2.39 53.9 7.4"),
        ("kaiser=10.995574287564276", "0.37 1.93 0.89 3.74 -82 -6 1.83 2.57 48.8 4.8"),
        ("blackman-exact", "0.46 1.57 1.33 3.29 -51 -6 1.52 2.13 62.7 14.0"),
        ("blackman", "0.42 1.73 1.10 3.47 -58 -18 1.68 2.35 56.7 9.0"),
        ("blackman-harris-3", "0.42 1.71 1.13 3.45 -67 -6 1.66 1.81 57.2 9.6"),
        ("blackman-harris", "0.36 2.00 0.83 3.85 -92 -6 1.90 2.72 46.0 3.8"),
        ("cosine-sum=0.44959,0.49364,0.05677", "0.45 1.61 1.27 3.34 -61 -6 1.56 2.19 61.0 12.6"),
        ("cosine-sum=0.40217,0.49703,0.09892,0.00188", "0.40 1.79 1.03 3.56 -74 -6 1.74 2.44 53.9 7.4"),
        ("cosine-sum=0.40243,0.49804,0.09831,0.00122", "0.40 1.80 1.02 3.56 -69 -6 1.74 2.44 53.9 7.4"),
    ],
};

/// A. H. Nuttall, Some windows with very good sidelobe behavior, IEEE Trans. ASSP-29 (1981) 84-91, captions of the
/// figures, his re-plots of Harris's windows included. Values from memory.
pub(super) const NUTTALL: Table = Table {
    source: "Nuttall 1981, figures",
    n: 65536,
    columns: &[SideLobeDb, FallOffDb],
    rows: &[
        ("cosine-sum=0.53836,0.46164", "-43.19 -6"),
        ("nuttall-3", "-46.74 -30"),
        ("nuttall-3a", "-64.19 -18"),
        ("nuttall-3b", "-71.48 -6"),
        ("nuttall-4", "-60.95 -42"),
        ("nuttall-4a", "-82.60 -30"),
        ("nuttall-4b", "-93.32 -18"),
        ("nuttall-4c", "-98.17 -6"),
        ("blackman-exact", "-68.24 -6"),
        ("blackman", "-58.11 -18"),
        ("blackman-harris-3", "-70.83 -6"),
        ("cosine-sum=0.44959,0.49364,0.05677", "-62.05 -6"),
        ("blackman-harris", "-92.01 -6"),
        ("cosine-sum=0.40217,0.49703,0.09892,0.00188", "-74.39 -6"),
    ],
};

/// G. Heinzel, A. Ruediger, R. Schilling, Spectrum and spectral density estimation by the discrete Fourier transform
/// (DFT), including a comprehensive list of window functions and some new flat-top windows, 2002, appendices C and D
/// and the summary table.
pub(super) const HEINZEL: Table = Table {
    source: "Heinzel et al. 2002, appendices C and D",
    n: 1024,
    columns: &[EnbwBins, SideLobeDb, FallOffDb, Width3Bins, NullToNullBins, RecommendedPercent, FlatnessDb],
    rows: &[
        ("rectangular", "1.0000 -13.3 -6 0.8845 2.0 0.0 -3.9224"),
        ("triangular", "1.3333 -26.5 -12 1.2736 4.0 50.0 -1.8242"),
        ("welch", "1.2000 -21.3 -12 1.1535 2.86 29.3 -2.2248"),
        ("hann", "1.5000 -31.5 -18 1.4382 4.0 50.0 -1.4236"),
        ("hamming", "1.3628 -42.7 -6 1.3008 4.0 50.0 -1.7514"),
        ("blackman-harris", "2.0044 -92.0 -6 1.8962 8.0 66.1 -0.8256"),
        ("nuttall-3", "1.9444 -46.7 -30 1.8496 6.0 64.7 -0.8630"),
        ("nuttall-3a", "1.7721 -64.2 -18 1.6828 6.0 61.2 -1.0453"),
        ("nuttall-3b", "1.7037 -71.5 -6 1.6162 6.0 59.8 -1.1352"),
        ("nuttall-4", "2.3100 -60.9 -42 2.1884 8.0 70.5 -0.6184"),
        ("nuttall-4a", "2.1253 -82.6 -30 2.0123 8.0 68.0 -0.7321"),
        ("nuttall-4b", "2.0212 -93.3 -18 1.9122 8.0 66.3 -0.8118"),
        ("nuttall-4c", "1.9761 -98.1 -6 1.8687 8.0 65.6 -0.8506"),
        ("kaiser=9.42477796076938", "1.7952 -69.6 -6 1.7025 . 61.9 -1.0226"),
        ("kaiser=12.566370614359172", "2.0533 -94.4 -6 1.9417 . 67.0 -0.7877"),
        ("kaiser=15.707963267948966", "2.2830 -119.8 -6 2.1553 . 70.5 -0.6403"),
        ("sft3f", "3.1681 -31.7 -18 3.1502 6.0 66.7 0.0082"),
        ("sft4f", "3.7970 -44.7 -30 3.7618 8.0 75.0 0.0041"),
        ("sft5f", "4.3412 -57.3 -42 4.2910 10.0 78.5 -0.0025"),
        ("sft3m", "2.9452 -44.2 -6 2.9183 6.0 65.5 -0.0115"),
        ("sft4m", "3.3868 -66.5 -6 3.3451 8.0 72.1 -0.0067"),
        ("sft5m", "3.8852 -89.9 -6 3.8340 10.0 76.0 0.0039"),
        ("hft70", "3.4129 -70.4 -6 3.3720 8.0 72.2 -0.0065"),
        ("hft95", "3.8112 -95.0 -6 3.7590 10.0 75.6 0.0044"),
        ("hft90d", "3.8832 -90.2 -18 3.8320 10.0 76.0 -0.0039"),
        ("hft116d", "4.2186 -116.8 -18 4.1579 12.0 78.2 -0.0028"),
        ("hft144d", "4.5386 -144.1 -18 4.4697 14.0 79.9 0.0021"),
        ("hft169d", "4.8347 -169.5 -18 4.7588 16.0 81.2 0.0017"),
        ("hft196d", "5.1134 -196.2 -18 5.0308 18.0 82.3 0.0013"),
        ("hft223d", "5.3888 -223.0 -18 5.3000 20.0 83.3 -0.0011"),
        ("hft248d", "5.6512 -248.4 -18 5.5567 22.0 84.1 0.0009"),
    ],
};

/// Figures quoted in public lists of windows: the five-term flat-top of D'Antona and Ferrero 2006 (p. 70-72), and the
/// fast-falling flat-top of Cortes et al., A new class of flat-top windows for exposure assessment in magnetic field
/// measurements, 2007.
pub(super) const FLAT_TOPS: Table = Table {
    source: "quoted for D'Antona and Ferrero 2006 and Cortes et al. 2007",
    n: 65536,
    columns: &[EnbwBins, SideLobeDb, FallOffDb, FlatnessDb],
    rows: &[
        ("flat-top", "3.774 -93.0 . 0.0025"),
        ("cosine-sum=0.20142488,0.39291808,0.28504554,0.10708192,0.01352957", ". -79.06 -30 ."),
    ],
};
