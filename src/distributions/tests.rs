//! The distributions against values computed with many digits, and against printed tables.

use super::*;

/// Every row of a reference file whose name is known to `ours`: the worst relative error there.
fn worst(file: &str, ours: impl Fn(&str, &[f64]) -> Option<Option<f64>>) -> (f64, usize) {
    let (mut worst, mut rows) = (0.0f64, 0);
    for line in file.lines().skip(1) {
        let cells: Vec<&str> = line.split(',').collect();
        let arguments: Vec<f64> = cells[1..5].iter().filter_map(|c| c.parse().ok()).collect();
        let expected: f64 = cells[5].parse().expect("the reference is a number");
        let Some(got) = ours(cells[0], &arguments) else {
            continue;
        };
        let got = got.unwrap_or_else(|| panic!("{line}: legal arguments have a value"));
        rows += 1;
        if expected < SMALLEST {
            assert!(got <= SMALLEST, "{line}: {got}");
            continue;
        }
        let error = (got / expected - 1.0).abs();
        assert!(error < ACCURACY, "{line}: {got} is off by {error:e}");
        worst = worst.max(error);
    }
    println!("{rows} rows, largest relative error {worst:e}");
    (worst, rows)
}

#[test]
fn normal_agrees_with_every_reference_row() {
    let (_, rows) = worst(
        include_str!("../../fixtures/reference/normal.csv"),
        |name, a| match name {
            "norm_sf" => Some(normal_upper(a[0])),
            "norm_2s" => Some(normal_two_sided(a[0])),
            _ => None,
        },
    );
    assert_eq!(rows, 176);
}

#[test]
fn normal_quantile_agrees_with_every_reference_row() {
    let file = include_str!("../../fixtures/reference/normal.csv");
    for line in file.lines().filter(|l| l.starts_with("norm_isf")) {
        let cells: Vec<&str> = line.split(',').collect();
        let p: f64 = cells[1].parse().expect("a number");
        let z: f64 = cells[5].parse().expect("a number");
        let got = normal_quantile_upper(p).expect("legal");
        assert!((got - z).abs() <= 1e-14 * z.abs().max(1.0), "{line}: {got}");
    }
}

#[test]
fn t_agrees_with_every_reference_row() {
    let (_, rows) = worst(
        include_str!("../../fixtures/reference/t.csv"),
        |name, a| match name {
            "t_2s" => Some(t_two_sided(a[0], a[1])),
            "t_sf" => Some(t_upper(a[0], a[1])),
            _ => None,
        },
    );
    assert_eq!(rows, 464);
}

#[test]
fn f_agrees_with_every_reference_row() {
    let (_, rows) = worst(include_str!("../../fixtures/reference/f.csv"), |name, a| {
        (name == "f_sf").then(|| f_upper(a[0], a[1], a[2]))
    });
    assert_eq!(rows, 951);
}

#[test]
fn chi2_agrees_with_every_reference_row() {
    let (_, rows) = worst(include_str!("../../fixtures/reference/chi2.csv"), |name, a| {
        (name == "chi2_sf").then(|| chi2_upper(a[0], a[1]))
    });
    assert_eq!(rows, 244);
}

#[test]
fn r_agrees_with_every_reference_row() {
    let (_, rows) = worst(include_str!("../../fixtures/reference/r.csv"), |name, a| {
        (name == "r_2s").then(|| r_two_sided(a[0], a[1]))
    });
    assert_eq!(rows, 129);
}

#[test]
fn printed_tables_of_critical_values() {
    // NIST/SEMATECH e-Handbook 1.3.6.7.1 to 1.3.6.7.4, from memory; the tables print 3 decimals (F: 3, z: 5).
    let near = |p: Option<f64>, expected: f64, slack: f64| {
        let p = p.expect("legal");
        assert!((p - expected).abs() < slack, "{p} is not {expected}");
    };
    // z = 1.96 leaves .02500, z = 1.645 leaves .04998.
    near(normal_upper(1.96), 0.02500, 5e-6);
    near(normal_upper(1.645), 0.04998, 5e-6);
    for (df, t) in [
        (1.0, 12.706),
        (2.0, 4.303),
        (5.0, 2.571),
        (10.0, 2.228),
        (30.0, 2.042),
        (100.0, 1.984),
    ] {
        near(t_two_sided(t, df), 0.05, 5e-5);
    }
    for (df1, df2, f) in [
        (1.0, 10.0, 4.965),
        (2.0, 20.0, 3.493),
        (5.0, 60.0, 2.368),
        (10.0, 10.0, 2.978),
    ] {
        near(f_upper(f, df1, df2), 0.05, 5e-5);
    }
    for (df, x) in [
        (1.0, 3.841),
        (2.0, 5.991),
        (5.0, 11.070),
        (10.0, 18.307),
        (100.0, 124.342),
    ] {
        near(chi2_upper(x, df), 0.05, 5e-5);
    }
    for (df, t) in [(1.0, 12.706), (10.0, 2.228), (1e9, 1.960)] {
        assert!((t_quantile_two_sided(0.05, df).expect("legal") - t).abs() < 6e-4);
    }
}

