//! *Slices*: an outline cut by horizontal lines at even distances. Each cut gives the *spans* of ink
//! on it, by the rule that a filled page follows (non-zero winding), so that neither the order nor
//! the overlap of contours matters. Spans that touch from cut to cut are one *component* of ink;
//! gaps between spans that are closed in on all sides are *holes*.

use crate::readers::pdf::glyphs::Step;
use std::cell::OnceCell;

/// Cuts through a glyph. The thinnest bar of a mark (a twentieth of its height) still gets two.
pub const ROWS: usize = 48;

/// Ink from one end to the other.
#[derive(Clone, Copy, Debug, PartialEq)]
pub struct Span {
    pub from: f32,
    pub to: f32,
}

impl Span {
    pub fn width(self) -> f32 {
        self.to - self.from
    }

    pub fn middle(self) -> f32 {
        (self.from + self.to) / 2.0
    }

    fn meets(self, other: Span) -> bool {
        self.from <= other.to && other.from <= self.to
    }
}

/// The spans of one cut, from left to right. No mark has more than six; further ones are left out.
#[derive(Clone, Copy, Debug)]
pub struct Row {
    count: usize,
    spans: [Span; MOST],
}

const MOST: usize = 6;

impl Row {
    const EMPTY: Row = Row {
        count: 0,
        spans: [Span { from: 0.0, to: 0.0 }; MOST],
    };

    fn push(&mut self, span: Span) {
        if self.count < MOST {
            self.spans[self.count] = span;
            self.count += 1;
        }
    }
}

impl std::ops::Deref for Row {
    type Target = [Span];

    fn deref(&self) -> &[Span] {
        &self.spans[..self.count]
    }
}

/// The straight edges of a flattened outline.
pub struct Edges {
    edges: Vec<[[f32; 2]; 2]>,
    /// Left, lower, right, upper end.
    pub bounds: [f32; 4],
}

impl Edges {
    /// Flattens an outline. Curves become four straight pieces, which is off by less than a
    /// hundredth of a letter's height.
    pub fn of(outline: &[Step]) -> Edges {
        const PIECES: usize = 4;
        let mut edges = Vec::with_capacity(outline.len() * 2);
        let (mut start, mut at) = ([0.0; 2], [0.0; 2]);
        let mut add = |from: [f32; 2], to: [f32; 2]| {
            if from != to {
                edges.push([from, to]);
            }
        };
        for step in outline {
            match *step {
                Step::Move(to) => {
                    add(at, start);
                    (start, at) = (to, to);
                }
                Step::Line(to) => {
                    add(at, to);
                    at = to;
                }
                Step::Quad(a, to) => {
                    let from = at;
                    for i in 1..=PIECES {
                        let t = i as f32 / PIECES as f32;
                        let u = 1.0 - t;
                        let on = |k: usize| u * u * from[k] + 2.0 * u * t * a[k] + t * t * to[k];
                        let next = [on(0), on(1)];
                        add(at, next);
                        at = next;
                    }
                }
                Step::Curve(a, b, to) => {
                    let from = at;
                    for i in 1..=PIECES {
                        let t = i as f32 / PIECES as f32;
                        let u = 1.0 - t;
                        let on = |k: usize| {
                            u * u * (u * from[k] + 3.0 * t * a[k]) + t * t * (3.0 * u * b[k] + t * to[k])
                        };
                        let next = [on(0), on(1)];
                        add(at, next);
                        at = next;
                    }
                }
                Step::Close => {
                    add(at, start);
                    at = start;
                }
            }
        }
        add(at, start);
        let mut bounds = [f32::MAX, f32::MAX, f32::MIN, f32::MIN];
        for [x, y] in edges.iter().flatten() {
            bounds[0] = bounds[0].min(*x);
            bounds[1] = bounds[1].min(*y);
            bounds[2] = bounds[2].max(*x);
            bounds[3] = bounds[3].max(*y);
        }
        Edges { edges, bounds }
    }

    /// The same edges with x and y exchanged: rows become columns.
    pub fn turned(&self) -> Edges {
        let [l, b, r, t] = self.bounds;
        Edges {
            edges: self
                .edges
                .iter()
                .map(|[p, q]| [[p[1], p[0]], [q[1], q[0]]])
                .collect(),
            bounds: [b, l, t, r],
        }
    }

