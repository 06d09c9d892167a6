//! A *glyph* is one printed character as the page shows it: what the file says it means, where it
//! stands, how large it is, and the outline that is drawn. The engine that interprets the file
//! hides behind these types, so that it can be exchanged.
//!
//! Coordinates are points in the *reading frame*: the page turned so that its text runs from left
//! to right, x to the right and y downwards from the upper left corner. [`Turn`] maps back.

use super::tables::Rules;

/// What the file's text layer says a glyph means.
#[derive(Clone, Debug, PartialEq)]
pub enum Meaning {
    Char(char),
    Many(Box<str>),
    /// The file doesn't say.
    Unknown,
}

impl Meaning {
    /// Adds the text to a string; an unknown glyph becomes U+FFFD, so that it is seen to be missing.
    pub fn add_to(&self, out: &mut String) {
        match self {
            // A hyphen that is drawn is there, however soft the file says it is.
            Meaning::Char('\u{ad}') => out.push('-'),
            Meaning::Char(c) => out.push(*c),
            Meaning::Many(s) => out.push_str(s),
            Meaning::Unknown => out.push('\u{fffd}'),
        }
    }

    /// The text that the file gives it; empty for an unknown glyph.
    pub fn known_text(&self) -> String {
        let mut text = String::new();
        if *self != Meaning::Unknown {
            self.add_to(&mut text);
        }
        text
    }

    /// True for a glyph that only makes room.
    pub fn is_space(&self) -> bool {
        match self {
            Meaning::Char(c) => c.is_whitespace() || *c == '\u{200b}' || c.is_control(),
            Meaning::Many(s) => s.trim().is_empty(),
            Meaning::Unknown => false,
        }
    }
}

/// How far the text is turned against the upright page, clockwise.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash, PartialOrd, Ord)]
pub enum Turn {
    None,
    Quarter,
    Half,
    ThreeQuarters,
}

impl Turn {
    /// From a point of the page to the reading frame; `width` and `height` are the page's.
    pub fn to_reading(self, (x, y): (f32, f32), (width, height): (f32, f32)) -> (f32, f32) {
        match self {
            Turn::None => (x, y),
            Turn::Quarter => (y, width - x),
            Turn::Half => (width - x, height - y),
            Turn::ThreeQuarters => (height - y, x),
        }
    }

    /// From the reading frame back to the page.
    pub fn to_page(self, (x, y): (f32, f32), (width, height): (f32, f32)) -> (f32, f32) {
        match self {
            Turn::None => (x, y),
            Turn::Quarter => (width - y, x),
            Turn::Half => (width - x, height - y),
            Turn::ThreeQuarters => (y, height - x),
        }
    }

    /// An area of the page in the reading frame.
    pub fn area_to_reading(self, area: Area, page: (f32, f32)) -> Area {
        span(
            self.to_reading((area[0], area[1]), page),
            self.to_reading((area[2], area[3]), page),
        )
    }

    /// An area from the reading frame back to the page.
    pub fn area_to_page(self, area: Area, page: (f32, f32)) -> Area {
        span(
            self.to_page((area[0], area[1]), page),
            self.to_page((area[2], area[3]), page),
        )
    }
}

/// The area between two corners.
pub fn span(a: (f32, f32), b: (f32, f32)) -> Area {
    [a.0.min(b.0), a.1.min(b.1), a.0.max(b.0), a.1.max(b.1)]
}

/// One printed character.
#[derive(Clone, Debug)]
pub struct Glyph {
    pub meaning: Meaning,
    /// What the text layer says, where the outline shows something else.
    pub layer: Option<Box<Meaning>>,
    /// The code that selects it in its font.
    pub code: u32,
    /// Index into [`Glyphs::fonts`].
    pub font: u16,
    /// Index into [`Glyphs::shapes`]; bitmap fonts have none, nor has text that is not shown.
    pub shape: Option<u32>,
    /// Font size in points, as shown.
    pub size: f32,
    /// Left end, where the pen is set down.
    pub x0: f32,
    /// Right end, where the pen goes on.
    pub x1: f32,
    /// Height of the baseline.
    pub baseline: f32,
    /// What is drawn of it. Where the outline isn't known, as [`Glyph::area`].
    pub ink: Area,
    pub turn: Turn,
}

pub use crate::manuscript::{Area, union};

