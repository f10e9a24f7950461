//! The tone table for the terminal.

use super::CAUTION;
use super::table::{Align, Table};
use crate::reading::{PaneReading, Reading, Tone};
use crate::session::Figure;

/// Decimals of a frequency at most: lines of the slowest rate that can be meant are still told apart.
const MOST_DECIMALS: f64 = 18.0;

/// The tone table as text: what was read and how levels are stated, a line a tone with a column a pane, then what a
/// reader of the figures should know.
pub fn tone_table(reading: &Reading) -> String {
    let mut text = head(reading);
    text.push('\n');
    if reading.tones.is_empty() {
        text.push_str("No tone stands over the floor.\n");
    } else {
        text.push_str(&table(reading));
    }
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
        "{}: {}, {}, {channel}\nSegment {:.3} s to {end_s:.3} s: {} samples, {}{}\n{}: levels in {} and in {}\n{}{}",
        plain(&capture.path),
        capture.format,
        short(capture.sample_rate_hz, "Hz"),
        segment.start_s,
        segment.samples,
        short(segment.duration_s, "s"),
        spacing.unwrap_or_default(),
        capital(scale.quantity),
        unit_of_levels(reading),
        scale.reference_label,
        segment.smallest_tone_db.map_or_else(String::new, smallest),
        if stated { "U: expanded uncertainty (k = 2) by noise and neighbours alone\n" } else { "" },
    )
}

fn smallest(level_db: f64) -> String {
    format!("Smallest tone that would be seen: {level_db:.1} dB (median over the band)\n")
}

/// What the levels that are no decibels are in: `m/s² r.m.s.`.
fn unit_of_levels(reading: &Reading) -> String {
    format!("{} {}", reading.scale.unit, reading.scale.detector.title())
}

fn table(reading: &Reading) -> String {
    let mut columns = vec![Align::Right; 6];
    let mut names = ["frequency", "U", "level", "level", "U", "agreement"].map(String::from).to_vec();
    let mut units = ["Hz", "Hz", &unit_of_levels(reading), "dB", "dB", "dB"].map(String::from).to_vec();
    for pane in &reading.panes {
        columns.extend([Align::Right, Align::Left]);
        // The window's name stands over both of the pane's columns.
        names.extend([String::new(), pane.written()]);
        units.extend(["dB".to_owned(), "state".to_owned()]);
    }
    let tagged = reading.tones.iter().any(|tone| !tone.tags.is_empty());
    if tagged {
        columns.push(Align::Left);
        names.push(String::new());
        units.push("tags".to_owned());
    }
    let mut table = Table::new(columns);
    table.head(names);
    table.head(units);
    let decimals: Vec<_> = reading.tones.iter().map(|tone| frequency_decimals(reading, tone)).collect();
    let most = decimals.iter().copied().max().unwrap_or(0);
    for (tone, decimals) in reading.tones.iter().zip(decimals) {
        table.row(row(tone, (decimals, most), tagged));
    }
    table.text()
}

/// `decimals` of the frequency are shown; room is left for as many as any row has, so that the points stand in a line.
fn row(tone: &Tone, (decimals, most): (usize, usize), tagged: bool) -> Vec<String> {
    let room = most - decimals + usize::from(decimals == 0 && most > 0);
    let fixed = |hz: f64| format!("{hz:.decimals$}{}", " ".repeat(room));
    let none = || "-".to_owned();
    let mut cells = vec![
        fixed(tone.frequency_hz),
        tone.frequency_u95_hz.map_or_else(none, fixed),
        digits(tone.level, 5),
        format!("{:.3}", tone.level_db),
        tone.level_u95_db.map_or_else(none, thousandths),
        tone.agreement_db.map_or_else(none, thousandths),
    ];
    cells.extend(tone.readings.iter().flat_map(cell));
    if tagged {
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
    if db > 0.0 && db < 0.000_5 { "<0.001".to_owned() } else { format!("{db:.3}") }
}

/// Decimals that show two digits of a tone's uncertainty; a hundredth of a line where none is stated.
fn frequency_decimals(reading: &Reading, tone: &Tone) -> usize {
    let hundredth_hz = reading.panes.first().map_or(0.01, |p| p.line_spacing_hz / 100.0);
    let decimals = match tone.frequency_u95_hz.filter(|u| *u > 0.0) {
        Some(u95_hz) => 1.0 - u95_hz.log10().floor(),
        None => (-hundredth_hz.log10()).ceil(),
    };
    decimals.clamp(0.0, MOST_DECIMALS) as usize
}

/// A number in `n` significant digits.
fn digits(value: f64, n: i32) -> String {
    if value == 0.0 || !value.is_finite() {
        return value.to_string();
    }
    let exponent = value.abs().log10().floor();
    if (-4.0..9.0).contains(&exponent) {
        let decimals = (n - 1 - exponent as i32).max(0) as usize;
        format!("{value:.decimals$}")
    } else {
        format!("{value:.*e}", n as usize - 1)
    }
}

/// A number in few digits with its unit.
fn short(value: f64, unit: &str) -> String {
    let text = digits(value, 6);
    let text = if text.contains('.') && !text.contains('e') {
        text.trim_end_matches('0').trim_end_matches('.')
    } else {
        &text
    };
    format!("{text} {unit}")
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
    use crate::report::sample::{reading, without_tones};

    #[test]
    fn numbers_keep_their_significant_digits() {
        for (value, expected) in [
            (0.0, "0"),
            (14.142_135, "14.142"),
            (0.001_234_567, "0.0012346"),
            (123_456.7, "123457"),
            (1e-9, "1.0000e-9"),
            (f64::NAN, "NaN"),
        ] {
            assert_eq!(digits(value, 5), expected);
        }
        assert_eq!(short(24.0, "s"), "24 s");
        assert_eq!(short(8192.0, "Hz"), "8192 Hz");
        assert_eq!(short(100.0, "Hz"), "100 Hz");
    }

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
                "120.000",
                "<0.001",
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
        assert!(text.contains("Note (assumed-segment): "));
        assert!(text.contains("U: expanded uncertainty (k = 2) by noise and neighbours alone\n"));
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
    fn no_tones_are_said() {
        let text = tone_table(&without_tones());
        assert!(text.contains("No tone stands over the floor.") && !text.contains("U: "), "{text}");
    }
}
