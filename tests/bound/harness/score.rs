//! How a Reading compares with what was put in.

use std::time::Instant;

use panewise::reading::{Reading, Tone, Verdict};

use super::fisher::Linearised;
use super::made::Made;
use super::read::read;
use super::scenes::{Scene, Tint, make};

/// One tone that was put in, and what was read of it.
#[derive(Debug, Clone)]
pub struct Record {
    pub scene: Scene,
    pub tint: Tint,
    pub seed: u64,
    pub n: usize,
    pub nu: f64,
    pub snr_db: f64,
    pub drift: f64,
    /// Lines to the nearest neighbour.
    pub gap: f64,
    pub found: Option<Found>,
}

/// What was read of a tone.
#[derive(Debug, Clone)]
pub struct Found {
    /// Errors over the bound's standard deviation.
    pub amplitude_in_bounds: f64,
    pub nu_in_bounds: f64,
    /// What the same noise makes of a linear fit, likewise.
    pub least_amplitude_in_bounds: f64,
    pub least_nu_in_bounds: f64,
    /// Errors over the stated expanded uncertainty; none where none was stated.
    pub amplitude_in_u95: Option<f64>,
    pub nu_in_u95: Option<f64>,
    pub verdict: Option<Verdict>,
}

/// One capture.
#[derive(Debug, Clone)]
pub struct Outcome {
    pub seed: u64,
    pub records: Vec<Record>,
    /// What was listed as a tone without being one, bins.
    pub false_tones: Vec<f64>,
    /// What the reading took.
    pub seconds: f64,
}

/// A tone read within this of one put in is that one, lines.
const SAME: f64 = 0.5;

/// Makes, reads and compares one capture.
pub fn outcome(scene: Scene, tint: Tint, seed: u64) -> Outcome {
    let made = make(scene, tint, seed);
    let start = Instant::now();
    let reading = read(&made, &["hann"]);
    let seconds = start.elapsed().as_secs_f64();
    Outcome { seconds, ..compare(scene, tint, &made, &reading) }
}

/// The outcomes of consecutive seeds, on two threads.
pub fn outcomes(scene: Scene, tint: Tint, seeds: std::ops::Range<u64>) -> Vec<Outcome> {
    let middle = u64::midpoint(seeds.start, seeds.end);
    let half = |seeds: std::ops::Range<u64>| seeds.map(|seed| outcome(scene, tint, seed)).collect::<Vec<_>>();
    std::thread::scope(|scope| {
        let first = scope.spawn(|| half(seeds.start..middle));
        let mut second = half(middle..seeds.end);
        let mut all = first.join().unwrap();
        all.append(&mut second);
        all
    })
}

/// Whether a tone of the table counts as one: those too weak to be sure do not.
pub fn counts(tone: &Tone) -> bool {
    tone.verdict != Some(Verdict::Faint)
}

/// Compares a Reading with what was put in.
pub fn compare(scene: Scene, tint: Tint, made: &Made, reading: &Reading) -> Outcome {
    let linearised = Linearised::of(made);
    let (bounds, least) = (linearised.bounds(), linearised.errors());
    let mut left: Vec<&Tone> = reading.tones.iter().filter(|t| counts(t)).collect();
    let mut records = Vec::new();
    // The strongest choose first, so that a weak tone does not take what belongs to its neighbour.
    let mut order: Vec<usize> = (0..made.tones.len()).collect();
    order.sort_by(|&a, &b| made.tones[b].peak.total_cmp(&made.tones[a].peak));
    for i in order {
        let tone = &made.tones[i];
        let distance = |t: &Tone| (t.frequency_hz - tone.nu).abs();
        let near = (0..left.len()).min_by(|&a, &b| distance(left[a]).total_cmp(&distance(left[b])));
        let near = near.filter(|&k| distance(left[k]) < SAME + tone.drift.abs() / 2.0).map(|k| left.remove(k));
        let found = near.map(|read| {
            let (amplitude, nu) = (read.amplitude - tone.peak, read.frequency_hz - tone.nu);
            Found {
                amplitude_in_bounds: amplitude / bounds[i].amplitude,
                nu_in_bounds: nu / bounds[i].nu,
                least_amplitude_in_bounds: least[i].0 / bounds[i].amplitude,
                least_nu_in_bounds: least[i].1 / bounds[i].nu,
                amplitude_in_u95: read.amplitude_u95.map(|u| amplitude / u),
                nu_in_u95: read.frequency_u95_hz.map(|u| nu / u),
                verdict: read.verdict,
            }
        });
        records.push(Record {
            scene,
            tint,
            seed: made.seed,
            n: made.n(),
            nu: tone.nu,
            snr_db: made.snr_db(tone),
            drift: tone.drift,
            gap: made.gap(i),
            found,
        });
    }
    Outcome { seed: made.seed, records, false_tones: left.iter().map(|t| t.frequency_hz).collect(), seconds: 0.0 }
}

