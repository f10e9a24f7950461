//! Tests of windows as a whole: text, samples, sums, special lengths.

use super::*;

/// Rounding of a sum of a few thousand samples.
const ROUNDING: f64 = 1e-13;

fn window(text: &str) -> Window {
    Window::parse(text).unwrap()
}

/// Every entry with its default parameters, and with each parameter at the ends of its range.
fn all_windows() -> Vec<Window> {
    let mut found = Vec::new();
    for entry in catalogue() {
        found.push(window(entry.name));
        if entry.has_own_coefficients() {
            continue;
        }
        for (at, spec) in entry.parameters.iter().enumerate() {
            for end in [spec.min, spec.max] {
                let mut parameters = entry.default_parameters();
                parameters[at] = end;
                found.push(Window::from_parts(entry.name, &parameters).unwrap());
            }
        }
    }
    found.push(window("cosine-sum=1e6,1e6"));
    found.push(window("cosine-sum=0.01,0.99"));
    found.push(window("cosine-sum=1,-1,1,-1,1,-1,1,-1,1,-1,1,-1,1,-1,1,-1"));
    found
}

#[test]
fn the_catalogue_holds_every_window_once() {
    let names: Vec<&str> = catalogue().iter().map(|entry| entry.name).collect();
    let expected = "rectangular triangular welch cosine hann cosine-cubed cosine-fourth hamming hamming-exact blackman \
        blackman-exact blackman-harris-3 blackman-harris nuttall-3 nuttall-3a nuttall-3b nuttall-4 nuttall-4a \
        nuttall-4b nuttall-4c flat-top flat-top-iso sft3f sft4f sft5f sft3m sft4m sft5m hft70 hft95 hft90d hft116d \
        hft144d hft169d hft196d hft223d hft248d tukey bohman parzen gaussian kaiser dolph-chebyshev taylor slepian \
        exponential cosine-sum";
    assert_eq!(names, expected.split_whitespace().collect::<Vec<_>>());
    for entry in catalogue() {
        assert!(entry.purpose.len() > 30 && !entry.purpose.ends_with('.'), "{}", entry.name);
        assert!(entry.source.contains(char::is_numeric), "{}", entry.name);
    }
}

#[test]
fn text_goes_round() {
    for window in all_windows() {
        let text = window.to_string();
        let again = Window::parse(&text).unwrap();
        assert_eq!(again, window);
        assert_eq!(again.to_string(), text);
        let bits = |w: &Window| w.parameters().iter().map(|p| p.to_bits()).collect::<Vec<_>>();
        assert_eq!(bits(&again), bits(&window));
        let json = serde_json::to_string(&window).unwrap();
        assert_eq!(serde_json::from_str::<Window>(&json).unwrap(), window);
    }
    assert_eq!(window(" Kaiser = 8.60 ").to_string(), "kaiser=8.6");
    assert_eq!(window("taylor").to_string(), "taylor=4,30");
    assert_eq!(window("tukey=-0").to_string(), "tukey=0");
    assert_eq!(window("kaiser=0.1").parameters(), &[0.1]);
    assert_eq!(Window::from_parts("gaussian", &[3.0]).unwrap(), window("gaussian=3"));
    assert_eq!(Window::from_parts("gaussian", &[]).unwrap(), window("gaussian"));
}

#[test]
fn what_cannot_be_had_says_what_to_do() {
    for (text, part) in [
        ("", "no window is called ''"),
        ("hanning", "'panewise windows' lists them"),
        ("kaiser=", "'' is not a number"),
        ("kaiser=big", "'kaiser=8.6'"),
        ("kaiser=nan", "not a number"),
        ("kaiser=inf", "from 0 to 40"),
        ("kaiser=-1", "from 0 to 40"),
        ("kaiser=1e400", "out of range"),
        ("kaiser=1,2", "at most"),
        ("hann=1", "write 'hann'"),
        ("taylor=4", "1 of its 2 parameters"),
        ("taylor=4.5,30", "whole number"),
        ("cosine-sum=0", "mean"),
        ("cosine-sum=-1,0.5", "out of range"),
        ("cosine-sum=0.001,1", "give a larger a_0"),
        ("cosine-sum=1,1,1,1,1,1,1,1,1,1,1,1,1,1,1,1,1", "16 at most"),
    ] {
        let message = Window::parse(text).unwrap_err().to_string();
        assert!(message.contains(part), "'{text}': {message}");
    }
    let message = Window::parse(&"x".repeat(100_000)).unwrap_err().to_string();
    assert!(message.len() < 200);
    assert!(Window::from_parts("hann", &[f64::NAN]).is_err());
    assert!(Window::from_parts("kaiser", &[f64::NAN]).is_err());
}

