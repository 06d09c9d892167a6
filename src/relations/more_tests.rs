//! Effect sizes, intervals, granularity and ranges, tried on printed numbers.

use super::tests::{
    Outcome, agrees, case, conflicts, mention, open, outcome, outcomes, quantities, solutions_hold,
};
use super::*;

#[test]
fn effect_sizes_of_f() {
    // 8.31/(8.31 + 52) = .1378; √(8.31/52) = .400; (8.31 − 1)/(8.31 + 53) = .1192.
    agrees("eta2-from-f", "F 8.31 df1 1 df2 52 p .006 eta2p .14");
    conflicts("eta2-from-f", "F 8.31 df1 1 df2 52 p .006 eta2p .41");
    conflicts("eta2-from-f", "F 8.31 df1 1 df2 52 p .006 eta2p .12");
    agrees("eta2-from-f", "F 8.31 df1 1 df2 52 p .006 eta2 .11");
    conflicts("eta2-from-f", "F 8.31 df1 1 df2 52 p .006 eta2 .16");
    agrees("eta2-from-f", "F 8.31 df1 1 df2 52 omega2 .12");
    agrees("eta2-from-f", "F 8.31 df1 1 df2 52 f .40");
    agrees("eta2-from-f", "t 2.88 df 52 p .006 eta2p .14");
    agrees("eta2-from-f", "R2 .23 F 9.6 df1 3 df2 96 p <.001");
    open("eta2-from-f", "R2 .21 F 9.6 df1 3 df2 96 p <.001");
    conflicts("eta2-from-f", "R2 .32 F 9.6 df1 3 df2 96 p <.001");
    for text in [
        "F 8.31 df1 1 df2 52 eta2p .14",
        "F 2.1 df1 3 df2 96 omega2 .03",
        "t -2.88 df 52 eta2p .14",
    ] {
        solutions_hold("eta2-from-f", text);
    }
}

#[test]
fn effect_sizes_of_t() {
    // 2.20·√(2/15) = 0.803; 2.20/√29 = 0.409.
    agrees("d-from-t", "t 2.20 df 28 p .036 d 0.80 CI_low 0.1 CI_high 1.5");
    agrees("d-from-t", "t 2.20 df 28 p .036 d -0.41");
    agrees("d-from-t", "t 2.20 df 28 g 0.78");
    open("d-from-t", "t 2.20 df 28 d 0.31");
    conflicts("d-from-t", "t 2.20 df 28 d 8.0");
    // 2.20·√(1/10 + 1/20) = 0.852
    agrees("d-from-t", "n 10 n 20 t 2.20 df 28 p .036 d 0.85");
    conflicts("d-from-t", "n 10 n 20 t 2.20 df 28 p .036 d 2.85");
    open("d-from-t", "t 2.20 df 27.31 d 8.0");
    agrees("d-from-t", "F 4.84 df1 1 df2 28 p .036 d 0.80");
    // 2.20/√(2.20² + 28) = .384
    agrees("r-from-t", "t 2.20 df 28 p .036 r .38");
    conflicts("r-from-t", "t 2.20 df 28 p .036 r .83");
    assert!(outcomes("r-from-t", "t 2.20 df 28 p .036 r .50 p .001", &[]).is_empty());
    // 2.44/√45 = .364
    agrees("r-from-t", "z -2.44 N 45 p .015 r .36");
    open("r-from-t", "U 143 z -2.44 n 45 p .015 r .43");
    for text in [
        "t 2.20 df 28 d 0.80",
        "n 10 n 20 t 2.20 df 28 d 0.85",
        "t -2.20 df 28 g 0.78",
        "t 2.20 df 28 d 8.0",
    ] {
        solutions_hold("d-from-t", text);
    }
    solutions_hold("r-from-t", "t -2.20 df 28 p .036 r .38");
}

