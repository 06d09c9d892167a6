//! *Code* in LaTeX sources, which is passed over: verbatim text, chunks of R, conditions that never hold.

use super::arguments::{Braces, bracket_end, name_at};
use memchr::memmem;

/// The end of `|code|` or `{code}` behind `\verb` and its relatives.
pub(super) fn verbatim_end(source: &str, after: usize, braces: &Braces) -> usize {
    let mut at = after + usize::from(source[after..].starts_with('*'));
    if source[at..].starts_with('[')
        && let Some(end) = bracket_end(source, braces, at)
    {
        at = end + 1;
    }
    // `\mintinline{r}|code|` names its language first.
    if source[after..].starts_with('{')
        && let Some(close) = braces.close(at)
    {
        at = close + 1;
        if !source[at..].starts_with(['|', '{', '!', '+', '/']) {
            return at;
        }
    }
    if source[at..].starts_with('{')
        && let Some(close) = braces.close(at)
    {
        return close + 1;
    }
    let Some(mark) = source[at..].chars().next() else {
        return at;
    };
    let inner = &source[at + mark.len_utf8()..];
    let line = &inner[..inner.find('\n').unwrap_or(inner.len())];
    match line.find(mark) {
        Some(end) => at + mark.len_utf8() + end + mark.len_utf8(),
        None => at,
    }
}

/// Behind the `\fi` that ends a condition.
pub(super) fn conditional_end(source: &str, after: usize) -> usize {
    let mut depth = 1;
    let mut at = after;
    while let Some(n) = memchr::memchr(b'\\', &source.as_bytes()[at..]) {
        let name = name_at(source, at + n);
        at += n + 1 + name.len();
        if name == "fi" {
            depth -= 1;
            if depth == 0 {
                return at;
            }
        } else if name == "else" && depth == 1 {
            return at;
        } else if name.starts_with("if") && name != "iff" && name != "ifthenelse" {
            depth += 1;
        }
    }
    source.len()
}

/// Behind a chunk of R code, `<<name>>=` to `@`, that begins at `at`.
pub(super) fn chunk_end(source: &str, at: usize) -> usize {
    let line_end =
        |from: usize| memchr::memchr(b'\n', &source.as_bytes()[from..]).map_or(source.len(), |n| from + n);
    let first = line_end(at);
    if !source[at..first].trim_end().ends_with(">>=") {
        return at;
    }
    match memmem::find(&source.as_bytes()[first..], b"\n@") {
        Some(n) => line_end(first + n + 1),
        None => source.len(),
    }
}
