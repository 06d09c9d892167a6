//! An *assignment* is a symbol and its number: `t(28) = 2.20`. It is read in stages, each a function:
//! the symbol and its arguments (`head`), what ties the number to it (`link`), the number, whether both
//! are what they look like (`doubts.rs`), further numbers (`several.rs`), and the item they make.

use super::grammar::{Class, Symbol};
use super::items::Item;
use super::names::has_label;
use super::several::Values;
use super::spellings::Spelling;
use super::tokens::{Kind, on_the_line};
use super::values::{Company, Value};
use super::{Quantity, Scan};
use crate::numbers::{Comparator, Decimal};

/// A symbol at its place in the text, with what stands right behind it.
pub(super) struct Head<'g> {
    /// The token at which it begins.
    pub at: usize,
    pub symbol: &'g Symbol,
    /// Written out in words.
    pub words: bool,
    pub plural: bool,
    pub arguments: Vec<Quantity>,
    /// The token behind symbol, arguments and remarks.
    pub next: usize,
}

impl Head<'_> {
    /// A letter, with nothing that shows what it stands for.
    pub(super) fn bare_letter(&self) -> bool {
        !self.words && self.arguments.is_empty()
    }

    /// In which company its number stands.
    fn company(&self) -> Company {
        if self.plural {
            Company::List
        } else if self.symbol.whole {
            Company::Whole
        } else {
            Company::Single
        }
    }
}

/// By what a number is tied to its symbol.
#[derive(Clone, Copy, PartialEq, Eq)]
pub(super) enum Tie {
    /// A sign or a word that compares: `p = .03`, `the mean was 3.4`.
    Compared,
    /// What the symbol is of: `mean length 25 cm`.
    Things,
    /// Nothing: `SD 1.1`.
    Nearness,
}

/// What ties a number to its symbol, and where the number is.
pub(super) struct Link {
    pub comparator: Comparator,
    pub tie: Tie,
    pub value_at: usize,
}

