//! A *line* is one printed line of a column: its pieces from left to right, made of words.

use super::glyphs::{Area, Glyph, Glyphs, Meaning, PageGlyphs, union};
use super::pieces::{Piece, WORD_GAP, main_line};

/// How a part of a word stands to the baseline.
#[derive(Clone, Copy, Debug, PartialEq, Eq)]
pub enum Shift {
    None,
    Raised,
    Lowered,
}

/// Characters between two spaces.
#[derive(Clone, Debug, PartialEq)]
pub struct Word {
    pub parts: Vec<(Shift, String)>,
    /// Where its characters are drawn.
    pub inks: Vec<Ink>,
    /// On the page as read (see [`Turn`](super::glyphs::Turn)).
    pub area: Area,
    /// A gap as wide as between cells or columns stands before it.
    pub after_gap: bool,
    /// Set in a bold font.
    pub bold: bool,
    /// Where the page shows something else than the text layer says, in the order of the text.
    pub corrected: Vec<Corrected>,
}

/// A character of a word that the text layer has otherwise.
#[derive(Clone, Debug, PartialEq)]
pub struct Corrected {
    /// Byte range in the word's text.
    pub range: std::ops::Range<usize>,
    /// What the text layer says; empty if it says nothing.
    pub layer: String,
}

/// Where the characters from the end of the ink before up to this byte of the word's text are drawn.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Ink {
    pub end: u32,
    /// On the page as shown.
    pub area: Area,
}

impl Word {
    fn len(&self) -> usize {
        self.parts.iter().map(|p| p.1.len()).sum()
    }

    /// The text has grown by what is drawn here.
    fn ink(&mut self, area: Area) {
        let end = self.len() as u32;
        self.inks.push(Ink { end, area });
    }

    /// The last character has been changed by what is drawn here.
    fn ink_again(&mut self, area: Area) {
        let end = self.len() as u32;
        if let Some(last) = self.inks.last_mut() {
            *last = Ink {
                end,
                area: union(last.area, area),
            };
        }
    }

    pub fn text(&self) -> String {
        self.parts.iter().map(|(_, t)| t.as_str()).collect()
    }
}

/// One printed line.
#[derive(Clone, Debug)]
pub struct Line {
    pub page: u32,
    pub words: Vec<Word>,
    pub area: Area,
    pub baseline: f32,
    pub size: f32,
    /// Nearly all of it is bold.
    pub bold: bool,
    /// The font of most of its characters.
    pub font: u16,
    /// Number of pieces: more than one in table rows and badly justified lines.
    pub pieces: usize,
    /// The table that it keeps the place of; it has no words then.
    pub table: Option<usize>,
}

impl Line {
    /// Its words with single spaces between.
    pub fn text(&self) -> String {
        let mut text = String::new();
        for word in &self.words {
            if !text.is_empty() {
                text.push(' ');
            }
            for (_, part) in &word.parts {
                text.push_str(part);
            }
        }
        text
    }

    pub fn width(&self) -> f32 {
        self.area[2] - self.area[0]
    }
}

/// Groups the pieces of one region into rows of the same height, from top to bottom.
pub fn rows(mut pieces: Vec<Piece>) -> Vec<Vec<Piece>> {
    pieces.sort_by(|a, b| a.baseline.total_cmp(&b.baseline));
    let mut rows: Vec<Vec<Piece>> = Vec::new();
    for piece in pieces {
        let fits = rows.last().is_some_and(|row| {
            row.iter().all(|p| {
                let size = p.size.max(piece.size);
                // Raised marks that stand off from their line still belong to it.
                let slack = if p.size.min(piece.size) < 0.85 * size {
                    0.5
                } else {
                    0.35
                };
                p.table.is_none()
                    && piece.table.is_none()
                    && (p.baseline - piece.baseline).abs() < slack * size
                    && (p.area[2] - 0.3 * size <= piece.area[0] || piece.area[2] - 0.3 * size <= p.area[0])
            })
        });
        match rows.last_mut() {
            Some(row) if fits => row.push(piece),
            _ => rows.push(vec![piece]),
        }
    }
    for row in &mut rows {
        row.sort_by(|a, b| a.area[0].total_cmp(&b.area[0]));
    }
    rows
}

