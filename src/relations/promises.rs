//! The two promises, tried on simulated results: whatever is computed from true values and printed by
//! any usual rounding never conflicts, and what no rounding explains always does.

use super::tests::{Outcome, case, judge, mention, outcomes, quantities};
use super::*;
use proptest::prelude::*;
use statrs::distribution::{ChiSquared, ContinuousCDF, FisherSnedecor, Normal, StudentsT};

/// Prints a value to some decimals: half up, half even as the formatter does, or half down. A value
/// that is not a tie prints the same in all three.
fn print(value: f64, decimals: usize, way: u8) -> String {
    let unit = 10f64.powi(decimals as i32);
    let rounded = match way {
        0 => (value.abs() * unit + 0.5).floor() / unit,
        1 => value.abs(),
        _ => (value.abs() * unit - 0.5).ceil() / unit,
    };
    let text = format!("{rounded:.decimals$}");
    if value < 0.0 { format!("-{text}") } else { text }
}

/// How the first tie of a relation comes out; None if it does not apply.
fn verdict(relation: &str, text: &str) -> Option<Outcome> {
    outcomes(relation, text, &[]).into_iter().next()
}

fn agrees(relation: &str, text: &str) -> Result<(), TestCaseError> {
    let out = verdict(relation, text);
    prop_assert!(
        matches!(out, Some(Outcome::Agrees(_))),
        "{relation}: {text}: {out:?}"
    );
    Ok(())
}

fn never_conflicts(relation: &str, text: &str) -> Result<(), TestCaseError> {
    let out = verdict(relation, text);
    prop_assert!(out != Some(Outcome::Conflicts), "{relation}: {text}: {out:?}");
    Ok(())
}

fn conflicts(relation: &str, text: &str) -> Result<(), TestCaseError> {
    let out = verdict(relation, text);
    prop_assert!(out == Some(Outcome::Conflicts), "{relation}: {text}: {out:?}");
    Ok(())
}

/// A printed p that no statistic printing the same can have: the law at 1 ± `wide` units of the last
/// digit of the statistic bounds every such p from outside.
fn far_p(least: f64, most: f64, decimals: usize, up: bool) -> Option<String> {
    let unit = 10f64.powi(-(decimals as i32));
    let p = if up { most + 0.6 * unit } else { least - 0.6 * unit };
    // Rounded away from the range, so that it stays outside by more than half a unit.
    let p = if up {
        (p / unit).ceil() * unit
    } else {
        (p / unit).floor() * unit
    };
    (p > 0.0 && p < 1.0 && (up || p > 0.6 * unit)).then(|| format!("{p:.decimals$}"))
}

fn t_p(t: f64, df: f64) -> f64 {
    2.0 * StudentsT::new(0.0, 1.0, df).expect("legal").sf(t.abs())
}

fn f_p(f: f64, df1: f64, df2: f64) -> f64 {
    FisherSnedecor::new(df1, df2).expect("legal").sf(f)
}

fn chi2_p(x: f64, df: f64) -> f64 {
    ChiSquared::new(df).expect("legal").sf(x)
}

fn z_p(z: f64) -> f64 {
    2.0 * Normal::standard().sf(z.abs())
}

