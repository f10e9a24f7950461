//! Families with known members, and tones that belong to none.

use super::*;

const PUMP: Setting = Setting { sample_rate_hz: 8192.0, line_spacing_hz: 1.0 / 24.0, fundamental_hz: None };

fn sightings(tones: &[(f64, f64)], u95_hz: f64) -> Vec<Sighting> {
    tones.iter().map(|&(frequency_hz, amplitude)| Sighting { frequency_hz, u95_hz: Some(u95_hz), amplitude }).collect()
}

fn written(tones: &[(f64, f64)], setting: &Setting) -> Vec<Vec<String>> {
    let written = |list: Vec<Tag>| list.iter().map(|t| t.written(setting.line_spacing_hz)).collect();
    tags(&sightings(tones, 2e-4), setting).into_iter().map(written).collect()
}

/// The drive end of the pump of the sample captures, as its README lists it.
const DRIVE_END: [(f64, f64); 15] = [
    (24.96, 0.297),
    (49.92, 0.064),
    (74.88, 0.0312),
    (99.84, 0.0778),
    (100.0, 0.1626),
    (124.47, 0.000_346),
    (124.8, 0.4313),
    (149.76, 0.0581),
    (174.72, 0.0147),
    (200.0, 0.021),
    (224.64, 0.0102),
    (249.6, 0.0893),
    (274.56, 0.0118),
    (374.4, 0.0347),
    (1198.08, 0.0074),
];

/// The same at its non-drive end.
const OTHER_END: [(f64, f64); 11] = [
    (24.96, 0.221),
    (49.92, 0.088),
    (74.88, 0.0195),
    (99.84, 0.0493),
    (100.0, 0.224),
    (124.47, 0.000_122),
    (124.8, 0.248),
    (149.76, 0.0336),
    (200.0, 0.0305),
    (249.6, 0.0462),
    (374.4, 0.0209),
];

fn truth_of_the_pump(hz: f64) -> Vec<&'static str> {
    match (hz * 100.0).round() as i64 {
        2496 => vec!["harmonic 1 of 24.96"],
        4992 => vec!["harmonic 2 of 24.96"],
        7488 => vec!["harmonic 3 of 24.96"],
        9984 => vec!["harmonic 4 of 24.96", "sideband"],
        10000 | 20000 => vec!["mains"],
        12480 => vec!["harmonic 5 of 24.96", "harmonic 1 of 124.80"],
        14976 => vec!["harmonic 6 of 24.96", "sideband"],
        17472 => vec!["harmonic 7 of 24.96", "sideband"],
        22464 => vec!["harmonic 9 of 24.96", "sideband"],
        24960 => vec!["harmonic 10 of 24.96", "harmonic 2 of 124.80"],
        27456 => vec!["harmonic 11 of 24.96", "sideband"],
        37440 => vec!["harmonic 15 of 24.96", "harmonic 3 of 124.80"],
        119_808 => vec!["harmonic 48 of 24.96"],
        _ => vec![],
    }
}

#[test]
fn no_tones_and_tones_that_are_none_have_no_tags() {
    assert_eq!(tags(&[], &PUMP), Vec::<Vec<Tag>>::new());
    let odd = [f64::NAN, f64::INFINITY, -5.0, 0.0, 1e300, 50.0, 50.0, 50.0, 4096.0];
    let tones: Vec<_> = odd.iter().map(|&hz| Sighting { frequency_hz: hz, u95_hz: Some(hz), amplitude: hz }).collect();
    assert_eq!(tags(&tones, &PUMP).len(), odd.len());
    for bad in [0.0, -1.0, f64::NAN, f64::INFINITY] {
        for setting in [Setting { sample_rate_hz: bad, ..PUMP }, Setting { line_spacing_hz: bad, ..PUMP }] {
            assert!(tags(&sightings(&DRIVE_END, 1e-4), &setting).iter().all(Vec::is_empty), "{setting:?}");
        }
        let setting = Setting { fundamental_hz: Some(bad), ..PUMP };
        assert_eq!(tags(&sightings(&DRIVE_END, 1e-4), &setting), tags(&sightings(&DRIVE_END, 1e-4), &PUMP));
    }
}

