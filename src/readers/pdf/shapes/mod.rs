//! *Shapes* are a second witness of what a page says. A file's text layer may call a glyph anything;
//! what the reader of the page sees is its outline. Here the outlines of the marks that statistics
//! depend on are recognised by their geometry ([`marks`]), those of some Greek letters by comparison
//! ([`letters`]), once for every distinct glyph. Where that contradicts the text layer, the glyph
//! means what it shows, and what the layer said is kept beside it.
//!
//! Two rules guard against false hits. What the layer says stands if a glyph of this look may well
//! be called that ([`agreement`]). And a font that has most of the alphabet is believed about its
//! letters and digits: codes are not shared, so that a font with a real `b` has no other `b`.

mod agreement;
mod letters;
mod marks;
mod slices;
mod strokes;

use super::glyphs::{Glyphs, Meaning, Shape};
use letters::Picture;
use slices::{Edges, ROWS, Row};
use std::collections::HashMap;

/// Steps of an outline that is looked at: fewer make no area, more make an ornament.
const STEPS: std::ops::Range<usize> = 4..600;

/// Distinct glyphs that are looked at; the largest handbook has a few thousand.
const MOST: usize = 20_000;

/// A font with this many distinct letters is a text font.
const ALPHABET: u32 = 20;

/// So is one with this many, if this many of the most frequent eight are among them.
const FEW: u32 = 12;
const USUAL: usize = 6;

/// A font with this many of the ten digits has digits and nothing else under their names.
const DIGITS: u32 = 8;

/// What the outline of a shape says, against one meaning that the text layer gives it.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Verdict {
    /// The layer may be right, or the outline is nothing that is known.
    Stands,
    /// The outline shows this.
    Shows(char),
    /// The same mark under another code: no contradiction, but a better name.
    Renames(char),
    /// There is ink, but neither layer nor outline say what it is.
    Unknown,
}

/// What is known of a font's layer.
#[derive(Clone, Debug, Default)]
struct FontLayer {
    letters: u64,
    digits: u16,
    /// For each character of ASCII the shape that it is said to be; `None` if there are several.
    codes: HashMap<char, Option<u32>>,
    /// It calls a glyph something else than it is.
    lies: bool,
    /// That was only seen by one of its letters.
    found_out: bool,
}

impl FontLayer {
    fn add(&mut self, c: char, shape: u32) {
        if c.is_ascii_alphabetic() {
            self.letters |= 1 << (c as u32 - 'A' as u32);
        }
        if let Some(digit) = c.to_digit(10) {
            self.digits |= 1 << digit;
        }
        self.codes
            .entry(c)
            .and_modify(|s| {
                if *s != Some(shape) {
                    *s = None;
                }
            })
            .or_insert(Some(shape));
    }

    fn is_text(&self) -> bool {
        let usual = "etaoinsr"
            .chars()
            .filter(|c| self.letters >> (*c as u32 - 'A' as u32) & 1 == 1)
            .count();
        let letters = self.letters.count_ones();
        letters >= ALPHABET || letters >= FEW && usual >= USUAL
    }

    /// Whether the layer's word is to be taken: for letters, digits and what belongs to plain text,
    /// but not for the signs that texts like to take from elsewhere.
    fn believed(&self, c: char) -> bool {
        // Likewise a font that has its digits.
        let complete = match c {
            '0'..='9' => self.digits.count_ones() >= DIGITS || self.is_text(),
            c => self.is_text() && !"=<>+/:*%~|".contains(c),
        };
        complete && self.codes.get(&c).is_some_and(Option::is_some)
    }
}

/// One meaning that the layer gives a shape, and what came of comparing them.
#[derive(Clone, Copy, Debug)]
struct Pair {
    said: Option<char>,
    verdict: Verdict,
}

/// For each shape its meanings, nearly always one: every glyph of the file is looked up here, so
/// nothing is hashed.
struct Pairs(Vec<Vec<Pair>>);

impl Pairs {
    /// The pairs of all glyphs, and what they tell of each font's layer.
    fn of(glyphs: &Glyphs, layers: &mut [FontLayer]) -> Pairs {
        let mut all: Vec<Vec<Pair>> = vec![Vec::new(); glyphs.shapes.len()];
        for g in glyphs.pages.iter().flat_map(|p| &p.glyphs) {
            let Some(shape) = g.shape else { continue };
            let said = agreement::single(&g.meaning);
            let own = &mut all[shape as usize];
            if own.iter().any(|p| p.said == said) {
                continue;
            }
            own.push(Pair {
                said,
                verdict: Verdict::Stands,
            });
            if let Some(c) = said.filter(char::is_ascii_graphic) {
                layers[g.font as usize].add(c, shape);
            }
        }
        Pairs(all)
    }