proptest! {
    #![proptest_config(ProptestConfig::with_cases(400))]

    #[test]
    fn true_p_agree(
        t in -8.0..8.0f64, df in 1u32..400, df1 in 1u32..12, f in 0.0..20.0f64, x in 0.0..40.0f64,
        decimals in 1usize..4, p_decimals in 1usize..6, way in 0u8..3, other in 0u8..3,
    ) {
        let n = f64::from(df);
        let show = |v: f64| print(v, decimals, way);
        let p = |v: f64| print(v, p_decimals, other);
        agrees("p-from-t", &format!("t {} df {df} p {}", show(t), p(t_p(t, n))))?;
        agrees("p-from-z", &format!("z {} p {}", show(t), p(z_p(t))))?;
        agrees("p-from-f", &format!("F {} df1 {df1} df2 {df} p {}", show(f), p(f_p(f, f64::from(df1), n))))?;
        agrees("p-from-chi2", &format!("chi2 {} df {df1} p {}", show(x), p(chi2_p(x, f64::from(df1)))))?;
        let r = (t / 8.1).clamp(-0.99, 0.99);
        let r_p = t_p(r * (n / (1.0 - r * r)).sqrt(), n);
        agrees("p-from-r", &format!("r {} df {df} p {}", show(r), p(r_p)))?;
        agrees("p-from-r", &format!("r {} N {} p {}", show(r), df + 2, p(r_p)))?;
    }

    #[test]
    fn fractional_degrees_of_freedom_agree(
        t in -8.0..8.0f64, df in 1.0..400.0f64, df1 in 1.0..12.0f64, f in 0.0..20.0f64,
        decimals in 1usize..3, p_decimals in 2usize..5, way in 0u8..3,
    ) {
        let d = |v: f64| print(v, decimals, way);
        let p = |v: f64| print(v, p_decimals, way);
        agrees("p-from-t", &format!("t {} df {} p {}", d(t), d(df), p(t_p(t, df))))?;
        agrees("p-from-f", &format!("F {} df1 {} df2 {} p {}", d(f), d(df1), d(df), p(f_p(f, df1, df))))?;
    }

    #[test]
    fn p_that_no_rounding_explains_conflict(
        t in 0.0..6.0f64, df in 2u32..400, df1 in 1u32..12, f in 0.02..15.0f64, x in 0.02..40.0f64, up in any::<bool>(),
    ) {
        let n = f64::from(df);
        let k = f64::from(df1);
        let off = |v: f64| ((v * 100.0).round() / 100.0 - 0.0051, (v * 100.0).round() / 100.0 + 0.0051);
        let (a, b) = off(t);
        if let Some(p) = far_p(t_p(b, n), t_p(a.max(0.0), n), 3, up) {
            conflicts("p-from-t", &format!("t {t:.2} df {df} p {p}"))?;
        }
        if let Some(p) = far_p(z_p(b), z_p(a.max(0.0)), 3, up) {
            conflicts("p-from-z", &format!("z {t:.2} p {p}"))?;
        }
        let (a, b) = off(f);
        if let Some(p) = far_p(f_p(b, k, n), f_p(a.max(0.0), k, n), 3, up) {
            conflicts("p-from-f", &format!("F {f:.2} df1 {df1} df2 {df} p {p}"))?;
        }
        let (a, b) = off(x);
        if let Some(p) = far_p(chi2_p(b, k), chi2_p(a.max(0.0), k), 3, up) {
            conflicts("p-from-chi2", &format!("chi2 {x:.2} df {df1} p {p}"))?;
        }
    }

    #[test]
    fn sphericity_by_any_epsilon_agrees(f in 0.1..12.0f64, df1 in 2u32..8, subjects in 4u32..60, e in 0.0..=1.0f64) {
        let (a, b) = (f64::from(df1), f64::from(df1 * (subjects - 1)));
        let epsilon = 1.0 / a + e * (1.0 - 1.0 / a);
        let p = f_p(f, epsilon * a, epsilon * b);
        let text = format!("F {f:.2} df1 {df1} df2 {} p {p:.3}", df1 * (subjects - 1));
        let given = quantities(&text);
        let mentions = [mention("sphericity", "Greenhouse–Geisser", Reach::Document, &[])];
        let statement = case(&given, &mentions);
        let out = judge(&p_from_f::ties(&statement)[0], &given);
        prop_assert!(matches!(out, Outcome::Agrees(_)), "{text}: {out:?}");
    }

    #[test]
    fn true_effect_sizes_agree(
        t in -6.0..6.0f64, n1 in 3u32..80, n2 in 3u32..80, df1 in 1u32..6, f in 0.0..15.0f64, decimals in 1usize..4, way in 0u8..3,
    ) {
        let show = |v: f64| print(v, decimals, way);
        let (a, b) = (f64::from(n1), f64::from(n2));
        let (df, n) = (n1 + n2 - 2, f64::from(n1 + n2));
        let d = t * (1.0 / a + 1.0 / b).sqrt();
        agrees("d-from-t", &format!("t {} df {df} d {}", show(t), show(d)))?;
        agrees("d-from-t", &format!("n {n1} n {n2} t {} df {df} d {}", show(t), show(d)))?;
        agrees("d-from-t", &format!("t {} df {df} d {}", show(t), show(t / (n - 1.0).sqrt())))?;
        let j = 1.0 - 3.0 / (4.0 * (n - 2.0) - 1.0);
        agrees("d-from-t", &format!("n {n1} n {n2} t {} df {df} g {}", show(t), show(d * j)))?;
        agrees("r-from-t", &format!("t {} df {df} r {}", show(t), show(t / (t * t + n - 2.0).sqrt())))?;
        let k = f64::from(df1);
        let e = f * k / (f * k + n);
        let head = format!("F {} df1 {df1} df2 {}", show(f), n1 + n2);
        agrees("eta2-from-f", &format!("{head} eta2p {}", show(e)))?;
        agrees("eta2-from-f", &format!("{head} eta2 {}", show(e * 0.7)))?;
        agrees("eta2-from-f", &format!("{head} f {}", show((e / (1.0 - e)).sqrt())))?;
        agrees("eta2-from-f", &format!("{head} R2 {}", show(e)))?;
        agrees("eta2-from-f", &format!("{head} omega2 {}", show(k * (f - 1.0) / (k * (f - 1.0) + k + n + 1.0))))?;
        agrees("v-from-chi2", &format!("chi2 {} df {df1} N {} V {}", show(f.min(0.9 * n)), n1 + n2, show((f.min(0.9 * n) / n).sqrt())))?;
    }

    #[test]
    fn true_intervals_agree(
        b in -5.0..5.0f64, se in 0.05..3.0f64, df in 3u32..200, decimals in 2usize..4, way in 0u8..3, known in any::<bool>(),
    ) {
        let show = |v: f64| print(v, decimals, way);
        // Wald interval and p of a ratio.
        let (low, high) = ((b - 1.959963984540054 * se).exp(), (b + 1.959963984540054 * se).exp());
        // Ends that print almost alike say nothing.
        let width = high - low;
        prop_assume!(width > 3.0 * 10f64.powi(-(decimals as i32)));
        let text = format!("OR {} CI_level 95 CI_low {} CI_high {} p {}", show(b.exp()), show(low), show(high), print(z_p(b / se), 3, way));
        for relation in ["ci-order", "ci-centre"] {
            agrees(relation, &text)?;
        }
        prop_assert!(!matches!(verdict("p-from-ci", &text), Some(Outcome::Conflicts | Outcome::Open(_))), "{text}");
        // A coefficient with an interval by t.
        let n = f64::from(df);
        let q = crate::distributions::t_quantile_two_sided(0.05, n).expect("legal");
        let t = if known { format!("t {} df {df} ", show(b / se)) } else { String::new() };
        let text = format!("b {} {t}CI_level 95 CI_low {} CI_high {} p {}", show(b), show(b - q * se), show(b + q * se), print(t_p(b / se, n), 3, way));
        for relation in ["ci-order", "ci-centre"] {
            agrees(relation, &text)?;
        }
        if known { agrees("p-from-ci", &text)? } else { never_conflicts("p-from-ci", &text)? }
        // Likelihood ratio, score and other tests have a z within a tenth of Wald's.
        let near = format!("OR {} CI_level 95 CI_low {} CI_high {} p {}", show(b.exp()), show(low), show(high), print(z_p(b / se * 1.05), 3, way));
        never_conflicts("p-from-ci", &near)?;
    }

    #[test]
    fn fisher_intervals_agree(r in -0.95..0.95f64, n in 8u32..400, decimals in 2usize..4, way in 0u8..3) {
        let half = 1.959963984540054 / f64::from(n - 3).sqrt();
        let show = |v: f64| print(v, decimals, way);
        let text = format!("r {} CI_low {} CI_high {}", show(r), show((r.atanh() - half).tanh()), show((r.atanh() + half).tanh()));
        agrees("ci-centre", &text)?;
    }

    #[test]
    fn real_answers_have_possible_means(
        answers in proptest::collection::vec(1u32..=7, 2..60), decimals in 1usize..4, way in 0u8..3,
    ) {
        let total: u32 = answers.iter().sum();
        let n = answers.len();
        let mean = f64::from(total) / n as f64;
        let text = format!("M {} SD 1.2 n {n}", print(mean, decimals, way));
        let given = quantities(&text);
        let mentions = [mention("scale", "7-point", Reach::Sentence, &[7.0])];
        let statement = case(&given, &mentions);
        let out = judge(&mean_granularity::ties(&statement)[0], &given);
        prop_assert!(out != Outcome::Conflicts, "{text}");
        // And every printed mean that no total rounds to is a conflict: by trying all totals.
        let printed = given[0].interval;
        // A mean beyond the scale would not be judged at all.
        prop_assume!(mean < 6.98);
        let shifted = format!("{:.2}", (mean * 100.0).floor() / 100.0 + 0.01);
        let given = quantities(&format!("M {shifted} SD 1.2 n {n}"));
        let possible = (0..=u64::from(total) + n as u64).any(|s| {
            let exact = s as f64 / n as f64;
            (exact - given[0].number.value()).abs() <= 0.005 + 1e-9
        });
        let statement = case(&given, &mentions);
        let out = judge(&mean_granularity::ties(&statement)[0], &given);
        prop_assert_eq!(matches!(out, Outcome::Agrees(_)), possible, "{} {:?}", shifted, printed);
    }

    #[test]
    fn real_percentages_agree(count in 0u32..500, more in 0u32..500, decimals in 0usize..3, way in 0u8..3) {
        prop_assume!(count + more > 0);
        let percent = 100.0 * f64::from(count) / f64::from(count + more);
        agrees("percent-of-count", &format!("count {count} N {} percent {}", count + more, print(percent, decimals, way)))?;
        if percent < 90.0 {
            conflicts("percent-of-count", &format!("count {count} N {} percent {}", count + more, print(percent + 2.0, 0, way)))?;
        }
    }

    #[test]
    fn real_u_have_their_z(n1 in 2u32..40, n2 in 2u32..40, x in 0.0..=1.0f64, way in 0u8..3) {
        let (a, b) = (f64::from(n1), f64::from(n2));
        let u = (x * a * b).floor();
        let z = (u - a * b / 2.0) / (a * b * (a + b + 1.0) / 12.0).sqrt();
        let given = quantities(&format!("n {n1} n {n2} U {u} z {}", print(z, 2, way)));
        let case = Case { statement: 1, quantities: &given, linked: &[], mentions: &[], alpha: 0.05, one_sided: false, among_results: true };
        for tie in u_range::ties(&case) {
            let out = judge(&tie, &given);
            prop_assert!(matches!(out, Outcome::Agrees(_)), "{n1} {n2} {u} {z}: {out:?}");
        }
    }

    #[test]
    fn what_is_solved_for_contains_the_truth(
        t in 0.1..6.0f64, df in 2u32..300, df1 in 1u32..8, part in 0usize..4,
    ) {
        let n = f64::from(df);
        let texts = [
            ("p-from-t", format!("t {t:.2} df {df} p {:.3}", t_p(t, n))),
            ("p-from-f", format!("F {t:.2} df1 {df1} df2 {df} p {:.3}", f_p(t, f64::from(df1), n))),
            ("p-from-chi2", format!("chi2 {t:.2} df {df1} p {:.3}", chi2_p(t, f64::from(df1)))),
            ("d-from-t", format!("t {t:.2} df {df} d {:.2}", 2.0 * t / n.sqrt())),
            ("eta2-from-f", format!("F {t:.2} df1 {df1} df2 {df} eta2p {:.3}", t * f64::from(df1) / (t * f64::from(df1) + n))),
        ];
        for (relation, text) in &texts {
            let given = quantities(text);
            let case = Case { statement: 1, quantities: &given, linked: &[], mentions: &[], alpha: 0.05, one_sided: false, among_results: true };
            let relation = REGISTRY.iter().find(|r| r.name == *relation).expect("it is in the registry");
            for tie in (relation.ties)(&case) {
                let values: Vec<Interval> = tie.parts.iter().map(|i| given[*i].interval).collect();
                if part >= values.len() {
                    continue;
                }
                let found = tie.variants.iter().any(|v| {
                    v.only_open.is_none() && v.law.solve(part, &values).iter().any(|s| s.meets(values[part]))
                });
                prop_assert!(found, "{text}: part {part}");
            }
        }
    }
}

