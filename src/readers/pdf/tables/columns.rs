//! Where one column of a table ends and the next begins: strips that no cell reaches into, over all
//! lines that have several cells, and the rules that run down the table.

use super::super::lines::Line;
use super::content::{Chunk, chunks};

/// The places between columns, from left to right.
#[derive(Clone, Debug, Default, PartialEq)]
pub struct Seams {
    pub at: Vec<f32>,
    /// Rules that run down the table, those that are seams too.
    pub walls: Vec<f32>,
}

/// How the lines of a table are measured.
#[derive(Clone, Copy, Debug)]
pub struct Measure {
    /// Size of most of its text.
    pub size: f32,
    /// The widest gap between words.
    pub space: f32,
}

impl Seams {
    /// Finds the seams from lines with cells; lines with one chunk only have no voice.
    ///
    /// `heads` have no voice either, but where a seam may stand in a wide strip, it stands clear of them.
    pub fn find(lines: &[&Line], heads: &[Line], walls: Vec<f32>, m: Measure) -> Seams {
        let mut rows: Vec<Vec<Chunk>> = Vec::new();
        for (i, line) in lines.iter().enumerate() {
            let mut here = chunks(line, m.space, &walls);
            let overlaps = i > 0 && line.baseline - lines[i - 1].baseline < 0.85 * m.size;
            // A label half-way between two lines speaks with the one above.
            match rows.last_mut() {
                Some(row) if overlaps && (row.len() == 1 || here.len() == 1) => row.append(&mut here),
                _ => rows.push(here),
            }
        }
        // Lines of one chunk have no voice, but seams stand clear of them like of heads.
        let alone: Vec<Vec<Chunk>> = rows.iter().filter(|c| c.len() == 1).cloned().collect();
        rows.retain(|c| c.len() >= 2);
        for row in &mut rows {
            row.sort_by(|a, b| a.left.total_cmp(&b.left));
        }
        let mut at = strips(&rows, m);
        // A wall inside a strip is the seam itself.
        at.retain(|s| !walls.iter().any(|w| *w >= s.0 - 1.0 && *w <= s.1 + 1.0));
        let mut heads: Vec<Vec<Chunk>> = heads.iter().rev().map(|l| chunks(l, m.space, &walls)).collect();
        heads.extend(alone);
        let mut at: Vec<f32> = at.iter().map(|s| clear_of(&heads, *s)).collect();
        at.extend(&walls);
        at.sort_by(f32::total_cmp);
        Seams { at, walls }
    }

    pub fn columns(&self) -> usize {
        self.at.len() + 1
    }

    /// The columns that a stretch of a line reaches into, first and last.
    pub fn span(&self, left: f32, right: f32, size: f32) -> (usize, usize) {
        let slack = (0.25 * size).min((right - left) / 3.0);
        let first = self.at.iter().filter(|s| **s <= left + slack).count();
        let last = self.at.iter().filter(|s| **s < right - slack).count();
        (first, last.max(first))
    }

    /// Whether a wall stands between a column and the next one.
    pub fn walled(&self, column: usize) -> bool {
        self.at.get(column).is_some_and(|s| self.walls.contains(s))
    }

    /// Cuts the chunk where words have a gap over a seam.
    pub fn cut(&self, line: &Line, chunk: &Chunk, least: f32) -> Vec<Chunk> {
        let mut out = vec![chunk.clone()];
        for i in chunk.words.start + 1..chunk.words.end {
            let (before, after) = (line.words[i - 1].area[2], line.words[i].area[0]);
            let over = self.at.iter().any(|s| *s > before - 0.5 && *s < after + 0.5);
            if over && after - before >= least {
                let last = out.len() - 1;
                out[last].words.end = i;
                out[last].right = before;
                out.push(Chunk {
                    words: i..chunk.words.end,
                    left: after,
                    right: chunk.right,
                });
            }
        }
        out
    }
}

/// The middle of the widest part of a strip that the heads leave free, those of the last line first.
fn clear_of(heads: &[Vec<Chunk>], strip: (f32, f32)) -> f32 {
    let mut free = vec![strip];
    for line in heads {
        let mut left = Vec::new();
        for (a, b) in &free {
            let mut from = *a;
            for chunk in line.iter().filter(|c| c.right > *a && c.left < *b) {
                if chunk.left > from {
                    left.push((from, chunk.left));
                }
                from = from.max(chunk.right);
            }
            if from < *b {
                left.push((from, *b));
            }
        }
        left.retain(|(a, b)| b - a > 0.8);
        if !left.is_empty() {
            free = left;
        }
    }
    let widest = free.iter().max_by(|a, b| (a.1 - a.0).total_cmp(&(b.1 - b.0)));
    widest.map_or((strip.0 + strip.1) / 2.0, |(a, b)| (a + b) / 2.0)
}

/// Strips between the chunks of the rows.
fn strips(rows: &[Vec<Chunk>], m: Measure) -> Vec<(f32, f32)> {
    if rows.is_empty() {
        return Vec::new();
    }
    let least = if rows.len() >= 3 { 0.36 } else { 0.7 } * m.size;
    let all: Vec<&[Chunk]> = rows.iter().map(Vec::as_slice).collect();
    let mut out = free(&all, 0, least);
    // Now and then a cell is wider than its column.
    let slack = rows.len() / 6;
    if slack > 0 {
        let mut edges: Vec<f32> = vec![f32::MIN];
        edges.extend(out.iter().map(|s| (s.0 + s.1) / 2.0));
        edges.push(f32::MAX);
        for pair in edges.windows(2) {
            let inside: Vec<&[Chunk]> = rows
                .iter()
                .map(|r| {
                    let from = r.iter().take_while(|c| c.middle() < pair[0]).count();
                    let to = r.iter().take_while(|c| c.middle() < pair[1]).count();
                    &r[from..to]
                })
                .filter(|r| !r.is_empty())
                .collect();
            // Most lines must have two cells here.
            let two = inside.iter().filter(|r| r.len() >= 2).count();
            if inside.len() >= 5 && two * 5 >= inside.len() * 4 {
                let few = inside.len() - two;
                out.extend(free(&inside, few.min(slack), 0.6 * m.size));
            }
        }
    }
    out.sort_by(|a, b| a.0.total_cmp(&b.0));
    out
}

/// Stretches at least so wide that at most `few` rows reach into, between others that more do.
fn free(rows: &[&[Chunk]], few: usize, least: f32) -> Vec<(f32, f32)> {
    let mut ends: Vec<(f32, i32)> = Vec::new();
    for chunk in rows.iter().flat_map(|r| r.iter()) {
        ends.push((chunk.left, 1));
        ends.push((chunk.right, -1));
    }
    ends.sort_by(|a, b| a.0.total_cmp(&b.0).then(b.1.cmp(&a.1)));
    let mut out = Vec::new();
    let (mut over, mut since, mut begun) = (0i32, f32::MIN, false);
    for (x, step) in ends {
        let before = over;
        over += step;
        if before as usize > few && over as usize <= few {
            since = x;
            begun = true;
        } else if before as usize <= few && over as usize > few && begun && x - since >= least {
            out.push((since, x));
        }
    }
    out
}
