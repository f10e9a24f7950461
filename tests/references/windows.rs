//! The catalogue's figures of merit against printed ones.

use panewise::window::{Merit, Window};

use super::exceptions::{EXCEPTIONS, Exception};
use super::published::{FLAT_TOPS, Figure, HARRIS, HEINZEL, NUTTALL, Table};

/// Widths are printed at -3 and -6 dB by some and at half power and half amplitude by others (Harris's digits fit
/// these better); a printed width has to meet one of the two.
const HALF_POWER_DB: f64 = -3.010_299_956_639_812;
const HALF_AMPLITUDE_DB: f64 = 2.0 * HALF_POWER_DB;

fn window(text: &str) -> Window {
    Window::parse(text).unwrap()
}

/// The full width at a level, from the kernel alone.
fn width_bins(window: &Window, n: usize, level_db: f64) -> f64 {
    let kernel = window.kernel(n);
    let (mut inside, mut outside) = (0.0, 8.0);
    while outside - inside > 1e-12 {
        let middle = 0.5 * (inside + outside);
        if kernel.level_db(middle) > level_db {
            inside = middle;
        } else {
            outside = middle;
        }
    }
    inside + outside
}

/// What is computed for a figure; two values where two conventions are in print.
fn computed(window: &Window, merit: &Merit, figure: Figure, n: usize) -> [f64; 2] {
    let both = |value: f64| [value; 2];
    match figure {
        Figure::CoherentGain => both(merit.coherent_gain),
        Figure::EnbwBins => both(merit.enbw_bins),
        Figure::ScallopingDb => both(merit.scalloping_loss_db),
        Figure::WorstCaseDb => both(merit.worst_case_processing_loss_db),
        Figure::SideLobeDb => both(merit.highest_side_lobe_db),
        Figure::FallOffDb => both(merit.side_lobe_falloff_db_per_octave),
        Figure::Width3Bins => [merit.width_3db_bins, width_bins(window, n, HALF_POWER_DB)],
        Figure::Width6Bins => [merit.width_6db_bins, width_bins(window, n, HALF_AMPLITUDE_DB)],
        Figure::NullToNullBins => both(merit.width_null_bins),
        Figure::Overlap75Percent => both(100.0 * merit.overlap_correlation_75),
        Figure::Overlap50Percent => both(100.0 * merit.overlap_correlation_50),
        Figure::RecommendedPercent => both(merit.recommended_overlap_percent),
        // The new flat-tops balance ripple above and below, so that the sign is in the last digit's hands.
        Figure::FlatnessDb => both(merit.flatness_db.abs()),
    }
}

/// Whether `value` rounds to what is printed.
fn rounds_to(value: f64, printed: &str) -> bool {
    let decimals = printed.split_once('.').map_or(0, |(_, decimals)| decimals.len());
    let half_step = 0.5 * 10_f64.powi(-i32::try_from(decimals).unwrap());
    (value - printed.parse::<f64>().unwrap()).abs() <= half_step * (1.0 + 1e-9)
}

fn exception(table: &Table, name: &str, figure: Figure) -> Option<&'static Exception> {
    let mut found = EXCEPTIONS.iter();
    found.find(|(source, window, column, ..)| *source == table.source && *window == name && *column == figure)
}

/// Holds a table against what is computed; the number of figures compared.
fn check(table: &Table) -> usize {
    let mut n_compared = 0;
    let mut wrong = Vec::new();
    for (name, printed) in table.rows {
        let window = window(name);
        let merit = window.merit(table.n);
        let printed: Vec<&str> = printed.split_whitespace().collect();
        assert_eq!(printed.len(), table.columns.len(), "{name}");
        for (figure, printed) in table.columns.iter().zip(printed).filter(|(_, printed)| *printed != ".") {
            n_compared += 1;
            let printed = if *figure == Figure::FlatnessDb { printed.trim_start_matches('-') } else { printed };
            let values = computed(&window, &merit, *figure, table.n);
            let met = values.iter().any(|value| rounds_to(*value, printed));
            match exception(table, name, *figure) {
                None if !met => wrong.push(format!("{name} {figure:?}: printed {printed}, computed {values:?}")),
                Some(_) if met => wrong.push(format!("{name} {figure:?}: listed as an exception, but met")),
                Some((_, _, _, ours, _)) if !rounds_to(values[0], ours) => {
                    wrong.push(format!("{name} {figure:?}: exception says {ours}, computed {}", values[0]));
                }
                _ => {}
            }
        }
    }
    assert!(wrong.is_empty(), "{}:\n{}", table.source, wrong.join("\n"));
    n_compared
}

#[test]
fn harris_1978_table_i_is_met() {
    assert_eq!(check(&HARRIS), 310);
}

#[test]
fn nuttall_1981_is_met() {
    assert_eq!(check(&NUTTALL), 28);
}

#[test]
fn heinzel_2002_is_met() {
    assert_eq!(check(&HEINZEL), 31 * 7 - 3);
}

#[test]
fn quoted_flat_top_figures_are_met() {
    assert_eq!(check(&FLAT_TOPS), 5);
}

#[test]
fn every_exception_belongs_to_a_printed_figure() {
    let tables = [&HARRIS, &NUTTALL, &HEINZEL, &FLAT_TOPS];
    for (source, window, figure, _, reason) in EXCEPTIONS {
        let table = tables.iter().find(|table| table.source == *source).unwrap();
        assert!(table.columns.contains(figure), "{window} {figure:?}");
        assert!(table.rows.iter().any(|(name, _)| name == window), "{window}");
        assert!(reason.len() > 20, "{window}");
    }
}
