//! From the lines of a region to a *grid*: rows and columns of cells with their spans.

use super::super::glyphs::Area;
use super::super::lines::{Line, Word};
use super::super::paragraphs::is_marker;
use super::columns::{Measure, Seams};
use super::content::{self, Chunk, is_value, text_of};
use super::{heads, rows};

/// No table on a page has more columns.
const MOST_COLUMNS: usize = 60;

/// One cell: where it stands, how far it reaches, and its text line by line.
#[derive(Clone, Debug)]
pub struct GridCell {
    pub row: usize,
    pub column: usize,
    pub rowspan: usize,
    pub colspan: usize,
    pub header: bool,
    /// The number of each printed line among the lines of the table, and its words.
    pub text: Vec<(usize, Vec<Word>)>,
}

impl GridCell {
    pub fn plain(&self) -> String {
        let lines: Vec<String> = self.text.iter().map(|(_, w)| text_of(w)).collect();
        lines.join(" ")
    }
}

#[derive(Clone, Debug, Default)]
pub struct Grid {
    pub rows: usize,
    pub columns: usize,
    pub header_rows: usize,
    pub cells: Vec<GridCell>,
}

/// A stretch of a line and the columns that it reaches into.
#[derive(Clone, Debug)]
pub struct Placed {
    pub line: usize,
    pub chunk: Chunk,
    pub first: usize,
    pub last: usize,
}

/// What rules and lines of one table say together.
pub struct Draft<'a> {
    pub lines: &'a [Line],
    pub seams: Seams,
    pub measure: Measure,
    /// Rules as long as the table, by height.
    pub full: Vec<f32>,
    /// Shorter ones.
    pub part: Vec<Area>,
    pub down: Vec<Area>,
    /// Left and right end.
    pub sides: [f32; 2],
    pub placed: Vec<Vec<Placed>>,
    /// The number of lines that are heads of columns.
    pub heads: usize,
}

