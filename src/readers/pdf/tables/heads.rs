//! The heads of a table's columns: which lines they are, what stands over several columns, and what
//! is one head on two lines.

use super::content::{self, Chunk, is_value};
use super::grid::{Draft, GridCell, Placed};

/// The number of head lines where no rule tells: those before the first line of values, if the lines
/// above it have labels over the columns of values.
pub fn by_look(draft: &Draft) -> usize {
    let values = |placed: &[Placed]| {
        let right = placed.iter().filter(|p| p.first > 0);
        let count = right.clone().count();
        let hits = right.filter(|p| is_value(&draft.text(p))).count();
        count > 0 && hits * 2 > count
    };
    let Some(first) = draft.placed.iter().position(|p| values(p)) else {
        return usize::from(draft.placed.len() > 1 && draft.lines[0].bold && !draft.lines[1].bold);
    };
    if first > 4 {
        return 0;
    }
    // A label alone right above the values opens the first group of rows.
    let mut heads = first;
    while heads > 0 && draft.placed[heads - 1].len() == 1 && draft.placed[heads - 1][0].first == 0 {
        heads -= 1;
    }
    heads
}

/// Whether a chunk of a head line stands over several columns as one: by a rule below it, or because
/// the next line has a head for each of them.
pub fn spans(draft: &Draft, line: usize, heads: usize, chunk: &Chunk) -> bool {
    if rule_below(draft, line, chunk).is_some() {
        return true;
    }
    let (first, last) = draft.seams.span(chunk.left, chunk.right, draft.measure.size);
    if first == last {
        return false;
    }
    let Some(next) = draft.lines.get(line + 1).filter(|_| line + 1 < heads) else {
        return false;
    };
    let below = content::chunks(next, draft.measure.space, &[]);
    (first..=last).all(|c| {
        below.iter().any(|b| {
            let (f, l) = draft.seams.span(b.left, b.right, draft.measure.size);
            f == c && l == c
        })
    })
}

/// The short rule right below a head that holds it.
fn rule_below(draft: &Draft, line: usize, chunk: &Chunk) -> Option<(f32, f32)> {
    let own = &draft.lines[line];
    let next = draft.lines.get(line + 1).map_or(f32::MAX, |l| l.baseline);
    let others = content::chunks(own, draft.measure.space, &[]);
    draft
        .part
        .iter()
        // Under two heads it says nothing about either.
        .filter(|r| {
            others
                .iter()
                .filter(|o| o.middle() > r[0] && o.middle() < r[2])
                .count()
                == 1
        })
        .filter(|r| r[1] > own.baseline - 0.2 * own.size && r[1] < next.min(own.baseline + 1.6 * own.size))
        .find(|r| {
            let slack = 0.6 * own.size;
            r[0] - slack <= chunk.left && r[2] + slack >= chunk.right
        })
        .map(|r| (r[0], r[2]))
}

/// Columns whose larger part lies above a rule.
fn columns_over(draft: &Draft, left: f32, right: f32) -> (usize, usize) {
    let slack = 0.35 * draft.measure.size;
    let first = draft.seams.at.iter().filter(|s| **s <= left + slack).count();
    let last = draft.seams.at.iter().filter(|s| **s < right - slack).count();
    (first, last.max(first))
}

/// Adds the head cells; says how many rows they take.
pub fn cells(draft: &Draft, out: &mut Vec<GridCell>) -> usize {
    let levels = levels(draft);
    for (row, level) in levels.iter().enumerate() {
        let mut row_cells: Vec<GridCell> = Vec::new();
        for head in level {
            let text = head
                .parts
                .iter()
                .map(|(line, words)| (*line, draft.lines[*line].words[words.clone()].to_vec()));
            let same = row_cells
                .iter_mut()
                .find(|c| c.column <= head.last && c.column + c.colspan > head.first);
            match same {
                Some(cell) => {
                    let end = (cell.column + cell.colspan).max(head.last + 1);
                    cell.column = cell.column.min(head.first);
                    cell.colspan = end - cell.column;
                    cell.text.extend(text);
                }
                None => row_cells.push(GridCell {
                    row,
                    column: head.first,
                    rowspan: 1,
                    colspan: head.last - head.first + 1,
                    header: true,
                    text: text.collect(),
                }),
            }
        }
        row_cells.sort_by_key(|c| c.column);
        out.extend(row_cells);
    }
    levels.len()
}

/// A head: its words, line by line, and the columns that it stands over.
#[derive(Clone, Debug)]
struct Head {
    parts: Vec<(usize, std::ops::Range<usize>)>,
    left: f32,
    right: f32,
    first: usize,
    last: usize,
}

impl Head {
    fn middle(&self) -> f32 {
        (self.left + self.right) / 2.0
    }
}

/// The head lines in rows: a new one where a rule lies between two lines, and below a line whose
/// heads stand over several of the next.
fn levels(draft: &Draft) -> Vec<Vec<Head>> {
    let bands = bands(draft);
    let mut levels: Vec<Vec<Head>> = Vec::new();
    let mut fresh = true;
    for (index, (lines, heads)) in bands.iter().enumerate() {
        let mut heads = heads.clone();
        let next = bands.get(index + 1);
        let bottom = lines.end - 1;
        let mut ruled = false;
        if next.is_some() {
            for head in &mut heads {
                let chunk = Chunk {
                    words: 0..0,
                    left: head.left,
                    right: head.right,
                };
                if let Some((left, right)) = rule_below(draft, bottom, &chunk) {
                    (head.first, head.last) = columns_over(draft, left, right);
                    ruled = true;
                }
            }
        }
        let spread = !ruled && next.is_some_and(|(_, next)| spread_over(draft, &mut heads, next));
        let between = next.is_some_and(|(next, _)| {
            let (own, next) = (&draft.lines[bottom], &draft.lines[next.start]);
            let over = |y: f32| y > own.baseline - 0.2 * own.size && y < next.baseline - 0.4 * next.size;
            draft.full.iter().any(|y| over(*y)) || draft.part.iter().any(|r| over(r[1]))
        });
        match levels.last_mut() {
            Some(level) if !fresh => level.extend(heads),
            _ => levels.push(heads),
        }
        fresh = ruled || spread || between;
    }
    levels
}

