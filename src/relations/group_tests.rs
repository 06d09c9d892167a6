//! Relations between groups, models and their tests, tried on printed numbers. Values were computed with
//! SciPy 1.17 and statsmodels 0.14 (`ttest_ind_from_stats`, `t.interval`, `proportion_confint`) unless a
//! line says otherwise.

use super::tests::{Outcome, agrees, conflicts, open, outcomes, solutions_hold};

#[test]
fn tests_of_two_groups() {
    // Student: t = 2.1755, df = 56.
    agrees(
        "t-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.10 n 28 t 2.18 df 56 p .034",
    );
    agrees(
        "t-from-groups",
        "M 2.50 SD 1.10 n 28 M 3.12 SD 1.07 n 30 t 2.18 df 56 p .034",
    );
    conflicts(
        "t-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.10 n 28 t 2.81 df 56 p .007",
    );
    // Welch: t = 1.8852, df = 50.49; Student with these SDs: 1.90.
    agrees(
        "t-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.40 n 28 t 1.89 df 50.49",
    );
    agrees(
        "t-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.40 n 28 t 1.89 df 50",
    );
    conflicts(
        "t-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.40 n 28 t 1.37 df 50.49",
    );
    // Sizes unknown: at most 0.625/(1.065·2/√58) with equal groups, or paired with any correlation.
    agrees("t-from-groups", "M 3.12 SD 1.07 M 2.50 SD 1.10 t 2.18 df 56");
    conflicts("t-from-groups", "M 3.12 SD 1.07 M 2.50 SD 1.10 t 0.22 df 56");
    // The same persons twice: t = 0.62/(SDd/√30) with SDd between 0.03 and 2.17.
    agrees(
        "t-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.10 n 30 t 3.40 df 29",
    );
    conflicts(
        "t-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.10 n 30 t 1.10 df 29",
    );
    open(
        "t-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.10 n 28 t 2.18 df 112",
    );
    open("t-from-groups", "M 3.12 SD 1.07 M 2.50 SD 1.10 t 2.18 df 55.7");
}

#[test]
fn standardised_differences_of_two_groups() {
    // Pooled SD 1.0846: d = 0.5717.
    agrees(
        "d-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.10 n 28 t 2.18 df 56 d 0.57",
    );
    agrees(
        "d-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.10 n 28 t 2.18 df 56 g 0.56",
    );
    agrees(
        "d-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.40 n 28 t 1.89 df 50.49 d 0.44",
    );
    conflicts(
        "d-from-groups",
        "M 3.12 SD 1.07 n 30 M 2.50 SD 1.10 n 28 t 2.18 df 56 d 0.75",
    );
    open("d-from-groups", "M 3.12 SD 1.07 M 2.50 SD 1.10 d 0.75");
    conflicts("d-from-groups", "M 3.12 SD 1.07 M 2.50 SD 1.10 d 0.15");
}

#[test]
fn standard_errors_and_intervals_of_means() {
    // 1.10/√64 = .1375; t.interval(.95, 63, 3.42, .1375) = 3.1452 … 3.6948.
    agrees("se-from-sd", "M 3.42 SD 1.10 SE 0.14 n 64");
    conflicts("se-from-sd", "M 3.42 SD 1.10 SE 0.41 n 64");
    solutions_hold("se-from-sd", "M 3.42 SD 1.10 SE 0.14 n 64");
    let ends = |text: &str| -> Vec<bool> {
        let all = outcomes("ci-of-mean", text, &[]);
        all.iter().map(|o| matches!(o, Outcome::Agrees(_))).collect()
    };
    assert_eq!(ends("M 3.42 SD 1.10 n 64 CI_low 3.15 CI_high 3.69"), [true, true]);
    assert_eq!(
        ends("M 3.42 SD 1.10 n 64 CI_low 3.15 CI_high 3.96"),
        [true, false]
    );
    assert_eq!(
        ends("M 3.42 SE 0.138 n 64 CI_level 95 CI_low 3.15 CI_high 3.69"),
        [true, true]
    );
}

#[test]
fn differences_of_means() {
    agrees("difference-of-means", "M 3.12 SD 1.07 M 2.50 SD 1.10 Mdiff -0.62");
    agrees("difference-of-means", "M 3.12 M 2.50 Mdiff 0.63");
    conflicts("difference-of-means", "M 3.12 M 2.50 Mdiff 0.26");
}

#[test]
fn intervals_of_proportions() {
    // 41 of 120: Wald .2568 … .4265, Wilson .2629 … .4303, Agresti–Coull .2628 … .4304, Clopper–Pearson
    // .2576 … .4338.
    for ends in ["25.7 CI_high 42.7", "26.3 CI_high 43.0", "26 CI_high 43"] {
        let all = outcomes(
            "ci-of-proportion",
            &format!("percent 34.2 CI_level 95 CI_low {ends} n 120"),
            &[],
        );
        assert!(
            all.len() == 2 && all.iter().all(|o| matches!(o, Outcome::Agrees(_))),
            "{ends}: {all:?}"
        );
    }
    let exact = outcomes(
        "ci-of-proportion",
        "percent 34.2 CI_level 95 CI_low 25.8 CI_high 43.4 n 120",
        &[],
    );
    assert!(exact.iter().all(|o| *o != Outcome::Conflicts), "{exact:?}");
    let narrow = outcomes(
        "ci-of-proportion",
        "percent 34 CI_level 95 CI_low 29 CI_high 39 n 120",
        &[],
    );
    assert_eq!(narrow, [Outcome::Conflicts, Outcome::Conflicts]);
}

#[test]
fn coefficients_and_their_tests() {
    // .23/.08 = 2.875; 2·t.sf(2.875, 120) = .0048.
    agrees("p-from-estimate", "b 0.23 SE 0.08 t 2.9 df 120 p .004");
    agrees("p-from-estimate", "b -0.23 SE 0.08 z -2.88 p .004");
    conflicts("p-from-estimate", "b 0.23 SE 0.08 t 3.94 df 120 p .004");
    agrees("p-from-estimate", "b 0.23 SE 0.08 p .004");
    conflicts("p-from-estimate", "b 0.23 SE 0.08 p .40");
    agrees("p-from-estimate", "b 0.230 SE 0.080 chi2 8.3 df 1");
    agrees("exp-b", "B 0.35 SE 0.12 OR 1.42");
    conflicts("exp-b", "B 0.35 SE 0.12 OR 1.24");
    open("exp-b", "B 0.35 SE 0.12 OR 0.70");
}

#[test]
fn models_and_heterogeneity() {
    // 1 − .77·99/96 = .2059.
    agrees("adjusted-r2", "R2 .23 F 9.6 df1 3 df2 96 p <.001 R2adj .21");
    conflicts("adjusted-r2", "R2 .23 F 9.6 df1 3 df2 96 p <.001 R2adj .26");
    // (23.4 − 11)/23.4 = 53.0 %.
    agrees("i2-from-q", "Q 23.4 df 11 p .016 I2 53");
    conflicts("i2-from-q", "Q 23.4 df 11 p .016 I2 35");
    agrees("i2-from-q", "Q 9.4 df 11 I2 0");
    // √(23.2/(38·159)) = .0620.
    agrees("rmsea", "chi2 61.2 df 38 N 160 RMSEA .06");
    agrees("rmsea", "chi2 30.1 df 38 N 160 RMSEA .00");
    conflicts("rmsea", "chi2 61.2 df 38 N 160 RMSEA .02");
    open("rmsea", "chi2 61.2 df 38 RMSEA .06");
}
