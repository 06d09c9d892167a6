//! The distributions against each other: identities that hold exactly, across files that share no code for them.

use super::super::*;
use super::close;

#[test]
fn f_with_one_degree_of_freedom_is_t_squared() {
    for df in [0.4, 3.0, 28.0, 1e4, 1e7, 1e12] {
        for t in [1e-3, 0.5, 1.0, 2.2, 30.0] {
            let p = t_two_sided(t, df).expect("legal");
            if p > SMALLEST {
                close(f_upper(t * t, 1.0, df), p, 1e-12);
                let r = (t * t / (t * t + df)).sqrt();
                // r is rounded, which counts the more the more degrees of freedom there are.
                close(r_two_sided(r, df), p, 1e-12 + 1e-15 * t * t);
            }
        }
    }
}

#[test]
fn infinite_degrees_of_freedom_are_the_limits() {
    for df in [1e14, 1e149, 1e151, 1e300, f64::INFINITY] {
        for z in [0.01, 1.96, 9.0] {
            close(t_two_sided(z, df), normal_two_sided(z).expect("legal"), 1e-10);
            close(
                f_upper(z, 3.0, df),
                chi2_upper(3.0 * z, 3.0).expect("legal"),
                1e-10,
            );
            let lower = chi2_tails(3.0 / z, 3.0).expect("legal").lower();
            close(f_upper(z, df, 3.0), lower, 1e-10);
            let central = noncentral_t_tails(z, df, 0.7).map(Tails::upper);
            close(central, normal_upper(z - 0.7).expect("legal"), 1e-10);
            let mixed = noncentral_f_tails(z, 3.0, df, 5.0).map(Tails::upper);
            let limit = noncentral_chi2_tails(3.0 * z, 3.0, 5.0).expect("legal").upper();
            close(mixed, limit, 1e-10);
        }
        close(
            t_quantile_two_sided(0.05, df),
            normal_quantile_upper(0.025).expect("legal"),
            1e-12,
        );
        close(
            f_quantile_upper(0.05, 3.0, df),
            chi2_quantile_upper(0.05, 3.0).expect("legal") / 3.0,
            1e-10,
        );
    }
    // All of F is at 1, all of r at 0, and no finite χ² is ever exceeded by less.
    assert_eq!(f_upper(0.999, f64::INFINITY, f64::INFINITY), Some(1.0));
    assert_eq!(f_upper(1.001, f64::INFINITY, f64::INFINITY), Some(0.0));
    assert_eq!(r_two_sided(0.001, f64::INFINITY), Some(0.0));
    assert_eq!(chi2_upper(1e9, f64::INFINITY), Some(1.0));
}

#[test]
fn noncentral_t_squared_is_noncentral_f() {
    for (df, delta) in [
        (0.7f64, 1.0f64),
        (5.0, 3.0),
        (28.0, 0.01),
        (60.0, 12.0),
        (1e5, 40.0),
        (1e9, 300.0),
    ] {
        for z in [-6.0, -1.5, 0.3, 2.0, 9.0] {
            let t = f64::abs(delta + z * f64::sqrt(1.0 + delta * delta / (2.0 * df)));
            let right = noncentral_t_tails(t, df, delta).expect("legal");
            let left = noncentral_t_tails(-t, df, delta).expect("legal");
            let f = noncentral_f_tails(t * t, 1.0, df, delta * delta);
            // t² and δ² are rounded; what that does to p grows with both.
            let slack = 1e-11 + 1e-15 * (t * t + delta * delta);
            close(f.map(Tails::upper), right.upper() + left.lower(), slack);
            if right.lower() > 1e-6 {
                close(f.map(Tails::lower), right.lower() - left.lower(), 1e-9);
            }
        }
    }
}

#[test]
fn without_noncentrality_they_are_central() {
    for x in [0.05, 0.8, 2.2, 11.0] {
        close(
            noncentral_t_tails(x, 13.5, 0.0).map(Tails::upper),
            t_upper(x, 13.5).expect("legal"),
            1e-12,
        );
        for lambda in [0.0, 1e-18] {
            let f = noncentral_f_tails(x, 3.0, 40.0, lambda);
            close(f.map(Tails::upper), f_upper(x, 3.0, 40.0).expect("legal"), 1e-12);
            let chi2 = noncentral_chi2_tails(x, 3.0, lambda);
            close(chi2.map(Tails::upper), chi2_upper(x, 3.0).expect("legal"), 1e-12);
        }
    }
}

