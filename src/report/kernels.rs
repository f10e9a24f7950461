//! Kernels of windows drawn over one another, in hertz for a segment of a given length: a figure as SVG text.

use std::fmt::Write as _;

use crate::window::Window;

/// Samples of the windows drawn: long enough that no lobe shown depends on the length.
const N_SAMPLES: usize = 4096;

/// Size of the figure and of the space around the plot, SVG user units.
const SIZE: (f64, f64) = (900.0, 560.0);
const LEFT: f64 = 64.0;
const RIGHT: f64 = 20.0;
const TOP: f64 = 44.0;
const BOTTOM: f64 = 52.0;

/// Height of a line of the list of windows.
const ROW: f64 = 18.0;

/// Space between the plot and the list of windows.
const LIST: f64 = 16.0;

/// Points a bin: enough for the round top of a lobe one bin wide.
const POINTS_A_BIN: f64 = 24.0;

/// Ink, quiet ink, rules and paper; curves by Okabe and Ito's colour-vision-safe set, darkened for white paper.
const INK: &str = "#22303a";
const QUIET: &str = "#5a666f";
const RULE: &str = "#dcd6ca";
const PAPER: &str = "#fffdf9";
const HUES: [&str; 7] = ["#0072b2", "#d55e00", "#009e73", "#c86fa0", "#bb8100", "#1c93d6", "#978e0c"];

/// What the plot spans.
struct Span {
    /// Bins to either side of the middle.
    bins: f64,
    /// The lowest level, dB.
    least_db: f64,
    /// The segment's duration, seconds.
    duration_s: f64,
}

/// The kernels of `windows`, each over its own value at 0 Hz, as they stand in the spectrum of a segment of
/// `duration_s` seconds: an SVG figure with a list of the windows, their noise bandwidths and highest side lobes.
///
/// No windows give an empty plot. The duration is above 0.
pub fn kernels_svg(windows: &[Window], duration_s: f64) -> String {
    let span = Span::over(windows, duration_s);
    let height = SIZE.1 + LIST + ROW * windows.len() as f64;
    let mut svg = String::new();
    // Writing to a string does not fail.
    let _ = writeln!(
        svg,
        "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 {} {height}\" width=\"{0}\" height=\"{height}\" \
         font-family=\"sans-serif\" font-size=\"13\" role=\"img\" aria-label=\"Kernels of DFT windows\">",
        SIZE.0
    );
    let _ = writeln!(svg, "<rect width=\"100%\" height=\"100%\" fill=\"{PAPER}\"/>");
    let title = format!("Kernels over {} s: lines {} Hz apart", short(duration_s), short(1.0 / duration_s));
    text(&mut svg, (LEFT, 26.0), "start", INK, &title);
    grid(&mut svg, &span);
    for (i, window) in windows.iter().enumerate() {
        curve(&mut svg, &span, window, i);
        entry(&mut svg, window, duration_s, i);
    }
    svg.push_str("</svg>\n");
    svg
}

impl Span {
    fn over(windows: &[Window], duration_s: f64) -> Self {
        let merits: Vec<_> = windows.iter().map(|w| w.merit(N_SAMPLES)).collect();
        let widest = merits.iter().map(|m| m.width_null_bins).filter(|w| w.is_finite()).fold(4.0, f64::max);
        let lowest = merits.iter().map(|m| m.highest_side_lobe_db).filter(|l| l.is_finite()).fold(-80.0, f64::min);
        Self { bins: (1.5 * widest).clamp(8.0, 60.0), least_db: ((lowest - 30.0) / 20.0).floor() * 20.0, duration_s }
    }

    fn x(&self, bins: f64) -> f64 {
        LEFT + (bins + self.bins) / (2.0 * self.bins) * (SIZE.0 - LEFT - RIGHT)
    }

    fn y(&self, level_db: f64) -> f64 {
        TOP + level_db.clamp(self.least_db, 0.0) / self.least_db * (SIZE.1 - TOP - BOTTOM)
    }
}

fn grid(svg: &mut String, span: &Span) {
    let mut level = 0.0;
    while level >= span.least_db {
        let y = span.y(level);
        rule(svg, (span.x(-span.bins), y), (span.x(span.bins), y));
        text(svg, (LEFT - 8.0, y + 4.0), "end", QUIET, &minus(&format!("{level:.0}")));
        level -= 20.0;
    }
    let half_hz = span.bins / span.duration_s;
    let step = round_step(half_hz / 4.0);
    let n = (half_hz / step).floor() as i32;
    for i in -n..=n {
        let hz = f64::from(i) * step;
        let x = span.x(hz * span.duration_s);
        rule(svg, (x, span.y(0.0)), (x, span.y(span.least_db)));
        text(svg, (x, SIZE.1 - BOTTOM + 20.0), "middle", QUIET, &minus(&short(hz)));
    }
    text(svg, (span.x(0.0), SIZE.1 - BOTTOM + 40.0), "middle", INK, "distance from the tone, Hz");
    text(svg, (SIZE.0 - RIGHT, 26.0), "end", QUIET, "dB re the tone");
}

