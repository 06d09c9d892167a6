//! *Strokes*: what a single component of ink looks like, from the spans of its cuts. Whatever can be
//! is measured against the component itself, so that neither size nor weight of a face matters; a
//! slanted face moves the cuts evenly, and that is taken out.

use super::slices::{Component, Edges, ROWS, Span};

/// One piece of ink.
#[derive(Clone, Copy, Debug, PartialEq)]
pub enum Piece {
    /// A level bar.
    Bar,
    /// A bar that goes up to the right (or down, if negative) by this share of its width.
    Slanted(f32),
    Dot,
    Chevron {
        left: bool,
    },
    Plus,
    PlusOnBar,
    Cross,
    Wave,
    Arc {
        left: bool,
    },
    Square {
        left: bool,
    },
    Other,
}

/// What a component looks like.
pub fn piece(part: &Component, edges: &Edges) -> Piece {
    if level_bar(part) {
        return Piece::Bar;
    }
    if dot(part) {
        return Piece::Dot;
    }
    if let Some(slope) = slanted(part) {
        return Piece::Slanted(slope);
    }
    if let Some(left) = chevron(part) {
        return Piece::Chevron { left };
    }
    if let Some(on_bar) = plus(part) {
        return if on_bar { Piece::PlusOnBar } else { Piece::Plus };
    }
    if cross(part) {
        return Piece::Cross;
    }
    if let Some(left) = arc(part) {
        return Piece::Arc { left };
    }
    if let Some(left) = square(part) {
        return Piece::Square { left };
    }
    if wave(part, edges) {
        return Piece::Wave;
    }
    Piece::Other
}

/// Rows without the outermost, where round ends and the edges of the cut show.
pub fn inner<T>(rows: &[T], share: f32) -> &[T] {
    let cut = (rows.len() as f32 * share) as usize;
    &rows[cut..rows.len() - cut]
}

pub fn level_bar(part: &Component) -> bool {
    let Some(spans) = part.single() else { return false };
    let (width, height) = (part.width(), part.height());
    if width < 1.7 * height {
        return false;
    }
    let spans = inner(spans, 0.15);
    let widest = spans.iter().map(|s| s.width()).fold(0.0, f32::max);
    // Slanted faces shear the bar; its ends may be round.
    let tilt = spans[spans.len() - 1].middle() - spans[0].middle();
    widest + tilt.abs() * 1.4 > 0.9 * width && spans.iter().all(|s| s.width() > 0.84 * widest)
}

fn dot(part: &Component) -> bool {
    let (width, height) = (part.width(), part.height());
    let Some(spans) = part.single() else { return false };
    if !(0.72..1.38).contains(&(width / height)) || part.fill() < 0.72 {
        return false;
    }
    // As wide below as above, as left as right: a square, a disc or a lozenge of a slanted face.
    let third = spans.len() / 3;
    let ink = |rows: &[Span]| rows.iter().map(|s| s.width()).sum::<f32>();
    let (below, above) = (ink(&spans[..third]), ink(&spans[spans.len() - third..]));
    (below - above).abs() < 0.12 * below.max(above)
}

/// A straight stroke of even width: how far it goes up per step to the right.
fn slanted(part: &Component) -> Option<f32> {
    let all = part.single()?;
    // The ends of a flat stroke taper over many rows; those of a steep one over few.
    let steep = part.height() > part.width();
    let spans = inner(all, if steep { 0.05 } else { 0.25 });
    if spans.len() < 5 {
        return None;
    }
    let mut widths: Vec<f32> = spans.iter().map(|s| s.width()).collect();
    widths.sort_by(f32::total_cmp);
    let usual = widths[widths.len() / 2];
    let even = |s: &Span| (s.width() - usual).abs() < 0.16 * usual;
    // Feet, arms and bars at the ends would make a letter or a bracket of it.
    if !spans.iter().all(even) || all.iter().any(|s| s.width() > 1.25 * usual) {
        return None;
    }
    let (first, last) = (spans[0].middle(), spans[spans.len() - 1].middle());
    let run = last - first;
    let rows = (spans.len() - 1) as f32;
    if run.abs() < 0.04 * part.height() {
        return None;
    }
    let straight = spans.iter().enumerate().all(|(i, s)| {
        let on = first + run * i as f32 / rows;
        (s.middle() - on).abs() < 0.05 * part.width().max(usual)
    });
    straight.then_some(part.height() / part.rows.len() as f32 * rows / run)
}

