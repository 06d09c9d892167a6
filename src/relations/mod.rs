//! A *relation* is a law that ties quantities together, such as "p follows from t and df". Each
//! stands in a file of its own, whose opening `//!` text is the documentation that
//! `tieout explain` prints. This file holds what all of them share and the registry.

mod adjusted_r2;
mod ci_centre;
mod ci_of_mean;
mod ci_of_proportion;
mod ci_order;
mod d_from_groups;
mod d_from_t;
mod difference_of_means;
mod eta2_from_f;
mod exp_b;
pub mod granularity;
mod groups;
mod i2_from_q;
mod laws;
mod mean_granularity;
mod mean_range;
mod p_from_chi2;
mod p_from_ci;
mod p_from_estimate;
mod p_from_f;
mod p_from_r;
mod p_from_t;
mod p_from_tau;
mod p_from_z;
mod p_value;
mod percent_of_count;
mod r_from_t;
mod range;
mod reading;
mod rmsea;
mod samples;
mod scale;
mod se_from_sd;
mod search;
mod t_from_groups;
mod u_range;
mod v_from_chi2;

use crate::numbers::{Interval, Set};
use crate::statements::Quantity;

/// One law, as the registry lists it.
pub struct Relation {
    /// Its name in VOCABULARY style, e.g. `p-from-t`.
    pub name: &'static str,
    /// The source text of its file; the documentation is cut from its head.
    source: &'static str,
    /// Finds every place in a case where the law applies.
    pub ties: fn(&Case) -> Vec<Tie>,
}

/// One line of the registry: the name, and the module that has the law and its documentation.
macro_rules! relation {
    ($name:literal, $module:ident) => {
        Relation {
            name: $name,
            source: include_str!(concat!(stringify!($module), ".rs")),
            ties: $module::ties,
        }
    };
}

/// Every relation there is, in the order in which findings of one statement are listed. A relation
/// that is not in this table does not exist.
pub const REGISTRY: &[Relation] = &[
    relation!("p-from-t", p_from_t),
    relation!("p-from-f", p_from_f),
    relation!("p-from-chi2", p_from_chi2),
    relation!("p-from-z", p_from_z),
    relation!("p-from-r", p_from_r),
    relation!("p-from-tau", p_from_tau),
    relation!("p-from-ci", p_from_ci),
    relation!("p-from-estimate", p_from_estimate),
    relation!("u-range", u_range),
    relation!("range", range),
    relation!("ci-order", ci_order),
    relation!("ci-centre", ci_centre),
    relation!("eta2-from-f", eta2_from_f),
    relation!("d-from-t", d_from_t),
    relation!("r-from-t", r_from_t),
    relation!("v-from-chi2", v_from_chi2),
    relation!("t-from-groups", t_from_groups),
    relation!("d-from-groups", d_from_groups),
    relation!("se-from-sd", se_from_sd),
    relation!("ci-of-mean", ci_of_mean),
    relation!("difference-of-means", difference_of_means),
    relation!("ci-of-proportion", ci_of_proportion),
    relation!("exp-b", exp_b),
    relation!("adjusted-r2", adjusted_r2),
    relation!("i2-from-q", i2_from_q),
    relation!("rmsea", rmsea),
    relation!("mean-granularity", mean_granularity),
    relation!("mean-range", mean_range),
    relation!("percent-of-count", percent_of_count),
];

impl Relation {
    /// The documentation of the law: the `//!` text at the head of its file.
    pub fn documentation(&self) -> String {
        let lines = self.source.lines().take_while(|l| l.starts_with("//!"));
        lines
            .map(|l| l.trim_start_matches("//!").strip_prefix(' ').unwrap_or(""))
            .fold(String::new(), |mut text, line| {
                text.push_str(line);
                text.push('\n');
                text
            })
    }

    /// The first line of the documentation: the law in one line.
    pub fn summary(&self) -> String {
        self.documentation()
            .lines()
            .next()
            .unwrap_or_default()
            .to_string()
    }
}

/// How far from a statement something stands.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord)]
pub enum Reach {
    Sentence,
    Paragraph,
    Section,
    Document,
}

/// A word that matters for judging ("one-tailed", "Bonferroni"), found near or far.
#[derive(Clone, Debug)]
pub struct Mention {
    /// What the word means, as the grammar names it: `one-sided`, `adjusted`, `sphericity`, `welch` …
    pub meaning: &'static str,
    /// The word as printed.
    pub words: String,
    /// Numbers that belong to it: `7-point` has 7, `from 1 to 5` has 1 and 5, `12 items` has 12.
    pub numbers: Vec<f64>,
    pub reach: Reach,
    /// Paragraph number where it stands.
    pub paragraph: u32,
}

/// A quantity of another statement that is reported together with the one to be judged.
#[derive(Clone, Debug)]
pub struct Linked {
    pub quantity: Quantity,
    /// Id of the statement it stands in.
    pub statement: usize,
}

