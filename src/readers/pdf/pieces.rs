//! A *piece* is a stretch of glyphs on one baseline with no gap wider than a word space: a line
//! of text in one column, a table cell, a label in a figure. Raised and lowered glyphs belong to
//! the piece they stand in.
//!
//! Glyphs keep the order in which the file draws them as long as they follow one another on the
//! page; that order is right for stacked super- and subscripts, where geometry alone is not.

use super::glyphs::{Area, Glyph, PageGlyphs, Turn, union};
use rustc_hash::FxHashMap;

/// Glyphs that belong together on a baseline.
#[derive(Clone, Debug)]
pub struct Piece {
    /// Indexes into the page's glyphs, in reading order, spaces included.
    pub glyphs: Vec<u32>,
    pub area: Area,
    pub baseline: f32,
    /// Size of most of its text.
    pub size: f32,
    /// The table that it keeps the place of; it has no glyphs then.
    pub table: Option<usize>,
}

impl Piece {
    /// A line's room in the place of a table.
    pub fn in_place_of(table: usize, area: Area) -> Piece {
        Piece {
            glyphs: Vec::new(),
            area,
            baseline: area[3],
            size: area[3] - area[1],
            table: Some(table),
        }
    }

    fn new(glyphs: Vec<u32>, page: &PageGlyphs) -> Option<Piece> {
        let ink: Vec<&Glyph> = glyphs
            .iter()
            .map(|g| &page.glyphs[*g as usize])
            .filter(|g| !g.meaning.is_space())
            .collect();
        let area = ink.iter().map(|g| g.area()).reduce(union)?;
        let (baseline, size) = main_line(&ink);
        Some(Piece {
            glyphs,
            area,
            baseline,
            size,
            table: None,
        })
    }

    pub fn width(&self) -> f32 {
        self.area[2] - self.area[0]
    }

    /// Its text with nothing between the words but single spaces; for comparing.
    pub fn plain_text(&self, page: &PageGlyphs) -> String {
        let mut text = String::new();
        let mut last: Option<&Glyph> = None;
        for g in self.glyphs.iter().map(|g| &page.glyphs[*g as usize]) {
            let gap = last.is_some_and(|l| g.x0 - l.x1 > WORD_GAP * l.size.max(g.size));
            if (gap || g.meaning.is_space()) && !text.ends_with(' ') {
                text.push(' ');
            }
            if !g.meaning.is_space() {
                g.meaning.add_to(&mut text);
            }
            last = Some(g);
        }
        text.trim().to_string()
    }
}

/// A gap this wide, in font sizes, stands between words. Kerning and thin spaces stay below,
/// the tightest justified lines above.
pub const WORD_GAP: f32 = 0.13;
/// A gap this wide separates cells or columns. Justified lines seldom get there.
const CELL_GAP: f32 = 1.15;

/// Baseline and size of the main line: the largest size that makes up a fair share.
pub fn main_line(glyphs: &[&Glyph]) -> (f32, f32) {
    let mut sizes: Vec<(f32, u32)> = Vec::new();
    for g in glyphs {
        match sizes
            .iter_mut()
            .find(|(s, _)| (*s - g.size).abs() < 0.04 * g.size)
        {
            Some((_, n)) => *n += 1,
            None => sizes.push((g.size, 1)),
        }
    }
    let all = glyphs.len() as u32;
    let size = sizes
        .iter()
        .filter(|(_, n)| *n * 5 >= all)
        .map(|(s, _)| *s)
        .fold(0.0, f32::max);
    let size = if size > 0.0 {
        size
    } else {
        sizes.iter().max_by_key(|(_, n)| *n).map_or(1.0, |(s, _)| *s)
    };
    let mut baselines: Vec<f32> = glyphs
        .iter()
        .filter(|g| (g.size - size).abs() < 0.05 * size)
        .map(|g| g.baseline)
        .collect();
    baselines.sort_by(f32::total_cmp);
    let baseline = baselines.get(baselines.len() / 2).copied().unwrap_or_default();
    (baseline, size)
}

/// The size that most glyphs are set in, to a quarter of a point.
pub fn usual_size<'a>(pieces: impl Iterator<Item = &'a Piece>) -> f32 {
    let mut sizes: std::collections::HashMap<u32, usize> = std::collections::HashMap::new();
    for p in pieces {
        *sizes.entry((4.0 * p.size).round() as u32).or_default() += p.glyphs.len();
    }
    let most = sizes.into_iter().max_by_key(|(size, n)| (*n, *size));
    most.map_or(10.0, |(size, _)| size as f32 / 4.0)
}

/// The pieces of a page that are turned this way.
pub fn pieces(page: &PageGlyphs, turn: Turn) -> Vec<Piece> {
    let mut runs: Vec<Vec<u32>> = Vec::new();
    let mut seen = Overprints::default();
    // The last glyph with ink, and the last one that set the baseline of the run.
    let mut last: Option<&Glyph> = None;
    let mut base: Option<&Glyph> = None;
    for (i, g) in page.glyphs.iter().enumerate() {
        if g.turn != turn {
            continue;
        }
        if g.meaning.is_space() {
            if let (Some(run), Some(l)) = (runs.last_mut(), last)
                && (l.baseline - g.baseline).abs() < l.size
            {
                run.push(i as u32);
            }
            continue;
        }
        if seen.again(g) {
            continue;
        }
        let follows = match (last, base) {
            (Some(l), Some(b)) => follows(l, b, g),
            _ => false,
        };
        match runs.last_mut() {
            Some(run) if follows => run.push(i as u32),
            _ => {
                runs.push(vec![i as u32]);
                base = None;
            }
        }
        last = Some(g);
        if base.is_none_or(|b| g.size >= 0.95 * b.size) {
            base = Some(g);
        }
    }
    let pieces: Vec<Piece> = runs.into_iter().filter_map(|r| Piece::new(r, page)).collect();
    merge(pieces, page)
}