    /// The spans on `count` lines between the lower and the upper end, from below.
    pub fn rows(&self, count: usize) -> Vec<Row> {
        let (low, high) = (self.bounds[1], self.bounds[3]);
        let step = (high - low) / count as f32;
        let mut crossings: Vec<(u32, f32, i32)> = Vec::with_capacity(count * 4);
        for [p, q] in &self.edges {
            let (lower, upper, turn) = if p[1] < q[1] { (p, q, 1) } else { (q, p, -1) };
            if lower[1] == upper[1] {
                continue;
            }
            // Line i is at low + (i + ½) · step; an edge covers those from its lower end on, below its upper.
            let first = ((lower[1] - low) / step - 0.5).ceil().max(0.0) as usize;
            let slope = (upper[0] - lower[0]) / (upper[1] - lower[1]);
            for i in first..count {
                let y = low + (i as f32 + 0.5) * step;
                if y >= upper[1] {
                    break;
                }
                crossings.push((i as u32, lower[0] + slope * (y - lower[1]), turn));
            }
        }
        crossings.sort_unstable_by(|a, b| a.0.cmp(&b.0).then(a.1.total_cmp(&b.1)));
        let mut rows = vec![Row::EMPTY; count];
        for row in crossings.chunk_by(|a, b| a.0 == b.0) {
            rows[row[0].0 as usize] = spans(row);
        }
        rows
    }
}

fn spans(crossings: &[(u32, f32, i32)]) -> Row {
    let mut out = Row::EMPTY;
    let mut wound = 0;
    let mut open: Option<Span> = None;
    for pair in crossings.windows(2) {
        wound += pair[0].2;
        if wound == 0 || pair[1].1 <= pair[0].1 {
            continue;
        }
        match &mut open {
            Some(last) if last.to >= pair[0].1 => last.to = pair[1].1,
            _ => {
                if let Some(done) = open {
                    out.push(done);
                }
                open = Some(Span {
                    from: pair[0].1,
                    to: pair[1].1,
                });
            }
        }
    }
    if let Some(done) = open {
        out.push(done);
    }
    out
}

/// Connected ink.
#[derive(Clone, Debug)]
pub struct Component {
    /// Its spans row by row, from below, without rows above or below it.
    pub rows: Vec<Row>,
    /// Left, lower, right, upper end.
    pub bounds: [f32; 4],
    single: OnceCell<Option<Vec<Span>>>,
}

impl Component {
    pub fn new(rows: Vec<Row>, bounds: [f32; 4]) -> Component {
        Component {
            rows,
            bounds,
            single: OnceCell::new(),
        }
    }

    pub fn width(&self) -> f32 {
        self.bounds[2] - self.bounds[0]
    }

    pub fn height(&self) -> f32 {
        self.bounds[3] - self.bounds[1]
    }

    /// The share of its bounds that is ink.
    pub fn fill(&self) -> f32 {
        let ink: f32 = self.rows.iter().flat_map(|r| r.iter()).map(|s| s.width()).sum();
        ink / (self.width() * self.rows.len() as f32)
    }

    /// The row at this share of the height, from below.
    pub fn at(&self, share: f32) -> &[Span] {
        let last = self.rows.len() - 1;
        &self.rows[((share * self.rows.len() as f32) as usize).min(last)]
    }

    /// One span in every row; their middles and widths then describe it.
    pub fn single(&self) -> Option<&[Span]> {
        let one = |row: &Row| match **row {
            [one] => Some(one),
            _ => None,
        };
        self.single
            .get_or_init(|| self.rows.iter().map(one).collect())
            .as_deref()
    }
}

/// The components of the ink in these rows, which lie between `low` and `high`; `None` if there are
/// more than `most`.
pub fn components(rows: &[Row], low: f32, high: f32, most: usize) -> Option<Vec<Component>> {
    let step = (high - low) / rows.len() as f32;
    let groups = grouped(rows);
    let mut out: Vec<(u32, usize, Component)> = Vec::new();
    for (i, (row, groups)) in rows.iter().zip(&groups).enumerate() {
        for (span, group) in row.iter().zip(groups) {
            let at = match out.iter().position(|(g, ..)| g == group) {
                Some(at) => at,
                None if out.len() == most => return None,
                None => {
                    let bounds = [f32::MAX, low + i as f32 * step, f32::MIN, f32::MIN];
                    let rows = Vec::with_capacity(rows.len() - i);
                    out.push((*group, i, Component::new(rows, bounds)));
                    out.len() - 1
                }
            };
            let (_, first, c) = &mut out[at];
            while c.rows.len() <= i - *first {
                c.rows.push(Row::EMPTY);
            }
            c.rows[i - *first].push(*span);
            c.bounds[0] = c.bounds[0].min(span.from);
            c.bounds[2] = c.bounds[2].max(span.to);
            c.bounds[3] = low + (i + 1) as f32 * step;
        }
    }
    Some(out.into_iter().map(|(.., c)| c).collect())
}

