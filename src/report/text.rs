//! The tone table for the terminal.

use super::digits::{MOST_DECIMALS, aligned, decimals_of, digits_by, or_less, room, short};
use super::table::{Align, Table};
use super::{CAUTION, judged};
use crate::reading::{PaneReading, Reading, Tone};
use crate::session::Figure;
use crate::tone::Kind;

/// Decimals of a level in decibels, at most, and where no uncertainty is stated.
const DB_DECIMALS: (usize, usize) = (5, 3);

/// The tone table as text: what was read and how levels are stated, a line a tone with a column a pane, then what a
/// reader of the figures should know.
pub fn tone_table(reading: &Reading) -> String {
    let mut text = head(reading);
    text.push('\n');
    if reading.tones.is_empty() {
        text.push_str("No tone stands over the floor.\n");
    } else {
        let frequencies = frequencies(reading);
        text.push_str(&table(reading, &frequencies));
        text.push_str(&judged::verdicts(reading, &frequencies.values));
    }
    text.push_str(&judged::decisions(reading));
    text.push_str(&advised(reading));
    if !reading.warnings.is_empty() {
        text.push('\n');
    }
    let notes = reading.warnings.iter().map(|w| format!("Note ({}): {}\n", w.code, plain(&w.text)));
    text.extend(notes);
    text + "\n" + CAUTION + "\n"
}

/// The window that reads this segment's tones with the least error, where one reads them all.
fn advised(reading: &Reading) -> String {
    let Some(best) = reading.advice.first() else { return String::new() };
    let said = |worst_db: f64| {
        let window = &best.written();
        let worst = thousandths(worst_db);
        format!("\nWindow advised: {window}, worst error to expect {worst} dB ({})\n", best.why)
    };
    best.expected_worst_error_db.map(said).unwrap_or_default()
}

fn head(reading: &Reading) -> String {
    let (capture, segment, scale) = (&reading.capture, &reading.segment, &reading.scale);
    let channel = format!("channel {} of {}", segment.channel, capture.channels);
    let stated = reading.tones.iter().any(|tone| tone.level_u95_db.is_some());
    let end_s = segment.start_s + segment.duration_s;
    let spacing = reading.panes.first().map(|p| format!("; lines {} apart", short(p.line_spacing_hz, "Hz")));
    format!(
        "{}: {}, {}, {channel}\nSegment {:.3} s to {end_s:.3} s: {} samples, {}{}\n{}{}: levels in {} and in {}\n{}{}",
        plain(&capture.path),
        capture.format,
        short(capture.sample_rate_hz, "Hz"),
        segment.start_s,
        segment.samples,
        short(segment.duration_s, "s"),
        spacing.unwrap_or_default(),
        kind(reading),
        capital(scale.quantity),
        unit_of_levels(reading),
        scale.reference_label,
        segment.smallest_tone_db.map_or_else(String::new, smallest),
        if stated { covered(reading) } else { String::new() },
    )
}

/// What the uncertainties are made of, and what they leave out.
fn covered(reading: &Reading) -> String {
    let missing = judged::not_stated(reading);
    let missing = if missing.is_empty() { String::new() } else { format!("; not stated: {}", missing.join(", ")) };
    format!("U: expanded uncertainty (k = 2){missing}\n")
}

/// What the segment holds and why: `Kind: tones (15 tones carry 98.0 % of the power)`.
fn kind(reading: &Reading) -> String {
    let segment = &reading.segment;
    let why = segment.kind_why.as_deref().map_or_else(String::new, |why| format!(" ({})", plain(why)));
    format!("Kind: {}{why}\n", segment.kind.map_or("not told", Kind::name))
}

fn smallest(level_db: f64) -> String {
    format!("Smallest tone that would be seen: {level_db:.1} dB (median over the band)\n")
}

/// What the levels that are no decibels are in: `m/s² r.m.s.`.
fn unit_of_levels(reading: &Reading) -> String {
    format!("{} {}", reading.scale.unit, reading.scale.detector.title())
}

/// Frequencies and their uncertainties, a row each, in the digits they deserve, points in a line.
struct Frequencies {
    values: Vec<String>,
    spreads: Vec<String>,
}

fn frequencies(reading: &Reading) -> Frequencies {
    let decimals: Vec<_> = reading.tones.iter().map(|tone| frequency_decimals(reading, tone)).collect();
    let most = decimals.iter().copied().max().unwrap_or(0);
    let figures: Vec<_> = reading.tones.iter().zip(&decimals).map(|(t, d)| (t.frequency_hz, *d)).collect();
    let spread = |(tone, &decimals): (&Tone, &usize)| match tone.frequency_u95_hz {
        Some(u) => format!("{u:.decimals$}{}", room(decimals, most)),
        None => "-".to_owned(),
    };
    Frequencies { values: aligned(&figures), spreads: reading.tones.iter().zip(&decimals).map(spread).collect() }
}

