//! How a Reading compares with what was put in.

use panewise::reading::{Reading, Tone, Verdict};

use super::fisher::bounds;
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
}

/// A tone read within this of one put in is that one, lines.
const SAME: f64 = 0.5;

/// Makes, reads and compares one capture.
pub fn outcome(scene: Scene, tint: Tint, seed: u64) -> Outcome {
    let made = make(scene, tint, seed);
    let reading = read(&made, &["hann"]);
    compare(scene, tint, &made, &reading)
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

pub fn compare(scene: Scene, tint: Tint, made: &Made, reading: &Reading) -> Outcome {
    let bounds = bounds(made);
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
    Outcome { seed: made.seed, records, false_tones: left.iter().map(|t| t.frequency_hz).collect() }
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