#[test]
fn effect_sizes_of_chi2() {
    // √(6.83/90) = .2755; √(26.8/(200·2)) = .2588.
    agrees("v-from-chi2", "chi2 6.83 df 1 N 90 p .009 V .28");
    agrees("v-from-chi2", "chi2 6.83 df 1 N 90 p .009 phi -.28");
    conflicts("v-from-chi2", "chi2 6.83 df 1 N 90 p .009 V .82");
    agrees("v-from-chi2", "chi2 26.8 df 4 N 200 V .26");
    agrees("v-from-chi2", "chi2 26.8 df 4 N 200 V .37");
    open("v-from-chi2", "chi2 26.8 df 4 N 200 V .24");
    assert!(outcomes("v-from-chi2", "chi2 6.83 df 1 V .28", &[]).is_empty());
    solutions_hold("v-from-chi2", "chi2 6.83 df 1 N 90 p .009 V .28");
}

#[test]
fn u_and_its_z() {
    // n1·n2/2 = 250, √(500·46/12) = 43.78, (143 − 250)/43.78 = −2.444.
    let all = outcomes("u-range", "n 20 n 25 U 143 z -2.44 p .015", &[]);
    assert!(
        all.len() == 2 && all.iter().all(|o| matches!(o, Outcome::Agrees(_))),
        "{all:?}"
    );
    assert_eq!(outcomes("u-range", "n 20 n 25 U 1143", &[]), [Outcome::Conflicts]);
    assert_eq!(
        outcomes("u-range", "n 20 n 25 U 143 z -1.24", &[])[1],
        Outcome::Conflicts
    );
    assert_eq!(
        outcomes("u-range", "n 20 n 25 U 143 z -7.44", &[])[1],
        Outcome::Conflicts
    );
    assert!(matches!(
        outcomes("u-range", "n 20 n 25 U 250 z -0.01", &[])[1],
        Outcome::Agrees(_)
    ));
    solutions_hold("u-range", "n 20 n 25 U 143 z -2.44");
    solutions_hold("u-range", "n 20 n 25 U 1143");
}

#[test]
fn exact_p_beside_a_wald_interval_is_not_decided() {
    // Woolf's interval with Fisher's p, and with the p of the likelihood ratio.
    open(
        "p-from-ci",
        "OR 0.253 CI_level 95 CI_low 0.068 CI_high 0.933 p .073",
    );
    open(
        "p-from-ci",
        "OR 0.12 CI_level 95 CI_low 0.014 CI_high 1.10 p .024",
    );
    // A narrow interval comes from so many that the methods agree.
    conflicts("p-from-ci", "OR 1.50 CI_level 95 CI_low 1.02 CI_high 2.21 p .12");
    conflicts(
        "p-from-ci",
        "OR 0.253 CI_level 95 CI_low 0.068 CI_high 0.933 p .30",
    );
}

#[test]
fn means_lie_inside_their_range() {
    agrees("mean-range", "M 4.20 SD 1.1 range_low 1 range_high 7");
    agrees("mean-range", "Mdn 54 IQR_low 50 IQR_high 62");
    conflicts("mean-range", "M 8.20 range_low 1 range_high 7");
    conflicts("mean-range", "Mdn 45 IQR_low 50 IQR_high 62");
    conflicts("mean-range", "Mdn 54 range_low 62 range_high 50");
    for text in [
        "M 8.20 IQR_low 1 IQR_high 7",
        "M 3 M 8.20 range_low 1 range_high 7",
        "range_low 1 range_high 7",
    ] {
        assert!(outcomes("mean-range", text, &[]).is_empty(), "{text}");
    }
    solutions_hold("mean-range", "M 8.20 range_low 1 range_high 7");
}