#[test]
fn the_pump_is_a_shaft_a_vane_pass_and_the_mains() {
    for tones in [&DRIVE_END[..], &OTHER_END] {
        for (tone, tags) in tones.iter().zip(written(tones, &PUMP)) {
            assert_eq!(tags, without_missing(tones, tone.0), "{} Hz", tone.0);
        }
    }
}

/// Sidebands need both neighbours of their carrier: the non-drive end has none about twice the vane pass.
fn without_missing(tones: &[(f64, f64)], hz: f64) -> Vec<&'static str> {
    assert!(tones.len() == 15 || ![224.64, 274.56].contains(&hz));
    truth_of_the_pump(hz)
}

#[test]
fn the_pump_does_not_depend_on_the_order_of_its_tones_nor_on_the_unit() {
    let mut turned: Vec<(f64, f64)> = DRIVE_END.iter().rev().map(|t| (t.0, 98.1 * t.1)).collect();
    turned.swap(3, 9);
    for (tone, tags) in turned.iter().zip(written(&turned, &PUMP)) {
        assert_eq!(tags, truth_of_the_pump(tone.0), "{} Hz", tone.0);
    }
}

#[test]
fn a_pinned_fundamental_is_read_though_no_tone_stands_there() {
    let setting = Setting { fundamental_hz: Some(24.96), ..PUMP };
    let without: Vec<_> = DRIVE_END.into_iter().filter(|t| t.0 > 30.0).collect();
    assert_eq!(written(&without, &setting)[1], ["harmonic 3 of 24.96"]);
    assert_eq!(fundamental_hz(&sightings(&without, 1e-4), &setting), Some(24.96));
    let near = Setting { fundamental_hz: Some(24.97), ..PUMP };
    assert_eq!(fundamental_hz(&sightings(&DRIVE_END, 1e-4), &near), Some(24.96));
    assert_eq!(
        fundamental_hz(&sightings(&DRIVE_END, 1e-4), &Setting { fundamental_hz: Some(25.2), ..PUMP }),
        Some(25.2)
    );
    assert_eq!(fundamental_hz(&[], &PUMP), None);
}

#[test]
fn an_exciter_with_two_harmonics_is_a_series() {
    let setting = Setting { line_spacing_hz: 0.1, ..PUMP };
    let tags = written(&[(159.155, 14.0), (318.31, 0.017), (477.465, 0.0057)], &setting);
    assert_eq!(tags, [["harmonic 1 of 159.2"], ["harmonic 2 of 159.2"], ["harmonic 3 of 159.2"]]);
}

#[test]
fn a_grid_is_the_mains_at_fifty_and_at_sixty() {
    let fifty = [(49.983, 1.0), (149.949, 0.2), (249.915, 0.1), (349.881, 0.05), (411.3, 0.4)];
    let all = written(&fifty, &PUMP);
    assert!(all[..4].iter().all(|t| t == &["mains"]) && all[4].is_empty(), "{all:?}");
    let sixty = [(60.011, 1.0), (120.022, 0.2), (300.055, 0.1), (77.7, 0.3)];
    let all = written(&sixty, &PUMP);
    assert!(all[..3].iter().all(|t| t == &["mains"]) && all[3].is_empty(), "{all:?}");
    // Alone: the fundamental and twice it are told, a multiple that both grids have is not.
    assert_eq!(written(&[(50.02, 1.0), (711.0, 1.0)], &PUMP)[0], ["mains"]);
    assert_eq!(written(&[(119.97, 1.0), (711.0, 1.0)], &PUMP)[0], ["mains"]);
    assert!(written(&[(50.6, 1.0), (711.0, 1.0)], &PUMP)[0].is_empty());
}

#[test]
fn high_multiples_alone_are_no_mains() {
    let high = [(1250.0, 1.0), (1850.0, 0.3), (2350.0, 0.2), (3123.4, 0.2)];
    assert!(written(&high, &PUMP).iter().flatten().all(|t| t != "mains"));
}

