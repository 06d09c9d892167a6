//! *Accents* in LaTeX are macros before a letter: `\"o`, `\v{s}`, `\c c`.

use unicode_normalization::UnicodeNormalization;

/// The combining mark of an accent macro.
fn mark(name: &str) -> Option<char> {
    Some(match name {
        "`" => '\u{300}',
        "'" => '\u{301}',
        "^" => '\u{302}',
        "~" => '\u{303}',
        "=" => '\u{304}',
        "u" => '\u{306}',
        "." => '\u{307}',
        "\"" => '\u{308}',
        "r" => '\u{30a}',
        "H" => '\u{30b}',
        "v" => '\u{30c}',
        "d" => '\u{323}',
        "c" => '\u{327}',
        "k" => '\u{328}',
        "b" => '\u{331}',
        _ => return None,
    })
}

/// Reads the letter behind the accent macro `name`: the accented letter, and how many bytes of
/// `rest` it took. Without a letter there is no accent.
pub(super) fn accent(name: &str, rest: &str) -> Option<(String, usize)> {
    let mark = mark(name)?;
    let space = rest.len() - rest.trim_start_matches(' ').len();
    let (open, inner) = match rest[space..].strip_prefix('{') {
        Some(inner) => (1, inner),
        None => (0, &rest[space..]),
    };
    let (letter, mut length) = if inner.starts_with("\\i") || inner.starts_with("\\j") {
        // The dotless letters take the accent instead of their dot.
        if inner[2..].starts_with(|c: char| c.is_ascii_alphabetic()) {
            return None;
        }
        (if inner.starts_with("\\i") { 'i' } else { 'j' }, 2)
    } else {
        let letter = inner.chars().next().filter(|c| c.is_alphabetic())?;
        (letter, letter.len_utf8())
    };
    if open == 1 {
        if !inner[length..].starts_with('}') {
            return None;
        }
        length += 1;
    }
    Some(([letter, mark].into_iter().nfc().collect(), space + open + length))
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn accents_with_and_without_braces() {
        assert_eq!(accent("\"", "ofen"), Some(("ö".into(), 1)));
        assert_eq!(accent("'", "{e}t"), Some(("é".into(), 3)));
        assert_eq!(accent("c", " c"), Some(("ç".into(), 2)));
        assert_eq!(accent("'", "\\i n"), Some(("í".into(), 2)));
        assert_eq!(accent("v", "{\\i}"), Some(("ǐ".into(), 4)));
        assert_eq!(accent("'", " = 3"), None);
        assert_eq!(accent("textit", "o"), None);
        assert_eq!(accent("'", ""), None);
    }
}
