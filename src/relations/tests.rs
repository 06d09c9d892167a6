//! What the relations have in common, tried on cases built from symbols and printed numbers.

use super::*;
use crate::numbers::{Comparator, Decimal};

/// A quantity from its symbol and the number as printed, with a comparator in front if it is not `=`.
pub(super) fn quantity(symbol: &'static str, text: &str) -> Quantity {
    let (comparator, digits) = match text.chars().next() {
        Some('<') => (Comparator::Below, &text[1..]),
        Some('>') => (Comparator::Above, &text[1..]),
        _ => (Comparator::Equal, text),
    };
    let negative = digits.starts_with('-');
    let number = Decimal::read(digits.trim_start_matches('-'), negative, 0).expect("the tests give numbers");
    let whole = matches!(symbol, "df" | "df1" | "df2" | "n" | "N" | "count" | "CI_level");
    Quantity {
        symbol,
        printed: digits.trim_start_matches('-').to_string(),
        comparator,
        number,
        interval: comparator.interval(&number, whole),
        span: 0..0,
        borrowed: None,
        doubt: Default::default(),
    }
}

/// Quantities written as `t 2.20 df 28 p .036`; a `^` before a symbol marks it as borrowed.
pub(super) fn quantities(text: &str) -> Vec<Quantity> {
    let words: Vec<&str> = text.split_whitespace().collect();
    words
        .chunks(2)
        .map(|pair| {
            let symbol: &'static str = pair[0].trim_start_matches('^').to_string().leak();
            let mut quantity = quantity(symbol, pair[1]);
            if pair[0].starts_with('^') {
                quantity.borrowed = Some(format!("{symbol} = {} taken from paragraph 3", pair[1]));
            }
            quantity
        })
        .collect()
}

pub(super) fn mention(meaning: &'static str, words: &str, reach: Reach, numbers: &[f64]) -> Mention {
    Mention {
        meaning,
        words: words.into(),
        numbers: numbers.to_vec(),
        reach,
        paragraph: 7,
    }
}

/// A statement as the judge hands it to a relation.
pub(super) fn case<'a>(quantities: &'a [Quantity], mentions: &'a [Mention]) -> Case<'a> {
    Case {
        statement: 1,
        quantities,
        linked: &[],
        mentions,
        alpha: 0.05,
        one_sided: false,
        among_results: true,
    }
}

fn named(relation: &str) -> &'static Relation {
    REGISTRY
        .iter()
        .find(|r| r.name == relation)
        .expect("it is in the registry")
}

/// How a tie comes out.
#[derive(Clone, Debug, PartialEq)]
pub(super) enum Outcome {
    /// With the assumptions of the variant that fits.
    Agrees(Vec<String>),
    Conflicts,
    Open(String),
}

/// Judges one tie in the way that the judge does.
pub(super) fn judge(tie: &Tie, quantities: &[Quantity]) -> Outcome {
    if let Some(reason) = &tie.open {
        return Outcome::Open(reason.clone());
    }
    let values: Vec<Interval> = tie.parts.iter().map(|i| quantities[*i].interval).collect();
    for variant in &tie.variants {
        if variant.law.holds(&values) {
            return match &variant.only_open {
                Some(reason) => Outcome::Open(reason.clone()),
                None => Outcome::Agrees(variant.assumes.clone()),
            };
        }
    }
    Outcome::Conflicts
}

/// Every tie of one relation in a statement, with its outcome.
pub(super) fn outcomes(relation: &str, text: &str, mentions: &[Mention]) -> Vec<Outcome> {
    let quantities = quantities(text);
    let case = case(&quantities, mentions);
    (named(relation).ties)(&case)
        .iter()
        .map(|tie| judge(tie, &quantities))
        .collect()
}

/// The outcome where there is exactly one tie.
pub(super) fn outcome(relation: &str, text: &str, mentions: &[Mention]) -> Outcome {
    let mut all = outcomes(relation, text, mentions);
    assert_eq!(all.len(), 1, "{relation} has one tie in {text}: {all:?}");
    all.remove(0)
}

