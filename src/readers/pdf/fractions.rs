//! A *fraction* is printed over three lines: the numerator, the bar and the denominator. For
//! reading it is laid out on the line it stands in, `24.1/3.32`; the ink of its glyphs stays where it is.

use super::glyphs::{Area, Glyph, Meaning, PageGlyphs, Turn};

/// Bars looked at on one page; a page of formulas has a few dozen.
const MOST_BARS: usize = 400;
/// Bars of fractions are shorter, in points.
const LONGEST_BAR: f32 = 300.0;
/// Baselines of fractions stand no further from the bar, in points.
const REACH: f32 = 36.0;

/// Lays out all fractions of a page.
pub fn lay_out(page: &mut PageGlyphs) {
    let bars = page.rules.across.len() + page.rules.down.len();
    if bars == 0 || bars > MOST_BARS {
        return;
    }
    let size = (page.width, page.height);
    for turn in [Turn::None, Turn::Quarter, Turn::Half, Turn::ThreeQuarters] {
        if !page.glyphs.iter().any(|g| g.turn == turn) {
            continue;
        }
        let mut bars = page.rules.turned(turn, size).across;
        bars.retain(|b| (3.0..LONGEST_BAR).contains(&(b[2] - b[0])));
        // The shortest first, as fractions may stand in fractions.
        bars.sort_by(|a, b| (a[2] - a[0]).total_cmp(&(b[2] - b[0])));
        let mut order = by_baseline(&page.glyphs, turn);
        for bar in bars {
            let near = near(&order, &page.glyphs, (bar[1] + bar[3]) / 2.0);
            if let Some(fraction) = Fraction::at(bar, &near, &page.glyphs) {
                fraction.lay_out(&mut page.glyphs);
                order = by_baseline(&page.glyphs, turn);
            }
        }
    }
}

/// The glyphs that are turned this way, from top to bottom.
fn by_baseline(glyphs: &[Glyph], turn: Turn) -> Vec<usize> {
    let mut order: Vec<usize> = (0..glyphs.len()).filter(|i| glyphs[*i].turn == turn).collect();
    order.sort_by(|a, b| glyphs[*a].baseline.total_cmp(&glyphs[*b].baseline));
    order
}

/// The glyphs that a fraction around height `y` can reach, in the order in which they are drawn.
fn near(order: &[usize], glyphs: &[Glyph], y: f32) -> Vec<usize> {
    let at = |y: f32| order.partition_point(|i| glyphs[*i].baseline < y);
    let mut near = order[at(y - REACH)..at(y + REACH)].to_vec();
    near.sort_unstable();
    near
}

/// One fraction; its parts are indexes of glyphs, in the order in which they are drawn.
struct Fraction {
    bar: Area,
    above: Vec<usize>,
    below: Vec<usize>,
    /// Of the line that it stands in.
    baseline: f32,
    size: f32,
}

impl Fraction {
    fn at(bar: Area, near: &[usize], glyphs: &[Glyph]) -> Option<Fraction> {
        let [left, _, right, _] = bar;
        let y = (bar[1] + bar[3]) / 2.0;
        let here = |g: &Glyph| {
            let middle = (g.x0 + g.x1) / 2.0;
            middle > left - 1.0 && middle < right + 1.0
        };
        // Full-size glyphs sit right above the bar or hang right below it, as no other line does.
        let above = part(near, glyphs, |g| {
            here(g) && (0.05..0.62).contains(&((y - g.baseline) / g.size))
        })?;
        let below = part(near, glyphs, |g| {
            here(g) && (0.3..1.15).contains(&((g.baseline - y) / g.size))
        })?;
        let above = above.with_marks(near, glyphs, |g| here(g) && g.baseline < y);
        let below = below.with_marks(near, glyphs, |g| here(g) && g.baseline - 0.3 * g.size > y);
        let width = right - left;
        let centred = |p: &Part| (p.left + p.right - left - right).abs() / 2.0 < 0.1 * width + 1.2;
        let fills = (above.right - above.left).max(below.right - below.left) > 0.6 * width;
        // What goes on beyond the bar is a line of text with something drawn under it.
        let goes_on = |p: &Part| {
            near.iter().any(|i| {
                let g = &glyphs[*i];
                !g.meaning.is_space()
                    && (g.baseline - p.baseline).abs() < 0.1 * p.size
                    && (g.x0 - right).max(left - g.x1) < 0.6 * p.size
                    && !p.glyphs.contains(i)
            })
        };
        if !(fills && centred(&above) && centred(&below)) || goes_on(&above) || goes_on(&below) {
            return None;
        }
        // Cells of a table above and below a rule, with the label of both rows beside it.
        if above.in_cells(glyphs) || below.in_cells(glyphs) {
            return None;
        }
        // The line goes on at least on one side, with its axis at the height of the bar.
        let neighbour = near.iter().find(|i| {
            let g = &glyphs[**i];
            !g.meaning.is_space()
                && (0.12..0.45).contains(&((g.baseline - y) / g.size))
                && g.size > 0.95 * above.size
                && (left - g.x1 < 1.2 * g.size && left - g.x1 > -0.3 * g.size
                    || g.x0 - right < 1.2 * g.size && g.x0 - right > -0.3 * g.size)
                && !above.glyphs.contains(i)
                && !below.glyphs.contains(i)
        })?;
        Some(Fraction {
            bar,
            above: above.glyphs,
            below: below.glyphs,
            baseline: glyphs[*neighbour].baseline,
            size: glyphs[*neighbour].size,
        })
    }