/// The middles of the rows, turned upright, as shares of the width, and how wide strokes are.
fn spine(part: &Component) -> Option<Vec<f32>> {
    let spans = part.single()?;
    let n = spans.len();
    if n < 12 {
        return None;
    }
    let end = (n / 16).max(1);
    let (bottom, top) = (spans[end].middle(), spans[n - 1 - end].middle());
    let tilt = (top - bottom) / (n - 1 - 2 * end) as f32;
    if (top - bottom).abs() > 0.35 * part.height() {
        return None;
    }
    Some(
        spans
            .iter()
            .enumerate()
            .map(|(i, s)| s.middle() - tilt * (i as f32 - end as f32) - bottom)
            .collect(),
    )
}

/// How a stroke bends: how far its middle stands off the line between its ends, positive to the
/// right, and which share of that it has reached after a quarter.
fn bend(part: &Component) -> Option<(f32, f32)> {
    let spine = spine(part)?;
    let n = spine.len();
    let inner = &spine[n / 16..n - n / 16];
    let at = |share: f32| spine[((n as f32 * share) as usize).min(n - 1)];
    let off = at(0.5);
    if off.abs() < 1.0 {
        return None;
    }
    // The bend is furthest in the middle and the same above and below.
    let furthest = (0..inner.len()).max_by(|a, b| inner[*a].abs().total_cmp(&inner[*b].abs()))?;
    let share = furthest as f32 / inner.len() as f32;
    let (below, above) = (at(0.25) / off, at(0.75) / off);
    if !(0.4..0.6).contains(&share) || (below - above).abs() > 0.22 {
        return None;
    }
    Some((off, (below + above) / 2.0))
}

/// `<` (true) or `>`: two straight strokes that meet in a corner.
pub fn chevron(part: &Component) -> Option<bool> {
    let spans = part.single()?;
    let n = spans.len();
    let (width, shape) = (part.width(), part.width() / part.height());
    if n < 12 || !(0.45..2.4).contains(&shape) {
        return None;
    }
    let left = spans[n / 2].middle() < (part.bounds[0] + part.bounds[2]) / 2.0;
    // How far the outer edge, where the corner is, and the inner edge stand off from the corner's side;
    // a slanted face moves the rows evenly.
    let outer = |s: Span| {
        if left {
            s.from - part.bounds[0]
        } else {
            part.bounds[2] - s.to
        }
    };
    let inner_edge = |s: Span| {
        if left {
            s.to - part.bounds[0]
        } else {
            part.bounds[2] - s.from
        }
    };
    let row = |share: f32| spans[((n as f32 * share) as usize).min(n - 1)];
    let tilt = outer(row(0.88)) - outer(row(0.12));
    if tilt.abs() > 0.4 * part.height() {
        return None;
    }
    let upright = |edge: &dyn Fn(Span) -> f32, share: f32| edge(row(share)) - tilt * (share - 0.5) / 0.76;
    let at = |share: f32| upright(&outer, share);
    let corner = at(0.5);
    let reach = (at(0.12) + at(0.88)) / 2.0 - corner;
    // The outer edge is straight from both ends to the corner, which may be blunt.
    let arm = |end: f32, far: f32, near: f32| {
        let slope = (at(end) - at(near)) / (end - near).abs();
        let halfway = at(near) + slope * (far - near).abs();
        let corner_on_line = at(near) - slope * (0.5 - near).abs();
        (at(far) - halfway).abs() < 0.05 * width
            && (corner - 0.55 * width..corner + 0.08 * width).contains(&corner_on_line)
    };
    let straight = arm(0.12, 0.2, 0.32) && arm(0.88, 0.8, 0.68);
    // The inner edge has a corner too, or it would be a triangle; and the ends are ends of strokes.
    let depth = (upright(&inner_edge, 0.25) + upright(&inner_edge, 0.75)) / 2.0 - upright(&inner_edge, 0.5);
    let stroke = |share: f32| row(share).width();
    let (below, above) = (
        (stroke(0.22) + stroke(0.34)) / 2.0,
        (stroke(0.66) + stroke(0.78)) / 2.0,
    );
    // Some faces make one arm two or three times as thick as the other.
    let even = (below - above).abs() < 0.72 * below.max(above);
    let ends = row(0.06).width().max(row(0.94).width()) < 0.75 * width;
    (straight && reach > 0.5 * width && depth > 0.2 * width && even && ends).then_some(left)
}

