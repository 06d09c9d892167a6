//! *Forms* are ways of writing results in which a number comes before its name or needs none:
//! `12/34 (35%)`. Each is a short pattern of slots, marks and words, from `grammars/forms.toml`.

use super::grammar::Class;
use super::items::Item;
use super::lists::{List, Phrase};
use super::tokens::{self, Kind};
use super::values::{Company, Value};
use super::{Quantity, Scan};
use crate::numbers::Comparator;

/// No share is larger: `210%` is one, the year behind a `%` is none.
const LARGEST_SHARE: f64 = 1000.0;

#[derive(Debug)]
enum Element {
    /// A number, of this symbol and in this company.
    Slot(&'static str, Company),
    /// One of these marks or words, in lower case.
    Literal { any: Vec<String>, optional: bool },
    /// Up to so many words.
    Words(usize),
    /// One of these marks must follow; it stays outside.
    Ahead(Vec<String>),
}

/// One compiled pattern.
#[derive(Debug)]
pub struct Form {
    elements: Vec<Element>,
    /// The marks and words, as tokens, that may stand behind its first number.
    behind_first: Vec<String>,
    /// Words that it does not name may stand there, too.
    any_words: bool,
}

impl Form {
    /// Compiles a pattern; `name` gives symbols their names, `whole` says which are whole numbers.
    ///
    /// # Errors
    /// A line saying what is wrong with the pattern.
    pub fn compile(
        pattern: &str,
        name: &mut dyn FnMut(&str) -> &'static str,
        whole: &dyn Fn(&str) -> bool,
    ) -> Result<Form, String> {
        let mut elements = Vec::new();
        for part in pattern.split_whitespace() {
            elements.push(
                if let Some(inner) = part.strip_prefix('{').and_then(|p| p.strip_suffix('}')) {
                    let company = match whole(inner) {
                        true => Company::Whole,
                        false => Company::Single,
                    };
                    Element::Slot(name(inner), company)
                } else if let Some(marks) = part.strip_prefix('&').filter(|m| !m.is_empty()) {
                    Element::Ahead(marks.split('|').map(str::to_lowercase).collect())
                } else if let Some(count) = part.strip_prefix("..") {
                    Element::Words(
                        count
                            .parse()
                            .map_err(|_| format!("form {pattern:?}: {part:?} needs a number"))?,
                    )
                } else {
                    let (optional, rest) = match part.strip_prefix('?') {
                        Some(rest) if !rest.is_empty() => (true, rest),
                        _ => (false, part),
                    };
                    Element::Literal {
                        any: rest.split('|').map(str::to_lowercase).collect(),
                        optional,
                    }
                },
            );
        }
        match elements.first() {
            Some(Element::Slot(..)) if elements.len() > 1 => {
                let (behind_first, any_words) = beginnings(&elements[1..]);
                Ok(Form {
                    elements,
                    behind_first,
                    any_words,
                })
            }
            _ => Err(format!("form {pattern:?} must begin with a {{symbol}} and go on")),
        }
    }

    pub fn len(&self) -> usize {
        self.elements.len()
    }

    /// The marks and words, as tokens, that may stand behind its first number; where words may stand that it
    /// does not name, `may_count` looks.
    pub fn behind_first(&self) -> &[String] {
        &self.behind_first
    }

