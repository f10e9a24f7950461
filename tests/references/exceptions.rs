//! Printed figures that the printed definition does not give, each with what it gives and why.

use super::published::Figure::{
    self, CoherentGain, EnbwBins, FlatnessDb, Overlap50Percent, Overlap75Percent, RecommendedPercent, ScallopingDb,
    SideLobeDb, Width3Bins, Width6Bins, WorstCaseDb,
};

/// Source, window, figure, what is computed, reason.
pub(super) type Exception = (&'static str, &'static str, Figure, &'static str, &'static str);

const HARRIS: &str = "Harris 1978, table I";
const HEINZEL: &str = "Heinzel et al. 2002, appendices C and D";
const QUOTED: &str = "quoted for D'Antona and Ferrero 2006 and Cortes et al. 2007";

const LAST_DIGIT: &str = "the last printed digit is off by one or two; exact arithmetic gives the value here";
const HANN_LOBE: &str = "the first side lobe is -31.467 dB; Heinzel et al. 2002 print -31.5";
const HAMMING: &str = "scalloping and overlap belong to 25/46, the other figures of the row to 0.54/0.46";
const GAUSSIAN: &str = "the printed figures are those of α/1.04, as if 52 had stood for 50 in the exponent (inference)";
const DOLPH: &str =
    "the printed figures fit about 52 samples with one end sample dropped, which loses the equal ripple";
const TRUNCATED: &str = "printed without rounding: the level is nearer to the next decibel";
const EXACT_BLACKMAN: &str = "the row belongs to another window, of a_0 near 0.46; Nuttall 1981 re-plots -68.24 dB";
const NUTTALL_PLOTS: &str = "corrected by the re-plots of Nuttall 1981: -70.83 dB for 67, -62.05 dB for 61";
const COPIED: &str = "1.81 is Hamming's width and cannot stand beside 1.66 at -3 dB";
const BIN_SCALE: &str =
    "the widths of this family are printed 2.0 to 2.4 % high, about 512/500: a slip of bin scale (inference)";
const KAISER_SUM: &str = "the printed coefficients are not those of the formula, which gives -68.49 dB";
const HOP: &str = "the maximum is flat; the printed overlap is within 0.1 % of it";
const INTERPOLATED: &str = "printed widths are up to 2e-4 bins off, as if interpolated between lines";
const HFT169D: &str = "the printed a_4 leaves the edge at 2e-8; with 0.33673418 the level is -169.52 dB (inference)";
const SYMMETRIC: &str = "the quoted value is of 1000 symmetric points, or not of this window";

