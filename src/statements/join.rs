//! *Joining*: which items belong together to one statement. Decided by brackets, by what stands
//! between the items, and by what a result may hold: one test, one p, one interval per estimate.

use super::Scan;
use super::grammar::{Around, Class};
use super::items::Item;
use super::lists::List;
use super::tokens::Kind;
use std::ops::Range;

/// Items that are reported together, in the order of the text.
#[derive(Clone, Debug, Default)]
pub struct Draft {
    pub items: Vec<Item>,
}

/// What stands between two items.
#[derive(Default)]
struct Gap {
    words: usize,
    bytes: usize,
    /// A number, a full stop, or a bracket that closes before further words: nothing joins across.
    broken: bool,
    /// Words such as `versus` or `than`, behind which another result begins.
    turns: bool,
    /// It ends in a word and a colon, which name what comes: `; weeding: α = .87`.
    labels: bool,
    /// `; and`: a list goes on.
    lists: bool,
}

impl Gap {
    /// Nothing but punctuation and up to so many words.
    fn within(&self, words: usize) -> bool {
        !self.broken && self.words <= words && self.bytes <= 24 + 12 * words
    }
}

impl Draft {
    /// The equation of a line beside its test, `F(1, 3) = 81, p = .003; y = -15.7 + 0.3x`, is taken out;
    /// coordinates, which are no results in any company, stay and show what the letters mean.
    pub(super) fn without_equation(&mut self) {
        let tested = self
            .items
            .iter()
            .any(|i| i.class == Class::P && !i.quantities.is_empty());
        let bait = self.items.iter().filter(|i| i.class == Class::Bait).count();
        if bait == 1 && tested {
            self.items.retain(|i| i.class != Class::Bait);
        }
    }

    fn has(&self, symbol: &str) -> bool {
        self.symbols().any(|s| s == symbol)
    }

    fn symbols(&self) -> impl Iterator<Item = &'static str> {
        self.items
            .iter()
            .flat_map(|i| i.quantities.iter().map(|q| q.symbol))
    }

    fn has_class(&self, class: Class) -> bool {
        self.items.iter().any(|i| i.class == class)
    }

    fn has_test(&self) -> bool {
        self.items.iter().any(|i| {
            matches!(
                i.class,
                Class::Statistic | Class::P | Class::Estimate | Class::Effect | Class::Ratio
            )
        })
    }

    fn only(&self, class: Class) -> bool {
        self.items.iter().all(|i| i.class == class)
    }

    /// Takes off what stands behind the first item with a quantity of this symbol, from the next estimate on.
    fn split_behind(&mut self, symbol: &str) -> Vec<Item> {
        use Class::*;
        let first = self
            .items
            .iter()
            .position(|i| i.quantities.iter().any(|q| q.symbol == symbol))
            .unwrap_or(0);
        let estimate = |i: &usize| {
            matches!(
                self.items[*i].class,
                Statistic | Estimate | Effect | Ratio | Descriptive
            )
        };
        let split = (first + 1..self.items.len()).find(estimate);
        split.map(|at| self.items.split_off(at)).unwrap_or_default()
    }

    /// From the first byte of its items to the last.
    pub fn bytes(&self) -> Range<usize> {
        let start = self.items.iter().map(|i| i.bytes.start).min().unwrap_or(0);
        let end = self.items.iter().map(|i| i.bytes.end).max().unwrap_or(start);
        start..end
    }

    fn token_end(&self) -> usize {
        self.items.last().map_or(0, |i| i.tokens.end)
    }
}