pub(super) fn agrees(relation: &str, text: &str) {
    let outcome = outcome(relation, text, &[]);
    assert!(
        matches!(outcome, Outcome::Agrees(_)),
        "{relation}: {text}: {outcome:?}"
    );
}

pub(super) fn conflicts(relation: &str, text: &str) {
    assert_eq!(
        outcome(relation, text, &[]),
        Outcome::Conflicts,
        "{relation}: {text}"
    );
}

pub(super) fn open(relation: &str, text: &str) {
    let outcome = outcome(relation, text, &[]);
    assert!(
        matches!(outcome, Outcome::Open(_)),
        "{relation}: {text}: {outcome:?}"
    );
}

/// In every variant of every tie, each part that is solved for contains a value that was known to
/// satisfy the law, and values found there do satisfy it.
pub(super) fn solutions_hold(relation: &str, text: &str) {
    let quantities = quantities(text);
    let case = case(&quantities, &[]);
    for tie in (named(relation).ties)(&case) {
        let values: Vec<Interval> = tie.parts.iter().map(|i| quantities[*i].interval).collect();
        for variant in &tie.variants {
            let held = variant.law.holds(&values);
            for target in 0..values.len() {
                let set = variant.law.solve(target, &values);
                let meets = set.iter().any(|s| s.meets(values[target]));
                assert_eq!(
                    meets, held,
                    "{text}: part {target} of {:?}: {set:?}",
                    variant.assumes
                );
                for found in set {
                    for end in [found.low, found.high] {
                        if end.is_finite() {
                            let mut changed = values.clone();
                            changed[target] = Interval::point(end).widen(1e-9);
                            assert!(
                                variant.law.holds(&changed),
                                "{text}: part {target} = {end} was found"
                            );
                        }
                    }
                }
            }
        }
    }
}

#[test]
fn every_relation_is_documented_in_a_file_of_its_name() {
    for (i, relation) in REGISTRY.iter().enumerate() {
        assert!(
            REGISTRY[..i].iter().all(|r| r.name != relation.name),
            "{} is listed once",
            relation.name
        );
        let file = format!(
            "{}/src/relations/{}.rs",
            env!("CARGO_MANIFEST_DIR"),
            relation.name.replace('-', "_")
        );
        let source = std::fs::read_to_string(&file).unwrap_or_else(|e| panic!("{file}: {e}"));
        assert_eq!(source, relation.source, "{file}");
        let text = relation.documentation();
        assert!(
            relation.summary().ends_with('.'),
            "{}: one sentence first",
            relation.name
        );
        for heading in ["Formula:", "Assumes:", "Caution:", "Source:", "Example:"] {
            assert!(
                text.lines().any(|l| l.starts_with(heading)),
                "{}: {heading}",
                relation.name
            );
        }
    }
}

#[test]
fn p_goes_with_the_nearest_test_and_in_order() {
    // Two tests and two p: in order.
    assert!(
        outcomes("p-from-t", "t 2.20 df 28 t 0.31 df 28 p .036 p .759", &[])
            .iter()
            .all(|o| matches!(o, Outcome::Agrees(_)))
    );
    // The p of a test with an effect size r beside it is that of the test.
    agrees("p-from-t", "t 2.20 df 28 r .38 p .036");
    assert!(outcomes("p-from-r", "t 2.20 df 28 r .38 p .036", &[]).is_empty());
    // p first.
    agrees("p-from-t", "p .036 t 2.20 df 28");
    agrees("p-from-t", "t 2.20 p .036 df 28");
    open("p-from-t", "t 4.72 p <.001");
    open("p-from-f", "F 4.72 df1 3 p <.001");
    agrees("p-from-t", "t 2.20 df 28 p .036 p .5");
}

