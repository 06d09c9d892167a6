//! Every row of `fixtures/reference/`, whose README says where the values come from: mpmath and Arb, with 25 to 45
//! correct digits.

use super::super::*;

/// Our value for a row, by the name in its first column; None for a name that nothing here is called by.
fn ours(name: &str, a: &[f64]) -> Option<Option<f64>> {
    let whole = |k: usize| a[k] as u64;
    let table = || [whole(0), whole(1), whole(2), whole(3)];
    Some(match name {
        "norm_sf" => normal_upper(a[0]),
        "norm_2s" => normal_two_sided(a[0]),
        "norm_isf" => normal_quantile_upper(a[0]),
        "t_sf" => t_upper(a[0], a[1]),
        "t_2s" => t_two_sided(a[0], a[1]),
        "t_isf" => t_quantile_upper(a[0], a[1]),
        "f_sf" => f_upper(a[0], a[1], a[2]),
        "f_cdf" => f_tails(a[0], a[1], a[2]).map(Tails::lower),
        "f_isf" => f_quantile_upper(a[0], a[1], a[2]),
        "chi2_sf" => chi2_upper(a[0], a[1]),
        "chi2_cdf" => chi2_tails(a[0], a[1]).map(Tails::lower),
        "chi2_isf" => chi2_quantile_upper(a[0], a[1]),
        "r_2s" => r_two_sided(a[0], a[1]),
        "nct_sf" => noncentral_t_tails(a[0], a[1], a[2]).map(Tails::upper),
        "nct_cdf" => noncentral_t_tails(a[0], a[1], a[2]).map(Tails::lower),
        "ncf_sf" => noncentral_f_tails(a[0], a[1], a[2], a[3]).map(Tails::upper),
        "ncf_cdf" => noncentral_f_tails(a[0], a[1], a[2], a[3]).map(Tails::lower),
        "ncx2_sf" => noncentral_chi2_tails(a[0], a[1], a[2]).map(Tails::upper),
        "ncx2_cdf" => noncentral_chi2_tails(a[0], a[1], a[2]).map(Tails::lower),
        "tukey_sf" => studentized_range_upper(a[0], a[1] as u32, a[2]),
        "tukey_cdf" => studentized_range_tails(a[0], a[1] as u32, a[2]).map(Tails::lower),
        "binom_ge" => binomial_at_least(whole(0), whole(1), a[2]),
        "fisher_ge" => fisher_at_least(table()),
        "fisher_le" => fisher_at_most(table()),
        "fisher_2s" => fisher_two_sided(table()),
        "betainc" => beta_tails(a[0], a[1], a[2]).map(Tails::lower),
        "betaincinv" => beta_quantile_lower(a[2], a[0], a[1]),
        "gammaincP" => gamma_tails(a[0], a[1]).map(Tails::lower),
        "gammaincQ" => gamma_tails(a[0], a[1]).map(Tails::upper),
        "lgamma" => ln_gamma(a[0]),
        "erf" => erf(a[0]),
        "erfc" => erfc(a[0]),
        _ => return None,
    })
}

/// Every row of a file; at the end how many there were, of which functions, and the largest errors.
fn check(file: &str, expected_rows: usize) {
    let mut worst: Vec<(&str, usize, f64, &str)> = Vec::new();
    for line in file.lines().skip(1) {
        let cells: Vec<&str> = line.split(',').collect();
        let arguments: Vec<f64> = cells[1..5].iter().filter_map(|c| c.parse().ok()).collect();
        let expected: f64 = cells[5].parse().expect("the reference is a number");
        let got = ours(cells[0], &arguments).unwrap_or_else(|| panic!("{line}: no such function"));
        let got = got.unwrap_or_else(|| panic!("{line}: legal arguments have a value"));
        let known = worst.iter().position(|w| w.0 == cells[0]).unwrap_or(worst.len());
        if known == worst.len() {
            worst.push((cells[0], 0, 0.0, ""));
        }
        let entry = &mut worst[known];
        entry.1 += 1;
        if expected.abs() < SMALLEST {
            assert!(got.abs() <= SMALLEST, "{line}: {got:e}");
            continue;
        }
        let error = (got / expected - 1.0).abs();
        if error > entry.2 || error.is_nan() {
            (entry.2, entry.3) = (error, line);
        }
    }
    for (name, rows, error, line) in &worst {
        println!("{name}: {rows} rows, largest relative error {error:.1e} ({line})");
    }
    for (name, _, error, line) in &worst {
        assert!(*error < ACCURACY, "{name}: off by {error:e} in {line}");
    }
    assert_eq!(worst.iter().map(|w| w.1).sum::<usize>(), expected_rows);
}

macro_rules! reference {
    ($($name:ident $file:literal $rows:literal;)*) => {$(
        #[test]
        fn $name() {
            check(include_str!(concat!("../../../fixtures/reference/", $file)), $rows);
        }
    )*};
}

reference! {
    normal "normal.csv" 199;
    t "t.csv" 464;
    f "f.csv" 951;
    chi2 "chi2.csv" 244;
    r "r.csv" 129;
    quantiles "quantile.csv" 972;
    noncentral "noncentral.csv" 1276;
    studentized_range "tukey.csv" 546;
    discrete "discrete.csv" 232;
    special "special.csv" 655;
    extremes "extremes.csv" 561;
}