    fn lay_out(self, glyphs: &mut Vec<Glyph>) {
        let [left, _, right, _] = self.bar;
        let middle = (left + right) / 2.0;
        let half = (0.14 * self.size).min(0.1 * (right - left));
        let mut laid: Vec<Glyph> = Vec::new();
        laid.extend(self.level(glyphs, &self.above, left, middle - half, true));
        let first = &glyphs[self.above[0]];
        let mark = |c: char, x: [f32; 2]| Glyph {
            meaning: Meaning::Char(c),
            code: u32::from(c),
            shape: None,
            size: self.size,
            x0: x[0],
            x1: x[1],
            baseline: self.baseline,
            ink: self.bar,
            ..first.clone()
        };
        laid.push(mark('/', [middle - half, middle + half]));
        laid.extend(self.level(glyphs, &self.below, middle + half, right, false));
        let mut gone: Vec<usize> = self.above.iter().chain(&self.below).copied().collect();
        gone.sort_unstable();
        let at = gone[0];
        for i in gone.into_iter().rev() {
            glyphs.remove(i);
        }
        glyphs.splice(at..at, laid);
    }

    /// The glyphs of a part on the line of the fraction, squeezed between two places, and in brackets
    /// where an operator would tear them apart.
    fn level(&self, glyphs: &[Glyph], part: &[usize], from: f32, to: f32, flush_right: bool) -> Vec<Glyph> {
        let part: Vec<&Glyph> = part.iter().map(|i| &glyphs[*i]).collect();
        let left = part.iter().map(|g| g.x0).fold(f32::MAX, f32::min);
        let right = part.iter().map(|g| g.x1).fold(f32::MIN, f32::max);
        let tears = |g: &&Glyph| matches!(g.meaning, Meaning::Char('+' | '-' | '–' | '\u{2212}' | '±' | '/'));
        let bracket = part.iter().skip(1).any(tears);
        let room = if bracket { 0.05 * (to - from) } else { 0.0 };
        let scale = ((to - from - 2.0 * room) / (right - left).max(0.1)).min(1.0);
        let start = if flush_right {
            to - room - scale * (right - left)
        } else {
            from + room
        };
        let base = main_baseline(&part);
        let mut out: Vec<Glyph> = part
            .into_iter()
            .map(|g| Glyph {
                x0: start + scale * (g.x0 - left),
                x1: start + scale * (g.x1 - left),
                baseline: g.baseline - base + self.baseline,
                ..g.clone()
            })
            .collect();
        if bracket && let (Some(first), Some(last)) = (out.first().cloned(), out.last().cloned()) {
            let mark = |c: char, at: &Glyph, x: f32| Glyph {
                meaning: Meaning::Char(c),
                code: u32::from(c),
                shape: None,
                x0: x,
                x1: x + room,
                baseline: self.baseline,
                size: self.size,
                ..at.clone()
            };
            out.insert(0, mark('(', &first, start - room));
            out.push(mark(')', &last, start + scale * (right - left)));
        }
        out
    }
}

/// What stands above or below a bar.
struct Part {
    glyphs: Vec<usize>,
    left: f32,
    right: f32,
    size: f32,
    baseline: f32,
}

/// The glyphs that fit, if they make up a line.
fn part(near: &[usize], glyphs: &[Glyph], fits: impl Fn(&Glyph) -> bool) -> Option<Part> {
    let all: Vec<usize> = near.iter().copied().filter(|i| fits(&glyphs[*i])).collect();
    let size = all.iter().map(|i| glyphs[*i].size).fold(0.0, f32::max);
    let full: Vec<&Glyph> = all
        .iter()
        .map(|i| &glyphs[*i])
        .filter(|g| g.size > 0.95 * size)
        .collect();
    let baseline = main_baseline(&full);
    let one_line = full.iter().all(|g| (g.baseline - baseline).abs() < 0.1 * size);
    let inked = all.iter().any(|i| !glyphs[*i].meaning.is_space());
    (inked && one_line).then(|| Part::of(all, glyphs, size, baseline))
}

