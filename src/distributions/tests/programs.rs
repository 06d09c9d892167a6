//! Values that other programs gave: SciPy 1.17.1, statsmodels 0.15.0, R 4.2.2, each computed for these tests, and the
//! crate statrs as a second opinion. How far they are right themselves decides how close the values have to be.

use super::super::*;
use super::close;
use statrs::distribution::{ChiSquared, ContinuousCDF, FisherSnedecor, StudentsT};

#[test]
fn noncentral_tails() {
    // scipy.stats.nct.sf(t, df, delta)
    for (t, df, delta, p) in [
        (2.2, 28.0, 1.5, 0.2569528582804156),
        (2.048, 28.0, 2.1, 0.5271644051461313),
        (0.5, 10.0, -1.0, 0.0696016836932485),
        (5.0, 60.0, 3.0, 0.035643337303207755),
    ] {
        close(noncentral_t_tails(t, df, delta).map(Tails::upper), p, 1e-11);
    }
    // scipy.stats.ncf.sf(f, df1, df2, lambda)
    for (f, df1, df2, lambda, p) in [
        (2.76, 3.0, 57.0, 8.0, 0.6221871420634753),
        (4.0, 1.0, 28.0, 7.5, 0.767655721763843),
        (1.5, 4.0, 100.0, 20.0, 0.992689272712201),
    ] {
        close(
            noncentral_f_tails(f, df1, df2, lambda).map(Tails::upper),
            p,
            1e-11,
        );
    }
    // scipy.stats.ncx2.sf(x, df, lambda)
    for (x, df, lambda, p) in [
        (3.841, 1.0, 7.85, 0.8000896903385835),
        (9.488, 4.0, 10.0, 0.7159702086212613),
        (30.0, 10.0, 25.0, 0.6503052648265556),
    ] {
        close(noncentral_chi2_tails(x, df, lambda).map(Tails::upper), p, 1e-11);
    }
}

#[test]
fn noncentralities() {
    // scipy.optimize.brentq on scipy.stats.nct.cdf, ncf.cdf and ncx2.cdf, p being the lower tail. (SciPy's own searches,
    // nctdtrinc, ncfdtrinc and chndtrinc, stop early: the second one gives the second λ of F 3e-5 too small.)
    for (p, t, df, delta) in [
        (0.025, 2.2, 28.0, 4.22411099899233),
        (0.975, 2.2, 28.0, 0.13977472676113561),
        (0.05, -1.3, 12.0, 0.42630703504100237),
    ] {
        close(t_noncentrality_lower(p, t, df), delta, 1e-9);
        close(t_noncentrality_upper(1.0 - p, t, df), delta, 1e-9);
    }
    for (p, f, df1, df2, lambda) in [
        (0.025, 5.2, 2.0, 57.0, 26.40333813892144),
        (0.975, 5.2, 2.0, 57.0, 0.7266088602508023),
        (0.2, 2.77, 3.0, 57.0, 11.692718274388639),
    ] {
        close(f_noncentrality_lower(p, f, df1, df2), lambda, 1e-9);
        close(f_noncentrality_upper(1.0 - p, f, df1, df2), lambda, 1e-9);
    }
    for (p, x, df, lambda) in [
        (0.2, 3.841458820694124, 1.0, 7.8488605093261965),
        (0.05, 18.3, 4.0, 31.531134617374505),
    ] {
        close(chi2_noncentrality_lower(p, x, df), lambda, 1e-9);
        close(chi2_noncentrality_upper(1.0 - p, x, df), lambda, 1e-9);
    }
}

#[test]
fn power() {
    // statsmodels TTestIndPower().power(d, n per group, .05), both tails
    for (d, n, expected) in [
        (0.5f64, 64.0f64, 0.8014595579222542),
        (0.8, 20.0, 0.6934041966153818),
    ] {
        let (df, delta) = (2.0 * n - 2.0, d * (0.5 * n).sqrt());
        let t = t_quantile_two_sided(0.05, df).expect("legal");
        let right = noncentral_t_tails(t, df, delta).expect("legal").upper();
        let left = noncentral_t_tails(-t, df, delta).expect("legal").lower();
        close(Some(right + left), expected, 1e-9);
    }
    // FTestAnovaPower().power(f, N, α, k_groups)
    for (f, n, alpha, k, expected) in [
        (0.25, 180.0, 0.05, 4.0, 0.8039869128651758),
        (0.4, 60.0, 0.01, 3.0, 0.5435963465750053),
    ] {
        let critical = f_quantile_upper(alpha, k - 1.0, n - k).expect("legal");
        let tails = noncentral_f_tails(critical, k - 1.0, n - k, n * f * f);
        close(tails.map(Tails::upper), expected, 1e-9);
    }
    // GofChisquarePower().power(w, N, n_bins, .05), and solve_power(w = .3, n_bins = 2, power = .8) for N
    let critical = chi2_quantile_upper(0.05, 4.0).expect("legal");
    let tails = noncentral_chi2_tails(critical, 4.0, 9.0);
    close(tails.map(Tails::upper), 0.6634860717513963, 1e-9);
    let critical = chi2_quantile_upper(0.05, 1.0).expect("legal");
    let lambda = chi2_noncentrality_upper(0.8, critical, 1.0).expect("legal");
    close(Some(lambda / 0.09), 87.20956138148837, 1e-7);
}