#[test]
fn a_slipping_motor_of_two_poles_is_not_the_mains_beside_it() {
    let tones = [(49.87, 0.5), (99.74, 0.2), (149.61, 0.1), (199.48, 0.08), (100.0, 0.3), (200.0, 0.1)];
    let all = written(&tones, &PUMP);
    assert!(all[4..].iter().all(|t| t == &["mains"]), "{all:?}");
    assert_eq!(all[1], ["harmonic 2 of 49.87"]);
    assert!(all[..4].iter().flatten().all(|t| t != "mains"), "{all:?}");
}

#[test]
fn a_synchronous_machine_is_both() {
    let tones = [(25.0, 0.5), (50.0, 0.2), (75.0, 0.1), (100.0, 0.3), (125.0, 0.05)];
    let all = written(&tones, &PUMP);
    assert_eq!(all[0], ["harmonic 1 of 25.00"]);
    assert!(all[1].contains(&"mains".to_owned()) && all[1].contains(&"harmonic 2 of 25.00".to_owned()), "{all:?}");
}

#[test]
fn sidebands_about_a_tone_of_no_series_are_told() {
    let tones = [(1000.3, 1.0), (993.1, 0.2), (1007.5, 0.25), (985.9, 0.05), (1014.7, 0.04), (431.7, 0.3)];
    let all = written(&tones, &PUMP);
    assert!(all[1..5].iter().all(|t| t == &["sideband"]), "{all:?}");
    assert!(all[0].is_empty() && all[5].is_empty(), "{all:?}");
    // One pair about a carrier, alone in the band.
    let all = written(&[(400.3, 1.0), (389.2, 0.2), (411.4, 0.25)], &PUMP);
    assert!(all[1] == ["sideband"] && all[2] == ["sideband"], "{all:?}");
    // One side only says nothing.
    let all = written(&[(400.3, 1.0), (389.2, 0.2), (2411.4, 0.25)], &PUMP);
    assert!(all.iter().all(Vec::is_empty), "{all:?}");
}

#[test]
fn products_folds_and_images_are_told_where_they_stand_alone() {
    let (a, b) = (613.17, 871.93);
    let all = written(&[(a, 1.0), (b, 0.8), (a + b, 0.01), (b - a, 0.02), (1733.2, 0.1)], &PUMP);
    assert!(all[2] == ["intermodulation"] && all[3] == ["intermodulation"] && all[4].is_empty(), "{all:?}");
    let all = written(&[(a, 1.0), (b, 0.8), (2.0 * a - b, 0.01), (2.0 * b - a, 0.01)], &PUMP);
    assert!(all[2] == ["intermodulation"] && all[3] == ["intermodulation"], "{all:?}");
    let f = 1711.37;
    let all = written(&[(f, 1.0), (8192.0 - 3.0 * f, 0.01), (8192.0 - 4.0 * f, 0.01)], &PUMP);
    assert!(all[1] == ["fold"] && all[2] == ["fold"], "{all:?}");
    let all = written(&[(f, 1.0), (4096.0 - f, 0.01), (233.7, 0.2)], &PUMP);
    assert!(all[1] == ["image"] && all[2].is_empty(), "{all:?}");
    // What is stronger than its source is none.
    let all = written(&[(f, 0.01), (4096.0 - f, 1.0), (233.7, 2.0)], &PUMP);
    assert!(all[0].is_empty() || all[0] == ["image"], "{all:?}");
    assert!(all[1].is_empty(), "{all:?}");
}

#[test]
fn frequencies_fold_about_half_the_rate() {
    for (hz, seen) in [(100.0, 100.0), (600.0, 400.0), (1000.0, 0.0), (1100.0, 100.0), (1900.0, 100.0), (0.0, 0.0)] {
        assert_eq!(products::folded(hz, 1000.0), seen);
    }
}

/// A repeatable source of numbers between 0 and 1 (Knuth's constants of a 64-bit linear congruence; the upper bits).
struct Dice(u64);

impl Dice {
    fn next(&mut self) -> f64 {
        self.0 = self.0.wrapping_mul(6_364_136_223_846_793_005).wrapping_add(1_442_695_040_888_963_407);
        (self.0 >> 11) as f64 / (1_u64 << 53) as f64
    }

    /// A normal number, from twelve uniform ones.
    fn normal(&mut self) -> f64 {
        (0..12).map(|_| self.next()).sum::<f64>() - 6.0
    }
}

