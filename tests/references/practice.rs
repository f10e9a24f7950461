//! What the trade knows of windows, checked on this catalogue. Values without a source are common practice.

use panewise::window::{Window, catalogue};

const N: usize = 1024;

fn window(text: &str) -> Window {
    Window::parse(text).unwrap()
}

#[test]
fn identities_of_hann_and_of_short_cosine_sums_hold() {
    // Harris 1978, section IV: coherent gain a_0, ENBW 1 + Σ a_k²/(2 a_0²); Hann 3/2, at any length over 2K.
    for n in [3, 4, 64, 101, 1009, 1 << 20] {
        let merit = window("hann").merit(n);
        assert!((merit.enbw_bins - 1.5).abs() < 1e-14, "N = {n}");
        assert!((merit.coherent_gain - 0.5).abs() < 1e-15);
    }
    let merit = window("hann").merit(N);
    assert!((merit.overlap_correlation_50 - 1.0 / 6.0).abs() < 1e-12);
    assert!((merit.width_null_bins - 4.0).abs() < 1e-12);
    assert!((window("hamming").merit(N).enbw_bins - (1.0 + 0.46 * 0.46 / (2.0 * 0.54 * 0.54))).abs() < 1e-14);
    assert!((window("rectangular").merit(N).enbw_bins - 1.0).abs() < 1e-15);
}

#[test]
fn a_dirichlet_kernel_is_two_over_pi_half_way() {
    // |W(1/2)| = 1/sin(π/(2N)): 3.92 dB under N (Harris 1978, table I).
    let value = window("rectangular").kernel(N).at(0.5).norm();
    assert!((value * (std::f64::consts::FRAC_PI_2 / N as f64).sin() - 1.0).abs() < 1e-14);
}

#[test]
fn the_rectangular_window_is_one_everywhere() {
    for n in [1, 2, 3, 16, 1009] {
        assert!(window("rectangular").samples(n).iter().all(|w| *w == 1.0));
    }
}

#[test]
fn hann_ends_touch_zero_and_hamming_ends_do_not() {
    let (hann, hamming) = (window("hann").samples(N), window("hamming").samples(N));
    assert!(hann[0].abs() < 1e-16);
    assert!((hamming[0] - 0.08).abs() < 1e-15);
    assert!((hann[N / 2] - 1.0).abs() < 1e-15 && (hamming[N / 2] - 1.0).abs() < 1e-15);
}

#[test]
fn hamming_trades_the_first_side_lobe_for_the_far_ones() {
    let n = 1 << 16;
    let level = |text: &str, bins: f64| window(text).kernel(n).level_db(bins);
    // Hann's first side lobe stands between 2 and 3 bins.
    assert!(level("hann", 2.5) > -33.0);
    assert!(level("hamming", 2.5) < -50.0);
    // 25/46 and 21/46 put a zero there in the limit of long segments.
    assert!(level("hamming-exact", 2.5) < -100.0);
    for bins in [10.5, 50.5, 500.5] {
        assert!(level("hamming", bins) > level("hann", bins) + 12.0, "{bins}");
    }
}

#[test]
fn blackman_is_wider_and_lower_than_hann_and_hamming() {
    let merit = |text: &str| window(text).merit(N);
    for other in ["hann", "hamming"] {
        assert!(merit("blackman").width_3db_bins > merit(other).width_3db_bins + 0.15);
        assert!(merit("blackman").width_null_bins > merit(other).width_null_bins);
        assert!(merit("blackman").highest_side_lobe_db < merit(other).highest_side_lobe_db - 15.0);
    }
}

#[test]
fn four_terms_reach_92_db() {
    // Harris 1978, table I: -92; Nuttall 1981: -92.01.
    assert!((window("blackman-harris").merit(N).highest_side_lobe_db + 92.01).abs() < 0.01);
}

#[test]
fn exact_blackman_has_zeros_at_three_and_a_half_and_four_and_a_half_bins() {
    // Harris 1978, section V-C.
    let kernel = window("blackman-exact").kernel(1 << 16);
    assert!(kernel.level_db(3.5) < -120.0 && kernel.level_db(4.5) < -120.0);
}

#[test]
fn a_tukey_window_runs_from_rectangular_to_hann() {
    for n in [16, 17] {
        assert_eq!(window("tukey=0").samples(n), window("rectangular").samples(n));
        for (tukey, hann) in window("tukey=1").samples(n).iter().zip(window("hann").samples(n)) {
            assert!((tukey - hann).abs() < 1e-15);
        }
    }
    for (own, kaiser) in window("rectangular").samples(16).iter().zip(window("kaiser=0").samples(16)) {
        assert_eq!(*own, kaiser);
    }
}