/// Which columns a table has beside those it always has.
#[derive(Debug, Clone, Copy)]
struct Columns {
    orders: bool,
    verdicts: bool,
    tags: bool,
}

fn table(reading: &Reading, frequencies: &Frequencies) -> String {
    let has = Columns {
        orders: reading.fundamental.is_some(),
        verdicts: reading.tones.iter().any(|t| t.verdict.is_some() || t.overruled.is_some()),
        tags: reading.tones.iter().any(|t| !t.tags.is_empty()),
    };
    let mut table = Table::new(Vec::new());
    let mut heads: Vec<(Align, String, String)> = Vec::new();
    let mut head = |align, name: &str, unit: &str| heads.push((align, name.to_owned(), unit.to_owned()));
    head(Align::Right, "frequency", "Hz");
    head(Align::Right, "U", "Hz");
    if has.orders {
        head(Align::Right, "order", "");
    }
    head(Align::Right, "level", &unit_of_levels(reading));
    head(Align::Right, "level", "dB");
    head(Align::Right, "U", "dB");
    head(Align::Right, "agreement", "dB");
    if has.verdicts {
        head(Align::Left, "verdict", "");
    }
    for pane in &reading.panes {
        // The window's name stands over both of the pane's columns.
        head(Align::Right, "", "dB");
        head(Align::Left, &pane.written(), "state");
    }
    if has.tags {
        head(Align::Left, "", "tags");
    }
    for (align, ..) in &heads {
        table.column(*align);
    }
    table.head(heads.iter().map(|h| h.1.clone()).collect());
    table.head(heads.iter().map(|h| h.2.clone()).collect());
    let levels = level_figures(reading);
    for (i, (tone, level)) in reading.tones.iter().zip(levels).enumerate() {
        let at = |list: &[String]| list.get(i).cloned().unwrap_or_default();
        let mut cells = vec![at(&frequencies.values), at(&frequencies.spreads)];
        cells.extend(row(reading, tone, level, has));
        table.row(cells);
    }
    table.text()
}

/// Levels in decibels and their uncertainties.
fn level_figures(reading: &Reading) -> Vec<(String, String)> {
    let (most, standing) = DB_DECIMALS;
    let decimals = |t: &Tone| t.level_u95_db.filter(|u| *u > 0.0).map_or(standing, |u| decimals_of(u, most));
    let figures: Vec<_> = reading.tones.iter().map(|t| (t.level_db, decimals(t))).collect();
    let widest = figures.iter().map(|f| f.1).max().unwrap_or(0);
    let spread = |(tone, figure): (&Tone, &(f64, usize))| {
        tone.level_u95_db.map_or_else(|| "-".to_owned(), |u| or_less(u, figure.1) + &room(figure.1, widest))
    };
    let spreads: Vec<_> = reading.tones.iter().zip(&figures).map(spread).collect();
    aligned(&figures).into_iter().zip(spreads).collect()
}

/// A row but for its frequency.
fn row(reading: &Reading, tone: &Tone, (level_db, level_u95_db): (String, String), has: Columns) -> Vec<String> {
    let none = || "-".to_owned();
    let mut cells = Vec::new();
    if has.orders {
        cells.push(tone.order.map_or_else(none, |order| format!("{order:.4}")));
    }
    let detector = reading.scale.detector.of_unit_peak();
    cells.extend([
        digits_by(tone.level, tone.amplitude_u95.map(|u| u * detector)),
        level_db,
        level_u95_db,
        tone.agreement_db.map_or_else(none, thousandths),
    ]);
    if has.verdicts {
        let found = tone.verdict.map_or_else(none, |v| v.word().to_owned());
        // A verdict put in the place of the program's bears a mark; the lines under the table say who and why.
        cells.push(tone.overruled.as_ref().map_or(found, |o| format!("{}*", o.verdict.word())));
    }
    cells.extend(tone.readings.iter().flat_map(cell));
    if has.tags {
        cells.push(tone.tags.join(", "));
    }
    cells
}

/// A level that the pane's floor covers, or that a neighbour has part in, is shown with its state's word beside it.
fn cell(reading: &PaneReading) -> [String; 2] {
    [format!("{:.3}", reading.level_db), reading.state.word().to_owned()]
}

/// Decibels to a thousandth; what is less but not nothing is said to be less.
fn thousandths(db: f64) -> String {
    or_less(db, 3)
}

