//! What mark an outline is, from its geometry alone: how many pieces of ink it has, whether each is
//! a bar, a dot, a chevron, a plus …, and how they stand to each other. Sizes are in thousandths of
//! the font size; whatever can be is measured against the glyph itself.

use super::slices::{Component, Edges, Row, Span, components, holes};
use super::strokes::{Piece, chevron, inner, level_bar, piece};

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

/// The mark that an outline is, if it is one. `advance` is how far the pen moves on; `rows` are
/// [`ROWS`] cuts of the outline.
pub fn mark(edges: &Edges, rows: &[Row], advance: f32) -> Option<Mark> {
    let [left, low, right, high] = edges.bounds;
    let (width, height) = (right - left, high - low);
    // Hairlines are rules, and what is larger than two lines is an ornament.
    if !(width > 20.0 && height > 12.0 && width < 2200.0 && height < 2200.0) {
        return None;
    }
    let parts = components(rows, low, high, 3)?;
    match parts.as_slice() {
        [one] => single(one, edges, advance).or_else(|| percent(edges, rows)),
        [a, b] => pair(a, b, edges).or_else(|| percent(edges, rows)),
        [_, _, _] => overlined(&parts).or_else(|| percent(edges, rows)),
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
            // Angle brackets are narrower, quotation marks smaller.
            let wide = width > 0.52 * height && width > 300.0;
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
        Piece::Square { left } if height > 600.0 => {
            Some(if left { Mark::OpenSquare } else { Mark::CloseSquare })
        }
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
    let (lower, upper) = if a.bounds[1] <= b.bounds[1] {
        (a, b)
    } else {
        (b, a)
    };
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
    let upper = Component::new(rows, [part.bounds[0], low, part.bounds[2], part.bounds[3]]);
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
    // The bar begins and ends at once, where the head of an arrow tapers.
    let beyond = |i: usize| spans.get(i).is_none_or(|s| s.width() < 0.5 * widest);
    (bar && beyond(last + 2) && beyond(first.saturating_sub(2))).then_some(Mark::Dagger)
}

/// `*`: five, six or eight even arms around the middle, smaller than a letter and above the line.
fn star(part: &Component, edges: &Edges) -> Option<Mark> {
    const RAYS: usize = 60;
    let shape = part.width() / part.height();
    if !(0.75..1.35).contains(&shape) || !(100.0..620.0).contains(&part.width()) || part.bounds[1] < 15.0 {
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
    let mut arms: Vec<(usize, usize)> = Vec::new();
    let mut inside = false;
    let start = (0..RAYS).find(|i| reach[*i] > 0.0 && reach[*i] < 0.55 * longest)?;
    for step in 0..RAYS {
        let reach = reach[(start + step) % RAYS];
        if reach > 0.72 * longest {
            match arms.last_mut() {
                Some(arm) if inside => arm.1 = step,
                _ => arms.push((step, step)),
            }
            inside = true;
        } else if reach > 0.0 && reach < 0.62 * longest {
            inside = false;
        }
    }
    let middles: Vec<f32> = arms.iter().map(|(from, to)| (from + to) as f32 / 2.0).collect();
    let even = RAYS as f32 / arms.len() as f32;
    let spaced = middles
        .windows(2)
        .all(|m| (m[1] - m[0] - even).abs() < 0.3 * even);
    (matches!(arms.len(), 5 | 6 | 8) && spaced).then_some(Mark::Star)
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

#[cfg(test)]
mod tests {
    use super::super::slices::ROWS;
    use super::*;
    use crate::readers::pdf::glyphs::Step;

    /// The mark of an outline made of closed polygons, with the pen moved on by 700.
    fn of(polygons: &[&[[f32; 2]]]) -> Option<Mark> {
        let mut outline = Vec::new();
        for polygon in polygons {
            outline.push(Step::Move(polygon[0]));
            outline.extend(polygon[1..].iter().map(|p| Step::Line(*p)));
            outline.push(Step::Close);
        }
        let edges = Edges::of(&outline);
        mark(&edges, &edges.rows(ROWS), 700.0)
    }

    /// A rectangle; `slant` moves its upper edge to the right.
    fn rectangle([left, low, right, high]: [f32; 4], slant: f32) -> [[f32; 2]; 4] {
        let at = |x: f32, y: f32| [x + slant * y, y];
        [at(left, low), at(right, low), at(right, high), at(left, high)]
    }

    const UPPER: [f32; 4] = [50.0, 320.0, 600.0, 380.0];
    const LOWER: [f32; 4] = [50.0, 120.0, 600.0, 180.0];
    const UPRIGHT: [f32; 4] = [295.0, 0.0, 355.0, 500.0];
    const LEVEL: [f32; 4] = [75.0, 220.0, 575.0, 280.0];

    #[test]
    fn bars_and_their_company() {
        for slant in [0.0, 0.2] {
            let bars = |all: &[[f32; 4]]| -> Option<Mark> {
                let shapes: Vec<_> = all.iter().map(|b| rectangle(*b, slant)).collect();
                of(&shapes.iter().map(|s| &s[..]).collect::<Vec<_>>())
            };
            assert_eq!(bars(&[LEVEL]), Some(Mark::Minus));
            assert_eq!(bars(&[UPPER, LOWER]), Some(Mark::Equal));
            assert_eq!(
                bars(&[UPRIGHT, LEVEL]),
                Some(Mark::Plus),
                "overlapping strokes are one"
            );
            assert_eq!(
                bars(&[UPRIGHT, LEVEL, [75.0, -120.0, 575.0, -60.0]]),
                Some(Mark::PlusMinus)
            );
            // Three bars, two of different length, a bar on the line, an upright, a T and an L.
            assert_eq!(bars(&[UPPER, LOWER, [50.0, 520.0, 600.0, 580.0]]), None);
            assert_eq!(bars(&[[150.0, 320.0, 500.0, 380.0], LOWER]), None);
            assert_eq!(bars(&[[0.0, -120.0, 500.0, -70.0]]), None);
            assert_eq!(
                bars(&[[295.0, 0.0, 355.0, 440.0], [75.0, 440.0, 575.0, 500.0]]),
                None
            );
            assert_eq!(bars(&[[75.0, 0.0, 135.0, 500.0], [75.0, 0.0, 575.0, 60.0]]), None);
        }
    }

    #[test]
    fn a_dash_is_named_by_its_length_and_the_room_it_leaves() {
        let bar = |left: f32, right: f32, advance: f32| {
            let outline: Vec<Step> = rectangle([left, 220.0, right, 270.0], 0.0)
                .iter()
                .enumerate()
                .map(|(i, p)| if i == 0 { Step::Move(*p) } else { Step::Line(*p) })
                .collect();
            let edges = Edges::of(&outline);
            mark(&edges, &edges.rows(ROWS), advance)
        };
        assert_eq!(bar(40.0, 290.0, 333.0), Some(Mark::Hyphen));
        assert_eq!(bar(0.0, 500.0, 500.0), Some(Mark::EnDash));
        assert_eq!(bar(0.0, 1000.0, 1000.0), Some(Mark::EmDash));
        assert_eq!(bar(83.0, 694.0, 778.0), Some(Mark::Minus));
    }

    #[test]
    fn chevrons_are_open_and_straight() {
        let less = [
            [500.0, 500.0],
            [60.0, 280.0],
            [60.0, 220.0],
            [500.0, 0.0],
            [500.0, 70.0],
            [160.0, 250.0],
            [500.0, 430.0],
        ];
        let greater = less.map(|[x, y]| [560.0 - x, y]);
        assert_eq!(of(&[&less]), Some(Mark::Less));
        assert_eq!(of(&[&greater]), Some(Mark::Greater));
        let bar = rectangle([60.0, -120.0, 500.0, -60.0], 0.0);
        assert_eq!(of(&[&less, &bar]), Some(Mark::AtMost));
        assert_eq!(of(&[&greater, &bar]), Some(Mark::AtLeast));
        // A triangle, a narrow angle bracket, and the same chevron standing on its corner: a v.
        assert_eq!(of(&[&[[500.0, 500.0], [60.0, 250.0], [500.0, 0.0]]]), None);
        assert_eq!(of(&[&less.map(|[x, y]| [x * 0.4, y * 1.8 - 200.0])]), None);
        assert_eq!(of(&[&less.map(|[x, y]| [y, x])]), None);
    }

    #[test]
    fn crosses_and_dots() {
        let stroke = |from: [f32; 2], to: [f32; 2]| {
            [
                [from[0] - 40.0, from[1]],
                [from[0] + 40.0, from[1]],
                [to[0] + 40.0, to[1]],
                [to[0] - 40.0, to[1]],
            ]
        };
        let (rising, falling) = (
            stroke([100.0, 30.0], [500.0, 430.0]),
            stroke([500.0, 30.0], [100.0, 430.0]),
        );
        assert_eq!(of(&[&rising, &falling]), Some(Mark::Times));
        assert_eq!(
            of(&[&rectangle([60.0, 0.0, 160.0, 100.0], 0.0)]),
            Some(Mark::Point)
        );
        assert_eq!(
            of(&[&rectangle([60.0, 200.0, 160.0, 300.0], 0.0)]),
            Some(Mark::MiddleDot)
        );
        let dots = [
            rectangle([60.0, 0.0, 160.0, 100.0], 0.0),
            rectangle([60.0, 340.0, 160.0, 440.0], 0.0),
        ];
        assert_eq!(of(&[&dots[0], &dots[1]]), Some(Mark::Colon));
    }

    #[test]
    fn nothing_is_made_of_nothing() {
        assert_eq!(of(&[&[[0.0, 0.0], [0.0, 0.0], [0.0, 0.0]]]), None);
        assert_eq!(
            of(&[&[[f32::NAN, 0.0], [500.0, f32::INFINITY], [0.0, 300.0]]]),
            None
        );
        assert_eq!(
            of(&[&[[0.0, 250.0], [1e9, 250.0], [1e9, 300.0], [0.0, 300.0]]]),
            None
        );
    }
}
