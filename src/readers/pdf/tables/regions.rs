//! Where on a page a table may be: between rules of the same length, around a single rule with cells
//! above and below, or below a caption where lines of cells follow one another. What is found here is
//! only a suspicion; [`plausible`](super::plausible) decides.

use super::super::glyphs::Area;
use super::super::pieces::Piece;
use super::sheet::{Sheet, overlap};

/// A suspected table.
#[derive(Clone, Debug)]
pub struct Region {
    /// Left, top, right and bottom of the cells.
    pub area: Area,
    /// The long rules that made it suspicious, from top to bottom.
    pub rules: Vec<Area>,
}

/// Rules shorter than this many sizes frame no table.
const SHORTEST: f32 = 5.0;
/// A page with more long rules is a drawing.
const MOST_RULES: usize = 600;
/// Suspicions followed up on one page.
const MOST: usize = 40;

/// Suspected tables between and around rules.
pub fn ruled(sheet: &Sheet) -> Vec<Region> {
    let across: Vec<Area> = sheet
        .rules
        .across
        .iter()
        .filter(|r| r[2] - r[0] >= SHORTEST * sheet.size)
        .copied()
        .collect();
    if across.len() > MOST_RULES {
        return Vec::new();
    }
    let mut used = vec![false; across.len()];
    let mut out = Vec::new();
    for i in 0..across.len() {
        if used[i] || out.len() >= MOST {
            continue;
        }
        let first = across[i];
        let mut stack = vec![first];
        for j in i + 1..across.len() {
            let rule = across[j];
            if used[j] || !same_length(&first, &rule) {
                continue;
            }
            let last = stack[stack.len() - 1];
            if !could_be_cells(sheet, [first[0], last[1], first[2], rule[1]], stack.len() == 1) {
                break;
            }
            stack.push(rule);
            used[j] = true;
        }
        let (top, bottom) = (first[1], stack[stack.len() - 1][1]);
        let region = Region {
            area: [first[0], top, first[2], bottom],
            rules: stack,
        };
        if let Some(region) = stretched(sheet, region) {
            out.push(region);
        }
    }
    // Rules inside a larger table are no table of their own.
    let all = out.clone();
    out.retain(|r| {
        !all.iter().any(|o| {
            let inside = o.area[1] - 2.0 <= r.area[1]
                && o.area[3] + 2.0 >= r.area[3]
                && o.area[0] - 3.0 <= r.area[0]
                && o.area[2] + 3.0 >= r.area[2];
            inside && (o.area[2] - o.area[0] > r.area[2] - r.area[0] + 6.0 || o.rules.len() > r.rules.len())
        })
    });
    out
}

fn same_length(a: &Area, b: &Area) -> bool {
    let slack = (0.012 * (a[2] - a[0])).max(3.0);
    (a[0] - b[0]).abs() < slack && (a[2] - b[2]).abs() < slack
}

/// Whether what stands between two rules could be cells.
fn could_be_cells(sheet: &Sheet, area: Area, first: bool) -> bool {
    let rows = sheet.row_pieces(area[0], area[2], area[1], area[3]);
    let size = sheet.size;
    if rows.is_empty() {
        return area[3] - area[1] < 2.6 * size;
    }
    let width = area[2] - area[0];
    let (mut glyphs, mut prose_glyphs, mut prose, mut long) = (0, 0, 0, 0);
    let mut last = area[1];
    for row in &rows {
        let top = row.iter().map(|p| p.area[1]).fold(f32::MAX, f32::min);
        // Rows follow one another; what leaves more room is something else.
        if top - last > 3.2 * size {
            return false;
        }
        last = row.iter().map(|p| p.area[3]).fold(last, f32::max);
        for piece in row {
            let beyond = piece.area[0] < area[0] - 1.5 * size || piece.area[2] > area[2] + 1.5 * size;
            if beyond {
                return false;
            }
            // The caption may stand below the first rule, nowhere else.
            if sheet.is_caption_start(piece) && !(first && piece.baseline - area[1] < 2.2 * size) {
                return false;
            }
            glyphs += piece.glyphs.len();
            // Behind a short label, long cells are no running text.
            let first_long = row[0].glyphs.len() >= 25 || row.len() == 1;
            if first_long && piece.glyphs.len() >= 35 && piece.width() > 0.3 * width {
                prose_glyphs += piece.glyphs.len();
                prose += 1;
                long += usize::from(row.len() == 1);
            }
        }
    }
    let cells = rows.iter().any(|r| r.len() > 1);
    let text = !cells && long > 0 && rows.len() >= 2 && !first;
    area[3] - last < 3.2 * size && !text && !(prose >= 6 && prose_glyphs * 10 >= glyphs * 6)
}

