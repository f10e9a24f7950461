//! One tone that moves, or several that stand still: the account that explains a track for the fewest parameters.

use realfft::num_complex::Complex64;
use std::f64::consts::PI;

use super::fit::{fit, fit_for};
use super::{Account, Company, MOST_ORDER, Path, Track, spectrum};

/// What an account has to bring to be believed.
#[derive(Debug, Clone, Copy)]
pub(crate) struct Bar {
    /// The variance of a point by noise.
    pub(crate) point_variance: f64,
    /// What of it is rounding at least: nothing is known below that.
    pub(crate) rounding: f64,
    /// What one more tone must bring: its power over a line's mean noise.
    pub(crate) tone: f64,
    /// Whether the tone may move.
    pub(crate) may_move: bool,
    /// Whether it may have company.
    pub(crate) may_have_company: bool,
}

/// What one more order of a path must bring, as a drop of the sum of squares over the variance of one real part:
/// chance gives so much for one parameter in 2000 cases.
const A_PARAMETER: f64 = 12.0;

/// Company is looked for within this of the tone, bins.
const REACH: f64 = 12.0;

/// Two steady tones nearer than this are not told apart from one that changes, bins.
pub(crate) const LEAST_APART: f64 = 1.1;

/// Steady tones beside one, at most.
const MOST_COMPANY: usize = 6;

/// Steps by which an account grows, at most.
const MOST_GROWTH: usize = 8;

/// Steps in which a try shows what it promises, and how many of the tries are followed up.
const STRIDES: usize = 3;
const PROMISING: usize = 2;

/// Steps in which a pair is first looked for, bins, and how far out on either side of the carrier.
const PAIR_STEP: f64 = 0.25;
const PAIR_REACH: f64 = 3.0;

impl Bar {
    /// A fit may stop when a step brings less than this of the sum of squares: a tenth of what decides nothing.
    fn enough(&self) -> f64 {
        0.05 * self.point_variance
    }

    fn cost(&self, account: &Account) -> f64 {
        let orders = account.path.phase.len().saturating_sub(2) + account.path.level.len().saturating_sub(1);
        2.0 * account.left / self.point_variance
            + A_PARAMETER * orders as f64
            + 2.0 * self.tone * account.company.len() as f64
    }
}

/// Whether what is left of a steady tone's track, `rest`, holds enough of a slow change of phase or level that it is
/// worth while to follow it: the projection on each of the first orders, over what noise would give.
pub(crate) fn may_move(rest: &Track<'_>, path: &Path, point_variance: f64) -> bool {
    let parts = path.parts(rest.grid);
    let share = 1.0 + rest.grid.image_share(rest.nu);
    let brings = |p: usize, column: &dyn Fn(Complex64, Complex64) -> Complex64| {
        let (mut sum, mut weight) = (0.0, 0.0);
        for ((r, (tone, image)), basis) in rest.points.iter().zip(&parts).zip(&rest.grid.basis[p]) {
            let column = column(*tone, *image) * *basis;
            sum += (column.conj() * r).re;
            weight += column.norm_sqr();
        }
        sum * sum > A_PARAMETER * weight * share * point_variance / 2.0
    };
    // A change of phase of first order is one of the frequency, which is fitted already.
    (2..=FIRST_ORDERS).any(|p| brings(p, &|tone, image| Complex64::I * (tone - image)))
        || (1..=FIRST_ORDERS).any(|p| brings(p, &|tone, image| tone + image))
}

/// Orders of phase and level whose change tells that a tone moves.
const FIRST_ORDERS: usize = 5;

/// Explains `track`, beginning from `path`, which has the track's carrier.
///
/// Two ways are gone, one that first lets the tone move as it likes and one that first gives it company; the cheaper
/// is taken. A tone that moves is so never taken for a crowd, nor a pair for one that moves, unless that explains the
/// track better for its parameters.
///
/// The floor that the bar rests on may itself be what this tone leaves over the whole band: where an account leaves much
/// less than the bar says noise would, it is asked again against what it left.
pub(crate) fn explain(track: &Track<'_>, path: &Path, bar: &Bar) -> Account {
    let share = 1.0 + track.grid.image_share(track.nu);
    // A tone that shows twice, as itself and as its image, brings twice as much.
    let mut bar = Bar { point_variance: bar.point_variance * share, ..*bar };
    let mut account = explain_once(track, path.clone(), &bar);
    for _ in 0..MOST_TIMES {
        let parameters = account.path.phase.len() + account.path.level.len() + 3 * account.company.len();
        let free = track.points.len() as f64 - parameters as f64 / 2.0;
        let spread = share * account.left / free.max(1.0);
        if spread.max(bar.rounding) > 0.5 * bar.point_variance {
            break;
        }
        bar.point_variance = spread.max(bar.rounding);
        account = explain_once(track, path.clone(), &bar);
    }
    account
}

/// How often an account is asked again.
const MOST_TIMES: usize = 3;

fn explain_once(track: &Track<'_>, path: Path, bar: &Bar) -> Account {
    let start = fit(track, Account::of(path), bar.enough());
    let alone = grow(track, start.clone(), bar, bar.may_move, false);
    if !bar.may_have_company {
        return alone;
    }
    let followed = grow(track, alone, bar, bar.may_move, true);
    let accompanied = grow(track, start, bar, false, true);
    let accompanied = grow(track, accompanied, bar, bar.may_move, true);
    if bar.cost(&accompanied) < bar.cost(&followed) { accompanied } else { followed }
}

