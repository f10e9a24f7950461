//! The account of a given shape that fits a track best.

use std::f64::consts::PI;

use nalgebra::{Cholesky, DMatrix, DVector};
use realfft::num_complex::Complex64;

use super::{Account, Company, Track};

/// Gauss-Newton steps at most.
const MOST_STEPS: usize = 30;

/// The longest change of a phase anywhere in one step, rad, and of a level, nepers.
const LONGEST: f64 = 0.8;

/// The longest change of a company's frequency in one step, bins.
const LONGEST_NU: f64 = 0.25;

/// Fits `start` to `track`, keeping its shape, until a step brings less than `enough` of the sum of squares; `start`
/// itself where that cannot be bettered.
pub(crate) fn fit(track: &Track<'_>, start: Account, enough: f64) -> Account {
    fit_for(track, start, enough, MOST_STEPS)
}

/// As [`fit`], in so many steps at most.
pub(super) fn fit_for(track: &Track<'_>, start: Account, enough: f64, most_steps: usize) -> Account {
    let mut account = start.weighed(track);
    for _ in 0..most_steps {
        let Some(step) = step(track, &account) else { break };
        let mut part = room(&account, &step);
        let before = account.left;
        let mut next = None;
        for _ in 0..6 {
            let tried = moved(&account, &step, part).weighed(track);
            if tried.left < account.left {
                next = Some(tried);
                break;
            }
            part *= 0.4;
        }
        let Some(bettered) = next else { break };
        account = bettered;
        if part >= 1.0 && before - account.left < enough {
            break;
        }
    }
    account
}

/// The columns of the account's design, one below the other as real and imaginary parts, and the least-squares step.
fn step(track: &Track<'_>, account: &Account) -> Option<DVector<f64>> {
    let grid = track.grid;
    let n = grid.len();
    let (n_phase, n_level) = (account.path.phase.len(), account.path.level.len());
    let n_columns = n_phase + n_level + 3 * account.company.len();
    let mut design = DMatrix::zeros(2 * n, n_columns);
    let mut put = |column: usize, b: usize, value: Complex64| {
        design[(b, column)] = value.re;
        design[(n + b, column)] = value.im;
    };
    // A phase turns the image the other way.
    for (b, (tone, image)) in account.path.parts(grid).into_iter().enumerate() {
        let (turned, grown) = (Complex64::I * (tone - image), tone + image);
        (0..n_phase).for_each(|p| put(p, b, turned * grid.basis[p][b]));
        (0..n_level).for_each(|p| put(n_phase + p, b, grown * grid.basis[p][b]));
    }
    for (c, company) in account.company.iter().enumerate() {
        let at = n_phase + n_level + 3 * c;
        let unit = Company { middle_amplitude: Complex64::ONE, ..*company };
        for (b, (tone, image)) in unit.parts(grid, track.nu).enumerate() {
            put(at, b, tone + image);
            put(at + 1, b, Complex64::I * (tone - image));
        }
        for (b, (tone, image)) in company.parts(grid, track.nu).enumerate() {
            put(at + 2, b, Complex64::new(0.0, PI * grid.places[b]) * (tone - image));
        }
    }
    let rest = account.remainder(track);
    let right = DVector::from_iterator(2 * n, rest.iter().map(|r| r.re).chain(rest.iter().map(|r| r.im)));
    solve(&design, &right)
}

fn solve(design: &DMatrix<f64>, right: &DVector<f64>) -> Option<DVector<f64>> {
    let scales: Vec<f64> = design.column_iter().map(|c| 1.0 / c.norm().max(f64::MIN_POSITIVE)).collect();
    let mut normal = design.tr_mul(design);
    for i in 0..scales.len() {
        for j in 0..scales.len() {
            normal[(i, j)] *= scales[i] * scales[j];
        }
    }
    let scales = DVector::from_vec(scales);
    let projected = design.tr_mul(right).component_mul(&scales);
    let step = Cholesky::new(normal)?.solve(&projected).component_mul(&scales);
    step.iter().all(|s| s.is_finite()).then_some(step)
}

/// How much of a step may be taken.
fn room(account: &Account, step: &DVector<f64>) -> f64 {
    let (n_phase, n_level) = (account.path.phase.len(), account.path.level.len());
    // Legendre polynomials stay within ±1.
    let phase: f64 = step.iter().take(n_phase).map(|s| s.abs()).sum();
    let level: f64 = step.iter().skip(n_phase).take(n_level).map(|s| s.abs()).sum();
    let companies = step.iter().skip(n_phase + n_level).skip(2).step_by(3);
    let nu = companies.fold(0.0_f64, |most, s| most.max(s.abs()));
    (LONGEST / phase).min(LONGEST / level).min(LONGEST_NU / nu).min(1.0)
}

fn moved(account: &Account, step: &DVector<f64>, part: f64) -> Account {
    let mut steps = step.iter().map(|s| s * part);
    let mut next = || steps.next().unwrap_or(0.0);
    let mut account = account.clone();
    account.path.phase.iter_mut().for_each(|c| *c += next());
    account.path.level.iter_mut().for_each(|c| *c += next());
    for company in &mut account.company {
        company.middle_amplitude += Complex64::new(next(), next());
        company.nu += next();
    }
    account
}