    /// Matches the pattern behind its first number, which is read already: the numbers of its slots and the
    /// token behind.
    fn behind(&self, scan: &Scan, first: &FirstNumber) -> Option<(Vec<(&'static str, Value)>, usize)> {
        let Some(Element::Slot(symbol, company)) = self.elements.first() else {
            return None;
        };
        let value = match company {
            Company::Whole => first.whole.as_ref()?,
            _ => first.single.as_ref()?,
        };
        // Most forms fail here.
        let shown = scan.shown(value.next)?;
        if !self.behind_first.iter().any(|b| b.eq_ignore_ascii_case(shown))
            && !(self.any_words && scan.word(value.next).is_some())
        {
            return None;
        }
        let mut slots = vec![(*symbol, value.clone())];
        let next = self.from(scan, 1, value.next, &mut slots)?;
        Some((slots, next))
    }

    fn from(
        &self,
        scan: &Scan,
        element: usize,
        at: usize,
        slots: &mut Vec<(&'static str, Value)>,
    ) -> Option<usize> {
        let Some(this) = self.elements.get(element) else {
            return Some(at);
        };
        match this {
            Element::Slot(symbol, company) => {
                let value = scan.value(at, *company)?;
                let next = value.next;
                slots.push((symbol, value));
                let done = self.from(scan, element + 1, next, slots);
                if done.is_none() {
                    slots.pop();
                }
                done
            }
            Element::Literal { any, optional } => {
                for literal in any {
                    if let Some(next) = literal_at(scan, literal, at)
                        && let Some(done) = self.from(scan, element + 1, next, slots)
                    {
                        return Some(done);
                    }
                }
                if *optional {
                    self.from(scan, element + 1, at, slots)
                } else {
                    None
                }
            }
            Element::Ahead(any) => any
                .iter()
                .any(|literal| literal_at(scan, literal, at).is_some())
                .then(|| self.from(scan, element + 1, at, slots))
                .flatten(),
            Element::Words(most) => (0..=*most).find_map(|count| {
                let all_words = (at..at + count).all(|i| scan.word(i).is_some());
                if all_words {
                    self.from(scan, element + 1, at + count, slots)
                } else {
                    None
                }
            }),
        }
    }
}

/// The number with which all forms at a token begin, as it reads for counts and for others.
struct FirstNumber {
    whole: Option<Value>,
    single: Option<Value>,
}

impl Scan<'_> {
    /// A form at token `at`, which is a number.
    pub(super) fn form(&self, at: usize) -> Option<(Vec<Item>, usize)> {
        if !self.begins_form(at) {
            return None;
        }
        // Look behind the number before trying each form.
        let last = self.spelled_out(at).map_or(at, |v| v.next - 1);
        let promising = self.grammar.behind_first.has(self.shown(last + 1)?);
        if !promising && !self.may_count(at, last) {
            return None;
        }
        let first = FirstNumber {
            whole: self.value(at, Company::Whole),
            single: self.value(at, Company::Single),
        };
        let (slots, next) = self
            .grammar
            .forms
            .iter()
            .find_map(|form| form.behind(self, &first))?;
        let quantities: Vec<Quantity> = slots
            .iter()
            .map(|(symbol, value)| self.quantity(symbol, Comparator::Equal, value))
            .collect();
        // `2014 (95% CI`: a level is no share.
        if !quantities.iter().all(|q| self.possible(q)) || self.interval_name(next).is_some() {
            return None;
        }
        let class = self
            .grammar
            .named(quantities[0].symbol)
            .map_or(Class::Other, |s| s.class);
        Some((
            vec![Item::new(class, at..next, self.bytes(at, next), quantities)],
            next,
        ))
    }

    /// The number at token `at` is not the end of something else: `1.2-3/4 (5%)`, `12–34 (5%)`.
    fn begins_form(&self, at: usize) -> bool {
        if at == 0 || self.tokens[at].spaced {
            return true;
        }
        match self.mark(at - 1) {
            Some(mark) => !matches!(mark, "-" | "–" | "/" | "." | "·" | "," | ":" | "'"),
            None => self.begins_word(at),
        }
    }

    fn possible(&self, quantity: &Quantity) -> bool {
        if self.grammar.has(quantity.symbol, |s| s.whole) {
            return quantity.number.is_whole() && quantity.number.digits >= 0;
        }
        quantity.symbol != "percent" || quantity.number.value() <= LARGEST_SHARE
    }

    /// Whether the number at tokens `at..=last` may be a count of things that are named behind it:
    /// `266 gardeners (88.1%)`, but not `8 weeks (40%)` or `nine of 302 gardeners (3%)`.
    fn may_count(&self, at: usize, last: usize) -> bool {
        let bracket = (last + 2..last + 5).find(|i| matches!(self.mark(*i), Some("(" | "[")));
        let Some(bracket) = bracket else { return false };
        if !(last + 1..bracket).all(|i| self.word(i).is_some())
            || self.mark(bracket + 2) != Some("%")
            || self.unit_word(last + 1) && !self.is(last + 1, List::CountedUnits)
            || self.counts_something(at)
        {
            return false;
        }
        if at < 2 {
            return true;
        }
        // `in only one bed (17.1%)`: the share is of something else. `of 302 gardeners` is the whole,
        // unless it is `a total of`; so is `the 302 gardeners`.
        self.phrase(at - 2, Phrase::SingleCase).is_none()
            && (!self.is(at - 1, List::OfTheWhole) || self.is(at - 2, List::Totals))
    }

    /// The number that begins at token `from` counts a table, a week or the like.
    pub(super) fn counts_something(&self, from: usize) -> bool {
        let mut i = from;
        while i > 0 && self.mark(i - 1) == Some(".") {
            i -= 1;
        }
        i > 0 && self.is(i - 1, List::Labels)
    }
}

/// The first tokens of the marks and words with which elements may begin, and whether other words may.
fn beginnings(elements: &[Element]) -> (Vec<String>, bool) {
    let mut all = Vec::new();
    let mut any_words = false;
    for element in elements {
        match element {
            Element::Literal { any, optional } => {
                for literal in any {
                    let mut pieces = Vec::new();
                    tokens::tokenize(literal, 0, literal.len(), &mut pieces);
                    all.extend(pieces.first().map(|t| t.text(literal).to_string()));
                }
                if !optional {
                    break;
                }
            }
            Element::Words(_) => any_words = true,
            Element::Slot(..) | Element::Ahead(_) => break,
        }
    }
    (all, any_words)
}

/// The token behind the literal, which may be several tokens in the text (`d.f.`).
fn literal_at(scan: &Scan, literal: &str, at: usize) -> Option<usize> {
    let mut rest = literal;
    let mut i = at;
    while !rest.is_empty() {
        let token = scan.tokens.get(i)?;
        if i > at && token.spaced {
            return None;
        }
        let shown = token.text(scan.text);
        let same = rest.len() >= shown.len()
            && rest.is_char_boundary(shown.len())
            && rest[..shown.len()].eq_ignore_ascii_case(shown)
            && (token.kind != Kind::Word || !rest[shown.len()..].starts_with(char::is_alphabetic));
        if !same {
            return None;
        }
        rest = &rest[shown.len()..];
        i += 1;
    }
    Some(i)
}