/// Makes a line of the pieces of one row.
pub fn line(row: &[Piece], page: &PageGlyphs, glyphs: &Glyphs) -> Option<Line> {
    if let Some(Piece {
        table: Some(table), ..
    }) = row.first()
    {
        return Some(Line {
            page: page.number,
            words: Vec::new(),
            area: row[0].area,
            baseline: row[0].baseline,
            size: row[0].size,
            bold: false,
            font: 0,
            pieces: 1,
            table: Some(*table),
        });
    }
    let ink: Vec<&Glyph> = row
        .iter()
        .flat_map(|p| &p.glyphs)
        .map(|g| &page.glyphs[*g as usize])
        .filter(|g| !g.meaning.is_space())
        .collect();
    let (baseline, size) = main_line(&ink);
    let mut words = Vec::new();
    for piece in row {
        // Scanned pages and slightly turned text: each piece has its own baseline.
        let own = if piece.size >= 0.9 * size {
            piece.baseline
        } else {
            baseline
        };
        piece_words(piece, own, size, page, glyphs, &mut words);
    }
    let area = words.iter().map(|w: &Word| w.area).reduce(union)?;
    let mut fonts: Vec<u16> = ink.iter().map(|g| g.font).collect();
    fonts.sort_unstable();
    // The middle of the sorted fonts is the font of any majority.
    let font = fonts[fonts.len() / 2];
    let bold = ink.iter().filter(|g| glyphs.fonts[g.font as usize].bold).count();
    Some(Line {
        page: page.number,
        words,
        area,
        baseline,
        size,
        bold: bold * 10 >= ink.len() * 8,
        font,
        pieces: row.len(),
        table: None,
    })
}

fn piece_words(
    piece: &Piece,
    baseline: f32,
    size: f32,
    page: &PageGlyphs,
    glyphs: &Glyphs,
    words: &mut Vec<Word>,
) {
    let mut last: Option<(&Glyph, Shift)> = None;
    // Where the pen goes on; behind a stack, at the end of its wider part.
    let mut pen = f32::MIN;
    let mut fresh = true;
    let mut first = true;
    let order = unstacked(&piece.glyphs, baseline, size, page);
    for g in order.iter().map(|g| &page.glyphs[*g as usize]) {
        if g.meaning.is_space() {
            fresh = true;
            continue;
        }
        let shift = match drawn_shift(g, glyphs) {
            Shift::None => shift_of(g, baseline, size),
            drawn => drawn,
        };
        if let Some((l, before)) = last {
            let decimal = || words.last().is_some_and(|w| is_decimal(w, l, g));
            let gap = if before == shift && shift != Shift::None {
                MARK_GAP
            } else if decimal() {
                DECIMAL_GAP
            } else {
                WORD_GAP
            };
            fresh |= g.x0 - pen > gap * l.size.max(g.size);
        }
        let before = last.map(|l| l.0);
        last = Some((g, shift));
        pen = if shift == Shift::None || fresh {
            g.x1
        } else {
            pen.max(g.x1)
        };
        let bold = glyphs.fonts[g.font as usize].bold;
        let new = fresh || first || words.is_empty();
        if new {
            words.push(Word {
                parts: Vec::new(),
                inks: Vec::new(),
                area: g.area(),
                after_gap: first && !words.is_empty(),
                bold,
                corrected: Vec::new(),
            });
        }
        fresh = false;
        first = false;
        let Some(word) = words.last_mut() else { continue };
        word.area = union(word.area, g.area());
        let ink = g.turn.area_to_page(g.ink, (page.width, page.height));
        if let (Meaning::Char(c), Some(l)) = (&g.meaning, before)
            && !new
            && let Some((_, text)) = word.parts.last_mut()
            && accented(l, g, *c, text)
        {
            word.ink_again(ink);
            continue;
        }
        let length = |word: &Word| word.parts.iter().map(|(_, text)| text.len()).sum::<usize>();
        let start = g.layer.as_ref().map_or(0, |_| length(word));
        match word.parts.last_mut() {
            Some((s, text)) if *s == shift => g.meaning.add_to(text),
            _ => {
                let mut text = String::new();
                g.meaning.add_to(&mut text);
                word.parts.push((shift, text));
            }
        }
        word.ink(ink);
        if let Some(layer) = &g.layer {
            word.corrected.push(Corrected {
                range: start..length(word),
                layer: layer.known_text(),
            });
        }
    }
}

/// Within raised or lowered marks; formula editors set their signs and letters apart (`10⁻ ⁵`).
const MARK_GAP: f32 = 0.25;
/// Some programs set a thin space behind the point of a number as behind any other point.
const DECIMAL_GAP: f32 = 0.2;

/// Whether the digit goes on with the number that the word ends with.
fn is_decimal(word: &Word, point: &Glyph, digit: &Glyph) -> bool {
    if point.meaning != Meaning::Char('.') || !matches!(digit.meaning, Meaning::Char('0'..='9')) {
        return false;
    }
    let level = (point.baseline - digit.baseline).abs() < 0.05 * digit.size;
    let before = word.parts.last().and_then(|p| p.1.chars().rev().nth(1));
    level && before.is_none_or(|c| c.is_ascii_digit() || matches!(c, '-' | '\u{2212}' | '–'))
}

