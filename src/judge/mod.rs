//! The *judge* tries every relation on every statement and says what it found. It knows neither
//! file formats nor how findings are shown.

mod borrowing;
mod evaluate;
mod finding;
mod linking;
mod mentions;
mod network;
mod repairs;
mod wording;

pub use finding::{Counts, Document, Finding, Repair, Verdict};
pub use mentions::stated_alpha;

use crate::manuscript::Manuscript;
use crate::relations::{Case, Linked, Mention, REGISTRY, Relation};
use crate::statements::{Grammar, Quantity, Statement};
use mentions::Mentions;
use network::Tried;

/// The level of significance when neither the person nor the manuscript names one.
pub const USUAL_ALPHA: f64 = 0.05;

/// What the person asked for.
#[derive(Clone, Debug, Default)]
pub struct Options {
    /// The level of significance; otherwise the one that the manuscript states, otherwise .05.
    pub alpha: Option<f64>,
    /// Tests are one-sided where nothing else is said.
    pub one_sided: bool,
    /// Only these relations; all if empty.
    pub only: Vec<String>,
    /// Not these relations.
    pub skip: Vec<String>,
}

impl Options {
    /// The relations to be tried.
    fn relations(&self) -> Vec<&'static Relation> {
        let wanted = |r: &&Relation| {
            (self.only.is_empty() || self.only.iter().any(|n| n == r.name))
                && !self.skip.iter().any(|n| n == r.name)
        };
        REGISTRY.iter().filter(wanted).collect()
    }
}

/// Tries the relations on the statements of a manuscript; `alpha` is the level of significance.
/// Findings come in the order of the text.
pub fn judge(
    manuscript: &Manuscript,
    statements: &[Statement],
    grammar: &Grammar,
    options: &Options,
    alpha: f64,
) -> Vec<Finding> {
    let relations = options.relations();
    if statements.is_empty() || relations.is_empty() {
        return Vec::new();
    }
    let mentions = Mentions::collect(manuscript, grammar, statements);
    let mut findings = Vec::new();
    let mut first = 0;
    while first < statements.len() {
        let sentence = linking::sentence(statements, first);
        first = sentence.end;
        let seen: Vec<Seen> = sentence
            .clone()
            .map(|index| {
                let quantities = borrowing::with_borrowed(statements, index, manuscript);
                let mentions = mentions.around(&statements[index], &quantities);
                Seen {
                    linked: linking::linked(statements, &sentence, index),
                    quantities,
                    mentions,
                }
            })
            .collect();
        let mut tried = Vec::new();
        for (index, seen) in sentence.clone().zip(&seen) {
            let case = Case {
                statement: statements[index].id,
                quantities: &seen.quantities,
                linked: &seen.linked,
                mentions: &seen.mentions,
                alpha,
                one_sided: options.one_sided,
                among_results: among_results(statements, index, manuscript),
            };
            for relation in &relations {
                for tie in (relation.ties)(&case) {
                    tried.push(Tried {
                        finding: evaluate::finding(relation, &tie, &case, &statements[index], manuscript),
                        parts: tie.parts.iter().map(|i| seen.quantity(*i)).collect(),
                        tie,
                    });
                }
            }
        }
        findings.extend(network::settle(tried));
    }
    findings
}

/// What a statement's case is made of.
struct Seen {
    quantities: Vec<Quantity>,
    linked: Vec<Linked>,
    mentions: Vec<Mention>,
}

impl Seen {
    /// The quantity with this index, as in [`Case::quantity`], for as long as this lives.
    fn quantity(&self, at: usize) -> &Quantity {
        match at.checked_sub(self.quantities.len()) {
            None => &self.quantities[at],
            Some(behind) => &self.linked[behind].quantity,
        }
    }
}

/// Whether other results with a p stand in the same block, or the text is little else than this one.
fn among_results(statements: &[Statement], index: usize, manuscript: &Manuscript) -> bool {
    const NEIGHBOURS: usize = 20;
    let statement = &statements[index];
    let near = &statements[index.saturating_sub(NEIGHBOURS)..(index + NEIGHBOURS).min(statements.len())];
    let p = |s: &Statement| s.block == statement.block && s.quantities.iter().any(|q| q.symbol == "p");
    near.iter().any(p) || statement.range.len() * 3 > manuscript.text.len()
}
