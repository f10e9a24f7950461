//! A few hundred invented captures: errors against the bound, intervals, detection, verdicts.
//!
//! So few cases say little of a figure that sits on the edge of its aim: three standard errors of it are allowed on top,
//! as `harness/figures.rs` works out. The bench `bound` judges thousands as they are.

use crate::harness::figures::of_each;
use crate::harness::scenes::{Scene, Tint};
use crate::harness::score::{failures, outcomes};

fn judge(scene: Scene, tint: Tint, n_captures: u64) {
    let run = [(scene, tint, outcomes(scene, tint, 0..n_captures))];
    let figures = of_each(&run);
    assert!(!figures.is_empty());
    let missed: Vec<String> = figures
        .iter()
        .filter(|f| !f.met)
        .map(|f| format!("{} is {:.4} over {} cases, aim {}", f.what, f.value, f.count, f.aim))
        .collect();
    assert!(missed.is_empty(), "{}\n{}", missed.join("\n"), failures(&run[0].2).join("\n"));
}

#[test]
fn lone_tones_in_white_noise() {
    judge(Scene::Lone, Tint::White, 60);
}

#[test]
fn lone_tones_in_coloured_noise() {
    judge(Scene::Lone, Tint::Coloured, 60);
}

#[test]
fn tones_of_few_cycles_in_white_noise() {
    judge(Scene::Edge, Tint::White, 60);
}

#[test]
fn tones_of_few_cycles_in_coloured_noise() {
    judge(Scene::Edge, Tint::Coloured, 60);
}

#[test]
fn company_from_1_2_lines_in_white_noise() {
    judge(Scene::Company, Tint::White, 50);
}

#[test]
fn company_from_1_2_lines_in_coloured_noise() {
    judge(Scene::Company, Tint::Coloured, 50);
}

#[test]
fn weak_tones_beside_a_giant_in_white_noise() {
    judge(Scene::Giant, Tint::White, 50);
}

#[test]
fn weak_tones_beside_a_giant_in_coloured_noise() {
    judge(Scene::Giant, Tint::Coloured, 50);
}

#[test]
fn no_tones_in_white_noise() {
    judge(Scene::Noise, Tint::White, 100);
}

#[test]
fn no_tones_in_coloured_noise() {
    judge(Scene::Noise, Tint::Coloured, 100);
}

#[test]
fn drifting_tones_in_white_noise() {
    judge(Scene::Drift, Tint::White, 60);
}

#[test]
fn drifting_tones_in_coloured_noise() {
    judge(Scene::Drift, Tint::Coloured, 60);
}

#[test]
fn sweeps_over_six_lines_in_white_noise() {
    judge(Scene::Sweep, Tint::White, 40);
}

#[test]
fn sweeps_over_six_lines_in_coloured_noise() {
    judge(Scene::Sweep, Tint::Coloured, 40);
}

#[test]
fn well_parted_tones_in_white_noise() {
    judge(Scene::Parted, Tint::White, 40);
}

#[test]
fn well_parted_tones_in_coloured_noise() {
    judge(Scene::Parted, Tint::Coloured, 40);
}

#[test]
fn many_tones_in_white_noise() {
    judge(Scene::Many, Tint::White, 8);
}
