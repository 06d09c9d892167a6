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
        assert!((got - z).abs() <= 1e-10 * z.abs().max(1e-3), "{line}: {got}");
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
