//! Which printed lines below the heads make one row: lines that overlap, lines between two rules, and
//! the rest of a label or cell that took more than one line.

use super::content::{is_value, text_of};
use super::grid::{Draft, GridCell, Placed};

/// What a line looks like to its neighbours.
struct Look {
    /// Columns that it has something in.
    columns: Vec<usize>,
    stub: Option<String>,
    /// Left and right end of what stands in the first column.
    stub_ends: (f32, f32),
    first_word: f32,
    values: usize,
    baseline: f32,
    bold: bool,
}

/// Adds the cells below the heads; returns the number of rows of the table.
pub fn cells(draft: &Draft, from_row: usize, out: &mut Vec<GridCell>) -> usize {
    let looks: Vec<Look> = draft
        .placed
        .iter()
        .enumerate()
        .map(|(i, p)| look(draft, i, p))
        .collect();
    let groups = groups(draft, &looks);
    let mut row = from_row;
    for (index, group) in groups.iter().enumerate() {
        let mut cells: Vec<GridCell> = Vec::new();
        for placed in group.iter().flat_map(|l| &draft.placed[*l]) {
            let words = draft.lines[placed.line].words[placed.chunk.words.clone()].to_vec();
            let same = cells
                .iter_mut()
                .find(|c| c.column <= placed.last && c.column + c.colspan > placed.first);
            match same {
                Some(cell) => {
                    let end = (cell.column + cell.colspan).max(placed.last + 1);
                    cell.column = cell.column.min(placed.first);
                    cell.colspan = end - cell.column;
                    cell.text.push((placed.line, words));
                }
                None => cells.push(GridCell {
                    row,
                    column: placed.first,
                    rowspan: 1,
                    colspan: placed.last - placed.first + 1,
                    header: false,
                    text: vec![(placed.line, words)],
                }),
            }
        }
        // Two cells that a wide one in between has run together.
        cells.sort_by_key(|c| c.column);
        let mut apart: Vec<GridCell> = Vec::new();
        for mut cell in cells {
            match apart.last_mut() {
                Some(last) if last.column + last.colspan > cell.column => {
                    last.colspan = last.colspan.max(cell.column + cell.colspan - last.column);
                    last.text.append(&mut cell.text);
                }
                _ => apart.push(cell),
            }
        }
        for cell in &mut apart {
            cell.text.sort_by_key(|t| t.0);
            // A label alone in its row that reaches beyond its column heads the rows below it.
            if group.len() == 1
                && cell.column == 0
                && cell.colspan > 1
                && looks[group[0]].values == 0
                && draft.placed[group[0]].len() == 1
            {
                cell.colspan = draft.seams.columns();
            }
        }
        // A label half-way to the next row is the label of both.
        let below = groups.get(index + 1).and_then(|g| g.first());
        if let (Some(last), Some(below)) = (group.last(), below)
            && group.len() > 1
            && looks[*below].baseline - looks[*last].baseline < 0.85 * draft.measure.size
        {
            for cell in &mut apart {
                if cell.text.iter().all(|t| t.0 == *last) {
                    cell.rowspan = 2;
                }
            }
        }
        out.extend(apart);
        row += 1;
    }
    row
}

fn look(draft: &Draft, index: usize, placed: &[Placed]) -> Look {
    let stub = placed.iter().find(|p| p.first == 0);
    let words = |p: &Placed| draft.lines[p.line].words[p.chunk.words.clone()].to_vec();
    Look {
        columns: placed.iter().flat_map(|p| p.first..=p.last).collect(),
        stub: stub.map(|p| text_of(&words(p))),
        stub_ends: stub.map_or((0.0, 0.0), |p| (p.chunk.left, p.chunk.right)),
        first_word: stub
            .and_then(|p| words(p).first().map(|w| w.area[2] - w.area[0]))
            .unwrap_or(0.0),
        values: placed
            .iter()
            .filter(|p| p.first > 0 && is_value(&draft.text(p)))
            .count(),
        baseline: draft.lines[index].baseline,
        bold: draft.lines[index].bold,
    }
}