/// `(` (true) or `)`.
fn arc(part: &Component) -> Option<bool> {
    let (off, quarter) = bend(part)?;
    let shape = part.width() / part.height();
    let fits = (0.64..0.98).contains(&quarter) && (0.08..0.5).contains(&shape);
    (fits && off.abs() > 0.25 * part.width() && part.fill() < 0.62).then_some(off < 0.0)
}

/// A plus; true when it stands on a bar that it touches.
fn plus(part: &Component) -> Option<bool> {
    let shape = part.width() / part.height();
    if !(0.55..1.45).contains(&shape) {
        return None;
    }
    let spans = part.single()?;
    let width = part.width();
    // The bounds of a slanted plus are wider than its bar.
    let widest = spans.iter().map(|s| s.width()).fold(0.0, f32::max);
    let wide: Vec<bool> = spans.iter().map(|s| s.width() > 0.8 * widest).collect();
    // Stretches of wide and narrow rows, from below.
    let mut runs: Vec<(bool, usize, usize)> = Vec::new();
    for (i, w) in wide.iter().enumerate() {
        match runs.last_mut() {
            Some((last, _, to)) if *last == *w => *to = i + 1,
            _ => runs.push((*w, i, i + 1)),
        }
    }
    let n = spans.len() as f32;
    let on_bar = match runs.as_slice() {
        [(false, ..), (true, from, to), (false, ..)] => {
            let middle = (*from + *to) as f32 / 2.0 / n;
            if !(0.36..0.64).contains(&middle) || (*to - *from) as f32 > 0.36 * n || shape < 0.75 {
                return None;
            }
            false
        }
        [(true, _, foot), (false, ..), (true, from, to), (false, ..)] => {
            let middle = (*from + *to) as f32 / 2.0 / n;
            if !(0.42..0.7).contains(&middle) || *foot as f32 > 0.2 * n || (*to - *from) as f32 > 0.2 * n {
                return None;
            }
            true
        }
        _ => return None,
    };
    // The upright is one stroke through the middle, with no serif and no curve.
    let narrow: Vec<Span> = spans
        .iter()
        .zip(&wide)
        .filter(|(_, w)| !**w)
        .map(|(s, _)| *s)
        .collect();
    let narrow = inner(&narrow, 0.06);
    let thickest = narrow.iter().map(|s| s.width()).fold(0.0, f32::max);
    let thinnest = narrow.iter().map(|s| s.width()).fold(f32::MAX, f32::min);
    let (first, last) = (narrow.first()?, narrow.last()?);
    let tilt = last.middle() - first.middle();
    let middle = (first.middle() + last.middle()) / 2.0;
    let centred = (middle - (part.bounds[0] + part.bounds[2]) / 2.0).abs() < 0.06 * width;
    let fits = thickest < 0.42 * width && thinnest > 0.6 * thickest && tilt.abs() < 0.4 * width && centred;
    fits.then_some(on_bar)
}

/// `×`: two straight strokes of one width that cross in the middle.
fn cross(part: &Component) -> bool {
    let (left, width, height) = (part.bounds[0], part.width(), part.height());
    if !(0.8..1.3).contains(&(width / height)) {
        return false;
    }
    // The middles of the two strokes at a height, in shares of the width, and their widths.
    let two = |share: f32| match part.at(share) {
        [a, b] => Some((
            [a, b].map(|s| (s.middle() - left) / width),
            [a.width(), b.width()],
        )),
        _ => None,
    };
    let one = match part.at(0.5) {
        [s] => s.width() < 0.62 * width && ((s.middle() - left) / width - 0.5).abs() < 0.08,
        _ => false,
    };
    let heights = [0.14, 0.26, 0.74, 0.86];
    let Some(rows) = heights.into_iter().map(two).collect::<Option<Vec<_>>>() else {
        return false;
    };
    let mut widths: Vec<f32> = rows.iter().flat_map(|r| r.1).collect();
    widths.sort_by(f32::total_cmp);
    let even = widths[0] > 0.72 * widths[widths.len() - 1];
    // Both strokes go straight from corner to corner.
    let line = |from: f32, near: f32, far: f32, to: f32| {
        let slope = (to - from) / 0.72;
        (near - from - slope * 0.12).abs() < 0.05
            && (to - far - slope * 0.12).abs() < 0.05
            && ((from + to) / 2.0 - 0.5).abs() < 0.08
            && (0.55..1.1).contains(&slope.abs())
    };
    let x = |row: usize, stroke: usize| rows[row].0[stroke];
    let rising = line(x(0, 0), x(1, 0), x(2, 1), x(3, 1));
    let falling = line(x(0, 1), x(1, 1), x(2, 0), x(3, 0));
    one && even && rising && falling
}

