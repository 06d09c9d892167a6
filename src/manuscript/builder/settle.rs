//! What can be read only when a block is complete, because it depends on the neighbours: whether a
//! dash is a minus, and whether a hyphen at the end of a line belongs to the word.

/// Byte offsets, before and after, at which the text changed its length.
pub(super) type Moved = Vec<(usize, usize)>;

/// The text of a block, settled: an en dash before a number is a minus unless a number stands
/// before it; a hyphen at a line end joins the two halves of a word.
pub(super) fn settle(text: &str) -> (String, Moved) {
    let old: Vec<char> = text.chars().collect();
    let mut new = String::with_capacity(text.len());
    let mut moved: Moved = Vec::new();
    let mut old_byte = 0;
    let mut i = 0;
    while i < old.len() {
        let c = old[i];
        let mut taken = 1;
        match c {
            '–' | '—' if is_minus(&old, i) => new.push('-'),
            '-' if old.get(i + 1) == Some(&'\n')
                && i > 0
                && old[i - 1].is_lowercase()
                && old.get(i + 2).is_some_and(|n| n.is_lowercase()) =>
            {
                taken = 2;
            }
            // A range or compound broken after its dash keeps the dash, not the break.
            '\n' if matches!(old.get(i.wrapping_sub(1)), Some('-' | '–' | '/')) => {}
            '\n' => new.push(' '),
            c => new.push(c),
        }
        for d in &old[i..i + taken] {
            old_byte += d.len_utf8();
        }
        i += taken;
        if old_byte != new.len() {
            moved.push((old_byte, new.len()));
        }
    }
    (new, moved)
}

/// Where a byte of the old text stands in the settled one.
pub(super) fn carried(at: usize, moved: &Moved) -> usize {
    match moved.partition_point(|(old, _)| *old <= at) {
        0 => at,
        k => moved[k - 1].1 + (at - moved[k - 1].0),
    }
}

/// Whether the dash at `at` is the sign of the number behind it.
fn is_minus(text: &[char], at: usize) -> bool {
    let mut next = at + 1;
    // Some typesetters put a space between sign and number, but only after a comparator or bracket.
    let spaced = text.get(next) == Some(&' ');
    if spaced {
        next += 1;
    }
    let number = match text.get(next) {
        Some(c) if c.is_ascii_digit() => true,
        Some('.') | Some('·') => text.get(next + 1).is_some_and(char::is_ascii_digit),
        _ => false,
    };
    if !number {
        return false;
    }
    let before = text[..at].iter().rev().find(|c| !matches!(c, ' ' | '\n'));
    let tight = at == 0 || !matches!(text[at - 1], ' ' | '\n');
    match before {
        None => !spaced,
        Some('=' | '<' | '>' | '≤' | '≥' | '≈' | '(' | '[' | '{' | '±') => true,
        _ if text[at] == '—' || spaced => false,
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
    }
}