/// The lines below the heads, row by row.
fn groups(draft: &Draft, looks: &[Look]) -> Vec<Vec<usize>> {
    let bands = bands(draft);
    let step = Step::of(looks, draft.heads, draft.measure.size);
    let framed = draft.seams.walls.len() * 2 >= draft.seams.at.len() && draft.full.len() >= 4;
    let one_row: Vec<bool> = bands
        .iter()
        .map(|b| framed && is_one_row(draft, looks, b))
        .collect();
    let several = bands.iter().filter(|b| b.len() > 1).count();
    // Where most frames hold several rows, all may.
    let framed = one_row
        .iter()
        .zip(&bands)
        .filter(|(one, b)| **one && b.len() > 1)
        .count()
        * 2
        >= several;
    let mut out: Vec<Vec<usize>> = Vec::new();
    for (band, one_row) in bands.into_iter().zip(one_row) {
        if one_row && framed {
            out.push(band);
            continue;
        }
        let from = out.len();
        for (i, line) in band.iter().enumerate() {
            let next = band.get(i + 1).copied();
            let joins = out.len() > from
                && out
                    .last()
                    .is_some_and(|g| goes_on(draft, looks, g, *line, next, &step));
            match out.last_mut() {
                Some(group) if joins => group.push(*line),
                _ => out.push(vec![*line]),
            }
        }
    }
    out
}

/// Whether the lines in a frame are one row: not several have values throughout, and each line goes on
/// with what did not fit on the one before.
fn is_one_row(draft: &Draft, looks: &[Look], band: &[usize]) -> bool {
    let most = band.iter().map(|i| looks[*i].values).max().unwrap_or(0);
    let valued = band
        .iter()
        .filter(|i| most > 0 && looks[**i].values * 10 >= most * 7)
        .count();
    valued <= 1
        && band.windows(2).all(|w| {
            let overlap = looks[w[1]].baseline - looks[w[0]].baseline < 0.85 * draft.measure.size;
            overlap || full_cell(draft, w[0], w[1])
        })
}

/// Whether the first word of a cell would not have fitted behind what stands above it in its frame.
fn full_cell(draft: &Draft, before: usize, line: usize) -> bool {
    draft.placed[line].iter().any(|b| {
        let left = if b.first == 0 {
            draft.sides[0]
        } else {
            draft.seams.at[b.first - 1]
        };
        let right = draft.seams.at.get(b.last).copied().unwrap_or(draft.sides[1]);
        let same = |p: &&Placed| p.first == b.first && p.last == b.last;
        let above = draft.placed[before].iter().find(same);
        let inset = above.map_or(0.0, |a| (a.chunk.left - left).min(b.chunk.left - left));
        let word = &draft.lines[line].words[b.chunk.words.start];
        above.is_some_and(|a| {
            right - inset.clamp(0.0, 8.0) - a.chunk.right
                < word.area[2] - word.area[0] + 0.3 * draft.measure.size
        })
    })
}

/// The lines below the heads between one rule and the next.
fn bands(draft: &Draft) -> Vec<Vec<usize>> {
    let mut out: Vec<Vec<usize>> = Vec::new();
    let mut last: Option<f32> = None;
    for index in draft.heads..draft.lines.len() {
        let line = &draft.lines[index];
        let middle = line.baseline - 0.3 * line.size;
        let cut = last.is_some_and(|before| draft.full.iter().any(|y| *y > before && *y < middle));
        match out.last_mut() {
            Some(band) if !cut => band.push(index),
            _ => out.push(vec![index]),
        }
        last = Some(middle);
    }
    out
}

/// The distances of lines in a table.
struct Step {
    /// Usual distance between lines of values.
    rows: f32,
    /// Lines of one row stand so close, and rows never do.
    inside: Option<f32>,
    /// Labels are cut because their column is narrow.
    narrow: bool,
}