/// Lines that overlap taken together, and what stands over one another in them.
fn bands(draft: &Draft) -> Vec<(std::ops::Range<usize>, Vec<Head>)> {
    let mut out: Vec<(std::ops::Range<usize>, Vec<Head>)> = Vec::new();
    for index in 0..draft.heads {
        let line = &draft.lines[index];
        let overlaps =
            index > 0 && line.baseline - draft.lines[index - 1].baseline < 0.85 * draft.measure.size;
        if !overlaps || out.is_empty() {
            out.push((index..index, Vec::new()));
        }
        let Some((lines, heads)) = out.last_mut() else {
            continue;
        };
        lines.end = index + 1;
        for p in &draft.placed[index] {
            let part = (index, p.chunk.words.clone());
            match heads
                .iter_mut()
                .find(|h| h.left < p.chunk.right && h.right > p.chunk.left)
            {
                Some(head) => {
                    head.parts.push(part);
                    head.left = head.left.min(p.chunk.left);
                    head.right = head.right.max(p.chunk.right);
                    head.first = head.first.min(p.first);
                    head.last = head.last.max(p.last);
                }
                None => heads.push(Head {
                    parts: vec![part],
                    left: p.chunk.left,
                    right: p.chunk.right,
                    first: p.first,
                    last: p.last,
                }),
            }
        }
        heads.sort_by(|a, b| a.left.total_cmp(&b.left));
    }
    out
}

/// Left and right end of what stands in a column alone.
fn extent(draft: &Draft, column: usize) -> Option<(f32, f32)> {
    draft.placed[draft.heads.saturating_sub(1)..]
        .iter()
        .flatten()
        .filter(|p| p.first == column && p.last == column)
        .map(|p| (p.chunk.left, p.chunk.right))
        .reduce(|a, b| (a.0.min(b.0), a.1.max(b.1)))
}

/// Whether heads stand over groups of those in the next line; they are then given the columns of
/// their groups.
fn spread_over(draft: &Draft, heads: &mut [Head], next: &[Head]) -> bool {
    let size = draft.measure.size;
    if heads.is_empty() || heads.len() >= next.len() {
        return false;
    }
    let middles: Vec<f32> = heads.iter().map(Head::middle).collect();
    let mut found: Vec<Option<(usize, usize)>> = Vec::new();
    for (k, head) in heads.iter().enumerate() {
        // The heads below that are nearer to this one than to its neighbours.
        let mine: Vec<&Head> = next
            .iter()
            .filter(|n| {
                let distance = |m: f32| (n.middle() - m).abs();
                let own = distance(middles[k]);
                (k == 0 || own <= distance(middles[k - 1]))
                    && (k + 1 == middles.len() || own <= distance(middles[k + 1]))
            })
            .collect();
        let mut best: Option<(f32, usize, usize)> = None;
        for from in 0..mine.len() {
            for to in from + 1..mine.len() {
                let (first, last) = (mine[from].first, mine[to].last);
                // Measured by what stands in the columns, and by the heads alone.
                let by_columns = match (extent(draft, first), extent(draft, last)) {
                    (Some(a), Some(b)) => (head.middle() - (a.0 + b.1) / 2.0).abs(),
                    _ => f32::MAX,
                };
                let by_heads = (head.middle() - (mine[from].left + mine[to].right) / 2.0).abs();
                let off = by_columns.min(by_heads);
                let wide = mine[to].right - mine[from].left > 0.6 * (head.right - head.left);
                if wide && best.is_none_or(|b| off < b.0) {
                    best = Some((off, first, last));
                }
            }
        }
        // A head right above a single one is the first line of it.
        let alone = mine.iter().any(|n| {
            (head.left - n.left).abs() < 0.3 * size
                || (head.right - n.right).abs() < 0.3 * size
                || (head.middle() - n.middle()).abs() < 0.3 * size
        });
        let close = best.is_some_and(|b| b.0 < 0.9 * size);
        let reaches = head.last > head.first;
        let covered = mine
            .iter()
            .filter(|n| n.first >= head.first && n.last <= head.last)
            .count();
        found.push(match best {
            Some((off, first, last))
                if close
                    && (!alone
                        || reaches
                        || off < 0.5 * size && heads.len() >= 2 && heads.len() * 2 <= next.len()) =>
            {
                Some((first.min(head.first), last.max(head.last)))
            }
            _ if reaches && covered >= 2 => Some((head.first, head.last)),
            _ => None,
        });
    }
    let any = found.iter().filter(|f| f.is_some()).count();
    if any == 0 || any * 2 < heads.len() {
        return false;
    }
    for (head, f) in heads.iter_mut().zip(found) {
        if let Some((first, last)) = f {
            (head.first, head.last) = (first, last);
        }
    }
    true
}