#[test]
fn dolph_chebyshev_keeps_its_ripple_at_every_length() {
    // C. L. Dolph 1946: every side lobe is as high as the design says.
    for n in [16, 17, 101, 1000, 1 << 16] {
        for wanted_db in [40.0, 80.0, 120.0] {
            let window = Window::from_parts("dolph-chebyshev", &[wanted_db]).unwrap();
            let (kernel, merit) = (window.kernel(n), window.merit(n));
            if n > 64 {
                assert!((merit.highest_side_lobe_db + wanted_db).abs() < 1e-6, "N = {n}: {merit:?}");
            }
            let beyond = (0..2000).map(|i| f64::from(i) / 2000.0).map(|share| share * n as f64 / 2.0);
            let half_width = if n > 64 { merit.width_null_bins / 2.0 } else { 7.9 };
            for bins in beyond.filter(|bins| *bins > half_width) {
                assert!(kernel.level_db(bins) < -wanted_db + 1e-6, "N = {n}, {bins} bins");
            }
        }
    }
}

#[test]
fn a_slepian_sequence_gathers_more_within_its_band_than_any_other_window() {
    // D. Slepian 1978: the largest share of energy within ±NW bins that N samples can have.
    let n = 128;
    let share = |text: &str| {
        let kernel = window(text).kernel(n);
        let steps = 4096;
        let power = |i: i32| kernel.at(4.0 * (f64::from(i) + 0.5) / f64::from(steps)).norm_sqr();
        let within: f64 = 2.0 * (0..steps).map(power).sum::<f64>() * 4.0 / f64::from(steps);
        within / (n as f64 * window(text).sums(n).s2)
    };
    let best = share("slepian=4");
    assert!(best < 1.0 && 1.0 - best < 1e-9, "{best}");
    for entry in catalogue().iter().filter(|entry| entry.name != "slepian") {
        assert!(share(entry.name) < best, "{}", entry.name);
    }
    // The share outside, for large c = πNW: 4√(πc)·e^{-2c} (Slepian 1978, from Fuchs 1964; formula from memory).
    let c = 4.0 * std::f64::consts::PI;
    let asymptotic = 4.0 * (std::f64::consts::PI * c).sqrt() * (-2.0 * c).exp();
    assert!(((1.0 - best) / asymptotic - 1.0).abs() < 0.1, "{:e} {asymptotic:e}", 1.0 - best);
}

#[test]
fn taylor_holds_its_near_side_lobes_within_a_fraction_of_a_decibel() {
    // T. T. Taylor 1955: n̄ - 1 lobes at nearly the level designed for.
    for (text, wanted_db) in [("taylor=4,30", 30.0), ("taylor=13,60", 60.0)] {
        let level = window(text).merit(N).highest_side_lobe_db;
        assert!((level + wanted_db).abs() < 0.6, "{text}: {level}");
    }
}

#[test]
fn one_digit_of_hft169d_makes_up_for_its_missing_lobes() {
    // As printed (Heinzel et al. 2002) the coefficients do not cancel at the edge.
    let printed = window("hft169d").merit(N).highest_side_lobe_db;
    let mended = window("cosine-sum=1,1.97441842,1.65409888,0.95788186,0.33673418,0.06364621,0.00521942,0.00010599");
    assert!((printed + 167.884).abs() < 0.001, "{printed}");
    assert!((mended.merit(N).highest_side_lobe_db + 169.52).abs() < 0.01);
}

#[test]
fn the_deepest_flat_top_shows_its_side_lobes_by_windowing_alone() {
    // Heinzel et al. 2002: -248.4 dB; the sum of rounded samples, 1e-16 each, still shows it.
    let window = window("hft248d");
    let samples = window.samples(N);
    let level = |bins: f64| {
        let angle = |i: usize| std::f64::consts::TAU * (bins * i as f64 / N as f64);
        let re: f64 = samples.iter().enumerate().map(|(i, w)| w * angle(i).cos()).sum();
        let im: f64 = samples.iter().enumerate().map(|(i, w)| w * angle(i).sin()).sum();
        20.0 * (re.hypot(im) / window.sums(N).s1).log10()
    };
    let lobes = (0..400).map(|i| 11.0 + f64::from(i) / 16.0).map(level).fold(f64::MIN, f64::max);
    assert!((lobes + 248.4).abs() < 0.3, "{lobes}");
}
