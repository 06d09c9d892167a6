//! *Expressions* of the grammar: regular expressions that are compiled when first needed, since
//! most runs need few of them and compiling all takes longer than reading a page.

use regex::{Captures, Regex, RegexBuilder};
use std::sync::OnceLock;

/// One expression, or several of which any may match.
#[derive(Debug)]
pub struct Expression {
    source: String,
    compiled: OnceLock<Regex>,
}

impl Expression {
    /// `check` compiles at once, for expressions that a person has written.
    ///
    /// # Errors
    /// A line saying what is wrong with the expression.
    pub fn new(alternatives: &[String], check: bool) -> Result<Expression, String> {
        let source = alternatives
            .iter()
            .map(|e| plain(e))
            .collect::<Vec<_>>()
            .join("|");
        let expression = Expression {
            source,
            compiled: OnceLock::new(),
        };
        if check {
            let regex = expression.compile()?;
            expression.compiled.get_or_init(|| regex);
        }
        Ok(expression)
    }

    fn compile(&self) -> Result<Regex, String> {
        // An alternation of nothing would match everywhere.
        let source = if self.source.is_empty() {
            "[^\\s\\S]"
        } else {
            &self.source
        };
        RegexBuilder::new(source)
            .build()
            .map_err(|e| format!("expression {source:?}: {e}"))
    }

    fn regex(&self) -> &Regex {
        // Expressions of the program itself are compiled by a test, all others by `new`.
        self.compiled
            .get_or_init(|| self.compile().unwrap_or_else(|why| unreachable!("{why}")))
    }

    pub fn is_match(&self, text: &str) -> bool {
        self.regex().is_match(text)
    }

    pub fn captures<'t>(&self, text: &'t str) -> Option<Captures<'t>> {
        self.regex().captures(text)
    }

    /// All matches with their groups.
    pub fn captures_all<'r, 't>(&'r self, text: &'t str) -> impl Iterator<Item = Captures<'t>> + use<'r, 't> {
        self.regex().captures_iter(text)
    }
}

/// Word boundaries, digits and negated classes mean ASCII only: the expressions speak of English
/// words and plain numbers, and tables for all of Unicode make them slow to compile and to run.
fn plain(expression: &str) -> String {
    let mut out = String::with_capacity(expression.len() + 32);
    let mut rest = expression;
    while let Some(at) = rest.find(['\\', '[']) {
        out.push_str(&rest[..at]);
        rest = &rest[at..];
        if let Some(behind) = rest.strip_prefix("\\b") {
            out.push_str("(?-u:\\b)");
            rest = behind;
        } else if let Some(behind) = rest.strip_prefix("\\d") {
            out.push_str("[0-9]");
            rest = behind;
        } else if let Some(behind) = rest.strip_prefix("[^") {
            out.push_str("[ -~&&[^");
            // The closing bracket of the class closes both.
            let close = behind.find(']').unwrap_or(behind.len());
            out.push_str(&behind[..close].replace("\\d", "0-9"));
            out.push_str("]]");
            rest = behind.get(close + 1..).unwrap_or("");
        } else {
            let step = if rest.starts_with('\\') {
                2.min(rest.len())
            } else {
                1
            };
            let step = rest.ceil_char_boundary(step);
            out.push_str(&rest[..step]);
            rest = &rest[step..];
        }
    }
    out.push_str(rest);
    out
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn classes_and_boundaries_become_plain() {
        assert_eq!(
            plain(r"\bat [^.;\d]{0,3} \d+\."),
            r"(?-u:\b)at [ -~&&[^.;0-9]]{0,3} [0-9]+\."
        );
        assert_eq!(plain("α–[0-9]"), "α–[0-9]");
    }

    #[test]
    fn nothing_matches_no_alternatives_and_errors_are_told() {
        assert!(
            !Expression::new(&[], false)
                .expect("it is well formed")
                .is_match("anything")
        );
        assert!(Expression::new(&["(".to_string()], true).is_err());
    }
}