/// What one relation gets to see: the quantities of one statement, those of the statements it is
/// reported with, and the words around it.
pub struct Case<'a> {
    /// Id of the statement.
    pub statement: usize,
    /// Those of the statement itself, then what it borrows.
    pub quantities: &'a [Quantity],
    /// Those of other statements in the same sentence, in the order of the text. Their indexes in
    /// [`Tie::parts`] go on behind `quantities`.
    pub linked: &'a [Linked],
    /// The nearest mention of each meaning.
    pub mentions: &'a [Mention],
    /// The level of significance.
    pub alpha: f64,
    /// The person says that tests are one-sided.
    pub one_sided: bool,
    /// Results with a p stand in the same block, or the text is little else than this one: a letter
    /// that stands alone is a statistic.
    pub among_results: bool,
}

impl Case<'_> {
    /// The quantity with this index, here or in a linked statement.
    pub fn quantity(&self, at: usize) -> &Quantity {
        match at.checked_sub(self.quantities.len()) {
            None => &self.quantities[at],
            Some(behind) => &self.linked[behind].quantity,
        }
    }

    /// Id of the statement that the quantity stands in.
    pub fn statement_of(&self, at: usize) -> usize {
        match at.checked_sub(self.quantities.len()) {
            None => self.statement,
            Some(behind) => self.linked[behind].statement,
        }
    }

    /// Indexes of all quantities with this symbol, in the order of the text.
    pub fn all(&self, symbol: &str) -> Vec<usize> {
        (0..self.quantities.len())
            .filter(|i| self.quantities[*i].symbol == symbol)
            .collect()
    }

    /// The first quantity with this symbol.
    pub fn first(&self, symbol: &str) -> Option<usize> {
        self.quantities.iter().position(|q| q.symbol == symbol)
    }

    /// The first quantity with any of these symbols, trying them in order.
    pub fn first_of(&self, symbols: &[&str]) -> Option<usize> {
        symbols.iter().find_map(|s| self.first(s))
    }

    /// The nearest mention with this meaning, if it is not farther away than `reach`.
    pub fn mention(&self, meaning: &str, reach: Reach) -> Option<&Mention> {
        self.mentions
            .iter()
            .filter(|m| m.meaning == meaning && m.reach <= reach)
            .min_by_key(|m| m.reach)
    }
}

/// One application of a relation: the quantities that it ties together and the legitimate forms
/// of the law.
pub struct Tie {
    /// Indexes as [`Case::quantity`] takes them; the first is the one whose expected range is shown.
    pub parts: Vec<usize>,
    /// Tried in order: the first that fits makes the tie agree; the first of all is the one whose
    /// range is shown when none fits.
    pub variants: Vec<Variant>,
    /// What is missing, when the law applies but cannot be decided. Then there are no variants.
    pub open: Option<String>,
    /// Remarks that are shown whatever the verdict, e.g. `p = .000 is read as p < .0005`.
    pub remarks: Vec<String>,
}

impl Tie {
    pub fn new(parts: Vec<usize>, variants: Vec<Variant>) -> Tie {
        Tie {
            parts,
            variants,
            open: None,
            remarks: Vec::new(),
        }
    }

    /// A tie that cannot be decided, with the reason.
    pub fn open(parts: Vec<usize>, reason: impl Into<String>) -> Tie {
        Tie {
            parts,
            variants: Vec::new(),
            open: Some(reason.into()),
            remarks: Vec::new(),
        }
    }
}

/// One legitimate form of a law.
pub struct Variant {
    /// What the finding says is assumed if this variant fits, e.g. `two-sided`.
    pub assumes: Vec<String>,
    /// If set, fitting only by this variant leaves the verdict `open`, with this reason.
    pub only_open: Option<String>,
    pub law: Box<dyn Law>,
}

impl Variant {
    pub fn new(assumes: &[&str], law: impl Law + 'static) -> Variant {
        Variant {
            assumes: assumes.iter().map(|s| s.to_string()).collect(),
            only_open: None,
            law: Box::new(law),
        }
    }

    /// The same, but agreeing by it alone is not enough to say `agrees`.
    pub fn left_open(self, reason: impl Into<String>) -> Variant {
        Variant {
            only_open: Some(reason.into()),
            ..self
        }
    }
}

/// The arithmetic of one variant, over intervals.
pub trait Law: Send + Sync {
    /// All values that part `target` can have, given that every other part lies in its interval
    /// (`values[target]` is not looked at, except where the law says so). The set must enclose
    /// every value that is really possible; where it can be exact, it is.
    fn solve(&self, target: usize, values: &[Interval]) -> Set;

    /// Whether some values inside the intervals satisfy the law.
    fn holds(&self, values: &[Interval]) -> bool {
        self.solve(0, values).iter().any(|set| set.meets(values[0]))
    }
}

/// A law given by a function of target and values.
impl<F> Law for F
where
    F: Fn(usize, &[Interval]) -> Set + Send + Sync,
{
    fn solve(&self, target: usize, values: &[Interval]) -> Set {
        self(target, values)
    }
}

#[cfg(test)]
mod tests;

#[cfg(test)]
mod group_tests;

#[cfg(test)]
mod more_tests;

#[cfg(test)]
mod promises;