#[test]
fn worked_examples_of_p() {
    // Values from SciPy 1.17: 2*t.sf(2.2, 28) = 0.036225…, f.sf(8.31, 1, 52) = 0.005720…,
    // chi2.sf(6.83, 1) = 0.008963…, 2*norm.sf(2.31) = 0.020888…
    agrees("p-from-t", "t 2.20 df 28 p .036");
    agrees("p-from-t", "t -2.20 df 28 p .036");
    conflicts("p-from-t", "t 2.20 df 28 p .063");
    agrees("p-from-f", "F 8.31 df1 1 df2 52 p .006");
    conflicts("p-from-f", "F 8.31 df1 1 df2 52 p .06");
    agrees("p-from-chi2", "chi2 6.83 df 1 N 90 p .009");
    conflicts("p-from-chi2", "chi2 6.83 df 1 N 90 p .09");
    agrees("p-from-z", "z -2.31 p .021");
    conflicts("p-from-z", "z -2.31 p .012");
    agrees("p-from-r", "r .29 df 46 p .046");
    agrees("p-from-r", "r .29 N 48 p .046");
    agrees("p-from-r", "r .29 p .046 ^n 48");
    agrees("p-from-r", "r .29 p .046 N 48");
    conflicts("p-from-r", "r .29 df 46 p .46");
    open("p-from-r", "r .29 p .046");
    agrees("p-from-tau", "tau .21 n 50 p .031");
    open("p-from-tau", "tau .21 n 50 p .31");
}

#[test]
fn comparators_and_zeros() {
    agrees("p-from-t", "t >2.1 df 38 p <.05");
    conflicts("p-from-t", "t >2.1 df 38 p >.05");
    agrees("p-from-f", "F <1 df1 1 df2 45 p >.05");
    agrees("p-from-t", "t 5.20 df 28 p .000");
    conflicts("p-from-t", "t 2.20 df 28 p .000");
    let given = quantities("t 5.20 df 28 p .000");
    let case = case(&given, &[]);
    let tie = &(REGISTRY[0].ties)(&case)[0];
    assert_eq!(tie.remarks, ["p = .000 is read as p < .0005"]);
}

#[test]
fn corrections_excuse_only_what_they_can_make_of_p() {
    // t(28) = 2.20 has p = .0362 (SciPy 1.17), so .072 is twice and .109 three times as much; no
    // whole multiple, and no 1 − (1 − p)^k, prints as .090.
    let bonferroni = |reach| [mention("bonferroni", "Bonferroni", reach, &[])];
    for (p, fits) in [
        (".072", true),
        (".109", true),
        (".105", true),
        (".090", false),
        (".012", false),
    ] {
        let text = format!("t 2.20 df 28 p {p}");
        let agrees = matches!(
            outcome("p-from-t", &text, &bonferroni(Reach::Paragraph)),
            Outcome::Agrees(_)
        );
        assert_eq!(agrees, fits, "{text}");
        let far = outcome("p-from-t", &text, &bonferroni(Reach::Document));
        assert_eq!(matches!(far, Outcome::Open(_)), fits, "{text}");
    }
    // Tukey's method is for pairs: it raises the p of t and of F with one df, not of F with more.
    let pairs = [mention("adjusted-pairs", "Tukey", Reach::Document, &[])];
    for (text, fits) in [
        ("t 2.20 df 28 p .090", true),
        ("F 4.84 df1 1 df2 28 p .090", true),
        ("F 4.84 df1 2 df2 28 p .090", false),
    ] {
        let relation = if text.starts_with('t') {
            "p-from-t"
        } else {
            "p-from-f"
        };
        assert_eq!(
            matches!(outcome(relation, text, &pairs), Outcome::Open(_)),
            fits,
            "{text}"
        );
    }
}