/// Comparator, digits, place and kind of a number.
type Any = (usize, i64, i32, u8);

/// One or two results of a usual form, with any numbers.
fn anything() -> impl Strategy<Value = Vec<(usize, Vec<Any>)>> {
    let number = (0usize..6, -200i64..20_000, -6i32..2, 0u8..9);
    proptest::collection::vec((0usize..FORMS.len(), proptest::collection::vec(number, 8)), 1..3)
}

const FORMS: [&str; 16] = [
    "t df p d",
    "t df p g",
    "n n t df p d",
    "F df1 df2 p eta2p",
    "F df1 df2 p omega2",
    "R2 F df1 df2 p",
    "chi2 df N p V",
    "z p r n",
    "U n n z p",
    "r n p CI_level CI_low CI_high",
    "rho df p",
    "tau n p",
    "b SE t df p CI_low CI_high",
    "OR CI_level CI_low CI_high p",
    "M SD n",
    "count N percent",
];

const MEANINGS: [&str; 10] = [
    "one-sided",
    "adjusted",
    "sphericity",
    "scale",
    "items",
    "whole-answers",
    "bootstrap",
    "partial",
    "bayes",
    "permutation",
];

proptest! {
    #![proptest_config(ProptestConfig::with_cases(100))]

    #[test]
    fn nothing_that_stands_together_breaks_a_law(
        items in anything(), meanings in proptest::collection::vec((0usize..MEANINGS.len(), 0u8..4, 0.0..9.0f64), 0..3),
    ) {
        use crate::numbers::{Comparator, Decimal};
        let comparators = [
            Comparator::Equal, Comparator::Below, Comparator::AtMost, Comparator::Above, Comparator::AtLeast, Comparator::About,
        ];
        let numbers = items.iter().flat_map(|(form, numbers)| FORMS[*form].split(' ').zip(numbers));
        let given: Vec<Quantity> = numbers.map(|(symbol, (comparator, digits, place, kind))| {
            let whole = matches!(symbol, "df" | "df1" | "df2" | "n" | "N" | "count");
            // Mostly what is usual: equal signs, whole sizes, and values that are not negative.
            let digits = if *kind == 8 { *digits } else { digits.abs() };
            let number = Decimal::at(digits, if whole && *kind < 7 { 0 } else { *place });
            let comparator = if *kind < 6 { Comparator::Equal } else { comparators[*comparator] };
            Quantity {
                symbol,
                printed: number.to_string(),
                comparator,
                number,
                interval: comparator.interval(&number, whole),
                span: 0..0,
                borrowed: None,
                doubt: Default::default(),
            }
        }).collect();
        let reaches = [Reach::Sentence, Reach::Paragraph, Reach::Section, Reach::Document];
        let mentions: Vec<Mention> = meanings.iter().map(|(m, reach, number)| {
            mention(MEANINGS[*m], "words", reaches[usize::from(*reach)], &[number.floor()])
        }).collect();
        let statement = case(&given, &mentions);
        for relation in REGISTRY {
            for tie in (relation.ties)(&statement) {
                prop_assert!(tie.open.is_some() == tie.variants.is_empty(), "{}", relation.name);
                let values: Vec<Interval> = tie.parts.iter().map(|i| given[*i].interval).collect();
                for variant in &tie.variants {
                    for target in 0..values.len() {
                        let start = std::time::Instant::now();
                        let set = variant.law.solve(target, &values);
                        prop_assert!(start.elapsed().as_secs() < 10, "{} part {target}: {values:?}", relation.name);
                        for found in set {
                            prop_assert!(found.low <= found.high, "{} part {target}: {found:?} {values:?}", relation.name);
                        }
                    }
                    variant.law.holds(&values);
                }
            }
        }
    }
}