/// `[` (true) or `]`: an upright with a foot and a head on one side.
fn square(part: &Component) -> Option<bool> {
    let spans = part.single()?;
    let n = spans.len();
    let body = &spans[n / 8..n - n / 8];
    let stem = body[body.len() / 2].width();
    if body.iter().any(|s| (s.width() - stem).abs() > 0.12 * stem) {
        return None;
    }
    let widest = |rows: &[Span]| {
        rows.iter()
            .copied()
            .max_by(|a, b| a.width().total_cmp(&b.width()))
    };
    let (foot, head) = (widest(&spans[..n / 8])?, widest(&spans[n - n / 8..])?);
    // Where the upright would be at the foot and at the head; slanted faces move it.
    let tilt = (body[body.len() - 1].from - body[0].from) / (body.len() - 1) as f32;
    if (tilt * n as f32).abs() > 0.35 * part.height() {
        return None;
    }
    let low = body[0].from - tilt * (n / 8) as f32;
    let high = body[body.len() - 1].from + tilt * (n / 8) as f32;
    let beyond = |end: Span, from: f32| (from - end.from, end.to - from - stem);
    let ends = [beyond(foot, low), beyond(head, high)];
    let slack = 0.15 * foot.width().max(head.width());
    let arm = 0.25 * foot.width().max(head.width());
    if !(0.1..0.6).contains(&(foot.width() / part.height())) {
        return None;
    }
    if ends.iter().all(|(l, r)| l.abs() < slack && *r > arm) {
        Some(true)
    } else {
        ends.iter()
            .all(|(l, r)| r.abs() < slack && *l > arm)
            .then_some(false)
    }
}

/// `~`, from its columns: up, down, up again, all of one thickness.
fn wave(part: &Component, edges: &Edges) -> bool {
    let (width, height) = (part.width(), part.height());
    if !(1.5..7.0).contains(&(width / height)) {
        return false;
    }
    let step = (edges.bounds[2] - edges.bounds[0]) / ROWS as f32;
    let columns: Vec<Option<Span>> = edges
        .turned()
        .rows(ROWS)
        .into_iter()
        .enumerate()
        .filter(|(i, _)| {
            let x = edges.bounds[0] + (*i as f32 + 0.5) * step;
            x > part.bounds[0] && x < part.bounds[2]
        })
        .map(|(_, column)| {
            // Of two waves over each other only the one in question.
            let mut own = column
                .iter()
                .filter(|s| s.middle() > part.bounds[1] && s.middle() < part.bounds[3]);
            match (own.next(), own.next()) {
                (Some(one), None) => Some(*one),
                _ => None,
            }
        })
        .collect();
    let Some(columns) = inner(&columns, 0.06)
        .iter()
        .copied()
        .collect::<Option<Vec<Span>>>()
    else {
        return false;
    };
    let n = columns.len();
    let middle = (part.bounds[1] + part.bounds[3]) / 2.0;
    let level = |from: f32, to: f32| {
        let range = &columns[(n as f32 * from) as usize..(n as f32 * to) as usize];
        range.iter().map(|s| s.middle() - middle).sum::<f32>() / range.len() as f32 / height
    };
    let (start, crest, trough, end) = (
        level(0.0, 0.08),
        level(0.18, 0.38),
        level(0.62, 0.82),
        level(0.92, 1.0),
    );
    let thickest = columns.iter().map(|s| s.width()).fold(0.0, f32::max);
    crest > 0.06
        && trough < -0.06
        && start < crest - 0.06
        && end > trough + 0.06
        && thickest < 0.9 * height
        && (crest + trough).abs() < 0.12
}