impl<'a> Draft<'a> {
    /// Finds the columns of the lines, and which of the lines are heads.
    pub fn new(lines: &'a [Line], area: &Area, across: &[Area], down: &[Area]) -> Option<Draft<'a>> {
        let width = area[2] - area[0];
        let mut sizes: Vec<f32> = lines.iter().map(|l| l.size).collect();
        sizes.sort_by(f32::total_cmp);
        let size = *sizes.get(sizes.len() / 2)?;
        let (mut full, mut part) = (Vec::new(), Vec::new());
        for rule in across {
            if rule[2] - rule[0] > 0.93 * width {
                full.push(rule[1]);
            } else {
                part.push(*rule);
            }
        }
        let measure = Measure {
            size,
            space: content::space_of(lines.iter(), size),
        };
        let walls = walls(area, down, size);
        let by_rule = head_by_rule(lines, &full);
        let body = &lines[by_rule.unwrap_or(0)..];
        let bare: Vec<&Line> = body.iter().filter(|l| !content::begins_note(l)).collect();
        let head_lines = &lines[..by_rule.unwrap_or(0)];
        let mut seams = Seams::find(&bare, head_lines, walls.clone(), measure);
        // Heads speak where there are hardly any rows, or when they know of columns that are empty.
        let last_head = by_rule.map_or(0, |h| h - 1);
        let named = by_rule.map_or(0, |_| {
            content::chunks(&lines[last_head], measure.space, &walls).len()
        });
        if bare.len() <= 2 || seams.at.is_empty() || named > seams.columns() {
            let all: Vec<&Line> = lines[last_head..].iter().collect();
            let with_heads = Seams::find(&all, &[], walls, measure);
            if with_heads.at.len() >= seams.at.len() {
                seams = with_heads;
            }
        }
        if seams.at.is_empty() || seams.at.len() >= MOST_COLUMNS {
            return None;
        }
        let mut draft = Draft {
            lines,
            seams,
            measure,
            full,
            part,
            down: down.to_vec(),
            sides: [area[0], area[2]],
            placed: Vec::new(),
            heads: 0,
        };
        draft.place(by_rule.unwrap_or(0));
        draft.heads = by_rule.unwrap_or_else(|| heads::by_look(&draft));
        if by_rule.is_none() && draft.heads > 0 {
            draft.place(draft.heads);
        }
        draft.join_columns();
        Some(draft)
    }

    /// Puts the chunks of all lines into columns.
    fn place(&mut self, heads: usize) {
        self.placed.clear();
        for (index, line) in self.lines.iter().enumerate() {
            let walls = self.walls_at(line);
            let whole = content::chunks(line, self.measure.space, &walls);
            let cut = whole.len() > 1;
            let least = if index < heads { 0.3 } else { 0.18 } * self.measure.size;
            let mut out: Vec<Placed> = Vec::new();
            for chunk in &whole {
                let head = index < heads;
                let (first, last) = self.seams.span(chunk.left, chunk.right, self.measure.size);
                let parts = if cut && first != last && !(head && heads::spans(self, index, heads, chunk)) {
                    self.seams.cut(line, chunk, least)
                } else {
                    vec![chunk.clone()]
                };
                for chunk in parts {
                    let (first, last) = self.seams.span(chunk.left, chunk.right, self.measure.size);
                    match out.last_mut() {
                        Some(o) if o.last == first && first == last && o.first == o.last => {
                            o.chunk.words.end = chunk.words.end;
                            o.chunk.right = chunk.right;
                        }
                        _ => out.push(Placed {
                            line: index,
                            chunk,
                            first,
                            last,
                        }),
                    }
                }
            }
            if !walls.is_empty() {
                self.widen(&mut out, &walls);
            }
            self.placed.push(out);
        }
    }

    /// Where the walls leave a gap beside a line, a cell reaches through it, up to the middle between
    /// two.
    fn widen(&self, placed: &mut [Placed], walls: &[f32]) {
        let gap = |c: usize| self.seams.walled(c) && !walls.contains(&self.seams.at[c]);
        let own: Vec<(usize, usize, f32)> = placed
            .iter()
            .map(|p| (p.first, p.last, p.chunk.middle()))
            .collect();
        let nearest = |k: usize, column: usize| {
            let left = if column == 0 {
                f32::MIN
            } else {
                self.seams.at[column - 1]
            };
            let right = self.seams.at.get(column).copied().unwrap_or(f32::MAX);
            let middle = match (left > f32::MIN, right < f32::MAX) {
                (true, true) => (left + right) / 2.0,
                (true, false) => left,
                _ => right,
            };
            own.iter().enumerate().all(|(o, (first, last, m))| {
                o == k
                    || !(*first..=*last).contains(&column) && (m - middle).abs() > (own[k].2 - middle).abs()
            })
        };
        for (k, p) in placed.iter_mut().enumerate() {
            while p.first > 0 && gap(p.first - 1) && nearest(k, p.first - 1) {
                p.first -= 1;
            }
            while gap(p.last) && nearest(k, p.last + 1) {
                p.last += 1;
            }
        }
    }

    /// The walls that stand beside a line.
    pub fn walls_at(&self, line: &Line) -> Vec<f32> {
        let middle = (line.area[1] + line.area[3]) / 2.0;
        let beside = |x: f32| {
            self.down
                .iter()
                .any(|d| (d[0] - x).abs() < 2.0 && d[1] < middle && d[3] > middle)
        };
        self.seams.walls.iter().copied().filter(|x| beside(*x)).collect()
    }

    pub fn text(&self, p: &Placed) -> String {
        text_of(&self.lines[p.line].words[p.chunk.words.clone()])
    }

    /// The texts below the heads that stand in one column only.
    fn column_texts(&self, column: usize) -> Vec<String> {
        self.placed[self.heads..]
            .iter()
            .flatten()
            .filter(|p| p.first == column && p.last == column)
            .map(|p| self.text(p))
            .collect()
    }

    /// Puts back together what is one column to its reader: numbers and the brackets, stars or signs
    /// beside them, where no head of their own says otherwise.
    fn join_columns(&mut self) {
        let mut column = 1;
        while column < self.seams.columns() {
            if !self.seams.walled(column - 1) && self.belongs_to_left(column) {
                self.seams.at.remove(column - 1);
                let heads = self.heads;
                self.place(heads);
            } else {
                column += 1;
            }
        }
    }

    fn belongs_to_left(&self, column: usize) -> bool {
        let left = self.column_texts(column - 1);
        let here = self.column_texts(column);
        if here.is_empty() || left.is_empty() {
            return false;
        }
        let has_head = |c: usize| {
            self.placed[..self.heads]
                .iter()
                .flatten()
                .any(|p| p.first == c && p.last == c)
        };
        let all = |texts: &[String], look: &dyn Fn(&str) -> bool| texts.iter().all(|t| look(t.trim()));
        let marks = |t: &str| {
            t.chars().all(|c| {
                matches!(c, '*' | '∗' | '†' | '‡' | '§' | '+') || c.is_ascii_lowercase() && t.len() == 1
            })
        };
        let signs = |t: &str| {
            matches!(
                t,
                "±" | "–" | "-" | "—" | "to" | "," | "/" | "(" | "[" | ")" | "]" | ";"
            )
        };
        let open = |t: &str| {
            let count = |c: char| t.matches(c).count();
            count('(') > count(')') || count('[') > count(']')
        };
        let bracketed = |t: &str| {
            let bare = t.trim_end_matches(['*', '∗', '†', '‡', '%']);
            bare.starts_with(['(', '[']) && bare.ends_with([')', ']'])
        };
        let values = left.iter().filter(|t| is_value(t)).count() * 2 > left.len();
        // The numbers of a list, before what they number.
        if left.iter().all(|t| is_marker(t)) && left.len() >= 2 && !has_head(column) {
            return true;
        }
        // Brackets that open in one column and close in the next, line by line.
        let alone = |line: &[Placed], c: usize| {
            let found = line.iter().find(|p| p.first == c && p.last == c);
            found.map(|p| self.text(p))
        };
        let shared = self.placed[self.heads..]
            .iter()
            .filter(|line| {
                alone(line, column - 1).is_some_and(|t| open(&t))
                    && alone(line, column).is_some_and(|t| t.contains([')', ']']) && !t.contains(['(', '[']))
            })
            .count();
        if shared > 0 && shared * 2 >= left.len() {
            return true;
        }
        if has_head(column) && has_head(column - 1) {
            return false;
        }
        // Words under one head: spaces that happened to stand below one another.
        let one_head = self.heads > 0
            && self.placed[self.heads - 1]
                .iter()
                .any(|p| p.first < column && p.last >= column);
        if one_head && !has_head(column) && here.iter().filter(|t| is_value(t)).count() * 3 < here.len() {
            return true;
        }
        all(&here, &marks) && values && !has_head(column)
            || all(&here, &signs) && here.len() >= 2 && !has_head(column)
            || all(&left, &signs) && left.len() >= 2 && !has_head(column - 1)
            || all(&here, &bracketed) && values && !has_head(column) && here.len() <= left.len()
    }

    /// The finished grid.
    pub fn grid(&self) -> Grid {
        let mut cells: Vec<GridCell> = Vec::new();
        let header_rows = heads::cells(self, &mut cells);
        let count = rows::cells(self, header_rows, &mut cells);
        cells.retain(|c| !c.text.is_empty());
        Grid {
            rows: count,
            columns: self.seams.columns(),
            header_rows,
            cells,
        }
    }
}

/// Rules down the table that separate columns: inside it, and at least as long as a third of it.
fn walls(area: &Area, down: &[Area], size: f32) -> Vec<f32> {
    let height = area[3] - area[1];
    let mut at: Vec<(f32, f32)> = Vec::new();
    for rule in down {
        if rule[0] < area[0] + 0.6 * size || rule[0] > area[2] - 0.6 * size {
            continue;
        }
        let long = rule[3].min(area[3]) - rule[1].max(area[1]);
        match at.iter_mut().find(|(x, _)| (*x - rule[0]).abs() < 2.5) {
            Some((_, sum)) => *sum += long,
            None => at.push((rule[0], long)),
        }
    }
    let mut out: Vec<f32> = at
        .iter()
        .filter(|(_, sum)| *sum > 0.33 * height)
        .map(|(x, _)| *x)
        .collect();
    out.sort_by(f32::total_cmp);
    out
}

/// The number of lines above the first rule that has lines above and below, and those between the
/// rules right below it as long as they hold no values.
fn head_by_rule(lines: &[Line], full: &[f32]) -> Option<usize> {
    let values = |l: &Line| {
        let count = l.words.iter().filter(|w| is_value(&w.text())).count();
        count >= 2 && count * 2 > l.words.len()
    };
    let above = |rule: f32| lines.iter().filter(|l| l.baseline < rule + 1.0).count();
    let mut rules = full.iter().copied().skip_while(|r| above(*r) == 0);
    let mut heads = above(rules.next()?);
    // More lines than that, or lines of values, are rows.
    let last = heads - 1;
    let numbered = heads >= 2 && !values(&lines[last - 1]);
    let inner = if numbered { last } else { heads };
    if heads > 6 || heads >= lines.len() || lines[..inner].iter().skip(1).any(values) {
        return None;
    }
    for rule in rules {
        let next = above(rule);
        if next == heads {
            continue;
        }
        let band = &lines[heads..next];
        let holds_values = |l: &Line| {
            let cells = content::chunks(l, 0.45 * l.size, &[]);
            cells
                .iter()
                .any(|c| is_value(&text_of(&l.words[c.words.clone()])))
        };
        let bare = band.iter().all(|l| l.pieces >= 2 && !holds_values(l));
        let valued = lines[next..].iter().take(3).any(holds_values);
        if band.len() > 2 || !bare || !valued {
            break;
        }
        heads = next;
    }
    Some(heads)
}
