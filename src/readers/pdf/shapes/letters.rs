//! *Letters*: which Greek letter an outline is, by comparing a coarse picture of it with pictures of
//! letters from freely licensed typefaces (`letters.txt`, written by `fixtures/shapes/letters.py`).
//! An outline counts as a Greek letter only if it looks like one, looks like no other letter, and
//! does not look like the letter that the text layer says it is.

use super::slices::{self, Edges, Row, Span};
use std::sync::OnceLock;

const COLUMNS: usize = 10;
const ROWS: usize = 12;
/// Cuts per row of the picture.
const CUTS: usize = slices::ROWS / ROWS;
/// The strongest ink of a cell.
const FULL: f32 = 15.0;

/// Letters that statistics are named by; others are compared with, but never taken.
const WANTED: &str = "αβκμρστφχωΔη";

/// Pictures further apart than this share of their ink show different letters: among 500 typefaces
/// nine in ten prints of a letter have a reference nearer than this.
const NEAR: f32 = 0.3;
/// The letter that the layer says must be this much further away than the Greek one.
const APART: f32 = 1.35;
/// And a letter that looks like it by this much.
const TWINS_APART: f32 = 2.5;

/// The coarse picture of an outline.
#[derive(Clone, Debug, PartialEq)]
pub struct Picture {
    cells: [u8; COLUMNS * ROWS],
    ink: f32,
    /// Lower and upper end and width, in thousandths of the font size.
    low: f32,
    high: f32,
    width: f32,
}

impl Picture {
    /// The picture of an outline from its cuts; `None` if it has no area.
    pub fn of(edges: &Edges, rows: &[Row]) -> Option<Picture> {
        let [left, low, right, high] = edges.bounds;
        let (width, height) = (right - left, high - low);
        if !(width > 50.0 && height > 50.0 && width < 2000.0 && height < 2000.0) {
            return None;
        }
        let cell = width / COLUMNS as f32;
        let mut ink = [0.0f32; COLUMNS * ROWS];
        for (i, row) in rows.iter().enumerate() {
            let line = &mut ink[i / CUTS * COLUMNS..][..COLUMNS];
            for Span { from, to } in row.iter() {
                let (from, to) = ((from - left) / cell, (to - left) / cell);
                let last = (to as usize).min(COLUMNS - 1);
                for (c, sum) in line.iter_mut().enumerate().take(last + 1).skip(from as usize) {
                    *sum += (to.min(c as f32 + 1.0) - from.max(c as f32)).max(0.0);
                }
            }
        }
        let mut cells = [0; COLUMNS * ROWS];
        for (cell, sum) in cells.iter_mut().zip(ink) {
            *cell = (sum / CUTS as f32 * FULL + 0.5).min(FULL) as u8;
        }
        Some(Picture::new(cells, low, high, width))
    }

    fn new(cells: [u8; COLUMNS * ROWS], low: f32, high: f32, width: f32) -> Picture {
        let ink = cells.iter().map(|c| *c as f32).sum();
        Picture {
            cells,
            ink,
            low,
            high,
            width,
        }
    }

    /// How unlike two pictures are: 0 is alike, 1 has nothing in common. Gives up beyond `most`.
    fn unlike(&self, other: &Picture, most: f32) -> f32 {
        let (height, others) = (self.high - self.low, other.high - other.low);
        // Heights differ with the face; where a letter stands on its line does not.
        let place = ((self.low - other.low).abs() + (self.high - other.high).abs()) / (height + others);
        if 0.5 * place > most {
            return 0.5 * place;
        }
        0.5 * place + self.unlike_anywhere(other)
    }

    /// The same for a letter that stands on the line as the other does, but may be smaller.
    fn unlike_small(&self, other: &Picture) -> f32 {
        let rise = (self.low - other.low).abs() / (self.high - self.low + other.high - other.low);
        rise + self.unlike_anywhere(other)
    }

