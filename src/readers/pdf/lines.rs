//! A *line* is one printed line of a column: its pieces from left to right, made of words.

use super::glyphs::{Area, Glyph, Glyphs, PageGlyphs, union};
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
    /// On the page as read (see [`Turn`](super::glyphs::Turn)).
    pub area: Area,
    /// A gap as wide as between cells or columns stands before it.
    pub after_gap: bool,
    /// Set in a bold font.
    pub bold: bool,
}

impl Word {
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
    /// Number of pieces: more than one in table rows and badly justified lines.
    pub pieces: usize,
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
                (p.baseline - piece.baseline).abs() < 0.35 * size
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
    let bold = ink.iter().filter(|g| glyphs.fonts[g.font as usize].bold).count();
    Some(Line {
        page: page.number,
        words,
        area,
        baseline,
        size,
        bold: bold * 10 >= ink.len() * 8,
        pieces: row.len(),
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
    let mut last: Option<&Glyph> = None;
    let mut fresh = true;
    let mut first = true;
    for g in piece.glyphs.iter().map(|g| &page.glyphs[*g as usize]) {
        if g.meaning.is_space() {
            fresh = true;
            continue;
        }
        if let Some(l) = last {
            fresh |= g.x0 - l.x1 > WORD_GAP * l.size.max(g.size);
        }
        last = Some(g);
        let shift = shift_of(g, baseline, size);
        let bold = glyphs.fonts[g.font as usize].bold;
        if fresh || first || words.is_empty() {
            words.push(Word {
                parts: Vec::new(),
                area: g.area(),
                after_gap: first && !words.is_empty(),
                bold,
            });
        }
        fresh = false;
        first = false;
        let Some(word) = words.last_mut() else { continue };
        word.area = union(word.area, g.area());
        match word.parts.last_mut() {
            Some((s, text)) if *s == shift => g.meaning.add_to(text),
            _ => {
                let mut text = String::new();
                g.meaning.add_to(&mut text);
                word.parts.push((shift, text));
            }
        }
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
