//! *Linking*: statements that stand in one sentence are reported together, so that the relations
//! between them can be tried: the groups' means and SDs with their test, a count with its whole.

use crate::relations::Linked;
use crate::statements::Statement;
use std::ops::Range;

/// Other statements of a sentence that are looked at; a longer list is a table in prose.
const MOST_LINKED: usize = 12;

/// The statements from `first` on that stand in the same sentence.
pub fn sentence(statements: &[Statement], first: usize) -> Range<usize> {
    let here = &statements[first];
    let same = |s: &&Statement| s.block == here.block && s.sentence.start == here.sentence.start;
    first..first + statements[first..].iter().take_while(same).count()
}

/// The quantities of the other statements of the sentence, in the order of the text.
pub fn linked(statements: &[Statement], sentence: &Range<usize>, index: usize) -> Vec<Linked> {
    if sentence.len() > MOST_LINKED + 1 {
        return Vec::new();
    }
    statements[sentence.clone()]
        .iter()
        .filter(|s| s.id != statements[index].id)
        .flat_map(|s| {
            s.quantities.iter().map(|q| Linked {
                quantity: q.clone(),
                statement: s.id,
            })
        })
        .collect()
}