/// A region with what belongs to it above and below: the heads above a single rule, the rows below
/// one that nothing closes.
fn stretched(sheet: &Sheet, mut region: Region) -> Option<Region> {
    let [left, top, right, bottom] = region.area;
    let size = sheet.size;
    let strip = [left - 2.0, top - 2.6 * size, right + 2.0, top - 0.1];
    let above: Vec<&Piece> = sheet
        .inside(&strip)
        .filter(|p| p.baseline <= top && p.baseline > top - 1.3 * size)
        .collect();
    let short = |p: &&Piece| p.glyphs.len() <= 40;
    let cells: usize = above.iter().map(|p| sheet.cells_of(p)).sum();
    let heads = (above.len() >= 2 || cells >= 3)
        && above.iter().all(short)
        && above
            .iter()
            .all(|p| sheet.within(p, left, right) && !sheet.is_caption_start(p));
    if heads {
        region.area[1] = above.iter().map(|p| p.area[1]).fold(top, f32::min);
        // The heads may take more lines; one alone in its line does not stand at the left end.
        for _ in 0..4 {
            let upper = region.area[1];
            let strip = [left - 2.0, upper - 1.4 * size, right + 2.0, upper + 0.4 * size];
            let more: Vec<&Piece> = sheet
                .inside(&strip)
                .filter(|p| p.area[1] < upper - 0.5 && p.baseline > upper - 0.9 * size)
                .collect();
            let heads = !more.is_empty()
                && more.iter().all(short)
                && more
                    .iter()
                    .all(|p| sheet.within(p, left, right) && !sheet.is_caption_start(p))
                && (more.len() > 1 || more[0].area[0] > left + 0.3 * (right - left));
            if !heads {
                break;
            }
            region.area[1] = more.iter().map(|p| p.area[1]).fold(upper, f32::min);
        }
    }
    let lines = sheet.lines_between(left, right, top, bottom);
    // Closed by a rule below its rows.
    let closed = region.rules.len() >= 3 || region.rules.len() == 2 && lines > if heads { 0 } else { 3 };
    if !closed {
        let end = sheet.rows_down(left - 2.0, right + 2.0, bottom, 2);
        match end {
            Some(end) => region.area[3] = end,
            None if region.rules.len() == 1 => return None,
            None => {}
        }
    }
    (region.rules.len() > 1 || heads || !closed && lines == 0 && region.area[3] > bottom).then_some(region)
}

/// Suspected tables below or above captions that no rule led to.
pub fn captioned(sheet: &Sheet, taken: &[Area]) -> Vec<Region> {
    let mut out = Vec::new();
    for caption in sheet.captions.iter().take(MOST) {
        let column = sheet.column_of(&caption.area);
        if taken.iter().any(|t| overlap(t, &caption.area)) {
            continue;
        }
        let (left, right) = (column[0] - 2.0, column[1] + 2.0);
        if let Some((top, bottom)) = sheet.rows_after(left, right, caption.last_baseline) {
            let inside = sheet.inside(&[left, top, right, bottom]);
            let (l, r) = inside.fold((f32::MAX, f32::MIN), |(l, r), p| {
                (l.min(p.area[0]), r.max(p.area[2]))
            });
            let rules = sheet
                .rules
                .across
                .iter()
                .filter(|a| a[1] > top - sheet.size && a[1] < bottom + sheet.size)
                .filter(|a| a[2] - a[0] > 0.8 * (r - l) && a[0] >= left - 4.0 && a[2] <= right + 4.0)
                .copied()
                .collect();
            out.push(Region {
                area: [l, top, r, bottom],
                rules,
            });
        }
    }
    out
}
