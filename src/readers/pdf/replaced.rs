//! *Replaced* text: a file may say, for a stretch of glyphs, what text they stand for (`ActualText`):
//! the letters of a ligature, a formula, the soft hyphen at the end of a line. It is taken at its word
//! where that is plainly about the same thing that is drawn, as some files put a description or
//! the source of the formula there.

use super::glyphs::{Glyph, Meaning, union};

/// Takes the glyphs from index `from` on for `text`.
pub fn replace(glyphs: &mut Vec<Glyph>, from: usize, text: &str) {
    let Some(span) = glyphs.get(from..) else { return };
    let drawn: Vec<usize> = (from..glyphs.len())
        .filter(|i| !glyphs[*i].meaning.is_space())
        .collect();
    let text: String = text.chars().filter(|c| !is_unseen(*c)).collect();
    let text = text.trim();
    if drawn.is_empty() || !believable(span, drawn.len(), text) {
        return;
    }
    let letters: Vec<char> = text.chars().filter(|c| !c.is_whitespace()).collect();
    if letters.len() == drawn.len() {
        for (i, c) in drawn.into_iter().zip(letters) {
            glyphs[i].meaning = Meaning::Char(c);
        }
        return;
    }
    let first = glyphs[drawn[0]].clone();
    let level = |g: &Glyph| {
        g.turn == first.turn
            && (g.baseline - first.baseline).abs() < 0.1 * first.size
            && (g.size - first.size).abs() < 0.1 * first.size
    };
    // What is raised, lowered or on another line can't be put together without losing that.
    if !drawn.iter().all(|i| level(&glyphs[*i])) {
        return;
    }
    let whole = drawn
        .iter()
        .map(|i| &glyphs[*i])
        .fold(first.clone(), |whole, g| Glyph {
            x0: whole.x0.min(g.x0),
            x1: whole.x1.max(g.x1),
            ink: union(whole.ink, g.ink),
            ..whole
        });
    glyphs.truncate(from);
    glyphs.push(Glyph {
        meaning: Meaning::Many(text.into()),
        // It no longer looks like any one glyph of the font.
        shape: if drawn.len() == 1 { first.shape } else { None },
        ..whole
    });
}

/// Marks that only say how their neighbours are drawn: joiners, directions, variants.
fn is_unseen(c: char) -> bool {
    matches!(c, '\u{200b}'..='\u{200f}' | '\u{202a}'..='\u{202e}' | '\u{2060}'..='\u{2064}' | '\u{fe00}'..='\u{fe0f}' | '\u{feff}')
}

/// Whether the text can be what the glyphs show.
fn believable(span: &[Glyph], drawn: usize, text: &str) -> bool {
    // Source code of a formula, or words about it.
    if text.is_empty() || text.contains('\\') || text.chars().count() > 4 * drawn + 4 {
        return false;
    }
    let mut shown = String::new();
    let mut known = true;
    for glyph in span {
        known &= glyph.meaning != Meaning::Unknown;
        glyph.meaning.add_to(&mut shown);
    }
    let digits = |s: &str| -> String { s.chars().filter(char::is_ascii_digit).collect() };
    // Whoever reads the page sees the digits; no word for them may change one.
    !known || digits(&shown) == digits(text)
}

/// A string of the file as text: UTF-16 or UTF-8 where it says so, else one byte for each character.
pub fn text(bytes: &[u8]) -> String {
    match bytes {
        [0xfe, 0xff, rest @ ..] => encoding_rs::UTF_16BE
            .decode_without_bom_handling(rest)
            .0
            .into_owned(),
        [0xff, 0xfe, rest @ ..] => encoding_rs::UTF_16LE
            .decode_without_bom_handling(rest)
            .0
            .into_owned(),
        [0xef, 0xbb, 0xbf, rest @ ..] => String::from_utf8_lossy(rest).into_owned(),
        // PDFDocEncoding differs from this in a few typographic marks only.
        bytes => encoding_rs::WINDOWS_1252
            .decode_without_bom_handling(bytes)
            .0
            .into_owned(),
    }
}

#[cfg(test)]
mod tests {
    use super::super::glyphs::{Area, Turn};
    use super::*;

    fn glyphs(text: &str) -> Vec<Glyph> {
        text.chars()
            .enumerate()
            .map(|(i, c)| {
                let x = 5.0 * i as f32;
                Glyph {
                    meaning: if c == '?' {
                        Meaning::Unknown
                    } else {
                        Meaning::Char(c)
                    },
                    layer: None,
                    code: c as u32,
                    font: 0,
                    shape: None,
                    size: 10.0,
                    x0: x,
                    x1: x + 5.0,
                    baseline: 100.0,
                    ink: [x, 93.0, x + 5.0, 100.0],
                    turn: Turn::None,
                }
            })
            .collect()
    }

    fn replaced(shown: &str, text: &str) -> (String, Area) {
        let mut all = glyphs(shown);
        replace(&mut all, 1, text);
        let mut out = String::new();
        for g in &all {
            g.meaning.add_to(&mut out);
        }
        (out, all[1].ink)
    }

    #[test]
    fn glyphs_stand_for_what_the_file_says() {
        // One for one, a ligature, and a formula drawn with glyphs that mean nothing.
        assert_eq!(replaced("a-", "\u{ad}").0, "a-");
        assert_eq!(replaced("n?", "ffi").0, "nffi");
        assert_eq!(replaced("a↩", "↩\u{fe0e}").0, "a↩");
        assert_eq!(
            replaced("x????", "p = .03"),
            ("xp = .03".into(), [5.0, 93.0, 25.0, 100.0])
        );
    }

    #[test]
    fn descriptions_do_not_replace_what_is_shown() {
        for text in [
            "",
            r"\chi^2_{17}",
            "1.20",
            "the probability of the observed difference under chance",
        ] {
            assert_eq!(replaced("p2.20", text).0, "p2.20", "{text}");
        }
    }

    #[test]
    fn strings_say_how_they_are_written() {
        assert_eq!(text(b"\xfe\xff\x03\xb7\x00p"), "ηp");
        assert_eq!(text(b"\xef\xbb\xbf\xce\xb7p"), "ηp");
        assert_eq!(text(b"p \xb1"), "p ±");
    }
}
