//! tieout reads a scientific manuscript, finds every statistic it reports and works out which of
//! them cannot all be true together.
//!
//! One natural way through, one direction, no way back: a reader makes a manuscript of a file, the
//! grammars find the statements in it, the judge tries every relation on them, reports show the
//! findings.

pub mod commands;
pub mod distributions;
pub mod judge;
pub mod manuscript;
pub mod numbers;
pub mod readers;
pub mod relations;
pub mod reports;
pub mod statements;

use judge::{Document, Options};
use manuscript::Manuscript;
use statements::Grammar;

/// Everything between reading a file and showing what was found.
pub fn examine(mut manuscript: Manuscript, grammar: &Grammar, options: &Options) -> Document {
    let alpha = options
        .alpha
        .or_else(|| judge::stated_alpha(&manuscript, grammar))
        .unwrap_or(judge::USUAL_ALPHA);
    let statements = statements::find(&manuscript, grammar, alpha);
    manuscript.remarks.extend(statements::by_context(&statements));
    let findings = judge::judge(&manuscript, &statements, grammar, options, alpha);
    Document {
        manuscript,
        statements,
        findings,
    }
}