/// Decimals that show two digits of a tone's uncertainty; a hundredth of a line where none is stated.
fn frequency_decimals(reading: &Reading, tone: &Tone) -> usize {
    let hundredth_hz = reading.panes.first().map_or(0.01, |p| p.line_spacing_hz / 100.0);
    match tone.frequency_u95_hz.filter(|u| *u > 0.0) {
        Some(u95_hz) => decimals_of(u95_hz, MOST_DECIMALS),
        None => (-hundredth_hz.log10()).ceil().clamp(0.0, MOST_DECIMALS as f64) as usize,
    }
}

/// A figure of a recheck as text.
pub fn figure_text(figure: &Figure) -> String {
    match figure {
        Figure::None => "none".to_owned(),
        Figure::Number(number) => number.to_string(),
        Figure::Word(word) => plain(word),
    }
}

/// Text from outside on one line of a terminal: control characters are shown, not obeyed.
pub(crate) fn plain(text: &str) -> String {
    text.chars().map(|c| if c.is_control() { '\u{fffd}' } else { c }).collect()
}

fn capital(word: &str) -> String {
    let mut letters = word.replace('-', " ").chars().collect::<Vec<_>>();
    if let Some(first) = letters.first_mut() {
        *first = first.to_ascii_uppercase();
    }
    letters.into_iter().collect()
}

#[cfg(test)]
mod tests {
    use super::*;
    use crate::report::sample::{judged, reading, without_tones};

    #[test]
    fn a_tone_is_a_line_with_a_level_and_a_word_for_each_pane() {
        let text = tone_table(&reading());
        let row = text.lines().find(|line| line.contains("24.96000")).unwrap();
        assert_eq!(
            row.split_whitespace().collect::<Vec<_>>(),
            [
                "24.96000",
                "0.00031",
                "1.0000",
                "120.00000",
                "0.00020",
                "0.010",
                "120.010",
                "under-skirt",
                "120.000",
                "clear"
            ]
        );
        assert!(text.contains("Acceleration: levels in m/s² r.m.s. and in dB re 1 µm/s² (r.m.s.)"));
        assert!(text.contains("Segment 9.000 s to 33.000 s: 196608 samples, 24 s; lines 0.0416667 Hz apart"));
        assert!(text.contains("(r.m.s.)\nSmallest tone that would be seen: 41.5 dB (median over the band)\nU: "));
        assert!(text.contains("apart\nKind: tones (1 tone carries 98.0 % of the power)\nAcceleration: "), "{text}");
        assert!(text.contains("Note (assumed-segment): "));
        assert!(text.contains("U: expanded uncertainty (k = 2)\n"));
        assert!(text.contains(
            "\nWindow advised: kaiser=8.6, worst error to expect 0.450 dB (the noise at 24.96 Hz decides)\n"
        ));
        assert!(text.trim_end().ends_with(CAUTION));
    }

    #[test]
    fn the_points_of_frequencies_stand_in_a_line_each_with_the_digits_it_has() {
        let mut reading = reading();
        let first = reading.tones[0].clone();
        for (frequency_hz, frequency_u95_hz) in [(124.47, Some(0.012)), (200.0, None), (2000.0, Some(31.0))] {
            reading.tones.push(Tone { frequency_hz, frequency_u95_hz, level_u95_db: None, ..first.clone() });
        }
        let text = tone_table(&reading);
        let row = |start: &str| text.lines().find(|line| line.trim_start().starts_with(start)).unwrap();
        let at = |start: &str| row(start).find('.').unwrap();
        assert!(row("124.470 ").contains(" 0.012 ") && row("200.0000 ").contains(" - "), "{text}");
        assert_eq!((at("24.96000"), at("124.470 ")), (at("200.0000 "), at("200.0000 ")));
        assert_eq!(row("2000 ").find("2000").unwrap() + "2000".len(), at("24.96000"), "{text}");
    }

    #[test]
    fn orders_verdicts_and_tags_have_columns_where_there_are_any() {
        let text = tone_table(&judged());
        let row = text.lines().find(|line| line.trim_start().starts_with("24.96000")).unwrap();
        let cells: Vec<_> = row.split_whitespace().collect();
        assert_eq!(cells[..3], ["24.96000", "0.00031", "3.0000"]);
        // 3.3e-5 of the peak is 2.3e-5 r.m.s.: two digits of it.
        assert_eq!(cells[3..7], ["1.000000", "120.00000", "0.00020", "0.010"]);
        assert_eq!(cells[7], "holds*");
        assert!(row.ends_with("harmonic 3 of 8.32"), "{row}");
        assert!(text.contains("U: expanded uncertainty (k = 2); not stated: factor\n"), "{text}");
        assert!(text.contains("\nVerdicts") && text.contains("\nBy hand: refused at 124.5 Hz by N.N.: "), "{text}");
    }

    #[test]
    fn no_tones_are_said() {
        let text = tone_table(&without_tones());
        assert!(text.contains("No tone stands over the floor.") && !text.contains("U: "), "{text}");
    }
}
