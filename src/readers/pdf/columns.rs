//! Reading order: a page is cut into *regions*, each one column wide, in the order in which a
//! person reads them. Where columns are interrupted by something as wide as the page (title,
//! abstract, wide figure), the page falls into *bands* that are read from top to bottom.

use super::pieces::Piece;

/// One column within one band.
#[derive(Clone, Debug)]
pub struct Region {
    pub pieces: Vec<Piece>,
    /// Left and right edge of the column.
    pub left: f32,
    pub right: f32,
}

/// Columns narrower than this share of what is divided are tables or lists.
const NARROWEST: f32 = 0.18;
/// Columns inside columns inside columns end here.
const DEEPEST: u32 = 4;

/// Cuts the pieces of a page into regions in reading order.
pub fn regions(pieces: Vec<Piece>) -> Vec<Region> {
    let mut out = Vec::new();
    if let Some(region) = region(pieces) {
        divide(region, 0, &mut out);
    }
    out
}

fn region(pieces: Vec<Piece>) -> Option<Region> {
    let left = pieces.iter().map(|p| p.area[0]).fold(f32::MAX, f32::min);
    let right = pieces.iter().map(|p| p.area[2]).fold(f32::MIN, f32::max);
    (!pieces.is_empty()).then_some(Region { pieces, left, right })
}

#[derive(Clone, Copy, PartialEq, Eq, Debug)]
enum Side {
    Left,
    Right,
    Across,
}

/// A vertical strip without text, given by the left edge of the column behind it.
#[derive(Clone, Copy)]
struct Gutter {
    x: f32,
    width: f32,
}

impl Gutter {
    fn side(&self, p: &Piece) -> Side {
        if p.area[2] <= self.x - self.width {
            Side::Left
        } else if p.area[0] >= self.x - 1.5 {
            Side::Right
        } else {
            Side::Across
        }
    }
}

fn divide(whole: Region, depth: u32, out: &mut Vec<Region>) {
    let gutter = if depth < DEEPEST {
        best_gutter(&whole)
    } else {
        None
    };
    let Some(gutter) = gutter else {
        out.push(whole);
        return;
    };
    let (left, right) = (whole.left, whole.right);
    for band in bands(whole.pieces, gutter, left, right) {
        if !band.columns {
            out.push(Region {
                pieces: band.pieces,
                left,
                right,
            });
            continue;
        }
        let (l, r): (Vec<Piece>, Vec<Piece>) = band
            .pieces
            .into_iter()
            .partition(|p| gutter.side(p) == Side::Left);
        let parts = [(l, left, gutter.x - gutter.width), (r, gutter.x, right)];
        for (pieces, left, right) in parts {
            if !pieces.is_empty() {
                divide(Region { pieces, left, right }, depth + 1, out);
            }
        }
    }
}

/// A stretch of the page from top to bottom that is read in one way.
struct Band {
    pieces: Vec<Piece>,
    /// Left column first, then the right one; otherwise row by row.
    columns: bool,
}

/// The left edge shared by most pieces that makes the best columns.
fn best_gutter(whole: &Region) -> Option<Gutter> {
    if whole.pieces.len() < 8 {
        return None;
    }
    let width = whole.right - whole.left;
    let size = typical_size(&whole.pieces);
    let mut edges: Vec<f32> = whole.pieces.iter().map(|p| p.area[0]).collect();
    edges.sort_by(f32::total_cmp);
    let mut candidates: Vec<(usize, f32)> = Vec::new();
    let mut i = 0;
    while i < edges.len() {
        let same = edges[i..].iter().take_while(|e| **e - edges[i] < 1.5).count();
        let x = edges[i];
        let inside = x > whole.left + NARROWEST * width && x < whole.right - NARROWEST * width;
        if same >= 3 && inside {
            candidates.push((same, x));
            // Cells and list items stand a little inside their column.
            let outer = edges[..i].iter().find(|e| x - **e < 0.8 * size);
            candidates.extend(outer.map(|e| (same, *e)));
        }
        i += same;
    }
    candidates.sort_by_key(|c| std::cmp::Reverse(c.0));
    candidates
        .iter()
        .take(8)
        .filter_map(|(_, x)| {
            let gutter = Gutter {
                x: *x,
                width: 0.55 * size,
            };
            let score = score(whole, gutter);
            (score > 0).then_some((score, gutter))
        })
        .max_by_key(|(score, _)| *score)
        .map(|(_, gutter)| gutter)
}

