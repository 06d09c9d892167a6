//! What mark an outline is, from its geometry alone: how many pieces of ink it has, whether each is
//! a bar, a dot, a chevron, a plus …, and how they stand to each other. Sizes are in thousandths of
//! the font size; whatever can be is measured against the glyph itself.

use super::slices::{Component, Edges, ROWS, Row, Span, components, holes};

/// A mark that statistics depend on, or one that must not be taken for it.
#[derive(Clone, Copy, Debug, PartialEq, Eq, Hash)]
pub enum Mark {
    /// Hyphen, dashes and minus: how long it is and what room it leaves tells them apart.
    Hyphen,
    Minus,
    EnDash,
    EmDash,
    Equal,
    Less,
    Greater,
    AtMost,
    AtLeast,
    Plus,
    PlusMinus,
    Times,
    Almost,
    Tilde,
    Point,
    MiddleDot,
    Bullet,
    Colon,
    Slash,
    Percent,
    Open,
    Close,
    OpenSquare,
    CloseSquare,
    Star,
    Dagger,
    DoubleDagger,
}

impl Mark {
    /// The character that it stands for.
    pub fn char(self) -> char {
        match self {
            Mark::Hyphen => '-',
            Mark::Minus => '\u{2212}',
            Mark::EnDash => '–',
            Mark::EmDash => '—',
            Mark::Equal => '=',
            Mark::Less => '<',
            Mark::Greater => '>',
            Mark::AtMost => '≤',
            Mark::AtLeast => '≥',
            Mark::Plus => '+',
            Mark::PlusMinus => '±',
            Mark::Times => '×',
            Mark::Almost => '≈',
            Mark::Tilde => '~',
            Mark::Point => '.',
            Mark::MiddleDot => '·',
            Mark::Bullet => '•',
            Mark::Colon => ':',
            Mark::Slash => '/',
            Mark::Percent => '%',
            Mark::Open => '(',
            Mark::Close => ')',
            Mark::OpenSquare => '[',
            Mark::CloseSquare => ']',
            Mark::Star => '*',
            Mark::Dagger => '†',
            Mark::DoubleDagger => '‡',
        }
    }
}

/// One piece of ink.
#[derive(Clone, Copy, Debug, PartialEq)]
enum Piece {
    /// A level bar.
    Bar,
    /// A bar that goes up to the right (or down, if negative) by this share of its width.
    Slanted(f32),
    Dot,
    Chevron { left: bool },
    Plus,
    PlusOnBar,
    Cross,
    Wave,
    Arc { left: bool },
    Square { left: bool },
    Other,
}

/// The mark that an outline is, if it is one. `advance` is how far the pen moves on.
pub fn mark(edges: &Edges, advance: f32) -> Option<Mark> {
    let [left, low, right, high] = edges.bounds;
    let (width, height) = (right - left, high - low);
    // Hairlines are rules, and what is larger than two lines is an ornament.
    if !(width > 20.0 && height > 12.0 && width < 2200.0 && height < 2200.0) {
        return None;
    }
    let rows = edges.rows(ROWS);
    let parts = components(&rows, low, high, 3)?;
    match parts.as_slice() {
        [one] => single(one, edges, advance).or_else(|| percent(edges, &rows)),
        [a, b] => pair(a, b, edges).or_else(|| percent(edges, &rows)),
        [_, _, _] => overlined(&parts).or_else(|| percent(edges, &rows)),
        _ => None,
    }
}