#[test]
fn ranges() {
    conflicts("range", "r 1.24");
    conflicts("range", "p 1.2");
    conflicts("range", "SD -1.2");
    conflicts("range", "eta2p 14");
    open("range", "n 12.5");
    conflicts("range", "M 3.20 SD 1.1 n 0");
    conflicts("range", "t 2.1 df 0 p .04");
    conflicts("range", "F 2.1 df1 0 df2 20");
    conflicts("range", "n 130 percent 130");
    conflicts("range", "CFI 1.2");
    conflicts("range", "ICC 1.3");
    for text in [
        "n 0",
        "n 0 percent 0",
        "chi2 0.00 df 0",
        "count 130 percent 130",
        "percent 130",
        "n 90 percent 100",
        "ICC -0.1",
        "t 2.1 df 0.9",
    ] {
        assert!(outcomes("range", text, &[]).is_empty(), "{text}");
    }
    open("range", "R2 -.20");
    for text in [
        "r -1.00",
        "n 12.0",
        "p 1.00",
        "p <.001",
        "n 12",
        "N 12406",
        "p .000",
        "F <1",
        "R2 .23",
        "alpha -.2",
        "p >.05",
    ] {
        assert!(outcomes("range", text, &[]).is_empty(), "{text}");
    }
}

#[test]
fn intervals_around_estimates() {
    agrees("ci-order", "d 0.80 CI_level 95 CI_low 0.1 CI_high 1.5");
    conflicts("ci-order", "OR 1.52 CI_level 95 CI_low 1.61 CI_high 2.11");
    conflicts("ci-order", "OR 1.52 CI_level 95 CI_low 2.11 CI_high 1.10");
    conflicts("ci-order", "CI_level 95 CI_low 2.11 CI_high 1.10");
    assert!(
        outcomes(
            "ci-order",
            "M 3.2 SD 1.1 M 4.1 SD 1.0 t 2.2 df 28 CI_low 0.2 CI_high 1.6",
            &[]
        )
        .is_empty()
    );
    agrees("ci-order", "Mdiff 1.2 t 2.2 df 28 d 2.8 CI_low 0.1 CI_high 2.3");
    agrees("ci-centre", "b 0.23 SE 0.08 CI_level 95 CI_low 0.07 CI_high 0.39");
    agrees("ci-centre", "OR 1.52 CI_level 95 CI_low 1.10 CI_high 2.11");
    conflicts("ci-centre", "OR 1.25 CI_level 95 CI_low 1.10 CI_high 2.11");
    open("ci-centre", "OR 1.60 CI_level 95 CI_low 1.10 CI_high 2.11");
    open("ci-centre", "d 0.80 CI_low 0.7 CI_high 1.9");
    // tanh(atanh(.38) ± 1.96/√47) = .106 and .599
    agrees("ci-centre", "r .38 CI_low .11 CI_high .60");
    assert!(outcomes("ci-centre", "Mdn 12 CI_low 11 CI_high 19", &[]).is_empty());
    let resampled = [mention("bootstrap", "bootstrapped", Reach::Document, &[])];
    let lopsided = "b 0.10 CI_level 95 CI_low 0.07 CI_high 0.39";
    conflicts("ci-centre", lopsided);
    assert!(matches!(
        outcome("ci-centre", lopsided, &resampled),
        Outcome::Open(_)
    ));
    for text in [
        "b 0.23 CI_low 0.07 CI_high 0.39",
        "OR 1.25 CI_low 1.10 CI_high 2.11",
        "r .38 CI_low .11 CI_high .60",
    ] {
        solutions_hold("ci-centre", text);
        solutions_hold("ci-order", text);
    }
}