    /// The same for letters of any size at any height.
    fn unlike_anywhere(&self, other: &Picture) -> f32 {
        let shape = (self.width * (other.high - other.low)) / (other.width * (self.high - self.low));
        let differ: u32 = self
            .cells
            .iter()
            .zip(&other.cells)
            .map(|(a, b)| a.abs_diff(*b) as u32)
            .sum();
        0.2 * shape.ln().abs() + differ as f32 / (self.ink + other.ink)
    }
}

/// One line of the file.
struct Reference {
    letter: char,
    picture: Picture,
}

fn references() -> &'static [Reference] {
    static READ: OnceLock<Vec<Reference>> = OnceLock::new();
    READ.get_or_init(|| {
        include_str!("letters.txt")
            .lines()
            .filter_map(reference)
            .collect()
    })
}

fn reference(line: &str) -> Option<Reference> {
    let mut fields = line.split(' ');
    let letter = fields.next()?.parse().ok()?;
    let mut number = || fields.next()?.parse::<f32>().ok();
    let (low, high, width) = (number()?, number()?, number()?);
    let levels = fields.next()?.as_bytes();
    let mut cells = [0; COLUMNS * ROWS];
    if levels.len() != cells.len() {
        return None;
    }
    for (cell, level) in cells.iter_mut().zip(levels) {
        *cell = (*level as char).to_digit(16)? as u8;
    }
    Some(Reference {
        letter,
        picture: Picture::new(cells, low, high, width),
    })
}

/// The letter with its variants under one name.
fn named(letter: char) -> char {
    match letter {
        'ϕ' => 'φ',
        'ϱ' => 'ρ',
        c => c,
    }
}

/// Letters that look like a Greek one in many faces.
const TWINS: &[(char, &str)] = &[
    ('α', "a"),
    ('β', "B"),
    ('η', "nqy"),
    ('κ', "kKrR"),
    ('μ', "u"),
    ('ρ', "p"),
    ('σ', "oagGU"),
    ('τ', "tTiIr"),
    ('χ', "xX"),
    ('ω', "w"),
    ('Δ', "A"),
];

/// The Greek letter that an outline shows, where the text layer says it is `said`. `lies` says that
/// the same layer is known to be wrong elsewhere.
pub fn greek(picture: &Picture, said: Option<char>, lies: bool) -> Option<char> {
    let all = references();
    let nearest =
        |like: &dyn Fn(&Reference) -> Option<f32>| all.iter().filter_map(like).fold(f32::MAX, f32::min);
    let own = said.filter(char::is_ascii_alphanumeric).map_or(f32::MAX, |said| {
        let capital = said.to_ascii_uppercase();
        nearest(&|r| match r.letter {
            c if c == said => Some(picture.unlike(&r.picture, f32::MAX)),
            // Small capitals.
            c if c == capital => Some(picture.unlike_small(&r.picture)),
            _ => None,
        })
    });
    // Most letters are what they say: nothing more to look for.
    if own < NEAR / 2.0 {
        return None;
    }
    let (mut best, mut letter) = (NEAR, None);
    for r in all {
        let distance = picture.unlike(&r.picture, best);
        if distance < best {
            (best, letter) = (distance, Some(r.letter));
        }
    }
    let letter = named(letter?);
    let twins = TWINS.iter().find(|(g, _)| *g == letter).map_or("", |t| t.1);
    let apart = match said {
        Some(said) if twins.contains(said) && !lies => best < NEAR / 2.0 && own > TWINS_APART * best,
        Some(_) => own > APART * best,
        // Without a word from the layer it could just as well be a letter that looks like it.
        None => {
            let twin = |r: &Reference| twins.contains(r.letter).then(|| picture.unlike_small(&r.picture));
            nearest(&twin) > APART * best
        }
    };
    (WANTED.contains(letter) && apart).then_some(letter)
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn every_line_of_the_references_is_read() {
        let lines = include_str!("letters.txt")
            .lines()
            .filter(|l| !l.starts_with('#'))
            .count();
        assert_eq!(references().len(), lines);
        for letter in WANTED.chars() {
            let faces = references().iter().filter(|r| r.letter == letter).count();
            assert!(faces >= 15, "{letter} is known from {faces} faces");
        }
    }
}