    /// The verdicts on the meaning of each glyph are carried out.
    fn apply(&self, glyphs: &mut Glyphs) {
        let stands = |p: &Pair| p.verdict == Verdict::Stands;
        let untouched: Vec<bool> = self.0.iter().map(|own| own.iter().all(stands)).collect();
        if untouched.iter().all(|u| *u) {
            return;
        }
        for g in glyphs.pages.iter_mut().flat_map(|p| &mut p.glyphs) {
            let Some(shape) = g.shape.filter(|s| !untouched[*s as usize]) else {
                continue;
            };
            let said = agreement::single(&g.meaning);
            match self.0[shape as usize]
                .iter()
                .find(|p| p.said == said)
                .map(|p| p.verdict)
            {
                Some(Verdict::Shows(c)) => {
                    let layer = std::mem::replace(&mut g.meaning, Meaning::Char(c));
                    g.layer = Some(Box::new(layer));
                }
                Some(Verdict::Renames(c)) => g.meaning = Meaning::Char(c),
                Some(Verdict::Unknown) => g.meaning = Meaning::Unknown,
                Some(Verdict::Stands) | None => {}
            }
        }
    }
}

/// Compares every distinct glyph with what the text layer says of it, and corrects the meanings.
pub fn verify(glyphs: &mut Glyphs) {
    let mut layers: Vec<FontLayer> = vec![FontLayer::default(); glyphs.fonts.len()];
    let mut pairs = Pairs::of(glyphs, &mut layers);
    let mut undecided: Vec<Undecided> = Vec::new();
    for (index, (shape, own)) in glyphs.shapes.iter().zip(&mut pairs.0).enumerate().take(MOST) {
        let layer = &mut layers[shape.font as usize];
        let mut cut: Option<(Edges, Vec<Row>)> = None;
        for (meaning, pair) in own.iter_mut().enumerate() {
            let said = pair.said;
            if let Some(c) = said.and_then(agreement::plain) {
                pair.verdict = Verdict::Renames(c);
            } else if shape.outline.is_empty() && said.is_none() {
                pair.verdict = Verdict::Renames(' ');
            }
            let doubted = |c| !layer.believed(c) && !agreement::beyond_doubt(c);
            if pair.verdict != Verdict::Stands
                || !STEPS.contains(&shape.outline.len())
                || !said.is_none_or(doubted)
            {
                continue;
            }
            let (edges, rows) = cut.get_or_insert_with(|| {
                let edges = Edges::of(&shape.outline);
                let rows = edges.rows(ROWS);
                (edges, rows)
            });
            pair.verdict = as_mark(shape, edges, rows, said);
            layer.lies |= matches!(pair.verdict, Verdict::Shows(_)) && said.is_some_and(|c| !c.is_control());
            let open = matches!(pair.verdict, Verdict::Stands | Verdict::Unknown);
            if open && !layer.is_text() && agreement::may_hide_letter(said) {
                undecided.extend(Picture::of(edges, rows).map(|picture| Undecided {
                    shape: index,
                    meaning,
                    picture,
                }));
            }
        }
    }
    // Letters come second, and once more where one of them shows that its font is wrong: such a font
    // is trusted less, also about letters that look like others.
    for again in [false, true] {
        for u in &undecided {
            let layer = &mut layers[glyphs.shapes[u.shape].font as usize];
            let pair = &mut pairs.0[u.shape][u.meaning];
            if again && (!layer.found_out || matches!(pair.verdict, Verdict::Shows(_))) {
                continue;
            }
            if let Some(letter) = letters::greek(&u.picture, pair.said, layer.lies) {
                layer.found_out |= !layer.lies && pair.said.is_some();
                layer.lies |= pair.said.is_some();
                pair.verdict = Verdict::Shows(letter);
            }
        }
    }
    pairs.apply(glyphs);
}

/// An outline that is no mark and may be a letter.
struct Undecided {
    shape: usize,
    /// Index of the pair.
    meaning: usize,
    picture: Picture,
}

fn as_mark(shape: &Shape, edges: &Edges, rows: &[Row], said: Option<char>) -> Verdict {
    // Only a mark with one stroke or none at half its height is ever called a letter or digit.
    if said.is_some_and(|c| c.is_ascii_alphanumeric()) && rows[ROWS / 2].len() > 1 {
        return Verdict::Stands;
    }
    match marks::mark(edges, rows, shape.advance) {
        Some(mark) if said == Some('\u{ad}') && agreement::is_dash(mark) => Verdict::Renames('-'),
        Some(mark) if agreement::contradicts(mark, said) => Verdict::Shows(mark.char()),
        Some(_) => Verdict::Stands,
        // A control code may be a space that somebody gave a box; with ink it is a character.
        None => match said {
            Some(c) if agreement::is_nothing(c) && !c.is_whitespace() && shape.ink > 0.0 => Verdict::Unknown,
            _ => Verdict::Stands,
        },
    }
}
