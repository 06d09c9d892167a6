//! An *excerpt* is the part of a manuscript around a statement, broken into lines, with a row of
//! carets below the numbers in question.

use std::ops::Range;
use unicode_normalization::char::is_combining_mark;

/// Longer excerpts are cut down to the surroundings of what is marked.
const MOST_LINES: usize = 4;

/// Something that takes up room on a line.
#[derive(Clone, Copy)]
struct Glyph {
    shown: char,
    columns: usize,
    marked: bool,
}

/// The lines of an excerpt, none of them longer than `width` columns.
///
/// `range` is what may be shown, `core` what must be, both as bytes of `text`; below the bytes in
/// `marks` stand carets. Tabs, which part the cells of a table row, become ` | `.
pub fn lines(
    text: &str,
    range: Range<usize>,
    core: Range<usize>,
    marks: &[Range<usize>],
    width: usize,
) -> Vec<String> {
    let range = text.floor_char_boundary(range.start)..text.ceil_char_boundary(range.end);
    let mut glyphs = Vec::new();
    // Indexes into `glyphs` between which everything must be shown.
    let mut must: Option<(usize, usize)> = None;
    let mut must_marks: Option<(usize, usize)> = None;
    for (at, c) in text[range.clone()].char_indices() {
        let at = at + range.start;
        let marked = marks.iter().any(|m| m.contains(&at));
        let first = glyphs.len();
        if c == '\t' {
            glyphs.extend(" | ".chars().map(|c| Glyph::new(c, false)));
        } else {
            glyphs.push(Glyph::new(if c.is_whitespace() { ' ' } else { c }, marked));
        }
        let seen = |so_far: Option<(usize, usize)>| Some((so_far.map_or(first, |s| s.0), glyphs.len()));
        if marked {
            must_marks = seen(must_marks);
        }
        if marked || core.contains(&at) {
            must = seen(must);
        }
    }
    let room = MOST_LINES * width;
    let columns = |part: &[Glyph]| part.iter().map(|g| g.columns).sum::<usize>();
    if columns(&glyphs) > room {
        let fits = |part: &(usize, usize)| columns(&glyphs[part.0..part.1]) <= room;
        let keep = must.filter(fits).or(must_marks).unwrap_or((0, 0));
        glyphs = surroundings(&glyphs, keep, room);
    }
    let mut shown = Vec::new();
    for line in wrap(&glyphs, width) {
        shown.push(line.iter().map(|g| g.shown).collect::<String>());
        if line.iter().any(|g| g.marked) {
            let carets: String = line
                .iter()
                .map(|g| if g.marked { "^" } else { " " }.repeat(g.columns))
                .collect();
            shown.push(carets.trim_end().to_string());
        }
    }
    shown
}

/// Plain text broken into lines of at most `width` columns at its spaces.
pub fn paragraph(text: &str, width: usize) -> Vec<String> {
    let words: Vec<&str> = text.split_whitespace().collect();
    let glyphs: Vec<Glyph> = words.join(" ").chars().map(|c| Glyph::new(c, false)).collect();
    wrap(&glyphs, width)
        .into_iter()
        .map(|line| line.iter().map(|g| g.shown).collect())
        .collect()
}

/// The columns that a text takes up.
pub fn columns(text: &str) -> usize {
    text.chars().map(columns_of).sum()
}

impl Glyph {
    fn new(c: char, marked: bool) -> Glyph {
        let shown = if super::is_harmful(c) { '\u{fffd}' } else { c };
        Glyph {
            shown,
            columns: columns_of(shown),
            marked,
        }
    }

    fn is_space(&self) -> bool {
        self.shown == ' '
    }
}

/// Columns of one character: none for what sits on its neighbour, two for the wide characters of
/// East Asia and for pictures.
fn columns_of(c: char) -> usize {
    match c {
        ' '..='~' => 1,
        '\u{200b}'..='\u{200d}' | '\u{2060}' | '\u{feff}' | '\u{fe00}'..='\u{fe0f}' => 0,
        '\u{1100}'..='\u{115f}'
        | '\u{2e80}'..='\u{303e}'
        | '\u{3041}'..='\u{a4cf}'
        | '\u{ac00}'..='\u{d7a3}'
        | '\u{f900}'..='\u{faff}'
        | '\u{fe30}'..='\u{fe6f}'
        | '\u{ff00}'..='\u{ff60}'
        | '\u{ffe0}'..='\u{ffe6}'
        | '\u{1f300}'..='\u{1f64f}'
        | '\u{1f900}'..='\u{1f9ff}'
        | '\u{20000}'..='\u{3fffd}' => 2,
        c => usize::from(!is_combining_mark(c)),
    }
}

/// What must be kept with as much around it as there is room for, two thirds of it before, cut
/// between words and with an ellipsis at each cut.
fn surroundings(glyphs: &[Glyph], (from, to): (usize, usize), room: usize) -> Vec<Glyph> {
    let used: usize = glyphs[from..to].iter().map(|g| g.columns).sum();
    let spare = room.saturating_sub(used + 6);
    let (mut first, mut left) = (from, spare * 2 / 3);
    while first > 0 && left >= glyphs[first - 1].columns {
        first -= 1;
        left -= glyphs[first].columns;
    }
    let (mut last, mut left) = (to, spare / 3);
    while last < glyphs.len() && left >= glyphs[last].columns {
        left -= glyphs[last].columns;
        last += 1;
    }
    if first > 0 {
        first = (first..from)
            .find(|i| glyphs[*i].is_space())
            .map_or(from, |i| i + 1);
    }
    if last < glyphs.len() {
        last = (to..last).rev().find(|i| glyphs[*i].is_space()).unwrap_or(to);
    }
    let dots =
        |there: bool, text: &'static str| text.chars().filter(move |_| there).map(|c| Glyph::new(c, false));
    dots(first > 0, "… ")
        .chain(glyphs[first..last].iter().copied())
        .chain(dots(last < glyphs.len(), " …"))
        .collect()
}

