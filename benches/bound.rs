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
use harness::figures::{Figure, of_all, of_each};
use harness::read::read;
use harness::scenes::{Scene, Tint, make};
use harness::score::{failures, outcomes};

/// Captures of each kind.
const CAPTURES: [(Scene, u64); 9] = [
    (Scene::Lone, 2000),
    (Scene::Edge, 1000),
    (Scene::Company, 1000),
    (Scene::Giant, 1000),
    (Scene::Noise, 3000),
    (Scene::Drift, 1000),
    (Scene::Sweep, 500),
    (Scene::Parted, 1000),
    (Scene::Many, 50),
];

/// Seeds start here, so that the tests' captures are others.
const FIRST: u64 = 1000;

fn main() -> ExitCode {
    let part = std::env::var("PANEWISE_SEEDS").ok().and_then(|p| p.parse::<u64>().ok()).unwrap_or(1).max(1);
    let start = Instant::now();
    let mut run = Vec::new();
    for (scene, n_captures) in CAPTURES {
        for tint in [Tint::White, Tint::Coloured] {
            let (n_captures, before) = ((n_captures / part).max(1), Instant::now());
            run.push((scene, tint, outcomes(scene, tint, FIRST..FIRST + n_captures)));
            let each = before.elapsed().as_secs_f64() * 1e3 / n_captures as f64;
            println!("{}, {}: {n_captures} captures, {each:.1} ms each", tint.name(), scene.name());
        }
    }
    let mut figures = of_each(&run);
    // Over a part of the captures the figures of all stray too much to be judged as they are.
    if part == 1 {
        figures.extend(of_all(&run));
    }
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
            println!("{scene:?} {tint:?}");
            for line in failures(outcomes) {
                println!("  {line}");
            }
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
