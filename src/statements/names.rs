//! *Names* that are longer than a symbol: a label run together with it (`bIndirect`, `zNBR`), and the
//! words that may stand between a name and its number (`mean age at sowing was 54.3`,
//! `95% CI for the slope, 0.1 to 0.4`).

use super::Scan;
use super::grammar::Class;
use super::spellings::Found;
use super::tokens::Kind;
use super::values::Company;
use crate::numbers::Comparator;

/// Most tokens between a name and the `was` before its number.
const PASSED: usize = 14;

/// Words behind which another thought begins, so that the number no longer belongs to the name.
const TURNS: [&str; 18] = [
    "that", "which", "who", "than", "but", "whereas", "while", "not", "because", "if", "when", "and", "or",
    "versus", "vs", "as", "we", "there",
];

/// Whether a word may be a letter with a label; false for nearly all.
pub(super) fn has_label(word: &str) -> bool {
    let b = word.as_bytes();
    let letter = if b[0].is_ascii() { 1 } else { 2 };
    b.len() >= letter + 3 && b[letter].is_ascii_uppercase()
}

impl Scan<'_> {
    /// A one-letter symbol with a label run together with it, as lowered labels come out of many
    /// formats: `bIndirect = .04`, `zNBR = -1.60`, `pHet = 0.02`.
    pub(super) fn labelled(&self, at: usize) -> Option<Found<'_>> {
        let word = self.word(at).filter(|w| has_label(w))?;
        let letter = word.chars().next()?;
        let label = &word[letter.len_utf8()..];
        if label.len() < 3 || !label.bytes().all(|b| b.is_ascii_alphabetic()) {
            return None;
        }
        let b = label.as_bytes();
        let named = b[0].is_ascii_uppercase() && b[1].is_ascii_lowercase();
        let initials = b.iter().all(u8::is_ascii_uppercase);
        if !named && !initials {
            return None;
        }
        let index = self
            .grammar
            .symbols
            .iter()
            .position(|s| s.labelled.contains(&letter))?;
        // `pCREB`, `MRNA`: proteins and the like.
        let class = self.grammar.symbols[index].class;
        let initials_fit = class == Class::Statistic && letter.is_lowercase();
        if !(named || initials && initials_fit) {
            return None;
        }
        let spelling = self.grammar.spellings.only(&word[..letter.len_utf8()])?;
        self.grammar.comparator(self.text, self.tokens, at + 1, false)?;
        Some(Found {
            spelling,
            next: at + 1,
            rest: None,
        })
    }

    /// `χ₂₁²`: the df lowered before the square. The number of the df, and the token behind.
    pub(super) fn squared_behind(&self, at: usize) -> Option<Found<'_>> {
        let letter = self.shown(at)?;
        let lowered = self.tokens.get(at + 1)?;
        let raised = self.tokens.get(at + 2)?;
        let fits = matches!(letter, "χ" | "Χ" | "X")
            && lowered.kind == Kind::Lowered
            && raised.kind == Kind::Raised
            && raised.text(self.text) == "²"
            && !lowered.spaced
            && !raised.spaced;
        if !fits {
            return None;
        }
        Some(Found {
            spelling: self.grammar.spellings.only("χ")?,
            next: at + 3,
            rest: Some((lowered.start, lowered.end)),
        })
    }

    /// Words between a name and its number, from token `at`, up to the comparator: `(mean) age at
    /// sowing was`. The comparator and the token of the number.
    pub(super) fn passing(&self, class: Class, at: usize) -> Option<(Comparator, usize)> {
        let first = self.word(at)?;
        let relation = matches!(
            first,
            "for" | "of" | "in" | "between" | "among" | "comparing" | "under"
        );
        let never = matches!(class, Class::Size | Class::Df | Class::Estimate)
            || matches!(first, "was" | "were" | "is" | "are")
            || class == Class::P && first != "for"
            // `by means of …`, `medians of both …`
            || class == Class::Descriptive && at > 0 && self.word(at - 1).is_some_and(|w| w.ends_with('s'));
        if never {
            return None;
        }
        let between = first == "between";
        for i in at..at + PASSED {
            let compared = self
                .grammar
                .comparator(self.text, self.tokens, i, true)
                .filter(|_| i > at);
            if let Some((comparator, behind)) = compared {
                let sign = self.mark(i).is_some_and(|m| m != ":");
                let verb = matches!(self.word(i), Some("was" | "were" | "is" | "are"));
                // `was <0.001`, `is ~3.2`: the sign decides.
                let (comparator, behind) = self
                    .grammar
                    .comparator(self.text, self.tokens, behind, false)
                    .unwrap_or((comparator, behind));
                let fits = match class {
                    Class::P => true,
                    Class::Descriptive => !sign || i <= at + 2 && !relation,
                    _ => !sign,
                } && (class == Class::P
                    || matches!(comparator, Comparator::Equal | Comparator::About));
                let given = self.word(i) != Some("of") || self.measured(behind);
                if fits && given && self.a_number(behind, class == Class::Other) {
                    return Some((comparator, behind));
                }
                if sign || verb {
                    return None;
                }
            }
            // `hazard ratio for high against low, 2.2`
            if relation && i > at && self.mark(i) == Some(",") {
                let decimals = self.shown(i + 1)?.contains(['.', '·']);
                return (decimals && self.a_number(i + 1, true)).then_some((Comparator::Equal, i + 1));
            }
            let token = self.tokens.get(i)?;
            match token.kind {
                Kind::Word => {
                    let word = token.text(self.text);
                    let turns = TURNS.contains(&word) && !(between && word == "and");
                    // Another name takes the number: `mean of the difference was 0.5`.
                    let another = class != Class::P
                        && [&self.grammar.spellings, &self.grammar.interval_spellings]
                            .iter()
                            .any(|s| s.at(self.text, self.tokens, i, |s| s.words).is_some());
                    if turns || another {
                        return None;
                    }
                }
                Kind::Number if !token.text(self.text).contains('.') && self.mark(i + 1) != Some(":") => {}
                Kind::Mark if matches!(token.text(self.text), "-" | "–" | "/" | "'") && !token.spaced => {}
                _ => return None,
            }
        }
        None
    }

    /// A number with decimals, or with a unit, a percent sign, a bracket or a spread behind it.
    fn measured(&self, at: usize) -> bool {
        let number = if self.mark(at).is_some() { at + 1 } else { at };
        let decimals = self.shown(number).is_some_and(|n| n.contains(['.', '·']));
        let grouped =
            self.mark(number + 1) == Some(",") && self.shown(number + 2).is_some_and(|n| n.len() == 3);
        let behind = if grouped { number + 3 } else { number + 1 };
        decimals
            || matches!(self.mark(behind), Some("%" | "(" | "[" | "±" | "°"))
            || self.word(behind).is_some_and(|w| self.grammar.units.contains(w))
    }

    /// A number, signed or not, that counts nothing (`5 times greater`).
    fn a_number(&self, at: usize, decimals: bool) -> bool {
        let signed = matches!(self.mark(at), Some("-" | "–" | "−" | "+"));
        let number = if signed { at + 1 } else { at };
        let behind = if self.mark(number + 1) == Some("-") {
            number + 2
        } else {
            number + 1
        };
        self.tokens
            .get(number)
            .is_some_and(|t| t.kind == Kind::Number && (!decimals || t.text(self.text).contains(['.', '·'])))
            && !matches!(self.shown(behind), Some("times" | "fold" | "of" | "out"))
    }

    /// What may stand between the name of an interval and its ends: `CI [confidence interval],`,
    /// `CI for the slope,`. The token behind the words.
    pub(super) fn behind_interval_name(&self, at: usize) -> usize {
        let mut next = at;
        if let Some("(" | "[") = self.mark(next)
            && let Some(close) = (next + 1..next + 6).find(|i| matches!(self.mark(*i), Some(")" | "]")))
            && (next + 1..close).all(|i| self.word(i).is_some() || self.mark(i) == Some("-"))
        {
            next = close + 1;
        }
        if !matches!(self.word(next), Some("for" | "of" | "in")) {
            return next;
        }
        for i in next + 1..next + 7 {
            match self.shown(i) {
                Some("," | ":" | "=" | "[" | "(") if i > next + 1 => return i,
                _ if self.word(i).is_some() || self.mark(i) == Some("-") => {}
                _ => break,
            }
        }
        next
    }

    /// `1, 2, …`: the start of a run of numbers, which is no result. Token `at` is behind the first.
    pub(super) fn runs_on(&self, at: usize) -> bool {
        if self.mark(at) != Some(",") {
            return false;
        }
        for i in at + 1..at + 8 {
            match self.tokens.get(i).map(|t| t.kind) {
                Some(Kind::Number) => {}
                Some(Kind::Mark) => match self.shown(i) {
                    Some("…" | "⋯") => return true,
                    Some(",") => {}
                    Some(".") => return self.mark(i + 1) == Some(".") && self.mark(i + 2) == Some("."),
                    _ => return false,
                },
                _ => return false,
            }
        }
        false
    }

    /// `r = .75, r = 1.75 and r = 3.25 μm`: one unit for a list. Symbol at token `at`, its value up to
    /// token `next`.
    pub(super) fn shares_a_unit(&self, at: usize, mut next: usize) -> bool {
        const LONGEST: usize = 6;
        for _ in 0..LONGEST {
            let from = next;
            next += usize::from(self.mark(next) == Some(","));
            next += usize::from(matches!(self.word(next), Some("and" | "or")));
            if next == from || self.shown(next) != self.shown(at) || self.mark(next + 1) != Some("=") {
                return false;
            }
            let Some(value) = self.value(next + 2, Company::Single) else {
                return false;
            };
            next = value.next;
            if self.unit(next) {
                return true;
            }
        }
        false
    }
}