/// Number of lines that stand in good columns.
fn score(whole: &Region, gutter: Gutter) -> usize {
    bands(whole.pieces.clone(), gutter, whole.left, whole.right)
        .iter()
        .filter(|b| b.columns)
        .map(|b| b.pieces.len())
        .sum()
}

fn typical_size(pieces: &[Piece]) -> f32 {
    let mut sizes: Vec<(f32, usize)> = pieces.iter().map(|p| (p.size, p.glyphs.len())).collect();
    sizes.sort_by(|a, b| a.0.total_cmp(&b.0));
    let half: usize = sizes.iter().map(|s| s.1).sum::<usize>() / 2;
    let mut sum = 0;
    for (size, n) in &sizes {
        sum += n;
        if sum >= half {
            return *size;
        }
    }
    10.0
}

fn bands(mut pieces: Vec<Piece>, gutter: Gutter, left: f32, right: f32) -> Vec<Band> {
    pieces.sort_by(|a, b| a.area[1].total_cmp(&b.area[1]));
    // Between two pieces that go across, the rest is cut again at every wide white strip.
    let mut strips: Vec<(bool, Vec<Piece>)> = Vec::new();
    let mut bottom = f32::MIN;
    for piece in pieces {
        let across = gutter.side(&piece) == Side::Across;
        let gap = piece.area[1] - bottom;
        let middle = (piece.area[1] + piece.area[3]) / 2.0;
        let new = match strips.last() {
            None => true,
            // What stands beside a piece that goes across belongs to its row.
            Some((true, _)) if !across => middle > bottom,
            Some((false, _)) if across => true,
            Some((false, _)) => gap > 0.9 * piece.size,
            Some((true, _)) => false,
        };
        bottom = if new {
            piece.area[3]
        } else {
            bottom.max(piece.area[3])
        };
        match strips.last_mut() {
            Some(last) if !new => last.1.push(piece),
            _ => strips.push((across, vec![piece])),
        }
    }
    rejoin_rows(&mut strips);
    keep_last_lines(&mut strips);
    let judged: Vec<(Verdict, Vec<Piece>)> = strips
        .into_iter()
        .map(|(across, pieces)| {
            let verdict = if across {
                Verdict::Rows
            } else {
                judge(&pieces, gutter, left, right)
            };
            (verdict, pieces)
        })
        .collect();
    // Strips that could be either go with the columns beside them.
    let mut bands: Vec<Band> = Vec::new();
    let mut i = 0;
    while i < judged.len() {
        let mut j = i;
        while j < judged.len() && judged[j].0 != Verdict::Rows {
            j += 1;
        }
        if j > i {
            let columns = judged[i..j].iter().any(|(v, _)| *v == Verdict::Columns)
                || together(&judged[i..j], gutter, left, right);
            bands.push(Band {
                pieces: judged[i..j].iter().flat_map(|(_, p)| p.iter().cloned()).collect(),
                columns,
            });
            i = j;
        } else {
            match bands.last_mut() {
                Some(last) if !last.columns => last.pieces.extend(judged[i].1.iter().cloned()),
                _ => bands.push(Band {
                    pieces: judged[i].1.clone(),
                    columns: false,
                }),
            }
            i += 1;
        }
    }
    bands
}

/// A piece sorted by its top may come a little before the piece across that it shares a row with.
fn rejoin_rows(strips: &mut Vec<(bool, Vec<Piece>)>) {
    for i in 1..strips.len() {
        if !strips[i].0 || strips[i - 1].0 {
            continue;
        }
        let top = strips[i].1[0].area[1];
        let baseline = strips[i].1[0].baseline;
        let (stay, go): (Vec<Piece>, Vec<Piece>) = std::mem::take(&mut strips[i - 1].1)
            .into_iter()
            .partition(|p| p.area[3] < top || (p.baseline - baseline).abs() > 0.5 * p.size);
        strips[i - 1].1 = stay;
        strips[i].1.extend(go);
    }
    strips.retain(|s| !s.1.is_empty());
}