impl Step {
    fn of(looks: &[Look], heads: usize, size: f32) -> Step {
        let body = &looks[heads..];
        let most = body.iter().map(|l| l.values).max().unwrap_or(0);
        // Two lines that are both full of values, or as full of them as each other, are two rows.
        let rich = |w: &[Look]| {
            let (a, b) = (w[0].values, w[1].values);
            let below = w[1].baseline - w[0].baseline > 0.85 * size;
            below && a > 0 && (b * 10 >= most * 7 && a * 10 >= most * 7 || b >= 2 && b * 10 >= a * 7)
        };
        // Without values in most columns nothing says where rows begin.
        let telling = most > 0
            && most * 2
                >= body
                    .iter()
                    .map(|l| l.columns.len())
                    .max()
                    .unwrap_or(0)
                    .saturating_sub(1);
        let gap = |w: &[Look]| w[1].baseline - w[0].baseline;
        let mut rows: Vec<f32> = body.windows(2).filter(|w| rich(w)).map(gap).collect();
        rows.sort_by(f32::total_cmp);
        let least = body
            .windows(2)
            .map(gap)
            .filter(|g| *g > 1.0)
            .fold(f32::MAX, f32::min);
        let tight = 1.12 * least;
        let apart = body.windows(2).any(|w| gap(w) > 1.18 * least);
        let never = !body.windows(2).any(|w| gap(w) <= tight && rich(w));
        let right = stub_right(looks, heads);
        let (mut alone, mut full, mut low) = (0, 0, 0);
        for w in body.windows(2) {
            if w[0].values > 0 && w[1].columns == [0] {
                alone += 1;
                full += usize::from(right - w[0].stub_ends.1 < w[1].first_word + 2.0);
                low += usize::from(
                    w[1].stub
                        .as_deref()
                        .is_some_and(|s| s.starts_with(char::is_lowercase)),
                );
            }
        }
        Step {
            rows: rows.get(rows.len() / 2).copied().unwrap_or(0.0),
            inside: (telling && apart && never).then_some(tight),
            narrow: alone >= 2 && full * 10 >= alone * 7 && low * 2 >= alone,
        }
    }
}

/// Whether a line belongs to the row of the lines before it.
fn goes_on(
    draft: &Draft,
    looks: &[Look],
    group: &[usize],
    line: usize,
    next: Option<usize>,
    step: &Step,
) -> bool {
    let Some(&before) = group.last() else { return false };
    let (a, b) = (&looks[before], &looks[line]);
    let size = draft.measure.size;
    let valued = group.iter().rev().find(|l| looks[**l].values > 0);
    // Below a label that stands between two rows as the label of both.
    if b.values > 0
        && valued.is_some_and(|v| b.baseline - looks[*v].baseline > 0.85 * size)
        && before != *valued.unwrap_or(&before)
    {
        return false;
    }
    let gap = b.baseline - a.baseline;
    // Set half a line off, as numbers beside a label of two lines.
    if gap < 0.85 * size && !(a.values > 0 && b.values > 0) {
        return true;
    }
    if let Some(tight) = step.inside {
        return gap <= tight;
    }
    if closes_bracket(draft, before, line) || is_rest(draft, before, line) {
        return true;
    }
    let shared = b.columns.iter().filter(|c| a.columns.contains(c)).count();
    if a.values > 0 && b.values > 0 {
        return false;
    }
    // Where rows stand well apart, what is closer belongs together.
    let close = step.rows > 0.0 && gap < 0.84 * step.rows;
    if step.rows > 1.6 * size && gap > 0.93 * step.rows {
        return false;
    }
    match (&a.stub, &b.stub) {
        (_, None) => b.values == 0 && shared > 0 && (close || breaks(draft, before, line, 3.0)),
        (None, Some(_)) => false,
        (Some(upper), Some(lower)) => {
            let alone = b.columns == [0];
            if a.bold && !b.bold {
                return false;
            }
            let unfinished = lower
                .starts_with(|c: char| c.is_lowercase() || matches!(c, '(' | '[' | '&' | '/' | '='))
                || upper.ends_with(['-', ',', '/', '–', '&', '(', ':']) && !upper.ends_with(':')
                || ends_in_small_word(upper);
            let indented = b.stub_ends.0 - a.stub_ends.0;
            let room = stub_right(looks, draft.heads) - a.stub_ends.1;
            let full = room < b.first_word + 0.3 * size;
            if b.values == 0 && alone && a.values > 0 {
                // Below the values: the rest of a label, or the label of the rows that follow.
                let followed = next.is_some_and(|n| {
                    looks[n].stub_ends.0 > b.stub_ends.0 + 0.4 * size && looks[n].values > 0
                });
                return !followed
                    && (step.narrow && full
                        || close && (unfinished || full)
                        || unfinished && (full || indented > 0.3 * size)
                        || full && indented > 0.3 * size);
            }
            if a.values == 0 && a.columns == [0] {
                // Above them: the beginning of a label, or the label of a group.
                return if b.values > 0 {
                    unfinished
                        && indented.abs() < 3.0 * size
                        && (full || close || ends_in_small_word(upper) || upper.ends_with(['-', ',']))
                } else {
                    alone && unfinished && full
                };
            }
            // Text in several columns: the label must go on too, and only wide columns break lines.
            b.values == 0
                && a.values == 0
                && shared > 0
                && (close || unfinished && full && breaks(draft, before, line, 9.0))
        }
    }
}