impl Part {
    /// Whether gaps wider than any in a formula lie between its glyphs.
    fn in_cells(&self, glyphs: &[Glyph]) -> bool {
        let ink = self
            .glyphs
            .iter()
            .map(|i| &glyphs[*i])
            .filter(|g| !g.meaning.is_space());
        let mut ends: Vec<(f32, f32)> = ink.map(|g| (g.x0, g.x1)).collect();
        ends.sort_by(|a, b| a.0.total_cmp(&b.0));
        ends.windows(2).any(|w| w[1].0 - w[0].1 > 1.2 * self.size)
    }

    fn of(all: Vec<usize>, glyphs: &[Glyph], size: f32, baseline: f32) -> Part {
        let inked = || all.iter().map(|i| &glyphs[*i]).filter(|g| !g.meaning.is_space());
        Part {
            left: inked().map(|g| g.x0).fold(f32::MAX, f32::min),
            right: inked().map(|g| g.x1).fold(f32::MIN, f32::max),
            glyphs: all,
            size,
            baseline,
        }
    }

    /// With its raised and lowered marks.
    fn with_marks(self, near: &[usize], glyphs: &[Glyph], fits: impl Fn(&Glyph) -> bool) -> Part {
        let all = near.iter().copied().filter(|i| {
            let g = &glyphs[*i];
            let mark = g.size < 0.85 * self.size && (g.baseline - self.baseline).abs() < 0.55 * self.size;
            self.glyphs.contains(i) || mark && fits(g)
        });
        Part::of(all.collect(), glyphs, self.size, self.baseline)
    }
}

/// The baseline of the largest glyphs.
fn main_baseline(glyphs: &[&Glyph]) -> f32 {
    let size = glyphs.iter().map(|g| g.size).fold(0.0, f32::max);
    let mut lines: Vec<f32> = glyphs
        .iter()
        .filter(|g| g.size > 0.95 * size)
        .map(|g| g.baseline)
        .collect();
    lines.sort_by(f32::total_cmp);
    lines.get(lines.len() / 2).copied().unwrap_or_default()
}

#[cfg(test)]
mod tests {
    use super::super::read;
    use super::super::sample::{At, at, content, pdf, sized};

    fn text(texts: &[At], bars: &str) -> String {
        let page = content(texts) + bars;
        let m = read(&pdf(&[page], "")).expect("the sample is a PDF");
        m.text.trim_end().to_string()
    }

    /// Distances as TeX sets displayed fractions in 10 points: the axis 2.5 above the baseline,
    /// numerators 6.8 above and denominators 6.9 below it (its symbol font's parameters).
    #[test]
    fn displayed_fractions_stand_on_their_line() {
        let shown = [
            at(50.0, 700.0, "The ratio was F ="),
            at(126.2, 706.8, "24.1"),
            at(126.2, 693.1, "3.32"),
            at(148.0, 700.0, "= 7.25, p = .010."),
        ];
        for bar in ["126 702.3 18 0.4 re f\n", "0.4 w 126 702.5 m 144 702.5 l S\n"] {
            assert_eq!(text(&shown, bar), "The ratio was F = 24.1/3.32 = 7.25, p = .010.");
        }
        // Without a bar they are lines of a table or of something else.
        assert!(!text(&shown, "").contains('/'));
    }

    #[test]
    fn marks_and_operators_in_fractions() {
        let shown = text(
            &[
                at(50.0, 700.0, "The size was d ="),
                at(122.0, 706.8, "3.4 - 1.1"),
                at(132.0, 693.1, "s"),
                sized(136.0, 691.5, 7.0, "12"),
                at(162.0, 700.0, "= 0.80."),
            ],
            "122 702.3 35 0.4 re f\n",
        );
        assert_eq!(shown, "The size was d = (3.4 - 1.1)/s₁₂ = 0.80.");
    }

    #[test]
    fn what_is_underlined_bit_by_bit_is_no_row_of_fractions() {
        let shown = text(
            &[
                at(50.0, 706.8, "We saw 24.1 litres of water,"),
                at(50.0, 693.1, "and 3.32 litres"),
                at(171.0, 700.0, "(x)"),
            ],
            "79.5 702.3 8.7 0.4 re f 88.2 702.3 8.7 0.4 re f\n",
        );
        assert!(!shown.contains('/'), "{shown}");
    }

    #[test]
    fn rules_of_tables_and_underlines_are_no_bars() {
        let shown = text(
            &[
                at(50.0, 706.8, "Diary"),
                at(50.0, 693.1, "31.4"),
                at(120.0, 706.8, "None"),
                at(120.0, 693.1, "28.0"),
            ],
            "48 702.3 28 0.4 re f 118 702.3 28 0.4 re f\n",
        );
        assert!(!shown.contains('/'), "{shown}");
    }
}