impl Scan<'_> {
    /// Groups the items of a block into statements.
    pub fn join(&self, items: Vec<Item>) -> Vec<Draft> {
        let mut drafts: Vec<Draft> = Vec::new();
        for item in items {
            for item in self.one_by_one(item) {
                self.place(item, &mut drafts);
            }
        }
        drafts
    }

    /// `ts(38) = 2.1 and 3.4` are two items; a list of p stays one until its tests are known.
    fn one_by_one(&self, mut item: Item) -> Vec<Item> {
        let dealt_out = matches!(item.class, Class::Statistic | Class::Size)
            || self.grammar.has(item.symbol(), |s| s.dealt);
        if item.more_values.is_empty() || !dealt_out {
            return vec![item];
        }
        let more = std::mem::take(&mut item.more_values);
        let mut all = vec![item.clone()];
        for value in more {
            let mut next = item.clone();
            next.quantities[0] = value;
            all.push(next);
        }
        all
    }

    fn place(&self, item: Item, drafts: &mut Vec<Draft>) {
        if item.plural && self.shared(&item, drafts) {
            return;
        }
        if item.class == Class::Interval && self.two_means(drafts) {
            drafts.push(Draft { items: vec![item] });
            return;
        }
        let Some(last) = drafts.last_mut() else {
            drafts.push(Draft { items: vec![item] });
            return;
        };
        let gap = self.gap(last.token_end(), item.tokens.start);
        // A second p, or a second interval, takes with it the estimate it belongs to.
        let repeated = match item.class {
            Class::P | Class::Interval => last.has(item_key(&item)),
            _ => false,
        };
        if repeated && gap.within(5) {
            let rest = last.split_behind(item_key(&item));
            drafts.push(Draft {
                items: rest.into_iter().chain([item]).collect(),
            });
            return;
        }
        let joins = !gap.broken && !repeated && self.may_join(last, &item, &gap);
        match joins {
            true => last.items.push(item),
            false => drafts.push(Draft { items: vec![item] }),
        }
    }

    /// The last two drafts are means that are compared: `M = 3.2, SD = 1.1 vs. M = 2.9, SD = 1.0`. An
    /// interval behind them is that of their difference.
    fn two_means(&self, drafts: &[Draft]) -> bool {
        let [.., first, second] = drafts else { return false };
        let means = |d: &Draft| d.only(Class::Descriptive) && d.has("M");
        means(first) && means(second) && {
            let between = self.gap(first.token_end(), second.items[0].tokens.start);
            between.turns && between.words <= 2
        }
    }

    /// Whether an item belongs to the draft before it.
    fn may_join(&self, draft: &Draft, item: &Item, gap: &Gap) -> bool {
        if gap.turns {
            return false;
        }
        let symbol = item.symbol();
        let again = draft.has(symbol);
        match item.class {
            Class::P => {
                let counts_only = draft.only(Class::Other) || draft.only(Class::Size);
                gap.within(if counts_only { 1 } else { 6 })
            }
            Class::Df => !again && draft.has_class(Class::Statistic) && !draft.has("df1") && gap.within(6),
            Class::Size => self.size_joins(draft, item, gap),
            Class::Interval => self.interval_joins(draft, item, gap),
            Class::Bait => gap.within(1),
            Class::Other if symbol == "percent" && item.quantities.len() == 1 => {
                draft.has_class(Class::Size) && gap.within(0)
            }
            Class::Other if matches!(symbol, "count" | "percent") => false,
            _ if again => false,
            Class::Other => gap.within(1) && !draft.has("count") && !gap.labels,
            Class::Effect => (draft.has_test() && gap.within(6) || gap.within(0)) && !draft.only(Class::Size),
            Class::Statistic => self.statistic_joins(draft, symbol, gap),
            Class::Estimate | Class::Ratio => self.estimate_joins(draft, item, gap),
            // A mean or median begins a statement, behind nothing but its n.
            Class::Descriptive if self.middle(symbol) => draft.only(Class::Size) && gap.within(0),
            Class::Descriptive => {
                gap.within(if draft.has_class(Class::P) { 0 } else { 3 })
                    && !draft.only(Class::Size)
                    && !draft.only(Class::Other)
            }
        }
    }

    fn size_joins(&self, draft: &Draft, item: &Item, gap: &Gap) -> bool {
        let symbol = item.symbol();
        // The n of a second group.
        let second = symbol == "n" && !draft.only(Class::Size) && !draft.has_class(Class::P);
        gap.within(2)
            && !gap.lists
            && item.quantities.len() == 1
            && !draft.only(Class::Other)
            && (!draft.has(symbol) || second)
    }

    fn interval_joins(&self, draft: &Draft, item: &Item, gap: &Gap) -> bool {
        let descriptive = draft.has_class(Class::Descriptive);
        if self.grammar.around(item.symbol()) != Some(Around::Estimate) {
            return descriptive && gap.within(2);
        }
        // `0.944 slugs per bed per square metre and year (95% CI …`
        let lone = draft.items.len() == 1 && self.mark(item.tokens.start.wrapping_sub(1)) == Some("(");
        (draft.has_test() || descriptive || draft.has_class(Class::Other))
            && gap.within(if lone { 8 } else { 5 })
    }

    fn statistic_joins(&self, draft: &Draft, symbol: &str, gap: &Gap) -> bool {
        if draft.has_class(Class::P) {
            // `p = .03, r = .31`
            self.grammar.has(symbol, |s| s.behind_p) && gap.within(0)
        } else if draft.has_class(Class::Statistic) {
            // `U = 310, z = 2.1`
            gap.within(2) && draft.symbols().any(|other| self.go_together(symbol, other))
        } else if draft.symbols().any(|other| self.middle(other)) {
            false
        } else if draft.only(Class::Other) {
            gap.within(0) && !draft.has("count")
        } else {
            gap.within(3)
        }
    }

    fn estimate_joins(&self, draft: &Draft, item: &Item, gap: &Gap) -> bool {
        let estimate = draft.has_class(Class::Estimate);
        if draft.has_class(Class::P) || draft.has_class(Class::Statistic) {
            gap.within(0) && !(item.class == Class::Estimate && draft.has_class(Class::P) && estimate)
        } else if estimate && self.grammar.has(item.symbol(), |s| s.second) {
            // `b = 0.2, β = .31`
            gap.within(1)
        } else {
            draft.only(Class::Size) && gap.within(0)
        }
    }

    fn middle(&self, symbol: &str) -> bool {
        self.grammar.has(symbol, |s| s.middle)
    }

    /// Two statistics of the same test.
    fn go_together(&self, one: &str, other: &str) -> bool {
        self.grammar.has(one, |s| s.with.contains(&other))
            || self.grammar.has(other, |s| s.with.contains(&one))
    }

    /// A plural item gives its values to the statements before it that lack one:
    /// `t(28) = 2.20 and t(28) = 0.31, ps = .036 and .759`. False if it finds none.
    fn shared(&self, item: &Item, drafts: &mut [Draft]) -> bool {
        let key = item.symbol();
        let wanted = |d: &Draft| match item.class {
            Class::P => {
                d.has_class(Class::Statistic) || d.has_class(Class::Estimate) || d.has_class(Class::Effect)
            }
            Class::Descriptive => d.symbols().any(|s| self.middle(s)),
            _ => false,
        };
        let mut open: Vec<usize> = Vec::new();
        let mut start = item.tokens.start;
        for (index, draft) in drafts.iter().enumerate().rev() {
            let gap = self.gap(draft.token_end(), start);
            if draft.has(key) || !wanted(draft) || gap.broken || gap.words > 8 {
                break;
            }
            open.push(index);
            start = draft.items[0].tokens.start;
        }
        open.reverse();
        let values: Vec<_> = [item.quantities[0].clone()]
            .into_iter()
            .chain(item.more_values.iter().cloned())
            .collect();
        if open.is_empty() || values.len() > open.len() || values.len() > 1 && values.len() != open.len() {
            return false;
        }
        for (i, index) in open.iter().enumerate() {
            let mut mine = item.clone();
            mine.more_values.clear();
            mine.quantities = vec![values[i.min(values.len() - 1)].clone()];
            drafts[*index].items.push(mine);
        }
        true
    }

    /// What stands between token `from` and token `to`.
    fn gap(&self, from: usize, to: usize) -> Gap {
        let mut gap = Gap::default();
        if to <= from {
            return gap;
        }
        gap.labels = to >= from + 2 && self.mark(to - 1) == Some(":") && self.word(to - 2).is_some();
        gap.bytes = (self.tokens[to - 1].end - self.tokens[from].start) as usize;
        let mut depth = 0i32;
        let mut closed = false;
        for i in from..to {
            let token = self.tokens[i];
            let behind = |mark: &str| i > from && self.mark(i - 1) == Some(mark);
            match token.kind {
                Kind::Word => {
                    // `two-tailed`, `s` of `CIs`: one word.
                    gap.words += usize::from(token.spaced || !behind("-"));
                    gap.broken |= closed;
                    gap.lists |= behind(";") && self.is(i, List::And);
                    gap.turns |= self.is(i, List::Contrasts);
                }
                Kind::Number | Kind::Dotted => {
                    // `cells/mm3`, `CD4`
                    let named = i > from && !token.spaced && self.tokens[i - 1].kind == Kind::Word;
                    // `2-tailed` and `1-sided` count as words.
                    gap.broken |= !named && !self.sided(i);
                }
                Kind::Mark => match token.text(self.text) {
                    "(" | "[" => depth += 1,
                    ")" | "]" => {
                        depth -= 1;
                        closed |= depth < 0;
                    }
                    "." => gap.broken |= self.stops(i),
                    "?" | "!" => gap.broken = true,
                    _ => {}
                },
                Kind::Raised | Kind::Lowered => {}
            }
        }
        gap
    }

    /// The full stop at token `at` ends what belongs together: a new sentence begins, or a star opens its
    /// explanation (`. *P < .05`); but not before a symbol (`p = .03. F(1, 20) = …`).
    fn stops(&self, at: usize) -> bool {
        let Some(next) = self.tokens.get(at + 1) else {
            return true;
        };
        let shown = next.text(self.text);
        let star = matches!(shown, "*" | "†" | "‡");
        let sentence = shown.starts_with(char::is_uppercase) && self.comparator(at + 2, false).is_none();
        next.spaced && (star || sentence)
    }
}

/// The symbol by which two items of this kind are the same.
fn item_key(item: &Item) -> &'static str {
    match item.class {
        Class::Interval => item.quantities.last().map_or("", |q| q.symbol),
        _ => item.symbol(),
    }
}
