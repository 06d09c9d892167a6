//! What can be read only when a block is complete, because it depends on the neighbours: whether a
//! dash is a minus, and whether a hyphen at the end of a line belongs to the word.

/// Byte offsets, before and after, at which the text changed its length.
pub(super) type Moved = Vec<(usize, usize)>;

/// The text of a block, settled: an en dash before a number is a minus unless a number stands
/// before it; a hyphen at a line end joins the two halves of a word.
pub(super) fn settle(text: &str) -> (String, Moved) {
    let mut new = String::with_capacity(text.len());
    let mut moved: Moved = Vec::new();
    let mut taken = 0;
    // Nothing else than line ends and dashes, whose first byte is E2, depends on its neighbours.
    for at in memchr::memchr2_iter(b'\n', 0xe2, text.as_bytes()) {
        let Some(c) = text[at..].chars().next() else { break };
        let (before, after) = (&text[..at], &text[at + c.len_utf8()..]);
        match c {
            '–' | '—' if is_minus(before, c, after) => {
                new.push_str(&text[taken..at]);
                new.push('-');
            }
            '\n' => {
                new.push_str(&text[taken..at]);
                if joins(before, after) {
                    new.pop();
                } else if !before.ends_with(['-', '–', '/']) {
                    // A range or compound broken after its dash keeps the dash, not the break.
                    new.push(' ');
                }
            }
            _ => continue,
        }
        taken = at + c.len_utf8();
        if taken != new.len() {
            moved.push((taken, new.len()));
        }
    }
    new.push_str(&text[taken..]);
    (new, moved)
}

/// Whether the text before a line end breaks off inside a word.
fn joins(before: &str, after: &str) -> bool {
    let Some(word) = before.strip_suffix('-') else {
        return false;
    };
    // No word is divided behind its first letter: `t-test`, `p-value`.
    let mut last = word.chars().rev();
    let inside = last.next().is_some_and(char::is_lowercase) && last.next().is_some_and(char::is_alphabetic);
    let next = after
        .split(|c: char| !c.is_alphabetic())
        .next()
        .unwrap_or_default();
    inside && after.starts_with(char::is_lowercase) && !SECOND_HALVES.contains(&next)
}

/// Words that are the second half of a compound more often than the end of a divided word.
const SECOND_HALVES: [&str; 12] = [
    "hoc", "rank", "sample", "samples", "score", "scores", "sided", "square", "squared", "tailed", "test",
    "way",
];

/// Where a byte of the old text stands in the settled one.
pub(super) fn carried(at: usize, moved: &Moved) -> usize {
    match moved.partition_point(|(old, _)| *old <= at) {
        0 => at,
        k => moved[k - 1].1 + (at - moved[k - 1].0),
    }
}

/// Whether a dash between two texts is the sign of the number behind it.
fn is_minus(before: &str, dash: char, after: &str) -> bool {
    // Some typesetters put a space between sign and number, but only after a comparator or bracket.
    let spaced = after.starts_with(' ');
    let mut next = after[usize::from(spaced)..].chars();
    let number = match next.next() {
        Some(c) if c.is_ascii_digit() => true,
        Some('.' | '·') => next.next().is_some_and(|c| c.is_ascii_digit()),
        _ => false,
    };
    if !number {
        return false;
    }
    let tight = !before.ends_with([' ', '\n']);
    match before.trim_end_matches([' ', '\n']).chars().next_back() {
        None => !spaced,
        Some('=' | '<' | '>' | '≤' | '≥' | '≈' | '(' | '[' | '{' | '±') => true,
        _ if dash == '—' || spaced => false,
        // `−31–12` and `.02 – .03` are ranges; `, –.31` and `to –.31` are signs.
        Some(c) if tight => !(c.is_alphanumeric() || matches!(c, ')' | ']' | '%' | '*' | '.' | '"' | '\'')),
        Some(c) => !c.is_ascii_digit(),
    }
}

#[cfg(test)]
mod tests {
    use crate::manuscript::{BlockKind, Builder, Format};

    fn paragraph(parts: &[&str]) -> String {
        let mut b = Builder::new(Format::Text);
        b.open(BlockKind::Paragraph);
        for (i, part) in parts.iter().enumerate() {
            if i > 0 {
                b.line_break();
            }
            b.text(part);
        }
        b.finish().text.trim_end().to_string()
    }

    #[test]
    fn en_dash_is_a_minus_only_where_it_is_a_sign() {
        assert_eq!(
            paragraph(&["b = –0.31, 95% CI [–0.5, –.1]"]),
            "b = -0.31, 95% CI [-0.5, -.1]"
        );
        assert_eq!(paragraph(&["95%CI: −31–12"]), "95%CI: -31–12");
        assert_eq!(
            paragraph(&["0.66 – 1.21 and pp. 12–18"]),
            "0.66 – 1.21 and pp. 12–18"
        );
        assert_eq!(paragraph(&["r = — .35"]), "r = - .35");
        assert_eq!(paragraph(&["from –3 to –1"]), "from -3 to -1");
        assert_eq!(paragraph(&["Greenhouse–Geisser, p<–"]), "Greenhouse–Geisser, p<–");
    }

    #[test]
    fn hyphenated_line_ends_are_joined() {
        assert_eq!(
            paragraph(&["the differ-", "ence was p =", ".03"]),
            "the difference was p = .03"
        );
        assert_eq!(
            paragraph(&["post-", "Hoc and 0.66–", "1.21"]),
            "post-Hoc and 0.66–1.21"
        );
        assert_eq!(
            paragraph(&["a one-", "tailed t-", "test, chi-", "square and post-", "hoc"]),
            "a one-tailed t-test, chi-square and post-hoc"
        );
    }
}