#[test]
fn p_of_an_interval() {
    // Altman & Bland (2011), BMJ 343:d2304, from memory: a ratio of 0.81 with 95% CI 0.70 to 0.94 has z = −2.81
    // and p = .005; by hand: ln .81 = −.2107, SE = (ln .94 − ln .70)/3.92 = .0752.
    agrees("p-from-ci", "RR 0.81 CI_level 95 CI_low 0.70 CI_high 0.94 p .005");
    agrees("p-from-ci", "HR 0.72 CI_level 95 CI_low 0.56 CI_high 0.93 p .01");
    conflicts("p-from-ci", "HR 0.72 CI_level 95 CI_low 0.56 CI_high 0.93 p .30");
    conflicts("p-from-ci", "HR 0.72 CI_level 95 CI_low 0.46 CI_high 1.13 p .01");
    open("p-from-ci", "HR 0.72 CI_level 95 CI_low 0.56 CI_high 0.93 p .024");
    agrees(
        "p-from-ci",
        "b 0.23 SE 0.08 t 2.9 df 120 p .004 CI_low 0.07 CI_high 0.39",
    );
    // t with 5 degrees of freedom: q = 2.571, and 2·2.571/1.5 = 3.43 has p = .0187 (SciPy 1.17).
    open("p-from-ci", "Mdiff 2.0 CI_level 95 CI_low 0.5 CI_high 3.5 p .019");
    agrees(
        "p-from-ci",
        "Mdiff 2.0 CI_level 95 CI_low 0.5 CI_high 3.5 t 3.43 df 5 p .019",
    );
    assert!(
        outcomes(
            "p-from-ci",
            "chi2 6.8 df 1 p .009 OR 2.1 CI_low 1.2 CI_high 3.6",
            &[]
        )
        .is_empty()
    );
    for text in [
        "HR 0.72 CI_low 0.56 CI_high 0.93 p .01",
        "HR 0.72 CI_low 0.56 CI_high 0.93 p .30",
    ] {
        solutions_hold("p-from-ci", text);
    }
}

#[test]
fn means_of_whole_answers() {
    let scale = [mention("scale", "7-point", Reach::Paragraph, &[7.0])];
    let grim = |text, mentions: &[Mention]| outcome("mean-granularity", text, mentions);
    // 96/28 = 3.4286, 97/28 = 3.4643.
    assert_eq!(grim("M 3.45 SD 1.22 n 28", &scale), Outcome::Conflicts);
    assert!(matches!(grim("M 3.43 SD 1.22 n 28", &scale), Outcome::Agrees(_)));
    assert!(matches!(grim("M 3.46 SD 1.22 n 28", &scale), Outcome::Agrees(_)));
    assert!(matches!(grim("M 3.45 SD 1.22 n 128", &scale), Outcome::Open(_)));
    assert!(outcomes("mean-granularity", "M 3.45 SD 1.22 n 28", &[]).is_empty());
    // An age is not on the scale, and the N of a χ² is not that of the mean.
    assert!(outcomes("mean-granularity", "M 45.32 SD 12.2 n 27", &scale).is_empty());
    assert!(outcomes("mean-granularity", "M 3.45 SD 1.22 chi2 6.8 df 1 N 28", &scale).is_empty());
    let two = [
        scale[0].clone(),
        mention("items", "2 items", Reach::Sentence, &[2.0]),
    ];
    // 193/56 = 3.446.
    assert!(matches!(grim("M 3.45 SD 1.22 n 28", &two), Outcome::Agrees(_)));
    let given = quantities("M 3.45 n 28");
    let case = case(&given, &scale);
    let tie = &mean_granularity::ties(&case)[0];
    let values = [given[0].interval, given[1].interval];
    let nearest = tie.variants[0].law.solve(0, &values);
    assert_eq!(
        nearest,
        [Interval::point(96.0 / 28.0), Interval::point(97.0 / 28.0)]
    );
    let sizes = tie.variants[0].law.solve(1, &values);
    assert!(sizes.iter().any(|s| s.contains(29.0)) && !sizes.iter().any(|s| s.contains(28.0)));
}

#[test]
fn percentages() {
    agrees("percent-of-count", "count 34 N 90 percent 38");
    conflicts("percent-of-count", "count 34 N 90 percent 83");
    agrees("percent-of-count", "count 12 n 34 percent 35.3");
    open("percent-of-count", "n 12 percent 35.3 ^N 40");
    conflicts("percent-of-count", "count 100 N 90 percent 111");
    agrees("percent-of-count", "count 34 percent 38 n 90");
    conflicts("percent-of-count", "count 34 percent 83 n 90");
    solutions_hold("percent-of-count", "count 34 N 90 percent 38");
}