#[test]
fn huge_degrees_of_freedom_reach_the_limits() {
    // Computed by integrating the densities with mpmath at 50 digits.
    for (t, df, expected) in T_HUGE {
        let p = t_two_sided(*t, *df).expect("legal");
        assert!(
            (p / expected - 1.0).abs() < ACCURACY,
            "t = {t}, df = {df}: {p:e} is not {expected:e}"
        );
    }
    for (f, df1, df2, expected) in F_HUGE {
        let p = f_upper(*f, *df1, *df2).expect("legal");
        assert!(
            (p / expected - 1.0).abs() < ACCURACY,
            "F = {f}, df = {df1}, {df2}: {p:e} is not {expected:e}"
        );
    }
    for (x, df, expected) in CHI2_HUGE {
        let p = chi2_upper(*x, *df).expect("legal");
        assert!(
            (p / expected - 1.0).abs() < ACCURACY,
            "χ² = {x}, df = {df}: {p:e} is not {expected:e}"
        );
    }
    // The limits themselves.
    let z = normal_two_sided(1.96).expect("legal");
    for df in [1e10, 1e15, 1e300, f64::INFINITY] {
        assert!(
            (t_two_sided(1.96, df).expect("legal") / z - 1.0).abs() < 1e-9,
            "{df}"
        );
        let f = f_upper(1.96 * 1.96, 1.0, df).expect("legal");
        assert!((f / z - 1.0).abs() < 1e-9, "{df}: {f}");
    }
}

#[test]
fn no_legal_argument_gives_something_that_is_no_number() {
    let sizes = [
        0.0,
        1e-300,
        1e-8,
        0.5,
        1.0,
        3.0,
        50.0,
        1e4,
        1e20,
        1e154,
        1e300,
        f64::MAX,
        f64::INFINITY,
    ];
    let degrees = [
        1e-300,
        1e-6,
        0.3,
        1.0,
        2.0,
        30.5,
        9.9e4,
        1.1e5,
        1e7,
        1e12,
        1e300,
        f64::INFINITY,
    ];
    let good = |p: Option<f64>| p.is_some_and(|p| (0.0..=1.0).contains(&p));
    for x in sizes {
        assert!(good(normal_upper(x)) && good(normal_upper(-x)) && good(normal_two_sided(x)));
        for df in degrees {
            assert!(good(t_two_sided(x, df)) && good(t_upper(-x, df)), "t {x} {df}");
            assert!(good(chi2_upper(x, df)), "χ² {x} {df}: {:?}", chi2_upper(x, df));
            assert!(good(r_two_sided(x.min(1.0), df)), "r {x} {df}");
            for df2 in degrees {
                assert!(
                    good(f_upper(x, df, df2)),
                    "F {x} {df} {df2}: {:?}",
                    f_upper(x, df, df2)
                );
            }
        }
    }
    assert_eq!(t_two_sided(1.0, 0.0), None);
    assert_eq!(t_two_sided(f64::NAN, 3.0), None);
    assert_eq!(f_upper(1.0, 2.0, -1.0), None);
    assert_eq!(chi2_upper(1.0, f64::NAN), None);
    assert_eq!(r_two_sided(1.1, 3.0), None);
    assert_eq!(normal_quantile_upper(0.0), None);
    assert_eq!(t_quantile_two_sided(1.5, 3.0), None);
}

const T_HUGE: &[(f64, f64, f64)] = &[
    (1.96, 100000.0, 0.04999856319430164),
    (1.96, 1000000.0, 0.04999606758526979),
    (1.96, 100000000.0, 0.04999579306932811),
    (30.0, 100000.0, 7.378536872217171e-197),
    (30.0, 1000000.0, 1.2020094233655287e-197),
    (0.01, 100000.0, 0.9920213073188232),
    (5.0, 200000.0, 5.737864916784279e-07),
];

const F_HUGE: &[(f64, f64, f64, f64)] = &[
    (3.0, 2.0, 100000000.0, 0.04978707284870012),
    (1.001, 1000000.0, 10000000.0, 0.2500414554566878),
    (2.5, 7.0, 1000000000000.0, 0.014441547880896558),
    (1.0002, 100000000.0, 100000000.0, 0.15867944979420295),
    (40.0, 3.0, 10000000.0, 7.719523127549496e-26),
];

const CHI2_HUGE: &[(f64, f64, f64)] = &[
    (1003000.0, 1000000.0, 0.017016772933266314),
    (1000100000.0, 1000000000.0, 0.012675611994935557),
    (999000.0, 1000000.0, 0.7601767314598729),
];