#[test]
fn words_around_a_result_open_other_ways() {
    let one = |reach| [mention("one-sided", "one-tailed", reach, &[])];
    let half = "t 2.20 df 28 p .018";
    assert!(matches!(
        outcome("p-from-t", half, &one(Reach::Sentence)),
        Outcome::Agrees(_)
    ));
    assert!(matches!(
        outcome("p-from-t", half, &one(Reach::Section)),
        Outcome::Open(_)
    ));
    assert!(matches!(
        outcome("p-from-t", "t 2.20 df 28 p .982", &one(Reach::Sentence)),
        Outcome::Agrees(_)
    ));
    conflicts("p-from-t", half);
    let adjusted = |reach| [mention("adjusted", "Bonferroni", reach, &[])];
    let more = "t 2.20 df 28 p .108";
    assert!(matches!(
        outcome("p-from-t", more, &adjusted(Reach::Paragraph)),
        Outcome::Agrees(_)
    ));
    assert!(matches!(
        outcome("p-from-t", more, &adjusted(Reach::Document)),
        Outcome::Open(_)
    ));
    assert_eq!(
        outcome("p-from-t", "t 2.20 df 28 p .012", &adjusted(Reach::Sentence)),
        Outcome::Conflicts
    );
    let sphericity = [mention("sphericity", "Greenhouse–Geisser", Reach::Document, &[])];
    // F(3, 60) = 3.00 has p = .037; with ε = .6 it is F(1.8, 36) with p = .067 (SciPy 1.17).
    conflicts("p-from-f", "F 3.00 df1 3 df2 60 p .067");
    assert!(matches!(
        outcome("p-from-f", "F 3.00 df1 3 df2 60 p .067", &sphericity),
        Outcome::Agrees(_)
    ));
    assert_eq!(
        outcome("p-from-f", "F 3.00 df1 3 df2 60 p .15", &sphericity),
        Outcome::Conflicts
    );
    let one = [mention("one-sided", "one-tailed", Reach::Sentence, &[])];
    for (text, fits) in [
        ("F 4.84 df1 1 df2 28 p .018", true),
        ("F 4.84 df1 1 df2 28 p .982", true),
        ("F 4.84 df1 1 df2 28 p .063", false),
        ("F 4.84 df1 2 df2 28 p .008", false),
    ] {
        let out = outcome("p-from-f", text, &one);
        assert_eq!(matches!(out, Outcome::Agrees(_)), fits, "{text}: {out:?}");
    }

    let welch = |reach| [mention("welch", "Welch's", reach, &[])];
    let rounded = "t -1.409 df 6 p .2095";
    assert!(matches!(
        outcome("p-from-t", rounded, &welch(Reach::Sentence)),
        Outcome::Agrees(_)
    ));
    assert!(matches!(
        outcome("p-from-t", rounded, &welch(Reach::Document)),
        Outcome::Open(_)
    ));
    assert_eq!(outcome("p-from-t", rounded, &[]), Outcome::Conflicts);
    assert_eq!(
        outcome("p-from-t", "t -1.409 df 6 p .23", &welch(Reach::Sentence)),
        Outcome::Conflicts
    );

    let permuted = [mention("permutation", "permutation", Reach::Sentence, &[])];
    assert!(matches!(outcome("p-from-t", more, &permuted), Outcome::Open(_)));
}

#[test]
fn every_part_can_be_solved_for() {
    for text in [
        "t 2.20 df 28 p .036",
        "t -2.20 df 28 p .063",
        "t 2.20 df 28.4 p <.05",
        "t 0.31 df 28.43 p .70",
    ] {
        solutions_hold("p-from-t", text);
    }
    for text in [
        "F 8.31 df1 1 df2 52 p .006",
        "F 2.31 df1 3 df2 96 p .06",
        "F 1.1 df1 1.8 df2 36.2 p .34",
    ] {
        solutions_hold("p-from-f", text);
    }
    for text in [
        "chi2 6.83 df 1 p .009",
        "chi2 26.83 df 12 p .09",
        "chi2 6.83 df 4 p >.05",
    ] {
        solutions_hold("p-from-chi2", text);
    }
    solutions_hold("p-from-z", "z -2.31 p .021");
    for text in ["r .29 df 46 p .046", "r .29 N 48 p .46", "rho -.29 n 8 p .46"] {
        solutions_hold("p-from-r", text);
    }
    solutions_hold("p-from-tau", "tau .21 n 50 p .031");
}
