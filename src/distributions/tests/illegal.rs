//! Arguments that no distribution has: None, whatever the other arguments are.

use super::super::*;

const NAN: f64 = f64::NAN;

#[test]
fn statistics_that_are_no_numbers() {
    for answer in [
        normal_upper(NAN),
        normal_two_sided(NAN),
        t_two_sided(NAN, 3.0),
        t_upper(NAN, 3.0),
        f_upper(NAN, 1.0, 2.0),
        chi2_upper(NAN, 2.0),
        r_two_sided(NAN, 2.0),
        r_two_sided(1.1, 3.0),
        r_two_sided(-1.000_001, 3.0),
        studentized_range_upper(NAN, 3, 10.0),
        ln_gamma(NAN),
        ln_gamma(0.0),
        ln_gamma(-1.5),
        erf(NAN),
        erfc(NAN),
        t_noncentrality_upper(0.5, NAN, 3.0),
        t_noncentrality_lower(0.5, f64::INFINITY, 3.0),
        f_noncentrality_upper(0.5, -1.0, 3.0, 4.0),
        f_noncentrality_lower(0.5, NAN, 3.0, 4.0),
        chi2_noncentrality_upper(0.5, f64::INFINITY, 3.0),
        chi2_noncentrality_lower(0.5, -0.1, 3.0),
    ] {
        assert_eq!(answer, None);
    }
    for answer in [
        normal_tails(NAN),
        t_tails(NAN, 3.0),
        f_tails(NAN, 3.0, 4.0),
        chi2_tails(NAN, 3.0),
        r_tails(NAN, 3.0),
        beta_tails(1.0, 1.0, NAN),
        beta_tails(1.0, 1.0, -0.1),
        beta_tails(1.0, 1.0, 1.1),
        gamma_tails(1.0, NAN),
        gamma_tails(1.0, -1.0),
        noncentral_t_tails(NAN, 3.0, 1.0),
        noncentral_f_tails(NAN, 3.0, 4.0, 1.0),
        noncentral_chi2_tails(NAN, 3.0, 1.0),
        studentized_range_tails(NAN, 3, 3.0),
        studentized_range_tails(1.0, 1, 3.0),
        studentized_range_tails(1.0, 0, 3.0),
        studentized_range_tails(1.0, 3, 0.5),
        noncentral_t_tails(1.0, 0.05, 1.0),
        noncentral_t_tails(1.0, 3.0, 1e11),
        noncentral_f_tails(1.0, 3.0, 4.0, f64::INFINITY),
    ] {
        assert_eq!(answer, None);
    }
}

#[test]
fn degrees_of_freedom_and_parameters() {
    for df in [0.0, -1.0, f64::NEG_INFINITY, NAN] {
        for answer in [
            t_two_sided(1.0, df),
            t_upper(1.0, df),
            t_quantile_two_sided(0.05, df),
            t_quantile_upper(0.05, df),
            f_upper(1.0, df, 2.0),
            f_upper(1.0, 2.0, df),
            f_quantile_upper(0.05, df, 2.0),
            f_quantile_lower(0.05, 2.0, df),
            chi2_upper(1.0, df),
            chi2_quantile_upper(0.05, df),
            chi2_quantile_lower(0.05, df),
            r_two_sided(0.5, df),
            r_quantile_two_sided(0.05, df),
            beta_quantile_lower(0.5, df, 1.0),
            beta_quantile_upper(0.5, 1.0, df),
            gamma_quantile_lower(0.5, df),
            gamma_quantile_upper(0.5, df),
            t_noncentrality_upper(0.5, 1.0, df),
            t_noncentrality_lower(0.5, 1.0, df),
            f_noncentrality_upper(0.5, 1.0, df, 2.0),
            f_noncentrality_lower(0.5, 1.0, 2.0, df),
            chi2_noncentrality_upper(0.5, 1.0, df),
            chi2_noncentrality_lower(0.5, 1.0, df),
            studentized_range_upper(1.0, 3, df),
            studentized_range_quantile_upper(0.05, 3, df),
        ] {
            assert_eq!(answer, None, "{df}");
        }
        for answer in [
            t_tails(1.0, df),
            f_tails(1.0, df, df),
            chi2_tails(1.0, df),
            r_tails(0.1, df),
            beta_tails(df, 1.0, 0.5),
            beta_tails(1.0, df, 0.5),
            gamma_tails(df, 0.5),
            noncentral_t_tails(1.0, df, 1.0),
            noncentral_f_tails(1.0, df, 2.0, 1.0),
            noncentral_f_tails(1.0, 2.0, df, 1.0),
            noncentral_chi2_tails(1.0, df, 1.0),
        ] {
            assert_eq!(answer, None, "{df}");
        }
    }
    for lambda in [-1.0, NAN, f64::INFINITY] {
        assert_eq!(
            noncentral_t_tails(1.0, 3.0, lambda).filter(|_| lambda != -1.0),
            None
        );
        assert_eq!(noncentral_f_tails(1.0, 2.0, 3.0, lambda), None);
        assert_eq!(noncentral_chi2_tails(1.0, 2.0, lambda), None);
    }
}

#[test]
fn probabilities() {
    for p in [-0.1, 0.0, 1.0, 1.5, NAN] {
        for answer in [
            normal_quantile_upper(p),
            t_quantile_upper(p, 3.0),
            f_quantile_upper(p, 2.0, 3.0),
            f_quantile_lower(p, 2.0, 3.0),
            chi2_quantile_upper(p, 3.0),
            chi2_quantile_lower(p, 3.0),
            beta_quantile_lower(p, 2.0, 3.0),
            beta_quantile_upper(p, 2.0, 3.0),
            gamma_quantile_lower(p, 2.0),
            gamma_quantile_upper(p, 2.0),
            studentized_range_quantile_upper(p, 3, 10.0),
            t_noncentrality_upper(p, 1.0, 3.0),
            t_noncentrality_lower(p, 1.0, 3.0),
            f_noncentrality_upper(p, 1.0, 2.0, 3.0),
            f_noncentrality_lower(p, 1.0, 2.0, 3.0),
            chi2_noncentrality_upper(p, 1.0, 3.0),
            chi2_noncentrality_lower(p, 1.0, 3.0),
        ] {
            assert_eq!(answer, None, "{p}");
        }
        // A two-sided p may be 1.
        for answer in [
            t_quantile_two_sided(p, 3.0),
            r_quantile_two_sided(p, 3.0),
            normal_quantile_two_sided(p),
        ] {
            assert_eq!(answer, (p == 1.0).then_some(0.0), "{p}");
        }
    }
}
