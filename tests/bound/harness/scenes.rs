//! The kinds of capture that are read, each fixed by a seed.

use panewise::signal::Removal;

use super::dice::Dice;
use super::made::{Made, Recipe};
use super::noise::Colour;

/// Segment lengths: powers of two and not, even and odd.
const LENGTHS: [usize; 8] = [256, 400, 777, 1024, 1500, 2048, 4096, 8192];

/// Coloured noise needs enough lines for its shape to be seen: it does not change much within some dozens of them.
const COLOURED_LENGTHS: [usize; 4] = [1500, 2048, 4096, 8192];

/// A kind of capture.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Scene {
    /// One tone, 20 to 80 dB over the floor.
    Lone,
    /// One tone of 2 to 6 cycles, or as near to half the rate.
    Edge,
    /// Two to eight tones from 1.2 lines apart.
    Company,
    /// A tone 20 dB over the floor six lines from one 60 to 100 dB stronger.
    Giant,
    /// Noise only.
    Noise,
    /// A lone tone 40 to 80 dB over the floor that drifts 0.01 to 3 lines.
    Drift,
    /// A tone that sweeps over six lines, and a steady one 60 lines off.
    Sweep,
    /// Tones ten lines and more apart, 30 to 60 dB over the floor.
    Parted,
    /// Thirty to sixty tones, three lines and more apart, 20 to 80 dB over the floor.
    Many,
}

impl Scene {
    pub fn name(self) -> &'static str {
        match self {
            Self::Lone => "lone tone",
            Self::Edge => "few cycles",
            Self::Company => "company from 1.2 lines",
            Self::Giant => "beside a giant",
            Self::Noise => "no tone",
            Self::Drift => "drifting tone",
            Self::Sweep => "sweep over six lines",
            Self::Parted => "well parted tones",
            Self::Many => "many tones",
        }
    }
}

/// Which noise.
#[derive(Debug, Clone, Copy, PartialEq, Eq, Hash)]
pub enum Tint {
    White,
    Coloured,
}

impl Tint {
    pub fn name(self) -> &'static str {
        match self {
            Self::White => "white noise",
            Self::Coloured => "coloured noise",
        }
    }
}

/// What is put in.
pub fn make(scene: Scene, tint: Tint, seed: u64) -> Made {
    let mut dice = Dice::of(seed ^ ((scene as u64) << 40) ^ ((tint as u64) << 50));
    let n = match (tint, scene) {
        (_, Scene::Sweep) => dice.pick(&[1024, 2048, 4096, 8192]),
        (_, Scene::Many) => dice.pick(&[2048, 4096, 8192]),
        (Tint::White, _) => dice.pick(&LENGTHS),
        (Tint::Coloured, _) => dice.pick(&COLOURED_LENGTHS),
    };
    let colour = if tint == Tint::White { Colour::White } else { colour(&mut dice) };
    let removal = if dice.chance(0.25) { Removal::Line } else { Removal::Mean };
    let mut recipe = Recipe::new(seed, n, colour, removal, dice);
    fill(scene, &mut recipe);
    recipe.finish()
}

fn colour(dice: &mut Dice) -> Colour {
    if dice.chance(0.5) {
        Colour::FirstOrder { rho: dice.pick(&[-0.7, 0.5, 0.8, 0.9]) }
    } else {
        let width = dice.between(0.06, 0.12);
        Colour::Resonance { place: dice.between(0.1, 0.4), width, gain: dice.between(1.0, 4.0) }
    }
}

/// Tones in the open keep this far from 0 Hz and half the rate, lines.
const EDGE: f64 = 6.0;

fn fill(scene: Scene, recipe: &mut Recipe) {
    let top = recipe.n() as f64 / 2.0;
    let within = |recipe: &mut Recipe, margin: f64| recipe.dice.between(margin, top - margin);
    match scene {
        Scene::Noise => {}
        Scene::Lone => {
            let (nu, snr_db) = (within(recipe, EDGE), recipe.dice.between(20.0, 80.0));
            recipe.tone(nu, snr_db, 0.0);
        }
        Scene::Edge => {
            let (cycles, snr_db) = (recipe.dice.between(2.0, EDGE), recipe.dice.between(20.0, 80.0));
            let nu = if recipe.dice.chance(0.5) { cycles } else { top - cycles };
            recipe.tone(nu, snr_db, 0.0);
        }
        Scene::Company => company(recipe),
        Scene::Giant => {
            let nu = within(recipe, EDGE + 7.0);
            // Not at six lines exactly, where every window has a null.
            let side = recipe.dice.pick(&[-1.0, 1.0]) * recipe.dice.between(5.6, 6.4);
            let weak_db = 20.0;
            let giant_db = weak_db + recipe.dice.between(60.0, 100.0);
            recipe.tone(nu, weak_db, 0.0);
            recipe.tone(nu + side, giant_db, 0.0);
        }
        Scene::Drift => {
            let nu = within(recipe, EDGE + 2.0);
            let snr_db = recipe.dice.between(40.0, 80.0);
            let lines = 10.0_f64.powf(recipe.dice.between(-2.0, 3.0_f64.log10()));
            let drift = lines * recipe.dice.pick(&[-1.0, 1.0]);
            recipe.tone(nu, snr_db, drift);
        }
        Scene::Sweep => {
            let nu = recipe.dice.between(80.0, top - 80.0);
            let (snr_db, drift) = (recipe.dice.between(40.0, 80.0), recipe.dice.pick(&[-6.0, 6.0]));
            let side = recipe.dice.pick(&[-60.0, 60.0]);
            let neighbour_db = recipe.dice.between(30.0, 60.0);
            recipe.tone(nu, snr_db, drift);
            recipe.tone(nu + side, neighbour_db, 0.0);
        }
        Scene::Many => {
            for _ in 0..recipe.dice.pick(&[30, 45, 60]) {
                let (nu, snr_db) = (within(recipe, EDGE), recipe.dice.between(20.0, 80.0));
                if recipe.has_room(nu, NEAR) {
                    recipe.tone(nu, snr_db, 0.0);
                }
            }
        }
        Scene::Parted => {
            for _ in 0..3 {
                let (nu, snr_db) = (within(recipe, EDGE), recipe.dice.between(30.0, 60.0));
                if recipe.has_room(nu, 10.0) {
                    recipe.tone(nu, snr_db, 0.0);
                }
            }
        }
    }
}

/// Tones nearer than this are told apart only when stronger, lines.
pub const NEAR: f64 = 3.0;

/// A close pair, 1.2 to 3 lines apart and 40 dB or more over the floor, among others at any distance.
fn company(recipe: &mut Recipe) {
    let top = recipe.n() as f64 / 2.0;
    let nu = recipe.dice.between(EDGE, top - EDGE - NEAR);
    let gap = recipe.dice.between(1.2, NEAR);
    for place in [nu, nu + gap] {
        let snr_db = recipe.dice.between(40.0, 70.0);
        recipe.tone(place, snr_db, 0.0);
    }
    let others = recipe.dice.pick(&[0, 1, 2, 4, 6]);
    for _ in 0..others {
        let (nu, snr_db) = (recipe.dice.between(EDGE, top - EDGE), recipe.dice.between(20.0, 70.0));
        if recipe.has_room(nu, NEAR) {
            recipe.tone(nu, snr_db, 0.0);
        }
    }
}