pub(super) const EXCEPTIONS: &[Exception] = &[
    (HARRIS, "triangular", Width6Bins, "1.7690", LAST_DIGIT),
    (HARRIS, "cosine", Width3Bins, "1.1870", LAST_DIGIT),
    (HARRIS, "cosine", Width6Bins, "1.6369", LAST_DIGIT),
    (HARRIS, "hann", SideLobeDb, "-31.467", HANN_LOBE),
    (HARRIS, "cosine-cubed", Width6Bins, "2.3083", LAST_DIGIT),
    (HARRIS, "cosine-fourth", Width3Bins, "1.8496", LAST_DIGIT),
    (HARRIS, "hamming", ScallopingDb, "1.7514", HAMMING),
    (HARRIS, "hamming", Overlap50Percent, "23.38", HAMMING),
    (HARRIS, "welch", WorstCaseDb, "3.0166", LAST_DIGIT),
    (HARRIS, "tukey=0.25", WorstCaseDb, "3.3848", LAST_DIGIT),
    (HARRIS, "tukey=0.25", Width6Bins, "1.3713", LAST_DIGIT),
    (HARRIS, "tukey=0.75", Width3Bins, "1.3026", LAST_DIGIT),
    (HARRIS, "bohman", Width3Bins, "1.6991", LAST_DIGIT),
    (HARRIS, "gaussian=2.5", CoherentGain, "0.4951", GAUSSIAN),
    (HARRIS, "gaussian=2.5", EnbwBins, "1.4456", GAUSSIAN),
    (HARRIS, "gaussian=2.5", ScallopingDb, "1.5802", GAUSSIAN),
    (HARRIS, "gaussian=2.5", WorstCaseDb, "3.1807", GAUSSIAN),
    (HARRIS, "gaussian=2.5", SideLobeDb, "-43.252", GAUSSIAN),
    (HARRIS, "gaussian=2.5", Width3Bins, "1.3709", GAUSSIAN),
    (HARRIS, "gaussian=2.5", Width6Bins, "1.9183", GAUSSIAN),
    (HARRIS, "gaussian=2.5", Overlap75Percent, "67.15", GAUSSIAN),
    (HARRIS, "gaussian=2.5", Overlap50Percent, "19.35", GAUSSIAN),
    (HARRIS, "gaussian=3", CoherentGain, "0.4166", GAUSSIAN),
    (HARRIS, "gaussian=3", EnbwBins, "1.7017", GAUSSIAN),
    (HARRIS, "gaussian=3", ScallopingDb, "1.1632", GAUSSIAN),
    (HARRIS, "gaussian=3", WorstCaseDb, "3.4721", GAUSSIAN),
    (HARRIS, "gaussian=3", SideLobeDb, "-56.066", GAUSSIAN),
    (HARRIS, "gaussian=3", Width3Bins, "1.6014", GAUSSIAN),
    (HARRIS, "gaussian=3", Width6Bins, "2.2555", GAUSSIAN),
    (HARRIS, "gaussian=3", Overlap75Percent, "56.90", GAUSSIAN),
    (HARRIS, "gaussian=3", Overlap50Percent, "10.18", GAUSSIAN),
    (HARRIS, "gaussian=3.5", CoherentGain, "0.3579", GAUSSIAN),
    (HARRIS, "gaussian=3.5", EnbwBins, "1.9765", GAUSSIAN),
    (HARRIS, "gaussian=3.5", ScallopingDb, "0.8702", GAUSSIAN),
    (HARRIS, "gaussian=3.5", WorstCaseDb, "3.8292", GAUSSIAN),
    (HARRIS, "gaussian=3.5", SideLobeDb, "-70.995", GAUSSIAN),
    (HARRIS, "gaussian=3.5", Width3Bins, "1.8549", GAUSSIAN),
    (HARRIS, "gaussian=3.5", Width6Bins, "2.6204", GAUSSIAN),
    (HARRIS, "gaussian=3.5", Overlap75Percent, "46.49", GAUSSIAN),
    (HARRIS, "gaussian=3.5", Overlap50Percent, "4.61", GAUSSIAN),
    (HARRIS, "dolph-chebyshev=50", EnbwBins, "1.4109", DOLPH),
    (HARRIS, "dolph-chebyshev=50", ScallopingDb, "1.6860", DOLPH),
    (HARRIS, "dolph-chebyshev=50", WorstCaseDb, "3.1810", DOLPH),
    (HARRIS, "dolph-chebyshev=50", Overlap75Percent, "68.61", DOLPH),
    (HARRIS, "dolph-chebyshev=50", Overlap50Percent, "21.60", DOLPH),
    (HARRIS, "dolph-chebyshev=60", EnbwBins, "1.5187", DOLPH),
    (HARRIS, "dolph-chebyshev=60", ScallopingDb, "1.4245", DOLPH),
    (HARRIS, "dolph-chebyshev=60", WorstCaseDb, "3.2391", DOLPH),
    (HARRIS, "dolph-chebyshev=60", Width6Bins, "2.0161", DOLPH),
    (HARRIS, "dolph-chebyshev=60", Overlap75Percent, "64.62", DOLPH),
    (HARRIS, "dolph-chebyshev=60", Overlap50Percent, "16.08", DOLPH),
    (HARRIS, "dolph-chebyshev=70", CoherentGain, "0.4433", DOLPH),
    (HARRIS, "dolph-chebyshev=70", EnbwBins, "1.6333", DOLPH),
    (HARRIS, "dolph-chebyshev=70", ScallopingDb, "1.2338", DOLPH),
    (HARRIS, "dolph-chebyshev=70", WorstCaseDb, "3.3644", DOLPH),
    (HARRIS, "dolph-chebyshev=70", Overlap75Percent, "60.14", DOLPH),
    (HARRIS, "dolph-chebyshev=70", Overlap50Percent, "11.83", DOLPH),
    (HARRIS, "dolph-chebyshev=80", CoherentGain, "0.4144", DOLPH),
    (HARRIS, "dolph-chebyshev=80", EnbwBins, "1.7418", DOLPH),
    (HARRIS, "dolph-chebyshev=80", ScallopingDb, "1.0884", DOLPH),
    (HARRIS, "dolph-chebyshev=80", WorstCaseDb, "3.4983", DOLPH),
    (HARRIS, "kaiser=6.283185307179586", ScallopingDb, "1.4527", LAST_DIGIT),
    (HARRIS, "kaiser=7.853981633974483", SideLobeDb, "-57.558", TRUNCATED),
    (HARRIS, "kaiser=9.42477796076938", SideLobeDb, "-69.618", TRUNCATED),
    (HARRIS, "blackman-exact", CoherentGain, "0.4266", EXACT_BLACKMAN),
    (HARRIS, "blackman-exact", EnbwBins, "1.6937", EXACT_BLACKMAN),
    (HARRIS, "blackman-exact", ScallopingDb, "1.1500", EXACT_BLACKMAN),
    (HARRIS, "blackman-exact", WorstCaseDb, "3.4384", EXACT_BLACKMAN),
    (HARRIS, "blackman-exact", SideLobeDb, "-68.236", EXACT_BLACKMAN),
    (HARRIS, "blackman-exact", Width3Bins, "1.6060", EXACT_BLACKMAN),
    (HARRIS, "blackman-exact", Width6Bins, "2.2503", EXACT_BLACKMAN),
    (HARRIS, "blackman-exact", Overlap75Percent, "57.76", EXACT_BLACKMAN),
    (HARRIS, "blackman-exact", Overlap50Percent, "10.00", EXACT_BLACKMAN),
    (HARRIS, "blackman", Width3Bins, "1.6409", BIN_SCALE),
    (HARRIS, "blackman", Width6Bins, "2.2950", BIN_SCALE),
    (HARRIS, "blackman-harris-3", SideLobeDb, "-70.826", NUTTALL_PLOTS),
    (HARRIS, "blackman-harris-3", Width3Bins, "1.6208", BIN_SCALE),
    (HARRIS, "blackman-harris-3", Width6Bins, "2.2702", COPIED),
    (HARRIS, "blackman-harris", Width6Bins, "2.6620", BIN_SCALE),
    (HARRIS, "cosine-sum=0.44959,0.49364,0.05677", SideLobeDb, "-62.046", NUTTALL_PLOTS),
    (HARRIS, "cosine-sum=0.44959,0.49364,0.05677", Width3Bins, "1.5296", BIN_SCALE),
    (HARRIS, "cosine-sum=0.44959,0.49364,0.05677", Width6Bins, "2.1406", BIN_SCALE),
    (HARRIS, "cosine-sum=0.40217,0.49703,0.09892,0.00188", Width3Bins, "1.6999", BIN_SCALE),
    (HARRIS, "cosine-sum=0.40217,0.49703,0.09892,0.00188", Width6Bins, "2.3832", BIN_SCALE),
    (HARRIS, "cosine-sum=0.40243,0.49804,0.09831,0.00122", SideLobeDb, "-66.421", KAISER_SUM),
    (HARRIS, "cosine-sum=0.40243,0.49804,0.09831,0.00122", Width3Bins, "1.7026", BIN_SCALE),
    (HARRIS, "cosine-sum=0.40243,0.49804,0.09831,0.00122", Width6Bins, "2.3858", BIN_SCALE),
    (HEINZEL, "nuttall-3", RecommendedPercent, "64.625", HOP),
    (HEINZEL, "nuttall-3b", Width3Bins, "1.6161", INTERPOLATED),
    (HEINZEL, "nuttall-4b", RecommendedPercent, "66.375", HOP),
    (HEINZEL, "sft3f", Width3Bins, "3.1503", INTERPOLATED),
    (HEINZEL, "sft4f", RecommendedPercent, "74.900", HOP),
    (HEINZEL, "sft4m", Width3Bins, "3.3452", INTERPOLATED),
    (HEINZEL, "hft70", Width3Bins, "3.3721", INTERPOLATED),
    (HEINZEL, "hft95", Width3Bins, "3.7592", INTERPOLATED),
    (HEINZEL, "hft90d", Width3Bins, "3.8321", INTERPOLATED),
    (HEINZEL, "hft144d", SideLobeDb, "-144.050", LAST_DIGIT),
    (HEINZEL, "hft144d", Width3Bins, "4.4698", INTERPOLATED),
    (HEINZEL, "hft169d", SideLobeDb, "-167.884", HFT169D),
    (HEINZEL, "hft196d", Width3Bins, "5.0309", INTERPOLATED),
    (HEINZEL, "hft223d", Width3Bins, "5.3001", INTERPOLATED),
    (HEINZEL, "hft248d", Width3Bins, "5.5568", INTERPOLATED),
    (QUOTED, "flat-top", EnbwBins, "3.7702", SYMMETRIC),
    (QUOTED, "flat-top", FlatnessDb, "0.00978", SYMMETRIC),
    (QUOTED, "cosine-sum=0.20142488,0.39291808,0.28504554,0.10708192,0.01352957", SideLobeDb, "-79.041", LAST_DIGIT),
];