#[test]
fn studentized_range() {
    // scipy.stats.studentized_range.sf(q, k, df) and .isf; R's ptukey has the first two as 0.05589184908205935 and
    // 0.03348606690798772, qtukey(.95, 4, 20) is 3.958293461450393.
    for (q, k, df, p) in [
        (3.5, 3, 20.0, 0.055891849081749934),
        (4.2, 5, 60.0, 0.0334860668814273),
        (2.0, 4, 10.0, 0.5189626756123746),
        (5.5, 6, 12.0, 0.020448489776902834),
    ] {
        close(studentized_range_upper(q, k, df), p, 2e-9);
    }
    close(
        studentized_range_quantile_upper(0.05, 3, 20.0),
        3.577934725220134,
        1e-9,
    );
    close(
        studentized_range_quantile_upper(0.01, 4, 36.0),
        4.7294457192791,
        1e-9,
    );
    close(
        studentized_range_quantile_upper(0.05, 4, 20.0),
        3.958293461450393,
        1e-6,
    );
}

#[test]
fn counts() {
    // scipy.stats.fisher_exact; R's fisher.test has the first as 0.02383689585024399.
    for (table, p) in [
        ([12, 5, 7, 16], 0.023836895850244018),
        ([3, 9, 11, 4], 0.02130090785360674),
        ([0, 8, 6, 5], 0.018059855521155837),
        ([30, 70, 45, 55], 0.040534006514982644),
        ([8, 2, 1, 5], 0.034965034965034975),
    ] {
        close(fisher_two_sided(table), p, 1e-12);
        // Turned over, the table is the same.
        let [a, b, c, d] = table;
        close(fisher_two_sided([c, d, a, b]), p, 1e-12);
        close(fisher_two_sided([a, c, b, d]), p, 1e-12);
    }
    // R: phyper(11, 17, 23, 19, lower = FALSE)
    close(fisher_at_least([12, 5, 7, 16]), 0.01356923107757366, 1e-12);
    // scipy.stats.binomtest(k, n, p).pvalue
    for (k, n, p, expected) in [
        (7, 20, 0.5, 0.26317596435546875),
        (3, 40, 0.2, 0.04786946338839313),
        (12, 12, 0.75, 0.04592913389205933),
        (9, 31, 0.1, 0.0025962080285246037),
    ] {
        close(binomial_two_sided(k, n, p), expected, 1e-12);
    }
    // R: pbinom(6, 20, .5)
    close(binomial_at_most(6, 20, 0.5), 0.05765914916992186, 1e-13);
    // scipy.stats.binomtest(7, 20).proportion_ci(.95, "exact"), Clopper & Pearson's interval
    close(beta_quantile_lower(0.025, 7.0, 14.0), 0.1539092047845412, 1e-11);
    close(beta_quantile_upper(0.025, 8.0, 13.0), 0.5921885345328283, 1e-11);
}

#[test]
fn ranks() {
    // R: pwilcox(c(20, 60, 100), 8, 12), pwilcox(850, 50, 50), psignrank(c(8, 30, 200), c(10, 15, 30))
    for (u, n1, n2, p) in [
        (20, 8, 12, 0.01571008970389776),
        (60, 8, 12, 0.828427403350004),
        (850, 50, 50, 0.002768888162111256),
    ] {
        close(rank_sum_at_most(u, n1, n2), p, 1e-13);
        close(rank_sum_at_least(n1 * n2 - u, n2, n1), p, 1e-13);
    }
    for (w, n, p) in [
        (8, 10, 0.0244140625),
        (30, 15, 0.04730224609375),
        (200, 30, 0.25792422145605093),
    ] {
        close(signed_rank_at_most(w, n), p, 1e-13);
        close(signed_rank_at_least(n * (n + 1) / 2 - w, n), p, 1e-13);
    }
}

#[test]
fn statrs_where_it_was_measured_to_be_good() {
    for df in [1.0, 2.5, 7.0, 28.0, 118.27, 600.0] {
        let t = StudentsT::new(0.0, 1.0, df).expect("legal");
        let chi2 = ChiSquared::new(df).expect("legal");
        for x in [0.1, 0.7, 1.96, 3.3, 6.0] {
            close(t_upper(x, df), t.sf(x), 1e-11);
            close(chi2_upper(x * df / 2.0, df), chi2.sf(x * df / 2.0), 1e-10);
            for df1 in [1.0, 3.0, 12.5] {
                let f = FisherSnedecor::new(df1, df).expect("legal");
                close(f_upper(x, df1, df), f.sf(x), 1e-9);
            }
        }
    }
}