/// Root mean square.
pub fn rms(values: impl Iterator<Item = f64>) -> f64 {
    let (mut sum, mut count) = (0.0, 0_usize);
    for value in values {
        sum += value * value;
        count += 1;
    }
    (sum / count as f64).sqrt()
}

/// Listed of each kind of failure.
const LISTED: usize = 8;

/// Errors this many bounds large are listed.
const FAR_OFF: f64 = 5.0;

/// A capture of a few thousand samples that takes longer is listed, s.
const SLOW_S: f64 = 0.5;

/// Captures that failed, by their seeds: a line each.
pub fn failures(outcomes: &[Outcome]) -> Vec<String> {
    let records: Vec<&Record> = outcomes.iter().flat_map(|o| &o.records).collect();
    let mut lines: Vec<String> = Vec::new();
    lines.extend(records.iter().filter(|r| r.found.is_none()).take(LISTED).map(|r| format!("missed: {}", r.place())));
    for o in outcomes.iter().filter(|o| !o.false_tones.is_empty()).take(LISTED) {
        let first = o.records.first().map_or_else(String::new, Record::place);
        let some = &o.false_tones[..o.false_tones.len().min(LISTED)];
        lines.push(format!("false: seed {}: {} as at {some:.3?}; {first}", o.seed, o.false_tones.len()));
    }
    let mut found: Vec<_> = records.iter().filter_map(|r| r.found.as_ref().map(|f| (*r, f))).collect();
    let size = |f: &Found| f.amplitude_in_bounds.abs().max(f.nu_in_bounds.abs());
    found.sort_by(|a, b| size(b.1).total_cmp(&size(a.1)));
    for (r, f) in found.iter().filter(|x| size(x.1) > FAR_OFF).take(LISTED) {
        let (a, nu) = (f.amplitude_in_bounds, f.nu_in_bounds);
        lines.push(format!("{a:.1} and {nu:.1} bounds off, {:?}: {}", f.verdict, r.place()));
    }
    let odd = |f: &Found| f.verdict != Some(Verdict::Holds) && f.verdict != Some(Verdict::Crowded);
    for (r, f) in found.iter().filter(|x| odd(x.1) && x.0.drift == 0.0).take(LISTED) {
        lines.push(format!("{:?}: {}", f.verdict, r.place()));
    }
    let mut slow: Vec<&Outcome> = outcomes.iter().filter(|o| o.seconds > SLOW_S).collect();
    slow.sort_by(|a, b| b.seconds.total_cmp(&a.seconds));
    lines.extend(slow.iter().take(LISTED).map(|o| format!("slow: seed {}: {:.1} s", o.seed, o.seconds)));
    lines
}

impl Record {
    /// Which tone it is, in words.
    fn place(&self) -> String {
        let Self { seed, n, nu, snr_db, gap, drift, .. } = self;
        format!("seed {seed}, N {n}, {nu:.3} of {snr_db:.1} dB, gap {gap:.2}, drift {drift:.3}")
    }
}