fn single(part: &Component, edges: &Edges, advance: f32) -> Option<Mark> {
    let [left, low, right, high] = edges.bounds;
    let (width, height) = (right - left, high - low);
    let middle = (low + high) / 2.0;
    match piece(part, edges) {
        Piece::Bar => {
            // Slanted faces shear the bar; its middle stands where the upright one does.
            let span = part.at(0.5)[0];
            bar([span.from, low, span.to, high], advance)
        }
        Piece::Dot => {
            if low > -60.0 && high < 260.0 && low < 60.0 {
                Some(Mark::Point)
            } else if (130.0..460.0).contains(&middle) && width < 210.0 {
                Some(Mark::MiddleDot)
            } else {
                ((130.0..500.0).contains(&middle) && width < 650.0).then_some(Mark::Bullet)
            }
        }
        Piece::Chevron { left } => {
            let wide = width > 0.62 * height && width > 300.0;
            let mark = if left { Mark::Less } else { Mark::Greater };
            (wide && on_axis(low, high)).then_some(mark)
        }
        Piece::Plus => (on_axis(low, high) && width > 250.0).then_some(Mark::Plus),
        Piece::PlusOnBar => (on_axis(low, high) && width > 250.0).then_some(Mark::PlusMinus),
        Piece::Cross => (on_axis(low, high) && width > 200.0).then_some(Mark::Times),
        Piece::Wave => ((100.0..500.0).contains(&middle) && width > 250.0).then_some(Mark::Tilde),
        Piece::Slanted(slope) => {
            let steep = slope > 1.25 && height > 500.0 && low > -350.0;
            steep.then_some(Mark::Slash)
        }
        Piece::Arc { left } if height > 600.0 => Some(if left { Mark::Open } else { Mark::Close }),
        Piece::Square { left } if height > 600.0 => Some(if left {
            Mark::OpenSquare
        } else {
            Mark::CloseSquare
        }),
        Piece::Other => angled_order(part)
            .or_else(|| dagger(part))
            .or_else(|| star(part, edges)),
        _ => None,
    }
}

/// Stands about the height of the axis that operators are centred on.
fn on_axis(low: f32, high: f32) -> bool {
    (120.0..480.0).contains(&((low + high) / 2.0)) && high < 950.0
}

/// A lone bar: which dash it is.
fn bar([left, low, right, high]: [f32; 4], advance: f32) -> Option<Mark> {
    let (width, middle) = (right - left, (low + high) / 2.0);
    // Underscores, macrons and the tops of roots.
    if !(110.0..430.0).contains(&middle) || high - low > 200.0 || width < 100.0 {
        return None;
    }
    // What leaves no room at its ends is meant to join; in doubt it is taken for an en dash, which
    // its neighbours may still show to be a minus.
    let room = advance - width;
    Some(if width < 400.0 {
        Mark::Hyphen
    } else if room > 40.0 && width > 450.0 {
        Mark::Minus
    } else if width < 720.0 {
        Mark::EnDash
    } else {
        Mark::EmDash
    })
}

fn pair(a: &Component, b: &Component, edges: &Edges) -> Option<Mark> {
    let (lower, upper) = if a.bounds[1] <= b.bounds[1] { (a, b) } else { (b, a) };
    let [left, low, right, high] = edges.bounds;
    let alike = |x: f32, y: f32, slack: f32| (x - y).abs() <= slack * x.max(y);
    // A slanted face moves the upper part to the right, but all of it by as much.
    let rise = (upper.bounds[1] + upper.bounds[3] - lower.bounds[1] - lower.bounds[3]) / 2.0;
    let shift = |end: usize| upper.bounds[end] - lower.bounds[end];
    let slack = 0.2 * (right - left);
    let aligned = (-slack..0.35 * rise.max(0.0) + slack).contains(&((shift(0) + shift(2)) / 2.0))
        && (shift(0) - shift(2)).abs() < 2.0 * slack;
    let (first, second) = (piece(lower, edges), piece(upper, edges));
    let over = upper.bounds[1] - lower.bounds[3];
    let wide = right - left > 250.0;
    match (first, second) {
        (Piece::Bar, Piece::Bar) => {
            let gap = over > 0.45 * lower.height().min(upper.height());
            let flat = right - left > 1.05 * (high - low);
            let same = alike(lower.width(), upper.width(), 0.08)
                && alike(lower.height(), upper.height(), 0.4)
                && aligned;
            (gap && flat && same && wide && on_axis(low, high)).then_some(Mark::Equal)
        }
        (Piece::Bar, Piece::Plus) if aligned && wide && on_axis(low, high) => Some(Mark::PlusMinus),
        (Piece::Bar | Piece::Slanted(_), Piece::Chevron { left })
            if aligned && wide && high < 950.0 && slants_along(first, left) =>
        {
            Some(if left { Mark::AtMost } else { Mark::AtLeast })
        }
        (Piece::Wave, Piece::Wave) if aligned && wide && over > -0.6 * upper.height() => Some(Mark::Almost),
        (Piece::Dot, Piece::Dot) => {
            let stacked = aligned && over > 0.4 * upper.height();
            let on_baseline = (-60.0..80.0).contains(&low) && high < 750.0;
            (stacked && on_baseline && alike(lower.width(), upper.width(), 0.15)).then_some(Mark::Colon)
        }
        _ => None,
    }
}