/// The glyphs with raised and lowered marks that stand above one another in one order, whichever
/// was drawn first: an exponent comes before the numbers of an index (`χ²₁₇`) but behind a letter
/// (`ηp²`), and other raised marks come last (`t₂₈*`).
fn unstacked(order: &[u32], baseline: f32, size: f32, page: &PageGlyphs) -> Vec<u32> {
    let glyph = |i: u32| &page.glyphs[i as usize];
    let shift = |i: u32| {
        let g = glyph(i);
        (!g.meaning.is_space()).then(|| shift_of(g, baseline, size))
    };
    let mut out = order.to_vec();
    let mut at = 1;
    while at < out.len() {
        let (before, here) = (shift(out[at - 1]), shift(out[at]));
        let opposite = matches!(
            (before, here),
            (Some(Shift::Raised), Some(Shift::Lowered)) | (Some(Shift::Lowered), Some(Shift::Raised))
        );
        let (a, b) = (glyph(out[at - 1]), glyph(out[at]));
        if !opposite || b.x0 > a.x1 - 0.3 * (a.x1 - a.x0) {
            at += 1;
            continue;
        }
        let from = at
            - out[..at]
                .iter()
                .rev()
                .take_while(|g| shift(**g) == before)
                .count();
        let to = at + out[at..].iter().take_while(|g| shift(**g) == here).count();
        let text = |part: &[u32]| {
            let mut text = String::new();
            for g in part {
                glyph(*g).meaning.add_to(&mut text);
            }
            text
        };
        let (first, second) = (text(&out[from..at]), text(&out[at..to]));
        // `χ²` is a name of its own.
        let chi = from > 0 && matches!(glyph(out[from - 1]).meaning, Meaning::Char(c) if CHI.contains(&c));
        let swap = if before == Some(Shift::Raised) {
            !raised_first(&first, &second, chi)
        } else {
            raised_first(&second, &first, chi)
        };
        if swap {
            out[from..to].rotate_left(at - from);
        }
        at = to.max(at + 1);
    }
    out
}

/// χ, upright and in the styles of mathematical letters.
const CHI: [char; 4] = ['χ', '\u{1d6d8}', '\u{1d712}', '\u{1d74c}'];

fn raised_first(raised: &str, lowered: &str, chi: bool) -> bool {
    let exponent = raised
        .chars()
        .all(|c| c.is_numeric() || matches!(c, '-' | '\u{2212}' | '+' | '.'));
    let letters = lowered.chars().next().is_some_and(char::is_alphabetic);
    exponent && (chi || !letters)
}

/// Puts an accent on its letter when the two are drawn over each other, as TeX does; the text ends
/// with the one drawn first.
fn accented(first: &Glyph, second: &Glyph, c: char, text: &mut String) -> bool {
    let Some(end) = text.chars().last() else {
        return false;
    };
    let narrow = (first.x1 - first.x0).min(second.x1 - second.x0);
    if second.x0 > first.x1 - 0.4 * narrow {
        return false;
    }
    let (letter, mark) = match (combining(end), combining(c)) {
        (Some(mark), None) if c.is_alphabetic() => (c, mark),
        (None, Some(mark)) if end.is_alphabetic() => (end, mark),
        _ => return false,
    };
    let letter = match letter {
        'ı' => 'i',
        'ȷ' => 'j',
        c => c,
    };
    text.pop();
    match unicode_normalization::char::compose(letter, mark) {
        Some(both) => text.push(both),
        None => text.extend([letter, mark]),
    }
    true
}

/// The combining form of an accent that fonts have as a character of its own.
fn combining(c: char) -> Option<char> {
    Some(match c {
        '`' | '\u{2cb}' => '\u{300}',
        '´' | '\u{2ca}' => '\u{301}',
        '^' | 'ˆ' => '\u{302}',
        '~' | '˜' => '\u{303}',
        '¯' | '\u{2c9}' => '\u{304}',
        '˘' => '\u{306}',
        '˙' => '\u{307}',
        '¨' => '\u{308}',
        '˚' => '\u{30a}',
        '˝' => '\u{30b}',
        'ˇ' => '\u{30c}',
        '¸' => '\u{327}',
        '˛' => '\u{328}',
        '\u{300}'..='\u{30c}' => c,
        _ => return None,
    })
}

/// Digits that a font has ready raised or lowered: set like all others, but drawn small and off the
/// baseline. Old-style digits stand on it or reach below it in full size.
fn drawn_shift(g: &Glyph, glyphs: &Glyphs) -> Shift {
    let (Meaning::Char('0'..='9'), Some(shape)) = (&g.meaning, g.shape) else {
        return Shift::None;
    };
    let [_, low, _, high] = glyphs.shapes[shape as usize].bounds;
    match high - low {
        height if !(150.0..500.0).contains(&height) => Shift::None,
        _ if low > 180.0 => Shift::Raised,
        _ if low < -40.0 => Shift::Lowered,
        _ => Shift::None,
    }
}

fn shift_of(g: &Glyph, baseline: f32, size: f32) -> Shift {
    let up = baseline - g.baseline;
    let small = g.size < 0.9 * size;
    if (small && up > 0.15 * size) || up > 0.28 * size {
        Shift::Raised
    } else if small && up < -0.06 * size {
        Shift::Lowered
    } else {
        Shift::None
    }
}