#[test]
fn noncentralities_lead_back() {
    for p in [1e-30, 1e-4, 0.025, 0.5, 0.8, 0.975, 0.999_999] {
        for (t, df) in [(2.2, 28.0), (-0.4, 3.5), (15.0, 1e4), (0.0, 9.0), (300.0, 12.0)] {
            let delta = t_noncentrality_upper(p, t, df).expect("legal");
            close(noncentral_t_tails(t, df, delta).map(Tails::upper), p, 1e-10);
            let delta = t_noncentrality_lower(p, t, df).expect("legal");
            close(noncentral_t_tails(t, df, delta).map(Tails::lower), p, 1e-10);
        }
        for (f, df1, df2) in [(2.7, 3.0, 57.0), (40.0, 1.5, 8.0), (1.01, 200.0, 1e5)] {
            let lambda = f_noncentrality_upper(p, f, df1, df2).expect("legal");
            let tails = noncentral_f_tails(f, df1, df2, lambda).expect("legal");
            if lambda > 0.0 {
                close(Some(tails.upper()), p, 1e-10);
            } else {
                assert!(tails.upper() >= p);
            }
            let lambda = chi2_noncentrality_lower(p, f * df1, df1).expect("legal");
            let tails = noncentral_chi2_tails(f * df1, df1, lambda).expect("legal");
            if lambda > 0.0 {
                close(Some(tails.lower()), p, 1e-10);
            } else {
                assert!(tails.lower() <= p);
            }
        }
    }
}

#[test]
fn the_range_of_two_is_a_difference() {
    for df in [1.0, 4.5, 60.0, 1e6, f64::INFINITY] {
        for q in [0.01, 1.0, 3.5, 12.0] {
            let tails = studentized_range_tails(q, 2, df).expect("legal");
            let t = t_tails(q * std::f64::consts::FRAC_1_SQRT_2, df).expect("legal");
            close(Some(tails.upper()), 2.0 * t.upper(), 1e-12);
            close(Some(tails.lower()), 1.0 - 2.0 * t.upper(), 1e-10);
        }
    }
    // The quantile leads back.
    for p in [1e-20, 0.05, 0.9] {
        let q = studentized_range_quantile_upper(p, 5, 33.0).expect("legal");
        close(studentized_range_upper(q, 5, 33.0), p, 1e-11);
    }
}

#[test]
fn counts_agree_with_sums() {
    for (n, p) in [(1u64, 0.3), (17, 0.5), (40, 0.02), (300, 0.77)] {
        let one = |k| binomial_probability(k, n, p).expect("legal");
        close(Some((0..=n).map(one).sum::<f64>()), 1.0, 1e-12);
        for k in [0, n / 3, n / 2, n] {
            close(binomial_at_least(k, n, p), (k..=n).map(one).sum(), 1e-12);
            close(binomial_at_most(k, n, p), (0..=k).map(one).sum(), 1e-12);
            let rare = (0..=n).map(one).filter(|q| *q <= one(k) * (1.0 + 1e-7)).sum();
            close(binomial_two_sided(k, n, p), rare, 1e-12);
        }
    }
    for [row, column, total] in [[10, 10, 25], [3, 40, 60], [200, 150, 351], [7, 7, 7]] {
        let table = |a: u64| [a, row - a, column - a, total + a - row - column];
        let (least, most) = ((row + column).saturating_sub(total), row.min(column));
        let one = |a| fisher_probability(table(a)).expect("legal");
        for a in [least, (least + most) / 2, most] {
            close(fisher_at_least(table(a)), (a..=most).map(one).sum(), 1e-12);
            close(fisher_at_most(table(a)), (least..=a).map(one).sum(), 1e-12);
            let rare = (least..=most)
                .map(one)
                .filter(|q| *q <= one(a) * (1.0 + 1e-7))
                .sum();
            close(fisher_two_sided(table(a)), rare, 1e-12);
        }
    }
}
