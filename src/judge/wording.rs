//! The one plain sentence of a finding.

use super::finding::Verdict;
use crate::manuscript::{Manuscript, nothing_or};
use crate::numbers::Set;
use crate::statements::{Quantity, Statement, in_print, list};

/// Says what was found, why, and on which condition.
pub fn says(
    verdict: Verdict,
    parts: &[&Quantity],
    expected: &Set,
    shown: Option<[f64; 2]>,
    reason: Option<&str>,
    assumes: &[String],
    alpha: f64,
) -> String {
    let Some((target, others)) = parts.split_first() else {
        return reason.unwrap_or_default().to_string();
    };
    let printed = as_printed(target);
    let borrowed = parts.iter().any(|q| q.borrowed.is_some());
    let by_context = parts.iter().any(|q| q.doubt.by_context.is_some());
    let given = others.iter().map(|q| as_printed(q)).collect::<Vec<_>>();
    let range = shown
        .map(|[low, high]| range(low, high, apart(expected), &target.printed))
        .unwrap_or_default();
    let grounds = if assumes.is_empty() {
        String::new()
    } else {
        format!(" ({})", assumes.join("; "))
    };
    match verdict {
        Verdict::Open => match reason {
            Some(reason) => format!("{printed} could not be decided: {reason}."),
            None => format!("{printed} could not be decided."),
        },
        Verdict::Agrees if others.is_empty() => format!("{printed} is possible."),
        Verdict::Agrees => format!(
            "{printed} agrees with {}, from which {} is {range}{grounds}.",
            list(&given),
            in_print(target.symbol)
        ),
        Verdict::Conflicts | Verdict::Reverses => {
            let condition = if borrowed {
                "If the borrowed number belongs here: "
            } else if by_context {
                "If the characters were read rightly: "
            } else {
                ""
            };
            let body = if others.is_empty() {
                if range.is_empty() {
                    format!("{printed} cannot be right.")
                } else {
                    format!(
                        "{printed} cannot be right: {} is {range}.",
                        in_print(target.symbol)
                    )
                }
            } else if range.is_empty() {
                format!(
                    "no {} goes with {}, but {printed} is printed.",
                    in_print(target.symbol),
                    list(&given)
                )
            } else {
                format!(
                    "with {}, {} is {range}, but {printed} is printed.",
                    list(&given),
                    in_print(target.symbol)
                )
            };
            let turn = if verdict == Verdict::Reverses {
                format!(" That lies on the other side of {}.", short(alpha, ".0"))
            } else {
                String::new()
            };
            capitalised(&format!("{condition}{body}{turn}"))
        }
    }
}

/// What the page shows where the file's text layer says something else, in a sentence with a space
/// before it; empty where the two are one.
pub fn on_the_page(manuscript: &Manuscript, statement: &Statement, parts: &[&Quantity]) -> String {
    let ranges = std::iter::once(&statement.range).chain(parts.iter().map(|q| &q.span));
    let mut pairs: Vec<(String, String)> = Vec::new();
    for c in ranges.flat_map(|range| manuscript.corrections_in(range)) {
        let pair = (
            format!("`{}`", &manuscript.text[c.range.clone()]),
            nothing_or(&c.layer),
        );
        if !pairs.contains(&pair) {
            pairs.push(pair);
        }
    }
    if pairs.is_empty() {
        return String::new();
    }
    let (shown, layer): (Vec<String>, Vec<String>) = pairs.into_iter().unzip();
    format!(
        " The page shows {}; its text layer says {}.",
        list(&shown),
        list(&layer)
    )
}

fn as_printed(q: &Quantity) -> String {
    format!("{} {}", in_print(q.symbol), claim(q))
}

/// What is printed about a quantity, with its comparator; words such as n.s. stand for themselves.
pub fn claim(q: &Quantity) -> String {
    if q.printed.contains(|c: char| c.is_ascii_digit()) {
        format!("{} {}", q.comparator.sign(), q.printed)
    } else {
        format!("= {}", q.printed)
    }
}

fn capitalised(text: &str) -> String {
    // Symbols keep their case: a sentence may begin with p or t.
    let mut chars = text.chars();
    match chars.next() {
        Some(first) if text.starts_with("with ") || text.starts_with("no ") => {
            first.to_uppercase().chain(chars).collect()
        }
        Some(first) => std::iter::once(first).chain(chars).collect(),
        None => String::new(),
    }
}

/// Several single values are possible, and the nearest are shown; a size with either sign is one.
fn apart(expected: &Set) -> bool {
    match expected.as_slice() {
        [a, b] => a.low != -b.high,
        more => more.len() > 1,
    }
}

/// A range in words.
fn range(low: f64, high: f64, apart: bool, like: &str) -> String {
    if apart {
        return format!("at nearest {} or {}", short(low, like), short(high, like));
    }
    let (l, h) = (short(low, like), short(high, like));
    match (low.is_finite(), high.is_finite()) {
        (true, true) if l == h => format!("about {l}"),
        (true, true) => format!("between {l} and {h}"),
        (true, false) => format!("at least {l}"),
        (false, true) => format!("at most {h}"),
        (false, false) => "anything".to_string(),
    }
}

/// A computed number with four significant digits, in the manner of the text.
pub fn short(value: f64, like: &str) -> String {
    if value == 0.0 {
        return "0".into();
    }
    let size = value.abs();
    if !(1e-5..1e7).contains(&size) {
        return format!("{value:.2e}");
    }
    let decimals = (3 - size.log10().floor() as i32).clamp(0, 8) as usize;
    let mut text = format!("{value:.decimals$}");
    if text.contains('.') {
        text.truncate(text.trim_end_matches('0').trim_end_matches('.').len());
    }
    let bare = like.trim_start_matches(['-', '+', ' ']);
    if bare.starts_with(['.', '·']) && size < 1.0 {
        text = text.replacen("0.", ".", 1);
    }
    text
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn computed_numbers_are_short_and_in_the_manner_of_the_text() {
        assert_eq!(short(0.035_812, ".036"), ".03581");
        assert_eq!(short(0.035_812, "0.036"), "0.03581");
        assert_eq!(short(12.0, "12"), "12");
        assert_eq!(short(0.000_000_12, ".1"), "1.20e-7");
        assert_eq!(short(-0.5, "-.5"), "-.5");
    }
}
