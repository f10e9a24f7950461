//! The mains: 50 or 60 Hz and multiples.

use super::chance::poisson_tail;
use super::field::{COVER, Field};
use super::harmonic::Series;
use super::{ALLOWED, Found, TELLING, Tag};

/// The nominal frequencies of the world's grids.
const NOMINAL_HZ: [f64; 2] = [50.0, 60.0];

/// A grid in its ordinary state stays so near to its nominal frequency: the largest steady deviation of the European
/// guideline on system operation, (EU) 2017/1485, annex III (from memory).
const GRID_HZ: f64 = 0.2;

/// A machine's series is taken as locked to the grid only where the grid it would mean is so near to nominal.
const LOCKED_HZ: f64 = 0.01;

/// A grid must show in one of its multiples up to this; a comb of high ones alone is chance.
const MOST_LOW: u32 = 6;

/// How much likelier (as a natural logarithm) the mains is to show in a multiple than a tone is to stand in any other
/// place: the fundamental and twice it are in most recordings made near machines.
const EXPECTED: [f64; MOST_LOW as usize] = [3.0, 3.0, 1.0, 0.0, 0.0, 0.0];

/// The spread of a grid about its nominal frequency, one standard deviation: large grids stay nearer, small ones roam
/// more.
const SPREAD_HZ: f64 = 0.06;

/// A grid with this much evidence from further multiples (as a natural logarithm) is weighed by its nearness to nominal
/// alone.
const ENOUGH: f64 = 5.0;

/// A synchronous machine's turns are a grid's whole fraction up to this: its pairs of poles.
const MOST_POLE_PAIRS: u32 = 24;

/// A grid that the tones may show.
#[derive(Debug, Clone)]
struct Grid {
    nominal_hz: f64,
    hz: f64,
    u_hz: f64,
    /// Logarithm of the evidence from all of it, and from the multiples beyond the first seen.
    score: f64,
    comb: f64,
}

impl Found {
    /// Tags the mains, and leaves only such series as are not the mains themselves.
    pub(super) fn mains(&mut self, series: &mut Vec<Series>) {
        let field = &self.field;
        // A series that starts beside a multiple of the mains may be the mains; others explain their members.
        let machine = |i: usize| series.iter().find(|s| s.members.iter().any(|m| m.1 == i) && !starts_at_mains(s));
        let Some(grid) = grid_of(field, |i| machine(i).is_some()) else { return };
        let mains: Vec<usize> = (0..field.places.len())
            .filter(|&i| grid.fits(field, i) && machine(i).is_none_or(|s| grid.locks(s)))
            .collect();
        let own = |s: &Series| !s.pinned && s.of.is_some_and(|of| mains.contains(&of)) && starts_at_mains(s);
        series.retain(|s| !own(s));
        for place in mains {
            self.tag(place, Tag::Mains);
        }
    }
}

/// Whether the fundamental stands where the mains or a low multiple may be.
fn starts_at_mains(series: &Series) -> bool {
    NOMINAL_HZ.iter().any(|nominal| {
        let h = (series.hz / nominal).round();
        let low = (1.0..=f64::from(MOST_LOW)).contains(&h);
        low && (series.hz - h * nominal).abs() <= h * GRID_HZ + COVER * series.u_hz
    })
}

/// The grid that the tones show best, if any. `explained` are those that a machine's series holds.
fn grid_of(field: &Field, explained: impl Fn(usize) -> bool) -> Option<Grid> {
    let mut grids = Vec::new();
    let mut n_tried = 0;
    for nominal_hz in NOMINAL_HZ {
        for h in 1..=MOST_LOW {
            let (h, middle) = (f64::from(h), f64::from(h) * nominal_hz);
            let low = field.places.partition_point(|p| p.hz < middle - 2.0 * h * GRID_HZ);
            let near = field.places.iter().enumerate().skip(low).take_while(|p| p.1.hz < middle + 2.0 * h * GRID_HZ);
            for (i, place) in near {
                let (hz, u_hz) = (place.hz / h, place.u_hz / h);
                let band = if explained(i) { LOCKED_HZ } else { GRID_HZ };
                if (hz - nominal_hz).abs() > band + COVER * u_hz {
                    continue;
                }
                n_tried += 1;
                // How much likelier the grid has a tone here than chance has.
                let spread = h * SPREAD_HZ.hypot(u_hz);
                let off = (hz - nominal_hz) * h / spread;
                let by_chance = field.expected(place.hz, spread * std::f64::consts::TAU.sqrt(), Some(i));
                let likely = EXPECTED.get(h as usize - 1).copied().unwrap_or(0.0);
                let score = likely - by_chance.ln() - 0.5 * off * off;
                let mut grid = Grid { nominal_hz, hz, u_hz, score, comb: 0.0 };
                grid.comb(field, i, &explained);
                grids.push(grid);
            }
        }
    }
    let needed = f64::from(n_tried).ln() - ALLOWED.ln();
    grids.retain(|g| g.score >= needed);
    let best = grids.iter().max_by(|a, b| a.score.total_cmp(&b.score))?.clone();
    // A motor slips below the grid and makes a comb beside it: of two, the grid is the one nearer to nominal.
    grids.retain(|g| g.nominal_hz == best.nominal_hz && g.comb >= best.comb.min(ENOUGH));
    grids.into_iter().min_by(|a, b| a.off().total_cmp(&b.off()))
}

impl Grid {
    fn off(&self) -> f64 {
        (self.hz - self.nominal_hz).abs()
    }

    /// The multiple that a tone would be, and how far it may stand from it.
    fn multiple(&self, hz: f64, u_hz: f64) -> (f64, f64) {
        let h = (hz / self.hz).round().max(1.0);
        (h, COVER * u_hz.hypot(h * self.u_hz))
    }

    /// Counts the other tones that are multiples too, and refines the grid by them.
    fn comb(&mut self, field: &Field, first: usize, explained: impl Fn(usize) -> bool) {
        let (mut expected, mut n_fitting) = (0.0, 0);
        let (mut weight, mut sum) = (self.u_hz.powi(-2), self.hz * self.u_hz.powi(-2));
        for (i, place) in field.places.iter().enumerate() {
            let (h, tolerance) = self.multiple(place.hz, place.u_hz);
            let by_chance = 2.0 * tolerance / self.hz;
            if i == first || explained(i) || by_chance > TELLING {
                continue;
            }
            expected += by_chance;
            if (place.hz - h * self.hz).abs() <= tolerance {
                n_fitting += 1;
                let adds = (h / place.u_hz).powi(2);
                weight += adds;
                sum += adds * place.hz / h;
                (self.hz, self.u_hz) = (sum / weight, weight.powf(-0.5));
            }
        }
        self.comb = -poisson_tail(expected, n_fitting).max(f64::MIN_POSITIVE).ln();
        self.score += self.comb;
    }

    /// Whether a tone is a multiple, and that says something.
    fn fits(&self, field: &Field, place: usize) -> bool {
        field.places.get(place).is_some_and(|p| {
            let (h, tolerance) = self.multiple(p.hz, p.u_hz);
            2.0 * tolerance / self.hz <= TELLING && (p.hz - h * self.hz).abs() <= tolerance
        })
    }

    /// Whether a machine turns at a whole fraction of the grid.
    fn locks(&self, series: &Series) -> bool {
        (1..=MOST_POLE_PAIRS).map(f64::from).any(|pairs| {
            let apart = (series.hz * pairs - self.hz).abs();
            apart <= COVER * (series.u_hz * pairs).hypot(self.u_hz)
        })
    }
}
