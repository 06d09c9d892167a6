//! *Joining*: which items belong together to one statement. Decided by brackets, by what stands
//! between the items, and by what a result may hold: one test, one p, one interval per estimate.

use super::Scan;
use super::grammar::Class;
use super::items::Item;
use super::tokens::Kind;

/// Items that are reported together, in the order of the text.
#[derive(Clone, Debug, Default)]
pub struct Draft {
    pub items: Vec<Item>,
}

/// What stands between two items.
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
    fn has(&self, symbol: &str) -> bool {
        self.items
            .iter()
            .any(|i| i.quantities.iter().any(|q| q.symbol == symbol))
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
        let dealt_out = matches!(item.class, Class::Statistic | Class::Descriptive | Class::Size);
        if item.more_values.is_empty() || !dealt_out {
            return vec![item];
        }
        if item.quantities[0].symbol != "M" && item.class == Class::Descriptive {
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
        let Some(last) = drafts.last_mut() else {
            drafts.push(Draft { items: vec![item] });
            return;
        };
        let gap = self.gap(last.token_end(), item.tokens.start);
        let symbol = item.quantities[0].symbol;
        // A second p, or a second interval, takes with it the estimate it belongs to.
        let repeated = match item.class {
            Class::P | Class::Interval => last.has(item_key(&item)),
            _ => false,
        };
        if repeated && gap.within(5) {
            let key = item_key(&item);
            let first = last
                .items
                .iter()
                .position(|i| i.quantities.iter().any(|q| q.symbol == key))
                .unwrap_or(0);
            let split = (first + 1..last.items.len()).find(|i| {
                let class = last.items[*i].class;
                matches!(
                    class,
                    Class::Statistic | Class::Estimate | Class::Effect | Class::Ratio | Class::Descriptive
                )
            });
            let rest = split.map(|at| last.items.split_off(at)).unwrap_or_default();
            drafts.push(Draft {
                items: rest.into_iter().chain([item]).collect(),
            });
            return;
        }
        let joins = !gap.broken && !repeated && self.may_join(last, &item, &gap, symbol);
        match joins {
            true => last.items.push(item),
            false => drafts.push(Draft { items: vec![item] }),
        }
    }

    fn may_join(&self, draft: &Draft, item: &Item, gap: &Gap, symbol: &str) -> bool {
        use Class::*;
        let again = draft.has(symbol);
        if gap.turns {
            return false;
        }
        match item.class {
            P => {
                let counts_only = draft.only(Other) || draft.only(Size);
                gap.within(if counts_only { 1 } else { 6 })
            }
            Df => !again && draft.has_class(Statistic) && !draft.has("df1") && gap.within(6),
            Size => {
                let counted = item.quantities.len() == 1;
                gap.within(2)
                    && !gap.lists
                    && counted
                    && !draft.only(Other)
                    && (!again || symbol == "n" && !draft.only(Size) && !draft.has_class(P))
            }
            Interval if symbol.starts_with("range") || item.quantities[0].symbol.starts_with("IQR") => {
                draft.has_class(Descriptive) && gap.within(2)
            }
            Interval => {
                // `0.944 slugs per bed per square metre and year (95% CI …`
                let lone =
                    draft.items.len() == 1 && self.mark(item.tokens.start.wrapping_sub(1)) == Some("(");
                (draft.has_test() || draft.has_class(Descriptive) || draft.has_class(Other))
                    && gap.within(if lone { 8 } else { 5 })
            }
            Effect => !again && (draft.has_test() && gap.within(6) || gap.within(0)) && !draft.only(Size),
            Statistic if again => false,
            Statistic => {
                let pairs = |a: &[&str], b: &[&str]| {
                    a.contains(&symbol) && b.iter().any(|s| draft.has(s))
                        || b.contains(&symbol) && a.iter().any(|s| draft.has(s))
                };
                if draft.has_class(P) {
                    symbol == "r" && gap.within(0)
                } else if draft.has_class(Statistic) {
                    gap.within(2)
                        && (pairs(&["U", "W", "H", "rho", "tau"], &["z"])
                            || pairs(&["r", "rho"], &["t", "z", "F", "U", "W"])
                            || pairs(&["Q"], &["z"]))
                } else if draft.has("M") || draft.has("Mdn") {
                    false
                } else if draft.only(Other) {
                    gap.within(0) && !draft.has("count")
                } else {
                    gap.within(3)
                }
            }
            Estimate | Ratio if again => false,
            Estimate | Ratio => {
                if draft.has_class(P) || draft.has_class(Statistic) {
                    gap.within(0)
                        && !(item.class == Estimate && draft.has_class(P) && draft.has_class(Estimate))
                } else if draft.has_class(Estimate) && matches!(symbol, "beta" | "b" | "B") {
                    gap.within(1)
                } else {
                    draft.only(Size) && gap.within(0)
                }
            }
            Descriptive if again => false,
            Descriptive if matches!(symbol, "M" | "Mdn") => {
                draft.only(Size) && gap.within(0)
                    || draft.has_class(Descriptive)
                        && !draft.has("M")
                        && gap.within(0)
                        && symbol == "M"
                        && draft.only(Size)
            }
            Descriptive => {
                gap.within(if draft.has_class(P) { 0 } else { 3 }) && !draft.only(Size) && !draft.only(Other)
            }
            Other if symbol == "percent" && item.quantities.len() == 1 => {
                draft.has_class(Size) && gap.within(0)
            }
            Other if symbol == "count" || symbol == "percent" => false,
            Other => !again && gap.within(1) && !draft.has("count") && !gap.labels,
            Bait => gap.within(1),
        }
    }

    /// A plural item gives its values to the statements before it that lack one:
    /// `t(28) = 2.20 and t(28) = 0.31, ps = .036 and .759`. False if it finds none.
    fn shared(&self, item: &Item, drafts: &mut [Draft]) -> bool {
        let key = item.quantities[0].symbol;
        let wanted = |d: &Draft| match item.class {
            Class::P => {
                d.has_class(Class::Statistic) || d.has_class(Class::Estimate) || d.has_class(Class::Effect)
            }
            Class::Descriptive => d.has("M"),
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
        let mut gap = Gap {
            words: 0,
            bytes: 0,
            broken: false,
            turns: false,
            labels: false,
            lists: false,
        };
        if to <= from {
            return gap;
        }
        gap.labels = to >= from + 2 && self.mark(to - 1) == Some(":") && self.word(to - 2).is_some();
        gap.bytes = (self.tokens[to - 1].end - self.tokens[from].start) as usize;
        let mut depth = 0i32;
        let mut closed = false;
        for i in from..to {
            let token = self.tokens[i];
            let shown = token.text(self.text);
            match token.kind {
                Kind::Word => {
                    // `two-tailed`, `s` of `CIs`: one word.
                    if !(i > from && !token.spaced && self.mark(i - 1) == Some("-")) {
                        gap.words += 1;
                    }
                    gap.broken |= closed;
                    gap.lists |= shown == "and" && i > from && self.mark(i - 1) == Some(";");
                    gap.turns |= matches!(
                        shown,
                        "vs" | "versus"
                            | "than"
                            | "whereas"
                            | "while"
                            | "but"
                            | "compared"
                            | "or"
                            | "against"
                    );
                }
                Kind::Number | Kind::Dotted => {
                    // `2-tailed`, `1-sided` count as words.
                    let compound = self.mark(i + 1) == Some("-")
                        && self
                            .word(i + 2)
                            .is_some_and(|w| w.starts_with("tail") || w.starts_with("side"));
                    // `cells/mm3`, `CD4`
                    let named = i > from && !token.spaced && self.tokens[i - 1].kind == Kind::Word;
                    gap.broken |= !compound && !named;
                }
                Kind::Mark => match shown {
                    "(" | "[" => depth += 1,
                    ")" | "]" => {
                        depth -= 1;
                        closed |= depth < 0;
                    }
                    "." => {
                        let next = self.tokens.get(i + 1);
                        let ends = next.is_none_or(|t| {
                            // `. *P < .05`: a star opens its explanation.
                            t.spaced && matches!(t.text(self.text), "*" | "†" | "‡")
                                || t.spaced
                                    && t.text(self.text).starts_with(|c: char| c.is_uppercase())
                                    && self
                                        .grammar
                                        .comparator(self.text, self.tokens, i + 2, false)
                                        .is_none()
                        });
                        gap.broken |= ends;
                    }
                    "?" | "!" => gap.broken = true,
                    _ => {}
                },
                Kind::Raised | Kind::Lowered => {}
            }
        }
        gap
    }
}

/// The symbol by which two items of this kind are the same.
fn item_key(item: &Item) -> &'static str {
    match item.class {
        Class::Interval => item.quantities.last().map_or("", |q| q.symbol),
        _ => item.quantities[0].symbol,
    }
}
