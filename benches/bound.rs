//! Thousands of invented captures: how well their tones are read, against the joint Cramér-Rao bound and the other aims.
//!
//! Prints every figure against its aim, and exits with 1 where an aim is missed. The tests hold the same figures over a
//! few hundred captures. `PANEWISE_SEEDS=5` runs a fifth of the captures; `PANEWISE_FAILURES` lists the worst ones by
//! their seeds.

#![allow(missing_docs, clippy::unwrap_used, clippy::expect_used, clippy::print_stdout)]

use std::process::ExitCode;
use std::time::Instant;

#[path = "../tests/bound/harness/mod.rs"]
mod harness;

use harness::advice::{Advised, judge};
use harness::figures::{Figure, Judging, of_run};
use harness::read::read;
use harness::scenes::{Scene, Tint, make};
use harness::score::{Outcome, Record, outcomes};

/// Captures of each kind.
const CAPTURES: [(Scene, u64); 8] = [
    (Scene::Lone, 2000),
    (Scene::Edge, 1000),
    (Scene::Company, 1000),
    (Scene::Giant, 1000),
    (Scene::Noise, 3000),
    (Scene::Drift, 1000),
    (Scene::Sweep, 500),
    (Scene::Parted, 1000),
];

/// Seeds start here, so that the tests' captures are others.
const FIRST: u64 = 1000;

fn main() -> ExitCode {
    let part = std::env::var("PANEWISE_SEEDS").ok().and_then(|p| p.parse::<u64>().ok()).unwrap_or(1).max(1);
    let start = Instant::now();
    let mut run = Vec::new();
    for (scene, n_captures) in CAPTURES {
        for tint in [Tint::White, Tint::Coloured] {
            run.push((scene, tint, outcomes(scene, tint, FIRST..FIRST + n_captures / part)));
        }
    }
    let mut figures = of_run(&run, if part == 1 { Judging::Plain } else { Judging::FewCases });
    figures.push(advice(400 / part));
    let n_tones: usize = run.iter().flat_map(|r| &r.2).map(|o| o.records.len()).sum();
    let n_captures: usize = run.iter().map(|r| r.2.len()).sum();
    println!("{n_captures} captures, {n_tones} tones, {:.0} s", start.elapsed().as_secs_f64());
    for figure in &figures {
        let Figure { what, value, count, aim, met } = figure;
        println!("{} {what:68} {value:9.4}  of {count:6}  aim {aim}", if *met { "      " } else { "MISSED" });
    }
    if std::env::var_os("PANEWISE_FAILURES").is_some() {
        for (scene, tint, outcomes) in &run {
            list_failures(*scene, *tint, outcomes);
        }
    }
    if figures.iter().all(|f| f.met) { ExitCode::SUCCESS } else { ExitCode::FAILURE }
}

/// The part of captures whose advised window is among the best.
fn advice(n_captures: u64) -> Figure {
    let kinds = [Scene::Parted, Scene::Company, Scene::Giant];
    let mut well = 0;
    let mut all = 0;
    for scene in kinds {
        for seed in FIRST..FIRST + n_captures {
            let made = make(scene, Tint::White, seed);
            let outcome = judge(&made, &read(&made, &["hann"]));
            all += 1;
            well += usize::from(outcome == Advised::Well);
            if outcome != Advised::Well && std::env::var_os("PANEWISE_FAILURES").is_some() {
                println!("advice {outcome:?}: {scene:?} seed {seed}");
            }
        }
    }
    let value = well as f64 / all as f64;
    Figure {
        what: "advised window among the best".to_owned(),
        value,
        count: all,
        aim: ">= 0.95".to_owned(),
        met: value >= 0.95,
    }
}

/// Listed of each kind.
const LISTED: usize = 8;

fn list_failures(scene: Scene, tint: Tint, outcomes: &[Outcome]) {
    let records: Vec<&Record> = outcomes.iter().flat_map(|o| &o.records).collect();
    let place = |r: &Record| {
        let Record { seed, n, nu, snr_db, gap, drift, .. } = r;
        format!("seed {seed}, N {n}, {nu:.3} of {snr_db:.1} dB, gap {gap:.2}, drift {drift:.3}")
    };
    println!("{scene:?} {tint:?}");
    for r in records.iter().filter(|r| r.found.is_none()).take(LISTED) {
        println!("  missed: {}", place(r));
    }
    for o in outcomes.iter().filter(|o| !o.false_tones.is_empty()).take(LISTED) {
        let at = o.records.first().map_or_else(|| format!("seed {}", o.seed), place);
        println!("  false: {at}: at {:.3?}", o.false_tones);
    }
    let mut found: Vec<_> = records.iter().filter_map(|r| r.found.as_ref().map(|f| (*r, f))).collect();
    found.sort_by(|a, b| {
        let size = |f: &harness::score::Found| f.amplitude_in_bounds.abs().max(f.nu_in_bounds.abs());
        size(b.1).total_cmp(&size(a.1))
    });
    for (r, f) in found.iter().take(LISTED) {
        println!("  {:.1} and {:.1} bounds off, {:?}: {}", f.amplitude_in_bounds, f.nu_in_bounds, f.verdict, place(r));
    }
    let mut verdicts = std::collections::BTreeMap::new();
    for (_, f) in &found {
        *verdicts.entry(format!("{:?}", f.verdict)).or_insert(0) += 1;
    }
    println!("  verdicts {verdicts:?}");
}
