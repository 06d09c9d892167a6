//! A *statement* is a group of quantities that are reported together about one result, such as
//! `t(28) = 2.20, p = .036`. This room turns the text of blocks into statements by the grammars;
//! it knows neither file formats nor what makes numbers agree.

mod arguments;
mod assignment;
mod bait;
mod between;
mod compile;
mod context;
mod doubts;
mod expressions;
mod find;
mod forms;
mod formulas;
mod grammar;
mod intervals;
mod items;
mod join;
mod lists;
mod names;
mod pairs;
mod print;
mod sentences;
mod several;
mod spelled;
mod spellings;
mod surroundings;
mod tokens;
mod unnamed;
mod values;

pub use context::by_context;
pub use find::find;
pub use grammar::Grammar;
pub use print::{in_print, list};

use crate::numbers::{Comparator, Decimal, Interval};
use std::cell::OnceCell;
use std::collections::HashSet;
use std::ops::Range;

/// One reported number.
#[derive(Clone, Debug)]
pub struct Quantity {
    /// Symbol as in the vocabulary: `t`, `df`, `p`, `eta2p`, `CI_low` …
    pub symbol: &'static str,
    /// The digits as they stand in the text.
    pub printed: String,
    pub comparator: Comparator,
    pub number: Decimal,
    /// The true values that are described by comparator and digits.
    pub interval: Interval,
    /// Byte range of the digits in the text as read.
    pub span: Range<usize>,
    /// Where the number was taken from, when it does not stand in the statement itself,
    /// e.g. `n = 28 taken from paragraph 3`.
    pub borrowed: Option<String>,
    /// What is not sure about how it was read.
    pub doubt: Doubt,
}

/// What is not sure about the reading of a number. A conflict that rests on it is weaker.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Doubt {
    /// A character before the digits could not be read and may be a sign: this is the interval
    /// without a sign, and the quantity's own covers both signs.
    pub unsigned: Option<Interval>,
    /// What was read by context only, e.g. `5` as `=`.
    pub by_context: Option<String>,
}

impl Quantity {
    /// The intervals that the number may stand for: one, or one for each sign where that is uncertain.
    pub fn readings(&self) -> Vec<Interval> {
        match self.doubt.unsigned {
            Some(unsigned) if self.symbol != "p" => vec![unsigned, unsigned.negate()],
            _ => vec![self.interval],
        }
    }

    /// What is not sure, in words.
    pub fn doubts(&self) -> impl Iterator<Item = String> + '_ {
        let sign = self.doubt.unsigned.map(|_| {
            format!(
                "sign of {} {} uncertain: the character before it could not be read",
                in_print(self.symbol),
                self.printed
            )
        });
        sign.into_iter().chain(self.doubt.by_context.clone())
    }
}

/// Quantities reported together.
#[derive(Clone, Debug)]
pub struct Statement {
    /// From 1, in the order of the text.
    pub id: usize,
    /// Index of the block it stands in.
    pub block: usize,
    /// Byte range from the first symbol to the last digit, with closing brackets.
    pub range: Range<usize>,
    /// Byte range of the sentence around it.
    pub sentence: Range<usize>,
    pub quantities: Vec<Quantity>,
}

/// One block on its way from text to statements: its tokens and what the manuscript's numbers
/// look like.
pub(crate) struct Scan<'a> {
    /// The whole text as read; tokens give offsets in it.
    text: &'a str,
    tokens: &'a [tokens::Token],
    grammar: &'a Grammar,
    /// The manuscript writes decimal commas.
    commas: bool,
    /// The level of significance, which `n.s.` refers to.
    alpha: f64,
    /// The manuscript says that it gives medians with quartiles.
    medians: bool,
    /// The block is a cell of a table.
    cell: bool,
    /// The meanings of the words that matter in this block, looked for when first asked for.
    words: OnceCell<HashSet<&'static str>>,
}