/// The bounds of the holes: gaps between spans that never open to the outside.
pub fn holes(rows: &[Row], low: f32, high: f32) -> Vec<[f32; 4]> {
    let step = (high - low) / rows.len() as f32;
    let gaps: Vec<Row> = rows
        .iter()
        .map(|row| {
            let mut gaps = Row::EMPTY;
            for pair in row.windows(2) {
                gaps.push(Span {
                    from: pair[0].to,
                    to: pair[1].from,
                });
            }
            gaps
        })
        .collect();
    let groups = grouped(&gaps);
    let mut found: Vec<(u32, [f32; 4], bool)> = Vec::new();
    for (i, (row, groups)) in gaps.iter().zip(&groups).enumerate() {
        for (gap, group) in row.iter().zip(groups) {
            // Open where the row above or below does not reach over the whole of the gap.
            let open = [i.checked_sub(1), Some(i + 1)].into_iter().any(|n| {
                let next = n.and_then(|n| rows.get(n));
                let ends = next.and_then(|row| Some((row.first()?.from, row.last()?.to)));
                ends.is_none_or(|(left, right)| gap.from < left || gap.to > right)
            });
            let y = [low + i as f32 * step, low + (i + 1) as f32 * step];
            match found.iter_mut().find(|f| f.0 == *group) {
                Some((_, b, o)) => {
                    *b = [b[0].min(gap.from), b[1], b[2].max(gap.to), y[1]];
                    *o |= open;
                }
                None => found.push((*group, [gap.from, y[0], gap.to, y[1]], open)),
            }
        }
    }
    found.into_iter().filter(|f| !f.2).map(|f| f.1).collect()
}

/// For each span the number of its group; spans of neighbouring rows that meet share a group.
fn grouped(rows: &[Row]) -> Vec<[u32; MOST]> {
    let mut parent: Vec<u32> = Vec::with_capacity(rows.len() * 2);
    fn root(parent: &[u32], mut at: u32) -> u32 {
        while parent[at as usize] != at {
            at = parent[at as usize];
        }
        at
    }
    let mut numbers: Vec<[u32; MOST]> = Vec::with_capacity(rows.len());
    for (i, row) in rows.iter().enumerate() {
        let mut here = [0; MOST];
        for (span, number) in row.iter().zip(&mut here) {
            // A span goes on with the group of the first one below that it meets, and joins the others to it.
            let mut own = None;
            if i > 0 {
                for (below, group) in rows[i - 1].iter().zip(&numbers[i - 1]) {
                    if !below.meets(*span) {
                        continue;
                    }
                    let group = root(&parent, *group);
                    match own {
                        None => own = Some(group),
                        Some(o) => {
                            let (first, second) = (group.min(o), group.max(o));
                            parent[second as usize] = first;
                            own = Some(first);
                        }
                    }
                }
            }
            *number = own.unwrap_or_else(|| {
                parent.push(parent.len() as u32);
                parent.len() as u32 - 1
            });
        }
        numbers.push(here);
    }
    for (row, numbers) in rows.iter().zip(&mut numbers) {
        for number in &mut numbers[..row.len()] {
            *number = root(&parent, *number);
        }
    }
    numbers
}

impl Edges {
    /// Goes along all edges in steps of a few thousandths of the font size.
    pub fn along(&self, mut visit: impl FnMut([f32; 2])) {
        for [p, q] in &self.edges {
            let (dx, dy) = (q[0] - p[0], q[1] - p[1]);
            let steps = (dx.hypot(dy) / 8.0).ceil().clamp(1.0, 500.0) as usize;
            for i in 0..steps {
                let t = i as f32 / steps as f32;
                visit([p[0] + t * dx, p[1] + t * dy]);
            }
        }
    }
}