#[test]
fn one_sample_is_one_and_none_is_none() {
    for window in all_windows() {
        assert_eq!(window.samples(0), Vec::<f64>::new());
        assert_eq!(window.samples(1), [1.0], "{window}");
        assert_eq!(window.sums(1), Sums { s1: 1.0, s2: 1.0 });
        assert_eq!(window.sums(0), Sums { s1: 0.0, s2: 0.0 });
    }
}

#[test]
fn samples_are_symmetric_as_their_entry_says() {
    for window in all_windows().iter().filter(|w| w.name() != "exponential") {
        for n in [2, 3, 8, 9, 64, 1009] {
            let samples = window.samples(n);
            assert_eq!(samples.len(), n);
            for i in 1..n {
                let partner = if window.entry().is_dft_even() { n - i } else { n - 1 - i };
                assert_eq!(samples[i].to_bits(), samples[partner].to_bits(), "{window} N = {n}");
            }
        }
    }
}

#[test]
fn closed_sums_are_the_sums_of_the_samples() {
    for window in all_windows() {
        for n in [1, 2, 3, 5, 8, 20, 21, 22, 33, 63, 64, 101] {
            let (samples, sums) = (window.samples(n), window.sums(n));
            let (s1, s2): (f64, f64) = (samples.iter().sum(), samples.iter().map(|w| w * w).sum());
            let size: f64 = samples.iter().map(|w| w.abs()).fold(1e-300, f64::max) * n as f64;
            assert!((sums.s1 - s1).abs() < ROUNDING * size, "{window} N = {n}");
            assert!((sums.s2 - s2).abs() < ROUNDING * size * size, "{window} N = {n}");
        }
    }
}

#[test]
fn known_samples() {
    assert_eq!(window("hann").samples(4), [0.0, 0.5, 1.0, 0.5]);
    assert_eq!(window("triangular").samples(4), [0.0, 0.5, 1.0, 0.5]);
    assert_eq!(window("rectangular").samples(3), [1.0; 3]);
    assert_eq!(window("welch").samples(2), [0.0, 1.0]);
    assert_eq!(window("exponential=40").samples(2), [1.0, (-std::f64::consts::LN_10).exp()]);
    let (own, hann) = (window("cosine-sum=0.5,0.5").samples(17), window("hann").samples(17));
    assert_eq!(own, hann);
}

#[test]
fn flat_tops_are_known_by_their_kernel() {
    for entry in catalogue() {
        let name = entry.name;
        let flat = name.starts_with("flat") || name.starts_with("sft") || name.starts_with("hft");
        assert_eq!(window(name).is_flat_top(), flat, "{name}");
    }
    for window in all_windows().iter().filter(|w| w.cosine_terms().is_none()) {
        // What is_flat_top takes for granted.
        assert!(window.merit(1024).flatness_db.abs() > lobes::FLAT_TOP_DB, "{window}");
    }
    assert!(window("cosine-sum=1,1.933,1.286,0.388,0.0322").is_flat_top());
}

#[test]
fn every_figure_is_finite_at_every_length() {
    for window in all_windows() {
        for n in [0, 1, 2, 3, 4, 5, 7, 16, 64, 65, 1000] {
            let merit = window.merit(n);
            let figures = [
                merit.coherent_gain,
                merit.enbw_bins,
                merit.scalloping_loss_db,
                merit.worst_case_processing_loss_db,
                merit.width_3db_bins,
                merit.width_6db_bins,
                merit.width_null_bins,
                merit.highest_side_lobe_db,
                merit.side_lobe_falloff_db_per_octave,
                merit.overlap_correlation_50,
                merit.overlap_correlation_75,
                merit.recommended_overlap_percent,
                merit.flatness_db,
            ];
            assert!(figures.iter().all(|figure| figure.is_finite()), "{window} N = {n}: {merit:?}");
            assert!(merit.width_null_bins > 0.0);
            let half = window.main_lobe_half_width_bins(n);
            assert!((2.0 * half - merit.width_null_bins).abs() < 2e-3 * half.max(1.0) || n > 64, "{window} N = {n}");
        }
    }
}

#[test]
fn figures_do_not_move_with_length() {
    for text in ["hann", "kaiser=8.6", "slepian=3", "dolph-chebyshev=80"] {
        let (short, long) = (window(text).merit(4096), window(text).merit(1 << 16));
        assert!((short.highest_side_lobe_db - long.highest_side_lobe_db).abs() < 1e-3, "{text}");
        // Dolph-Chebyshev, of N-1 intervals, moves by 1/N.
        assert!((short.width_null_bins - long.width_null_bins).abs() < 7.0 / 4096.0, "{text}");
        assert!((short.enbw_bins - long.enbw_bins).abs() < 1e-3, "{text}");
        assert!((short.coherent_gain - long.coherent_gain).abs() < 1e-3, "{text}");
    }
}