impl Scan<'_> {
    /// The assignment that begins at token `at`, and the token behind it.
    pub(super) fn assignment(&self, at: usize) -> Option<(Item, usize)> {
        let head = self.head(at)?;
        let mut link = self.link(&head)?;
        let test = matches!(head.symbol.class, Class::Statistic | Class::Effect);
        if test && link.comparator == Comparator::Equal {
            link.value_at = self.behind_fractions(link.value_at);
        }
        if head.symbol.class == Class::P
            && let Some(behind) = self.not_significant(link.value_at)
        {
            let item = self.not_significant_item(&head, link.value_at, behind)?;
            return Some((item, behind));
        }
        let value = self.value(link.value_at, head.company())?;
        let next = self.behind_percent(&head, value.next)?;
        if self.doubtful(&head, &link, &value, next) {
            return None;
        }
        let values = self.values(&head, link.comparator, value, next)?;
        Some(self.item(head, link.comparator, values))
    }

    /// The symbol at token `at`: `t(28)`, `p (two-tailed)`, `odds ratio [OR]`, `bIndirect`, `χ₂₁²`.
    fn head(&self, at: usize) -> Option<Head<'_>> {
        // `f₂,₄₅`: the lowered digits are two df, and no `f₂`.
        let lowered = |i: usize| self.tight(i) && self.tokens[i].kind == Kind::Lowered;
        let pair = lowered(at + 1) && self.mark(at + 2) == Some(",") && lowered(at + 3);
        let takes_two = |s: &Spelling| !pair || self.grammar.symbols[s.meaning].arguments.len() > 1;
        let found = self
            .squared_behind(at)
            .or_else(|| self.grammar.spellings.at(self.text, self.tokens, at, takes_two))
            .or_else(|| self.labelled(at))
            .filter(|_| self.begins_word(at))?;
        let symbol = &self.grammar.symbols[found.spelling.meaning];
        if self.factor(at, found.next, symbol.class) {
            return None;
        }
        let (arguments, mut next) = self.arguments(&found);
        if arguments.is_empty() && !symbol.arguments.is_empty() && self.mark(next) == Some("_") {
            next += 1;
        }
        Some(Head {
            at,
            symbol,
            words: found.spelling.words,
            plural: found.spelling.plural,
            arguments,
            next: self.aside(next, symbol.name).unwrap_or(next),
        })
    }

    /// What ties the number to its symbol.
    fn link(&self, head: &Head) -> Option<Link> {
        let link = |tie, comparator, value_at| {
            Some(Link {
                comparator,
                tie,
                value_at,
            })
        };
        if let Some(compared) = self.compared(head) {
            let (comparator, value_at) = self.sign_decides(compared);
            return link(Tie::Compared, comparator, value_at);
        }
        let (symbol, next) = (head.symbol, head.next);
        // `(SD ± 3.1)`
        if symbol.spread && self.mark(next) == Some("±") {
            return link(Tie::Nearness, Comparator::Equal, next + 1);
        }
        // `mean length 25 cm`
        if symbol.middle
            && head.words
            && let Some(number) = self.behind_things(next)
        {
            return link(Tie::Things, Comparator::Equal, number);
        }
        // `SD 1.1`, `HR, 1.42`; but `SD118` is a name.
        if head.words || symbol.bare {
            let skipped = matches!(self.mark(next), Some("," | ":"));
            let name = !skipped && self.tight(next) && !self.has_decimals(next);
            return (!name).then(|| link(Tie::Nearness, Comparator::Equal, next + usize::from(skipped)))?;
        }
        // `p n.s.`
        (symbol.class == Class::P && self.not_significant(next).is_some())
            .then(|| link(Tie::Nearness, Comparator::Equal, next))?
    }

    /// The comparator that belongs to a symbol, and the token behind it.
    fn compared(&self, head: &Head) -> Option<(Comparator, usize)> {
        let Head { symbol, next, .. } = *head;
        let class = symbol.class;
        let words = head.words || symbol.bare || !head.arguments.is_empty() || class == Class::P;
        self.comparator(next, words)
            .filter(|(_, behind)| {
                // `mean of the` is no comparator yet.
                let on = self.word(next).is_some() && self.word(*behind).is_some();
                !on || self.not_significant(*behind).is_some()
            })
            .or_else(|| {
                let passes = head.words || matches!(class, Class::P | Class::Ratio);
                passes.then(|| self.passing(class, next))?
            })
            .or_else(|| {
                // `Estimate: 0.81`
                let long = class == Class::Estimate && self.word(head.at).is_some_and(|w| w.len() > 2);
                (long && self.mark(next) == Some(":")).then_some((Comparator::Equal, next + 1))
            })
    }

    /// `p-value was < .001`: the sign behind the word decides.
    pub(super) fn sign_decides(&self, (comparator, behind): (Comparator, usize)) -> (Comparator, usize) {
        let sign = self.comparator(behind, false);
        sign.filter(|_| comparator == Comparator::Equal)
            .unwrap_or((comparator, behind))
    }

    /// `p = n.s.`, the words from token `at` to token `behind`: a p above the level of significance.
    fn not_significant_item(&self, head: &Head, at: usize, behind: usize) -> Option<Item> {
        let quantity = self.above_alpha(head.symbol.name, at, behind)?;
        Some(Item {
            plural: head.plural,
            ..Item::new(
                head.symbol.class,
                head.at..behind,
                self.bytes(head.at, behind),
                vec![quantity],
            )
        })
    }

    /// `F < 1, n.s.`: the words stand for p, at token `at` behind a test.
    pub(super) fn bare_not_significant(&self, at: usize) -> Option<Item> {
        if !matches!(self.mark(at), Some("," | ";")) {
            return None;
        }
        let behind = self.not_significant(at + 1)?;
        // `t(30) = 1.2, n = 32` and `, ns = 3` go on as sizes.
        if self.comparator(behind, false).is_some() {
            return None;
        }
        let quantity = self.above_alpha("p", at + 1, behind)?;
        let bytes = self.bytes(at + 1, behind);
        Some(Item::new(Class::P, at + 1..behind, bytes, vec![quantity]))
    }

    /// A quantity above the level of significance that is printed as the words from `at` to `behind`.
    fn above_alpha(&self, symbol: &'static str, at: usize, behind: usize) -> Option<Quantity> {
        let span = self.bytes(at, behind);
        let number = Decimal::round(self.alpha, -2)
            .filter(|d| d.value() == self.alpha)
            .or_else(|| Decimal::round(self.alpha, -4))?;
        Some(Quantity {
            symbol,
            printed: self.text[span.clone()].to_string(),
            comparator: Comparator::Above,
            number,
            interval: Comparator::Above.interval(&number, false),
            span,
            borrowed: None,
            doubt: Default::default(),
        })
    }

    /// The token behind a number and its percent sign, if its symbol can have one.
    fn behind_percent(&self, head: &Head, next: usize) -> Option<usize> {
        if self.mark(next) != Some("%") {
            return Some(next);
        }
        let never = matches!(
            head.symbol.class,
            Class::Statistic | Class::P | Class::Df | Class::Size | Class::Ratio
        );
        (!never).then_some(next + 1)
    }

    /// Symbol, comparator and numbers as one item.
    fn item(&self, head: Head, comparator: Comparator, values: Values) -> (Item, usize) {
        let symbol = head.symbol;
        let with_arguments = !head.arguments.is_empty();
        let name = self.meant(&head, &values);
        let class = match name == symbol.name {
            true => symbol.class,
            false => self.grammar.named(name).map_or(symbol.class, |s| s.class),
        };
        let mut first = self.quantity(name, comparator, &values.first);
        if let Some(upper) = &values.upper {
            first.span.end = upper.span.end;
            first.printed = on_the_line(&self.text[first.span.clone()]);
            first.interval = first
                .interval
                .hull(self.quantity(name, comparator, upper).interval);
        }
        // `OR 1.80`, `r² = 0.48`; a whole number may be a heart rate or a rate of breaths.
        let sure = symbol.sure.is_some_and(|(low, high)| {
            comparator == Comparator::Equal
                && !first.number.is_whole()
                && (low..=high).contains(&first.number.value())
        });
        // A number without its zero (`τ = .21`) and a test below one (`F < 1`) are written in no other trade.
        let test = matches!(symbol.class, Class::Statistic | Class::Effect);
        let bare_point =
            comparator == Comparator::Equal && first.printed.trim_start_matches(['-', ' ']).starts_with('.');
        let below_one = comparator == Comparator::Below && first.printed == "1" && !symbol.bounded;
        let sure = sure || test && (bare_point || below_one);
        let plural = head.plural || values.respectively && !values.more.is_empty();
        let mut more: Vec<Quantity> = values
            .more
            .iter()
            .map(|value| self.quantity(name, comparator, value))
            .collect();
        let mut quantities = vec![first];
        quantities.extend(head.arguments);
        // `df = 2, 45`
        if let Some([one, two]) = symbol.pair
            && more.len() == 1
        {
            quantities[0].symbol = one;
            quantities.extend(more.drain(..).map(|second| Quantity {
                symbol: two,
                ..second
            }));
        }
        let labelled = has_label(&self.text[self.bytes(head.at, head.at + 1)]);
        let item = Item {
            class,
            tokens: head.at..values.next,
            bytes: self.bytes(head.at, values.next),
            quantities,
            more_values: more,
            plural,
            alone: symbol.alone || sure,
            plain: head.words || with_arguments && symbol.argued.is_none() || labelled,
        };
        (item, values.next)
    }

    /// The symbol that arguments or values show to be meant.
    fn meant(&self, head: &Head, values: &Values) -> &'static str {
        let symbol = head.symbol;
        // `f(2, 45)` is an F.
        if let Some(argued) = symbol.argued.filter(|_| !head.arguments.is_empty()) {
            return argued;
        }
        // `rs = .34–.51` are several r.
        if let Some(several) = symbol
            .several
            .filter(|_| values.upper.is_some() || !values.more.is_empty())
        {
            return several;
        }
        self.renamed(symbol, &values.first, head.words)
    }

    /// The symbol that the size of the value or the block's words show to be meant: `α = .05`, `V = 310`.
    fn renamed(&self, symbol: &Symbol, value: &Value, words: bool) -> &'static str {
        let size = value.number.value().abs();
        match (symbol.above, symbol.below) {
            (Some((limit, other)), _) if size > limit => other,
            (_, Some((limit, other))) if size <= limit && !words => other,
            _ => match symbol.beside {
                Some([here, not_here, other]) if !words && self.near(here) && !self.near(not_here) => other,
                _ => symbol.name,
            },
        }
    }
}
