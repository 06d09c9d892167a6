//! What all laws about a *p* share: which variants the words around a result allow.

use super::laws::{Adjusted, Anything, Multiplied, Side};
use super::reading::Test;
use super::{Case, Law, Mention, Reach, Variant};
use crate::numbers::{Comparator, Decimal};

/// Words that announce a p that no formula gives.
const RESAMPLED: [&str; 3] = ["permutation", "bootstrap", "bayes"];

/// Where a mention stands, for the reader of a finding.
pub(super) fn quoted(mention: &Mention) -> String {
    match mention.reach {
        Reach::Sentence => format!("“{}”", mention.words),
        _ => format!("“{}” in paragraph {}", mention.words, mention.paragraph),
    }
}

/// The variants of a law about p, in the order in which they are tried. `sided` says whether the
/// test has a direction; then `law` is also asked for the two one-sided forms.
pub(super) fn variants(
    case: &Case,
    test: &Test,
    p: usize,
    sided: bool,
    law: impl Fn(Side) -> Box<dyn Law>,
) -> Vec<Variant> {
    let plain = if sided {
        vec!["two-sided".to_string()]
    } else {
        Vec::new()
    };
    let mut variants = vec![make(plain.clone(), law(Side::Both))];
    let one_sided = case.mention("one-sided", Reach::Document);
    let mut sides = vec![Side::Both];
    if sided && (case.one_sided || one_sided.is_some()) {
        let near = case.one_sided || one_sided.is_some_and(|m| m.reach == Reach::Sentence);
        let said = match one_sided {
            Some(mention) if !case.one_sided => quoted(mention),
            _ => "as asked for".to_string(),
        };
        for side in [Side::Upper, Side::Lower] {
            let variant = make(vec![format!("one-sided ({said})")], law(side));
            variants.push(if near {
                variant
            } else {
                variant.left_open(format!(
                    "it fits if the test is one-sided; the manuscript says {said}"
                ))
            });
        }
        if near {
            sides.extend([Side::Upper, Side::Lower]);
        }
    }
    // Methods for pairs do not adjust a test of several groups at once, which has two df or more.
    let omnibus = matches!(test.symbol, "F" | "chi2" | "H" | "G2")
        && test
            .df
            .or(test.df1)
            .is_some_and(|df| case.quantities[df].interval.low > 1.5);
    for meaning in ["bonferroni", "adjusted", "adjusted-pairs"] {
        if omnibus && meaning == "adjusted-pairs" {
            continue;
        }
        let Some(mention) = case.mention(meaning, Reach::Document) else {
            continue;
        };
        let said = quoted(mention);
        for side in &sides {
            let mut assumes = plain.clone();
            assumes.push(format!("adjusted for multiple tests ({said})"));
            let adjusted: Box<dyn Law> = match meaning {
                "bonferroni" => Box::new(Multiplied(law(*side))),
                _ => Box::new(Adjusted(law(*side))),
            };
            let variant = make(assumes, adjusted);
            variants.push(if mention.reach <= Reach::Paragraph {
                variant
            } else {
                variant.left_open(format!(
                    "it fits if p is adjusted for multiple tests; the manuscript says {said}"
                ))
            });
        }
    }
    for meaning in RESAMPLED {
        if let Some(mention) = case.mention(meaning, Reach::Sentence) {
            let reason = format!(
                "p may come from another method than the formula: the sentence says {}",
                quoted(mention)
            );
            variants.push(make(Vec::new(), Box::new(Anything)).left_open(reason));
        }
    }
    if case.between(test.at, p, &["OR", "RR", "HR", "IRR"]) {
        let reason = "p may belong to the ratio that stands before it instead of the test";
        variants.push(make(Vec::new(), Box::new(Anything)).left_open(reason));
    }
    variants
}

pub(super) fn make(assumes: Vec<String>, law: Box<dyn Law>) -> Variant {
    Variant {
        assumes,
        only_open: None,
        law,
    }
}

/// Remarks about the way p is printed.
pub(super) fn remarks(case: &Case, p: usize) -> Vec<String> {
    let quantity = &case.quantities[p];
    if quantity.comparator == Comparator::Equal && quantity.number.digits == 0 && !quantity.number.is_whole()
    {
        let below = Decimal::at(5, quantity.number.place - 1).print_like(&quantity.printed);
        return vec![format!("p = {} is read as p < {below}", quantity.printed)];
    }
    Vec::new()
}
