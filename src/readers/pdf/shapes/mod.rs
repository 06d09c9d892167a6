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

use super::glyphs::{Glyphs, Meaning, Shape};
use slices::Edges;
use std::collections::HashMap;

/// A font with this many distinct letters is a text font.
const ALPHABET: u32 = 20;

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
    /// For each ASCII letter and digit the shape that it is said to be; `None` if there are several.
    codes: HashMap<char, Option<u32>>,
    /// A mark in it is called something else.
    lies: bool,
}

impl FontLayer {
    fn add(&mut self, c: char, shape: u32) {
        if c.is_ascii_alphabetic() {
            self.letters |= 1 << (c as u32 - 'A' as u32);
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
        self.letters.count_ones() >= ALPHABET
    }

    /// Whether the layer's word for a letter or digit is to be taken.
    fn believed(&self, c: char) -> bool {
        self.is_text() && self.codes.get(&c).is_some_and(Option::is_some)
    }
}

/// Compares every distinct glyph with what the text layer says of it, and corrects the meanings.
pub fn verify(glyphs: &mut Glyphs) {
    let mut layers: Vec<FontLayer> = vec![FontLayer::default(); glyphs.fonts.len()];
    let mut seen: HashMap<(u32, Option<char>), Verdict> = HashMap::new();
    // What each distinct pair of shape and meaning is, once.
    for page in &glyphs.pages {
        for g in &page.glyphs {
            let Some(shape) = g.shape else { continue };
            let said = agreement::single(&g.meaning);
            if seen.insert((shape, said), Verdict::Stands).is_none()
                && let Some(c) = said.filter(char::is_ascii_alphanumeric)
            {
                layers[g.font as usize].add(c, shape);
            }
        }
    }
    let mut pairs: Vec<(u32, Option<char>)> = seen.keys().copied().collect();
    pairs.sort_unstable();
    let mut outlines: HashMap<u32, Edges> = HashMap::new();
    let mut rest = Vec::new();
    for (shape, said) in pairs {
        let s = &glyphs.shapes[shape as usize];
        let layer = &mut layers[s.font as usize];
        if let Some(c) = said.and_then(agreement::plain) {
            seen.insert((shape, said), Verdict::Renames(c));
            continue;
        }
        if s.outline.is_empty() && said.is_none() {
            seen.insert((shape, said), Verdict::Renames(' '));
            continue;
        }
        if s.outline.len() < 4 || said.is_some_and(|c| layer.believed(c) || agreement::beyond_doubt(c)) {
            continue;
        }
        let edges = outlines.entry(shape).or_insert_with(|| Edges::of(&s.outline));
        let verdict = as_mark(s, edges, said);
        layer.lies |= matches!(verdict, Verdict::Shows(_)) && said.is_some_and(|c| !c.is_control());
        if matches!(verdict, Verdict::Stands | Verdict::Unknown) {
            rest.push((shape, said));
        }
        seen.insert((shape, said), verdict);
    }
    // Letters come second, and those that look like others last: a font that is wrong elsewhere is
    // trusted less.
    for _ in 0..2 {
        rest.retain(|(shape, said)| {
            let s = &glyphs.shapes[*shape as usize];
            let layer = &mut layers[s.font as usize];
            if layer.is_text() || !agreement::may_hide_letter(*said) {
                return false;
            }
            let picture = outlines.get(shape).and_then(letters::Picture::of);
            let letter = picture.and_then(|picture| letters::greek(&picture, *said, layer.lies));
            if let Some(letter) = letter {
                layer.lies |= said.is_some();
                seen.insert((*shape, *said), Verdict::Shows(letter));
            }
            letter.is_none()
        });
    }
    if seen.values().all(|v| *v == Verdict::Stands) {
        return;
    }
    for page in &mut glyphs.pages {
        for g in &mut page.glyphs {
            let Some(shape) = g.shape else { continue };
            match seen.get(&(shape, agreement::single(&g.meaning))) {
                Some(Verdict::Shows(c)) => {
                    let layer = std::mem::replace(&mut g.meaning, Meaning::Char(*c));
                    g.layer = Some(Box::new(layer));
                }
                Some(Verdict::Renames(c)) => g.meaning = Meaning::Char(*c),
                Some(Verdict::Unknown) => g.meaning = Meaning::Unknown,
                _ => {}
            }
        }
    }
}

fn as_mark(shape: &Shape, edges: &Edges, said: Option<char>) -> Verdict {
    match marks::mark(edges, shape.advance) {
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
