//! A few hundred invented captures: errors against the bound, intervals, detection, verdicts.
//!
//! So few cases say little of a figure that sits on the edge of its aim: three standard errors of it are allowed on top,
//! as `harness/figures.rs` works out. The bench `bound` judges thousands as they are.

use crate::harness::figures::{Judging, of_run};
use crate::harness::scenes::{Scene, Tint};
use crate::harness::score::outcomes;

fn judge(scene: Scene, tint: Tint, n_captures: u64) {
    let figures = of_run(&[(scene, tint, outcomes(scene, tint, 0..n_captures))], Judging::FewCases);
    assert!(!figures.is_empty());
    let missed: Vec<String> = figures
        .iter()
        .filter(|f| !f.met)
        .map(|f| format!("{} is {:.4} over {} cases, aim {}", f.what, f.value, f.count, f.aim))
        .collect();
    assert!(missed.is_empty(), "{}", missed.join("\n"));
}

#[test]
fn tones_of_few_cycles_in_white_noise() {
    judge(Scene::Edge, Tint::White, 60);
}

#[test]
fn no_tones_in_white_noise() {
    judge(Scene::Noise, Tint::White, 100);
}
