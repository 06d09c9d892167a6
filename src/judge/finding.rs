//! A *finding* is one relation tried on one set of quantities.

use crate::manuscript::{Manuscript, Place};
use crate::statements::Statement;
use std::ops::Range;

/// What came out. Ordered from harmless to serious.
#[derive(Clone, Copy, Debug, PartialEq, Eq, PartialOrd, Ord, Hash, serde::Serialize)]
#[serde(rename_all = "lowercase")]
pub enum Verdict {
    /// Some true values behind the printed numbers satisfy the law.
    Agrees,
    /// It could not be decided; the finding says what is missing.
    Open,
    /// The numbers cannot all be right.
    Conflicts,
    /// A conflict that also changes which side of α the result is on.
    Reverses,
}

impl Verdict {
    /// The word in reports and JSON.
    pub fn word(self) -> &'static str {
        match self {
            Verdict::Agrees => "agrees",
            Verdict::Open => "open",
            Verdict::Conflicts => "conflicts",
            Verdict::Reverses => "reverses",
        }
    }
}

/// One quantity changed so that the relation agrees.
#[derive(Clone, Debug, PartialEq, serde::Serialize)]
pub struct Repair {
    pub symbol: &'static str,
    /// The value that would agree, printed in the manner of the text; a range is `2.10 to 2.13`.
    pub to: String,
    /// The named slip that would explain it, if one does.
    pub slip: Option<&'static str>,
}

/// One relation tried on one set of quantities.
#[derive(Clone, Debug)]
pub struct Finding {
    pub relation: &'static str,
    /// Further relations that the same numbers fail, where one slip would explain all of it.
    pub with: Vec<&'static str>,
    pub verdict: Verdict,
    /// Ids of the statements concerned.
    pub statements: Vec<usize>,
    pub place: Place,
    /// The statement as it stands in the text.
    pub quote: String,
    /// Byte ranges, in the text as read, of the numbers in question.
    pub marks: Vec<Range<usize>>,
    /// Byte range of the sentence around the statement.
    pub sentence: Range<usize>,
    /// The quantity whose range follows from the rest, as printed: symbol and e.g. `= .036`.
    pub reported: Vec<(&'static str, String)>,
    /// Lowest and highest value that follow for it from the rest; where only single values are possible,
    /// the nearest one below and above what is printed.
    pub expected: Vec<(&'static str, [f64; 2])>,
    pub assumes: Vec<String>,
    /// One plain sentence.
    pub says: String,
    pub repairs: Vec<Repair>,
}

/// How many there are of each.
#[derive(Clone, Copy, Debug, Default, PartialEq, Eq, serde::Serialize)]
pub struct Counts {
    pub statements: usize,
    pub quantities: usize,
    pub agrees: usize,
    pub conflicts: usize,
    pub reverses: usize,
    pub open: usize,
}

/// A manuscript with everything found in it.
pub struct Document {
    pub manuscript: Manuscript,
    pub statements: Vec<Statement>,
    pub findings: Vec<Finding>,
}

impl Document {
    pub fn counts(&self) -> Counts {
        let count = |verdict| self.findings.iter().filter(|f| f.verdict == verdict).count();
        Counts {
            statements: self.statements.len(),
            quantities: self.statements.iter().map(|s| s.quantities.len()).sum(),
            agrees: count(Verdict::Agrees),
            conflicts: count(Verdict::Conflicts),
            reverses: count(Verdict::Reverses),
            open: count(Verdict::Open),
        }
    }
}
