//! *Borrowing*: a sample size that a statement needs and does not give is taken from the same
//! sentence, or from the paragraph if only one is named there; the finding says so.

use crate::manuscript::Manuscript;
use crate::statements::{Quantity, Statement};

/// Statements of the same block that are looked at, before and behind.
const MOST_NEIGHBOURS: usize = 60;

/// The quantities of a statement, followed by what it may borrow.
pub fn with_borrowed(statements: &[Statement], index: usize, manuscript: &Manuscript) -> Vec<Quantity> {
    let statement = &statements[index];
    let mut quantities = statement.quantities.clone();
    let has = |symbol: &str| statement.quantities.iter().any(|q| q.symbol == symbol);
    let sized = has("n") || has("N");
    let needs = has("M") || has("V") || has("phi") || (has("r") || has("rho") || has("tau")) && !has("df");
    if sized || !needs {
        return quantities;
    }
    let same_block = |s: &&Statement| s.block == statement.block && s.id != statement.id;
    let neighbours = || {
        let back = statements[..index]
            .iter()
            .rev()
            .take(MOST_NEIGHBOURS)
            .take_while(|s| s.block == statement.block);
        let ahead = statements[index + 1..]
            .iter()
            .take(MOST_NEIGHBOURS)
            .take_while(|s| s.block == statement.block);
        back.chain(ahead).filter(same_block)
    };
    let in_sentence = sizes(neighbours().filter(|s| s.sentence.start == statement.sentence.start));
    let found = match only(&in_sentence) {
        Some(size) => Some((size, "the same sentence".to_string())),
        None if in_sentence.is_empty() => only(&sizes(neighbours())).map(|size| {
            let paragraph = manuscript.blocks[statement.block].paragraph;
            (size, format!("the same paragraph ({paragraph})"))
        }),
        None => None,
    };
    if let Some((size, from)) = found {
        let note = format!("{} = {} taken from {from}", size.symbol, size.printed);
        quantities.push(Quantity {
            borrowed: Some(note),
            ..size
        });
    }
    quantities
}

/// The sample sizes in statements, not counting parts (`n = 12 (35%)`).
fn sizes<'a>(statements: impl Iterator<Item = &'a Statement>) -> Vec<&'a Quantity> {
    statements
        .filter(|s| {
            !s.quantities
                .iter()
                .any(|q| q.symbol == "percent" || q.symbol == "count")
        })
        .flat_map(|s| s.quantities.iter())
        .filter(|q| matches!(q.symbol, "n" | "N") && q.borrowed.is_none())
        .collect()
}

/// The one size that is named, if there is only one.
fn only(sizes: &[&Quantity]) -> Option<Quantity> {
    let first = sizes.first()?;
    sizes
        .iter()
        .all(|q| q.number == first.number)
        .then(|| (*first).clone())
}