/// Breaks at spaces, but not beside a comparator, so that `p = .03` stays together; a word that is
/// wider than the line is broken anywhere.
fn wrap(glyphs: &[Glyph], width: usize) -> Vec<&[Glyph]> {
    let mut lines = Vec::new();
    let mut rest = trim(glyphs);
    while !rest.is_empty() {
        let mut used = 0;
        let mut fits = 0;
        while fits < rest.len() && used + rest[fits].columns <= width.max(2) {
            used += rest[fits].columns;
            fits += 1;
        }
        let mut end = fits;
        if fits < rest.len() {
            let break_at = |loose: bool| (1..=fits).rev().find(|i| is_break(rest, *i, loose));
            end = break_at(false).or_else(|| break_at(true)).unwrap_or(fits);
        }
        lines.push(trim(&rest[..end]));
        rest = trim(&rest[end..]);
    }
    lines
}

fn is_break(glyphs: &[Glyph], at: usize, loose: bool) -> bool {
    const TIES: &str = "=<>≤≥≈±×";
    let ties = |i: Option<usize>| {
        i.and_then(|i| glyphs.get(i))
            .is_some_and(|g| TIES.contains(g.shown))
    };
    glyphs[at].is_space() && (loose || !ties(at.checked_sub(1)) && !ties(Some(at + 1)))
}

fn trim(glyphs: &[Glyph]) -> &[Glyph] {
    let from = glyphs.iter().position(|g| !g.is_space()).unwrap_or(glyphs.len());
    let to = glyphs.iter().rposition(|g| !g.is_space()).map_or(from, |i| i + 1);
    &glyphs[from..to]
}

#[cfg(test)]
mod tests {
    use super::*;

    fn range_of(text: &str, part: &str) -> Range<usize> {
        let at = text.find(part).expect("the text holds it");
        at..at + part.len()
    }

    fn shown(text: &str, marked: &[&str], width: usize) -> String {
        let marks: Vec<_> = marked.iter().map(|m| range_of(text, m)).collect();
        lines(text, 0..text.len(), 0..0, &marks, width).join("\n")
    }

    #[test]
    fn carets_stand_below_what_is_marked() {
        let text = "Diary keepers watered less, t(28) = 2.20, p = .063.";
        assert_eq!(
            shown(text, &["28", "2.20", ".063"], 60),
            "Diary keepers watered less, t(28) = 2.20, p = .063.\n                              ^^    ^^^^      ^^^^"
        );
    }

    #[test]
    fn each_line_has_its_own_carets_and_a_result_is_not_torn_at_its_comparator() {
        let text = "Diary keepers watered less often, t(28) = 2.20, p = .063, than others did.";
        assert_eq!(
            shown(text, &["28", "2.20", ".063"], 42),
            "Diary keepers watered less often,\nt(28) = 2.20, p = .063, than others did.\n  ^^    ^^^^      ^^^^"
        );
    }

    #[test]
    fn wide_and_combining_characters_keep_the_carets_in_line() {
        assert_eq!(
            shown("水やり p = .063", &[".063"], 60),
            "水やり p = .063\n           ^^^^"
        );
        assert_eq!(
            shown("cafe\u{301} p = .063", &[".063"], 60),
            "cafe\u{301} p = .063\n         ^^^^"
        );
        assert_eq!(columns("水やり χ² e\u{301}"), 11);
    }

    #[test]
    fn a_long_sentence_is_cut_to_what_stands_around_the_statement() {
        let text = format!(
            "{}t(28) = 2.20, p = .063, {}.",
            "word ".repeat(60),
            "more ".repeat(60).trim()
        );
        assert_eq!(
            shown(&text, &[".063"], 40),
            "… word word word word word word word\n\
             word word word word word word word word\n\
             word t(28) = 2.20, p = .063, more more\n                       ^^^^\n\
             more more more more more more more …"
        );
    }

    #[test]
    fn cells_of_a_table_row_are_parted() {
        assert_eq!(
            shown("Beds\t4.10\t.043", &[".043"], 60),
            "Beds | 4.10 | .043\n              ^^^^"
        );
    }

    #[test]
    fn a_word_wider_than_the_line_is_broken() {
        assert_eq!(paragraph("aaaaaaaaaa bb", 4), ["aaaa", "aaaa", "aa", "bb"]);
        assert_eq!(paragraph("  a \n b  ", 4), ["a b"]);
        assert!(paragraph("", 4).is_empty());
    }

    #[test]
    fn strange_ranges_do_no_harm() {
        let text = "χ² = 4";
        assert_eq!(lines(text, 1..999, 700..900, &vec![3..1000; 1], 60).len(), 2);
        assert!(lines("", 0..0, 0..0, &[], 60).is_empty());
    }
}