/// Takes the best next step while one pays.
///
/// What could come next is fitted in two strides only; the two most promising are fitted to the end.
fn grow(track: &Track<'_>, start: Account, bar: &Bar, move_on: bool, take_company: bool) -> Account {
    let mut account = start;
    for _ in 0..MOST_GROWTH {
        let mut tries = Vec::new();
        if move_on {
            tries.extend(longer_paths(track, &account));
        }
        if take_company {
            tries.extend(with_company(track, &account));
        }
        let by_cost = |a: &Account, b: &Account| bar.cost(a).total_cmp(&bar.cost(b));
        let mut tries: Vec<Account> =
            tries.into_iter().map(|start| fit_for(track, start, bar.enough(), STRIDES)).collect();
        tries.sort_by(by_cost);
        tries.truncate(PROMISING);
        let finished = tries.into_iter().map(|start| fit(track, start, bar.enough())).filter(is_apart);
        match finished.min_by(by_cost) {
            Some(next) if bar.cost(&next) < bar.cost(&account) => account = next,
            _ => break,
        }
    }
    account
}

/// The account with a path of higher order.
fn longer_paths(track: &Track<'_>, account: &Account) -> Vec<Account> {
    let (phase, level) = (account.path.phase.len(), account.path.level.len());
    let mut tries = Vec::new();
    for (more_phase, more_level) in [(1, 0), (0, 1), (1, 1), (2, 0), (0, 2)] {
        let (phase, level) = (phase + more_phase, level + more_level);
        if phase > MOST_ORDER + 1 || level > MOST_ORDER + 1 {
            continue;
        }
        let mut path = account.path.clone();
        path.phase.resize(phase, 0.0);
        path.level.resize(level, 0.0);
        tries.push(Account { path, ..account.clone() });
    }
    if account.path.phase.len() == 2 && account.company.is_empty() {
        tries.push(swept(track, account));
    }
    tries
}

/// The account of a tone that sweeps, begun from the sweep that gathers most of the track in one place.
fn swept(track: &Track<'_>, account: &Account) -> Account {
    let (sweep, offset) = spectrum::best_sweep(track.grid, &track.points, REACH);
    let straight: Complex64 = track
        .points
        .iter()
        .zip(&track.grid.places)
        .map(|(z, u)| z * Complex64::cis(-PI * (offset * u + sweep / 4.0 * u * u)))
        .sum();
    let mean = straight * (2.0 / track.grid.len() as f64);
    // u² = (2 P_2 + 1)/3.
    let phase = vec![mean.arg() + PI * sweep / 12.0, PI * offset, PI * sweep / 6.0];
    let level = vec![mean.norm().max(f64::MIN_POSITIVE).ln(), 0.0];
    Account { path: Path { phase, level, ..account.path.clone() }, ..account.clone() }
}

/// The account with one more steady tone.
fn with_company(track: &Track<'_>, account: &Account) -> Vec<Account> {
    if account.company.len() >= MOST_COMPANY {
        return Vec::new();
    }
    let grid = track.grid;
    let rest = account.remainder(track);
    let apart = |offset: f64| account.company.iter().all(|c| (c.nu - track.nu - offset).abs() >= LEAST_APART);
    let mut starts = Vec::new();
    if let Some((offset, sum)) = spectrum::strongest(grid, &rest, REACH, apart) {
        let company = Company { nu: track.nu + offset, middle_amplitude: sum * (2.0 / grid.len() as f64) };
        let mut start = account.clone();
        start.company.push(company);
        starts.push(start);
    }
    if account.path.is_steady() && account.company.is_empty() {
        starts.extend(pair(track, account));
    }
    starts
}

/// Whether all steady tones of an account are far enough apart to be told apart.
fn is_apart(account: &Account) -> bool {
    let mut places: Vec<f64> = account.company.iter().map(|c| c.nu).collect();
    places.push(account.path.mean_frequency());
    places.sort_by(f64::total_cmp);
    places.windows(2).all(|w| w[1] - w[0] >= LEAST_APART)
}

/// The two steady tones near the carrier that together explain most of the track, over a coarse grid of places.
fn pair(track: &Track<'_>, account: &Account) -> Option<Account> {
    let grid = track.grid;
    let n = grid.len() as f64;
    let steps = (PAIR_REACH / PAIR_STEP) as i32;
    let centre = account.path.mean_frequency() - track.nu;
    let places: Vec<f64> = (-steps..=steps).map(|i| centre + PAIR_STEP * f64::from(i)).collect();
    let sums: Vec<Complex64> = places.iter().map(|d| spectrum::at(grid, &track.points, *d) / n).collect();
    let mut best: Option<(f64, Account)> = None;
    for (i, a) in places.iter().enumerate() {
        for (j, b) in places.iter().enumerate().skip(i + 1) {
            if b - a < LEAST_APART {
                continue;
            }
            // The mean of e^{jπ(b-a)u}: real, as the places lie evenly about the middle.
            let x = PI * (b - a);
            let overlap = x.sin() / (n * (x / n).sin());
            let determinant = 1.0 - overlap * overlap;
            let first = (sums[i] - sums[j] * overlap) / determinant;
            let second = (sums[j] - sums[i] * overlap) / determinant;
            let explained = (first * sums[i].conj() + second * sums[j].conj()).re;
            if best.as_ref().is_none_or(|(most, _)| explained > *most) {
                let mut path = Path::steady(track.nu, first * 2.0);
                path.phase[1] = PI * a;
                let company = vec![Company { nu: track.nu + b, middle_amplitude: second * 2.0 }];
                best = Some((explained, Account { path, company, left: f64::INFINITY }));
            }
        }
    }
    best.map(|(_, account)| account)
}