/// Whether a cell closes the bracket that the one above it leaves open: an interval on two lines.
fn closes_bracket(draft: &Draft, before: usize, line: usize) -> bool {
    let open = |t: &str| t.matches(['(', '[']).count() as i32 - t.matches([')', ']']).count() as i32;
    draft.placed[line].iter().any(|b| {
        let same = |p: &&Placed| p.first == b.first && p.last == b.last;
        open(&draft.text(b)) < 0
            && draft.placed[before]
                .iter()
                .find(same)
                .is_some_and(|a| open(&draft.text(a)) > 0)
    })
}

/// Whether a line holds nothing but the bracket of one cell that did not fit behind its number.
fn is_rest(draft: &Draft, before: usize, line: usize) -> bool {
    let [only] = draft.placed[line].as_slice() else {
        return false;
    };
    only.first > 0
        && draft.placed[before].len() >= 3
        && draft.text(only).starts_with(['(', '['])
        && breaks(draft, before, line, 0.0)
}

/// Whether the first word of what stands below another would not have fitted behind it, in a column at
/// least so many sizes wide.
fn breaks(draft: &Draft, before: usize, line: usize, least: f32) -> bool {
    draft.placed[line].iter().any(|b| {
        let alike = || {
            draft
                .placed
                .iter()
                .flatten()
                .filter(|p| p.first == b.first && p.last == b.last)
        };
        let right = alike().map(|p| p.chunk.right).fold(f32::MIN, f32::max);
        let left = alike().map(|p| p.chunk.left).fold(f32::MAX, f32::min);
        // Nobody breaks lines in a column of single words.
        if right - left < least * draft.measure.size {
            return false;
        }
        let word = &draft.lines[line].words[b.chunk.words.start];
        let width = word.area[2] - word.area[0];
        draft.placed[before].iter().any(|a| {
            a.first == b.first && a.last == b.last && right - a.chunk.right < width + 0.3 * draft.measure.size
        })
    })
}

fn stub_right(looks: &[Look], heads: usize) -> f32 {
    looks[heads..]
        .iter()
        .filter(|l| l.stub.is_some() && (l.values > 0 || l.columns == [0]))
        .map(|l| l.stub_ends.1)
        .fold(f32::MIN, f32::max)
}

/// Ends with a word after which a label can't end.
fn ends_in_small_word(text: &str) -> bool {
    let last = text.split(' ').next_back().unwrap_or_default();
    matches!(
        last,
        "of" | "the"
            | "a"
            | "an"
            | "and"
            | "or"
            | "in"
            | "for"
            | "with"
            | "to"
            | "per"
            | "by"
            | "on"
            | "at"
            | "than"
            | "from"
            | "und"
            | "der"
            | "die"
            | "von"
            | "mit"
            | "et"
            | "de"
            | "des"
            | "du"
            | "y"
            | "del"
            | "la"
    )
}