/// The bar below a chevron is level or goes along with the chevron's lower arm.
fn slants_along(bar: Piece, left: bool) -> bool {
    match bar {
        Piece::Slanted(slope) => (slope < 0.0) == left,
        _ => true,
    }
}

/// `≦` and `≧`: a chevron over two bars.
fn overlined(parts: &[Component]) -> Option<Mark> {
    let mut order: Vec<&Component> = parts.iter().collect();
    order.sort_by(|a, b| a.bounds[1].total_cmp(&b.bounds[1]));
    let bars = order[..2].iter().all(|c| level_bar(c));
    match (bars, chevron(order[2])) {
        (true, Some(left)) => Some(if left { Mark::AtMost } else { Mark::AtLeast }),
        _ => None,
    }
}

/// What a component looks like.
fn piece(part: &Component, edges: &Edges) -> Piece {
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
fn inner<T>(rows: &[T], share: f32) -> &[T] {
    let cut = (rows.len() as f32 * share) as usize;
    &rows[cut..rows.len() - cut]
}

fn level_bar(part: &Component) -> bool {
    let Some(spans) = part.single() else { return false };
    let (width, height) = (part.width(), part.height());
    if width < 1.7 * height {
        return false;
    }
    let spans = inner(&spans, 0.15);
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
    let spans = inner(&all, if steep { 0.05 } else { 0.25 });
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
fn chevron(part: &Component) -> Option<bool> {
    let spans = part.single()?;
    let n = spans.len();
    let (width, shape) = (part.width(), part.width() / part.height());
    if n < 12 || !(0.45..2.4).contains(&shape) {
        return None;
    }
    let left = spans[n / 2].middle() < (part.bounds[0] + part.bounds[2]) / 2.0;
    // How far the outer edge, where the corner is, and the inner edge stand off from the corner's side;
    // a slanted face moves the rows evenly.
    let outer = |s: Span| if left { s.from - part.bounds[0] } else { part.bounds[2] - s.to };
    let inner_edge = |s: Span| if left { s.to - part.bounds[0] } else { part.bounds[2] - s.from };
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
        [a, b] => Some(([a, b].map(|s| (s.middle() - left) / width), [a.width(), b.width()])),
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
    let widest = |rows: &[Span]| rows.iter().copied().max_by(|a, b| a.width().total_cmp(&b.width()));
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
    let Some(columns) = inner(&columns, 0.06).iter().copied().collect::<Option<Vec<Span>>>() else {
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

/// `≤` and `≥` whose chevron and bar are joined.
fn angled_order(part: &Component) -> Option<Mark> {
    let n = part.rows.len();
    let width = part.width();
    let foot = part
        .rows
        .iter()
        .take_while(|r| matches!(***r, [one] if one.width() > 0.85 * width))
        .count();
    if foot == 0 || foot * 5 > n || n < 20 {
        return None;
    }
    let rows = part.rows[foot..].to_vec();
    let low = part.bounds[1] + part.height() * foot as f32 / n as f32;
    let upper = Component {
        rows,
        bounds: [part.bounds[0], low, part.bounds[2], part.bounds[3]],
    };
    let left = chevron(&upper)?;
    let wide = width > 250.0 && part.bounds[3] < 950.0;
    wide.then_some(if left { Mark::AtMost } else { Mark::AtLeast })
}

/// `†` and `‡`: an upright through the middle of one or two bars, much higher than wide.
fn dagger(part: &Component) -> Option<Mark> {
    let (width, height) = (part.width(), part.height());
    if height < 1.35 * width || height < 500.0 {
        return None;
    }
    // Drop-shaped arms reach a little further down than where they are joined.
    let spans: Vec<Span> = part
        .rows
        .iter()
        .filter_map(|row| {
            let (from, to) = (row.first()?.from, row.last()?.to);
            Some(Span { from, to })
        })
        .collect();
    let n = spans.len();
    let widest = spans.iter().map(|s| s.width()).fold(0.0, f32::max);
    let row = |share: f32| spans[((n as f32 * share) as usize).min(n - 1)];
    // The upright is straight and every bar is halved by it.
    let tilt = row(0.92).middle() - row(0.08).middle();
    let straight = inner(&spans, 0.08).iter().enumerate().all(|(i, s)| {
        let share = (i as f32 + 0.08 * n as f32) / n as f32;
        let on = row(0.08).middle() + tilt * (share - 0.08) / 0.84;
        (s.middle() - on).abs() < 0.1 * widest
    });
    if !straight || tilt.abs() > 0.35 * height {
        return None;
    }
    let wide: Vec<usize> = (0..n).filter(|i| spans[*i].width() > 0.6 * widest).collect();
    let (first, last) = (*wide.first()?, *wide.last()?);
    let share = |i: usize| i as f32 / n as f32;
    // Letters have their bars at the ends.
    if share(first) < 0.1 || share(last) > 0.94 {
        return None;
    }
    let waist = spans[(first + last) / 2].width() < 0.5 * widest;
    if waist {
        let symmetric = (share(first) + share(last) - 1.0).abs() < 0.12;
        return (symmetric && share(first) < 0.42 && share(last) > 0.58).then_some(Mark::DoubleDagger);
    }
    let bar = (0.57..0.86).contains(&share((first + last) / 2)) && share(last - first) < 0.22;
    bar.then_some(Mark::Dagger)
}

/// `*`: five, six or eight even arms around the middle.
fn star(part: &Component, edges: &Edges) -> Option<Mark> {
    const RAYS: usize = 60;
    let shape = part.width() / part.height();
    if !(0.75..1.35).contains(&shape) || !(100.0..900.0).contains(&part.width()) {
        return None;
    }
    // Higher than the letters' middle, or about the axis.
    if part.bounds[1] < -80.0 {
        return None;
    }
    let (mut x, mut y, mut ink) = (0.0, 0.0, 0.0);
    let row = part.height() / part.rows.len() as f32;
    for (i, spans) in part.rows.iter().enumerate() {
        for s in spans.iter() {
            x += s.middle() * s.width();
            y += (part.bounds[1] + (i as f32 + 0.5) * row) * s.width();
            ink += s.width();
        }
    }
    let centre = [x / ink, y / ink];
    let mut reach = [0.0f32; RAYS];
    edges.along(|p| {
        let (dx, dy) = (p[0] - centre[0], p[1] - centre[1]);
        let turn = dy.atan2(dx) / std::f32::consts::TAU + 1.0;
        let ray = (turn * RAYS as f32) as usize % RAYS;
        reach[ray] = reach[ray].max(dx.hypot(dy));
    });
    let longest = reach.iter().copied().fold(0.0, f32::max);
    // Where arms begin and end, going around.
    let mut arms = 0;
    let mut inside = false;
    let start = (0..RAYS).find(|i| reach[*i] > 0.0 && reach[*i] < 0.55 * longest)?;
    for i in (0..=RAYS).map(|i| (start + i) % RAYS) {
        if reach[i] > 0.72 * longest && !inside {
            inside = true;
            arms += 1;
        } else if reach[i] > 0.0 && reach[i] < 0.62 * longest {
            inside = false;
        }
    }
    matches!(arms, 5 | 6 | 8).then_some(Mark::Star)
}

/// `%`: two small holes, one up on the left, one down on the right.
fn percent(edges: &Edges, rows: &[Row]) -> Option<Mark> {
    let [left, low, right, high] = edges.bounds;
    let (width, height) = (right - left, high - low);
    if !(0.75..1.7).contains(&(width / height)) || height < 500.0 {
        return None;
    }
    let mut found = holes(rows, low, high);
    // Where the stroke meets a ring a sliver may be closed in.
    found.retain(|h| h[3] - h[1] > 0.06 * height);
    let [a, b] = found.as_slice() else { return None };
    let share = |h: &[f32; 4]| {
        [
            ((h[0] + h[2]) / 2.0 - left) / width,
            ((h[1] + h[3]) / 2.0 - low) / height,
            (h[2] - h[0]) / width,
            (h[3] - h[1]) / height,
        ]
    };
    let (a, b) = (share(a), share(b));
    let (upper, lower) = if a[1] > b[1] { (a, b) } else { (b, a) };
    let small = |h: [f32; 4]| h[2] < 0.36 && (0.12..0.55).contains(&h[3]);
    let fits = upper[0] < 0.38 && upper[1] > 0.55 && lower[0] > 0.6 && lower[1] < 0.45;
    (fits && small(upper) && small(lower)).then_some(Mark::Percent)
}