/// Captures a case. With ten times as many, 8 of 30 000 captures had a tag other than the mains.
const N_CAPTURES: usize = 100;

/// Tones anywhere: how many captures carry any tag, and how many a tag other than the mains.
fn tagged_by_chance(n_tones: usize, u95_hz: f64, place: impl Fn(f64) -> f64) -> (usize, usize) {
    let mut dice = Dice(n_tones as u64);
    let (mut any, mut other) = (0, 0);
    for _ in 0..N_CAPTURES {
        let tones: Vec<_> = (0..n_tones).map(|_| (place(dice.next()), 10_f64.powf(-3.0 * dice.next()))).collect();
        let found = tags(&sightings(&tones, u95_hz), &PUMP);
        any += usize::from(found.iter().any(|t| !t.is_empty()));
        other += usize::from(found.iter().flatten().any(|t| *t != Tag::Mains));
    }
    (any, other)
}

#[test]
fn tones_that_stand_anywhere_are_rarely_tagged() {
    let spread = |x: f64| 5.0 + 4085.0 * x;
    let by_octaves = |x: f64| 5.0 * 800_f64.powf(x);
    let low = |x: f64| 5.0 + 395.0 * x;
    for n in [2, 5, 15, 40, 100] {
        for u95_hz in [1e-4, 4e-3] {
            for (name, place) in [("spread", &spread as &dyn Fn(f64) -> f64), ("octaves", &by_octaves), ("low", &low)] {
                let (any, other) = tagged_by_chance(n, u95_hz, place);
                println!("{n} tones {name}, U {u95_hz}: {any} tagged, {other} other than mains");
                assert!(other <= 20, "{n} tones {name}, U {u95_hz}: {other} of 1000 captures");
            }
        }
    }
}

#[test]
fn invented_machines_are_told_among_strangers() {
    let mut dice = Dice(7);
    let (mut n_members, mut n_told, mut n_false) = (0, 0, 0);
    for _ in 0..300 {
        let shaft = 12.0 + 50.0 * dice.next();
        let mut tones = Vec::new();
        for order in 1..=10_u32 {
            if order == 1 || dice.next() < 0.7 {
                tones.push((f64::from(order) * shaft + 1e-4 * dice.normal(), 10_f64.powf(-2.0 * dice.next()), order));
            }
        }
        for _ in 0..10 {
            tones.push((5.0 + 2000.0 * dice.next(), 10_f64.powf(-3.0 * dice.next()), 0));
        }
        let plain: Vec<_> = tones.iter().map(|t| (t.0, t.1)).collect();
        for (tone, tags) in tones.iter().zip(tags(&sightings(&plain, 2e-4), &PUMP)) {
            let order = tags.iter().find_map(|t| match t {
                Tag::Harmonic { order, of_hz } if (of_hz - shaft).abs() < 0.01 => Some(*order),
                _ => None,
            });
            n_members += usize::from(tone.2 > 0);
            n_told += usize::from(tone.2 > 0 && order == Some(tone.2));
            n_false += usize::from(tone.2 == 0 && order.is_some() || tone.2 > 0 && order.is_some_and(|o| o != tone.2));
        }
    }
    println!("{n_told} of {n_members} members told, {n_false} false");
    assert!(n_told * 100 >= n_members * 98, "{n_told} of {n_members}");
    assert!(n_false <= 6, "{n_false}");
}

#[test]
fn two_hundred_tones_take_milliseconds() {
    let mut dice = Dice(3);
    let mut tones: Vec<_> = (1..=60).map(|k| (24.96 * f64::from(k), 1.0 / f64::from(k))).collect();
    tones.extend((0..140).map(|_| (5.0 + 4000.0 * dice.next(), dice.next())));
    let tones = sightings(&tones, 1e-3);
    let fastest = (0..5)
        .map(|_| {
            let start = std::time::Instant::now();
            assert_eq!(tags(&tones, &PUMP).len(), 200);
            start.elapsed()
        })
        .min()
        .unwrap();
    println!("200 tones: {fastest:?}");
    assert!(fastest.as_millis() < 50, "{fastest:?}");
}
