//! Printed tables, which have few digits but were made without any of today's programs.

use super::super::*;

/// Whether a value prints as the table has it.
#[track_caller]
fn prints(got: Option<f64>, expected: f64, half_unit: f64) {
    let got = got.expect("legal arguments have a value");
    assert!(
        (got - expected).abs() <= half_unit * 1.000_001,
        "{got} is not {expected}"
    );
}

#[test]
fn critical_values() {
    // NIST/SEMATECH e-Handbook of Statistical Methods, 1.3.6.7.1 to 1.3.6.7.4, from memory. z = 1.96 leaves .02500,
    // z = 1.645 leaves .04998.
    prints(normal_upper(1.96), 0.02500, 5e-6);
    prints(normal_upper(1.645), 0.04998, 5e-6);
    for (df, t05, t01) in [
        (1.0, 12.706, 63.657),
        (2.0, 4.303, 9.925),
        (5.0, 2.571, 4.032),
        (10.0, 2.228, 3.169),
        (30.0, 2.042, 2.750),
        (100.0, 1.984, 2.626),
        (f64::INFINITY, 1.960, 2.576),
    ] {
        prints(t_quantile_two_sided(0.05, df), t05, 5e-4);
        prints(t_quantile_upper(0.005, df), t01, 5e-4);
        prints(t_quantile_upper(0.995, df), -t01, 5e-4);
    }
    for (df1, df2, f) in [
        (1.0, 10.0, 4.965),
        (2.0, 20.0, 3.493),
        (5.0, 60.0, 2.368),
        (10.0, 10.0, 2.978),
    ] {
        prints(f_quantile_upper(0.05, df1, df2), f, 5e-4);
    }
    for (df, low, high) in [
        (1.0, 0.004, 3.841),
        (2.0, 0.103, 5.991),
        (5.0, 1.145, 11.070),
        (10.0, 3.940, 18.307),
        (100.0, 77.929, 124.342),
    ] {
        prints(chi2_quantile_upper(0.05, df), high, 5e-4);
        prints(chi2_quantile_lower(0.05, df), low, 5e-4);
    }
    // Critical correlations, two-sided .05 and .01, as textbooks print them, from memory.
    for (df, r05, r01) in [(5.0, 0.754, 0.875), (10.0, 0.576, 0.708), (30.0, 0.349, 0.449)] {
        prints(r_quantile_two_sided(0.05, df), r05, 5e-4);
        prints(r_quantile_two_sided(0.01, df), r01, 5e-4);
    }
}

#[test]
fn studentized_range_as_printed() {
    // NIST/SEMATECH e-Handbook 7.4.7.1 prints q.05; Pearson & Hartley's table has 2 or 3 digits. From memory.
    for (p, k, df, q) in [
        (0.05, 3, 10.0, 3.88),
        (0.05, 4, 20.0, 3.96),
        (0.05, 5, 30.0, 4.10),
        (0.01, 3, 10.0, 5.27),
        (0.05, 3, f64::INFINITY, 3.31),
        (0.05, 10, f64::INFINITY, 4.47),
    ] {
        prints(studentized_range_quantile_upper(p, k, df), q, 5e-3);
    }
}

#[test]
fn special_functions_as_printed() {
    // Abramowitz & Stegun (1964), tables 7.1 (erf), 6.1 (Γ) and 26.1 (normal), from memory.
    prints(erf(0.5), 0.520_499_877_8, 5e-11);
    prints(erf(1.0), 0.842_700_792_9, 5e-11);
    prints(ln_gamma(1.5).map(f64::exp), 0.886_226_925_5, 5e-11);
    prints(ln_gamma(1.25).map(f64::exp), 0.906_402_477_1, 5e-11);
    prints(normal_upper(-1.0), 0.841_344_746_068_543, 5e-16);
    // 26.2: −log₁₀ Q(x) is 23.11805 for x = 10.
    prints(
        normal_tails(10.0).map(|t| -t.ln_upper() / std::f64::consts::LN_10),
        23.118_05,
        5e-6,
    );
}

#[test]
fn critical_ranks() {
    // The usual tables of Mann & Whitney's U and Wilcoxon's W for a two-sided .05, from memory: the largest value
    // whose p is not above .05.
    for (n1, n2, u) in [(5, 5, 2), (8, 8, 13), (6, 10, 11), (12, 15, 49), (20, 20, 127)] {
        assert!(rank_sum_two_sided(u, n1, n2).expect("legal") <= 0.05);
        assert!(rank_sum_two_sided(u + 1, n1, n2).expect("legal") > 0.05);
    }
    for (n, w) in [(6, 0), (8, 3), (10, 8), (15, 25), (20, 52)] {
        assert!(signed_rank_two_sided(w, n).expect("legal") <= 0.05);
        assert!(signed_rank_two_sided(w + 1, n).expect("legal") > 0.05);
    }
}

#[test]
fn power_as_printed() {
    // Cohen (1988), from memory: 64 per group detect d = 0.50 and 26 per group d = 0.80 with a power of .80 (two-sided
    // .05); four groups of 45 detect f = 0.25 with a power of .80.
    let power = |n: f64, d: f64| {
        let df = 2.0 * n - 2.0;
        let critical = t_quantile_two_sided(0.05, df)?;
        Some(noncentral_t_tails(critical, df, d * (0.5 * n).sqrt())?.upper())
    };
    prints(power(64.0, 0.5), 0.80, 5e-3);
    prints(power(26.0, 0.8), 0.80, 1e-2);
    let critical = f_quantile_upper(0.05, 3.0, 176.0).expect("legal");
    let tails = noncentral_f_tails(critical, 3.0, 176.0, 0.0625 * 180.0);
    prints(tails.map(Tails::upper), 0.80, 5e-3);
}