impl Glyph {
    /// The space it takes on its line, from usual ascender to usual descender.
    pub fn area(&self) -> Area {
        [
            self.x0,
            self.baseline - 0.75 * self.size,
            self.x1,
            self.baseline + 0.22 * self.size,
        ]
    }
}

/// One step of an outline, in thousandths of the font size, y upwards.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Step {
    Move([f32; 2]),
    Line([f32; 2]),
    Quad([f32; 2], [f32; 2]),
    Curve([f32; 2], [f32; 2], [f32; 2]),
    Close,
}

/// What a glyph looks like, once for all its occurrences.
#[derive(Clone, Debug)]
pub struct Shape {
    pub font: u16,
    pub code: u32,
    pub outline: Vec<Step>,
    /// Area of the ink, in square thousandths of the font size.
    pub ink: f32,
    /// Left, lower, right, upper end of the ink.
    pub bounds: [f32; 4],
    /// How far the pen moves on, in thousandths of the font size.
    pub advance: f32,
}

/// A font as far as the pages show it.
#[derive(Clone, Debug, Default)]
pub struct FontUse {
    /// Number of glyphs shown with it.
    pub uses: u32,
    /// Clearly heavier than the font that most of the document is set in.
    pub bold: bool,
}

/// The glyphs of one page, in the order in which the file draws them.
#[derive(Clone, Debug, Default)]
pub struct PageGlyphs {
    /// From 1.
    pub number: u32,
    pub width: f32,
    pub height: f32,
    pub glyphs: Vec<Glyph>,
    /// Lines and bars, with the page upright ([`Turn::None`]).
    pub rules: Rules,
    /// The page shows at least one image.
    pub image: bool,
    /// Interpretation was given up before the end of the page.
    pub cut_short: bool,
}

/// Everything an engine hands over.
#[derive(Clone, Debug, Default)]
pub struct Glyphs {
    pub pages: Vec<PageGlyphs>,
    pub fonts: Vec<FontUse>,
    pub shapes: Vec<Shape>,
    /// Pages that were not looked at, because there are too many.
    pub left_out: usize,
}

/// A font this much heavier than the main one, letter by letter, is bold. Optical sizes of one
/// face differ by up to about 1.15, real bold faces by 1.35 and more.
const BOLD: f32 = 1.25;

impl Glyphs {
    /// Finds the bold fonts by comparing how densely the same letters are inked: font names are
    /// often missing or made up, the ink is what the reader of the page sees.
    pub fn find_bold_fonts(&mut self) {
        let Some(main) = (0..self.fonts.len()).max_by_key(|f| self.fonts[*f].uses) else {
            return;
        };
        // The letter that each shape is.
        let mut letters: Vec<Option<char>> = vec![None; self.shapes.len()];
        for glyph in self.pages.iter().flat_map(|p| &p.glyphs) {
            if let (Some(shape), Meaning::Char(c)) = (glyph.shape, &glyph.meaning)
                && c.is_ascii_alphabetic()
            {
                letters[shape as usize] = Some(*c);
            }
        }
        let mut density = std::collections::HashMap::new();
        for (s, letter) in self.shapes.iter().zip(letters) {
            let room = (s.bounds[2] - s.bounds[0]) * (s.bounds[3] - s.bounds[1]);
            if let (Some(c), true) = (letter, room > 0.0) {
                density.entry((s.font, c)).or_insert(s.ink / room);
            }
        }
        for (index, font) in self.fonts.iter_mut().enumerate() {
            let mut ratios: Vec<f32> = ('A'..='z')
                .filter_map(|c| Some(density.get(&(index as u16, c))? / density.get(&(main as u16, c))?))
                .filter(|r| r.is_finite())
                .collect();
            ratios.sort_by(f32::total_cmp);
            font.bold = ratios.len() >= 3 && ratios[ratios.len() / 2] >= BOLD;
        }
    }
}

#[cfg(test)]
mod tests {
    use super::*;

    #[test]
    fn turning_there_and_back_is_the_identity() {
        for turn in [Turn::None, Turn::Quarter, Turn::Half, Turn::ThreeQuarters] {
            let page = (600.0, 800.0);
            let there = turn.to_reading((100.0, 50.0), page);
            assert_eq!(turn.to_page(there, page), (100.0, 50.0));
            let area = [100.0, 50.0, 130.0, 60.0];
            let there = turn.area_to_reading(area, page);
            assert_eq!(turn.area_to_page(there, page), area);
        }
    }
}