/// Whether `g` goes on where `last` stopped, in a run whose latest full-size glyph is `base`.
fn follows(last: &Glyph, base: &Glyph, g: &Glyph) -> bool {
    let gap = g.x0 - last.x1;
    let size = base.size.max(g.size);
    let shift = (g.baseline - base.baseline).abs();
    let small = g.size < 0.92 * base.size || base.size < 0.92 * g.size;
    if shift < 0.12 * size {
        // Accents are drawn back over their letter.
        return (-0.9 * size..CELL_GAP * size).contains(&gap);
    }
    if small && shift < 0.75 * size {
        // A subscript may go back below its superscript; a footnote mark may follow a stretched space.
        return (-2.0 * size..CELL_GAP * size).contains(&gap);
    }
    let level =
        (g.baseline - last.baseline).abs() < 0.12 * g.size && (g.size - last.size).abs() < 0.1 * g.size;
    if level && shift < 0.75 * size {
        return (-0.3 * size..0.4 * size).contains(&gap);
    }
    // Raised or lowered without being made smaller, as in TeX's own name.
    !small && shift < 0.45 * size && (-0.25 * size..0.3 * size).contains(&gap)
}

/// Glyphs drawn twice, a little apart, to look bold.
#[derive(Default)]
struct Overprints {
    at: FxHashMap<(u32, i32, i32), [f32; 2]>,
}

impl Overprints {
    fn again(&mut self, g: &Glyph) -> bool {
        let near = 0.12 * g.size;
        let cell = |v: f32| (v / (4.0 * near)).floor() as i32;
        let key = |x: i32, y: i32| (g.code.wrapping_mul(31).wrapping_add(g.font as u32), x, y);
        for x in cell(g.x0 - near)..=cell(g.x0 + near) {
            for y in cell(g.baseline - near)..=cell(g.baseline + near) {
                if let Some([x, y]) = self.at.get(&key(x, y))
                    && (x - g.x0).abs() < near
                    && (y - g.baseline).abs() < near
                {
                    return true;
                }
            }
        }
        self.at
            .insert(key(cell(g.x0), cell(g.baseline)), [g.x0, g.baseline]);
        false
    }
}

/// Puts together pieces that stand close on one baseline but were drawn apart, and small pieces
/// with the line they are raised or lowered from.
fn merge(mut pieces: Vec<Piece>, page: &PageGlyphs) -> Vec<Piece> {
    // Only pieces of nearly the same height can meet: sort by it and look at neighbours.
    pieces.sort_by(|a, b| {
        a.baseline
            .total_cmp(&b.baseline)
            .then(a.area[0].total_cmp(&b.area[0]))
    });
    let mut out: Vec<Piece> = Vec::with_capacity(pieces.len());
    for piece in pieces {
        // The nearest earlier piece on its left that it touches.
        let mate = out
            .iter()
            .rposition(|o| touches(o, &piece) || piece.baseline - o.baseline > 3.0 * piece.size.max(o.size))
            .filter(|m| touches(&out[*m], &piece));
        match mate {
            Some(m) => join(&mut out[m], piece, page),
            None => out.push(piece),
        }
    }
    // A join widens a piece, so that it may now touch the next one.
    loop {
        let before = out.len();
        let mut i = 0;
        while i < out.len() {
            let found = (i + 1..out.len())
                .take_while(|j| out[*j].baseline - out[i].baseline <= out[i].size)
                .find(|j| touches(&out[i], &out[*j]));
            match found {
                Some(j) => {
                    let other = out.remove(j);
                    join(&mut out[i], other, page);
                }
                None => i += 1,
            }
        }
        if out.len() == before {
            return out;
        }
    }
}

fn touches(a: &Piece, b: &Piece) -> bool {
    let size = a.size.max(b.size);
    let shift = (a.baseline - b.baseline).abs();
    let (left, right) = if a.area[0] <= b.area[0] { (a, b) } else { (b, a) };
    let gap = right.area[0] - left.area[2];
    if shift < 0.15 * size {
        // Measured by the smaller of the two, as a heading may stand beside the other column's text.
        return (-0.5 * size..0.75 * a.size.min(b.size)).contains(&gap);
    }
    let (big, small) = if a.size >= b.size { (a, b) } else { (b, a) };
    // A few raised or lowered glyphs right behind (or, for marks, before) a word.
    small.size < 0.85 * big.size
        && small.glyphs.len() <= 12
        && shift < 0.6 * big.size
        && (-0.35 * size..0.3 * size).contains(&gap)
}

fn join(into: &mut Piece, other: Piece, page: &PageGlyphs) {
    let first = if other.area[0] < into.area[0] {
        let mut glyphs = other.glyphs;
        glyphs.append(&mut into.glyphs);
        glyphs
    } else {
        let mut glyphs = std::mem::take(&mut into.glyphs);
        glyphs.extend(other.glyphs);
        glyphs
    };
    if let Some(piece) = Piece::new(first, page) {
        *into = piece;
    }
}