/// The short last line of a paragraph as wide as the page lies in the left column only by chance.
fn keep_last_lines(strips: &mut Vec<(bool, Vec<Piece>)>) {
    for i in 1..strips.len() {
        if strips[i].0 || !strips[i - 1].0 {
            continue;
        }
        let Some(above) = strips[i - 1]
            .1
            .iter()
            .max_by(|a, b| a.baseline.total_cmp(&b.baseline))
        else {
            continue;
        };
        let first = strips[i].1[0].baseline;
        let alone = strips[i]
            .1
            .iter()
            .filter(|p| (p.baseline - first).abs() < 0.5 * p.size)
            .count()
            == 1;
        let line = &strips[i].1[0];
        let size = line.size;
        let aligned = (line.area[0] - above.area[0]).abs() < size
            || (line.area[0] + line.area[2] - above.area[0] - above.area[2]).abs() < 4.0;
        let next = (line.baseline - above.baseline) / size;
        if alone && aligned && (0.8..1.35).contains(&next) && (above.size - size).abs() < 0.05 * size {
            let line = strips[i].1.remove(0);
            strips[i - 1].1.push(line);
        }
    }
    strips.retain(|s| !s.1.is_empty());
}

#[derive(Clone, Copy, PartialEq, Eq, Debug)]
enum Verdict {
    Columns,
    Rows,
    Either,
}

fn judge(pieces: &[Piece], gutter: Gutter, left: f32, right: f32) -> Verdict {
    let count = |side: Side, width: f32| {
        let here = pieces.iter().filter(|p| gutter.side(p) == side);
        let wide = here.clone().filter(|p| p.width() > 0.6 * width).count();
        (here.count(), wide)
    };
    let (l, l_wide) = count(Side::Left, gutter.x - gutter.width - left);
    let (r, r_wide) = count(Side::Right, right - gutter.x);
    let all = l + r;
    let rows = row_count(pieces);
    if l >= 3 && r >= 3 && l_wide * 5 >= l * 2 && r_wide * 5 >= r * 2 {
        return Verdict::Columns;
    }
    if rows_stand_apart(pieces, gutter) {
        return Verdict::Columns;
    }
    // Many short pieces side by side are a table.
    if rows >= 2 && all > 2 * rows && (l_wide + r_wide) * 4 < all {
        return Verdict::Rows;
    }
    Verdict::Either
}

/// The lines left and right of the gutter take no notice of each other, as cells of a row would.
fn rows_stand_apart(pieces: &[Piece], gutter: Gutter) -> bool {
    let rows = |side: Side| {
        let mut all: Vec<(f32, f32)> = pieces
            .iter()
            .filter(|p| gutter.side(p) == side)
            .map(|p| (p.baseline, p.size))
            .collect();
        all.sort_by(|a, b| a.0.total_cmp(&b.0));
        all.dedup_by(|b, a| b.0 - a.0 < 0.4 * a.1);
        all
    };
    let (left, right) = (rows(Side::Left), rows(Side::Right));
    let (few, many) = if left.len() < right.len() {
        (left, right)
    } else {
        (right, left)
    };
    let level = few
        .iter()
        .filter(|(y, size)| many.iter().any(|(other, _)| (y - other).abs() < 0.12 * size))
        .count();
    few.len() >= 4 && level * 2 <= few.len()
}

/// Strips none of which is clearly in columns may be so together.
fn together(strips: &[(Verdict, Vec<Piece>)], gutter: Gutter, left: f32, right: f32) -> bool {
    let all: Vec<Piece> = strips.iter().flat_map(|(_, p)| p.iter().cloned()).collect();
    judge(&all, gutter, left, right) == Verdict::Columns
}

fn row_count(pieces: &[Piece]) -> usize {
    let mut baselines: Vec<f32> = pieces.iter().map(|p| p.baseline).collect();
    baselines.sort_by(f32::total_cmp);
    let mut rows = 0;
    let mut last = f32::MIN;
    for b in baselines {
        if b - last > 3.0 {
            rows += 1;
            last = b;
        }
    }
    rows
}
