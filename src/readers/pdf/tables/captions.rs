//! The caption of a table, above or below it, and the notes below.

use super::super::glyphs::Area;
use super::content;
use super::sheet::{Sheet, Start};

/// A caption or note: the pieces that it takes.
#[derive(Clone, Debug)]
pub struct Found {
    pub start: Option<usize>,
    pub pieces: Vec<usize>,
    pub below: bool,
}

/// Captions have at most so many lines.
const MOST_LINES: usize = 14;

/// The caption that stands directly above the cells, or else directly below. `others` are the areas of
/// other suspected tables; `bottom` is the lower end of the notes.
pub fn find(sheet: &Sheet, area: &Area, bottom: f32, used: &[usize], others: &[Area]) -> Option<Found> {
    let free = |i: &usize| !used.contains(i);
    let mut above: Vec<usize> = (0..sheet.captions.len())
        .filter(free)
        .filter(|i| sheet.captions[*i].area[1] < area[1] && beside(sheet, &sheet.captions[*i], area))
        .collect();
    above.sort_by(|a, b| sheet.captions[*b].area[1].total_cmp(&sheet.captions[*a].area[1]));
    if let Some(found) = above.first().and_then(|i| above_cells(sheet, *i, area)) {
        return Some(found);
    }
    let below = (0..sheet.captions.len())
        .filter(free)
        .filter(|i| {
            let c = &sheet.captions[*i];
            let gap = c.area[1] - bottom;
            (-2.0..3.2 * sheet.size).contains(&gap) && beside(sheet, c, area)
        })
        .min_by(|a, b| sheet.captions[*a].area[1].total_cmp(&sheet.captions[*b].area[1]))?;
    let found = below_cells(sheet, below);
    // It may be the caption of the next table, then it stands nearer to that one.
    let end = found
        .pieces
        .iter()
        .map(|i| sheet.pieces[*i].area[3])
        .fold(f32::MIN, f32::max);
    let gap = sheet.captions[below].area[1] - bottom;
    let nearer = others
        .iter()
        .any(|o| o[0] < area[2] && o[2] > area[0] && o[1] >= end - 2.0 && o[1] - end < gap.max(1.0) * 0.8);
    (!nearer).then_some(found)
}

/// Whether a caption stands above or below the cells rather than beside them.
fn beside(sheet: &Sheet, caption: &Start, area: &Area) -> bool {
    let column = sheet.column_of(&caption.area);
    let (left, right) = (caption.area[0], caption.area[2]);
    let over = left < area[2] && right > area[0];
    // A table wider than the caption's column spans several.
    over && (column[1] > area[0] + sheet.size) || column[0] - 4.0 <= area[0] && column[1] + 4.0 >= area[2]
}

fn above_cells(sheet: &Sheet, start: usize, area: &Area) -> Option<Found> {
    let caption = &sheet.captions[start];
    let column = sheet.column_of(&caption.area);
    let room = [
        column[0].min(area[0]) - 2.0,
        caption.area[1] - 1.0,
        column[1].max(area[2]) + 2.0,
        area[1] + 0.2 * sheet.size,
    ];
    let pieces = sheet.pieces_in(&room);
    let rows = sheet.in_rows(pieces.clone());
    if rows.len() > MOST_LINES || !pieces.contains(&caption.piece) {
        return None;
    }
    let mut last = caption.area[3];
    for row in &rows {
        for i in row {
            let piece = &sheet.pieces[*i];
            if *i != caption.piece && sheet.is_caption_start(piece) {
                return None;
            }
            // A short title may stand between caption and cells.
            let title = row.len() == 1 && piece.glyphs.len() <= 40;
            if piece.area[1] - last > if title { 3.2 } else { 1.7 } * sheet.size {
                return None;
            }
        }
        last = row.iter().map(|i| sheet.pieces[*i].area[3]).fold(last, f32::max);
    }
    (area[1] - last < 4.0 * sheet.size).then_some(Found {
        start: Some(start),
        pieces,
        below: false,
    })
}

fn below_cells(sheet: &Sheet, start: usize) -> Found {
    let caption = &sheet.captions[start];
    let column = sheet.column_of(&caption.area);
    let first = &sheet.pieces[caption.piece];
    let room = [
        column[0] - 2.0,
        caption.area[1] - 1.0,
        column[1] + 2.0,
        caption.area[1] + 200.0,
    ];
    let mut pieces = Vec::new();
    let mut last = caption.area[3];
    for row in sheet.in_rows(sheet.pieces_in(&room)).into_iter().take(MOST_LINES) {
        let goes_on = row.iter().all(|i| {
            let piece = &sheet.pieces[*i];
            (*i == caption.piece || !sheet.is_caption_start(piece))
                && piece.area[1] - last < 0.45 * sheet.size
                && (piece.size - first.size).abs() < 0.07 * first.size
        });
        if !goes_on {
            break;
        }
        last = row.iter().map(|i| sheet.pieces[*i].area[3]).fold(last, f32::max);
        pieces.extend(row);
    }
    Found {
        start: Some(start),
        pieces,
        below: true,
    }
}

/// The notes below the cells (and below a caption that stands there): lines that begin like notes, and
/// what goes on from them in the same size.
pub fn notes(sheet: &Sheet, area: &Area, cell_size: f32) -> Vec<usize> {
    let column = sheet.column_of(area);
    let (left, right) = (column[0].min(area[0]) - 2.0, column[1].max(area[2]) + 2.0);
    let room = [left, area[3] - 0.2 * sheet.size, right, area[3] + 260.0];
    let mut out: Vec<usize> = Vec::new();
    let (mut last, mut size) = (area[3], 0.0);
    for row in sheet.in_rows(sheet.pieces_in(&room)).into_iter().take(30) {
        let lines = sheet.lines(&row);
        let Some(line) = lines.first() else { break };
        let top = line.area[1];
        let begins = content::begins_note(line);
        let smaller = line.size < 0.93 * sheet.size && line.size < 1.02 * cell_size;
        if row.iter().any(|i| sheet.is_caption_start(&sheet.pieces[*i]))
            || line.area[0] > area[2]
            || line.area[2] < area[0]
        {
            break;
        }
        let first = out.is_empty();
        let near = top - last < if first || begins { 1.8 } else { 0.75 } * sheet.size;
        let goes_on = if first {
            begins || smaller && content::is_prose(&line.words)
        } else {
            (line.size - size).abs() < 0.07 * size && (top - last < 0.6 * size || begins)
        };
        if !near || !goes_on {
            break;
        }
        size = line.size;
        last = line.area[3];
        out.extend(row);
    }
    out
}