fn curve(svg: &mut String, span: &Span, window: &Window, i: usize) {
    let kernel = window.kernel(N_SAMPLES);
    let n_points = (2.0 * span.bins * POINTS_A_BIN) as i32;
    let mut points = String::new();
    for k in 0..=n_points {
        let bins = -span.bins + f64::from(k) / POINTS_A_BIN;
        let _ = write!(points, "{:.1},{:.1} ", span.x(bins), span.y(kernel.level_db(bins).max(span.least_db)));
    }
    let _ = writeln!(
        svg,
        "<polyline fill=\"none\" stroke=\"{}\" stroke-width=\"1.4\"{} points=\"{}\"/>",
        hue(i),
        dashes(i),
        points.trim_end()
    );
}

/// The window's line in the list below the plot.
fn entry(svg: &mut String, window: &Window, duration_s: f64, i: usize) {
    let y = SIZE.1 + LIST + ROW * i as f64;
    let merit = window.merit(N_SAMPLES);
    let _ = writeln!(
        svg,
        "<line x1=\"{LEFT}\" y1=\"{0}\" x2=\"{1}\" y2=\"{0}\" stroke=\"{2}\" stroke-width=\"2\"{3}/>",
        y - 4.0,
        LEFT + 30.0,
        hue(i),
        dashes(i)
    );
    let lobe = if merit.highest_side_lobe_db.is_finite() {
        minus(&format!("{:.1} dB", merit.highest_side_lobe_db))
    } else {
        "none".to_owned()
    };
    let words = format!(
        "{window}: ENBW {} Hz, parts tones {} Hz apart, highest side lobe {lobe}",
        short(merit.enbw_bins / duration_s),
        short(merit.width_null_bins / 2.0 / duration_s)
    );
    text(svg, (LEFT + 40.0, y), "start", INK, &words);
}

fn hue(i: usize) -> &'static str {
    HUES[i % HUES.len()]
}

/// Beyond the hues there are, curves are told apart by dashes.
fn dashes(i: usize) -> &'static str {
    if i < HUES.len() { "" } else { " stroke-dasharray=\"6 3\"" }
}

fn rule(svg: &mut String, from: (f64, f64), to: (f64, f64)) {
    let _ = writeln!(
        svg,
        "<line x1=\"{:.1}\" y1=\"{:.1}\" x2=\"{:.1}\" y2=\"{:.1}\" stroke=\"{RULE}\"/>",
        from.0, from.1, to.0, to.1
    );
}

fn text(svg: &mut String, at: (f64, f64), anchor: &str, fill: &str, words: &str) {
    let words = words.replace('&', "&amp;").replace('<', "&lt;");
    let _ = writeln!(
        svg,
        "<text x=\"{:.1}\" y=\"{:.1}\" text-anchor=\"{anchor}\" fill=\"{fill}\">{words}</text>",
        at.0, at.1
    );
}

/// Three digits, without an exponent.
fn short(value: f64) -> String {
    if value == 0.0 {
        return "0".to_owned();
    }
    let decimals = (2.0 - value.abs().log10().floor()).clamp(0.0, 12.0) as usize;
    let text = format!("{value:.decimals$}");
    if text.contains('.') { text.trim_end_matches('0').trim_end_matches('.').to_owned() } else { text }
}

/// A true minus sign.
fn minus(text: &str) -> String {
    text.replace('-', "−")
}

/// The next step of 1, 2 or 5 times a power of ten.
fn round_step(least: f64) -> f64 {
    let power = 10.0_f64.powf(least.log10().floor());
    let times = [1.0, 2.0, 5.0].into_iter().find(|t| t * power >= least).unwrap_or(10.0);
    times * power
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn each_window_has_its_curve_and_its_line_in_hertz() {
        let windows = ["hann", "flat-top", "kaiser=8"].map(|w| Window::parse(w).unwrap());
        let svg = kernels_svg(&windows, 24.0);
        assert_eq!(svg.matches("<polyline").count(), 3);
        // Hann: ENBW 1.5 lines of 1/24 Hz; its first null 2 lines off.
        assert!(svg.contains("hann: ENBW 0.0625 Hz, parts tones 0.0833 Hz apart, highest side lobe −31.5 dB"));
        assert!(svg.contains("Kernels over 24 s: lines 0.0417 Hz apart"));
    }

    #[test]
    fn no_number_is_missing_at_any_duration_and_for_any_window() {
        let all: Vec<Window> = crate::window::catalogue().iter().filter_map(|e| Window::parse(e.name).ok()).collect();
        for duration_s in [1e-6, 1.0, 1e9] {
            let svg = kernels_svg(&all, duration_s);
            assert!(!svg.contains("NaN") && !svg.contains("inf"), "{duration_s} s");
        }
        assert!(kernels_svg(&[], 1.0).ends_with("</svg>\n"));
    }

    #[test]
    fn steps_are_round() {
        assert_eq!(round_step(0.07), 0.1);
        assert_eq!(round_step(1.5), 2.0);
        assert_eq!(round_step(30.0), 50.0);
        assert_eq!(round_step(60.0), 100.0);
    }
}
